"""Curves that were drawn as runs of short chords: found, with the area that they lose.

A run on a circle is six or more straight pieces of one length, each turned by the same angle of at most 15° against the
one before: the sides of a regular polygon in a circle. A hexagon or an octagon is a shape of its own. A run on another
smooth curve, an ellipse or a spline, is eight or more chords that turn one way by at most 15° each, and more of up to
30° at its tips, whose curvature varies smoothly. Exporters chop curves so; the result is then exact for the chords,
which are not what was meant.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import log, radians, sin

import numpy as np
from numpy.typing import NDArray

from edgetally.findings import Finding
from edgetally.outline.records import Loop, Region
from edgetally.outline.words import at, handles, place

FEWEST, FEWEST_SMOOTH = 6, 8
STEEPEST, STEEPEST_SMOOTH = radians(15.0), radians(30.0)
SLIGHTEST = 1e-4
"""Below this turn [rad] a chord misses its arc by less than 2e-9 of its length: nothing is lost."""
ALIKE, ALIKE_TURN = 0.01, 0.05
"""Lengths and turns of a run agree to these shares: exporters round their points, which tells on the turns most."""
DRIFT = 0.2
"""The turns of a whole run on a circle lie within this share of each other: those of a fine ellipse drift farther."""
NEXT_LENGTH, NEXT_CURVATURE = 4.0, 3.0
"""Neighbouring chords of a smooth curve differ by no more than these factors; halving by an exporter is a factor 2."""
QUIET, WAVES = 0.1, 0.25
"""Changes of the curvature's logarithm below QUIET are rounding; of the others so large a share may turn about."""
MOSTLY = 0.8
"""A smooth run that lies on circles for this share is so many arcs."""
HARMLESS = 1e-5
"""A loss of less than this share of the area is worth a note, not a warning."""

Floats = NDArray[np.float64]
Flags = NDArray[np.bool_]


@dataclass(frozen=True, slots=True)
class ChoppedArc:
    """A run of `count` chords, beginning at `start`, on a circle of `radius`, None where it is another smooth curve;
    `area` is what the material lacks for it, negative where it has too much (a chopped void). Lengths in the drawing's
    unit."""

    start: complex
    count: int
    radius: float | None
    area: float
    handle: str


def chopped_arcs(loop: Loop) -> list[ChoppedArc]:
    """Return the runs of chords of a directed loop, material on the left. Cost O(n).

    On a circle `area` is that of the segments, exact for equal chords; else an estimate of second order: each chord
    cuts a segment off the circle through three neighbouring corners.
    """
    packed = loop.packed
    chord = packed.end - packed.start
    if len(chord) < FEWEST:
        return []
    length, straight = np.abs(chord), packed.is_straight
    after, longer = np.roll(chord, -1), np.roll(length, -1)
    turn = np.angle(chord.conj() * after)
    bent = straight & np.roll(straight, -1) & (np.abs(turn) > SLIGHTEST) & (np.abs(turn) <= STEEPEST_SMOOTH)
    slight = bent & (np.abs(turn) <= STEEPEST)
    if not slight.any():
        return []

    joint = slight & (np.abs(longer - length) <= ALIKE * length)
    goes_on = joint & np.roll(joint, 1) & (np.abs(turn - np.roll(turn, 1)) <= ALIKE_TURN * np.abs(turn))
    circles = [run for run in _runs(joint, goes_on, FEWEST) if np.ptp(turn[run]) <= DRIFT * np.abs(turn[run]).mean()]

    with np.errstate(divide="ignore", invalid="ignore"):
        curvature = np.where(bent, 2.0 * np.sin(turn) / np.abs(chord + after), 0.0)
        step = np.log(np.abs(curvature / np.roll(curvature, 1)))
        smooth = bent & (np.maximum(longer, length) <= NEXT_LENGTH * np.minimum(longer, length))
        follows = smooth & np.roll(smooth, 1) & (turn * np.roll(turn, 1) > 0) & (np.abs(step) <= log(NEXT_CURVATURE))
    on_circle = np.zeros(len(chord), dtype=bool)
    for run in circles:
        on_circle[run] = True
    others = [
        run
        for run in _runs(smooth, follows, FEWEST_SMOOTH)
        if on_circle[run].mean() < MOSTLY and _is_even(step[run[1:]]) and slight[run].sum() >= FEWEST_SMOOTH - 1
    ]
    for run in others:  # which has arcs of its own only by chance
        on_circle[run] = False
    found = [_on_circle(loop, run, turn, length) for run in circles if on_circle[run].all()]
    return found + [_estimated(loop, run, curvature, length) for run in others]


