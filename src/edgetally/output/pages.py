"""The pages of one PDF: paper, head, foot, numbers, bookmarks; what stands on them is set by others."""

from __future__ import annotations

import io
from collections.abc import Callable
from dataclasses import dataclass

from reportlab.lib.pagesizes import A4, LETTER
from reportlab.pdfgen.canvas import Canvas

from edgetally import __version__
from edgetally.output.paper import BOLD, REGULAR, PdfPen, fitted, printable, register_fonts, text_width, wrapped
from edgetally.output.pens import INK, MUTED, Colour, Picture, draw
from edgetally.output.placing import POINTS_PER_MM
from edgetally.output.words import CAUTION

SIZES = {"a4": A4, "letter": LETTER}
LEFT, RIGHT, TOP, BOTTOM = 18 * POINTS_PER_MM, 11 * POINTS_PER_MM, 11 * POINTS_PER_MM, 9 * POINTS_PER_MM
SMALLEST, SMALL, BODY = 5.2, 6.6, 7.8
LEADING = 9.4
HAIR, RULE = 0.35, 0.9
LIGHT = (0.78, 0.79, 0.80)


@dataclass(frozen=True, slots=True)
class Head:
    """What a person enters on the sheet; what is empty becomes a box to fill in by hand."""

    title: str = ""
    reference: str = ""
    prepared: str = ""
    date: str = ""


@dataclass(frozen=True, slots=True)
class Setup:
    """What is the same on every page, and what the PDF says of itself.

    `facts` are (name, value, share of the width) under the boxes of the head, `line` a last (name, value) across it;
    `foot` are sentences above the caution.
    """

    size: str
    head: Head
    heading: str
    facts: tuple[tuple[str, str, float], ...]
    line: tuple[str, str]
    foot: tuple[str, ...]
    title: str
    subject: str
    keywords: str


def whole_pdf(setup: Setup, write: Callable[[Pages], None]) -> bytes:
    """Return the PDF that `write` sets; it is called twice, because each page says how many there are.

    The same calls give the same bytes.
    """
    register_fonts()
    data, total = b"", 0
    for _ in range(2):
        pages = Pages(setup, total)
        write(pages)
        data, total = pages.finished()
    return data


