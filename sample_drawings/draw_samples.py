"""Draw the sample set: eight shop drawings and the schedule of values declared for their sections.

    python sample_drawings/draw_samples.py [OUTPUT_FOLDER]

The set belongs to an invented machine, the DG4 dipping gantry: a small travelling gantry that lowers a cradle of
yarn into a dye vat. Every name, number and value is made up for these files.

| drawing                  | part     | what it shows                                                | DXF           |
|--------------------------|----------|--------------------------------------------------------------|---------------|
| `welded-box-girder.dxf`  | DG4-101  | welded box with a rail bar, loose lines, one void            | R2010         |
| `rail-extrusion.dxf`     | DG4-204  | extrusion with an open T-slot and five voids                 | R2018         |
| `purlin-zed.dxf`         | DG4-310  | lipped zed, loose lines and arcs, out of order, with gaps    | R2000         |
| `corner-angle.dxf`       | DG4-315  | unequal angle, turned by 17 degrees, far from the origin     | R12           |
| `round-edged-bar.dxf`    | DG4-422  | flat bar with full-radius edges, inch                        | R2010         |
| `slotted-tube.dxf`       | DG4-431  | tube with a keyway, arcs, lines and a circle, inch           | R2018, binary |
| `two-clamps.dxf`         | DG4-207  | two plates on one drawing: a section number is needed        | R2010         |
| `bracket.dxf`            | DG4-215  | bracket with a bore, its principal axes turned               | R2010         |

Each section is on the layer OUTLINE; frame, title block, dimensions, centre lines, notes, labels and hatching are on
layers of their own. What is worth knowing before the files are used:

* `corner-angle.dxf` is an R12 file, and R12 has no `$INSUNITS`: its unit has to be given (`--units mm`).
* `purlin-zed.dxf` has its coordinates rounded to 0.001 mm, and four ends lie 0.002 to 0.004 mm off on top of that.
* In `two-clamps.dxf` section 1 is clamp A, the larger one, on the left; section 2 is clamp B.

`schedule.csv` holds the declared values, rounded as on a supplier's sheet. The mass is declared at 7850 kg/m3, and not
for the rail and the rung, which are not of that steel. The values are computed here by composition of polygons and
circular segments, from the shapes as described below and not from the DXF files. **Two rows are wrong on purpose**,
each in a way that happens:

* `rail-extrusion.dxf`, area: the two screw bores were not taken off, so that the area is too large.
* `round-edged-bar.dxf`, the two second moments are exchanged: the sheet was written for the bar standing on edge.

The files do not depend on the day, the machine or the run: two runs give the same bytes.
"""

from __future__ import annotations

import csv
import io
import logging
import math
import sys
from collections.abc import Callable, Iterable, Iterator, Sequence
from dataclasses import dataclass
from pathlib import Path

from ezdxf._options import options
from ezdxf.document import Drawing
from ezdxf.entities.dimstyleoverride import DimStyleOverride
from ezdxf.entities.dxfgfx import DXFGraphic
from ezdxf.filemanagement import new
from ezdxf.math import Vec2, Vec3, bulge_to_arc

Point = tuple[float, float]
Vertex = tuple[float, float, float]
"""x, y and the bulge of the edge that starts here: the tangent of a quarter of its included angle, 0 for a line."""
Corner = tuple[float, float, float]
"""x, y and the radius by which the corner is rounded."""

STEEL = 7850.0
"""Density in kg/m3."""

CM_PER = {"mm": 0.1, "in": 2.54}
INSUNITS = {"in": 1, "mm": 4}

SIGNIFICANT = 4
"""Digits to which the schedule is rounded."""


# ---------------------------------------------------------------------------------------------------------------------
# Shapes
# ---------------------------------------------------------------------------------------------------------------------


@dataclass(frozen=True)
class Loop:
    """A closed curve of lines and circular arcs, anticlockwise."""

    vertices: tuple[Vertex, ...]
    is_circle: bool = False

    def edges(self) -> Iterator[tuple[Point, Point, float]]:
        """Yield start, end and bulge of every edge."""
        for (x, y, bulge), (next_x, next_y, _) in zip(
            self.vertices, self.vertices[1:] + self.vertices[:1], strict=True
        ):
            yield (x, y), (next_x, next_y), bulge

    def moved(self, turn: float, to: Point) -> Loop:
        """Return the loop turned about the origin by `turn` degrees, then moved by `to`."""
        place = placing(turn, to)
        return Loop(tuple((*place((x, y)), bulge) for x, y, bulge in self.vertices), self.is_circle)


@dataclass(frozen=True)
class Section:
    """One cross-section: its outer boundary and its voids, in the unit of the drawing."""

    outer: Loop
    voids: tuple[Loop, ...] = ()

    @property
    def loops(self) -> tuple[Loop, ...]:
        """The outer boundary and then the voids."""
        return (self.outer, *self.voids)


def placing(turn: float, to: Point) -> Callable[[Point], Point]:
    """Return the function that turns a point about the origin by `turn` degrees and then moves it by `to`."""
    cos, sin = math.cos(math.radians(turn)), math.sin(math.radians(turn))
    return lambda point: (to[0] + cos * point[0] - sin * point[1], to[1] + sin * point[0] + cos * point[1])


def rounded(corners: Sequence[Corner]) -> Loop:
    """Return the polygon with every corner replaced by an arc of its radius, tangent to both sides."""
    vertices: list[Vertex] = []
    for before, (x, y, radius), after in zip(
        [corners[-1], *corners[:-1]], corners, [*corners[1:], corners[0]], strict=True
    ):
        if radius == 0:
            vertices.append((x, y, 0.0))
            continue
        corner = Vec2(x, y)
        arriving = (corner - Vec2(before[0], before[1])).normalize()
        leaving = (Vec2(after[0], after[1]) - corner).normalize()
        turn = math.atan2(arriving.det(leaving), arriving.dot(leaving))
        setback = radius * math.tan(abs(turn) / 2)
        first, last = corner - arriving * setback, corner + leaving * setback
        vertices += [(first.x, first.y, math.tan(turn / 4)), (last.x, last.y, 0.0)]
    return Loop(tuple(vertices))


def circle(centre: Point, radius: float) -> Loop:
    """Return a circle as two half turns."""
    x, y = centre
    return Loop(((x - radius, y, 1.0), (x + radius, y, 1.0)), is_circle=True)


