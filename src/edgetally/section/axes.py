"""Principal axes: where they point, and the moments about them."""

from __future__ import annotations

from dataclasses import dataclass
from math import atan2, hypot, pi

from edgetally.section.bounded import Bounded

ROUND = 1e-12
"""Where Mohr's circle is smaller than this share of I_x + I_y, the axes of a drawing with 12 good digits are chance."""


@dataclass(frozen=True, slots=True)
class Axes:
    """The direction of axis 1, `angle` [rad] from +x counter-clockwise in (−π/2, π/2]; `arbitrary` where I₁ = I₂."""

    angle: Bounded
    arbitrary: bool


def principal_axes(second_x: Bounded, second_y: Bounded, product: Bounded) -> Axes:
    """Find the principal axes from I_x = ∫y² dA, I_y = ∫x² dA, I_xy = +∫xy dA about the centroid.

        θ_p = ½ atan2(−2 I_xy, I_x − I_y)

    is the angle from +x to axis 1, that of the largest second moment. With R = hypot((I_x − I_y)/2, I_xy) an error of
    (I_x − I_y)/2 and I_xy by s turns θ_p by s/2R. Where R is within rounding of 0 every axis is principal: angle 0.
    Source: any text on strength of materials, with the sign of I_xy as here (Timoshenko & Gere use +∫xy dA too).
    """
    half, both = 0.5 * (second_x.value - second_y.value), second_x.value + second_y.value
    slack = 0.5 * (second_x.slack + second_y.slack) + product.slack
    radius = hypot(half, product.value)
    if radius <= max(ROUND * both, slack):
        return Axes(Bounded(0.0, 0.0), arbitrary=True)
    angle = 0.5 * atan2(-2.0 * product.value, 2.0 * half)
    wander = 0.5 * slack / radius
    if angle <= -0.5 * pi + wander:  # −90° to rounding is 90°: symmetric sections do not flip by chance
        angle = min(angle + pi, 0.5 * pi)
    return Axes(Bounded(angle, wander), arbitrary=False)
