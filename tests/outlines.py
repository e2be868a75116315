"""Outlines for the tests: textbook shapes and the cross-sections of the standard tables, built from their dimensions.

An outline is a list of contours.  The first contour is the outer one and runs counter-clockwise, every other one is a
void and runs clockwise.  A contour is a closed list of edges `(x1, y1, x2, y2, bulge)`: each edge starts where the one
before it ended, and bulge = tan(included angle / 4), positive where the edge turns counter-clockwise, 0 on a straight
edge.  Lengths are in whatever unit the caller thinks in; angles are in radians unless a name says degrees.
"""

import math
from collections.abc import Iterable, Sequence
from itertools import pairwise

Point = tuple[float, float]
Corner = tuple[float, float, float]  # x, y and the radius that rounds the corner
Edge = tuple[float, float, float, float, float]
Contour = list[Edge]
Outline = list[Contour]


# ---------------------------------------------------------------------------------------------- building and moving


def polygon(points: Sequence[Point]) -> Contour:
    """A closed contour of straight edges."""
    return [(*start, *end, 0.0) for start, end in zip(points, [*points[1:], points[0]], strict=True)]


def fillet_polygon(corners: Sequence[Corner]) -> Contour:
    """A polygon whose corners are rounded, each with its own radius, by arcs tangent to both sides."""
    count = len(corners)
    arrivals: list[Point] = []
    departures: list[Point] = []
    bulges: list[float] = []
    for index, (x, y, radius) in enumerate(corners):
        before, after = corners[index - 1], corners[(index + 1) % count]
        in_x, in_y = _unit(x - before[0], y - before[1])
        out_x, out_y = _unit(after[0] - x, after[1] - y)
        turn = math.atan2(in_x * out_y - in_y * out_x, in_x * out_x + in_y * out_y)
        setback = radius * math.tan(abs(turn) / 2)
        arrivals.append((x - setback * in_x, y - setback * in_y))
        departures.append((x + setback * out_x, y + setback * out_y))
        bulges.append(math.tan(turn / 4) if radius > 0 else 0.0)
    edges: Contour = []
    for index in range(count):
        if bulges[index]:
            edges.append((*arrivals[index], *departures[index], bulges[index]))
        start, end = departures[index], arrivals[(index + 1) % count]
        # two fillets that use up the whole side between them leave no straight edge there
        if math.dist(start, end) > 1e-12 * max(1.0, abs(start[0]) + abs(start[1])):
            edges.append((*start, *end, 0.0))
    return [(*edges[index - 1][2:4], *edge[2:]) for index, edge in enumerate(edges)]


def circle(x: float, y: float, radius: float, *, void: bool = False) -> Contour:
    """A full circle as two half turns."""
    bulge = -1.0 if void else 1.0
    return [(x + radius, y, x - radius, y, bulge), (x - radius, y, x + radius, y, bulge)]


def backwards(contour: Contour) -> Contour:
    """The same contour run the other way round."""
    return [(x2, y2, x1, y1, -bulge) for x1, y1, x2, y2, bulge in reversed(contour)]


def translated(outline: Iterable[Contour], dx: float, dy: float) -> Outline:
    """The outline moved by (dx, dy)."""
    return [[(x1 + dx, y1 + dy, x2 + dx, y2 + dy, bulge) for x1, y1, x2, y2, bulge in contour] for contour in outline]


def rotated(outline: Iterable[Contour], degrees: float) -> Outline:
    """The outline turned counter-clockwise about the origin."""
    cos, sin = math.cos(math.radians(degrees)), math.sin(math.radians(degrees))

    def turn(x: float, y: float) -> Point:
        return x * cos - y * sin, x * sin + y * cos

    return [[(*turn(x1, y1), *turn(x2, y2), bulge) for x1, y1, x2, y2, bulge in contour] for contour in outline]


def _unit(x: float, y: float) -> Point:
    length = math.hypot(x, y)
    return x / length, y / length


def _arc(radius: float, start: float, end: float) -> list[Edge]:
    """An arc about the origin from one polar angle to another, in pieces of at most half a turn."""
    pieces = max(1, math.ceil(abs(end - start) / math.pi - 1e-12))
    angles = [start + (end - start) * k / pieces for k in range(pieces + 1)]
    bulge = math.tan((end - start) / pieces / 4)
    return [(*_polar(radius, a), *_polar(radius, b), bulge) for a, b in pairwise(angles)]