def strip(path: Sequence[Point], thickness: float, inside_radius: float) -> Loop:
    """Return a sheet of constant thickness folded along the centre line `path`."""
    points = [Vec2(point) for point in path]
    left: list[Corner] = []
    right: list[Corner] = []
    for index, point in enumerate(points):
        arriving = (point - points[index - 1]).normalize() if index else (points[1] - point).normalize()
        leaving = (points[index + 1] - point).normalize() if index + 1 < len(points) else arriving
        normal = (arriving.orthogonal() + leaving.orthogonal()).normalize()
        side = normal * (thickness / 2 / normal.dot(arriving.orthogonal()))
        turn = arriving.det(leaving)
        # the side towards which the sheet is folded has the inside radius, the other one a thickness more
        inside, outside = (inside_radius, inside_radius + thickness) if abs(turn) > 1e-9 else (0.0, 0.0)
        on_left, on_right = point + side, point - side
        left.append((on_left.x, on_left.y, inside if turn > 0 else outside))
        right.append((on_right.x, on_right.y, outside if turn > 0 else inside))
    return rounded([*right, *reversed(left)])


# ---------------------------------------------------------------------------------------------------------------------
# The declared values: polygons and circular segments, put together
# ---------------------------------------------------------------------------------------------------------------------


@dataclass(frozen=True)
class Integrals:
    """Integrals over a plane figure about a given origin: area, first moments, second moments."""

    area: float = 0.0
    x: float = 0.0
    y: float = 0.0
    xx: float = 0.0
    yy: float = 0.0
    xy: float = 0.0

    def plus(self, other: Integrals, factor: float = 1.0) -> Integrals:
        """Return the sum with `factor` times the other."""
        return Integrals(
            self.area + factor * other.area,
            self.x + factor * other.x,
            self.y + factor * other.y,
            self.xx + factor * other.xx,
            self.yy + factor * other.yy,
            self.xy + factor * other.xy,
        )


@dataclass(frozen=True)
class Figures:
    """Properties of a section, in the unit of its drawing, about its centroid; the angle in degrees."""

    area: float
    second_moment_x: float
    second_moment_y: float
    product_of_inertia: float
    principal_angle: float
    total_perimeter: float


def triangle(p: Point, q: Point) -> Integrals:
    """Return the integrals over the triangle of the origin, p and q; negative where that is clockwise."""
    area = (p[0] * q[1] - q[0] * p[1]) / 2
    return Integrals(
        area,
        area * (p[0] + q[0]) / 3,
        area * (p[1] + q[1]) / 3,
        area * (p[0] ** 2 + p[0] * q[0] + q[0] ** 2) / 6,
        area * (p[1] ** 2 + p[1] * q[1] + q[1] ** 2) / 6,
        area * (2 * p[0] * p[1] + p[0] * q[1] + q[0] * p[1] + 2 * q[0] * q[1]) / 12,
    )


def segment(p: Point, q: Point, bulge: float) -> tuple[Integrals, float]:
    """Return the integrals over the circular segment between chord and arc, and the length of the arc."""
    half = 2 * math.atan(abs(bulge))
    chord = math.dist(p, q)
    radius = chord / (2 * math.sin(half))
    sin, cos = math.sin(half), math.cos(half)
    # the axis of symmetry points from the centre to the middle of the arc, to the right of an anticlockwise arc
    sign = math.copysign(1.0, bulge)
    axis = (sign * (q[1] - p[1]) / chord, -sign * (q[0] - p[0]) / chord)
    centre = tuple((p[i] + q[i]) / 2 - radius * cos * axis[i] for i in (0, 1))
    area = radius**2 * (half - sin * cos)
    first = radius**3 * 2 / 3 * sin**3
    along = radius**4 / 4 * (half + sin * cos - 2 * sin * cos**3)
    across = radius**4 / 4 * (half - sin * cos - 2 / 3 * sin**3 * cos)
    about_centre = Integrals(
        area,
        first * axis[0],
        first * axis[1],
        along * axis[0] ** 2 + across * axis[1] ** 2,
        along * axis[1] ** 2 + across * axis[0] ** 2,
        (along - across) * axis[0] * axis[1],
    )
    return shifted(about_centre, (centre[0], centre[1])), 2 * half * radius


def shifted(what: Integrals, by: Point) -> Integrals:
    """Return the integrals over the figure after moving it by the given distance."""
    x, y = by
    return Integrals(
        what.area,
        what.x + x * what.area,
        what.y + y * what.area,
        what.xx + 2 * x * what.x + x * x * what.area,
        what.yy + 2 * y * what.y + y * y * what.area,
        what.xy + x * what.y + y * what.x + x * y * what.area,
    )


def loop_integrals(loop: Loop, origin: Point) -> tuple[Integrals, float]:
    """Return the integrals over the inside of an anticlockwise loop, about `origin`, and its length."""
    total, length = Integrals(), 0.0
    for start, end, bulge in loop.edges():
        p, q = (start[0] - origin[0], start[1] - origin[1]), (end[0] - origin[0], end[1] - origin[1])
        total = total.plus(triangle(p, q))
        if bulge:
            part, arc = segment(p, q, bulge)
            total, length = total.plus(part, math.copysign(1.0, bulge)), length + arc
        else:
            length += math.dist(p, q)
    return total, length


def figures(section: Section) -> Figures:
    """Return the properties of a section."""
    # near the shape, so that no digits are lost where the shape is far from the origin of the drawing
    origin = section.outer.vertices[0][:2]
    total, perimeter = loop_integrals(section.outer, origin)
    for void in section.voids:
        inside, length = loop_integrals(void, origin)
        total, perimeter = total.plus(inside, -1.0), perimeter + length
    central = shifted(total, (-total.x / total.area, -total.y / total.area))
    angle = 0.5 * math.degrees(math.atan2(-2 * central.xy, central.yy - central.xx))
    return Figures(total.area, central.yy, central.xx, central.xy, angle, perimeter)


# ---------------------------------------------------------------------------------------------------------------------
# The drawing sheet
# ---------------------------------------------------------------------------------------------------------------------


@dataclass(frozen=True)
class Title:
    """What the title block says."""

    part: str
    title: str
    material: str
    scale: str
    units: str


