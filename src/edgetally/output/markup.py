"""What `markup` draws: the outline as understood, its axes, its joins, and a mark with a text at every finding."""

from __future__ import annotations

from cmath import rect
from math import pi
from typing import TYPE_CHECKING

from edgetally.curves import Arc, Curve, Line
from edgetally.drawing.markup import Mark, markup_dxf
from edgetally.outline.words import length_text

if TYPE_CHECKING:
    from edgetally.results import Analysis, SectionResult

OVERHANG = 0.62
"""An axis is drawn from the centroid to this share of the section's size on both sides."""
SIGN = 0.02
"""Half the size of a mark, as a share of the section's size."""


def markup_bytes(analysis: Analysis) -> bytes:
    """Return the DXF file, in the drawing's own coordinates and unit: read again, it gives the same numbers."""
    scale = analysis.drawing.scale
    sections = analysis.sections
    size = max(section.section.size for section in sections) / scale
    regions = [region for section in sections for region in section.drawn]
    marks = [
        Mark("OUTLINE", 7, runs=tuple(region.outer.curves for region in regions)),
        Mark("VOIDS", 4, runs=tuple(void.curves for region in regions for void in region.voids)),
    ]
    for section in sections:
        marks += _axes(section, scale)
    joins = analysis.outline.joins
    marks.append(
        Mark(
            "JOINS",
            3,
            runs=tuple((Arc.from_centre(join.at, 0.3 * SIGN * size, 0.0, 2 * pi),) for join in joins),
            texts=tuple(
                (join.at, f"joined {length_text(join.gap, analysis.drawing.unit)}", 0.3 * SIGN * size) for join in joins
            ),
        )
    )
    placed = [f for f in analysis.all_findings if f.at is not None and f.code != "gap-joined"]
    points = [complex(*f.at) for f in placed if f.at is not None]
    marks.append(
        Mark(
            "FINDINGS",
            1,
            runs=tuple(run for z in points for run in _cross(z, SIGN * size)),
            texts=tuple(
                (z + complex(1.2, 0.4) * SIGN * size, f"{f.severity} {f.code}: {f.message}"[:250], 0.7 * SIGN * size)
                for z, f in zip(points, placed, strict=True)
            ),
        )
    )
    return markup_dxf(marks, analysis.drawing.unit)


def _axes(section: SectionResult, scale: float) -> list[Mark]:
    size = section.section.size / scale
    centre = section.result.centroid / scale
    theta = section.result.axes.angle.value
    reach, letter = OVERHANG * size, 1.5 * SIGN * size
    runs: list[tuple[Curve, ...]] = []
    texts = []
    for k, name in enumerate(("1", "2")):
        direction = rect(1.0, theta + k * pi / 2)
        runs.append((Line(centre - reach * direction, centre + reach * direction),))
        texts.append((centre + (reach + 0.3 * letter) * direction, name, letter))
    cross = _cross(centre, SIGN * size)
    circle: tuple[Curve, ...] = (Arc.from_centre(centre, 0.7 * SIGN * size, 0.0, 2 * pi),)
    solution = section.connected.solution
    shear = _cross(solution.shear_centre / scale, SIGN * size) if solution is not None else ()
    return [
        Mark("CENTROID", 5, runs=(*cross, circle)),
        Mark("SHEAR CENTRE", 2, runs=shear),
        Mark("PRINCIPAL AXES", 6, runs=tuple(runs), texts=tuple(texts)),
    ]


def _cross(z: complex, half: float) -> tuple[tuple[Curve, ...], ...]:
    return ((Line(z - half, z + half),), (Line(z - 1j * half, z + 1j * half),))
