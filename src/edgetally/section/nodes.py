"""Nodes: the Gauss points of all panels in one array, and calculus along the boundary on values at them."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import NamedTuple, TypeVar

import numpy as np

from edgetally.curves.curve import Complexes, Floats
from edgetally.section import legendre
from edgetally.section.boundary import Ints
from edgetally.section.panels import Panels

Values = TypeVar("Values", Floats, Complexes)


class Group(NamedTuple):
    """The panels (P,) that have n nodes, and the indices of these (P, n)."""

    n: int
    panels: Ints
    nodes: Ints


@dataclass(frozen=True, eq=False)
class Nodes:
    """N nodes in order along the loops.

    `z` (N,) their places; `slope` dz/du, where u runs from −1 to 1 on each panel; `weight` the Gauss weights in u, so
    that ∫f dz = Σ f·dz with `dz` = weight·slope; `loop` (N,) and `panel` (N,) to which loop and panel each belongs.
    """

    panels: Panels
    z: Complexes
    slope: Complexes
    weight: Floats
    panel: Ints
    groups: tuple[Group, ...]

    @classmethod
    def on(cls, panels: Panels) -> Nodes:
        order = panels.order
        first = np.cumsum(order) - order
        total = int(order.sum())
        z, slope, weight = np.empty(total, dtype=complex), np.empty(total, dtype=complex), np.empty(total)
        groups = []
        for n in np.unique(order).tolist():
            which = np.flatnonzero(order == n)
            nodes = first[which, None] + np.arange(n)
            z[nodes], by_t = panels.boundary.points(panels.curve[which], panels.inner(which, n))
            slope[nodes] = by_t * (0.5 * (panels.high - panels.low)[which, None])
            weight[nodes] = legendre.rule(n)[1]
            groups.append(Group(n, which, nodes))
        return cls(panels, z, slope, weight, np.repeat(np.arange(len(panels)), order), tuple(groups))

    def __len__(self) -> int:
        return len(self.z)

    @cached_property
    def dz(self) -> Complexes:
        return self.weight * self.slope

    @cached_property
    def ds(self) -> Floats:
        """The arc length that each node stands for."""
        return self.weight * np.abs(self.slope)

    @cached_property
    def loop(self) -> Ints:
        return self.panels.boundary.loop[self.panels.curve][self.panel]

    @cached_property
    def loop_count(self) -> int:
        return int(self.loop[-1]) + 1

    def rate(self, values: Values) -> Values:
        """Return the derivative d/du along the panels of values (N,) at the nodes."""
        out = np.empty_like(values)
        for n, _, nodes in self.groups:
            out[nodes] = values[nodes] @ legendre.differentiation(n).T
        return out

    def antiderivative(self, rate: Values) -> Values:
        """Return ∫ rate du along each loop from its first point to the nodes."""
        out = np.empty_like(rate)
        per_panel = np.zeros(len(self.panels), dtype=rate.dtype)
        for n, which, nodes in self.groups:
            out[nodes] = rate[nodes] @ legendre.integration(n).T
            per_panel[which] = rate[nodes] @ legendre.rule(n)[1]
        before = np.cumsum(per_panel) - per_panel
        loops = self.panels.boundary.loop[self.panels.curve]
        starts = np.flatnonzero(np.append(True, loops[1:] != loops[:-1]))
        before -= before[starts][loops]
        out += before[self.panel]
        return out

    def around(self, values: Values) -> Values:
        """Return Σ of values (N,) over the nodes of each loop: its closed integral, if they hold the weights."""
        sums = np.zeros(self.loop_count, dtype=values.dtype)
        np.add.at(sums, self.loop, values)
        return sums

    def ends(self, values: Floats) -> Floats:
        """Return the values (P, 2) at the first and last point of each panel."""
        out = np.empty((len(self.panels), 2))
        for n, which, nodes in self.groups:
            out[which] = values[nodes] @ legendre.ends(n).T
        return out

    def tails(self, values: Floats) -> Floats:
        """Return for each panel (P,) the larger of the last two Legendre coefficients of values (N,)."""
        out = np.empty(len(self.panels))
        for n, which, nodes in self.groups:
            last = legendre.to_coefficients(n)[-2:]
            out[which] = np.abs(values[nodes] @ last.T).max(axis=1)
        return out
