"""A titled table, told once for terminal, sheet and workbook."""

from __future__ import annotations

from dataclasses import dataclass
from textwrap import wrap

from edgetally.output.numbers import number_text


@dataclass(frozen=True, slots=True)
class Figure:
    """A number in a cell: in full for a workbook, as text for print; None where it cannot be given."""

    value: float | None
    text: str

    @classmethod
    def of(cls, value: float | None, digits: int = 6) -> Figure:
        """Write a value to so many significant digits."""
        return cls(value, "–" if value is None else number_text(value, digits))


Cell = str | Figure


@dataclass(frozen=True, slots=True)
class Block:
    """A table: title, heads of the columns (none where the cells explain themselves), rows, and notes below it.

    In a text cell that begins with a symbol, `_` starts the subscript, as in `output.symbols`.
    """

    title: str
    columns: tuple[str, ...]
    rows: tuple[tuple[Cell, ...], ...]
    notes: tuple[str, ...] = ()
    symbols_first: bool = False
    """Whether the first column holds symbols."""


def block_lines(block: Block) -> list[str]:
    """Return a block as lines for the terminal: texts to the left, numbers with their points under each other."""
    rows = [*([block.columns] if block.columns else []), *block.rows]
    count = max((len(row) for row in rows), default=0)
    lines = [block.title]
    columns = [_aligned([row[k] if k < len(row) else "" for row in rows], bool(block.columns)) for k in range(count)]
    lines += ["  " + "  ".join(cells).rstrip() for cells in zip(*columns, strict=True)]
    notes = [wrap(note, 98, initial_indent="  ", subsequent_indent="  ") for note in block.notes]
    return [*lines, *(line for note in notes for line in note)]


def _aligned(cells: list[Cell], headed: bool) -> list[str]:
    texts = [cell if isinstance(cell, str) else cell.text for cell in cells]
    numbers = [isinstance(cell, Figure) for cell in cells]
    before = max((len(whole_part(t)) for t, n in zip(texts, numbers, strict=True) if n), default=0)
    texts = [t.rjust(before + len(t) - len(whole_part(t))) if n else t for t, n in zip(texts, numbers, strict=True)]
    width = max(map(len, texts))
    head = texts[0].rjust(width) if headed and any(numbers) else texts[0].ljust(width)
    return [head, *(t.ljust(width) for t in texts[1:])]


def whole_part(number: str) -> str:
    """The part of a number before its decimal point or exponent."""
    for k, c in enumerate(number):
        if c in ".e":
            return number[:k]
    return number
