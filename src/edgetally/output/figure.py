"""The picture of a section: outline, centroid, both pairs of axes, extreme fibres, scale bar.

Labels of axes stand in a margin that the section never reaches, each on the side of its axis that is away from the
nearest other one, so that nothing overlaps whatever the section's proportions.
"""

from __future__ import annotations

from cmath import rect
from collections.abc import Iterable
from math import degrees, floor, log10, pi
from typing import TYPE_CHECKING

from edgetally.curves import Arc, Curve, Line
from edgetally.output.axes import AxesOnPaper
from edgetally.output.pens import (
    HOLLOW_MARK,
    MUTED,
    OPEN_MARK,
    SOLID_MARK,
    THIN,
    Item,
    Label,
    Path,
    Picture,
    Style,
    disc,
    polygon,
    stroke,
)
from edgetally.output.placing import Placing
from edgetally.output.symbols import AXES, SymbolSet
from edgetally.units import length_factor

if TYPE_CHECKING:
    from edgetally.results import SectionResult

SAME_CENTRE = 1e-3
"""A shear centre nearer to the centroid than this share of the section's size is not marked: it would cover it."""
SAME_FIBRE = 2.0
"""Where the principal axes are turned by less than this [degrees], their extreme fibres are not marked twice."""


def section_picture(section: SectionResult, width: float, height: float, symbols: SymbolSet = "plain") -> Picture:
    """Tell the picture of a section on `width` × `height` points."""
    return _Figure(section, width, height, symbols).picture()


class _Figure:
    def __init__(self, section: SectionResult, width: float, height: float, symbols: SymbolSet) -> None:
        self.section = section
        self.width, self.height = width, height
        self.letters = AXES[symbols]
        self.theta = section.result.axes.angle.value
        self.arbitrary = section.result.axes.arbitrary
        self.shear_centre = _shear_centre(section)
        also = () if self.shear_centre is None else (self.shear_centre,)
        self.placing = Placing.of(section.section, width, height, also=also)
        self.paper = self.placing.paper
        self.centre = self.paper(section.result.centroid)

    def picture(self) -> Picture:
        items: list[Item] = [
            self.placing.material(),
            *AxesOnPaper(self.placing, self.centre, self.theta, self.arbitrary, self.letters).items(),
            *self._extreme_fibres(),
            *centroid_mark(self.centre),
            *(shear_centre_mark(self.paper(self.shear_centre)) if self.shear_centre is not None else ()),
            *self._scale_bar(),
            *self._key(),
        ]
        return Picture(self.width, self.height, tuple(items))

    # ------------------------------------------------------------------ marks
    def _extreme_fibres(self) -> Iterable[Item]:
        tips: list[complex] = []
        yield from self._fibre_marks((1.0, 1j, -1.0, -1j), SOLID_MARK, tips)
        off = abs(degrees(self.theta)) % 90.0
        if not self.arbitrary and SAME_FIBRE < off < 90.0 - SAME_FIBRE:
            turn = rect(1.0, self.theta)
            yield from self._fibre_marks((turn, 1j * turn, -turn, -1j * turn), HOLLOW_MARK, tips)

    def _fibre_marks(self, directions: Iterable[complex], style: Style, tips: list[complex]) -> Iterable[Item]:
        """Arrowheads that touch the outline from outside; one that meets another stands behind it."""
        size = 5.5
        for direction in directions:
            tip = self.paper(_extreme_point(self.section, direction)) + 1.2 * direction
            while any(abs(tip - other) < size for other in tips):
                tip += (size + 1.0) * direction
            tips.append(tip)
            base = tip + size * direction
            yield polygon([tip, base + 0.42j * size * direction, base - 0.42j * size * direction], style)

    # ------------------------------------------------------------------ strip
    def _scale_bar(self) -> Iterable[Item]:
        unit = self.section.out_unit
        per_unit = self.placing.points * length_factor(unit, self.section.section.unit)
        most = 120.0 / per_unit
        decade = 10.0 ** floor(log10(most))
        real = max(s * decade for s in (1.0, 2.0, 5.0) if s * decade <= most)
        left, y, length = 8.0, 9.0, real * per_unit
        yield polygon(
            [complex(left, y), complex(left + length / 2, y), complex(left + length / 2, y + 3), complex(left, y + 3)],
            SOLID_MARK,
        )
        yield polygon(
            [complex(left, y), complex(left + length, y), complex(left + length, y + 3), complex(left, y + 3)], THIN
        )
        text = f"{real:g} {unit}   scale {self.placing.scale}"
        yield Label(complex(left + length + 5.0, y - 1.2), text, 7.5)

    def _key(self) -> Iterable[Item]:
        """The key of the marks, above the scale bar."""
        x, y = 8.0, 23.0
        letters = self.letters
        entries = [("solid", f"extreme fibre {letters.x}, {letters.y}")]
        if not self.arbitrary:
            entries.append(("hollow", f"{letters.first}, {letters.second}"))
        entries.insert(0, ("centroid", "centroid"))
        if self.shear_centre is not None:
            entries.insert(1, ("shear", "shear centre"))
        for kind, text in entries:
            if kind == "centroid":
                yield from centroid_mark(complex(x + 4.0, y + 1.5), 2.8)
            elif kind == "shear":
                yield from shear_centre_mark(complex(x + 4.0, y + 1.5), 2.8)
            else:
                points = [complex(x + 4.0, y - 1.5), complex(x + 6.3, y + 4.0), complex(x + 1.7, y + 4.0)]
                yield polygon(points, HOLLOW_MARK if kind == "hollow" else SOLID_MARK)
            yield Label(complex(x + 10.0, y - 1.2), text, 7.0, colour=MUTED)
            x += 20.0 + 3.5 * len(text)  # about the width of so many letters


