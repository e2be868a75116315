"""The whole chain as one function: read → assemble → integrate → derive. Command line, audit and API call it."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from pathlib import Path
from typing import Any

from edgetally.curves import Packed
from edgetally.drawing.loading import load
from edgetally.drawing.reading import DrawingFile, Reading, by_hatches
from edgetally.errors import DrawingError, OutlineError, UsageError
from edgetally.findings import Finding, Severity, worst
from edgetally.outline.assembly import assemble
from edgetally.outline.choosing import choose
from edgetally.outline.chords import chord_findings
from edgetally.outline.joining import DEFAULT_GAP_MM, WIDEST_GAP_MM, closes
from edgetally.outline.records import Join, Outline, Region
from edgetally.outline.words import at, handles, length_text, place
from edgetally.section.accuracy import WARPING_SCALE
from edgetally.section.area import AreaResult, area_properties
from edgetally.section.connected import NOT_ASKED, ConnectedResult, connected_properties
from edgetally.section.record import Property, Section, input_rounding
from edgetally.units import DENSITIES, MM_PER, length_factor, parse_length

SMALLEST_MM, LARGEST_MM = 6.0, 5000.0
"""The larger side of nearly every section lies between these (common practice, no source)."""
SAME_AREA = 1e-3
"""A hatch fills what the outline encloses to this share: CAD programs store its arcs with fewer digits."""


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

    @property
    def name(self) -> str:
        return self.section.name

    def natural_scale(self, key: str) -> float:
        """Return what an error is relative to where a value may vanish: the size for coordinates, (I_x + I_y)/2 for
        products of inertia, 1e-5·I_p²/A for the warping constant, 0 for all others."""
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

    @property
    def all_findings(self) -> tuple[Finding, ...]:
        return self.findings + tuple(f for section in self.sections for f in section.findings)

    @property
    def severity(self) -> Severity | None:
        return worst(self.all_findings)

    @cached_property
    def join_effect(self) -> JoinEffect | None:
        """The joins' largest possible effect, bounded for the largest section. None without joins."""
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


def analyse(
    path: str | Path,
    *,
    layer: str | Sequence[str] | None = None,
    units: str | None = None,
    scale: float = 1.0,
    join_gap: str = f"{DEFAULT_GAP_MM}mm",
    select: str | None = None,
    out_units: str | None = None,
    density: float | str | None = None,
    poisson: float = 0.3,
    torsion: bool = True,
    name: str | None = None,
) -> Analysis:
    """Read a drawing and measure the section, or sections, on a layer of it.

    Parameters
    ----------
    path : the DXF file.
    layer : name or shell-style pattern, or several; without it the only visible layer that carries a closed outline.
    units : `mm`, `cm`, `m`, `in` or `ft`, the drawing's length unit; overrides the header.
    scale : drawn length × scale = real length.
    join_gap : the largest gap between ends that is joined, with its unit, in drawn lengths; at most 0.15 mm.
    select : `each`, `together`, or which one (a number, a text inside it, a point `X,Y`) of several outer boundaries.
    out_units : `mm`, `cm`, `m` or `in`, the unit of the results; the drawing's own without it.
    density : kg/m³, or `steel`, `aluminium`, `stainless`; adds the mass per length.
    poisson : Poisson's ratio for the shear areas, from 0 to 0.5.
    torsion : solve torsion and shear too; without it their keys are left out, and the rest takes milliseconds.
    name : the name that the result gives for the file, where `path` is a copy of it.

    Raises UsageError, DrawingError or OutlineError, each with the message that the command prints.
    """
    if not (math.isfinite(scale) and scale > 0):
        raise UsageError(f"the scale must be a positive number, not {scale:g}")
    if not 0.0 <= poisson <= 0.5:
        raise UsageError(f"Poisson's ratio must be from 0 to 0.5, not {poisson:g}")
    for unit_name in (units, out_units):
        if unit_name is not None and unit_name not in MM_PER:
            raise UsageError(f"unit {unit_name!r} is not known: use one of {', '.join(MM_PER)}")
    gap, gap_unit = parse_length(join_gap)
    if gap * MM_PER[gap_unit] > WIDEST_GAP_MM * (1 + 1e-12):
        raise UsageError(
            f"a join gap of {join_gap} is more than {WIDEST_GAP_MM} mm: ends that far apart are not joined; close the "
            "outline in the drawing"
        )
    kg_per_m3 = _density(density)
    loaded = load(path)
    drawing = DrawingFile(loaded)
    findings: list[Finding] = [*loaded.findings]
    layers = _layers(drawing, layer, gap, gap_unit, units, findings)
    reading = drawing.read(layers)
    findings += reading.findings
    unit, unit_source = _unit(drawing, units, reading, findings)
    findings += drawing.dimension_findings(scale)
    drawn_gap = gap * length_factor(gap_unit, unit)
    try:
        outline = assemble(reading.curves, gap=drawn_gap, unit=unit)
    except OutlineError as error:
        raise _with_skips(error, reading) from None
    findings += outline.findings
    findings += [_join_finding(join, unit) for join in outline.joins]
    findings += _hatch_findings(reading, outline, drawn_gap, unit)
    several = len(outline.regions) > 1 and select not in ("each", "together")
    chosen = choose(outline.regions, select, unit, drawing.labels() if several else ())
    for number in outline.islands:
        x0, y0, _, _ = outline.regions[number].box
        text = f"part {number + 1} lies inside a void of another part"
        findings.append(Finding("island-in-void", "note", text, (x0, y0)))
    out_unit = out_units or unit
    sections = tuple(
        _measure(
            Section(section_name, regions, unit, input_rounding(regions) * scale),
            scale,
            out_unit,
            kg_per_m3,
            poisson if torsion else None,
        )
        for section_name, regions in chosen
    )
    findings += [f for f in (_size_finding(s, unit_source) for s in sections) if f is not None][:1]
    record = DrawingRecord(
        name or drawing.name, drawing.sha256, drawing.dxf_version, unit, unit_source, scale, drawn_gap, reading
    )
    return Analysis(record, outline, sections, tuple(findings), out_unit, kg_per_m3, poisson)


