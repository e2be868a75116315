"""The parts of the torsion solver, each against something that it does not use."""

from __future__ import annotations

from math import pi, tau

import mpmath
import numpy as np
import pytest

import outlines
from build import curves_of
from edgetally.curves import Arc, EllipticArc, Line, Packed
from edgetally.curves.green import moments
from edgetally.section import legendre
from edgetally.section.boundary import Boundary
from edgetally.section.cauchy import equation, integrals
from edgetally.section.chords import smoothed
from edgetally.section.frame import Frame, area_moments
from edgetally.section.nodes import Nodes
from edgetally.section.panels import balanced, graded, whole
from edgetally.section.preimages import Preimages
from edgetally.section.sight import middles
from edgetally.section.simplified import simplified
from edgetally.section.void_points import void_points
from torsion_sections import TABLE, chopped, disc, hole, loops_of, polygon

PLACES = [0.3 + 0.01j, -0.9 - 1e-5j, 1.001 + 0j, -1.2 + 0.3j, 1.4 + 0.2j, -2 + 1j, 0.1 - 4j, 9 + 1j]


@pytest.mark.parametrize("n", [2, 6, 12, 16])
def test_functions_of_the_second_kind(n: int) -> None:
    """Qₙ(t) = ½ ∫ Pₙ(s)/(t − s) ds (Neumann), in 30 digits."""
    t = np.array(PLACES)
    found = legendre.second_kind(n, t, legendre.outward(t))
    with mpmath.workdps(30):
        for place, value in zip(PLACES, found, strict=True):
            stops = [-1, min(max(place.real, -0.999), 0.999), 1]
            exact = mpmath.quad(lambda s, z=place: mpmath.legendre(n, s) / (mpmath.mpc(z) - s), stops) / 2
            assert abs(complex(exact) - value) < 1e-13


@pytest.mark.parametrize("n", [3, 8, 16])
def test_weights_near_a_panel_are_exact_for_polynomials(n: int) -> None:
    nodes, weights = legendre.rule(n)
    rng = np.random.default_rng(n)
    series = rng.normal(size=n)
    values = np.polynomial.legendre.legval(nodes, series)
    for place in PLACES[2:6]:
        t = np.array([place])
        q = legendre.second_kind(n, t, legendre.outward(t))
        found = (weights / (nodes - place) * (1 + legendre.near_factors(n) * q)) @ values
        exact = sum(-2 * c * mpmath.mpc(*_q(k, place)) for k, c in enumerate(series))
        assert abs(found - complex(exact)) < 1e-12


def _q(k: int, place: complex) -> tuple[float, float]:
    exact = mpmath.quad(lambda s: mpmath.legendre(k, s) / (mpmath.mpc(place) - s), [-1, 0, 1]) / 2
    return float(exact.real), float(exact.imag)


def test_calculus_on_panels() -> None:
    """d/du and ∫du of a polynomial in z are those of the polynomial, and closed integrals vanish."""
    boundary = Frame.around(TABLE[0].loops).boundary
    nodes = Nodes.on(graded(boundary, 5.0, 12, 8))
    f, derivative = nodes.z**3, 3 * nodes.z**2
    # arcs of up to 90° are no polynomials
    assert np.abs(nodes.rate(f) - derivative * nodes.slope).max() < 1e-7
    primitive = nodes.antiderivative(derivative * nodes.slope)
    assert np.abs(primitive - (f - boundary.start[0] ** 3)).max() < 1e-9
    assert abs(nodes.around(derivative * nodes.dz)[0]) < 1e-9


REGIONS = {
    "bent channel": TABLE[0].loops,
    "sharp I": TABLE[4].loops,
    "rounded tube": TABLE[8].loops,
    "void near the wall": [disc(2.0), hole(1.0, 0.99 + 0j)],
    "ellipse with a slot": [
        [EllipticArc.from_axes(0j, 3 + 0j, 0.4, 0.0, tau)],
        curves_of([outlines.backwards(outlines.polygon([(-2, -0.1), (2, -0.1), (2, 0.1), (-2, 0.1)]))]),
    ],
}  # fmt: skip


@pytest.mark.parametrize("name", REGIONS)
def test_the_equation_returns_a_harmonic_function_from_its_conjugate(name: str) -> None:
    """φ + iv = z³ + 1/(z − b), b outside: solved from v alone, with another constant added to v on each loop."""
    frame = Frame.around(REGIONS[name])
    points = void_points(frame.boundary)
    nodes = Nodes.on(balanced(graded(frame.boundary, 7.0, 12, 8), points))
    far = 3.0 + 3.0j
    f, rate = nodes.z**3 + 1 / (nodes.z - far), (3 * nodes.z**2 - 1 / (nodes.z - far) ** 2) * nodes.slope
    v = f.imag + 7.0 * nodes.loop
    found = np.linalg.solve(*equation(nodes, v[:, None], rate.imag[:, None]))[:, 0]
    expected = f.real - (f.real @ nodes.ds) / nodes.ds.sum()
    assert np.abs(found - expected).max() < 1e-8 * np.ptp(expected)


def test_cauchys_formula_near_the_boundary() -> None:
    """∮f/(ζ − p)dζ = 2πi f(p) inside and 0 outside, at any distance from the boundary."""
    frame = Frame.around(TABLE[6].loops)
    nodes = Nodes.on(balanced(graded(frame.boundary, 6.0, 12, 10), np.empty(0, dtype=complex)))
    panels = nodes.panels
    k = int(np.argmax(panels.length))
    middle, along = panels.samples[k, 1], panels.samples[k, 2] - panels.samples[k, 0]
    normal = 1j * along / abs(along)
    steps = np.array([1e-1, 1e-2, 1e-3, 1e-4, 1e-6]) * 0.1
    p = np.concatenate([middle + steps * normal, middle - steps * normal])
    values = np.exp(nodes.z)[:, None]
    found = integrals(nodes, values, p)[:, 0] / 2j / pi
    assert np.abs(found[:5] - np.exp(p[:5])).max() < 1e-9
    assert np.abs(found[5:]).max() < 1e-9


