"""Where curves meet and run along each other: laws, places in closed form, and finely chopped copies in shapely."""

from __future__ import annotations

from math import cos, pi, sin, sqrt, tau
from time import perf_counter

import numpy as np
import pytest
import shapely
from hypothesis import assume, given, settings

from curve_kinds import angles, chopped, curves, places, runs_back, shares, size_of
from edgetally.curves import Arc, Bezier, Curve, EllipticArc, Line, bspline_pieces
from edgetally.curves.intersections import intersect, nearest, overlap

TOUCH = 1e-9
few = settings(max_examples=60, deadline=None)
UNIT = Arc.from_centre(0, 1, 0, tau)
FLAT = EllipticArc.from_axes(0, 2, 0.5, 0, tau)
S_CURVE = Bezier((0, 1 + 3j, 2 - 3j, 3))
QUARTER = Bezier((1, 1 + 1j, 1j), (1, sqrt(0.5), 1))


def points(a: Curve, b: Curve, tolerance: float = TOUCH) -> list[complex]:
    found = intersect(a, b, tolerance)
    for t, u, z in found:
        assert 0 <= t <= 1
        assert 0 <= u <= 1
        assert max(abs(a.point(t) - z), abs(b.point(u) - z)) <= 1.01 * tolerance
    assert [t for t, _, _ in found] == sorted(t for t, _, _ in found)
    return [z for _, _, z in found]


def same(found: list[complex], wanted: list[complex], within: float = 1e-12) -> bool:
    """Tell whether both hold the same points, in any order."""
    left = list(wanted)
    for z in found:
        near = [w for w in left if abs(w - z) <= within]
        if not near:
            return False
        left.remove(near[0])
    return not left


# --------------------------------------------------------------------------------------------------- known places

ROOT3 = sqrt(3)


@pytest.mark.parametrize(
    ("a", "b", "wanted"),
    [
        (Line(0, 2 + 2j), Line(2j, 2), [1 + 1j]),
        (Line(0, 1), Line(0.5, 0.5 + 1j), [0.5]),  # an end on the other
        (Line(0, 1), Line(1, 1 + 1j), [1]),
        (Line(0, 1), Line(2, 3), []),
        (Line(0, 1), Line(1j, 1 + 1j), []),
        (Line(0, 1), Line(1, 2), [1]),  # collinear, end to end
        (Line(-2, 2), UNIT, [-1, 1]),
        (Line(-2, 0.5), UNIT, [-1]),
        (Line(-2 + 1j, 2 + 1j), UNIT, [1j]),
        (Line(0, 1), UNIT, [1]),
        (Line(-0.5, 0.5), UNIT, []),
        (Line(-2 + 0.5j, 2 + 0.5j), UNIT, [ROOT3 / 2 + 0.5j, -ROOT3 / 2 + 0.5j]),
        (UNIT, Arc.from_centre(1, 1, 0, tau), [0.5 + ROOT3 / 2j, 0.5 - ROOT3 / 2j]),
        (UNIT, Arc.from_centre(2, 1, 1, tau), [1]),
        (UNIT, Arc.from_centre(0.5, 0.5, 1, tau), [1]),  # touching from inside
        (UNIT, Arc.from_centre(0, 2, 0, tau), []),
        (UNIT, Arc.from_centre(3, 1, 0, tau), []),
        (UNIT, Arc.from_centre(0.1, 0.2, 0, tau), []),
        (Arc.from_centre(0, 1, 0, pi), Arc.from_centre(1, 1, pi, pi), []),
        (Line(-3 + 0.5j, 3 + 0.5j), FLAT, [ROOT3 + 0.5j, -ROOT3 + 0.5j]),
        (Line(-3 + 1j, 3 + 1j), FLAT, [1j]),
        (UNIT, FLAT, [1j, -1j]),  # touching twice
        (FLAT, EllipticArc.from_axes(0, 2j, 0.5, 0, tau), [sqrt(0.8) * z for z in (1 + 1j, 1 - 1j, -1 + 1j, -1 - 1j)]),
        (Line(-1, 4), S_CURVE, [0, 1.5, 3]),
        (Line(0, 2 + 2j), QUARTER, [(1 + 1j) / sqrt(2)]),
        (Line(sqrt(2), sqrt(2) * 1j), QUARTER, [(1 + 1j) / sqrt(2)]),  # tangent
        (S_CURVE, S_CURVE.moved(1, 3), [3]),
        (Bezier((-1, 0 + 2j, 1)), Bezier((-1 + 2j, 0, 1 + 2j)), [1j]),  # two parabolas, vertex to vertex
        (Bezier((0, 1 + 1j, 2)), Bezier((0.5j, 1 - 0.5j, 2 + 0.5j)), [1 - sqrt(0.5) + 0.25j, 1 + sqrt(0.5) + 0.25j]),
    ],
)  # fmt: skip
def test_known_places(a: Curve, b: Curve, wanted: list[complex]) -> None:
    within = 1e-7 if len(wanted) and a is not b else 1e-12  # a tangency is known to √ε only
    for one, other in ((a, b), (b, a), (a.reversed(), b), (a, b.reversed()), (a.mirrored().mirrored(), b)):
        assert same(points(one, other), wanted, within)
        assert overlap(one, other, TOUCH) == []
    if len(wanted) != 1 and a is not UNIT:
        assert same(points(a, b), wanted, 1e-14)