def _polar(radius: float, angle: float) -> Point:
    return radius * math.cos(angle), radius * math.sin(angle)


# ---------------------------------------------------------------------------------------------- hot rolled sections


def i_section(h: float, b: float, tw: float, tf: float, r: float = 0.0) -> Outline:
    """I or H with parallel flanges: four root fillets r, sharp toes, centred on the origin."""
    return mono_i(h, b, tf, b, tf, tw, r, bottom=-h / 2)


def mono_i(
    h: float,
    b_top: float,
    t_top: float,
    b_bottom: float,
    t_bottom: float,
    tw: float,
    r: float = 0.0,
    bottom: float = 0.0,
) -> Outline:
    """I with two different parallel flanges, symmetric about x = 0, its lowest face on y = bottom."""
    web, low, high = tw / 2, b_bottom / 2, b_top / 2
    top = bottom + h
    inner_low, inner_high = bottom + t_bottom, top - t_top
    right: list[Corner] = [
        (low, bottom, 0.0),
        (low, inner_low, 0.0),
        (web, inner_low, r),
        (web, inner_high, r),
        (high, inner_high, 0.0),
        (high, top, 0.0),
    ]
    return [fillet_polygon([*right, *_mirrored_in_y(right)])]


def i_tapered(h: float, b: float, tw: float, tf: float, root: float, toe: float, slope: float, gauge: float) -> Outline:
    """I whose inner flange faces slope; tf is measured at the distance `gauge` from the flange's edge."""
    web, side, top = tw / 2, b / 2, h / 2
    at_edge, at_web = tf - slope * gauge, tf + slope * (side - web - gauge)
    right: list[Corner] = [
        (side, -top, 0.0),
        (side, at_edge - top, toe),
        (web, at_web - top, root),
        (web, top - at_web, root),
        (side, top - at_edge, toe),
        (side, top, 0.0),
    ]
    return [fillet_polygon([*right, *_mirrored_in_y(right)])]


def channel(
    h: float,
    b: float,
    tw: float,
    tf: float,
    root: float = 0.0,
    toe: float = 0.0,
    slope: float = 0.0,
    gauge: float = 0.0,
) -> Outline:
    """Channel open to the right, web back on x = 0, symmetric about y = 0; slope and gauge as for the tapered I."""
    top = h / 2
    at_edge, at_web = tf - slope * gauge, tf + slope * (b - tw - gauge)
    return [
        fillet_polygon(
            [
                (0.0, -top, 0.0),
                (b, -top, 0.0),
                (b, at_edge - top, toe),
                (tw, at_web - top, root),
                (tw, top - at_web, root),
                (b, top - at_edge, toe),
                (b, top, 0.0),
                (0.0, top, 0.0),
            ]
        )
    ]


def angle(a: float, b: float, t: float, root: float = 0.0, toe: float = 0.0) -> Outline:
    """Angle, heel at the origin, leg a up +y, leg b along +x; toe rounds the inner edge of each leg's end."""
    return [
        fillet_polygon([(0.0, 0.0, 0.0), (b, 0.0, 0.0), (b, t, toe), (t, t, root), (t, a, toe), (0.0, a, 0.0)]),
    ]


def tee(h: float, b: float, tw: float, tf: float, r: float = 0.0) -> Outline:
    """Tee with its flange on top and the foot of its stem on y = 0, symmetric about x = 0."""
    web, side, under = tw / 2, b / 2, h - tf
    right: list[Corner] = [(web, 0.0, 0.0), (web, under, r), (side, under, 0.0), (side, h, 0.0)]
    return [fillet_polygon([*right, *_mirrored_in_y(right)])]


def zed(h: float, b: float, t: float, r: float = 0.0) -> Outline:
    """Zed of one thickness about the origin, lower flange to +x, upper to -x; b from flange tip to far web face."""
    half: list[Corner] = [
        (-t / 2, -h / 2, 0.0),
        (b - t / 2, -h / 2, 0.0),
        (b - t / 2, t - h / 2, 0.0),
        (t / 2, t - h / 2, r),
    ]
    return [fillet_polygon([*half, *[(-x, -y, radius) for x, y, radius in half]])]


