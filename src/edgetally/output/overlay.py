"""The picture of two states of a section over each other: new filled, old dashed, what changed numbered."""

from __future__ import annotations

from collections.abc import Iterable
from typing import TYPE_CHECKING

from edgetally.curves import Curve
from edgetally.output.pens import ACCENT, INK, MUTED, WHITE, Item, Label, Path, Picture, Style, disc, stroke
from edgetally.output.placing import Placing
from edgetally.section.record import Section

if TYPE_CHECKING:
    from edgetally.compare import Pair

NEW = Style(width=0.7, fill=(0.90, 0.91, 0.90))
OLD = Style(width=0.6, colour=MUTED, dash=(3.0, 2.0))
AFTER = Style(width=1.6, colour=ACCENT)
BEFORE = Style(width=1.3, colour=ACCENT, dash=(2.5, 1.8))
BADGE = Style(width=0.6, colour=ACCENT, fill=WHITE)
MOST_NUMBERS = 60
"""More numbers than these would cover the picture; the table has them all."""


def overlay_picture(pair: Pair, width: float, height: float) -> Picture:
    """Tell both states of a section, the new one taken back by a shift of the whole, on `width` × `height` points."""
    old, shift = pair.old.section, pair.matching.shift
    z = [end - shift for loop in pair.new_loops for curve in loop.curves for end in (curve.start, curve.point(0.5))]
    placing = Placing.of(old, width, height, also=z)
    back = placing.shift - shift * placing.points
    new_runs = tuple(
        tuple(curve.moved(complex(placing.points), back) for curve in loop.curves) for loop in pair.new_loops
    )
    items: list[Item] = [Path(new_runs, NEW, closed=True), placing.material(OLD)]
    numbers: list[Item] = []
    taken: list[complex] = []
    for number, change in enumerate(pair.matching.changes, start=1):
        items += [_path(curve, placing, BEFORE) for curve in change.before]
        items += [_path(curve, placing, AFTER) for curve in change.after]
        if number <= MOST_NUMBERS:
            numbers += _badge(number, placing.paper((change.after or change.before)[0].point(0.5)), taken)
    return Picture(width, height, (*items, *numbers, *_key(placing, old)))


def _path(curve: Curve, placing: Placing, style: Style) -> Path:
    return Path(((curve.moved(complex(placing.points), placing.shift),),), style)


def _badge(number: int, at: complex, taken: list[complex]) -> list[Item]:
    """A numbered disc beside a change; one that would cover another moves up."""
    radius = 5.2
    while any(abs(at - other) < 2.2 * radius for other in taken):
        at += 2.3j * radius
    taken.append(at)
    return [disc(at, radius, BADGE), Label(at - 2.4j, str(number), 6.5, "middle", bold=True, colour=ACCENT)]


def _key(placing: Placing, section: Section) -> Iterable[Item]:
    x, y = 8.0, 20.0
    for style, words in ((NEW, "new"), (OLD, "old"), (AFTER, "changed: as it is now"), (BEFORE, "as it was")):
        yield stroke(complex(x, y + 2.5), complex(x + 18.0, y + 2.5), Style(style.width, style.colour, style.dash))
        yield Label(complex(x + 22.0, y), words, 7.0, colour=MUTED)
        x += 36.0 + 3.6 * len(words)
    yield Label(complex(8.0, 7.0), f"scale {placing.scale}", 7.0, colour=INK)
