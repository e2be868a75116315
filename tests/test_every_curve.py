"""Every plane curve that DXF has, from the file to exact numbers."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import pytest

from build import analyse_area as analyse
from drawings import drawing, square
from edgetally import Analysis, DrawingError

OUTLINE = {"layer": "OUTLINE"}

# Closed uniform cubic B-spline of six points: area and second moments exact by rational integration (own derivation)
CONTROL = [(40, 0), (30, 30), (0, 36), (-36, 24), (-30, -18), (6, -30)]
CUBIC = {
    "area": 44737 / 15,
    "second_moment_x": 60627087462596 / 98645085,
    "second_moment_y": 730469640040408 / 887805765,
    "product_of_inertia": 2807939391197 / 59187051,
}


def value(analysis: Analysis, key: str) -> float:
    found = analysis.sections[0].properties[key].value
    assert found is not None
    return found


@pytest.mark.parametrize("up", [1, -1])
def test_full_ellipse_turned_and_mirrored(tmp_path: Path, up: int) -> None:
    """A = πab, I = πab³/4 and its turned forms (closed forms of any handbook)."""
    a, b, turn = 50.0, 30.0, 0.35
    major = (a * math.cos(turn), a * math.sin(turn))

    def draw(space: Any) -> None:
        space.add_ellipse((7, -3), major, b / a, dxfattribs=OUTLINE | {"extrusion": (0, 0, up)})

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE")
    low, high = math.pi * a * b**3 / 4, math.pi * a**3 * b / 4
    assert value(analysis, "area") == pytest.approx(math.pi * a * b, rel=1e-14)
    assert value(analysis, "principal_moment_1") == pytest.approx(high, rel=1e-13)
    assert value(analysis, "second_moment_x") == pytest.approx(
        low * math.cos(turn) ** 2 + high * math.sin(turn) ** 2, rel=1e-13
    )
    assert value(analysis, "product_of_inertia") == pytest.approx(0.5 * (high - low) * math.sin(2 * turn), rel=1e-13)
    assert value(analysis, "height") == pytest.approx(2 * math.hypot(a * math.sin(turn), b * math.cos(turn)), rel=1e-14)


@pytest.mark.parametrize("up", [1, -1])
def test_half_ellipse_and_the_sense_of_its_parameter(tmp_path: Path, up: int) -> None:
    """Parameters run counter-clockwise about the extrusion direction, so (0, 0, −1) gives the lower half."""

    def draw(space: Any) -> None:
        space.add_ellipse((0, 0), (50, 0), 0.6, 0, math.pi, dxfattribs=OUTLINE | {"extrusion": (0, 0, up)})
        space.add_line((-50, 0), (50, 0), dxfattribs=OUTLINE)

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE")
    assert value(analysis, "centroid_y") == pytest.approx(up * 4 * 30 / (3 * math.pi), rel=1e-13)


def test_periodic_spline_with_exact_rational_values(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        spline = space.add_spline(degree=3, dxfattribs=OUTLINE)
        spline.control_points = [(*p, 0) for p in CONTROL + CONTROL[:3]]
        spline.knots = list(range(13))

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE")
    for key, expected in CUBIC.items():
        assert value(analysis, key) == pytest.approx(expected, rel=1e-13), key
    assert analysis.severity is None


@pytest.mark.parametrize("degree", [1, 2, 3, 4, 5])
def test_spline_of_any_degree_through_an_affine_block(tmp_path: Path, degree: int) -> None:
    """Area scales by the determinant of the block's scaling."""

    def draw(space: Any, scaled: bool) -> None:
        target = space.doc.blocks.new("PART") if scaled else space
        layer = {"layer": "0"} if scaled else OUTLINE
        spline = target.add_spline(degree=degree, dxfattribs=layer)
        points = CONTROL + CONTROL[:degree]
        spline.control_points = [(*p, 0) for p in points]
        spline.knots = list(range(len(points) + degree + 1))
        if scaled:
            space.add_blockref("PART", (3, 4), dxfattribs=OUTLINE | {"xscale": 2.0, "yscale": -0.7, "rotation": 33.0})

    plain = analyse(drawing(tmp_path, lambda s: draw(s, False)), layer="OUTLINE")
    scaled = analyse(drawing(tmp_path, lambda s: draw(s, True), name="scaled.dxf"), layer="OUTLINE")
    assert value(scaled, "area") == pytest.approx(1.4 * value(plain, "area"), rel=1e-12)


