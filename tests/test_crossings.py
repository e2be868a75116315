"""Boundaries that cross, touch or run over each other are refused, decided on the true curves."""

from __future__ import annotations

import math
import random
import re
from cmath import rect
from itertools import pairwise

import numpy as np
import pytest
import shapely
from hypothesis import given
from hypothesis import strategies as st

from build import curves_of
from edgetally import OutlineError
from edgetally.curves import Arc, Bezier, Curve, EllipticArc, Line, Packed, Source
from edgetally.curves.intersections import intersect, overlap
from edgetally.outline.assembly import assemble
from edgetally.outline.candidates import apart
from edgetally.outline.crossings import refuse_crossings
from edgetally.outline.records import Loop
from edgetally.outline.self_crossings import crosses_itself
from outlines import fillet_polygon, i_section, lipped_channel, spandrel


def polygon(*points: complex) -> list[Curve]:
    return [Line(a, b) for a, b in zip(points, [*points[1:], points[0]], strict=True)]


def circle(centre: complex, radius: float) -> Curve:
    return Arc.from_centre(centre, radius, 0.4, 2 * math.pi)


SQUARE = polygon(0, 10, 10 + 10j, 10j)


def named(curves: list[Curve], handle: str) -> list[Curve]:
    """The curves as of one closed polyline."""
    source = Source("LWPOLYLINE", handle, "0")
    return [Line(c.start, c.end, source) for c in curves]


def place_of(error: OutlineError) -> complex:
    match = re.search(r"at \(([-\d.e]+), ([-\d.e]+)\)", str(error))
    assert match is not None
    return complex(float(match.group(1)), float(match.group(2)))


def refused(curves: list[Curve], *expected: complex, code: str = "crossing") -> None:
    with pytest.raises(OutlineError) as error:
        assemble(curves)
    assert error.value.findings[0].code == code
    if expected:
        at = [complex(*f.at) for f in error.value.findings if f.at is not None]
        for z in expected:
            assert min(abs(z - w) for w in at) < 1e-6
        assert min(abs(z - place_of(error.value)) for z in expected) < 1e-6 or len(at) > 1


def test_bow_tie() -> None:
    refused(polygon(0, 10 + 10j, 10, 10j), 5 + 5j)
    refused(polygon(0, 20 + 20j, 20, 10j), complex(20 / 3, 20 / 3))


def test_line_through_the_bulge_of_an_arc_whose_chord_it_misses() -> None:
    """The half disc above y = 10 and a box that enters its crown only."""
    house = curves_of([[(0, 0, 10, 0, 0), (10, 0, 10, 10, 0), (10, 10, 0, 10, 1.0), (0, 10, 0, 0, 0)]])
    x = 5 - math.sqrt(25 - 16)
    refused(house + polygon(-5 + 14j, 4 + 14j, 4 + 20j, -5 + 20j), complex(x, 14))


def test_arcs_that_keep_clear_although_their_chords_cross() -> None:
    """An inward bulge makes room for a disc that the chord would cut."""
    notch = curves_of([[(0, 0, 10, 0, 0), (10, 0, 10, 10, 0), (10, 10, 0, 10, -0.8), (0, 10, 0, 0, 0)]])
    outline = assemble([*notch, circle(5 + 9.5j, 1.5)])
    assert len(outline.regions) == 2


@pytest.mark.parametrize("distance", [3.5, 5.0, 6.9])
def test_circles_that_cross(distance: float) -> None:
    a, b = 5.0, 2.0
    x = (distance**2 + a**2 - b**2) / (2 * distance)
    y = math.sqrt(a**2 - x**2)
    with pytest.raises(OutlineError) as error:
        assemble([circle(0, a), circle(distance + 0j, b)])
    at = place_of(error.value)
    assert complex(at.real, abs(at.imag)) == pytest.approx(complex(x, y), abs=1e-6)


@pytest.mark.parametrize("distance", [7.0, 3.0, 7.0 + 1e-10])
def test_circles_that_touch_from_outside_and_inside(distance: float) -> None:
    """The place of a touch is known to the root of the tolerance only."""
    with pytest.raises(OutlineError) as error:
        assemble([circle(0, 5.0), circle(distance + 0j, 2.0)])
    assert abs(place_of(error.value) - 5) < 1e-3


