"""Entities → curves: world coordinates, both mirror signs, and an account in which nothing vanishes."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import ezdxf
import pytest

from build import analyse_area as analyse
from drawings import INCH, drawing, square
from edgetally import DrawingError
from edgetally.drawing.loading import load
from edgetally.drawing.reading import DrawingFile

OUTLINE = {"layer": "OUTLINE"}


def value(path: Path, key: str, **options: Any) -> float:
    found = analyse(path, layer="OUTLINE", **options).sections[0].properties[key].value
    assert found is not None
    return found


def half_disc(space: Any, **attribs: Any) -> None:
    """The right half of the unit disc in the entity's own plane."""
    space.add_arc((0, 0), 1, -90, 90, dxfattribs=OUTLINE | attribs)
    space.add_line((0, -1), (0, 1), dxfattribs=OUTLINE)


def test_arc_angles_run_counter_clockwise(tmp_path: Path) -> None:
    assert value(drawing(tmp_path, half_disc), "centroid_x") == pytest.approx(4 / (3 * math.pi), rel=1e-14)


def test_arc_with_extrusion_down_is_mirrored(tmp_path: Path) -> None:
    """DXF reference, arbitrary axis algorithm: N = (0, 0, −1) gives the x axis (−1, 0, 0)."""
    path = drawing(tmp_path, lambda space: half_disc(space, extrusion=(0, 0, -1)))
    assert value(path, "centroid_x") == pytest.approx(-4 / (3 * math.pi), rel=1e-14)


def test_line_with_extrusion_down_stays(tmp_path: Path) -> None:
    """LINE is stored in world coordinates whatever its extrusion (DXF reference)."""

    def draw(space: Any) -> None:
        for a, b in (((1, 0), (3, 0)), ((3, 0), (3, 1)), ((3, 1), (1, 1)), ((1, 1), (1, 0))):
            space.add_line(a, b, dxfattribs=OUTLINE | {"extrusion": (0, 0, -1)})

    assert value(drawing(tmp_path, draw), "centroid_x") == pytest.approx(2, rel=1e-15)


@pytest.mark.parametrize("kind", ["LWPOLYLINE", "POLYLINE"])
@pytest.mark.parametrize("up", [1, -1])
def test_bulge_and_its_sign(tmp_path: Path, kind: str, up: int) -> None:
    """Bulge 1 is a half circle to the left of the chord turned back: counter-clockwise positive (DXF reference)."""

    def draw(space: Any) -> None:
        attribs = OUTLINE | {"extrusion": (0, 0, up)}
        points = [(0, -1, 1.0), (0, 1, 0.0)]
        if kind == "LWPOLYLINE":
            space.add_lwpolyline(points, format="xyb", close=True, dxfattribs=attribs)
        else:
            line = space.add_polyline2d(points, format="xyb", dxfattribs=attribs)
            line.close(True)

    path = drawing(tmp_path, draw)
    assert value(path, "area") == pytest.approx(math.pi / 2, rel=1e-14)
    assert value(path, "centroid_x") == pytest.approx(up * 4 / (3 * math.pi), rel=1e-14)


def test_last_bulge_counts_only_when_closed(tmp_path: Path) -> None:
    """DXF reference: the bulge of the last vertex bends the closing piece, which an open polyline has not."""

    def draw(space: Any) -> None:
        space.add_lwpolyline([(0, -1, 1.0), (0, 1, 5.0)], format="xyb", dxfattribs=OUTLINE)
        space.add_line((0, 1), (0, -1), dxfattribs=OUTLINE)

    assert value(drawing(tmp_path, draw), "area") == pytest.approx(math.pi / 2, rel=1e-14)


def test_bulge_of_more_than_a_half_turn(tmp_path: Path) -> None:
    bulge = math.tan(math.radians(300) / 4)

    def draw(space: Any) -> None:
        space.add_lwpolyline([(0, 0, bulge), (1, 0, 0)], format="xyb", close=True, dxfattribs=OUTLINE)

    # 300° of the circle whose chord over the missing 60° is 1: radius 1
    expected = 0.5 * (math.radians(300) - math.sin(math.radians(300)))
    assert value(drawing(tmp_path, draw), "area") == pytest.approx(expected, rel=1e-13)


