"""What shops really send, from the file to the answer or the refusal: kinds of entities, and what a refusal offers."""

from __future__ import annotations

import json
import math
import re
from collections.abc import Callable
from itertools import pairwise
from pathlib import Path
from typing import Any

import ezdxf
import numpy as np
import pytest
from numpy.polynomial import Polynomial

from build import analyse_area as analyse
from command import run
from drawings import UNSET, drawing, square
from edgetally import Analysis, DrawingError, EdgetallyError, OutlineError
from edgetally.drawing.layers import NEVER_PLOTTED

OUTLINE = {"layer": "OUTLINE"}


def value(analysis: Analysis, key: str = "area") -> float:
    found = analysis.sections[0].properties[key].value
    assert found is not None
    return found


def lines(space: Any, *points: tuple[float, float], layer: str = "OUTLINE") -> None:
    for a, b in pairwise(points):
        space.add_line(a, b, dxfattribs={"layer": layer})


# ------------------------------------------------------------------------------------------------------------- hatches


@pytest.mark.parametrize("up", [1, -1])
@pytest.mark.parametrize("ccw", [True, False])
@pytest.mark.parametrize("order", [(0, 1, 2, 3), (2, 0, 3, 1)])
def test_a_hatch_of_all_four_kinds_of_edges(tmp_path: Path, ccw: bool, up: int, order: tuple[int, ...]) -> None:
    """40 × 20, half a circle of 10 on the right, half an ellipse of 20 and 10 on top, a parabola of sagitta 6 on the
    left: 800 + 50π + 100π − ⅔·20·6. Edges in any order, arcs in either sense, the hatch seen from below too."""

    def draw(space: Any) -> None:
        filled = space.add_hatch(dxfattribs=OUTLINE | {"extrusion": (0, 0, up)})
        path = filled.paths.add_edge_path()
        control = [(0, 20), (12, 10), (0, 0)]  # the parabola's vertex lies half-way to the middle control point
        edges: list[Callable[[], Any]] = [
            lambda: path.add_line((0, 0), (40, 0)),
            lambda: path.add_arc((40, 10), 10, -90, 90, ccw=ccw),
            lambda: path.add_ellipse((20, 20), (20, 0), 0.5, 0, 180, ccw=ccw),
            lambda: path.add_spline(control_points=control, degree=2, knot_values=[0, 0, 0, 1, 1, 1]),
        ]
        for k in order:
            edges[k]()

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE")
    assert value(analysis) == pytest.approx(800 + 150 * math.pi - 80, rel=1e-12)
    assert math.copysign(1, value(analysis, "centroid_x")) == up
    assert [(f.code, f.severity) for f in analysis.findings] == [("hatch-used", "warning")]


def test_a_hatch_with_a_rational_spline_and_one_through_fit_points(tmp_path: Path) -> None:
    """A quarter circle as a rational parabola (weight √½), and a straight run of fit points, which fits exactly."""

    def draw(space: Any) -> None:
        path = space.add_hatch(dxfattribs=OUTLINE).paths.add_edge_path()
        path.add_line((0, 0), (10, 0))
        path.add_spline(
            control_points=[(10, 0), (10, 10), (0, 10)], degree=2, knot_values=[0, 0, 0, 1, 1, 1],
            weights=[1, math.sqrt(0.5), 1],
        )  # fmt: skip
        path.add_spline(fit_points=[(0, 10), (0, 6), (0, 3), (0, 0)], degree=3)

    assert value(analyse(drawing(tmp_path, draw), layer="OUTLINE")) == pytest.approx(25 * math.pi, rel=1e-12)


# ------------------------------------------------------------------------------------------------------------- splines


def bezier_area(control: list[complex]) -> float:
    """Half ∮(x dy − y dx) over a closed Bézier curve by numpy's polynomials, from Bernstein's own definition."""
    n = len(control) - 1
    t, s = Polynomial([0, 1]), Polynomial([1, -1])
    terms = [math.comb(n, k) * s ** (n - k) * t**k for k in range(n + 1)]
    x, y = (sum((float(part) * b for part, b in zip(parts, terms, strict=True)), Polynomial([0.0]))
            for parts in ([c.real for c in control], [c.imag for c in control]))  # fmt: skip
    return 0.5 * float((x * y.deriv() - y * x.deriv()).integ()(1.0))