@pytest.mark.parametrize("distance", [7.0 + 1e-6, 3.0 - 1e-6])
def test_circles_with_a_hair_between_them_are_left_alone(distance: float) -> None:
    assert assemble([circle(0, 5.0), circle(distance + 0j, 2.0)]).regions


def test_void_that_touches_the_outer_boundary_in_a_point() -> None:
    with pytest.raises(OutlineError) as error:
        assemble([*SQUARE, circle(3 + 5j, 3.0)])
    assert abs(place_of(error.value) - 5j) < 1e-3


def test_vertex_on_another_edge() -> None:
    refused(SQUARE + polygon(10 + 5j, 15 + 3j, 15 + 7j), 10 + 5j)


def test_spike_that_runs_back_over_itself() -> None:
    points = [0, 10, 10 + 5j, 15 + 5j, 10 + 5j, 10 + 10j, 10j]
    with pytest.raises(OutlineError):
        assemble(polygon(*map(complex, points)))


def test_cusp_of_a_fillet_spandrel_is_accepted() -> None:
    """Its arc leaves both sides at the angle 0: a true corner, not a crossing."""
    for r in (1e-3, 1.0, 12.0, 1e4):
        outline = assemble(curves_of(spandrel(r)))
        assert outline.regions[0].area == pytest.approx((1 - math.pi / 4) * r**2, rel=1e-12)


@pytest.mark.parametrize("digits", [3, 4, 6, 9])
def test_tangent_fillets_whose_ends_were_rounded_are_accepted(digits: int) -> None:
    """As a file with few decimals gives them: line and arc then cross again, by less than the rounding, near the
    joint."""
    for contours in (i_section(200, 100, 5.6, 8.5, 12), lipped_channel(200, 75, 20, 1.5, 3)):
        rounded = [
            [(round(a, digits), round(b, digits), round(c, digits), round(d, digits), bulge)
             for a, b, c, d, bulge in contour] for contour in contours
        ]  # fmt: skip
        area = assemble(curves_of(rounded)).regions[0].area
        assert area == pytest.approx(assemble(curves_of(contours)).regions[0].area, rel=10.0 ** (2 - digits))


def test_comb_of_a_thousand_teeth_and_its_crossing_twin() -> None:
    points = [0j]
    for k in range(1000):
        points += [complex(k + 0.25, 0), complex(k + 0.25, 5), complex(k + 0.75, 5), complex(k + 0.75, 0)]
    points += [1000 + 0j, 1000 - 2j, -2j]
    assert assemble(polygon(*points)).regions[0].area == pytest.approx(2000 + 2500)
    points[2002] += 0.6
    with pytest.raises(OutlineError):
        assemble(polygon(*points))


def test_void_that_touches_the_outer_boundary_along_an_edge() -> None:
    with pytest.raises(OutlineError, match="run along each other") as error:
        assemble([*named(SQUARE, "A"), *named(polygon(3, 7, 7 + 4j, 3 + 4j), "B")])
    assert error.value.findings[0].code == "regions-overlap"
    assert error.value.findings[0].at == pytest.approx((5, 0))


def test_boundaries_nearer_than_the_touch_and_just_not() -> None:
    """Parallel sides less than a billionth of the extent apart touch; a ten-millionth is a distance."""
    for gap, accepted in ((5e-9, False), (1e-7, True)):
        curves = SQUARE + [c.moved(1.0, 10 + gap + 2j) for c in polygon(0, 4, 4 + 4j, 4j)]
        if accepted:
            assert len(assemble(curves).regions) == 2
        else:
            with pytest.raises(OutlineError):
                assemble(curves)


def test_what_is_far_away_does_not_decide() -> None:
    """A tube with a wall of 0.1, and the same again 1e8 away: touching is relative to the loops concerned."""
    tube = [*polygon(0, 10, 10 + 10j, 10j), *polygon(0.1 + 0.1j, 9.9 + 0.1j, 9.9 + 9.9j, 0.1 + 9.9j)]
    outline = assemble([*tube, *(c.moved(1.0, 1e8) for c in tube)])
    assert [len(region.voids) for region in outline.regions] == [1, 1]


def test_a_scribble_is_refused_without_looking_for_every_crossing() -> None:
    chance = random.Random(4)
    discs = [circle(complex(chance.uniform(0, 10), chance.uniform(0, 10)), 4.0) for _ in range(300)]
    with pytest.raises(OutlineError, match="and at least 88 more such places"):
        assemble(discs)


