"""Curves → outline: the steps in their order."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from edgetally.curves import Curve
from edgetally.errors import OutlineError
from edgetally.findings import Finding
from edgetally.outline.crossings import refuse_contact, refuse_crossings
from edgetally.outline.duplicates import without_duplicates
from edgetally.outline.joining import DEFAULT_GAP_MM, ROUNDING, close_loops
from edgetally.outline.nesting import nest
from edgetally.outline.records import Loop, Outline
from edgetally.outline.senses import rough_areas
from edgetally.outline.words import at, handles, place
from edgetally.units import MM_PER

FLAT = 1e-12
"""A loop whose area is less than this share of its perimeter squared encloses nothing: rounding of its own ends."""
DOUBTFUL = 10 * FLAT
"""Below this share the area is integrated before it is decided."""


def assemble(curves: Sequence[Curve], *, gap: float | None = None, unit: str = "mm") -> Outline:
    """Join `curves` to loops and the loops to regions with voids.

    `gap` is the join gap in `unit`, the drawing's unit; the default is 0.01 mm. Raises OutlineError with places,
    handles and a remedy for an open chain, a branch, a join too wide, a crossing, a loop without area, no loop at all.
    """
    kept, specks = _without_specks(curves)
    cleared = without_duplicates(kept)
    closed = close_loops(cleared.curves, DEFAULT_GAP_MM / MM_PER[unit] if gap is None else gap, unit)
    loops = closed.loops
    if not loops:
        raise OutlineError("no curve there encloses an area")
    refuse_crossings(loops)
    refuse_contact(closed.strays, loops)
    areas, perimeters = rough_areas(loops)
    _refuse_flat(loops, areas, perimeters)
    regions, islands = nest(loops, areas)
    findings = [*specks, *cleared.findings, *map(_stray, closed.strays)]
    return Outline(tuple(regions), tuple(closed.joins), tuple(islands), tuple(findings))


def _stray(curve: Curve) -> Finding:
    message = (
        f"{curve.source} from {place(curve.start)} to {place(curve.end)} belongs to no outline and was left out; move "
        "it to another layer"
    )
    return Finding("stray-curve", "warning", message, at(curve.start), handles((curve.source,)))


def _without_specks(curves: Sequence[Curve]) -> tuple[list[Curve], list[Finding]]:
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