@pytest.mark.parametrize("degree", [1, 2, 3, 4, 5])
@pytest.mark.parametrize("weights", [False, True])
def test_a_clamped_spline_of_each_degree_closed_by_a_line(tmp_path: Path, degree: int, weights: bool) -> None:
    control = [complex(50 * math.cos(math.pi * k / degree), 40 * math.sin(math.pi * k / degree)) for k in range(degree)]
    control.append(-50 - 5j)

    def draw(space: Any) -> None:
        spline = space.add_spline(degree=degree, dxfattribs=OUTLINE)
        spline.control_points = [(p.real, p.imag, 0) for p in control]
        spline.knots = [0.0] * (degree + 1) + [7.0] * (degree + 1)
        if weights:  # all alike: the same curve
            spline.weights = [2.5] * (degree + 1)
        if degree > 1:
            lines(space, (-50, -5), (50, 0))
        else:
            lines(space, (-50, -5), (0, -60), (50, 0))

    closing = 0.5 * ((-50 - 5j).conjugate() * (50 + 0j)).imag
    if degree == 1:
        closing = 0.5 * (((-50 - 5j).conjugate() * -60j).imag + ((60j) * 50).imag)
    area = value(analyse(drawing(tmp_path, draw), layer="OUTLINE"))
    assert area == pytest.approx(abs(bezier_area(control) + closing), rel=1e-12)


@pytest.mark.parametrize("flags", [0, 1, 2, 3, 11])
@pytest.mark.parametrize("degree", [2, 3, 4, 5])
def test_a_closed_spline_whatever_its_flags_say(tmp_path: Path, degree: int, flags: int) -> None:
    """The same unclamped, wrapped control points: the curve lives on [knots[degree], knots[count]], flags aside. Area
    by the library's own evaluation on fine chords, extrapolated (n and 2n, second order)."""
    ring = [(30 * math.cos(k * math.tau / 9), (30 + 5 * (k % 3)) * math.sin(k * math.tau / 9)) for k in range(9)]
    points = [(*p, 0.0) for p in ring + ring[:degree]]
    knots = [float(k) for k in range(len(points) + degree + 1)]

    def draw(space: Any) -> None:
        spline = space.add_spline(degree=degree, dxfattribs=OUTLINE)
        spline.control_points, spline.knots = points, knots
        spline.dxf.flags = flags

    def chords(n: int) -> float:
        curve = ezdxf.math.BSpline(points, order=degree + 1, knots=knots)
        z = np.array([complex(p.x, p.y) for p in curve.points(np.linspace(degree, len(points), n, endpoint=False))])
        return 0.5 * float((z.conj() * np.roll(z, -1)).imag.sum())

    area = value(analyse(drawing(tmp_path, draw), layer="OUTLINE"))
    coarse, fine = chords(2 * 9 * 40), chords(4 * 9 * 40)
    assert area == pytest.approx(abs(fine + (fine - coarse) / 3), rel=1e-8)


def test_fit_points_with_end_tangents(tmp_path: Path) -> None:
    """Points and end tangents of one cubic y = x³/100 are fitted by that cubic itself: area under it 100."""

    def draw(space: Any) -> None:
        spline = space.add_spline([(0, 0), (5, 1.25), (10, 10)], dxfattribs=OUTLINE)
        spline.dxf.start_tangent, spline.dxf.end_tangent = (1, 0, 0), (1, 3, 0)
        lines(space, (10, 10), (10, 0), (0, 0))

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE")
    assert value(analysis) == pytest.approx(25, rel=0.05)
    (said,) = [f for f in analysis.findings if f.code == "spline-fitted"]
    assert (said.severity, len(said.handles)) == ("warning", 1)


# ------------------------------------------------------------------------------------------------- other entities


@pytest.mark.parametrize("up", [1, -1])
@pytest.mark.parametrize("kind", ["SOLID", "TRACE", "3DFACE"])
def test_filled_triangles_seen_from_both_sides(tmp_path: Path, kind: str, up: int) -> None:
    """A triangle repeats its third corner (DXF reference)."""

    def draw(space: Any) -> None:
        corners = [(1, 0), (7, 0), (1, 4), (1, 4)]
        if kind == "3DFACE":
            space.add_3dface(corners, dxfattribs=OUTLINE)
        else:
            add = space.add_solid if kind == "SOLID" else space.add_trace
            add(corners, dxfattribs=OUTLINE | {"extrusion": (0, 0, up)})

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE")
    assert value(analysis) == pytest.approx(12, rel=1e-14)
    assert value(analysis, "centroid_x") == pytest.approx(3.0 * (1 if kind == "3DFACE" else up), rel=1e-14)


