"""All tables of a section beside that of its properties, for terminal and workbook; and the same for the document."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from edgetally.output.blocks import Block
from edgetally.output.offset_words import offset_block, offset_document
from edgetally.output.strip_words import strip_blocks, strip_document
from edgetally.output.symbols import SymbolSet

if TYPE_CHECKING:
    from edgetally.results import SectionResult


def section_blocks(section: SectionResult, symbols: SymbolSet) -> list[Block]:
    """Return the blocks of what a section is beside an area, in the order of the sheet's pages."""
    blocks: list[Block] = []
    if section.developed is not None and section.developed.bends:
        blocks += strip_blocks(section)
    band = offset_block(section, symbols)
    if band is not None:
        blocks.append(band)
    return blocks


def section_document(section: SectionResult) -> dict[str, Any]:
    """Return the further keys of a section in the document."""
    keys: dict[str, Any] = {}
    if section.developed is not None:
        keys["strip"] = strip_document(section, section.developed)
    if section.offset is not None:
        keys["offset"] = offset_document(section, section.offset)
    return keys
