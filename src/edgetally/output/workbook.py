"""The results as a workbook: properties at full precision, how the outline was read, findings, and further tables."""

from __future__ import annotations

import io
import re
import zipfile
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime
from itertools import count
from math import floor, isfinite, log10
from typing import TYPE_CHECKING, Any

from edgetally import __version__
from edgetally.errors import OutputError
from edgetally.output.blocks import Block, Figure
from edgetally.output.numbers import DIGITS
from edgetally.output.symbols import KEYS, SymbolSet, symbol_of
from edgetally.output.words import CAUTION, described, evidence, header_fields

if TYPE_CHECKING:
    from openpyxl.workbook import Workbook
    from openpyxl.worksheet.worksheet import Worksheet

    from edgetally.results import Analysis


WIDEST, NARROWEST = 70, 9
"""Widths of columns, in letters."""
LONGEST_TITLE, LONGEST_TEXT = 31, 32_767
"""What the file format allows the name of a sheet and a cell."""
WRITTEN = datetime(2000, 1, 1)
"""One date for every workbook, so that the same results give the same bytes."""
LEADING_SIGNS = ("=", "+", "-", "@", "\t", "\r")
"""A text that begins with one of these is marked as text, or a spreadsheet might take it for a formula when edited."""
_NOT_IN_TITLES = re.compile(r"[\[\]:*?/\\\x00-\x1f]")
_NOT_IN_XML = re.compile("[\x00-\x08\x0b\x0c\x0e-\x1f\ufffe\uffff\ud800-\udfff]")


@dataclass(frozen=True, slots=True)
class _Bound:
    """A bound of an error, of which one digit is shown."""

    value: float | None


Content = str | Figure | _Bound | float | None


def check_installed() -> None:
    """Refuse, before any work, where the library that writes workbooks is missing. Raises OutputError."""
    try:
        import openpyxl  # noqa: F401
    except ImportError:
        raise OutputError(
            "a workbook needs the package openpyxl, which is not installed: pip install 'edgetally[xlsx]'"
        ) from None


def workbook_bytes(analyses: Sequence[Analysis], symbols: SymbolSet = "plain", blocks: Sequence[Block] = ()) -> bytes:
    """Return a workbook of the sheets Properties, Reading and Findings, and one for each of `blocks`.

    The same results give the same bytes, with the same version of openpyxl. Raises OutputError where that is missing.
    """
    check_installed()
    from openpyxl import Workbook

    book = Workbook()
    for sheet in book.worksheets:
        book.remove(sheet)
    _properties(_Sheet(book, "Properties"), analyses, symbols)
    _reading(_Sheet(book, "Reading"), analyses)
    _findings(_Sheet(book, "Findings"), analyses)
    for block in blocks:
        _block(_Sheet(book, block.title), block)
    book.properties.creator = f"edgetally {__version__}"
    book.properties.title = "Section properties"
    book.properties.created = WRITTEN
    buffer = io.BytesIO()
    book.save(buffer)
    return _undated(buffer.getvalue())


def _undated(data: bytes) -> bytes:
    """Return the same archive with the time of writing taken out."""
    buffer = io.BytesIO()
    with zipfile.ZipFile(io.BytesIO(data)) as old, zipfile.ZipFile(buffer, "w", zipfile.ZIP_DEFLATED) as new:
        for name in old.namelist():
            content = old.read(name)
            if name == "docProps/core.xml":
                stamp = WRITTEN.strftime("%Y-%m-%dT%H:%M:%SZ").encode()
                content = re.sub(rb"(<dcterms:modified[^>]*>)[^<]*", rb"\g<1>" + stamp, content)
            entry = zipfile.ZipInfo(name, (1980, 1, 1, 0, 0, 0))
            entry.compress_type = zipfile.ZIP_DEFLATED
            new.writestr(entry, content)
    return buffer.getvalue()


