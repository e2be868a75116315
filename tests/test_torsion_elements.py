"""Torsion and flexure against finite elements, as close as the elements come to their own finer meshes."""

from __future__ import annotations

from math import tau

import numpy as np
import pytest

from torsion_sections import polygon

pytest.importorskip("skfem")

import skfem as fem

from edgetally.curves import EllipticArc
from edgetally.curves.spline import bspline_pieces
from edgetally.section.solver import TorsionSolution, solve
from torsion_elements import ByElements, blocks, by_elements, star


def _void(*corners: tuple[float, float]) -> list:
    return [curve.reversed() for curve in reversed(polygon(*corners))]


def _box(x0: float, y0: float, x1: float, y1: float) -> list[tuple[float, float]]:
    return [(x0, y0), (x1, y0), (x1, y1), (x0, y1)]


BLOCKS = {
    "angle, open": (
        [polygon((0, 0), (6, 0), (6, 1), (1.5, 1), (1.5, 9), (0, 9))],
        [0, 1.5, 6],
        [0, 1, 9],
        lambda x, y: (x < 1.5) | (y < 1),
    ),
    "channel, unsymmetrical": (
        [polygon((0, 0), (5, 0), (5, 1), (0.8, 1), (0.8, 6), (3, 6), (3, 7.5), (0, 7.5))],
        [0, 0.8, 3, 5],
        [0, 1, 6, 7.5],
        lambda x, y: (x < 0.8) | (y < 1) | ((y > 6) & (x < 3)),
    ),
    "tube": (
        [polygon(*_box(0, 0, 10, 6)), _void(*_box(1, 0.5, 9, 5.2))],
        [0, 1, 9, 10],
        [0, 0.5, 5.2, 6],
        lambda x, y: (x < 1) | (x > 9) | (y < 0.5) | (y > 5.2),
    ),
    "two cells": (
        [polygon(*_box(0, 0, 10, 6)), _void(*_box(1, 1, 4, 5)), _void(*_box(5, 1, 9.5, 5))],
        [0, 1, 4, 5, 9.5, 10],
        [0, 1, 5, 6],
        lambda x, y: (y < 1) | (y > 5) | (x < 1) | (x > 9.5) | ((x > 4) & (x < 5)),
    ),
    "void away from the centroid": (
        [polygon(*_box(0, 0, 8, 6)), _void(*_box(5, 1, 7, 2.5))],
        [0, 5, 7, 8],
        [0, 1, 2.5, 6],
        lambda x, y: (x < 5) | (x > 7) | (y < 1) | (y > 2.5),
    ),
}


@pytest.mark.parametrize("poisson", [0.0, 0.3])
@pytest.mark.parametrize("name", BLOCKS)
def test_sections_of_rectangles(name: str, poisson: float) -> None:
    loops, xs, ys, solid = BLOCKS[name]
    solution = solve(loops, poisson=poisson)
    coarse = by_elements(blocks(xs, ys, solid, 3), fem.ElementTriP3(), poisson)
    fine = by_elements(blocks(xs, ys, solid, 5), fem.ElementTriP4(), poisson)
    _compare(solution, coarse, fine)


def _compare(solution: TorsionSolution, coarse: ByElements, fine: ByElements) -> None:
    """The finer elements err by less than a fifth of their difference to the coarser ones, or by one in a million."""

    def near(mine: float, low: float, high: float, scale: float) -> None:
        assert abs(mine - high) <= 0.2 * abs(high - low) + 1e-6 * abs(scale)
        assert abs(mine - high) <= 1e-4 * abs(scale)

    for key in ("torsion_constant", "warping_constant"):
        low, high = getattr(coarse, key), getattr(fine, key)
        near(getattr(solution, key).value, low, high, high)
    trace = float(np.trace(fine.compliance))
    for i, k in ((0, 0), (1, 1), (0, 1)):
        low, high = coarse.compliance[i, k], fine.compliance[i, k]
        near(solution.shear_compliance[i, k], low, high, high if i == k else trace)
    assert abs(solution.shear_centre - fine.shear_centre) < abs(fine.shear_centre - coarse.shear_centre) + 1e-5


def test_an_ellipse() -> None:
    loops = [[EllipticArc.from_axes(0j, 2 + 0j, 0.5, 0.0, tau)]]
    meshes = [star(lambda a: 2.0 / np.hypot(np.cos(a), 2.0 * np.sin(a)), n) for n in (3, 4)]
    coarse, fine = (by_elements(mesh, fem.ElementTriP2(), 0.3) for mesh in meshes)
    _compare(solve(loops, poisson=0.3), coarse, fine)


def test_a_spline() -> None:
    control = [40, 30 + 30j, 36j, -36 + 24j, -30 - 18j, 6 - 30j]
    pieces = bspline_pieces(3, list(range(13)), [complex(c) for c in control + control[:3]])
    t = np.linspace(0.0, 1.0, 400)
    z = np.concatenate([piece.points(t[:-1]) for piece in pieces])
    angle = np.unwrap(np.angle(z))
    order = np.argsort(angle % tau)

    def radius(a: np.ndarray) -> np.ndarray:
        start = np.interp(a % tau, (angle % tau)[order], np.arange(len(z))[order].astype(float), period=tau)
        s = start.copy()
        for _ in range(8):  # Newton for the parameter at which the outline is seen under the angle a
            k = np.floor(s / 399).astype(int) % len(pieces)
            u = s / 399 - np.floor(s / 399)
            at, slope = np.empty(len(s), dtype=complex), np.empty(len(s), dtype=complex)
            for number, piece in enumerate(pieces):
                here = k == number
                at[here], slope[here] = piece.points(u[here]), piece.derivatives(u[here]) / 399
            off = np.angle(at * np.exp(-1j * a))
            s = s - off / (slope / at).imag
        return np.abs(at)

    coarse, fine = (by_elements(star(radius, n), fem.ElementTriP2(), 0.3) for n in (3, 4))
    _compare(solve([list(pieces)], poisson=0.3), coarse, fine)
