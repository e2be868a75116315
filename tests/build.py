"""From outlines written as vertices and bulges to measured sections, without a drawing file."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from functools import cache, partial

import edgetally
from edgetally.curves import Arc, Curve, Line
from edgetally.outline.assembly import assemble
from edgetally.section.area import area_properties
from edgetally.section.record import Property, Section, input_rounding

# for tests of reading and assembling, which have nothing to do with torsion
analyse_area = partial(edgetally.analyse, torsion=False)
# for tests that look at one result from many sides; an analysis is never changed
analyse_once = cache(edgetally.analyse)

Piece = tuple[float, float, float, float, float]


def curves_of(contours: Sequence[Sequence[Piece]]) -> list[Curve]:
    """Return the curves of contours given as (x1, y1, x2, y2, bulge)."""
    curves: list[Curve] = []
    for contour in contours:
        for x1, y1, x2, y2, bulge in contour:
            start, end = complex(x1, y1), complex(x2, y2)
            curves.append(Line(start, end) if bulge == 0 else Arc.from_bulge(start, end, bulge))
    return curves


def section_of(curves: Sequence[Curve], unit: str = "mm") -> Section:
    """Assemble curves to one section of all their regions."""
    regions = assemble(curves, unit=unit).regions
    return Section("1", regions, unit, input_rounding(regions))


def measure(
    contours: Sequence[Sequence[Piece]], unit: str = "mm", density: float | None = None
) -> Mapping[str, Property]:
    """Return the properties of the section that the contours bound."""
    return area_properties(section_of(curves_of(contours), unit), density=density).properties
