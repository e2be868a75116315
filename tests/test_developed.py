"""Cold-formed strips: flats and bends in order, developed widths, blanks, and what is no strip."""

from __future__ import annotations

import cmath
import json
import math
from pathlib import Path
from typing import Any

import pypdf
import pytest
from hypothesis import given
from hypothesis import strategies as st

from build import analyse_area, section_of
from command import run
from drawings import drawing
from edgetally.curves import Arc, Curve, Line
from edgetally.section.area import area_properties
from edgetally.section.developed import Developed, developed, neutral_axis_din, why_no_strip
from edgetally.section.midline import strip_of

SAMPLES = Path(__file__).parent.parent / "sample_drawings"
Bend = tuple[float, float]


def formed(flats: list[float], bends: list[Bend], t: float, *, turn: float = 0.0) -> list[Curve]:
    """The outline of a strip from its own description: flats, and between them (angle [°], inside radius) bends.

    Both faces are walked independently of any midline: the face on the outside of a bend has the radius r + t.
    """
    left: list[Curve] = []
    right: list[Curve] = []
    z, d = 0j, cmath.rect(1.0, turn)
    for k, flat in enumerate(flats):
        for side, face in ((1, left), (-1, right)):
            foot = z + 0.5j * side * t * d
            face.append(Line(foot, foot + flat * d))
        z += flat * d
        if k < len(bends):
            angle, inside = math.radians(bends[k][0]), bends[k][1]
            sense = math.copysign(1.0, angle)
            centre = z + 1j * sense * (inside + 0.5 * t) * d
            for side, face in ((1, left), (-1, right)):
                radius = inside if side == sense else inside + t
                if radius > 0:
                    face.append(Arc(z + 0.5j * side * t * d, z + 0.5j * side * t * d - centre, angle))
            z = centre + (z - centre) * cmath.rect(1.0, angle)
            d *= cmath.rect(1.0, angle)
    back = [curve.reversed() for curve in reversed(left)]
    return [*right, Line(right[-1].end, back[0].start), *back, Line(back[-1].end, right[0].start)]


def unrolled(curves: list[Curve], **options: Any) -> Developed:
    section = section_of(curves)
    strip = strip_of([loop.curves for loop in section.loops])
    assert strip is not None
    return developed(strip, **options)


LIPPED = ([15.0, 60.0, 190.0, 60.0, 15.0], [(90.0, 3.0), (90.0, 3.0), (90.0, 3.0), (90.0, 3.0)], 1.5)
ZED = ([15.0, 50.0, 190.0, 55.0, 15.0], [(60.0, 4.0), (90.0, 4.0), (-90.0, 4.0), (-60.0, 4.0)], 2.0)
HAT = ([20.0, 30.0, 60.0, 30.0, 20.0], [(90.0, 1.0), (-90.0, 1.0), (-90.0, 1.0), (90.0, 1.0)], 1.0)
SIGMA = (
    [14.0, 50.0, 40.0, 25.0, 60.0, 25.0, 40.0, 50.0, 14.0],
    [(90, 3), (90, 3), (30, 3), (-30, 3), (-30, 3), (30, 3), (90, 3), (90, 3)],
    2.5,
)
PLATE = ([120.0], [], 6.0)


@pytest.mark.parametrize(
    "description", [LIPPED, ZED, HAT, SIGMA, PLATE], ids=["lipped", "zed", "hat", "sigma", "plate"]
)
def test_what_was_formed_is_found_again(description: tuple[list[float], list[Bend], float]) -> None:
    flats, bends, t = description
    found = unrolled(formed(flats, bends, t))
    lengths = [p.length for p in found.pieces if not p.is_bend]
    assert lengths == pytest.approx(flats, rel=1e-9) or lengths == pytest.approx(flats[::-1], rel=1e-9)
    angles = [math.degrees(p.angle) for p in found.bends]
    expected = [angle for angle, _ in bends]
    # from the other end the order is reversed and left is right
    assert angles == pytest.approx(expected, abs=1e-7) or angles == pytest.approx(
        [-a for a in expected[::-1]], abs=1e-7
    )
    assert [p.inside_radius for p in found.bends] == pytest.approx([r for _, r in bends], rel=1e-7)
    assert found.thickness == pytest.approx(t, rel=1e-9)
    assert found.uneven < 1e-8
    # EN 1993-1-3 (from memory): midline length × t is the area, exactly, for bends of constant thickness
    area = area_properties(section_of(formed(flats, bends, t))).properties["area"].value
    assert area == pytest.approx(found.width * found.thickness, rel=1e-9)
    midline = sum(flats) + sum(math.radians(abs(a)) * (r + t / 2) for a, r in bends)
    assert found.width == pytest.approx(midline, rel=1e-9)


