"""Splines against exact rational integration, the recursion that defines them, and ezdxf's own evaluation."""

from __future__ import annotations

from fractions import Fraction
from itertools import pairwise
from math import asinh, comb, cos, pi, radians, sin, sqrt

import ezdxf.math
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from curve_kinds import beziers, chopped, places, shares, size_of
from edgetally.curves import Arc, Bezier, Line, Packed, bspline_pieces, fit_spline
from edgetally.curves.bernstein import roots
from edgetally.curves.green import moments
from edgetally.curves.intersections import nearest

few = settings(max_examples=80, deadline=None)
RING = [40, 30 + 30j, 36j, -36 + 24j, -30 - 18j, 6 - 30j]

# ------------------------------------------------------------------------- exact integration in rational arithmetic

Polynomial = list[Fraction]


def times(*factors: Polynomial) -> Polynomial:
    result = [Fraction(1)]
    for factor in factors:
        longer = [Fraction(0)] * (len(result) + len(factor) - 1)
        for i, a in enumerate(result):
            for j, b in enumerate(factor):
                longer[i + j] += a * b
        result = longer
    return result


def power_form(control: list[Fraction]) -> Polynomial:
    """Coefficients of 1, t, t², … of a Bézier coordinate."""
    n = len(control) - 1
    return [comb(n, k) * sum((-1) ** (k - i) * comb(k, i) * control[i] for i in range(k + 1)) for k in range(n + 1)]  # type: ignore[misc]


def exact_moments(pieces: list[list[tuple[Fraction, Fraction]]]) -> dict[str, Fraction]:
    """A, cx, cy and Ix, Iy, Ixy about the centroid of closed polynomial Bézier pieces, by Green's theorem."""
    raw = {key: Fraction(0) for key in ("00", "10", "01", "20", "11", "02")}
    for piece in pieces:
        x, y = power_form([p[0] for p in piece]), power_form([p[1] for p in piece])
        dy = [k * c for k, c in enumerate(y)][1:]
        for key in raw:
            p, q = int(key[0]), int(key[1])
            integrand = times(*[x] * (p + 1), *[y] * q, dy)  # ∫xᵖy^q dA = ∮x^(p+1)·y^q dy/(p + 1)
            raw[key] += sum(c / (k + 1) for k, c in enumerate(integrand)) / (p + 1)
    a = raw["00"]
    cx, cy = raw["10"] / a, raw["01"] / a
    return {
        "A": a, "cx": cx, "cy": cy,
        "Ix": raw["02"] - a * cy * cy, "Iy": raw["20"] - a * cx * cx, "Ixy": raw["11"] - a * cx * cy,
    }  # fmt: skip


def computed(*pieces: Bezier | Line | Arc) -> dict[str, float]:
    m = moments(Packed.of(pieces))
    x, y = m.m10 / m.m00, m.m01 / m.m00
    return {
        "A": m.m00, "cx": x, "cy": y,
        "Ix": m.m02 - m.m00 * y * y, "Iy": m.m20 - m.m00 * x * x, "Ixy": m.m11 - m.m00 * x * y,
    }  # fmt: skip


def exact_points(control: tuple[complex, ...]) -> list[tuple[Fraction, Fraction]]:
    return [(Fraction(p.real), Fraction(p.imag)) for p in map(complex, control)]


def uniform_ring(degree: int) -> list[list[tuple[Fraction, Fraction]]]:
    """Bézier points of the closed uniform B-spline through RING's frame, from the textbook masks."""
    p = exact_points(tuple(RING))

    def mix(shares: list[int], k: int) -> tuple[Fraction, Fraction]:
        rows = [p[(k + i) % len(p)] for i in range(len(shares))]
        total = sum(shares)
        return sum(s * r[0] for s, r in zip(shares, rows)) / total, sum(s * r[1] for s, r in zip(shares, rows)) / total  # type: ignore[return-value]  # noqa: B905

    masks = {2: [[1, 1, 0], [0, 1, 0], [0, 1, 1]], 3: [[1, 4, 1, 0], [0, 2, 1, 0], [0, 1, 2, 0], [0, 1, 4, 1]]}
    return [[mix(mask, k) for mask in masks[degree]] for k in range(len(p))]


def test_two_cubics() -> None:
    control = ((0, 30 - 12j, 60 + 6j, 72 + 30j), (72 + 30j, 60 + 60j, 12 + 66j, 0))
    exact = exact_moments([exact_points(c) for c in control])
    assert exact == {
        "A": Fraction(13554, 5), "cx": Fraction(123759, 3514), "cy": Fraction(40902, 1757),
        "Ix": Fraction(358816799916, 676445), "Iy": Fraction(95286707181, 122990),
        "Ixy": Fraction(166219951446, 676445),
    }  # fmt: skip
    assert computed(*map(Bezier, control)) == pytest.approx({k: float(v) for k, v in exact.items()}, rel=1e-14)


