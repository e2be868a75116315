"""Sound outlines on a layer that holds faulty ones: which can be measured all the same, and what is left out.

A **group** is curves that hang together, or may; no step before nesting looks beyond it. Where the whole layer is
refused and one outline, or each by itself, is asked for, the groups are assembled apart. An outline that has a faulty
curve inside, or that faulty curves may enclose, is left out too, since its voids, or its being a void, are unknown.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from edgetally.curves import Curve, Packed
from edgetally.errors import OutlineError
from edgetally.findings import Finding
from edgetally.outline.assembly import Closing, assemble, closing_of, default_gap, without_specks
from edgetally.outline.candidates import Indices, apart, near_pairs
from edgetally.outline.crossings import near_straight
from edgetally.outline.gaps import WIDEST_GAP_MM
from edgetally.outline.joining import is_nearly_straight
from edgetally.outline.nesting import nest
from edgetally.outline.pairing import linked
from edgetally.outline.records import LeftOut, Outline, Region
from edgetally.outline.views import closed_in
from edgetally.outline.words import place, stray_finding
from edgetally.units import MM_PER

REACH = 1e-8
"""Curves nearer than this share of the drawing's extent are of one group: ten times what counts as a touch."""

ATTEMPTS = 1000
"""So often some of the groups are tried: a layer with hundreds of faults is no drawing of sections."""


@dataclass(eq=False)
class _Sorted:
    """What came of the groups: closed loops, faulty groups with their refusals, single curves that are no outline."""

    attempts: int
    closings: list[Closing] = field(default_factory=list)
    faulty: list[tuple[list[Curve], OutlineError]] = field(default_factory=list)
    strays: list[Curve] = field(default_factory=list)


def assemble_sound(
    curves: Sequence[Curve], *, gap: float | None = None, unit: str = "mm", attempts: int = ATTEMPTS
) -> Outline:
    """Do what `assemble` does; where it refuses, give the outlines that no fault concerns, and what is left out.

    Raises the refusal of `assemble` where no outline is sound, all hangs together, or the faults are so many that
    `attempts` do not part them.
    """
    try:
        return assemble(curves, gap=gap, unit=unit)
    except OutlineError as error:
        refusal = error
    gap = default_gap(gap, unit)
    kept, findings = without_specks(curves)
    groups = _groups(kept, max(gap, WIDEST_GAP_MM / MM_PER[unit])) if kept else []
    found = _Sorted(attempts)
    if len(groups) > 1:
        found.strays = [group[0] for group in groups if len(group) == 1 and is_nearly_straight(group[0])]
        alone = set(map(id, found.strays))
        _sort([group for group in groups if id(group[0]) not in alone], gap, unit, found)
    if not found.closings or found.attempts < 0:
        raise refusal
    loops = [loop for closing in found.closings for loop in closing.loops]
    regions, islands = nest(loops, np.concatenate([closing.areas for closing in found.closings]))
    left = [_left_out(faulty, error) for faulty, error in found.faulty]
    open_boxes = np.array([each.box for each in left])
    if found.strays:
        open_boxes = np.vstack([open_boxes.reshape(-1, 4), Packed.of(found.strays).boxes])
    left_regions = {
        k: cause for k, region in enumerate(regions) if (cause := _concern(region, left, open_boxes)) is not None
    }
    left += [_beside(regions[k], reason) for k, reason in left_regions.items()]
    kept_regions = [k for k in range(len(regions)) if k not in left_regions]
    if not kept_regions:
        raise refusal
    findings += [finding for closing in found.closings for finding in closing.findings]
    findings += [*map(stray_finding, found.strays), *(each.finding for each in left)]
    return Outline(
        tuple(regions[k] for k in kept_regions),
        tuple(join for closing in found.closings for join in closing.joins),
        tuple(n for n, k in enumerate(kept_regions) if k in islands),
        tuple(findings),
        tuple(_outermost(left)),
    )