def test_preimages_go_back() -> None:
    """z(t₀) is the point, for lines, arcs, flat arcs and general curves, in and beside the panel."""
    curves = [
        Line(0j, 1 + 2j),
        Arc.from_centre(0j, 1.0, 0.2, 1.0),
        Arc.from_bulge(0j, 1 + 0j, 1e-9),
        EllipticArc.from_axes(0j, 2 + 0j, 0.5, 0.1, 1.0),
    ]
    for curve in curves:
        boundary = Boundary.of([[curve]])
        panels = whole(boundary, 8)
        maps = Preimages(panels)
        for t in (-0.9, 0.0, 0.4):
            s = panels.low[0] + (panels.high[0] - panels.low[0]) * 0.5 * (1 + t)
            z, slope = curve.point(float(s)), curve.derivative(float(s)) * 0.5 * (panels.high[0] - panels.low[0])
            for off in (0.0, 1e-3j, -1e-3j):
                t0 = maps.of(np.array([z + off * slope]), np.array([0]))[0]
                assert abs(t0 - (t + off)) < 2e-6 * (1 if off else 1e-6)


def test_moments_agree_with_those_of_the_area() -> None:
    for row in TABLE:
        found = area_moments(Boundary.of(row.loops))
        exact = moments(Packed.of([curve for loop in row.loops for curve in loop]))
        for p, q in ((0, 0), (1, 0), (0, 1), (2, 0), (1, 1), (0, 2)):
            scale = exact.m00 * 300.0 ** (p + q)
            assert found[p, q] == pytest.approx(getattr(exact, f"m{p}{q}"), abs=1e-12 * scale)


def test_the_frame_is_central_and_principal() -> None:
    for row in TABLE:
        frame = Frame.around(row.loops)
        m = frame.moments
        assert m[0, 0] == pytest.approx(1.0, rel=1e-12)
        assert max(abs(m[1, 0]), abs(m[0, 1])) < 1e-12
        assert abs(m[1, 1]) < 1e-9 * (m[2, 0] + m[0, 2])
        assert m[0, 2] >= m[2, 0] * (1 - 1e-9)


def test_graded_panels_cover_the_curves_and_are_balanced() -> None:
    boundary = Frame.around(TABLE[4].loops).boundary
    panels = balanced(graded(boundary, 6.0, 8, 4), np.empty(0, dtype=complex))
    for k in range(len(boundary)):
        own = panels.curve == k
        assert panels.low[own][0] == 0.0
        assert panels.high[own][-1] == 1.0
        assert np.array_equal(panels.low[own][1:], panels.high[own][:-1])
    ratio = panels.length / np.roll(panels.length, -1)
    assert ratio.max() < 4.6
    assert ratio.min() > 1 / 4.6


def test_views_across() -> None:
    square = np.array([0, 1, 1 + 1j, 1j])
    found = middles(np.array([0.5 + 0j, 0.25 + 0j]), np.array([1j, 1j]), square, np.roll(square, -1))
    assert np.allclose(found, [0.5 + 0.5j, 0.25 + 0.5j])
    assert middles(np.array([0.5 + 0j]), np.array([-1j]), square, np.roll(square, -1)).size == 0


def test_points_in_voids_are_well_inside() -> None:
    slot = [(-20, -0.05, 0), (20, -0.05, 0), (20, 0.05, 0), (-20, 0.05, 0)]
    turned = outlines.rotated([outlines.backwards(outlines.fillet_polygon(slot))], 30)
    (point,) = void_points(Boundary.of([polygon((-50, -50), (50, -50), (50, 50), (-50, 50)), *loops_of(turned)]))
    across = (point * np.exp(-1j * pi / 6)).imag
    assert abs(across) < 0.01


def test_simplified_loops() -> None:
    square = polygon((0, 0), (0.5, 0), (1, 0), (1, 1), (1 - 1e-13, 1), (0, 1), (0, 0.5))
    assert len(simplified(square, 1.0)) == 4
    kept = simplified(polygon((0, 0), (0.5, 1e-9), (1, 0), (1, 1), (0, 1)), 1.0)
    assert len(kept) == 5
    spike = polygon((0, 0), (2, 0), (1, 0), (1, 1), (0, 1))
    assert len(simplified(spike, 2.0)) == 5


def test_smoothed_chords_keep_the_area() -> None:
    for count in (500, 3000):
        chords = chopped(1.0, count)
        smooth, effect = smoothed(chords)
        assert len(smooth) < 40
        assert 0.0 < effect < 1e-6
        area = 0.5 * count * np.sin(tau / count)
        assert area_moments(Boundary.of([smooth]))[0, 0] == pytest.approx(area, rel=1e-9)
    coarse = chopped(1.0, 100)
    assert smoothed(coarse) == (coarse, 0.0)


def test_noisy_chords_are_left_alone() -> None:
    rng = np.random.default_rng(1)
    count = 1000
    z = np.exp(1j * tau * np.arange(count) / count) * (1 + 1e-5 * rng.normal(size=count))
    loop = [Line(complex(a), complex(b)) for a, b in zip(z, np.roll(z, -1), strict=True)]
    assert smoothed(loop) == (loop, 0.0)