ON_LAYER = {"layer": "DIMENSIONS"}
LEADER = {"dimtmove": 1, "dimtih": 1, "dimtoh": 1}
"""A radius or diameter whose text stands upright at the end of a leader."""


class Sheet:
    """A drawing with its layers, its frame and its title block; sizes are in text heights of the given height."""

    WIDTH, HEIGHT = 118.8, 84.0

    def __init__(self, version: str, title: Title, text_height: float, middle: Point) -> None:
        self.doc: Drawing = new(version)
        self.msp = self.doc.modelspace()
        self.height = text_height
        self.is_r12 = version == "R12"
        self.lower_left = (
            middle[0] - self.WIDTH / 2 * text_height,
            middle[1] - self.HEIGHT / 2 * text_height,
        )
        self._set_header(title.units)
        self._set_styles(decimals=3 if title.units == "in" else 2)
        self._draw_frame()
        self._draw_title_block(title)

    # -- set-up --------------------------------------------------------------------------------------------------------

    def _set_header(self, units: str) -> None:
        header = self.doc.header
        if not self.is_r12:
            header["$INSUNITS"] = INSUNITS[units]
            header["$MEASUREMENT"] = 0 if units == "in" else 1
        header["$LTSCALE"] = self.height
        low = Vec3(*self.lower_left)
        high = low + Vec3(self.WIDTH, self.HEIGHT) * self.height
        self.msp.reset_extents(low, high)
        self.msp.reset_limits(low, high)
        self.doc.set_modelspace_vport(self.HEIGHT * self.height * 1.1, center=(low.lerp(high).x, low.lerp(high).y))

    def _set_styles(self, decimals: int) -> None:
        self.doc.linetypes.add("CENTER", [10.0, 6.0, -1.5, 1.0, -1.5], description="Centre __ _ __ _ __")
        for name, colour, linetype in (
            ("OUTLINE", 7, "CONTINUOUS"),
            ("CENTRE", 1, "CENTER"),
            ("DIMENSIONS", 94, "CONTINUOUS"),
            ("NOTES", 34, "CONTINUOUS"),
            ("HATCH", 8, "CONTINUOUS"),
            ("JOINTS", 9, "CONTINUOUS"),
            ("FRAME", 5, "CONTINUOUS"),
        ):
            self.doc.layers.add(name, color=colour, linetype=linetype)
        style = self.doc.dimstyles.new("SHOP")
        style.dxf.dimtxt = style.dxf.dimasz = self.height
        style.dxf.dimexe = style.dxf.dimexo = style.dxf.dimgap = self.height * 0.4
        style.dxf.dimtad, style.dxf.dimdec, style.dxf.dimzin = 1, decimals, 8
        style.dxf.dimtih = style.dxf.dimtoh = style.dxf.dimcen = 0
        style.dxf.dimtmove = 2
        if not self.is_r12:
            style.dxf.dimdsep = ord(".")

    def _draw_frame(self) -> None:
        x, y = self.lower_left
        for inset in (0.0, 2.0):
            left, bottom = x + inset * self.height, y + inset * self.height
            right = x + (self.WIDTH - inset) * self.height
            top = y + (self.HEIGHT - inset) * self.height
            corners = [(left, bottom), (right, bottom), (right, top), (left, top)]
            for start, end in zip(corners, corners[1:] + corners[:1], strict=True):
                self.line(start, end, "FRAME")

    def _draw_title_block(self, title: Title) -> None:
        rows = (
            (("DG4 DIPPING GANTRY", 0.0), ("DRAWN Q.V.", 32.0)),
            ((title.title, 0.0), ("SHEET 1 OF 1", 32.0)),
            ((title.material, 0.0), (f"SCALE {title.scale}", 32.0)),
            ((f"PART {title.part}", 0.0), ("REV B", 18.0), (f"UNIT {title.units.upper()}", 32.0)),
        )
        width, row_height = 46.0, 2.6
        right, bottom = self.WIDTH - 2.0, 2.0
        left, top = right - width, bottom + row_height * len(rows)
        self.line(self.at(left, bottom), self.at(left, top), "FRAME")
        for number, row in enumerate(rows):
            y = top - number * row_height
            self.line(self.at(left, y), self.at(right, y), "FRAME")
            for text, offset in row:
                self.text(text, self.at(left + offset + 0.8, y - 1.8), "FRAME")
                if offset:
                    self.line(self.at(left + offset, y), self.at(left + offset, y - row_height), "FRAME")

    # -- pieces --------------------------------------------------------------------------------------------------------

    def at(self, x: float, y: float) -> Point:
        """Return the point that lies x and y text heights from the lower left corner of the sheet."""
        return self.lower_left[0] + x * self.height, self.lower_left[1] + y * self.height

    def line(self, start: Point, end: Point, layer: str) -> None:
        """Draw a line."""
        self.msp.add_line(start, end, dxfattribs={"layer": layer})

    def text(self, text: str, at: Point, layer: str = "NOTES", height: float = 1.0) -> None:
        """Write one line of text, `height` times as high as usual."""
        attributes = {"layer": layer, "height": height * self.height, "insert": at}
        self.msp.add_text(text, dxfattribs=attributes)

    def notes(self, lines: Sequence[str], at: Point) -> None:
        """Write the notes below `at`: one MTEXT, or lines of TEXT where the version has no MTEXT."""
        if self.is_r12:
            for number, line in enumerate(lines):
                self.text(line, (at[0], at[1] - (1 + 1.7 * number) * self.height))
            return
        attributes = {"layer": "NOTES", "char_height": self.height, "insert": at, "attachment_point": 1}
        self.msp.add_mtext("\\P".join(lines), dxfattribs=attributes)

    def centre_line(self, start: Point, end: Point) -> None:
        """Draw a centre line."""
        self.line(start, end, "CENTRE")

    def centre_cross(self, centre: Point, reach: float) -> None:
        """Draw two centre lines that cross at `centre`."""
        x, y = centre
        self.centre_line((x - reach, y), (x + reach, y))
        self.centre_line((x, y - reach), (x, y + reach))

    def hatch(self, section: Section, spacing: float) -> None:
        """Hatch a section with lines at 45 degrees, `spacing` text heights apart."""
        hatch = self.msp.add_hatch(dxfattribs={"layer": "HATCH"})
        shift = spacing * self.height * math.sqrt(0.5)
        hatch.set_pattern_fill("SHOP45", definition=[[45.0, (0.0, 0.0), (-shift, shift), []]])
        for loop, flags in ((section.outer, 1), *((void, 16) for void in section.voids)):
            hatch.paths.add_polyline_path([tidy(vertex) for vertex in loop.vertices], is_closed=True, flags=flags)

    # -- dimensions ----------------------------------------------------------------------------------------------------

    def dimension(self, start: Point, end: Point, line_at: Point, turn: float = 0.0, shift: Point = (0.0, 0.0)) -> None:
        """Dimension the distance of two points measured along `turn` degrees, the line running through `line_at`.

        `start` comes first in that direction. The text is shifted along and across the line by `shift` text heights.
        """
        dimension = self.msp.add_linear_dim(
            base=line_at, p1=start, p2=end, angle=turn, dimstyle="SHOP", dxfattribs=ON_LAYER
        )
        if shift != (0.0, 0.0):
            dimension.shift_text(shift[0] * self.height, shift[1] * self.height)
        self._finish(dimension)

    def across(self, start: Point, end: Point, y: float, shift: Point = (0.0, 0.0)) -> None:
        """Dimension a width, from left to right, the dimension line at height y."""
        self.dimension(start, end, (start[0], y), shift=shift)

    def upright(self, start: Point, end: Point, x: float, shift: Point = (0.0, 0.0)) -> None:
        """Dimension a height, from the bottom to the top, the dimension line at x."""
        self.dimension(start, end, (x, start[1]), turn=90.0, shift=shift)

    def radius(self, centre: Point, radius: float, text_at: Point) -> None:
        """Dimension a radius, the arrow on the ray from the centre to the text."""
        self._finish(
            self.msp.add_radius_dim(
                center=centre, radius=radius, location=text_at, dimstyle="SHOP", override=LEADER, dxfattribs=ON_LAYER
            )
        )

    def fillet(self, centre: Point, radius: float, towards: float) -> None:
        """Dimension the radius of an inner corner, all of it between centre and arc, in the direction `towards`."""
        self._finish(
            self.msp.add_radius_dim(
                center=centre,
                radius=radius,
                angle=towards,
                dimstyle="SHOP",
                override={"dimtix": 1, "dimtih": 0},
                dxfattribs=ON_LAYER,
            )
        )

    def diameter(self, centre: Point, radius: float, text_at: Point) -> None:
        """Dimension a diameter, the arrow on the ray from the centre to the text."""
        self._finish(
            self.msp.add_diameter_dim(
                center=centre, radius=radius, location=text_at, dimstyle="SHOP", override=LEADER, dxfattribs=ON_LAYER
            )
        )

    def _finish(self, override: DimStyleOverride) -> None:
        override.render()
        dimension = override.dimension
        if not self.is_r12:
            dimension.dxf.actual_measurement = dimension.get_measurement()

    # -- outlines ------------------------------------------------------------------------------------------------------

    def polylines(self, section: Section) -> None:
        """Draw every loop as one closed polyline, or as a CIRCLE where it is one."""
        for loop in section.loops:
            self.polyline(loop)

    def polyline(self, loop: Loop) -> None:
        """Draw a loop as one closed polyline, or as a CIRCLE where it is one."""
        attributes = {"layer": "OUTLINE"}
        points = [tidy(vertex) for vertex in loop.vertices]
        if loop.is_circle:
            (left, y, _), (right, _, _) = points
            self.msp.add_circle(((left + right) / 2, y), (right - left) / 2, dxfattribs=attributes)
        elif self.is_r12:
            self.msp.add_polyline2d(points, format="xyb", close=True, dxfattribs=attributes)
        else:
            self.msp.add_lwpolyline(points, format="xyb", close=True, dxfattribs=attributes)

    def loose(self, loop: Loop, stride: int = 1, digits: int = 9, misses: dict[int, Point] | None = None) -> None:
        """Draw a loop as single LINE and ARC entities.

        A `stride` other than 1, with no common factor with the number of edges, takes the edges out of order and
        turns every third line round. Coordinates are rounded to `digits`. `misses` says by how much the end of a line
        misses its neighbour, by the number of the edge.
        """
        edges = list(loop.edges())
        if math.gcd(stride, len(edges)) != 1:
            raise ValueError(f"stride {stride} does not reach each of the {len(edges)} edges")
        attributes = {"layer": "OUTLINE"}
        for turn in range(len(edges)):
            index = turn * stride % len(edges)
            start, end, bulge = edges[index]
            if bulge:
                centre, first, last, radius = bulge_to_arc(start, end, bulge)
                self.msp.add_arc(
                    tidy(centre, digits),
                    round(radius, digits),
                    round(math.degrees(first) % 360, 6),
                    round(math.degrees(last) % 360, 6),
                    dxfattribs=attributes,
                )
                continue
            miss = (misses or {}).get(index, (0.0, 0.0))
            ends = [tidy(start, digits), tidy((end[0] + miss[0], end[1] + miss[1]), digits)]
            if stride != 1 and turn % 3 == 2:
                ends.reverse()
            self.msp.add_line(ends[0], ends[1], dxfattribs=attributes)

    # -- output --------------------------------------------------------------------------------------------------------

    def to_bytes(self, binary: bool = False) -> bytes:
        """Return the file."""
        for entity in list(self.doc.entitydb.values()):
            if isinstance(entity, DXFGraphic):
                round_attributes(entity)
        if not self.is_r12:
            sort_classes(self.doc)
        if binary:
            packed = io.BytesIO()
            self.doc.write(packed, fmt="bin")
            return packed.getvalue()
        # through memory: a file opened as text would get the line ends of the machine
        text = io.StringIO()
        self.doc.write(text)
        return self.doc.encode(text.getvalue())


