"""Two revisions compared: planted changes are named, and nothing else; what only looks different is the same."""

from __future__ import annotations

import io
import json
import math
from collections.abc import Callable
from pathlib import Path
from typing import Any

import ezdxf
import pypdf
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from command import run
from drawings import INCH, MM, draw_contours, draw_loose, drawing, square
from edgetally.compare import Comparison, compare
from edgetally.curves import Arc, Curve, Line
from edgetally.outline.matching import match
from edgetally.outline.records import Loop
from outlines import i_section

Draw = Callable[[Any], None]
LAYER = {"layer": "OUTLINE"}


def plate(*, hole: tuple[float, float] = (30.0, 20.0), radius: float = 5.0, width: float = 100.0) -> Draw:
    def draw(space: Any) -> None:
        space.add_lwpolyline([(0, 0), (width, 0), (width, 40), (0, 40)], close=True, dxfattribs=LAYER)
        space.add_circle(hole, radius, dxfattribs=LAYER)

    return draw


def compared(folder: Path, old: Draw, new: Draw, *, units: tuple[int, int] = (MM, MM), **options: Any) -> Comparison:
    a = drawing(folder, old, name="old.dxf", units=units[0])
    b = drawing(folder, new, name="new.dxf", units=units[1])
    return compare(a, b, layer="OUTLINE", torsion=False, **options)


def test_a_moved_hole_is_the_only_change(tmp_path: Path) -> None:
    found = compared(tmp_path, plate(), plate(hole=(33.0, 19.0)))
    (pair,) = found.pairs
    assert [(c.kind, c.words) for c in pair.matching.changes] == [("moved", "closed loop moved by (3, -1)")]
    assert pair.matching.unchanged == 4
    changes = {p.key: p for p in pair.properties}
    assert changes["area"].same
    assert not changes["centroid_x"].same
    # first moments about the hole's old place: −πr²·d / A
    area = 4000.0 - math.pi * 25.0
    assert changes["centroid_x"].change == pytest.approx(-math.pi * 25.0 * 3.0 / area, rel=1e-12)
    assert not found.same


def test_a_changed_radius_an_appeared_and_a_vanished_hole(tmp_path: Path) -> None:
    (pair,) = compared(tmp_path, plate(), plate(radius=6.0)).pairs
    assert [c.words for c in pair.matching.changes] == ["circle, radius 5 → 6"]
    area = {p.key: p for p in pair.properties}["area"]
    assert area.change == pytest.approx(-math.pi * 11.0, rel=1e-12)
    assert area.percent == pytest.approx(-100 * math.pi * 11.0 / (4000 - 25 * math.pi), rel=1e-12)

    def solid(space: Any) -> None:
        space.add_lwpolyline([(0, 0), (100, 0), (100, 40), (0, 40)], close=True, dxfattribs=LAYER)

    (pair,) = compared(tmp_path, plate(), solid).pairs
    assert [(c.kind, c.words) for c in pair.matching.changes] == [("vanished", "circle vanished")]
    (pair,) = compared(tmp_path, solid, plate()).pairs
    assert [(c.kind, c.words) for c in pair.matching.changes] == [("appeared", "circle appeared")]


def test_a_longer_plate_names_the_three_lines(tmp_path: Path) -> None:
    (pair,) = compared(tmp_path, plate(), plate(width=104.0)).pairs
    words = sorted(c.words for c in pair.matching.changes)
    assert words == [
        "line moved by (4, 0)",
        "line, length 100 → 104, ends moved by up to 4",
        "line, length 100 → 104, ends moved by up to 4",
    ]


def test_the_same_section_drawn_otherwise_is_the_same(tmp_path: Path) -> None:
    """As a polyline and as loose pieces, each line in three, in another order."""
    contours = i_section(200, 100, 5.6, 8.5, 12)

    def loose(space: Any) -> None:
        pieces = []
        for contour in contours:
            for x1, y1, x2, y2, bulge in contour:
                if bulge:
                    pieces.append((x1, y1, x2, y2, bulge))
                else:
                    xs = [x1 + k * (x2 - x1) / 3 for k in range(4)]
                    ys = [y1 + k * (y2 - y1) / 3 for k in range(4)]
                    pieces += [(xs[k], ys[k], xs[k + 1], ys[k + 1], 0.0) for k in range(3)]
        draw_loose(space, [pieces[1::2] + pieces[::2]])

    found = compared(tmp_path, lambda space: draw_contours(space, contours), loose)
    assert found.pairs[0].matching.changes == ()
    assert found.same


