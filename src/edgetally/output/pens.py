"""The language of a picture: items in paper points, y upwards, and what a pen must be able to draw.

A picture is told once (`figure`, `mohr`), and each pen (PDF, SVG) writes it in its own format. Curves stay curves: a
pen draws an arc as its format can.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import ceil, radians
from typing import Literal, Protocol

import numpy as np

from edgetally.curves import Arc, Curve, Line

Anchor = Literal["start", "middle", "end"]

INK = (0.10, 0.11, 0.12)
MUTED = (0.38, 0.40, 0.42)
ACCENT = (0.42, 0.12, 0.30)  # dark enough to print as black where there is no colour
FILL = (0.87, 0.89, 0.87)
WHITE = (1.0, 1.0, 1.0)

Colour = tuple[float, float, float]

# A cubic per 15° of an arc misses it by less than 1e-6 of the radius; other curves are drawn in so many cubics.
CUBIC_TURN = radians(15.0)
CUBICS = 24


@dataclass(frozen=True, slots=True)
class Style:
    """How a path is drawn: stroke width [pt], 0 for none; dash lengths [pt]; fill, None for none."""

    width: float = 0.6
    colour: Colour = INK
    dash: tuple[float, ...] = ()
    fill: Colour | None = None


MATERIAL = Style(width=0.7, fill=FILL)
DRAWING_AXIS = Style(width=0.45, colour=MUTED, dash=(9.0, 2.0, 1.5, 2.0))
PRINCIPAL_AXIS = Style(width=0.9, colour=ACCENT, dash=(5.0, 2.2))
THIN = Style(width=0.45)
THIN_ACCENT = Style(width=0.6, colour=ACCENT)
SOLID_MARK = Style(width=0.3, fill=INK)
HOLLOW_MARK = Style(width=0.7, colour=ACCENT, fill=WHITE)
OPEN_MARK = Style(width=0.6, fill=WHITE)
ACCENT_MARK = Style(width=0.3, colour=ACCENT, fill=ACCENT)


@dataclass(frozen=True, slots=True)
class Path:
    """Runs of connected curves, filled together by the even-odd rule where the style fills."""

    runs: tuple[tuple[Curve, ...], ...]
    style: Style
    closed: bool = False


@dataclass(frozen=True, slots=True)
class Label:
    """A text on the baseline through `at`. With `symbol` the part after `_` is a subscript."""

    at: complex
    text: str
    size: float = 8.0
    anchor: Anchor = "start"
    bold: bool = False
    colour: Colour = INK
    symbol: bool = False


Item = Path | Label


@dataclass(frozen=True, slots=True)
class Picture:
    """What is drawn on a piece of paper of `width` × `height` [pt], origin at the lower left."""

    width: float
    height: float
    items: tuple[Item, ...]


class Pen(Protocol):
    """Draws the items of a picture, moved by `shift` [pt]."""

    def path(self, path: Path, shift: complex) -> None: ...

    def label(self, label: Label, shift: complex) -> None: ...


def draw(picture: Picture, pen: Pen, shift: complex = 0j) -> None:
    """Tell the picture to a pen."""
    for item in picture.items:
        if isinstance(item, Path):
            pen.path(item, shift)
        else:
            pen.label(item, shift)


def cubics(curve: Curve) -> list[tuple[complex, complex, complex]]:
    """Return (control, control, end) of the cubic Bézier pieces that draw a curve: Hermite pieces of its derivative.

    For a picture only: no number comes from here.
    """
    if isinstance(curve, Line):
        third = (curve.end - curve.start) / 3.0
        return [(curve.start + third, curve.end - third, curve.end)]
    count = max(1, ceil(abs(curve.sweep) / CUBIC_TURN)) if isinstance(curve, Arc) else CUBICS
    t = np.linspace(0.0, 1.0, count + 1)
    points, thirds = curve.points(t), curve.derivatives(t) / (3.0 * count)
    return [
        (complex(points[k] + thirds[k]), complex(points[k + 1] - thirds[k + 1]), complex(points[k + 1]))
        for k in range(count)
    ]


def polygon(points: Sequence[complex], style: Style) -> Path:
    """Return the closed polygon through the points."""
    lines = tuple(Line(a, b) for a, b in zip(points, [*points[1:], points[0]], strict=True))
    return Path((lines,), style, closed=True)


def stroke(a: complex, b: complex, style: Style) -> Path:
    """Return the straight stroke from a to b."""
    return Path(((Line(a, b),),), style)


def disc(centre: complex, radius: float, style: Style) -> Path:
    """Return the full circle."""
    return Path(((Arc.from_centre(centre, radius, 0.0, 2 * np.pi),),), style, closed=True)


def arrowhead(tip: complex, direction: complex, style: Style, size: float = 5.0) -> Path:
    """Return a slim filled arrowhead whose tip points along the unit number `direction`."""
    back = tip - size * direction
    return polygon([tip, back + 0.32j * size * direction, back - 0.32j * size * direction], style)
