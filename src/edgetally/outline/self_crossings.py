"""Whether a single curve crosses itself. Lines and arcs cannot; one span of a spline can."""

from __future__ import annotations

from cmath import phase
from itertools import combinations, pairwise
from math import pi, tau

from edgetally.curves import Bezier, Curve
from edgetally.curves.intersections import intersect, overlap

HALVINGS = 8
CLEAR = 1e-9
"""The legs of a control polygon lie to one side when a half plane has more room than this [rad] beside them."""


def crosses_itself(curve: Curve, touch: float) -> complex | None:
    """Return a point where the curve comes back to itself within `touch`, None where it does not.

    A span whose control polygon advances in one direction throughout cannot: z(s) − z(t) is a sum, with positive
    weights, of legs that all lie in one half plane. Others are halved until their parts do, and those are compared. At
    a cusp of a curve of length L its branches are within `touch` over a length of about L^⅓·touch^⅔: no crossing.
    """
    if not isinstance(curve, Bezier) or _advances(curve):
        return None
    parts = _advancing(curve, HALVINGS)
    lengths = [part.length for part in parts]
    starts = [sum(lengths[:k]) for k in range(len(parts))]
    total = sum(lengths)
    closed = abs(curve.end - curve.start) <= touch
    least = 8.0 * total ** (1 / 3) * touch ** (2 / 3)
    for i, j in combinations(range(len(parts)), 2):
        a, b = parts[i], parts[j]
        contacts = list(intersect(a, b, touch))
        for stretch, (u0, u1) in overlap(a, b, touch):
            middle = 0.5 * sum(stretch)
            contacts.append((middle, 0.5 * (u0 + u1), a.point(middle)))
        for t, u, z in contacts:
            run = starts[j] + u * lengths[j] - starts[i] - t * lengths[i]
            if (min(run, total - run) if closed else run) > least:
                return z
    return None


def _advances(curve: Bezier) -> bool:
    """Tell whether all legs of the control polygon lie strictly in one half plane."""
    angles = sorted(phase(q - p) for p, q in pairwise(curve.control) if q != p)
    if not angles:
        return True
    return max(b - a for a, b in pairwise([*angles, angles[0] + tau])) > pi + CLEAR


def _advancing(curve: Bezier, halvings: int) -> list[Bezier]:
    if halvings == 0 or _advances(curve):
        return [curve]
    return [part for half in curve.split(0.5) for part in _advancing(half, halvings - 1)]