def test_the_same_section_in_inches_is_the_same(tmp_path: Path) -> None:
    inch = 25.4

    def small(space: Any) -> None:
        corners = [(0, 0), (100 / inch, 0), (100 / inch, 40 / inch), (0, 40 / inch)]
        space.add_lwpolyline(corners, close=True, dxfattribs=LAYER)
        space.add_circle((30 / inch, 20 / inch), 5 / inch, dxfattribs=LAYER)

    found = compared(tmp_path, plate(), small, units=(MM, INCH))
    assert found.same
    assert found.new.out_unit == "mm"


def test_a_drawing_moved_as_a_whole_and_changed_beside(tmp_path: Path) -> None:
    def shifted(draw: Draw, dx: float, dy: float) -> Draw:
        def moved(space: Any) -> None:
            draw(space)
            for entity in space:
                entity.translate(dx, dy, 0)

        return moved

    (pair,) = compared(tmp_path, plate(), shifted(plate(), 1000.0, -250.0)).pairs
    assert pair.matching.shift == pytest.approx(1000.0 - 250.0j)
    assert pair.matching.changes == ()
    assert not pair.same  # it lies elsewhere: the centroid is another
    assert {p.key for p in pair.properties if not p.same} == {
        "centroid_x", "centroid_y", "second_moment_x_origin", "second_moment_y_origin", "product_of_inertia_origin",
    }  # fmt: skip
    (pair,) = compared(tmp_path, plate(), shifted(plate(radius=6.0), 7.0, 0.0)).pairs
    assert pair.matching.shift == pytest.approx(7.0)
    assert [c.words for c in pair.matching.changes] == ["circle, radius 5 → 6"]


def test_several_sections_are_matched_by_place(tmp_path: Path) -> None:
    def old(space: Any) -> None:
        square(space, 10, (0, 0))
        square(space, 10, (100, 0))
        square(space, 20, (300, 0))

    def new(space: Any) -> None:
        square(space, 10, (100.5, 0))
        square(space, 10, (0, 0))
        square(space, 40, (0, 500))

    found = compared(tmp_path, old, new, select="each")
    assert [(p.old.name, p.new.name, p.same) for p in found.pairs] == [("1", "1", True), ("2", "3", False)]
    assert ([s.name for s in found.vanished], [s.name for s in found.appeared]) == (["3"], ["2"])


def loops(radius: float) -> list[Loop]:
    """A square of 100 with a rounded corner and a round hole."""
    arc = Arc.from_centre(complex(100 - radius, 100 - radius), radius, 0.0, math.pi / 2)
    outer: list[Curve] = [Line(0j, 100 + 0j), Line(100 + 0j, arc.start), arc, Line(arc.end, 100j), Line(100j, 0j)]
    return [Loop(tuple(outer)), Loop((Arc.from_centre(40 + 40j, 12.0, 1.0, -2 * math.pi),))]


@settings(deadline=None, max_examples=30)
@given(st.floats(1, 40), st.lists(st.floats(0.05, 0.95), max_size=4), st.integers(0, 7), st.booleans())
def test_splitting_rotating_and_turning_round_change_nothing(
    radius: float, cuts: list[float], start: int, turned: bool
) -> None:
    old = loops(radius)
    curves = list(old[0].curves)
    for cut in cuts:
        k = int(cut * len(curves))
        curves[k : k + 1] = curves[k].split(cut)
    start %= len(curves)
    new = Loop((*curves[start:], *curves[:start]))
    found = match(old, [old[1], new.reversed() if turned else new], size=100.0)
    assert (found.shift, found.changes) == (0j, ())
    assert found.unchanged == len(curves) + 1


