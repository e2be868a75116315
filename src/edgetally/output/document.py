"""The JSON document of an analysis. Its keys are fixed: scripts rely on them, and it only ever gains keys."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from edgetally import __version__
from edgetally.output.composite_words import composite_document
from edgetally.output.dimension_table import dimension_rows
from edgetally.output.section_blocks import section_document

if TYPE_CHECKING:
    from edgetally.results import Analysis, SectionResult

FORMAT = "edgetally.tally/1"


def document(analysis: Analysis) -> dict[str, Any]:
    """Return the analysis as plain dicts, lists, strings and numbers."""
    drawing, reading = analysis.drawing, analysis.drawing.reading
    return {
        "format": FORMAT,
        "program": {"name": "edgetally", "version": __version__},
        "drawing": {
            "file": drawing.file,
            "sha256": drawing.sha256,
            "dxf_version": drawing.dxf_version,
            "unit": drawing.unit,
            "unit_source": drawing.unit_source,
            "scale": drawing.scale,
            "layers": list(reading.layers),
            "join_gap": drawing.join_gap,
            **(
                {"options_from": {"file": drawing.options_file.file, "options": list(drawing.options_file.options)}}
                if drawing.options_file
                else {}
            ),
            "entities": {
                "read": reading.read,
                "used": reading.used,
                "skipped": [
                    {"handle": s.source.handle, "type": s.source.entity, "layer": s.source.layer, "reason": s.reason}
                    for s in reading.skips
                ],
                "on_other_layers": reading.elsewhere,
            },
            "dimensions": dimension_rows(analysis),
        },
        "sections": [_section(section) for section in analysis.sections],
        "findings": [finding.to_dict() for finding in analysis.findings],
        **({"composite": composite_document(analysis.composite)} if analysis.composite else {}),
    }


def _section(section: SectionResult) -> dict[str, Any]:
    return {
        "name": section.name,
        "regions": [{"area": area, "voids": voids} for area, voids in section.region_areas],
        "properties": {
            key: {"value": p.value, "unit": str(p.unit), "error": p.error} for key, p in section.properties.items()
        },
        **section_document(section),
        "findings": [finding.to_dict() for finding in section.findings],
    }
