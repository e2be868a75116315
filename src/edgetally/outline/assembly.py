"""Curves → outline: the steps in their order."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from edgetally.curves import Curve, Packed
from edgetally.errors import OutlineError
from edgetally.findings import Finding
from edgetally.outline.crossings import refuse_contact, refuse_crossings
from edgetally.outline.duplicates import without_duplicates
from edgetally.outline.joining import DEFAULT_GAP_MM, ROUNDING, close_loops
from edgetally.outline.nesting import nest
from edgetally.outline.records import Join, Loop, Outline
from edgetally.outline.senses import rough_areas
from edgetally.outline.views import closed_in
from edgetally.outline.words import at, handles, place, stray_finding
from edgetally.units import MM_PER

FLAT = 1e-12
"""A loop whose area is less than this share of its perimeter squared encloses nothing: rounding of its own ends."""
DOUBTFUL = 10 * FLAT
"""Below this share the area is integrated before it is decided."""

SURROUND = 3
"""Fewer straight curves than these surround nothing."""


@dataclass(frozen=True, eq=False)
class Closing:
    """Closed loops that do not meet each other, with their signed areas, and what was done on the way."""

    loops: list[Loop]
    areas: NDArray[np.float64]
    joins: list[Join]
    findings: list[Finding]


def assemble(curves: Sequence[Curve], *, gap: float | None = None, unit: str = "mm") -> Outline:
    """Join `curves` to loops and the loops to regions with voids.

    `gap` is the join gap in `unit`, the drawing's unit; the default is 0.01 mm. Raises OutlineError with places,
    handles and a remedy for an open chain, a branch, a join too wide, a crossing, a loop without area, no loop at all.
    """
    kept, specks = without_specks(curves)
    closing = closing_of(kept, default_gap(gap, unit), unit)
    regions, islands = nest(closing.loops, closing.areas)
    return Outline(tuple(regions), tuple(closing.joins), tuple(islands), (*specks, *closing.findings))


def default_gap(gap: float | None, unit: str) -> float:
    """Return the join gap in the drawing's unit, 0.01 mm where none is given."""
    return DEFAULT_GAP_MM / MM_PER[unit] if gap is None else gap


def closing_of(curves: Sequence[Curve], gap: float, unit: str) -> Closing:
    """Do all that comes before nesting: duplicates, joining, crossings. Raises OutlineError as `assemble` says."""
    cleared = without_duplicates(curves)
    closed = close_loops(cleared.curves, gap, unit)
    loops = closed.loops
    if not loops:
        message = "no curve there encloses an area: draw a closed outline, or name its layer with --layer"
        raise OutlineError(message, [Finding("open-chain", "error", message)])
    refuse_crossings(loops)
    refuse_contact(closed.strays, loops)
    _refuse_surrounded(closed.strays, loops)
    areas, perimeters = rough_areas(loops)
    _refuse_flat(loops, areas, perimeters)
    return Closing(loops, areas, closed.joins, [*cleared.findings, *map(stray_finding, closed.strays)])


def _refuse_surrounded(strays: Sequence[Curve], loops: Sequence[Loop]) -> None:
    """Refuse loops with open curves all around: they may be the voids of an outline whose ends do not meet."""
    if len(strays) < SURROUND:
        return
    boxes = Packed.of(strays).boxes
    for loop in loops:
        if closed_in(loop, boxes):
            named = ", ".join(str(curve.source) for curve in strays[:4]) + (" …" if len(strays) > 4 else "")
            z = loop.curves[0].start
            message = (
                f"what is closed at {place(z)} lies among {len(strays)} curves that close nothing ({named}): it may be "
                "a void of an outline whose ends do not meet; close that outline, or move the curves to another layer"
            )
            sources = [curve.source for curve in strays]
            raise OutlineError(message, [Finding("open-chain", "error", message, at(z), handles(sources))])


def without_specks(curves: Sequence[Curve]) -> tuple[list[Curve], list[Finding]]:
    """Leave out what is no longer than the rounding of the coordinates: its neighbours meet without it."""
    magnitude = max((abs(p) for c in curves for p in (c.start, c.end)), default=0.0)
    kept = [c for c in curves if c.length > ROUNDING * magnitude]
    if len(kept) == len(curves):
        return kept, []
    specks = [c for c in curves if c.length <= ROUNDING * magnitude]
    z = specks[0].start
    named = ", ".join(dict.fromkeys(str(c.source) for c in specks[:6])) + (" …" if len(specks) > 6 else "")
    message = f"{len(specks)} pieces no longer than rounding were left out: {named}; the first at {place(z)}"
    return kept, [Finding("tiny-curve-removed", "note", message, at(z), handles(c.source for c in specks))]


def _refuse_flat(loops: Sequence[Loop], areas: NDArray[np.float64], perimeters: NDArray[np.float64]) -> None:
    flat = np.abs(areas) <= DOUBTFUL * perimeters**2
    for loop in (loops[k] for k in np.flatnonzero(flat).tolist()):
        if abs(loop.area) <= FLAT * loop.perimeter**2:
            sources = [curve.source for curve in loop.curves]
            z = loop.curves[0].start
            message = (
                f"the loop of {', '.join(map(str, sources[:4]))}{' …' if len(sources) > 4 else ''} at {place(z)} is "
                "closed but encloses no area; remove it, or move it to another layer"
            )
            raise OutlineError(message, [Finding("zero-area", "error", message, at(z), handles(sources))])
