"""Preimages: the complex parameter t₀ at which a panel's continuation passes through a point beside it."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from edgetally.curves.arc import swings
from edgetally.curves.curve import Complexes
from edgetally.section import legendre
from edgetally.section.boundary import Ints
from edgetally.section.panels import SAMPLES, Panels

# Targets times panels compared at a time.
BLOCK = 400_000
NEWTON = 12
# Legendre coefficients of a general curve below this share of |z| are rounding, and would be blown up off [−1, 1].
ROUNDING = 4e-15


class Preimages:
    """The maps t → z on −1 ≤ t ≤ 1 of all panels, continued to complex t, and their inverses.

    A line is z = m + h·t; an arc z = m + s·(e^{i·g·t} − 1); any other curve its Legendre polynomial of degree 15.
    """

    def __init__(self, panels: Panels) -> None:
        boundary, curve = panels.boundary, panels.curve
        self._is_line, self._is_arc = boundary.is_line[curve], boundary.is_arc[curve]
        s = panels.samples
        self._middle = s[:, 1]
        half = 0.5 * (panels.high - panels.low)
        self._half: Complexes = 0.5 * (s[:, 2] - s[:, 0])
        self._half[self._is_line] = ((boundary.end - boundary.start)[curve] * half)[self._is_line]
        self._bend = boundary.sweep[curve] * half
        turned = swings(boundary.sweep[curve] * 0.5 * (panels.low + panels.high)) + 1.0
        self._spoke: Complexes = boundary.spoke[curve] * turned
        self._series = np.zeros((len(panels), SAMPLES), dtype=complex)
        rest = np.flatnonzero(~self._is_line & ~self._is_arc)
        if rest.size:
            z, _ = boundary.points(curve[rest], panels.inner(rest, SAMPLES))
            series = (z - self._middle[rest, None]) @ legendre.to_coefficients(SAMPLES).T
            series[np.abs(series) < ROUNDING * np.abs(z).max(axis=1, keepdims=True)] = 0.0
            self._series[rest] = series
        self._reach = 0.5 * panels.length

    def candidates(self, targets: Complexes, panels: Ints, reach: float) -> Iterator[tuple[Ints, Ints]]:
        """Yield, in order of the targets, all pairs (target, index into `panels`) within about `reach` half lengths.

        Bent panels are given half as much again, because their parameter lines spread.
        """
        wide = self._reach[panels] * reach * np.where(self._is_line[panels], 1.0, 1.5)
        middle = self._middle[panels]
        rows = max(1, BLOCK // len(panels))
        for low in range(0, len(targets), rows):
            away = targets[low : low + rows, None] - middle
            target, position = np.nonzero(away.real**2 + away.imag**2 < wide * wide)
            yield target + low, position

    def of(self, targets: Complexes, panels: Ints) -> Complexes:
        """Return t₀ of each pair of a target (M,) and a panel (M,)."""
        t = np.empty(len(targets), dtype=complex)
        away = targets - self._middle[panels]
        line, arc = self._is_line[panels], self._is_arc[panels]
        t[line] = away[line] / self._half[panels[line]]
        if arc.any():
            out = away[arc] / self._spoke[panels[arc]]
            # log(1 + out), whose real part would cancel on a flat arc
            growth = 0.5 * np.log1p(np.maximum(out.real * (2.0 + out.real) + out.imag**2, -1.0 + 2.0**-53))
            t[arc] = (np.arctan2(out.imag, 1.0 + out.real) - 1j * growth) / self._bend[panels[arc]]
        rest = ~line & ~arc
        if rest.any():
            t[rest] = self._newton(away[rest], panels[rest])
        return t

    def _newton(self, away: Complexes, panels: Ints) -> Complexes:
        series = self._series[panels].T
        slope = np.polynomial.legendre.legder(series).astype(complex)
        t: Complexes = away / self._half[panels]
        for _ in range(NEWTON):
            t /= np.maximum(0.125 * np.abs(t), 1.0)
            value, rate = _values(series, t), _values(slope, t)
            step = (value - away) / np.where(rate == 0, 1.0, rate)
            size = np.abs(step)
            t -= step / np.maximum(size, 1.0)
            if size.max() < 1e-14:
                break
        return t


def _values(series: Complexes, t: Complexes) -> Complexes:
    """Return Σ c_k P_k(t) by Clenshaw's recurrence; series (n, M), t (M,)."""
    n = len(series)
    one, two = np.zeros_like(t), np.zeros_like(t)
    for k in range(n - 1, 0, -1):
        one, two = series[k] + (2 * k + 1) / (k + 1) * t * one - (k + 1) / (k + 2) * two, one
    total: Complexes = series[0] + t * one - 0.5 * two
    return total
