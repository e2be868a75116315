"""Of what kind each property is: the power of the length unit that it has, or a unit that stands for itself."""

from __future__ import annotations

from edgetally.units import Unit

POWERS: dict[str, int] = {
    "area": 2,
    "outer_perimeter": 1,
    "total_perimeter": 1,
    "width": 1,
    "height": 1,
    "centroid_x": 1,
    "centroid_y": 1,
    "second_moment_x": 4,
    "second_moment_y": 4,
    "product_of_inertia": 4,
    "polar_moment": 4,
    "principal_moment_1": 4,
    "principal_moment_2": 4,
    "second_moment_x_origin": 4,
    "second_moment_y_origin": 4,
    "product_of_inertia_origin": 4,
    "radius_of_gyration_x": 1,
    "radius_of_gyration_y": 1,
    "radius_of_gyration_1": 1,
    "radius_of_gyration_2": 1,
    "elastic_modulus_x_top": 3,
    "elastic_modulus_x_bottom": 3,
    "elastic_modulus_y_left": 3,
    "elastic_modulus_y_right": 3,
    "elastic_modulus_1_positive": 3,
    "elastic_modulus_1_negative": 3,
    "elastic_modulus_2_positive": 3,
    "elastic_modulus_2_negative": 3,
    "torsion_constant": 4,
    "warping_constant": 6,
    "shear_centre_x": 1,
    "shear_centre_y": 1,
    "shear_area_x": 2,
    "shear_area_y": 2,
    "strip_thickness": 1,
    "strip_width": 1,
}

OWN_UNITS: dict[str, Unit] = {"principal_angle": Unit("deg"), "mass_per_length": Unit("kg/m")}


def unit_of(key: str, length: str) -> Unit:
    """Return the unit of a property where lengths are in `length`."""
    return OWN_UNITS.get(key) or Unit(length, POWERS[key])
