"""A cold-formed strip as a block and for the document: its flats and bends in order, its blank."""

from __future__ import annotations

from math import degrees
from typing import TYPE_CHECKING, Any

from edgetally.output.blocks import Block, Cell, Figure
from edgetally.output.numbers import digits_of
from edgetally.units import length_factor

if TYPE_CHECKING:
    from edgetally.results import SectionResult
    from edgetally.section.developed import Developed, Piece


def strip_document(section: SectionResult, unrolled: Developed) -> dict[str, Any]:
    """Return the strip as plain dicts, lists and numbers, in the unit of the results and in degrees."""
    f = length_factor(section.section.unit, section.out_unit)
    return {
        "closed": unrolled.closed,
        "thickness": unrolled.thickness * f,
        "midline_length": unrolled.width * f,
        "blank_width": unrolled.blank_width * f,
        "unit": section.out_unit,
        "neutral_axis": "DIN 6935" if unrolled.neutral_axis is None else unrolled.neutral_axis,
        "pieces": [
            {
                "kind": "bend" if piece.is_bend else "flat",
                "midline_length": piece.length * f,
                "blank_length": piece.blank * f,
                "angle": degrees(piece.angle),
                "inside_radius": piece.inside_radius * f if piece.is_bend else None,
            }
            for piece in unrolled.pieces
        ],
    }


def strip_blocks(section: SectionResult) -> tuple[Block, ...]:
    """Return the pieces in order and the widths; nothing where the section is no strip."""
    unrolled = section.developed
    if unrolled is None:
        return ()
    f, unit = length_factor(section.section.unit, section.out_unit), section.out_unit
    digits = min(6, digits_of(unrolled.uneven or None))
    rows = [(str(n), *_cells(piece, f, digits)) for n, piece in enumerate(unrolled.pieces, start=1)]
    heads = ("no.", "", f"midline {unit}", "angle °", "", f"inside radius {unit}", f"in the blank {unit}")
    start = "the longest flat" if unrolled.closed else "its left end"
    pieces = Block(
        "Flats and bends",
        heads,
        tuple(rows),
        (f"From {start}; left and right as seen along it. Numbers as in the figure.",),
    )
    return pieces, _widths(unrolled, f, unit, digits)


def _cells(piece: Piece, f: float, digits: int) -> tuple[Cell, ...]:
    if not piece.is_bend:
        return "flat", Figure.of(piece.length * f, digits), "", "", "", Figure.of(piece.blank * f, digits)
    side, angle = ("left" if piece.angle > 0 else "right"), abs(degrees(piece.angle))
    lengths = [Figure.of(length * f, digits) for length in (piece.length, piece.inside_radius, piece.blank)]
    return "bend", lengths[0], Figure(angle, f"{angle:.3f}"), side, *lengths[1:]


def _widths(unrolled: Developed, f: float, unit: str, digits: int) -> Block:
    flats = sum(piece.length for piece in unrolled.pieces if not piece.is_bend)
    allowances = sum(piece.blank for piece in unrolled.bends)
    rows: list[tuple[Cell, ...]] = [
        ("thickness", Figure.of(unrolled.thickness * f, digits), unit),
        ("developed width, midline", Figure.of(unrolled.width * f, digits), unit),
        ("flats together", Figure.of(flats * f, digits), unit),
        (f"allowances of {len(unrolled.bends)} bends", Figure.of(allowances * f, digits), unit),
        ("blank width", Figure.of(unrolled.blank_width * f, digits), unit),
    ]
    if unrolled.neutral_axis is None:
        rule = "K = ½(0.65 + ½ lg(r/t)), at most ½, as DIN 6935 has it"
    else:
        rule = f"K = {unrolled.neutral_axis:g} as given"
    notes = [
        f"Allowance of a bend = angle · (r + K·t), r the inside radius; {rule}. Area = thickness × developed width, "
        "which is measured on the midline and does not depend on K.",
        f"The thickness was found to vary by up to {100 * unrolled.uneven:.1g} % of it.",
    ]
    if any(piece.inside_radius < 0.05 * unrolled.thickness for piece in unrolled.bends) and not unrolled.neutral_axis:
        notes.append("Below r/t = 0.05 the formula would be negative: such a bend is a fold, taken with K = 0.")
    return Block("The blank", (), tuple(rows), tuple(notes))
