"""Where the full lines and circles of two pieces come together, in closed form.

Each function returns starting values (t, u) for the parameters of the two pieces: of the crossings and, where the two
only just touch or just miss, of the closest approach. They may lie outside 0 … 1; the caller refines, measures and
chooses. All lengths are measured from a start point, so that an arc of huge radius loses no digits.
"""

from __future__ import annotations

from cmath import phase
from math import sqrt, tau

from edgetally.curves.arc import Arc
from edgetally.curves.line import Line
from edgetally.curves.nearest import ring_gap

Start = tuple[float, float]


def dot(p: complex, q: complex) -> float:
    """Return the scalar product."""
    return p.real * q.real + p.imag * q.imag


def cross(p: complex, q: complex) -> float:
    """Return the vector product, positive if q lies counter-clockwise of p."""
    return p.real * q.imag - p.imag * q.real


def line_line(a: Line, b: Line) -> list[Start]:
    """Return where two straight lines cross: nothing if they are parallel."""
    one, other = a.end - a.start, b.end - b.start
    between = b.start - a.start
    turn = cross(one, other)
    if turn == 0.0:
        return []
    return [(cross(between, other) / turn, cross(between, one) / turn)]


def line_arc(a: Line, b: Arc, near: float) -> list[Start]:
    """Return where a straight line crosses a circle, or, if it misses by at most `near`, the closest approach."""
    chord = a.end - a.start
    length = abs(chord)
    if length == 0.0:
        return []
    unit = chord / length
    found = _line_circle(a.start - b.start, unit, b.spoke, near)
    return [(along / length, arc_parameter(b, a.start + along * unit)) for along in found]


def _line_circle(d: complex, unit: complex, spoke: complex, near: float) -> list[float]:
    """Solve |d + τ·unit + spoke| = |spoke| for τ, d being the line's point as seen from the circle's start point.

    τ² + 2βτ + γ = 0. The root is of R² − h², h the distance of the centre from the line; R − h is put together from
    R − |spoke across the line|, taken as cos²/(1 + sin), because R and h may be equal to all digits.
    """
    radius = abs(spoke)
    spoke_along, spoke_across = dot(unit, spoke), cross(unit, spoke)
    beta = dot(unit, d) + spoke_along
    across = cross(unit, d) + spoke_across
    h = abs(across)
    inside = radius - h
    if h > 0.5 * radius and across * spoke_across > 0.0:
        sign = 1.0 if across > 0.0 else -1.0
        inside = spoke_along * spoke_along / (radius + abs(spoke_across)) - sign * cross(unit, d)
    if inside < 0.0:
        return [-beta] if inside >= -near else []
    root = sqrt(inside * (radius + h))
    gamma = dot(d, d) + 2.0 * dot(d, spoke)
    far = -(beta + root) if beta >= 0 else root - beta
    found = [far, gamma / far] if far != 0.0 else [0.0]
    if inside <= near:  # nearly tangent: the apex, too, is a contact
        found.append(-beta)
    return found


def arc_parameter(arc: Arc, z: complex) -> float:
    """Return the t of the arc's circle whose direction from the centre is that of z, the one nearest to 0 ≤ t ≤ 1."""
    turn = phase(1.0 + (z - arc.start) / arc.spoke)
    turn = turn if arc.sweep > 0 else -turn
    full = abs(arc.sweep)
    if turn < 0.0 and turn + tau - full < -turn:
        turn += tau
    return turn / full


def arc_arc(a: Arc, b: Arc, near: float) -> list[Start]:
    """Return where two circles cross, and the closest approach if they are tangent to within `near`.

    The crossings lie on the radical line Re(d·conj(n)) = |r|²/2 − Re(r·conj(b.spoke)), with d = z − a.start,
    r = b.start − a.start and n the vector between the centres.
    """
    r = b.start - a.start
    n = a.spoke - b.spoke + r
    apart = abs(n)
    if apart <= 1e-15 * (a.radius + b.radius):
        return []
    unit = n / apart
    starts = []
    gap = _circle_gap(a, b, unit)
    if gap <= near:
        on_radical = (0.5 * dot(r, r) - dot(r, b.spoke)) / apart
        small = a if a.radius <= b.radius else b
        d = on_radical * unit + (a.start - small.start)
        for along in _line_circle(d, 1j * unit, small.spoke, near):
            z = small.start + (d + along * 1j * unit)
            starts.append((arc_parameter(a, z), arc_parameter(b, z)))
    if abs(gap) <= near:
        for one in (unit, -unit):
            t = arc_parameter(a, a.start + (a.radius * one - a.spoke))
            starts.append((t, arc_parameter(b, a.point(t))))
    return starts


def _circle_gap(a: Arc, b: Arc, unit: complex) -> float:
    """Return by how much two circles miss each other, negative by how much they overlap (the smaller of both sides)."""
    # the points of the smaller circle on the line of centres, measured against the larger circle
    small, large = (a, b) if a.radius <= b.radius else (b, a)
    gaps = [ring_gap(large, small.start + (small.radius * s * unit - small.spoke)) for s in (1.0, -1.0)]
    low, high = min(gaps), max(gaps)
    return max(low, -high)
