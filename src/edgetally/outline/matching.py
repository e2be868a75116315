"""Two outlines of one section compared: what lies where it lay, what moved, appeared, vanished."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass
from math import degrees

import numpy as np
import shapely

from edgetally.curves import Arc, Bezier, Curve, EllipticArc, Line, Packed
from edgetally.curves.curve import Floats
from edgetally.curves.nearest import nearest
from edgetally.outline.records import Loop

SAME = 1e-9
"""Curves that lie within this share of the size of each other are where they were."""
SAMPLES = np.linspace(0.0, 1.0, 9)
"""A line or arc that shares nine points with an outline runs along it: two curves of low degree meet in fewer."""
MOST_MOVED = 0.5
"""A shift of the whole drawing is one that brings more than this share of the curves onto their old places."""
NEAR = 0.5
"""Ends are matched up to this share of the section's size apart; farther off it is another curve."""

MOST_PAIRS = 1_000_000
"""Where more pairs than these differ, the drawings are not two states of one section; nothing is matched then."""

KINDS: dict[type, str] = {Line: "line", Arc: "arc", EllipticArc: "elliptic arc", Bezier: "spline piece"}


def kind_of(curve: Curve) -> str:
    """Return the plain name of a curve's kind."""
    if isinstance(curve, Arc) and curve.is_full_circle:
        return "circle"
    return KINDS[type(curve)]


@dataclass(frozen=True, slots=True)
class Change:
    """One curve, or one whole closed loop, that is not where it was; `words` say how. None where there is none."""

    before: tuple[Curve, ...]
    after: tuple[Curve, ...]
    words: str

    @property
    def kind(self) -> str:
        return "moved" if self.before and self.after else "appeared" if self.after else "vanished"


@dataclass(frozen=True, eq=False)
class Matching:
    """What became of the curves of `old` in `new`. `shift` is by what the whole of `new` lies elsewhere.

    `unchanged` counts the curves of `new`, taken back by the shift, that run along the old outline everywhere.
    """

    shift: complex
    unchanged: int
    changes: tuple[Change, ...]


def match(old: Sequence[Loop], new: Sequence[Loop], *, size: float) -> Matching:
    """Match the curves of two outlines, in one unit, by where they lie and not by their order.

    A curve is unchanged if it runs along the other outline everywhere, so that one that was split, joined or reversed
    is; of the others, loops that were moved as a whole are found first, then each curve is matched with the nearest of
    its kind.
    """
    near = SAME * size
    shift = _shift(_curves(old), _curves(new), near)
    if shift:
        new = [Loop(tuple(c.moved(1.0, -shift) for c in loop.curves)) for loop in new]
    fresh = _off(new, old, near)
    gone = _off(old, new, near)
    unchanged = sum(len(loop.curves) for loop in new) - sum(len(curves) for curves in fresh)
    changes = _moved_loops(old, new, gone, fresh, near)
    changes += _moved_curves(
        [c for run in gone for c in run], [c for run in fresh for c in run], _curves(old), _curves(new), size
    )
    changes.sort(key=lambda change: _where(change, near))
    return Matching(shift, unchanged, tuple(changes))


def _curves(loops: Sequence[Loop]) -> list[Curve]:
    return [curve for loop in loops for curve in loop.curves]


def _where(change: Change, near: float) -> tuple[float, float]:
    """The place that orders the changes: from the left, then from below."""
    z = (change.after or change.before)[0].point(0.5)
    return round(z.real / near) * near, z.imag


def _shift(old: Sequence[Curve], new: Sequence[Curve], near: float) -> complex:
    """Return by what most curves lie elsewhere, 0 if most lie where they were."""
    places: dict[tuple[str, int, int, int], list[complex]] = {}
    for curve in old:
        places.setdefault(_form(curve, near), []).append(curve.start)
    votes: Counter[tuple[int, int]] = Counter()
    exact: dict[tuple[int, int], complex] = {}
    for curve in new:
        found = places.get(_form(curve, near), ())
        if len(found) > 8:  # one of a crowd says nothing
            continue
        for start in found:
            d = curve.start - start
            key = (round(d.real / (10 * near)), round(d.imag / (10 * near)))
            votes[key] += 1
            exact.setdefault(key, d)
    if not votes:
        return 0j
    key, count = max(votes.items(), key=lambda item: (item[1], item[0] == (0, 0)))
    if key == (0, 0) or count <= MOST_MOVED * len(new) or count <= votes[(0, 0)]:
        return 0j
    return exact[key]


def _form(curve: Curve, near: float) -> tuple[str, int, int, int]:
    """What a curve keeps when it is only moved: kind, chord and length, in steps of rounding."""
    chord = curve.end - curve.start
    step = 10 * near
    return kind_of(curve), round(chord.real / step), round(chord.imag / step), round(curve.length / step)


def _off(loops: Sequence[Loop], others: Sequence[Loop], near: float) -> list[list[Curve]]:
    """Return for each loop the curves that do not run along the other outline everywhere."""
    curves = _curves(others)
    if not curves:
        return [list(loop.curves) for loop in loops]
    x0, y0, x1, y1 = Packed.of(curves).boxes.T
    tree = shapely.STRtree(shapely.box(x0 - near, y0 - near, x1 + near, y1 + near))
    off = []
    for loop in loops:
        z = np.array([curve.points(SAMPLES) for curve in loop.curves])
        point, box = tree.query(shapely.points(z.real.ravel(), z.imag.ravel()))
        on = np.zeros(z.size, dtype=bool)
        flat = z.ravel()
        for p, k in zip(point, box, strict=True):
            if not on[p]:
                on[p] = nearest(curves[k], complex(flat[p]))[0] <= near
        missed = np.flatnonzero(~on.reshape(z.shape).all(axis=1))
        off.append([loop.curves[k] for k in missed])
    return off


