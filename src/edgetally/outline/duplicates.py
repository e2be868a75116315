"""Curves drawn twice, and curves that run over each other: each stretch of the drawing is to count once.

A **figure** is a run of curves that is closed by itself, as a closed polyline or a circle is; everything else is loose.
Where a loose curve runs over another, one of the two stretches goes. Where two figures share a stretch with their
material on opposite sides, as plates side by side do, both stretches go, and what remains is the outline of the two
together. A figure drawn twice goes once. Other figures with their material on the same side of a shared stretch lie
over each other, and are refused.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np
import shapely
from numpy.typing import NDArray

from edgetally.curves import Curve, Packed
from edgetally.curves.green import EPS, enclosed_area
from edgetally.curves.intersections import overlap
from edgetally.errors import OutlineError
from edgetally.findings import Finding
from edgetally.outline.words import at, handles, place

SAME = 1e-10
"""Curves within this share of the drawing's extent of each other are one: far below what a drawing resolves."""
ROUNDING = 64 * EPS
ALL = 1 - 1e-9
LISTED = 20

Stretch = tuple[float, float]


@dataclass(frozen=True, eq=False)
class Cleared:
    """The curves without what was drawn twice, and what was done."""

    curves: list[Curve]
    findings: list[Finding]


@dataclass(frozen=True, slots=True)
class _Meeting:
    """A common stretch of curves i and j, and whether they run against each other along it."""

    i: int
    on_i: Stretch
    j: int
    on_j: Stretch
    against: bool


@dataclass(eq=False)
class _Cuts:
    """The stretches that go, by curve, and why: what is drawn twice whole, in part, or shared by two figures."""

    stretches: dict[int, list[Stretch]] = field(default_factory=dict)
    whole: list[int] = field(default_factory=list)
    part: list[int] = field(default_factory=list)
    shared: list[int] = field(default_factory=list)

    def doubled(self, k: int, stretch: Stretch) -> None:
        self.add(k, stretch, self.whole if _whole(stretch) else self.part)

    def add(self, k: int, stretch: Stretch, why: list[int] | None) -> None:
        self.stretches.setdefault(k, []).append(stretch)
        if why is not None:
            why.append(k)


def without_duplicates(curves: Sequence[Curve]) -> Cleared:
    """Return the curves with each stretch counted once. Cost O(n log n) for n curves with few others in each box.

    Raises OutlineError (`regions-overlap`) where two figures lie over each other along a common stretch.
    """
    curves = list(curves)
    if len(curves) < 2:
        return Cleared(curves, [])
    packed = Packed.of(curves)
    boxes = packed.boxes
    extent = float((boxes[:, 2:].max(axis=0) - boxes[:, :2].min(axis=0)).max())
    tolerance = max(SAME * extent, ROUNDING * packed.magnitude)
    figure = _figures(curves, packed)
    cuts = _Cuts()
    meetings: dict[tuple[int, int], list[_Meeting]] = {}
    for i, j in _candidates(packed, boxes, tolerance):
        if figure[i] == figure[j] and figure[i] >= 0:
            continue  # a polyline that runs back over itself is no duplicate: it will be refused
        for on_i, on_j in overlap(curves[i], curves[j], tolerance):
            meeting = _Meeting(i, on_i, j, (min(on_j), max(on_j)), on_j[0] > on_j[1])
            if figure[i] >= 0 and figure[j] >= 0:
                meetings.setdefault((int(figure[i]), int(figure[j])), []).append(meeting)
            elif figure[j] >= 0:  # the loose one goes
                cuts.doubled(i, on_i)
            else:
                cuts.doubled(j, meeting.on_j)
    for (one, other), shared in meetings.items():
        same_sense = _is_left(curves, figure, one) == _is_left(curves, figure, other)
        beside = [m for m in shared if m.against == same_sense]
        over = [m for m in shared if m.against != same_sense]
        if over and not beside and _cover(over, packed, figure, one, other):
            for member in np.flatnonzero(figure == other):
                cuts.add(int(member), (0.0, 1.0), cuts.whole)
        elif over:
            raise _lie_over(curves, over[0])
        else:
            for m in beside:
                cuts.add(m.i, m.on_i, cuts.shared)
                cuts.add(m.j, m.on_j, None)
    if not cuts.stretches:
        return Cleared(curves, [])
    kept: list[Curve] = []
    for k, curve in enumerate(curves):
        kept += _remaining(curve, cuts.stretches[k], tolerance) if k in cuts.stretches else [curve]
    return Cleared(kept, list(_findings(curves, cuts)))


def _is_left(curves: Sequence[Curve], figure: NDArray[np.intp], number: int) -> bool:
    """Tell whether a figure is drawn counter-clockwise, its inside on the left."""
    return enclosed_area(Packed.of(curves[int(k)] for k in np.flatnonzero(figure == number))) > 0