def test_an_array_of_a_block_is_as_many_outlines(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space.doc.blocks.new("PART"), 10, layer="0")
        array = {"row_count": 2, "column_count": 3, "row_spacing": 20.0, "column_spacing": 30.0}
        space.add_blockref("PART", (5, 5), dxfattribs=OUTLINE | array)

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE", select="each")
    places = sorted((round(value_of(s, "centroid_x")), round(value_of(s, "centroid_y"))) for s in analysis.sections)
    assert places == [(10 + 30 * column, 10 + 20 * row) for column in range(3) for row in range(2)]
    together = analyse(tmp_path / "drawing.dxf", layer="OUTLINE", select="together")
    assert value(together) == pytest.approx(600, rel=1e-14)


def value_of(section: Any, key: str) -> float:
    return float(section.properties[key].value)


def test_an_external_reference_is_named_as_missing(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space)
        space.doc.add_xref_def("frame.dwg", "FRAME")
        space.add_blockref("FRAME", (0, 0), dxfattribs=OUTLINE)

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE")
    (said,) = [f for f in analysis.findings if f.code == "entity-skipped"]
    assert said.severity == "warning"
    assert "external reference FRAME is not in the file: bind it" in said.message
    (handle,) = said.handles
    assert ezdxf.readfile(tmp_path / "drawing.dxf").entitydb[handle].dxftype() == "INSERT"


TILT = {"extrusion": (0, 0.6, 0.8)}
TILTED: dict[str, Callable[[Any], Any]] = {
    "LINE": lambda space: space.add_line((0, 0, 0), (10, 0, 5), dxfattribs=OUTLINE),
    "ARC": lambda space: space.add_arc((0, 0), 5, 0, 90, dxfattribs=OUTLINE | TILT),
    "CIRCLE": lambda space: space.add_circle((0, 0), 5, dxfattribs=OUTLINE | TILT),
    "ELLIPSE": lambda space: space.add_ellipse((0, 0), (5, 0, 3), 0.5, dxfattribs=OUTLINE),
    "LWPOLYLINE": lambda space: space.add_lwpolyline([(0, 0), (9, 0), (9, 9)], dxfattribs=OUTLINE | TILT),
    "POLYLINE": lambda space: space.add_polyline2d([(0, 0), (9, 0), (9, 9)], dxfattribs=OUTLINE | TILT),
    "SPLINE": lambda space: space.add_open_spline([(0, 0, 0), (5, 0, 0), (9, 3, 0), (9, 9, 9)], dxfattribs=OUTLINE),
    "SOLID": lambda space: space.add_solid([(0, 0), (9, 0), (0, 9), (9, 9)], dxfattribs=OUTLINE | TILT),
    "3DFACE": lambda space: space.add_3dface([(0, 0, 0), (9, 0, 0), (9, 9, 4), (0, 9, 4)], dxfattribs=OUTLINE),
}


@pytest.mark.parametrize("kind", TILTED)
def test_a_tilted_entity_is_refused_by_its_handle(tmp_path: Path, kind: str) -> None:
    made: list[Any] = []

    def draw(space: Any) -> None:
        square(space)
        made.append(TILTED[kind](space))

    with pytest.raises(DrawingError, match="outside the plane of the drawing; flatten the drawing") as error:
        analyse(drawing(tmp_path, draw), layer="OUTLINE")
    (finding,) = error.value.findings
    assert (finding.code, finding.handles) == ("not-planar", (made[0].dxf.handle,))
    assert f"{kind} #{made[0].dxf.handle} on layer OUTLINE" in str(error.value)


def test_heights_that_are_rounding_or_constant_are_fine(tmp_path: Path) -> None:
    def draw(space: Any, z: float, slope: float) -> None:
        points = [(0, 0, z), (10, 0, z + slope), (10, 10, z), (0, 10, z + slope)]
        for a, b in zip(points, [*points[1:], points[0]], strict=True):
            space.add_line(a, b, dxfattribs=OUTLINE)

    tiny = analyse(drawing(tmp_path, lambda s: draw(s, 0.0, 1e-10)), layer="OUTLINE")
    assert (value(tiny), tiny.findings) == (pytest.approx(100), ())
    small = analyse(drawing(tmp_path, lambda s: draw(s, 0.0, 1e-7)), layer="OUTLINE")
    assert [(f.code, f.severity) for f in small.findings] == [("not-planar", "note")]
    level = analyse(drawing(tmp_path, lambda s: draw(s, 12.5, 0.0)), layer="OUTLINE")
    assert [(f.code, f.severity) for f in level.findings] == [("not-planar", "note")]
    assert "z = 12.5" in level.findings[0].message