def _outermost(left: Sequence[LeftOut]) -> list[LeftOut]:
    """Return what was left out without what lies in the box of another: a tube and its faulty void are one outline."""
    found: list[LeftOut] = []
    for each in sorted(left, key=lambda e: (e.box[0] - e.box[2]) * (e.box[3] - e.box[1])):
        x0, y0, x1, y1 = each.box
        if not any(a0 <= x0 and b0 <= y0 and x1 <= a1 and y1 <= b1 for a0, b0, a1, b1 in (f.box for f in found)):
            found.append(each)
    return found


def _groups(curves: Sequence[Curve], reach: float) -> list[list[Curve]]:
    packed = Packed.of(curves)
    boxes = packed.boxes
    reach = max(reach, REACH * float((boxes[:, 2:].max(axis=0) - boxes[:, :2].min(axis=0)).max()))
    group: Indices = np.arange(len(curves))
    for one, other in near_pairs(boxes, reach):
        straight = packed.is_straight[one] & packed.is_straight[other]
        near = ~straight
        near[~straight] = ~apart(packed, one[~straight], other[~straight], reach)
        near[straight] = near_straight(packed, one, other, straight, np.full(len(one), reach))
        one, other = one[near], other[near]
        group = linked(group[one], group[other], len(curves))[group]
    members: dict[int, list[Curve]] = {}
    for curve, number in zip(curves, group.tolist(), strict=True):
        members.setdefault(number, []).append(curve)
    return list(members.values())


def _sort(groups: list[list[Curve]], gap: float, unit: str, found: _Sorted) -> None:
    """Close the groups, all at once where they are sound; halves of them where not. Few faults cost few attempts."""
    found.attempts -= 1
    if found.attempts < 0 or not groups:
        return
    try:
        found.closings.append(closing_of([curve for group in groups for curve in group], gap, unit))
    except OutlineError as error:
        if len(groups) > 1:
            half = len(groups) // 2
            _sort(groups[:half], gap, unit, found)
            _sort(groups[half:], gap, unit, found)
        else:
            found.faulty.append((groups[0], error))


def _left_out(curves: list[Curve], error: OutlineError) -> LeftOut:
    box = Packed.of(curves).box
    first = error.findings[0]
    more = f" (and {len(error.findings) - 1} more faults there)" if len(error.findings) > 1 else ""
    text = f"{_where(box)} was left out: {first.message}{more}"
    return LeftOut(tuple(curves), box, Finding(first.code, "warning", text, first.at, first.handles))


def _beside(region: Region, cause: LeftOut) -> LeftOut:
    curves = tuple(curve for loop in region.loops for curve in loop.curves)
    why = "faulty curves lie inside it" if _holds(region, cause) else "it may be a void of the faulty curves around it"
    text = f"{_where(region.box)} was left out, because {why}: {cause.finding.message}"
    return LeftOut(curves, region.box, Finding(cause.finding.code, "warning", text, cause.finding.at))


def _where(box: tuple[float, float, float, float]) -> str:
    x0, y0, x1, y1 = box
    return f"the outline from {place(complex(x0, y0))} to {place(complex(x1, y1))}"


def _concern(region: Region, left: Sequence[LeftOut], boxes: NDArray[np.float64]) -> LeftOut | None:
    """Return what was left out and lies inside the region, or may lie around it; None where all keeps clear.

    `boxes` are those of all curves that close to no outline: many of them together may be what is around.
    """
    x0, y0, x1, y1 = region.box
    for each in left:
        a0, b0, a1, b1 = each.box
        if a1 < x0 or x1 < a0 or b1 < y0 or y1 < b0:
            continue
        if (a0 <= x0 and x1 <= a1 and b0 <= y0 and y1 <= b1) or _holds(region, each):
            return each
    return left[0] if left and closed_in(region.outer, boxes) else None


def _holds(region: Region, left: LeftOut) -> bool:
    """Tell whether a curve that was left out starts within the outer boundary; none crosses it."""
    starts = np.array([curve.start for curve in left.curves])
    return bool(np.any(np.abs(region.outer.packed.turning(starts)) > np.pi))
