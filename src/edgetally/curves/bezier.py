"""The Bézier piece, polynomial or rational: one smooth span of a spline."""

from __future__ import annotations

from cmath import phase
from dataclasses import dataclass
from functools import cache
from math import comb

import numpy as np

from edgetally.curves import bernstein, quadrature
from edgetally.curves.curve import UNKNOWN, Complexes, Floats, Source
from edgetally.curves.quadrature import arc_length, gauss

# A point that is not on the curve is outside the hull of a small enough piece; 60 halvings are below rounding.
DEPTH = 60
# A rational piece is integrated with the higher of two orders once they agree, halved where they do not.
LOW, HIGH = 12, 20
AGREEMENT = 1e-14
HALVINGS = 16


@cache
def basis(degree: int, n: int) -> tuple[Floats, Floats]:
    """Return the Bernstein polynomials of `degree` at the n Gauss nodes (degree + 1, n), and their derivatives."""
    t, _ = gauss(n)

    def bernsteins(p: int) -> Floats:
        return np.array([comb(p, i) * t**i * (1.0 - t) ** (p - i) for i in range(p + 1)])

    lower = np.vstack([np.zeros(n), bernsteins(degree - 1), np.zeros(n)])
    return bernsteins(degree), degree * (lower[:-1] - lower[1:])


def polynomial_nodes(control: Complexes) -> tuple[Complexes, Complexes]:
    """Return quadrature nodes z and dz (…, 3p) of polynomial pieces by their control points (…, p + 1).

    ∫f dz is exact for polynomials f of degree ≤ 5: the integrand is of degree 6p − 1.
    """
    degree = control.shape[-1] - 1
    values, slopes = basis(degree, 3 * degree)
    z, dz = control @ values, control @ (slopes * gauss(3 * degree)[1])
    return np.asarray(z, dtype=complex), np.asarray(dz, dtype=complex)


def polynomial_lengths(control: Complexes) -> Floats:
    """Return the lengths of polynomial pieces by their control points (n, p + 1), nan where one rule is not enough."""
    coarse, fine = (
        np.abs(control @ basis(control.shape[-1] - 1, n)[1]) @ gauss(n)[1] for n in (quadrature.LOW, quadrature.HIGH)
    )
    return np.where(np.abs(fine - coarse) <= quadrature.AGREEMENT * fine, fine, np.nan)


