"""Which property of a section a lettered name may mean, as the trade uses the letters.

I, J with an axis: second moments; J alone, I_t: torsion. W, Z, S with an axis: moduli; W alone: modulus or weight. i, r
with an axis: radii of gyration. Where y and z are used and x is not, the axes are those of EN 1993-1-1: y horizontal.
"""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import dataclass

from edgetally.lettered.statements import Statement

_MOMENTS = (("second_moment", "xy"), ("principal_moment", "12"))

ORIGIN = "about the drawing's origin"
EXCHANGED = "about the other axis: the axes are exchanged, or named in another way"


@dataclass(frozen=True, slots=True)
class Meaning:
    """A power of the length unit (0: mass per length), the keys it may be, and others with what would explain them."""

    power: int
    keys: tuple[str, ...]
    others: tuple[tuple[str, str], ...] = ()


def meaning_of(statement: Statement, axes: Collection[str]) -> Meaning | None:
    """Return what a statement may mean beside others that use the letters `axes`; None where its unit does not fit
    the little that a lone letter says."""
    letter, under = statement.letter, statement.under
    if letter in "PU":
        meaning = Meaning(1, ("outer_perimeter", "total_perimeter"))
    elif letter in "MG":
        meaning = Meaning(0, ("mass_per_length",))
    elif letter == "A":
        meaning = Meaning(2, ("area",))
    elif letter == "W" and not under:
        if statement.unit is not None and statement.unit.power == 0:
            meaning = Meaning(0, ("mass_per_length",))
        else:
            weight = ("mass_per_length",) if statement.unit is None else ()
            meaning = Meaning(3, _moduli("x", plastic=False) + _moduli("y", plastic=False) + weight)
    elif letter == "I" and not under:
        meaning = Meaning(4, tuple(f"{kind}_{a}" for kind, letters in _MOMENTS for a in letters))
    elif letter in "SZ" and not under:
        plastic = tuple(f"plastic_modulus_{a}" for a in "xy") if letter == "Z" else ()
        meaning = Meaning(3, _moduli("x", plastic=False) + _moduli("y", plastic=False) + plastic)
    elif letter == "J" and not under:
        meaning = Meaning(4, ("torsion_constant", "polar_moment"))
    elif under == "t":
        meaning = Meaning(4, ("torsion_constant",))
    elif under == "w":
        meaning = Meaning(6, ("warping_constant",))
    elif under in ("p", "o"):
        meaning = Meaning(4, ("polar_moment",))
    else:
        meaning = _about(letter, under, axes)
    lone = not statement.spelled
    return None if lone and statement.unit is not None and statement.unit.power != meaning.power else meaning


def _about(letter: str, under: str, axes: Collection[str]) -> Meaning:
    """Return the meaning of a letter with the name of an axis under it."""
    plastic = under.startswith("pl,")
    axis = _axis(under.removeprefix("pl,"), axes)
    other = {"x": "y", "y": "x", "1": "2", "2": "1"}[axis]
    if letter in "ir":
        names = [f"radius_of_gyration_{a}" for a in (axis, other)]
        return Meaning(1, (names[0],), ((names[1], EXCHANGED),))
    if letter in "IJ":
        if axis in "12":
            return Meaning(4, (f"principal_moment_{axis}",), ((f"principal_moment_{other}", EXCHANGED),))
        own: tuple[str, ...] = (f"second_moment_{axis}",)
        if under == "z" and "x" in axes:
            own += ("polar_moment",)
        others = ((f"second_moment_{other}", EXCHANGED), (f"second_moment_{axis}_origin", ORIGIN))
        return Meaning(4, own, others)
    moduli = _moduli(axis, plastic=plastic)
    if letter == "Z" and not plastic:  # elastic or plastic, by the country
        moduli += _moduli(axis, plastic=True)
    return Meaning(3, moduli, tuple((key, EXCHANGED) for key in _moduli(other, plastic=plastic)))


def _axis(name: str, axes: Collection[str]) -> str:
    """Return the axis of the property keys that a name on the drawing stands for."""
    if "z" in axes and "x" not in axes:
        name = {"y": "x", "z": "y"}.get(name, name)
    return {"z": "y", "u": "1", "max": "1", "v": "2", "min": "2"}.get(name, name)


def _moduli(axis: str, *, plastic: bool) -> tuple[str, ...]:
    if plastic:
        return (f"plastic_modulus_{axis}",)
    sides = {"x": ("top", "bottom"), "y": ("left", "right")}.get(axis, ("positive", "negative"))
    return tuple(f"elastic_modulus_{axis}_{side}" for side in sides)