def _moved_loops(
    old: Sequence[Loop], new: Sequence[Loop], gone: list[list[Curve]], fresh: list[list[Curve]], near: float
) -> list[Change]:
    """Find loops that lie elsewhere as a whole, and take them out of `gone` and `fresh`."""
    changes = []
    whole = [k for k, loop in enumerate(new) if len(fresh[k]) == len(loop.curves)]
    for j, loop in enumerate(old):
        if len(gone[j]) != len(loop.curves):
            continue
        alike = [k for k in whole if abs(new[k].area - loop.area) <= near * loop.perimeter]
        for k in sorted(alike, key=lambda k: abs(_middle(new[k]) - _middle(loop))):
            d = _middle(new[k]) - _middle(loop)
            there = Loop(tuple(curve.moved(1.0, d) for curve in loop.curves))
            if not (_off([there], [new[k]], near)[0] or _off([new[k]], [there], near)[0]):
                changes.append(Change(loop.curves, new[k].curves, f"closed loop {_moved_by(d)}"))
                gone[j], fresh[k] = [], []
                whole.remove(k)
                break
    return changes


def _middle(loop: Loop) -> complex:
    x0, y0, x1, y1 = loop.packed.box
    return complex(0.5 * (x0 + x1), 0.5 * (y0 + y1))


def _moved_curves(
    gone: list[Curve], fresh: list[Curve], old: Sequence[Curve], new: Sequence[Curve], size: float
) -> list[Change]:
    """Match what is left by kind and closeness, nearest first; what has no partner vanished or appeared."""
    changes: list[Change] = []
    pairs: list[tuple[float, int, int]] = []
    if len(gone) * len(fresh) <= MOST_PAIRS:
        for kind in sorted({kind_of(curve) for curve in gone}):
            rows = [j for j, curve in enumerate(gone) if kind_of(curve) == kind]
            columns = [k for k, curve in enumerate(fresh) if kind_of(curve) == kind]
            if columns:
                apart = _distances([gone[j] for j in rows], [fresh[k] for k in columns])
                close = np.argwhere(apart <= NEAR * size).tolist()
                pairs += [(float(apart[r, c]), rows[r], columns[c]) for r, c in close]
    free_old, free_new = set(range(len(gone))), set(range(len(fresh)))
    for _, j, k in sorted(pairs):
        if j in free_old and k in free_new:
            changes.append(Change((gone[j],), (fresh[k],), _how(gone[j], fresh[k], size)))
            free_old.remove(j)
            free_new.remove(k)
    few = len(gone) * len(new) + len(fresh) * len(old) <= MOST_PAIRS
    for j in sorted(free_old):
        rest = _part_of(gone[j], new, size) if few else ()
        words = _how(gone[j], rest[0], size) if rest else f"{kind_of(gone[j])} vanished"
        changes.append(Change((gone[j],), rest, words))
    for k in sorted(free_new):
        rest = _part_of(fresh[k], old, size) if few else ()
        words = _how(rest[0], fresh[k], size) if rest else f"{kind_of(fresh[k])} appeared"
        changes.append(Change(rest, (fresh[k],), words))
    return changes


def _part_of(curve: Curve, others: Sequence[Curve], size: float) -> tuple[Curve, ...]:
    """Return the longest of the other outline's curves that runs along this one everywhere: it grew or shrank."""
    along = [
        other
        for other in others
        if kind_of(other) == kind_of(curve)
        and all(nearest(curve, complex(z))[0] <= SAME * size for z in other.points(SAMPLES))
    ]
    return (max(along, key=lambda other: other.length),) if along else ()


def _distances(one: Sequence[Curve], other: Sequence[Curve]) -> Floats:
    """Return the mean distance between start, middle and end of each pair."""
    t = np.array([0.0, 0.5, 1.0])
    a, b = (np.array([curve.points(t) for curve in curves]) for curves in (one, other))
    distances: Floats = np.abs(a[:, None, :] - b[None, :, :]).mean(axis=2)
    return distances


def _how(before: Curve, after: Curve, size: float) -> str:
    """Say what a curve and the one that stands for it now differ in."""
    near, kind = SAME * size, kind_of(before)
    starts, ends = after.start - before.start, after.end - before.end
    if isinstance(before, Arc) and isinstance(after, Arc):
        words = []
        if abs(after.radius - before.radius) > near:
            words.append(f"radius {before.radius:.6g} → {after.radius:.6g}")
        if abs(after.centre - before.centre) > near:
            words.append(f"centre {_moved_by(after.centre - before.centre)}")
        if abs(abs(after.sweep) - abs(before.sweep)) > 1e-9:
            words.append(f"sweep {degrees(abs(before.sweep)):.6g}° → {degrees(abs(after.sweep)):.6g}°")
        return f"{kind}, " + (", ".join(words) or "ends moved")
    if abs(starts - ends) <= near:
        return f"{kind} {_moved_by(starts)}"
    if abs(after.length - before.length) > near:
        longest = max(abs(starts), abs(ends))
        return f"{kind}, length {before.length:.6g} → {after.length:.6g}, ends moved by up to {longest:.6g}"
    return f"{kind}, ends moved by up to {max(abs(starts), abs(ends)):.6g}"


def _moved_by(d: complex) -> str:
    return f"moved by ({d.real:.6g}, {d.imag:.6g})"