def _mirrored_in_y(right: Sequence[Corner]) -> list[Corner]:
    return [(-x, y, radius) for x, y, radius in reversed(right)]


# --------------------------------------------------------------------------------------------------- hollow sections


def rectangular_hollow(h: float, b: float, t: float, outside: float, inside: float) -> Outline:
    """Rectangular hollow section about the origin with its two corner radii; h is the size along y."""
    return [_round_cornered(b, h, outside), backwards(_round_cornered(b - 2 * t, h - 2 * t, inside))]


def rectangular_hollow_hot(h: float, b: float, t: float) -> Outline:
    """Hot finished: EN 10210-2 calculates with 1.5 t outside and 1.0 t inside (the corner is thicker than the wall)."""
    return rectangular_hollow(h, b, t, 1.5 * t, t)


def rectangular_hollow_cold(h: float, b: float, t: float) -> Outline:
    """Cold formed: EN 10219-2 calculates with 2 t outside up to 6 mm, 2.5 t up to 10 mm, 3 t above; inside, t less."""
    times = 2.0 if t <= 6 else 2.5 if t <= 10 else 3.0
    return rectangular_hollow(h, b, t, times * t, (times - 1) * t)


def circular_hollow(d: float, t: float) -> Outline:
    """Circular hollow section about the origin, outside diameter d."""
    return [circle(0.0, 0.0, d / 2), circle(0.0, 0.0, d / 2 - t, void=True)]


def box(h: float, b: float, t: float) -> Outline:
    """Box with sharp corners about the origin; h is the size along y."""
    return rectangular_hollow(h, b, t, 0.0, 0.0)


# ----------------------------------------------------------------------------------------------- cold formed sections


def strip(line: Sequence[Point], t: float, bend: float) -> Outline:
    """A strip of thickness t folded along an open centre line, every bend with the inside radius `bend`."""
    headings = [_unit(x2 - x1, y2 - y1) for (x1, y1), (x2, y2) in pairwise(line)]
    left: list[Corner] = []
    right: list[Corner] = []
    for index, (x, y) in enumerate(line):
        before = headings[max(index - 1, 0)]
        after = headings[min(index, len(headings) - 1)]
        turn = math.atan2(before[0] * after[1] - before[1] * after[0], before[0] * after[0] + before[1] * after[1])
        # the two faces meet on the bisector, further out the sharper the turn
        across_x, across_y = _unit(-before[1] - after[1], before[0] + after[0])
        reach = t / 2 / math.cos(turn / 2)
        if index in (0, len(line) - 1):
            on_left = on_right = 0.0
        elif turn > 0:
            on_left, on_right = bend, bend + t
        else:
            on_left, on_right = bend + t, bend
        left.append((x + reach * across_x, y + reach * across_y, on_left))
        right.append((x - reach * across_x, y - reach * across_y, on_right))
    return [fillet_polygon([*right, *reversed(left)])]


def lipped_channel(h: float, b: float, c: float, t: float, bend: float) -> Outline:
    """Lipped channel open to the right, outside sizes, web back on x = 0, symmetric about y = 0."""
    top, back, front, lip = (h - t) / 2, t / 2, b - t / 2, h / 2 - c
    return strip([(front, -lip), (front, -top), (back, -top), (back, top), (front, top), (front, lip)], t, bend)


def lipped_zed(h: float, b_bottom: float, b_top: float, c: float, t: float, bend: float) -> Outline:
    """Lipped zed, outside sizes, lips square to the flanges: lower flange to +x, upper to -x, web's middle on x = 0."""
    top, low_end, high_end, lip = (h - t) / 2, b_bottom - t, t - b_top, h / 2 - c
    return strip([(low_end, -lip), (low_end, -top), (0.0, -top), (0.0, top), (high_end, top), (high_end, lip)], t, bend)


def hat(h: float, b: float, brim: float, t: float, bend: float) -> Outline:
    """Hat on y = 0, symmetric about x = 0: b over the outside of the webs, brims measured from there."""
    web, end = (b - t) / 2, b / 2 + brim
    low, high = t / 2, h - t / 2
    return strip([(-end, low), (-web, low), (-web, high), (web, high), (web, low), (end, low)], t, bend)


# ----------------------------------------------------------------------------------------------------- textbook shapes


