"""Several layers as one composite section: what is asked, each layer read and assembled by itself, all put together."""

from __future__ import annotations

import glob
from collections.abc import Callable, Sequence
from dataclasses import replace

from edgetally.doubts import hatch_findings, with_skips
from edgetally.drawing.reading import DrawingFile, Reading
from edgetally.errors import OutlineError, UsageError
from edgetally.findings import Finding
from edgetally.outline.assembly import assemble
from edgetally.outline.overlaps import refuse_overlaps
from edgetally.outline.records import Outline, Region
from edgetally.results import SectionResult
from edgetally.section.composite import CompositeResult, Material, composite_result
from edgetally.units import parse_modulus


def materials_of(
    texts: str | Sequence[str],
    density_of: Callable[[str], float | None],
    *,
    layer: object,
    select: str | None,
    density: object,
) -> tuple[Material, ...]:
    """Read what `--material` was given, `LAYER=E[,DENSITY]`.

    Raises UsageError for what is not understood, a layer named twice, and for options that say something else.
    """
    if not texts:
        return ()
    texts = [texts] if isinstance(texts, str) else texts
    if layer:
        raise UsageError("--layer and --material contradict each other: --material names the layers itself")
    if select not in (None, "together"):
        option = "--each" if select == "each" else "--pick"
        raise UsageError(f"{option} and --material contradict each other: all parts are one composite section")
    if density is not None:
        raise UsageError("--density and --material contradict each other: give each material its own, LAYER=E,DENSITY")
    materials: list[Material] = []
    for text in texts:
        name, sign, rest = text.partition("=")
        modulus, comma, own = rest.partition(",")
        if not (name.strip() and sign and modulus.strip()) or (comma and not own.strip()):
            raise UsageError(
                f"material {text!r} is not understood: write LAYER=E or LAYER=E,DENSITY, as STEEL=210GPa,7850"
            )
        if any(name.strip().casefold() == m.layer.casefold() for m in materials):
            raise UsageError(f"layer {name.strip()} is given a material twice: give it one")
        try:
            found = Material(name.strip(), parse_modulus(modulus), density_of(own) if comma else None)
        except UsageError as error:
            raise UsageError(f"material {text!r}: {error}") from None
        materials.append(found)
    return tuple(materials)


def read_parts(
    drawing: DrawingFile, materials: Sequence[Material]
) -> tuple[tuple[Material, ...], list[Reading], list[Finding]]:
    """Read the layer of each material by itself; return the materials with the layers as the drawing spells them.

    Raises DrawingError for a layer that is missing, hidden or empty.
    """
    spelled: list[Material] = []
    findings: list[Finding] = []
    for material in materials:
        (layer,), hidden = drawing.named_layers([glob.escape(material.layer)])
        spelled.append(replace(material, layer=layer))
        findings += hidden
    return tuple(spelled), [drawing.read([material.layer]) for material in spelled], findings


def account_of(drawing: DrawingFile, readings: Sequence[Reading]) -> Reading:
    """Return the readings of several layers as one account."""
    whole = drawing.read([layer for reading in readings for layer in reading.layers])
    kinds: dict[str, tuple[int, int]] = {}
    for reading in readings:
        for kind, (read, used) in reading.kinds.items():
            before = kinds.get(kind, (0, 0))
            kinds[kind] = (before[0] + read, before[1] + used)
    return Reading(
        whole.layers,
        tuple(curve for reading in readings for curve in reading.curves),
        tuple(skip for reading in readings for skip in reading.skips),
        sum(reading.read for reading in readings),
        sum(reading.used for reading in readings),
        dict(sorted(kinds.items())),
        whole.elsewhere,
        tuple(hatch for reading in readings for hatch in reading.hatches),
        any(reading.from_hatches for reading in readings),
        tuple(finding for reading in readings for finding in reading.findings),
    )


def assemble_parts(
    readings: Sequence[Reading], gap: float, unit: str
) -> tuple[Outline, list[tuple[str, tuple[Region, ...]]], list[Finding]]:
    """Assemble each layer's outline by itself; return all as one, the regions of each layer, and findings on hatches.

    `gap` in `unit`, the drawing's. Raises OutlineError, with the layer, for a layer without an outline that can be
    trusted, and where parts lie over each other.
    """
    outlines: list[Outline] = []
    findings: list[Finding] = []
    for reading in readings:
        try:
            outline = assemble(reading.curves, gap=gap, unit=unit)
        except OutlineError as error:
            refusal = with_skips(error, reading)
            raise OutlineError(f"layer {', '.join(reading.layers)}: {refusal}", refusal.findings) from None
        outlines.append(outline)
        findings += hatch_findings(reading, outline, gap, unit)
    parts = [(reading.layers[0], outline.regions) for reading, outline in zip(readings, outlines, strict=True)]
    refuse_overlaps(parts)
    islands: list[int] = []
    first = 0
    for outline in outlines:
        islands += [first + number for number in outline.islands]
        first += len(outline.regions)
    together = Outline(
        tuple(region for outline in outlines for region in outline.regions),
        tuple(join for outline in outlines for join in outline.joins),
        tuple(islands),
        tuple(finding for outline in outlines for finding in outline.findings),
    )
    return together, parts, findings


def compose(
    materials: Sequence[Material], sections: Sequence[SectionResult], out_unit: str
) -> tuple[CompositeResult, Finding]:
    """Return the composite of parts that were measured one by one, and what has to be said of it."""
    parts = [(material, section.section) for material, section in zip(materials, sections, strict=True)]
    text = "torsion and shear of a composite section are not given, nor those of its parts alone"
    return composite_result(parts, out_unit), Finding("torsion-unsolved", "note", text)
