"""Loose curves → closed loops: which ends are joined, what is reported, what is refused and with which words."""

from __future__ import annotations

import math
import random
import re
from cmath import rect

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from build import Piece, curves_of
from edgetally import OutlineError
from edgetally.curves import Arc, Curve, Line, Source
from edgetally.outline.assembly import assemble
from edgetally.outline.joining import close_loops
from edgetally.outline.records import Loop, Outline
from edgetally.units import MM_PER
from outlines import i_section, lipped_channel, split_tube


def lines(points: list[complex]) -> list[Curve]:
    """The closed polygon as loose lines with handles 1, 2, …"""
    pairs = zip(points, [*points[1:], points[0]], strict=True)
    return [Line(a, b, Source("LINE", f"{k + 1:X}", "0")) for k, (a, b) in enumerate(pairs)]


SQUARE = [0j, 10 + 0j, 10 + 10j, 10j]


def refused(curves: list[Curve], **options: object) -> OutlineError:
    with pytest.raises(OutlineError) as error:
        assemble(curves, **options)  # type: ignore[arg-type]
    assert error.value.findings
    return error.value


def area(outline: Outline) -> float:
    return sum(region.area for region in outline.regions)


@settings(max_examples=40)
@given(st.integers(0, 10**6), st.sampled_from([i_section(200, 100, 5.6, 8.5, 12), lipped_channel(200, 75, 20, 1.5, 3)]))
def test_shuffled_and_reversed_pieces_close_to_one_loop(seed: int, contours: list[list[Piece]]) -> None:
    pieces = curves_of(contours)
    chance = random.Random(seed)
    mixed = [p.reversed() if chance.random() < 0.5 else p for p in pieces]
    chance.shuffle(mixed)
    outline = assemble(mixed)
    assert area(outline) == pytest.approx(area(assemble(pieces)), rel=1e-13)
    assert outline.joins == ()
    assert len(outline.regions[0].outer.curves) == len(pieces)


def test_each_join_is_reported_with_gap_place_and_both_sources() -> None:
    square = lines(SQUARE)
    square[1] = Line(10 + 0.003j, 10 + 10j, square[1].source)
    square[2] = Line(10 + 10.004j, 10.002j, square[2].source)
    joins = sorted(assemble(square).joins, key=lambda join: join.gap)
    assert [join.gap for join in joins] == pytest.approx([0.002, 0.003, 0.004])
    assert {tuple(sorted(s.handle for s in join.between)) for join in joins} == {("3", "4"), ("1", "2"), ("2", "3")}
    assert joins[1].at == pytest.approx(10 + 0.0015j)


def test_gaps_of_rounding_are_no_joins() -> None:
    square = lines([z + 1e4 for z in SQUARE])
    square[0] = Line(square[0].start, square[0].end + 5e-12, square[0].source)
    assert assemble(square).joins == ()


def test_the_nearest_ends_are_joined_first() -> None:
    """Two corners 0.006 apart, each with its own gap: no join goes across."""
    left = [0j, 10 + 0j, 10 + 10j, 10j]
    right = [z + 10.006 for z in left]
    pieces = lines(left) + lines(right)
    pieces[0] = Line(0j, 9.999, pieces[0].source)
    outline = assemble(pieces)
    assert len(outline.regions) == 2
    assert [join.gap for join in outline.joins] == pytest.approx([0.001])


def test_open_outline_names_both_ends_and_the_option_that_closes_it() -> None:
    square = lines(SQUARE)
    square[3] = Line(10j, 0.034j, square[3].source)
    error = refused(square)
    message = str(error)
    assert "gap 0.034 mm" in message
    assert "between LINE #1 and LINE #4" in message
    assert "joined up to 0.01 mm" in message
    assert error.findings[0].code == "open-chain"
    assert set(error.findings[0].handles) == {"1", "4"}
    option = re.search(r"pass --join-gap ([\d.]+)mm", message)
    assert option is not None
    closed = assemble(square, gap=float(option.group(1)))
    assert area(closed) == pytest.approx(100, rel=1e-12)  # the lines meet where they cross, at the corner