def test_cubics_cross_nine_times() -> None:
    """y = T₃(x) and x = T₃(y) with T₃ = cos(3·arccos): T₉(x) = x, so x = cos(kπ/4) or cos(kπ/5)."""
    a = Bezier((-1 - 1j, -1 / 3 + 5j, 1 / 3 - 5j, 1 + 1j))
    b = Bezier(tuple(z.conjugate() * 1j for z in a.control))
    wanted = [k * pi / 4 for k in range(1, 4)] + [k * pi / 5 for k in range(6)]
    assert same(points(a, b), [complex(cos(x), cos(3 * x)) for x in wanted], 1e-13)


# ------------------------------------------------------------------------------------------------------ tangencies


@pytest.mark.parametrize("gap", [-0.9e-9, -1e-10, 0.0, 1e-10, 0.9e-9])
@pytest.mark.parametrize("turn", [0.0, 0.7])
def test_a_near_touch_is_one_contact(gap: float, turn: float) -> None:
    """Line and curves that touch, just cut or just miss by less than the tolerance: one contact at the touch."""
    factor = complex(cos(turn), sin(turn))
    line = Line(-2 + (1 + gap) * 1j, 2 + (1 + gap) * 1j).moved(factor, 0)
    above = Arc.from_centre((2 + gap) * 1j, 1, 0.3, tau).moved(factor, 0)
    for curve in (UNIT, FLAT, Bezier((1, 1 + 1j, 1j), (1, sqrt(0.5), 1)), Arc.from_centre(0, 1, 0.5, 2)):
        there = curve.moved(factor, 0)
        for other in (line, above):
            (z,) = points(there, other)
            assert abs(z - 1j * factor) <= 1e-4  # anywhere within the tolerance: √(2·R·tolerance)
            (z,) = points(other, there)
            assert overlap(there, other, TOUCH) == []


@pytest.mark.parametrize("gap", [1e-8, 1e-6])
def test_a_miss_by_more_than_the_tolerance_is_none(gap: float) -> None:
    line = Line(-2 + (1 + gap) * 1j, 2 + (1 + gap) * 1j)
    for curve in (UNIT, FLAT, Bezier((-1, 2j, 1)), Arc.from_centre(0, 1, 0.5, 2)):
        assert points(curve, line) == points(line, curve) == []
    # and a cut by more is two
    line = Line(-2 + (1 - gap) * 1j, 2 + (1 - gap) * 1j)
    for curve in (UNIT, FLAT, Bezier((-1, 2j, 1)), Arc.from_centre(0, 1, 0.5, 2)):
        assert len(points(curve, line)) == 2


@pytest.mark.parametrize("angle", np.linspace(-3, 3, 7))
def test_a_tangent_joint_is_one_contact_at_the_joint(angle: float) -> None:
    """What fillets are made of; with rounding in every coordinate."""
    factor = 37.3 * complex(cos(angle), sin(angle))
    line = Line(-1 + 1j, 1j).moved(factor, 1000 + 500j)
    for curve in (
        Arc.from_centre(0, 1, pi / 2, -1),
        Arc.from_centre(2j, 1, -pi / 2, 1),
        EllipticArc.from_axes(0, 2, 0.5, 0, pi / 2).reversed(),
        Bezier((1j, 1 + 1j, 1)),
        QUARTER.reversed(),
    ):
        there = curve.moved(factor, 1000 + 500j)
        for extent in (1e-9, 1e-7):
            assert points(line, there, extent * 37) == [line.end]
            assert points(there, line, extent * 37) == [there.start]
        assert overlap(line, there, TOUCH * 37) == []


