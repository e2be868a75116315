"""The distance from a point to a curve, on the true curve."""

from __future__ import annotations

from cmath import phase
from math import tau

import numpy as np

from edgetally.curves import bernstein
from edgetally.curves.arc import Arc
from edgetally.curves.bezier import Bezier
from edgetally.curves.curve import Curve
from edgetally.curves.elliptic import EllipticArc
from edgetally.curves.line import Line

POLISH = 6


def nearest(curve: Curve, p: complex) -> tuple[float, float]:
    """Return (distance, t) of the point z(t) of the curve that is nearest to p; of several the one with smallest t."""
    best = min((abs(curve.start - p), 0.0), (abs(curve.end - p), 1.0))
    if isinstance(curve, Line):
        chord = curve.end - curve.start
        d = p - curve.start
        along = d.real * chord.real + d.imag * chord.imag
        square = chord.real * chord.real + chord.imag * chord.imag
        if 0.0 < along < square:
            # the offset from the chord itself: |p − z(t)| would carry the rounding of z(t)
            across = abs(chord.real * d.imag - chord.imag * d.real) / abs(chord)
            best = min(best, (across, along / square))
        return best
    if isinstance(curve, Arc):
        for t in at_turn(curve.sweep, phase(1.0 + (p - curve.start) / curve.spoke)):
            best = min(best, (abs(ring_gap(curve, p)), t))
        return best
    if isinstance(curve, EllipticArc):
        return _nearest_elliptic(curve, p, best)
    if isinstance(curve, Bezier):
        return _nearest_bezier(curve, p, best)
    raise TypeError(f"no distance to a curve of kind {type(curve).__name__}")


def at_turn(sweep: float, angle: float) -> list[float]:
    """Return the parameters t of 0 < t < 1 with sweep·t = angle up to whole turns, for −π ≤ angle ≤ π [rad]."""
    turn = angle if sweep > 0 else -angle
    turn = turn if turn >= 0 else turn + tau
    return [turn / abs(sweep)] if 0.0 < turn < abs(sweep) else []


def ring_gap(arc: Arc, p: complex) -> float:
    """Return |p − centre| − radius, negative inside the circle, without the cancellation of a radius far larger."""
    d = p - arc.start
    out = d + arc.spoke
    power = d.real * d.real + d.imag * d.imag + 2.0 * (d.real * arc.spoke.real + d.imag * arc.spoke.imag)
    return power / (abs(out) + abs(arc.spoke))


def _nearest_elliptic(curve: EllipticArc, p: complex, best: tuple[float, float]) -> tuple[float, float]:
    # With w = e^{iθ} and k = centre − p, the condition Re(conj(z − p)·z′) = 0 times w² is a polynomial of degree 4.
    k = curve.centre - p
    outer = 2.0 * curve.u * curve.v.conjugate()
    inner = k.conjugate() * curve.u + k * curve.v.conjugate()
    roots = np.roots([outer, inner, 0.0, -inner.conjugate(), -outer.conjugate()])
    # Roots off the unit circle (no foot of a perpendicular, or a double one split by rounding) do as starts as well.
    for root in roots:
        for t in at_turn(curve.sweep, phase(complex(root))):
            best = min(best, _polished(curve, p, t))
    return best


def _polished(curve: EllipticArc, p: complex, t: float) -> tuple[float, float]:
    """Follow Newton's method for the least |z(t) − p| from t, as long as it comes nearer."""
    distance = abs(curve.point(t) - p)
    for _ in range(POLISH):
        out, slope = curve.point(t) - p, curve.derivative(t)
        bent = curve.second_derivative(t)
        curvature = abs(slope) ** 2 + out.real * bent.real + out.imag * bent.imag
        if curvature <= 0.0:
            break
        trial = t - (out.real * slope.real + out.imag * slope.imag) / curvature
        trial = min(max(trial, 0.0), 1.0)
        nearer = abs(curve.point(trial) - p)
        if nearer >= distance:
            break
        distance, t = nearer, trial
    return distance, t


def _nearest_bezier(curve: Bezier, p: complex, best: tuple[float, float]) -> tuple[float, float]:
    # The nearest point is an end or a root of Re(conj(N)·(N′W − N·W′)), with z − p = N/W: of degree 3p − 1, or 2p − 1.
    if curve.weights is None:
        rays = [q - p for q in curve.control]
        rate = bernstein.product([q.conjugate() for q in rays], bernstein.slope(rays))
    else:
        weights = [complex(w) for w in curve.weights]
        rays = [w * (q - p) for q, w in zip(curve.control, weights, strict=True)]
        back = [q.conjugate() for q in rays]
        growing = bernstein.product(bernstein.product(back, bernstein.slope(rays)), weights)
        fading = bernstein.product(bernstein.product(back, rays), bernstein.slope(weights))
        rate = [g - f for g, f in zip(growing, fading, strict=True)]
    for t in bernstein.roots([r.real for r in rate]):
        z, slope = curve.point(t), curve.derivative(t)
        best = min(best, (abs(z - p), t))
        if slope != 0:  # on the curve itself the root is blunt by the rounding of the far end: one more projection
            t = min(max(t - ((z - p) * slope.conjugate()).real / abs(slope) ** 2, 0.0), 1.0)
            best = min(best, (abs(curve.point(t) - p), t))
    return best
