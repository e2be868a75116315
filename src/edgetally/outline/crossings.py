"""No two boundary curves may meet but where one ends and the next begins: decided on the true curves.

Candidates come from a tree of the curves' boxes; straight pairs, and lines and arcs that keep clear of each other, are
decided in arrays, all others pair by pair.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import shapely
from numpy.typing import NDArray

from edgetally.curves import Curve, Packed
from edgetally.curves.green import EPS
from edgetally.curves.intersections import intersect, nearest, overlap
from edgetally.errors import OutlineError
from edgetally.findings import Finding
from edgetally.outline.candidates import apart, near_pairs
from edgetally.outline.records import Loop
from edgetally.outline.self_crossings import crosses_itself
from edgetally.outline.words import at, handles, place

TOUCH = 1e-9
"""Boundaries nearer than this share of the larger loop's extent are taken to touch: a nanometre in a metre."""
ROUNDING = 4 * EPS
"""Of the coordinates: boundaries nearer than that cannot be told from ones that touch."""
FOLD = 1e-9
"""Two straight pieces that leave a corner at a smaller angle [rad] than this run over each other."""
PARTING = 0.9
"""Cosine of the angle between two curves as they leave a corner: above it they may run close to each other."""
REPORTED = 12
ENOUGH = 100
"""So many places are enough to refuse: in a scribble that crosses itself everywhere the rest is not looked for."""


def refuse_crossings(loops: Sequence[Loop]) -> None:
    """Raise OutlineError (`crossing`), with places and handles, where boundaries cross, touch or overlap.

    Cost O(n log n) for n curves of which each has few others in its box.
    """
    curves = [curve for loop in loops for curve in loop.curves]
    packed = Packed.of(curves)
    boxes = packed.boxes
    run = _Run(loops, curves, packed)
    touch = np.maximum(TOUCH * run.extents(boxes), ROUNDING * packed.magnitude)
    follower = _followers(loops)
    chosen: list[NDArray[np.intp]] = []
    for one, other in near_pairs(boxes, touch):
        adjacent = (follower[one] == other) | (follower[other] == one)
        straight = packed.is_straight[one] & packed.is_straight[other]
        suspect = np.zeros(len(one), dtype=bool)
        near = np.maximum(touch[one], touch[other])
        for which, decided in (
            (straight & adjacent, _folds(packed, follower, one, other, straight & adjacent)),
            (straight & ~adjacent, near_straight(packed, one, other, straight & ~adjacent, near)),
            (~straight & adjacent, ~_plain_joints(packed, follower, one, other, ~straight & adjacent, near)),
        ):
            suspect[which] = decided
        bent = ~straight & ~adjacent
        suspect[bent] = ~apart(packed, one[bent], other[bent], near[bent])
        chosen.append(np.column_stack([one[suspect], other[suspect]]))
    found: list[tuple[complex, Curve, Curve]] = []
    for k, curve in zip(packed.others.at.tolist(), packed.others.curves, strict=True):
        own = crosses_itself(curve, float(touch[k]))
        if own is not None:
            found.append((own, curve, curve))
    for i, j in sorted(map(tuple, np.concatenate(chosen).tolist())) if chosen else ():
        z = run.contact(i, j, float(max(touch[i], touch[j])))
        if z is not None:
            found.append((z, curves[i], curves[j]))
            if len(found) >= ENOUGH:
                break
    if found:
        raise _refusal(found)


def refuse_contact(strays: Sequence[Curve], loops: Sequence[Loop]) -> None:
    """Raise OutlineError (`branch`) where a curve that belongs to no loop meets one: an inner line, or a T-junction."""
    if not strays:
        return
    curves = [curve for loop in loops for curve in loop.curves]
    boxes, own = Packed.of(curves).boxes, Packed.of(strays).boxes
    touch = TOUCH * float((boxes[:, 2:].max(axis=0) - boxes[:, :2].min(axis=0)).max())
    grown = own + np.array([-touch, -touch, touch, touch])
    one, other = shapely.STRtree(shapely.box(*boxes.T)).query(shapely.box(*grown.T))
    for i, j in zip(one, other, strict=True):
        stray, curve = strays[int(i)], curves[int(j)]
        contacts = [z for _, _, z in intersect(stray, curve, touch)]
        contacts += [stray.point(t0) for (t0, _), _ in overlap(stray, curve, touch)]
        if contacts:
            z = contacts[0]
            message = (
                f"{stray.source} meets the outline at {place(z)}, on {curve.source}: an outline has no inner lines and "
                "no T-junctions; trim it, or move it to another layer"
            )
            sources = (stray.source, curve.source)
            raise OutlineError(message, [Finding("branch", "error", message, at(z), handles(sources))])