class Pages:
    """A canvas that knows its margins; y runs upwards in points."""

    def __init__(self, setup: Setup, total: int) -> None:
        self.setup, self.total, self.number = setup, total, 0
        self.width, self.height = map(float, SIZES[setup.size])
        self.left, self.right = LEFT, self.width - RIGHT
        self._buffer = io.BytesIO()
        canvas = Canvas(self._buffer, pagesize=(self.width, self.height), invariant=1, pageCompression=1)
        canvas.setTitle(setup.title)
        canvas.setAuthor(setup.head.prepared)
        canvas.setSubject(setup.subject)
        canvas.setKeywords(setup.keywords)
        canvas.setCreator(f"edgetally {__version__}")
        self.canvas, self.pen = canvas, PdfPen(canvas)
        self.floor = BOTTOM
        self._open: tuple[str, str] | None = None

    def finished(self) -> tuple[bytes, int]:
        """Return the bytes and the number of pages."""
        self._close()
        self.canvas.save()
        return self._buffer.getvalue(), self.number

    def open(self, bookmark: str, *, where: str = "", level: int = 0) -> float:
        """Begin a page and return the y below its head; `floor` is the y above its foot."""
        self._close()
        self.number += 1
        self._open = bookmark, where
        mark = f"page{self.number}"
        self.canvas.bookmarkPage(mark)
        self.canvas.addOutlineEntry(bookmark, mark, level=level)
        y = self._head(where)
        self.floor = self._foot()
        return y

    def go_on(self) -> float:
        """Begin another page under the same bookmark, as its continuation."""
        assert self._open is not None
        bookmark, where = self._open
        return self.open(
            bookmark if bookmark.endswith(", continued") else f"{bookmark}, continued", where=where, level=1
        )

    def _close(self) -> None:
        if self._open is not None:
            self.canvas.showPage()
        self._open = None

    # ------------------------------------------------------------------ head and foot
    def _head(self, where: str) -> float:
        pen, head, top = self.pen, self.setup.head, self.height - TOP
        self.rule(self.left, self.right, top, RULE)
        heading = self.setup.heading
        pen.text(self.right - text_width(heading, 11.0, BOLD), top - 17.0, heading, 11.0, BOLD)
        if where:
            pen.text(self.right - text_width(where, SMALL), top - 26.0, where, SMALL, colour=MUTED)
        self._field("Title", head.title, self.left, top, self.right - self.left - 125.0, size=11.0)
        y = top - 31.0
        boxes = (
            ("Reference", head.reference, 0.26),
            ("Prepared by", head.prepared, 0.24),
            ("Date", head.date, 0.14),
            ("Checked by, date", "", 0.18),
            ("Signature", "", 0.18),
        )
        for cells, height in ((boxes, 27.0), (self.setup.facts, 23.0)):
            self.rule(self.left, self.right, y, HAIR)
            self._cells(cells, y, height)
            y -= height
        self.rule(self.left, self.right, y, HAIR)
        name, value = self.setup.line
        x = pen.text(self.left + 3.0, y - 8.2, f"{name} ", SMALL, colour=MUTED)
        pen.text(x + 2.0, y - 8.2, fitted(value, SMALL, self.right - x - 4.0), SMALL)
        y -= 12.0
        self.rule(self.left, self.right, y, RULE)
        return y

    def _cells(self, cells: tuple[tuple[str, str, float], ...], y: float, height: float) -> None:
        x = self.left
        for k, (name, value, share) in enumerate(cells):
            width = share * (self.right - self.left)
            if k:
                self.canvas.setLineWidth(HAIR)
                self.canvas.setStrokeColorRGB(*INK)
                self.canvas.line(x, y, x, y - height)
            self._field(name, value, x, y, width)
            x += width

    def _field(self, name: str, value: str, x: float, y: float, width: float, size: float = BODY) -> None:
        self.pen.text(x + 3.0, y - 7.6, name, 6.0, colour=MUTED)
        if not value:
            return
        # what does not fit is set smaller before anything of it is cut
        small = size * min(1.0, (width - 6.0) / text_width(printable(value), size))
        size = max(small, SMALLEST)
        self.pen.text(x + 3.0, y - 9.5 - size, fitted(value, size, width - 6.0), size)

    def _foot(self) -> float:
        """Draw conventions, caution and page number; return the y above them."""
        pen, width = self.pen, self.right - self.left
        lines = [(line, REGULAR) for sentence in self.setup.foot for line in wrapped(sentence, SMALL, width)]
        lines += [(line, BOLD) for line in wrapped(CAUTION, SMALL, width, BOLD)]
        y = BOTTOM + 9.0
        pen.text(self.left, BOTTOM, f"edgetally {__version__}", SMALL, colour=MUTED)
        page = f"page {self.number} of {self.total}"
        pen.text(self.right - text_width(page, SMALL), BOTTOM, page, SMALL, colour=MUTED)
        self.rule(self.left, self.right, y, HAIR)
        y += 4.0
        for line, font in reversed(lines):
            pen.sentence(self.left, y, line, SMALL, font)
            y += 8.0
        self.rule(self.left, self.right, y + 1.0, HAIR)
        return y + 1.0

    # ------------------------------------------------------------------ what stands on a page
    def heading(self, text: str, x0: float, x1: float, y: float) -> float:
        """Set a heading over a rule, its top at y; return the first baseline below it."""
        self.pen.text(x0, y - 8.0, text, 8.4, BOLD)
        self.rule(x0, x1, y - 11.0, 0.6)
        return y - 20.0

    def rule(self, x0: float, x1: float, y: float, width: float, colour: Colour = INK) -> None:
        """Draw a rule of a width [pt]."""
        self.canvas.setLineWidth(width)
        self.canvas.setStrokeColorRGB(*colour)
        self.canvas.line(x0, y, x1, y)

    def frame(self, x: float, top: float, width: float, height: float, title: str = "") -> None:
        """Draw the frame of a picture, with a title inside it."""
        self.canvas.setLineWidth(HAIR)
        self.canvas.setStrokeColorRGB(*MUTED)
        self.canvas.rect(x, top - height, width, height, stroke=1, fill=0)
        if title:
            self.pen.text(x + 6.0, top - 12.0, title, BODY, BOLD)

    def picture(self, picture: Picture, x: float, bottom: float) -> None:
        """Draw a picture, its lower left corner at (x, bottom)."""
        draw(picture, self.pen, complex(x, bottom))
