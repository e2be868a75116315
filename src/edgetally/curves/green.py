"""Green's theorem: moments of an area from its boundary curves.

With c = x dy − y dx along the boundary, material on the left,

    m_pq = ∫ xᵖ y^q dA = 1/(p + q + 2) ∮ xᵖ y^q c,

the divergence theorem for the field (x, y)·xᵖ y^q, which is homogeneous of degree p + q + 1 (Euler's theorem). Each
curve and the origin span a sector, and the integral sums the sectors; c is constant along a straight piece.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from edgetally.curves.curve import Complexes, Floats
from edgetally.curves.packed import BLOCK, Packed

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

    Straight pieces in closed form, others by Gauss–Legendre; relative rounding near 1e-15 where nothing cancels.
    `input_rounding` [unit] is by how much each coordinate may be off before it came here. The slack is

        rounding of the sum: ROUNDINGS·ε·(max|x|·Σ|Δy| + max|y|·Σ|Δx|)·max|x|ᵖ·max|y|^q / (p + q + 2), and
        movement of the boundary: (input rounding)·perimeter·max|x|ᵖ·max|y|^q,

    the second because a boundary moved by δ along its normal changes ∫f dA by at most δ∮|f| ds.
    """
    sums, reach, travel, perimeter = np.zeros((5, 5)), np.zeros(2), np.zeros(2), 0.0
    rows = np.ones((11, min(BLOCK, len(curves))))
    for start, end in curves.straight_blocks():
        z0, z1 = _coordinates(start), _coordinates(end)
        # rows: d = z₁ − z₀, s = z₀ + z₁ and ones; their products with c; one to spare
        plain, weighted, spare = rows[:5, : len(start)], rows[5:10, : len(start)], rows[10, : len(start)]
        d, s, c = plain[:2], plain[2:4], weighted[4]
        np.subtract(z1, z0, out=d)
        np.add(z1, z0, out=s)
        np.multiply(s[0], d[1], out=c)
        np.multiply(s[1], d[0], out=spare)
        c -= spare
        np.multiply(plain[:4], c, out=weighted[:4])
        sums += weighted @ plain.T
        if input_rounding:
            perimeter += float(np.sqrt(np.einsum("ij,ij->j", d, d, out=spare), out=spare).sum())
        size = np.abs(plain[:4], out=weighted[:4])
        travel += size[:2] @ plain[4]
        size[2:] += size[:2]  # |s| + |d| is twice the larger one of the two ends
        np.maximum(reach, size[2:].max(axis=1), out=reach)
    # c was twice the one above, and the mean of x² along a straight piece is (s² + d²/3)/4
    mean = sums[2:4, 2:4] + sums[:2, :2] / 3.0
    total = np.array([0.5 * sums[4, 4], *(0.25 * sums[2:4, 4]), *(0.125 * mean[[0, 0, 1], [0, 1, 1]])])
    reach *= 0.5
    for z, dz in curves.curved_nodes():
        x, y = z.real, z.imag
        c = x * dz.imag - y * dz.real
        u, v = x * c, y * c
        total += [c.sum(), u.sum(), v.sum(), (x * u).sum(), (y * u).sum(), (y * v).sum()]
    m00, m10, m01, m20, m11, m02 = (float(m) for m in total / [2, 3, 3, 4, 4, 4])

    if len(curves.curved):
        low_x, low_y, high_x, high_y = curves.curved.box
        reach = np.maximum(reach, [max(-low_x, high_x), max(-low_y, high_y)])
        bent = float(curves.curved.lengths.sum())
        travel += bent
        perimeter += bent
    (x_max, y_max), (travel_x, travel_y) = reach.tolist(), travel.tolist()
    summed = ROUNDINGS * EPS * (x_max * travel_y + y_max * travel_x)
    shifted = input_rounding * perimeter
    slack = {
        f"m{p}{q}": (summed / (p + q + 2) + shifted) * x_max**p * y_max**q
        for p, q in ((0, 0), (1, 0), (0, 1), (2, 0), (1, 1), (0, 2))
    }
    return Moments(m00, m10, m01, m20, m11, m02, slack)


def _coordinates(z: Complexes) -> Floats:
    """Return the coordinates (2, n) of complex numbers (n,), without a copy where they lie in one piece."""
    return np.ascontiguousarray(z, dtype=complex).view(float).reshape(-1, 2).T


def enclosed_area(curves: Packed) -> float:
    """Return the signed area of a closed loop, positive counter-clockwise, integrated about one of its own points."""
    return moments(curves.framed(complex(curves.start[0]))).m00
