"""Shear areas and the centre of flexure: published tables, closed forms, laws."""

from __future__ import annotations

from math import pi

import numpy as np
import pytest

from edgetally.section.solver import solve
from torsion_sections import TABLE, disc, hole, moved, polygon, semicircle, size_of

# F. Gruttmann, W. Wagner, Shear correction factors in Timoshenko's beam theory for arbitrary shaped cross-sections,
# Computational Mechanics 27 (2001): rectangle, κ for shear along h, by ν and h/b.
GRUTTMANN_WAGNER = {
    (0.0, 2.0): 0.8333, (0.0, 1.0): 0.8333, (0.0, 0.5): 0.8333, (0.0, 0.25): 0.8333,
    (0.25, 2.0): 0.8331, (0.25, 1.0): 0.8295, (0.25, 0.5): 0.7961, (0.25, 0.25): 0.6308,
    (0.5, 2.0): 0.8325, (0.5, 1.0): 0.8228, (0.5, 0.5): 0.7375, (0.5, 0.25): 0.4404,
}  # fmt: skip


@pytest.mark.parametrize(("poisson", "ratio"), GRUTTMANN_WAGNER)
def test_published_table_of_the_rectangle(poisson: float, ratio: float) -> None:
    solution = solve([polygon((0, 0), (1, 0), (1, ratio), (0, ratio))], poisson=poisson)
    # the table's last digit is off by one in places
    assert solution.shear_area_y.value / ratio == pytest.approx(GRUTTMANN_WAGNER[poisson, ratio], abs=1.01e-4)


@pytest.mark.parametrize("ratio", [0.1, 1.0, 5.0, 100.0])
def test_rectangle_without_lateral_contraction(ratio: float) -> None:
    """5/6 of the area at ν = 0, whatever the shape."""
    solution = solve([polygon((0, 0), (1, 0), (1, ratio), (0, ratio))], poisson=0.0)
    assert solution.shear_area_x.value == pytest.approx(5 / 6 * ratio, rel=1e-8)
    assert solution.shear_area_y.value == pytest.approx(5 / 6 * ratio, rel=1e-8)


@pytest.mark.parametrize("poisson", [0.0, 0.25, 0.3, 0.5])
def test_circle(poisson: float) -> None:
    """1/κ = 7/6 + (ν/(1 + ν))²/6, the energy of Saint-Venant's stresses (Renton; Love, Mathematical Theory, § 231)."""
    solution = solve([disc(2.0)], poisson=poisson)
    expected = 4 * pi / (7 / 6 + (poisson / (1 + poisson)) ** 2 / 6)
    assert solution.shear_area_x.value == pytest.approx(expected, rel=1e-10)
    assert solution.shear_area_y.value == pytest.approx(expected, rel=1e-10)


@pytest.mark.parametrize("inside", [0.3, 0.7, 0.99])
def test_round_tube(inside: float) -> None:
    """At ν = 0 the potential is ψ = (A·r + B/r − r³/8)·cos φ for unit α, with ψ′ = 0 at both radii; ∫|τ|² = ∫ψx dA."""
    solution = solve([disc(1.0), hole(inside)], poisson=0.0)
    m = inside
    a, b = 3 / 8 * (1 + m**2), 3 / 8 * m**2
    energy = pi * (a * (1 - m**4) / 4 + b * (1 - m**2) / 2 - (1 - m**6) / 48)
    second = pi / 4 * (1 - m**4)
    assert solution.shear_area_x.value == pytest.approx(second**2 / energy, rel=1e-8)


def test_thin_tube_keeps_half_its_area() -> None:
    solution = solve([disc(1.0), hole(0.999)], poisson=0.0)
    assert solution.shear_area_x.value == pytest.approx(0.5 * pi * (1 - 0.999**2), rel=1e-5)


@pytest.mark.parametrize("row", TABLE, ids=[row.name for row in TABLE])
def test_reciprocity(row: tuple) -> None:
    """At ν = 0 the centre of flexure is Trefftz's shear centre, which comes from torsion alone (Betti, Maxwell)."""
    solution = solve(row.loops, poisson=0.0)
    off = abs(solution.flexural_centre - solution.shear_centre) / size_of(row.loops)
    assert off < 1e-6
    assert off < 10 * solution.shear_centre_error


