"""Parts of different stiffness that bend as one section: the transformed section, and what it is worth in each part."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import degrees

from edgetally.section.area import Sums
from edgetally.section.axes import Axes, principal_axes
from edgetally.section.bounded import Bounded
from edgetally.section.kinds import unit_of
from edgetally.section.record import Property, Section
from edgetally.units import FORCES, MM_PER, Unit, force_unit, length_factor


@dataclass(frozen=True, slots=True)
class Material:
    """What a layer's part is made of: modulus of elasticity [MPa], density [kg/m³] or None."""

    layer: str
    modulus: float
    density: float | None = None


@dataclass(frozen=True, eq=False)
class CompositePart:
    """One part: its material, its regions, its own area, and by key where its extreme fibres lie and its moduli.

    `fibre_top` … are distances from the elastic centroid, positive on the side named, so negative where the whole part
    lies on the other side. `elastic_modulus_x_top` … = EI/(E·distance) is the moment that stresses that fibre by 1,
    with the sign of the distance; None where the fibre lies on the axis and is not stressed.
    """

    material: Material
    section: Section
    area: Property
    properties: dict[str, Property]


@dataclass(frozen=True, eq=False)
class CompositeResult:
    """The parts, the properties of all together by key in the unit of the results, and what a picture needs.

    `reference` is the modulus [MPa] that the transformed section refers to, the first material's; `whole` holds the
    regions of all parts; `centroid` is the elastic centroid [unit of `whole`].
    """

    reference: float
    parts: tuple[CompositePart, ...]
    properties: dict[str, Property]
    whole: Section
    centroid: complex
    axes: Axes
    out_unit: str

    def natural_scale(self, key: str) -> float:
        """Return what an error is relative to where a value may vanish: the size for coordinates, the mean of those
        about x and y for products, 0 for all others."""
        if key.startswith("elastic_centroid"):
            return self.whole.size * length_factor(self.whole.unit, self.out_unit)
        for product, plain in (
            ("bending_stiffness_xy", "bending_stiffness_"),
            ("transformed_product_of_inertia", "transformed_second_moment_"),
        ):
            if key == product:
                return 0.5 * sum(self.properties[plain + axis].value or 0.0 for axis in "xy")
        return 0.0


KEYS = (
    "axial_stiffness",
    "elastic_centroid_x",
    "elastic_centroid_y",
    "bending_stiffness_x",
    "bending_stiffness_y",
    "bending_stiffness_xy",
    "bending_stiffness_1",
    "bending_stiffness_2",
    "principal_angle",
    "transformed_area",
    "transformed_second_moment_x",
    "transformed_second_moment_y",
    "transformed_product_of_inertia",
    "transformed_principal_moment_1",
    "transformed_principal_moment_2",
    "mass_per_length",
)
"""Every property of a composite section, in the order of print."""

_POWERS = {"elastic_centroid_x": 1, "elastic_centroid_y": 1, "transformed_area": 2}
SIDES = (("x", "top"), ("x", "bottom"), ("y", "left"), ("y", "right"))
"""The axis of bending and the side of the extreme fibre, of which each part has a distance and a modulus."""


def composite_unit(key: str, length: str) -> Unit:
    """Return the unit of a property of a composite section where lengths are in `length`."""
    if key in ("principal_angle", "mass_per_length"):
        return unit_of(key, length)
    if key.endswith("_stiffness") or key.startswith("bending_stiffness"):
        return force_unit(length, 0 if key == "axial_stiffness" else 2)
    return Unit(length, _POWERS.get(key, 4))


