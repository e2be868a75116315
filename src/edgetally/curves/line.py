"""The straight piece."""

from __future__ import annotations

from dataclasses import dataclass
from math import atan2

import numpy as np

from edgetally.curves.curve import UNKNOWN, Complexes, Floats, Source


@dataclass(frozen=True, slots=True)
class Line:
    """The straight piece z(t) = start + t·(end − start)."""

    start: complex
    end: complex
    source: Source = UNKNOWN

    @property
    def length(self) -> float:
        return abs(self.end - self.start)

    @property
    def bend(self) -> float:
        return 0.0

    def point(self, t: float) -> complex:
        # measured from the nearer end, so that both ends come out as given
        chord = self.end - self.start
        return self.start + t * chord if t < 0.5 else self.end - (1 - t) * chord

    def derivative(self, t: float) -> complex:
        return self.end - self.start

    def points(self, t: Floats) -> Complexes:
        chord = self.end - self.start
        return np.where(t < 0.5, self.start + t * chord, self.end - (1 - t) * chord)

    def derivatives(self, t: Floats) -> Complexes:
        return np.full(np.shape(t), self.end - self.start)

    def split(self, t: float) -> tuple[Line, Line]:
        middle = self.point(t)
        return Line(self.start, middle, self.source), Line(middle, self.end, self.source)

    def reversed(self) -> Line:
        return Line(self.end, self.start, self.source)

    def moved(self, factor: complex, shift: complex) -> Line:
        return Line(factor * self.start + shift, factor * self.end + shift, self.source)

    def mirrored(self) -> Line:
        return Line(self.start.conjugate(), self.end.conjugate(), self.source)

    def support(self, direction: complex) -> tuple[float, float]:
        at_start = (direction.conjugate() * self.start).real
        at_end = (direction.conjugate() * self.end).real
        return (at_start, 0.0) if at_start >= at_end else (at_end, 1.0)

    def turning(self, p: complex) -> float:
        q = (self.start - p).conjugate() * (self.end - p)
        return atan2(q.imag, q.real)
