"""Findings: what the reader of a result has to know about how it came about.

A finding is a fact with a place. `CODES` is the one table of kinds; the README's list is tested against it.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Any, Literal

Severity = Literal["note", "warning", "error"]

RANK: dict[Severity, int] = {"note": 0, "warning": 1, "error": 2}

CODES: dict[str, str] = {
    "gap-joined": "two ends that did not meet exactly were joined",
    "gap-too-wide": "two ends lie too far apart to be joined",
    "open-chain": "curves that form no closed loop",
    "duplicate-removed": "a curve drawn twice was counted once",
    "overlap-removed": "curves that ran over each other were counted once",
    "edge-shared": "closed figures that share an edge were taken as one solid",
    "crossing": "two curves cross, touch or run over each other",
    "branch": "three or more curve ends meet at one point",
    "stray-curve": "a curve that belongs to no outline was left out",
    "tiny-curve-removed": "a curve too short to matter was left out",
    "zero-area": "a closed loop that encloses no area",
    "regions-overlap": "two parts of the section lie over each other",
    "regions-touch": "two boundaries touch in a point",
    "island-in-void": "a separate part lies inside a void of another",
    "several-outlines": "the drawing holds more than one outer boundary",
    "chopped-arc": "a curve was drawn as a run of short chords",
    "units-missing": "neither the drawing nor an option says what its unit is",
    "units-suspect": "the unit taken may not be the one meant",
    "not-to-scale": "the dimensions say that the drawing is not at full size",
    "dimension-overridden": "a dimension shows another number than it measures",
    "lettered-agrees": "a value lettered on the drawing is that of the section",
    "lettered-differs": "a value lettered on the drawing is not that of the section, or could not be compared",
    "layer-chosen": "the layer was chosen by the program, because only one carries a closed outline",
    "layer-missing": "there is no such layer, or nothing on it to read",
    "layer-hidden": "a layer is off or frozen, so nothing on it was read",
    "entity-skipped": "an entity was left out",
    "hatch-used": "the outline was taken from the boundary of a hatch",
    "hatch-differs": "the boundary of a hatch encloses another area than the outline",
    "spline-fitted": "a curve through given points was computed by the program",
    "entity-unreadable": "an entity cannot be read",
    "not-planar": "an entity lies outside the plane of the drawing",
    "repaired-file": "the file was damaged and was read with repairs",
    "truncated-file": "the file ends before it is complete",
    "limit-reached": "a limit that protects the program was reached",
    "axes-arbitrary": "the principal moments are equal, so every axis is principal",
    "torsion-unsolved": "torsion and shear could not be computed",
    "offset-impossible": "surfaces that move by the offset asked for meet, or eat a piece of the outline",
    "parts-disconnected": "the parts of the section do not touch",
}


@dataclass(frozen=True, slots=True)
class Finding:
    """One fact about a drawing or a section.

    `at` is in the drawing's own coordinates, as drawn; `handles` are DXF handles without the '#'.
    """

    code: str
    severity: Severity
    message: str
    at: tuple[float, float] | None = None
    handles: tuple[str, ...] = ()

    def to_dict(self) -> dict[str, Any]:
        """Return the finding as the documents carry it."""
        return {
            "code": self.code,
            "severity": self.severity,
            "message": self.message,
            "at": list(self.at) if self.at else None,
            "handles": list(self.handles),
        }

    def __post_init__(self) -> None:
        if self.code not in CODES:
            raise ValueError(f"finding code {self.code!r} is not in the table of codes")


def worst(findings: Iterable[Finding]) -> Severity | None:
    """Return the gravest severity among the findings, None when there are none."""
    return max((f.severity for f in findings), key=RANK.__getitem__, default=None)