def test_neighbouring_spline_pieces_share_only_their_knot() -> None:
    ring = [40, 30 + 30j, 36j, -36 + 24j, -30 - 18j, 6 - 30j, 40, 30 + 30j, 36j]
    pieces = bspline_pieces(3, list(range(13)), ring)
    for k, piece in enumerate(pieces):
        after = pieces[(k + 1) % 6]
        assert intersect(piece, after, 1e-7) == [(1.0, 0.0, after.start)]
        assert intersect(piece, pieces[(k + 2) % 6], 1e-7) == []
        assert overlap(piece, after, 1e-7) == []


# ------------------------------------------------------------------------------------------------------- flat arcs


@pytest.mark.parametrize("bulge", [1e-3, 1e-6, 1e-9, -1e-9, 1e-12])
@pytest.mark.parametrize("turn", [0.0, 0.6, -2.1])
def test_arcs_as_flat_as_lines(bulge: float, turn: float) -> None:
    """Radii up to 1e11 chords: crossings are as exact as the coordinates."""
    factor = complex(cos(turn), sin(turn))

    def there(curve: Curve) -> Curve:
        return curve.moved(factor, 2 + 1j)

    arc = Arc.from_bulge(2 + 1j, 2 + 1j + factor, bulge)
    sagitta = bulge / 2
    (z,) = points(arc, there(Line(0.5 - 1j, 0.5 + 1j)), 1e-12)
    assert (z - 2 - 1j) / factor == pytest.approx(0.5 - sagitta * 1j, abs=4e-15)
    (z,) = points(arc, there(Line(0.1 - 0.2j, 0.9 + 0.2j)), 1e-12)
    assert (z - 2 - 1j) / factor == pytest.approx(0.5 - sagitta * (1j + 2), abs=1e-14 + bulge**2 * 20)
    (z,) = points(arc, there(Arc.from_bulge(0.5 - 1j, 0.5 + 1j, bulge)), 1e-12)
    assert (z - 2 - 1j) / factor == pytest.approx(0.5 + bulge - sagitta * 1j, abs=1e-14 + bulge**2 * 10)
    # over its chord, and over its mirror image: the ends only, unless they are one within the tolerance
    for other in (there(Line(0, 1)), Arc.from_bulge(2 + 1j, 2 + 1j + factor, -bulge)):
        if abs(bulge) > 1e-8:
            assert points(arc, other, 1e-12) == [arc.start, arc.end]
            assert overlap(arc, other, 1e-12) == []
            assert nearest(other, arc.point(0.5))[0] == pytest.approx(sagitta * (1 + isinstance(other, Arc)), rel=1e-6)
    (run,) = overlap(arc, there(Line(0, 1)), 2 * abs(sagitta))
    assert run == ((0.0, 1.0), (0.0, 1.0))
    assert points(arc, there(Line(0, 1)), 2 * abs(sagitta)) == []


def test_distance_to_a_flat_arc() -> None:
    arc = Arc.from_bulge(0, 1, -1e-9)
    assert nearest(arc, 0.5 + 0.25j) == pytest.approx((0.25 - 0.5e-9, 0.5), abs=1e-15)
    assert nearest(arc, 0.5) == pytest.approx((0.5e-9, 0.5), abs=1e-15)
    assert nearest(arc, -1) == (1.0, 0.0)


# --------------------------------------------------------------------------------------------------------- overlap