@pytest.mark.parametrize("how", ["own", "layer"])
def test_broken_line_types_are_left_out_and_counted(tmp_path: Path, how: str) -> None:
    """Centre lines, hidden edges and phantom parts, by entity and by layer; full lines of any name are read."""
    broken = ["CENTER", "CENTER2", "CENTERX2", "HIDDEN", "PHANTOM", "DASHED", "DASHDOT", "DOT", "DIVIDE", "BORDER"]

    def draw(space: Any) -> None:
        document = space.doc
        document.linetypes.add("THICK", [0.0], description="a full line by another name")
        space.add_lwpolyline([(0, 0), (50, 0), (50, 50), (0, 50)], close=True,
                             dxfattribs=OUTLINE | {"linetype": "THICK"})  # fmt: skip
        for k, name in enumerate(broken):
            if how == "own":
                space.add_circle((25, 25), 1 + k, dxfattribs=OUTLINE | {"linetype": name})
            else:
                document.layers.add(f"OUTLINE-{name}", linetype=name)
                space.add_circle((25, 25), 1 + k, dxfattribs={"layer": f"OUTLINE-{name}"})

    def standard(space: Any) -> None:
        for name, *_, pattern in ezdxf.tools.standards.linetypes():
            if name not in space.doc.linetypes:
                space.doc.linetypes.add(name, pattern)
        draw(space)

    analysis = analyse(drawing(tmp_path, standard), layer="OUTLINE*")
    assert value(analysis) == pytest.approx(2500)
    reading = analysis.drawing.reading
    assert reading.kinds["CIRCLE"] == (len(broken), 0)
    assert (reading.read, reading.used, len(reading.skips)) == (len(broken) + 1, 1, len(broken))
    assert all(f.severity == "warning" for f in analysis.findings if f.code == "entity-skipped")


def test_the_layer_of_dimension_points_is_counted_and_not_taken(tmp_path: Path) -> None:
    assert NEVER_PLOTTED == "defpoints"

    def draw(space: Any) -> None:
        square(space)
        space.add_point((3, 3), dxfattribs={"layer": "DefPoints"})
        space.add_lwpolyline([(0, 0), (9, 0), (9, 9)], close=True, dxfattribs={"layer": "DefPoints"})

    analysis = analyse(drawing(tmp_path, draw))
    assert analysis.drawing.reading.layers == ("OUTLINE",)
    assert analysis.drawing.reading.elsewhere == 2


# ------------------------------------------------------------------------------------------------------------- refusals


def near_duplicate(space: Any) -> None:
    square(space)
    lines(space, (0, 0.004), (10, 0.004))


def line_over_arc(space: Any) -> None:
    lines(space, (10, 0), (10, 10), (0, 10), (0, 0), (10, 0))
    centre, radius = (5, 5e4), math.hypot(5, 5e4)
    half = math.degrees(math.asin(5 / radius))
    space.add_arc(centre, radius, 270 - half, 270 + half, dxfattribs=OUTLINE)


def void_touching(space: Any) -> None:
    square(space)
    space.add_circle((8, 5), 2, dxfattribs=OUTLINE)


def void_along_an_edge(space: Any) -> None:
    square(space)
    square(space, 4, (0, 3))


def tee(space: Any) -> None:
    square(space)
    lines(space, (4, 0), (4, 6))


def gap(space: Any) -> None:
    lines(space, (0, 0), (10, 0), (10, 10), (0, 10), (0, 0.06))


def wide_gap(space: Any) -> None:
    lines(space, (0, 0), (10, 0), (10, 10), (0, 10), (0, 0.6))


def spike(space: Any) -> None:
    space.add_lwpolyline([(0, 0), (10, 0), (10, 10), (14, 10), (10, 10), (0, 10)], close=True, dxfattribs=OUTLINE)


def bow_tie(space: Any) -> None:
    space.add_lwpolyline([(0, 0), (10, 10), (10, 0), (0, 10)], close=True, dxfattribs=OUTLINE)


