"""Where two smooth curves of any kind come together, by halving both until each piece is as good as straight.

A piece of parameter width h stays within sag = bend·h²/8 of its chord, and h·z′ within 4·sag of its chord's vector;
bend bounds |z″|. By these two bounds pairs of pieces are ruled out (too far apart), settled (their directions differ by
so much that they cross at most once, or they are flat to a part of the tolerance) or halved.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from edgetally.curves.curve import Complexes, Curve, Floats

# Halvings: from a curve to 1e-12 of it. Pieces as flat as the tolerance stop far earlier.
DEPTH = 40
# Pairs under examination at once: more arise only where curves run along each other for long.
PAIRS = 4000
# Points kept at most: two cubics cross 9 times, two quintics 25 times.
KEPT = 100
NEWTON = 8
# A crossing at an angle whose sine is below this is a tangency to Newton's method.
SLIM = 1e-7
# Closest approach: 7 times into the best quarter of a piece leaves its distance right to 4⁻¹⁴ of the sag.
ZOOMS, ZOOMED = 7, np.linspace(0.0, 1.0, 9)
SAMPLES = np.linspace(0.0, 1.0, 33)
BOTH_ENDS = np.array([[0.0], [1.0]])

Parameters = tuple[Floats, Floats]


def meetings(a: Curve, b: Curve, near: float) -> list[tuple[float, float]]:
    """Return parameters (t, u), 0 ≤ t, u ≤ 1, of points at which a and b come within `near` [unit], ends left aside.

    Every crossing is among them and, of every stretch within `near`, at least one point. Where a and b run along each
    other over a long way only some points of it are returned.
    """
    if _part_at_joint(a, b, near):
        return []
    low_a, low_b = np.zeros(1), np.zeros(1)
    width = 1.0
    t, u = np.zeros(0), np.zeros(0)
    for level in range(DEPTH):
        (a0, a1), (b0, b1) = a.points(low_a + width * BOTH_ENDS), b.points(low_b + width * BOTH_ENDS)
        sag_a, sag_b = a.bend * width * width / 8.0, b.bend * width * width / 8.0
        keep = _within(a0, a1, b0, b1, near + sag_a + sag_b)
        if not keep.any():
            break
        low_a, low_b = low_a[keep], low_b[keep]
        a0, a1, b0, b1 = a0[keep], a1[keep], b0[keep], b1[keep]
        chord_a, chord_b = a1 - a0, b1 - b0
        turn = np.abs((chord_a.conj() * chord_b).imag)
        crossing = turn > 8.0 * (np.abs(chord_a) * sag_b + np.abs(chord_b) * sag_a + 4.0 * sag_a * sag_b)
        stop = max(sag_a, sag_b) <= 0.125 * near or level == DEPTH - 1 or len(low_a) > PAIRS
        for settled, search in ((crossing, _crossed), (~crossing & stop, _zoomed)):
            if settled.any():
                shares = _straight_shares(a0[settled], chord_a[settled], b0[settled], chord_b[settled])
                start = low_a[settled] + width * shares[0], low_b[settled] + width * shares[1]
                more = _best(a, b, *search(a, b, *start, width), near)
                t, u = np.concatenate([t, more[0]]), np.concatenate([u, more[1]])
        if stop:
            break
        low_a, low_b, width = low_a[~crossing], low_b[~crossing], 0.5 * width
        low_a = np.concatenate([low_a, low_a, low_a + width, low_a + width])
        low_b = np.concatenate([low_b, low_b + width, low_b, low_b + width])
    return list(zip(t.tolist(), u.tolist(), strict=True))


def _within(a0: Complexes, a1: Complexes, b0: Complexes, b1: Complexes, reach: float) -> NDArray[np.bool_]:
    """Tell which pairs of chords are not shown to be more than `reach` apart by x, y or either chord's normal."""
    keep = np.ones(len(a0), dtype=bool)
    for axis in (1.0, 1j, 1j * (a1 - a0), 1j * (b1 - b0)):
        size = np.abs(axis)
        unit = np.conj(axis) / np.where(size > 0, size, 1.0)
        one, two, three = (unit * (a1 - a0)).real, (unit * (b0 - a0)).real, (unit * (b1 - a0)).real
        low_a, high_a = np.minimum(one, 0.0), np.maximum(one, 0.0)
        low_b, high_b = np.minimum(two, three), np.maximum(two, three)
        keep &= (low_b - high_a <= reach) & (low_a - high_b <= reach)
    return keep


