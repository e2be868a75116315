"""What needs the material to be connected: torsion, warping, shear centre, shear areas, as properties of a section."""

from __future__ import annotations

from dataclasses import dataclass

from edgetally.findings import Finding
from edgetally.section.kinds import unit_of
from edgetally.section.midline import Strip, ThinWalled, thin_walled
from edgetally.section.record import Property, Section
from edgetally.section.solution import TorsionSolution
from edgetally.section.solver import UnsolvableError, solve

KEYS = (
    "torsion_constant",
    "warping_constant",
    "shear_centre_x",
    "shear_centre_y",
    "shear_area_x",
    "shear_area_y",
)


@dataclass(frozen=True, eq=False)
class ConnectedResult:
    """The properties by key, None for what cannot be given and then with a finding; the solution for plots, where the
    section is one connected region; and the thin-walled formulas of its midline, where it is a strip or a thin cell, as
    a second opinion that replaces nothing.
    """

    properties: dict[str, Property]
    solution: TorsionSolution | None
    findings: tuple[Finding, ...]
    strip: Strip | None = None
    thin_walled: ThinWalled | None = None


NOT_ASKED = ConnectedResult({}, None, ())


def connected_properties(section: Section, *, poisson: float, strip: Strip | None = None) -> ConnectedResult:
    """Solve torsion and shear of a section; `poisson` matters for the shear areas only, `strip` is what the section is.

    Separate parts twist side by side, so that their torsion constants add; shear centre, warping and shear areas have
    no meaning without a connection, and are None with `parts-disconnected`. What cannot be solved is None with the
    reason as a warning: the properties of the area are not touched by it.
    """
    findings: list[Finding] = []
    solutions = []
    for region in section.regions:
        try:
            solution = solve([loop.curves for loop in region.loops], poisson=poisson)
        except UnsolvableError as refusal:
            text = f"torsion and shear are not given: {refusal}"
            found = refusal.findings[0] if refusal.findings else None
            findings.append(Finding("torsion-unsolved", "warning", text, found.at if found else None))
            return ConnectedResult(_empty(section), None, tuple(findings))
        solutions.append(solution)
        findings += solution.findings
    if len(solutions) == 1:
        thin = thin_walled(strip) if strip is not None else None
        return ConnectedResult(_properties(section, solutions[0]), solutions[0], tuple(findings), strip, thin)
    text = (
        f"the section is {len(solutions)} parts that do not touch: the torsion constant is their sum; shear centre, "
        "warping constant and shear areas have no meaning without a connection and are not given"
    )
    findings.append(Finding("parts-disconnected", "warning", text))
    properties = _empty(section)
    total = sum(s.torsion_constant.value for s in solutions)
    error = max(s.torsion_constant.error for s in solutions)
    properties["torsion_constant"] = Property(
        "torsion_constant", total, unit_of("torsion_constant", section.unit), error
    )
    return ConnectedResult(properties, None, tuple(findings))


def _properties(section: Section, solution: TorsionSolution) -> dict[str, Property]:
    centre, centre_error = solution.shear_centre, solution.shear_centre_error
    values = {
        "torsion_constant": (solution.torsion_constant.value, solution.torsion_constant.error),
        "warping_constant": (solution.warping_constant.value, solution.warping_constant.error),
        "shear_centre_x": (centre.real, centre_error),
        "shear_centre_y": (centre.imag, centre_error),
        "shear_area_x": (solution.shear_area_x.value, solution.shear_area_x.error),
        "shear_area_y": (solution.shear_area_y.value, solution.shear_area_y.error),
    }
    return {key: Property(key, value, unit_of(key, section.unit), error) for key, (value, error) in values.items()}


def _empty(section: Section) -> dict[str, Property]:
    return {key: Property(key, None, unit_of(key, section.unit), None) for key in KEYS}