def tidy(values: Iterable[float], digits: int = 9) -> tuple[float, ...]:
    """Round every number, with no negative zero."""
    return tuple(round(value, digits) + 0.0 for value in values)


def sort_classes(document: Drawing) -> None:
    """Put the section CLASSES in order, for the library fills it from a set, whose order changes from run to run."""
    section = document.classes
    section.add_required_classes(document.dxfversion)
    in_order = sorted(section.classes.items())
    section.classes.clear()
    section.classes.update(in_order)


def round_attributes(entity: DXFGraphic) -> None:
    """Round the numbers of an entity, for the last bit of a sine differs from machine to machine."""
    for name, value in entity.dxf.all_existing_dxf_attribs().items():
        if isinstance(value, float):
            entity.dxf.set(name, round(value, 9) + 0.0)
        elif isinstance(value, (Vec2, Vec3)):
            entity.dxf.set(name, type(value)(tidy(value)))


# ---------------------------------------------------------------------------------------------------------------------
# The eight drawings
# ---------------------------------------------------------------------------------------------------------------------


@dataclass(frozen=True)
class Sample:
    """One drawing: its file, its sections and the sheet that shows them."""

    name: str
    units: str
    sections: tuple[Section, ...]
    draw: Callable[[Sheet], None]
    title: Title
    version: str
    text_height: float
    middle: Point
    density: float | None = STEEL
    allowed_percent: float = 0.5
    is_binary: bool = False

    def to_bytes(self) -> bytes:
        """Draw it and return the file."""
        sheet = Sheet(self.version, self.title, self.text_height, self.middle)
        self.draw(sheet)
        return sheet.to_bytes(self.is_binary)


