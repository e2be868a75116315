"""The picture of a composite section: each part in a grey of its own, the stiffer the darker; centroid and axes."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from math import ceil
from typing import TYPE_CHECKING

from edgetally.output.axes import AxesOnPaper
from edgetally.output.figure import centroid_mark
from edgetally.output.pens import MUTED, Item, Label, Picture, Style, polygon
from edgetally.output.placing import Placing
from edgetally.output.symbols import AXES, SymbolSet

if TYPE_CHECKING:
    from edgetally.section.composite import CompositeResult

LIGHTEST, DARKEST = 0.95, 0.52
"""Greys of the softest and of the stiffest part: both let the axes be seen."""
COLUMN, ROW = 150.0, 11.0
"""Room [pt] that an entry of the key takes."""
LISTED = 12
"""So many parts have an entry in the key; the table lists all."""
NAMED = 14
"""Letters of a layer's name in the key."""


def composite_picture(composite: CompositeResult, width: float, height: float, symbols: SymbolSet = "plain") -> Picture:
    """Tell the picture of a composite section on `width` × `height` points."""
    columns = max(1, int((width - 16.0) / COLUMN))
    entries = min(len(composite.parts), LISTED) + (len(composite.parts) > LISTED)
    strip = 20.0 + ROW * ceil(entries / columns)
    placing = Placing.of(composite.whole, width, height, strip=strip)
    centre = placing.paper(composite.centroid)
    axes = AxesOnPaper(placing, centre, composite.axes.angle.value, composite.axes.arbitrary, AXES[symbols])
    styles = _styles(composite)
    items: list[Item] = [
        *(
            replace(placing, section=part.section).material(style)
            for part, style in zip(composite.parts, styles, strict=True)
        ),
        *axes.items(),
        *centroid_mark(centre),
        *_key(composite, styles, columns, strip),
        *centroid_mark(complex(12.0, 8.0), 2.8),
        Label(complex(18.0, 5.5), f"elastic centroid     scale {placing.scale}", 7.0, colour=MUTED),
    ]
    return Picture(width, height, tuple(items))


def _styles(composite: CompositeResult) -> list[Style]:
    """Return the style of each part: no two of one grey, in the order of their moduli."""
    count = len(composite.parts)
    order = sorted(range(count), key=lambda k: composite.parts[k].material.modulus)
    greys = {k: LIGHTEST + (DARKEST - LIGHTEST) * rank / max(1, count - 1) for rank, k in enumerate(order)}
    return [Style(width=0.7, fill=(greys[k], greys[k], greys[k])) for k in range(count)]


def _key(composite: CompositeResult, styles: list[Style], columns: int, strip: float) -> Iterable[Item]:
    for k, (part, style) in enumerate(zip(composite.parts[:LISTED], styles, strict=False)):
        x, y = 8.0 + COLUMN * (k % columns), strip - 9.0 - ROW * (k // columns)
        corners = [complex(x, y - 1.0), complex(x + 12.0, y - 1.0), complex(x + 12.0, y + 6.0), complex(x, y + 6.0)]
        yield polygon(corners, style)
        layer = part.material.layer
        layer = layer if len(layer) <= NAMED else layer[: NAMED - 1] + "…"
        yield Label(complex(x + 16.0, y), f"{layer}, E = {part.material.modulus:.7g} MPa", 7.0)
    if len(composite.parts) > LISTED:
        x, y = 8.0 + COLUMN * (LISTED % columns), strip - 9.0 - ROW * (LISTED // columns)
        yield Label(complex(x, y), f"and {len(composite.parts) - LISTED} more", 7.0, colour=MUTED)
