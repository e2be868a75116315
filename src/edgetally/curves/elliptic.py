"""The elliptic arc, up to the full ellipse."""

from __future__ import annotations

from cmath import phase, rect
from dataclasses import dataclass
from math import ceil, copysign, fmod, isfinite, pi, sin, tau

import numpy as np

from edgetally.curves.arc import Arc, swing, swings
from edgetally.curves.curve import UNKNOWN, Complexes, Floats, Source
from edgetally.curves.quadrature import arc_length, gauss

# Below this share of the long part the short part is rounding, and the ellipse a circle.
ROUND = 4e-16
# A DXF parameter range this near to a whole turn [rad] is a whole turn: the file gives 2π to some 15 digits.
WHOLE = 1e-11
# On 60° of parameter the moments up to the fourth are trigonometric polynomials of degree 6, for any axis ratio:
# 12 nodes integrate those to rounding (tests/test_green.py shows it).
NODES = 12
PANEL = pi / 3


@dataclass(frozen=True, slots=True)
class EllipticArc:
    """The elliptic arc z(t) = start + u·(e^{i·sweep·t} − 1) + v·(e^{−i·sweep·t} − 1), with |u| > |v|.

    u and v are the two counter-turning circles whose sum is the ellipse: its semi-axes are |u| + |v| and |u| − |v|,
    and the centre is start − u − v. `sweep` [rad] is that of the parameter (the eccentric angle), positive
    counter-clockwise, |sweep| ≤ 2π. Every affine map z → a·z + b·conj(z) + c keeps this form. Measured from the start,
    for the reason given at Arc.
    """

    start: complex
    u: complex
    v: complex
    sweep: float
    source: Source = UNKNOWN

    @staticmethod
    def from_axes(
        centre: complex, major: complex, ratio: float, start: float, end: float, source: Source = UNKNOWN
    ) -> EllipticArc | Arc:
        """Make the arc of a DXF ELLIPSE: z = centre + major·(cos τ + i·ratio·sin τ), τ from `start` up to `end` [rad].

        `major` is the vector from the centre to the end of one axis; the other is `ratio` times as long, a quarter turn
        counter-clockwise from it (clockwise if `ratio` is negative: extrusion (0, 0, −1)). `end` is taken up to a full
        turn beyond `start`; equal parameters are the full ellipse. Returns an Arc if the axes are equal.
        Raises ValueError if an axis is zero.
        """
        sweep = fmod(end - start, tau)
        sweep = sweep if sweep > 0.0 else sweep + tau  # from 350° to 10°
        if min(sweep, tau - sweep) < WHOLE:
            sweep = tau
        u, v = 0.5 * major * (1.0 + ratio) * rect(1.0, start), 0.5 * major * (1.0 - ratio) * rect(1.0, -start)
        return EllipticArc.normalised(centre + u + v, u, v, sweep, source)

    @staticmethod
    def normalised(start: complex, u: complex, v: complex, sweep: float, source: Source = UNKNOWN) -> EllipticArc | Arc:
        """Make the arc from any u, v: exchanged if |u| < |v|, and an Arc if the smaller one is nothing but rounding.

        Raises ValueError if |u| = |v| to rounding: the ellipse has no breadth.
        """
        if abs(u) < abs(v):
            u, v, sweep = v, u, -sweep
        if not isfinite(abs(u)) or abs(u) - abs(v) <= ROUND * abs(u):
            long, short = abs(u) + abs(v), abs(u) - abs(v)
            raise ValueError(f"an ellipse needs two axes of some length, got semi-axes {long:.6g} and {short:.6g}")
        if abs(v) <= ROUND * abs(u):
            return Arc(start, u, sweep, source)
        return EllipticArc(start, u, v, sweep, source)

    @staticmethod
    def image(arc: Arc | EllipticArc, a: complex, b: complex, shift: complex) -> EllipticArc | Arc:
        """Return the image of an arc under the affine map z → a·z + b·conj(z) + shift; its area scales by |a|² − |b|².

        Scaling x by p and y by q is a = (p + q)/2, b = (p − q)/2. Raises ValueError if the image has no breadth.
        """
        u, v = (arc.spoke, 0j) if isinstance(arc, Arc) else (arc.u, arc.v)
        start = a * arc.start + b * arc.start.conjugate() + shift
        return EllipticArc.normalised(
            start, a * u + b * v.conjugate(), a * v + b * u.conjugate(), arc.sweep, arc.source
        )

    @property
    def centre(self) -> complex:
        return self.start - self.u - self.v

    @property
    def semi_axes(self) -> tuple[float, float]:
        """The longer and the shorter semi-axis."""
        return abs(self.u) + abs(self.v), abs(self.u) - abs(self.v)

    @property
    def is_full_ellipse(self) -> bool:
        return abs(self.sweep) == tau

    @property
    def end(self) -> complex:
        return self.start if self.is_full_ellipse else self.point(1.0)

    @property
    def length(self) -> float:
        return arc_length(self)

    @property
    def bend(self) -> float:
        return self.sweep * self.sweep * (abs(self.u) + abs(self.v))

    def point(self, t: float) -> complex:
        turned = swing(self.sweep * t)
        return self.start + (self.u * turned + self.v * turned.conjugate())

    def derivative(self, t: float) -> complex:
        turned = rect(1.0, self.sweep * t)
        return 1j * self.sweep * (self.u * turned - self.v * turned.conjugate())

    def second_derivative(self, t: float) -> complex:
        """Return z″(t)."""
        turned = rect(1.0, self.sweep * t)
        return -self.sweep * self.sweep * (self.u * turned + self.v * turned.conjugate())

    def points(self, t: Floats) -> Complexes:
        turned = swings(self.sweep * t)
        return self.start + (self.u * turned + self.v * turned.conj())

    def derivatives(self, t: Floats) -> Complexes:
        turned = np.exp(1j * self.sweep * t)
        slopes: Complexes = 1j * self.sweep * (self.u * turned - self.v * turned.conj())
        return slopes

    def nodes(self) -> tuple[Complexes, Complexes]:
        """Return quadrature nodes z and dz = weight·z′: Σ f(z)·dz = ∫f dz to rounding, f a polynomial of degree ≤ 5."""
        panels = ceil(abs(self.sweep) / PANEL * (1 - 1e-12))
        t, w = gauss(NODES)
        at = ((np.arange(panels)[:, None] + t) / panels).ravel()
        return self.points(at), np.tile(w / panels, panels) * self.derivatives(at)

    def split(self, t: float) -> tuple[EllipticArc, EllipticArc]:
        first, second = self.sweep * t, self.sweep * (1.0 - t)
        turned = rect(1.0, first)
        return (
            EllipticArc(self.start, self.u, self.v, first, self.source),
            EllipticArc(self.point(t), self.u * turned, self.v * turned.conjugate(), second, self.source),
        )

    def reversed(self) -> EllipticArc:
        turned = rect(1.0, self.sweep)
        return EllipticArc(self.end, self.u * turned, self.v * turned.conjugate(), -self.sweep, self.source)

    def moved(self, factor: complex, shift: complex) -> EllipticArc:
        return EllipticArc(factor * self.start + shift, factor * self.u, factor * self.v, self.sweep, self.source)

    def mirrored(self) -> EllipticArc:
        return EllipticArc(self.start.conjugate(), self.u.conjugate(), self.v.conjugate(), -self.sweep, self.source)

    def support(self, direction: complex) -> tuple[float, float]:
        # Re(conj(d)·z) = const + Re(k·e^{iθ}): along one direction the ellipse projects as a circle of radius |k| does
        along = direction.conjugate()
        k = along * self.u + direction * self.v.conjugate()
        at_start = (along * self.start).real
        best = (at_start, 0.0)
        at_end = (along * self.end).real
        if at_end > at_start:
            best = (at_end, 1.0)
        turn = fmod(-phase(k) * (1 if self.sweep > 0 else -1) + tau, tau)
        if 0.0 < turn < abs(self.sweep):
            best = max(best, (at_start + 2.0 * abs(k) * sin(0.5 * turn) ** 2, turn / abs(self.sweep)))
        return best

    def on_circle(self, p: complex) -> complex:
        """Return the image of p under the affine map that takes the ellipse to the unit circle and the start to 1.

        With p − centre = u·s + v·conj(s): s = 1 + (conj(u)·d − v·conj(d))/(|u|² − |v|²), d = p − start.
        """
        d = p - self.start
        long, short = self.semi_axes
        return 1.0 + (self.u.conjugate() * d - self.v * d.conjugate()) / (long * short)

    def turning(self, p: complex) -> float:
        if abs(self.sweep) > pi:  # a segment larger than the half ellipse is not on one side of its chord
            first, second = self.split(0.5)
            return first.turning(p) + second.turning(p)
        # As the chord, except that a point between chord and arc is passed on its other side (|u| > |v|: same sense).
        q = (self.start - p).conjugate() * (self.end - p)
        if q.imag == 0.0 and q.real < 0.0:
            return copysign(pi, self.sweep)
        d = self.on_circle(p) - 1.0
        inside = d.real * d.real + d.imag * d.imag + 2.0 * d.real < 0.0
        beside = q.imag * self.sweep < 0.0 and inside
        return phase(q) + (copysign(tau, self.sweep) if beside else 0.0)