def test_rational_spline_circle(tmp_path: Path) -> None:
    """The nine-point NURBS circle of Piegl and Tiller, The NURBS Book, section 7.5."""
    r, w = 25.0, math.sqrt(0.5)
    points = [(r, 0), (r, r), (0, r), (-r, r), (-r, 0), (-r, -r), (0, -r), (r, -r), (r, 0)]

    def draw(space: Any) -> None:
        spline = space.add_spline(degree=2, dxfattribs=OUTLINE)
        spline.control_points = [(*p, 0) for p in points]
        spline.knots = [0, 0, 0, 1, 1, 2, 2, 3, 3, 4, 4, 4]
        spline.weights = [1, w, 1, w, 1, w, 1, w, 1]

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE")
    assert value(analysis, "area") == pytest.approx(math.pi * r**2, rel=1e-13)
    assert value(analysis, "second_moment_x") == pytest.approx(math.pi * r**4 / 4, rel=1e-13)
    assert value(analysis, "total_perimeter") == pytest.approx(2 * math.pi * r, rel=1e-13)


def test_spline_of_fit_points_only_is_computed_and_said(tmp_path: Path) -> None:
    n, r = 32, 50.0

    def draw(space: Any) -> None:
        points = [(r * math.cos(2 * math.pi * k / n), r * math.sin(2 * math.pi * k / n)) for k in range(n + 1)]
        spline = space.add_spline(points, dxfattribs=OUTLINE)
        spline.dxf.flags = 1

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE")
    # a cubic spline through 32 points of a circle misses it by some 1e-6 of the radius
    assert value(analysis, "area") == pytest.approx(math.pi * r**2, rel=2e-4)
    assert ("spline-fitted", "warning") in [(f.code, f.severity) for f in analysis.findings]


