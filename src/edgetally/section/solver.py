"""Torsion, warping and shear of one connected region, with an error of each number.

    solve(loops) → TorsionSolution

Saint-Venant's problems are solved on the exact curves by Cauchy's integral equation (`cauchy`), on panels that are refined
where the solution asks for it (`refinement`), until two resolutions agree to the tolerance or a limit is reached.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from edgetally.curves.curve import Complexes, Curve, Floats
from edgetally.errors import EdgetallyError
from edgetally.findings import Finding
from edgetally.section.chords import smoothed
from edgetally.section.frame import Frame
from edgetally.section.refinement import TooManyUnknownsError, resolutions
from edgetally.section.resolution import Resolution
from edgetally.section.simplified import simplified
from edgetally.section.stress import StressPeak, sharp_corners, shear_peak, torsion_peak
from edgetally.section.void_points import void_points

# Memory is about 3·8·N² bytes, time some N³/2e10 s: half a gigabyte and a few seconds.
MAX_UNKNOWNS = 4800
# C_w of a circle is 0. Its error is relative to |C_w| or this share of I_p²/A, a section's warping by its size alone.
WARPING_SCALE = 1e-5
# What rounding leaves in the numbers where nothing cancels; J is the difference of I_p and an integral of its size.
ROUNDING = 1e-14
# The difference of two resolutions is the error of the coarser; that of the finer has been seen to be as large as that where
# it falls slowly, so half as much again is given, and never less than a share of the largest: one may vanish by chance.
SAFETY = 1.5
CHANCE = 0.1
# With a larger relative error there is no result to speak of.
MEANINGLESS = 0.1


class UnsolvableError(EdgetallyError):
    """A region whose torsion problem cannot be solved; the findings say why and where."""


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

    Errors are relative: of `warping_constant` to the larger of |C_w| and 1e-5·I_p²/A, of the shear centre to the larger side
    of the outline's box. `shear_compliance` (2, 2) is F with A_s = 1/(dᵀF d) along the unit vector d, in the drawing's axes;
    axis 1 has the largest second moment and the angle `principal_angle` [rad] from +x. `flexural_centre` is where a force
    at the given Poisson's ratio gives no mean twist; at ν = 0 it is the shear centre (Trefftz's, independent of ν).
    `corners` are the sharp re-entrant ones, where stress has no bound: the peaks are those away from them.
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


def solve(
    loops: Sequence[Sequence[Curve]],
    *,
    poisson: float = 0.3,
    tolerance: float = 1e-6,
    max_unknowns: int = MAX_UNKNOWNS,
) -> TorsionSolution:
    """Solve Saint-Venant's torsion and flexure for one connected region.

    `loops[0]` is the outer boundary counter-clockwise, the others are voids clockwise, curves joined end to end, in any
    length unit and at any place. `poisson` ν is between 0 and ½; `tolerance` is the relative error asked of every number.
    Raises UnsolvableError, with findings, for what has no solution within the limits: a loop the wrong way round, no area,
    too many unknowns, boundaries that touch or cross.
    """
    frame, smoothing = _framed(loops)
    history: list[_Numbers] = []
    errors: _Errors | None = None
    best: Resolution | None = None
    try:
        # what divides by zero or overflows shows in the numbers, which are judged in the end
        with np.errstate(all="ignore"):
            points = void_points(frame.boundary)
            for best in resolutions(frame, points, poisson, max_unknowns):
                history.append(_numbers(frame, best, smoothing))
                if len(history) > 1:
                    errors = _compared(history[-1], history[-2], _axes(frame))
                    if errors.worst <= tolerance:
                        break
    except TooManyUnknownsError as refusal:
        needed = f"torsion needs at least {refusal.needed} unknowns for this outline"
        raise _refused(f"{needed}, more than the limit of {max_unknowns}", frame) from None
    except np.linalg.LinAlgError:
        raise _refused("the equation of torsion is singular: do boundaries touch or cross?", frame) from None
    if best is None or errors is None:
        raise _refused(f"two resolutions for an estimate of error need more than {max_unknowns} unknowns", frame)
    with np.errstate(all="ignore"):
        return _solution(frame, best, history[-1], errors, poisson, tolerance, len(history))


def _framed(loops: Sequence[Sequence[Curve]]) -> tuple[Frame, float]:
    ends = np.array([z for loop in loops for curve in loop for z in (curve.start, curve.point(0.5))], dtype=complex)
    if not ends.size or not np.isfinite(ends).all():
        raise UnsolvableError("the region has no boundary of finite points")
    size = max(float(np.ptp(ends.real)), float(np.ptp(ends.imag)))
    kept = [simplified(loop, size) for loop in loops]
    # a void of nothing but negligible pieces is no void
    kept = [kept[0], *(loop for loop in kept[1:] if loop)]
    place = complex(ends[0])
    if not kept[0]:
        raise UnsolvableError("the region has no outer boundary of any length", [_finding("no outer boundary", place)])
    smooth = [smoothed(loop) for loop in kept]
    try:
        return Frame.around([loop for loop, _ in smooth]), max(effect for _, effect in smooth)
    except ValueError as reason:
        raise UnsolvableError(str(reason), [_finding(str(reason), place)]) from None


def _finding(message: str, at: complex) -> Finding:
    return Finding("limit-reached", "error", message, (at.real, at.imag))


def _refused(message: str, frame: Frame) -> UnsolvableError:
    return UnsolvableError(message, [_finding(message, frame.origin)])


@dataclass(frozen=True, eq=False)
class _Numbers:
    """The numbers of one resolution in the frame (A = 1), and what their errors are relative to."""

    torsion: float
    warping: float
    centre: complex
    compliance: Floats
    flexural: complex
    polar: float
    quartic: float
    size: float
    smoothing: float


@dataclass(frozen=True, eq=False)
class _Errors:
    """Relative errors; those of the compliance (2, 2) in the frame, and of 1/F_xx and 1/F_yy in the drawing's axes."""

    torsion: float
    warping: float
    centre: float
    compliance: Floats
    drawn: Floats

    @property
    def worst(self) -> float:
        own = float(np.diag(self.compliance).max())
        return max(self.torsion, self.warping, self.centre, own, float(self.drawn.max()))


