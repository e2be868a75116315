"""Which end of a curve meets which.

An **end** is one of the two ends of an open curve; end 2i is the start of curve i, end 2i + 1 its end. Ends are paired
nearest first and one to one, up to the join gap. Ends nearer than rounding are one point and their pairing is no join.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import shapely
from numpy.typing import NDArray

from edgetally.curves import Curve
from edgetally.outline.candidates import Indices

SLENDER = 4.0
"""A curve whose length exceeds its chord by this factor is not turned about its ends to close a gap."""
PACK = 64
"""More free ends than this within one join gap are no outline."""
GENEROUS = 1e-12
"""A gap equal to the join gap but for this share, the rounding of a length that was written and read, is joined."""


@dataclass(frozen=True, eq=False)
class Ends:
    curves: Sequence[Curve]
    z: NDArray[np.complex128]
    rounding: float

    def name(self, end: int) -> str:
        return f"{self.curves[end // 2].source}"


@dataclass(frozen=True, eq=False)
class Pairing:
    """For every end its partner, −1 where it has none, and the groups of ends that are too many at one point."""

    partner: Indices
    meeting: list[list[int]]
    crowded: list[list[int]]


def pair(ends: Ends, gap: float) -> Pairing:
    """Pair ends nearest first and one to one. `meeting`: three or more at one point; `crowded`: within the gap.

    Ends at one point come first, by far the most; only what is left free then looks for a neighbour up to the gap.
    """
    partner = np.full(len(ends.z), -1, dtype=np.intp)
    two, meeting = _at_points(ends)
    partner[two[:, 0]], partner[two[:, 1]] = two[:, 1], two[:, 0]
    _pair_off(partner, meeting)
    # an option of 0.05mm is to close the gap of 0.05 that it was given for, whatever the last digit
    reach = gap * (1.0 + GENEROUS) + ends.rounding
    crowded = packs(ends, np.flatnonzero(partner < 0), reach)
    _pair_off(partner, crowded)

    free = np.flatnonzero(partner < 0)
    if not free.size:
        return Pairing(partner, meeting, crowded)
    nearest_first(ends, free, reach, partner)

    points = shapely.points(ends.z.real, ends.z.imag)
    free = np.flatnonzero(partner < 0)
    if free.size:
        odd, near = shapely.STRtree(points).query(points[free], predicate="dwithin", distance=reach)
        odd, near, _ = _others(ends, free[odd], near)
        taken = partner[near] >= 0
        threes = np.sort(np.column_stack([odd[taken], near[taken], partner[near[taken]]]), axis=1)
        crowded += np.unique(threes, axis=0).tolist()
    return Pairing(partner, meeting, crowded)


def nearest_first(ends: Ends, free: Indices, reach: float, partner: Indices) -> None:
    """Enter into `partner` the pairs of `free` ends up to `reach` apart, nearest first and one to one."""
    points = shapely.points(ends.z[free].real, ends.z[free].imag)
    one, other = shapely.STRtree(points).query(points, predicate="dwithin", distance=reach)
    one, other, distance = _others(ends, free[one], free[other])
    for k in np.lexsort((other, one, distance)).tolist():
        i, j = one[k], other[k]
        if partner[i] < 0 and partner[j] < 0:
            partner[i], partner[j] = j, i


def _others(ends: Ends, one: Indices, other: Indices) -> tuple[Indices, Indices, NDArray[np.float64]]:
    """Return the pairs of ends with their distance, but for those that are no pair: an end and itself, and the two ends
    of one short piece. The two ends of a curve that all but closes on itself are a pair."""
    distance = np.abs(ends.z[one] - ends.z[other])
    same = np.flatnonzero(one // 2 == other // 2)
    length = np.array([ends.curves[k // 2].length for k in one[same].tolist()])
    keep = np.ones(len(one), dtype=bool)
    keep[same] = (length >= SLENDER * np.maximum(distance[same], ends.rounding)) & (one[same] != other[same])
    return one[keep], other[keep], distance[keep]


def _at_points(ends: Ends) -> tuple[Indices, list[list[int]]]:
    """Return the pairs (n, 2) of ends that are alone at one point, to rounding, and the groups of three and more."""
    spots, spot = np.unique(ends.z, return_inverse=True)
    points = shapely.points(spots.real, spots.imag)
    one, other = shapely.STRtree(points).query(points, predicate="dwithin", distance=ends.rounding)
    keep = one < other
    group = linked(one[keep], other[keep], len(spots))[spot]
    order = np.argsort(group, kind="stable")
    first = np.flatnonzero(np.diff(group[order], prepend=-1))
    count = np.diff(first, append=len(order))
    pairs = first[count == 2]
    crowds = [sorted(order[f : f + n].tolist()) for f, n in zip(first[count > 2], count[count > 2], strict=True)]
    return np.column_stack([order[pairs], order[pairs + 1]]), sorted(crowds)


def linked(one: Indices, other: Indices, count: int) -> Indices:
    """Number the groups of 0 … count − 1 that the links (one, other) make: each by the least of its members."""
    group = np.arange(count)
    while True:
        least = np.minimum(group[one], group[other])
        before = group.copy()
        np.minimum.at(group, one, least)
        np.minimum.at(group, other, least)
        group = group[group]
        if np.array_equal(group, before):
            return group


def packs(ends: Ends, free: Indices, reach: float) -> list[list[int]]:
    """Return the groups of free ends that are so many in one square of the size of the gap that pairs make no sense."""
    if len(free) <= PACK:
        return []
    square = np.floor(ends.z[free].view(float).reshape(-1, 2) / reach)
    order = np.lexsort(square.T)
    first = np.flatnonzero(np.any(np.diff(square[order], axis=0, prepend=np.nan) != 0, axis=1))
    count = np.diff(first, append=len(order))
    packs = count > PACK
    return [sorted(free[order[f : f + n]].tolist()) for f, n in zip(first[packs], count[packs], strict=True)]


def _pair_off(partner: Indices, groups: Sequence[Sequence[int]]) -> None:
    """Pair the ends of every group in their order."""
    for group in groups:
        for i, j in zip(group[0::2], group[1::2], strict=False):
            partner[i], partner[j] = j, i
