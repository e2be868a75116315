"""The pictures: nothing overlaps or leaves its frame, whatever the section's proportions and the angle of its axes."""

from __future__ import annotations

import math
from itertools import combinations
from pathlib import Path
from xml.etree import ElementTree

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from build import analyse_once as analyse
from build import section_of
from edgetally.curves import Arc, Line
from edgetally.output.figure import section_picture
from edgetally.output.mohr import mohr_picture
from edgetally.output.paper import BOLD, REGULAR, register_fonts, symbol_width, text_width
from edgetally.output.pens import DRAWING_AXIS, MATERIAL, PRINCIPAL_AXIS, Label, Picture
from edgetally.output.pens import Path as Stroke
from edgetally.output.placing import STRIP, round_scale
from edgetally.output.svg import figure_svg, picture_svg
from edgetally.results import SectionResult
from edgetally.section.area import area_properties
from edgetally.section.connected import ConnectedResult

SAMPLES = Path(__file__).parent.parent / "sample_drawings"
WIDTH, HEIGHT = 320.0, 300.0
Box = tuple[float, float, float, float]


def result_of(curves: list[Line | Arc], unit: str = "mm") -> SectionResult:
    section = section_of(curves, unit)
    result = area_properties(section)
    connected = ConnectedResult({}, None, ())
    return SectionResult(section, section.regions, result, connected, dict(result.properties), result.findings, unit)


def bar(width: float, height: float, angle: float, notch: float = 0.0, at: complex = 0j) -> SectionResult:
    """A rectangle, or an angle-like shape where a corner is cut out by `notch` of its sides, turned by `angle`."""
    corners = [0j, complex(width, 0), complex(width, height), complex(0, height)]
    if notch:
        cut = complex(width * (1 - notch), height * (1 - notch))
        corners[2:3] = [complex(width, cut.imag), cut, complex(cut.real, height)]
    turn = complex(math.cos(angle), math.sin(angle))
    points = [at + turn * c for c in corners]
    return result_of([Line(a, b) for a, b in zip(points, [*points[1:], points[0]], strict=True)])


def label_box(label: Label) -> Box:
    register_fonts()
    font = BOLD if label.bold else REGULAR
    width = symbol_width(label.text, label.size, font) if label.symbol else text_width(label.text, label.size, font)
    x = label.at.real - {"start": 0.0, "middle": 0.5, "end": 1.0}[label.anchor] * width
    return x, label.at.imag, x + width, label.at.imag + 0.73 * label.size


def labels_of(picture: Picture) -> list[Label]:
    return [item for item in picture.items if isinstance(item, Label)]


def check_labels(picture: Picture) -> None:
    boxes = [(label.text, label_box(label)) for label in labels_of(picture)]
    for text, (x0, y0, x1, y1) in boxes:
        assert x0 >= 0, text
        assert y0 >= 0, text
        assert x1 <= picture.width, text
        assert y1 <= picture.height, text
    for (one, a), (other, b) in combinations(boxes, 2):
        apart = a[2] <= b[0] or b[2] <= a[0] or a[3] <= b[1] or b[3] <= a[1]
        assert apart, f"{one} overlaps {other}"


shapes = st.builds(
    bar,
    st.floats(1.0, 2000.0),
    st.floats(1.0, 2000.0),
    st.floats(-math.pi, math.pi),
    st.sampled_from([0.0, 0.3, 0.8, 0.95]),
)


@settings(max_examples=150, deadline=None)
@given(shapes)
def test_labels_of_the_figure_never_overlap_or_leave_the_frame(section: SectionResult) -> None:
    check_labels(section_picture(section, WIDTH, HEIGHT))


@settings(max_examples=150, deadline=None)
@given(shapes)
def test_labels_of_the_circle_never_overlap_or_leave_the_frame(section: SectionResult) -> None:
    check_labels(mohr_picture(section, 176.0, 240.0))


