"""Laws that every kind of curve obeys."""

from math import pi, tau
from types import SimpleNamespace

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from curve_kinds import angles, chopped, clearance, curves, places, runs_back, shares, size_of
from edgetally.curves import Arc, Bezier, Curve, EllipticArc, Line, Packed, affine_image
from edgetally.curves.green import moments
from edgetally.curves.intersections import nearest

EPS = 2.0**-52
SAMPLES = np.linspace(0, 1, 33)

# few but different examples: the laws run over all kinds, and rounding is checked by the closed forms elsewhere
few = settings(max_examples=100, deadline=None)


def closing(curve: Curve) -> list[Curve]:
    """The curve and the chord back to its start."""
    return [curve] if curve.start == curve.end else [curve, Line(curve.end, curve.start)]


def area(*loop: Curve) -> float:
    return moments(Packed.of(loop)).m00


@few
@given(curves)
def test_parameters_run_from_start_to_end(curve: Curve) -> None:
    size = size_of(curve)
    assert abs(curve.point(0.0) - curve.start) <= 8 * EPS * size
    assert abs(curve.point(1.0) - curve.end) <= 16 * EPS * size
    one_by_one = [curve.point(float(t)) for t in SAMPLES]
    assert np.abs(curve.points(SAMPLES) - one_by_one).max() <= 32 * EPS * size
    grid = SAMPLES[:30].reshape(5, 6)
    assert curve.points(grid).shape == curve.derivatives(grid).shape == (5, 6)
    slopes = [curve.derivative(float(t)) for t in SAMPLES]
    assert np.abs(curve.derivatives(SAMPLES) - slopes).max() <= 1e-13 * (np.abs(slopes).max() + size)


@few
@given(curves, shares)
def test_derivative_is_the_limit_of_differences(curve: Curve, t: float) -> None:
    # Richardson's extrapolation of two central differences: the error is of the fourth order
    h = 1e-3
    slope = [(curve.point(t + k * h) - curve.point(t - k * h)) / (2 * k * h) for k in (1, 2)]
    best = (4 * slope[0] - slope[1]) / 3
    assert abs(curve.derivative(t) - best) <= 1e-7 * (curve.bend + abs(best) + size_of(curve))


@few
@given(curves, shares, shares)
def test_bend_bounds_the_distance_from_the_chord(curve: Curve, t: float, u: float) -> None:
    between = curve.points(t + (u - t) * SAMPLES)
    chord = curve.point(t) + (curve.point(u) - curve.point(t)) * SAMPLES
    assert np.abs(between - chord).max() <= curve.bend * (u - t) ** 2 / 8 + 64 * EPS * size_of(curve)


@few
@given(curves, shares)
def test_parts_make_up_the_whole(curve: Curve, t: float) -> None:
    size = size_of(curve)
    first, second = curve.split(t)
    assert first.start == curve.start
    assert abs(second.end - curve.end) <= 32 * EPS * size
    assert abs(first.end - second.start) <= 32 * EPS * size
    assert first.length + second.length == pytest.approx(curve.length, rel=1e-13)
    assert np.abs(first.points(SAMPLES) - curve.points(t * SAMPLES)).max() <= 128 * EPS * size
    assert np.abs(second.points(SAMPLES) - curve.points(t + (1 - t) * SAMPLES)).max() <= 128 * EPS * size
    whole, parts = area(*closing(curve)), area(first, second, Line(second.end, curve.start))
    assert parts == pytest.approx(whole, abs=1e-13 * (size + curve.length) ** 2)


@few
@given(curves, places)
def test_reversed_runs_the_other_way(curve: Curve, p: complex) -> None:
    size = size_of(curve)
    back = curve.reversed()
    assert back.start == curve.end
    assert abs(back.end - curve.start) <= 32 * EPS * size
    assert np.abs(back.points(SAMPLES) - curve.points(1 - SAMPLES)).max() <= 128 * EPS * size
    assert back.length == pytest.approx(curve.length, rel=1e-13)
    assert area(*closing(back)) == pytest.approx(-area(*closing(curve)), abs=1e-13 * (size + curve.length) ** 2)
    assume(nearest(curve, p)[0] > 1e-3 * size)
    assert back.turning(p) == pytest.approx(-curve.turning(p), abs=1e-10)


