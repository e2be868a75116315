"""Where two smooth curves of any kind come together, by halving both until each piece is as good as straight.

A piece of parameter width h lies within bend·h²/8 of its chord and its derivative within bend·h/2 of Δz/h; bend bounds
|z″|. With these two bounds alone pairs of pieces are ruled out (too far apart), settled (their directions differ by so
much that they cross at most once) or halved.
"""

from __future__ import annotations

import numpy as np

from edgetally.curves.curve import Complexes, Curve, Floats

# Halvings: from a curve to 1e-12 of it. Pieces as flat as the tolerance stop far earlier.
DEPTH = 40
# Pairs under examination at once; curves that run along each other for long would else fill the memory.
PAIRS = 4000
NEWTON = 8


def meetings(a: Curve, b: Curve, near: float) -> tuple[Floats, Floats]:
    """Return parameters (t, u) of points at which a and b cross or come within about `near` of each other.

    Every crossing is among them and, of every stretch within `near`, at least one point; there are points besides, and
    doubles. Where a and b run along each other over a long way only some points of it are returned.
    """
    if _part_at_joint(a, b, near):
        return np.zeros(0), np.zeros(0)
    flat = 0.125 * near
    low_a, low_b = np.zeros(1), np.zeros(1)
    width = 1.0
    found: list[tuple[Floats, Floats]] = []
    for level in range(DEPTH):
        a0, a1, b0, b1 = a.points(low_a), a.points(low_a + width), b.points(low_b), b.points(low_b + width)
        sag_a, sag_b = a.bend * width * width / 8.0, b.bend * width * width / 8.0
        keep = _within(a0, a1, b0, b1, near + sag_a + sag_b)
        low_a, low_b, a0, a1, b0, b1 = (x[keep] for x in (low_a, low_b, a0, a1, b0, b1))
        if not len(low_a):
            break
        chord_a, chord_b = a1 - a0, b1 - b0
        # every derivative (times width) is the chord to within 4·sag
        turn = np.abs((chord_a.conj() * chord_b).imag)
        blur = 8.0 * (np.abs(chord_a) * sag_b + np.abs(chord_b) * sag_a + 4.0 * sag_a * sag_b)
        settled = turn > blur
        if sag_a <= flat and sag_b <= flat or level == DEPTH - 1 or len(low_a) > PAIRS:
            settled[:] = True
        if settled.any():
            found.append(_closest(low_a[settled], low_b[settled], width, a0, chord_a, b0, chord_b, settled))
        low_a, low_b = low_a[~settled], low_b[~settled]
        width *= 0.5
        low_a, low_b = (
            np.concatenate([low_a, low_a, low_a + width, low_a + width]),
            np.concatenate([low_b, low_b + width, low_b, low_b + width]),
        )
    if not found:
        return np.zeros(0), np.zeros(0)
    return _polished(a, b, np.concatenate([t for t, _ in found]), np.concatenate([u for _, u in found]))
