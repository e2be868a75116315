"""Where on paper a section stands: at a round scale, in the middle of the room that its labels leave."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from math import floor, log10
from typing import TYPE_CHECKING

from edgetally.output.pens import MATERIAL, Path, Style
from edgetally.units import length_factor

if TYPE_CHECKING:
    from edgetally.section.record import Section

POINTS_PER_MM = 72.0 / 25.4
MARGIN = 34.0
"""Room [pt] around the section for the ends of the axes and their labels."""
STRIP = 34.0
"""Room [pt] below for the scale bar and the key of the marks."""


@dataclass(frozen=True, slots=True)
class Scale:
    """A scale of ISO 5455, `paper`:`real`, one of them 1."""

    paper: float
    real: float

    @property
    def factor(self) -> float:
        return self.paper / self.real

    def __str__(self) -> str:
        return f"{self.paper:g}:{self.real:g}"


def round_scale(most: float) -> Scale:
    """Return the largest of 1, 2, 5 · 10ⁿ : 1 and 1 : 1, 2, 5 · 10ⁿ that is not above `most`."""
    decade = 10.0 ** floor(log10(most))
    enlarged = max((s * decade for s in (1.0, 2.0, 5.0) if s * decade <= most * (1 + 1e-9)), default=decade)
    if enlarged >= 1.0:
        return Scale(round(enlarged), 1)
    reduced = min(s for k in (-1, 0, 1) for s in (1 / decade * 10.0**k, 2 / decade * 10.0**k, 5 / decade * 10.0**k)
                  if s >= 1.0 and 1 / s <= most * (1 + 1e-9))  # fmt: skip
    return Scale(1, round(reduced))


@dataclass(frozen=True, eq=False)
class Placing:
    """The section on `width` × `height` points of paper, `strip` points at the foot kept free for a key.

    paper point = `points`·z + `shift`, for z in the section's unit.
    """

    section: Section
    width: float
    height: float
    strip: float
    scale: Scale
    points: float
    shift: complex

    @classmethod
    def of(
        cls,
        section: Section,
        width: float,
        height: float,
        *,
        strip: float = STRIP,
        margin: float = MARGIN,
        also: Iterable[complex] = (),
    ) -> Placing:
        """Place a section; `also` are further points, in its unit, that have to be on the paper."""
        x0, y0, x1, y1 = section.packed.box
        for z in also:
            x0, x1 = min(x0, z.real), max(x1, z.real)
            y0, y1 = min(y0, z.imag), max(y1, z.imag)
        mm = length_factor(section.unit, "mm") * POINTS_PER_MM
        room_x, room_y = width - 2 * margin, height - strip - 2 * margin
        scale = round_scale(min(room_x / ((x1 - x0) * mm), room_y / ((y1 - y0) * mm)))
        points = scale.factor * mm
        middle = complex(0.5 * (x0 + x1), 0.5 * (y0 + y1))
        shift = complex(0.5 * width, strip + 0.5 * (height - strip)) - middle * points
        return cls(section, width, height, strip, scale, points, shift)

    def paper(self, z: complex) -> complex:
        """Return where a point of the section stands on the paper."""
        return z * self.points + self.shift

    def material(self, style: Style = MATERIAL) -> Path:
        """Return the material, filled, with its true curves."""
        runs = tuple(
            tuple(curve.moved(complex(self.points), self.shift) for curve in loop.curves) for loop in self.section.loops
        )
        return Path(runs, style, closed=True)
