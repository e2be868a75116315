"""The outline with every surface moved by a distance: exact for lines and arcs, by fine chords for all other curves."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
import shapely
from numpy.typing import NDArray

from edgetally.curves import Arc, Curve, Line
from edgetally.errors import OutlineError
from edgetally.findings import Finding
from edgetally.outline.crossings import refuse_crossings
from edgetally.outline.nesting import nest
from edgetally.outline.records import Loop, Region
from edgetally.outline.words import at, place

SMOOTH = 1e-9
"""Neighbours that turn by less than this [rad] are tangent: their joint moves along the normal."""
CHORDS = 256
"""So many chords stand for a curve that has no offset of its own kind."""
MITRE_LIMIT = 12.0
"""A mitre longer than so many times the distance is no corner of a real piece; it is that of about 10°."""


@dataclass(frozen=True, eq=False)
class Moved:
    """The regions with their surfaces moved; where not `exact`, of chords, as `chords`, the outline before."""

    regions: tuple[Region, ...]
    chords: tuple[Region, ...]
    exact: bool


def moved_outward(regions: Sequence[Region], distance: float) -> Moved:
    """Return the regions with every surface moved out of the material by `distance`, inwards where it is negative.

    Corners stay sharp. Raises OutlineError, with the place, where a piece of the outline or a wall vanishes, or the
    outline meets itself.
    """
    if not all(isinstance(c, Line | Arc) for r in regions for loop in r.loops for c in loop.curves):
        return _by_chords(regions, distance)
    loops = [_moved(loop, distance) for region in regions for loop in region.loops]
    try:
        refuse_crossings(loops)
    except OutlineError as error:
        where = error.findings[0].at if error.findings else None
        spot = f" at {place(complex(*where))}" if where else ""
        raise _impossible(f"surfaces that move by {_by(distance)} meet{spot}", where) from None
    found, _ = nest(loops)
    # a void that has outgrown its outer boundary would be taken for it: the signed areas tell
    found_area, signed_area = sum(r.area for r in found), sum(loop.area for loop in loops)
    kept = abs(found_area - signed_area) <= SMOOTH * found_area
    if not kept or sorted(len(r.voids) for r in found) != sorted(len(r.voids) for r in regions):
        raise _impossible(
            f"moving the surfaces by {_by(distance)} makes another arrangement of parts and voids",
            None,
        )
    return Moved(tuple(found), (), exact=True)


def _moved(loop: Loop, distance: float) -> Loop:
    """Move each curve along its normal and find the new joints."""
    curves = loop.curves
    supports = [_shifted(curve, distance) for curve in curves]
    count = len(curves)
    if count == 1:
        return Loop((supports[0],))
    joints = [_joint(curves[k - 1], curves[k], supports[k - 1], supports[k], distance) for k in range(count)]
    pieces = [_between(curves[k], supports[k], joints[k], joints[(k + 1) % count], distance) for k in range(count)]
    return Loop(tuple(pieces))


def _normal(curve: Curve, t: float) -> complex:
    """The unit normal out of the material, which is on the left."""
    d = curve.derivative(t)
    return -1j * d / abs(d)


def _shifted(curve: Curve, distance: float) -> Line | Arc:
    """Return the curve moved along its normals, its ends not yet those of its neighbours."""
    if isinstance(curve, Arc):
        # outwards is away from the centre where the material is inside the arc
        radius = curve.radius + (distance if curve.sweep > 0 else -distance)
        if radius <= 0.0:
            raise _vanishes(curve, distance)
        spoke = curve.spoke * (radius / curve.radius)
        return Arc(curve.centre + spoke, spoke, curve.sweep, curve.source)
    step = distance * _normal(curve, 0.5)
    return Line(curve.start + step, curve.end + step, curve.source)


def _joint(before: Curve, after: Curve, first: Line | Arc, second: Line | Arc, distance: float) -> complex:
    """Return where the moved neighbours meet, nearest to the mitre of their old joint."""
    n, m = _normal(before, 1.0), _normal(after, 0.0)
    turn = abs(np.angle(m / n))
    if turn < SMOOTH:
        return 0.5 * (first.end + second.start)
    bisector = 1.0 + (n * m.conjugate()).real
    if bisector < 2.0 / MITRE_LIMIT**2:
        z = before.end
        raise _impossible(
            f"the corner at {place(z)} is too sharp to be moved by {_by(distance)}",
            at(z),
        )
    mitre = before.end + distance * (n + m) / bisector
    found = _meetings(first, second)
    if not found:
        raise _vanishes(before if before.length < after.length else after, distance)
    return min(found, key=lambda z: abs(z - mitre))


def _meetings(a: Line | Arc, b: Line | Arc) -> list[complex]:
    """Return where the endless lines and full circles of two pieces meet."""
    if isinstance(a, Line) and isinstance(b, Line):
        u, v = a.end - a.start, b.end - b.start
        cross = (u.conjugate() * v).imag
        return [a.start + u * (((b.start - a.start).conjugate() * v).imag / cross)] if cross else []
    if isinstance(a, Arc) and isinstance(b, Arc):
        apart = b.centre - a.centre
        d = abs(apart)
        if d == 0.0:
            return []
        along = 0.5 * (d + (a.radius - b.radius) * (a.radius + b.radius) / d)
        return _chord(a.centre, apart / d, along, a.radius)
    line, arc = (a, b) if isinstance(a, Line) else (b, a)
    assert isinstance(arc, Arc)
    unit = (line.end - line.start) / line.length
    foot = ((arc.centre - line.start) * unit.conjugate()).real * unit + line.start
    half = (arc.radius - abs(foot - arc.centre)) * (arc.radius + abs(foot - arc.centre))
    return [foot - unit * half**0.5, foot + unit * half**0.5] if half >= 0.0 else []


def _chord(centre: complex, unit: complex, along: float, radius: float) -> list[complex]:
    half = (radius - along) * (radius + along)
    return [centre + unit * complex(along, s * half**0.5) for s in (-1.0, 1.0)] if half >= 0.0 else []


def _between(old: Curve, support: Line | Arc, start: complex, end: complex, distance: float) -> Line | Arc:
    """Return the part of a moved curve between its new joints; it must still run the way it ran."""
    if isinstance(support, Line):
        if ((end - start) * (support.end - support.start).conjugate()).real <= 0.0:
            raise _vanishes(old, distance)
        return Line(start, end, old.source)
    spoke, tail = start - support.centre, end - support.centre
    sweep = float(np.angle(tail / spoke))
    sweep += 2 * np.pi * round((support.sweep - sweep) / (2 * np.pi))
    if sweep * support.sweep <= 0.0:
        raise _vanishes(old, distance)
    return Arc(start, spoke, sweep, old.source)


def _by_chords(regions: Sequence[Region], distance: float) -> Moved:
    """Move a polygon of fine chords: it changes by what the outline changes by, to second order of the chords."""
    before, after = [], []
    for region in regions:
        chords = Region(_chords(region.outer), tuple(_chords(void) for void in region.voids))
        rings = [_ring(loop) for loop in chords.loops]
        moved = shapely.Polygon(rings[0], rings[1:]).buffer(distance, join_style="mitre", mitre_limit=MITRE_LIMIT)
        if moved.geom_type != "Polygon" or moved.is_empty or len(moved.interiors) != len(region.voids):
            raise _impossible(
                f"moving the surfaces by {_by(distance)} closes a void, or eats a wall",
                None,
            )
        before.append(chords)
        outer, *voids = (_loop(np.asarray(ring.coords)) for ring in (moved.exterior, *moved.interiors))
        after.append(
            Region(
                outer if outer.area > 0 else outer.reversed(),
                tuple(v if v.area < 0 else v.reversed() for v in voids),
            )
        )
    polygons = [shapely.Polygon(_ring(r.outer)) for r in after]
    for k, polygon in enumerate(polygons):
        if any(polygon.intersects(other) for other in polygons[k + 1 :]):
            raise _impossible(f"parts whose surfaces move by {_by(distance)} meet", None)
    return Moved(tuple(after), tuple(before), exact=False)


def _chords(loop: Loop) -> Loop:
    t = np.arange(CHORDS) / CHORDS
    runs = [np.array([c.start]) if isinstance(c, Line) else c.points(t) for c in loop.curves]
    return _loop(np.concatenate(runs))


def _ring(loop: Loop) -> list[tuple[float, float]]:
    return [(c.start.real, c.start.imag) for c in loop.curves]


def _loop(points: NDArray[Any]) -> Loop:
    z = points if np.iscomplexobj(points) else points[:, 0] + 1j * points[:, 1]
    z = z[np.append(True, z[1:] != z[:-1])]
    z = z[:-1] if z[0] == z[-1] else z
    return Loop(tuple(Line(complex(a), complex(b)) for a, b in zip(z, np.roll(z, -1), strict=True)))


def _vanishes(curve: Curve, distance: float) -> OutlineError:
    z = curve.point(0.5)
    name = str(curve.source) if curve.source.handle else "a piece of the outline"
    return _impossible(f"moving the surfaces by {_by(distance)} eats {name} at {place(z)}", at(z))


def _by(distance: float) -> str:
    return f"{abs(distance):.4g} {'outward' if distance > 0 else 'inward'}"


def _impossible(message: str, where: tuple[float, float] | None) -> OutlineError:
    return OutlineError(message, [Finding("offset-impossible", "warning", message, where)])