def _numbers(frame: Frame, resolution: Resolution, smoothing: float) -> _Numbers:
    turned, m = resolution.torsion, frame.moments
    return _Numbers(
        turned.torsion_constant,
        turned.warping_constant,
        turned.shear_centre,
        resolution.shear.compliance,
        resolution.shear.centre,
        float(m[0, 2] + m[2, 0]),
        float(m[4, 0] + 2.0 * m[2, 2] + m[0, 4]),
        frame.boundary.size,
        smoothing,
    )


def _axes(frame: Frame) -> Floats:
    """Return the matrix that turns vectors of the frame into the drawing's axes."""
    return np.array([[frame.turn.real, -frame.turn.imag], [frame.turn.imag, frame.turn.real]])


def _compared(fine: _Numbers, coarse: _Numbers, axes: Floats) -> _Errors:
    """Return the relative errors of `fine`: its differences to `coarse`, and rounding."""
    scale = max(abs(fine.warping), WARPING_SCALE * fine.polar**2)
    diagonal = np.sqrt(np.abs(np.outer(np.diag(fine.compliance), np.diag(fine.compliance))))
    torsion = SAFETY * abs(fine.torsion - coarse.torsion) / abs(fine.torsion)
    warping = SAFETY * abs(fine.warping - coarse.warping) / scale
    centre = SAFETY * abs(fine.centre - coarse.centre) / fine.size
    compliance = SAFETY * np.abs(fine.compliance - coarse.compliance) / diagonal
    own_warping = warping if abs(fine.warping) == scale else 0.0
    least = CHANCE * max(torsion, own_warping, centre, float(compliance.max()))
    extra = 10.0 * ROUNDING + fine.smoothing
    compliance = np.maximum(compliance, least) + extra
    turned = np.diag(axes @ fine.compliance @ axes.T)
    drawn = np.diag(np.abs(axes) @ (compliance * diagonal) @ np.abs(axes).T) / np.abs(turned)
    return _Errors(
        max(torsion, least) + ROUNDING * fine.polar / abs(fine.torsion) + fine.smoothing,
        max(warping, least) + ROUNDING * fine.quartic / scale + fine.smoothing,
        max(centre, least) + extra,
        compliance,
        drawn,
    )


def _solution(
    frame: Frame,
    best: Resolution,
    numbers: _Numbers,
    errors: _Errors,
    poisson: float,
    tolerance: float,
    rounds: int,
) -> TorsionSolution:
    if not (numbers.torsion > 0.0 and np.isfinite(numbers.torsion) and numbers.torsion <= numbers.polar * (1.0 + 1e-6)):
        raise _refused("the solution for torsion has no positive stiffness: do boundaries touch or cross?", frame)
    if not (np.diag(numbers.compliance) > 0.0).all():
        raise _refused("the solution for shear has no positive stiffness: do boundaries touch or cross?", frame)
    if not errors.worst < MEANINGLESS:
        raise _refused(f"torsion and shear come out with an error of {errors.worst:.1g}: is a wall thinner than rounding?", frame)
    scale, turn = frame.scale, frame.turn
    axes = _axes(frame)
    compliance = axes @ numbers.compliance @ axes.T / scale**2
    own = [Number(scale**2 / float(numbers.compliance[k, k]), float(errors.compliance[k, k])) for k in range(2)]
    drawn = [Number(1.0 / float(compliance[k, k]), float(errors.drawn[k])) for k in range(2)]
    nodes = best.nodes
    places = frame.outside(nodes.z)
    lines = tuple(
        WarpingLine(places[nodes.loop == k], best.torsion.omega[nodes.loop == k] * scale**2) for k in range(nodes.loop_count)
    )
    centre = complex(frame.outside(np.array([numbers.centre]))[0])
    flexural = complex(frame.outside(np.array([numbers.flexural]))[0])
    corners = sharp_corners(frame)
    reached = errors.worst <= tolerance
    findings: tuple[Finding, ...] = ()
    if not reached:
        text = (
            f"torsion and shear were computed to a relative error of {errors.worst:.1g} with {len(nodes)} unknowns; "
            f"{tolerance:.1g} was asked for"
        )
        findings = (Finding("limit-reached", "warning", text),)
    return TorsionSolution(
        torsion_constant=Number(numbers.torsion * scale**4, errors.torsion),
        warping_constant=Number(max(numbers.warping, 0.0) * scale**6, errors.warping),
        shear_centre=centre,
        shear_centre_error=errors.centre,
        shear_area_x=drawn[0],
        shear_area_y=drawn[1],
        shear_area_1=own[0],
        shear_area_2=own[1],
        principal_angle=float(np.angle(turn)),
        shear_compliance=compliance,
        flexural_centre=flexural,
        poisson=poisson,
        warping=lines,
        torsion_peak=torsion_peak(frame, best),
        shear_peak_x=shear_peak(frame, best, poisson, turn.conjugate()),
        shear_peak_y=shear_peak(frame, best, poisson, 1j * turn.conjugate()),
        corners=corners,
        unknowns=len(nodes),
        rounds=rounds,
        reached=reached,
        findings=findings,
    )
