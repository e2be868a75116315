"""The outline as the solver takes it: pieces too short to matter left out, straight runs made one line."""

from __future__ import annotations

from collections.abc import Sequence

from edgetally.curves.curve import Curve
from edgetally.curves.line import Line

# A piece shorter than this share of the size is left out; the gap it leaves is below what the numbers can show.
NEGLIGIBLE = 1e-10
# Lines whose common vertex is off the chord by less than this share of the size are one.
STRAIGHT = 1e-12


def simplified(loop: Sequence[Curve], size: float) -> list[Curve]:
    """Return the curves of a loop without negligible pieces, and with lines that continue each other made one.

    The ends of neighbours of a piece left out stay where they are, up to 1e-10 of the size apart; lines are drawn to
    the next start, so that chords lose nothing.
    """
    kept = [curve for curve in loop if curve.length > NEGLIGIBLE * size]
    joined: list[Curve] = []
    for curve in kept:
        if joined and (longer := _together(joined[-1], curve, size)):
            joined[-1] = longer
        else:
            joined.append(curve)
    while len(joined) > 2 and (longer := _together(joined[-1], joined[0], size)):
        joined = [longer, *joined[1:-1]]
    return joined


def _together(first: Curve, second: Curve, size: float) -> Line | None:
    """Return the one line that two lines make, None if they do not."""
    if not (isinstance(first, Line) and isinstance(second, Line)):
        return None
    chord = second.end - first.start
    reach = abs(chord)
    if reach <= 0.5 * max(first.length, second.length):
        return None
    for z in (first.end, second.start):
        if abs(((z - first.start) * chord.conjugate()).imag) > STRAIGHT * size * reach:
            return None
    if ((first.end - first.start) * chord.conjugate()).real <= 0.0:
        return None
    return Line(first.start, second.end, first.source)
