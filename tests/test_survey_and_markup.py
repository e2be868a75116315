"""The commands `survey` and `markup`."""

from __future__ import annotations

import json
import math
from pathlib import Path
from typing import Any

import ezdxf
import pytest

from build import analyse_area as analyse
from command import run
from drawings import UNSET, draw_loose, drawing, square
from edgetally.output.markup import markup_bytes
from edgetally.survey import survey
from outlines import i_section

SAMPLES = Path(__file__).parent.parent / "sample_drawings"
OUTLINE = {"layer": "OUTLINE"}


def test_survey_of_a_shop_drawing_names_the_layer_and_its_outline() -> None:
    found = survey(SAMPLES / "bracket.dxf")
    layers = {layer.name: layer for layer in found.layers}
    assert (found.unit, found.unit_source, found.taken) == ("mm", "header", "OUTLINE")
    assert layers["OUTLINE"].verdict == "usable"
    assert layers["OUTLINE"].kinds == {"CIRCLE": 1, "LWPOLYLINE": 1}
    assert layers["OUTLINE"].regions[0].area == pytest.approx(2826.78373, rel=1e-8)
    assert layers["DIMENSIONS"].verdict == "no outline"
    assert layers["FRAME"].open_ends == 12


def test_survey_text_and_document() -> None:
    code, out, err = run("survey", SAMPLES / "bracket.dxf")
    assert (code, err) == (0, "")
    assert "layer OUTLINE: usable" in out
    assert "`sheet` would take layer OUTLINE" in out
    code, out, _ = run("survey", SAMPLES / "bracket.dxf", SAMPLES / "two-clamps.dxf", "--json")
    documents = [json.loads(line) for line in out.splitlines()]
    assert [d["drawing"]["file"] for d in documents] == ["bracket.dxf", "two-clamps.dxf"]
    assert documents[0]["layer_taken"] == "OUTLINE"
    outlines = {layer["name"]: layer["outlines"] for layer in documents[1]["layers"]}
    assert len(outlines["OUTLINE"]) == 2


