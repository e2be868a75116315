"""Texts of a drawing with their places: a text inside an outline names it."""

from __future__ import annotations

from dataclasses import dataclass

from ezdxf.document import Drawing as Document
from ezdxf.entities.mtext import MText
from ezdxf.entities.text import Text

from edgetally.drawing.layers import Layers
from edgetally.drawing.placement import own_plane

LONGEST = 60
"""A longer text is a note, not a name."""


@dataclass(frozen=True, slots=True)
class Label:
    """A text in one line, where it is anchored, and its DXF handle."""

    words: str
    at: complex
    handle: str


def labels_of(document: Document, layers: Layers) -> list[Label]:
    """Return the visible texts of model space that are short enough for a name, formatting codes taken out."""
    labels = []
    for entity in document.modelspace().query("TEXT MTEXT"):
        if entity.dxf.get("invisible", 0) or layers.hidden(entity.dxf.layer) is not None:
            continue
        place, plane = entity.dxf.get("insert"), own_plane(entity)  # type: ignore[arg-type]
        if place is None or plane is None:
            continue
        at = complex(place.x, place.y)
        if isinstance(entity, Text):
            words = entity.plain_text()
            if (entity.dxf.halign or entity.dxf.valign) and entity.dxf.hasattr("align_point"):
                at = complex(entity.dxf.align_point.x, entity.dxf.align_point.y)
            at = plane.point(at)
        elif isinstance(entity, MText):
            words = str(entity.plain_text())
        else:
            continue
        line = " ".join(words.split())
        if 0 < len(line) <= LONGEST:
            labels.append(Label(line, at, entity.dxf.handle or ""))
    return labels