@pytest.mark.parametrize(
    ("degree", "known"),
    [
        (3, {"A": Fraction(44737, 15), "cx": Fraction(70822, 85407), "cy": Fraction(1751616, 313159),
             "Ix": Fraction(60627087462596, 98645085), "Iy": Fraction(730469640040408, 887805765),
             "Ixy": Fraction(2807939391197, 59187051)}),
        (2, {"A": Fraction(3274), "Ix": Fraction(210750497919, 286475), "Iy": Fraction(286406762651, 286475),
             "Ixy": Fraction(14642537373, 286475)}),
    ],
)  # fmt: skip
def test_closed_uniform_splines(degree: int, known: dict[str, Fraction]) -> None:
    control = [*RING, *RING[:degree]]
    pieces = bspline_pieces(degree, list(range(len(control) + degree + 1)), control)
    assert len(pieces) == 6
    assert pieces[-1].end == pieces[0].start
    exact = exact_moments(uniform_ring(degree))
    assert known.items() <= exact.items()
    assert computed(*pieces) == pytest.approx({k: float(v) for k, v in exact.items()}, rel=2e-14)
    if degree == 3:
        assert sum(p.length for p in pieces) == pytest.approx(195.003037505278, rel=5e-15)
    # the derivative goes on across every knot
    for before, after in zip(pieces, [*pieces[1:], pieces[0]], strict=True):
        assert before.derivative(1.0) == pytest.approx(after.derivative(0.0), rel=1e-13)


def test_parabolic_segment() -> None:
    a, h = 30.0, 45.0
    parabola = Bezier((a, 2j * h, -a))
    c = computed(parabola, Line(-a, a))
    assert c["A"] == pytest.approx(4 * a * h / 3, rel=1e-15)
    assert c["cy"] == pytest.approx(2 * h / 5, rel=1e-15)
    assert c["Ix"] == pytest.approx(16 * a * h**3 / 175, rel=1e-14)
    assert c["Iy"] == pytest.approx(4 * a**3 * h / 15, rel=1e-15)
    half = sqrt(4 * h * h + a * a) / 2 + a * a / (4 * h) * asinh(2 * h / a)
    assert parabola.length == pytest.approx(2 * half, rel=1e-14)
    assert parabola.support(1j) == pytest.approx((h, 0.5))


# --------------------------------------------------------------------------------------------- circles as NURBS

R, W = 25.0, sqrt(0.5)
SQUARE = [R, R + R * 1j, R * 1j, -R + R * 1j, -R, -R - R * 1j, -R * 1j, R - R * 1j, R]
QUARTERS = [0, 0, 0, 1, 1, 2, 2, 3, 3, 4, 4, 4]


def test_nurbs_circle_becomes_arcs() -> None:
    pieces = bspline_pieces(2, QUARTERS, SQUARE, [1, W] * 4 + [1])
    assert [type(p) for p in pieces] == [Arc] * 4
    m = moments(Packed.of(pieces))
    assert m.m00 == pytest.approx(pi * R * R, rel=1e-15)
    assert m.m02 == pytest.approx(pi * R**4 / 4, rel=1e-15)
    assert sum(p.length for p in pieces) == pytest.approx(2 * pi * R, rel=1e-15)


def test_rational_pieces_that_stay_rational() -> None:
    quarter = Bezier((R, R + R * 1j, R * 1j), (1, W, 1))
    pieces = [quarter.moved(1j**k, 0) for k in range(4)]
    c = computed(*pieces)
    assert c["A"] == pytest.approx(pi * R * R, rel=1e-14)
    assert c["Ix"] == pytest.approx(pi * R**4 / 4, rel=1e-14)
    assert c["Ixy"] == pytest.approx(0, abs=1e-14 * R**4)
    assert sum(p.length for p in pieces) == pytest.approx(2 * pi * R, rel=1e-14)
    assert np.abs(chopped(quarter)) == pytest.approx(R, rel=1e-15)
    assert quarter.support(complex(cos(1), sin(1)))[0] == pytest.approx(R, rel=1e-15)
    assert nearest(quarter, 0)[0] == pytest.approx(R, rel=1e-15)