@few
@given(curves, places, angles, st.floats(0.1, 10), places)
def test_moved_and_mirrored_are_the_images_of_the_points(
    curve: Curve, shift: complex, angle: float, scale: float, p: complex
) -> None:
    factor = complex(scale * np.exp(1j * angle))
    size = scale * size_of(curve) + abs(shift)
    there, mirror = curve.moved(factor, shift), curve.mirrored()
    assert np.abs(there.points(SAMPLES) - (factor * curve.points(SAMPLES) + shift)).max() <= 128 * EPS * size
    assert np.abs(mirror.points(SAMPLES) - curve.points(SAMPLES).conj()).max() <= 128 * EPS * size_of(curve)
    assert there.length == pytest.approx(scale * curve.length, rel=1e-13)
    assert mirror.length == pytest.approx(curve.length, rel=1e-13)
    assume(nearest(curve, p)[0] > 1e-3 * size_of(curve))
    assert there.turning(factor * p + shift) == pytest.approx(curve.turning(p), abs=1e-10)
    assert mirror.turning(p.conjugate()) == pytest.approx(-curve.turning(p), abs=1e-10)


@few
@given(curves, angles)
def test_support_is_reached_and_never_passed(curve: Curve, angle: float) -> None:
    direction = complex(np.exp(1j * angle))
    reach, t = curve.support(direction)
    size = size_of(curve)
    assert 0 <= t <= 1
    assert (direction.conjugate() * curve.point(t)).real == pytest.approx(reach, abs=64 * EPS * size)
    assert (direction.conjugate() * chopped(curve, 2000)).real.max() <= reach + 64 * EPS * size


@few
@given(curves, places)
def test_turning_is_the_angle_swept(curve: Curve, p: complex) -> None:
    assume(clearance(curve, p) > 0.02 * size_of(curve))
    rays = chopped(curve, 4000) - p
    swept = np.angle(rays[1:] / rays[:-1]).sum()
    assert curve.turning(p) == pytest.approx(swept, abs=1e-9)
    assert curve.turning(p + 1e9) == pytest.approx(0, abs=1e-5)


@few
@given(st.lists(curves, min_size=1, max_size=4), st.lists(places, min_size=1, max_size=3))
def test_a_closed_loop_turns_by_whole_turns(parts: list[Curve], points: list[complex]) -> None:
    loop: list[Curve] = []
    for part in parts:
        if loop and loop[-1].end != part.start:
            loop.append(Line(loop[-1].end, part.start))
        loop.append(part)
    if loop[-1].end != loop[0].start:
        loop.append(Line(loop[-1].end, loop[0].start))
    points = [p for p in points if min(nearest(c, p)[0] for c in loop) > 1e-3]
    assume(points)
    packed = Packed.of(loop)
    turns = packed.turning(np.array(points))
    for p, turn in zip(points, turns, strict=True):
        assert turn / tau == pytest.approx(round(turn / tau), abs=1e-12)
        assert sum(c.turning(p) for c in loop) == pytest.approx(turn, abs=1e-11)
    assert packed.turning(np.array([1e4 + 1e3j])) == pytest.approx(0, abs=1e-12)


@few
@given(st.lists(curves, min_size=1, max_size=6), places, angles)
def test_packed_curves_answer_as_the_curves_do(some: list[Curve], origin: complex, angle: float) -> None:
    packed = Packed.of(some)
    size = max(map(size_of, some))
    assert packed.lengths == pytest.approx([c.length for c in some], rel=1e-14)
    direction = complex(np.exp(1j * angle))
    assert packed.supports(direction) == pytest.approx([c.support(direction)[0] for c in some], abs=64 * EPS * size)
    assert list(packed.is_straight) == [isinstance(c, Line) for c in some]
    assert list(packed.is_arc) == [isinstance(c, Arc) for c in some]
    low_x, low_y, high_x, high_y = packed.box
    z = np.concatenate([chopped(c) for c in some])
    assert low_x <= z.real.min() + 1e-12 * size
    assert high_x >= z.real.max() - 1e-12 * size
    assert low_y <= z.imag.min() + 1e-12 * size
    assert high_y >= z.imag.max() - 1e-12 * size
    framed = packed.framed(origin, direction)
    assert framed.lengths == pytest.approx(packed.lengths, rel=1e-13)
    moved = Packed.of([c.moved(1.0, -origin).moved(direction.conjugate(), 0) for c in some])
    assert framed.boxes == pytest.approx(moved.boxes, abs=1e-12 * (size + abs(origin)))
    halved = packed.halved
    assert np.abs(halved.sweep).max() <= pi + 1e-15
    assert halved.lengths.sum() == pytest.approx(packed.lengths.sum(), rel=1e-13)
    assert len(halved.curved) + halved.is_straight.sum() == len(halved)


