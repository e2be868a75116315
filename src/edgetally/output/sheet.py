"""The PDF sheet: one page a section that can go into the calculation file, and more where the findings are many."""

from __future__ import annotations

import io
from dataclasses import dataclass
from math import ceil, log10
from typing import TYPE_CHECKING

from reportlab.lib.pagesizes import A4, LETTER
from reportlab.pdfgen.canvas import Canvas

from edgetally import __version__
from edgetally.output.figure import section_picture
from edgetally.output.mohr import mohr_picture
from edgetally.output.numbers import value_text
from edgetally.output.paper import BOLD, REGULAR, PdfPen, fitted, printable, register_fonts, text_width, wrapped
from edgetally.output.pens import ACCENT, INK, MUTED, Colour, draw
from edgetally.output.placing import POINTS_PER_MM
from edgetally.output.symbols import AXES, KEYS, SymbolSet, symbol_of
from edgetally.output.torsion_words import torsion_notes, torsion_rows
from edgetally.output.warping import warping_picture
from edgetally.output.words import CAUTION, conventions, described, evidence, header_fields, in_print
from edgetally.section.connected import KEYS as CONNECTED
from edgetally.section.record import Property

if TYPE_CHECKING:
    from edgetally.findings import Finding
    from edgetally.results import Analysis, SectionResult
    from edgetally.section.solution import TorsionSolution

PAGES = {"a4": A4, "letter": LETTER}
LEFT, RIGHT, TOP, BOTTOM = 18 * POINTS_PER_MM, 11 * POINTS_PER_MM, 11 * POINTS_PER_MM, 9 * POINTS_PER_MM
SMALLEST, SMALL, BODY = 5.2, 6.6, 7.8
LEADING = 9.4
HAIR, RULE = 0.35, 0.9
LIGHT = (0.78, 0.79, 0.80)
LOWEST_FIGURE = 262.0
"""A figure lower than this [pt] is no use; findings go to the next page instead."""
MARKS = {"note": "–", "warning": "!", "error": "✕"}


@dataclass(frozen=True, slots=True)
class Head:
    """What a person enters on the sheet; what is empty becomes a box to fill in by hand."""

    title: str = ""
    reference: str = ""
    prepared: str = ""
    date: str = ""


def sheet_pdf(analysis: Analysis, *, head: Head | None = None, page: str = "a4", symbols: SymbolSet = "plain") -> bytes:
    """Return the PDF of an analysis: for each section a page, with further pages for what does not fit on it.

    The same analysis and head give the same bytes.
    """
    register_fonts()
    sheet = _Sheet(analysis, head or Head(), PAGES[page], symbols)
    total = sheet.write(total=0)[1]
    return sheet.write(total)[0]


