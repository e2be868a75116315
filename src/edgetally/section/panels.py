"""Panels: the pieces of the boundary on which everything is a polynomial through Gauss–Legendre nodes.

The warping function of a region behaves like r^{π/a} at a corner of interior angle a. Panels that shrink towards the
corner by a fixed ratio resolve that at a rate exponential in their number; what the innermost pair misses falls as its
size to the power 2π/a (Babuška and Guo on graded meshes of this kind).
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from edgetally.curves.curve import Complexes, Floats
from edgetally.section import legendre
from edgetally.section.boundary import Boundary, Ints, Mask

# Towards a corner each panel is this many times shorter than the one before.
RATIO = 4.0
# A panel may be SLACK times the length of another, slightly more than RATIO, and AWAY times its distance to it longer.
SLACK = 4.5
AWAY = 3.0
# A panel may be this many times longer than its distance to a source in a void: 90° of a circle around one are left.
REACH = 1.6
# On 90° of a circle few nodes do, and the preimage of a point nearby is unique.
TURN = np.pi / 2
# Nodes of shorter panels would coincide in double precision (sizes near 1).
SHORTEST = 1e-11
# Joints that turn by less [rad], and those where only the curvature jumps, are graded when refinement shows the need.
WEAK = 0.15
# Nodes on a chord between two such joints at first.
CHORD_NODES = 4
# A general curve is halved until its polynomial of degree 15 has ended.
SAMPLES = 16
ENDED = 1e-13
ROUNDS = 60


@dataclass(frozen=True, eq=False)
class Panels:
    """P panels in order along the loops: part low < t < high of a curve, with `order` nodes on it. All arrays (P,)."""

    boundary: Boundary
    curve: Ints
    low: Floats
    high: Floats
    order: Ints

    def __len__(self) -> int:
        return len(self.curve)

    @cached_property
    def samples(self) -> Complexes:
        """(P, 3): first, middle and last point of each panel."""
        t = np.column_stack([self.low, 0.5 * (self.low + self.high), self.high])
        return self.boundary.points(self.curve, t)[0]

    @cached_property
    def length(self) -> Floats:
        """The length of each panel, to first order for general curves."""
        s = self.samples
        chords = np.abs(s[:, 1] - s[:, 0]) + np.abs(s[:, 2] - s[:, 1])
        arc = self.boundary.is_arc[self.curve]
        true = self.boundary.length[self.curve] * (self.high - self.low)
        return np.where(arc, true, chords)

    @cached_property
    def joint_ends(self) -> tuple[Mask, Mask]:
        """Whether a panel starts, and whether it ends, at a joint where direction or curvature jumps."""
        rough = self.boundary.rough
        starts = np.empty_like(rough)
        starts[self.boundary.following] = rough
        return (self.low == 0.0) & starts[self.curve], (self.high == 1.0) & rough[self.curve]

    def halved(self, mask: Mask) -> Panels:
        """Return the panels with the marked ones cut in two equal parts of the same order."""
        return self._cut(mask, 0.5 * (self.low + self.high))

    def refined(self, mask: Mask) -> Panels:
        """Return the panels with the marked ones cut in two: those at a joint by RATIO, the others in the middle."""
        starts, ends = self.joint_ends
        share = np.where(starts & ~ends, 1.0 / RATIO, np.where(ends & ~starts, 1.0 - 1.0 / RATIO, 0.5))
        return self._cut(mask & (self.length > 4 * SHORTEST), self.low + share * (self.high - self.low))

    def _cut(self, mask: Mask, at: Floats) -> Panels:
        times = np.where(mask, 2, 1)
        curve, low, high = np.repeat(self.curve, times), np.repeat(self.low, times), np.repeat(self.high, times)
        first = (np.cumsum(times) - times)[mask]
        high[first], low[first + 1] = at[mask], at[mask]
        return Panels(self.boundary, curve, low, high, np.repeat(self.order, times))

    def inner(self, which: Ints, n: int) -> Floats:
        """Return the curve parameters (len(which), n) of the Gauss nodes of the given panels.

        Measured from the nearer end of the curve, so that panels towards its far end keep their proportions.
        """
        low, high = self.low[which, None], self.high[which, None]
        nodes = 0.5 * (1.0 + legendre.rule(n)[0])
        t: Floats = np.where(low < 0.5, low + (high - low) * nodes, high - (high - low) * nodes[::-1])
        return t

    def with_order(self, order: Ints) -> Panels:
        return Panels(self.boundary, self.curve, self.low, self.high, order)


def whole(boundary: Boundary, order: int = 16) -> Panels:
    """Return panels fine enough for the curves alone: lines whole, arcs to 90°, others until they are polynomials."""
    count = len(boundary)
    curve: Ints = np.arange(count)
    pieces = np.maximum(1, np.ceil(np.abs(boundary.sweep) / TURN * (1 - 1e-12)).astype(int))
    number = np.arange(pieces.sum()) - np.repeat(np.cumsum(pieces) - pieces, pieces)
    share = 1.0 / np.repeat(pieces, pieces)
    low: Floats = (number * share).astype(float)
    high: Floats = ((number + 1) * share).astype(float)
    repeated: Ints = np.repeat(curve, pieces)
    panels = Panels(boundary, repeated, low, high, np.full(len(low), order))
    return _resolved(panels)


def _resolved(panels: Panels) -> Panels:
    """Halve panels on general curves until position and speed are polynomials there and turn by at most 90°."""
    boundary = panels.boundary
    for _ in range(ROUNDS):
        rest = np.flatnonzero(~boundary.is_line[panels.curve] & ~boundary.is_arc[panels.curve])
        if not rest.size:
            break
        t = panels.inner(rest, SAMPLES)
        z, slope = boundary.points(panels.curve[rest], t)
        half = 0.5 * (panels.high - panels.low)[rest]
        parts = np.abs(slope @ legendre.to_coefficients(SAMPLES).T) * half[:, None]
        # a polynomial of low degree ends at once; its rounding is that of z
        noise = ENDED * np.abs(z).max() + 1e-11 * parts.max(axis=1)
        turning = np.abs(np.angle(slope[:, 1:] * slope[:, :-1].conj())).sum(axis=1)
        bad = ((parts[:, -2:].max(axis=1) > noise) | (turning > TURN)) & (parts.max(axis=1) > SHORTEST)
        if not bad.any():
            break
        mask = np.zeros(len(panels), dtype=bool)
        mask[rest[bad]] = True
        panels = panels.halved(mask)
    return panels


def innermost(boundary: Boundary, depth: float) -> Floats:
    """Return for each joint the length of the panels next to it, inf where nothing asks for short ones.

    With ω ~ |turn|·r^{π/a} an error of 10^{−depth} is met at r = (10^{−depth}/|turn|)^{a/2π}, as a share of half the
    shorter neighbour. `depth` is in decades.
    """
    angle = np.pi - boundary.turn
    shorter = np.minimum(boundary.length, boundary.length[boundary.following])
    strength = np.clip(np.abs(boundary.turn), 1e-300, 1.0)
    share = np.minimum(1.0, (10.0**-depth / strength) ** (angle / (2 * np.pi)))
    rough = (np.abs(boundary.turn) >= WEAK) & (share < 1.0)
    result: Floats = np.where(rough, np.maximum(0.5 * shorter * share, SHORTEST), np.inf)
    return result


def graded(boundary: Boundary, depth: float, order: int, lowest: int) -> Panels:
    """Return panels that shrink towards the corners (`innermost`), with a node less for every two panels nearer to one.

    Between `lowest` and `order` nodes. Arcs are cut to 90°, general curves until they are polynomials.
    """
    at_end = innermost(boundary, depth)
    at_start = np.empty_like(at_end)
    at_start[boundary.following] = at_end
    slight = (np.abs(boundary.turn) < WEAK) & (boundary.turn != 0.0) & boundary.is_line
    chord = slight & np.roll(slight, 1)
    curve: list[int] = []
    low: list[float] = []
    high: list[float] = []
    orders: list[int] = []
    for k, (a, b, length) in enumerate(zip(at_start.tolist(), at_end.tolist(), boundary.length.tolist(), strict=True)):
        left, right = _ladder(a / length), _ladder(b / length)
        breaks = [0.0, *left, *(1.0 - s for s in reversed(right)), 1.0]
        count = len(breaks) - 1
        for i in range(count):
            inward = max(1, len(left) - i, len(right) - (count - 1 - i)) - 1
            curve.append(k)
            low.append(breaks[i])
            high.append(breaks[i + 1])
            most = min(order, CHORD_NODES) if chord[k] else order
            orders.append(max(lowest, most - inward // 2))
    panels = Panels(boundary, np.array(curve), np.array(low), np.array(high), np.array(orders))
    for _ in range(ROUNDS):
        swept = np.abs(boundary.sweep[panels.curve]) * (panels.high - panels.low) > TURN * (1 + 1e-9)
        if not swept.any():
            break
        panels = panels.halved(swept)
    return _resolved(panels)


def _ladder(first: float) -> list[float]:
    """Return the ends of panels that grow from `first` by RATIO, as long as they stay below the middle."""
    ends = []
    while first < 0.45:
        ends.append(first)
        first *= RATIO
    return ends


def balanced(panels: Panels, points: Complexes) -> Panels:
    """Halve panels that are long for what is near them, until none is.

    That is longer than AWAY·distance + SLACK·(length of the other) for another panel, or than REACH times the distance
    to one of `points` (sources inside the voids).
    """
    fresh: Mask = np.ones(len(panels), dtype=bool)
    for _ in range(ROUNDS):
        bad = _long(panels, fresh, points) & (panels.length > 4 * SHORTEST)
        if not bad.any():
            break
        fresh = np.repeat(bad, np.where(bad, 2, 1))
        panels = panels.halved(bad)
    return panels


def _long(panels: Panels, fresh: Mask, points: Complexes) -> Mask:
    """Mark the panels that are too long. Only pairs with a `fresh` panel among them can have changed."""
    s, length = panels.samples, panels.length
    bad = np.zeros(len(panels), dtype=bool)
    every, new = np.arange(len(panels)), np.flatnonzero(fresh)
    pairs = [(every, new)] if len(new) == len(panels) else [(every, new), (new, every)]
    for mine, others in pairs:
        rows = max(1, 200_000 // (3 * max(1, len(others))))
        q = s[others].T
        for first in range(0, len(mine), rows):
            p = mine[first : first + rows]
            apart = _distance(s[p, 0], s[p, 2], q)
            bad[p] |= (length[p, None] > AWAY * apart + SLACK * length[others]).any(axis=1)
    if points.size:
        to_chord = _distance(s[:, 0], s[:, 2], points[None, :])
        to_samples = np.abs(s[:, :, None] - points).min(axis=1)
        apart = np.where(panels.boundary.is_line[panels.curve, None], to_chord, to_samples)
        bad |= (length[:, None] > REACH * apart).any(axis=1)
    return bad


def _distance(a: Complexes, b: Complexes, q: Complexes) -> Floats:
    """Return the distance (P, M) from chords a–b (P,) to the nearest of the points q (k, M) in each column."""
    chord = (b - a)[:, None]
    square = np.maximum(chord.real**2 + chord.imag**2, 1e-300)
    best = np.full((len(a), q.shape[1]), np.inf)
    for row in q:
        d = row[None, :] - a[:, None]
        share = np.clip((d.real * chord.real + d.imag * chord.imag) / square, 0.0, 1.0)
        d = d - share * chord
        np.minimum(best, d.real**2 + d.imag**2, out=best)
    apart: Floats = np.sqrt(best)
    return apart