def test_packed_refuses_an_unknown_kind() -> None:
    with pytest.raises(TypeError, match="SimpleNamespace cannot be packed"):
        Packed.of([SimpleNamespace(start=0, end=1)])  # type: ignore[list-item]


def test_empty_and_strided_arrays() -> None:
    assert len(Packed.of([])) == 0
    square = np.array([0, 9, 1, 9, 1 + 1j, 9, 1j, 9])[::2]
    assert moments(Packed.polygon(square)).m00 == 1.0


@few
@given(curves, st.floats(-3, 3), st.floats(-3, 3), angles, places)
def test_affine_image_maps_points_and_scales_areas(curve: Curve, p: float, q: float, angle: float, c: complex) -> None:
    assume(abs(p) > 0.2 and abs(q) > 0.2)
    a, b = (p + q) / 2 * complex(np.exp(1j * angle)), (p - q) / 2 * complex(np.exp(1j * angle))
    image = affine_image(curve, a, b, c)
    z = curve.points(SAMPLES)
    size = 3 * size_of(curve) + abs(c)
    assert np.abs(image.points(SAMPLES) - (a * z + b * z.conj() + c)).max() <= 256 * EPS * size
    before, after = area(*closing(curve)), area(*closing(image))
    assert after == pytest.approx(p * q * before, abs=1e-12 * (size + image.length) ** 2)


def test_affine_image_of_an_arc_under_a_similarity_is_an_arc() -> None:
    arc = Arc.from_centre(3 + 4j, 2, 0.3, 1.7)
    assert isinstance(affine_image(arc, 2j, 0, 1), Arc)
    assert isinstance(affine_image(arc, 0, 2j, 1), Arc)
    squeezed = affine_image(arc, 0.75, 0.25, 0)
    assert isinstance(squeezed, EllipticArc)
    assert isinstance(affine_image(squeezed, 1.5, -0.5, 0), Arc)  # undone
    with pytest.raises(ValueError, match="two axes of some length"):
        affine_image(arc, 0.5, 0.5, 0)
    with pytest.raises(TypeError, match="no affine image of a curve of kind int"):
        affine_image(1, 1, 0, 0)  # type: ignore[arg-type]


@pytest.mark.parametrize("sweep", [pi, -pi, tau, -tau, 3.0, -4.0])
@pytest.mark.parametrize("ratio", [1.0, 0.5])
def test_a_point_on_the_chord_is_passed_on_the_arcs_side(sweep: float, ratio: float) -> None:
    """The half-turn rule: sector and chord about a point of the chord add up to whole turns or half ones by side."""
    arc = EllipticArc.from_axes(0, 2, ratio, 0.4, 0.4 + abs(sweep))
    arc = arc if sweep > 0 else arc.mirrored()
    p = 0.5 * (arc.start + arc.end) if abs(sweep) < tau else 0.1j
    rays = chopped(arc, 4000) - p
    assert arc.turning(p) == pytest.approx(np.angle(rays[1:] / rays[:-1]).sum(), abs=1e-9)


@few
@given(curves, shares, st.sampled_from([1e-7, 1e-9]))
def test_turning_grows_by_a_whole_turn_where_a_point_crosses_to_the_left(curve: Curve, t: float, gap: float) -> None:
    slope = curve.derivative(t)
    assume(abs(slope) > 0.1 and not runs_back(curve))
    aside = gap * 1j * slope / abs(slope)
    left, right = curve.turning(curve.point(t) + aside), curve.turning(curve.point(t) - aside)
    assert left - right == pytest.approx(tau, abs=1e-3)


def test_a_bezier_turns_about_points_close_to_it() -> None:
    loop = Bezier((0, 3 + 5j, -2 + 5j, 1))
    for t in np.linspace(0.05, 0.95, 19):
        for gap in (1e-9, -1e-9, 1e-13):
            p = loop.point(float(t)) + 1j * loop.derivative(float(t)) * gap
            turns = sum(c.turning(p) for c in closing(loop)) / tau
            assert turns == pytest.approx(round(turns), abs=1e-9)
