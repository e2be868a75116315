"""The PDF pen and its fonts. With `sheet`, the only place that imports reportlab."""

from __future__ import annotations

import re
from functools import cache
from importlib.resources import files
from typing import Any

from reportlab.pdfbase import pdfmetrics
from reportlab.pdfbase.ttfonts import TTFont

from edgetally.curves import Line
from edgetally.output.pens import INK, Colour, Label, Path, cubics

REGULAR, BOLD = "EdgetallySans", "EdgetallySans-Bold"
SUBSCRIPT = 0.72
DROP = 0.22
_SYMBOL = re.compile(r"([A-Za-z]_\w+)")
SUBSTITUTE = "□"
"""Stands, visibly, for a character that the font has no glyph for."""


@cache
def register_fonts() -> None:
    """Make the two embedded fonts known to the PDF library: DejaVu Sans Condensed, under its free licence."""
    folder = files("edgetally.output") / "fonts"
    for name, file in ((REGULAR, "DejaVuSansCondensed.ttf"), (BOLD, "DejaVuSansCondensed-Bold.ttf")):
        pdfmetrics.registerFont(TTFont(name, str(folder / file)))


def printable(text: str, font: str = REGULAR) -> str:
    """Replace what the font cannot show by a visible substitute. Control characters would vanish without a trace."""
    glyphs = pdfmetrics.getFont(font).face.charToGlyph
    return "".join(c if ord(c) in glyphs and c.isprintable() else SUBSTITUTE for c in text)


def text_width(text: str, size: float, font: str = REGULAR) -> float:
    """Return the width of a text [pt]."""
    return float(pdfmetrics.stringWidth(text, font, size))


def wrapped(text: str, size: float, width: float, font: str = REGULAR) -> list[str]:
    """Break a text into lines not wider than `width` [pt]; a word that is too long alone is cut."""
    lines: list[str] = []
    for paragraph in text.split("\n"):
        line = ""
        for word in printable(paragraph, font).split(" "):
            trial = f"{line} {word}" if line else word
            while text_width(trial, size, font) > width:
                if line:
                    lines.append(line)
                    line, trial = "", word
                    continue
                cut = len(trial)
                while cut > 1 and text_width(trial[:cut], size, font) > width:
                    cut -= 1
                lines.append(trial[:cut])
                trial = trial[cut:]
            line = trial
        lines.append(line)
    return lines


def fitted(text: str, size: float, width: float, font: str = REGULAR) -> str:
    """Shorten a text to one line of `width` [pt], the cut marked by an ellipsis."""
    text = printable(text, font)
    if text_width(text, size, font) <= width:
        return text
    while text and text_width(text + "…", size, font) > width:
        text = text[:-1]
    return text + "…"


class PdfPen:
    """Draws the items of a picture on a PDF page; arcs become cubics, as PDF knows no others."""

    def __init__(self, canvas: Any) -> None:
        self._canvas = canvas

    def path(self, path: Path, shift: complex) -> None:
        canvas, style = self._canvas, path.style
        shape = canvas.beginPath()
        for run in path.runs:
            start = run[0].start + shift
            shape.moveTo(start.real, start.imag)
            for curve in run:
                if isinstance(curve, Line):
                    end = curve.end + shift
                    shape.lineTo(end.real, end.imag)
                    continue
                for piece in cubics(curve):
                    a, b, end = (z + shift for z in piece)
                    shape.curveTo(a.real, a.imag, b.real, b.imag, end.real, end.imag)
            if path.closed:
                shape.close()
        canvas.saveState()
        canvas.setLineJoin(1)
        canvas.setStrokeColorRGB(*style.colour)
        canvas.setLineWidth(style.width)
        canvas.setDash(list(style.dash))
        if style.fill:
            canvas.setFillColorRGB(*style.fill)
        canvas.drawPath(shape, stroke=int(style.width > 0), fill=int(style.fill is not None), fillMode=0)
        canvas.restoreState()

    def label(self, label: Label, shift: complex) -> None:
        font = BOLD if label.bold else REGULAR
        z = label.at + shift
        width = symbol_width(label.text, label.size, font) if label.symbol else text_width(label.text, label.size, font)
        x = z.real - {"start": 0.0, "middle": 0.5, "end": 1.0}[label.anchor] * width
        if label.symbol:
            self.symbol(x, z.imag, label.text, label.size, font, label.colour)
        else:
            self.text(x, z.imag, label.text, label.size, font, label.colour)

    def text(self, x: float, y: float, text: str, size: float, font: str = REGULAR, colour: Colour = INK) -> float:
        """Draw a text and return where it ends."""
        text = printable(text, font)
        self._canvas.setFillColorRGB(*colour)
        self._canvas.setFont(font, size)
        self._canvas.drawString(x, y, text)
        return x + text_width(text, size, font)

    def sentence(self, x: float, y: float, text: str, size: float, font: str = REGULAR) -> None:
        """Draw a line of text in which words as I_xy are symbols with a subscript."""
        for k, part in enumerate(_SYMBOL.split(text)):
            x = self.symbol(x, y, part, size, font) if k % 2 else self.text(x, y, part, size, font)

    def symbol(self, x: float, y: float, symbol: str, size: float, font: str = REGULAR, colour: Colour = INK) -> float:
        """Draw a symbol whose subscript follows `_`, and return where it ends."""
        main, _, sub = symbol.partition("_")
        x = self.text(x, y, main, size, font, colour)
        return self.text(x, y - DROP * size, sub, SUBSCRIPT * size, font, colour) if sub else x


def symbol_width(symbol: str, size: float, font: str = REGULAR) -> float:
    """Return the width of a symbol with its subscript [pt]."""
    main, _, sub = symbol.partition("_")
    return text_width(main, size, font) + text_width(sub, SUBSCRIPT * size, font)