def composite_result(parts: Sequence[tuple[Material, Section]], out_unit: str) -> CompositeResult:
    """Derive the properties of parts that are bonded so that plane sections stay plane.

    With n = E/E_ref, E_ref the modulus of the first part, the transformed section has the moments Σ n ∫f dA, each
    integrated over the true boundary of the part about the elastic centroid of all: A_t = Σ n A, I_x,t = Σ n ∫y² dA,
    I_y,t = Σ n ∫x² dA, I_xy,t = +Σ n ∫xy dA. EA = E_ref A_t, EI = E_ref I_t. A bending moment M about x, where
    I_xy,t = 0, stresses a fibre of modulus E at the distance y by σ = E·M·y/EI_x.

    Forces are in what `units.FORCES` gives for `out_unit`. Raises nothing; the parts must not lie over each other.
    Source: any text on strength of materials, the transformed section (Timoshenko & Gere, Mechanics of Materials).
    """
    reference = Bounded(parts[0][0].modulus)
    unit = parts[0][1].unit
    regions = tuple(region for _, section in parts for region in section.regions)
    whole = Section("composite", regions, unit, max(section.input_rounding for _, section in parts))
    ratios = [Bounded(material.modulus) / reference for material, _ in parts]
    sums = Sums(whole, [(section, ratio) for (_, section), ratio in zip(parts, ratios, strict=True)])
    second_x, second_y, product = sums.central
    axes = principal_axes(second_x, second_y, product)
    first, second = sums.principal(axes)
    mean = 0.5 * (second_x + second_y).value

    out: dict[str, Property] = {}
    newtons = Bounded(FORCES[out_unit][1])
    to_force = reference * Bounded(MM_PER[unit] ** 2) / newtons
    to_moment = reference * Bounded(MM_PER[unit] ** 4 / MM_PER[out_unit] ** 2) / newtons

    def give(key: str, number: Bounded, scale: float = 0.0) -> None:
        found = Property(key, number.value, composite_unit(key, unit), number.relative(scale))
        out[key] = found.converted(unit, out_unit)

    def give_stiffness(key: str, number: Bounded, scale: float = 0.0) -> None:
        out[key] = Property(key, number.value, composite_unit(key, out_unit), number.relative(scale))

    give_stiffness("axial_stiffness", sums.area * to_force)
    give("elastic_centroid_x", sums.centroid_x, whole.size)
    give("elastic_centroid_y", sums.centroid_y, whole.size)
    give_stiffness("bending_stiffness_x", second_x * to_moment)
    give_stiffness("bending_stiffness_y", second_y * to_moment)
    give_stiffness("bending_stiffness_xy", product * to_moment, mean * to_moment.value)
    give_stiffness("bending_stiffness_1", first * to_moment)
    give_stiffness("bending_stiffness_2", second * to_moment)
    angle = Bounded(degrees(axes.angle.value), degrees(axes.angle.slack))
    give("principal_angle", angle, degrees(1.0))
    give("transformed_area", sums.area)
    give("transformed_second_moment_x", second_x)
    give("transformed_second_moment_y", second_y)
    give("transformed_product_of_inertia", product, mean)
    give("transformed_principal_moment_1", first)
    give("transformed_principal_moment_2", second)
    areas = [Sums(section).area for _, section in parts]
    mass = _mass([(area, material.density) for area, (material, _) in zip(areas, parts, strict=True)], unit)
    if mass is not None:
        give("mass_per_length", mass)
    made = tuple(
        _part(material, section, area, ratio, sums, out_unit)
        for (material, section), area, ratio in zip(parts, areas, ratios, strict=True)
    )
    centroid = complex(sums.centroid_x.value, sums.centroid_y.value)
    return CompositeResult(reference.value, made, out, whole, centroid, axes, out_unit)


def _mass(parts: Sequence[tuple[Bounded, float | None]], unit: str) -> Bounded | None:
    """Return the mass per length [kg/m] of (area, density), None where a density is not known."""
    total = Bounded(0.0)
    for area, density in parts:
        if density is None:
            return None
        total = total + area * Bounded(MM_PER[unit] ** 2 * density * 1e-6)
    return total


def _part(
    material: Material, section: Section, area: Bounded, ratio: Bounded, sums: Sums, out_unit: str
) -> CompositePart:
    unit = section.unit
    extents = sums.extents(1.0, packed=section.packed)
    second = {"x": sums.central[0], "y": sums.central[1]}
    own: dict[str, Property] = {}
    for _, side in SIDES:
        distance: Bounded = getattr(extents, side)
        own[f"fibre_{side}"] = Property(f"fibre_{side}", distance.value, Unit(unit), distance.relative(sums.size))
    for axis, side in SIDES:
        key = f"elastic_modulus_{axis}_{side}"
        distance = getattr(extents, side)
        if abs(distance.value) <= 2 * distance.slack:
            own[key] = Property(key, None, unit_of(key, unit), None)
        else:
            modulus = second[axis] / (ratio * distance)
            own[key] = Property(key, modulus.value, unit_of(key, unit), modulus.relative())
    total = Property("area", area.value, unit_of("area", unit), area.relative()).converted(unit, out_unit)
    return CompositePart(material, section, total, {key: p.converted(unit, out_unit) for key, p in own.items()})
