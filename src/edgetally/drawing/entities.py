"""One DXF entity → plane curves in world coordinates.

`READERS` is the table of what can be read; everything else on a used layer becomes a skip with its reason.
"""

from __future__ import annotations

from cmath import isfinite
from collections.abc import Callable, Iterable, Sequence
from math import radians, tau

from ezdxf.entities.dxfgfx import DXFGraphic
from ezdxf.entities.lwpolyline import LWPolyline
from ezdxf.entities.polyline import Polyline
from ezdxf.entities.spline import Spline

from edgetally.curves import Arc, Curve, EllipticArc, Line, Source, bspline_pieces, fit_spline
from edgetally.drawing.blocks import Leaf
from edgetally.drawing.limits import MAX_COORDINATE
from edgetally.drawing.placement import Placement, own_plane
from edgetally.errors import DrawingError
from edgetally.findings import Finding

LEVEL = 1e-6
"""The ends of a line may differ in height by this share of its length, and still count as drawn in the plane."""

# Kinds that carry words, sizes or marks. Leaving them out changes no outline, so it is worth a note only.
ANNOTATION = frozenset({
    "TEXT", "MTEXT", "RTEXT", "ATTDEF", "ATTRIB", "DIMENSION", "ARC_DIMENSION", "LARGE_RADIAL_DIMENSION", "LEADER",
    "MULTILEADER", "MLEADER", "TOLERANCE", "ACAD_TABLE", "POINT", "VIEWPORT", "IMAGE", "WIPEOUT", "LIGHT", "CAMERA",
})  # fmt: skip

# Kinds whose outline is there, but in a form that the DXF reference does not disclose: leaving one out could change the
# section, so the drawing is refused.
SEALED = frozenset({"REGION", "3DSOLID", "BODY", "SURFACE", "PLANESURFACE", "EXTRUDEDSURFACE", "ACAD_PROXY_ENTITY"})

FRAME_VERTEX = 16


class UnreadError(Exception):
    """The entity is left out; the text is the reason."""


def curves_of(leaf: Leaf) -> list[Curve]:
    """Return the curves that an entity draws, in world coordinates.

    Raises UnreadError for a kind that is left out, DrawingError for one that must not be: tilted out of the plane
    (`not-planar`), sealed, or with values that make no curve (`entity-unreadable`).
    """
    entity, source = leaf.entity, source_of(leaf)
    kind = entity.dxftype()
    if kind in SEALED:
        message = f"{source} on layer {source.layer} cannot be read: explode it in a CAD program and export again"
        raise DrawingError(message, [Finding("entity-unreadable", "error", message, handles=(source.handle,))])
    reader = READERS.get(kind)
    if reader is None:
        raise UnreadError("it draws no curve of an outline" if kind in ANNOTATION else f"{kind} is not read")
    try:
        curves = list(reader(entity, source))
        placed = [leaf.placement.curve(curve) for curve in curves]
    except ValueError as error:
        raise unreadable(source, f"makes no curve: {error}") from None
    for curve in placed:
        for z in (curve.start, curve.end):
            if not isfinite(z) or abs(z) > MAX_COORDINATE:
                raise unreadable(source, f"has a coordinate {z.real:g}, {z.imag:g} that places nothing")
    return placed


def source_of(leaf: Leaf) -> Source:
    return Source(leaf.entity.dxftype(), leaf.entity.dxf.handle or "", leaf.layer, leaf.block)


def _line(entity: DXFGraphic, source: Source) -> Iterable[Curve]:
    start, end = entity.dxf.start, entity.dxf.end  # in world coordinates, whatever the extrusion
    line = Line(complex(start.x, start.y), complex(end.x, end.y), source)
    if abs(end.z - start.z) > LEVEL * line.length:
        raise tilted(source, f"rises from z = {start.z:g} to z = {end.z:g}")
    return [line]


def _arc(entity: DXFGraphic, source: Source) -> Iterable[Curve]:
    radius = _radius(entity, source)
    start, end = entity.dxf.start_angle, entity.dxf.end_angle
    sweep = radians((end - start) % 360.0)
    if sweep == 0.0:
        if end == start:
            raise unreadable(source, f"starts and ends at the same angle, {start:g}°")
        sweep = tau
    centre = entity.dxf.center
    arc = Arc.from_centre(complex(centre.x, centre.y), radius, radians(start), sweep, source)
    return [plane_of(entity, source).curve(arc)]


def _circle(entity: DXFGraphic, source: Source) -> Iterable[Curve]:
    centre = entity.dxf.center
    circle = Arc.from_centre(complex(centre.x, centre.y), _radius(entity, source), 0.0, tau, source)
    return [plane_of(entity, source).curve(circle)]


def _ellipse(entity: DXFGraphic, source: Source) -> Iterable[Curve]:
    """Centre and major axis are in world coordinates; the minor axis is extrusion × major · ratio (DXF reference)."""
    own = plane_of(entity, source)
    mirrored = own.a == 0
    centre, major, dxf = entity.dxf.center, entity.dxf.major_axis, entity.dxf
    if abs(major.z) > LEVEL * abs(complex(major.x, major.y)):
        raise tilted(source, f"has a major axis that rises by {major.z:g}")
    ratio = -float(dxf.ratio) if mirrored else float(dxf.ratio)
    return [
        EllipticArc.from_axes(
            complex(centre.x, centre.y), complex(major.x, major.y), ratio, dxf.start_param, dxf.end_param, source
        )
    ]