def test_allowances() -> None:
    # DIN 6935 (formula from memory): r/t = 1 gives K = 0.325; a public page of bend allowances states 0.33
    assert neutral_axis_din(2.0, 2.0) == pytest.approx(0.325, abs=1e-12)
    assert neutral_axis_din(11.0, 2.0) == 0.5
    assert neutral_axis_din(10.0, 2.0) == pytest.approx(0.5 * (0.65 + 0.5 * math.log10(5.0)), abs=1e-12)
    assert neutral_axis_din(0.0, 2.0) == 0.0
    # two flats of 50 and one bend of 90°, r = t = 2: 100 + π/2·(2 + 0.325·2)
    found = unrolled(formed([50.0, 50.0], [(90.0, 2.0)], 2.0))
    assert found.blank_width == pytest.approx(100.0 + math.pi / 2 * 2.65, rel=1e-9)
    # the same as outside lengths less the bend deduction 2(r + t)·tan(φ/2) − allowance (bend-allowance pages)
    outside, allowance = 2 * (50.0 + 4.0), math.pi / 2 * 2.65
    assert found.blank_width == pytest.approx(outside - (2 * 4.0 * math.tan(math.pi / 4) - allowance), rel=1e-9)
    # K = ½ is the midline
    half = unrolled(formed([50.0, 50.0], [(90.0, 2.0)], 2.0), neutral_axis=0.5)
    assert half.blank_width == pytest.approx(half.width, rel=1e-12)
    inner = unrolled(formed([50.0, 50.0], [(90.0, 2.0)], 2.0), neutral_axis=0.0)
    assert inner.blank_width == pytest.approx(100.0 + math.pi, rel=1e-9)
    with pytest.raises(ValueError, match="inner face"):
        unrolled(formed([50.0, 50.0], [(90.0, 2.0)], 2.0), neutral_axis=0.6)


@given(
    st.lists(st.tuples(st.floats(20.0, 80.0), st.sampled_from([-90.0, -45.0, 30.0, 60.0, 90.0]), st.floats(0.5, 8.0)),
             min_size=1, max_size=4),
    st.floats(0.5, 3.0),
    st.floats(0.0, 6.0),
    st.floats(0.1, 30.0),
)  # fmt: skip
def test_turning_scaling_and_turning_round_change_nothing(
    parts: list[tuple[float, float, float]], t: float, turn: float, factor: float
) -> None:
    flats, bends = [p[0] for p in parts] + [25.0], [(p[1], p[2]) for p in parts]
    plain = formed(flats, bends, t)
    strip = strip_of([plain])
    if strip is None:  # a strip that runs into itself when unrolled by hand is none
        return
    first = developed(strip)
    placed = [c.moved(factor * cmath.rect(1.0, turn), 300 - 40j) for c in plain]
    again = strip_of([placed[3:] + placed[:3]])
    assert again is not None
    second = developed(again)
    assert second.width == pytest.approx(factor * first.width, rel=1e-9)
    assert second.blank_width == pytest.approx(factor * first.blank_width, rel=1e-7)
    lengths = [p.length * factor for p in first.pieces]
    found = [p.length for p in second.pieces]
    assert found == pytest.approx(lengths, rel=1e-7) or found[::-1] == pytest.approx(lengths, rel=1e-7)


