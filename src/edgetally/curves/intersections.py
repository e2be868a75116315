"""Where two curves meet, and where they run along each other.

Two curves are in contact where they come within a tolerance of one another. A contact is given once, however long the
stretch on which the curves are that near, so that the tangent joint of a line and an arc is one contact at the joint.
"""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise
from typing import NamedTuple

from edgetally.curves.arc import Arc
from edgetally.curves.bezier import Bezier
from edgetally.curves.crossing_forms import arc_arc, cross, dot, line_arc, line_line
from edgetally.curves.crossing_search import meetings
from edgetally.curves.curve import Curve
from edgetally.curves.elliptic import EllipticArc
from edgetally.curves.line import Line
from edgetally.curves.nearest import nearest

__all__ = ["intersect", "nearest", "overlap"]

# Below this share of the coordinates two points cannot be told apart after the roundings of a curve's evaluation.
ROUNDING = 16 * 2.0**-52
# A crossing at an angle whose sine is below this is refined by closest approach instead of Newton's method.
SLIM = 1e-7
NEWTON = 4
# The rest of a curve beside a stretch that it shares with another, in its parameter, is not searched if below this.
SHORTEST = 1e-12
# Points at which a stretch is checked to stay within the tolerance, as shares of it, the middle first.
CHECKED = (0.5, 0.25, 0.75, 0.0625, 0.9375)

Range = tuple[float, float]


class Contact(NamedTuple):
    t: float
    u: float
    z: complex
    distance: float


def intersect(a: Curve, b: Curve, tolerance: float) -> list[tuple[float, float, complex]]:
    """Return the isolated contacts (t, u, point) of z_a(t) and z_b(u), in order of t.

    Crossings, tangencies and ends that lie on the other curve, all to within `tolerance` [unit], which is raised to the
    rounding of the coordinates. Contacts between which the curves stay within the tolerance are one: given at a common
    end if they have one there, else where they are closest. Nothing is reported from where they run along each other:
    see overlap.
    """
    tolerance = max(tolerance, ROUNDING * _size(a, b))
    found = _end_contacts(a, b, tolerance)
    runs = _runs(a, b, found, tolerance)
    for t, u in _starts(a, b, tolerance, runs):
        if 0.0 <= t <= 1.0 and 0.0 <= u <= 1.0:
            z, w = a.point(t), b.point(u)
            if abs(z - w) <= tolerance:
                found.append(Contact(t, u, 0.5 * (z + w), abs(z - w)))
    if not found:
        return []
    found = [c for c in found if not any(_on_run(a, c, run, tolerance) for run, _ in runs)]
    return [(c.t, c.u, c.z) for c in _merged(a, b, found, tolerance)]


def overlap(a: Curve, b: Curve, tolerance: float) -> list[tuple[Range, Range]]:
    """Return the stretches ((t₀, t₁), (u₀, u₁)) along which two curves run within `tolerance` [unit] of each other.

    A stretch begins and ends at an end of a or of b, with t₀ < t₁; u₀ > u₁ if they run against each other. Curves that
    only drift apart from a common end or a tangency do not count. Stretches shorter than twice the tolerance are left
    out; one that comes back to its own start (the same circle twice) is given in two halves.
    """
    tolerance = max(tolerance, ROUNDING * _size(a, b))
    return _runs(a, b, _end_contacts(a, b, tolerance), tolerance)


def _runs(a: Curve, b: Curve, ends: Sequence[Contact], tolerance: float) -> list[tuple[Range, Range]]:
    marks = sorted((c.t, c.u) for c in ends)
    found: list[tuple[Range, Range]] = []
    for (t0, u0), (t1, u1) in pairwise(marks):
        middle = 0.5 * (t0 + t1)
        z = a.point(middle)
        if abs(z - a.point(t0)) + abs(a.point(t1) - z) <= 2.0 * tolerance or not _together(a, b, t0, t1, tolerance):
            continue
        u = nearest(b, z)[1]
        if b.start == b.end:  # its start has two parameters: take those that agree with the direction
            along = dot(a.derivative(middle), b.derivative(u)) > 0.0
            u0 = u0 if 0.0 < u0 < 1.0 else float(not along)
            u1 = u1 if 0.0 < u1 < 1.0 else float(along)
        if min(u0, u1) <= u <= max(u0, u1):
            if abs(a.point(t1) - a.point(t0)) <= tolerance:
                found += [((t0, middle), (u0, u)), ((middle, t1), (u, u1))]
            else:
                found.append(((t0, t1), (u0, u1)))
    return found


def _size(a: Curve, b: Curve) -> float:
    """Return what the rounding of points on both curves is relative to."""
    return max(abs(a.start), abs(a.end), abs(b.start), abs(b.end)) + max(_breadth(a), _breadth(b))


