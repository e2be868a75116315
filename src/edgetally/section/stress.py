"""Shear stress for a unit torque and unit shear forces, and where it is largest.

The stress of torsion is largest on the boundary, because its square is subharmonic. That of flexure need not be (in a
round bar at ν > 0 it is largest on the axis), so it is looked for midway between the walls as well.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from edgetally.curves.curve import Complexes, Floats
from edgetally.section import legendre
from edgetally.section.boundary import Mask
from edgetally.section.cauchy import integrals
from edgetally.section.frame import Frame
from edgetally.section.nodes import Nodes
from edgetally.section.panels import whole
from edgetally.section.resolution import Resolution
from edgetally.section.sight import middles

# Re-entrant corners that turn by less [rad] are chords of a curve, whose stress peaks are slight.
SHARP = 0.02
# Stress near a sharp corner is left out up to this share of its shorter neighbour.
CLEAR = 0.1
# A peak lies between nodes: the polynomial of each panel is read at this many places.
PLACES = 17
# From so many places of the boundary one looks across the material, whose sides are so many nodes per panel.
LOOKS = 160
LOOK_NODES = 12


@dataclass(frozen=True, slots=True)
class StressPeak:
    """The largest shear stress per unit torque [1/unit³] or unit force [1/unit²], and its place.

    `clear_of_corners` is the distance up to which the surroundings of sharp re-entrant corners were left out (the
    largest of them), 0 where there are none.
    """

    stress: float
    at: complex
    clear_of_corners: float


def sharp_corners(frame: Frame) -> tuple[complex, ...]:
    """Return the places of the sharp re-entrant corners, where the elastic stress has no bound."""
    boundary = frame.boundary
    return tuple(complex(z) for z in frame.outside(boundary.end[boundary.turn < -SHARP]))


def torsion_peak(frame: Frame, resolution: Resolution) -> StressPeak:
    """Return the largest |τ| for a unit torque: τ_s = (dω/ds + x dy/ds − y dx/ds)/J with ω about the centroid."""
    nodes, turned = resolution.nodes, resolution.torsion
    z, slope = nodes.z, nodes.slope
    along = nodes.rate(turned.warping_about_centroid) + z.real * slope.imag - z.imag * slope.real
    return _peak(frame, nodes, along / np.abs(slope) / turned.torsion_constant, frame.scale**-3)


def shear_peak(frame: Frame, resolution: Resolution, poisson: float, direction: complex) -> StressPeak:
    """Return the largest |τ| for a unit force along the unit vector `direction` of the frame.

    On the boundary τ_s = dψ/ds + h·dz/ds, read between the nodes; in the interior τ = ∇φ + T (see `shear`) at points
    midway between walls, ∇φ by Cauchy's formula for the derivative of φ + iv.
    """
    nodes = resolution.nodes
    m = frame.moments
    x, y, slope = nodes.z.real, nodes.z.imag, nodes.slope
    c = poisson / (2.0 * (1.0 + poisson))
    forces = np.array([direction.real, direction.imag])
    alpha, beta = direction.real / m[2, 0], direction.imag / m[0, 2]
    potential = resolution.shear.potential @ forces
    extra = c * (alpha * y * y * slope.real + beta * x * x * slope.imag)
    peak = _peak(frame, nodes, (nodes.rate(potential) + extra) / np.abs(slope), frame.scale**-2)

    z = _midway(nodes)
    sharp, radius = _corners(nodes)
    z = z[(np.abs(z[:, None] - sharp) >= radius).all(axis=1)]
    if not z.size:
        return peak
    values = np.column_stack([resolution.shear.gradient @ forces, np.ones(len(nodes))])
    gradient, inside = integrals(nodes, values, z).T / 2j / np.pi
    particular = alpha * (c * z.imag**2 - 0.5 * z.real**2) + 1j * beta * (c * z.real**2 - 0.5 * z.imag**2)
    # a view across a wall thinner than the rise of an arc's chords can end outside
    stress = np.where(np.abs(inside - 1.0) < 1e-3, np.abs(gradient.conj() + particular), 0.0) * frame.scale**-2
    best = int(np.argmax(stress))
    if stress[best] <= peak.stress * (1.0 + 1e-6):
        return peak
    return StressPeak(float(stress[best]), complex(frame.outside(z[best : best + 1])[0]), peak.clear_of_corners)


def _midway(nodes: Nodes) -> Complexes:
    """Return points midway between the walls, seen from points of the boundary straight across the material."""
    sides = Nodes.on(whole(nodes.panels.boundary, LOOK_NODES))
    a = sides.z
    last = np.append(sides.loop[1:] != sides.loop[:-1], True)
    first = np.append(0, np.flatnonzero(last)[:-1] + 1)
    b = np.roll(a, -1)
    b[last] = a[first]
    pick = np.unique(np.linspace(0, len(a) - 1, LOOKS).astype(int))
    return middles(a[pick], 1j * sides.slope[pick] / np.abs(sides.slope[pick]), a, b)


def _peak(frame: Frame, nodes: Nodes, stress: Floats, unit: float) -> StressPeak:
    """Return the largest |stress| away from sharp corners, read between the nodes."""
    clear, distance = _clear(nodes)
    best, place = -1.0, (0, 0.0)
    t = np.linspace(-1.0, 1.0, PLACES)
    for n, which, index in nodes.groups:
        values = np.abs(stress[index] @ legendre.interpolation(n, t).T)
        values[~clear[which]] = -1.0
        k, i = divmod(int(np.argmax(values)), PLACES)
        if values[k, i] > best:
            best, place = float(values[k, i]), (int(which[k]), float(t[i]))
    panel, t_best = place
    panels = nodes.panels
    s = panels.low[panel] + (panels.high[panel] - panels.low[panel]) * 0.5 * (1.0 + t_best)
    z = panels.boundary.curves[panels.curve[panel]].point(float(s))
    return StressPeak(best * unit, complex(frame.outside(np.array([z]))[0]), distance * frame.scale)


def _corners(nodes: Nodes) -> tuple[Complexes, Floats]:
    """Return the sharp corners (C,) in the frame, and how far around each the stress is left out (C,)."""
    boundary = nodes.panels.boundary
    sharp = boundary.turn < -SHARP
    shorter = np.minimum(boundary.length, boundary.length[boundary.following])
    return boundary.end[sharp], CLEAR * shorter[sharp]


def _clear(nodes: Nodes) -> tuple[Mask, float]:
    """Mark the panels (P,) that are clear of sharp corners, and say how far that is."""
    panels = nodes.panels
    corners, radius = _corners(nodes)
    if not corners.size:
        return np.ones(len(panels), dtype=bool), 0.0
    apart = np.abs(panels.samples[:, :, None] - corners)
    clear: Mask = np.min(apart - radius, axis=(1, 2)) >= 0.0
    if not clear.any():
        clear = np.ones(len(panels), dtype=bool)
    return clear, float(radius.max())
