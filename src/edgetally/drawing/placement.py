"""Where a block's plane lies in the world: affine maps of the plane, and the entity's own plane (OCS)."""

from __future__ import annotations

from cmath import rect
from dataclasses import dataclass
from math import radians

from ezdxf.entities.dxfgfx import DXFGraphic

from edgetally.curves import Curve, affine_image

FLAT = 1e-9
"""An extrusion vector may differ from (0, 0, ±1) by so much: the rounding of 9 decimals in a file."""


@dataclass(frozen=True, slots=True)
class Placement:
    """The affine map z → a·z + b·conj(z) + shift."""

    a: complex = 1.0 + 0j
    b: complex = 0j
    shift: complex = 0j

    def point(self, z: complex) -> complex:
        return self.a * z + self.b * z.conjugate() + self.shift

    def after(self, first: Placement) -> Placement:
        """Return the map that does `first` and then this one."""
        return Placement(
            self.a * first.a + self.b * first.b.conjugate(),
            self.a * first.b + self.b * first.a.conjugate(),
            self.point(first.shift),
        )

    def curve(self, curve: Curve) -> Curve:
        """Return the image of a curve, exactly: arcs stay arcs where the map scales alike in all directions."""
        if self == IDENTITY:
            return curve
        if self.b == 0:
            return curve.moved(self.a, self.shift)
        if self.a == 0:
            return curve.mirrored().moved(self.b, self.shift)
        return affine_image(curve, self.a, self.b, self.shift)


IDENTITY = Placement()
MIRRORED = Placement(0j, -1.0 + 0j)
"""(x, y) → (−x, y): what the arbitrary axis algorithm of the DXF reference makes of the extrusion (0, 0, −1)."""


def own_plane(entity: DXFGraphic) -> Placement | None:
    """Return the map from an entity's own plane (OCS) to the world's, None where it is tilted out of it."""
    if not entity.dxf.hasattr("extrusion"):
        return IDENTITY
    x, y, z = entity.dxf.extrusion
    if not abs(x) + abs(y) <= FLAT * (x * x + y * y + z * z) ** 0.5:
        return None
    return IDENTITY if z > 0 else MIRRORED


def insert_placements(insert: DXFGraphic, base: complex) -> list[Placement] | None:
    """Return the maps of a block reference, one for each place of its array, None where it is tilted.

    A point p of the block goes to R·S·(p − base) + place, where S scales x and y, and R turns by the rotation; places
    of an array (MINSERT) are turned but not scaled (DXF reference, INSERT). All of it in the reference's own plane.
    """
    plane = own_plane(insert)
    if plane is None:
        return None
    dxf = insert.dxf
    x_scale, y_scale = float(dxf.get("xscale", 1.0)), float(dxf.get("yscale", 1.0))
    turn = rect(1.0, radians(float(dxf.get("rotation", 0.0))))
    if float(dxf.get("rotation", 0.0)) % 90.0 == 0.0:  # quarter turns to the last digit
        turn = complex(round(turn.real), round(turn.imag))
    scale = Placement(turn * 0.5 * (x_scale + y_scale), turn * 0.5 * (x_scale - y_scale))
    place = complex(dxf.insert.x, dxf.insert.y)
    placements = []
    for row in range(max(1, int(dxf.get("row_count", 1)))):
        for column in range(max(1, int(dxf.get("column_count", 1)))):
            step = complex(column * float(dxf.get("column_spacing", 0.0)), row * float(dxf.get("row_spacing", 0.0)))
            here = Placement(scale.a, scale.b, place + turn * step - scale.point(base))
            placements.append(plane.after(here))
    return placements
