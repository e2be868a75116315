"""Many curves as arrays, for everything that is done to all of them at once."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from edgetally.curves.arc import Arc, swings
from edgetally.curves.curve import Complexes, Curve, Floats
from edgetally.curves.line import Line
from edgetally.curves.others import Others, Unarrayed
from edgetally.curves.quadrature import gauss

# A panel of 60° with 12 nodes integrates the moments of an arc to rounding (tests/test_green.py shows it).
ARC_NODES = 12
ARC_PANEL = np.pi / 3
# Long arrays are worked through in blocks that stay in a processor's cache.
BLOCK = 8192


NO_OTHERS = Others.of([])


@dataclass(frozen=True, eq=False)
class Packed:
    """Curves in order: `start`, `end` (n,) complex; `spoke` (n,) complex and `sweep` (n,) [rad], both 0 but for arcs.

    Elliptic arcs and Bézier pieces are kept as they are in `others`: `is_arc` and `is_straight` (n,) bool are both
    false for those. Units are those of the curves.
    """

    start: Complexes
    end: Complexes
    spoke: Complexes
    sweep: Floats
    others: Others = NO_OTHERS

    @classmethod
    def of(cls, curves: Iterable[Curve]) -> Packed:
        """Pack curves of any kind of this folder. Raises TypeError for another kind."""
        start, end, spoke, sweep, others = [], [], [], [], []
        for curve in curves:
            start.append(curve.start)
            end.append(curve.end)
            if isinstance(curve, Arc):
                spoke.append(curve.spoke)
                sweep.append(curve.sweep)
            elif isinstance(curve, Line | Unarrayed):
                if not isinstance(curve, Line):
                    others.append((len(spoke), curve))
                spoke.append(0j)
                sweep.append(0.0)
            else:
                raise TypeError(f"a curve of kind {type(curve).__name__} cannot be packed")
        return cls(
            np.array(start, dtype=complex),
            np.array(end, dtype=complex),
            np.array(spoke, dtype=complex),
            np.array(sweep, dtype=float),
            Others.of(others),
        )

    @classmethod
    def polygon(cls, vertices: Complexes) -> Packed:
        """Pack the straight pieces of the closed polygon through `vertices` (n,)."""
        n = len(vertices)
        return cls(vertices, np.roll(vertices, -1), np.zeros(n, dtype=complex), np.zeros(n))

    def __len__(self) -> int:
        return len(self.start)

    @cached_property
    def is_arc(self) -> NDArray[np.bool_]:
        arcs: NDArray[np.bool_] = self.sweep != 0.0
        return arcs

    @cached_property
    def is_straight(self) -> NDArray[np.bool_]:
        straight = ~self.is_arc
        straight[self.others.at] = False
        return straight

    @cached_property
    def curved(self) -> Packed:
        """The curves that are not straight, alone."""
        bent = np.flatnonzero(~self.is_straight)
        others = self.others.placed(np.searchsorted(bent, self.others.at))
        return Packed(self.start[bent], self.end[bent], self.spoke[bent], self.sweep[bent], others)

    @cached_property
    def lengths(self) -> Floats:
        """The length of every curve."""
        lengths = np.where(self.is_arc, np.abs(self.spoke) * np.abs(self.sweep), np.abs(self.end - self.start))
        if self.others.curves:
            lengths[self.others.at] = self.others.lengths
        return lengths

    @cached_property
    def magnitude(self) -> float:
        """The largest |coordinate| of the ends: what the rounding of the input is relative to."""
        ends = np.concatenate([self.start, self.end])
        return float(max(np.abs(ends.real).max(initial=0.0), np.abs(ends.imag).max(initial=0.0)))

    def framed(self, origin: complex, turn: complex = 1.0) -> Packed:
        """Return the curves as seen from axes at `origin` whose x axis points along the unit number `turn`."""
        back = complex(turn).conjugate()
        return Packed(
            (self.start - origin) * back,
            (self.end - origin) * back,
            self.spoke * back,
            self.sweep,
            self.others.framed(origin, back),
        )

    def supports(self, direction: complex) -> Floats:
        """Return for every curve the largest projection on the unit vector `direction`, as Curve.support does."""
        along = complex(direction).conjugate()
        at_start = (along * self.start).real
        best = np.maximum(at_start, (along * self.end).real)
        arcs = np.flatnonzero(self.is_arc)
        if arcs.size:
            spoke, sweep = self.spoke[arcs], self.sweep[arcs]
            turn = np.mod(np.angle(direction / spoke) * np.sign(sweep), 2 * np.pi)
            crown = at_start[arcs] + 2.0 * np.abs(spoke) * np.sin(0.5 * turn) ** 2
            best[arcs] = np.where(turn < np.abs(sweep), np.maximum(best[arcs], crown), best[arcs])
        if self.others.curves:
            best[self.others.at] = self.others.supports(direction)
        return best

    @cached_property
    def boxes(self) -> Floats:
        """(n, 4): the smallest x, smallest y, largest x, largest y of every curve."""
        return np.column_stack([-self.supports(-1.0), -self.supports(-1j), self.supports(1.0), self.supports(1j)])

    @cached_property
    def box(self) -> tuple[float, float, float, float]:
        """The smallest x, smallest y, largest x, largest y of all curves."""
        if self.is_straight.all():  # without the boxes of every piece, which for polygons would take most of the time
            x, y = (np.concatenate([self.start, self.end]).view(float).reshape(-1, 2).T[k] for k in (0, 1))
            return float(x.min()), float(y.min()), float(x.max()), float(y.max())
        low, high = self.boxes[:, :2].min(axis=0), self.boxes[:, 2:].max(axis=0)
        return float(low[0]), float(low[1]), float(high[0]), float(high[1])

    def straight_blocks(self) -> Iterator[tuple[Complexes, Complexes]]:
        """Yield blocks (start, end) of the straight pieces, each small enough to stay in a processor's cache."""
        straight = np.flatnonzero(self.is_straight)
        every = len(straight) == len(self)
        for low in range(0, len(straight), BLOCK):
            here: slice | NDArray[np.intp] = slice(low, low + BLOCK) if every else straight[low : low + BLOCK]
            yield self.start[here], self.end[here]

    def curved_nodes(self) -> Iterator[tuple[Complexes, Complexes]]:
        """Yield blocks (z, dz) of quadrature nodes on the curved pieces: ∫f(z) dz = Σ f(z)·dz.

        dz holds the Gauss weight times z′(t), so that its real and imaginary part are the weighted dx and dy.
        Polynomials f of degree ≤ 5 are integrated to rounding.
        """
        arcs = np.flatnonzero(self.is_arc)
        t, w = gauss(ARC_NODES)
        panels = np.ceil(np.abs(self.sweep[arcs]) / ARC_PANEL * (1 - 1e-12)).astype(int)
        arc = np.repeat(arcs, panels)
        count = np.repeat(panels, panels)
        number = np.arange(len(arc)) - np.repeat(np.cumsum(panels) - panels, panels)
        for low in range(0, len(arc), BLOCK // ARC_NODES):
            block = slice(low, low + BLOCK // ARC_NODES)
            a = arc[block]
            step = self.sweep[a] / count[block]
            turned = swings(step * (number[block] + t[:, None]))
            spoke = self.spoke[a]
            yield self.start[a] + spoke * turned, (1j * w[:, None] * step) * (spoke * (turned + 1.0))
        yield from self.others.nodes()

    @cached_property
    def halved(self) -> Packed:
        """The same curves, arcs of more than a half turn split at their middle; the order is not kept."""
        wide = np.abs(self.sweep) > np.pi
        if not wide.any():
            return self
        sweep = 0.5 * self.sweep[wide]
        turned = swings(sweep)
        middle = self.start[wide] + self.spoke[wide] * turned
        return Packed(
            np.concatenate([self.start[~wide], self.start[wide], middle]),
            np.concatenate([self.end[~wide], middle, self.end[wide]]),
            np.concatenate([self.spoke[~wide], self.spoke[wide], self.spoke[wide] * (turned + 1.0)]),
            np.concatenate([self.sweep[~wide], sweep, sweep]),
            self.others.placed(np.cumsum(~wide)[self.others.at] - 1),
        )

    def turning(self, points: Complexes) -> Floats:
        """Return the angle [rad] swept about each of `points` (m,) by all curves together, as Curve.turning does.

        About a closed loop it is 2π times the winding number. No point may lie on a curve.
        """
        pieces = self.halved
        rows = max(1, BLOCK * 16 // max(1, len(pieces)))
        total = np.empty(len(points))
        for low in range(0, len(points), rows):
            p = points[low : low + rows, None]
            q = (pieces.start - p).conj() * (pieces.end - p)
            turn = np.angle(q)
            # on the chord itself the arc, which passes beside the point, decides the sense of the half turn
            turn = np.where((q.imag == 0) & (q.real < 0), np.copysign(np.pi, pieces.sweep), turn)
            d = p - pieces.start
            power = d.real**2 + d.imag**2 + 2.0 * (d.real * pieces.spoke.real + d.imag * pieces.spoke.imag)
            beside = (q.imag * pieces.sweep < 0) & (power < 0)
            turn[:, pieces.others.at] = pieces.others.turnings(p[:, 0], turn[:, pieces.others.at])
            total[low : low + rows] = (turn + beside * np.copysign(2 * np.pi, pieces.sweep)).sum(axis=1)
        return total
