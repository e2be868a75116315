"""Curves drawn twice, and curves that run over each other: each stretch of the drawing is to count once.

A **figure** is a run of curves that is closed by itself, as a closed polyline or a circle is; everything else is loose.
Where a loose curve runs over another, one of the two stretches goes. Where two figures share a stretch with their
material on opposite sides, as plates side by side do, both stretches go, and what remains is the outline of the two
together. A figure drawn twice goes once. Other figures with their material on the same side of a shared stretch lie
over each other, and are refused.
"""

from __future__ import annotations

from collections.abc import Hashable, Sequence
from dataclasses import dataclass, field, replace

import numpy as np
from numpy.typing import NDArray

from edgetally.curves import UNKNOWN, Curve, Packed
from edgetally.curves.green import EPS, enclosed_area
from edgetally.curves.intersections import overlap
from edgetally.errors import OutlineError
from edgetally.findings import Finding
from edgetally.outline.candidates import Indices, apart, near_pairs
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
    figure = _figures(curves, packed)
    copies = _copies(curves, packed, figure)
    once = np.flatnonzero(~copies)
    if len(once) < len(curves):
        kept = [curves[k] for k in once.tolist()]
        cleared, cuts = _cleared(kept, Packed.of(kept), figure[once])
        # copies are told of with what else is drawn twice
        cuts = _Cuts(
            whole=sorted([*np.flatnonzero(copies).tolist(), *(int(once[k]) for k in cuts.whole)]),
            part=[int(once[k]) for k in cuts.part],
            shared=[int(once[k]) for k in cuts.shared],
        )
    else:
        cleared, cuts = _cleared(curves, packed, figure)
    return Cleared(cleared, list(_findings(curves, cuts)))


def _cleared(curves: list[Curve], packed: Packed, figure: NDArray[np.intp]) -> tuple[list[Curve], _Cuts]:
    """Return the curves without what two of them have in common, and what was cut."""
    boxes = packed.boxes
    extent = float((boxes[:, 2:].max(axis=0) - boxes[:, :2].min(axis=0)).max())
    tolerance = max(SAME * extent, ROUNDING * packed.magnitude)
    figures = _Figures(curves, packed, figure)
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
        same_sense = figures.is_left(one) == figures.is_left(other)
        beside = [m for m in shared if m.against == same_sense]
        over = [m for m in shared if m.against != same_sense]
        if over and not beside and figures.covered(over, one, other):
            for member in figures.members(other):
                cuts.add(member, (0.0, 1.0), cuts.whole)
        elif over:
            raise _lie_over(curves, over[0])
        else:
            for m in beside:
                cuts.add(m.i, m.on_i, cuts.shared)
                cuts.add(m.j, m.on_j, None)
    if not cuts.stretches:
        return curves, cuts
    kept: list[Curve] = []
    for k, curve in enumerate(curves):
        kept += _remaining(curve, cuts.stretches[k], tolerance) if k in cuts.stretches else [curve]
    return kept, cuts


class _Figures:
    """The members of every figure, its length and its sense, each found once."""

    def __init__(self, curves: Sequence[Curve], packed: Packed, figure: NDArray[np.intp]) -> None:
        self._curves, self._lengths = curves, packed.lengths
        self._order = np.argsort(figure, kind="stable")
        self._bounds = np.searchsorted(figure[self._order], np.arange(figure.max(initial=-1) + 2))
        self._left: dict[int, bool] = {}

    def members(self, number: int) -> list[int]:
        members: list[int] = self._order[self._bounds[number] : self._bounds[number + 1]].tolist()
        return members

    def is_left(self, number: int) -> bool:
        """Tell whether a figure is drawn counter-clockwise, its inside on the left."""
        if number not in self._left:
            self._left[number] = enclosed_area(Packed.of(self._curves[k] for k in self.members(number))) > 0
        return self._left[number]

    def covered(self, over: Sequence[_Meeting], one: int, other: int) -> bool:
        """Tell whether the common stretches are all of both figures: the same figure twice."""
        common_i = sum(float(self._lengths[m.i]) * (m.on_i[1] - m.on_i[0]) for m in over)
        common_j = sum(float(self._lengths[m.j]) * (m.on_j[1] - m.on_j[0]) for m in over)
        all_i, all_j = (float(self._lengths[self.members(number)].sum()) for number in (one, other))
        return common_i >= ALL * all_i and common_j >= ALL * all_j


def _copies(curves: Sequence[Curve], packed: Packed, figure: NDArray[np.intp]) -> NDArray[np.bool_]:
    """Tell which curves repeat an earlier one to the last digit: loose ones, and figures that are repeated whole.

    Only a short cut: without it, n copies of one curve would be n² pairs.
    """
    alike = _alike(packed)
    copies = np.zeros(len(curves), dtype=bool)
    if alike.max(initial=-1) + 1 == len(curves):
        return copies
    drawn: set[tuple[int, ...]] = set()
    taken: set[int] = set()
    order = np.argsort(figure, kind="stable")
    first = np.searchsorted(figure[order], 0)
    for members in np.split(order[first:], np.flatnonzero(np.diff(figure[order[first:]])) + 1):
        whole = tuple(sorted(alike[members].tolist()))
        copies[members] = whole in drawn
        drawn.add(whole)
        taken.update(whole)
    for k in np.sort(order[:first]).tolist():
        copies[k] = int(alike[k]) in taken
        taken.add(int(alike[k]))
    return copies


def _alike(packed: Packed) -> NDArray[np.intp]:
    """Number the curves so that those equal to the last digit, straight ones in either sense, have one number."""
    swap = packed.is_straight & (
        (packed.start.real > packed.end.real)
        | ((packed.start.real == packed.end.real) & (packed.start.imag > packed.end.imag))
    )
    start, end = np.where(swap, packed.end, packed.start), np.where(swap, packed.start, packed.end)
    kind = np.zeros(len(packed))
    numbers: dict[Hashable, int] = {}
    for k, curve in zip(packed.others.at, packed.others.curves, strict=True):
        kind[k] = 1 + numbers.setdefault(replace(curve, source=UNKNOWN), len(numbers))
    columns = np.column_stack([
        start.real, start.imag, end.real, end.imag, packed.spoke.real, packed.spoke.imag, packed.sweep, kind,
    ])  # fmt: skip
    order = np.lexsort(columns.T)
    steps = np.any(columns[order[1:]] != columns[order[:-1]], axis=1)
    alike = np.empty(len(packed), dtype=np.intp)
    alike[order] = np.concatenate([[0], np.cumsum(steps)])
    return alike


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
    found: list[tuple[int, int]] = []
    for one, other in near_pairs(boxes, tolerance):
        chosen = _alongside(packed, one, other, tolerance)
        # curves of two kinds do not run along each other; of one kind only where their ends or middles could meet
        bent = np.flatnonzero(~packed.is_straight[one] & ~packed.is_straight[other])
        chosen[bent] = ~apart(packed, one[bent], other[bent], tolerance)
        found += zip(one[chosen].tolist(), other[chosen].tolist(), strict=True)
    return sorted(found)


def _alongside(packed: Packed, one: Indices, other: Indices, tolerance: float) -> NDArray[np.bool_]:
    """Tell which pairs are straight pieces that run along each other."""
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
    along: NDArray[np.bool_] = (aside <= tolerance) & (common > 2.0 * np.maximum(tolerance, aside))
    return along & packed.is_straight[one] & packed.is_straight[other]


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
