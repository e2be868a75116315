"""Which section a text stands in, or nearest to."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import hypot

from edgetally.outline.choosing import innermost_around
from edgetally.outline.records import Outline
from edgetally.results import SectionResult

ALIKE = 1.25
"""Of two outlines whose boxes are this nearly as far away as each other, either may be meant."""

Box = tuple[float, float, float, float]


@dataclass(frozen=True, slots=True)
class Standing:
    """The sections, by index, that a text may be about, none where it stands by an outline that was not measured.

    `unsure` names what else stands about as near, "" where nothing does; `elsewhere` where that was not measured.
    """

    sections: tuple[int, ...]
    unsure: str = ""
    elsewhere: bool = False


def standing_of(points: Sequence[complex], outline: Outline, sections: Sequence[SectionResult]) -> list[Standing]:
    """Return where each point stands: in the section whose outer boundary is the innermost around it, else by the one
    whose box is nearest; by all whose boxes are about as near."""
    owner = {id(region): k for k, section in enumerate(sections) for region in section.drawn}
    boxes: list[Box] = [*(region.box for region in outline.regions), *(left.box for left in outline.left_out)]
    owners = [*(owner.get(id(region)) for region in outline.regions), *(None for _ in outline.left_out)]
    return [
        _standing([inside] if inside is not None else _nearest(p, boxes), owners, sections)
        for p, inside in zip(points, innermost_around(outline.regions, points), strict=True)
    ]


def _standing(near: Sequence[int], owners: Sequence[int | None], sections: Sequence[SectionResult]) -> Standing:
    found = list(dict.fromkeys(owners[k] for k in near))
    measured = tuple(k for k in found if k is not None)
    if len(found) < 2 or not measured:
        return Standing(measured)
    elsewhere = None in found
    names = [f"section {sections[k].name}" for k in measured[0 if elsewhere else 1 :]]
    return Standing(measured, "an outline that was not measured" if elsewhere else ", ".join(names), elsewhere)


def _nearest(p: complex, boxes: Sequence[Box]) -> list[int]:
    """Return the boxes nearest to a point, the nearest first."""
    away = [hypot(max(x0 - p.real, 0.0, p.real - x1), max(y0 - p.imag, 0.0, p.imag - y1)) for x0, y0, x1, y1 in boxes]
    least = min(away)
    return [k for k in sorted(range(len(boxes)), key=away.__getitem__) if away[k] <= ALIKE * least]