@settings(max_examples=150)
@given(st.floats(0.011, 0.15), st.integers(1, 3), st.floats(-2e3, 2e3), st.sampled_from(["mm", "cm", "m", "in", "ft"]))
def test_the_option_that_is_offered_does_close_it(gap_mm: float, digits: int, shift: float, unit: str) -> None:
    """Round gaps too, which the coordinates give as 0.05000000000000071: the option says 0.05mm, and that suffices."""
    gap = round(gap_mm, digits) / MM_PER[unit]
    if not 0.0101 <= gap * MM_PER[unit] <= 0.15 - 1e-9:
        return
    square = lines([10 * z + shift for z in SQUARE])
    square[3] = Line(square[3].start, square[3].end + 1j * gap, square[3].source)
    option = re.search(r"pass --join-gap ([\d.]+)mm", str(refused(square, unit=unit)))
    assert option is not None
    assert float(option.group(1)) <= 0.15
    closed = assemble(square, gap=float(option.group(1)) / MM_PER[unit], unit=unit)
    assert len(closed.joins) == 1
    assert area(closed) == pytest.approx(1e4, rel=1e-9)


@settings(deadline=None, max_examples=60)
@given(st.lists(st.floats(0.0, 0.15), min_size=4, max_size=9), st.sampled_from(["mm", "cm", "in"]))
def test_of_several_gaps_the_option_closes_all(gaps_mm: list[float], unit: str) -> None:
    """Every line of the refusal names the same value, the widest counts, and with it the outline is accepted."""
    n = len(gaps_mm)
    corners = [rect(40.0, 2 * math.pi * k / n) for k in range(n)]
    pieces = lines(corners)
    for k, g in enumerate(gaps_mm):
        along = (corners[(k + 1) % n] - corners[k]) / abs(corners[(k + 1) % n] - corners[k])
        pieces[k] = Line(corners[k], corners[(k + 1) % n] - along * g / MM_PER[unit], pieces[k].source)
    if max(gaps_mm) <= 0.01 + 1e-9:
        return
    message = str(refused(pieces, unit=unit))
    options = set(re.findall(r"pass --join-gap ([\d.]+)mm", message))
    assert len(options) == 1
    option = float(options.pop())
    assert max(gaps_mm) - 1e-9 <= option <= 0.15
    closed = assemble(pieces, gap=option / MM_PER[unit], unit=unit)
    assert len(closed.joins) == sum(g > 1e-9 for g in gaps_mm)


def test_the_option_and_what_it_does_not_close() -> None:
    """One gap of 0.05, which an option closes, and one of 0.4, which none does; then one beside too short a piece."""
    pieces = lines(SQUARE)
    pieces[0] = Line(0j, 9.95 + 0j, pieces[0].source)
    pieces[2] = Line(10 + 10j, 0.4 + 10j, pieces[2].source)
    message = str(refused(pieces))
    assert (
        "pass --join-gap 0.05mm; that is not enough, because the gap of 0.4 mm at (0.4, 10) cannot be joined" in message
    )
    assert message.count("--join-gap") == 1
    pieces = lines([0j, 10 + 0j, 10 + 10j, 10j, 0.35j])
    pieces[0] = Line(0j, 9.93 + 0j, pieces[0].source)
    pieces[4] = Line(0.35j, 0.05j, pieces[4].source)
    message = str(refused(pieces))
    assert "pass --join-gap 0.07mm; that is not enough, because the gap of 0.05 mm at (0, " in message
    error = refused(pieces, gap=0.07)
    assert [f.code for f in error.findings] == ["gap-too-wide"]


def test_no_option_where_a_third_end_is_as_near() -> None:
    pieces = lines(SQUARE)
    pieces[0] = Line(0j, 9.95 + 0j, pieces[0].source)
    message = str(refused([*pieces, Line(10.04 + 0j, 20 + 0j, Source("LINE", "A", "0"))]))
    assert "a third curve end lies about as near" in message
    assert "pass --join-gap" not in message


@pytest.mark.parametrize("bent", [False, True])
def test_a_missing_end_of_a_thin_wall_is_no_gap(bent: bool) -> None:
    """A foil of 100 × 0.1 without one of its ends: joined, its sides would meet and half of it be gone."""
    if bent:
        turn = math.pi / 2
        pieces: list[Curve] = [
            Arc.from_centre(0j, 60.0, 0.0, turn, Source("ARC", "1", "0")),
            Line(60j, 59.9j, Source("LINE", "2", "0")),
            Arc.from_centre(0j, 59.9, 0.0, turn, Source("ARC", "3", "0")),
        ]
    else:
        pieces = lines([0.1j, 0j, 100 + 0j, 100 + 0.1j])
        pieces = [pieces[0], pieces[1], pieces[3]]
    for gap in (0.01, 0.1, 0.15):
        error = refused(pieces, gap=gap)
        assert error.findings[0].code == ("open-chain" if gap < 0.1 else "gap-too-wide")
        assert "pass --join-gap" not in str(error)
    assert "they run back along each other: an end is missing" in str(error)


