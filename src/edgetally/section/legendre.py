"""Legendre polynomials on −1 ≤ t ≤ 1: Gauss rules, calculus on values at their nodes, functions of the second kind.

A function on a panel is known by its values at the n Gauss–Legendre nodes, and meant is the polynomial of degree n − 1
through them. Source of the formulas: NIST Digital Library of Mathematical Functions, chapters 3.5, 14 and 18.
"""

from __future__ import annotations

from functools import cache

import numpy as np

from edgetally.curves.curve import Complexes, Floats

# The forward recurrence of Qₙ multiplies rounding by about ρⁿ, the series needs 17/log₁₀ρ terms: they meet here.
SERIES_FROM = 1.5
SERIES_TERMS = ((1.5, 40), (2.2, 20), (4.0, 12))


@cache
def rule(n: int) -> tuple[Floats, Floats]:
    """Return the n Gauss–Legendre nodes and weights on [−1, 1]."""
    nodes, weights = np.polynomial.legendre.leggauss(n)
    return nodes, weights


@cache
def to_coefficients(n: int) -> Floats:
    """Return the matrix (n, n) from values at the nodes to Legendre coefficients: c_k = (k + ½) Σ w_j P_k(t_j) f_j."""
    nodes, weights = rule(n)
    values = np.polynomial.legendre.legvander(nodes, n - 1)
    scaled: Floats = (np.arange(n) + 0.5)[:, None] * values.T * weights
    return scaled


def interpolation(n: int, t: Floats) -> Floats:
    """Return the matrix (len(t), n) from values at the nodes to values at t."""
    values: Floats = np.polynomial.legendre.legvander(t, n - 1) @ to_coefficients(n)
    return values


@cache
def ends(n: int) -> Floats:
    """Return the matrix (2, n) from values at the nodes to values at t = −1 and t = 1."""
    return interpolation(n, np.array([-1.0, 1.0]))


@cache
def differentiation(n: int) -> Floats:
    """Return the matrix (n, n) from values at the nodes to the derivative d/dt there."""
    lower = np.polynomial.legendre.legder(np.eye(n)) if n > 1 else np.zeros((1, 1))
    values: Floats = np.polynomial.legendre.legvander(rule(n)[0], len(lower) - 1) @ lower @ to_coefficients(n)
    return values


@cache
def integration(n: int) -> Floats:
    """Return the matrix (n, n) from values at the nodes to the integrals from −1 to each node."""
    antiderivative = np.polynomial.legendre.legint(np.eye(n), lbnd=-1)
    values: Floats = np.polynomial.legendre.legvander(rule(n)[0], n) @ antiderivative @ to_coefficients(n)
    return values


@cache
def near_factors(n: int) -> Floats:
    """Return c_j = 2/(w_j Pₙ′(t_j)), with which 1 + c_j·Qₙ(t₀) turns Gauss weights into those exact for 1/(t − t₀).

    For a polynomial g of degree below n, g(t) − g(t₀)Pₙ(t)/Pₙ(t₀) is divisible by t − t₀, and Gauss integrates the
    quotient exactly, Pₙ being 0 at the nodes. With ∫Pₙ(t)/(t − t₀) dt = −2Qₙ(t₀) (Neumann) and g(t₀) by Lagrange:

        ∫ g(t)/(t − t₀) dt = Σ w_j g_j/(t_j − t₀) · (1 + 2Qₙ(t₀)/(w_j Pₙ′(t_j))).
    """
    nodes, weights = rule(n)
    unit = np.zeros(n + 1)
    unit[n] = 1.0
    factors: Floats = 2.0 / (weights * np.polynomial.legendre.legval(nodes, np.polynomial.legendre.legder(unit)))
    return factors


def outward(t: Complexes) -> Complexes:
    """Return ξ = t + √(t² − 1), |ξ| ≥ 1: the point lies on the Bernstein ellipse of radius |ξ|."""
    xi: Complexes = t + np.sqrt(t - 1.0) * np.sqrt(t + 1.0)
    return xi


def second_kind(n: int, t: Complexes, xi: Complexes) -> Complexes:
    """Return Qₙ(t) for complex t off the cut [−1, 1], to about 1e-14 absolute; ξ = outward(t).

    Near the cut by (k + 1)Q_{k+1} = (2k + 1)tQ_k − kQ_{k−1} from Q₀ = ½ log((t + 1)/(t − 1)) and Q₁ = tQ₀ − 1, and
    further out by

        Qₙ = √π Γ(n + 1)/Γ(n + 3/2) ξ^{−n−1} ₂F₁(½, n + 1; n + 3/2; ξ^{−2}).
    """
    out = np.empty_like(t)
    radius = np.abs(xi)
    near = radius < SERIES_FROM
    if near.any():
        s = t[near]
        before = np.asarray(0.5 * np.log((s + 1.0) / (s - 1.0)), dtype=np.complex128)
        here = np.asarray(s * before - 1.0, dtype=np.complex128)
        for k in range(1, n):
            before, here = here, ((2 * k + 1) * s * here - k * before) / (k + 1)
        out[near] = here
    limits = [low for low, _ in SERIES_TERMS[1:]] + [np.inf]
    for (low, terms), high in zip(SERIES_TERMS, limits, strict=True):
        ring = (radius >= low) & (radius < high)
        if ring.any():
            out[ring] = _series(n, xi[ring], terms)
    return out


def _series(n: int, xi: Complexes, terms: int) -> Complexes:
    x = 1.0 / (xi * xi)
    total = np.ones(len(x), dtype=complex)
    for k in range(terms, 0, -1):
        total *= x * ((k - 0.5) * (n + k) / (k * (n + k + 0.5)))
        total += 1.0
    lead = 2.0
    for k in range(1, n + 1):
        lead *= k / (k + 0.5)
    series: Complexes = lead * total / xi ** (n + 1)
    return series
