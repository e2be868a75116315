"""The PDF sheet of an analysis: for each section a first page, and one for each further matter that applies to it."""

from __future__ import annotations

from collections.abc import Callable, Collection
from dataclasses import dataclass
from typing import TYPE_CHECKING

from edgetally.errors import UsageError
from edgetally.output.blocks import Block
from edgetally.output.dimension_table import dimension_block, lying
from edgetally.output.main_page import MainPage
from edgetally.output.offset_words import offset_block
from edgetally.output.pages import LEADING, Head, Pages, Setup, whole_pdf
from edgetally.output.pens import Picture
from edgetally.output.strip_picture import strip_picture
from edgetally.output.strip_words import strip_blocks
from edgetally.output.symbols import AXES, SymbolSet
from edgetally.output.torsion_words import torsion_block
from edgetally.output.typesetting import block_height, set_blocks
from edgetally.output.warping import warping_picture
from edgetally.output.words import conventions, header_fields
from edgetally.section.developed import why_no_strip

if TYPE_CHECKING:
    from edgetally.results import Analysis, SectionResult

__all__ = ["Head", "sheet_pdf"]

NOTHING = {
    "torsion": "torsion was not solved",
}
"""Why a page may have nothing to show."""
LOWEST_PICTURE = 230.0
"""A picture lower than this [pt] is no use; what does not fit below it goes to the next page."""


@dataclass(frozen=True, eq=False)
class Matter:
    """What a further page shows: a title, a picture told on a width and height [pt], blocks below it, and the keys of
    the properties among them, which the first page then leaves out."""

    title: str
    caption: str
    picture: Callable[[float, float], Picture]
    blocks: tuple[Block, ...]
    keys: frozenset[str]


def sheet_pdf(
    analysis: Analysis,
    *,
    head: Head | None = None,
    page: str = "a4",
    symbols: SymbolSet = "plain",
    pages: Collection[str] = (),
) -> bytes:
    """Return the PDF of an analysis; `pages` names those to write (main, torsion, stress, extrusion, strip),
    or is all; without it those that apply.

    The same analysis and head give the same bytes. Raises UsageError where a page that is named has nothing to show.
    """
    for name in pages:
        if name not in ("main", "all") and not any(name in _matters(s, symbols) for s in analysis.sections):
            raise UsageError(f"there is nothing to show on the page {name}: {_reason(name, analysis.sections[0])}")
    head = head or Head()
    fields = header_fields(analysis)
    digest = fields.pop("SHA-256")
    shares = (0.25, 0.17, 0.21, 0.17, 0.11, 0.09)
    names = [name if name[0].isupper() else name.capitalize() for name in fields]
    drawing = analysis.drawing
    setup = Setup(
        size=page,
        head=head,
        heading="Section properties",
        facts=tuple(zip(names, fields.values(), shares, strict=True)),
        line=("SHA-256 of the drawing", digest),
        foot=tuple(conventions(*AXES[symbols])),
        title=f"{head.title or drawing.file}: section properties",
        subject=f"Section properties of {drawing.file}",
        keywords=f"sha256:{drawing.sha256}",
    )

    def write(paper: Pages) -> None:
        for section in analysis.sections:
            _write_section(paper, analysis, section, symbols, pages)

    return whole_pdf(setup, write)


def _reason(page: str, section: SectionResult) -> str:
    """Say why a page that was asked for has nothing to show."""
    if page != "strip":
        return NOTHING[page]
    if section.developed is not None:
        return "the strip has no bend"
    return "the section is no strip of one thickness: " + why_no_strip([loop.curves for loop in section.section.loops])


def _write_section(
    paper: Pages, analysis: Analysis, section: SectionResult, symbols: SymbolSet, pages: Collection[str]
) -> None:
    every = not pages or "all" in pages
    matters = [matter for name, matter in _matters(section, symbols).items() if every or name in pages]
    outlines = len(analysis.outline.regions)
    where = f"section {section.name} of {outlines}" if outlines > 1 else ""
    first = every or "main" in pages
    name = f"Section {section.name}" if len(analysis.sections) > 1 else analysis.drawing.file
    if first:
        elsewhere = frozenset(key for matter in matters for key in matter.keys)
        MainPage(paper, analysis, section, symbols, elsewhere).write(name, where)
        dimensions = dimension_block(analysis)
        if dimensions is not None and lying(analysis) and section is analysis.sections[0]:
            set_blocks(paper, [dimensions], paper.open("Dimensions on the drawing", where=where, level=1) - 6.0)
    band = offset_block(section, symbols)
    if first and band is not None:
        set_blocks(paper, [band], paper.open("Tolerance", where=where, level=1) - 6.0)
    for matter in matters:
        # a bookmark below that of the first page, or one that names the section itself
        bookmark = matter.title if first or len(analysis.sections) == 1 else f"{name}: {matter.title}"
        y = paper.open(bookmark, where=where, level=int(first)) - 6.0
        _write_matter(paper, matter, y)


def _write_matter(paper: Pages, matter: Matter, y: float) -> None:
    """Set the picture as high as the blocks leave room for, and the blocks below it."""
    width = paper.right - paper.left
    below = block_height(matter.blocks, width) + 2 * LEADING
    height = min(max(y - paper.floor - below, LOWEST_PICTURE), 0.9 * width)
    paper.frame(paper.left, y, width, height, matter.caption)
    paper.picture(matter.picture(width, height - 14.0), paper.left, y - height)
    set_blocks(paper, matter.blocks, y - height - 6.0)


def _matters(section: SectionResult, symbols: SymbolSet) -> dict[str, Matter]:
    """Return what applies to a section, by the name of the page."""
    found = {}
    solution = section.connected.solution
    if solution is not None:
        found["torsion"] = Matter(
            "Torsion and shear",
            "Warping ω about the shear centre, along the outline",
            lambda width, height: warping_picture(section, solution, width, height),
            (torsion_block(section, solution, symbols),),
            frozenset({"warping_constant", "shear_area_x", "shear_area_y"}),
        )
    unrolled = section.developed
    if unrolled is not None and unrolled.bends:
        found["strip"] = Matter(
            "Cold-formed strip",
            "The strip, its flats and bends numbered along it, and the blank",
            lambda width, height: strip_picture(section, unrolled, width, height),
            strip_blocks(section),
            frozenset({"strip_thickness", "strip_width"}),
        )
    return found