def test_frame_vertices_of_smoothed_polylines_are_left_out(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        line = space.add_polyline2d([(0, 0), (20, 0), (20, 10), (0, 10)], dxfattribs=OUTLINE)
        line.close(True)
        line.dxf.flags |= 4
        frame = space.doc.entitydb
        assert frame is not None
        for point in ((-50, -50), (70, -50)):
            line.append_vertex(point, dxfattribs={"flags": 16})

    assert value(analyse(drawing(tmp_path, draw), layer="OUTLINE"), "area") == pytest.approx(200, rel=1e-15)


@pytest.mark.parametrize("kind", ["SOLID", "TRACE", "3DFACE"])
def test_filled_quadrilaterals_have_their_outline(tmp_path: Path, kind: str) -> None:
    """SOLID and TRACE exchange their third and fourth corner (DXF reference); 3DFACE does not."""
    corners = [(0, 0), (4, 0), (4, 3), (0, 3)]

    def draw(space: Any) -> None:
        if kind == "3DFACE":
            space.add_3dface(corners, dxfattribs=OUTLINE)
        else:
            order = [corners[0], corners[1], corners[3], corners[2]]
            (space.add_solid if kind == "SOLID" else space.add_trace)(order, dxfattribs=OUTLINE)

    assert value(analyse(drawing(tmp_path, draw), layer="OUTLINE"), "area") == pytest.approx(12, rel=1e-15)


def hatch(space: Any, shift: float = 0.0) -> None:
    """A hatch with all four kinds of edges, clockwise arcs among them, and a polyline path as a void."""
    filled = space.add_hatch(dxfattribs=OUTLINE)
    path = filled.paths.add_edge_path()
    path.add_line((0, 0), (40, 0))
    path.add_arc((40, 10), 10, -90, 90)
    path.add_ellipse((20, 20), (20, 0), 0.5, 0, 180)
    path.add_spline(
        control_points=[(0, 20), (-8 + shift, 14), (-8 + shift, 6), (0, 0)], degree=3, knot_values=[0] * 4 + [1] * 4
    )
    filled.paths.add_polyline_path([(10, 5), (15, 5), (15, 10), (10, 10)], is_closed=True)


def curves_like_the_hatch(space: Any) -> None:
    space.add_line((0, 0), (40, 0), dxfattribs=OUTLINE)
    space.add_arc((40, 10), 10, -90, 90, dxfattribs=OUTLINE)
    space.add_ellipse((20, 20), (20, 0), 0.5, 0, math.pi, dxfattribs=OUTLINE)
    spline = space.add_spline(degree=3, dxfattribs=OUTLINE)
    spline.control_points = [(0, 20, 0), (-8, 14, 0), (-8, 6, 0), (0, 0, 0)]
    spline.knots = [0, 0, 0, 0, 1, 1, 1, 1]
    square(space, 5, at=(10, 5))


def test_hatch_as_the_only_source(tmp_path: Path) -> None:
    by_hatch = analyse(drawing(tmp_path, hatch), layer="OUTLINE")
    by_curves = analyse(drawing(tmp_path, curves_like_the_hatch, name="curves.dxf"), layer="OUTLINE")
    assert value(by_hatch, "area") == pytest.approx(value(by_curves, "area"), rel=1e-12)
    assert value(by_hatch, "second_moment_x") == pytest.approx(value(by_curves, "second_moment_x"), rel=1e-12)
    assert [(f.code, f.severity) for f in by_hatch.findings] == [("hatch-used", "warning")]


def test_hatch_beside_curves_is_compared(tmp_path: Path) -> None:
    def draw(space: Any, shift: float) -> None:
        curves_like_the_hatch(space)
        hatch(space, shift)

    same = analyse(drawing(tmp_path, lambda s: draw(s, 0.0)), layer="OUTLINE")
    assert [f.code for f in same.findings] == ["entity-skipped"]
    other = analyse(drawing(tmp_path, lambda s: draw(s, -3.0)), layer="OUTLINE")
    assert [(f.code, f.severity) for f in other.findings if f.code != "entity-skipped"] == [
        ("hatch-differs", "warning")
    ]
    assert value(same, "area") == value(other, "area")


def test_curve_in_a_broken_line_type_is_left_out_with_a_warning(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space)
        space.doc.layers.add("HID", linetype="HIDDEN")
        space.add_circle((5, 5), 2, dxfattribs=OUTLINE | {"linetype": "CENTER"})
        square(space, at=(50, 50), layer="HID")

    path = drawing(tmp_path, draw)
    analysis = analyse(path, layer="OUTLINE")
    assert value(analysis, "area") == pytest.approx(100)
    skipped = [(f.code, f.severity) for f in analysis.findings if f.code != "repaired-file"]
    assert skipped == [("entity-skipped", "warning")]  # HIDDEN is not defined in the file, which is a finding too
    assert analyse(path).drawing.reading.layers == ("OUTLINE",)


def test_defpoints_is_not_taken_without_being_asked(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space)
        square(space, 500, layer="Defpoints")

    path = drawing(tmp_path, draw)
    assert analyse(path).drawing.reading.layers == ("OUTLINE",)
    assert value(analyse(path, layer="defpoints"), "area") == pytest.approx(250000)


@pytest.mark.parametrize("kind", ["REGION", "3DSOLID", "BODY"])
def test_sealed_entities_are_refused_by_name(tmp_path: Path, kind: str) -> None:
    def draw(space: Any) -> None:
        square(space)
        entity = space.new_entity(kind, OUTLINE)
        entity.sat = ["400 0 1 0", "16 unknown"]

    with pytest.raises(DrawingError, match=rf"{kind} #\w+ on layer OUTLINE cannot be read: explode it"):
        analyse(drawing(tmp_path, draw), layer="OUTLINE")


def test_constant_height_is_noted_and_a_step_refused(tmp_path: Path) -> None:
    def flat(space: Any) -> None:
        space.add_lwpolyline([(0, 0), (10, 0), (10, 10)], close=True, dxfattribs=OUTLINE | {"elevation": 25.0})

    def spline(space: Any) -> None:
        curve = space.add_spline(degree=1, dxfattribs=OUTLINE)
        curve.control_points = [(0, 0, 0), (1, 0, 5), (0, 1, 0), (0, 0, 0)]
        curve.knots = [0, 0, 1, 2, 3, 3]

    analysis = analyse(drawing(tmp_path, flat), layer="OUTLINE")
    assert [(f.code, f.severity) for f in analysis.findings] == [("not-planar", "note")]
    with pytest.raises(DrawingError, match="runs from z = 0 to z = 5"):
        analyse(drawing(tmp_path, spline), layer="OUTLINE")