@pytest.mark.parametrize("closing", [[], [10 - 5j, -5j]])
def test_one_span_of_a_spline_that_crosses_itself(closing: list[complex]) -> None:
    """A single cubic with a loop in it, whose area would count with the wrong sign."""
    loop = Bezier((0j, 15 + 10j, -5 + 10j, 10 + 0j), None, Source("SPLINE", "A", "0"))
    ends = [10 + 0j, *closing, 0j]
    # by symmetry it crosses itself on x = 5, where 45t(1−t)² − 15t²(1−t) + 10t³ = 5 beside t = ½: t(1−t) = 1/7
    curves: list[Curve] = [loop, *(Line(a, b) for a, b in pairwise(ends))]
    with pytest.raises(OutlineError, match="SPLINE #A meets itself at") as error:
        assemble(curves)
    assert place_of(error.value) == pytest.approx(5 + 30j / 7, abs=1e-6)


@pytest.mark.parametrize("size", [1.0, 1e3])
def test_cusps_and_loops_of_a_span(size: float) -> None:
    """The cubic 0, f + i, 1 − f + i, 1 has a loop for f > 1, a cusp at f = 1, and neither below."""
    for f, loops in ((1.01, True), (1.0001, True), (1.0, False), (0.9999, False), (0.5, False)):
        span = Bezier(tuple(size * z for z in (0j, f + 1j, 1 - f + 1j, 1 + 0j)))
        assert (crosses_itself(span, 1e-9 * size) is not None) == loops
    assert crosses_itself(Bezier((0j, 10 + 5j, -10 + 5j, 0j)), 1e-9) is None  # closed, its ends meet


@pytest.mark.parametrize("seed", range(3))
def test_random_spans_that_cross_themselves_or_not(seed: int) -> None:
    """GEOS tells of 3000 chords whether they are simple."""
    chance = random.Random(seed)
    found = 0
    for _ in range(60):
        control = tuple(
            complex(chance.uniform(0, 10), chance.uniform(0, 10)) for _ in range(chance.choice([3, 4, 4, 6]))
        )
        weights = tuple(chance.uniform(0.3, 3) for _ in control) if chance.random() < 0.4 else None
        span = Bezier(control, weights)
        z = span.points(np.linspace(0, 1, 3001))
        simple = shapely.LineString(np.column_stack([z.real, z.imag])).is_simple
        assert (crosses_itself(span, 1e-8) is None) == simple
        found += not simple
    assert found > 3


@given(st.integers(0, 10**6))
def test_what_is_told_apart_in_arrays_does_not_meet(seed: int) -> None:
    """Lines and arcs, many concentric, tangent or of huge radius: `apart` is never true of two that intersect."""
    chance = random.Random(seed)
    curves: list[Curve] = []
    for _ in range(14):
        a, b = (complex(chance.randint(-4, 4), chance.randint(-4, 4)) for _ in range(2))
        kind = chance.randint(0, 3)
        if kind == 0:
            curves.append(Arc.from_centre(a, chance.choice([1.0, 2.0, 3.0]), chance.uniform(0, 6), 2 * math.pi))
        elif a != b:
            bulge = chance.choice([1e-9, 1e-4, 0.3, 1.0, -2.0])
            curves.append(Line(a, b) if kind == 1 else Arc.from_bulge(a, b, bulge))
    one, other = (k.astype(np.intp) for k in np.triu_indices(len(curves), 1))
    clear = apart(Packed.of(curves), one, other, 1e-9)
    for i, j in zip(one[clear].tolist(), other[clear].tolist(), strict=True):
        assert intersect(curves[i], curves[j], 1e-9) == []
        assert overlap(curves[i], curves[j], 1e-9) == []


def random_loop(chance: random.Random) -> Loop:
    """A polygon around a point, some corners rounded, some sides bulged."""
    n = chance.randint(3, 7)
    at = complex(chance.uniform(-3, 3), chance.uniform(-3, 3))
    turns = sorted(chance.uniform(0, 2 * math.pi) for _ in range(n))
    points = [at + chance.uniform(1.5, 4) * complex(math.cos(t), math.sin(t)) for t in turns]
    contour = fillet_polygon([(z.real, z.imag, 0.0) for z in points])
    bulged = [(*piece[:4], chance.choice([0.0, 0.0, 0.3, -0.2])) for piece in contour]
    return Loop(tuple(curves_of([bulged])))


