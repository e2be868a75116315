"""One section, drawn in every way that a drawing office might: one answer.

The section is made here, curve by curve; what is compared is its area, perimeter and second moments as read from a DXF
file against those of the curves themselves. The ways are drawn in any combination.
"""

from __future__ import annotations

import math
import random
from cmath import phase, rect
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import ezdxf
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from build import analyse_area, section_of
from edgetally.curves import Arc, Bezier, Curve, EllipticArc, Line
from edgetally.section.area import area_properties
from edgetally.section.record import Property

OUTLINE, BLOCK = {"layer": "OUTLINE"}, {"layer": "0"}
KEYS = ("area", "total_perimeter", "second_moment_x", "second_moment_y", "product_of_inertia")
Contour = list[Curve]


# ------------------------------------------------------------------------------------------------------ the section


@st.composite
def sections(draw: Callable[..., Any]) -> list[Contour]:
    """A plate with rounded corners, one side of it swelling as an ellipse or waving as a cubic, and up to two voids."""
    width, height = draw(st.floats(30, 200)), draw(st.floats(30, 200))
    least = min(width, height)
    radii = draw(st.lists(st.sampled_from([0.0, 0.04, 0.11, 0.19]), min_size=4, max_size=4))
    outer = _rounded(0j, width, height, [share * least for share in radii])
    side = next(k for k, piece in enumerate(outer) if isinstance(piece, Line) and piece.start.real > 0.99 * width)
    corner = outer[side]
    kind = draw(st.sampled_from(["line", "line", "line", "ellipse", "cubic", "rational"]))
    if isinstance(corner, Line) and kind != "line":
        outer[side] = _side(corner, kind, draw(st.floats(0.05, 0.3)), draw(st.floats(-0.12, 0.12)) * least)
    contours = [outer]
    for k in range(draw(st.integers(0, 2))):
        middle = complex(width * (0.32 + 0.36 * k), height * draw(st.floats(0.4, 0.6)))
        contours.append(_void(draw, middle, 0.13 * least))
    turn, shift = rect(1.0, draw(st.floats(-math.pi, math.pi))), complex(draw(st.floats(-300, 300)), 40.0)
    return [[curve.moved(turn, shift) for curve in contour] for contour in contours]


def _rounded(at: complex, width: float, height: float, radii: Sequence[float]) -> Contour:
    corners = [at, at + width, at + complex(width, height), at + 1j * height]
    pieces: Contour = []
    for k, r in enumerate(radii):
        along = 1j**k
        start, end = corners[k] + along * r, corners[(k + 1) % 4] - along * radii[(k + 1) % 4]
        pieces.append(Line(start, end))
        if radii[(k + 1) % 4] > 0:
            following = radii[(k + 1) % 4]
            centre = end + 1j * along * following
            pieces.append(Arc(end, end - centre, math.pi / 2))
    return [*pieces[:-1], _to(pieces[-1], pieces[0].start)]


def _to(piece: Curve, end: complex) -> Curve:
    return Line(piece.start, end) if isinstance(piece, Line) else piece


def _side(line: Line, kind: str, swell: float, wave: float) -> Curve:
    chord = line.end - line.start
    if kind == "ellipse":  # half an ellipse on the side as its axis, swelling to the right of it
        half = 0.5 * chord
        curve = EllipticArc.from_axes(line.start + half, -half, swell, 0.0, math.pi)
        return EllipticArc(line.start, curve.u, curve.v, curve.sweep) if isinstance(curve, EllipticArc) else curve
    across = 1j * chord / abs(chord) * wave
    control = (line.start, line.start + chord / 3 + across, line.start + chord * 2 / 3 - across, line.end)
    return Bezier(control, (1.0, 2.0, 0.7, 1.0) if kind == "rational" else None)


def _void(draw: Callable[..., Any], middle: complex, size: float) -> Contour:
    kind = draw(st.sampled_from(["circle", "slot", "box", "ellipse"]))
    if kind == "circle":
        return [Arc.from_centre(middle, size, draw(st.floats(-3, 3)), 2 * math.pi)]
    if kind == "ellipse":
        major = rect(size, draw(st.floats(-3, 3)))
        return [EllipticArc.from_axes(middle, major, draw(st.floats(0.3, 0.9)), 0.0, 2 * math.pi)]
    radius = 0.4 * size if kind == "slot" else 0.0
    return _rounded(middle - complex(0.7, 0.5) * size, 1.4 * size, size, [radius] * 4)