def _straight_shares(a0: Complexes, chord_a: Complexes, b0: Complexes, chord_b: Complexes) -> Parameters:
    """Return where the chords cross, kept to them; for parallel ones the middle of a and its foot on b."""
    turn = (chord_a.conj() * chord_b).imag
    between = b0 - a0
    parallel = np.abs(turn) <= SLIM * np.abs(chord_a) * np.abs(chord_b)
    turn = np.where(parallel, 1.0, turn)
    t = np.where(parallel, 0.5, (between.conj() * chord_b).imag / turn)
    t = np.clip(t, 0.0, 1.0)
    square = np.abs(chord_b) ** 2
    foot = ((t * chord_a - between) * chord_b.conj()).real / np.where(square > 0, square, 1.0)
    return t, np.clip(foot, 0.0, 1.0)


def _crossed(a: Curve, b: Curve, t: Floats, u: Floats, width: float) -> Parameters:
    """Follow Newton's method for z_a(t) = z_b(u)."""
    for _ in range(NEWTON):
        along_a, along_b = a.derivatives(t), b.derivatives(u)
        turn = (along_a.conj() * along_b).imag
        slim = np.abs(turn) <= SLIM * np.abs(along_a) * np.abs(along_b)
        turn = np.where(slim, 1.0, turn)
        between = b.points(u) - a.points(t)
        dt = np.where(slim, 0.0, (between.conj() * along_b).imag / turn)
        du = np.where(slim, 0.0, (between.conj() * along_a).imag / turn)
        t, u = np.clip(t + dt, 0.0, 1.0), np.clip(u + du, 0.0, 1.0)
        if max(np.abs(dt).max(), np.abs(du).max()) < 1e-15:
            break
    return t, u


def _zoomed(a: Curve, b: Curve, t: Floats, u: Floats, width: float) -> Parameters:
    """Find the closest approach within a piece about t, then the crossing if there is one."""
    half = np.full(len(t), width)
    for _ in range(ZOOMS):
        ts = np.clip(t[:, None] + half[:, None] * (2.0 * ZOOMED - 1.0), 0.0, 1.0)
        us = _feet(b, a.points(ts), np.broadcast_to(u[:, None], ts.shape))
        best = np.abs(a.points(ts) - b.points(us)).argmin(axis=1)
        rows = np.arange(len(t))
        t, u = ts[rows, best], us[rows, best]
        half *= 0.25
    crossed = _crossed(a, b, t, u, width)
    better = np.abs(a.points(crossed[0]) - b.points(crossed[1])) < np.abs(a.points(t) - b.points(u))
    return np.where(better, crossed[0], t), np.where(better, crossed[1], u)


def _feet(b: Curve, z: Complexes, u: Floats) -> Floats:
    """Return the parameters on b of the feet of the perpendiculars from z, started at u."""
    for _ in range(3):
        along = b.derivatives(u)
        square = np.abs(along) ** 2
        u = np.clip(u + ((z - b.points(u)) * along.conj()).real / np.where(square > 0, square, 1.0), 0.0, 1.0)
    return u


def _best(a: Curve, b: Curve, t: Floats, u: Floats, near: float) -> Parameters:
    """Return those that are within `near`, without doubles, the KEPT closest if there are more."""
    z = a.points(t)
    distance = np.abs(z - b.points(u))
    order = np.argsort(distance, kind="stable")
    order = order[distance[order] <= near]
    chosen: list[int] = []
    for k in order[: 10 * KEPT].tolist():
        if len(chosen) < KEPT and not (np.abs(z[chosen] - z[k]) <= 0.5 * near).any():
            chosen.append(k)
    return t[chosen], u[chosen]


def _part_at_joint(a: Curve, b: Curve, near: float) -> bool:
    """Tell whether a and b have one common end and part from it for good.

    That is so if there is a direction in which all of a leads away from the joint and all of b leads backwards.
    """
    joints = [
        (t, u) for t in (0, 1) for u in (0, 1) if abs((a.end if t else a.start) - (b.end if u else b.start)) <= near
    ]
    if len(joints) != 1:
        return False
    ((t, u),) = joints
    out_a = a.derivatives(SAMPLES) * (-1.0 if t else 1.0)
    out_b = b.derivatives(SAMPLES) * (-1.0 if u else 1.0)
    first_a, first_b = complex(out_a[-t]), complex(out_b[-u])
    if first_a == 0 or first_b == 0:
        return False
    axis = first_a / abs(first_a) - first_b / abs(first_b)
    if abs(axis) < 1e-6:
        return False
    axis = (axis / abs(axis)).conjugate()
    # between two samples, 1/32 apart, a derivative changes by no more than bend/64 from the nearer one
    return bool((axis * out_a).real.min() > a.bend / 64.0 and (-axis * out_b).real.min() > b.bend / 64.0)
