"""Block references: a drawing and its exploded copy give the same numbers; layers, arrays, limits."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from build import analyse_area as analyse
from build import measure
from drawings import draw_contours, drawing, square
from edgetally import Analysis, DrawingError
from outlines import angle

OUTLINE = {"layer": "OUTLINE"}
SHAPE = angle(100, 60, 8, 10, 5)


def props(analysis: Analysis) -> dict[str, float]:
    return {key: prop.value or 0.0 for key, prop in analysis.sections[0].properties.items()}


def agree(one: dict[str, float], other: dict[str, float], tolerance: float = 1e-11) -> None:
    size = one["width"] + one["height"]
    for key, value in one.items():
        if key == "principal_angle":
            assert math.sin(math.radians(value - other[key])) == pytest.approx(0, abs=1e-9)
        elif key.startswith(("area", "second", "product", "principal_moment", "total", "width", "height")):
            power = {"area": 2, "tota": 1, "widt": 1, "heig": 1}.get(key[:4], 4)
            assert other[key] == pytest.approx(value, rel=tolerance, abs=tolerance * size**power), key


def scales(*factors: float) -> st.SearchStrategy[dict[str, float]]:
    return st.fixed_dictionaries({
        "xscale": st.sampled_from(factors),
        "yscale": st.sampled_from(factors),
        "rotation": st.sampled_from([0.0, 90.0, 30.0, -77.7]),
    })  # fmt: skip


def nested(space: Any, outer: dict[str, Any], inner: dict[str, Any]) -> Any:
    part, whole = space.doc.blocks.new("PART", base_point=(5, 7)), space.doc.blocks.new("WHOLE")
    draw_contours(part, SHAPE, layer="0")
    whole.add_blockref("PART", (11, -3), dxfattribs={"layer": "0"} | inner)
    return space.add_blockref("WHOLE", (100, 50), dxfattribs=OUTLINE | outer)


@settings(max_examples=15, deadline=None)
@given(st.sampled_from([1.0, -1.0, 2.0]), st.booleans(), scales(1.0, -1.0, 2.0, 0.5), st.booleans())
def test_nested_blocks_equal_their_exploded_copy(
    tmp_path_factory: pytest.TempPathFactory, outer: float, mirror: bool, inner: dict[str, float], flip: bool
) -> None:
    """Arcs under unequal scales become elliptic arcs, exactly; the library's own explosion is the other route."""
    folder = tmp_path_factory.mktemp("blocks")
    around = {"xscale": outer, "yscale": -outer if mirror else outer, "rotation": 30.0}
    around |= {"extrusion": (0, 0, -1)} if flip else {}

    def explode(space: Any) -> None:
        for reference in nested(space, around, inner).explode():
            reference.explode()

    opened = analyse(drawing(folder, lambda s: nested(s, around, inner)), layer="OUTLINE")
    exploded = analyse(drawing(folder, explode, name="exploded.dxf"), layer="0")
    agree(props(opened), props(exploded), 1e-9)


