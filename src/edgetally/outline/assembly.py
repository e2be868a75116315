"""Curves → outline: the steps in their order."""

from __future__ import annotations

from collections.abc import Sequence

from edgetally.curves import Curve
from edgetally.errors import OutlineError
from edgetally.findings import Finding
from edgetally.outline.crossings import refuse_crossings
from edgetally.outline.duplicates import without_duplicates
from edgetally.outline.joining import DEFAULT_GAP_MM, close_loops
from edgetally.outline.nesting import nest
from edgetally.outline.records import Loop, Outline
from edgetally.outline.words import at, handles, place
from edgetally.units import MM_PER

FLAT = 1e-12
"""A loop whose area is less than this share of its perimeter squared encloses nothing: rounding of its own ends."""


def assemble(curves: Sequence[Curve], *, gap: float | None = None, unit: str = "mm") -> Outline:
    """Join `curves` to loops and the loops to regions with voids.

    `gap` is the join gap in `unit`, the drawing's unit; the default is 0.01 mm. Raises OutlineError with places,
    handles and a remedy for an open chain, a branch, a join too wide, a crossing, a loop without area, no loop at all.
    """
    cleared = without_duplicates(curves)
    loops, joins = close_loops(cleared.curves, DEFAULT_GAP_MM / MM_PER[unit] if gap is None else gap, unit)
    if not loops:
        raise OutlineError("no curve there encloses an area")
    _refuse_flat(loops)
    refuse_crossings(loops)
    regions, islands = nest(loops)
    return Outline(tuple(regions), tuple(joins), tuple(islands), tuple(cleared.findings))


def _refuse_flat(loops: Sequence[Loop]) -> None:
    for loop in loops:
        if abs(loop.area) <= FLAT * loop.perimeter**2:
            sources = [curve.source for curve in loop.curves]
            z = loop.curves[0].start
            message = (
                f"the loop of {', '.join(map(str, sources[:4]))}{' …' if len(sources) > 4 else ''} at {place(z)} is "
                "closed but encloses no area; remove it, or move it to another layer"
            )
            raise OutlineError(message, [Finding("zero-area", "error", message, at(z), handles(sources))])
