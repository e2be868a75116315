"""The circular arc, up to the full circle."""

from __future__ import annotations

from cmath import phase, rect
from dataclasses import dataclass
from math import atan, copysign, cos, fmod, pi, sin, tau

import numpy as np

from edgetally.curves.curve import UNKNOWN, Complexes, Floats, Source


def swing(angle: float) -> complex:
    """Return e^{i·angle} − 1 without cancellation at small angles: 2i·sin(angle/2)·e^{i·angle/2}."""
    half = 0.5 * angle
    s = sin(half)
    return complex(-2.0 * s * s, 2.0 * s * cos(half))


def swings(angle: Floats) -> Complexes:
    """Return swing(angle) for an array of angles [rad]."""
    half = 0.5 * angle
    s = np.sin(half)
    return 2j * s * (np.cos(half) + 1j * s)


@dataclass(frozen=True, slots=True)
class Arc:
    """The circular arc z(t) = start + spoke·(e^{i·sweep·t} − 1).

    `spoke` is the vector from the centre to the start; `sweep` [rad] is positive counter-clockwise, |sweep| ≤ 2π.
    Kept so rather than by centre and radius because a flat arc of huge radius then loses no digits: the points
    are measured from the start, not from the far-away centre.
    """

    start: complex
    spoke: complex
    sweep: float
    source: Source = UNKNOWN

    @classmethod
    def from_centre(
        cls, centre: complex, radius: float, start_angle: float, sweep: float, source: Source = UNKNOWN
    ) -> Arc:
        """Make the arc from its centre, radius, start angle [rad] and signed sweep [rad]."""
        spoke = rect(radius, start_angle)
        return cls(centre + spoke, spoke, sweep, source)

    @classmethod
    def from_bulge(cls, start: complex, end: complex, bulge: float, source: Source = UNKNOWN) -> Arc:
        """Make the arc between two points from its bulge = tan(sweep/4) (DXF reference, LWPOLYLINE group 42)."""
        sweep = 4.0 * atan(bulge)
        return cls(start, (end - start) / swing(sweep), sweep, source)

    @property
    def radius(self) -> float:
        return abs(self.spoke)

    @property
    def centre(self) -> complex:
        return self.start - self.spoke

    @property
    def is_full_circle(self) -> bool:
        return abs(self.sweep) == tau

    @property
    def end(self) -> complex:
        return self.start if self.is_full_circle else self.start + self.spoke * swing(self.sweep)

    @property
    def length(self) -> float:
        return abs(self.spoke) * abs(self.sweep)

    @property
    def bend(self) -> float:
        return self.sweep * self.sweep * abs(self.spoke)

    def point(self, t: float) -> complex:
        return self.start + self.spoke * swing(self.sweep * t)

    def derivative(self, t: float) -> complex:
        return 1j * self.sweep * self.spoke * rect(1.0, self.sweep * t)

    def points(self, t: Floats) -> Complexes:
        return self.start + self.spoke * swings(self.sweep * t)

    def derivatives(self, t: Floats) -> Complexes:
        slopes: Complexes = 1j * self.sweep * self.spoke * np.exp(1j * self.sweep * t)
        return slopes

    def split(self, t: float) -> tuple[Arc, Arc]:
        first, second = self.sweep * t, self.sweep * (1.0 - t)
        spoke = self.spoke * rect(1.0, first)
        return (
            Arc(self.start, self.spoke, first, self.source),
            Arc(self.start + self.spoke * swing(first), spoke, second, self.source),
        )

    def reversed(self) -> Arc:
        return Arc(self.end, self.spoke * rect(1.0, self.sweep), -self.sweep, self.source)

    def moved(self, factor: complex, shift: complex) -> Arc:
        return Arc(factor * self.start + shift, factor * self.spoke, self.sweep, self.source)

    def mirrored(self) -> Arc:
        return Arc(self.start.conjugate(), self.spoke.conjugate(), -self.sweep, self.source)

    def support(self, direction: complex) -> tuple[float, float]:
        along = direction.conjugate()
        best = ((along * self.start).real, 0.0)
        at_end = (along * self.end).real
        if at_end > best[0]:
            best = (at_end, 1.0)
        # the turn, in the sense of travel, from the start to the point whose outward normal is `direction`
        turn = fmod(phase(direction / self.spoke) * (1 if self.sweep > 0 else -1) + tau, tau)
        if 0.0 < turn < abs(self.sweep):
            # R − Re(conj(d)·spoke) = 2R sin²(turn/2), which keeps its digits on a flat arc
            at_crown = (along * self.start).real + 2.0 * self.radius * sin(0.5 * turn) ** 2
            best = max(best, (at_crown, turn / abs(self.sweep)))
        return best

    def _encircles(self, p: complex) -> bool:
        """Tell whether p lies inside the full circle: the sign of |p − centre|² − R², measured from the start."""
        d = p - self.start
        return d.real * d.real + d.imag * d.imag + 2.0 * (d.real * self.spoke.real + d.imag * self.spoke.imag) < 0.0

    def turning(self, p: complex) -> float:
        if abs(self.sweep) > pi:  # a segment larger than the half disc is not on one side of its chord
            first, second = self.split(0.5)
            return first.turning(p) + second.turning(p)
        # As the chord, except that a point between chord and arc is passed on its other side.
        q = (self.start - p).conjugate() * (self.end - p)
        if q.imag == 0.0 and q.real < 0.0:
            return copysign(pi, self.sweep)
        beside = q.imag * self.sweep < 0.0 and self._encircles(p)
        return phase(q) + (copysign(tau, self.sweep) if beside else 0.0)
