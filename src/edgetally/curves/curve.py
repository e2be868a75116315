"""What every curve kind answers, and where a curve came from."""

from __future__ import annotations

from typing import NamedTuple, Protocol, Self

import numpy as np
from numpy.typing import NDArray

Complexes = NDArray[np.complex128]
Floats = NDArray[np.float64]


class Source(NamedTuple):
    """The DXF entity that a curve was read from, and the block it stands in, "" for none."""

    entity: str
    handle: str
    layer: str
    block: str = ""

    def __str__(self) -> str:
        name = f"{self.entity} #{self.handle}" if self.handle else self.entity
        return f"{name} in block {self.block}" if self.block else name


UNKNOWN = Source("curve", "", "")


class Curve(Protocol):
    """A smooth directed plane curve z(t), 0 ≤ t ≤ 1. Lengths and points are in the drawing's unit."""

    @property
    def source(self) -> Source:
        """The entity it was read from."""

    @property
    def start(self) -> complex:
        """z(0)."""

    @property
    def end(self) -> complex:
        """z(1)."""

    @property
    def length(self) -> float:
        """∫|z′(t)| dt."""

    @property
    def bend(self) -> float:
        """An upper bound of |z″(t)|: a piece of parameter width h stays within bend·h²/8 of its chord."""

    def point(self, t: float) -> complex:
        """Return z(t)."""

    def derivative(self, t: float) -> complex:
        """Return z′(t), the tangent along the direction of travel."""

    def points(self, t: Floats) -> Complexes:
        """Return z(t) for an array of parameters, in the array's shape."""

    def derivatives(self, t: Floats) -> Complexes:
        """Return z′(t) for an array of parameters, in the array's shape."""

    def split(self, t: float) -> tuple[Self, Self]:
        """Return the part before and the part after z(t), for 0 < t < 1."""

    def reversed(self) -> Self:
        """Return the same points travelled the other way."""

    def moved(self, factor: complex, shift: complex) -> Self:
        """Return the image under z → factor·z + shift: turned, scaled alike in all directions, and moved."""

    def mirrored(self) -> Self:
        """Return the mirror image in the x axis, z → conj(z)."""

    def support(self, direction: complex) -> tuple[float, float]:
        """Return (max of the projection on the unit vector `direction`, the t where it is taken)."""

    def turning(self, p: complex) -> float:
        """Return the angle [rad] swept by the ray from p to z(t); p must not lie on the curve."""
