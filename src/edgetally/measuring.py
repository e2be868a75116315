"""From the regions of one section to all that is asked of it."""

from __future__ import annotations

from edgetally.outline.chords import chord_findings
from edgetally.outline.records import Region
from edgetally.results import SectionResult, Wanted
from edgetally.section.area import area_properties
from edgetally.section.connected import NOT_ASKED, connected_properties
from edgetally.section.developed import developed, strip_properties
from edgetally.section.midline import strip_of
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
    findings = (*result.findings, *connected.findings, *chord_findings(drawn, unit))
    return SectionResult(section, drawn, result, connected, properties, findings, out_unit, unrolled)