def test_reciprocity_with_voids_away_from_the_centroid() -> None:
    """The sources that close the flux around each void are needed here."""
    loops = [polygon((0, 0), (60, 0), (50, 40), (0, 30)), hole(6.0, 15 + 12j), hole(4.0, 40 + 25j)]
    solution = solve(loops, poisson=0.0)
    assert abs(solution.flexural_centre - solution.shear_centre) < 1e-6


@pytest.mark.parametrize("poisson", [0.0, 0.3, 0.5])
def test_flexural_centre_of_the_semicircle(poisson: float) -> None:
    """(8/15π)·(3 + 4ν)/(1 + ν) for no twist on the axis of the circle (Timoshenko and Goodier, § 125).

    Without mean twist, that is with none at the centroid y_c = 4/(3π), the torque J·½·ν/(1 + ν)·y_c/I_y is taken off.
    """
    solution = solve(semicircle(), poisson=poisson)
    share = poisson / (1 + poisson)
    torque = (pi / 2 - 4 / pi) * 0.5 * share * 4 / (3 * pi) / (pi / 8)
    expected = 8 / (15 * pi) * (3 + 4 * poisson) / (1 + poisson) - torque
    assert solution.flexural_centre.imag == pytest.approx(expected, abs=1e-8)
    assert abs(solution.flexural_centre.real) < 1e-9
    assert solution.shear_centre.imag == pytest.approx(8 / (5 * pi), abs=1e-8)


def test_compliance_turns_as_a_tensor() -> None:
    loops, turn = TABLE[6].loops, np.exp(0.4j)
    straight, turned = solve(loops), solve(moved(loops, complex(turn)))
    axes = np.array([[turn.real, -turn.imag], [turn.imag, turn.real]])
    expected = axes @ straight.shear_compliance @ axes.T
    assert np.allclose(turned.shear_compliance, expected, rtol=1e-9, atol=1e-9 * np.abs(expected).max())
    assert turned.shear_area_1.value == pytest.approx(straight.shear_area_1.value, rel=1e-9)
    assert turned.shear_area_x.value == pytest.approx(1 / turned.shear_compliance[0, 0], rel=1e-12)


def test_largest_stress() -> None:
    """Rectangle at ν = 0: 3/2 of the mean. Circle: (3 + 2ν)/(2(1 + ν)) of the mean, at the centre.

    Source: Timoshenko and Goodier, Theory of Elasticity, §§ 123, 124.
    """
    rectangle = solve([polygon((0, 0), (2, 0), (2, 3), (0, 3))], poisson=0.0)
    assert rectangle.shear_peak_y.stress == pytest.approx(1.5 / 6, rel=1e-6)
    assert rectangle.shear_peak_y.at.imag == pytest.approx(1.5, abs=1e-6)
    for poisson in (0.0, 0.3):
        circle = solve([disc(2.0, 1 + 1j)], poisson=poisson)
        mean = 1 / (4 * pi)
        assert circle.shear_peak_x.stress == pytest.approx((3 + 2 * poisson) / (2 * (1 + poisson)) * mean, rel=1e-6)
        assert abs(circle.shear_peak_x.at - (1 + 1j)) < 1e-3


def test_largest_stress_of_a_beam_by_its_web() -> None:
    """The web's mean stress at the neutral axis is V·Q/(I·t), and the peak is hardly more (Zhuravskii)."""
    solution = solve(TABLE[3].loops)
    h, b, web, flange, root = 300.0, 150.0, 7.1, 10.7, 15.0
    first = b * flange * (h - flange) / 2 + web * (h / 2 - flange) ** 2 / 2
    corner = (1 - pi / 4) * root**2 * 2
    first += corner * (h / 2 - flange - 0.2234 * root)
    second = (b * h**3 - (b - web) * (h - 2 * flange) ** 3) / 12 + 2 * corner * (h / 2 - flange - 0.2234 * root) ** 2
    assert solution.shear_peak_y.stress == pytest.approx(first / (second * web), rel=2e-3)
    assert abs(solution.shear_peak_y.at.imag) < 5
