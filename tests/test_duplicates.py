"""Curves drawn twice, and curves that run over each other: each stretch counts once, and that is said."""

from __future__ import annotations

import math
import random
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from build import analyse_area as analyse
from drawings import draw_contours, draw_loose, drawing, square
from edgetally import Analysis, OutlineError
from edgetally.curves import Arc, Bezier, Curve, Line, Source
from edgetally.outline.assembly import assemble
from outlines import i_section

OUTLINE = {"layer": "OUTLINE"}
SHAPE = i_section(200, 100, 5.6, 8.5, 12)


def area(analysis: Analysis) -> float:
    return analysis.sections[0].properties["area"].value or 0.0


def codes(analysis: Analysis) -> dict[str, str]:
    return {f.code: f.severity for f in analysis.findings if f.code != "gap-joined"}


def polygon(points: list[complex], handle: str) -> list[Curve]:
    source = Source("LWPOLYLINE", handle, "0")
    return [Line(a, b, source) for a, b in zip(points, [*points[1:], points[0]], strict=True)]


def box(x: float, y: float, width: float, height: float) -> list[complex]:
    return [complex(x, y), complex(x + width, y), complex(x + width, y + height), complex(x, y + height)]


def loose(points: list[complex], first: int = 1) -> list[Curve]:
    pairs = zip(points, [*points[1:], points[0]], strict=True)
    return [Line(a, b, Source("LINE", f"{first + k:X}", "0")) for k, (a, b) in enumerate(pairs)]


@pytest.mark.parametrize("how", [draw_contours, draw_loose])
@pytest.mark.parametrize("again", [draw_contours, draw_loose])
def test_an_outline_drawn_twice_counts_once(tmp_path: Path, how: Any, again: Any) -> None:
    once = analyse(drawing(tmp_path, lambda s: how(s, SHAPE)), layer="OUTLINE")

    def twice(space: Any) -> None:
        how(space, SHAPE)
        again(space, SHAPE)

    found = analyse(drawing(tmp_path, twice, name="twice.dxf"), layer="OUTLINE")
    assert area(found) == pytest.approx(area(once), rel=1e-12)
    assert codes(found) == {"duplicate-removed": "note"}
    message = next(f.message for f in found.findings if f.code == "duplicate-removed")
    assert message.startswith("16 curves drawn twice")


@settings(max_examples=40, deadline=None)
@given(st.lists(st.tuples(st.integers(0, 15), st.booleans()), min_size=1, max_size=20), st.integers(0, 10**6))
def test_any_pieces_doubled_in_any_sense_and_order_change_nothing(doubled: list[tuple[int, bool]], seed: int) -> None:
    pieces: list[Curve] = []
    for k, (x1, y1, x2, y2, bulge) in enumerate(SHAPE[0]):
        a, b, source = complex(x1, y1), complex(x2, y2), Source("PIECE", f"{k:X}", "0")
        pieces.append(Arc.from_bulge(a, b, bulge, source) if bulge else Line(a, b, source))
    plain = assemble(pieces)
    more = []
    for number, (k, back) in enumerate(doubled):
        again = pieces[k].reversed() if back else pieces[k]
        more.append(replace(again, source=Source("AGAIN", f"{number:X}", "0")))  # type: ignore[type-var]
    mixed = pieces + more
    random.Random(seed).shuffle(mixed)
    found = assemble(mixed)
    assert found.regions[0].area == pytest.approx(plain.regions[0].area, rel=1e-12)
    assert [f.code for f in found.findings] == ["duplicate-removed"]
    assert f"{len(more)} curve" in found.findings[0].message


def test_partial_overlap_of_lines() -> None:
    bottom = [Line(0, 6, Source("LINE", "A", "0")), Line(10, 5, Source("LINE", "B", "0"))]
    rest = loose(box(0, 0, 10, 4))[1:]
    found = assemble([*bottom, *rest])
    assert found.regions[0].area == pytest.approx(40, rel=1e-15)
    assert [(f.code, f.severity, f.handles) for f in found.findings] == [("overlap-removed", "warning", ("B",))]


def test_a_short_line_on_a_longer_one() -> None:
    found = assemble([*loose(box(0, 0, 10, 4)), Line(3, 7, Source("LINE", "S", "0"))])
    assert found.regions[0].area == pytest.approx(40, rel=1e-15)
    assert found.findings[0].code == "duplicate-removed"
    assert found.findings[0].handles == ("S",)


def test_partial_overlap_of_arcs_of_one_circle() -> None:
    one = Arc.from_centre(0, 5, 0.0, 2.5, Source("ARC", "1", "0"))
    other = Arc.from_centre(0, 5, math.pi, -1.5, Source("ARC", "2", "0"))
    found = assemble([one, other, Line(-5, 5, Source("LINE", "3", "0"))])
    assert found.regions[0].area == pytest.approx(12.5 * math.pi, rel=1e-13)
    assert [f.code for f in found.findings] == ["overlap-removed"]