@settings(max_examples=15, deadline=None)
@given(scales(1.0, -1.0, 2.0, 0.5, -3.0), scales(1.0, -1.0, 2.0, 0.5, 3.0))
def test_unequal_scales_at_both_levels_against_plain_matrices(
    tmp_path_factory: pytest.TempPathFactory, outer: dict[str, float], inner: dict[str, float]
) -> None:
    """The library's explosion of nested unequal scales is wrong where the inner one is turned (ezdxf 1.4.5 leaves the
    order of turning and scaling out of account), so this route multiplies the matrices of the DXF reference itself."""

    def matrix(reference: dict[str, float]) -> np.ndarray:
        c, s = math.cos(math.radians(reference["rotation"])), math.sin(math.radians(reference["rotation"]))
        return np.array([[c, -s], [s, c]]) @ np.diag([reference["xscale"], reference["yscale"]])

    plain = measure(SHAPE)
    tensor = np.array([
        [plain["second_moment_y"].value, plain["product_of_inertia"].value],
        [plain["product_of_inertia"].value, plain["second_moment_x"].value],
    ])  # fmt: skip
    m = matrix(outer) @ matrix(inner)
    stretch = abs(np.linalg.det(m))
    expected = stretch * m @ tensor @ m.T  # ∫zzᵀ dA under z → m·z
    centroid = np.array([plain["centroid_x"].value, plain["centroid_y"].value])
    place = m @ (centroid - [5, 7]) + matrix(outer) @ [11, -3] + [100, 50]
    folder = tmp_path_factory.mktemp("blocks")
    found = props(analyse(drawing(folder, lambda s: nested(s, outer, inner)), layer="OUTLINE"))
    assert found["area"] == pytest.approx(stretch * (plain["area"].value or 0.0), rel=1e-11)
    assert [found["centroid_x"], found["centroid_y"]] == pytest.approx(place, abs=1e-9)
    size = np.trace(expected)
    assert found["second_moment_y"] == pytest.approx(expected[0, 0], abs=1e-11 * size)
    assert found["product_of_inertia"] == pytest.approx(expected[0, 1], abs=1e-11 * size)
    assert found["second_moment_x"] == pytest.approx(expected[1, 1], abs=1e-11 * size)


