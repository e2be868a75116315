"""One DXF entity → plane curves in world coordinates.

`READERS` is the table of what can be read; everything else on a used layer becomes a skip with its reason.
"""

from __future__ import annotations

from cmath import isfinite
from collections.abc import Callable, Iterable
from math import radians, tau

from ezdxf.entities.dxfgfx import DXFGraphic
from ezdxf.entities.lwpolyline import LWPolyline
from ezdxf.entities.polyline import Polyline

from edgetally.curves import Arc, Curve, Line, Source
from edgetally.drawing.limits import MAX_COORDINATE
from edgetally.errors import DrawingError
from edgetally.findings import Finding

FLAT = 1e-9
"""An extrusion vector may differ from (0, 0, ±1) by so much, the rounding of 9 decimals in a file."""
LEVEL = 1e-6
"""The ends of a line may differ in height by this share of its length, and still count as drawn in the plane."""

# Kinds that carry words, sizes or marks. Leaving them out changes no outline, so it is worth a note only.
ANNOTATION = frozenset(
    [
        "TEXT",
        "MTEXT",
        "ATTDEF",
        "ATTRIB",
        "DIMENSION",
        "ARC_DIMENSION",
        "LARGE_RADIAL_DIMENSION",
        "LEADER",
        "MULTILEADER",
        "MLEADER",
        "TOLERANCE",
        "POINT",
        "VIEWPORT",
        "IMAGE",
        "WIPEOUT",
        "ACAD_TABLE",
        "RTEXT",
    ]
)


class UnreadError(Exception):
    """The entity is left out; the text is the reason."""


def curves_of(entity: DXFGraphic) -> list[Curve]:
    """Return the curves that an entity draws, in world coordinates.

    Raises UnreadError for a kind that is left out, DrawingError for one that must not be: tilted out of the plane
    (`not-planar`), or with values that make no curve (`entity-unreadable`).
    """
    kind = entity.dxftype()
    reader = READERS.get(kind)
    if reader is None:
        raise UnreadError("it draws no curve of an outline" if kind in ANNOTATION else f"{kind} is not read")
    curves = list(reader(entity, source_of(entity)))
    for curve in curves:
        for z in (curve.start, curve.end):
            if not isfinite(z) or abs(z) > MAX_COORDINATE:
                raise _unreadable(entity, f"has a coordinate {z.real:g}, {z.imag:g} that places nothing")
    return curves


def source_of(entity: DXFGraphic) -> Source:
    return Source(entity.dxftype(), entity.dxf.handle or "", entity.dxf.layer)


def _line(entity: DXFGraphic, source: Source) -> Iterable[Curve]:
    start, end = entity.dxf.start, entity.dxf.end  # in world coordinates, whatever the extrusion
    line = Line(complex(start.x, start.y), complex(end.x, end.y), source)
    if abs(end.z - start.z) > LEVEL * line.length:
        raise _tilted(entity, f"rises from z = {start.z:g} to z = {end.z:g}")
    return [line]


def _arc(entity: DXFGraphic, source: Source) -> Iterable[Curve]:
    radius = _radius(entity)
    start, end = entity.dxf.start_angle, entity.dxf.end_angle
    sweep = radians((end - start) % 360.0)
    if sweep == 0.0:
        if end == start:
            raise _unreadable(entity, f"starts and ends at the same angle, {start:g}°")
        sweep = tau
    centre = entity.dxf.center
    arc = Arc.from_centre(complex(centre.x, centre.y), radius, radians(start), sweep, source)
    return [_to_world(arc, entity)]


def _circle(entity: DXFGraphic, source: Source) -> Iterable[Curve]:
    centre = entity.dxf.center
    return [_to_world(Arc.from_centre(complex(centre.x, centre.y), _radius(entity), 0.0, tau, source), entity)]


def _lwpolyline(entity: DXFGraphic, source: Source) -> Iterable[Curve]:
    assert isinstance(entity, LWPolyline)
    vertices = [(complex(x, y), float(bulge)) for x, y, bulge in entity.get_points("xyb")]
    return _bulged(vertices, entity.closed, entity, source)


def _polyline(entity: DXFGraphic, source: Source) -> Iterable[Curve]:
    assert isinstance(entity, Polyline)
    if not entity.is_2d_polyline:
        raise UnreadError(f"it is a {entity.get_mode()[2:]}, not a plane polyline")
    if entity.dxf.flags & 6:
        raise UnreadError("its vertices were smoothed to a curve, which is not read")
    vertices = [(complex(v.dxf.location.x, v.dxf.location.y), float(v.dxf.bulge)) for v in entity.vertices]
    return _bulged(vertices, entity.is_closed, entity, source)


READERS: dict[str, Callable[[DXFGraphic, Source], Iterable[Curve]]] = {
    "LINE": _line,
    "ARC": _arc,
    "CIRCLE": _circle,
    "LWPOLYLINE": _lwpolyline,
    "POLYLINE": _polyline,
}


def _bulged(vertices: list[tuple[complex, float]], closed: bool, entity: DXFGraphic, source: Source) -> Iterable[Curve]:
    """Turn vertices with bulges into pieces. The last bulge counts only when the polyline is closed (DXF reference).

    A vertex drawn twice makes a piece of no length, which encloses nothing and is passed over.
    """
    following = vertices[1:] + (vertices[:1] if closed else [])
    for (start, bulge), (end, _) in zip(vertices, following, strict=False):
        if not (isfinite(start) and isfinite(end) and isfinite(complex(bulge))):
            raise _unreadable(entity, f"has a vertex {start.real:g}, {start.imag:g} with bulge {bulge:g}")
        if start != end:
            piece = Line(start, end, source) if bulge == 0.0 else Arc.from_bulge(start, end, bulge, source)
            yield _to_world(piece, entity)


def _to_world(curve: Curve, entity: DXFGraphic) -> Curve:
    """Bring a curve from the entity's own plane to the world's: identity, or mirrored in the y axis for (0, 0, −1).

    The arbitrary axis algorithm of the DXF reference gives the x axis (−1, 0, 0) there.
    """
    if not entity.dxf.hasattr("extrusion"):
        return curve
    x, y, z = entity.dxf.extrusion
    norm = (x * x + y * y + z * z) ** 0.5
    if not abs(x) + abs(y) <= FLAT * norm:
        raise _tilted(entity, f"has the extrusion direction ({x:g}, {y:g}, {z:g})")
    return curve if z > 0 else curve.mirrored().moved(-1.0, 0j)


def _radius(entity: DXFGraphic) -> float:
    radius = float(entity.dxf.radius)
    if not 0.0 < radius <= MAX_COORDINATE:
        raise _unreadable(entity, f"has the radius {radius:g}")
    return radius


def _tilted(entity: DXFGraphic, what: str) -> DrawingError:
    source = source_of(entity)
    message = (
        f"{source} on layer {source.layer} {what}: it lies outside the plane of the drawing; flatten the drawing, or "
        "move it to another layer"
    )
    return DrawingError(message, [Finding("not-planar", "error", message, handles=(source.handle,))])


def _unreadable(entity: DXFGraphic, what: str) -> DrawingError:
    source = source_of(entity)
    message = f"{source} on layer {source.layer} {what}; correct it in the drawing, or move it to another layer"
    return DrawingError(message, [Finding("entity-unreadable", "error", message, handles=(source.handle,))])
