"""What a tolerance does to the numbers: the rate of each property where every surface moves outward."""

from __future__ import annotations

from cmath import rect
from collections.abc import Mapping
from dataclasses import dataclass
from math import degrees, pi, tan

import numpy as np

from edgetally.curves.curve import Complexes, Curve, Floats
from edgetally.findings import Finding
from edgetally.section.area import AreaResult
from edgetally.section.boundary import Boundary
from edgetally.section.nodes import Nodes
from edgetally.section.panels import whole
from edgetally.section.record import Section

SHARPEST = 170.0
"""A corner that turns more than this [degrees] has no mitre worth the name: rates that depend on it are left out."""
SAME_FIBRE = 1e-9
"""Fibres this near to the extreme one, as a share of the size, are extreme too."""


@dataclass(frozen=True, eq=False)
class OffsetBand:
    """What the properties of a section become if every surface moves by ±`distance` [unit].

    `rates` by key are first order, per unit; `inward` and `outward` the properties of the outline moved in fact, None
    where that cannot be, with the reason in `refused`; `by_chords` where they came of fine chords.
    """

    distance: float
    rates: Mapping[str, float]
    inward: Mapping[str, float] | None
    outward: Mapping[str, float] | None
    by_chords: bool
    refused: tuple[Finding, ...]


@dataclass(frozen=True, eq=False)
class _Moving:
    """The boundary integrals about the centroid: ∮f ds for f = 1, x, y, and for their products about turned axes."""

    z: Complexes
    ds: Floats

    def over(self, values: Floats) -> float:
        return float(values @ self.ds)


def offset_rates(section: Section, result: AreaResult, *, density: float | None = None) -> dict[str, float]:
    """Return dP/dδ for each property P of the area, δ the distance by which every surface moves out of the material.

        d/dδ ∫f dA = ∮f ds, so dA/dδ = ∮ds, dI_x/dδ = ∮y² ds, dI_y/dδ = ∮x² ds, dI_xy/dδ = ∮xy ds about the centroid,
        whose own movement is of second order; d(x_c)/dδ = ∮x ds/A; dI₁/dδ = ∮v² ds and dθ/dδ = −∮uv ds/(I₁ − I₂) in the
        principal frame (u, v); dP_loop/dδ = Σ sweeps of curves + Σ 2·tan(τ/2) of corners that turn by τ

    Corners stay sharp (mitred), for that is what a surface that moves inward does, and only then are the rates the same
    for both senses. An extreme fibre at a corner moves with its mitre. Properties in powers of the section's unit,
    angle in degrees; rates per that unit. What has no rate is left out: the angle, and all about the principal axes,
    where every axis is principal; perimeters and moduli that depend on a corner which turns by more than 170°.
    Source: the transport theorem of any text on shape derivatives; checked against exactly offset outlines.
    """
    loops = [loop.curves for loop in section.loops]
    z, ds = _nodes(loops)
    moving = _Moving(z - result.centroid, ds)
    value = {key: p.value or 0.0 for key, p in result.properties.items()}
    area = value["area"]
    x, y = moving.z.real, moving.z.imag
    rate = {"area": moving.over(np.ones_like(x))}
    outer = [region.outer.curves for region in section.regions]
    rate |= _perimeters(outer, loops)
    centre = complex(moving.over(x), moving.over(y)) / area
    rate["centroid_x"], rate["centroid_y"] = centre.real, centre.imag
    rate["second_moment_x"], rate["second_moment_y"] = moving.over(y * y), moving.over(x * x)
    rate["product_of_inertia"] = moving.over(x * y)
    rate["polar_moment"] = rate["second_moment_x"] + rate["second_moment_y"]
    far = z
    rate["second_moment_x_origin"] = moving.over(far.imag**2)
    rate["second_moment_y_origin"] = moving.over(far.real**2)
    rate["product_of_inertia_origin"] = moving.over(far.real * far.imag)
    if density is not None:
        rate["mass_per_length"] = rate["area"] * value["mass_per_length"] / area
    turned, spin = 1.0 + 0j, 0.0
    if not result.axes.arbitrary:
        turned = rect(1.0, result.axes.angle.value)
        own = moving.z * turned.conjugate()
        rate["principal_moment_1"], rate["principal_moment_2"] = moving.over(own.imag**2), moving.over(own.real**2)
        spin = -moving.over(own.real * own.imag) / (value["principal_moment_1"] - value["principal_moment_2"])
        rate["principal_angle"] = degrees(spin)
    for axis in "xy12":
        moment = f"{'second' if axis in 'xy' else 'principal'}_moment_{axis}"
        if moment in rate:
            radius = value[f"radius_of_gyration_{axis}"]
            rate[f"radius_of_gyration_{axis}"] = (rate[moment] - radius**2 * rate["area"]) / (2.0 * area * radius)
    rate |= _fibres(section, result, rate, value, centre, turned, spin)
    return rate


