"""From the regions of one section to all that is asked of it."""

from __future__ import annotations

from edgetally.errors import OutlineError
from edgetally.findings import Finding
from edgetally.outline.chords import chord_findings
from edgetally.outline.offset import moved_outward
from edgetally.outline.records import Region
from edgetally.results import SectionResult, Wanted
from edgetally.section.area import AreaResult, area_properties
from edgetally.section.connected import NOT_ASKED, connected_properties
from edgetally.section.developed import developed, strip_properties
from edgetally.section.midline import strip_of
from edgetally.section.offsets import OffsetBand, offset_rates
from edgetally.section.record import Section, input_rounding


def measure(
    name: str, drawn: tuple[Region, ...], unit: str, *, scale: float, out_unit: str, wanted: Wanted
) -> SectionResult:
    """Measure the section that the regions `drawn` bound; drawn length × `scale` = real length in `unit`."""
    regions = tuple(region.scaled(scale) for region in drawn)
    section = Section(name, regions, unit, input_rounding(drawn) * scale)
    result = area_properties(section, density=wanted.density)
    strip = strip_of([loop.curves for loop in regions[0].loops]) if len(regions) == 1 else None
    connected = NOT_ASKED
    if wanted.poisson is not None:
        connected = connected_properties(section, poisson=wanted.poisson, strip=strip)
    unrolled = developed(strip, neutral_axis=wanted.neutral_axis) if strip is not None else None
    both = result.properties | connected.properties | strip_properties(unrolled, unit)
    properties = {key: p.converted(unit, out_unit) for key, p in both.items()}
    band = None if wanted.offset is None else offset_band(section, result, wanted.offset, wanted.density)
    findings = (*result.findings, *connected.findings, *chord_findings(drawn, unit), *(band.refused if band else ()))
    return SectionResult(section, drawn, result, connected, properties, findings, out_unit, unrolled, band)


def offset_band(section: Section, result: AreaResult, distance: float, density: float | None) -> OffsetBand:
    """Find the rates of the properties, and the properties of the outline with its surfaces moved, in and out."""
    rates = offset_rates(section, result, density=density)
    sides: list[dict[str, float] | None] = []
    refused: list[Finding] = []
    by_chords = False
    for signed in (-abs(distance), abs(distance)):
        try:
            moved = moved_outward(section.regions, signed)
        except OutlineError as refusal:
            refused += refusal.findings
            sides.append(None)
            continue
        by_chords = not moved.exact
        found = area_properties(Section(section.name, moved.regions, section.unit), density=density).properties
        values = {key: p.value or 0.0 for key, p in found.items()}
        if by_chords:  # what the chords change by, added to the exact value
            plain = area_properties(Section(section.name, moved.chords, section.unit), density=density).properties
            values = {k: (result.properties[k].value or 0.0) + v - (plain[k].value or 0.0) for k, v in values.items()}
        sides.append(values)
    return OffsetBand(abs(distance), rates, sides[0], sides[1], by_chords, tuple(refused))