def test_survey_says_what_joining_would_take(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        space.add_lwpolyline([(0, 0), (10, 0), (10, 10), (0, 10), (0, 0.06)], dxfattribs=OUTLINE)

    path = drawing(tmp_path, draw)
    layer = survey(path).layers[0]
    assert layer.verdict == "needs joining"
    assert "--join-gap 0.06mm" in layer.reason
    area = analyse(path, layer="OUTLINE", join_gap="0.06mm").sections[0].properties["area"].value
    assert area == pytest.approx(100, abs=0.06 * 10)


def test_survey_without_a_unit_and_with_hidden_layers_and_blocks(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        block = space.doc.blocks.new("PART")
        square(block, layer="0")
        space.add_blockref("PART", (5, 5), dxfattribs=OUTLINE)
        space.doc.layers.add("OLD").off()
        square(space, layer="OLD")

    found = survey(drawing(tmp_path, draw, units=UNSET))
    assert found.unit is None
    assert found.hidden == {"OLD": "off"}
    assert found.blocks == {"PART": 1}
    assert found.taken == "OUTLINE"
    code, out, _ = run("survey", tmp_path / "drawing.dxf")
    assert code == 0
    assert "not said" in out
    assert "--units" in out


def test_survey_of_a_refused_layer_gives_the_reason_and_goes_on(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space)
        space.add_circle((0, 0), 1, dxfattribs={"layer": "NOTES", "extrusion": (0, 0.6, 0.8)})

    layers = {layer.name: layer for layer in survey(drawing(tmp_path, draw)).layers}
    assert layers["OUTLINE"].verdict == "usable"
    assert "outside the plane" in layers["NOTES"].reason


def same(one: Any, other: Any, tolerance: float = 1e-12) -> None:
    """All properties of two sections agree; the direction of an axis counts modulo a half turn."""
    size = one.section.size
    for key, prop in one.properties.items():
        a, b = prop.value, other.properties[key].value
        if key == "principal_angle":
            assert math.sin(math.radians(a - b)) == pytest.approx(0, abs=1e-9)
        elif not key.startswith("elastic_modulus_"):
            assert b == pytest.approx(a, rel=tolerance, abs=tolerance * size**prop.unit.power), key


@pytest.mark.parametrize("name", ["bracket", "purlin-zed", "rail-extrusion", "slotted-tube", "welded-box-girder"])
def test_markup_read_again_gives_the_same_numbers(tmp_path: Path, name: str) -> None:
    analysis = analyse(SAMPLES / f"{name}.dxf", layer="OUTLINE")
    path = tmp_path / "marked.dxf"
    path.write_bytes(markup_bytes(analysis))
    again = analyse(path, layer=["OUTLINE", "VOIDS"])
    assert again.drawing.unit == analysis.drawing.unit
    same(analysis.sections[0], again.sections[0])


def test_markup_of_ellipses_and_splines(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        space.add_ellipse((0, 0), (40, 10), 0.5, 0.3, 0.3 + math.pi, dxfattribs=OUTLINE)
        ends = [
            complex(40 * math.cos(t) - 5 * math.sin(t), 10 * math.cos(t) + 20 * math.sin(t))
            for t in (0.3, 0.3 + math.pi)
        ]
        a, b = ends
        space.add_line((b.real, b.imag), (b.real, b.imag - 40), dxfattribs=OUTLINE)
        spline = space.add_spline(degree=3, dxfattribs=OUTLINE)
        spline.control_points = [(b.real, b.imag - 40, 0), (-20, -90, 0), (30, -60, 0), (a.real, a.imag, 0)]
        spline.knots = [0, 0, 0, 0, 1, 1, 1, 1]
        space.add_ellipse((0, 0), (6, 1), 0.4, dxfattribs=OUTLINE)

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE")
    path = tmp_path / "marked.dxf"
    path.write_bytes(markup_bytes(analysis))
    kinds = {e.dxftype() for e in ezdxf.readfile(path).modelspace().query('*[layer=="OUTLINE"]')}
    assert kinds == {"ELLIPSE", "SPLINE", "LWPOLYLINE"}
    same(analysis.sections[0], analyse(path, layer=["OUTLINE", "VOIDS"]).sections[0])


def test_markup_marks_axes_joins_and_findings_on_layers_of_their_own(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        draw_loose(space, i_section(200, 100, 5.6, 8.5, 12))

    path = tmp_path / "marked.dxf"
    code, out, _ = run("markup", SAMPLES / "purlin-zed.dxf", "--layer", "OUTLINE", "-o", path)
    assert code == 0
    assert f"written: {path}" in out
    space = ezdxf.readfile(path).modelspace()
    by_layer: dict[str, list[Any]] = {}
    for entity in space:
        by_layer.setdefault(entity.dxf.layer, []).append(entity)
    assert set(by_layer) == {"OUTLINE", "CENTROID", "SHEAR CENTRE", "PRINCIPAL AXES", "JOINS"}
    analysis = analyse(SAMPLES / "purlin-zed.dxf", layer="OUTLINE")
    assert len([e for e in by_layer["JOINS"] if e.dxftype() == "CIRCLE"]) == len(analysis.outline.joins)
    axis = next(e for e in by_layer["PRINCIPAL AXES"] if e.dxftype() == "LWPOLYLINE")
    (x0, y0), (x1, y1) = (p[:2] for p in axis.get_points("xy"))
    theta = analysis.sections[0].properties["principal_angle"].value
    assert math.degrees(math.atan2(y1 - y0, x1 - x0)) == pytest.approx(theta, abs=1e-9)
    circle = next(e for e in by_layer["CENTROID"] if e.dxftype() == "CIRCLE")
    assert circle.dxf.center.x == pytest.approx(analysis.sections[0].properties["centroid_x"].value, abs=1e-9)


def test_markup_refuses_to_overwrite_the_drawing(tmp_path: Path) -> None:
    path = drawing(tmp_path, square)
    before = path.read_bytes()
    code, _, err = run("markup", path, "--layer", "OUTLINE", "-o", path)
    assert code == 2
    assert "never overwritten" in err
    assert path.read_bytes() == before
