"""The first page of a section: figure, Mohr's circle, table of properties, how the outline was read, findings."""

from __future__ import annotations

from math import ceil, log10
from typing import TYPE_CHECKING

from edgetally.output.figure import section_picture
from edgetally.output.mohr import mohr_picture
from edgetally.output.numbers import value_text
from edgetally.output.pages import BODY, LEADING, LIGHT, SMALL, Pages
from edgetally.output.paper import BOLD, REGULAR, fitted, text_width, wrapped
from edgetally.output.pens import ACCENT, INK, MUTED
from edgetally.output.symbols import AXES, KEYS, SymbolSet, symbol_of
from edgetally.output.words import described, evidence, in_print
from edgetally.section.connected import KEYS as CONNECTED
from edgetally.section.record import Property

if TYPE_CHECKING:
    from edgetally.findings import Finding
    from edgetally.results import Analysis, SectionResult

LOWEST_FIGURE = 262.0
"""A figure lower than this [pt] is no use; findings go to the next page instead."""
MARKS = {"note": "–", "warning": "!", "error": "✕"}


class MainPage:
    """Sets the first page of one section; `elsewhere` are the keys that another page of the sheet shows."""

    def __init__(
        self, pages: Pages, analysis: Analysis, section: SectionResult, symbols: SymbolSet, elsewhere: frozenset[str]
    ) -> None:
        self.pages, self.pen = pages, pages.pen
        self.left, self.right = pages.left, pages.right
        self.analysis, self.section, self.symbols = analysis, section, symbols
        self.rows = [section.properties[key] for key in KEYS if key in section.properties and key not in elsewhere]

    def write(self, bookmark: str, where: str) -> None:
        """Set the page, and further ones where the findings do not fit on it."""
        y = self.pages.open(bookmark, where=where)
        table = self._table_height()
        lines = self._evidence_lines()
        findings = self._finding_lines()
        above = y - self.pages.floor - table
        room = above - LOWEST_FIGURE - 24.0
        shown = max(0, min(len(findings), int(room / LEADING) - 2))
        if shown < len(findings):
            shown = max(0, shown - 1)
        block = LEADING * (1.6 + max(len(lines), shown + (shown < len(findings)), 1))
        figure = min(above - block - 16.0, 0.78 * (self.right - self.left))
        y = self._pictures(y - 6.0, figure)
        y = self._table(y - 6.0)
        self._evidence(lines, findings, shown, y - 6.0)
        rest = findings[shown:]
        while rest:
            rest = self._continued(rest, where)

    def _continued(self, rest: list[tuple[str, str, bool]], where: str) -> list[tuple[str, str, bool]]:
        y = self.pages.open("Findings, continued", where=where, level=1)
        y = self.pages.heading("Findings, continued", self.left, self.right, y - 10.0)
        room = int((y - self.pages.floor - 8.0) / LEADING)
        for column in range(2):
            x, at = self.left + column * (self._evidence_width() + 16.0), y
            for mark_text, line, strong in rest[column * room : (column + 1) * room]:
                self._finding_line(mark_text, line, strong, x, at)
                at -= LEADING
        return rest[2 * room :]

    def _pictures(self, top: float, height: float) -> float:
        width = self.right - self.left
        left_width = 0.635 * width
        right_x = self.left + left_width + 8.0
        right_width = self.right - right_x
        self.pages.frame(self.left, top, left_width, height)
        self.pages.picture(section_picture(self.section, left_width, height, self.symbols), self.left, top - height)
        caption = self._mohr_caption()
        self.pages.frame(right_x, top, right_width, height, "Mohr's circle of the second moments")
        foot = LEADING * len(caption) + 8.0
        picture = mohr_picture(self.section, right_width, height - foot - 16.0, self.symbols)
        self.pages.picture(picture, right_x, top - height + foot)
        y = top - height + foot - 4.0
        for symbol, text in caption:
            x = self.pen.symbol(right_x + 6.0, y, symbol, BODY) if symbol else right_x + 6.0
            self.pen.text(x, y, fitted(text, BODY, self.right - x - 4.0), BODY)
            y -= LEADING
        return top - height

    def _mohr_caption(self) -> list[tuple[str, str]]:
        props, letters = self.section.properties, AXES[self.symbols]
        caption = [
            (symbol_of(key, self.symbols), f" = {self._value(props[key])} {props[key].unit.pretty}")
            for key in ("principal_moment_1", "principal_moment_2")
        ]
        if self.section.result.axes.arbitrary:
            return [*caption, ("", "every axis through C is principal")]
        theta = props["principal_angle"].value or 0.0
        caption.append(("", f"2θ = {2 * theta:.4f}° from X to the point of axis {letters.first}".replace("-", "−")))
        caption.append(("", "the same sense as θ in the figure" if theta else "the axes are principal as drawn"))
        return caption

    def _table_height(self) -> float:
        return LEADING * ((len(self.rows) + 1) // 2) + 22.0

    def _table(self, top: float) -> float:
        rows = self.rows
        half = (len(rows) + 1) // 2
        gutter = 16.0
        width = 0.5 * (self.right - self.left - gutter)
        y0 = self.pages.heading(self._table_title(rows), self.left, self.right, top)
        for column in range(2):
            x, y = self.left + column * (width + gutter), y0
            for prop in rows[column * half : (column + 1) * half]:
                self.pen.symbol(x, y, symbol_of(prop.key, self.symbols), BODY)
                self.pen.text(x + 42.0, y, described(prop.key, self.symbols, self.analysis), BODY)
                value = self._value(prop)
                self.pen.text(x + width - 25.0 - text_width(value, BODY, BOLD), y, value, BODY, BOLD)
                self.pen.text(x + width - 22.0, y, prop.unit.pretty, BODY)
                self.pages.rule(x, x + width, y - 2.9, 0.25, LIGHT)
                y -= LEADING
        return y0 - LEADING * half

    def _value(self, prop: Property) -> str:
        return in_print(value_text(prop, self.section.natural_scale(prop.key)))

    def _table_title(self, rows: list[Property]) -> str:
        """The heading of the table, with what no relative error of the rows exceeds."""
        groups = [[p.error or 0.0 for p in rows if (p.key in CONNECTED) == solved] for solved in (False, True)]
        exact, solved = (_power_above(max(errors, default=0.0)) for errors in groups)
        return f"Properties (relative error below {exact}; of torsion, warping and shear below {solved})"

    def _evidence_lines(self) -> list[tuple[str, str]]:
        return [
            (name if k == 0 else "", line)
            for name, text in evidence(self.analysis)
            for k, line in enumerate(wrapped(text, BODY, self._evidence_width() - 88.0))
        ]

    def _evidence_width(self) -> float:
        return 0.5 * (self.right - self.left) - 8.0

    def _finding_lines(self) -> list[tuple[str, str, bool]]:
        """Every finding, wrapped to the narrower column: (mark, line, is it a warning)."""
        findings: list[Finding] = [*self.section.findings, *self.analysis.findings]
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
        y = self.pages.heading("How the outline was read", self.left, self.left + width, top)
        for name, text in lines:
            self.pen.text(self.left, y, name, SMALL, colour=MUTED)
            self.pen.text(self.left + 88.0, y, text, BODY)
            y -= LEADING
        x = self.left + width + 16.0
        y = self.pages.heading("Findings", x, self.right, top)
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


def _power_above(value: float) -> str:
    """Write the power of ten that is not below `value`, or a rounding's worth where there is no error at all."""
    return in_print(f"1e{ceil(log10(value)) if value > 0 else -15}").removeprefix("1 × ")