@pytest.mark.parametrize("degrees", [1e-3, 20, 90, 150, 179, -60])
def test_arcs_are_recognised_by_their_weight(degrees: float) -> None:
    half = radians(degrees) / 2
    arc = Arc.from_centre(3 + 2j, 7, 0.4, 2 * half)
    corner = arc.centre + 7 / cos(half) * complex(cos(0.4 + half), sin(0.4 + half))
    control, weights = (arc.start, corner, arc.end), (2.0, 2 * cos(half), 2.0)
    (piece,) = bspline_pieces(2, [0, 0, 0, 1, 1, 1], control, weights)
    if abs(degrees) < 1:  # as flat as this it may be either
        assert isinstance(piece, Arc | Line | Bezier)
    else:
        assert isinstance(piece, Arc)
        assert piece.sweep == pytest.approx(2 * half, rel=1e-13)
        assert piece.centre == pytest.approx(arc.centre, rel=1e-12)
    (almost,) = bspline_pieces(2, [0, 0, 0, 1, 1, 1], control, (2.0, 2.0001 * cos(half), 2.0))
    assert not isinstance(almost, Arc)


# --------------------------------------------------------------------------------- splines against their definition


def defined(degree: int, knots: list[float], control: list[complex], weights: list[float], t: float) -> complex:
    """The point by the Cox–de Boor recursion of the basis functions, 0/0 = 0."""

    def basis(i: int, p: int) -> float:
        if p == 0:
            return float(knots[i] <= t < knots[i + 1])
        left, right = knots[i + p] - knots[i], knots[i + p + 1] - knots[i + 1]
        return ((t - knots[i]) / left * basis(i, p - 1) if left else 0.0) + (
            (knots[i + p + 1] - t) / right * basis(i + 1, p - 1) if right else 0.0
        )

    shares = [w * basis(i, degree) for i, w in enumerate(weights)]
    return sum(s * z for s, z in zip(shares, control, strict=True)) / sum(shares)


@st.composite
def splines(draw: st.DrawFn) -> tuple[int, list[float], list[complex], list[float] | None]:
    degree = draw(st.integers(1, 5))
    count = draw(st.integers(degree + 1, degree + 6))
    control = draw(st.lists(places, min_size=count, max_size=count, unique=True))
    if draw(st.booleans()):  # clamped, inner knots of any multiplicity up to the degree
        inner: list[float] = []
        while len(inner) < count - degree - 1:
            again = draw(st.integers(1, degree))
            inner += [(inner[-1] if inner else 0.0) + draw(st.sampled_from([0.5, 1.0, 3.0]))] * again
        inner = inner[: count - degree - 1]
        last = (inner[-1] if inner else 0.0) + 1.0
        knots = [0.0] * (degree + 1) + inner + [last] * (degree + 1)
    else:
        steps = draw(st.lists(st.sampled_from([0.5, 1.0, 3.0]), min_size=count + degree, max_size=count + degree))
        knots = np.concatenate([[-2.0], -2.0 + np.cumsum(steps)]).tolist()
    weights = draw(st.none() | st.lists(st.floats(0.3, 3), min_size=count, max_size=count))
    return degree, knots, control, weights


@few
@given(splines(), shares)
def test_pieces_are_the_spline(spline: tuple, share: float) -> None:
    degree, knots, control, weights = spline
    pieces = bspline_pieces(degree, knots, control, weights)
    spans = [(a, b) for a, b in pairwise(knots[degree : len(control) + 1]) if b > a]
    assert len(pieces) == len(spans)
    size = max(map(abs, control))
    for piece, (a, b) in zip(pieces, spans, strict=True):
        wanted = defined(degree, knots, control, weights or [1.0] * len(control), a + share * (b - a))
        if isinstance(piece, Line):  # a rational piece of the first degree has its own speed
            assert nearest(piece, wanted)[0] <= 1e-13 * size
        else:
            assert abs(piece.point(share) - wanted) <= 1e-12 * size
    for before, after in pairwise(pieces):
        assert before.end == after.start


@few
@given(splines())
def test_pieces_agree_with_ezdxf(spline: tuple) -> None:
    degree, knots, control, weights = spline
    if weights is not None or knots[0] != knots[degree]:
        return  # ezdxf runs unclamped ones over the whole knot vector
    outside = ezdxf.math.BSpline([(z.real, z.imag) for z in map(complex, control)], degree + 1, knots)
    spans = [(a, b) for a, b in pairwise(knots[degree : len(control) + 1]) if b > a]
    for piece, (a, b) in zip(bspline_pieces(degree, knots, control), spans, strict=True):
        for share in (0.1, 0.5, 0.8):
            p = outside.point(a + share * (b - a))
            assert abs(piece.point(share) - complex(p.x, p.y)) <= 1e-11 * max(map(abs, control))


