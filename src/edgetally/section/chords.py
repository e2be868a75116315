"""Runs of many short chords, taken as the smooth curve that encloses the same area.

A finely chopped arc has thousands of corners, each of which turns by little. In the solution the chords act like a
smooth boundary in their mean position: one that cuts off as much as it adds, inside the vertices by κh²/12. What is
left is of the third order in the turn θ of a vertex: J of a regular polygon is 1 − 0.039·θ³ of that of the circle of
its area (0.0315 for the hexagon, where θ = π/3). Runs that turn too sharply for that are left as they are.
"""

from __future__ import annotations

from collections.abc import Sequence
from math import comb

import numpy as np

from edgetally.curves.bezier import Bezier
from edgetally.curves.curve import Complexes, Curve, Floats
from edgetally.curves.line import Line

# Vertices that turn by more [rad] stay corners: 0.014 is a circle of 450 chords.
SLIGHT = 0.014
# The relative error of taking the smooth curve, as a multiple of θ³, with a margin for other shapes than the circle.
EFFECT = 0.1
# A run is worth it from this many chords; neighbours in it differ in length by less than this factor.
FEWEST = 12
UNLIKE = 3.0
# Polynomials of this degree are fitted, and split where they miss a point by more than this share of the rise of a
# chord.
DEGREE = 9
MISS = 0.02


def smoothed(loop: Sequence[Curve]) -> tuple[list[Curve], float]:
    """Return the curves of the loop with runs of slight chords made smooth, and the relative error that this makes.

    Straight pieces of the size of the offset, κh²/12, connect a run with a neighbour that is not part of it.
    """
    slight = _slight_joints(loop)
    if int(slight.sum()) < FEWEST:
        return list(loop), 0.0
    count = len(loop)
    closed = bool(slight.all())
    shift = 0 if closed else (int(np.flatnonzero(~slight)[0]) + 1) % count
    curves = [*loop[shift:], *loop[:shift]]
    slight = np.roll(slight, -shift)
    out: list[Curve] = []
    effect = 0.0
    k = 0
    while k < count:
        last = k
        while last < count - 1 and slight[last]:
            last += 1
        run = curves[k : last + 1]
        pieces = _fitted(run, closed=closed) if len(run) >= FEWEST else None
        if pieces is None:
            out += run
        else:
            out += pieces
            effect = max(effect, EFFECT * float(np.abs(_turns(run)).max()) ** 3)
        k = last + 1
    return (_connected(out), effect) if effect else (list(loop), 0.0)


def _slight_joints(loop: Sequence[Curve]) -> np.typing.NDArray[np.bool_]:
    """Mark the joints between two chords of like length that turn by little; all have an end that is joint's number."""
    line = np.array([isinstance(curve, Line) for curve in loop])
    chord = np.array([curve.end - curve.start for curve in loop])
    length = np.abs(chord)
    after, longer = np.roll(chord, -1), np.roll(length, -1)
    alike = (length < UNLIKE * longer) & (longer < UNLIKE * length)
    turned = np.abs(np.angle(after * chord.conj())) < SLIGHT
    marked: np.typing.NDArray[np.bool_] = line & np.roll(line, -1) & alike & turned
    return marked


def _turns(run: Sequence[Curve]) -> Floats:
    chord = np.array([curve.end - curve.start for curve in run])
    turned: Floats = np.angle(chord[1:] * chord[:-1].conj())
    return turned


def _fitted(run: Sequence[Curve], *, closed: bool) -> list[Curve] | None:
    """Return smooth pieces in the mean position of the chords, None if the run is no smooth curve."""
    z = np.array([curve.start for curve in run] + [run[-1].end], dtype=complex)
    step = np.diff(z)
    length = np.abs(step)
    before, after = (np.roll(length, 1), length) if closed else (length[:-1], length[1:])
    arriving, leaving = (np.roll(step, 1), step) if closed else (step[:-1], step[1:])
    # κ·n by differences, times the mean of h³ over that of h
    bent = 2.0 * (leaving / after - arriving / before) / (before + after)
    inward = bent * (before**3 + after**3) / (12.0 * (before + after))
    inward = np.append(inward, inward[0]) if closed else np.concatenate([inward[:1], inward, inward[-1:]])
    t = np.concatenate([[0.0], np.cumsum(length)])
    pieces: list[Curve] = []
    waiting = [(0, len(z) - 1)]
    while waiting:
        low, high = waiting.pop()
        here = slice(low, high + 1)
        piece = _polynomial(t[here], (z + inward)[here], MISS * float(np.abs(inward[here]).max()))
        if piece is not None:
            pieces.append(piece)
        elif high - low >= 2 * FEWEST:
            middle = (low + high) // 2
            waiting += [(middle, high), (low, middle)]
        else:
            return None
    return pieces


def _polynomial(t: Floats, z: Complexes, miss: float) -> Bezier | None:
    """Return the polynomial through both ends that fits the points best, None if it misses one by more than `miss`."""
    u = (t - t[0]) / (t[-1] - t[0])
    chord = z[0] + u * (z[-1] - z[0])
    degree = min(DEGREE, len(t) // 2)
    # u(1 − u) times a Bernstein sum of two degrees less keeps the ends
    inner = degree - 2
    basis = np.array([comb(inner, k) * u ** (k + 1) * (1.0 - u) ** (inner - k + 1) for k in range(inner + 1)]).T
    parts, *_ = np.linalg.lstsq(basis[1:-1], (z - chord)[1:-1], rcond=None)
    if np.abs(chord + basis @ parts - z).max() > miss:
        return None
    control = z[0] + np.arange(degree + 1) / degree * (z[-1] - z[0])
    for k in range(inner + 1):
        control[k + 1] += parts[k] * comb(inner, k) / comb(degree, k + 1)
    return Bezier(tuple(complex(c) for c in control))


def _connected(curves: list[Curve]) -> list[Curve]:
    """Put a straight piece wherever one curve does not begin where the one before it ends."""
    out: list[Curve] = []
    size = max(curve.length for curve in curves)
    for before, curve in zip([curves[-1], *curves[:-1]], curves, strict=True):
        if abs(before.end - curve.start) > 1e-11 * size:
            out.append(Line(before.end, curve.start, curve.source))
        out.append(curve)
    return out
