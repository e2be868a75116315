"""The frame in which a region is solved: centroid at the origin, principal axes, area 1; and its moments there."""

from __future__ import annotations

from cmath import rect
from collections.abc import Sequence
from dataclasses import dataclass
from math import atan2, hypot, sqrt

import numpy as np

from edgetally.curves.curve import Complexes, Curve, Floats
from edgetally.section.boundary import Boundary
from edgetally.section.nodes import Nodes
from edgetally.section.panels import whole

HIGHEST = 4


@dataclass(frozen=True, eq=False)
class Frame:
    """z in the drawing = origin + turn·scale·(z in the frame); `turn` is a unit number, `scale` = √A.

    `moments` (5, 5) holds m_pq = ∫xᵖy^q dA in the frame, p + q ≤ 4.
    """

    boundary: Boundary
    origin: complex
    turn: complex
    scale: float
    moments: Floats

    @classmethod
    def around(cls, loops: Sequence[Sequence[Curve]]) -> Frame:
        """Find the frame of the region. Raises ValueError if it encloses no positive area."""
        rough = Boundary.of(loops)
        ends = np.concatenate([rough.start, rough.end])
        origin = complex(0.5 * (ends.real.min() + ends.real.max()), 0.5 * (ends.imag.min() + ends.imag.max()))
        turn, scale = 1.0 + 0.0j, rough.size
        # twice: the moments about the middle of the box give the frame, those in the frame lose nothing
        for _ in range(2):
            m = area_moments(_placed(loops, origin, turn, scale))
            if not m[0, 0] > 1e-14 or not np.isfinite(m).all():
                raise ValueError(f"the region encloses no positive area ({m[0, 0] * scale**2:.6g})")
            centroid = complex(m[1, 0], m[0, 1]) / m[0, 0]
            origin += turn * scale * centroid
            second_x, second_y = m[0, 2] - m[0, 0] * centroid.imag**2, m[2, 0] - m[0, 0] * centroid.real**2
            product = m[1, 1] - m[0, 0] * centroid.real * centroid.imag
            if hypot(0.5 * (second_x - second_y), product) > 1e-9 * (second_x + second_y):
                turn *= rect(1.0, 0.5 * atan2(-2.0 * product, second_x - second_y))
            scale *= sqrt(m[0, 0])
        boundary = _placed(loops, origin, turn, scale)
        return cls(boundary, origin, turn, scale, area_moments(boundary))

    def outside(self, z: Complexes) -> Complexes:
        """Return points of the frame in the drawing's coordinates."""
        return self.origin + self.turn * self.scale * z


def _placed(loops: Sequence[Sequence[Curve]], origin: complex, turn: complex, scale: float) -> Boundary:
    factor = turn.conjugate() / scale
    # moved to the origin first, by a difference that loses nothing, and turned then
    return Boundary.of([[curve.moved(1.0, -origin).moved(factor, 0j) for curve in loop] for loop in loops])


def area_moments(boundary: Boundary) -> Floats:
    """Return m_pq = ∫xᵖy^q dA = 1/(p + q + 2) ∮ xᵖy^q (x dy − y dx) for p + q ≤ 4 in an array (5, 5), else 0."""
    nodes = Nodes.on(whole(boundary))
    x, y = nodes.z.real, nodes.z.imag
    sector = x * nodes.dz.imag - y * nodes.dz.real
    moments = np.zeros((HIGHEST + 1, HIGHEST + 1))
    for p in range(HIGHEST + 1):
        for q in range(HIGHEST + 1 - p):
            moments[p, q] = float((x**p * y**q) @ sector) / (p + q + 2)
    return moments