def test_the_gap_at_a_sharp_tip_is_joined() -> None:
    """The tip of a wedge of 20°."""
    tip = [0j, rect(50.0, math.radians(-10)), rect(50.0, math.radians(10))]
    pieces = lines(tip)
    pieces[2] = Line(tip[2], rect(0.008, math.radians(10)), pieces[2].source)
    outline = assemble(pieces)
    assert len(outline.joins) == 1
    assert area(outline) == pytest.approx(0.5 * 50**2 * math.sin(math.radians(20)), rel=1e-3)


def test_every_gap_that_is_too_wide_for_its_neighbour_is_named() -> None:
    pieces = lines([0j, 10 + 0j, 10 + 10j, 0.05 + 10j, 10j, 0.05j])
    pieces[3] = Line(0.05 + 10j, 0.008 + 10j, pieces[3].source)
    pieces[5] = Line(0.05j, 0.008j, pieces[5].source)
    assert [f.code for f in refused(pieces).findings] == ["gap-too-wide"] * 2


def test_no_option_is_offered_that_would_be_refused() -> None:
    """A gap of 0.05 beside a piece of 0.3 would be wider than a tenth of it."""
    pieces = lines([0j, 10 + 0j, 10 + 10j, 10j, 0.35j])
    pieces[4] = Line(0.35j, 0.05j, pieces[4].source)
    message = str(refused(pieces))
    assert "gap 0.05 mm" in message
    assert "--join-gap" not in message
    assert "close it in the drawing" in message
    assert refused(pieces, gap=0.06).findings[0].code == "gap-too-wide"


def test_a_gap_that_is_too_wide_has_no_option() -> None:
    square = lines(SQUARE)
    square[3] = Line(10j, 0.2j, square[3].source)
    assert "--join-gap" not in str(refused(square))


def test_gap_in_an_inch_drawing_is_measured_in_inches() -> None:
    square = lines(SQUARE)
    square[3] = Line(10j, 0.0003j, square[3].source)  # 0.0076 mm
    assert assemble(square, unit="in").joins[0].gap == pytest.approx(0.0003)
    square[3] = Line(10j, 0.0005j, square[3].source)  # 0.0127 mm
    assert "pass --join-gap 0.013mm" in str(refused(square, unit="in"))


@pytest.mark.parametrize("more", [1, 2])
def test_three_and_more_ends_at_a_point(more: int) -> None:
    spokes = [Line(10 + 10j, 20 + 7j * k, Source("LINE", f"A{k}", "0")) for k in range(more)]
    error = refused(lines(SQUARE) + spokes)
    assert error.findings[0].code == "branch"
    assert f"{2 + more} curve ends meet at one point at (10, 10)" in str(error)
    assert {"2", "3", "A0"} <= set(error.findings[0].handles)


def test_a_hub_of_thousands_of_ends_is_refused_at_once() -> None:
    """At one point, and scattered within the gap; the pairs among 20 000 ends would be 2e8."""
    chance = random.Random(1)
    for spread, how in ((0.0, "at one point"), (0.002, "within the join gap")):
        spokes: list[Curve] = []
        for k in range(20_000):
            off = spread * rect(chance.random(), chance.uniform(0, 6))
            spokes.append(Line(3.005 + 3.005j + off, 3 + 3j + rect(10.0, 3e-4 * k), Source("LINE", f"{k:X}", "0")))
        with pytest.raises(OutlineError, match=f"20000 curve ends meet {how}") as error:
            close_loops(spokes, 0.01, "mm")
        assert error.value.findings[0].code == "branch"


def test_a_third_end_within_the_gap() -> None:
    error = refused([*lines(SQUARE), Line(10.004 + 10j, 20 + 10j, Source("LINE", "A", "0"))])
    assert error.findings[0].code == "branch"
    assert "within the join gap of 0.01 mm" in str(error)


