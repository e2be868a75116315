"""B-splines and NURBS, taken apart at their knots into smooth pieces."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise
from math import atan, cos, isfinite

import numpy as np

from edgetally.curves.arc import Arc
from edgetally.curves.bezier import Bezier
from edgetally.curves.curve import UNKNOWN, Complexes, Floats, Source
from edgetally.curves.line import Line

Piece = Bezier | Line | Arc

EPS = 2.0**-52
# What the coordinates of a control point have gone through when its place is judged.
ROUNDINGS = 8.0
# Knots nearer than this share of the domain are one knot: files give them with 15 to 17 digits.
SAME_KNOT = 1e-14
# Weights of a circle are square roots and cosines that a file rounds.
SAME_WEIGHT = 4e-14


def bspline_pieces(
    degree: int,
    knots: Sequence[float],
    control: Sequence[complex],
    weights: Sequence[float] | None = None,
    source: Source = UNKNOWN,
) -> tuple[Piece, ...]:
    """Return the smooth pieces, in order, of the B-spline on its domain knots[degree] … knots[len(control)].

    Clamped, unclamped and periodic ones alike: a periodic one repeats its first `degree` control points at the end. The
    Bézier points of a span are the values of the blossom at its two knots (Ramshaw 1989; the same as inserting each
    knot up to multiplicity `degree`, Piegl and Tiller, The NURBS Book, A5.6). Spans of no width and pieces that are one
    point are left out; what is straight to rounding becomes a Line, a rational parabola that is circular to rounding an
    Arc (both traverse the piece in its direction, at another speed). Neighbours share their ends to the last digit, and
    so do last and first piece if they meet to rounding.

    Raises ValueError for wrong counts, decreasing or infinite knots, weights that are not positive, and for an inner
    knot of multiplicity degree + 1 or more at which the curve jumps.
    """
    count = len(control)
    if degree < 1 or count < degree + 1:
        raise ValueError(f"a spline of degree {degree} needs at least {max(degree, 1) + 1} control points, got {count}")
    if len(knots) != count + degree + 1:
        raise ValueError(
            f"a spline of degree {degree} with {count} control points needs {count + degree + 1} knots, "
            f"got {len(knots)}"
        )
    if not all(map(isfinite, knots)) or any(b < a for a, b in pairwise(knots)):
        raise ValueError("the knots of a spline must be finite and may not decrease")
    if weights is not None:
        if len(weights) != count:
            raise ValueError(f"a spline with {count} control points needs {count} weights, got {len(weights)}")
        if not all(isfinite(w) and w > 0 for w in weights):
            raise ValueError(f"the weights of a spline must be positive, got {min(weights):g}")
        if max(weights) - min(weights) <= 4 * EPS * max(weights):
            weights = None
    low, high = knots[degree], knots[count]
    if not high > low:
        raise ValueError(f"the spline has no length: its domain runs from {low:g} to {high:g}")

    magnitude = max(map(abs, control))
    homogeneous = np.array([control, [1.0] * count if weights is None else weights], dtype=complex).T
    homogeneous[:, 0] *= homogeneous[:, 1]
    beziers: list[Bezier] = []
    for k in range(degree, count):
        if knots[k + 1] - knots[k] <= SAME_KNOT * (high - low):
            continue
        points, w = _span(degree, knots, homogeneous, k)
        if beziers:
            gap = abs(points[0] - beziers[-1].end)
            if gap > 64 * EPS * magnitude and knots[k] == knots[k - degree]:
                raise ValueError(
                    f"the spline breaks at knot {knots[k]:g}, of multiplicity {list(knots).count(knots[k])}: "
                    f"its two sides are {gap:.6g} apart"
                )
            points[0] = beziers[-1].end
        if max(abs(p - points[0]) for p in points) > ROUNDINGS * EPS * magnitude:
            beziers.append(Bezier(tuple(points), None if weights is None else tuple(w), source))
    return tuple(_simplest(piece, magnitude) for piece in _closed(beziers, magnitude))


def fit_spline(
    points: Sequence[complex],
    tangents: tuple[complex | None, complex | None] = (None, None),
    *,
    closed: bool = False,
    source: Source = UNKNOWN,
) -> tuple[Piece, ...]:
    """Return the pieces of the interpolating cubic spline through fit points.

    The choice, for a SPLINE that comes with fit points only: the twice continuously differentiable cubic whose
    parameter at the points is the chord length summed up; with no curvature at an end (natural) unless the direction
    there is given, which is taken at unit speed dz/ds = 1, the size of a tangent in this parameter; `closed` makes the
    first two derivatives agree across the first point (de Boor, A Practical Guide to Splines, chapter IV). A point
    equal to the one before it is dropped. Raises ValueError for fewer than two points that differ.
    """
    kept = [z for z, before in zip(points, [None, *points][: len(points)], strict=True) if z != before]
    if closed and len(kept) > 1 and kept[0] != kept[-1]:
        kept.append(kept[0])
    if len(kept) < 2 or not all(isfinite(z.real) and isfinite(z.imag) for z in kept):
        raise ValueError(f"a spline through fit points needs at least two that differ, got {len(kept)}")
    z = np.array(kept, dtype=complex)
    step = np.abs(np.diff(z))
    secant = np.asarray(np.diff(z) / step, dtype=complex)
    if closed and len(kept) > 3:
        slopes = _periodic_slopes(step, secant)
    else:
        slopes = _open_slopes(step, secant, tangents)
    magnitude = float(np.abs(z).max())
    pieces = []
    for k in range(len(step)):
        third = step[k] / 3.0
        inner = (complex(z[k] + third * slopes[k]), complex(z[k + 1] - third * slopes[k + 1]))
        pieces.append(Bezier((kept[k], *inner, kept[k + 1]), None, source))
    return tuple(_simplest(piece, magnitude) for piece in pieces)


def _open_slopes(step: Floats, secant: Complexes, tangents: tuple[complex | None, complex | None]) -> Complexes:
    n = len(step) + 1
    below, diagonal, above = np.zeros(n), np.ones(n), np.zeros(n)
    right = np.zeros(n, dtype=complex)
    below[1:-1], diagonal[1:-1], above[1:-1] = step[1:], 2.0 * (step[:-1] + step[1:]), step[:-1]
    right[1:-1] = 3.0 * (step[1:] * secant[:-1] + step[:-1] * secant[1:])
    for row, tangent, natural in ((0, tangents[0], secant[0]), (n - 1, tangents[1], secant[-1])):
        if tangent:
            right[row] = tangent / abs(tangent)
        else:
            diagonal[row], right[row] = 2.0, 3.0 * natural
            (above if row == 0 else below)[row] = 1.0
    return _tridiagonal(below, diagonal, above, right)


def _periodic_slopes(step: Floats, secant: Complexes) -> Complexes:
    before, behind = np.roll(step, 1), np.roll(secant, 1)
    below, diagonal, above = step.copy(), 2.0 * (before + step), before.copy()
    right = 3.0 * (step * behind + before * secant)
    # the two corner entries as a correction of rank one (Sherman and Morrison)
    corner = -diagonal[0]
    side = np.zeros(len(step), dtype=complex)
    side[0], side[-1] = corner, above[-1]
    share = below[0] / corner
    diagonal[0] -= corner
    diagonal[-1] -= above[-1] * share
    y, q = _tridiagonal(below, diagonal, above, right), _tridiagonal(below, diagonal, above, side)
    slopes = y - q * (y[0] + share * y[-1]) / (1.0 + q[0] + share * q[-1])
    return np.append(slopes, slopes[0])


def _tridiagonal(below: Floats, diagonal: Floats, above: Floats, right: Complexes) -> Complexes:
    """Solve by elimination; the matrix is diagonally dominant, so no pivoting is needed."""
    n = len(diagonal)
    upper, result = np.zeros(n), np.zeros(n, dtype=complex)
    for k in range(n):
        pivot = diagonal[k] - (below[k] * upper[k - 1] if k else 0.0)
        upper[k] = above[k] / pivot
        result[k] = (right[k] - (below[k] * result[k - 1] if k else 0.0)) / pivot
    for k in range(n - 2, -1, -1):
        result[k] -= upper[k] * result[k + 1]
    return result


def _span(degree: int, knots: Sequence[float], homogeneous: Complexes, k: int) -> tuple[list[complex], list[float]]:
    """Return the Bézier points and weights of the span knots[k] … knots[k + 1]: the blossom at j times the second."""
    points, weights = [], []
    for j in range(degree + 1):
        row = homogeneous[k - degree : k + 1].copy()
        for r in range(1, degree + 1):
            t = knots[k + 1] if r <= j else knots[k]
            for i in range(degree - r + 1):
                low, high = knots[k - degree + r + i], knots[k + 1 + i]
                share = (t - low) / (high - low)
                row[i] = (1.0 - share) * row[i] + share * row[i + 1]
        points.append(complex(row[0, 0] / row[0, 1]))
        weights.append(float(row[0, 1].real))
    return points, weights


def _closed(pieces: list[Bezier], magnitude: float) -> list[Bezier]:
    """Let the last piece end where the first begins, if they meet to rounding."""
    if len(pieces) > 1 and abs(pieces[-1].end - pieces[0].start) <= 64 * EPS * magnitude:
        last = pieces[-1]
        pieces[-1] = Bezier((*last.control[:-1], pieces[0].start), last.weights, last.source)
    return pieces


def _simplest(piece: Bezier, magnitude: float) -> Piece:
    """Return the piece as a Line or an Arc, if it is one to rounding."""
    chord = piece.end - piece.start
    noise = ROUNDINGS * EPS * magnitude
    if abs(chord) > noise:
        ahead = [(p - piece.start) * chord.conjugate() / abs(chord) for p in piece.control]
        forward = all(b.real >= a.real - noise for a, b in pairwise(ahead))
        if forward and all(abs(p.imag) <= noise for p in ahead):
            return Line(piece.start, piece.end, piece.source)
        if piece.degree == 2 and piece.weights is not None:
            return _arc(piece, noise) or piece
    return piece


def _arc(piece: Bezier, noise: float) -> Arc | None:
    """Return the circular arc that a rational parabola is if its sides are equal and w₁²/(w₀w₂) = cos² of their angle.

    Source: Piegl and Tiller, The NURBS Book, section 7.2.
    """
    assert piece.weights is not None
    start, corner, end = piece.control
    half = (end - start) / 2.0
    apex = (corner - start - half) / half  # i·tan of the angle between chord and side, negative for a left turn
    if abs(apex.real) * abs(half) > noise or apex.imag == 0.0:
        return None
    angle = atan(-apex.imag)
    w0, w1, w2 = piece.weights
    if abs(w1 * w1 / (w0 * w2) - cos(angle) ** 2) > SAME_WEIGHT:
        return None
    bulge = -apex.imag / (1.0 + (1.0 + apex.imag**2) ** 0.5)  # tan(angle / 2), the sweep being 2·angle
    return Arc.from_bulge(start, end, bulge, piece.source)
