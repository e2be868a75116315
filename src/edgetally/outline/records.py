"""The nouns of an outline: joins, loops, regions."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

from edgetally.curves import Curve, Packed, Source
from edgetally.curves.green import enclosed_area
from edgetally.findings import Finding


@dataclass(frozen=True, slots=True)
class Join:
    """Two ends that did not meet exactly and were joined. Lengths in the drawing's unit, areas in its square.

    `swept` bounds the area between all ways to close the gap: what moving the end by the gap sweeps, the other end
    fixed, of both neighbours, because either may have been the one that was off; ½gL of a straight piece of length L.
    """

    gap: float
    at: complex
    between: tuple[Source, Source]
    swept: float


@dataclass(frozen=True, eq=False)
class Loop:
    """A closed directed run of curves, end to start."""

    curves: tuple[Curve, ...]

    @cached_property
    def packed(self) -> Packed:
        return Packed.of(self.curves)

    @cached_property
    def area(self) -> float:
        """Signed: positive counter-clockwise."""
        return enclosed_area(self.packed)

    @cached_property
    def perimeter(self) -> float:
        return float(self.packed.lengths.sum())

    def reversed(self) -> Loop:
        return Loop(tuple(curve.reversed() for curve in reversed(self.curves)))

    def scaled(self, factor: float) -> Loop:
        return self if factor == 1 else Loop(tuple(curve.moved(complex(factor), 0j) for curve in self.curves))


@dataclass(frozen=True, eq=False)
class Region:
    """One connected piece of material: `outer` counter-clockwise, `voids` clockwise, material on the left."""

    outer: Loop
    voids: tuple[Loop, ...] = ()

    @property
    def loops(self) -> tuple[Loop, ...]:
        return (self.outer, *self.voids)

    @cached_property
    def area(self) -> float:
        return sum(loop.area for loop in self.loops)

    @property
    def box(self) -> tuple[float, float, float, float]:
        return self.outer.packed.box

    def scaled(self, factor: float) -> Region:
        return Region(self.outer.scaled(factor), tuple(void.scaled(factor) for void in self.voids))


@dataclass(frozen=True, eq=False)
class LeftOut:
    """Curves of a faulty outline, or of one that a faulty one concerns, with their box and the reason."""

    curves: tuple[Curve, ...]
    box: tuple[float, float, float, float]
    finding: Finding


@dataclass(frozen=True, eq=False)
class Outline:
    """What was assembled from a set of curves: regions numbered from the left, and how they came to be closed."""

    regions: tuple[Region, ...]
    joins: tuple[Join, ...]
    islands: tuple[int, ...]
    """Indices of the regions that lie inside a void of another."""
    findings: tuple[Finding, ...] = ()
    """What was removed on the way, beside the joins."""
    left_out: tuple[LeftOut, ...] = ()
    """What could not be measured, where only some of several outlines are asked for."""
