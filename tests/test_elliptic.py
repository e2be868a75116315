"""Elliptic arcs against closed forms, the DXF reference's definition and plain sampling."""

from math import acos, cos, hypot, pi, radians, sin, sqrt, tau

import mpmath
import numpy as np
import pytest
from hypothesis import given, settings

from curve_kinds import chopped, elliptic_arcs, places, shares, size_of
from edgetally.curves import Arc, EllipticArc, Line, Packed
from edgetally.curves.green import Moments, moments
from edgetally.curves.intersections import nearest

A, B = 50.0, 30.0
few = settings(max_examples=80, deadline=None)


def ellipse(turn: float = 0.0, centre: complex = 0j) -> EllipticArc:
    arc = EllipticArc.from_axes(centre, A * complex(cos(turn), sin(turn)), B / A, 0.0, tau)
    assert isinstance(arc, EllipticArc)
    return arc


def of(*curves: EllipticArc | Arc | Line) -> Moments:
    return moments(Packed.of(curves))


def test_full_ellipse() -> None:
    m = of(ellipse())
    assert m.m00 == pytest.approx(pi * A * B, rel=1e-14)
    assert m.m02 == pytest.approx(pi * A * B**3 / 4, rel=1e-14)
    assert m.m20 == pytest.approx(pi * A**3 * B / 4, rel=1e-14)
    assert m.m11 == pytest.approx(0, abs=1e-14 * m.m20)
    assert ellipse().length == pytest.approx(255.269988633981, rel=1e-14)  # 4·a·E(1 − b²/a²)
    assert ellipse().start == ellipse().end
    assert ellipse().is_full_ellipse
    assert ellipse().semi_axes == pytest.approx((A, B), rel=1e-15)


def test_rotated_ellipse_off_the_origin() -> None:
    centre = 7 - 3j
    m = of(ellipse(0.35, centre))
    x, y = m.m10 / m.m00, m.m01 / m.m00
    assert complex(x, y) == pytest.approx(centre, rel=1e-14)
    assert m.m11 - m.m00 * x * y == pytest.approx(607160.866061561, rel=1e-12)  # (Iy₀ − Ix₀)·sin(2·turn)/2
    assert m.m02 - m.m00 * y * y == pytest.approx(1281918.53764494, rel=1e-12)
    reach, t = ellipse(0.35, centre).support(1j)
    assert reach == pytest.approx(29.9867587097067, rel=1e-14)  # −3 + √(a² sin² + b² cos²)
    assert ellipse(0.35, centre).point(t).imag == pytest.approx(reach, rel=1e-14)


def test_half_ellipse() -> None:
    half = EllipticArc.from_axes(0, A, B / A, 0, pi)
    m = of(half, Line(half.end, half.start))
    y = m.m01 / m.m00
    assert m.m00 == pytest.approx(pi * A * B / 2, rel=1e-14)
    assert y == pytest.approx(4 * B / (3 * pi), rel=1e-14)
    assert m.m02 - m.m00 * y * y == pytest.approx((pi / 8 - 8 / (9 * pi)) * A * B**3, rel=1e-13)
    assert m.m20 == pytest.approx(pi * A**3 * B / 8, rel=1e-14)


@pytest.mark.parametrize("ratio", [0.9, 0.5, 0.1, 1e-2, 1e-4])
@pytest.mark.parametrize("start", [0.0, 0.3, 2.9])
def test_length_against_the_elliptic_integral(ratio: float, start: float) -> None:
    sweep = 2.5
    arc = EllipticArc.from_axes(1 + 2j, 10j, ratio, start, start + sweep)
    # from the end of the minor axis: s(φ) = a·E(φ, 1 − b²/a²), φ = τ + π/2
    with mpmath.workdps(30):
        m = 1 - mpmath.mpf(ratio) ** 2
        integral = mpmath.ellipe(start + sweep + mpmath.pi / 2, m) - mpmath.ellipe(start + mpmath.pi / 2, m)
    assert arc.length == pytest.approx(float(10 * integral), rel=1e-13)


@pytest.mark.parametrize(
    ("start", "end", "sweep"),
    [(0, tau, tau), (0, 0, tau), (1, 1, tau), (0.5, 2, 1.5), (5, 1, 1 - 5 + tau), (-1, 1, 2), (2, 1, tau - 1),
     (0, 6.283185307179586, tau), (0, 6.28318530718, tau), (radians(350), radians(370), radians(20)),
     (3, 3 + 3 * tau, tau), (tau, 0, tau), (tau, 1e-15, tau)],
)  # fmt: skip
def test_dxf_parameters(start: float, end: float, sweep: float) -> None:
    arc = EllipticArc.from_axes(1 + 1j, 3 + 4j, 0.5, start, end)
    assert arc.sweep == pytest.approx(sweep, rel=1e-11)
    assert arc.start == pytest.approx(1 + 1j + (3 + 4j) * (cos(start) + 0.5j * sin(start)), rel=1e-14)
    assert arc.end == pytest.approx(1 + 1j + (3 + 4j) * (cos(end) + 0.5j * sin(end)), abs=1e-10)