def two(space: Any) -> None:
    square(space)
    square(space, 5, (40, 0))


def fan(space: Any) -> None:
    square(space)
    lines(space, (0, 0), (10, 10))


def region(space: Any) -> None:
    square(space)
    space.new_entity("REGION", OUTLINE).sat = ["400 0 1 0"]


def nothing(space: Any) -> None:
    space.add_point((0, 0), dxfattribs=OUTLINE)


def zero_radius(space: Any) -> None:
    square(space)
    space.new_entity("CIRCLE", OUTLINE | {"center": (5, 5), "radius": 0.0})


# what is drawn, the code, where, and what the refusal offers: an option, or what to do in the drawing
REFUSED: list[tuple[Callable[[Any], None], str, complex | None, str]] = [
    (near_duplicate, "branch|crossing|open-chain", None, r"remove|correct|close|trim"),
    (line_over_arc, "branch|crossing", None, r"remove inner lines and doubled curves|correct it in the drawing"),
    (void_touching, "crossing", 10 + 5j, r"correct it in the drawing"),
    (void_along_an_edge, "regions-overlap", 5j, r"correct it in the drawing"),
    (tee, "branch", 4 + 0j, r"trim it, or move it to another layer"),
    (gap, "open-chain", None, r"pass --join-gap 0\.06mm"),
    (wide_gap, "open-chain", None, r"close it in the drawing"),
    (spike, "branch", 10 + 10j, r"remove inner lines and doubled curves"),
    (bow_tie, "crossing", 5 + 5j, r"correct it in the drawing"),
    (two, "several-outlines", 0j, r"--each .* --together .* --pick"),
    (fan, "branch", None, r"remove inner lines and doubled curves, or move them to another layer"),
    (region, "entity-unreadable", None, r"explode it in a CAD program and export again"),
    (nothing, "", None, r"."),
    (zero_radius, "entity-unreadable", None, r"correct it in the drawing, or move it to another layer"),
]


@pytest.mark.parametrize(("draw", "code", "at", "remedy"), REFUSED, ids=lambda p: getattr(p, "__name__", ""))
def test_a_refusal_says_what_where_and_what_to_do(
    tmp_path: Path, draw: Callable[[Any], None], code: str, at: complex | None, remedy: str
) -> None:
    path = drawing(tmp_path, draw)
    with pytest.raises(EdgetallyError) as error:
        analyse(path, layer="OUTLINE")
    message = str(error.value)
    assert re.search(remedy, message), message
    if code:
        finding = error.value.findings[0]
        assert re.fullmatch(code, finding.code)
        assert finding.severity == "error"
        if at is not None:
            assert finding.at is not None
            assert complex(*finding.at) == pytest.approx(at, abs=1e-6)
        if isinstance(error.value, OutlineError) and finding.code != "several-outlines":
            assert finding.handles
            assert all(f"#{handle}" in message for handle in finding.handles)
    exit_code, out, err = run("tally", path, "--layer", "OUTLINE")
    assert (exit_code, out) == (2, "")
    assert err.startswith("edgetally: ")


def test_the_join_gap_that_a_refusal_names_makes_the_command_accept(tmp_path: Path) -> None:
    """Two gaps of different width: the one value named is passed to the command, and the outline is accepted."""

    def draw(space: Any) -> None:
        lines(space, (0, 0), (40, 0), (40, 29.97))
        lines(space, (40, 30), (10, 30))
        space.add_arc((10, 20), 10, 90, 180, dxfattribs=OUTLINE)
        lines(space, (0, 20), (0, 0.083))

    path = drawing(tmp_path, draw)
    code, _, err = run("tally", path, "--layer", "OUTLINE")
    options = set(re.findall(r"--join-gap (\S+mm)", err))
    assert (code, options) == (2, {"0.083mm"})
    code, out, err = run("tally", path, "--layer", "OUTLINE", "--join-gap", options.pop(), "--json")
    assert (code, err) == (1, "")
    document = json.loads(out)
    assert [f["code"] for f in document["findings"]] == ["gap-joined"] * 2
    area = document["sections"][0]["properties"]["area"]["value"]
    assert area == pytest.approx(1200 - 100 * (1 - math.pi / 4), abs=0.1 * 20)


# ---------------------------------------------------------------------------------------------------- survey and markup


