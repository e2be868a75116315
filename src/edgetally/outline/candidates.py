"""Which pairs of curves could meet: from a tree of their boxes, and what lines and circles alone rule out."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
import shapely
from numpy.typing import NDArray

from edgetally.curves import Packed
from edgetally.curves.green import EPS

Indices = NDArray[np.intp]

ASKED = 512
"""So many boxes are looked up at once, and so many pairs looked at: what bounds the memory where all boxes meet."""
AT_ONCE = 1 << 19
ROUNDING = 32 * EPS
"""Of a distance between two circles, relative to radii and coordinates."""


def near_pairs(boxes: NDArray[np.float64], reach: float | NDArray[np.float64]) -> Iterator[tuple[Indices, Indices]]:
    """Yield blocks of pairs i < j whose boxes (n, 4), each grown by `reach` (n,), meet."""
    grown = np.array([-1.0, -1.0, 1.0, 1.0])[:, None] * reach
    shapes = shapely.box(*(boxes.T + grown))
    tree = shapely.STRtree(shapes)
    some: list[tuple[Indices, Indices]] = []
    held = 0
    for low in range(0, len(shapes), ASKED):
        one, other = tree.query(shapes[low : low + ASKED])
        one = one + low
        keep = one < other
        one, other = one[keep], other[keep]
        for first in range(0, len(one), AT_ONCE):
            some.append((one[first : first + AT_ONCE], other[first : first + AT_ONCE]))
            held += len(some[-1][0])
            if held >= AT_ONCE:
                yield np.concatenate([i for i, _ in some]), np.concatenate([j for _, j in some])
                some, held = [], 0
    if some:
        yield np.concatenate([i for i, _ in some]), np.concatenate([j for _, j in some])


def apart(packed: Packed, one: Indices, other: Indices, reach: float | NDArray[np.float64]) -> NDArray[np.bool_]:
    """Tell which pairs, of which one at least is a circular arc, surely stay farther than `reach` (n,) from each other.

    Two arcs do where their circles lie beside or inside each other; a straight piece does where it lies outside the
    circle, or both its ends inside. False where another kind of curve is concerned, and where rounding could decide.
    """
    result = np.zeros(len(one), dtype=bool)
    arc_one, arc_other = packed.is_arc[one], packed.is_arc[other]
    centre, radius = packed.start - packed.spoke, np.abs(packed.spoke)
    reach = np.broadcast_to(reach, len(one))
    blunt = ROUNDING * (radius + np.abs(packed.start))

    both = np.flatnonzero(arc_one & arc_other)
    i, j = one[both], other[both]
    between = np.abs(centre[j] - centre[i])
    beside = between - radius[i] - radius[j]
    inside = np.abs(radius[i] - radius[j]) - between
    result[both] = np.maximum(beside, inside) > reach[both] + blunt[i] + blunt[j]

    mixed = np.flatnonzero((arc_one & packed.is_straight[other]) | (arc_other & packed.is_straight[one]))
    i = np.where(arc_one[mixed], one[mixed], other[mixed])
    line = np.where(arc_one[mixed], other[mixed], one[mixed])
    a, b = packed.start[line] - centre[i], packed.end[line] - centre[i]
    chord = b - a
    square = chord.real**2 + chord.imag**2
    t = -np.divide((a * chord.conj()).real, square, out=np.zeros_like(square), where=square > 0.0)
    nearest = np.abs(a + np.clip(t, 0.0, 1.0) * chord)
    farthest = np.maximum(np.abs(a), np.abs(b))
    result[mixed] = np.maximum(nearest - radius[i], radius[i] - farthest) > reach[mixed] + blunt[i] + blunt[line]
    return result
