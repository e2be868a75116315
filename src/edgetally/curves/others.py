"""The curves among many that have no place in the arrays of lines and arcs: elliptic arcs and Bézier pieces."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from edgetally.curves.bezier import Bezier, polynomial_lengths, polynomial_nodes
from edgetally.curves.curve import Complexes, Floats
from edgetally.curves.elliptic import EllipticArc

Unarrayed = EllipticArc | Bezier

# Polynomial pieces integrated at once; 9 nodes each for a cubic.
BLOCK = 1024


@dataclass(frozen=True, eq=False)
class Others:
    """Curves and `at` (n,), their places among all. `model` are the same before a rigid motion, with equal lengths."""

    at: NDArray[np.intp]
    curves: tuple[Unarrayed, ...]
    model: Others | None = None

    @classmethod
    def of(cls, placed: Sequence[tuple[int, Unarrayed]]) -> Others:
        return cls(np.array([place for place, _ in placed], dtype=np.intp), tuple(curve for _, curve in placed))

    def placed(self, at: NDArray[np.intp]) -> Others:
        """Return the same curves at other places."""
        return Others(at, self.curves, self.model or self)

    def framed(self, origin: complex, back: complex) -> Others:
        """Return the curves turned by the unit number `back` after `origin` has been moved to 0."""
        if not self.curves:
            return self
        # in two steps: the first is a plain difference, as exact as the coordinates
        moved = tuple(curve.moved(1.0, -origin).moved(back, 0.0) for curve in self.curves)
        return Others(self.at, moved, self.model or self)

    @cached_property
    def lengths(self) -> Floats:
        if self.model is not None:
            return self.model.lengths
        lengths = np.full(len(self.curves), np.nan)
        for places, controls in self._polynomials:
            lengths[places] = polynomial_lengths(controls)
        for k in np.flatnonzero(np.isnan(lengths)):
            lengths[k] = self.curves[k].length
        return lengths

    @cached_property
    def _polynomials(self) -> list[tuple[list[int], Complexes]]:
        """The numbers of polynomial pieces of one degree and their control points (n, degree + 1), in blocks."""
        blocks = []
        by_degree: dict[int, list[tuple[int, tuple[complex, ...]]]] = {}
        for k, curve in enumerate(self.curves):
            if isinstance(curve, Bezier) and curve.weights is None:
                by_degree.setdefault(curve.degree, []).append((k, curve.control))
        for every in by_degree.values():
            for low in range(0, len(every), BLOCK):
                some = every[low : low + BLOCK]
                blocks.append(([k for k, _ in some], np.array([control for _, control in some], dtype=np.complex128)))
        return blocks

    def supports(self, direction: complex) -> Floats:
        """Return for every curve the largest projection on the unit vector `direction`."""
        along = complex(direction).conjugate()
        supports = np.full(len(self.curves), np.nan)
        for places, controls in self._polynomials:  # whose hull reaches no further than the ends
            reach = (along * controls).real
            ends = np.maximum(reach[:, 0], reach[:, -1])
            supports[places] = np.where(reach.max(axis=1) <= ends, ends, np.nan)
        for k in np.flatnonzero(np.isnan(supports)):
            supports[k] = self.curves[k].support(complex(direction))[0]
        return supports

    @cached_property
    def _boxes(self) -> tuple[Floats, Floats, Floats, Floats]:
        return -self.supports(-1.0), -self.supports(-1j), self.supports(1.0), self.supports(1j)

    def nodes(self) -> Iterator[tuple[Complexes, Complexes]]:
        """Yield blocks (z, dz) of quadrature nodes, polynomial pieces of one degree together."""
        for _, controls in self._polynomials:
            yield polynomial_nodes(controls)
        for curve in self.curves:
            if not isinstance(curve, Bezier) or curve.weights is not None:
                yield curve.nodes()

    def turnings(self, points: Complexes, chords: Floats) -> Floats:
        """Return the angle [rad] every curve sweeps about each of `points` (m,), given what its `chords` (m, n) do.

        A curve turns about a point outside its box by as much as its chord.
        """
        result = chords.copy()
        if self.curves:
            low_x, low_y, high_x, high_y = self._boxes
            x, y = points.real[:, None], points.imag[:, None]
            inside = (low_x <= x) & (x <= high_x) & (low_y <= y) & (y <= high_y)
            for row, column in np.argwhere(inside):
                result[row, column] = self.curves[column].turning(complex(points[row]))
        return result
