"""A section: regions, a unit and a name; and the properties found of it."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from edgetally.curves import Packed
from edgetally.outline.records import Loop, Region
from edgetally.units import Unit, length_factor


@dataclass(frozen=True, eq=False)
class Section:
    """The material of one cross-section, in real lengths of `unit`: drawn lengths times the scale.

    `input_rounding` [unit] is by how much the double precision of the drawing's coordinates may be off.
    """

    name: str
    regions: tuple[Region, ...]
    unit: str
    input_rounding: float = 0.0

    @cached_property
    def loops(self) -> tuple[Loop, ...]:
        return tuple(loop for region in self.regions for loop in region.loops)

    @cached_property
    def packed(self) -> Packed:
        """All boundary curves, material on the left."""
        return Packed.of(curve for loop in self.loops for curve in loop.curves)

    @cached_property
    def middle(self) -> complex:
        """The middle of the box: the local origin of everything that is integrated."""
        x0, y0, x1, y1 = self.packed.box
        return complex(0.5 * (x0 + x1), 0.5 * (y0 + y1))

    @cached_property
    def size(self) -> float:
        """The larger of width and height."""
        x0, y0, x1, y1 = self.packed.box
        return max(x1 - x0, y1 - y0)


@dataclass(frozen=True, slots=True)
class Property:
    """One number of a section, with its unit and a relative error bound, as `interface` documents them.

    `error` is relative to the larger of |value| and the natural scale of a quantity that may vanish.
    Both are None where the number cannot be given; a finding then says why.
    """

    key: str
    value: float | None
    unit: Unit
    error: float | None

    def converted(self, source: str, target: str) -> Property:
        """Return the property in powers of the length unit `target` instead of `source`."""
        if self.unit.base != source or self.value is None or source == target:
            return self
        factor = length_factor(source, target)
        return Property(self.key, self.value * factor**self.unit.power, Unit(target, self.unit.power), self.error)


def input_rounding(regions: tuple[Region, ...]) -> float:
    """Return half a unit in the last place of the largest coordinate, for x and y together."""
    magnitude = max(loop.packed.magnitude for region in regions for loop in region.loops)
    return float(np.spacing(magnitude) / np.sqrt(2.0))
