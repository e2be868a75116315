"""Torsion and flexure by finite elements (scikit-fem): the same problems by a route that shares nothing."""

from __future__ import annotations

from collections.abc import Callable
from itertools import pairwise
from math import ceil
from typing import NamedTuple

import numpy as np
import skfem as fem
from scipy.sparse.linalg import splu
from skfem.helpers import dot, grad


class ByElements(NamedTuple):
    """What the elements give; shear compliance F at ν in the mesh's axes."""

    torsion_constant: float
    warping_constant: float
    shear_centre: complex
    compliance: np.ndarray
    unknowns: int


def by_elements(mesh: fem.Mesh, element: fem.Element, poisson: float = 0.0) -> ByElements:
    """Solve on a mesh of triangles, weak forms of the equations in `edgetally.section.torsion` and `shear`."""
    basis = fem.Basis(mesh, element, intorder=2 * element.maxdeg + 2)
    x, y = np.asarray(basis.global_coordinates())
    dx = basis.dx
    area = dx.sum()
    cx, cy = (x * dx).sum() / area, (y * dx).sum() / area
    x, y = x - cx, y - cy
    second_x, second_y, product = (y * y * dx).sum(), (x * x * dx).sum(), (x * y * dx).sum()

    stiffness = fem.BilinearForm(lambda u, v, w: dot(grad(u), grad(v))).assemble(basis).tocsc()
    c = poisson / (2 * (1 + poisson))
    inverse = np.linalg.inv([[second_y, product], [product, second_x]])
    loads = [basis_load(basis, lambda v, w: (w.x[1] - cy) * grad(v)[0] - (w.x[0] - cx) * grad(v)[1])]
    for alpha, beta in inverse:

        def flexure(v: object, w: object, a: float = alpha, b: float = beta) -> np.ndarray:
            p, q = w.x[0] - cx, w.x[1] - cy
            return (a * p + b * q) * v - c * (a * q * q * grad(v)[0] + b * p * p * grad(v)[1])

        loads.append(basis_load(basis, flexure))
    free = np.arange(1, basis.N)
    factor = splu(stiffness[free][:, free])
    fields = np.zeros((3, basis.N))
    for field, load in zip(fields, loads, strict=True):
        field[free] = factor.solve(load[free])

    torsion = second_x + second_y - fields[0] @ stiffness @ fields[0]
    omega = np.asarray(basis.interpolate(fields[0]))
    ax, ay = (x * omega * dx).sum(), (y * omega * dx).sum()
    ys, xs = np.linalg.solve([[-second_y, product], [-product, second_x]], [-ax, -ay])
    about = omega - ys * x + xs * y
    about = about - (about * dx).sum() / area
    stress = []
    for field, (alpha, beta) in zip(fields[1:], inverse, strict=True):
        slope = basis.interpolate(field).grad
        stress.append((slope[0] + c * alpha * y * y, slope[1] + c * beta * x * x))
    compliance = np.array([[((s[0] * t[0] + s[1] * t[1]) * dx).sum() for t in stress] for s in stress])
    warping = float((about**2 * dx).sum())
    return ByElements(float(torsion), warping, complex(xs + cx, ys + cy), compliance, basis.N)


def basis_load(basis: fem.Basis, form: Callable) -> np.ndarray:
    return fem.LinearForm(form).assemble(basis)


def graded_lines(marks: list[float], levels: int, ratio: float = 0.3) -> np.ndarray:
    """Coordinates between the marks that crowd geometrically towards each of them."""
    lines = {*marks}
    for a, b in pairwise(marks):
        middle = 0.5 * (a + b)
        lines.add(middle)
        for k in range(1, levels + 1):
            step = (middle - a) * ratio**k
            lines |= {a + step, b - step}
    return np.array(sorted(lines))


def blocks(
    xs: list[float], ys: list[float], solid: Callable[[np.ndarray, np.ndarray], np.ndarray], levels: int
) -> fem.Mesh:
    """A mesh of the rectangles between the marks in which `solid` holds, graded towards every mark."""
    mesh = fem.MeshTri.init_tensor(graded_lines(xs, levels), graded_lines(ys, levels))
    x, y = mesh.p[:, mesh.t].mean(axis=1)
    return mesh.restrict(np.flatnonzero(solid(x, y)))


def graded_to_corners(
    xs: list[float],
    ys: list[float],
    solid: Callable[[np.ndarray, np.ndarray], np.ndarray],
    size: float,
    levels: int,
) -> fem.Mesh:
    """A mesh of well-shaped triangles no longer than about `size`, halved `levels` times towards every corner."""

    def lines(marks: list[float]) -> np.ndarray:
        parts = [np.linspace(a, b, 1 + ceil((b - a) / size))[:-1] for a, b in pairwise(marks)]
        return np.append(np.concatenate(parts), marks[-1])

    mesh = fem.MeshTri.init_tensor(lines(xs), lines(ys))
    x, y = mesh.p[:, mesh.t].mean(axis=1)
    mesh = mesh.restrict(np.flatnonzero(solid(x, y)))
    corners = np.array([[a, b] for a in xs for b in ys if 0 < _quadrants(solid, a, b) != 2]).T
    for level in range(levels):
        middle = mesh.p[:, mesh.t].mean(axis=1)
        apart = np.hypot(*(middle[:, :, None] - corners[:, None, :])).min(axis=1)
        mesh = mesh.refined(np.flatnonzero(apart < 1.5 * size * 0.5**level))
    return mesh


def _quadrants(solid: Callable[[np.ndarray, np.ndarray], np.ndarray], x: float, y: float) -> int:
    """Count the quadrants around a point that hold material, 0 for four."""
    step = 1e-6
    p, q = x + step * np.array([1, -1, 1, -1]), y + step * np.array([1, 1, -1, -1])
    around = solid(p, q)
    return int(around.sum()) % 4


def star(radius: Callable[[np.ndarray], np.ndarray], rings: int) -> fem.Mesh:
    """A mesh with sides of degree 2 of the region r ≤ radius(φ) about the origin."""
    mesh = fem.MeshTri2.init_circle(rings)
    points = mesh.doflocs.copy()
    # the circle's mesh is of straight triangles: its nodes are drawn out to rings first
    angle, size = np.arctan2(points[1], points[0]), np.hypot(*points)
    boundary = mesh.boundary_facets()
    on = np.zeros(points.shape[1], dtype=bool)
    on[mesh.dofs.get_facet_dofs(boundary).flatten()] = True
    size[on] = 1.0
    out = size * radius(angle)
    return fem.MeshTri2(np.vstack([out * np.cos(angle), out * np.sin(angle)]), mesh.t)