def _runs(joint: Flags, goes_on: Flags, fewest: int) -> list[NDArray[np.intp]]:
    """Return the runs of joints, by index, that go on from one to the next around the loop, and have enough chords."""
    count = len(joint)
    if goes_on.all():
        return [np.arange(count)]
    found = []
    for k in np.flatnonzero(joint & ~goes_on).tolist():
        stop = k + 1
        while goes_on[stop % count]:
            stop += 1
        if stop - k + 1 >= fewest:  # so many joints have one chord more
            found.append(np.arange(k, stop) % count)
    return found


def _is_even(step: Floats) -> bool:
    """Tell whether a curvature rises and falls in long waves, by the changes of its logarithm from joint to joint."""
    loud = np.sign(step[np.abs(step) > QUIET])
    return bool(np.count_nonzero(np.diff(loud)) <= max(2.0, WAVES * len(step)))


def _chords(joints: NDArray[np.intp], count: int) -> NDArray[np.intp]:
    """Return the chords that a run of joints lies between: joint k is where chord k ends."""
    return joints if len(joints) == count else np.append(joints, (joints[-1] + 1) % count)


def _on_circle(loop: Loop, run: NDArray[np.intp], turn: Floats, length: Floats) -> ChoppedArc:
    members = _chords(run, len(length))
    angle = float(np.mean(turn[run]))
    side = float(np.mean(length[members]))
    radius = side / (2.0 * sin(abs(angle) / 2.0))
    segment = 0.5 * radius**2 * (abs(angle) - sin(abs(angle)))
    curve = loop.curves[int(run[0])]
    area = len(members) * segment * (1 if angle > 0 else -1)
    return ChoppedArc(curve.start, len(members), radius, area, curve.source.handle)


def _estimated(loop: Loop, run: NDArray[np.intp], curvature: Floats, length: Floats) -> ChoppedArc:
    """Sum the segments ½r²(φ − sin φ), φ = 2 asin(L/2r), r the mean of what the joints at both ends of a chord say."""
    members = _chords(run, len(length))
    bend = curvature[run]
    if len(run) == len(length):
        mean = 0.5 * (bend + np.roll(bend, 1))
    else:
        mean = 0.5 * (np.append(bend, bend[-1]) + np.insert(bend, 0, bend[0]))
    angle = 2.0 * np.arcsin(np.clip(0.5 * length[members] * mean, -1.0, 1.0))
    area = float((0.5 * (angle - np.sin(angle)) / mean**2).sum())
    curve = loop.curves[int(members[0])]
    return ChoppedArc(curve.start, len(members), None, area, curve.source.handle)


def chord_findings(regions: Sequence[Region], unit: str) -> list[Finding]:
    """Return one finding for all chopped curves of the regions that make a section, none where there are none."""
    chopped = [(loop, arcs) for region in regions for loop in region.loops if (arcs := chopped_arcs(loop))]
    arcs = [arc for _, found in chopped for arc in found]
    if not arcs:
        return []
    lost, area = sum(arc.area for arc in arcs), sum(region.area for region in regions)
    first = max(arcs, key=lambda arc: abs(arc.area))
    sense = "lacks" if lost >= 0 else "has too much by"
    smooth = sum(arc.radius is None for arc in arcs)
    kinds = [
        f"{n} {name}{'s' if n > 1 else ''}" for n, name in ((len(arcs) - smooth, "arc"), (smooth, "other curve")) if n
    ]
    estimate = "about " if smooth else ""
    how = ", estimated from the circles through three neighbouring corners" if smooth else ""
    shape = "a smooth curve" if first.radius is None else f"a radius of {first.radius:.5g} {unit}"
    text = (
        f"{' and '.join(kinds)} {'were' if len(arcs) > 1 else 'was'} drawn as chords: the area {sense} {estimate}"
        f"{abs(lost):.3g} {unit}^2 ({100 * abs(lost) / area:.2g} %{how}), second moments about twice that share; the "
        f"largest, {first.count} chords on {shape}, begins at {place(first.start)}; export true curves if meant"
    )
    severity = "warning" if sum(abs(arc.area) for arc in arcs) > HARMLESS * area else "note"
    sources = [loop.curves[0].source for loop, _ in chopped]
    return [Finding("chopped-arc", severity, text, at(first.start), handles(sources))]  # type: ignore[arg-type]