@pytest.mark.parametrize(
    "line", [Line(30, 40, Source("LINE", "A", "0")), Line(3 + 3j, 5 + 6j, Source("LINE", "A", "0"))]
)
def test_a_stray_line_is_a_warning_where_the_outline_is_closed_without_it(line: Line) -> None:
    outline = assemble([*lines(SQUARE), line])
    assert area(outline) == pytest.approx(100)
    assert [(f.code, f.severity, f.handles) for f in outline.findings] == [("stray-curve", "warning", ("A",))]


@pytest.mark.parametrize(
    "line", [Line(5, 5 + 5j), Line(-5 + 5j, 15 + 5j), Line(5 + 5j, 10 + 7j), Line(3 + 10j, 7 + 12j)]
)
def test_a_line_that_meets_the_outline_is_refused_with_the_point(line: Line) -> None:
    """T-junctions from inside and outside, and lines across."""
    error = refused([*lines(SQUARE), Line(line.start, line.end, Source("LINE", "A", "0"))])
    assert error.findings[0].code == "branch"
    assert "LINE #A meets the outline at (" in str(error)
    z = complex(*(error.findings[0].at or (0, 0)))
    assert min(abs(z.real), abs(z.real - 10), abs(z.imag), abs(z.imag - 10)) < 1e-9


def test_nothing_but_lines_apart_is_refused() -> None:
    error = refused([Line(30, 40, Source("LINE", "A", "0")), Line(50, 60, Source("LINE", "B", "0"))])
    assert "LINE #A from (30, 0) to (40, 0) meets nothing at its ends" in str(error)


def test_what_nearly_encloses_something_is_no_stray() -> None:
    """An arc of 300° may be meant as a void: leaving it out would be a guess."""
    error = refused([*lines(SQUARE), Arc.from_centre(5 + 5j, 2, 0.0, 5.2, Source("ARC", "A", "0"))])
    assert error.findings[0].code == "open-chain"
    corner = [Line(3 + 3j, 6 + 3j, Source("LINE", "A", "0")), Line(6 + 3j, 6 + 6j, Source("LINE", "B", "0"))]
    assert refused([*lines(SQUARE), *corner]).findings[0].code == "open-chain"


def test_a_join_wider_than_a_tenth_of_its_neighbour() -> None:
    points = [0j, 10 + 0j, 10 + 10j, 10j, 0.05j]
    pieces = lines(points)
    pieces[4] = Line(0.05j, 0.006j, pieces[4].source)
    error = refused(pieces)
    assert error.findings[0].code == "gap-too-wide"
    assert "wider than a tenth" in str(error)


@pytest.mark.parametrize("size", [1e-1, 1e-3, 1e-6, 1e-9, 1e-11, 1e-12])
def test_tiny_pieces_are_harmless(size: float) -> None:
    """A corner cut off by a piece down to 1e-12 of the drawing's size."""
    points = [0j, 10 - size + 0j, 10 + 1j * size, 10 + 10j, 10j]
    outline = assemble(lines(points))
    assert area(outline) == pytest.approx(100 - size**2 / 2, rel=1e-12)


def test_pieces_of_rounding_are_left_out_and_said() -> None:
    points = [0j, 10 + 0j, 10 + 1e-15j, 10 + 10j, 10j]
    outline = assemble(lines(points))
    assert area(outline) == pytest.approx(100, rel=1e-15)
    assert [(f.code, f.severity) for f in outline.findings] == [("tiny-curve-removed", "note")]


def test_one_arc_that_all_but_closes_on_itself_is_a_loop_across_its_gap() -> None:
    turn = 2 * math.pi - 0.001
    outline = assemble([Arc.from_centre(0, 5, 0.3, turn, Source("ARC", "1", "0"))])
    assert outline.joins[0].gap == pytest.approx(0.005, rel=1e-3)
    assert area(outline) == pytest.approx(25 * math.pi, rel=1e-4)


def test_a_slit_tube_keeps_its_slit() -> None:
    outline = assemble(curves_of(split_tube(50, 4, 0.02)))
    assert len(outline.regions[0].voids) == 0
    assert area(outline) == pytest.approx(0.5 * (52**2 - 48**2) * (2 * math.pi - 0.02), rel=1e-13)


def test_a_straight_piece_gives_way_to_an_arc() -> None:
    bend = Arc.from_centre(0, 5, 0.0, math.pi, Source("ARC", "1", "0"))
    outline = assemble([bend, Line(-5 + 0.003j, 5.002 + 0.001j, Source("LINE", "2", "0"))])
    arc = next(c for c in outline.regions[0].outer.curves if isinstance(c, Arc))
    assert arc.radius == 5.0
    assert abs(arc.centre) < 1e-15


