"""What a solution for torsion and shear holds."""

from __future__ import annotations

from dataclasses import dataclass

from edgetally.curves.curve import Complexes, Floats
from edgetally.findings import Finding
from edgetally.section.stress import StressPeak


@dataclass(frozen=True, slots=True)
class Number:
    """A value and its relative error, as the difference of two resolutions and rounding tell it."""

    value: float
    error: float


@dataclass(frozen=True, eq=False)
class WarpingLine:
    """ω about the shear centre [unit²] at `points` (n,) along one closed loop, in order, for a plot."""

    points: Complexes
    omega: Floats


@dataclass(frozen=True, eq=False)
class TorsionSolution:
    """Torsion, warping and shear of one region, in the input's coordinates and powers of its unit.

    Errors are relative: of `warping_constant` to the larger of |C_w| and 1e-5·I_p²/A, of the shear centre to the larger
    side of the outline's box. `shear_compliance` (2, 2) is F with A_s = 1/(dᵀF d) along the unit vector d, in the
    drawing's axes; axis 1 has the largest second moment and the angle `principal_angle` [rad] from +x.
    `flexural_centre` is where a force at the given Poisson's ratio gives no mean twist; at ν = 0 it is the shear centre
    (Trefftz's, independent of ν). `corners` are the sharp re-entrant ones, where stress has no bound: the peaks are
    those away from them.
    """

    torsion_constant: Number
    warping_constant: Number
    shear_centre: complex
    shear_centre_error: float
    shear_area_x: Number
    shear_area_y: Number
    shear_area_1: Number
    shear_area_2: Number
    principal_angle: float
    shear_compliance: Floats
    flexural_centre: complex
    poisson: float
    warping: tuple[WarpingLine, ...]
    torsion_peak: StressPeak
    shear_peak_x: StressPeak
    shear_peak_y: StressPeak
    corners: tuple[complex, ...]
    unknowns: int
    rounds: int
    reached: bool
    findings: tuple[Finding, ...]
