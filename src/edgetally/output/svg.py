"""The SVG pen, and the figure of a section as one SVG file."""

from __future__ import annotations

from typing import TYPE_CHECKING
from xml.sax.saxutils import escape

from edgetally.curves import Arc, Line
from edgetally.output.figure import section_picture
from edgetally.output.pens import Colour, Label, Path, Picture, Style, cubics, draw
from edgetally.output.symbols import SymbolSet

if TYPE_CHECKING:
    from edgetally.results import SectionResult

FONT = "DejaVu Sans Condensed, DejaVu Sans, sans-serif"
SUBSCRIPT = 0.72


class SvgPen:
    """Writes the items of a picture as SVG elements; SVG counts y downwards."""

    def __init__(self, height: float) -> None:
        self._height = height
        self.elements: list[str] = []

    def _xy(self, z: complex) -> str:
        return f"{z.real:.3f} {self._height - z.imag:.3f}"

    def path(self, path: Path, shift: complex) -> None:
        words: list[str] = []
        for run in path.runs:
            words.append(f"M{self._xy(run[0].start + shift)}")
            for curve in run:
                if isinstance(curve, Line):
                    words.append(f"L{self._xy(curve.end + shift)}")
                elif isinstance(curve, Arc):
                    halves = curve.split(0.5)  # an SVG arc cannot be a full circle
                    sweep = 0 if curve.sweep > 0 else 1
                    words += [f"A{h.radius:.4f} {h.radius:.4f} 0 0 {sweep} {self._xy(h.end + shift)}" for h in halves]
                else:
                    words += [f"C{' '.join(self._xy(z + shift) for z in piece)}" for piece in cubics(curve)]
            if path.closed:
                words.append("Z")
        self.elements.append(f'<path d="{" ".join(words)}"{_style(path.style)}/>')

    def label(self, label: Label, shift: complex) -> None:
        x, y = self._xy(label.at + shift).split()
        weight = ' font-weight="bold"' if label.bold else ""
        main, _, sub = label.text.partition("_") if label.symbol else (label.text, "", "")
        text = escape(main)
        if sub:
            size = SUBSCRIPT * label.size
            text += f'<tspan dy="{0.22 * label.size:.2f}" font-size="{size:.2f}">{escape(sub)}</tspan>'
        self.elements.append(
            f'<text x="{x}" y="{y}" font-size="{label.size:g}" text-anchor="{label.anchor}"{weight} '
            f'fill="{_hex(label.colour)}">{text}</text>'
        )


def _hex(colour: Colour) -> str:
    return "#" + "".join(f"{round(255 * part):02x}" for part in colour)


def _style(style: Style) -> str:
    fill = _hex(style.fill) if style.fill else "none"
    dash = f' stroke-dasharray="{" ".join(f"{d:g}" for d in style.dash)}"' if style.dash else ""
    stroke = f' stroke="{_hex(style.colour)}" stroke-width="{style.width:g}"' if style.width else ""
    return f' fill="{fill}" fill-rule="evenodd"{stroke}{dash} stroke-linejoin="round"'


def picture_svg(picture: Picture, title: str) -> str:
    """Write a picture as a complete SVG document, 1 user unit = 1 point."""
    pen = SvgPen(picture.height)
    draw(picture, pen)
    size = f"{picture.width:g} {picture.height:g}"
    return "\n".join([
        f'<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 {size}" width="{picture.width:g}pt" '
        f'height="{picture.height:g}pt" font-family="{FONT}">',
        f"<title>{escape(title)}</title>",
        f'<rect width="{picture.width:g}" height="{picture.height:g}" fill="#ffffff"/>',
        *pen.elements,
        "</svg>\n",
    ])  # fmt: skip


def figure_svg(
    section: SectionResult, symbols: SymbolSet = "plain", width: float = 420.0, height: float = 380.0
) -> str:
    """Write the figure of a section as SVG."""
    return picture_svg(section_picture(section, width, height, symbols), f"section {section.name}")
