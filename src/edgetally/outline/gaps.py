"""How wide a gap between two ends may be, and the refusals of gaps that stay open, with the option that closes them."""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import dataclass
from math import cos, radians

import numpy as np
import shapely
from numpy.typing import NDArray

from edgetally.errors import OutlineError
from edgetally.findings import Finding
from edgetally.outline.candidates import Indices
from edgetally.outline.pairing import GENEROUS, SLENDER, Ends, nearest_first, packs, pair
from edgetally.outline.words import at, enough_mm, handles, length_text, place
from edgetally.units import MM_PER

DEFAULT_GAP_MM = 0.01
"""Joined without asking: below what a shop can see or a tolerance can name (common practice, no source)."""
WIDEST_GAP_MM = 0.15
"""Never joined, whatever is asked: ends that far apart are drawn apart."""
NEIGHBOUR_SHARE = 0.1
"""A join may not be wider than this share of the shorter of the two curves: it would be an edge of its own."""
BACK = cos(radians(6.0))
"""Two curves that leave their gap in directions this near to each other run back along each other: the gap is an end
that is missing, and as wide as the wall."""
REPORTED = 12
"""So many places are listed in a refusal; the rest is counted."""


@dataclass(frozen=True, slots=True)
class _Gap:
    """Ends `one` and `other` that lie `width` apart, the same end twice where nothing is near."""

    one: int
    other: int
    width: float


