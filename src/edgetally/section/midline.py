"""A second opinion: the formulas of thin-walled beams on the midline of a strip of constant thickness.

They take the shear stress for linear through the wall and neglect its bending. On real outlines they miss by some per
cent, so they stand beside the exact numbers and never replace them.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import inf, pi, sqrt

import numpy as np

from edgetally.curves.arc import Arc
from edgetally.curves.curve import Complexes, Curve, Floats
from edgetally.curves.line import Line
from edgetally.section.boundary import Boundary
from edgetally.section.frame import area_moments
from edgetally.section.nodes import Nodes
from edgetally.section.panels import whole
from edgetally.section.simplified import simplified

# The two sides of a strip may deviate from each other by this share of its thickness: ends joined over a gap, and
# coordinates rounded in the drawing, make them do.
EVEN = 1e-2


@dataclass(frozen=True, eq=False)
class Strip:
    """The midline of a wall of one thickness [unit], from end to end; `closed` if it is a single cell.

    `uneven` is the largest share of the thickness by which the distance of its sides was found to differ from it.
    """

    thickness: float
    midline: tuple[Curve, ...]
    closed: bool
    uneven: float = 0.0


@dataclass(frozen=True, eq=False)
class ThinWalled:
    """Thin-walled numbers in powers of the unit: J, C_w, the shear centre, the shear compliance (2, 2) at ν = 0."""

    torsion_constant: float
    warping_constant: float
    shear_centre: complex
    shear_compliance: Floats

    @property
    def shear_area_x(self) -> float:
        return _area(float(self.shear_compliance[0, 0]))

    @property
    def shear_area_y(self) -> float:
        return _area(float(self.shear_compliance[1, 1]))


def _area(compliance: float) -> float:
    """Return 1/F, inf across a plate, which these formulas cannot load that way."""
    return 1.0 / compliance if compliance > 0.0 else inf


def strip_of(loops: Sequence[Sequence[Curve]]) -> Strip | None:
    """Return the strip that a region is, None if its walls are not all of one thickness.

    One loop with two square ends, or an outer loop and one void. Of m the length of the midline, A = t·m, and the
    perimeter is 2m + 2t with ends and 2m without; so t follows from two numbers, and then the sides are compared piece
    by piece: lines parallel at t, arcs about one centre, and arcs of radius t about a sharp inner corner.
    """
    if len(loops) not in (1, 2):
        return None
    boundary = Boundary.of(loops)
    cleaned = [simplified(loop, boundary.size) for loop in loops]
    if not all(cleaned):
        return None
    boundary = Boundary.of(cleaned)
    if len(cleaned) == 2:
        return _cell(cleaned[0], cleaned[1], 2.0 * _area_of(boundary) / float(boundary.length.sum()))
    thickness = nominal_thickness(boundary)
    return None if thickness is None else _open(boundary, thickness)


def nominal_thickness(boundary: Boundary) -> float | None:
    """Return the t of an open strip of this area A and perimeter P: the smaller root of t² − P·t/2 + A = 0.

    None where there is none: A is more than a square of this perimeter would have.
    """
    area, perimeter = _area_of(boundary), float(boundary.length.sum())
    if area <= 0.0 or perimeter**2 < 16.0 * area:
        return None
    return 4.0 * area / (perimeter + sqrt(perimeter**2 - 16.0 * area))  # without cancellation


def _area_of(boundary: Boundary) -> float:
    origin = complex(boundary.start[0])
    return float(area_moments(Boundary.of([[c.moved(1.0, -origin) for c in boundary.curves]]))[0, 0])


def _open(boundary: Boundary, thickness: float) -> Strip | None:
    square = np.abs(boundary.turn - 0.5 * pi) < EVEN
    before = np.roll(square, 1)
    even = np.abs(boundary.length - thickness) < EVEN * thickness
    ends = np.flatnonzero(square & before & even & boundary.is_line)
    if len(ends) != 2:
        return None
    first, last = int(ends[0]), int(ends[1])
    curves = boundary.curves
    right = list(curves[first + 1 : last])
    left = [curve.reversed() for curve in reversed([*curves[last + 1 :], *curves[:first]])]
    wall = _Wall(thickness, [0.0])
    midline = wall.between(left, right)
    return Strip(thickness, tuple(midline), closed=False, uneven=max(wall.off)) if midline else None


def _cell(outer: Sequence[Curve], void: Sequence[Curve], thickness: float) -> Strip | None:
    inner = [curve.reversed() for curve in reversed(void)]
    for shift in range(len(inner)):
        wall = _Wall(thickness, [0.0])
        midline = wall.between([*inner[shift:], *inner[:shift]], outer)
        if midline:
            return Strip(thickness, tuple(midline), closed=True, uneven=max(wall.off))
    return None


@dataclass(frozen=True, slots=True)
class _Wall:
    """Walks along both sides of a wall of a thickness; `off` gathers by what share of it they were found to differ."""

    thickness: float
    off: list[float]

    def between(self, left: Sequence[Curve], right: Sequence[Curve]) -> list[Curve] | None:
        """Return the curves midway between the two sides, None if they are not everywhere `thickness` apart."""
        midline: list[Curve] = []
        i = j = 0
        while i < len(left) or j < len(right):
            a, b = left[i] if i < len(left) else None, right[j] if j < len(right) else None
            at_a = a.start if a else left[-1].end
            at_b = b.start if b else right[-1].end
            if a and b and (middle := self._midway(a, b)):
                i, j = i + 1, j + 1
            elif a and (middle := self._about(a, at_b)):
                i += 1
            elif b and (middle := self._about(b, at_a)):
                j += 1
            else:
                return None
            midline.append(middle)
        return midline

    def _near(self, *distances: float) -> bool:
        shares = [abs(d) / self.thickness for d in distances]
        if max(shares) >= EVEN:
            return False
        self.off.extend(shares)
        return True

    def _midway(self, a: Curve, b: Curve) -> Curve | None:
        if isinstance(a, Line) and isinstance(b, Line):
            along = (b.end - b.start) / b.length
            apart = [((z - b.start) * along.conjugate()).imag - self.thickness for z in (a.start, a.end)]
            forward = ((a.end - a.start) * along.conjugate()).real > 0.0
            if forward and self._near(*apart):
                return Line(0.5 * (a.start + b.start), 0.5 * (a.end + b.end))
        if isinstance(a, Arc) and isinstance(b, Arc) and abs(a.sweep - b.sweep) < EVEN:
            wall = abs(a.radius - b.radius) - self.thickness
            if self._near(wall, abs(a.centre - b.centre)):
                return Arc(0.5 * (a.start + b.start), 0.5 * (a.spoke + b.spoke), 0.5 * (a.sweep + b.sweep))
        return None

    def _about(self, arc: Curve, corner: complex) -> Curve | None:
        """Return the midline of an outer arc about a sharp inner corner."""
        if isinstance(arc, Arc) and self._near(arc.radius - self.thickness, abs(arc.centre - corner)):
            return Arc(0.5 * (arc.start + corner), 0.5 * arc.spoke, arc.sweep)
        return None


def thin_walled(strip: Strip) -> ThinWalled:
    """Evaluate the formulas of Vlasov (open) and Bredt (one cell) on the midline, of length m and thickness t.

        J = t³m/3,  and 4A_m²t/m more for a cell that encloses A_m
        ω′ = −(x dy − y dx)/ds, and 2A_m/m more for a cell; shear centre and C_w from ω as for the exact warping
        q = −∫(αx + βy)t ds, in a cell less its mean; F = ∫qᵢqⱼ/t ds

    Source: V. Z. Vlasov, Thin-Walled Elastic Beams; R. Bredt, VDI-Zeitschrift 40 (1896).
    """
    nodes = Nodes.on(whole(Boundary.of([strip.midline]), 12))
    t, ds = strip.thickness, nodes.ds
    length = float(ds.sum())
    centroid = complex(nodes.z @ ds) / length
    z: Complexes = nodes.z - centroid
    x, y = z.real, z.imag
    second = t * np.array([[(x * x) @ ds, (x * y) @ ds], [(x * y) @ ds, (y * y) @ ds]])
    torsion = t**3 * length / 3.0
    spin = x * nodes.slope.imag - y * nodes.slope.real
    if strip.closed:
        enclosed = 0.5 * float(spin @ nodes.weight)
        torsion += 4.0 * enclosed**2 * t / length
        spin = spin - 2.0 * enclosed / length * np.abs(nodes.slope)
    omega = -nodes.antiderivative(spin)
    omega = omega - float(omega @ ds) / length
    # ω_s = ω − y_s x + x_s y has no first moments
    moments = t * np.array([(x * omega) @ ds, (y * omega) @ ds])
    # a plate has no second moment across its midline: no load, no displacement that way
    loads = np.linalg.pinv(second, rcond=1e-12, hermitian=True)
    y_s, minus_x_s = (float(v) for v in loads @ moments)
    about = omega - y_s * x - minus_x_s * y
    flows = np.column_stack(
        [nodes.antiderivative((load[0] * x + load[1] * y) * t * np.abs(nodes.slope)) for load in loads]
    )
    if strip.closed:
        flows = flows - (ds @ flows) / length
    compliance: Floats = (flows * ds[:, None]).T @ flows / t
    return ThinWalled(torsion, t * float(about**2 @ ds), centroid + complex(-minus_x_s, y_s), compliance)