@pytest.mark.parametrize(
    ("a", "b", "wanted"),
    [
        (Line(0, 4), Line(1, 3), [((0.25, 0.75), (0, 1))]),
        (Line(0, 4), Line(3, 1), [((0.25, 0.75), (1, 0))]),
        (Line(0, 4), Line(2, 6), [((0.5, 1), (0, 0.5))]),
        (Line(0, 4), Line(0, 4), [((0, 1), (0, 1))]),
        (Line(0, 4), Line(4, 8), []),
        (Line(0, 4), Line(0, 4 + 1j), []),
        (UNIT, UNIT, [((0, 0.5), (0, 0.5)), ((0.5, 1), (0.5, 1))]),
        (UNIT, UNIT.reversed(), [((0, 0.5), (1, 0.5)), ((0.5, 1), (0.5, 0))]),
        (UNIT, UNIT.moved(1j, 0), [((0, 0.25), (0.75, 1)), ((0.25, 1), (0, 0.75))]),
        (UNIT, Arc.from_centre(0, 1, pi / 2, pi), [((0.25, 0.75), (0, 1))]),
        (UNIT, Arc.from_centre(0, 1, -pi / 2, pi), [((0, 0.25), (0.5, 1)), ((0.75, 1), (0, 0.5))]),
        (Arc.from_centre(0, 1, 0, 2), Arc.from_centre(0, 1, 1, 2), [((0.5, 1), (0, 0.5))]),
        (Arc.from_centre(0, 1, 0, 2), Arc.from_centre(0, 1, 2, 2), []),
        (Arc.from_centre(0, 1, 0, 2), Arc.from_centre(0, 1, 3, -2), [((0.5, 1), (1, 0.5))]),
        (FLAT, FLAT, [((0, 0.5), (0, 0.5)), ((0.5, 1), (0.5, 1))]),
        (FLAT, EllipticArc.from_axes(0, 2, 0.5, pi / 2, pi), [((0.25, 0.5), (0, 1))]),
        (FLAT, EllipticArc.from_axes(0, 1j, 2.0, 0, pi / 2), [((0.25, 0.5), (0, 1))]),
        (S_CURVE, S_CURVE.split(0.25)[1], [((0.25, 1), (0, 1))]),
        (S_CURVE, S_CURVE.reversed(), [((0, 1), (1, 0))]),
        (QUARTER, Arc.from_centre(0, 1, 0, pi / 2), [((0, 1), (0, 1))]),  # the same circle in two descriptions
        (UNIT, Arc.from_centre(0, 1 + 5e-10, 1, 1), [((1 / tau, 2 / tau), (0, 1))]),  # a near-duplicate
        (UNIT, Arc.from_centre(0, 1 + 5e-9, 1, 1), []),
    ],
)  # fmt: skip
def test_known_overlaps(a: Curve, b: Curve, wanted: list) -> None:
    found = overlap(a, b, TOUCH)
    assert len(found) == len(wanted)
    for (t, u), (t_wanted, u_wanted) in zip(found, wanted, strict=True):
        assert t == pytest.approx(t_wanted, abs=1e-8)
        assert u == pytest.approx(u_wanted, abs=1e-8)
    assert len(overlap(b, a, TOUCH)) == len(wanted)
    if wanted:
        assert points(a, b) == []


def test_an_overlap_does_not_hide_a_crossing() -> None:
    loop = Bezier((0, 5 + 4j, -4 + 4j, 1))  # crosses itself
    first, second = loop.split(0.5)
    ((on_loop, on_first),) = overlap(loop, first, TOUCH)
    assert on_loop == pytest.approx((0, 0.5), abs=1e-12)
    assert on_first == pytest.approx((0, 1), abs=1e-12)
    (t, u, z) = intersect(loop, first, TOUCH)[-1]
    assert t > 0.5
    assert abs(first.point(u) - loop.point(t)) < 1e-12
    assert intersect(first, second, TOUCH)[-1][2] == pytest.approx(second.start, abs=1e-12)
    assert intersect(first, second, TOUCH)[0][2] == pytest.approx(z, abs=1e-12)


# ------------------------------------------------------------------------------------------------------------ laws


@few
@given(curves, curves)
def test_order_and_direction_do_not_matter(a: Curve, b: Curve) -> None:
    found = intersect(a, b, 1e-7)
    slim = [abs((a.derivative(t).conjugate() * b.derivative(u)).imag) for t, u, _ in found]
    assume(all(s > 1e-3 * abs(a.derivative(t) * b.derivative(u)) for s, (t, u, _) in zip(slim, found, strict=True)))
    wanted = [z for _, _, z in found]
    for one, other in ((b, a), (a.reversed(), b), (b.reversed(), a.reversed())):
        assert same([z for _, _, z in intersect(one, other, 1e-7)], wanted, 3e-7)


@few
@given(curves, curves, angles, places)
def test_intersections_move_with_the_curves(a: Curve, b: Curve, angle: float, shift: complex) -> None:
    factor = complex(cos(angle), sin(angle))
    found = intersect(a, b, 1e-7)
    slim = [abs((a.derivative(t).conjugate() * b.derivative(u)).imag) for t, u, _ in found]
    assume(all(s > 1e-3 * abs(a.derivative(t) * b.derivative(u)) for s, (t, u, _) in zip(slim, found, strict=True)))
    moved = intersect(a.moved(factor, shift), b.moved(factor, shift), 1e-7)
    assert same([z for _, _, z in moved], [factor * z + shift for _, _, z in found], 3e-7)
    mirrored = intersect(a.mirrored(), b.mirrored(), 1e-7)
    assert same([z for _, _, z in mirrored], [z.conjugate() for _, _, z in found], 3e-7)


