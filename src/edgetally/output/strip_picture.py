"""The picture of a strip: the section with its pieces numbered, and below it the flat blank with its bends in place."""

from __future__ import annotations

from collections.abc import Iterable
from math import degrees
from typing import TYPE_CHECKING

from edgetally.output.pens import (
    ACCENT,
    INK,
    MATERIAL,
    MUTED,
    Item,
    Label,
    Path,
    Picture,
    Style,
    disc,
    polygon,
    stroke,
)
from edgetally.output.placing import Placing
from edgetally.units import length_factor

if TYPE_CHECKING:
    from edgetally.results import SectionResult
    from edgetally.section.developed import Developed, Piece

MIDLINE = Style(width=0.4, colour=MUTED, dash=(6.0, 2.0, 1.0, 2.0))
BEND = Style(width=0.3, colour=ACCENT, fill=(0.84, 0.76, 0.80))
BEND_LINE = Style(width=0.5, colour=ACCENT, dash=(3.0, 1.5))
DOT = Style(width=0.3, colour=ACCENT, fill=ACCENT)
STRIP = 92.0
"""Room [pt] below the section for the blank."""
AWAY = 11.0
"""How far [pt] a number stands from the midline."""
LEAST = 9.0
"""Numbers nearer to each other than this [pt] stand in two rows."""


def strip_picture(section: SectionResult, unrolled: Developed, width: float, height: float) -> Picture:
    """Tell a strip and its blank on `width` × `height` points."""
    placing = Placing.of(section.section, width, height, strip=STRIP)
    items: list[Item] = [placing.material()]
    for number, piece in enumerate(unrolled.pieces, start=1):
        items += _on_section(number, piece, placing)
    factor = length_factor(section.section.unit, section.out_unit)
    items += _blank(unrolled, width, factor, section.out_unit)
    items.append(Label(complex(8.0, STRIP + 2.0), f"section {placing.scale}", 7.0, colour=MUTED))
    return Picture(width, height, tuple(items))


def _on_section(number: int, piece: Piece, placing: Placing) -> Iterable[Item]:
    midline = piece.midline.moved(complex(placing.points), placing.shift)
    yield Path(((midline,),), MIDLINE)
    if piece.is_bend:
        for z in (midline.start, midline.end):
            yield disc(z, 1.1, DOT)
    slope = midline.derivative(0.5)
    normal = 1j * slope / abs(slope)
    outward = -1.0 if piece.angle > 0 else 1.0  # outside of a bend there is more room
    at = midline.point(0.5) + outward * AWAY * normal
    colour = ACCENT if piece.is_bend else INK
    yield Label(at - 2.4j, str(number), 7.0, "middle", bold=piece.is_bend, colour=colour)


def _blank(unrolled: Developed, width: float, factor: float, unit: str) -> Iterable[Item]:
    """The blank as a bar over the whole width, its bends shaded; drawn to its own scale along, not across."""
    left, right, low, high = 34.0, width - 34.0, 34.0, 50.0
    points = (right - left) / unrolled.blank_width
    yield polygon([complex(left, low), complex(right, low), complex(right, high), complex(left, high)], MATERIAL)
    x, before, row = left, -LEAST, 0
    for number, piece in enumerate(unrolled.pieces, start=1):
        end = x + piece.blank * points
        middle = 0.5 * (x + end)
        if piece.is_bend:
            yield polygon([complex(x, low), complex(end, low), complex(end, high), complex(x, high)], BEND)
            yield stroke(complex(middle, low - 4.0), complex(middle, high + 4.0), BEND_LINE)
        row = 1 - row if middle - before < LEAST else 0
        colour = ACCENT if piece.is_bend else INK
        yield Label(
            complex(middle, high + 7.0 + 8.0 * row), str(number), 7.0, "middle", bold=piece.is_bend, colour=colour
        )
        before, x = middle, end
    yield Label(complex(left, low - 12.0), _sense(unrolled), 7.0, colour=MUTED)
    text = f"blank {unrolled.blank_width * factor:.6g} {unit} wide, {unrolled.thickness * factor:.6g} {unit} thick"
    yield Label(complex(left, 8.0), f"{text}; bends shaded, bend lines dashed", 7.5)


def _sense(unrolled: Developed) -> str:
    """The angles in order, as a press brake takes them."""
    angles = [f"{degrees(piece.angle):+.4g}°".replace("-", "−") for piece in unrolled.bends]
    shown = ", ".join(angles[:14]) + (" …" if len(angles) > 14 else "")
    return f"bends in order, left positive: {shown}" if angles else "no bend: a flat strip"
