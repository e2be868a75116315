"""Arcs that were drawn as runs of short chords: found, with the area that they lose.

A run is six or more straight pieces of one length, each turned by the same angle of at most 15° against the one before:
the sides of a regular polygon in a circle. A hexagon or an octagon is a shape of its own. Exporters chop arcs so; the
result is then exact for the chords, which are not what was meant.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import radians, sin

import numpy as np

from edgetally.findings import Finding
from edgetally.outline.records import Loop, Region
from edgetally.outline.words import at, handles, place

FEWEST = 6
STEEPEST = radians(15.0)
SLIGHTEST = 1e-4
"""Below this turn [rad] a chord misses its arc by less than 2e-9 of its length: nothing is lost."""
ALIKE, ALIKE_TURN = 0.01, 0.05
"""Lengths and turns of a run agree to these shares: exporters round their points, which tells on the turns most."""
HARMLESS = 1e-5
"""A loss of less than this share of the area is worth a note, not a warning."""


@dataclass(frozen=True, slots=True)
class ChoppedArc:
    """A run of `count` chords on a circle of `radius`, beginning at `start`; `area` is what the material lacks for it,
    negative where it has too much (a chopped void). Lengths in the drawing's unit."""

    start: complex
    count: int
    radius: float
    area: float
    handle: str


def chopped_arcs(loop: Loop) -> list[ChoppedArc]:
    """Return the runs of chords of a directed loop, material on the left. Cost O(n)."""
    packed = loop.packed
    chord = packed.end - packed.start
    if len(chord) < FEWEST:
        return []
    length, straight = np.abs(chord), packed.is_straight
    after = np.roll(chord, -1)
    turn = np.angle(chord.conj() * after)
    even = np.abs(np.roll(length, -1) - length) <= ALIKE * length
    joint = straight & np.roll(straight, -1) & even & (np.abs(turn) > SLIGHTEST) & (np.abs(turn) <= STEEPEST)
    goes_on = joint & np.roll(joint, 1) & (np.abs(turn - np.roll(turn, 1)) <= ALIKE_TURN * np.abs(turn))
    if goes_on.all():  # a closed polygon in a circle
        return [_run(loop, 0, len(chord), turn, length)]
    found = []
    begins = np.flatnonzero(joint & ~goes_on)
    for k in map(int, begins):
        stop = k + 1
        while goes_on[stop % len(chord)]:
            stop += 1
        count = stop - k + 1  # so many joints have one chord more
        if count >= FEWEST:
            found.append(_run(loop, k, count, turn, length))
    return found


def _run(loop: Loop, first: int, count: int, turn: np.ndarray, length: np.ndarray) -> ChoppedArc:
    members = np.arange(first, first + count) % len(length)
    angle = float(np.mean(turn[members[:-1]]))
    side = float(np.mean(length[members]))
    radius = side / (2.0 * sin(abs(angle) / 2.0))
    segment = 0.5 * radius**2 * (abs(angle) - sin(abs(angle)))
    curve = loop.curves[first]
    return ChoppedArc(curve.start, count, radius, count * segment * (1 if angle > 0 else -1), curve.source.handle)


def chord_findings(regions: Sequence[Region], unit: str) -> list[Finding]:
    """Return one finding for all chopped arcs of the regions that make a section, none where there are none."""
    chopped = [(loop, arcs) for region in regions for loop in region.loops if (arcs := chopped_arcs(loop))]
    arcs = [arc for _, found in chopped for arc in found]
    if not arcs:
        return []
    lost, area = sum(arc.area for arc in arcs), sum(region.area for region in regions)
    first = max(arcs, key=lambda arc: abs(arc.area))
    sense = "lacks" if lost >= 0 else "has too much by"
    count = f"{len(arcs)} arc{'s were' if len(arcs) > 1 else ' was'} drawn as chords"
    text = (
        f"{count}: the area {sense} {abs(lost):.3g} {unit}^2 ({100 * abs(lost) / area:.2g} %), second moments about "
        f"twice that share; the largest, {first.count} chords on a radius of {first.radius:.5g} {unit}, begins at "
        f"{place(first.start)}; export true arcs if they are meant"
    )
    severity = "warning" if sum(abs(arc.area) for arc in arcs) > HARMLESS * area else "note"
    sources = [loop.curves[0].source for loop, _ in chopped]
    return [Finding("chopped-arc", severity, text, at(first.start), handles(sources))]  # type: ignore[arg-type]
