"""The whole chain as one function: read → assemble → integrate → derive. Command line, audit and API call it."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from pathlib import Path

from edgetally.composing import account_of, assemble_parts, compose, materials_of, read_parts
from edgetally.curves import Packed
from edgetally.doubts import hatch_findings, join_finding, size_finding, with_skips, with_sound
from edgetally.drawing.loading import load
from edgetally.drawing.reading import DrawingFile, Reading, by_hatches
from edgetally.errors import DrawingError, OutlineError, UsageError
from edgetally.findings import Finding
from edgetally.lettered.comparing import lettered_findings
from edgetally.measuring import measure
from edgetally.outline.apart import assemble_sound
from edgetally.outline.assembly import assemble
from edgetally.outline.choosing import EACH, TOGETHER, choose, numbers_of
from edgetally.outline.joining import DEFAULT_GAP_MM, WIDEST_GAP_MM, closes
from edgetally.results import Analysis, DrawingRecord, OptionsFile, Wanted
from edgetally.units import DENSITIES, MM_PER, length_factor, parse_length


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
    material: str | Sequence[str] = (),
    torsion: bool = True,
    neutral_axis: float | None = None,
    offset: str | None = None,
    name: str | None = None,
    options_file: OptionsFile | None = None,
    progress: Callable[[str], None] | None = None,
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
    material : `LAYER=E[,DENSITY]` for each part of a composite section, E in MPa or with its unit, as
        `STEEL=210GPa,7850`; the sections are then the parts alone, and torsion and shear are not solved.
    torsion : solve torsion and shear too; without it their keys are left out, and the rest takes milliseconds.
    neutral_axis : K of the bend allowances of a cold-formed strip, 0 to 0.5; that of DIN 6935 without it.
    offset : a distance with its unit by which every surface is moved, both ways: the band of each property.
    name : the name that the result gives for the file, where `path` is a copy of it.
    options_file : where some of these were taken from, for the record.
    progress : called with the name of each stage as it begins.

    Raises UsageError, DrawingError or OutlineError, each with the message that the command prints.
    """
    if not (math.isfinite(scale) and scale > 0):
        raise UsageError(f"the scale must be a positive number, not {scale:g}")
    if not 0.0 <= poisson <= 0.5:
        raise UsageError(f"Poisson's ratio must be from 0 to 0.5, not {poisson:g}")
    if neutral_axis is not None and not 0.0 <= neutral_axis <= 0.5:
        raise UsageError(f"the neutral axis K must be from 0 (inner face) to 0.5 (midline), not {neutral_axis:g}")
    for unit_name in (units, out_units):
        if unit_name is not None and unit_name not in MM_PER:
            raise UsageError(f"unit {unit_name!r} is not known: use one of {', '.join(MM_PER)}")
    gap, gap_unit = parse_length(join_gap)
    if gap * MM_PER[gap_unit] > WIDEST_GAP_MM * (1 + 1e-12):
        raise UsageError(
            f"a join gap of {join_gap} is more than {WIDEST_GAP_MM} mm: ends that far apart are not joined; close the "
            "outline in the drawing"
        )
    moving = parse_length(offset, signed=True) if offset is not None else None
    if moving is not None and moving[0] == 0.0:
        raise UsageError(f"an offset of {offset} moves nothing: give a length, as 0.2mm")
    kg_per_m3 = _density(density)
    materials = materials_of(material, _density, layer=layer, select=select, density=density)
    say = progress or (lambda stage: None)
    say("reading the drawing")
    loaded = load(path)
    drawing = DrawingFile(loaded)
    findings: list[Finding] = [*loaded.findings]
    if materials:
        materials, readings, hidden = read_parts(drawing, materials)
        reading = account_of(drawing, readings)
        findings += hidden
    else:
        layers = _layers(drawing, layer, gap, gap_unit, units, findings)
        reading = drawing.read(layers)
    findings += reading.findings
    unit, unit_source = _unit(drawing, units, reading, findings)
    if unit_source == "option" and options_file is not None and "units" in options_file.options:
        unit_source = "config"
    findings += drawing.dimension_findings(scale)
    drawn_gap = gap * length_factor(gap_unit, unit)
    say("assembling the outline")
    if materials:
        outline, chosen, hatched = assemble_parts(readings, drawn_gap, unit)
    else:
        try:
            some = select not in (None, TOGETHER)
            outline = (assemble_sound if some else assemble)(reading.curves, gap=drawn_gap, unit=unit)
        except OutlineError as error:
            raise with_skips(with_sound(error, reading, drawn_gap, unit, select), reading) from None
        hatched = hatch_findings(reading, outline, drawn_gap, unit)
        several = len(outline.regions) + len(outline.left_out) > 1 and select not in (EACH, TOGETHER)
        chosen = choose(outline.regions, select, unit, drawing.labels() if several else (), outline.left_out)
    numbers, _ = numbers_of(outline.regions, outline.left_out)
    findings += outline.findings
    findings += [join_finding(join, unit) for join in outline.joins]
    findings += hatched
    for number in outline.islands:
        x0, y0, _, _ = outline.regions[number].box
        text = f"part {numbers[number]} lies inside a void of another part"
        findings.append(Finding("island-in-void", "note", text, (x0, y0)))
    out_unit = out_units or unit
    wanted = Wanted(
        density=kg_per_m3,
        poisson=poisson if torsion else None,
        neutral_axis=neutral_axis,
        offset=None if moving is None else moving[0] * length_factor(moving[1], unit),
    )
    each_wanted = [Wanted(density=m.density, poisson=None) for m in materials] or [wanted] * len(chosen)
    sections = []
    for number, ((section_name, regions), own) in enumerate(zip(chosen, each_wanted, strict=True), start=1):
        say(f"measuring section {number} of {len(chosen)}")
        sections.append(measure(section_name, regions, unit, scale=scale, out_unit=out_unit, wanted=own))
    composite = None
    if materials:
        composite, said = compose(materials, sections, out_unit)
        findings.append(said)
    wholes = [composite.whole] if composite else [s.section for s in sections]
    findings += [f for f in (size_finding(whole, unit_source) for whole in wholes) if f is not None][:1]
    if not materials:
        findings += lettered_findings(drawing.lettering, outline, sections)
    file = name or drawing.name
    record = DrawingRecord(
        file,
        drawing.sha256,
        drawing.dxf_version,
        unit,
        unit_source,
        scale,
        drawn_gap,
        reading,
        options_file,
        drawing.dimensions,
    )
    return Analysis(record, outline, tuple(sections), tuple(findings), out_unit, kg_per_m3, poisson, composite)


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