def test_polyline_back_at_its_start_needs_no_closed_flag(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        space.add_lwpolyline([(0, 0), (4, 0), (4, 3), (0, 3), (0, 0)], dxfattribs=OUTLINE)

    assert value(drawing(tmp_path, draw), "area") == pytest.approx(12, rel=1e-15)


def test_closed_flag_with_the_first_vertex_repeated(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        points = [(0, 0), (4, 0), (4, 0), (4, 3), (0, 3), (0, 0)]
        space.add_lwpolyline(points, close=True, dxfattribs=OUTLINE)

    assert value(drawing(tmp_path, draw), "area") == pytest.approx(12, rel=1e-15)


@pytest.mark.parametrize("version", ["R12", "R2000", "R2004", "R2007", "R2010", "R2013", "R2018"])
@pytest.mark.parametrize("binary", [False, True])
def test_every_version_gives_the_same(tmp_path: Path, version: str, binary: bool) -> None:
    document = ezdxf.new(version)
    document.layers.add("OUTLINE")
    space = document.modelspace()
    space.add_polyline2d([(0, 0, 0), (40, 0, 0.3), (40, 30, 0), (0, 30, 0)], format="xyb", dxfattribs=OUTLINE).close(
        True
    )
    space.add_circle((12, 15), 5, dxfattribs=OUTLINE)
    path = tmp_path / "d.dxf"
    document.saveas(path, fmt="bin" if binary else "asc")
    assert path.read_bytes().startswith(b"AutoCAD Binary DXF") == binary
    theta = 4 * math.atan(0.3)
    radius = 30 * (1 + 0.09) / (4 * 0.3)
    expected = 1200 + 0.5 * radius**2 * (theta - math.sin(theta)) - 25 * math.pi
    assert value(path, "area", units="mm") == pytest.approx(expected, rel=1e-14)


def test_account_balances_and_names_every_skip(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space)
        space.add_text("note", dxfattribs=OUTLINE)
        space.add_mtext("note", dxfattribs=OUTLINE)
        space.add_point((1, 1), dxfattribs=OUTLINE)
        space.add_line((20, 0), (30, 0), dxfattribs=OUTLINE | {"invisible": 1})
        space.add_line((5, 5), (5, 5), dxfattribs=OUTLINE)
        space.add_ray((0, 0), (1, 0), dxfattribs=OUTLINE)
        space.add_line((0, 0), (1, 0), dxfattribs={"layer": "NOTES"})

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE")
    entities = analysis.to_dict()["drawing"]["entities"]
    assert entities["read"] == 7
    assert entities["used"] == 1
    assert entities["read"] == entities["used"] + len(entities["skipped"])
    assert entities["on_other_layers"] == 1
    assert sorted(skip["type"] for skip in entities["skipped"]) == ["LINE", "LINE", "MTEXT", "POINT", "RAY", "TEXT"]
    assert all(skip["handle"] and skip["reason"] and skip["layer"] == "OUTLINE" for skip in entities["skipped"])
    severity = {f.message.split(" ")[0]: f.severity for f in analysis.findings}
    assert severity == {"TEXT": "note", "MTEXT": "note", "POINT": "note", "LINE": "note", "RAY": "warning"}
    assert analysis.severity == "warning"


def test_layers_by_wildcard_repeated_and_any_case(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space, layer="OUTLINE")
        space.doc.layers.add("Part-A")
        square(space, at=(20, 0), layer="Part-A")

    path = drawing(tmp_path, draw)
    for layers in (["outline", "PART-?"], ["*"], ["out*", "part-[ab]"]):
        areas = [s.properties["area"].value for s in analyse(path, layer=layers, select="each").sections]
        assert areas == pytest.approx([100, 100])
    assert analyse(path, layer="part-a").drawing.reading.layers == ("Part-A",)


def test_hidden_layer_among_those_named_is_said(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space)
        space.doc.layers.add("OUTLINE-OLD")
        square(space, at=(2, 2), layer="OUTLINE-OLD")
        space.doc.layers.get("OUTLINE-OLD").off()

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE*")
    assert analysis.sections[0].properties["area"].value == pytest.approx(100)
    assert [(f.code, f.severity) for f in analysis.findings] == [("layer-hidden", "warning")]


def test_without_a_layer_the_only_one_with_a_closed_outline(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space)
        space.add_line((0, 0), (50, 0), dxfattribs={"layer": "NOTES"})

    analysis = analyse(drawing(tmp_path, draw))
    assert analysis.drawing.reading.layers == ("OUTLINE",)
    assert [f.code for f in analysis.findings] == ["layer-chosen"]


def test_without_a_layer_and_several_that_would_do(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space)
        square(space, size=200, layer="NOTES")

    with pytest.raises(DrawingError, match="closed outlines are on 2 layers: OUTLINE, NOTES; say which with --layer"):
        analyse(drawing(tmp_path, draw))


def test_without_a_layer_and_none_that_would_do(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        space.add_line((0, 0), (5, 0), dxfattribs=OUTLINE)
        space.add_line((0, 0), (50, 0), dxfattribs={"layer": "NOTES"})

    with pytest.raises(DrawingError, match="no visible layer carries a closed outline"):
        analyse(drawing(tmp_path, draw))


def test_unit_from_header_then_option(tmp_path: Path) -> None:
    path = drawing(tmp_path, lambda space: square(space, 2.0), units=INCH)
    by_header = analyse(path, layer="OUTLINE", out_units="mm")
    assert by_header.drawing.unit_source == "header"
    assert by_header.sections[0].properties["area"].value == pytest.approx(4 * 25.4**2, rel=1e-15)
    assert by_header.sections[0].properties["second_moment_x"].value == pytest.approx(16 / 12 * 25.4**4, rel=1e-14)
    by_option = analyse(path, layer="OUTLINE", units="mm")
    assert (by_option.drawing.unit, by_option.drawing.unit_source) == ("mm", "option")
    assert [(f.code, f.severity) for f in by_option.findings] == [("units-suspect", "note")]


def test_scale_makes_real_lengths(tmp_path: Path) -> None:
    path = drawing(tmp_path, lambda space: square(space, 10, at=(3, 4)))
    plain, doubled = (analyse(path, layer="OUTLINE", scale=s).sections[0].properties for s in (1.0, 2.0))
    for key, power in (("area", 2), ("second_moment_x", 4), ("centroid_x", 1), ("elastic_modulus_x_top", 3)):
        assert doubled[key].value == pytest.approx(2**power * (plain[key].value or 0), rel=1e-14)


def test_line_out_of_the_plane_is_refused(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space)
        space.add_line((0, 0, 0), (0, 5, 3), dxfattribs=OUTLINE)

    with pytest.raises(DrawingError, match=r"LINE #\w+ on layer OUTLINE rises from z = 0 to z = 3"):
        analyse(drawing(tmp_path, draw), layer="OUTLINE")


def test_arc_whose_angles_are_equal_is_refused_and_whole_turns_are_circles(tmp_path: Path) -> None:
    whole = drawing(tmp_path, lambda space: space.add_arc((0, 0), 2, 90, 450, dxfattribs=OUTLINE))
    assert value(whole, "area") == pytest.approx(4 * math.pi, rel=1e-15)
    none = drawing(tmp_path, lambda space: space.add_arc((0, 0), 2, 90, 90, dxfattribs=OUTLINE))
    with pytest.raises(DrawingError, match="starts and ends at the same angle"):
        analyse(none, layer="OUTLINE")


def test_loading_leaves_the_file_alone_and_knows_its_digest(tmp_path: Path) -> None:
    import hashlib

    path = drawing(tmp_path, square)
    before = path.read_bytes()
    assert DrawingFile(load(path)).sha256 == hashlib.sha256(before).hexdigest()
    assert path.read_bytes() == before
