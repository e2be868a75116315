"""Shear stress on the boundary for a unit torque and unit shear forces, and where it is largest.

The stress of torsion is largest on the boundary, because its square is subharmonic. That of flexure need not be (in a
round bar at ν > 0 it is largest on the axis), so its peak here is that of the boundary.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from edgetally.curves.curve import Floats
from edgetally.section import legendre
from edgetally.section.boundary import Mask
from edgetally.section.frame import Frame
from edgetally.section.nodes import Nodes
from edgetally.section.resolution import Resolution

# Re-entrant corners that turn by less [rad] are chords of a curve, whose stress peaks are slight.
SHARP = 0.02
# Stress near a sharp corner is left out up to this share of its shorter neighbour.
CLEAR = 0.1
# A peak lies between nodes: the polynomial of each panel is read at this many places.
PLACES = 17


@dataclass(frozen=True, slots=True)
class StressPeak:
    """The largest shear stress on the boundary per unit torque [1/unit³] or unit force [1/unit²], and its place.

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
    """Return the largest |τ| on the boundary for a unit force along `direction` in the frame: τ_s = dψ/ds + h·dz/ds."""
    nodes = resolution.nodes
    m = frame.moments
    x, y, slope = nodes.z.real, nodes.z.imag, nodes.slope
    c = poisson / (2.0 * (1.0 + poisson))
    potential = resolution.shear.potential @ np.array([direction.real, direction.imag])
    extra = c * (direction.real / m[2, 0] * y * y * slope.real + direction.imag / m[0, 2] * x * x * slope.imag)
    return _peak(frame, nodes, (nodes.rate(potential) + extra) / np.abs(slope), frame.scale**-2)


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


def _clear(nodes: Nodes) -> tuple[Mask, float]:
    """Mark the panels (P,) that are clear of sharp corners, and say how far that is."""
    panels = nodes.panels
    boundary = panels.boundary
    sharp = boundary.turn < -SHARP
    if not sharp.any():
        return np.ones(len(panels), dtype=bool), 0.0
    shorter = np.minimum(boundary.length, boundary.length[boundary.following])[sharp]
    radius = CLEAR * shorter
    apart = np.abs(panels.samples[:, :, None] - boundary.end[sharp])
    clear: Mask = np.min(apart - radius, axis=(1, 2)) >= 0.0
    if not clear.any():
        clear = np.ones(len(panels), dtype=bool)
    return clear, float(radius.max())
