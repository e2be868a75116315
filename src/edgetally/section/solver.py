"""Torsion, warping and shear of one connected region, with an error of each number.

    solve(loops) → TorsionSolution

Saint-Venant's problems are solved on the exact curves by Cauchy's integral equation (`cauchy`), on panels that are
refined where the solution asks for it (`refinement`), until two resolutions agree to the tolerance or a limit is
reached.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from edgetally.curves.curve import Curve
from edgetally.errors import EdgetallyError
from edgetally.findings import Finding
from edgetally.section.accuracy import Errors, Numbers, axes_of, compared, numbers_of
from edgetally.section.chords import smoothed
from edgetally.section.frame import Frame
from edgetally.section.refinement import TooManyUnknownsError, resolutions
from edgetally.section.resolution import Resolution
from edgetally.section.simplified import simplified
from edgetally.section.solution import Number, TorsionSolution, WarpingLine
from edgetally.section.stress import sharp_corners, shear_peak, torsion_peak
from edgetally.section.void_points import void_points

__all__ = ["Number", "TorsionSolution", "UnsolvableError", "WarpingLine", "solve"]

# Memory is about 3·8·N² bytes, time some N³/2e10 s: half a gigabyte and a few seconds.
MAX_UNKNOWNS = 4800
# Two resolutions may agree by chance, or because neither was refined where it matters. A third is asked for before they
# are believed, as long as it costs next to nothing.
ROUNDS = 3
QUICK = 1200
# Where that many resolutions, and not cheap ones, still differ by more than their size, more will not help.
HOPELESS = 4
# With a larger relative error there is no result to speak of.
MEANINGLESS = 0.01


class UnsolvableError(EdgetallyError):
    """A region whose torsion problem cannot be solved; the findings say why and where."""


def solve(
    loops: Sequence[Sequence[Curve]],
    *,
    poisson: float = 0.3,
    tolerance: float = 1e-6,
    max_unknowns: int = MAX_UNKNOWNS,
) -> TorsionSolution:
    """Solve Saint-Venant's torsion and flexure for one connected region.

    `loops[0]` is the outer boundary counter-clockwise, the others are voids clockwise, curves joined end to end, in any
    length unit and at any place. `poisson` ν is between 0 and ½; `tolerance` is the relative error asked of every
    number. Raises UnsolvableError, with findings, for what has no solution within the limits: a loop the wrong way
    round, no area, too many unknowns, boundaries that touch or cross.
    """
    frame, smoothing = _framed(loops)
    history: list[Numbers] = []
    errors: Errors | None = None
    best: Resolution | None = None
    try:
        # what divides by zero or overflows shows in the numbers, which are judged in the end
        with np.errstate(all="ignore"):
            points = void_points(frame.boundary)
            for best in resolutions(frame, points, poisson, max_unknowns):
                history.append(numbers_of(frame, best, smoothing))
                if len(history) > 1:
                    errors = compared(history[-1], history[-2], axes_of(frame), tolerance)
                    if errors.worst <= tolerance and (len(history) >= ROUNDS or len(best.nodes) > QUICK):
                        break
                    if len(history) >= HOPELESS and len(best.nodes) > QUICK and not errors.worst < 1.0:
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
    return Finding("torsion-unsolved", "error", message, (at.real, at.imag))


def _refused(message: str, frame: Frame) -> UnsolvableError:
    return UnsolvableError(message, [_finding(message, frame.origin)])


def _solution(
    frame: Frame,
    best: Resolution,
    numbers: Numbers,
    errors: Errors,
    poisson: float,
    tolerance: float,
    rounds: int,
) -> TorsionSolution:
    if not 0.0 < numbers.torsion <= numbers.polar * (1.0 + 1e-6):
        raise _refused("the solution for torsion has no positive stiffness: do boundaries touch or cross?", frame)
    if not (np.diag(numbers.compliance) > 0.0).all():
        raise _refused("the solution for shear has no positive stiffness: do boundaries touch or cross?", frame)
    if not errors.worst < MEANINGLESS:
        amount = f"torsion and shear come out with an error of {errors.worst:.1g}"
        raise _refused(f"{amount}: is a wall thinner than rounding?", frame)
    scale, turn = frame.scale, frame.turn
    axes = axes_of(frame)
    compliance = axes @ numbers.compliance @ axes.T / scale**2
    own = [Number(scale**2 / float(numbers.compliance[k, k]), float(errors.compliance[k, k])) for k in range(2)]
    drawn = [Number(1.0 / float(compliance[k, k]), float(errors.drawn[k])) for k in range(2)]
    nodes = best.nodes
    places = frame.outside(nodes.z)
    omega = best.torsion.omega * scale**2
    lines = tuple(WarpingLine(places[nodes.loop == k], omega[nodes.loop == k]) for k in range(nodes.loop_count))
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