def _followers(loops: Sequence[Loop]) -> NDArray[np.intp]:
    follower: list[int] = []
    for loop in loops:
        first, count = len(follower), len(loop.curves)
        follower.extend(first + (k + 1) % count for k in range(count))
    return np.array(follower, dtype=np.intp)


def _folds(
    packed: Packed,
    follower: NDArray[np.intp],
    one: NDArray[np.intp],
    other: NDArray[np.intp],
    which: NDArray[np.bool_],
) -> NDArray[np.bool_]:
    """Tell which of the chosen neighbouring straight pairs leave their common corner in one direction."""
    i, j = one[which], other[which]
    before = np.where(follower[i] == j, i, j)
    after = np.where(follower[i] == j, j, i)
    into, out = packed.start[before] - packed.end[before], packed.end[after] - packed.start[after]
    turn = into.conj() * out
    return (turn.real > 0) & (np.abs(turn.imag) <= FOLD * turn.real)


def _plain_joints(
    packed: Packed,
    follower: NDArray[np.intp],
    one: NDArray[np.intp],
    other: NDArray[np.intp],
    which: NDArray[np.bool_],
    touch: NDArray[np.float64],
) -> NDArray[np.bool_]:
    """Tell which of the chosen neighbours, of which an arc is one, surely meet in their common corner N only.

    They must part there at more than about 25°, or go on smoothly. The line of a straight piece, u from N, meets the
    circle again at 2·Re(conj(u)·(centre − N)); the circles of two arcs meet again at the mirror image of N in the line
    of their centres. Whatever is left is decided pair by pair.
    """
    i, j = one[which], other[which]
    touch = touch[which]
    forward = follower[i] == j
    a, b = np.where(forward, i, j), np.where(forward, j, i)
    known = (packed.is_straight | packed.is_arc)[a] & (packed.is_straight | packed.is_arc)[b]
    known &= ~((follower[a] == b) & (follower[b] == a))  # a loop of two: they have two corners in common
    node = packed.start[b]
    spoke_a = packed.spoke[a] * np.exp(1j * packed.sweep[a])
    into_a = np.where(packed.is_arc[a], -1j * np.sign(packed.sweep[a]) * spoke_a, packed.start[a] - packed.end[a])
    into_b = np.where(
        packed.is_arc[b], 1j * np.sign(packed.sweep[b]) * packed.spoke[b], packed.end[b] - packed.start[b]
    )
    with np.errstate(divide="ignore", invalid="ignore"):
        into_a, length_a = into_a / np.abs(into_a), np.abs(packed.end[a] - packed.start[a])
        into_b, length_b = into_b / np.abs(into_b), np.abs(packed.end[b] - packed.start[b])
        parting = (into_a.conj() * into_b).real < PARTING
        centre_a, centre_b = packed.start[a] - packed.spoke[a], packed.start[b] - packed.spoke[b]
        again_a = 2.0 * (into_a.conj() * (centre_b - node)).real
        again_b = 2.0 * (into_b.conj() * (centre_a - node)).real
        axis = (centre_b - centre_a) / np.abs(centre_b - centre_a)
        image = np.abs(centre_a + axis**2 * (node - centre_a).conj() - node)
    straight_a, straight_b = packed.is_straight[a], packed.is_straight[b]
    clear = np.where(
        straight_a,
        (again_a <= touch) | (again_a > length_a + touch),
        np.where(straight_b, (again_b <= touch) | (again_b > length_b + touch), image <= touch),
    )
    return known & parting & clear