class _Sheet:
    """One sheet, filled row by row."""

    def __init__(self, book: Workbook, title: str) -> None:
        self._sheet: Worksheet = book.create_sheet(_title(title, {name.casefold() for name in book.sheetnames}))
        self._row = 0
        self._widths: dict[int, int] = {}

    def row(self, *contents: Content, bold: bool = False, apart: bool = False) -> None:
        """Write texts as texts, numbers at full precision, None as an empty cell.

        A row that stands `apart` from the table, as a title does, runs over the columns and does not widen them.
        """
        from openpyxl.styles import Alignment, Font

        self._row += 1
        for column, content in enumerate(contents, start=1):
            if content is None or content in ("", _Bound(None)):
                continue
            cell: Any = self._sheet.cell(self._row, column)
            number = content.value if isinstance(content, Figure | _Bound) else content
            if isinstance(number, int | float) and isfinite(number):
                # given as a number, openpyxl would write 16 digits of it, of which a double has 17
                cell.value, cell.data_type = repr(number), "n"
                cell.number_format = "0E+00" if isinstance(content, _Bound) else number_format(number)
                width = DIGITS + 5
            else:
                text = content.text if isinstance(content, Figure) else str(content)
                _write_text(cell, text)
                width = len(text)
            cell.font = Font(bold=bold)
            if not apart:
                self._widths[column] = max(self._widths.get(column, NARROWEST), width + 2)
                if width > WIDEST:
                    cell.alignment = Alignment(wrap_text=True, vertical="top")

    def freeze(self, columns: int) -> None:
        """Keep the rows so far, and so many columns, in sight."""
        from openpyxl.utils import get_column_letter

        self._sheet.freeze_panes = f"{get_column_letter(columns + 1)}{self._row + 1}"

    def fit(self) -> None:
        """Make each column as wide as what stands in it, within reason."""
        from openpyxl.utils import get_column_letter

        for column, width in self._widths.items():
            self._sheet.column_dimensions[get_column_letter(column)].width = min(width, WIDEST)


def _write_text(cell: Any, text: str) -> None:
    text = _NOT_IN_XML.sub("□", text)
    cell.value = text if len(text) <= LONGEST_TEXT else text[: LONGEST_TEXT - 1] + "…"
    # whatever it looks like: a formula, an error, a date
    cell.data_type = "s"
    if text.startswith(LEADING_SIGNS):
        cell.quotePrefix = True


def number_format(value: float) -> str:
    """Return the format that shows a number as it is printed elsewhere, to 7 significant digits; the cell holds all."""
    if value == 0:
        return "0"
    exponent = floor(log10(abs(value)))
    if -4 <= exponent < 10:
        decimals = max(0, DIGITS - 1 - exponent)
        return "0." + "0" * decimals if decimals else "0"
    return "0." + "0" * (DIGITS - 1) + "E+00"


def _title(text: str, taken: set[str]) -> str:
    """Return a name for a sheet that the format allows and that is not `taken`."""
    plain = _NOT_IN_TITLES.sub(" ", text).strip().strip("'") or "Table"
    for number in count(1):
        ending = f" {number}" if number > 1 else ""
        title = plain[: LONGEST_TITLE - len(ending)].rstrip() + ending
        if title.casefold() not in taken:
            return title
    raise AssertionError("a free name is always found")


def _properties(sheet: _Sheet, analyses: Sequence[Analysis], symbols: SymbolSet) -> None:
    """One row a property; of each section its value, unit and relative error."""
    sections = [(analysis, section) for analysis in analyses for section in analysis.sections]
    titles = [f"{analysis.drawing.file}, section {section.name}" for analysis, section in sections]
    sheet.row(None, None, None, *(cell for title in titles for cell in (title, None, None)), bold=True, apart=True)
    sheet.row("key", "name", "symbol", *(["value", "unit", "relative error"] * len(sections)), bold=True)
    sheet.freeze(3)
    for key in KEYS:
        found = [(analysis, section.properties.get(key)) for analysis, section in sections]
        names = dict.fromkeys(described(key, symbols, analysis) for analysis, prop in found if prop)
        cells: list[Content] = []
        for _, prop in found:
            cells += (
                [None, None, None] if prop is None else [Figure(prop.value, "–"), str(prop.unit), _Bound(prop.error)]
            )
        if names:
            sheet.row(key, "; ".join(names), symbol_of(key, symbols), *cells)
    sheet.row()
    sheet.row(CAUTION, apart=True)
    sheet.fit()


def _reading(sheet: _Sheet, analyses: Sequence[Analysis]) -> None:
    sheet.row("drawing", "what", "as read", bold=True)
    sheet.freeze(2)
    for analysis in analyses:
        for what, words in (*header_fields(analysis).items(), *evidence(analysis)):
            sheet.row(analysis.drawing.file, what, words)
    sheet.fit()


def _findings(sheet: _Sheet, analyses: Sequence[Analysis]) -> None:
    sheet.row("drawing", "section", "severity", "code", "message", "x", "y", "handles", bold=True)
    sheet.freeze(0)
    for analysis in analyses:
        of = [("", finding) for finding in analysis.findings]
        of += [(section.name, finding) for section in analysis.sections for finding in section.findings]
        for name, f in of:
            x, y = f.at or (None, None)
            sheet.row(analysis.drawing.file, name, f.severity, f.code, f.message, x, y, " ".join(f.handles))
    sheet.fit()


def _block(sheet: _Sheet, block: Block) -> None:
    sheet.row(block.title, bold=True, apart=True)
    if block.columns:
        sheet.row(*block.columns, bold=True)
    sheet.freeze(0)
    for row in block.rows:
        sheet.row(*row)
    sheet.row()
    for note in block.notes:
        sheet.row(note, apart=True)
    sheet.fit()
