"""Two revisions of one section: which curves moved, and every property before, after and changed."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from pathlib import Path
from typing import Any

from edgetally.analysis import analyse
from edgetally.findings import Severity, worst
from edgetally.outline.matching import Matching, match
from edgetally.outline.records import Loop
from edgetally.results import Analysis, SectionResult
from edgetally.units import Unit, length_factor

UNMOVED = 4e-9
"""Curves within 1e-9 of the size are where they were; so far may a property at the fourth power then be off."""


@dataclass(frozen=True, slots=True)
class PropertyChange:
    """One property before and after, in one unit. `same` where they differ by no more than their errors.

    `percent` is relative to |before|; None where that is nothing, and for places and angles, which have no natural 0.
    """

    key: str
    unit: Unit
    before: float | None
    after: float | None
    same: bool

    @property
    def change(self) -> float | None:
        return None if self.before is None or self.after is None else self.after - self.before

    @property
    def percent(self) -> float | None:
        if self.key == "principal_angle" or self.key.startswith(("centroid_", "shear_centre_", "plastic_axis_")):
            return None
        return None if self.change is None or not self.before else 100.0 * self.change / abs(self.before)


@dataclass(frozen=True, eq=False)
class Pair:
    """One section in its two states; the outlines are compared in the unit of the old drawing."""

    old: SectionResult
    new: SectionResult

    @cached_property
    def new_loops(self) -> tuple[Loop, ...]:
        """The new outline in the unit of the old one."""
        factor = length_factor(self.new.section.unit, self.old.section.unit)
        return tuple(loop.scaled(factor) for loop in self.new.section.loops)

    @cached_property
    def matching(self) -> Matching:
        return match(self.old.section.loops, self.new_loops, size=self.old.section.size)

    @cached_property
    def properties(self) -> tuple[PropertyChange, ...]:
        """Every property that either state has."""
        keys = dict.fromkeys([*self.old.properties, *self.new.properties])
        return tuple(self._property(key) for key in keys)

    def _property(self, key: str) -> PropertyChange:
        states = (self.old, self.new)
        found = [(state, state.properties[key]) for state in states if key in state.properties]
        before, after = (s.properties[key].value if key in s.properties else None for s in states)
        if before is None or after is None:
            return PropertyChange(key, found[0][1].unit, before, after, before is after)
        slack = sum(((p.error or 0.0) + UNMOVED) * max(abs(p.value or 0.0), s.natural_scale(key)) for s, p in found)
        return PropertyChange(key, found[0][1].unit, before, after, abs(after - before) <= slack)

    @property
    def same(self) -> bool:
        """Whether every curve lies where it lay and every property is what it was."""
        still = not self.matching.changes and self.matching.shift == 0
        return still and all(p.same for p in self.properties)


@dataclass(frozen=True, eq=False)
class Comparison:
    """Two drawings: sections that stand for each other, and those that only one of them has."""

    old: Analysis
    new: Analysis
    pairs: tuple[Pair, ...]
    vanished: tuple[SectionResult, ...]
    appeared: tuple[SectionResult, ...]

    @property
    def same(self) -> bool:
        return not self.vanished and not self.appeared and all(pair.same for pair in self.pairs)

    @property
    def severity(self) -> Severity | None:
        return worst((*self.old.all_findings, *self.new.all_findings))


def compare(
    old: str | Path, new: str | Path, *, names: tuple[str | None, str | None] = (None, None), **options: Any
) -> Comparison:
    """Analyse two drawings with the same options and match their sections by place.

    `options` are those of `analyse`; `names` are given in the result where a path is that of a copy. The results are in
    `out_units`, or in the unit of the old drawing. Raises what `analyse` raises.
    """
    first = analyse(old, name=names[0], **options)
    second = analyse(new, name=names[1], **options | {"out_units": first.out_unit})
    return Comparison(first, second, *_paired(first, second))


def _paired(
    old: Analysis, new: Analysis
) -> tuple[tuple[Pair, ...], tuple[SectionResult, ...], tuple[SectionResult, ...]]:
    """Match sections nearest first, by centroid and size, up to one size apart; a single one with a single one."""
    if len(old.sections) == len(new.sections) == 1:
        return (Pair(old.sections[0], new.sections[0]),), (), ()
    factor = length_factor(new.drawing.unit, old.drawing.unit)
    distances = sorted(
        (abs(b.result.centroid * factor - a.result.centroid) + abs(b.section.size * factor - a.section.size), j, k)
        for j, a in enumerate(old.sections)
        for k, b in enumerate(new.sections)
    )
    partner: dict[int, int] = {}
    for distance, j, k in distances:
        if j not in partner and k not in partner.values() and distance <= old.sections[j].section.size:
            partner[j] = k
    pairs = tuple(Pair(old.sections[j], new.sections[partner[j]]) for j in sorted(partner))
    vanished = tuple(s for j, s in enumerate(old.sections) if j not in partner)
    appeared = tuple(s for k, s in enumerate(new.sections) if k not in partner.values())
    return pairs, vanished, appeared
