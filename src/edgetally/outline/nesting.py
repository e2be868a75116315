"""Loops → regions with voids, by true containment of the curves."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import shapely

from edgetally.outline.records import Loop, Region


def nest(loops: Sequence[Loop]) -> tuple[list[Region], list[int]]:
    """Return the regions that `loops`, which do not meet each other, bound, and which of them lie inside a void.

    A loop inside an even number of others is an outer boundary; inside an odd number, a void of the innermost of
    them (even-odd). Loop B is inside loop A when the curves of A turn once around a point of B; since the loops do not
    meet, one point decides. The regions come in order of their left, then lower, edge. Cost: a tree of the boxes
    finds the candidates, then each candidate outer loop is asked once for all points that may lie in it.
    """
    boxes = shapely.box(*np.array([loop.packed.box for loop in loops]).T)
    witness = np.array([loop.curves[0].start for loop in loops])
    points = shapely.points(witness.real, witness.imag)
    inner, outer = shapely.STRtree(boxes).query(points)
    candidates: dict[int, list[int]] = {}
    for i, o in zip(inner, outer, strict=True):
        if i != o:
            candidates.setdefault(int(o), []).append(int(i))
    around: list[list[int]] = [[] for _ in loops]
    for o, inside in candidates.items():
        turning = loops[o].packed.turning(witness[inside])
        for i, angle in zip(inside, turning, strict=True):
            if abs(angle) > np.pi:
                around[i].append(o)

    voids: dict[int, list[Loop]] = {}
    for k, outers in enumerate(around):
        if len(outers) % 2:
            parent = max(outers, key=lambda o: len(around[o]))
            voids.setdefault(parent, []).append(loops[k].directed(counter_clockwise=False))
    tops = sorted((k for k, outers in enumerate(around) if len(outers) % 2 == 0), key=lambda k: loops[k].packed.box[:2])
    regions = [
        Region(
            loops[k].directed(counter_clockwise=True),
            tuple(sorted(voids.get(k, []), key=lambda void: void.packed.box[:2])),
        )
        for k in tops
    ]
    return regions, [number for number, k in enumerate(tops) if around[k]]
