"""Which way round loops run and whether they enclose anything: decided for all at once, before areas are integrated."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from edgetally.curves import Packed
from edgetally.outline.records import Loop

FLAT_ARC = 0.3


def rough_areas(loops: Sequence[Loop]) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Return the signed areas of loops, and their perimeters: for decisions, never for a result.

    A = ½Σ Im(conj(z₀)·z₁) over the chords, about a point of the loop, and ½R²(θ − sin θ) between each arc and its
    chord, by its series where θ is small. Right to about 1e-14 of the perimeter's square. A loop that has other curves
    is integrated.
    """
    packed = Packed.of(curve for loop in loops for curve in loop.curves)
    counts = np.array([len(loop.curves) for loop in loops])
    first = np.cumsum(counts) - counts
    origin = np.repeat(packed.start[first], counts)
    under = ((packed.start - origin).conj() * (packed.end - origin)).imag
    arcs = np.flatnonzero(packed.is_arc)
    turn = packed.sweep[arcs]
    square = turn**2
    small = turn * square / 6 * (1 - square / 20 * (1 - square / 42 * (1 - square / 72 * (1 - square / 110))))
    bulge = np.where(np.abs(turn) < FLAT_ARC, small, turn - np.sin(turn))
    under[arcs] += np.abs(packed.spoke[arcs]) ** 2 * bulge
    areas = 0.5 * np.add.reduceat(under, first)
    owner = np.repeat(np.arange(len(loops)), counts)
    for k in np.unique(owner[packed.others.at]).tolist():
        areas[k] = loops[k].area
    return areas, np.add.reduceat(packed.lengths, first)
