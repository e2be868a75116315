"""What is lettered on a drawing: every visible text of model space, in plain lines, with its place."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass

from ezdxf.document import Drawing as Document
from ezdxf.entities.attrib import Attrib
from ezdxf.entities.dxfgfx import DXFGraphic
from ezdxf.entities.insert import Insert
from ezdxf.entities.mtext import MText
from ezdxf.entities.text import Text
from ezdxf.tools.text import fast_plain_mtext, plain_text

from edgetally.curves import Source
from edgetally.drawing.layers import Layers
from edgetally.drawing.placement import own_plane

# \Supper^lower; and with / or # between: superscripts, subscripts, fractions (DXF reference, MTEXT)
_STACKED = re.compile(r"\\S((?:[^;\\^/#]|\\[^;])*)([\^/#]) ?([^;]*);")
_RAISED = re.compile(r"\^(?=[\d({-])")
_BY_NUMBER = re.compile(r"%%(\d{3})")


@dataclass(frozen=True, slots=True)
class Lettering:
    """A text without its formatting codes, line by line, where it is anchored, and its entity."""

    lines: tuple[str, ...]
    at: complex
    source: Source


def lettering_of(document: Document, layers: Layers) -> list[Lettering]:
    """Return the visible texts of model space, attributes of block references too, that hold any words."""
    found = []
    for entity in _texts(document):
        if entity.dxf.get("invisible", 0) or layers.hidden(entity.dxf.layer) is not None:
            continue
        plane = own_plane(entity)
        if plane is None or not entity.dxf.hasattr("insert"):
            continue
        place = entity.dxf.insert
        if isinstance(entity, MText):
            words, at = _plain(entity.text), complex(place.x, place.y)  # MTEXT lies in world coordinates
        else:
            assert isinstance(entity, Text)
            if (entity.dxf.halign or entity.dxf.valign) and entity.dxf.hasattr("align_point"):
                place = entity.dxf.align_point
            words, at = plain_text(_raised(entity.dxf.text)), plane.point(complex(place.x, place.y))
            if isinstance(entity, Attrib) and entity.has_embedded_mtext_entity:
                words = _plain(entity.plain_mtext(fast=False))
        words = _BY_NUMBER.sub(lambda match: chr(int(match.group(1))), words)
        lines = tuple(line for line in (" ".join(line.split()) for line in words.splitlines()) if line)
        if lines:
            source = Source(entity.dxftype(), entity.dxf.handle or "", entity.dxf.layer)
            found.append(Lettering(lines, at, source))
    return found


def _texts(document: Document) -> Iterator[DXFGraphic]:
    for entity in document.modelspace():
        kind = entity.dxftype()
        if kind in ("TEXT", "MTEXT"):
            yield entity
        elif kind == "INSERT" and isinstance(entity, Insert):
            yield from (attribute for attribute in entity.attribs if not attribute.is_invisible)


def _plain(text: str) -> str:
    """Take the formatting codes out of an MTEXT. What is stacked is written on: cm\\S2^; is cm2, \\S1/2; is 1/2."""
    flat = _STACKED.sub(lambda m: m.group(1) + ("" if m.group(2) == "^" else "/") + m.group(3), text)
    return str(fast_plain_mtext(_raised(flat)))


def _raised(text: str) -> str:
    """Keep the sign in mm^2: with what follows it encodes a control character; with a space, itself (DXF reference)."""
    return _RAISED.sub("^ ", text)