def test_circle_drawn_twice_and_arc_on_a_circle() -> None:
    circle = Arc.from_centre(2 + 3j, 5, 0.7, math.tau, Source("CIRCLE", "1", "0"))
    again = Arc.from_centre(2 + 3j, 5, 0.0, math.tau, Source("CIRCLE", "2", "0"))
    part = Arc.from_centre(2 + 3j, 5, 1.0, 2.0, Source("ARC", "3", "0"))
    found = assemble([circle, again, part])
    assert found.regions[0].area == pytest.approx(25 * math.pi, rel=1e-14)
    assert {f.code for f in found.findings} <= {"duplicate-removed"}


def test_hundreds_of_copies_are_no_pairs_of_each_with_each() -> None:
    """Of a circle, of a polyline as a whole, of loose lines in either sense, of a span of a spline; 500 of each."""
    for k, piece in enumerate((
        [Arc.from_centre(2 + 3j, 5, 0.7, math.tau)],
        polygon(box(0, 0, 10, 4), "A"),
        loose(box(0, 0, 10, 4)),
        [Bezier((0j, 5 - 5j, 10 + 0j)), Line(10, 0)],
    )):  # fmt: skip
        copies: list[Curve] = []
        for n in range(500):
            source = Source("COPY", f"{n:X}", "0")
            some = [replace(c, source=source) for c in piece]  # type: ignore[type-var]
            copies += [c.reversed() if k == 2 and n % 2 else c for c in some]
        found = assemble(copies)
        assert len(found.regions) == 1
        assert found.regions[0].area == assemble(piece).regions[0].area
        assert [(f.code, f.severity) for f in found.findings] == [("duplicate-removed", "note")]
        assert found.findings[0].message.startswith(f"{499 * len(piece)} curves drawn twice")


def test_a_copy_of_one_side_of_a_figure_goes_and_the_figure_stays() -> None:
    """A side of one polyline, shared with another one and drawn a third time as a loose line."""
    sides = polygon(box(0, 0, 10, 4), "A")
    found = assemble([replace(sides[2], source=Source("LINE", "L", "0")), *sides, *polygon(box(0, 4, 10, 4), "B")])
    assert found.regions[0].area == pytest.approx(80, rel=1e-15)
    assert {f.code for f in found.findings} == {"duplicate-removed", "edge-shared"}
    assert next(f for f in found.findings if f.code == "duplicate-removed").handles == ("L",)


def test_plates_that_share_an_edge_become_one_solid() -> None:
    """Whatever the sense in which each was drawn, and where the shared edges differ in length."""
    for back in (False, True):
        second = polygon(box(10, 2, 8, 5)[:: -1 if back else 1], "B")
        found = assemble([*polygon(box(0, 0, 10, 10), "A"), *second])
        assert [r.area for r in found.regions] == [pytest.approx(140, rel=1e-14)]
        assert [(f.code, f.severity) for f in found.findings] == [("edge-shared", "warning")]


def test_four_plates_around_a_void() -> None:
    plates = [box(0, 0, 30, 10), box(0, 10, 10, 10), box(20, 10, 10, 10), box(0, 20, 30, 10)]
    found = assemble([c for k, plate in enumerate(plates) for c in polygon(plate, str(k))])
    assert [(r.area, len(r.voids)) for r in found.regions] == [(pytest.approx(800), 1)]


@pytest.mark.parametrize("inner", [box(2, 0, 5, 5), box(0, 0, 10, 5), box(0, 2, 3, 3)])
def test_a_figure_inside_that_shares_an_edge_is_refused(inner: list[complex]) -> None:
    with pytest.raises(OutlineError, match=r"LWPOLYLINE #A and LWPOLYLINE #B run along each other at \(") as refused:
        assemble([*polygon(box(0, 0, 10, 10), "A"), *polygon(inner, "B")])
    assert refused.value.findings[0].code == "regions-overlap"


def test_near_duplicates_inside_the_join_gap_are_refused() -> None:
    near = [c.moved(1.0, 0.004 + 0.003j) for c in loose(box(0, 0, 10, 10), first=20)]
    with pytest.raises(OutlineError):
        assemble([*loose(box(0, 0, 10, 10)), near[1]])


def test_line_over_an_arc_with_the_same_ends_is_refused() -> None:
    arc = Arc.from_centre(0, 5, 0.0, math.pi, Source("ARC", "1", "0"))
    chord, base = Line(-5, 5, Source("LINE", "2", "0")), Line(5, -5, Source("LINE", "3", "0"))
    tall = [Line(-5, -5 - 5j), Line(-5 - 5j, 5 - 5j), Line(5 - 5j, 5)]
    with pytest.raises(OutlineError) as refused:
        assemble([arc, chord, *tall])
    assert refused.value.findings[0].code == "branch"
    assert base.length == 10


def test_duplicates_in_a_drawing_are_counted_in_the_account(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space)
        square(space)

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE")
    assert area(analysis) == pytest.approx(100)
    reading = analysis.drawing.reading
    assert (reading.read, reading.used) == (2, 2)
    assert codes(analysis) == {"duplicate-removed": "note"}
