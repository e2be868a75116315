"""A number that carries a bound of its own error through the formulas."""

from __future__ import annotations

from dataclasses import dataclass
from math import inf, sqrt

from edgetally.curves.green import EPS


@dataclass(frozen=True, slots=True)
class Bounded:
    """A value with |true − value| ≤ slack, to first order, in its unit. Each operation adds its own rounding."""

    value: float
    slack: float = 0.0

    def __add__(self, other: Bounded) -> Bounded:
        return _rounded(self.value + other.value, self.slack + other.slack)

    def __sub__(self, other: Bounded) -> Bounded:
        return _rounded(self.value - other.value, self.slack + other.slack)

    def __neg__(self) -> Bounded:
        return Bounded(-self.value, self.slack)

    def __mul__(self, other: Bounded) -> Bounded:
        return _rounded(self.value * other.value, self.slack * abs(other.value) + other.slack * abs(self.value))

    def __truediv__(self, other: Bounded) -> Bounded:
        if other.value == 0.0:
            return Bounded(inf, inf)
        quotient = self.value / other.value
        return _rounded(quotient, (self.slack + other.slack * abs(quotient)) / abs(other.value))

    def root(self) -> Bounded:
        """Return the square root, of 0 where rounding has left a value just below."""
        value = sqrt(max(self.value, 0.0))
        return _rounded(value, self.slack / (2.0 * value) if value else sqrt(self.slack))

    def relative(self, scale: float = 0.0) -> float:
        """Return the slack relative to the larger of |value| and `scale`."""
        size = max(abs(self.value), scale)
        return self.slack / size if size else 0.0


def _rounded(value: float, slack: float) -> Bounded:
    return Bounded(value, slack + EPS * abs(value))