class _Sheet:
    def __init__(self, analysis: Analysis, head: Head, size: tuple[float, float], symbols: SymbolSet) -> None:
        self.analysis, self.head, self.symbols = analysis, head, symbols
        self.width, self.height = size
        self.left, self.right = LEFT, self.width - RIGHT

    def write(self, total: int) -> tuple[bytes, int]:
        """Write all pages, each numbered out of `total`; return the bytes and how many pages there were."""
        buffer = io.BytesIO()
        canvas = Canvas(buffer, pagesize=(self.width, self.height), invariant=1, pageCompression=1)
        title = self.head.title or self.analysis.drawing.file
        canvas.setTitle(f"{title}: section properties")
        canvas.setAuthor(self.head.prepared)
        canvas.setSubject(f"Section properties of {self.analysis.drawing.file}")
        canvas.setKeywords(f"sha256:{self.analysis.drawing.sha256}")
        canvas.setCreator(f"edgetally {__version__}")
        self.canvas, self.pen, self.total, self.number = canvas, PdfPen(canvas), total, 0
        for section in self.analysis.sections:
            self._section(section)
        canvas.save()
        return buffer.getvalue(), self.number

    # ------------------------------------------------------------------ pages
    def _section(self, section: SectionResult) -> None:
        name = f"Section {section.name}" if len(self.analysis.sections) > 1 else self.analysis.drawing.file
        self._open_page(name)
        y = self._head(section)
        foot = self._foot(section)
        table = self._table_height(section)
        lines = self._evidence_lines(section)
        findings = self._finding_lines(section)
        room = y - foot - table - LOWEST_FIGURE - 24.0
        shown = max(0, min(len(findings), int(room / LEADING) - 2))
        if shown < len(findings):
            shown = max(0, shown - 1)
        block = LEADING * (1.6 + max(len(lines), shown + (shown < len(findings)), 1))
        figure = y - foot - table - block - 16.0
        figure = min(figure, 0.78 * (self.right - self.left))
        y = self._pictures(section, y - 6.0, figure)
        y = self._table(section, y - 6.0)
        self._evidence(lines, findings, shown, y - 6.0)
        self.canvas.showPage()
        rest = findings[shown:]
        while rest:
            rest = self._continued(section, rest)
        if section.connected.solution is not None:
            self._torsion_page(section, section.connected.solution)

    def _torsion_page(self, section: SectionResult, solution: TorsionSolution) -> None:
        """The second page: the warping along the outline, and what torsion and shear give, with errors."""
        self._open_page("Torsion and shear", level=1)
        y = self._head(section)
        foot = self._foot(section)
        rows = torsion_rows(section, solution, self.symbols)
        notes = [line for text in torsion_notes(section, solution) for line in self._wrapped_note(text)]
        width = self.right - self.left
        table = LEADING * len(rows) + 26.0
        below = LEADING * len(notes) + 8.0
        height = min(y - foot - table - below - 22.0, 0.9 * width)
        top = y - 6.0
        self._frame(self.left, top, width, height)
        self.pen.text(self.left + 6.0, top - 12.0, "Warping ω about the shear centre, along the outline", BODY, BOLD)
        picture = warping_picture(section, solution, width, height - 14.0)
        draw(picture, self.pen, complex(self.left, top - height))
        y = self._heading("Torsion, warping and shear", self.left, self.right, top - height - 6.0)
        for symbol, name, value, unit, error in rows:
            self.pen.symbol(self.left, y, symbol, BODY)
            self.pen.text(self.left + 42.0, y, name, BODY)
            self.pen.text(self.left + 0.74 * width - text_width(value, BODY, BOLD), y, value, BODY, BOLD)
            self.pen.text(self.left + 0.74 * width + 3.0, y, unit, BODY)
            self.pen.text(self.right - text_width(error, SMALL), y, error, SMALL, colour=MUTED)
            self._rule(self.left, self.right, y - 2.9, 0.25, LIGHT)
            y -= LEADING
        y -= 4.0
        for line in notes:
            self.pen.sentence(self.left, y, line, SMALL)
            y -= LEADING
        self.canvas.showPage()

    def _wrapped_note(self, text: str) -> list[str]:
        return wrapped(text, SMALL, self.right - self.left)

    def _open_page(self, title: str, level: int = 0) -> None:
        self.number += 1
        mark = f"page{self.number}"
        self.canvas.bookmarkPage(mark)
        self.canvas.addOutlineEntry(title, mark, level=level)

    def _continued(self, section: SectionResult, rest: list[tuple[str, str, bool]]) -> list[tuple[str, str, bool]]:
        self._open_page("Findings, continued", level=1)
        y = self._head(section)
        foot = self._foot(section)
        y = self._heading("Findings, continued", self.left, self.right, y - 10.0)
        room = int((y - foot - 8.0) / LEADING)
        for column in range(2):
            x, at = self.left + column * (self._evidence_width() + 16.0), y
            for mark_text, line, strong in rest[column * room : (column + 1) * room]:
                self._finding_line(mark_text, line, strong, x, at)
                at -= LEADING
        self.canvas.showPage()
        return rest[2 * room :]

    # ------------------------------------------------------------------ head and foot
    def _head(self, section: SectionResult) -> float:
        """Draw the head and return the y below it."""
        pen, top = self.pen, self.height - TOP
        title = self.head.title or ""
        self._rule(self.left, self.right, top, RULE)
        right_text = "Section properties"
        pen.text(self.right - text_width(right_text, 11.0, BOLD), top - 17.0, right_text, 11.0, BOLD)
        where = f"section {section.name} of {len(self.analysis.outline.regions)}"
        if len(self.analysis.outline.regions) > 1:
            pen.text(self.right - text_width(where, SMALL), top - 26.0, where, SMALL, colour=MUTED)
        self._field("Title", title, self.left, top, self.right - self.left - 125.0, size=11.0)
        y = top - 31.0
        self._rule(self.left, self.right, y, HAIR)
        cells = [
            ("Reference", self.head.reference, 0.26),
            ("Prepared by", self.head.prepared, 0.24),
            ("Date", self.head.date, 0.14),
            ("Checked by, date", "", 0.18),
            ("Signature", "", 0.18),
        ]
        self._cells(cells, y, 27.0)
        y -= 27.0
        self._rule(self.left, self.right, y, HAIR)
        fields = header_fields(self.analysis)
        sha = fields.pop("SHA-256")
        shares = (0.25, 0.17, 0.21, 0.17, 0.11, 0.09)
        self._cells(
            [(k.capitalize() if k[0].islower() else k, v, s) for (k, v), s in zip(fields.items(), shares, strict=True)],
            y,
            23.0,
        )
        y -= 23.0
        self._rule(self.left, self.right, y, HAIR)
        x = pen.text(self.left + 3.0, y - 8.2, "SHA-256 of the drawing ", SMALL, colour=MUTED)
        pen.text(x + 2.0, y - 8.2, sha, SMALL)
        y -= 12.0
        self._rule(self.left, self.right, y, RULE)
        return y

    def _cells(self, cells: list[tuple[str, str, float]], y: float, height: float) -> None:
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

    def _foot(self, section: SectionResult) -> float:
        """Draw conventions, caution and page number; return the y above them."""
        pen, width = self.pen, self.right - self.left
        lines: list[tuple[str, str]] = []
        for sentence in conventions(*AXES[self.symbols]):
            lines += [(line, REGULAR) for line in wrapped(sentence, SMALL, width)]
        lines += [(line, BOLD) for line in wrapped(CAUTION, SMALL, width, BOLD)]
        y = BOTTOM + 9.0
        pen.text(self.left, BOTTOM, f"edgetally {__version__}", SMALL, colour=MUTED)
        page = f"page {self.number} of {self.total}"
        pen.text(self.right - text_width(page, SMALL), BOTTOM, page, SMALL, colour=MUTED)
        self._rule(self.left, self.right, y, HAIR)
        y += 4.0
        for line, font in reversed(lines):
            pen.sentence(self.left, y, line, SMALL, font)
            y += 8.0
        self._rule(self.left, self.right, y + 1.0, HAIR)
        return y + 1.0

    # ------------------------------------------------------------------ body
    def _pictures(self, section: SectionResult, top: float, height: float) -> float:
        width = self.right - self.left
        left_width = 0.635 * width
        right_x = self.left + left_width + 8.0
        right_width = self.right - right_x
        self._frame(self.left, top, left_width, height)
        draw(section_picture(section, left_width, height, self.symbols), self.pen, complex(self.left, top - height))
        caption = self._mohr_caption(section)
        self._frame(right_x, top, right_width, height)
        self.pen.text(right_x + 6.0, top - 12.0, "Mohr's circle of the second moments", BODY, BOLD)
        foot = LEADING * len(caption) + 8.0
        picture = mohr_picture(section, right_width, height - foot - 16.0, self.symbols)
        draw(picture, self.pen, complex(right_x, top - height + foot))
        y = top - height + foot - 4.0
        for symbol, text in caption:
            x = self.pen.symbol(right_x + 6.0, y, symbol, BODY) if symbol else right_x + 6.0
            self.pen.text(x, y, fitted(text, BODY, self.right - x - 4.0), BODY)
            y -= LEADING
        return top - height

    def _mohr_caption(self, section: SectionResult) -> list[tuple[str, str]]:
        props, letters = section.properties, AXES[self.symbols]
        caption = [
            (symbol_of(key, self.symbols), f" = {self._value(section, props[key])} {props[key].unit.pretty}")
            for key in ("principal_moment_1", "principal_moment_2")
        ]
        if section.result.axes.arbitrary:
            return [*caption, ("", "every axis through C is principal")]
        theta = props["principal_angle"].value or 0.0
        caption.append(("", f"2θ = {2 * theta:.4f}° from X to the point of axis {letters.first}".replace("-", "−")))
        caption.append(("", "the same sense as θ in the figure" if theta else "the axes are principal as drawn"))
        return caption

    def _rows(self, section: SectionResult) -> list[Property]:
        return [section.properties[key] for key in KEYS if key in section.properties]

    def _table_height(self, section: SectionResult) -> float:
        return LEADING * ((len(self._rows(section)) + 1) // 2) + 22.0

    def _table(self, section: SectionResult, top: float) -> float:
        rows = self._rows(section)
        half = (len(rows) + 1) // 2
        gutter = 16.0
        width = 0.5 * (self.right - self.left - gutter)
        y0 = self._heading(self._table_title(rows), self.left, self.right, top)
        for column in range(2):
            x, y = self.left + column * (width + gutter), y0
            for prop in rows[column * half : (column + 1) * half]:
                self.pen.symbol(x, y, symbol_of(prop.key, self.symbols), BODY)
                self.pen.text(x + 42.0, y, described(prop.key, self.symbols, self.analysis), BODY)
                value = self._value(section, prop)
                self.pen.text(x + width - 25.0 - text_width(value, BODY, BOLD), y, value, BODY, BOLD)
                self.pen.text(x + width - 22.0, y, prop.unit.pretty, BODY)
                self._rule(x, x + width, y - 2.9, 0.25, LIGHT)
                y -= LEADING
        return y0 - LEADING * half

    def _value(self, section: SectionResult, prop: Property) -> str:
        return in_print(value_text(prop, section.natural_scale(prop.key)))

    def _table_title(self, rows: list[Property]) -> str:
        """The heading of the table, with what no relative error of the rows exceeds."""
        groups = [[p.error or 0.0 for p in rows if (p.key in CONNECTED) == solved] for solved in (False, True)]
        exact, solved = (_power_above(max(errors, default=0.0)) for errors in groups)
        return f"Properties (relative error below {exact}; of torsion, warping and shear below {solved})"

    def _evidence_lines(self, section: SectionResult) -> list[tuple[str, str]]:
        return [
            (name if k == 0 else "", line)
            for name, text in evidence(self.analysis)
            for k, line in enumerate(wrapped(text, BODY, self._evidence_width() - 88.0))
        ]

    def _evidence_width(self) -> float:
        return 0.5 * (self.right - self.left) - 8.0

    def _finding_lines(self, section: SectionResult) -> list[tuple[str, str, bool]]:
        """Every finding, wrapped to the narrower column: (mark, line, is it a warning)."""
        findings: list[Finding] = [*section.findings, *self.analysis.findings]
        findings.sort(key=lambda f: (f.severity == "note", f.code == "gap-joined"))
        lines = []
        for finding in findings:
            strong = finding.severity != "note"
            text = f"{finding.code}: {finding.message}"
            for k, line in enumerate(wrapped(text, SMALL, self._evidence_width() - 10.0, BOLD if strong else REGULAR)):
                lines.append((MARKS[finding.severity] if k == 0 else "", line, strong))
        return lines

    def _evidence(
        self, lines: list[tuple[str, str]], findings: list[tuple[str, str, bool]], shown: int, top: float
    ) -> None:
        width = self._evidence_width()
        y = self._heading("How the outline was read", self.left, self.left + width, top)
        for name, text in lines:
            self.pen.text(self.left, y, name, SMALL, colour=MUTED)
            self.pen.text(self.left + 88.0, y, text, BODY)
            y -= LEADING
        x = self.left + width + 16.0
        y = self._heading("Findings", x, self.right, top)
        for mark, line, strong in findings[:shown]:
            self._finding_line(mark, line, strong, x, y)
            y -= LEADING
        if shown < len(findings):
            more = sum(1 for mark, _, _ in findings[shown:] if mark)
            self.pen.text(x, y, f"{more} more on the next page" if shown else f"{more} on the next page", SMALL, BOLD)
        if not findings:
            self.pen.text(x, y, "none", BODY)

    def _finding_line(self, mark: str, line: str, strong: bool, x: float, y: float) -> None:
        font, colour = (BOLD, ACCENT) if strong else (REGULAR, INK)
        self.pen.text(x, y, mark, SMALL, font, colour)
        self.pen.text(x + 9.0, y, line, SMALL, font, INK)

    # ------------------------------------------------------------------ strokes
    def _heading(self, text: str, x0: float, x1: float, y: float) -> float:
        self.pen.text(x0, y - 8.0, text, 8.4, BOLD)
        self._rule(x0, x1, y - 11.0, 0.6)
        return y - 20.0

    def _rule(self, x0: float, x1: float, y: float, width: float, colour: Colour = INK) -> None:
        self.canvas.setLineWidth(width)
        self.canvas.setStrokeColorRGB(*colour)
        self.canvas.line(x0, y, x1, y)

    def _frame(self, x: float, top: float, width: float, height: float) -> None:
        self.canvas.setLineWidth(HAIR)
        self.canvas.setStrokeColorRGB(*MUTED)
        self.canvas.rect(x, top - height, width, height, stroke=1, fill=0)


def _power_above(value: float) -> str:
    """Write the power of ten that is not below `value`, or a rounding's worth where there is no error at all."""
    return in_print(f"1e{ceil(log10(value)) if value > 0 else -15}").removeprefix("1 × ")