def near_straight(
    packed: Packed, one: NDArray[np.intp], other: NDArray[np.intp], which: NDArray[np.bool_], touch: NDArray[np.float64]
) -> NDArray[np.bool_]:
    """Tell which of the chosen straight pairs cross or come nearer than `touch`."""
    a, b = packed.start[one[which]], packed.end[one[which]]
    c, d = packed.start[other[which]], packed.end[other[which]]

    def side(p: NDArray[np.complex128], q: NDArray[np.complex128], r: NDArray[np.complex128]) -> NDArray[np.float64]:
        turned: NDArray[np.float64] = ((q - p).conj() * (r - p)).imag
        return turned

    crossing = (side(a, b, c) * side(a, b, d) < 0) & (side(c, d, a) * side(c, d, b) < 0)

    def distance(
        p: NDArray[np.complex128], q: NDArray[np.complex128], r: NDArray[np.complex128]
    ) -> NDArray[np.float64]:
        chord = q - p
        t = np.clip(((r - p) * chord.conj()).real / np.abs(chord) ** 2, 0.0, 1.0)
        apart: NDArray[np.float64] = np.abs(p + t * chord - r)
        return apart

    clearance = np.minimum.reduce([distance(a, b, c), distance(a, b, d), distance(c, d, a), distance(c, d, b)])
    near: NDArray[np.bool_] = crossing | (clearance <= touch[which])
    return near


class _Run:
    """Where each curve lies along its loop, to tell a contact from the run of the boundary through a common corner."""

    def __init__(self, loops: Sequence[Loop], curves: Sequence[Curve], packed: Packed) -> None:
        self.curves = curves
        self.length = packed.lengths
        self.loop = np.repeat(np.arange(len(loops)), [len(loop.curves) for loop in loops])
        total = np.cumsum(self.length)
        self.first = np.cumsum([0] + [len(loop.curves) for loop in loops])[:-1]
        before = total - self.length
        self.along = before - before[self.first][self.loop]
        self.perimeter = np.bincount(self.loop, weights=self.length)

    def extents(self, boxes: NDArray[np.float64]) -> NDArray[np.float64]:
        """Return for every curve the larger of width and height of its loop, by the curves' boxes."""
        low = np.minimum.reduceat(boxes[:, :2], self.first)
        high = np.maximum.reduceat(boxes[:, 2:], self.first)
        extents: NDArray[np.float64] = (high - low).max(axis=1)[self.loop]
        return extents

    def contact(self, i: int, j: int, touch: float) -> complex | None:
        """Return a point where curves i and j meet other than by following each other, None where they do not."""
        a, b = self.curves[i], self.curves[j]
        for (t0, t1), _ in overlap(a, b, touch):
            if abs(a.point(t1) - a.point(t0)) > 4 * touch:
                return a.point(0.5 * (t0 + t1))
        for t, u, z in intersect(a, b, touch):
            if self.loop[i] != self.loop[j] or not self._runs_through(i, j, t, u, touch):
                return z
        return None

    def _runs_through(self, i: int, j: int, t: float, u: float, touch: float) -> bool:
        """Tell whether the boundary between z_i(t) and z_j(u) is so short, or so slim, that it is one corner."""
        along_i = self.along[i] + t * self.length[i]
        along_j = self.along[j] + u * self.length[j]
        ahead = abs(along_j - along_i)
        if min(ahead, self.perimeter[self.loop[i]] - ahead) <= 4 * touch:
            return True
        # two tangent neighbours part so slowly that rounding lets them cross again: the sliver between is no crossing
        a, b = self.curves[i], self.curves[j]
        corners = [(p, q) for p, q in ((0.0, 1.0), (1.0, 0.0)) if abs(a.point(p) - b.point(q)) <= touch]
        return any(nearest(b, a.point(0.5 * (p + t)))[0] <= touch and abs(t - p) < 0.5 for p, _ in corners)


def _refusal(found: list[tuple[complex, Curve, Curve]]) -> OutlineError:
    findings = []
    for z, a, b in found[:REPORTED]:
        if a is b or (a.source == b.source and a.source.handle):
            which = f"{a.source} meets itself"
        else:
            which = f"{a.source} and {b.source} cross, touch or run over each other"
        message = f"{which} at {place(z)}: an outline may not meet itself; correct it in the drawing"
        findings.append(Finding("crossing", "error", message, at(z), handles((a.source, b.source))))
    lines = [f.message for f in findings]
    if len(found) > len(findings):
        least = "at least " if len(found) >= ENOUGH else ""
        lines.append(f"and {least}{len(found) - len(findings)} more such places")
    return OutlineError("\n".join(lines), findings)