def test_two_arcs_meet_half_way_and_keep_their_turn() -> None:
    first = Arc.from_centre(0, 5, 0.0, math.pi, Source("ARC", "1", "0"))
    second = Arc.from_centre(0.002j, 5, math.pi, math.pi, Source("ARC", "2", "0"))
    loop = assemble([first, second]).regions[0].outer
    assert {abs(c.sweep) for c in loop.curves if isinstance(c, Arc)} == {math.pi}
    assert loop.area == pytest.approx(25 * math.pi, rel=1e-3)


@settings(max_examples=60)
@given(st.floats(1e-4, 9e-3), st.floats(0, 2 * math.pi), st.integers(0, 3))
def test_swept_area_bounds_what_the_join_can_have_done(gap: float, direction: float, corner: int) -> None:
    """Against the true corner, and against moving either end onto the other."""
    square = lines(SQUARE)
    moved = square[corner]
    off = complex(gap * math.cos(direction), gap * math.sin(direction))
    square[corner] = Line(moved.start + off, moved.end, moved.source)
    outline = assemble(square)
    bound = sum(join.swept for join in outline.joins)
    assert abs(area(outline) - 100) <= bound * (1 + 1e-9)
    other = lines([z + off if k == corner else z for k, z in enumerate(SQUARE)])
    assert abs(area(outline) - area(assemble(other))) <= bound * (1 + 1e-9)


@settings(max_examples=80)
@given(st.floats(1.0, 4.9), st.floats(1e-4, 9e-3), st.floats(0, 2 * math.pi), st.sampled_from([-4.9, -5.5]))
def test_swept_area_bounds_the_turning_of_a_bent_piece(sweep: float, gap: float, direction: float, turn: float) -> None:
    """An arc with a gap at one end, against stretching it or its neighbour onto the other; one of 5.5 rad is stiff."""
    arc = Arc.from_centre(0, 10, 0.0, sweep, Source("ARC", "1", "0"))
    missed = arc.end + gap * rect(1.0, direction)
    ear = Arc(missed, 1.5 * rect(1.0, sweep + 0.4), turn, Source("ARC", "2", "0"))
    rest = (Line(ear.end, -20j), Line(-20j, 15 - 20j), Line(15 - 20j, arc.start))
    closed = close_loops([arc, ear, *rest], 0.01, "mm")
    assert len(closed.joins) == 1
    ways = [
        [arc.moved(f := (missed - arc.start) / (arc.end - arc.start), arc.start - f * arc.start), ear],
        [arc, ear.moved(g := (arc.end - ear.end) / (missed - ear.end), ear.end - g * ear.end)],
        [arc, Line(arc.end, missed), ear],
    ]
    for bent in ways:
        change = abs(abs(Loop((*bent, *rest)).area) - abs(closed.loops[0].area))
        assert change <= closed.joins[0].swept * (1 + 1e-9)


def test_every_curve_is_used_exactly_once() -> None:
    pieces = curves_of(i_section(200, 100, 5.6, 8.5, 12)) + lines([z + 500 for z in SQUARE])
    closed = close_loops(pieces, 0.01, "mm")
    assert sorted(len(loop.curves) for loop in closed.loops) == [4, 16]
    assert closed.strays == []


def test_no_curve_that_encloses_anything() -> None:
    refused([Line(0, 1), Line(1, 2), Line(2, 0)])
    with pytest.raises(OutlineError, match="no curve"):
        assemble([])


def test_a_void_among_open_curves_is_no_section() -> None:
    """Four lines that miss each other by far around a closed square: the square may be their void."""
    square = [0j, 10 + 0j, 10 + 10j, 10j]
    closed = [Line(a, b) for a, b in zip(square, [*square[1:], square[0]], strict=True)]
    sides = [Line(-8 - 10j, 18 - 10j), Line(20 - 8j, 20 + 18j), Line(18 + 20j, -8 + 20j), Line(-10 + 18j, -10 - 8j)]
    with pytest.raises(OutlineError, match="may be a void of an outline whose ends do not meet"):
        assemble([*closed, *sides])
    # two of them on one side are strays and no more
    assert len(assemble([*closed, *sides[:1]]).regions) == 1