def _figures(curves: Sequence[Curve], packed: Packed) -> NDArray[np.intp]:
    """Number the figures, −1 for a loose curve."""
    figure = np.full(len(curves), -1, dtype=np.intp)
    count = 0
    rounding = ROUNDING * max(packed.magnitude, 1e-300)
    k = 0
    while k < len(curves):
        stop = k
        while (
            stop + 1 < len(curves)
            and curves[stop + 1].source is curves[k].source
            and abs(curves[stop + 1].start - curves[stop].end) <= rounding
            and abs(curves[stop].end - curves[k].start) > rounding
        ):
            stop += 1
        if abs(curves[stop].end - curves[k].start) <= rounding:
            figure[k : stop + 1] = count
            count += 1
        k = stop + 1
    return figure


def _candidates(packed: Packed, boxes: NDArray[np.float64], tolerance: float) -> list[tuple[int, int]]:
    """Return the pairs that may run along each other; of straight ones only those that do lie on one line."""
    shapes = shapely.box(*(boxes + np.array([-tolerance, -tolerance, tolerance, tolerance])).T)
    one, other = shapely.STRtree(shapes).query(shapes)
    keep = one < other
    one, other = one[keep], other[keep]
    straight = packed.is_straight
    mixed = straight[one] != straight[other]
    both = straight[one] & straight[other]
    a, b = packed.start[one], packed.end[one]
    c, d = packed.start[other], packed.end[other]
    chord = b - a
    length = np.abs(chord)
    unit = np.divide(chord, length, out=np.zeros_like(chord), where=length > 0)
    along_c, along_d = unit.conj() * (c - a), unit.conj() * (d - a)
    aside = np.maximum(np.abs(along_c.imag), np.abs(along_d.imag))
    common = np.minimum(length, np.maximum(along_c.real, along_d.real)) - np.maximum(
        0.0, np.minimum(along_c.real, along_d.real)
    )
    # two short pieces at an angle may also be near one line: what is common must be more than they are apart
    along = both & (aside <= tolerance) & (common > 2.0 * np.maximum(tolerance, aside))
    # curves of two kinds do not run along each other; of one kind only where their ends or middles could meet
    chosen = along | (~both & ~mixed)
    return [(int(i), int(j)) for i, j in zip(one[chosen], other[chosen], strict=True)]


def _cover(over: Sequence[_Meeting], packed: Packed, figure: NDArray[np.intp], one: int, other: int) -> bool:
    """Tell whether the common stretches are all of both figures: the same figure twice."""
    lengths = packed.lengths
    common_i = sum(float(lengths[m.i]) * (m.on_i[1] - m.on_i[0]) for m in over)
    common_j = sum(float(lengths[m.j]) * (m.on_j[1] - m.on_j[0]) for m in over)
    all_i, all_j = float(lengths[figure == one].sum()), float(lengths[figure == other].sum())
    return common_i >= ALL * all_i and common_j >= ALL * all_j


def _lie_over(curves: Sequence[Curve], meeting: _Meeting) -> OutlineError:
    a, b = curves[meeting.i].source, curves[meeting.j].source
    z = curves[meeting.i].point(0.5 * sum(meeting.on_i))
    message = (
        f"{a} and {b} run along each other at {place(z)} with their insides on the same side: they lie over each "
        "other, or a void touches an outer boundary; correct it in the drawing"
    )
    return OutlineError(message, [Finding("regions-overlap", "error", message, at(z), handles((a, b)))])


def _whole(stretch: Stretch) -> bool:
    return stretch[0] <= 1e-9 and stretch[1] >= 1 - 1e-9


def _remaining(curve: Curve, stretches: Sequence[Stretch], tolerance: float) -> list[Curve]:
    """Return what is left of a curve when the stretches are taken out; what is shorter than the tolerance goes too."""
    pieces: list[Curve] = []
    begin = 0.0
    for low, high in [*sorted(stretches), (1.0, 1.0)]:
        if low > begin:
            piece = curve
            if low < 1.0:
                piece = piece.split(low)[0]
            if begin > 0.0:
                piece = piece.split(begin / low)[1]
            if piece.length > 2.0 * tolerance:
                pieces.append(piece)
        begin = max(begin, high)
    return pieces


def _findings(curves: Sequence[Curve], cuts: _Cuts) -> list[Finding]:
    findings = []
    kinds = (
        ("duplicate-removed", cuts.whole, "note", "drawn twice, counted once"),
        ("overlap-removed", cuts.part, "warning", "ran over another in part; the common stretch was counted once"),
        ("edge-shared", cuts.shared, "warning", "shared by two closed figures, which were taken as one solid"),
    )
    for code, which, severity, words in kinds:
        which = list(dict.fromkeys(which))
        if not which:
            continue
        sources = list(dict.fromkeys(curves[k].source for k in which))
        z = curves[which[0]].point(0.5)
        listed = ", ".join(map(str, sources[:LISTED])) + (" …" if len(sources) > LISTED else "")
        count = f"{len(which)} curve{'s' if len(which) > 1 else ''}"
        message = f"{count} {words}: {listed}; the first at {place(z)}"
        findings.append(Finding(code, severity, message, at(z), handles(sources)))  # type: ignore[arg-type]
    return findings
