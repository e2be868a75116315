"""Green's theorem: moments of an area from its boundary curves.

With c = x dy − y dx along the boundary, material on the left,

    m_pq = ∫ xᵖ y^q dA = 1/(p + q + 2) ∮ xᵖ y^q c,

the divergence theorem for the field (x, y)·xᵖ y^q, which is homogeneous of degree p + q + 1 (Euler's theorem). Each
curve and the origin span a sector, and the integral sums the sectors; c is constant along a straight piece.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from edgetally.curves.packed import Packed

EPS = float(np.finfo(float).eps)
# Roundings that one term of a moment passes through: frame, products, weight, sum.
ROUNDINGS = 8.0


@dataclass(frozen=True, slots=True)
class Moments:
    """Raw moments up to the second order about the origin of the frame, and a bound of each one's rounding error.

    m_pq = ∫xᵖy^q dA [unit^(p+q+2)]; `slack` has the same keys. m11 > 0 where the bulk lies in quadrants 1 and 3.
    """

    m00: float
    m10: float
    m01: float
    m20: float
    m11: float
    m02: float
    slack: dict[str, float]


def moments(curves: Packed, *, input_rounding: float = 0.0) -> Moments:
    """Integrate the raw moments of the area enclosed by closed directed `curves`.

    Straight pieces in closed form, arcs by Gauss–Legendre; relative rounding near 1e-15 where nothing cancels.
    `input_rounding` [unit] is by how much each coordinate may be off before it came here. The slack is

        rounding of the sum: ROUNDINGS·ε·(max|x|·Σ|Δy| + max|y|·Σ|Δx|)·max|x|ᵖ·max|y|^q / (p + q + 2), and
        movement of the boundary: (input rounding)·perimeter·max|x|ᵖ·max|y|^q,

    the second because a boundary moved by δ along its normal changes ∫f dA by at most δ∮|f| ds.
    """
    total = np.zeros(6)
    for start, end in curves.straight_blocks():
        chord, middle = end - start, start + end
        dx, dy, x, y = chord.real.copy(), chord.imag.copy(), middle.real.copy(), middle.imag.copy()
        # with s = z₀ + z₁ and d = z₁ − z₀: c = ½(sₓdᵧ − sᵧdₓ), and the mean of x² along the piece is (s² + d²/3)/4
        c = x * dy
        c -= y * dx
        u, v = x * c, y * c
        p = dx * c
        total += 0.5 * np.array([
            c.sum(),
            0.5 * u.sum(),
            0.5 * v.sum(),
            0.25 * (x.dot(u) + dx.dot(p) / 3.0),
            0.25 * (y.dot(u) + dy.dot(p) / 3.0),
            0.25 * (y.dot(v) + (dy * c).dot(dy) / 3.0),
        ])  # fmt: skip
    for z, dz in curves.curved_nodes():
        x, y = z.real, z.imag
        c = x * dz.imag - y * dz.real
        u, v = x * c, y * c
        total += [c.sum(), u.sum(), v.sum(), (x * u).sum(), (y * u).sum(), (y * v).sum()]
    m00, m10, m01, m20, m11, m02 = (float(m) for m in total / [2, 3, 3, 4, 4, 4])

    low_x, low_y, high_x, high_y = curves.box
    x_max, y_max = max(-low_x, high_x), max(-low_y, high_y)
    chord = curves.end - curves.start
    travel_x = float(np.where(curves.is_arc, curves.lengths, np.abs(chord.real)).sum())
    travel_y = float(np.where(curves.is_arc, curves.lengths, np.abs(chord.imag)).sum())
    summed = ROUNDINGS * EPS * (x_max * travel_y + y_max * travel_x)
    shifted = input_rounding * float(curves.lengths.sum())
    slack = {
        f"m{p}{q}": (summed / (p + q + 2) + shifted) * x_max**p * y_max**q
        for p, q in ((0, 0), (1, 0), (0, 1), (2, 0), (1, 1), (0, 2))
    }
    return Moments(m00, m10, m01, m20, m11, m02, slack)


def enclosed_area(curves: Packed) -> float:
    """Return the signed area of a closed loop, positive counter-clockwise, integrated about one of its own points."""
    return moments(curves.framed(complex(curves.start[0]))).m00