@settings(max_examples=60, deadline=None)
@given(shapes)
def test_axis_letters_stand_clear_of_the_section(section: SectionResult) -> None:
    """No letter of an axis, and not θ's, lies on the material."""
    picture = section_picture(section, WIDTH, HEIGHT)
    material = next(i for i in picture.items if isinstance(i, Stroke) and i.style is MATERIAL)
    points = [curve.start for run in material.runs for curve in run]
    x0, x1 = min(p.real for p in points), max(p.real for p in points)
    y0, y1 = min(p.imag for p in points), max(p.imag for p in points)
    for label in labels_of(picture):
        if label.text in ("x", "y", "1", "2"):
            a = label_box(label)
            assert a[2] <= x0 or x1 <= a[0] or a[3] <= y0 or y1 <= a[1], label.text


def test_both_pairs_of_axes_cross_in_the_centroid_at_the_right_angles() -> None:
    section = bar(60, 100, 0.3, notch=0.8)
    picture = section_picture(section, WIDTH, HEIGHT)
    theta = section.result.axes.angle.value
    for style, angle in ((DRAWING_AXIS, 0.0), (PRINCIPAL_AXIS, theta)):
        lines = [i.runs[0][0] for i in picture.items if isinstance(i, Stroke) and i.style is style]
        directions = [math.atan2((c.end - c.start).imag, (c.end - c.start).real) for c in lines]
        assert directions == pytest.approx([angle, angle + math.pi / 2], abs=1e-9)


@pytest.mark.parametrize(
    ("most", "scale"),
    [(25.0, "20:1"), (2.0, "2:1"), (1.99, "1:1"), (1.0, "1:1"), (0.99, "1:2"), (0.5, "1:2"), (0.21, "1:5"),
     (0.2, "1:5"), (0.19, "1:10"), (0.051, "1:20"), (0.0011, "1:1000"), (0.0009, "1:2000"), (7000, "5000:1")],
)  # fmt: skip
def test_scale_is_the_largest_round_one_that_fits(most: float, scale: str) -> None:
    """Scales of ISO 5455."""
    assert str(round_scale(most)) == scale


@settings(max_examples=200, deadline=None)
@given(st.floats(1e-6, 1e6))
def test_scale_never_exceeds_the_room_and_wastes_less_than_half_of_it(most: float) -> None:
    factor = round_scale(most).factor
    assert factor <= most * (1 + 1e-8)
    assert factor * 2.5 > most * (1 - 1e-8)


def test_round_bar_says_that_every_axis_is_principal() -> None:
    circle = result_of([Arc.from_centre(3 + 4j, 12.5, 0.0, 2 * math.pi)])
    assert [f.code for f in circle.findings] == ["axes-arbitrary"]
    texts = [label.text for label in labels_of(mohr_picture(circle, 176.0, 240.0))]
    assert "every axis is principal" in texts
    check_labels(section_picture(circle, WIDTH, HEIGHT))


def test_svg_is_well_formed_with_true_arcs_and_hostile_names_escaped() -> None:
    section = analyse(SAMPLES / "bracket.dxf", layer="OUTLINE").sections[0]
    svg = figure_svg(section)
    root = ElementTree.fromstring(svg)
    paths = [p.get("d", "") for p in root.iter("{http://www.w3.org/2000/svg}path")]
    assert sum(d.count("A") for d in paths) > 10
    assert all("C" not in d for d in paths)
    assert "nan" not in svg
    hostile = picture_svg(section_picture(section, WIDTH, HEIGHT), "<script>&")
    assert ElementTree.fromstring(hostile)[0].text == "<script>&"


def test_svg_encloses_the_same_area_as_the_section() -> None:
    """The outline's path, its arcs taken as circular segments, measured back at the stated scale."""
    side = 20.0
    section = bar(side, side, 0.0)
    picture = section_picture(section, WIDTH, HEIGHT)
    material = next(i for i in picture.items if isinstance(i, Stroke) and i.style is MATERIAL)
    points = [curve.start for curve in material.runs[0]]
    paper = 0.5 * abs(sum((a.conjugate() * b).imag for a, b in zip(points, [*points[1:], points[0]], strict=True)))
    factor = round_scale((WIDTH - 68) / (side * 72 / 25.4)).factor
    assert STRIP > 0
    assert paper == pytest.approx((side * factor * 72 / 25.4) ** 2, rel=1e-9)


def test_notebook_shows_the_figure() -> None:
    assert analyse(SAMPLES / "bracket.dxf", layer="OUTLINE")._repr_svg_().startswith("<svg")
