"""The picture of Mohr's circle of the second moments, to scale.

Centre ((I_x + I_y)/2, 0), radius R; points X(I_x, I_xy) and Y(I_y, −I_xy). Axes turned by θ turn the diameter by 2θ in
the same sense, so that the way from X to I₁ is twice the way from x to axis 1.
"""

from __future__ import annotations

from cmath import phase, rect
from collections.abc import Iterable
from math import degrees, hypot
from typing import TYPE_CHECKING

from edgetally.curves import Arc
from edgetally.output.pens import (
    ACCENT,
    ACCENT_MARK,
    DRAWING_AXIS,
    INK,
    MUTED,
    SOLID_MARK,
    THIN,
    THIN_ACCENT,
    Anchor,
    Item,
    Label,
    Path,
    Picture,
    Style,
    arrowhead,
    disc,
    stroke,
)
from edgetally.output.symbols import SymbolSet, symbol_of

if TYPE_CHECKING:
    from edgetally.results import SectionResult

CIRCLE = Style(width=0.8)
ROOM = 30.0
"""Room [pt] around the circle for the labels."""
WITH_ORIGIN = 2.0
"""Where I₁ is more than so many diameters from 0, the circle is drawn large and the axis does not start at 0."""
SMALL = 1e-6
"""A circle smaller than this share of its distance from the origin is a point in print."""


def mohr_picture(section: SectionResult, width: float, height: float, symbols: SymbolSet = "plain") -> Picture:
    """Tell Mohr's circle of a section on `width` × `height` points."""
    values = {key: section.properties[key].value or 0.0 for key in _USED}
    return Picture(width, height, tuple(_items(values, width, height, symbols)))


_USED = ("second_moment_x", "second_moment_y", "product_of_inertia")


def _items(values: dict[str, float], width: float, height: float, symbols: SymbolSet) -> Iterable[Item]:
    ix, iy, ixy = (values[key] for key in _USED)
    mean, radius = 0.5 * (ix + iy), hypot(0.5 * (ix - iy), ixy)
    letter_x, letter_y = (
        symbol_of("second_moment_x", symbols)[2:].upper(),
        symbol_of("second_moment_y", symbols)[2:].upper(),
    )
    if radius <= SMALL * mean:
        yield from _point_only(width, height, letter_x, letter_y)
        return
    paper_radius = min(0.5 * width - ROOM - 8.0, 0.5 * height - ROOM)
    origin = mean / radius * paper_radius  # distance on paper from I = 0 to the centre
    room = width - 2.0 * ROOM
    with_origin = mean + radius <= WITH_ORIGIN * 2.0 * radius
    if with_origin and origin + paper_radius > room:
        paper_radius *= room / (origin + paper_radius)
        origin = mean / radius * paper_radius
    if with_origin:
        zero = complex(ROOM + 0.5 * (room - origin - paper_radius), 0.5 * height)
        centre = zero + origin
    else:
        centre = complex(0.5 * width + 6.0, 0.5 * height)
    left = 6.0
    yield stroke(complex(left, centre.imag), complex(width - 6.0, centre.imag), DRAWING_AXIS)
    yield arrowhead(complex(width - 6.0, centre.imag), 1.0, SOLID_MARK)
    yield Label(complex(width - 7.0, centre.imag - 11.0), "I", 8.5, "end")
    if with_origin:
        top = centre.imag + paper_radius + 20.0
        yield stroke(complex(zero.real, 2 * centre.imag - top), complex(zero.real, top), DRAWING_AXIS)
        yield arrowhead(complex(zero.real, top), 1j, SOLID_MARK)
        name = symbol_of("product_of_inertia", symbols)
        yield Label(complex(zero.real - 5.0, top - 6.0), name, 8.5, "end", symbol=True)
        yield Label(complex(zero.real - 4.0, 2 * centre.imag - top), "0", 8.0, "end")
    else:
        yield Label(complex(left, 3.0), "the axis I does not start at 0", 6.5, colour=MUTED)
    yield disc(centre, paper_radius, CIRCLE)
    x = centre + complex(0.5 * (ix - iy), ixy) / radius * paper_radius
    y = 2 * centre - x
    yield stroke(x, y, THIN)
    yield from _turn(centre, x, paper_radius)
    for z, letter in ((x, letter_x), (y, letter_y)):
        yield disc(z, 1.9, SOLID_MARK)
        yield Label(_beside(z, centre), letter, 8.5, "middle", bold=True)
    anchors: tuple[tuple[str, complex, Anchor], ...] = (
        ("principal_moment_1", centre + paper_radius, "start"),
        ("principal_moment_2", centre - paper_radius, "end"),
    )
    for key, z, anchor in anchors:
        yield disc(z, 1.9, ACCENT_MARK)
        # on the other side of the axis than the point X or Y that is on this half of the circle
        point = x if (x.real >= centre.real) == (anchor == "start") else y
        rise = -11.0 if _above(point, centre) else 5.0
        at = z + complex(4.0 if anchor == "start" else -4.0, rise)
        yield Label(at, symbol_of(key, symbols), 8.5, anchor, bold=True, colour=ACCENT, symbol=True)
    yield disc(centre, 1.2, SOLID_MARK)


def _turn(centre: complex, x: complex, paper_radius: float) -> Iterable[Item]:
    """The arc of 2θ from the radius to X to the radius to I₁, with its sense."""
    start = phase(x - centre)
    if abs(degrees(start)) < 4.0:
        return
    radius = 0.42 * paper_radius
    arc = Arc.from_centre(centre, radius, start, -start)
    yield Path(((arc,),), THIN_ACCENT)
    sense = -1j if start > 0 else 1j
    lean = rect(1.0, (2.5 / radius) * (1 if start > 0 else -1))
    yield arrowhead(arc.end, sense * lean, ACCENT_MARK, size=min(4.5, radius * abs(start)))
    wide = abs(degrees(start)) > 40.0
    at = rect(radius + 9.0, 0.5 * start) if wide else complex(radius + 2.0, -10.0 if start > 0 else 10.0)
    yield Label(centre + at - complex(0.0, 3.0), "2θ", 8.5, "middle", colour=ACCENT)


def _above(point: complex, centre: complex) -> bool:
    return point.imag >= centre.imag - 1e-6


def _beside(point: complex, centre: complex) -> complex:
    """Where the letter of a point of the circle stands: outside, and clear of the horizontal axis."""
    outward = (point - centre) / abs(point - centre)
    at = point + 9.5 * outward
    if abs(outward.imag) < 0.45:
        at = complex(at.real, point.imag + (9.0 if _above(point, centre) else -9.0))
    return at - complex(0.0, 3.0)


def _point_only(width: float, height: float, letter_x: str, letter_y: str) -> Iterable[Item]:
    centre = complex(0.5 * width, 0.5 * height)
    yield stroke(complex(6.0, centre.imag), complex(width - 6.0, centre.imag), DRAWING_AXIS)
    yield arrowhead(complex(width - 6.0, centre.imag), 1.0, SOLID_MARK)
    yield Label(complex(width - 7.0, centre.imag - 11.0), "I", 8.5, "end")
    yield disc(centre, 2.2, SOLID_MARK)
    yield Label(centre + 8.0j, f"{letter_x} = {letter_y}: the circle is a point", 8.0, "middle", colour=INK)
    yield Label(centre - 16.0j, "every axis is principal", 8.0, "middle", colour=INK)
