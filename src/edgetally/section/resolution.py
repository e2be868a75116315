"""One resolution: everything that one set of panels gives, from one matrix."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from edgetally.curves.curve import Complexes, Floats
from edgetally.section import shear as flexural
from edgetally.section import torsion as torsional
from edgetally.section.cauchy import equation
from edgetally.section.frame import Frame
from edgetally.section.nodes import Nodes
from edgetally.section.panels import Panels
from edgetally.section.shear import Shear
from edgetally.section.torsion import Torsion

# A warping that ranges over less than this share of I_p/A, as that of a circle of chords, is not resolved for itself.
LEAST = 0.02


@dataclass(frozen=True, eq=False)
class Resolution:
    """Torsion and shear of the region in its frame, on one set of panels.

    `shear` is at the Poisson's ratio asked for, `plain` at ν = 0; `coarseness` (P,) says how much of the solution the
    last Legendre coefficients of each panel still hold.
    """

    nodes: Nodes
    torsion: Torsion
    shear: Shear
    plain: Shear
    coarseness: Floats


def resolve(frame: Frame, panels: Panels, points: Complexes, poisson: float) -> Resolution:
    """Solve on the given panels; `points` (V,) lie in the voids. Raises numpy's LinAlgError on a singular matrix."""
    nodes = Nodes.on(panels)
    parts = flexural.flexure(nodes, points)
    v, rate = torsional.conjugate(nodes)
    system = equation(nodes, np.column_stack([v, parts.single]), np.column_stack([rate, parts.single_rate]))
    solution = np.linalg.solve(system.matrix, system.right).astype(float, copy=False)
    del system
    harmonic = solution[:, 1:] + parts.sources
    turned = torsional.torsion(nodes, solution[:, 0], frame.moments, points)
    bent = flexural.shear(nodes, harmonic, parts.rate, frame.moments, poisson)
    plain = bent if poisson == 0.0 else flexural.shear(nodes, harmonic, parts.rate, frame.moments, 0.0)
    fields = np.column_stack([solution, turned.omega])
    least = np.zeros(fields.shape[1])
    least[[0, -1]] = LEAST * float(frame.moments[0, 2] + frame.moments[2, 0])
    return Resolution(nodes, turned, bent, plain, _coarseness(nodes, fields, least))


def _coarseness(nodes: Nodes, fields: Floats, least: Floats) -> Floats:
    """Return for each panel the largest tail of a field (N, R), relative to the field's range, times √(half length).

    `least` (R,) is what a range is taken for at least.
    """
    result = np.zeros(len(nodes.panels))
    root = np.sqrt(0.5 * nodes.panels.length)
    for field, low in zip(fields.T, least, strict=True):
        spread = max(float(np.ptp(field)), float(low))
        if spread > 0.0:
            np.maximum(result, nodes.tails(field) / spread * root, out=result)
    return result
