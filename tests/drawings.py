"""Drawings made by script: small DXF files for the tests, written to a folder of the test's own."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import Any

import ezdxf

Piece = tuple[float, float, float, float, float]

MM, INCH, UNSET = 4, 1, 0


def drawing(
    folder: Path, draw: Callable[[Any], None], *, units: int = MM, version: str = "R2010", name: str = "drawing.dxf"
) -> Path:
    """Write a drawing whose model space `draw` fills; return its path."""
    document = ezdxf.new(version, setup=["linetypes"])
    document.header["$INSUNITS"] = units
    for layer in ("OUTLINE", "NOTES"):
        document.layers.add(layer)
    draw(document.modelspace())
    path = folder / name
    document.saveas(path)
    return path


def draw_contours(space: Any, contours: Sequence[Sequence[Piece]], layer: str = "OUTLINE") -> None:
    """Draw contours of (x1, y1, x2, y2, bulge) as closed polylines with bulges."""
    for contour in contours:
        points = [(x, y, bulge) for x, y, _, _, bulge in contour]
        space.add_lwpolyline(points, format="xyb", close=True, dxfattribs={"layer": layer})


def draw_loose(space: Any, contours: Sequence[Sequence[Piece]], layer: str = "OUTLINE") -> None:
    """Draw contours as loose LINE and ARC entities, the arcs by centre, radius and angles."""
    for contour in contours:
        for x1, y1, x2, y2, bulge in contour:
            if bulge == 0:
                space.add_line((x1, y1), (x2, y2), dxfattribs={"layer": layer})
                continue
            start, end = complex(x1, y1), complex(x2, y2)
            centre = 0.5 * (start + end) + 0.25j * (end - start) * (1 - bulge**2) / bulge
            a, b = (math.degrees(math.atan2((p - centre).imag, (p - centre).real)) for p in (start, end))
            if bulge < 0:
                a, b = b, a
            space.add_arc((centre.real, centre.imag), abs(start - centre), a, b, dxfattribs={"layer": layer})


def square(space: Any, size: float = 10.0, at: tuple[float, float] = (0.0, 0.0), layer: str = "OUTLINE") -> None:
    """Draw a square as a closed polyline, its lower left corner at `at`."""
    x, y = at
    corners = [(x, y), (x + size, y), (x + size, y + size), (x, y + size)]
    space.add_lwpolyline(corners, close=True, dxfattribs={"layer": layer})