@pytest.mark.parametrize("seed", range(6))
def test_random_pairs_against_fine_chords(seed: int) -> None:
    """shapely's intersection of rings of 200 chords an arc; pairs too near for the chords to tell are left out."""
    chance = random.Random(100 + seed)
    decided = crossing = 0
    for _ in range(60):
        loops = [random_loop(chance), random_loop(chance)]
        rings = []
        for loop in loops:
            points = [z for curve in loop.curves for z in curve.points(np.linspace(0, 1, 200, endpoint=False))]
            rings.append(shapely.LinearRing([(z.real, z.imag) for z in points]))
        if not all(shapely.Polygon(ring).is_valid for ring in rings):
            continue
        meets = rings[0].intersects(rings[1])
        if not meets and rings[0].distance(rings[1]) < 1e-3:
            continue
        if meets and shapely.Polygon(rings[0]).intersection(shapely.Polygon(rings[1])).area < 1e-3:
            continue
        decided += 1
        try:
            refuse_crossings(loops)
            found = False
        except OutlineError:
            found = True
        crossing += found
        assert found == meets
    assert decided > 20
    assert crossing > 5


@pytest.mark.parametrize("seed", range(3))
def test_random_loops_of_every_kind_of_curve_against_fine_chords(seed: int) -> None:
    """Lines, arcs, elliptic arcs, Bézier pieces: GEOS tells of rings of 600 chords a piece whether they are simple."""
    chance = random.Random(seed)
    t = np.linspace(0, 1, 600, endpoint=False)
    crossing = 0
    for _ in range(60):
        n = chance.randint(2, 7)
        if chance.random() < 0.5:
            points = [rect(chance.uniform(2, 5), turn) for turn in sorted(chance.uniform(0, 6.28) for _ in range(n))]
        else:
            points = [complex(chance.uniform(0, 6), chance.uniform(0, 6)) for _ in range(n)]
        loop = Loop(tuple(some_curve(chance, a, b) for a, b in zip(points, [*points[1:], points[0]], strict=True)))
        z = np.concatenate([curve.points(t) for curve in loop.curves])
        simple = shapely.LinearRing(np.column_stack([z.real, z.imag])).is_simple
        if simple:
            refuse_crossings([loop])
        else:
            with pytest.raises(OutlineError):
                refuse_crossings([loop])
        crossing += not simple
    assert 10 < crossing < 50


def some_curve(chance: random.Random, a: complex, b: complex) -> Curve:
    """A curve of any kind from a to b, moderately bent."""
    kind = chance.randint(0, 3)
    if kind == 0:
        return Line(a, b)
    if kind == 1:
        return Arc.from_bulge(a, b, chance.choice([0.2, -0.2, 0.6, -0.5, 1.5, -2.0]))
    if kind == 2:
        inner = [a + (b - a) * complex(k / 3 + chance.uniform(-0.3, 0.3), chance.uniform(-0.6, 0.6)) for k in (1, 2)]
        return Bezier((a, *inner, b), chance.choice([None, (1.0, 0.5, 2.0, 1.0)]))
    whole = EllipticArc.from_axes(0j, 3 + 0j, 0.4, 0.3, chance.choice([1.5, 3.0, 5.0]))
    factor = (b - a) / (whole.end - whole.start)
    return whole.moved(factor, a - factor * whole.start)


def test_eighteen_thousand_shuffled_pieces() -> None:
    pieces: list[Curve] = []
    for k in range(2000):
        at = 30.0 * complex(k % 45, k // 45)
        slot = [(0, 2, 2, 0, 0.4), (2, 0, 18, 0, 0.0), (18, 0, 20, 2, 0.4), (20, 2, 20, 18, 0.0), (20, 18, 18, 20, 0.4),
                (18, 20, 10, 20, 0.0), (10, 20, 2, 20, 0.0), (2, 20, 0, 18, 0.4), (0, 18, 0, 2, 0.0)]  # fmt: skip
        pieces += [curve.moved(1.0, at) for curve in curves_of([slot])]
    random.Random(3).shuffle(pieces)
    outline = assemble(pieces)
    assert len(outline.regions) == 2000
    assert outline.joins == ()
