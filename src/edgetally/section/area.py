"""Everything that follows from the moments of the area: area to elastic moduli."""

from __future__ import annotations

from cmath import rect
from collections.abc import Sequence
from dataclasses import dataclass
from math import degrees, hypot

from edgetally.curves import Packed
from edgetally.curves.green import EPS, Moments, moments
from edgetally.findings import Finding
from edgetally.section.axes import Axes, principal_axes
from edgetally.section.bounded import Bounded
from edgetally.section.kinds import unit_of
from edgetally.section.record import Property, Section
from edgetally.units import MM_PER


@dataclass(frozen=True, eq=False)
class AreaResult:
    """The properties by key, in the order of print; the centroid and the axes for the figure; and findings."""

    properties: dict[str, Property]
    centroid: complex
    axes: Axes
    findings: tuple[Finding, ...]


def area_properties(section: Section, *, density: float | None = None) -> AreaResult:
    """Derive all properties that are integrals over the area or extents of the boundary.

    `density` in kg/m³ adds the mass per length. Lengths in the section's unit; angles in degrees.

    The moments are integrated about the middle of the box first, which gives the centroid; about the centroid then,
    and once more in the principal frame, because I₂ ≪ I₁ would be lost in (I_x + I_y)/2 − R. Elastic moduli are I over
    the distance to the extreme fibre of the true curves. Each number's error follows from the bounds of the moments
    (`curves.green.moments`) through the formulas (`Bounded`).
    """
    sums = Sums(section)
    unit, scale = section.unit, section.size
    out: dict[str, Property] = {}

    def give(key: str, number: Bounded, *, relative_to: float = 0.0) -> None:
        out[key] = Property(key, number.value, unit_of(key, unit), number.relative(relative_to))

    area = sums.area
    give("area", area)
    outer = sum(region.outer.perimeter for region in section.regions)
    total = sum(loop.perimeter for loop in section.loops)
    pieces = len(section.packed)
    give("outer_perimeter", Bounded(outer, 2 * pieces * sums.shift + 4 * EPS * outer))
    give("total_perimeter", Bounded(total, 2 * pieces * sums.shift + 4 * EPS * total))
    extents = sums.central_extents
    give("width", extents.right + extents.left)
    give("height", extents.top + extents.bottom)
    give("centroid_x", sums.centroid_x, relative_to=scale)
    give("centroid_y", sums.centroid_y, relative_to=scale)

    second_x, second_y, product = sums.central
    polar = second_x + second_y
    give("second_moment_x", second_x)
    give("second_moment_y", second_y)
    give("product_of_inertia", product, relative_to=0.5 * polar.value)
    give("polar_moment", polar)

    axes = principal_axes(second_x, second_y, product)
    first, second = sums.principal(axes)
    give("principal_moment_1", first)
    give("principal_moment_2", second)
    angle = Bounded(degrees(axes.angle.value), degrees(axes.angle.slack))
    give("principal_angle", angle, relative_to=degrees(1.0))

    x, y = sums.centroid_x, sums.centroid_y
    origin_x, origin_y = second_x + area * y * y, second_y + area * x * x
    give("second_moment_x_origin", origin_x)
    give("second_moment_y_origin", origin_y)
    about_origin = product + area * x * y
    give("product_of_inertia_origin", about_origin, relative_to=0.5 * (origin_x + origin_y).value)

    for key, moment in (("x", second_x), ("y", second_y), ("1", first), ("2", second)):
        give(f"radius_of_gyration_{key}", (moment / area).root())
    give("elastic_modulus_x_top", second_x / extents.top)
    give("elastic_modulus_x_bottom", second_x / extents.bottom)
    give("elastic_modulus_y_left", second_y / extents.left)
    give("elastic_modulus_y_right", second_y / extents.right)
    own = sums.extents(rect(1.0, axes.angle.value), axes.angle.slack)
    give("elastic_modulus_1_positive", first / own.top)
    give("elastic_modulus_1_negative", first / own.bottom)
    give("elastic_modulus_2_positive", second / own.right)
    give("elastic_modulus_2_negative", second / own.left)

    if density is not None:
        square_mm = MM_PER[unit] ** 2
        give("mass_per_length", area * Bounded(square_mm * density * 1e-6))
    findings: tuple[Finding, ...] = ()
    if axes.arbitrary:
        text = (
            "the principal moments are equal: every axis through the centroid is principal, and the angle is given as 0"
        )
        findings = (Finding("axes-arbitrary", "note", text),)
    return AreaResult(out, complex(x.value, y.value), axes, findings)


