"""The dimensions on the drawing against what they measure, as a table and for the document."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from edgetally.output.blocks import Block, Figure

if TYPE_CHECKING:
    from edgetally.drawing.dimensions import DimensionRow
    from edgetally.results import Analysis

LISTED = 40
"""A longer table says no more; what shows another number than it measures is listed first then."""
NO_DIFFERENCE = 1e-9
"""Relative: the rounding of a measurement that nobody wrote over."""


def dimension_rows(analysis: Analysis) -> list[dict[str, Any]]:
    """Return what the JSON document says of each dimension, in drawn lengths: the text shown, measured × DIMLFAC, and
    the shown number less that, null where no one number is shown."""
    return [
        {
            "handle": row.handle,
            "layer": row.layer,
            "shown": row.words,
            "measured": row.reading,
            "difference": _difference(row),
        }
        for row in analysis.drawing.dimensions
    ]


def lying(analysis: Analysis) -> bool:
    """Tell whether a finding doubts the dimensions."""
    return any(f.code in ("dimension-overridden", "not-to-scale", "units-suspect") for f in analysis.findings)


def dimension_evidence(analysis: Analysis) -> str:
    """Return in words how many dimensions there are and how they agree; empty where there are none."""
    rows = analysis.drawing.dimensions
    if not rows:
        return ""
    off = sum(1 for row in rows if row.difference is not None and abs(row.difference) > row.half_digit)
    agreement = f"{off} show another number than they measure" if off else "all show what they measure"
    return f"{len(rows)} on the drawing, {agreement}"


def dimension_block(analysis: Analysis) -> Block | None:
    """Return the table of the dimensions on the drawing, None where it has none."""
    rows = list(analysis.drawing.dimensions)
    if not rows:
        return None
    notes = [f"in drawn lengths, {analysis.drawing.unit}; measured from the definition points, times DIMLFAC"]
    if len(rows) > LISTED:
        notes.append(f"{len(rows) - LISTED} more; --json lists each")
        rows = sorted(rows, key=lambda row: not _difference(row))[:LISTED]
    return Block(
        "Dimensions on the drawing",
        ("dimension", "layer", "shown", "measured", "difference"),
        tuple(
            (f"#{row.handle}", row.layer, row.words or "–", Figure.of(row.reading), Figure.of(_difference(row)))
            for row in rows
        ),
        tuple(notes),
    )


def _difference(row: DimensionRow) -> float | None:
    """Return the difference, 0 where it is rounding."""
    off = row.difference
    return 0.0 if off is not None and abs(off) <= NO_DIFFERENCE * row.reading else off