# ------------------------------------------------------------------------------------------------------ how it is drawn


@dataclass(frozen=True)
class Way:
    """How the section is drawn. `jitter` [mm] is by how much ends miss each other, below the join gap of 0.01 mm."""

    form: str
    blocks: bool
    binary: bool
    r12: bool
    doubled: bool
    split: bool
    strays: bool
    jitter: float
    seed: int


WAYS = st.builds(
    Way,
    st.sampled_from(["loose", "loose", "polyline"]),
    *[st.booleans()] * 6,
    st.sampled_from([0.0, 0.009, 0.002]),
    st.integers(0, 2**16),
)


def written(path: Path, contours: Sequence[Contour], way: Way) -> Path:
    chance = random.Random(way.seed)
    plain = all(isinstance(curve, Line | Arc) for contour in contours for curve in contour)
    version = "R12" if way.r12 and plain else chance.choice(["R2000", "R2010", "R2018"])
    document = ezdxf.new(version)
    document.header["$INSUNITS"] = 4
    for name in ("OUTLINE", "SCRAP"):
        document.layers.add(name)
    space = document.modelspace()
    target, attributes = space, OUTLINE
    contours = [list(contour) for contour in contours]
    if way.blocks:
        target, attributes = document.blocks.new("PART"), BLOCK
        back, shift = _references(document, chance)
        contours = [[curve.moved(1 / back, -shift / back) for curve in contour] for contour in contours]
    if way.split:
        contours = [[part for curve in contour for part in _parts(curve, chance)] for contour in contours]
    if way.form == "polyline":
        for contour in contours * (2 if way.doubled else 1):
            _write_run(target, contour, attributes, version)
    else:
        pieces = [_missing(curve, way.jitter, chance) for contour in contours for curve in contour]
        if way.doubled:
            pieces += chance.sample(pieces, 1 + len(pieces) // 3)
        chance.shuffle(pieces)
        for curve in pieces:
            turned = chance.random() < 0.5
            _write(target, curve.reversed() if turned else curve, attributes, version)
    if way.strays:
        space.add_line((-500, 40), (500, 40), dxfattribs={"layer": "SCRAP"})
        space.add_circle((10, 50), 30, dxfattribs={"layer": "SCRAP"})
    document.saveas(path, fmt="bin" if way.binary else "asc")
    return path


def _references(document: Any, chance: random.Random) -> tuple[complex, complex]:
    """Put PART into WHOLE mirrored in x, and WHOLE into model space mirrored in y; return the factor and the shift of
    z → factor·z + shift that both do together."""
    first, second = chance.uniform(-180, 180), chance.choice([0.0, 90.0, chance.uniform(-180, 180)])
    p, q = complex(chance.uniform(-50, 50), 7), complex(-11, chance.uniform(-50, 50))
    whole = document.blocks.new("WHOLE")
    whole.add_blockref("PART", (p.real, p.imag), dxfattribs=BLOCK | {"xscale": -1.0, "rotation": first})
    place = OUTLINE | {"yscale": -1.0, "rotation": second}
    document.modelspace().add_blockref("WHOLE", (q.real, q.imag), dxfattribs=place)
    turn = rect(1.0, math.radians(second))
    return -turn * rect(1.0, -math.radians(first)), turn * p.conjugate() + q


def _parts(curve: Curve, chance: random.Random) -> list[Curve]:
    one, other = curve.split(chance.uniform(0.3, 0.7))
    return [one, *other.split(0.5)] if chance.random() < 0.5 else [one, other]


def _missing(curve: Curve, jitter: float, chance: random.Random) -> Curve:
    """Let the end of a curve miss its place, by a similarity about its start; one that is closed stays closed."""
    chord = curve.end - curve.start
    if jitter == 0.0 or abs(chord) < 20 * jitter:
        return curve
    factor = (chord + rect(jitter * chance.random(), chance.uniform(0, 6.3))) / chord
    return curve.moved(factor, curve.start - factor * curve.start)


def _write_run(space: Any, contour: Contour, attributes: dict[str, str], version: str) -> None:
    """Write a contour as polylines, closed where it is all lines and arcs, with other entities between open ones."""
    bent = [k for k, curve in enumerate(contour) if not isinstance(curve, Line | Arc)]
    if not bent and len(contour) > 1:
        _polyline(space, contour, True, attributes, version)
        return
    first = bent[0] if bent else 0
    simple: Contour = []
    for curve in [*contour[first:], *contour[:first]]:
        if isinstance(curve, Line | Arc) and len(contour) > 1:
            simple.append(curve)
            continue
        if simple:
            _polyline(space, simple, False, attributes, version)
        simple = []
        _write(space, curve, attributes, version)
    if simple:
        _polyline(space, simple, False, attributes, version)


def _polyline(space: Any, run: Contour, closed: bool, attributes: dict[str, str], version: str) -> None:
    vertices = [(c.start.real, c.start.imag, math.tan(c.sweep / 4) if isinstance(c, Arc) else 0.0) for c in run]
    if not closed:
        vertices.append((run[-1].end.real, run[-1].end.imag, 0.0))
    add = space.add_polyline2d if version == "R12" else space.add_lwpolyline
    add(vertices, format="xyb", close=closed, dxfattribs=attributes)


def _write(space: Any, curve: Curve, attributes: dict[str, str], version: str) -> None:
    if isinstance(curve, Line):
        space.add_line(_xy(curve.start), _xy(curve.end), dxfattribs=attributes)
    elif isinstance(curve, Arc):
        centre = _xy(curve.start - curve.spoke)
        if abs(curve.sweep) >= 2 * math.pi:
            space.add_circle(centre, curve.radius, dxfattribs=attributes)
            return
        begin = math.degrees(phase(curve.spoke))
        angles = sorted((begin, begin + math.degrees(curve.sweep)))
        space.add_arc(centre, curve.radius, *angles, dxfattribs=attributes)
    elif isinstance(curve, EllipticArc):
        arc = curve if curve.sweep > 0 else curve.reversed()
        major, ratio = abs(arc.u) + abs(arc.v), (abs(arc.u) - abs(arc.v)) / (abs(arc.u) + abs(arc.v))
        axis = rect(major, 0.5 * (phase(arc.u) + phase(arc.v)))
        begin = 0.5 * (phase(arc.u) - phase(arc.v))
        centre = _xy(arc.start - arc.u - arc.v)
        space.add_ellipse(centre, _xy(axis), ratio, begin, begin + arc.sweep, dxfattribs=attributes)
    else:
        assert isinstance(curve, Bezier)
        spline = space.add_spline(degree=3, dxfattribs=attributes)
        spline.control_points = [(p.real, p.imag, 0.0) for p in curve.control]
        spline.knots = [0.0] * 4 + [1.0] * 4
        if curve.weights is not None:
            spline.weights = list(curve.weights)


def _xy(z: complex) -> tuple[float, float]:
    return z.real, z.imag


# ------------------------------------------------------------------------------------------------------ one answer


@settings(deadline=None, max_examples=60)
@given(sections(), WAYS)
def test_a_section_drawn_in_any_way_gives_one_answer(
    tmp_path_factory: pytest.TempPathFactory, contours: list[Contour], way: Way
) -> None:
    true = area_properties(section_of([curve for contour in contours for curve in contour])).properties
    path = written(tmp_path_factory.mktemp("way") / "way.dxf", contours, way)
    analysis = analyse_area(path, layer="OUTLINE", units="mm")  # R12 names no unit
    (section,) = analysis.sections
    assert len(section.drawn[0].voids) == len(contours) - 1
    assert [f.code for f in analysis.findings if f.severity != "note"] == []
    effect = analysis.join_effect
    size = max(_value(true, "width"), _value(true, "height"))
    assert effect is None or (way.form == "loose" and way.jitter > 0)
    for key in KEYS:
        a, b = _value(true, key), _value(section.properties, key)
        power = section.properties[key].unit.power
        natural = _value(true, "polar_moment") if key == "product_of_inertia" else abs(a)
        allowed = 1e-11 * natural
        if effect is not None:
            # each join can move each coordinate by its gap
            gaps = 2 * effect.count * effect.widest
            allowed += {2: effect.area, 4: effect.second_moment, 1: gaps}[power]
        assert abs(a - b) <= allowed, (key, a, b, size)


def _value(properties: Any, key: str) -> float:
    prop: Property = properties[key]
    assert prop.value is not None
    return prop.value