@settings(deadline=None, max_examples=30)
@given(st.floats(1, 40), st.floats(1, 40))
def test_what_changed_there_changed_back_again(first: float, second: float) -> None:
    """old → new and new → old name the same curves, each with before and after exchanged."""
    there = match(loops(first), loops(second), size=100.0)
    back = match(loops(second), loops(first), size=100.0)
    assert [(c.before, c.after) for c in there.changes] == [(c.after, c.before) for c in back.changes] or {
        (c.before, c.after) for c in there.changes
    } == {(c.after, c.before) for c in back.changes}


def test_command_document_pictures_and_exit_codes(tmp_path: Path) -> None:
    old = drawing(tmp_path, plate(), name="old.dxf")
    new = drawing(tmp_path, plate(radius=6.0), name="new.dxf")
    code, out, err = run("compare", old, new, "--layer", "OUTLINE", "-o", tmp_path / "change.pdf")
    assert (code, err) == (1, "")
    assert "circle, radius 5 → 6" in out
    assert "result: different" in out
    text = "".join(page.extract_text() for page in pypdf.PdfReader(tmp_path / "change.pdf").pages)
    for words in ("Two states compared", "old.dxf", "new.dxf", "radius 5 → 6", "second moment about x", "page 1 of"):
        assert words in text
    code, out, _ = run("compare", old, new, "--layer", "OUTLINE", "--json", "-o", tmp_path / "change.svg")
    document = json.loads(out)
    assert document["format"] == "edgetally.compare/1"
    assert document["same"] is False
    (section,) = document["sections"]
    (change,) = section["curves"]["changes"]
    assert (change["kind"], change["how"]) == ("moved", "circle, radius 5 → 6")
    assert "<svg" in (tmp_path / "change.svg").read_text()
    code, out, _ = run("compare", old, old, "--layer", "OUTLINE")
    assert code == 0
    assert "the same: every curve and every property" in out


def test_bad_use_is_refused(tmp_path: Path) -> None:
    old = drawing(tmp_path, plate(), name="old.dxf")
    for words, expected in (
        (("compare", old, old, "-o", tmp_path / "x.png"), "ends in .pdf or .svg"),
        (("compare", "-", "-"), "only one of the two"),
        (("compare", old, tmp_path / "none.dxf"), "none.dxf"),
        (("compare", old, old, "-o", old), "the drawing itself"),
        (("compare", old, old, "--date", "31.3.2026"), "is not a date"),
    ):
        code, _, err = run(*words)
        assert code == 2
        assert expected in err


def test_the_old_drawing_can_come_from_standard_input(tmp_path: Path) -> None:
    old = drawing(tmp_path, plate(), name="old.dxf")
    code, out, _ = run("compare", "-", old, "--layer", "OUTLINE", stdin=old.read_bytes())
    assert code == 0
    assert "standard input" in out


def test_thousands_of_curves_that_all_differ_are_not_paired(tmp_path: Path) -> None:
    """Two unlike outlines of 1500 chords each: said as vanished and appeared, in a time that does not explode."""

    def ring(n: int, radius: float) -> list[Loop]:
        z = [radius * complex(math.cos(2 * math.pi * k / n), math.sin(2 * math.pi * k / n)) for k in range(n)]
        return [Loop(tuple(Line(a, b) for a, b in zip(z, [*z[1:], z[0]], strict=True)))]

    found = match(ring(1500, 50.0), ring(1400, 47.0), size=100.0)
    assert len(found.changes) == 2900
    assert {c.kind for c in found.changes} == {"vanished", "appeared"}


def test_pdf_is_reproducible(tmp_path: Path) -> None:
    old = drawing(tmp_path, plate(), name="old.dxf")
    new = drawing(tmp_path, plate(width=104.0), name="new.dxf")
    for name in ("a.pdf", "b.pdf"):
        run("compare", old, new, "--layer", "OUTLINE", "-o", tmp_path / name)
    assert (tmp_path / "a.pdf").read_bytes() == (tmp_path / "b.pdf").read_bytes()
    assert len(pypdf.PdfReader(io.BytesIO((tmp_path / "a.pdf").read_bytes())).pages) >= 1
    assert ezdxf.readfile(old) is not None  # the drawings are as they were