def test_a_tube_has_no_ends_and_so_no_strip_width(tmp_path: Path) -> None:
    def tube(space: Any) -> None:
        for size, r in ((50.0, 5.0), (46.0, 3.0)):
            h, b = size / 2, math.tan(math.pi / 8)
            points = []
            for k in range(4):
                turn = 1j**k
                for z, bulge in ((complex(h, h - r), b), (complex(h - r, h), 0.0)):
                    points.append(((z * turn).real, (z * turn).imag, bulge))
            space.add_lwpolyline(points, format="xyb", close=True, dxfattribs={"layer": "OUTLINE"})

    section = analyse_area(drawing(tmp_path, tube), layer="OUTLINE").sections[0]
    assert section.developed is not None
    assert section.developed.closed
    assert len(section.developed.bends) == 4
    assert section.developed.width == pytest.approx(4 * 40.0 + 2 * math.pi * 4.0, rel=1e-9)
    assert "strip_width" not in section.properties


def test_what_is_no_strip_says_why() -> None:
    def why(curves: list[Curve]) -> str:
        section = section_of(curves)
        loops = [loop.curves for loop in section.loops]
        assert strip_of(loops) is None
        return why_no_strip(loops)

    def polygon(*z: complex) -> list[Curve]:
        return [Line(a, b) for a, b in zip(z, [*z[1:], z[0]], strict=True)]

    # a hot-rolled angle has rounded toes: no square ends
    toe = Arc.from_centre(94 + 4j, 6.0, 0.0, math.pi / 2)
    heel = [Line(0j, 100 + 0j), Line(100 + 0j, 100 + 4j), toe, Line(94 + 10j, 10 + 10j), Line(10 + 10j, 10 + 94j)]
    angle = [*heel, Arc.from_centre(4 + 94j, 6.0, 0.0, math.pi / 2), Line(4 + 100j, 100j), Line(100j, 0j)]
    assert "square ends" in why(angle)
    taper = polygon(0j, 100 + 0j, 100 + 5j, 50 + 4j, 5 + 5j, 5 + 100j, 100j)
    assert "not" in why(taper)
    assert "no thin wall" in why(polygon(0j, 50 + 0j, 60 + 40j, 20 + 50j))
    # bends drawn as chords
    t, r = 2.0, 6.0
    ring = [cmath.rect(r + t, math.pi / 2 * k / 40) for k in range(41)]
    inner = [cmath.rect(r, math.pi / 2 * k / 41) for k in range(42)]
    ends = [complex(-1, r + t), complex(-1, r)], [complex(r, -1), complex(r + t, -1)]
    assert "chords" in why(polygon(*ring, *ends[0], *inner[::-1], *ends[1]))


def test_sheet_document_and_options(tmp_path: Path) -> None:
    words = (SAMPLES / "purlin-zed.dxf", "--layer", "OUTLINE")
    code, out, err = run("tally", *words, "--json", "--neutral-axis", "0.5")
    assert (code, err) == (0, "")
    section = json.loads(out)["sections"][0]
    strip = section["strip"]
    assert [p["kind"] for p in strip["pieces"]] == ["flat", "bend"] * 4 + ["flat"]
    assert strip["blank_width"] == pytest.approx(strip["midline_length"], rel=1e-12)
    assert section["properties"]["strip_width"]["value"] == strip["midline_length"]
    area = section["properties"]["area"]["value"]
    assert strip["midline_length"] * strip["thickness"] == pytest.approx(area, rel=1e-5)  # its joints are off by that
    target = tmp_path / "sheet.pdf"
    assert run("sheet", *words, "-o", target, "--pages", "strip")[0] == 0
    text = pypdf.PdfReader(target).pages[0].extract_text()
    for words_ in (
        "Flats and bends",
        "DIN 6935",
        "bends in order, left positive: +60°, +90°, −90°, −60°",
        "blank width",
    ):
        assert words_ in text
    code, _, err = run("sheet", SAMPLES / "bracket.dxf", "--layer", "OUTLINE", "-o", target, "--pages", "strip")
    assert code == 2
    assert "no strip of one thickness" in err
    code, _, err = run("tally", SAMPLES / "purlin-zed.dxf", "--layer", "OUTLINE", "--neutral-axis", "0.7")
    assert code == 2
    assert "from 0 (inner face) to 0.5 (midline)" in err
