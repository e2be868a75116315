"""The axes of a section on paper: those of the drawing and the principal ones, through one point.

Their letters stand in a margin that the section never reaches, each on the side of its axis that is away from the
nearest other one, so that nothing overlaps whatever the section's proportions.
"""

from __future__ import annotations

from cmath import rect
from collections.abc import Iterable
from dataclasses import dataclass
from math import degrees, inf, pi

from edgetally.curves import Arc
from edgetally.output.pens import (
    ACCENT,
    ACCENT_MARK,
    DRAWING_AXIS,
    INK,
    PRINCIPAL_AXIS,
    SOLID_MARK,
    THIN_ACCENT,
    Item,
    Label,
    Path,
    arrowhead,
    stroke,
)
from edgetally.output.placing import Placing
from edgetally.output.symbols import AxisLetters

NO_ARC = 1.0
"""Below this angle [degrees] the arc from x to axis 1 would be smaller than its own arrowhead."""


@dataclass(frozen=True, eq=False)
class AxesOnPaper:
    """Axes through `centre` [pt]; axis 1 is turned by `theta` [rad] from x, or every axis is principal: `arbitrary`."""

    placing: Placing
    centre: complex
    theta: float
    arbitrary: bool
    letters: AxisLetters

    def _border(self, direction: complex) -> complex:
        """Return where the ray from the centroid leaves the room of the axes."""
        inset = 6.0
        reach = inf
        if abs(direction.real) > 1e-12:
            limit = self.placing.width - inset if direction.real > 0 else inset
            reach = min(reach, (limit - self.centre.real) / direction.real)
        if abs(direction.imag) > 1e-12:
            limit = self.placing.height - inset if direction.imag > 0 else self.placing.strip + inset
            reach = min(reach, (limit - self.centre.imag) / direction.imag)
        return self.centre + reach * direction

    def items(self) -> Iterable[Item]:
        """Return both pairs of axes with their letters, and the arc of the angle between them."""
        drawing = [(0.0, self.letters.x), (pi / 2, self.letters.y)]
        principal = [(self.theta, self.letters.first), (self.theta + pi / 2, self.letters.second)]
        for angle, letter in drawing:
            yield from self._axis(angle, letter, [a for a, _ in principal], principal=False)
        for angle, letter in principal:
            yield from self._axis(angle, letter, [a for a, _ in drawing], principal=True)
        yield from self._angle_arc()

    def _axis(self, angle: float, letter: str, others: list[float], *, principal: bool) -> Iterable[Item]:
        direction = rect(1.0, angle)
        tip, tail = self._border(direction), self._border(-direction)
        yield stroke(tail, tip, PRINCIPAL_AXIS if principal else DRAWING_AXIS)
        yield arrowhead(tip, direction, ACCENT_MARK if principal else SOLID_MARK)
        # the nearest other ray decides on which side the letter stands
        turns = [((o + k * pi / 2 - angle + pi) % (2 * pi)) - pi for o in others for k in range(4)]
        nearest = min(turns, key=abs)
        side = (1.0 if principal else -1.0) if abs(nearest) < 1e-9 else (-1.0 if nearest > 0 else 1.0)
        normal = 1j * direction * side
        at = tip - 9.0 * direction + 7.0 * normal - complex(0.0, 2.9)
        margin = 7.0
        at = complex(
            min(max(at.real, margin), self.placing.width - margin),
            min(max(at.imag, self.placing.strip + 2), self.placing.height - 9.0),
        )
        yield Label(at, letter, 9.0, "middle", bold=principal, colour=ACCENT if principal else INK)

    def _angle_arc(self) -> Iterable[Item]:
        if self.arbitrary or abs(degrees(self.theta)) < NO_ARC:
            return
        ends = [abs(self._border(rect(1.0, a)) - self.centre) for a in (0.0, self.theta)]
        radius = max(0.86 * min(ends), 14.0)
        arc = Arc.from_centre(self.centre, radius, 0.0, self.theta)
        yield Path(((arc,),), THIN_ACCENT)
        sense = 1j if self.theta > 0 else -1j
        # the head lies along the chord of its own length, not along the tangent at its tip
        lean = rect(1.0, -2.5 / radius * (1 if self.theta > 0 else -1))
        yield arrowhead(arc.end, rect(1.0, self.theta) * sense * lean, ACCENT_MARK, size=4.5)
        wide = radius * abs(self.theta) > 22.0
        turn = 0.5 * self.theta if wide else self.theta + (9.0 / radius) * (1 if self.theta > 0 else -1)
        at = self.centre + rect(radius + (8.0 if wide else 0.0), turn) - complex(0.0, 3.0)
        yield Label(at, "θ", 9.0, "middle", colour=ACCENT)