def test_layer_zero_inside_a_block_is_the_layer_of_the_reference(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        block = space.doc.blocks.new("PART")
        square(block, layer="0")
        square(block, at=(30, 0), layer="NOTES")
        space.add_blockref("PART", (0, 0), dxfattribs=OUTLINE)

    path = drawing(tmp_path, draw)
    for layer in ("OUTLINE", "NOTES"):
        analysis = analyse(path, layer=layer)
        assert props(analysis)["area"] == pytest.approx(100)
        assert (analysis.drawing.reading.read, analysis.drawing.reading.used) == (1, 1)


def test_array_of_a_block_turns_with_the_reference(tmp_path: Path) -> None:
    """DXF reference, INSERT: spacing is along the turned axes and is not scaled."""

    def draw(space: Any) -> None:
        block = space.doc.blocks.new("PART")
        square(block, size=1, layer="0")
        attribs = {"row_count": 2, "row_spacing": 5.0, "column_count": 3, "column_spacing": 4.0, "rotation": 90.0}
        space.add_blockref("PART", (0, 0), dxfattribs=OUTLINE | attribs | {"xscale": 2.0, "yscale": 2.0})

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE", select="each")
    corners = sorted((round(s.drawn[0].box[0], 9) + 0.0, round(s.drawn[0].box[1], 9) + 0.0) for s in analysis.sections)
    assert corners == sorted((-5.0 * row - 2.0, 4.0 * column) for row in range(2) for column in range(3))
    assert analysis.drawing.reading.read == 6


def test_attributes_are_skipped_and_accounted_for(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        block = space.doc.blocks.new("PART")
        square(block, layer="0")
        reference = space.add_blockref("PART", (0, 0), dxfattribs=OUTLINE)
        reference.add_attrib("MARK", "A-1", (2, 2), dxfattribs=OUTLINE)

    reading = analyse(drawing(tmp_path, draw), layer="OUTLINE").drawing.reading
    assert [(s.source.entity, s.harmless) for s in reading.skips] == [("ATTRIB", True)]
    assert reading.read == reading.used + len(reading.skips) == 2


def test_by_block_line_type_is_the_reference_s(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        block = space.doc.blocks.new("PART")
        block.add_circle((5, 5), 2, dxfattribs={"layer": "0", "linetype": "BYBLOCK"})
        square(space)
        space.add_blockref("PART", (0, 0), dxfattribs=OUTLINE | {"linetype": "CENTER"})

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE")
    assert props(analysis)["area"] == pytest.approx(100)
    assert [f.severity for f in analysis.findings] == ["warning"]
    assert "line type CENTER has gaps" in analysis.findings[0].message


def test_reference_on_a_frozen_layer_hides_what_is_in_it(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        block = space.doc.blocks.new("PART")
        block.add_circle((5, 5), 2, dxfattribs=OUTLINE)
        space.doc.layers.add("AWAY").freeze()
        space.add_blockref("PART", (0, 0), dxfattribs={"layer": "AWAY"})
        square(space)

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE")
    assert props(analysis)["area"] == pytest.approx(100)
    assert "frozen layer AWAY" in analysis.findings[0].message


def test_missing_external_reference_is_named(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space)
        space.add_blockref("ELSEWHERE", (0, 0), dxfattribs=OUTLINE)

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE")
    assert "external reference ELSEWHERE is not in the file" in analysis.findings[0].message
    assert analysis.severity == "warning"


def test_tilted_reference_is_refused_by_handle(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        block = space.doc.blocks.new("PART")
        square(block, layer="0")
        space.add_blockref("PART", (0, 0), dxfattribs=OUTLINE | {"extrusion": (0, 0.6, 0.8)})

    with pytest.raises(DrawingError, match=r"INSERT #\w+ of block PART on layer OUTLINE lies outside the plane"):
        analyse(drawing(tmp_path, draw), layer="OUTLINE")


def test_clipped_reference_is_refused_by_handle(tmp_path: Path) -> None:
    from ezdxf.xclip import XClip

    def draw(space: Any) -> None:
        block = space.doc.blocks.new("PART")
        square(block, layer="0")
        reference = space.add_blockref("PART", (0, 0), dxfattribs=OUTLINE)
        XClip(reference).set_block_clipping_path([(0, 0), (5, 5)])

    with pytest.raises(DrawingError, match=r"INSERT #\w+ of block PART on layer OUTLINE is clipped"):
        analyse(drawing(tmp_path, draw), layer="OUTLINE")


@pytest.mark.parametrize(
    ("attribs", "word"),
    [({"row_count": 32767, "column_count": 32767, "row_spacing": 1.0, "column_spacing": 1.0}, "more than"), ({}, "")],
)
def test_hostile_arrays_and_doubling_are_refused_before_they_are_opened(
    tmp_path: Path, attribs: dict[str, Any], word: str
) -> None:
    def draw(space: Any) -> None:
        blocks = space.doc.blocks
        square(blocks.new("B0"), layer="0")
        for k in range(1, 30):
            block = blocks.new(f"B{k}")
            for x in (0, 20):
                block.add_blockref(f"B{k - 1}", (x, 0), dxfattribs={"layer": "0"})
        space.add_blockref("B0" if attribs else "B29", (0, 0), dxfattribs=OUTLINE | attribs)

    with pytest.raises(DrawingError, match="open to"):
        analyse(drawing(tmp_path, draw), layer="OUTLINE")
    assert word in "more than"


def test_a_block_that_holds_itself_is_refused(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        blocks = space.doc.blocks
        one, two = blocks.new("ONE"), blocks.new("TWO")
        square(one, layer="0")
        one.add_blockref("TWO", (0, 0))
        two.add_blockref("ONE", (0, 0))
        space.add_blockref("ONE", (0, 0), dxfattribs=OUTLINE)

    with pytest.raises(DrawingError, match="contains itself, through one > two > one"):
        analyse(drawing(tmp_path, draw), layer="OUTLINE")


def test_sources_inside_a_block_are_named_with_it(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        block = space.doc.blocks.new("PART")
        block.add_lwpolyline([(0, 0), (10, 0), (10, 10)], dxfattribs={"layer": "0"})
        space.add_blockref("PART", (0, 0), dxfattribs=OUTLINE)

    with pytest.raises(Exception, match=r"LWPOLYLINE #\w+ in block PART"):
        analyse(drawing(tmp_path, draw), layer="OUTLINE")
