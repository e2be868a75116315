"""Parts of different materials may touch, along any length, but not lie over each other: decided on the true curves.

With every boundary directed, material on its left, two parts lie over each other exactly where a piece of one's
boundary lies inside the material of the other, or where their boundaries run together in the same direction.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from edgetally.curves import Curve, Packed
from edgetally.curves.green import EPS
from edgetally.curves.intersections import intersect, nearest, overlap
from edgetally.errors import OutlineError
from edgetally.findings import Finding
from edgetally.outline.candidates import apart, near_pairs
from edgetally.outline.crossings import near_straight
from edgetally.outline.nesting import turning_about
from edgetally.outline.records import Loop, Region
from edgetally.outline.words import at, handles, place

TOUCH = 1e-9
"""Boundaries nearer than this share of the extent of all parts touch."""
DECIMALS = 2e-6
"""They touch within this of the drawing's unit too: many programs write six decimals, which rounds both."""
ROUNDING = 16 * EPS
"""Of the coordinates: no two points nearer than that can be told apart."""
LOOKED_AT = (0.5, 0.25, 0.75, 0.0625, 0.9375)
"""Where a piece between two contacts is looked at, as shares of it: the place farthest from the other part decides."""
REPORTED = 12

Part = tuple[str, tuple[Region, ...]]


def refuse_overlaps(parts: Sequence[Part]) -> None:
    """Raise OutlineError (`regions-overlap`) with places and handles where two of the named parts lie over each other.

    The regions of one part do not meet each other: `assemble` has seen to that. A part in a void of another, or one
    that fills it, is none over another. Cost O(n log n) for n curves, and √n for each contact or loop.
    """
    everything = _Boundaries(parts)
    meetings = everything.meetings()
    found: dict[tuple[int, int], tuple[complex, Curve]] = {}
    for (one, other), (z, curve) in everything.running_together(meetings):
        found.setdefault((min(one, other), max(one, other)), (z, curve))
    for one, other, z, curve in everything.inside(meetings):
        found.setdefault((min(one, other), max(one, other)), (z, curve))
    if found:
        raise _refusal(parts, found)


@dataclass
class _Meeting:
    """Where one curve meets those of one other part: parameters of contacts, and stretches run together."""

    partners: set[int] = field(default_factory=set)
    cuts: list[float] = field(default_factory=list)
    along: list[tuple[float, float]] = field(default_factory=list)
    """Stretches on which the two materials lie on opposite sides."""
    over: list[tuple[float, float]] = field(default_factory=list)
    """Stretches on which they lie on the same side."""


Meetings = dict[tuple[int, int], _Meeting]