def test_degree_one_is_a_polyline() -> None:
    control = [0, 1 + 1j, 3, 3, 5j]
    pieces = bspline_pieces(1, [0, 0, 1, 2, 3, 4, 4], control)
    assert pieces == (Line(0, 1 + 1j), Line(1 + 1j, 3), Line(3, 5j))


def test_straight_pieces_become_lines_unless_they_turn_back() -> None:
    assert bspline_pieces(3, [0] * 4 + [1] * 4, [0, 1 + 1j, 2 + 2j, 3 + 3j]) == (Line(0, 3 + 3j),)
    assert bspline_pieces(3, [0] * 4 + [1] * 4, [0, 1, 1, 7], [1, 2, 3, 1]) == (Line(0, 7),)
    (back,) = bspline_pieces(3, [0] * 4 + [1] * 4, [0, 9, -3, 6])
    assert isinstance(back, Bezier)


@pytest.mark.parametrize(
    ("degree", "knots", "count", "weights", "message"),
    [
        (3, range(7), 4, None, "degree 3 with 4 control points needs 8 knots, got 7"),
        (3, range(7), 3, None, "degree 3 needs at least 4 control points, got 3"),
        (0, range(5), 4, None, "degree 0 needs at least 2 control points, got 4"),
        (2, [0, 0, 0, 1, 1, 1], 3, [1, 1], "3 control points needs 3 weights, got 2"),
        (2, [0, 0, 0, 1, 1, 1], 3, [1, -1, 1], "weights of a spline must be positive, got -1"),
        (2, [0, 0, 0, 1, 1, 1], 3, [1, float("nan"), 1], "weights of a spline must be positive"),
        (2, [0, 0, 0, 1, 0, 1], 3, None, "may not decrease"),
        (2, [0, 0, 0, 1, 1, float("inf")], 3, None, "finite"),
        (2, [0, 0, 1, 1, 1, 1], 3, None, "no length: its domain runs from 1 to 1"),
        (1, [0, 0, 1, 1, 2, 2], 4, None, "breaks at knot 1, of multiplicity 2: its two sides are 1 apart"),
    ],
)
def test_refusals(degree: int, knots: list, count: int, weights: list | None, message: str) -> None:
    with pytest.raises(ValueError, match=message):
        bspline_pieces(degree, list(knots), [complex(k, k % 2) if degree > 1 else k for k in range(count)], weights)


def test_a_full_knot_without_a_jump_is_no_break() -> None:
    pieces = bspline_pieces(2, [0, 0, 0, 1, 1, 1, 2, 2, 2], [0, 1j, 1, 1, 2 - 1j, 2])
    assert pieces == (Bezier((0, 1j, 1)), Bezier((1, 2 - 1j, 2)))


def test_pieces_of_no_extent_are_dropped() -> None:
    pieces = bspline_pieces(2, [0, 0, 0, 1, 2, 3, 3, 3], [0, 1, 1, 1, 1 + 2j])
    assert all(p.length > 0 for p in pieces)
    assert pieces[0].start == 0
    assert pieces[-1].end == 1 + 2j


# ------------------------------------------------------------------------------------------------- fit points

FIT = [0, 2 + 1j, 3 + 4j, 7 + 3j, 8, 11 - 1j]


def check_interpolation(pieces: tuple, points: list[complex], closed: bool) -> None:
    joints = list(zip(pieces, [*pieces[1:], pieces[0]], strict=True))
    assert [p.start for p in pieces] == points[: len(pieces)]
    for before, after in joints if closed else joints[:-1]:
        h, k = abs(before.end - before.start), abs(after.end - after.start)  # the parameter is the chord length
        assert before.end == after.start
        assert before.derivative(1) / h == pytest.approx(after.derivative(0) / k, rel=1e-13)
        b, a = before.control, after.control
        second = 6 * (b[3] - 2 * b[2] + b[1]) / h**2, 6 * (a[2] - 2 * a[1] + a[0]) / k**2
        assert second[0] == pytest.approx(second[1], rel=1e-12)


def test_natural_ends() -> None:
    pieces = fit_spline(FIT)
    check_interpolation(pieces, FIT, closed=False)
    first, last = pieces[0].control, pieces[-1].control
    assert first[2] - 2 * first[1] + first[0] == pytest.approx(0, abs=1e-14)
    assert last[3] - 2 * last[2] + last[1] == pytest.approx(0, abs=1e-14)


