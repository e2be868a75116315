"""Loose curves → closed loops: what is refused, and what is done about each gap."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import shapely

from edgetally.curves import Curve, Line
from edgetally.curves.green import EPS
from edgetally.errors import OutlineError
from edgetally.findings import Finding
from edgetally.outline.candidates import Indices
from edgetally.outline.gaps import DEFAULT_GAP_MM as DEFAULT_GAP_MM
from edgetally.outline.gaps import REPORTED, refusal, refuse_open, refuse_wide
from edgetally.outline.gaps import WIDEST_GAP_MM as WIDEST_GAP_MM
from edgetally.outline.pairing import SLENDER, Ends, pair
from edgetally.outline.records import Join, Loop
from edgetally.outline.words import at, handles, length_text, place
from edgetally.units import MM_PER

ROUNDING = 64 * EPS
"""Ends nearer than this times the largest coordinate differ by the rounding of their own computation."""
STRAIGHT = 1.2
"""A stray curve is no longer than this times its chord: what is bent more may be meant as a boundary."""


@dataclass(frozen=True, eq=False)
class Closed:
    """The loops that were closed, the joins that it took, and single curves that have nothing to do with them."""

    loops: list[Loop]
    joins: list[Join]
    strays: list[Curve]


def close_loops(curves: Sequence[Curve], gap: float, unit: str) -> Closed:
    """Join `curves` end to end into closed loops.

    `gap` is the join gap and `unit` the name of the unit, both of the drawing. Every curve is used exactly once, but
    for a stray one: a single curve, nearly straight, whose ends lie farther than 0.15 mm from every other end. Cost
    O(n log n). Raises OutlineError for an open chain (`open-chain`), for three or more ends at a point (`branch`), and
    for a join wider than a tenth of a neighbour (`gap-too-wide`).
    """
    loops, ends = _sort(curves)
    if not ends.curves:
        return Closed(loops, [], [])
    pairing = pair(ends, gap)
    if pairing.meeting:
        raise _branch(ends, pairing.meeting, "at one point")
    if pairing.crowded:
        wide = gap * MM_PER[unit] > DEFAULT_GAP_MM * (1 + 1e-9)
        how = f"within the join gap of {length_text(gap, unit)}"
        raise _branch(ends, pairing.crowded, how, ", or pass a smaller --join-gap" if wide else "")
    partner = pairing.partner
    strays = _strays(ends, partner, WIDEST_GAP_MM / MM_PER[unit])
    if len(strays) == len(ends.curves) and not loops:
        strays = []
    refuse_open(ends, partner, strays, gap, unit)
    refuse_wide(ends, partner, unit)
    joins: list[Join] = []
    for chain in _walk(partner, strays):
        loop, joined = _weld(ends, chain)
        loops.append(loop)
        joins.extend(joined)
    return Closed(loops, joins, [ends.curves[k] for k in strays])


def _strays(ends: Ends, partner: Indices, clear: float) -> list[int]:
    """Return the curves that no outline can miss: both ends meet nothing within `clear`, and little is enclosed."""
    alone = np.flatnonzero((partner[0::2] < 0) & (partner[1::2] < 0))
    candidates = [k for k in map(int, alone) if is_nearly_straight(ends.curves[k])]
    if not candidates:
        return []
    tree = shapely.STRtree(shapely.points(ends.z.real, ends.z.imag))
    at = np.array([end for k in candidates for end in (2 * k, 2 * k + 1)])
    here, there = tree.query(shapely.points(ends.z[at].real, ends.z[at].imag), predicate="dwithin", distance=clear)
    crowded = {int(at[i]) // 2 for i, j in zip(here, there, strict=True) if at[i] // 2 != j // 2}
    return [k for k in candidates if k not in crowded]


def is_nearly_straight(curve: Curve) -> bool:
    """Tell whether a curve alone cannot be meant as a boundary."""
    return curve.length <= STRAIGHT * abs(curve.end - curve.start)


def closes(curves: Sequence[Curve], gap: float) -> bool:
    """Tell whether at least one closed loop can be made of `curves`, whatever else there is."""
    loops, ends = _sort(curves)
    if loops or not ends.curves:
        return bool(loops)
    partner = pair(ends, gap).partner
    seen = np.zeros(len(ends.curves), dtype=bool)
    for first in range(0, len(partner), 2):
        entry = first
        while entry >= 0 and not seen[entry // 2]:
            seen[entry // 2] = True
            entry = int(partner[entry ^ 1])
            if entry == first:
                return True
    return False


def open_ends(curves: Sequence[Curve], gap: float) -> int:
    """Return how many ends of `curves` meet no other."""
    _, ends = _sort(curves)
    return int((pair(ends, gap).partner < 0).sum()) if ends.curves else 0


def _sort(curves: Sequence[Curve]) -> tuple[list[Loop], Ends]:
    """Part the curves that are closed by themselves from those with two ends."""
    at = np.array([p for c in curves for p in (c.start, c.end)], dtype=complex)
    rounding = ROUNDING * float(np.abs(at.view(float)).max(initial=0.0))
    loops, pieces = [], []
    for curve in curves:
        if abs(curve.end - curve.start) > rounding:
            pieces.append(curve)
        elif curve.length > SLENDER * rounding:
            loops.append(Loop((curve,)))
    return loops, Ends(pieces, np.array([p for c in pieces for p in (c.start, c.end)], dtype=complex), rounding)


def _branch(ends: Ends, groups: list[list[int]], how: str, also: str = "") -> OutlineError:
    findings = []
    for group in groups[:REPORTED]:
        z = complex(ends.z[group[0]])
        names = ", ".join(ends.name(e) for e in group[:6]) + (" …" if len(group) > 6 else "")
        message = (
            f"{len(group)} curve ends meet {how} at {place(z)}: {names}; an outline has two ends at each point: "
            f"remove inner lines and doubled curves, or move them to another layer{also}"
        )
        sources = [ends.curves[e // 2].source for e in group]
        findings.append(Finding("branch", "error", message, at(z), handles(sources)))
    return refusal(findings, len(groups))


def _walk(partner: Indices, strays: Sequence[int]) -> list[list[int]]:
    """Return the closed chains, each as the list of the ends at which its curves are entered."""
    seen = np.zeros(len(partner) // 2, dtype=bool)
    seen[list(strays)] = True
    chains = []
    for first in range(0, len(partner), 2):
        entry, chain = first, []
        while not seen[entry // 2]:
            seen[entry // 2] = True
            chain.append(entry)
            entry = int(partner[entry ^ 1])
        if chain:
            chains.append(chain)
    return chains


def _weld(ends: Ends, chain: list[int]) -> tuple[Loop, list[Join]]:
    """Make the loop: every curve turned along the chain, and the ends at a gap brought to one point."""
    curves = [ends.curves[e // 2] if e % 2 == 0 else ends.curves[e // 2].reversed() for e in chain]
    joins: list[Join] = []
    count = len(curves)
    starts, stops = [c.start for c in curves], [c.end for c in curves]
    for k in range(count):
        n = (k + 1) % count
        g = abs(stops[k] - curves[n].start)
        if g <= ends.rounding:
            continue
        a, b = curves[k], curves[n]
        joins.append(Join(g, 0.5 * (a.end + b.start), (a.source, b.source), _swept(a, g) + _swept(b, g)))
        stops[k], starts[n] = _meeting_point(a, b, ends.rounding)
    welded: list[Curve] = []
    for k, curve in enumerate(curves):
        welded.append(_stretched(curve, starts[k], stops[k]))
        following = starts[(k + 1) % count]
        if abs(following - stops[k]) > ends.rounding:  # neither neighbour could give way
            welded.append(Line(stops[k], following, curve.source))
    return Loop(tuple(welded)), joins


def _meeting_point(a: Curve, b: Curve, rounding: float) -> tuple[complex, complex]:
    """Return where a ends and where b starts after the join: one point wherever one of them can give way.

    Two straight pieces meet where their lines do, if that is no farther from either end than the gap; a straight piece
    gives way to a curved one, whose radius stays as drawn; else two alike meet half-way. A curve that all but closes on
    itself stays, because turning it about so short a chord would move all of it.
    """
    stiff_a, stiff_b = _stiffness(a), _stiffness(b)
    if stiff_a == stiff_b == 2:
        return a.end, b.start
    if stiff_a != stiff_b:
        return (b.start, b.start) if stiff_a < stiff_b else (a.end, a.end)
    corner = _corner(a, b, rounding) if stiff_a == 0 else None
    meeting = 0.5 * (a.end + b.start) if corner is None else corner
    return meeting, meeting


def _corner(a: Curve, b: Curve, rounding: float) -> complex | None:
    """Return where the lines of two straight pieces cross, None where that is farther from their ends than they are
    apart. Where one piece is only too short it is at the end of the other, as far as they are apart to rounding."""
    along_a, along_b, apart = a.end - a.start, b.end - b.start, b.start - a.end
    across = (along_a.conjugate() * along_b).imag
    if across == 0.0:
        return None
    corner = a.end + (apart.conjugate() * along_b).imag / across * along_a
    reach = max(abs(corner - a.end), abs(corner - b.start))
    return corner if reach <= abs(apart) + rounding else None


def _stiffness(curve: Curve) -> int:
    if isinstance(curve, Line):
        return 0
    return 1 if curve.length < SLENDER * abs(curve.end - curve.start) else 2


def _swept(curve: Curve, gap: float) -> float:
    """Bound the area that a curve of length L and chord c sweeps when one end moves by the gap g, the other fixed.

    A straight piece sweeps ½gL. One that is turned and stretched by 1 + δ, |δ| ≤ g/c, moves each point by its distance
    from the fixed end, at most the length up to there, times |δ|: ½gL·L/c·(1 + ½|δ|). What closes on itself is not
    turned; its other ways to close are a chord, or g more or less of length.
    """
    half = 0.5 * gap * curve.length
    if _stiffness(curve) != 1:
        return half
    chord = abs(curve.end - curve.start)
    return half * curve.length / chord * (1.0 + 0.5 * gap / chord)


def _stretched(curve: Curve, start: complex, end: complex) -> Curve:
    if start == curve.start and end == curve.end:
        return curve
    if isinstance(curve, Line):
        return Line(start, end, curve.source)
    factor = (end - start) / (curve.end - curve.start)
    return curve.moved(factor, start - factor * curve.start)
