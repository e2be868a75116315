"""The boundary of one connected region as arrays: curves, the loops they make, and the joints between them."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from edgetally.curves.arc import Arc, swings
from edgetally.curves.curve import Complexes, Curve, Floats
from edgetally.curves.line import Line

Ints = NDArray[np.intp]
Mask = NDArray[np.bool_]


@dataclass(frozen=True, eq=False)
class Boundary:
    """C curves in order, loop by loop, material on the left; `loop` (C,) is the number of each one's loop, 0 the outer.

    Lines and arcs are kept as arrays, so that thousands of them are evaluated at once; any other kind through its own
    `points` and `derivatives`.
    """

    curves: tuple[Curve, ...]
    loop: Ints

    @classmethod
    def of(cls, loops: Sequence[Sequence[Curve]]) -> Boundary:
        curves = tuple(curve for loop in loops for curve in loop)
        return cls(curves, np.repeat(np.arange(len(loops)), [len(loop) for loop in loops]))

    def __len__(self) -> int:
        return len(self.curves)

    @property
    def loops(self) -> list[list[Curve]]:
        """The curves of each loop."""
        parts: list[list[Curve]] = [[] for _ in range(int(self.loop[-1]) + 1)]
        for curve, loop in zip(self.curves, self.loop, strict=True):
            parts[loop].append(curve)
        return parts

    @cached_property
    def start(self) -> Complexes:
        return np.array([curve.start for curve in self.curves], dtype=complex)

    @cached_property
    def end(self) -> Complexes:
        return np.array([curve.end for curve in self.curves], dtype=complex)

    @cached_property
    def spoke(self) -> Complexes:
        return np.array([c.spoke if isinstance(c, Arc) else 0j for c in self.curves], dtype=complex)

    @cached_property
    def sweep(self) -> Floats:
        return np.array([c.sweep if isinstance(c, Arc) else 0.0 for c in self.curves], dtype=float)

    @cached_property
    def is_line(self) -> Mask:
        return np.array([isinstance(c, Line) for c in self.curves], dtype=bool)

    @cached_property
    def is_arc(self) -> Mask:
        return np.array([isinstance(c, Arc) for c in self.curves], dtype=bool)

    @cached_property
    def length(self) -> Floats:
        return np.array([curve.length for curve in self.curves], dtype=float)

    @cached_property
    def size(self) -> float:
        """The longer side of the box around the ends of the curves, or the length of a loop that is one curve."""
        z = np.concatenate([self.start, self.end])
        spread = max(float(np.ptp(z.real)), float(np.ptp(z.imag)))
        return spread or float(self.length.max()) / np.pi

    @cached_property
    def following(self) -> Ints:
        """The curve that each curve's end joins."""
        after = np.arange(1, len(self) + 1)
        last = np.append(self.loop[1:] != self.loop[:-1], True)
        first = np.append(0, np.flatnonzero(last)[:-1] + 1)
        after[last] = first
        return after

    @cached_property
    def end_directions(self) -> tuple[Complexes, Complexes]:
        """The unit tangents along the travel at the start and at the end of each curve."""
        return (
            np.array([_direction(curve, 0.0) for curve in self.curves], dtype=complex),
            np.array([_direction(curve, 1.0) for curve in self.curves], dtype=complex),
        )

    @cached_property
    def turn(self) -> Floats:
        """The angle [rad] by which the outline turns left at each curve's end; the interior angle is π less it."""
        leaving, arriving = self.end_directions
        turned: Floats = np.angle(leaving[self.following] * arriving.conj())
        return turned

    @cached_property
    def end_curvatures(self) -> tuple[Floats, Floats]:
        """The signed curvature at the start and at the end of each curve; of a general curve by differences."""
        bent = np.zeros((2, len(self)))
        arcs = np.flatnonzero(self.is_arc)
        bent[:, arcs] = np.sign(self.sweep[arcs]) / np.abs(self.spoke[arcs])
        step = 1e-4
        for k in np.flatnonzero(~self.is_line & ~self.is_arc):
            for row, (a, b) in enumerate(((0.0, step), (1.0 - step, 1.0))):
                first, second = self.curves[k].derivative(a), self.curves[k].derivative(b)
                speed = 0.5 * (abs(first) + abs(second))
                if first and second and speed:
                    bent[row, k] = np.angle(second / first) / (speed * step)
        return bent[0], bent[1]

    @cached_property
    def rough(self) -> Mask:
        """Whether direction or curvature jumps at each curve's end."""
        after = self.following
        curved_start, curved_end = self.end_curvatures
        shorter = np.minimum(self.length, self.length[after])
        jump = np.abs(curved_start[after] - curved_end) * shorter
        marked: Mask = (np.abs(self.turn) > 1e-10) | (jump > 1e-6)
        return marked

    def points(self, curve: Ints, t: Floats) -> tuple[Complexes, Complexes]:
        """Return z(t) and z′(t) of the numbered curves (P,) at parameters t (P, n), both (P, n)."""
        z, slope = np.empty(t.shape, dtype=complex), np.empty(t.shape, dtype=complex)
        line, arc = self.is_line[curve], self.is_arc[curve]
        if line.any():
            k, s = curve[line], t[line]
            start, end = self.start[k][:, None], self.end[k][:, None]
            z[line] = np.where(s < 0.5, start + s * (end - start), end - (1.0 - s) * (end - start))
            slope[line] = end - start
        if arc.any():
            k, s = curve[arc], t[arc]
            spoke, sweep = self.spoke[k][:, None], self.sweep[k][:, None]
            turned = swings(sweep * s)
            z[arc] = self.start[k][:, None] + spoke * turned
            slope[arc] = 1j * sweep * spoke * (turned + 1.0)
        rest = np.flatnonzero(~line & ~arc)
        for k in np.unique(curve[rest]):
            here = rest[curve[rest] == k]
            z[here], slope[here] = self.curves[k].points(t[here]), self.curves[k].derivatives(t[here])
        return z, slope


def _direction(curve: Curve, t: float) -> complex:
    """Return the unit tangent at an end, by a chord where the parameter comes to rest there."""
    slope = curve.derivative(t)
    if abs(slope) <= 1e-9 * curve.length:
        inner = abs(t - 1e-4)
        slope = (curve.point(inner) - curve.point(t)) * (1.0 if t == 0.0 else -1.0)
    return slope / abs(slope) if slope else 1.0 + 0j
