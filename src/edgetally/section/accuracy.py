"""How good the numbers of a resolution are, from the one before it."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from edgetally.curves.curve import Floats
from edgetally.section.frame import Frame
from edgetally.section.resolution import Resolution

# C_w of a circle is 0. Its error is relative to |C_w| or this share of I_p²/A, a section's warping by its size alone.
WARPING_SCALE = 1e-5
# What rounding leaves in the numbers where nothing cancels; J is the difference of I_p and an integral of its size.
ROUNDING = 1e-14
# The difference of two resolutions is the error of the coarser. That of the finer has been seen to be as large where it
# falls slowly, so twice the difference is given, and never less than a share of the largest: one may vanish by chance.
SAFETY = 2.0
CHANCE = 0.1
# Nor is less claimed than this share of the tolerance that the refinement was steered by.
CLAIM = 0.03


@dataclass(frozen=True, eq=False)
class Numbers:
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
class Errors:
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


def numbers_of(frame: Frame, resolution: Resolution, smoothing: float) -> Numbers:
    turned, m = resolution.torsion, frame.moments
    return Numbers(
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


def axes_of(frame: Frame) -> Floats:
    """Return the matrix that turns vectors of the frame into the drawing's axes."""
    return np.array([[frame.turn.real, -frame.turn.imag], [frame.turn.imag, frame.turn.real]])


def compared(fine: Numbers, coarse: Numbers, axes: Floats, tolerance: float) -> Errors:
    """Return the relative errors of `fine`: its differences to `coarse`, and rounding."""
    scale = max(abs(fine.warping), WARPING_SCALE * fine.polar**2)
    diagonal = np.sqrt(np.abs(np.outer(np.diag(fine.compliance), np.diag(fine.compliance))))
    torsion = SAFETY * abs(fine.torsion - coarse.torsion) / abs(fine.torsion)
    warping = SAFETY * abs(fine.warping - coarse.warping) / scale
    centre = SAFETY * abs(fine.centre - coarse.centre) / fine.size
    compliance = SAFETY * np.abs(fine.compliance - coarse.compliance) / diagonal
    own_warping = warping if abs(fine.warping) == scale else 0.0
    least = max(CHANCE * max(torsion, own_warping, centre, float(compliance.max())), CLAIM * tolerance)
    extra = 10.0 * ROUNDING + fine.smoothing
    compliance = np.maximum(compliance, least) + extra
    turned = np.diag(axes @ fine.compliance @ axes.T)
    drawn = np.diag(np.abs(axes) @ (compliance * diagonal) @ np.abs(axes).T) / np.abs(turned)
    return Errors(
        max(torsion, least) + ROUNDING * fine.polar / abs(fine.torsion) + fine.smoothing,
        max(warping, least) + ROUNDING * fine.quartic / scale + fine.smoothing,
        max(centre, least) + extra,
        compliance,
        drawn,
    )