def welded_box_girder() -> Sample:
    """A crane girder of four plates and a rail bar: the thicker web stands under the rail."""
    leg = 8.0  # fillet welds, drawn with a flat face
    outer = Loop(
        tuple(
            (x, y, 0.0)
            for x, y in (
                (0.0, 0.0),
                (290.0, 0.0),
                (290.0, 16.0),
                (258.0 + leg, 16.0),
                (258.0, 16.0 + leg),
                (258.0, 516.0 - leg),
                (258.0 + leg, 516.0),
                (320.0, 516.0),
                (320.0, 536.0),
                (60.0 + leg, 536.0),
                (60.0, 536.0 + leg),
                (60.0, 566.0),
                (20.0, 566.0),
                (20.0, 536.0 + leg),
                (20.0 - leg, 536.0),
                (-40.0, 536.0),
                (-40.0, 516.0),
                (34.0 - leg, 516.0),
                (34.0, 516.0 - leg),
                (34.0, 16.0 + leg),
                (34.0 - leg, 16.0),
                (0.0, 16.0),
            )
        )
    )
    inside = rounded([(46.0, 16.0, 0.0), (250.0, 16.0, 0.0), (250.0, 516.0, 0.0), (46.0, 516.0, 0.0)])
    section = Section(outer, (inside,))

    def draw(sheet: Sheet) -> None:
        sheet.loose(outer)
        sheet.loose(inside)
        sheet.hatch(section, 1.0)
        for start, end in (
            ((34.0, 16.0), (46.0, 16.0)),
            ((250.0, 16.0), (258.0, 16.0)),
            ((34.0, 516.0), (46.0, 516.0)),
            ((250.0, 516.0), (258.0, 516.0)),
            ((20.0, 536.0), (60.0, 536.0)),
        ):
            sheet.line(start, end, "JOINTS")
        sheet.centre_line((40.0, -60.0), (40.0, 600.0))
        sheet.upright((0.0, 0.0), (20.0, 566.0), -110.0)
        sheet.upright((-40.0, 516.0), (-40.0, 536.0), -70.0)
        sheet.upright((290.0, 0.0), (320.0, 536.0), 400.0)
        sheet.upright((290.0, 0.0), (290.0, 16.0), 350.0, shift=(3.5, 0.0))
        sheet.across((0.0, 0.0), (290.0, 0.0), -60.0)
        sheet.across((-40.0, 536.0), (320.0, 536.0), 640.0)
        sheet.across((20.0, 566.0), (60.0, 566.0), 600.0)
        sheet.across((34.0, 200.0), (46.0, 200.0), 200.0, shift=(3.5, 0.0))
        sheet.across((250.0, 200.0), (258.0, 200.0), 200.0, shift=(-3.0, 0.0))
        sheet.across((46.0, 300.0), (250.0, 300.0), 300.0)
        sheet.notes(
            (
                "NOTES",
                "1. ALL OUTSIDE WELDS FILLET, LEG 8.",
                "2. WELD THE RAIL BAR IN STEPS OF 200.",
                "3. CLOSE BOTH ENDS AIRTIGHT.",
                "4. WEB 12 STANDS UNDER THE RAIL.",
            ),
            sheet.at(78.0, 60.0),
        )

    title = Title("DG4-101", "MAIN GIRDER, WELDED", "STRUCTURAL STEEL PLATE", "1:5", "mm")
    return Sample("welded-box-girder.dxf", "mm", (section,), draw, title, "R2010", 12.5, (340.0, 270.0))


