"""What an analysis gives: the drawing and how it was read, its sections with their properties, and findings."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from math import degrees
from typing import Any

from edgetally.drawing.dimensions import DimensionRow
from edgetally.drawing.reading import Reading
from edgetally.findings import Finding, Severity, worst
from edgetally.outline.records import Outline, Region
from edgetally.section.accuracy import WARPING_SCALE
from edgetally.section.area import AreaResult
from edgetally.section.composite import CompositeResult
from edgetally.section.connected import ConnectedResult
from edgetally.section.developed import Developed
from edgetally.section.offsets import OffsetBand
from edgetally.section.record import Property, Section
from edgetally.units import length_factor


@dataclass(frozen=True, slots=True)
class Wanted:
    """What is asked of a section beyond its outline.

    `density` [kg/m³] adds the mass per length; `poisson` is for the shear areas, None for no torsion and shear at all;
    `neutral_axis` is K of the bend allowances, None for that of DIN 6935; `offset` the distance [real length in the
    drawing's unit] by which every surface moves.
    """

    density: float | None = None
    poisson: float | None = 0.3
    neutral_axis: float | None = None
    offset: float | None = None


@dataclass(frozen=True, slots=True)
class OptionsFile:
    """The file that options were taken from, as seen from the drawing's folder, and the options that it set."""

    file: str
    options: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class DrawingRecord:
    """The drawing a result came from and how it was read."""

    file: str
    sha256: str
    dxf_version: str
    unit: str
    unit_source: str
    scale: float
    join_gap: float
    reading: Reading
    options_file: OptionsFile | None = None
    dimensions: tuple[DimensionRow, ...] = ()


@dataclass(frozen=True, eq=False)
class SectionResult:
    """One section: its geometry in real lengths and as drawn, its properties by key in the unit of the results."""

    section: Section
    drawn: tuple[Region, ...]
    result: AreaResult
    connected: ConnectedResult
    properties: dict[str, Property]
    findings: tuple[Finding, ...]
    out_unit: str
    developed: Developed | None = None
    """The strip or tube that the section is, unrolled; None for any other."""
    offset: OffsetBand | None = None
    """What moving every surface does, where that was asked for."""

    @property
    def name(self) -> str:
        return self.section.name

    def natural_scale(self, key: str) -> float:
        """Return what an error is relative to where a value may vanish: the size for coordinates, (I_x + I_y)/2 for
        products of inertia, 1e-5·I_p²/A for the warping constant, a radian for the angle, 0 for all others."""
        if key == "principal_angle":
            return degrees(1.0)
        length = length_factor(self.section.unit, self.out_unit)
        if key in ("centroid_x", "centroid_y", "shear_centre_x", "shear_centre_y"):
            return self.section.size * length
        if key == "warping_constant":
            polar, area = self.properties["polar_moment"].value or 0.0, self.properties["area"].value or 1.0
            return WARPING_SCALE * polar**2 / area
        if key.startswith("product_of_inertia"):
            ending = key.removeprefix("product_of_inertia")
            x, y = (self.properties[f"second_moment_{axis}{ending}"].value or 0.0 for axis in "xy")
            return 0.5 * (x + y)
        return 0.0

    @property
    def region_areas(self) -> list[tuple[float, int]]:
        """The area, in the unit of the results, and the number of voids of every region."""
        square = length_factor(self.section.unit, self.out_unit) ** 2
        return [(region.area * square, len(region.voids)) for region in self.section.regions]


@dataclass(frozen=True, slots=True)
class JoinEffect:
    """The joins of a drawing together: number, widest gap and place [drawing's unit], and the largest possible effect
    on area and second moments, in the unit of the results. The effect on I holds for any axis through the centroid.
    """

    count: int
    widest: float
    at: complex
    area: float
    second_moment: float


@dataclass(frozen=True, eq=False)
class Analysis:
    """What `analyse` found: the drawing, its sections, and the findings on the drawing as a whole."""

    drawing: DrawingRecord
    outline: Outline
    sections: tuple[SectionResult, ...]
    findings: tuple[Finding, ...]
    out_unit: str
    density: float | None
    poisson: float
    composite: CompositeResult | None = None
    """Of parts of several materials, which `sections` then hold one by one; None without materials."""

    @property
    def all_findings(self) -> tuple[Finding, ...]:
        return self.findings + tuple(f for section in self.sections for f in section.findings)

    @property
    def severity(self) -> Severity | None:
        return worst(self.all_findings)

    @cached_property
    def join_effect(self) -> JoinEffect | None:
        """The joins' largest possible effect, bounded for the section nearest to each. None without joins."""
        joins = self.outline.joins
        if not joins:
            return None
        widest = max(joins, key=lambda join: join.gap)
        real = self.drawing.scale * length_factor(self.drawing.unit, self.out_unit)
        area = moment = 0.0
        for join in joins:
            area += join.swept * real**2
            reach = min(_reach(s, join.at * self.drawing.scale) for s in self.sections)
            moment += join.swept * real**2 * (reach * length_factor(self.drawing.unit, self.out_unit)) ** 2
        return JoinEffect(len(joins), widest.gap, widest.at, area, moment)

    def to_dict(self) -> dict[str, Any]:
        """Return the document that `tally --json` prints."""
        from edgetally.output.document import document

        return document(self)

    def _repr_svg_(self) -> str:
        from edgetally.output.svg import figure_svg

        return figure_svg(self.sections[0])


def _reach(section: SectionResult, join: complex) -> float:
    """Bound the distance from the centroid to what a join can have moved: the join, and the size of the section."""
    return abs(join - section.result.centroid) + section.section.size