def _measure(
    drawn: Section, scale: float, out_unit: str, density: float | None, poisson: float | None
) -> SectionResult:
    """Measure a section as drawn; torsion and shear only where Poisson's ratio is given."""
    section = Section(drawn.name, tuple(r.scaled(scale) for r in drawn.regions), drawn.unit, drawn.input_rounding)
    result = area_properties(section, density=density)
    connected = NOT_ASKED if poisson is None else connected_properties(section, poisson=poisson)
    both = result.properties | connected.properties
    properties = {key: p.converted(section.unit, out_unit) for key, p in both.items()}
    findings = (*result.findings, *connected.findings, *chord_findings(drawn.regions, drawn.unit))
    return SectionResult(section, drawn.regions, result, connected, properties, findings, out_unit)


def _density(density: float | str | None) -> float | None:
    if density is None:
        return None
    if isinstance(density, str) and density.strip().lower() in DENSITIES:
        return DENSITIES[density.strip().lower()]
    try:
        value = float(density)
    except ValueError:
        value = math.nan
    if not (math.isfinite(value) and value > 0):
        names = ", ".join(f"{key} ({kg:g})" for key, kg in DENSITIES.items())
        raise UsageError(f"density {density!r} is not understood: give kg/m³, or one of {names}")
    return value


def _layers(
    drawing: DrawingFile,
    layer: str | Sequence[str] | None,
    gap: float,
    gap_unit: str,
    units: str | None,
    findings: list[Finding],
) -> list[str]:
    """Return the layers to read: those named, else the only visible one that carries a closed outline."""
    if layer is not None:
        patterns = [layer] if isinstance(layer, str) else list(layer)
        chosen, hidden = drawing.named_layers(patterns)
        findings += hidden
        return chosen
    each = drawing.read_each()
    if not each:
        drawing.read([])  # says what there is instead
    if len(each) == 1:
        return list(each)
    unit = units or drawing.header_unit()[0] or "mm"  # only the join gap depends on it here
    drawn_gap = gap * length_factor(gap_unit, unit)
    closed = [name for name, found in each.items() if isinstance(found, Reading) and closes(found.curves, drawn_gap)]
    # a hatch is the outline only where no layer has one of curves
    closed = [name for name in closed if not by_hatches(each[name])] or closed
    if len(closed) == 1:
        text = f"layer {closed[0]} was taken: it is the only visible layer that carries a closed outline"
        findings.append(Finding("layer-chosen", "note", text))
        return closed
    if closed:
        message = f"closed outlines are on {len(closed)} layers: {', '.join(closed)}; say which with --layer"
    else:
        message = f"no visible layer carries a closed outline; say with --layer which to read: {', '.join(each)}"
    raise DrawingError(message, [Finding("layer-missing", "error", message)])