def test_survey_says_the_same_as_text_and_as_a_document(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space)
        space.add_circle((5, 5), 2, dxfattribs=OUTLINE)
        space.doc.layers.add("OPEN")
        lines(space, (0, 0), (10, 0), (10, 10), layer="OPEN")
        space.doc.layers.add("GAP")
        lines(space, (0, 0), (10, 0), (10, 10), (0, 0.05), layer="GAP")
        space.doc.layers.add("OLD").off()
        square(space, layer="OLD")

    path = drawing(tmp_path, draw, units=UNSET)
    code, out, err = run("survey", path, "--units", "mm", "--json")
    assert (code, err) == (0, "")
    document = json.loads(out)
    assert document["format"] == "edgetally.survey/1"
    assert document["drawing"]["unit"] == "mm"
    assert document["drawing"]["extents"] == [0.0, 0.0, 10.0, 10.0]
    layers = {layer["name"]: layer for layer in document["layers"]}
    assert {name: layer["verdict"] for name, layer in layers.items()} == {
        "OUTLINE": "usable", "OPEN": "no outline", "GAP": "needs joining",
    }  # fmt: skip
    assert layers["OUTLINE"]["outlines"][0]["voids"] == 1
    assert layers["OUTLINE"]["outlines"][0]["area"] == pytest.approx(100 - 4 * math.pi)
    assert layers["OUTLINE"]["entities"] == {"CIRCLE": 1, "LWPOLYLINE": 1}
    assert (layers["OPEN"]["open_ends"], layers["GAP"]["open_ends"]) == (2, 2)
    assert document["hidden_layers"] == {"OLD": "off"}
    code, text, _ = run("survey", path, "--units", "mm")
    assert code == 0
    for name, layer in layers.items():
        assert f"layer {name}: {layer['verdict']}" in text
    assert "--join-gap 0.05mm" in text
    assert "OLD" in text


def every_kind(space: Any) -> None:
    """Lines, arcs, half an ellipse, a cubic, a rational cubic; voids of a circle, an ellipse, a closed spline."""
    lines(space, (0, 0), (60, 0))
    space.add_arc((60, 20), 20, 270, 90, dxfattribs=OUTLINE)
    space.add_ellipse((45, 40), (15, 0), 0.6, 0, math.pi, dxfattribs=OUTLINE)
    for control, weights in (([(30, 40), (25, 30), (20, 50), (10, 40)], None),
                             ([(10, 40), (-5, 35), (12, 10), (0, 0)], [1, 2.5, 0.6, 1])):  # fmt: skip
        spline = space.add_spline(degree=3, dxfattribs=OUTLINE)
        spline.control_points = [(*p, 0) for p in control]
        spline.knots = [0] * 4 + [1] * 4
        if weights:
            spline.weights = weights
    space.add_circle((65, 20), 5, dxfattribs=OUTLINE)
    space.add_ellipse((45, 25), (7, 3), 0.5, dxfattribs=OUTLINE)
    closed = space.add_spline(degree=3, dxfattribs=OUTLINE)
    ring = [(25 + 6 * math.cos(k * math.tau / 6), 15 + 5 * math.sin(k * math.tau / 6), 0) for k in range(6)]
    closed.control_points, closed.knots = ring + ring[:3], list(range(13))


def test_markup_goes_through_tally_again_to_twelve_digits(tmp_path: Path) -> None:
    path, marked = drawing(tmp_path, every_kind), tmp_path / "marked.dxf"
    code, _, err = run("markup", path, "--layer", "OUTLINE", "-o", marked)
    assert (code, err) == (0, "")
    documents = []
    for drawn, layers in ((path, ["--layer", "OUTLINE"]), (marked, ["--layer", "OUTLINE", "--layer", "VOIDS"])):
        code, out, err = run("tally", drawn, *layers, "--json")
        assert (code, err) == (0, "")
        documents.append(json.loads(out)["sections"][0])
    one, other = documents
    assert [r["voids"] for r in other["regions"]] == [3]
    size = one["properties"]["width"]["value"]
    for key in ("area", "total_perimeter", "centroid_x", "centroid_y", "second_moment_x", "second_moment_y",
                "product_of_inertia", "width", "height"):  # fmt: skip
        a, b = (each["properties"][key] for each in (one, other))
        power = int(a["unit"].partition("^")[2] or 1)
        assert b["value"] == pytest.approx(a["value"], rel=1e-12, abs=1e-12 * size**power), key
