"""Lettered values against those of the section beside them. A lettered value is never used for a number."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from edgetally.drawing.lettering import Lettering
from edgetally.findings import Finding
from edgetally.lettered.meanings import Meaning, meaning_of
from edgetally.lettered.standing import Standing, standing_of
from edgetally.lettered.statements import LetteredUnit, Statement, statements_of
from edgetally.outline.records import Outline
from edgetally.outline.words import at, place
from edgetally.results import SectionResult
from edgetally.units import DENSITIES, MM_PER

AGREES = 0.01
"""A lettered value may be off by this share, or by half a unit of its last digit: drawings round."""
AGREES_TORSION = 0.05
"""Printed torsion and warping constants come from formulas that miss the exact outline by so much."""
LISTED = 60

_MASS = LetteredUnit("kg/m", 0, 1.0)


@dataclass(frozen=True, slots=True)
class _Told:
    """A statement, the text that it stands in, and the sections that it may be about."""

    statement: Statement
    text: Lettering
    standing: Standing


@dataclass(frozen=True, slots=True)
class _Fit:
    """How a statement fits a property: the key, its value in the lettered unit, how far off, and whether it agrees."""

    key: str
    value: float
    unit: LetteredUnit
    off: float
    agrees: bool


def lettered_findings(
    lettering: Sequence[Lettering], outline: Outline, sections: Sequence[SectionResult]
) -> list[Finding]:
    """Compare each value lettered on the drawing with the section that it stands in or nearest to.

    `lettered-agrees` is a note. `lettered-differs` is a warning where the section has another value, a note where the
    text may mean something else. Texts beside outlines that were not measured are passed over.
    """
    stated = [(text, s) for text in lettering for line in text.lines for s in statements_of(line)]
    if not stated:
        return []
    standings = standing_of([text.at for text, _ in stated], outline, sections)
    told = [_Told(s, text, where) for (text, s), where in zip(stated, standings, strict=True) if where.sections]
    axes: dict[tuple[int, ...], set[str]] = {}
    for each in told:
        axes.setdefault(each.standing.sections, set()).add(each.statement.under.removeprefix("pl,"))
    findings = []
    for each in told:
        meaning = meaning_of(each.statement, axes[each.standing.sections])
        if meaning is not None:
            findings.append(_compared(each, meaning, sections))
    if len(findings) > LISTED:
        findings.sort(key=lambda f: f.severity == "note")
        text = f"{len(findings) - LISTED} more lettered values were compared and are not listed"
        worst = "lettered-agrees" if all(f.code == "lettered-agrees" for f in findings[LISTED:]) else "lettered-differs"
        severity = "warning" if any(f.severity == "warning" for f in findings[LISTED:]) else "note"
        findings = [*findings[:LISTED], Finding(worst, severity, text)]  # type: ignore[arg-type]
    return findings


def _compared(told: _Told, meaning: Meaning, sections: Sequence[SectionResult]) -> Finding:
    """Return what comes of one statement: of several sections it may be about, the one that it fits decides."""
    each = [(_outcome(told.statement, meaning, sections[k]), sections[k]) for k in told.standing.sections]
    (code, severity, words), section = min(each, key=lambda outcome: (outcome[0][0], outcome[0][1] != "note"))
    whose = f"section {section.name}" if len(sections) > 1 else "the section"
    text = f"{told.text.source} at {place(told.text.at)} states {told.statement.words!r}: {words.format(whose=whose)}"
    if told.standing.unsure:
        text += f"; it stands about as near to {told.standing.unsure}"
        severity = "note" if told.standing.elsewhere else severity
    return Finding(code, severity, text, at(told.text.at), (told.text.source.handle,))  # type: ignore[arg-type]


def _outcome(statement: Statement, meaning: Meaning, section: SectionResult) -> tuple[str, str, str]:
    """Return code, severity and words of the comparison with one section."""
    unit = statement.unit
    if unit is not None and unit.power != meaning.power:
        power = {0: "a mass per length", 1: "a length", 2: "a square", 3: "a third power", 4: "a fourth power"}
        wanted = power.get(meaning.power, f"a power {meaning.power}")
        words = f"it was not compared, because its unit {unit.words} is not that of {wanted}"
        return "lettered-differs", "warning", words
    if meaning.power == 0 and not _number(section, "mass_per_length"):
        return _without_density(statement, section)
    fits = [fit for key in meaning.keys for fit in _fits(statement, key, section)]
    if not fits:
        return (
            "lettered-differs",
            "note",
            f"it was not compared: there is no {_named(meaning.keys[0])} of {{whose}} here",
        )
    best = min(fits, key=lambda fit: (not fit.agrees, fit.off))
    has = f"the {_named(best.key)} of {{whose}} is {best.value:.6g} {best.unit.words}"
    guessed = "" if unit is not None else " (no unit is lettered)"
    if best.agrees:
        return "lettered-agrees", "note", f"{has}, which agrees{guessed}"
    for key, why in meaning.others:
        for fit in _fits(statement, key, section):
            if fit.agrees:
                words = (
                    f"{has}, the {_named(key)} is {fit.value:.6g} {fit.unit.words}{guessed}: the lettered value is "
                    f"that {why}; check which is meant"
                )
                return "lettered-differs", "warning", words
    if unit is None and "mass_per_length" in meaning.keys and not _number(section, "mass_per_length"):
        weighed = _without_density(statement, section)
        if weighed[0] == "lettered-agrees":
            return weighed
    if unit is None:
        either = " and ".join(f"{fit.value:.6g} {fit.unit.words}" for fit in fits if fit.key == best.key)
        words = f"it has no unit and agrees in none: the {_named(best.key)} of {{whose}} is {either}"
        return "lettered-differs", "warning" if statement.spelled else "note", words
    lettered = min((n.value for n in statement.numbers), key=lambda value: abs(value - best.value))
    share = f"{100 * (lettered / best.value - 1):+.2g} %" if best.value else "no share"
    plastic = any(key.startswith("plastic") and key not in section.properties for key in meaning.keys)  # Z
    perhaps = ", unless it is a plastic modulus" if plastic else ""
    return "lettered-differs", "warning", f"{has}, the lettered value is off by {share}{perhaps}; check which is meant"


def _fits(statement: Statement, key: str, section: SectionResult) -> list[_Fit]:
    """Return how the statement fits one property, in its own unit, or in mm and cm and the section's where it has
    none; nothing where the section has no such number."""
    value, prop = _number(section, key), section.properties.get(key)
    if prop is None or value is None:
        return []
    if prop.unit.base == "kg/m":
        units = [statement.unit or _MASS]
        values = [value / units[0].factor]
    else:
        power, base = prop.unit.power, MM_PER[prop.unit.base]
        names = dict.fromkeys(("mm", "cm", section.section.unit))
        units = [statement.unit] if statement.unit else [_power(name, power) for name in names]
        values = [value * (base / unit.factor) ** power for unit in units]
    share = AGREES_TORSION if key in ("torsion_constant", "warping_constant") else AGREES
    fits = []
    for unit, here in zip(units, values, strict=True):
        for number in statement.numbers:
            off = abs(number.value - here)
            agrees = off <= max(share * abs(here), number.half_digit * (1 + 1e-9))
            fits.append(_Fit(key, here, unit, off / max(abs(here), number.half_digit), agrees))
    return fits


def _without_density(statement: Statement, section: SectionResult) -> tuple[str, str, str]:
    """Say which density a lettered mass per length means, where none was given to compute it from."""
    area = section.properties["area"]
    square_metres = (area.value or 0.0) * (MM_PER[area.unit.base] / 1000.0) ** 2
    unit = statement.unit or _MASS
    for name, density in DENSITIES.items():
        mass = density * square_metres / unit.factor
        for number in statement.numbers:
            if abs(number.value - mass) <= max(AGREES * mass, number.half_digit):
                words = f"{{whose}} would have {mass:.6g} {unit.words} of {name}, {density:g} kg/m³, which agrees"
                return "lettered-agrees", "note", words
    means = statement.numbers[0].value * unit.factor / square_metres
    words = f"the area of {{whose}} would need a density of {means:.4g} kg/m³; pass --density to compare the mass"
    return "lettered-differs", "note", words


def _number(section: SectionResult, key: str) -> float | None:
    prop = section.properties.get(key)
    return None if prop is None else prop.value


def _power(name: str, power: int) -> LetteredUnit:
    return LetteredUnit(name if power == 1 else f"{name}^{power}", power, MM_PER[name])


def _named(key: str) -> str:
    return key.replace("_", " ")