def _unit(drawing: DrawingFile, option: str | None, reading: Reading, findings: list[Finding]) -> tuple[str, str]:
    header, words = drawing.header_unit()
    if option is not None:
        if header is not None and header != option:
            text = f"the unit {option} was given, but the drawing's header says {header}; {option} was used"
            findings.append(Finding("units-suspect", "note", text))
        return option, "option"
    if header is not None:
        return header, "header"
    width = height = 0.0
    if reading.curves:
        x0, y0, x1, y1 = Packed.of(reading.curves).box
        width, height = x1 - x0, y1 - y0
    sizes = "; ".join(f"{width:.6g} x {height:.6g} {unit}" for unit in MM_PER)
    message = (
        f"the drawing does not say its unit ({words}). What is drawn would measure {sizes}: pass the right one with "
        "--units"
    )
    raise DrawingError(message, [Finding("units-missing", "error", message)])


def _size_finding(section: SectionResult, unit_source: str) -> Finding | None:
    """Doubt a unit that only the header names where the section would be of a size that few sections have."""
    size = section.section.size
    mm = size * MM_PER[section.section.unit]
    if unit_source != "header" or SMALLEST_MM <= mm <= LARGEST_MM:
        return None
    others = ", ".join(f"{size * MM_PER[u]:.4g} mm if it is {u}" for u in MM_PER if u != section.section.unit)
    text = (
        f"by the header's unit, {section.section.unit}, the section would measure {mm:.4g} mm, which few sections do; "
        f"it would measure {others}: pass the right one with --units"
    )
    return Finding("units-suspect", "warning", text)


def _join_finding(join: Join, unit: str) -> Finding:
    a, b = join.between
    message = f"gap of {length_text(join.gap, unit)} joined at {place(join.at)} between {a} and {b}"
    severity: Severity = "note" if join.gap * MM_PER[unit] <= DEFAULT_GAP_MM * (1 + 1e-9) else "warning"
    return Finding("gap-joined", severity, message, at(join.at), handles((a, b)))


def _hatch_findings(reading: Reading, outline: Outline, gap: float, unit: str) -> list[Finding]:
    """Compare the area inside each hatch with that of the regions it lies over."""
    findings = []
    for source, curves in reading.hatches:
        try:
            hatched = assemble(curves, gap=gap, unit=unit)
        except OutlineError as error:
            text = f"{source} was not compared with the outline: {str(error).splitlines()[0]}"
            findings.append(Finding("hatch-differs", "note", text, handles=(source.handle,)))
            continue
        x0, y0, x1, y1 = Packed.of(curves).box
        over = [r for r in outline.regions if x0 <= _middle(r).real <= x1 and y0 <= _middle(r).imag <= y1]
        inside, drawn = sum(r.area for r in hatched.regions), sum(r.area for r in over)
        if over and abs(inside - drawn) > SAME_AREA * drawn:
            text = (
                f"{source} fills {inside:.6g} {unit}^2, the outline there encloses {drawn:.6g} {unit}^2: "
                f"{100 * (inside / drawn - 1):+.2g} %; check which of them is meant"
            )
            findings.append(Finding("hatch-differs", "warning", text, (x0, y0), (source.handle,)))
    return findings


def _middle(region: Region) -> complex:
    x0, y0, x1, y1 = region.box
    return complex(0.5 * (x0 + x1), 0.5 * (y0 + y1))


def _with_skips(error: OutlineError, reading: Reading) -> OutlineError:
    """Add what was left out of the layer: the usual reason why an outline does not close."""
    left = [f for f in reading.findings if f.severity == "warning"]
    if not left:
        return error
    message = "\n".join([str(error), "left out of the layer:", *(f"  {f.message}" for f in left)])
    return OutlineError(message, (*error.findings, *left))