def test_a_negative_ratio_runs_clockwise() -> None:
    arc = EllipticArc.from_axes(0, 2, -0.5, 0, pi / 2)
    assert arc.end == pytest.approx(-1j)
    assert arc.sweep < 0
    assert EllipticArc.from_axes(0, 2, -0.5, 0, tau).turning(0.1j) == -tau
    assert of(EllipticArc.from_axes(0, 2, -0.5, 0, tau)).m00 == pytest.approx(-2 * pi)


def test_equal_axes_are_a_circle_and_none_is_refused() -> None:
    assert EllipticArc.from_axes(1j, 2, 1.0, 0, 1) == Arc.from_centre(1j, 2, 0, 1)
    assert EllipticArc.from_axes(1j, 2, -1.0, 0, 1).end == pytest.approx(Arc.from_centre(1j, 2, 0, -1).end)
    for major, ratio in ((0, 0.5), (1, 0.0), (complex("inf"), 0.5)):
        with pytest.raises(ValueError, match="two axes of some length"):
            EllipticArc.from_axes(0, major, ratio, 0, 1)


def test_an_ellipse_is_a_squeezed_circle() -> None:
    circle = Arc.from_centre(3, 5, 0.2, 4)
    squeezed = EllipticArc.image(circle, 0.8, 0.2, 0)  # y scaled by 0.6
    t = np.linspace(0, 1, 50)
    z = circle.points(t)
    assert squeezed.points(t) == pytest.approx(z.real + 0.6j * z.imag, abs=1e-14)


def test_a_slim_ellipse_keeps_its_area() -> None:
    # |u| − |v| is known to ε·a only: the breadth b = ratio·a has the relative error ε/ratio
    for ratio in (1e-2, 1e-4, 1e-6):
        m = of(EllipticArc.from_axes(0, 1e3, ratio, 0, tau))
        assert m.m00 == pytest.approx(pi * 1e6 * ratio, rel=1e-15 / ratio)


def test_centre_and_image_on_the_circle() -> None:
    arc = EllipticArc.from_axes(2 - 1j, 4 + 1j, 0.4, 0.7, 2.7)
    assert isinstance(arc, EllipticArc)
    assert arc.centre == pytest.approx(2 - 1j)
    assert abs(arc.on_circle(arc.centre)) == pytest.approx(0, abs=1e-15)
    t = np.linspace(0, 1, 11)
    assert [arc.on_circle(complex(z)) for z in arc.points(t)] == pytest.approx(np.exp(1j * arc.sweep * t))


@few
@given(elliptic_arcs(), places)
def test_nearest_against_sampling(arc: EllipticArc, p: complex) -> None:
    distance, t = nearest(arc, p)
    size = size_of(arc) + abs(p)
    assert abs(arc.point(t) - p) == pytest.approx(distance, abs=1e-14 * size)
    sampled = np.abs(chopped(arc, 4000) - p).min()
    assert distance <= sampled + 1e-14 * size
    assert distance >= sampled - arc.bend / 4000**2 - arc.length / 4000


@few
@given(elliptic_arcs(), shares)
def test_nearest_of_a_point_of_the_arc_is_the_point(arc: EllipticArc, t: float) -> None:
    assert nearest(arc, arc.point(t))[0] <= 1e-15 * size_of(arc)


def test_nearest_at_the_centre_and_the_evolute() -> None:
    assert nearest(ellipse(), 0)[0] == pytest.approx(B, rel=1e-15)
    # at the centre of curvature of a vertex three feet fall together
    assert nearest(ellipse(), A - B * B / A)[0] == pytest.approx(B * B / A, rel=1e-14)
    # on the long axis inside the evolute the foot is off the axis: x = a²·p/(a² − b²)
    p = 10.0
    foot = acos(A * p / (A * A - B * B))
    assert nearest(ellipse(), p)[0] == pytest.approx(hypot(A * cos(foot) - p, B * sin(foot)), rel=1e-14)


def test_the_focus_property() -> None:
    """The sum of the distances to the foci is the long axis: a route that knows nothing of u and v."""
    focus = sqrt(A * A - B * B)
    z = chopped(ellipse())
    assert np.abs(z - focus) + np.abs(z + focus) == pytest.approx(2 * A, rel=1e-15)