class _Boundaries:
    """The curves of all parts in one row, loop by loop; `owner` is the number of each one's part."""

    def __init__(self, parts: Sequence[Part]) -> None:
        self.loops: list[list[Loop]] = [[loop for region in regions for loop in region.loops] for _, regions in parts]
        self.curves = [curve for loops in self.loops for loop in loops for curve in loop.curves]
        counts = [sum(len(loop.curves) for loop in loops) for loops in self.loops]
        self.owner = np.repeat(np.arange(len(parts)), counts)
        self.packed = Packed.of(self.curves)
        x0, y0, x1, y1 = self.packed.box
        self.touch = max(TOUCH * max(x1 - x0, y1 - y0), DECIMALS, ROUNDING * self.packed.magnitude)

    def meetings(self) -> Meetings:
        """Return what each curve has to do with each other part, by (curve, part); nothing where it keeps clear."""
        found: Meetings = {}
        packed = self.packed
        for one, other in near_pairs(packed.boxes, self.touch):
            apart_from = self.owner[one] != self.owner[other]
            one, other = one[apart_from], other[apart_from]
            straight = packed.is_straight[one] & packed.is_straight[other]
            near = np.full(len(one), self.touch)
            suspect = np.zeros(len(one), dtype=bool)
            suspect[straight] = near_straight(packed, one, other, straight, near)
            suspect[~straight] = ~apart(packed, one[~straight], other[~straight], self.touch)
            for i, j in zip(one[suspect].tolist(), other[suspect].tolist(), strict=True):
                self._meet(found, i, j)
        return found

    def _meet(self, found: Meetings, i: int, j: int) -> None:
        a, b = self.curves[i], self.curves[j]
        contacts, runs = intersect(a, b, self.touch), overlap(a, b, self.touch)
        if not contacts and not runs:
            return
        mine = found.setdefault((i, int(self.owner[j])), _Meeting())
        theirs = found.setdefault((j, int(self.owner[i])), _Meeting())
        mine.partners.add(j)
        theirs.partners.add(i)
        mine.cuts += [t for t, _, _ in contacts]
        theirs.cuts += [u for _, u, _ in contacts]
        for (t0, t1), (u0, u1) in runs:
            same = u1 > u0
            (mine.over if same else mine.along).append((t0, t1))
            (theirs.over if same else theirs.along).append((min(u0, u1), max(u0, u1)))

    def running_together(self, meetings: Meetings) -> list[tuple[tuple[int, int], tuple[complex, Curve]]]:
        """Return (parts, (place, curve)) of each stretch on which both materials lie on the same side."""
        found = []
        for (i, part), meeting in meetings.items():
            curve = self.curves[i]
            for t0, t1 in meeting.over:
                if abs(curve.point(t1) - curve.point(t0)) > 4 * self.touch or t1 - t0 > 0.5:
                    found.append(((int(self.owner[i]), part), (curve.point(0.5 * (t0 + t1)), curve)))
        return found

    def inside(self, meetings: Meetings) -> list[tuple[int, int, complex, Curve]]:
        """Return (part, other, place, curve) where the boundary of a part passes through the material of another."""
        found = []
        first = 0
        for part, loops in enumerate(self.loops):
            for loop in loops:
                for other in range(len(self.loops)):
                    if other != part:
                        places = self._witnesses(first, len(loop.curves), other, meetings)
                        within = self._in_material(other, np.array([z for z, _ in places], dtype=complex))
                        found += [(part, other, *places[k]) for k in np.flatnonzero(within).tolist()]
                first += len(loop.curves)
        return found

    def _witnesses(self, first: int, count: int, other: int, meetings: Meetings) -> list[tuple[complex, Curve]]:
        """Return a point of each run of a loop between its contacts with another part, away from that part."""
        places: list[tuple[complex, Curve]] = []
        fresh = True
        for i in range(first, first + count):
            curve, meeting = self.curves[i], meetings.get((i, other))
            if meeting is None:
                if fresh:
                    places.append((curve.point(0.5), curve))
                fresh = False
                continue
            fresh = True
            together = meeting.along + meeting.over
            cuts = sorted({0.0, 1.0, *meeting.cuts, *(t for stretch in together for t in stretch)})
            for t0, t1 in pairwise(cuts):
                middle = 0.5 * (t0 + t1)
                if any(low <= middle <= high for low, high in together):
                    continue
                points = [curve.point(t0 + share * (t1 - t0)) for share in LOOKED_AT]
                clear = [min(nearest(self.curves[j], z)[0] for j in meeting.partners) for z in points]
                best = int(np.argmax(clear))
                if clear[best] > 2 * self.touch:
                    places.append((points[best], curve))
        return places

    def _in_material(self, part: int, points: NDArray[np.complex128]) -> NDArray[np.bool_]:
        """Tell which points lie in the material of a part: its boundary turns once around them."""
        turns = np.zeros(len(points))
        for loop in self.loops[part]:
            x0, y0, x1, y1 = loop.packed.box
            near = (x0 <= points.real) & (points.real <= x1) & (y0 <= points.imag) & (points.imag <= y1)
            if near.any():
                turns[near] += turning_about(loop, points[near])
        inside: NDArray[np.bool_] = np.abs(turns) > np.pi
        return inside


def _refusal(parts: Sequence[Part], found: dict[tuple[int, int], tuple[complex, Curve]]) -> OutlineError:
    findings = []
    for (one, other), (z, curve) in sorted(found.items(), key=lambda item: item[0])[:REPORTED]:
        message = (
            f"the parts on layers {parts[one][0]} and {parts[other][0]} lie over each other at {place(z)}, by "
            f"{curve.source} on layer {curve.source.layer}: the material there would count twice; parts may touch, so "
            "draw them side by side, or the one with a void where the other is"
        )
        findings.append(Finding("regions-overlap", "error", message, at(z), handles((curve.source,))))
    lines = [f.message for f in findings]
    if len(found) > len(findings):
        lines.append(f"and {len(found) - len(findings)} more pairs of parts")
    return OutlineError("\n".join(lines), findings)