def _nodes(loops: list[tuple[Curve, ...]]) -> tuple[Complexes, Floats]:
    """Return nodes and weights of ∮f ds, on halves of the curves until the perimeter is met to 1e-10."""
    exact = sum(curve.length for loop in loops for curve in loop)
    for _ in range(6):
        nodes = Nodes.on(whole(Boundary.of(loops)))
        if abs(float(nodes.ds.sum()) - exact) <= 1e-10 * exact:
            break
        loops = [tuple(half for curve in loop for half in curve.split(0.5)) for loop in loops]
    return nodes.z, nodes.ds


def _perimeters(outer: list[tuple[Curve, ...]], loops: list[tuple[Curve, ...]]) -> dict[str, float]:
    """Return the rates of both perimeters: a loop turns by ±2π in all, what it turns in corners counts as mitred."""
    rates = {}
    for key, some in (("outer_perimeter", outer), ("total_perimeter", loops)):
        rate = 0.0
        for loop in some:
            corners = Boundary.of([loop]).turn
            if np.abs(corners).max() > np.radians(SHARPEST):
                break
            sense = 2.0 * pi if any(loop is o for o in outer) else -2.0 * pi
            rate += sense - float(corners.sum()) + float(sum(2.0 * tan(0.5 * t) for t in corners))
        else:
            rates[key] = rate
    return rates


def _fibres(
    section: Section,
    result: AreaResult,
    rate: Mapping[str, float],
    value: Mapping[str, float],
    centre: complex,
    turned: complex,
    spin: float,
) -> dict[str, float]:
    """Return the rates of width, height and elastic moduli: W = I/c, W′ = (I′ − W·c′)/c."""
    reach: dict[complex, tuple[float, float] | None] = {}
    boundary = Boundary.of([loop.curves for loop in section.loops])

    def fibre(direction: complex, turning: float) -> tuple[float, float] | None:
        """c and c′ in a direction that turns with `turning` [rad per unit]."""
        if direction not in reach:
            found = _extreme(boundary, section.size, direction)
            if found is None:
                reach[direction] = None
            else:
                at, speed = found
                arm = at - result.centroid
                c = (arm * direction.conjugate()).real
                c_rate = speed - (centre * direction.conjugate()).real
                c_rate += turning * (arm * (1j * direction).conjugate()).real
                reach[direction] = (c, c_rate)
        return reach[direction]

    rates: dict[str, float] = {}
    for key, one, other in (("width", 1.0 + 0j, -1.0 + 0j), ("height", 1j, -1j)):
        ends = [_extreme(boundary, section.size, d) for d in (one, other)]
        if ends[0] is not None and ends[1] is not None:
            rates[key] = ends[0][1] + ends[1][1]
    sides = [("x_top", "second_moment_x", 1j, 0.0), ("x_bottom", "second_moment_x", -1j, 0.0)]
    sides += [("y_left", "second_moment_y", -1.0 + 0j, 0.0), ("y_right", "second_moment_y", 1.0 + 0j, 0.0)]
    if not result.axes.arbitrary:
        own = (
            ("1_positive", 1j * turned),
            ("1_negative", -1j * turned),
            ("2_positive", turned),
            ("2_negative", -turned),
        )
        sides += [(side, f"principal_moment_{side[0]}", direction, spin) for side, direction in own]
    for side, moment, direction, turning in sides:
        found = fibre(direction, turning)
        if found is not None:
            key = f"elastic_modulus_{side}"
            rates[key] = (rate[moment] - value[key] * found[1]) / found[0]
    return rates


def _extreme(boundary: Boundary, size: float, direction: complex) -> tuple[complex, float] | None:
    """Return the extreme point in a direction and how fast it moves that way; None at too sharp a corner.

    Of several extreme points, those of the ends of a flat among them, the fastest.
    """
    supports = [curve.support(direction) for curve in boundary.curves]
    far = max(s for s, _ in supports)
    starting, ending = boundary.end_directions
    before = np.empty(len(boundary), dtype=int)
    before[boundary.following] = np.arange(len(boundary))
    best: tuple[float, complex] | None = None
    for k, (s, t) in enumerate(supports):
        if s < far - SAME_FIBRE * size:
            continue
        curve = boundary.curves[k]
        if 0.0 < t < 1.0:
            speed, at = 1.0, curve.point(t)
        else:
            at = curve.start if t == 0.0 else curve.end
            joint = int(before[k]) if t == 0.0 else k
            if abs(float(boundary.turn[joint])) > np.radians(SHARPEST):
                return None
            # the outward normals of both neighbours, the material being on their left
            first, second = -1j * ending[joint], -1j * starting[boundary.following[joint]]
            mitre = (first + second) / (1.0 + (first * second.conjugate()).real)
            speed = float((mitre * direction.conjugate()).real)
        if best is None or speed > best[0]:
            best = speed, at
    return None if best is None else (best[1], best[0])
