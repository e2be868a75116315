"""The boundary of a HATCH as curves, for drawings in which nothing else carries the outline."""

from __future__ import annotations

from collections.abc import Iterable
from math import radians, tau

from ezdxf.entities.boundary_paths import ArcEdge, EdgePath, EllipseEdge, LineEdge, PolylinePath, SplineEdge
from ezdxf.entities.polygon import DXFPolygon

from edgetally.curves import Arc, Curve, EllipticArc, Line, Source, bspline_pieces, fit_spline
from edgetally.drawing.blocks import Leaf
from edgetally.drawing.entities import bulged, plane_of, source_of, unreadable


def boundary_of(leaf: Leaf) -> list[Curve]:
    """Return the boundary curves of a hatch, in world coordinates: all its paths, edges in no particular order.

    Raises DrawingError for a boundary that makes no curve, or that is tilted out of the plane.
    """
    entity, source = leaf.entity, source_of(leaf)
    assert isinstance(entity, DXFPolygon)
    plane = leaf.placement.after(plane_of(entity, source))
    curves: list[Curve] = []
    try:
        for path in entity.paths:
            if isinstance(path, PolylinePath):
                vertices = [(complex(x, y), float(bulge)) for x, y, bulge in path.vertices]
                curves += bulged(vertices, True, source)
            elif isinstance(path, EdgePath):
                for edge in path.edges:
                    curves += _edge(edge, source)
        return [placed for placed in map(plane.curve, curves) if placed.length > 0.0]
    except ValueError as error:
        raise unreadable(source, f"has a boundary that makes no curve: {error}") from None


def _edge(edge: object, source: Source) -> Iterable[Curve]:
    """One edge; the library has turned clockwise angles into counter-clockwise ones, which bound the same."""
    if isinstance(edge, LineEdge):
        return [Line(complex(edge.start.x, edge.start.y), complex(edge.end.x, edge.end.y), source)]
    if isinstance(edge, ArcEdge):
        start, span = radians(edge.start_angle), radians(edge.end_angle - edge.start_angle)
        sweep = tau if abs(span) >= tau * (1 - 1e-12) else span % tau
        return [Arc.from_centre(complex(edge.center.x, edge.center.y), float(edge.radius), start, sweep, source)]
    if isinstance(edge, EllipseEdge):
        centre, major = complex(edge.center.x, edge.center.y), complex(edge.major_axis.x, edge.major_axis.y)
        start, end = edge.start_param, edge.end_param
        if abs(edge.end_angle - edge.start_angle) >= 360.0 * (1 - 1e-12):
            start, end = 0.0, tau
        return [EllipticArc.from_axes(centre, major, float(edge.ratio), start, end, source)]
    if isinstance(edge, SplineEdge):
        control = [complex(p.x, p.y) for p in edge.control_points]
        if control:
            weights = [float(w) for w in edge.weights] or None
            return bspline_pieces(int(edge.degree), [float(k) for k in edge.knot_values], control, weights, source)
        return fit_spline([complex(p.x, p.y) for p in edge.fit_points], source=source)
    raise ValueError(f"an edge of kind {type(edge).__name__}")
