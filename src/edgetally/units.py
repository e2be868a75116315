"""Lengths and their units: exact factors, the `$INSUNITS` codes, and how a unit is written.

The factors to millimetres are exact by definition (the international inch and foot of 1959).
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass

from edgetally.errors import UsageError

MM_PER: dict[str, float] = {"mm": 1.0, "cm": 10.0, "m": 1000.0, "in": 25.4, "ft": 304.8}

# kg/m³: nominal values of EN 1991-1-1 and EN 1999-1-1, and EN 10088-1 for 1.4301 (from memory)
DENSITIES: dict[str, float] = {"steel": 7850.0, "aluminium": 2700.0, "stainless": 7900.0}

LBF = 4.4482216152605
"""Newtons in a pound-force, exact by definition (the pound of 1959 and standard gravity)."""

# what a force is given in where lengths are in each unit, and its newtons
FORCES: dict[str, tuple[str, float]] = {
    "mm": ("N", 1.0), "cm": ("kN", 1e3), "m": ("kN", 1e3), "in": ("lbf", LBF), "ft": ("lbf", LBF),
}  # fmt: skip

MPA_PER: dict[str, float] = {
    "Pa": 1e-6, "kPa": 1e-3, "MPa": 1.0, "GPa": 1e3, "N/mm2": 1.0, "kN/cm2": 10.0, "kN/mm2": 1e3,
    "psi": LBF / 645.16, "ksi": 1e3 * LBF / 645.16,
}  # fmt: skip

# DXF reference, header variable $INSUNITS. Only the first group is a unit that a section is drawn in.
INSUNITS: dict[int, str] = {1: "in", 2: "ft", 4: "mm", 5: "cm", 6: "m"}
INSUNITS_OTHER: dict[int, str] = {
    3: "miles", 7: "kilometres", 8: "microinches", 9: "mils", 10: "yards", 11: "angstroms", 12: "nanometres",
    13: "microns", 14: "decimetres", 15: "decametres", 16: "hectometres", 17: "gigametres",
    18: "astronomical units", 19: "light years", 20: "parsecs", 21: "US survey feet", 22: "US survey inches",
    23: "US survey yards", 24: "US survey miles",
}  # fmt: skip

_SUPERSCRIPT = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")


def length_factor(source: str, target: str) -> float:
    """Return by how much a length in unit `source` is multiplied to be in unit `target`.

    The quotient of two short decimals is correctly rounded: `length_factor("in", "cm")` is the double 2.54.
    """
    return MM_PER[source] / MM_PER[target]


@dataclass(frozen=True, slots=True)
class Unit:
    """A power of a length unit, as `mm^4`, or a unit that stands for itself, as `deg`, `kg/m` or `1`."""

    base: str
    power: int = 1

    def __str__(self) -> str:
        return self.base if self.power == 1 else f"{self.base}^{self.power}"

    @property
    def pretty(self) -> str:
        """The unit as it is printed: mm⁴, °, kg/m."""
        if self.base == "deg":
            return "°"
        base = _EXPONENT.sub(lambda power: power[1].translate(_SUPERSCRIPT), self.base).replace("*", "·")
        return base if self.power == 1 else base + str(self.power).translate(_SUPERSCRIPT)


def force_unit(length: str, power: int = 0) -> Unit:
    """Return the unit of a force times a power of a length, as `N*mm^2`, where lengths are in `length`."""
    force = FORCES[length][0]
    return Unit(f"{force}*{Unit(length, power)}" if power else force)


_EXPONENT = re.compile(r"\^(-?\d+)")
_STRESS = re.compile(r"\s*([-+]?[0-9]*[.]?[0-9]+(?:[eE][-+]?[0-9]+)?)\s*([A-Za-z][A-Za-z/^²2]*)?\s*")
_LENGTH = re.compile(r"\s*([-+]?[0-9]*[.]?[0-9]+(?:[eE][-+]?[0-9]+)?)\s*([A-Za-z]*)\s*")


def parse_length(text: str, *, signed: bool = False) -> tuple[float, str]:
    """Read a length written with its unit, as `0.05mm`, into (value, unit); below 0 only where it may be `signed`.

    Raises UsageError where the number or the unit is missing or unknown, or the value is not finite.
    """
    match = _LENGTH.fullmatch(text)
    if match is None or match.group(2) not in MM_PER:
        raise UsageError(f"length {text!r} is not understood: write a number and its unit, as 0.05mm or 0.002in")
    value = float(match.group(1))
    if not math.isfinite(value) or (value < 0 and not signed):
        raise UsageError(f"length {text!r} must be finite{'' if signed else ' and not negative'}")
    return value, match.group(2)


def parse_modulus(text: str) -> float:
    """Read a modulus of elasticity, as `210GPa`, a plain number in MPa, and return it in MPa.

    Raises UsageError where it is not understood, not finite or not positive.
    """
    match = _STRESS.fullmatch(text)
    unit = ((match.group(2) if match else None) or "MPa").replace("^", "").replace("²", "2")
    if match is None or unit not in MPA_PER:
        raise UsageError(
            f"modulus {text!r} is not understood: write a number in MPa, or with one of {', '.join(MPA_PER)}, as 210GPa"
        )
    value = float(match.group(1)) * MPA_PER[unit]
    if not (math.isfinite(value) and value > 0):
        raise UsageError(f"modulus {text!r} must be finite and greater than 0")
    return value