def rail_extrusion() -> Sample:
    """The rail of the trolley: a foot to clamp it by, a T-slot open at the top, three cells and two screw bores."""
    outer = rounded(
        [
            (-14.0, 0.0, 1.5),
            (86.0, 0.0, 1.5),
            (86.0, 6.0, 2.0),
            (60.0, 6.0, 3.0),
            (60.0, 80.0, 2.5),
            (35.0, 80.0, 1.0),
            (35.0, 75.0, 0.6),
            (40.0, 75.0, 1.0),
            (40.0, 64.0, 1.5),
            (20.0, 64.0, 1.5),
            (20.0, 75.0, 1.0),
            (25.0, 75.0, 0.6),
            (25.0, 80.0, 1.0),
            (0.0, 80.0, 2.5),
            (0.0, 6.0, 3.0),
            (-14.0, 6.0, 2.0),
        ]
    )
    cells = (
        rounded([(5.0, 42.0, 4.0), (55.0, 42.0, 4.0), (55.0, 58.0, 4.0), (5.0, 58.0, 4.0)]),
        rounded([(5.0, 8.0, 4.0), (27.0, 8.0, 4.0), (35.0, 37.0, 3.0), (5.0, 37.0, 4.0)]),
        rounded([(33.0, 8.0, 3.0), (55.0, 8.0, 4.0), (55.0, 37.0, 4.0), (41.0, 37.0, 4.0)]),
    )
    bores = (circle((10.0, 69.0), 3.4), circle((50.0, 69.0), 2.6))
    section = Section(outer, cells + bores)

    def draw(sheet: Sheet) -> None:
        sheet.hatch(section, 0.8)
        sheet.polylines(section)
        sheet.centre_line((30.0, -6.0), (30.0, 88.0))
        sheet.centre_cross((10.0, 69.0), 6.0)
        sheet.centre_cross((50.0, 69.0), 5.0)
        sheet.across((-14.0, 1.5), (86.0, 1.5), -14.0)
        sheet.across((0.0, 77.5), (60.0, 77.5), 100.0)
        sheet.across((25.0, 79.0), (35.0, 79.0), 92.0)
        sheet.across((20.0, 70.0), (40.0, 70.0), 68.5)
        sheet.upright((-12.5, 0.0), (2.5, 80.0), -34.0)
        sheet.upright((-12.5, 0.0), (-12.0, 6.0), -24.0)
        sheet.upright((38.5, 64.0), (57.5, 80.0), 84.0)
        sheet.upright((51.0, 42.0), (51.0, 58.0), 48.0)
        sheet.diameter((10.0, 69.0), 3.4, (-22.0, 92.0))
        sheet.diameter((50.0, 69.0), 2.6, (94.0, 96.0))
        sheet.radius((51.0, 33.0), 4.0, (82.0, 42.0))
        sheet.notes(
            (
                "NOTES",
                "1. OUTER WALLS 5.",
                "2. RADII NOT DIMENSIONED: 1 TO 4.",
                "3. TWIST AT MOST 0.5 DEG PER METRE.",
                "4. SLOT FACES FREE OF DIE LINES.",
            ),
            sheet.at(78.0, 50.0),
        )

    title = Title("DG4-204", "TROLLEY RAIL, EXTRUDED", "ALUMINIUM ALLOY, AGED", "1:1", "mm")
    return Sample(
        "rail-extrusion.dxf", "mm", (section,), draw, title, "R2018", 2.5, (70.0, 32.0), None, allowed_percent=1.0
    )


def purlin_zed() -> Sample:
    """A roof purlin, rolled from strip: unequal flanges, lips turned by 60 degrees."""
    slope = math.radians(60.0)
    lip = (17.0 * math.cos(slope), 17.0 * math.sin(slope))
    path = (
        (62.0 + lip[0], 199.0 - lip[1]),
        (62.0, 199.0),
        (0.0, 199.0),
        (0.0, 1.0),
        (-57.0, 1.0),
        (-57.0 - lip[0], 1.0 + lip[1]),
    )
    outer = strip(path, 2.0, 3.0)
    section = Section(outer)
    right_tip, left_tip = max(outer.vertices)[:2], min(outer.vertices)[:2]
    # by the number of the edge: true gaps, as they come from moving things without snapping
    misses = {0: (0.0, -0.003), 2: (-0.002, 0.0), 6: (0.003, 0.002), 12: (0.0, 0.004)}

    def draw(sheet: Sheet) -> None:
        sheet.loose(outer, stride=7, digits=3, misses=misses)
        sheet.centre_line((0.0, -14.0), (0.0, 214.0))
        sheet.upright((-10.0, 0.0), (10.0, 200.0), 110.0)
        sheet.across((-1.0, 120.0), (1.0, 120.0), 120.0, shift=(3.0, 0.0))
        sheet.across((-1.0, 195.0), right_tip, 228.0)
        sheet.across(left_tip, (1.0, 5.0), -28.0)
        sheet.upright(right_tip, (50.0, 200.0), 90.0, shift=(-4.5, 0.0))
        sheet.upright((-50.0, 0.0), left_tip, -84.0)
        sheet.radius((4.0, 195.0), 5.0, (-24.0, 216.0))
        sheet.notes(
            (
                "NOTES",
                "1. OUTSIDE RADIUS 5 AT ALL FOLDS.",
                "2. LIPS TURNED BY 60 DEG.",
                "3. THICKNESS WITHOUT COATING 2.0.",
            ),
            sheet.at(76.0, 50.0),
        )

    title = Title("DG4-310", "ROOF PURLIN, COLD FORMED", "COATED STEEL STRIP", "1:2", "mm")
    return Sample("purlin-zed.dxf", "mm", (section,), draw, title, "R2000", 5.0, (80.0, 80.0))


def corner_angle() -> Sample:
    """The corner post: an unequal angle, drawn where and how it stands in the plan of the frame."""
    local = rounded(
        [
            (0.0, 0.0, 0.0),
            (65.0, 0.0, 0.0),
            (65.0, 8.0, 4.0),
            (8.0, 8.0, 9.0),
            (8.0, 100.0, 4.0),
            (0.0, 100.0, 0.0),
        ]
    )
    turn, to = 17.0, (1250.0, 860.0)
    place = placing(turn, to)
    outer = local.moved(turn, to)
    section = Section(outer)

    def draw(sheet: Sheet) -> None:
        sheet.polyline(outer)
        sheet.centre_line(place((4.0, -10.0)), place((4.0, 112.0)))
        sheet.centre_line(place((-10.0, 4.0)), place((77.0, 4.0)))
        sheet.dimension(place((0.0, 0.0)), place((65.0, 0.0)), place((0.0, -16.0)), turn)
        sheet.dimension(place((0.0, 0.0)), place((0.0, 100.0)), place((-16.0, 0.0)), turn + 90)
        sheet.dimension(place((0.0, 60.0)), place((8.0, 60.0)), place((0.0, 60.0)), turn)
        sheet.dimension(place((40.0, 0.0)), place((40.0, 8.0)), place((40.0, 0.0)), turn + 90)
        sheet.fillet(place((17.0, 17.0)), 9.0, turn + 225)
        sheet.notes(
            (
                "NOTES",
                "1. DRAWN AS IT STANDS IN THE PLAN.",
                "2. TOE RADIUS 4 AT BOTH LEGS.",
                "3. ALL SIZES IN MILLIMETRES.",
            ),
            sheet.at(76.0, 50.0),
        )

    title = Title("DG4-315", "CORNER POST, ANGLE", "ROLLED STEEL", "1:1", "mm")
    return Sample("corner-angle.dxf", "mm", (section,), draw, title, "R12", 2.5, (1310.0, 890.0))


