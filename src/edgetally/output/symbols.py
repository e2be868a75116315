"""Names and symbols of the properties, in three sets, and the letters of the axes that go with them.

plain: x and y as drawn, 1 and 2 principal. en: EN 1993-1-1, 1.7 (y-y horizontal, z-z vertical, u-u and v-v principal,
W_el, I_t). us: the practice of the American steel manual (S for the elastic modulus, r for the radius of gyration, w
and z for the principal axes of angles); from memory. In a symbol `_` starts the subscript.
"""

from __future__ import annotations

from typing import Literal, NamedTuple

SymbolSet = Literal["plain", "en", "us"]


class AxisLetters(NamedTuple):
    """The letters of the drawing's axes and of the principal axes."""

    x: str
    y: str
    first: str
    second: str


AXES: dict[SymbolSet, AxisLetters] = {
    "plain": AxisLetters("x", "y", "1", "2"),
    "en": AxisLetters("y", "z", "u", "v"),
    "us": AxisLetters("x", "y", "w", "z"),
}

# key → (name, symbol); {x} {y} {1} {2} are the axis letters, {W} and {i} the letters of modulus and radius
_TABLE: dict[str, tuple[str, str]] = {
    "area": ("area", "A"),
    "outer_perimeter": ("outer perimeter", "P_outer"),
    "total_perimeter": ("total perimeter", "P_total"),
    "width": ("width along {x}", "b"),
    "height": ("height along {y}", "h"),
    "centroid_x": ("centroid, {x}", "{x}_c"),
    "centroid_y": ("centroid, {y}", "{y}_c"),
    "second_moment_x": ("second moment about {x}", "I_{x}"),
    "second_moment_y": ("second moment about {y}", "I_{y}"),
    "product_of_inertia": ("product of inertia", "I_{x}{y}"),
    "polar_moment": ("polar moment", "I_p"),
    "principal_moment_1": ("principal moment, axis {1}", "I_{1}"),
    "principal_moment_2": ("principal moment, axis {2}", "I_{2}"),
    "principal_angle": ("angle from {x} to {1}", "θ"),
    "second_moment_x_origin": ("second moment, origin, {x}", "I_{x},O"),
    "second_moment_y_origin": ("second moment, origin, {y}", "I_{y},O"),
    "product_of_inertia_origin": ("product of inertia, origin", "I_{x}{y},O"),
    "radius_of_gyration_x": ("radius of gyration, {x}", "{i}_{x}"),
    "radius_of_gyration_y": ("radius of gyration, {y}", "{i}_{y}"),
    "radius_of_gyration_1": ("radius of gyration, {1}", "{i}_{1}"),
    "radius_of_gyration_2": ("radius of gyration, {2}", "{i}_{2}"),
    "elastic_modulus_x_top": ("elastic modulus {x}, top", "{W}{x},top"),
    "elastic_modulus_x_bottom": ("elastic modulus {x}, bottom", "{W}{x},bot"),
    "elastic_modulus_y_left": ("elastic modulus {y}, left", "{W}{y},left"),
    "elastic_modulus_y_right": ("elastic modulus {y}, right", "{W}{y},right"),
    "elastic_modulus_1_positive": ("elastic modulus {1}, +{2} side", "{W}{1},+"),
    "elastic_modulus_1_negative": ("elastic modulus {1}, −{2} side", "{W}{1},−"),
    "elastic_modulus_2_positive": ("elastic modulus {2}, +{1} side", "{W}{2},+"),
    "elastic_modulus_2_negative": ("elastic modulus {2}, −{1} side", "{W}{2},−"),
    "torsion_constant": ("torsion constant", "{J}"),
    "warping_constant": ("warping constant", "{Cw}"),
    "shear_centre_x": ("shear centre, {x}", "{x}_s"),
    "shear_centre_y": ("shear centre, {y}", "{y}_s"),
    "shear_area_x": ("shear area along {x}", "A_s{x}"),
    "shear_area_y": ("shear area along {y}", "A_s{y}"),
    "strip_thickness": ("thickness of the strip", "t"),
    "strip_width": ("developed width, midline", "b_dev"),
    "mass_per_length": ("mass per length", "m"),
}

_TORSION: dict[SymbolSet, tuple[str, str]] = {"plain": ("J", "C_w"), "en": ("I_t", "I_w"), "us": ("J", "C_w")}
_MODULUS: dict[SymbolSet, str] = {"plain": "W_el,", "en": "W_el,", "us": "S_"}
_RADIUS: dict[SymbolSet, str] = {"plain": "i", "en": "i", "us": "r"}

KEYS = tuple(_TABLE)
"""Every property key, in the order of print."""


def _filled(text: str, symbols: SymbolSet) -> str:
    letters = AXES[symbols]
    known = {"x": letters.x, "y": letters.y, "1": letters.first, "2": letters.second}
    known |= {"W": _MODULUS[symbols], "i": _RADIUS[symbols], "J": _TORSION[symbols][0], "Cw": _TORSION[symbols][1]}
    for key, value in known.items():
        text = text.replace("{" + key + "}", value)
    return text


def name_of(key: str, symbols: SymbolSet = "plain") -> str:
    """Return the plain name of a property, with the axis letters of the set."""
    return _filled(_TABLE[key][0], symbols)


def symbol_of(key: str, symbols: SymbolSet = "plain") -> str:
    """Return the symbol of a property, subscript after `_`."""
    return _filled(_TABLE[key][1], symbols)