def test_given_tangents() -> None:
    pieces = fit_spline(FIT, (3j, None))
    check_interpolation(pieces, FIT, closed=False)
    assert pieces[0].derivative(0) / abs(FIT[1] - FIT[0]) == pytest.approx(1j)
    pieces = fit_spline(FIT, (1 + 1j, -2))
    assert pieces[-1].derivative(1) / abs(FIT[-1] - FIT[-2]) == pytest.approx(-1)
    # a cubic with its own end tangents comes back: of x = s, y = s³ on unequal steps only nearly, so take one step
    (one,) = fit_spline([0, 1], (1 + 1j, 1 - 1j))
    assert one.control == pytest.approx((0, (1 + 1j) / sqrt(2) / 3, 1 - (1 - 1j) / sqrt(2) / 3, 1))


@pytest.mark.parametrize("count", [3, 4, 6])
def test_closed(count: int) -> None:
    pieces = fit_spline(FIT[:count], closed=True)
    assert len(pieces) == count
    check_interpolation(pieces, FIT[:count], closed=True)
    assert pieces == fit_spline([*FIT[:count], FIT[0]], closed=True)


def test_closed_fit_of_a_circle_converges() -> None:
    def error(n: int) -> float:
        pieces = fit_spline([complex(np.exp(2j * pi * k / n)) for k in range(n)], closed=True)
        return abs(moments(Packed.of(pieces)).m00 - pi)

    assert 12 < error(16) / error(32) < 20  # of the fourth order


def test_straight_fits_and_refusals() -> None:
    assert fit_spline([0, 1 + 1j]) == (Line(0, 1 + 1j),)
    assert fit_spline([0, 1, 1, 3]) == (Line(0, 1), Line(1, 3))
    for points in ([], [1], [1, 1]):
        with pytest.raises(ValueError, match="at least two that differ"):
            fit_spline(points)


# -------------------------------------------------------------------------------------------- pieces and their roots


@few
@given(beziers(), places)
def test_nearest_against_sampling(piece: Bezier, p: complex) -> None:
    distance, t = nearest(piece, p)
    size = size_of(piece) + abs(p)
    assert abs(piece.point(t) - p) == pytest.approx(distance, abs=1e-14 * size)
    sampled = np.abs(chopped(piece, 2000) - p).min()
    assert sampled - np.abs(piece.derivatives(np.linspace(0, 1, 2001))).max() / 1000 <= distance
    assert distance <= sampled + 1e-14 * size


@few
@given(beziers(), shares)
def test_nearest_of_a_point_of_the_piece_is_the_point(piece: Bezier, t: float) -> None:
    assert nearest(piece, piece.point(t))[0] <= 4e-15 * size_of(piece)


@given(st.lists(st.integers(1, 15), min_size=1, max_size=6, unique=True))
def test_bernstein_roots_are_found(sixteenths: list[int]) -> None:
    wanted = sorted(k / 16 for k in sixteenths)
    coefficients = np.array([1.0])
    for root in wanted:  # multiply by (t − root), in Bernstein form −root, 1 − root
        n = len(coefficients)
        k = np.arange(n + 1)
        up, down = np.append(0, coefficients), np.append(coefficients, 0)
        coefficients = (k * (1 - root) * up - (n - k) * root * down) / n
    assert roots(coefficients.tolist()) == pytest.approx(wanted, abs=1e-9)


def test_roots_at_halvings_and_double_ones() -> None:
    assert roots([-1.0, 1.0]) == [0.5]
    assert roots([1.0, 2.0, 3.0]) == []
    assert roots([0.0, 0.0, 0.0]) == []
    assert roots([-1.0, 0.0, 1.0]) == pytest.approx([0.5])
    found = roots([1.0, -1.0, 1.0])  # (1 − 2t)²: no change of sign; reported or not, never anywhere else
    assert found == pytest.approx([0.5] * len(found))
    assert roots([1e-30, -1.0, 1.0, -1e-30])[1] == pytest.approx(0.5)


@pytest.mark.parametrize("control", [(0, 1 + 1j, 1j, 1), (0, 1, -1 + 1j, 1j), (0, 0, 0, 1 + 1j, 2), (0, 1j, 1j, 1j, 1)])
def test_length_with_cusps_and_resting_points(control: tuple[complex, ...]) -> None:
    piece = Bezier(control)
    # graded towards each end and the middle, where the speed of these vanishes or almost does
    ends = np.concatenate([[0], np.geomspace(1e-12, 0.25, 60)])
    grid = np.unique(np.concatenate([ends, 0.5 - ends, 0.5 + ends, 1 - ends]))
    nodes, weights = np.polynomial.legendre.leggauss(20)
    half = np.diff(grid)[:, None] / 2
    t = grid[:-1, None] + half * (1 + nodes)
    assert piece.length == pytest.approx(float((np.abs(piece.derivatives(t)) * weights * half).sum()), rel=1e-12)