def round_edged_bar() -> Sample:
    """A rung of the cradle: a flat bar whose two edges are half circles."""
    outer = Loop(((0.25, 0.0, 0.0), (2.25, 0.0, 1.0), (2.25, 0.5, 0.0), (0.25, 0.5, 1.0)))
    section = Section(outer)

    def draw(sheet: Sheet) -> None:
        sheet.polyline(outer)
        sheet.centre_line((-0.3, 0.25), (2.8, 0.25))
        sheet.centre_line((0.25, -0.2), (0.25, 0.7))
        sheet.centre_line((2.25, -0.2), (2.25, 0.7))
        sheet.across((0.0, 0.25), (2.5, 0.25), -0.7)
        sheet.across((0.25, 0.0), (2.25, 0.0), -0.4)
        sheet.upright((1.0, 0.0), (1.0, 0.5), -0.6)
        sheet.radius((2.25, 0.25), 0.25, (3.2, 1.0))
        sheet.notes(
            (
                "NOTES",
                "1. EDGES FULL RADIUS, NO FLATS.",
                "2. SURFACE POLISHED: YARN RUNS OVER IT.",
            ),
            sheet.at(68.0, 62.0),
        )

    title = Title("DG4-422", "CRADLE RUNG, FLAT", "STAINLESS STEEL BAR", "1:1", "in")
    return Sample("round-edged-bar.dxf", "in", (section,), draw, title, "R2010", 0.1, (2.2, 0.0), density=None)


def slotted_tube() -> Sample:
    """The shaft of the lifting drum: a thick tube with a keyway cut into its outside."""
    radius, half_width, floor = 1.25, 0.1875, 1.1
    top = math.sqrt(radius**2 - half_width**2)
    # two equal arcs, which meet at the bottom
    bulge = math.tan((math.pi - math.asin(half_width / radius)) / 4)
    outer = Loop(
        (
            (-half_width, top, bulge),
            (0.0, -radius, bulge),
            (half_width, top, 0.0),
            (half_width, floor, 0.0),
            (-half_width, floor, 0.0),
        )
    )
    bore = circle((0.0, 0.0), 0.8125)
    section = Section(outer, (bore,))

    def draw(sheet: Sheet) -> None:
        sheet.loose(outer, stride=3)
        sheet.polyline(bore)
        sheet.centre_cross((0.0, 0.0), 1.55)
        sheet.across((-half_width, top), (half_width, top), 1.8)
        sheet.upright((0.0, -radius), (half_width, floor), 1.9)
        sheet.diameter((0.0, 0.0), radius, (-2.0, -1.5))
        sheet.diameter((0.0, 0.0), 0.8125, (-2.0, 1.5))
        sheet.notes(
            (
                "NOTES",
                "1. KEYWAY OVER THE FULL LENGTH.",
                "2. BREAK SHARP EDGES 0.010.",
                "3. BORE AS DRAWN, NOT MACHINED.",
            ),
            sheet.at(72.0, 64.0),
        )

    title = Title("DG4-431", "DRUM SHAFT, KEYED TUBE", "SEAMLESS STEEL TUBE", "1:1", "in")
    return Sample("slotted-tube.dxf", "in", (section,), draw, title, "R2018", 0.1, (1.6, -0.3), is_binary=True)


def two_clamps() -> Sample:
    """Two plates which hold the rail down, cut from one sheet and drawn side by side."""
    first = Section(
        rounded(
            [
                (0.0, 0.0, 4.0),
                (78.0, 0.0, 4.0),
                (78.0, 20.0, 3.0),
                (34.0, 20.0, 8.0),
                (34.0, 62.0, 8.0),
                (58.0, 62.0, 2.0),
                (58.0, 56.0, 2.0),
                (68.0, 56.0, 3.0),
                (68.0, 82.0, 10.0),
                (0.0, 82.0, 6.0),
            ]
        ),
        (circle((17.0, 41.0), 6.5),),
    )
    slot = Loop(((136.0, 9.0, 0.0), (158.0, 9.0, 1.0), (158.0, 17.0, 0.0), (136.0, 17.0, 1.0)))
    second = Section(
        rounded(
            [
                (120.0, 0.0, 4.0),
                (176.0, 0.0, 4.0),
                (176.0, 26.0, 8.0),
                (154.0, 58.0, 6.0),
                (120.0, 58.0, 4.0),
            ]
        ),
        (circle((138.0, 43.0), 5.5), slot),
    )

    def draw(sheet: Sheet) -> None:
        sheet.polylines(first)
        sheet.polylines(second)
        sheet.text("A", (20.0, 7.0), height=2.5)
        sheet.text("B", (128.0, 24.0), height=2.5)
        sheet.centre_cross((17.0, 41.0), 10.0)
        sheet.centre_cross((138.0, 43.0), 9.0)
        sheet.centre_line((126.0, 13.0), (168.0, 13.0))
        sheet.across((0.0, 4.0), (78.0, 4.0), -12.0)
        sheet.across((0.0, 76.0), (68.0, 72.0), 96.0)
        sheet.upright((4.0, 0.0), (6.0, 82.0), -14.0)
        sheet.upright((74.0, 0.0), (75.0, 20.0), 88.0)
        sheet.across((120.0, 4.0), (176.0, 4.0), -12.0)
        sheet.upright((124.0, 0.0), (124.0, 58.0), 108.0)
        sheet.across((132.0, 13.0), (162.0, 13.0), 21.0)
        sheet.diameter((17.0, 41.0), 6.5, (56.0, 44.0))
        sheet.diameter((138.0, 43.0), 5.5, (172.0, 76.0))
        sheet.notes(
            (
                "NOTES",
                "1. CUT FROM PLATE 15, A AND B IN PAIRS.",
                "2. DEBURR BOTH FACES.",
                "3. MARK A AND B ON THE FRONT.",
            ),
            sheet.at(6.0, 14.0),
        )

    title = Title("DG4-207", "RAIL CLAMPS A AND B", "STRUCTURAL STEEL PLATE 15", "1:1", "mm")
    return Sample("two-clamps.dxf", "mm", (first, second), draw, title, "R2010", 2.5, (88.0, 24.0))