@dataclass(frozen=True, slots=True)
class Extents:
    """Distances from the centroid to the extreme fibres along the axes of a frame; positive but for a part alone."""

    right: Bounded
    top: Bounded
    left: Bounded
    bottom: Bounded


class Sums:
    """The moments of one section, each integrated where it loses nothing; or of parts, each weighted by a factor."""

    def __init__(self, section: Section, weighted: Sequence[tuple[Section, Bounded]] = ()) -> None:
        """Sum over `section`, or over the `weighted` parts that make it up."""
        self._middle = section.middle
        self._packed = section.packed.framed(section.middle)
        self._parts = [(part.packed.framed(section.middle), weight) for part, weight in weighted]
        # the coordinates' own rounding, and that of the change of frame
        self.size = section.size
        self.shift = section.input_rounding + EPS * self.size
        area, first_x, first_y, *_ = self._moments(0j)
        mx, my = first_x / area, first_y / area
        self._centroid = complex(mx.value, my.value)
        self.centroid_x = Bounded(self._middle.real) + mx
        self.centroid_y = Bounded(self._middle.imag) + my
        self._wander = max(mx.slack, my.slack)
        self.area, _, _, *self.central = self._moments(self._centroid)
        self.central_extents = self.extents(1.0)

    def _moments(self, origin: complex, turn: complex = 1.0) -> tuple[Bounded, ...]:
        """Return A, ∫x dA, ∫y dA, ∫y² dA, ∫x² dA, ∫xy dA about `origin`, axes turned by the unit number `turn`."""
        if not self._parts:
            return _bounded(moments(self._packed.framed(origin, turn), input_rounding=self.shift))
        total: tuple[Bounded, ...] = (Bounded(0.0),) * 6
        for packed, weight in self._parts:
            own = _bounded(moments(packed.framed(origin, turn), input_rounding=self.shift))
            total = tuple(sum_ + weight * one for sum_, one in zip(total, own, strict=True))
        return total

    def principal(self, axes: Axes) -> tuple[Bounded, Bounded]:
        """Return I₁ and I₂, integrated about the axes themselves."""
        _, _, _, first, second, _ = self._moments(self._centroid, rect(1.0, axes.angle.value))
        # turned by φ too far they change by (I₁ − I₂)·sin²φ
        astray = abs(first.value - second.value) * axes.angle.slack**2
        first, second = Bounded(first.value, first.slack + astray), Bounded(second.value, second.slack + astray)
        return (second, first) if axes.arbitrary and first.value < second.value else (first, second)

    def extents(self, turn: complex, astray: float = 0.0, packed: Packed | None = None) -> Extents:
        """Return the distances from the centroid to the extreme fibres along axes turned by `turn`.

        Axes turned too far by up to `astray` [rad] move a fibre by that times its distance from the centroid. Of the
        curves `packed` alone, if given, where a distance may be negative.
        """
        curves = self._packed if packed is None else packed.framed(self._middle)
        curves = curves.framed(self._centroid)
        reach = [float(curves.supports(turn * d).max()) for d in (1, 1j, -1, -1j)]
        farthest = hypot(max(reach[0], reach[2]), max(reach[1], reach[3]))
        slack = self.shift + self._wander + astray * farthest
        return Extents(*(Bounded(distance, slack) for distance in reach))


def _bounded(m: Moments) -> tuple[Bounded, ...]:
    return tuple(Bounded(getattr(m, key), m.slack[key]) for key in ("m00", "m10", "m01", "m02", "m20", "m11"))
