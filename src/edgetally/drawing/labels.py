"""Texts short enough for a name, with their places: one inside an outline names it."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from edgetally.drawing.lettering import Lettering

LONGEST = 60
"""A longer text is a note, not a name."""


@dataclass(frozen=True, slots=True)
class Label:
    """A text in one line, where it is anchored, and its DXF handle."""

    words: str
    at: complex
    handle: str


def labels_of(lettering: Iterable[Lettering]) -> list[Label]:
    """Return the texts that are short enough for a name, each in one line."""
    labels = [Label(" ".join(text.lines), text.at, text.source.handle) for text in lettering]
    return [label for label in labels if len(label.words) <= LONGEST]