def bracket() -> Sample:
    """The bracket of the trolley axle: a foot with a locating groove and a lip, an upright, an eye with a bore."""
    outer = rounded(
        [
            (0.0, 0.0, 3.0),
            (26.0, 0.0, 0.0),
            (26.0, 4.0, 1.5),
            (46.0, 4.0, 1.5),
            (46.0, 0.0, 0.0),
            (84.0, 0.0, 4.0),
            (84.0, 26.0, 3.0),
            (74.0, 26.0, 3.0),
            (74.0, 12.0, 5.0),
            (14.0, 12.0, 14.0),
            (14.0, 76.0, 8.0),
            (32.0, 86.0, 10.0),
            (32.0, 116.0, 16.0),
            (0.0, 116.0, 16.0),
        ]
    )
    section = Section(outer, (circle((16.0, 100.0), 9.0),))

    def draw(sheet: Sheet) -> None:
        sheet.hatch(section, 0.9)
        sheet.polylines(section)
        sheet.centre_cross((16.0, 100.0), 22.0)
        sheet.across((0.0, 3.0), (84.0, 4.0), -22.0)
        sheet.across((0.0, 3.0), (26.0, 0.0), -12.0)
        sheet.across((26.0, 0.0), (46.0, 0.0), -12.0)
        sheet.across((0.0, 56.0), (14.0, 56.0), 56.0)
        sheet.upright((3.0, 0.0), (16.0, 116.0), -26.0)
        sheet.upright((60.0, 0.0), (60.0, 12.0), 60.0)
        sheet.upright((80.0, 0.0), (81.0, 26.0), 98.0)
        sheet.fillet((28.0, 26.0), 14.0, 225.0)
        sheet.radius((16.0, 100.0), 16.0, (48.0, 124.0))
        sheet.diameter((16.0, 100.0), 9.0, (-14.0, 128.0))
        sheet.notes(
            (
                "NOTES",
                "1. BORE TO SUIT AXLE, SEE DG4-216.",
                "2. GROOVE LOCATES ON RAIL DG4-204.",
                "3. RADII NOT DIMENSIONED: 3.",
                "4. DEBURR ALL EDGES.",
            ),
            sheet.at(72.0, 60.0),
        )

    title = Title("DG4-215", "TROLLEY AXLE BRACKET", "STRUCTURAL STEEL", "1:1", "mm")
    return Sample("bracket.dxf", "mm", (section,), draw, title, "R2010", 2.5, (75.0, 44.0))


# ---------------------------------------------------------------------------------------------------------------------
# The schedule
# ---------------------------------------------------------------------------------------------------------------------


def samples() -> list[Sample]:
    """Return the set in the order of the schedule."""
    return [
        welded_box_girder(),
        rail_extrusion(),
        purlin_zed(),
        corner_angle(),
        round_edged_bar(),
        slotted_tube(),
        two_clamps(),
        bracket(),
    ]


def significant(value: float, digits: int = SIGNIFICANT) -> str:
    """Write a value with the given number of significant digits and no exponent."""
    decimals = digits - 1 - math.floor(math.log10(abs(value)))
    return f"{round(value, decimals):.{max(decimals, 0)}f}"


def declared(sample: Sample, section: Section) -> dict[str, float]:
    """Return the values that the schedule declares for a section, by the heading of their column."""
    truth = figures(section)
    cm = CM_PER[sample.units]
    values = {
        "area [cm^2]": truth.area * cm**2,
        "second_moment_x [cm^4]": truth.second_moment_x * cm**4,
        "second_moment_y [cm^4]": truth.second_moment_y * cm**4,
        "total_perimeter [mm]": truth.total_perimeter * cm * 10,
    }
    # nothing is declared for the product of inertia of a symmetrical section: a percentage of zero allows nothing
    if abs(truth.product_of_inertia) > 1e-6 * (truth.second_moment_x + truth.second_moment_y):
        values["product_of_inertia [cm^4]"] = truth.product_of_inertia * cm**4
        values["principal_angle [deg]"] = truth.principal_angle
    if sample.density is not None:
        values["mass_per_length [kg/m]"] = truth.area * cm**2 * 1e-4 * sample.density
    return falsified(sample, section, values)


def falsified(sample: Sample, section: Section, values: dict[str, float]) -> dict[str, float]:
    """Put the two errors into the schedule that a check has to find."""
    if sample.name == "rail-extrusion.dxf":
        # WRONG ON PURPOSE: the two screw bores are not taken off the area
        without_bores = Section(section.outer, tuple(void for void in section.voids if not void.is_circle))
        return values | {"area [cm^2]": figures(without_bores).area * CM_PER[sample.units] ** 2}
    if sample.name == "round-edged-bar.dxf":
        # WRONG ON PURPOSE: the two second moments are exchanged
        return values | {
            "second_moment_x [cm^4]": values["second_moment_y [cm^4]"],
            "second_moment_y [cm^4]": values["second_moment_x [cm^4]"],
        }
    return values


def schedule(drawings: Sequence[Sample]) -> bytes:
    """Return the schedule as a CSV file."""
    columns = [
        "area [cm^2]",
        "second_moment_x [cm^4]",
        "second_moment_y [cm^4]",
        "product_of_inertia [cm^4]",
        "principal_angle [deg]",
        "mass_per_length [kg/m]",
        "total_perimeter [mm]",
    ]
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(["drawing", "section", "layer", "units", "allowed_percent", *columns])
    for sample in drawings:
        for number, section in enumerate(sample.sections, start=1):
            values = declared(sample, section)
            cells = [significant(values[column]) if column in values else "" for column in columns]
            which = str(number) if len(sample.sections) > 1 else ""
            writer.writerow([sample.name, which, "OUTLINE", sample.units, str(sample.allowed_percent), *cells])
    return text.getvalue().encode("ascii")


def main(arguments: Sequence[str]) -> None:
    """Write the set into the folder given, or into the folder of this script."""
    folder = Path(arguments[0]) if arguments else Path(__file__).parent
    folder.mkdir(parents=True, exist_ok=True)
    # no dates, no random identifiers, no version: has to be set before the first drawing is begun
    options.write_fixed_meta_data_for_testing = True
    # the library warns of every R12 file that it will have no unit, which is meant here
    logging.getLogger("ezdxf").setLevel(logging.ERROR)
    drawings = samples()
    for sample in drawings:
        (folder / sample.name).write_bytes(sample.to_bytes())
    (folder / "schedule.csv").write_bytes(schedule(drawings))


if __name__ == "__main__":
    main(sys.argv[1:])
