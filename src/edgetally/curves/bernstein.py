"""Polynomials on 0 ≤ t ≤ 1 by their Bernstein coefficients: f(t) = Σ cᵢ·C(n, i)·tⁱ·(1 − t)ⁿ⁻ⁱ.

In this basis values are averages of the coefficients, so nothing cancels that does not cancel in f itself, and the sign
changes of the coefficients bound the number of roots (Farouki and Rajan, Algorithms for polynomials in Bernstein form,
Computer Aided Geometric Design 5, 1988).
"""

from __future__ import annotations

from collections.abc import Sequence
from functools import cache
from math import comb
from typing import TypeVar

Number = TypeVar("Number", float, complex)

EPS = 2.0**-52
DEPTH = 50
NEWTON = 60


def value(coefficients: Sequence[Number], t: float) -> Number:
    """Return f(t) by repeated averaging (de Casteljau)."""
    row = list(coefficients)
    s = 1.0 - t
    for last in range(len(row) - 1, 0, -1):
        for i in range(last):
            row[i] = s * row[i] + t * row[i + 1]
    return row[0]


def halves(coefficients: Sequence[Number], t: float = 0.5) -> tuple[list[Number], list[Number]]:
    """Return the coefficients of f on the parts before and after t, each on its own 0 … 1."""
    row = list(coefficients)
    first, second = [row[0]], [row[-1]]
    s = 1.0 - t
    for last in range(len(row) - 1, 0, -1):
        for i in range(last):
            row[i] = s * row[i] + t * row[i + 1]
        first.append(row[0])
        second.append(row[last - 1])
    return first, second[::-1]


def slope(coefficients: Sequence[Number]) -> list[Number]:
    """Return the coefficients of f′, of one degree less."""
    n = len(coefficients) - 1
    return [n * (coefficients[i + 1] - coefficients[i]) for i in range(n)]


@cache
def _shares(m: int, n: int) -> list[list[float]]:
    return [[comb(m, i) * comb(n, j) / comb(m + n, i + j) for j in range(n + 1)] for i in range(m + 1)]


def product(f: Sequence[Number], g: Sequence[Number]) -> list[Number]:
    """Return the coefficients of f·g, of degree m + n."""
    m, n = len(f) - 1, len(g) - 1
    shares = _shares(m, n)
    result = [0.0 * f[0]] * (m + n + 1)
    for i in range(m + 1):
        for j in range(n + 1):
            result[i + j] += shares[i][j] * f[i] * g[j]
    return result


def roots(coefficients: Sequence[float]) -> list[float]:
    """Return, in order, the t of 0 < t < 1 where f changes its sign, and one t wherever f vanishes to rounding.

    Pieces are halved until their coefficients change sign at most once; then the root is single and bracketed.
    """
    noise = 8.0 * EPS * max(abs(c) for c in coefficients)
    found = []
    waiting = [(0.0, 1.0, list(coefficients), 0)]
    while waiting:
        low, high, c, depth = waiting.pop()
        changes = _sign_changes(c)
        if changes == 0:
            continue
        if changes == 1:
            found.append(low + (high - low) * _bracketed(c))
        elif depth == DEPTH or max(abs(x) for x in c) <= noise:
            found.append(0.5 * (low + high))
        else:
            middle = 0.5 * (low + high)
            first, second = halves(c)
            if second[0] == 0.0:
                found.append(middle)
            waiting += [(low, middle, first, depth + 1), (middle, high, second, depth + 1)]
    return sorted(t for t in found if 0.0 < t < 1.0)


def _sign_changes(c: Sequence[float]) -> int:
    changes, sign = 0, 0.0
    for x in c:
        if x * sign < 0.0:
            changes += 1
        if x != 0.0:
            sign = 1.0 if x > 0.0 else -1.0
    return changes


def _bracketed(c: Sequence[float]) -> float:
    """Return the only root of 0 < t < 1 by Newton's method, halved back into its bracket where it leaves it."""
    rising = next(x for x in reversed(c) if x != 0.0) > 0.0
    if len(c) == 2:
        return c[0] / (c[0] - c[1])
    derivative = slope(c)
    low, high, t = 0.0, 1.0, 0.5
    for _ in range(NEWTON):
        f = value(c, t)
        if f == 0.0:
            return t
        if (f > 0.0) == rising:
            high = t
        else:
            low = t
        steep = value(derivative, t)
        trial = t - f / steep if steep != 0.0 else low
        if not low < trial < high:
            trial = 0.5 * (low + high)
        if abs(trial - t) <= EPS * high:
            return trial
        t = trial
    return t
