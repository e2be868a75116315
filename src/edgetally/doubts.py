"""What a reader of the result has to doubt: joins, hatches that differ, an unusual size, what was left out."""

from __future__ import annotations

from edgetally.curves import Packed
from edgetally.drawing.reading import Reading
from edgetally.errors import OutlineError
from edgetally.findings import Finding, Severity
from edgetally.outline.apart import assemble_sound
from edgetally.outline.assembly import assemble
from edgetally.outline.joining import DEFAULT_GAP_MM
from edgetally.outline.records import Join, Outline, Region
from edgetally.outline.words import at, handles, length_text, place
from edgetally.section.record import Section
from edgetally.units import MM_PER

SMALLEST_MM, LARGEST_MM = 6.0, 5000.0
"""The larger side of nearly every section lies between these (common practice, no source)."""
FEW = 40
"""So many attempts are made to find what else is sound, where nobody asked for it."""
SAME_AREA = 1e-3
"""A hatch fills what the outline encloses to this share: CAD programs store its arcs with fewer digits."""


def size_finding(section: Section, unit_source: str) -> Finding | None:
    """Doubt a unit that only the header names where the section would be of a size that few sections have."""
    size = section.size
    mm = size * MM_PER[section.unit]
    if unit_source != "header" or SMALLEST_MM <= mm <= LARGEST_MM:
        return None
    others = ", ".join(f"{size * MM_PER[u]:.4g} mm if it is {u}" for u in MM_PER if u != section.unit)
    text = (
        f"by the header's unit, {section.unit}, the section would measure {mm:.4g} mm, which few sections do; "
        f"it would measure {others}: pass the right one with --units"
    )
    return Finding("units-suspect", "warning", text)


def join_finding(join: Join, unit: str) -> Finding:
    a, b = join.between
    message = f"gap of {length_text(join.gap, unit)} joined at {place(join.at)} between {a} and {b}"
    severity: Severity = "note" if join.gap * MM_PER[unit] <= DEFAULT_GAP_MM * (1 + 1e-9) else "warning"
    return Finding("gap-joined", severity, message, at(join.at), handles((a, b)))


def hatch_findings(reading: Reading, outline: Outline, gap: float, unit: str) -> list[Finding]:
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


def with_sound(error: OutlineError, reading: Reading, gap: float, unit: str, select: str | None) -> OutlineError:
    """Add, where no choice was made, that other outlines on the layer are sound and could be chosen."""
    if select is not None:
        return error
    try:
        count = len(assemble_sound(reading.curves, gap=gap, unit=unit, attempts=FEW).regions)
    except OutlineError:
        return error
    other = "1 other outline on the layer is" if count == 1 else f"{count} other outlines on the layer are"
    message = f"{error}\n{other} sound: --each measures what is sound, --pick one of them"
    return OutlineError(message, error.findings)


def with_skips(error: OutlineError, reading: Reading) -> OutlineError:
    """Add what was left out of the layer: the usual reason why an outline does not close."""
    left = [f for f in reading.findings if f.severity == "warning"]
    if not left:
        return error
    message = "\n".join([str(error), "left out of the layer:", *(f"  {f.message}" for f in left)])
    return OutlineError(message, (*error.findings, *left))