def refuse_wide(ends: Ends, partner: Indices, unit: str) -> None:
    """Raise OutlineError (`gap-too-wide`) where two ends that would be joined lie farther apart than a tenth of the
    shorter of their curves, or on the two sides of a wall."""
    wide = _too_wide(ends, partner)
    if not wide:
        return
    findings = []
    for gap in wide[:REPORTED]:
        a, b = (ends.curves[e // 2] for e in (gap.one, gap.other))
        z = complex(ends.z[gap.one])
        why = f"is wider than a tenth of the shorter of them ({length_text(min(a.length, b.length), unit)})"
        if _runs_back(ends, gap):
            why = "is all that lies between them, since they run back along each other: an end is missing"
        message = (
            f"the gap of {length_text(gap.width, unit)} at {place(z)} between {a.source} and {b.source} {why}; close "
            "it in the drawing"
        )
        findings.append(Finding("gap-too-wide", "error", message, at(z), handles((a.source, b.source))))
    raise refusal(findings, len(wide))


def refuse_open(ends: Ends, partner: Indices, strays: Collection[int], gap: float, unit: str) -> None:
    """Raise OutlineError (`open-chain`) where ends are free. Every gap is named, and the one join gap that closes all
    that may be joined; where that is not enough, what is left."""
    aside = np.isin(np.arange(len(partner)) // 2, list(strays))
    free = np.flatnonzero((partner < 0) & ~aside)
    if not free.size:
        return
    near, reach = partner.copy(), WIDEST_GAP_MM / MM_PER[unit]
    if not packs(ends, free, reach):
        nearest_first(ends, free, reach * (1.0 + GENEROUS), near)
    gaps = [_Gap(i, int(near[i]), _width(ends, i, int(near[i]))) for i in free.tolist() if near[i] > i]
    joinable = [g for g in gaps if _may_be_joined(ends, g)]
    gaps += _far(ends, free[near[free] < 0])
    option, rest = _option(ends, joinable, free[near[free] < 0], aside, unit)
    findings = []
    for g in sorted(gaps, key=lambda g: g.one)[:REPORTED]:
        remedy = (f" or pass --join-gap {option}" if option else "") + rest if g in joinable else ""
        findings.append(_open_finding(ends, g, gap, unit, remedy))
    raise refusal(findings, max(len(gaps), (len(free) + 1) // 2))


def _open_finding(ends: Ends, g: _Gap, gap: float, unit: str, remedy: str) -> Finding:
    z = complex(ends.z[g.one])
    mine, yours = ends.curves[g.one // 2], ends.curves[g.other // 2]
    a, b = mine.source, yours.source
    if g.one == g.other or (mine is yours and mine.length <= SLENDER * g.width):
        message = (
            f"outline is open: {a} from {place(mine.start)} to {place(mine.end)} meets nothing at its ends; close it "
            "in the drawing, or move it to another layer"
        )
    else:
        message = (
            f"outline is open: gap {length_text(g.width, unit)} at {place(z)} between {a} and {b}, joined up to "
            f"{length_text(gap, unit)}; close it in the drawing{remedy}"
        )
    return Finding("open-chain", "error", message, at(z), handles((a, b)))


def _option(ends: Ends, joinable: list[_Gap], alone: Indices, aside: NDArray[np.bool_], unit: str) -> tuple[str, str]:
    """Return the join gap that closes all gaps that may be joined, "" where none does any good, and what is to be known
    of it: which gap it is for, and what stays open even so. `alone` are the ends near to none that is free."""
    if not joinable:
        return "", ""
    widest = max(joinable, key=lambda g: g.width)
    option = enough_mm(widest.width, unit)
    rest = f", which the gap of {_named(ends, widest, unit)} needs" if len(joinable) > 1 else ""
    trial = pair(ends, float(option.removesuffix("mm")) / MM_PER[unit])
    if trial.crowded or _third(ends, joinable, alone, WIDEST_GAP_MM / MM_PER[unit]):
        return "", "; a third curve end lies about as near, so that no --join-gap can tell which two are meant"
    left = _far(ends, np.flatnonzero((trial.partner < 0) & ~aside))
    wide = _too_wide(ends, trial.partner)
    if left or wide:
        g = (left or wide)[0]
        what = f"gap of {_named(ends, g, unit)}" if g.one != g.other else f"end at {place(complex(ends.z[g.one]))}"
        more = f", nor can {len(left) + len(wide) - 1} more" if len(left) + len(wide) > 1 else ""
        rest += f"; that is not enough, because the {what} cannot be joined{more}"
    return option, rest


def _third(ends: Ends, gaps: list[_Gap], alone: Indices, reach: float) -> bool:
    """Tell whether an end that is left alone lies within `reach` of one that would be joined to another."""
    if not alone.size:
        return False
    taken = ends.z[[e for g in gaps for e in (g.one, g.other)]]
    tree = shapely.STRtree(shapely.points(taken.real, taken.imag))
    one, _ = tree.query(shapely.points(ends.z[alone].real, ends.z[alone].imag), predicate="dwithin", distance=reach)
    return bool(one.size)


def _far(ends: Ends, free: Indices) -> list[_Gap]:
    """Return the ends that no join may close, each with the nearest of the others."""
    if not free.size:
        return []
    points = shapely.points(ends.z[free].real, ends.z[free].imag)
    near: dict[int, tuple[int, float]] = {}
    if len(free) > 1:
        pairs, distance = shapely.STRtree(points).query_nearest(points, exclusive=True, return_distance=True)
        for (i, j), d in zip(pairs.T, distance, strict=True):
            near.setdefault(int(i), (int(j), float(d)))
    found: dict[frozenset[int], _Gap] = {}
    for k in range(len(free)):
        j, d = near.get(k, (k, 0.0))
        if j != k and near.get(j, (k, 0.0))[0] != k and len(free) > 2:
            continue
        found.setdefault(frozenset((k, j)), _Gap(int(free[k]), int(free[j]), d))
    return list(found.values())


def _too_wide(ends: Ends, partner: Indices) -> list[_Gap]:
    """Return the pairs that are farther apart than the share of a neighbour, rounding aside."""
    one = np.flatnonzero(partner > np.arange(len(partner)))
    apart = np.abs(ends.z[one] - ends.z[partner[one]])
    gaps = [_Gap(int(one[k]), int(partner[one[k]]), float(apart[k])) for k in np.flatnonzero(apart > ends.rounding)]
    return [g for g in gaps if not _may_be_joined(ends, g)]


def _may_be_joined(ends: Ends, g: _Gap) -> bool:
    shorter = min(ends.curves[e // 2].length for e in (g.one, g.other))
    return g.width <= NEIGHBOUR_SHARE * shorter and not _runs_back(ends, g)


def _runs_back(ends: Ends, g: _Gap) -> bool:
    """Tell whether both curves, followed out of their ends, go on in one direction."""
    first, second = (
        -ends.curves[e // 2].derivative(0.0) if e % 2 == 0 else ends.curves[e // 2].derivative(1.0)
        for e in (g.one, g.other)
    )
    return (first.conjugate() * second).real > BACK * abs(first) * abs(second)


def _width(ends: Ends, one: int, other: int) -> float:
    return float(abs(ends.z[one] - ends.z[other]))


def _named(ends: Ends, g: _Gap, unit: str) -> str:
    return f"{length_text(g.width, unit)} at {place(complex(ends.z[g.one]))}"


def refusal(findings: list[Finding], count: int) -> OutlineError:
    """Return the refusal of so many places, of which the first are told of in full."""
    lines = [f.message for f in findings]
    if count > len(lines):
        lines.append(f"and {count - len(lines)} more such places")
    return OutlineError("\n".join(lines), findings)
