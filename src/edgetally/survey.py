"""What a drawing holds: its unit, its layers, which of them carry an outline, and what the others lack."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from edgetally import __version__
from edgetally.curves import Curve, Packed
from edgetally.drawing.loading import load
from edgetally.drawing.reading import DrawingFile, Reading, by_hatches
from edgetally.errors import DrawingError, OutlineError
from edgetally.findings import Finding
from edgetally.outline.assembly import assemble
from edgetally.outline.joining import DEFAULT_GAP_MM, WIDEST_GAP_MM, open_ends
from edgetally.outline.records import Region
from edgetally.outline.words import enough_mm, length_text
from edgetally.units import MM_PER

FORMAT = "edgetally.survey/1"
USABLE, NEEDS_JOINING, NO_OUTLINE = "usable", "needs joining", "no outline"


@dataclass(frozen=True, eq=False)
class LayerSurvey:
    """One visible layer: how many entities of each kind, its verdict, why, and the outer boundaries found on it."""

    name: str
    kinds: dict[str, int]
    verdict: str
    reason: str
    open_ends: int
    regions: tuple[Region, ...] = ()


@dataclass(frozen=True, eq=False)
class Survey:
    """A drawing at a glance. `unit` is None where neither header nor option says it; lengths are then without unit.

    `taken` is the layer that `sheet` would take without being told, None where it would ask.
    """

    file: str
    sha256: str
    dxf_version: str
    unit: str | None
    unit_source: str
    box: tuple[float, float, float, float] | None
    layers: tuple[LayerSurvey, ...]
    hidden: dict[str, str]
    blocks: dict[str, int]
    taken: str | None
    findings: tuple[Finding, ...] = field(default=())

    def to_dict(self) -> dict[str, Any]:
        """Return the document that `survey --json` prints."""
        return {
            "format": FORMAT,
            "program": {"name": "edgetally", "version": __version__},
            "drawing": {
                "file": self.file,
                "sha256": self.sha256,
                "dxf_version": self.dxf_version,
                "unit": self.unit,
                "unit_source": self.unit_source,
                "extents": list(self.box) if self.box else None,
            },
            "layers": [
                {
                    "name": layer.name,
                    "entities": layer.kinds,
                    "verdict": layer.verdict,
                    "reason": layer.reason,
                    "open_ends": layer.open_ends,
                    "outlines": [
                        {"box": list(region.box), "area": region.area, "voids": len(region.voids)}
                        for region in layer.regions
                    ],
                }
                for layer in self.layers
            ],
            "hidden_layers": self.hidden,
            "blocks": self.blocks,
            "layer_taken": self.taken,
            "findings": [finding.to_dict() for finding in self.findings],
        }


def survey(
    path: str | Path, *, units: str | None = None, units_from: str = "option", name: str | None = None
) -> Survey:
    """Look over a drawing. Raises DrawingError where it cannot be read at all; what a layer lacks is in its verdict.

    `units_from` is where `units` was given: `option` or `config`.
    """
    loaded = load(path)
    drawing = DrawingFile(loaded)
    header, words = drawing.header_unit()
    unit = units or header
    each = drawing.read_each()
    layers = tuple(_layer(layer, found, unit or "mm") for layer, found in each.items())
    usable = [layer.name for layer in layers if layer.verdict != NO_OUTLINE]
    # a hatch is the outline only where no layer has one of curves
    usable = [name for name in usable if not by_hatches(each[name])] or usable
    curves = [c for found in each.values() if isinstance(found, Reading) for c in found.curves]
    return Survey(
        name or drawing.name,
        drawing.sha256,
        drawing.dxf_version,
        unit,
        units_from if units else ("header" if header else words),
        Packed.of(curves).box if curves else None,
        layers,
        drawing.hidden_layers(),
        drawing.blocks.counts(),
        usable[0] if len(usable) == 1 else None,
        loaded.findings,
    )


def _layer(name: str, found: Reading | DrawingError, unit: str) -> LayerSurvey:
    if isinstance(found, DrawingError):
        return LayerSurvey(name, {}, NO_OUTLINE, str(found), 0)
    kinds = {kind: read for kind, (read, _) in found.kinds.items()}
    if not found.curves:
        return LayerSurvey(name, kinds, NO_OUTLINE, "no curve that draws an outline", 0)
    gap = DEFAULT_GAP_MM / MM_PER[unit]
    regions, reason = _assembled(found.curves, gap, unit)
    if regions:
        return LayerSurvey(name, kinds, USABLE, "", 0, regions)
    free = open_ends(found.curves, gap)
    widest = WIDEST_GAP_MM / MM_PER[unit]
    joined, _ = _assembled(found.curves, widest, unit) if free else ((), "")
    if joined:
        needed = _gap_needed(found.curves, widest, unit)
        reason = f"gaps up to {length_text(needed, unit)}: pass --join-gap {enough_mm(needed, unit)}"
        return LayerSurvey(name, kinds, NEEDS_JOINING, reason, free, joined)
    return LayerSurvey(name, kinds, NO_OUTLINE, reason, free)


def _assembled(curves: Sequence[Curve], gap: float, unit: str) -> tuple[tuple[Region, ...], str]:
    try:
        return assemble(curves, gap=gap, unit=unit).regions, ""
    except OutlineError as error:
        return (), str(error).split("\n")[0]


def _gap_needed(curves: Sequence[Curve], widest: float, unit: str) -> float:
    return max(join.gap for join in assemble(curves, gap=widest, unit=unit).joins)
