"""Sets blocks in type: columns at their natural widths, two narrow blocks side by side, long ones over pages."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from edgetally.output.blocks import Block, Cell, Figure
from edgetally.output.pages import BODY, LEADING, LIGHT, SMALL, Pages
from edgetally.output.paper import BOLD, REGULAR, printable, symbol_width, text_width, wrapped
from edgetally.output.pens import MUTED
from edgetally.output.words import in_print

GUTTER = 16.0
"""Between two blocks side by side."""
GAP = 10.0
"""Between two columns."""
HEAD = 22.0
"""What the heading of a block takes."""
LEAST = 4
"""Fewer rows than these do not begin at the foot of a page."""


@dataclass(frozen=True, slots=True)
class _Set:
    """A block with the width [pt] of each of its columns, and its texts broken to them."""

    block: Block
    widths: tuple[float, ...]
    rows: tuple[tuple[list[str], ...], ...]
    heads: tuple[list[str], ...]
    notes: tuple[str, ...]

    @property
    def width(self) -> float:
        return sum(self.widths) + GAP * (len(self.widths) - 1)

    def row_height(self, k: int) -> float:
        return LEADING * max((len(lines) for lines in self.rows[k]), default=1)

    @property
    def head_height(self) -> float:
        return (LEADING - 1.0) * max((len(lines) for lines in self.heads), default=0)

    @property
    def height(self) -> float:
        rows = sum(self.row_height(k) for k in range(len(self.rows)))
        return HEAD + self.head_height + rows + LEADING * len(self.notes) + (6.0 if self.notes else 0.0)


def set_blocks(pages: Pages, blocks: Sequence[Block], y: float) -> float:
    """Set blocks one below the other from y down, going on to further pages; return the y below the last."""
    width = pages.right - pages.left
    half = 0.5 * (width - GUTTER)
    waiting = [block for block in blocks if block.rows or block.notes]
    while waiting:
        if pair := _pair(waiting, half):
            height = max(s.height for s in pair)
            if y - height < pages.floor:
                y = pages.go_on() - 6.0
            for number, one in enumerate(pair):
                _set_rows(pages, one, pages.left + number * (half + GUTTER), half, y, 0, len(one.rows))
            y -= height + 8.0
            waiting = waiting[2:]
        else:
            y = _flow(pages, _fitted(waiting.pop(0), width), y) - 8.0
    return y


def block_height(blocks: Sequence[Block], width: float) -> float:
    """Return what the blocks take, set on one page of a width [pt]."""
    half, height = 0.5 * (width - GUTTER), 0.0
    waiting = [block for block in blocks if block.rows or block.notes]
    while waiting:
        pair = _pair(waiting, half)
        height += (max(s.height for s in pair) if pair else _fitted(waiting[0], width).height) + 8.0
        waiting = waiting[2:] if pair else waiting[1:]
    return height


def _pair(blocks: Sequence[Block], half: float) -> list[_Set]:
    """Return the first two blocks as they stand side by side, nothing if they are too wide or too unlike in height."""
    if len(blocks) < 2 or any(_natural(block) > half for block in blocks[:2]):
        return []
    pair = [_fitted(block, half) for block in blocks[:2]]
    low, high = sorted(s.height for s in pair)
    return pair if high <= 2.0 * low + 4 * LEADING else []


def _flow(pages: Pages, one: _Set, y: float) -> float:
    """Set one block over the whole width, broken between rows where the page ends."""
    start, fresh = 0, False
    while True:
        room = y - pages.floor - HEAD - one.head_height
        stop, used = start, 0.0
        while stop < len(one.rows) and used + one.row_height(stop) <= room:
            used += one.row_height(stop)
            stop += 1
        if fresh and stop == start:  # what is taller than a page is set all the same
            used += one.row_height(stop) if stop < len(one.rows) else 0.0
            stop = min(stop + 1, len(one.rows))
        notes_fit = used + LEADING * len(one.notes) + 4.0 <= room
        if stop == len(one.rows) and (notes_fit or fresh):
            return _set_rows(pages, one, pages.left, one.width, y, start, stop)
        if fresh or stop - start >= LEAST:
            _set_rows(pages, one, pages.left, one.width, y, start, stop, last=False)
            start = stop
        y, fresh = pages.go_on() - 6.0, True


def _set_rows(
    pages: Pages, one: _Set, x: float, width: float, y: float, start: int, stop: int, *, last: bool = True
) -> float:
    pen, block = pages.pen, one.block
    title = f"{block.title}, continued" if start else block.title
    y = pages.heading(title, x, x + max(width, one.width), y)
    if block.columns:
        for k, (left, lines) in enumerate(zip(_lefts(one, x), one.heads, strict=True)):
            for n, line in enumerate(lines):
                at = left + one.widths[k] - text_width(line, SMALL) if _numeric(block, k) else left
                pen.text(at, y + 1.0 - n * (LEADING - 1.0), line, SMALL, colour=MUTED)
        y -= one.head_height
    for number in range(start, stop):
        cells = block.rows[number]
        for k, (left, lines) in enumerate(zip(_lefts(one, x), one.rows[number], strict=False)):
            for n, line in enumerate(lines):
                at = y - n * LEADING
                if isinstance(cells[k], Figure):
                    pen.text(left + one.widths[k] - text_width(line, BODY, BOLD), at, line, BODY, BOLD)
                elif k == 0 and block.symbols_first:
                    pen.symbol(left, at, line, BODY)
                else:
                    pen.sentence(left, at, line, BODY)
        y -= one.row_height(number)
        pages.rule(x, x + one.width, y + LEADING - 2.9, 0.25, LIGHT)
    if last and one.notes:
        y -= 3.0
        for line in one.notes:
            pen.sentence(x, y, line, SMALL)
            y -= LEADING
    return y + LEADING - 4.0


def _lefts(one: _Set, x: float) -> list[float]:
    lefts = [x]
    for width in one.widths[:-1]:
        lefts.append(lefts[-1] + width + GAP)
    return lefts


def _numeric(block: Block, column: int) -> bool:
    return any(len(row) > column and isinstance(row[column], Figure) for row in block.rows)


def _text(cell: Cell) -> str:
    return in_print(cell.text) if isinstance(cell, Figure) else printable(cell)


def _cell_width(block: Block, column: int, cell: Cell) -> float:
    if isinstance(cell, Figure):
        return text_width(_text(cell), BODY, BOLD)
    if column == 0 and block.symbols_first:
        return symbol_width(_text(cell), BODY)
    return text_width(_text(cell), BODY)


def _natural_widths(block: Block) -> list[float]:
    count = max(len(row) for row in (*block.rows, block.columns))
    widths = [0.0] * count
    for row in block.rows:
        for k, cell in enumerate(row):
            widths[k] = max(widths[k], _cell_width(block, k, cell))
    for k, head in enumerate(block.columns):
        widths[k] = max(widths[k], text_width(printable(head), SMALL))
    return widths


def _natural(block: Block) -> float:
    widths = _natural_widths(block)
    return sum(widths) + GAP * (len(widths) - 1)


def _fitted(block: Block, width: float) -> _Set:
    """Break the widest columns of words until the block is no wider than `width`."""
    widths = _natural_widths(block)
    room = width - GAP * (len(widths) - 1)
    wordy = [k for k in range(len(widths)) if not _numeric(block, k) and not (k == 0 and block.symbols_first)]
    while sum(widths) > room + 1e-6 and wordy:
        widest = max(wordy, key=lambda k: widths[k])
        second = max((widths[k] for k in wordy if k != widest and widths[k] < widths[widest] - 1e-9), default=40.0)
        least = max(second, widths[widest] - (sum(widths) - room), 40.0)
        if least >= widths[widest] - 1e-9:
            break
        widths[widest] = least
    rows = tuple(tuple(_lines(block, k, cell, widths[k]) for k, cell in enumerate(row)) for row in block.rows)
    heads = tuple(wrapped(head, SMALL, widths[k] + 0.01) for k, head in enumerate(block.columns))
    notes = tuple(line for note in block.notes for line in wrapped(note, SMALL, width, REGULAR))
    return _Set(block, tuple(widths), rows, heads, notes)


def _lines(block: Block, column: int, cell: Cell, width: float) -> list[str]:
    if isinstance(cell, Figure) or (column == 0 and block.symbols_first):
        return [_text(cell)]
    return wrapped(cell, BODY, width + 0.01)