def rectangle(b: float, h: float) -> Outline:
    """Rectangle about the origin, b along x."""
    return [_round_cornered(b, h, 0.0)]


def rounded_rectangle(b: float, h: float, r: float) -> Outline:
    """Rectangle about the origin with rounded corners, b along x."""
    return [_round_cornered(b, h, r)]


def rectangle_with_hole(b: float, h: float, r: float, x: float, y: float) -> Outline:
    """Rectangle in the first quadrant, a corner at the origin, with a round hole about (x, y)."""
    return [polygon([(0.0, 0.0), (b, 0.0), (b, h), (0.0, h)]), circle(x, y, r, void=True)]


def triangle(a: Point, b: Point, c: Point) -> Outline:
    """Triangle through three points given counter-clockwise."""
    return [polygon([a, b, c])]


def trapezium(b: float, a: float, h: float) -> Outline:
    """Trapezium on y = 0, symmetric about x = 0: b at the bottom, a on top."""
    return [polygon([(-b / 2, 0.0), (b / 2, 0.0), (a / 2, h), (-a / 2, h)])]


def diamond(b: float, h: float) -> Outline:
    """Rhombus about the origin with its diagonals on the axes, b along x."""
    return [polygon([(b / 2, 0.0), (0.0, h / 2), (-b / 2, 0.0), (0.0, -h / 2)])]


def regular_polygon(sides: int, circumradius: float) -> Outline:
    """Regular polygon about the origin with a corner on +x."""
    return [polygon([_polar(circumradius, math.tau * k / sides) for k in range(sides)])]


def disc(radius: float) -> Outline:
    """Full circle about the origin."""
    return [circle(0.0, 0.0, radius)]


def semicircle(radius: float) -> Outline:
    """Half disc above y = 0, its circle about the origin."""
    return [[(-radius, 0.0, radius, 0.0, 0.0), (radius, 0.0, -radius, 0.0, 1.0)]]


def quarter_circle(radius: float) -> Outline:
    """Quarter disc in the first quadrant, its circle about the origin."""
    return [
        [
            (0.0, 0.0, radius, 0.0, 0.0),
            (radius, 0.0, 0.0, radius, math.tan(math.pi / 8)),
            (0.0, radius, 0.0, 0.0, 0.0),
        ]
    ]


def sector(radius: float, spread: float) -> Outline:
    """Sector of a disc, apex at the origin, symmetric about +x, `spread` from one straight side to the other."""
    arc = _arc(radius, -spread / 2, spread / 2)
    return [[(0.0, 0.0, *arc[0][:2], 0.0), *arc, (*arc[-1][2:4], 0.0, 0.0, 0.0)]]


def annular_sector(outside: float, inside: float, spread: float, middle: float = 0.0) -> Outline:
    """Sector of a ring about the origin, its middle at the polar angle `middle`."""
    out = _arc(outside, middle - spread / 2, middle + spread / 2)
    back = _arc(inside, middle + spread / 2, middle - spread / 2)
    return [[*out, (*out[-1][2:4], *back[0][:2], 0.0), *back, (*back[-1][2:4], *out[0][:2], 0.0)]]


def split_tube(mid_radius: float, t: float, gap: float) -> Outline:
    """Round tube about the origin with a radial slit on +x that takes the angle `gap` out of it."""
    return annular_sector(mid_radius + t / 2, mid_radius - t / 2, math.tau - gap, math.pi)


def segment(radius: float, half_angle: float) -> Outline:
    """Segment of a disc right of an upright chord, symmetric about +x, its circle about the origin; one single arc."""
    x, y = _polar(radius, half_angle)
    return [[(x, -y, x, y, math.tan(half_angle / 2)), (x, y, x, -y, 0.0)]]


def spandrel(r: float) -> Outline:
    """What a fillet of radius r adds to a square corner at the origin: the square less a quarter disc about (r, r)."""
    return [[(0.0, 0.0, r, 0.0, 0.0), (r, 0.0, 0.0, r, -math.tan(math.pi / 8)), (0.0, r, 0.0, 0.0, 0.0)]]


def _round_cornered(b: float, h: float, r: float) -> Contour:
    return fillet_polygon([(-b / 2, -h / 2, r), (b / 2, -h / 2, r), (b / 2, h / 2, r), (-b / 2, h / 2, r)])
