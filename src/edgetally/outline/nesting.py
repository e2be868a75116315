"""Loops → regions with voids, by true containment of the curves."""

from __future__ import annotations

from collections.abc import Sequence
from math import isqrt

import numpy as np
import shapely
from numpy.typing import NDArray

from edgetally.curves import Packed
from edgetally.curves.green import EPS
from edgetally.outline.records import Loop, Region
from edgetally.outline.senses import rough_areas

FEW = 1 << 18
"""So many pairs of a point and a curve are looked at one and all."""
ROUNDING = 64 * EPS


def nest(loops: Sequence[Loop], areas: NDArray[np.float64] | None = None) -> tuple[list[Region], list[int]]:
    """Return the regions that `loops`, which do not meet each other, bound, and which of them lie inside a void.

    `areas` are those of the loops if known, of which the signs count.

    A loop inside an even number of others is an outer boundary; inside an odd number, a void of the innermost of
    them (even-odd). Loop B is inside loop A when the curves of A turn once around a point of B; since the loops do not
    meet, one point decides. The regions come in order of their left, then lower, edge. Cost: a tree of the boxes
    finds the candidates, then each candidate outer loop is asked once for all points that may lie in it.
    """
    every = Packed.of(curve for loop in loops for curve in loop.curves).boxes
    first = np.cumsum([0, *(len(loop.curves) for loop in loops[:-1])])
    boxes = np.hstack([np.minimum.reduceat(every[:, :2], first), np.maximum.reduceat(every[:, 2:], first)])
    witness = np.array([loop.curves[0].start for loop in loops])
    points = shapely.points(witness.real, witness.imag)
    inner, outer = shapely.STRtree(shapely.box(*boxes.T)).query(points)
    candidates: dict[int, list[int]] = {}
    for i, o in zip(inner.tolist(), outer.tolist(), strict=True):
        if i != o:
            candidates.setdefault(o, []).append(i)
    around: list[list[int]] = [[] for _ in loops]
    for o, inside in candidates.items():
        turning = turning_about(loops[o], witness[inside])
        for i, angle in zip(inside, turning.tolist(), strict=True):
            if abs(angle) > np.pi:
                around[i].append(o)

    def place(k: int) -> tuple[float, float]:
        return float(boxes[k, 0]), float(boxes[k, 1])

    left = (rough_areas(loops)[0] if areas is None else areas) > 0

    voids: dict[int, list[int]] = {}
    for k, outers in enumerate(around):
        if len(outers) % 2:
            voids.setdefault(max(outers, key=lambda o: len(around[o])), []).append(k)
    tops = sorted((k for k, outers in enumerate(around) if len(outers) % 2 == 0), key=place)
    regions = [
        Region(
            loops[k] if left[k] else loops[k].reversed(),
            tuple(loops[v].reversed() if left[v] else loops[v] for v in sorted(voids.get(k, []), key=place)),
        )
        for k in tops
    ]
    return regions, [number for number, k in enumerate(tops) if around[k]]


def turning_about(loop: Loop, points: NDArray[np.complex128]) -> NDArray[np.float64]:
    """Return what `loop.packed.turning(points)` does, without looking from every point at every curve.

    Seen from outside its box, a run of curves turns as the chord from its start to its end does. With runs of √n of the
    n curves the cost is √n a point, and √n more for each run whose box the point lies in.
    """
    packed = loop.packed
    if len(packed) * len(points) <= FEW:
        return packed.turning(points)
    first = np.arange(0, len(packed), isqrt(len(packed)))
    low = np.minimum.reduceat(packed.boxes[:, :2], first)
    high = np.maximum.reduceat(packed.boxes[:, 2:], first)
    slack = ROUNDING * max(packed.magnitude, float(np.abs(points.view(float)).max()))
    total = np.zeros(len(points))
    for k, stop in enumerate([*first[1:].tolist(), len(packed)]):
        (x0, y0), (x1, y1) = low[k] - slack, high[k] + slack
        within = (x0 <= points.real) & (points.real <= x1) & (y0 <= points.imag) & (points.imag <= y1)
        near, far = np.flatnonzero(within), np.flatnonzero(~within)
        a, b = packed.start[first[k]], packed.end[stop - 1]
        total[far] += np.angle((a - points[far]).conj() * (b - points[far]))
        if near.size:
            total[near] += Packed.of(loop.curves[first[k] : stop]).turning(points[near])
    return total