def _spline(entity: DXFGraphic, source: Source) -> Iterable[Curve]:
    """Points are in world coordinates. The control points decide; fit points only where there are none."""
    assert isinstance(entity, Spline)
    control = [complex(p[0], p[1]) for p in entity.control_points]
    heights = [float(p[2]) for p in (*entity.control_points, *entity.fit_points)]
    if heights and max(heights) - min(heights) > LEVEL * max(1.0, max(map(abs, control), default=1.0)):
        raise tilted(source, f"runs from z = {min(heights):g} to z = {max(heights):g}")
    if control:
        weights = [float(w) for w in entity.weights] or None
        return bspline_pieces(int(entity.dxf.degree), [float(k) for k in entity.knots], control, weights, source)
    points = [complex(p[0], p[1]) for p in entity.fit_points]
    start, end = (
        complex(v.x, v.y) if v is not None and abs(complex(v.x, v.y)) > 0 else None
        for v in (entity.dxf.get("start_tangent"), entity.dxf.get("end_tangent"))
    )
    return fit_spline(points, (start, end), closed=entity.closed, source=source)


def is_fitted(entity: DXFGraphic) -> bool:
    """Tell whether an entity is a spline given by fit points only, so that the curve through them is computed here."""
    return isinstance(entity, Spline) and not len(entity.control_points)


def _lwpolyline(entity: DXFGraphic, source: Source) -> Iterable[Curve]:
    assert isinstance(entity, LWPolyline)
    vertices = [(complex(x, y), float(bulge)) for x, y, bulge in entity.get_points("xyb")]
    return map(plane_of(entity, source).curve, bulged(vertices, entity.closed, source))


def _polyline(entity: DXFGraphic, source: Source) -> Iterable[Curve]:
    assert isinstance(entity, Polyline)
    if not entity.is_2d_polyline:
        raise UnreadError(f"it is a {entity.get_mode()[2:]}, not a plane polyline")
    # smoothed polylines carry the vertices of their frame beside those on the curve
    vertices = [
        (complex(v.dxf.location.x, v.dxf.location.y), float(v.dxf.bulge))
        for v in entity.vertices
        if not v.dxf.flags & FRAME_VERTEX
    ]
    return map(plane_of(entity, source).curve, bulged(vertices, entity.is_closed, source))


def _solid(entity: DXFGraphic, source: Source) -> Iterable[Curve]:
    """SOLID and TRACE: a triangle or quadrilateral whose third and fourth corner are exchanged (DXF reference)."""
    corners = [entity.dxf.vtx0, entity.dxf.vtx1, entity.dxf.vtx3, entity.dxf.vtx2]
    plane = plane_of(entity, source)
    return map(plane.curve, bulged([(complex(c.x, c.y), 0.0) for c in corners], True, source))


def _face(entity: DXFGraphic, source: Source) -> Iterable[Curve]:
    corners = [entity.dxf.vtx0, entity.dxf.vtx1, entity.dxf.vtx2, entity.dxf.vtx3]
    heights = [c.z for c in corners]
    vertices = [(complex(c.x, c.y), 0.0) for c in corners]
    if max(heights) - min(heights) > LEVEL * max(abs(a - vertices[0][0]) for a, _ in vertices):
        raise tilted(source, f"runs from z = {min(heights):g} to z = {max(heights):g}")
    return bulged(vertices, True, source)


READERS: dict[str, Callable[[DXFGraphic, Source], Iterable[Curve]]] = {
    "LINE": _line,
    "ARC": _arc,
    "CIRCLE": _circle,
    "ELLIPSE": _ellipse,
    "SPLINE": _spline,
    "LWPOLYLINE": _lwpolyline,
    "POLYLINE": _polyline,
    "SOLID": _solid,
    "TRACE": _solid,
    "3DFACE": _face,
}


def bulged(vertices: Sequence[tuple[complex, float]], closed: bool, source: Source) -> Iterable[Curve]:
    """Turn vertices with bulges into pieces. The last bulge counts only when the polyline is closed (DXF reference).

    A vertex drawn twice makes a piece of no length, which encloses nothing and is passed over.
    """
    following = [*vertices[1:], *(vertices[:1] if closed else [])]
    for (start, bulge), (end, _) in zip(vertices, following, strict=False):
        if not (isfinite(start) and isfinite(end) and isfinite(complex(bulge))):
            raise unreadable(source, f"has a vertex {start.real:g}, {start.imag:g} with bulge {bulge:g}")
        if start != end:
            yield Line(start, end, source) if bulge == 0.0 else Arc.from_bulge(start, end, bulge, source)


def plane_of(entity: DXFGraphic, source: Source) -> Placement:
    """Return the map from the entity's own plane to the world's. Raises DrawingError where it is tilted."""
    plane = own_plane(entity)
    if plane is None:
        x, y, z = entity.dxf.extrusion
        raise tilted(source, f"has the extrusion direction ({x:g}, {y:g}, {z:g})")
    return plane


def _radius(entity: DXFGraphic, source: Source) -> float:
    radius = float(entity.dxf.radius)
    if not 0.0 < radius <= MAX_COORDINATE:
        raise unreadable(source, f"has the radius {radius:g}")
    return radius


def tilted(source: Source, what: str) -> DrawingError:
    message = (
        f"{source} on layer {source.layer} {what}: it lies outside the plane of the drawing; flatten the drawing, or "
        "move it to another layer"
    )
    return DrawingError(message, [Finding("not-planar", "error", message, handles=(source.handle,))])


def unreadable(source: Source, what: str) -> DrawingError:
    message = f"{source} on layer {source.layer} {what}; correct it in the drawing, or move it to another layer"
    return DrawingError(message, [Finding("entity-unreadable", "error", message, handles=(source.handle,))])