@few
@given(curves, curves, shares, shares, angles)
def test_a_crossing_made_on_purpose_is_found(a: Curve, b: Curve, t: float, u: float, angle: float) -> None:
    """Move b so that z_b(u) falls on z_a(t)."""
    turned = b.moved(complex(cos(angle), sin(angle)), 0)
    b = turned.moved(1, a.point(t) - turned.point(u))
    slope = a.derivative(t), b.derivative(u)
    assume(abs((slope[0].conjugate() * slope[1]).imag) > 1e-2 * abs(slope[0] * slope[1]) > 0)
    found = intersect(a, b, 1e-8)
    assert min(abs(z - a.point(t)) for _, _, z in found) <= 2e-8


@few
@given(curves, shares, shares)
def test_a_curve_runs_along_its_parts(curve: Curve, t: float, u: float) -> None:
    assume(abs(t - u) > 0.05)
    low, high = sorted((t, u))
    part = curve.split(high)[0].split(low / high)[1]
    tolerance = 1e-8 * (1 + size_of(curve))
    assume(not runs_back(curve))
    found = overlap(part, curve, tolerance)
    covered = sum(last - first for (first, last), _ in found)
    assert covered == pytest.approx(1.0, abs=1e-3)


@few
@given(curves, places)
def test_nearest_is_nearer_than_any_sample(curve: Curve, p: complex) -> None:
    distance, t = nearest(curve, p)
    assert 0 <= t <= 1
    assert abs(curve.point(t) - p) == pytest.approx(distance, abs=1e-14 * (size_of(curve) + abs(p)))
    assert distance <= np.abs(chopped(curve, 1000) - p).min() + 1e-14 * (size_of(curve) + abs(p))


# --------------------------------------------------------------------------------- against finely chopped copies


def random_curve(rng: np.random.Generator) -> Curve:
    def place(s: float = 10) -> complex:
        return complex(*rng.uniform(-s, s, 2))

    kind = rng.integers(4)
    if kind == 0:
        return Line(place(), place())
    if kind == 1:
        sweep = float(rng.uniform(0.2, 6.28) * rng.choice([1, -1]))
        return Arc.from_centre(place(), float(rng.uniform(0.5, 8)), float(rng.uniform(-3, 3)), sweep)
    if kind == 2:
        return EllipticArc.from_axes(place(), place(7), *(float(x) for x in rng.uniform([0.05, -3, -3], [0.95, 3, 3])))
    n = int(rng.integers(3, 7))
    weights = tuple(rng.uniform(0.3, 3, n).tolist()) if rng.random() < 0.4 else None
    return Bezier(tuple(place() for _ in range(n)), weights)


def test_against_shapely() -> None:
    """500 pairs of all kinds, chopped into 3000 chords each: every crossing there has one of ours, and conversely."""
    rng = np.random.default_rng(20240611)
    n, total = 3000, 0
    share = np.linspace(0, 1, n + 1)

    def chop(curve: Curve) -> shapely.LineString:
        z = curve.points(share)
        return shapely.LineString(np.column_stack([z.real, z.imag]))

    for _ in range(500):
        a, b = random_curve(rng), random_curve(rng)
        crossing = shapely.intersection(chop(a), chop(b))
        theirs = [complex(g.x, g.y) for g in shapely.get_parts(crossing) if g.geom_type == "Point"]
        ours = points(a, b)
        assert same(ours, theirs, 3 * max(a.length, b.length) / n)
        total += len(ours)
    assert total > 100


def test_no_pair_takes_long() -> None:
    """Curves that all but run along each other, the worst case of the search, end in a bounded time."""
    slim = EllipticArc.from_axes(0, 1, 1 - 1e-9, 0, tau)
    nearly = Bezier((1, 1 + 1j + 1e-9, 1j), (1, sqrt(0.5), 1))
    point = Bezier((1, 1, 1, 1))
    cusp = Bezier((0, 1 + 1j, 1j, 1))
    start = perf_counter()
    for a in (UNIT, slim, QUARTER, nearly, point, cusp):
        for b in (UNIT, slim, QUARTER, nearly, point, cusp, UNIT.moved(1, 1e-9)):
            for tolerance in (0.0, 1e-9, 1e-3):
                points(a, b, max(tolerance, 1e-13)) if a is not b else overlap(a, b, tolerance)
    assert perf_counter() - start < 30
