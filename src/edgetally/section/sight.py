"""Looking straight from one side of a wall or a void to the other."""

from __future__ import annotations

import numpy as np

from edgetally.curves.curve import Complexes, Floats

# Nearer than this share of the spread of the points is the side one looks from.
NOTHING = 1e-9


def middles(z: Complexes, ray: Complexes, a: Complexes, b: Complexes) -> Complexes:
    """Return the middles of the views from points z (M,) along unit vectors `ray` (M,) to the nearest of the sides a–b.

    Sides are given by their ends (S,). Views that meet no side are left out.
    """
    # both ends of each side as seen from each ray's frame
    p = (a - z[:, None]) * ray.conj()[:, None]
    q = (b - z[:, None]) * ray.conj()[:, None]
    crosses = (p.imag > 0) != (q.imag > 0)
    fall = np.where(crosses, p.imag - q.imag, 1.0)
    reach: Floats = p.real + (q.real - p.real) * p.imag / fall
    own = (a == z[:, None]) | (b == z[:, None])
    least = NOTHING * float(np.ptp(a.real) + np.ptp(a.imag))
    reach = np.where(crosses & ~own & (reach > least), reach, np.inf).min(axis=1)
    seen = np.isfinite(reach)
    halfway: Complexes = z[seen] + 0.5 * reach[seen] * ray[seen]
    return halfway