@dataclass(frozen=True, slots=True)
class Bezier:
    """The piece z(t) = Σ wᵢ·Pᵢ·Bᵢ(t) / Σ wᵢ·Bᵢ(t), Bᵢ the Bernstein polynomials of degree len(control) − 1 ≥ 1.

    `weights` are positive, or None for a polynomial piece, where all are 1.
    """

    control: tuple[complex, ...]
    weights: tuple[float, ...] | None = None
    source: Source = UNKNOWN

    @property
    def degree(self) -> int:
        return len(self.control) - 1

    @property
    def start(self) -> complex:
        return self.control[0]

    @property
    def end(self) -> complex:
        return self.control[-1]

    @property
    def length(self) -> float:
        return arc_length(self)

    def _forms(self) -> tuple[list[complex], list[float]]:
        """Return the coefficients of numerator and denominator of z(t) − start."""
        weights = self.weights or (1.0,) * len(self.control)
        return [w * (p - self.control[0]) for p, w in zip(self.control, weights, strict=True)], list(weights)

    @property
    def bend(self) -> float:
        if self.degree == 1 and self.weights is None:
            return 0.0
        if self.weights is None:
            return max(map(abs, bernstein.slope(bernstein.slope(self.control))))
        # with z = N/W about the start: z′ = (N′ − W′z)/W and z″ = (N″ − W″z − 2W′z′)/W, each factor by its coefficients
        above, below = self._forms()
        above_1, below_1 = bernstein.slope(above), bernstein.slope(below)
        above_2, below_2 = bernstein.slope(above_1) or [0j], bernstein.slope(below_1) or [0.0]
        reach, least = max(abs(p - self.start) for p in self.control), min(below)
        turn = max(map(abs, below_1))
        speed = (max(map(abs, above_1)) + turn * reach) / least
        return (max(map(abs, above_2)) + max(map(abs, below_2)) * reach + 2.0 * turn * speed) / least

    def point(self, t: float) -> complex:
        if self.weights is None:
            return bernstein.value(self.control, t)
        if t == 1.0:
            return self.control[-1]
        above, below = self._forms()
        return self.control[0] + bernstein.value(above, t) / bernstein.value(below, t)

    def derivative(self, t: float) -> complex:
        if self.weights is None:
            return bernstein.value(bernstein.slope(self.control), t)
        above, below = self._forms()
        w = bernstein.value(below, t)
        z = bernstein.value(above, t) / w
        return (bernstein.value(bernstein.slope(above), t) - bernstein.value(bernstein.slope(below), t) * z) / w

    def points(self, t: Floats) -> Complexes:
        if self.weights is None:
            return _values(self.control, t)
        above, below = self._forms()
        return self.control[0] + _values(above, t) / _values(below, t)

    def derivatives(self, t: Floats) -> Complexes:
        if self.weights is None:
            return _values(bernstein.slope(self.control), t)
        above, below = self._forms()
        w = _values(below, t)
        z = _values(above, t) / w
        slopes: Complexes = (_values(bernstein.slope(above), t) - _values(bernstein.slope(below), t) * z) / w
        return slopes

    def nodes(self) -> tuple[Complexes, Complexes]:
        """Return quadrature nodes z and dz = weight·z′: Σ f(z)·dz = ∫f dz for polynomials f of degree ≤ 5.

        Exact for a polynomial piece. Of a rational piece halves are taken until two orders agree to 1e-14 of its size
        on every such f.
        """
        if self.weights is None:
            return polynomial_nodes(np.array(self.control, dtype=complex))
        size = max(abs(p - self.start) for p in self.control)
        z_all, dz_all = [], []
        waiting = [(0.0, 1.0, 0)]
        while waiting:
            low, width, level = waiting.pop()
            sums = []
            for n in (LOW, HIGH):
                t, w = gauss(n)
                z, dz = self.points(low + width * t), width * w * self.derivatives(low + width * t)
                sums.append(_moment_sums((z - self.start) / size, dz / size))
            if level < HALVINGS and np.abs(sums[0] - sums[1]).max() > AGREEMENT:
                waiting += [(low + 0.5 * width, 0.5 * width, level + 1), (low, 0.5 * width, level + 1)]
            else:
                z_all.append(z)
                dz_all.append(dz)
        return np.concatenate(z_all), np.concatenate(dz_all)

    def split(self, t: float) -> tuple[Bezier, Bezier]:
        if self.weights is None:
            first, second = bernstein.halves(self.control, t)
            return Bezier(tuple(first), None, self.source), Bezier(tuple(second), None, self.source)
        above, below = self._forms()
        parts = []
        for n, w in zip(bernstein.halves(above, t), bernstein.halves(below, t), strict=True):
            parts.append(([self.control[0] + p / q for p, q in zip(n, w, strict=True)], w))
        (first, w_first), (second, w_second) = parts
        second[-1] = self.control[-1]
        return (
            Bezier(tuple(first), tuple(w_first), self.source),
            Bezier(tuple(second), tuple(w_second), self.source),
        )

    def reversed(self) -> Bezier:
        return Bezier(self.control[::-1], self.weights and self.weights[::-1], self.source)

    def moved(self, factor: complex, shift: complex) -> Bezier:
        return Bezier(tuple(factor * p + shift for p in self.control), self.weights, self.source)

    def mirrored(self) -> Bezier:
        return Bezier(tuple(p.conjugate() for p in self.control), self.weights, self.source)

    def support(self, direction: complex) -> tuple[float, float]:
        along = direction.conjugate()
        at_start = (along * self.start).real
        reach = [(along * (p - self.start)).real for p in self.control]
        best = max((0.0, 0.0), (reach[-1], 1.0), key=lambda b: b[0])
        if max(reach) > best[0]:  # else the hull reaches no further than the ends
            if self.weights is None:
                for t in bernstein.roots(bernstein.slope(reach)):
                    best = max(best, (bernstein.value(reach, t), t))
            else:
                above, below = [r * w for r, w in zip(reach, self.weights, strict=True)], self.weights
                rising = bernstein.product(bernstein.slope(above), below)
                falling = bernstein.product(above, bernstein.slope(below))
                for t in bernstein.roots([r - f for r, f in zip(rising, falling, strict=True)]):
                    best = max(best, (bernstein.value(above, t) / bernstein.value(below, t), t))
        return at_start + best[0], best[1]

    def turning(self, p: complex) -> float:
        return _turning(self, p, 0)


def _turning(piece: Bezier, p: complex, depth: int) -> float:
    rays = [c - p for c in piece.control]
    middle = sum((ray / abs(ray) for ray in rays if ray != 0), 0j)
    # all control points on one side of a line through p: the curve is in their hull and turns by as much as its chord
    if depth == DEPTH or all(ray.real * middle.real + ray.imag * middle.imag > 0.0 for ray in rays):
        return phase(rays[0].conjugate() * rays[-1]) if rays[0] != 0 and rays[-1] != 0 else 0.0
    first, second = piece.split(0.5)
    return _turning(first, p, depth + 1) + _turning(second, p, depth + 1)


def _values(coefficients: tuple[complex, ...] | list[complex] | list[float], t: Floats) -> Complexes:
    """Return Σ cᵢ·C(n, i)·tⁱ·(1 − t)ⁿ⁻ⁱ for an array of parameters, by Horner's scheme in 1 − t."""
    n = len(coefficients) - 1
    if n == 0:
        return np.full(np.shape(t), coefficients[0], dtype=complex)
    s = 1.0 - t
    total = coefficients[0] * s
    power = t
    for i in range(1, n):
        total = (total + (comb(n, i) * coefficients[i]) * power) * s
        power = power * t
    return np.asarray(total + coefficients[n] * power)


def _moment_sums(z: Complexes, dz: Complexes) -> Complexes:
    """Return Σ zʲ·conj(z)ᵏ·dz for all j + k ≤ 5."""
    conjugate = z.conj()
    return np.array([(z**j * conjugate**k).dot(dz) for j in range(6) for k in range(6 - j)])
