"""A cold-formed strip unrolled: its flats and bends in order, and the width of the blank it is formed from."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import log10

import numpy as np

from edgetally.curves.arc import Arc
from edgetally.curves.curve import Curve
from edgetally.section.boundary import Boundary
from edgetally.section.kinds import unit_of
from edgetally.section.midline import EVEN, Strip, nominal_thickness
from edgetally.section.record import Property

SAME = EVEN
"""Arcs whose centres are this share of the thickness apart are one bend drawn in two."""
MANY = 24
"""More sides than these, most of them shorter than the wall is thick, are chords of bends."""
THIN = 0.5
"""A strip is longer than its thickness divided by this."""


@dataclass(frozen=True, slots=True)
class Piece:
    """One flat or one bend, in order along the strip.

    `length` is that of the midline [unit]; `angle` [rad] by which the strip turns, positive to the left, 0 for a flat;
    `inside_radius` that of the inner face; `blank` its length in the flat blank; `midline` where it lies.
    """

    midline: Curve
    length: float
    angle: float
    inside_radius: float
    blank: float

    @property
    def is_bend(self) -> bool:
        return self.angle != 0.0


@dataclass(frozen=True, eq=False)
class Developed:
    """A strip of one thickness [unit] and its pieces, in order.

    `uneven` is the share by which the thickness was found to vary; `neutral_axis` the K that the strip was unrolled
    with, None for that of DIN 6935.
    """

    thickness: float
    uneven: float
    closed: bool
    pieces: tuple[Piece, ...]
    neutral_axis: float | None

    @property
    def width(self) -> float:
        """The developed length of the midline: area = thickness · width."""
        return sum(piece.length for piece in self.pieces)

    @property
    def blank_width(self) -> float:
        """Flats and bend allowances together."""
        return sum(piece.blank for piece in self.pieces)

    @property
    def bends(self) -> tuple[Piece, ...]:
        return tuple(piece for piece in self.pieces if piece.is_bend)


def neutral_axis_din(radius: float, thickness: float) -> float:
    """Return K, the distance of the unstretched layer from the inner face of a bend as a share of the thickness.

        K = k/2, k = 0.65 + ½·log₁₀(r/t) for r/t ≤ 5, 1 above

    r is the inside radius [unit], t the thickness. The logarithm would make k negative for r/t < 0.05; such a bend is a
    fold, for which the standard gives nothing: k is then held at 0. Source: DIN 6935 (formula from memory).
    """
    if radius > 5.0 * thickness:
        return 0.5
    if radius <= 0.0:
        return 0.0
    return 0.5 * max(0.0, 0.65 + 0.5 * log10(radius / thickness))


def developed(strip: Strip, *, neutral_axis: float | None = None) -> Developed:
    """Unroll a strip: allowance of a bend = φ·(r + K·t), φ [rad] its angle, r its inside radius.

    `neutral_axis` is K, 0 to 0.5; without it that of DIN 6935. An open strip is followed from the end that lies further
    left, and lower where both do. Raises ValueError for another K.
    """
    if neutral_axis is not None and not 0.0 <= neutral_axis <= 0.5:
        raise ValueError(f"K must be from 0 (inner face) to 0.5 (midline), not {neutral_axis:g}")
    curves = _merged(_from_the_left(strip), strip.thickness, strip.closed)
    pieces = tuple(_piece(curve, strip.thickness, neutral_axis) for curve in curves)
    return Developed(strip.thickness, strip.uneven, strip.closed, pieces, neutral_axis)


def _piece(curve: Curve, thickness: float, neutral_axis: float | None) -> Piece:
    if not isinstance(curve, Arc):
        return Piece(curve, curve.length, 0.0, 0.0, curve.length)
    inside = max(0.0, curve.radius - 0.5 * thickness)
    if inside < SAME * thickness:  # an outer arc about a sharp inner corner, to what the wall varies by
        inside = 0.0
    k = neutral_axis_din(inside, thickness) if neutral_axis is None else neutral_axis
    return Piece(curve, curve.length, curve.sweep, inside, abs(curve.sweep) * (inside + k * thickness))


def _from_the_left(strip: Strip) -> list[Curve]:
    """Return the midline from its left end; a closed one begins in the middle of nothing: as it was found."""
    curves = list(strip.midline)
    first, last = curves[0].start, curves[-1].end
    size = max(abs(first - last), strip.thickness)
    if abs(first.real - last.real) > 1e-9 * size:
        turn = last.real < first.real
    else:
        turn = last.imag < first.imag
    return [curve.reversed() for curve in reversed(curves)] if turn and not strip.closed else curves


def _merged(curves: Sequence[Curve], thickness: float, closed: bool) -> list[Curve]:
    """Make arcs about one centre that continue each other one bend."""
    merged: list[Curve] = []
    for curve in curves:
        if merged and (longer := _one_bend(merged[-1], curve, thickness)):
            merged[-1] = longer
        else:
            merged.append(curve)
    if closed and len(merged) > 1 and (longer := _one_bend(merged[-1], merged[0], thickness)):
        merged = [longer, *merged[1:-1]]
    return merged


def _one_bend(first: Curve, second: Curve, thickness: float) -> Arc | None:
    if not (isinstance(first, Arc) and isinstance(second, Arc)) or first.sweep * second.sweep < 0.0:
        return None
    apart = abs(first.centre - second.centre) + abs(first.radius - second.radius)
    return Arc(first.start, first.spoke, first.sweep + second.sweep) if apart < SAME * thickness else None


def strip_properties(unrolled: Developed | None, unit: str) -> dict[str, Property]:
    """Return thickness and developed width of an open strip; nothing for a tube, whose ends do not exist."""
    if unrolled is None or unrolled.closed:
        return {}
    values = {"strip_thickness": unrolled.thickness, "strip_width": unrolled.width}
    error = max(unrolled.uneven, 1e-12)
    return {key: Property(key, value, unit_of(key, unit), error) for key, value in values.items()}


def why_no_strip(loops: Sequence[Sequence[Curve]]) -> str:
    """Say why a section is no strip, in words that its drawer can act on; for one that `strip_of` has refused."""
    if len(loops) > 2:
        return f"it has {len(loops) - 1} voids or parts; a strip has none, a closed tube one"
    boundary = Boundary.of(loops)
    kinds = {type(curve).__name__ for curve in boundary.curves} - {"Line", "Arc"}
    if kinds:
        return "its outline holds ellipses or splines, which are no bends of a strip"
    thickness = nominal_thickness(boundary)
    chords = thickness is not None and float(np.median(boundary.length)) < thickness and len(boundary) > MANY
    if chords and boundary.is_line.all():
        return "its bends are drawn as short chords; export true arcs"
    if len(loops) == 1 and (thickness is None or thickness > THIN * boundary.size):
        return "it is no thin wall"
    if len(loops) == 1 and thickness is not None:
        near = np.abs(boundary.length - thickness) < 0.02 * thickness
        square = boundary.is_line & near & (np.abs(boundary.turn - 0.5 * np.pi) < 1e-3)
        if np.count_nonzero(square & near) < 2:
            return (
                f"area and perimeter would make it {thickness:.6g} thick, but it has not two square ends of that width"
            )
    return "its wall is not of one thickness, to 1 % of it: sides are not parallel, or not concentric in a bend"