def centroid_mark(z: complex, radius: float = 3.2) -> Iterable[Item]:
    """The mark of a centre of gravity: a disc with two opposite quarters filled."""
    yield disc(z, radius, OPEN_MARK)
    for quarter in (0.0, pi):
        arc = Arc.from_centre(z, radius, quarter, pi / 2)
        yield Path(((arc, Line(arc.end, z), Line(z, arc.start)),), SOLID_MARK, closed=True)


def shear_centre_mark(z: complex, radius: float = 3.2) -> Iterable[Item]:
    """The mark of the shear centre: a ring with a diagonal cross."""
    yield disc(z, radius, OPEN_MARK)
    for turn in (pi / 4, 3 * pi / 4):
        arm = rect(1.5 * radius, turn)
        yield stroke(z - arm, z + arm, THIN)


def _shear_centre(section: SectionResult) -> complex | None:
    """Return the shear centre where it is known and is not the centroid."""
    solution = section.connected.solution
    if solution is None:
        return None
    apart = abs(solution.shear_centre - section.result.centroid)
    return solution.shear_centre if apart > SAME_CENTRE * section.section.size else None


def _extreme_point(section: SectionResult, direction: complex) -> complex:
    """Return where the outline reaches farthest in a direction: the middle of the flat there, if it is one."""
    packed = section.section.packed
    reach = packed.supports(direction)
    curves = [curve for loop in section.section.loops for curve in loop.curves]
    near = [k for k in range(len(curves)) if reach[k] >= reach.max() - 1e-9 * section.section.size]
    curve = curves[max(near, key=lambda k: _run_along(curves[k], direction))]
    flat = abs(((curve.end - curve.start) * direction.conjugate()).real) <= 1e-9 * section.section.size
    if flat and isinstance(curve, Line):
        return 0.5 * (curve.start + curve.end)
    return curve.point(curve.support(direction)[1])


def _run_along(curve: Curve, direction: complex) -> float:
    """How far a curve runs across a direction."""
    return abs(((curve.end - curve.start) * direction.conjugate()).imag)
