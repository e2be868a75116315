"""Torsion, warping and shear as a block: what the numbers are, and how they are to be read."""

from __future__ import annotations

from typing import TYPE_CHECKING

from edgetally.output.blocks import Block, Figure
from edgetally.output.numbers import digits_of, number_text, value_text
from edgetally.output.symbols import AXES, SymbolSet, name_of, symbol_of
from edgetally.output.words import in_print
from edgetally.section.connected import KEYS
from edgetally.units import Unit, length_factor

if TYPE_CHECKING:
    from edgetally.results import SectionResult
    from edgetally.section.solution import TorsionSolution

Row = tuple[str, str, Figure, str, str]
STRESS_DIGITS = 4
"""Digits of a largest stress: it is read off the solution between nodes, without an error of its own."""


def torsion_block(section: SectionResult, solution: TorsionSolution, symbols: SymbolSet) -> Block:
    """Return symbol, name, value, unit and error of what the solution gives, in the unit of the results."""
    rows, notes = _rows(section, solution, symbols), _notes(section, solution)
    return Block("Torsion, warping and shear", (), tuple(rows), tuple(notes), symbols_first=True)


def _rows(section: SectionResult, solution: TorsionSolution, symbols: SymbolSet) -> list[Row]:
    letters, rows = AXES[symbols], []
    for key in KEYS:
        prop = section.properties[key]
        value = Figure(prop.value, value_text(prop, section.natural_scale(key)))
        rows.append((symbol_of(key, symbols), name_of(key, symbols), value, prop.unit.pretty, _error(prop.error)))
    length = length_factor(section.section.unit, section.out_unit)
    unit = section.out_unit
    for axis, number in ((letters.first, solution.shear_area_1), (letters.second, solution.shear_area_2)):
        value = Figure.of(number.value * length**2, digits_of(number.error))
        rows.append((f"A_s{axis}", f"shear area along axis {axis}", value, Unit(unit, 2).pretty, _error(number.error)))
    peak = solution.torsion_peak
    rows.append((
        "τ_max",
        f"largest shear stress for torque 1, at {_near(peak.at, section)}",
        Figure.of(peak.stress / length**3, STRESS_DIGITS),
        f"1/{Unit(unit, 3).pretty}",
        "",
    ))  # fmt: skip
    for axis, peak in ((letters.x, solution.shear_peak_x), (letters.y, solution.shear_peak_y)):
        value = Figure.of(peak.stress / length**2, STRESS_DIGITS)
        name = f"largest on the outline for force 1 along {axis}, at {_near(peak.at, section)}"
        rows.append((f"τ_{axis},max", name, value, f"1/{Unit(unit, 2).pretty}", ""))
    rows += _midline_rows(section, solution, symbols)
    return rows


def _midline_rows(section: SectionResult, solution: TorsionSolution, symbols: SymbolSet) -> list[Row]:
    """The second opinion: thin-walled formulas of the midline, each with its difference from the exact number."""
    thin, strip = section.connected.thin_walled, section.connected.strip
    if thin is None or strip is None:
        return []
    length, unit = length_factor(section.section.unit, section.out_unit), section.out_unit
    name = f"thin-walled, midline, t = {number_text(strip.thickness * length, 4)} {unit}"
    rows = []
    for key, value, exact, power in (
        ("torsion_constant", thin.torsion_constant, solution.torsion_constant.value, 4),
        ("warping_constant", thin.warping_constant, solution.warping_constant.value, 6),
    ):
        figure = Figure.of(value * length**power, 5)
        off = f"differs by {100 * (value / exact - 1):+.2g} %".replace("-", "−") if exact else ""
        rows.append((symbol_of(key, symbols), name, figure, Unit(unit, power).pretty, off))
    apart = abs(thin.shear_centre - solution.shear_centre) * length
    centre = _near(thin.shear_centre, section)
    rows.append(("", f"thin-walled, midline: shear centre at {centre}", Figure.of(apart, 3), unit, "away"))
    return rows


def _near(z: complex, section: SectionResult) -> str:
    """A place to four digits, what is nothing but rounding as 0; in the section's own unit, as drawn."""
    x, y = (0.0 if abs(v) < 1e-9 * section.section.size else v for v in (z.real, z.imag))
    return f"({x:.4g}, {y:.4g})"


def _error(error: float | None) -> str:
    """The relative error as one digit and a power of ten, never printed below 10⁻¹⁵."""
    if error is None:
        return ""
    digit, power = f"{max(error, 1e-15):.0e}".split("e")
    return "relative error " + in_print(f"{digit}e{int(power)}")


def _notes(section: SectionResult, solution: TorsionSolution) -> list[str]:
    """Return the sentences that say how the numbers are to be read."""
    notes = [
        "The torsion constant is Saint-Venant's; the warping constant is the integral of ω² about the shear centre, ω "
        "with mean 0. The shear centre does not depend on Poisson's ratio (Trefftz). Shear areas are those of the "
        f"strain energy of Saint-Venant's flexure (Timoshenko) at ν = {solution.poisson:g}.",
        "Solved by Cauchy's integral equation on the exact outline, without a mesh; each error is that of two "
        "resolutions compared, of the shear centre relative to the section's size. "
        f"{solution.unknowns} unknowns.",
    ]
    if solution.corners:
        clear = max(p.clear_of_corners for p in (solution.torsion_peak, solution.shear_peak_x, solution.shear_peak_y))
        notes.append(
            f"At the {len(solution.corners)} sharp re-entrant corners marked the elastic stress has no bound; the "
            f"largest stresses given are those away from them, by up to {clear:.3g} {section.section.unit}."
        )
    return notes