def _breadth(curve: Curve) -> float:
    if isinstance(curve, Line):
        return 0.0
    if isinstance(curve, Arc):
        return min(curve.radius, curve.length)
    if isinstance(curve, EllipticArc):
        return curve.semi_axes[0] * min(1.0, abs(curve.sweep))
    if isinstance(curve, Bezier):
        return max(abs(p - curve.start) for p in curve.control)
    raise TypeError(f"a curve of kind {type(curve).__name__} cannot be intersected")


def _starts(a: Curve, b: Curve, tolerance: float, runs: Sequence[tuple[Range, Range]]) -> list[Range]:
    """Return parameters (t, u) of all contacts but those at ends; they may lie outside 0 … 1."""
    if isinstance(a, Line) and isinstance(b, Line):
        found = line_line(a, b)
    elif isinstance(a, Line) and isinstance(b, Arc):
        found = line_arc(a, b, tolerance)
    elif isinstance(a, Arc) and isinstance(b, Line):
        found = [(t, u) for u, t in line_arc(b, a, tolerance)]
    elif isinstance(a, Arc) and isinstance(b, Arc):
        found = arc_arc(a, b, tolerance)
    else:
        return _searched(a, b, tolerance, runs)
    return [_refined(a, b, t, u) for t, u in found]


def _searched(a: Curve, b: Curve, tolerance: float, runs: Sequence[tuple[Range, Range]]) -> list[Range]:
    """Search the parts of a that do not run along b."""
    if not runs:
        return meetings(a, b, tolerance)
    found = []
    bounds = [0.0, *(t for stretch, _ in runs for t in stretch), 1.0]
    for first, last in zip(bounds[::2], bounds[1::2], strict=True):
        if last - first > SHORTEST:
            part = a if last == 1.0 else a.split(last)[0]
            part = part if first == 0.0 else part.split(first / last)[1]
            found += [(first + (last - first) * t, u) for t, u in meetings(part, b, tolerance)]
    return found


def _on_run(a: Curve, c: Contact, run: Range, tolerance: float) -> bool:
    return run[0] < c.t < run[1] or any(abs(c.z - a.point(t)) <= tolerance for t in run)


def _refined(a: Curve, b: Curve, t: float, u: float) -> Range:
    """Improve a crossing by Newton's method; a tangency is returned as it is."""
    for _ in range(NEWTON):
        if not (-0.1 <= t <= 1.1 and -0.1 <= u <= 1.1):
            break
        along_a, along_b = a.derivative(t), b.derivative(u)
        turn = cross(along_a, along_b)
        if abs(turn) <= SLIM * abs(along_a) * abs(along_b):
            break
        between = b.point(u) - a.point(t)
        dt, du = cross(between, along_b) / turn, cross(between, along_a) / turn
        t, u = t + dt, u + du
        if abs(dt) + abs(du) < 1e-15:
            break
    return t, u


def _end_contacts(a: Curve, b: Curve, tolerance: float) -> list[Contact]:
    """Return the ends of either curve that lie on the other, common ends as such."""
    found = []
    for one, other, swapped in ((a, b, False), (b, a, True)):
        for t, z in ((0.0, one.start), (1.0, one.end)):
            ends = [(abs(other.start - z), 0.0), (abs(other.end - z), 1.0)]
            near = [end for end in ends if end[0] <= tolerance] or [nearest(other, z)]
            for distance, u in near:
                if distance <= tolerance:
                    found.append(Contact(u, t, z, distance) if swapped else Contact(t, u, z, distance))
    return found


def _together(a: Curve, b: Curve, t0: float, t1: float, tolerance: float) -> bool:
    """Tell whether z_a(t) stays within the tolerance of b for t from t0 to t1."""
    return all(nearest(b, a.point(t0 + share * (t1 - t0)))[0] <= tolerance for share in CHECKED)


def _merged(a: Curve, b: Curve, found: Sequence[Contact], tolerance: float) -> list[Contact]:
    """Return the best contact of every group between which the curves stay together, in order of t."""
    zero = ROUNDING * _size(a, b)

    def rank(c: Contact) -> tuple[bool, int, float, float]:
        ends = (c.t in (0.0, 1.0)) + (c.u in (0.0, 1.0))
        return c.distance > zero, -ends, c.distance, c.t

    def one(c: Contact, d: Contact) -> bool:
        return (
            abs(c.z - d.z) <= tolerance or _together(a, b, c.t, d.t, tolerance) or _together(b, a, c.u, d.u, tolerance)
        )

    groups: list[list[Contact]] = []
    for contact in sorted(found, key=rank):
        same = [group for group in groups if any(one(contact, other) for other in group)]
        groups = [group for group in groups if group not in same]
        groups.append([c for group in same for c in group] + [contact])
    return sorted((min(group, key=rank) for group in groups), key=lambda c: (c.t, c.u))
