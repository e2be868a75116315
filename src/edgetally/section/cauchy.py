"""Cauchy's integral on panels as a matrix, exact weights for points near a panel, and the equation of its real part.

For f analytic in the region and z on its boundary

    ∮ (f(ζ) − f(z))/(ζ − z) dζ = 0.

At the nodes this is Σ_j A_ij (f_j − f_i) + f′_i w_i = 0 with A_ij = dζ_j/(ζ_j − z_i), f′ the derivative by the panel's
parameter u and w its weight. With f = φ + iv, K = Im A and H = Re A the imaginary part is an equation of the second
kind for φ, given its conjugate v:

    Σ_j K_ij (φ_j − φ_i) = −Σ_j H_ij (v_j − v_i) − v′_i w_i.

A constant added to v on one loop drops out, because Re ∮dζ/(ζ − z) = 0 there. The constant of φ is fixed by giving it
the mean 0 along the boundary. Sources: N. I. Muskhelishvili, Singular Integral Equations (1953); weights near a panel
after J. Helsing and R. Ojala, J. Comput. Phys. 227 (2008), in the closed form of `legendre.near_factors`.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from edgetally.curves.curve import Complexes, Floats
from edgetally.section import legendre
from edgetally.section.boundary import Ints
from edgetally.section.nodes import Group, Nodes
from edgetally.section.preimages import Preimages

# Entries of the matrix worked on at a time, so that the temporaries stay in a processor's cache.
BLOCK = 16384
# Gauss weights do for a point outside the ellipse of radius 10^(FAR/(2n + 1)): their error is about ρ^{−2n−1}.
FAR = 12.0


class Near(NamedTuple):
    """Pairs of a target and a panel near it, of one order: Q = Qₙ(t₀) of each pair, sorted by target."""

    group: Group
    target: Ints
    panel: Ints
    q: Complexes


def near_pairs(nodes: Nodes, targets: Complexes, own: Ints | None) -> list[Near]:
    """Find the pairs of a target and a panel for which Gauss weights do not do.

    `own` (M,) are the panels that the targets lie on, None where they lie on none.
    """
    preimages = Preimages(nodes.panels)
    found = []
    for group in nodes.groups:
        n = group.n
        radius = 10.0 ** (FAR / (2 * n + 1))
        reach = 0.5 * (radius + 1.0 / radius)
        for target, position in preimages.candidates(targets, group.panels, reach):
            if own is not None:
                apart = own[target] != group.panels[position]
                target, position = target[apart], position[apart]
            t = preimages.of(targets[target], group.panels[position])
            xi = legendre.outward(t)
            near = np.abs(xi) < radius
            q = legendre.second_kind(n, t[near], xi[near])
            found.append(Near(group, target[near], position[near], q))
    return found


class Equation(NamedTuple):
    """The matrix (N, N) of the equation for φ, and its right-hand sides (N, R)."""

    matrix: Floats
    right: Floats


def equation(nodes: Nodes, conjugates: Floats, rates: Floats) -> Equation:
    """Assemble the equation for the functions whose conjugates v (N, R) and dv/du (N, R) are given at the nodes.

    Memory: the matrix and temporaries of BLOCK entries.
    """
    count = len(nodes)
    z, dz = nodes.z, nodes.dz
    x, y, dx, dy = z.real.copy(), z.imag.copy(), dz.real.copy(), dz.imag.copy()
    pairs = near_pairs(nodes, z, nodes.panel)
    matrix = np.empty((count, count))
    right = np.empty((count, conjugates.shape[1]))
    mean = np.pi * nodes.ds / nodes.ds.sum()
    rows = max(8, BLOCK // count)
    across, up, square, flow = (np.empty((rows, count)) for _ in range(4))
    for low in range(0, count, rows):
        high = min(count, low + rows)
        m = high - low
        here = np.arange(low, high)
        a, b, s, h, k = across[:m], up[:m], square[:m], flow[:m], matrix[low:high]
        np.subtract(x, x[low:high, None], out=a)
        np.subtract(y, y[low:high, None], out=b)
        np.multiply(a, a, out=s)
        np.multiply(b, b, out=h)
        s += h
        s[here - low, here] = 1.0
        np.reciprocal(s, out=s)
        a *= s
        b *= s
        # dζ/(ζ − z) = (dx·a + dy·b) + i(dy·a − dx·b) with a + ib = (ζ − z)/|ζ − z|²
        np.multiply(a, dx, out=h)
        np.multiply(b, dy, out=s)
        h += s
        np.multiply(a, dy, out=k)
        np.multiply(b, dx, out=s)
        k -= s
        for near in pairs:
            first, last = np.searchsorted(near.target, (low, high))
            _correct(h, k, near, int(first), int(last), low)
        sums = k.sum(axis=1)
        right[low:high] = h.sum(axis=1)[:, None] * conjugates[low:high] - h @ conjugates
        k += mean
        k[here - low, here] -= sums
    right -= rates * nodes.weight[:, None]
    return Equation(matrix, right)


def _correct(h: Floats, k: Floats, near: Near, first: int, last: int, low: int) -> None:
    """Multiply the entries of the near pairs first … last by 1 + c·Q in the rows from `low` on."""
    if first == last:
        return
    row = (near.target[first:last] - low)[:, None]
    column = near.group.nodes[near.panel[first:last]]
    factor = near.q[first:last, None] * legendre.near_factors(near.group.n)
    more, turned = 1.0 + factor.real, factor.imag
    re, im = h[row, column], k[row, column]
    h[row, column] = re * more - im * turned
    k[row, column] = re * turned + im * more


def integrals(nodes: Nodes, values: Complexes, points: Complexes) -> Complexes:
    """Return ∮ f/(ζ − p) dζ (M, R) for f given by values (N, R), at M points p off the boundary, near ones too."""
    weights = nodes.dz / (nodes.z - points[:, None])
    for near in near_pairs(nodes, points, None):
        row, column = near.target[:, None], near.group.nodes[near.panel]
        weights[row, column] *= 1.0 + near.q[:, None] * legendre.near_factors(near.group.n)
    result: Complexes = weights @ values
    return result
