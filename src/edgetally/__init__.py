"""edgetally: section properties of a cross-section drawn in DXF, with the evidence of how it was read.

    import edgetally
    analysis = edgetally.analyse("bracket.dxf", layer="OUTLINE")
    analysis.sections[0].properties["area"].value

The names below are loaded when they are first used, so that `import edgetally` costs nothing.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from edgetally.analysis import analyse
    from edgetally.errors import DrawingError, EdgetallyError, OutlineError, OutputError, UsageError
    from edgetally.findings import Finding
    from edgetally.results import Analysis, SectionResult
    from edgetally.section.record import Property

__version__ = "0.1.0"

__all__ = [
    "Analysis",
    "DrawingError",
    "EdgetallyError",
    "Finding",
    "OutlineError",
    "OutputError",
    "Property",
    "SectionResult",
    "UsageError",
    "__version__",
    "analyse",
]

_HOMES = {
    "analysis": ("analyse",),
    "errors": ("DrawingError", "EdgetallyError", "OutlineError", "OutputError", "UsageError"),
    "findings": ("Finding",),
    "results": ("Analysis", "SectionResult"),
    "section.record": ("Property",),
}


def __getattr__(name: str) -> Any:
    from importlib import import_module

    for module, names in _HOMES.items():
        if name in names:
            return getattr(import_module(f"edgetally.{module}"), name)
    raise AttributeError(f"module 'edgetally' has no attribute {name!r}")
