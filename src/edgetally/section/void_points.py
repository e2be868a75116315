"""A point well inside each void, where sources and residues can sit without being felt sharply on the boundary."""

from __future__ import annotations

import numpy as np

from edgetally.curves.curve import Complexes, Floats
from edgetally.section.boundary import Boundary
from edgetally.section.nodes import Nodes
from edgetally.section.panels import whole
from edgetally.section.sight import middles

# Points of a loop from which the void is looked across, and steps of the search that follows.
LOOKS = 48
STEPS = 24
SAMPLES = 8


def void_points(boundary: Boundary) -> Complexes:
    """Return a point (V,) inside each void, near the centre of its largest inscribed circle.

    From points of the loop one looks straight across the void to the first other side; of the middles of these views
    the one furthest from the boundary is moved on by a search with halving steps. Thin slots in any direction are found
    so.
    """
    nodes = Nodes.on(whole(boundary, SAMPLES))
    found = [_inside(nodes.z[nodes.loop == k], nodes.slope[nodes.loop == k]) for k in range(1, nodes.loop_count)]
    return np.array(found, dtype=complex)


def _inside(z: Complexes, slope: Complexes) -> complex:
    a, b = z, np.roll(z, -1)
    pick = np.unique(np.linspace(0, len(z) - 1, LOOKS).astype(int))
    ray = -1j * slope[pick] / np.abs(slope[pick])
    starts = middles(z[pick], ray, a, b)
    if not starts.size:
        return complex(z.mean())
    room = _room(starts, a, b)
    best, widest = complex(starts[np.argmax(room)]), float(room.max())
    step = 0.5 * widest
    compass = np.exp(0.25j * np.pi * np.arange(8))
    for _ in range(STEPS):
        trials = best + step * compass
        room = _room(trials, a, b)
        if room.max() > widest:
            best, widest = complex(trials[np.argmax(room)]), float(room.max())
        else:
            step *= 0.5
    return best


def _room(points: Complexes, a: Complexes, b: Complexes) -> Floats:
    """Return the distance of each point (M,) to the polygon with sides a–b."""
    d, chord = points[:, None] - a, b - a
    square = np.maximum(np.abs(chord) ** 2, 1e-300)
    share = np.clip((d * chord.conj()).real / square, 0.0, 1.0)
    room: Floats = np.abs(d - share * chord).min(axis=1)
    return room
