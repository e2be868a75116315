"""Closed forms: shapes whose section properties are known without integrating, with their expected values.

Every shape is put together from parts with a handbook closed form (area, centroid and second moments about the part's
own centroid) by the parallel-axis theorem, in 40 digits, so nothing here shares a line of thought with an integration
along the outline.  The handbook forms are those of Roark & Young (appendix A) and of Timoshenko & Gere, from memory;
`PRINTED` holds the same values as figures of 15 digits, which were agreed with a boundary integration in 34 digits.

x points to the right, y up, and the product of inertia is +∫xy dA.
"""

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace

import mpmath

import outlines as shape
from outlines import Outline

hp = mpmath.mp.clone()
hp.dps = 40
mpf, pi = hp.mpf, +hp.pi

Number = mpmath.mpf | float  # mpmath brings no types; a number here is a 40-digit one or an exact float
Disc = tuple[Number, Number, Number]  # x, y and radius; radius 0 is a plain corner
Reach = tuple[Number, Number, Number, Number]

HANDBOOK = "handbook closed form (Roark & Young, appendix A; Timoshenko & Gere), from memory"
PARTS = "parallel-axis theorem on parts with a handbook closed form"


@dataclass(frozen=True)
class Reference:
    """A shape, its outline and what is known of it; the keys of `expected` are the tool's property names."""

    name: str
    contours: Outline
    expected: Mapping[str, float]
    source: str = HANDBOOK
    unit: str = "mm"
    density: float | None = None  # kg/m³


@dataclass(frozen=True)
class Part:
    """Area, centroid, and second moments and product about the part's own centroid; a void has them all negative."""

    area: Number
    x: Number
    y: Number
    ix: Number
    iy: Number
    ixy: Number

    def at(self, dx: Number, dy: Number) -> "Part":
        return replace(self, x=self.x + dx, y=self.y + dy)

    def turned(self, degrees: Number) -> "Part":
        """Turned counter-clockwise about the origin."""
        cos, sin = hp.cos(hp.radians(degrees)), hp.sin(hp.radians(degrees))
        return Part(
            self.area,
            self.x * cos - self.y * sin,
            self.x * sin + self.y * cos,
            self.ix * cos**2 + self.iy * sin**2 + 2 * self.ixy * sin * cos,
            self.ix * sin**2 + self.iy * cos**2 - 2 * self.ixy * sin * cos,
            (self.ix - self.iy) * sin * cos + self.ixy * (cos**2 - sin**2),
        )

    def void(self) -> "Part":
        return replace(self, area=-self.area, ix=-self.ix, iy=-self.iy, ixy=-self.ixy)


def joined(parts: Iterable[Part]) -> Part:
    """Several parts as one, by the parallel-axis theorem."""
    parts = list(parts)
    area = sum(part.area for part in parts)
    x = sum(part.area * part.x for part in parts) / area
    y = sum(part.area * part.y for part in parts) / area
    return Part(
        area,
        x,
        y,
        sum(part.ix + part.area * (part.y - y) ** 2 for part in parts),
        sum(part.iy + part.area * (part.x - x) ** 2 for part in parts),
        sum(part.ixy + part.area * (part.x - x) * (part.y - y) for part in parts),
    )


# --------------------------------------------------------------------------------------------------- handbook forms


def block(left: Number, bottom: Number, right: Number, top: Number) -> Part:
    """Rectangle with sides along the axes."""
    b, h = mpf(right) - left, mpf(top) - bottom
    return Part(b * h, (mpf(left) + right) / 2, (mpf(bottom) + top) / 2, b * h**3 / 12, h * b**3 / 12, mpf(0))


def triangle(b: Number, a: Number, h: Number) -> Part:
    """Triangle (0, 0), (b, 0), (a, h)."""
    b, a, h = mpf(b), mpf(a), mpf(h)
    iy = b * h * (b**2 - a * b + a**2) / 36
    return Part(b * h / 2, (a + b) / 3, h / 3, b * h**3 / 36, iy, b * h**2 * (2 * a - b) / 72)


def trapezium(b: Number, a: Number, h: Number) -> Part:
    """Trapezium on y = 0, symmetric about x = 0, b at the bottom and a on top."""
    b, a, h = mpf(b), mpf(a), mpf(h)
    ix = h**3 * (a**2 + 4 * a * b + b**2) / (36 * (a + b))
    iy = h * (a + b) * (a**2 + b**2) / 48
    return Part((a + b) * h / 2, mpf(0), h * (b + 2 * a) / (3 * (a + b)), ix, iy, mpf(0))


def diamond(b: Number, h: Number) -> Part:
    b, h = mpf(b), mpf(h)
    return Part(b * h / 2, mpf(0), mpf(0), b * h**3 / 48, h * b**3 / 48, mpf(0))


def regular_polygon(sides: int, circumradius: Number) -> Part:
    r = mpf(circumradius)
    area = sides * r**2 * hp.sin(2 * pi / sides) / 2
    side = 2 * r * hp.sin(pi / sides)
    i = area * (6 * r**2 - side**2) / 24
    return Part(area, mpf(0), mpf(0), i, i, mpf(0))


def disc(radius: Number) -> Part:
    r = mpf(radius)
    return Part(pi * r**2, mpf(0), mpf(0), pi * r**4 / 4, pi * r**4 / 4, mpf(0))


def ring_sector(outside: Number, inside: Number, spread: Number) -> Part:
    """Sector of a ring about the origin, symmetric about +x; inside = 0 is the sector of a disc."""
    ro, ri, spread = mpf(outside), mpf(inside), mpf(spread)
    area = spread * (ro**2 - ri**2) / 2
    x = 4 * hp.sin(spread / 2) / (3 * spread) * (ro**3 - ri**3) / (ro**2 - ri**2)
    ix = (ro**4 - ri**4) * (spread - hp.sin(spread)) / 8
    iy = (ro**4 - ri**4) * (spread + hp.sin(spread)) / 8
    return Part(area, x, mpf(0), ix, iy - area * x**2, mpf(0))


def semicircle(radius: Number) -> Part:
    """Half disc above y = 0."""
    r = mpf(radius)
    return Part(pi * r**2 / 2, mpf(0), 4 * r / (3 * pi), (pi / 8 - 8 / (9 * pi)) * r**4, pi * r**4 / 8, mpf(0))


def quarter_circle(radius: Number) -> Part:
    """Quarter disc in the first quadrant."""
    r = mpf(radius)
    i = (pi / 16 - 4 / (9 * pi)) * r**4
    c = 4 * r / (3 * pi)
    return Part(pi * r**2 / 4, c, c, i, i, (mpf(1) / 8 - 4 / (9 * pi)) * r**4)


def spandrel(radius: Number) -> Part:
    """Square corner at the origin less a quarter disc about (r, r): the metal of a fillet."""
    r = mpf(radius)
    area, c = (1 - pi / 4) * r**2, r * (10 - 3 * pi) / (3 * (4 - pi))
    i = (1 - 5 * pi / 16) * r**4 - area * c**2
    return Part(area, c, c, i, i, (mpf(19) / 24 - pi / 4) * r**4 - area * c**2)


def segment(radius: Number, half_angle: Number) -> Part:
    """Segment of a disc about the origin, symmetric about +x."""
    r, al = mpf(radius), mpf(half_angle)
    s, c = hp.sin(al), hp.cos(al)
    area, x = r**2 * (al - s * c), 2 * r * s**3 / (3 * (al - s * c))
    ix = r**4 / 4 * (al - s * c - 2 * s**3 * c / 3)
    iy = r**4 / 4 * (al - s * c + 2 * s**3 * c)
    return Part(area, x, mpf(0), ix, iy - area * x**2, mpf(0))


def bend(outside: Number, inside: Number, x: Number, y: Number, quadrant: int) -> Part:
    """Quarter ring about (x, y) in one of its quadrants."""
    return ring_sector(outside, inside, pi / 2).turned(90 * quadrant - 45).at(x, y)


def fillet(radius: Number, x: Number, y: Number, quadrant: int) -> Part:
    """Spandrel whose square corner is at (x, y) and which lies in one of its quadrants."""
    return spandrel(radius).turned(90 * (quadrant - 1)).at(x, y)


# ------------------------------------------------------------------------------------------- from a part to its values


def values(
    part: Part,
    outer: Number,
    voids: Number = 0,
    *,
    corners: Iterable[Disc] = (),
    box: Reach | None = None,
    reach: Reach | None = None,
) -> dict[str, float]:
    """Every property that follows from a part's moments, its perimeters and how far it reaches.

    The reach comes from `corners`, discs whose common hull is the section's, or else from `box` (left, bottom, right,
    top).  `reach` gives the extreme distances along the principal axes where the corners do not: from axis 1 towards
    +2 and away from it, from axis 2 towards +1 and away from it.
    """
    corners = list(corners)

    def furthest(x: Number, y: Number) -> Number:
        """The furthest that the hull reaches in the direction of the unit vector (x, y)."""
        return max(cx * x + cy * y + radius for cx, cy, radius in corners)

    left, bottom, right, top = box or (-furthest(-1, 0), -furthest(0, -1), furthest(1, 0), furthest(0, 1))
    size = max(right - left, top - bottom)
    cx, cy = _cleared(part.x, size), _cleared(part.y, size)
    area, ix, iy = part.area, part.ix, part.iy
    ixy = _cleared(part.ixy, ix + iy)
    mean, radius = (ix + iy) / 2, _cleared(hp.hypot((ix - iy) / 2, ixy), ix + iy)
    first, second = mean + radius, mean - radius
    found = {
        "area": area,
        "outer_perimeter": outer,
        "total_perimeter": outer + voids,
        "width": right - left,
        "height": top - bottom,
        "centroid_x": cx,
        "centroid_y": cy,
        "second_moment_x": ix,
        "second_moment_y": iy,
        "product_of_inertia": ixy,
        "polar_moment": ix + iy,
        "second_moment_x_origin": ix + area * cy**2,
        "second_moment_y_origin": iy + area * cx**2,
        "product_of_inertia_origin": _cleared(ixy + area * cx * cy, ix + iy),
        "principal_moment_1": first,
        "principal_moment_2": second,
        "radius_of_gyration_x": hp.sqrt(ix / area),
        "radius_of_gyration_y": hp.sqrt(iy / area),
        "radius_of_gyration_1": hp.sqrt(first / area),
        "radius_of_gyration_2": hp.sqrt(second / area),
        "elastic_modulus_x_top": ix / (top - cy),
        "elastic_modulus_x_bottom": ix / (cy - bottom),
        "elastic_modulus_y_left": iy / (cx - left),
        "elastic_modulus_y_right": iy / (right - cx),
    }
    if radius:  # otherwise every axis is a principal one
        turn = hp.atan2(-2 * ixy, ix - iy) / 2
        found["principal_angle"] = hp.degrees(turn)
        if reach is None and ixy == 0:
            beyond = (top - cy, cy - bottom, right - cx, cx - left)
            reach = beyond if ix > iy else (cx - left, right - cx, top - cy, cy - bottom)
        elif reach is None and corners:
            cos, sin = hp.cos(turn), hp.sin(turn)
            along, across = cx * cos + cy * sin, cy * cos - cx * sin
            reach = (
                furthest(-sin, cos) - across,
                furthest(sin, -cos) + across,
                furthest(cos, sin) - along,
                furthest(-cos, -sin) + along,
            )
        if reach is not None:
            found["elastic_modulus_1_positive"] = first / reach[0]
            found["elastic_modulus_1_negative"] = first / reach[1]
            found["elastic_modulus_2_positive"] = second / reach[2]
            found["elastic_modulus_2_negative"] = second / reach[3]
    return {key: float(value) for key, value in found.items()}


def _cleared(value: Number, scale: Number) -> Number:
    """Zero in place of what rounding in the 40th digit leaves of it."""
    return value if abs(value) > abs(scale) * mpf(10) ** -30 else mpf(0)


def _square(left: Number, bottom: Number, right: Number, top: Number, radius: Number = 0) -> list[Disc]:
    """The corners of a rectangle, or the discs in them."""
    return [
        (mpf(x), mpf(y), mpf(radius)) for x in (left + radius, right - radius) for y in (bottom + radius, top - radius)
    ]


def _with_density(reference: Reference, density: float) -> Reference:
    """The same section with the mass of a metre of it; it is drawn in millimetres."""
    mass = reference.expected["area"] * density / 1e6
    return replace(reference, density=density, expected={**reference.expected, "mass_per_length": mass})


# ------------------------------------------------------------------------------------------------------- the references


def _solid_shapes() -> Iterable[Reference]:
    yield Reference(
        "rectangle",
        shape.rectangle(30, 50),
        values(block(-15, -25, 15, 25), 160, corners=_square(-15, -25, 15, 25)),
    )
    sharp = [(0, 0, 0), (30, 0, 0), (0, 40, 0)]
    yield Reference(
        "right triangle, legs +x and +y",
        shape.triangle((0, 0), (30, 0), (0, 40)),
        values(triangle(30, 0, 40), 120, corners=sharp),
    )
    yield Reference(
        "right triangle, legs -x and +y",
        shape.triangle((0, 0), (0, 40), (-30, 0)),
        values(triangle(30, 30, 40).at(-30, 0), 120, corners=[(-x, y, r) for x, y, r in sharp]),
    )
    yield Reference(
        "scalene triangle",
        shape.triangle((0, 0), (50, 0), (18, 36)),
        values(
            triangle(50, 18, 36), 50 + hp.hypot(18, 36) + hp.hypot(32, 36), corners=[(0, 0, 0), (50, 0, 0), (18, 36, 0)]
        ),
    )
    yield Reference(
        "trapezium",
        shape.trapezium(60, 40, 30),
        values(trapezium(60, 40, 30), 100 + 2 * hp.hypot(10, 30), box=(-30, 0, 30, 30)),
    )
    yield Reference(
        "diamond", shape.diamond(60, 90), values(diamond(60, 90), 4 * hp.hypot(30, 45), box=(-30, -45, 30, 45))
    )
    for sides in (3, 5, 6, 8):
        points = [(20 * hp.cos(2 * pi * k / sides), 20 * hp.sin(2 * pi * k / sides), 0) for k in range(sides)]
        yield Reference(
            f"regular polygon of {sides}",
            shape.regular_polygon(sides, 20),
            values(regular_polygon(sides, 20), 40 * sides * hp.sin(pi / sides), corners=points),
        )
    yield Reference(
        "rounded rectangle",
        shape.rounded_rectangle(80, 50, 8),
        values(
            joined(
                [
                    block(-40, -25, 40, 25),
                    fillet(8, -40, -25, 1).void(),
                    fillet(8, 40, -25, 2).void(),
                    fillet(8, 40, 25, 3).void(),
                    fillet(8, -40, 25, 4).void(),
                ]
            ),
            260 - (8 - 2 * pi) * 8,
            corners=_square(-40, -25, 40, 25, 8),
        ),
        PARTS,
    )


def _round_shapes() -> Iterable[Reference]:
    yield Reference("circle", shape.disc(30), values(disc(30), 60 * pi, corners=[(0, 0, 30)]))
    yield Reference(
        "annulus",
        shape.circular_hollow(80, 12),
        values(joined([disc(40), disc(28).void()]), 80 * pi, 56 * pi, corners=[(0, 0, 40)]),
    )
    yield Reference("semicircle", shape.semicircle(25), values(semicircle(25), (pi + 2) * 25, box=(-25, 0, 25, 25)))
    quarter = quarter_circle(40)
    diagonal = quarter.x * hp.sqrt(2)
    half_chord = 40 / hp.sqrt(2)
    yield Reference(
        "quarter circle",
        shape.quarter_circle(40),
        values(quarter, 80 + 20 * pi, box=(0, 0, 40, 40), reach=(half_chord, half_chord, 40 - diagonal, diagonal)),
    )
    corner = spandrel(12)
    diagonal = corner.x * hp.sqrt(2)
    half_chord = 12 / hp.sqrt(2)
    yield Reference(
        "fillet spandrel",
        shape.spandrel(12),
        values(
            corner, 24 + 6 * pi, box=(0, 0, 12, 12), reach=(half_chord, half_chord, half_chord - diagonal, diagonal)
        ),
        "square less a quarter disc",
    )
    for name, half_angle in (("segment", 0.9), ("segment larger than the half disc", 2.4)):
        chord = 100 * hp.sin(half_angle)
        side = chord / 2 if half_angle < 1.5 else 50
        yield Reference(
            name,
            shape.segment(50, half_angle),
            values(
                segment(50, half_angle), 100 * mpf(half_angle) + chord, box=(50 * hp.cos(half_angle), -side, 50, side)
            ),
        )
    yield Reference(
        "three quarters of a disc",
        shape.sector(30, 1.5 * math.pi),
        values(ring_sector(30, 0, 3 * pi / 2), 60 + 45 * pi, box=(-30 / hp.sqrt(2), -30, 30, 30)),
    )
    side = 60 * hp.sin(mpf(1.3) / 2)
    yield Reference(
        "annular sector",
        shape.annular_sector(60, 45, 1.3),
        values(ring_sector(60, 45, 1.3), 105 * mpf(1.3) + 30, box=(45 * hp.cos(mpf(1.3) / 2), -side, 60, side)),
    )
    gap = mpf(0.02)
    yield Reference(
        "split tube",
        shape.split_tube(50, 4, 0.02),
        values(
            joined([disc(52), disc(48).void(), ring_sector(52, 48, gap).void()]),
            100 * (2 * pi - gap) + 8,
            box=(-52, -52, 52 * hp.cos(gap / 2), 52),
        ),
        PARTS,
    )


def _profiles() -> Iterable[Reference]:
    legs = [block(0, 0, 8, 100), block(8, 0, 60, 8)]
    ends = [(0, 0, 0), (60, 0, 0), (60, 8, 0), (8, 100, 0), (0, 100, 0)]
    yield Reference("unequal angle", shape.angle(100, 60, 8), values(joined(legs), 320, corners=ends), PARTS)
    yield Reference(
        "unequal angle with fillets",
        shape.angle(100, 60, 8, 10, 4),
        values(
            joined([*legs, fillet(10, 8, 8, 1), fillet(4, 60, 8, 3).void(), fillet(4, 8, 100, 3).void()]),
            320 - (4 - pi) * 9,
            corners=[(0, 0, 0), (60, 0, 0), (56, 4, 4), (4, 96, 4), (0, 100, 0)],
        ),
        PARTS,
    )
    yield Reference(
        "zed",
        shape.zed(100, 50, 6),
        values(
            joined([block(-3, -50, 3, 50), block(3, -50, 47, -44), block(-47, 44, -3, 50)]),
            2 * (100 + 2 * 44 + 6),
            corners=[(-3, -50, 0), (47, -50, 0), (47, -44, 0), (3, 50, 0), (-47, 50, 0), (-47, 44, 0)],
        ),
        PARTS,
    )
    yield Reference(
        "tee",
        shape.tee(80, 60, 7, 9),
        values(joined([block(-3.5, 0, 3.5, 71), block(-30, 71, 30, 80)]), 280, box=(-30, 0, 30, 80)),
        PARTS,
    )
    yield Reference(
        "channel",
        shape.channel(120, 60, 6, 9),
        values(
            joined([block(0, -60, 60, 60), block(6, -51, 60, 51).void()]), 2 * (120 + 2 * 54 + 6), box=(0, -60, 60, 60)
        ),
        PARTS,
    )
    yield Reference(
        "I section",
        shape.i_section(200, 100, 6, 10),
        values(
            joined([block(-50, -100, 50, -90), block(-3, -90, 3, 90), block(-50, 90, 50, 100)]),
            2 * 200 + 4 * 100 - 2 * 6,
            box=(-50, -100, 50, 100),
        ),
        PARTS,
    )
    roots = [fillet(12, 2.8, -91.5, 1), fillet(12, -2.8, -91.5, 2), fillet(12, -2.8, 91.5, 3), fillet(12, 2.8, 91.5, 4)]
    rolled = Reference(
        "I section with fillets",
        shape.i_section(200, 100, 5.6, 8.5, 12),
        values(
            joined(
                [block(-50, -100, 50, -91.5), block(-2.8, -91.5, 2.8, 91.5), block(-50, 91.5, 50, 100), *roots],
            ),
            2 * 200 + 4 * 100 - 2 * mpf(5.6) - (8 - 2 * pi) * 12,
            box=(-50, -100, 50, 100),
        ),
        PARTS,
    )
    yield _with_density(rolled, 7850.0)
    yield Reference(
        "I section with unequal flanges",
        shape.mono_i(160, 60, 10, 100, 12, 8),
        values(
            joined([block(-50, 0, 50, 12), block(-4, 12, 4, 150), block(-30, 150, 30, 160)]),
            2 * 160 + 2 * 60 + 2 * 100 - 2 * 8,
            box=(-50, 0, 50, 160),
        ),
        PARTS,
    )


def _hollow_shapes() -> Iterable[Reference]:
    yield Reference(
        "box",
        shape.box(100, 60, 5),
        values(joined([block(-30, -50, 30, 50), block(-25, -45, 25, 45).void()]), 320, 280, box=(-30, -50, 30, 50)),
        PARTS,
    )
    yield Reference(
        "rectangle with an off-centre hole",
        shape.rectangle_with_hole(100, 60, 12, 70, 20),
        values(
            joined([block(0, 0, 100, 60), disc(12).at(70, 20).void()]), 320, 24 * pi, corners=_square(0, 0, 100, 60)
        ),
        PARTS,
    )

    def rounded(b: float, h: float, r: float) -> list[Part]:
        corners = [(-b / 2, -h / 2, 1), (b / 2, -h / 2, 2), (b / 2, h / 2, 3), (-b / 2, h / 2, 4)]
        return [block(-b / 2, -h / 2, b / 2, h / 2), *[fillet(r, x, y, q).void() for x, y, q in corners]]

    tube = Reference(
        "hot finished rectangular hollow section",
        shape.rectangular_hollow_hot(100, 60, 8),
        values(
            joined([*rounded(60, 100, 12), *[part.void() for part in rounded(44, 84, 8)]]),
            320 - (8 - 2 * pi) * 12,
            256 - (8 - 2 * pi) * 8,
            corners=_square(-30, -50, 30, 50, 12),
        ),
        PARTS,
    )
    yield _with_density(tube, 2700.0)


def _cold_formed() -> Iterable[Reference]:
    """t = 2 and an inside radius of 3 throughout: a bend takes 5 off each leg and is a quarter ring of 5 and 3."""
    arcs = mpf(8) * pi / 2  # both faces of one bend
    yield Reference(
        "lipped channel",
        shape.lipped_channel(200, 70, 20, 2, 3),
        values(
            joined(
                [
                    block(0, -95, 2, 95),
                    block(5, -100, 65, -98),
                    block(5, 98, 65, 100),
                    block(68, -95, 70, -80),
                    block(68, 80, 70, 95),
                    bend(5, 3, 65, 95, 1),
                    bend(5, 3, 5, 95, 2),
                    bend(5, 3, 5, -95, 3),
                    bend(5, 3, 65, -95, 4),
                ]
            ),
            2 * (190 + 2 * 60 + 2 * 15) + 4 * arcs + 4,
            box=(0, -100, 70, 100),
        ),
        PARTS,
    )
    yield Reference(
        "lipped zed with unequal flanges",
        shape.lipped_zed(200, 70, 64, 20, 2, 3),
        values(
            joined(
                [
                    block(-1, -95, 1, 95),
                    block(4, -100, 64, -98),
                    block(67, -95, 69, -80),
                    block(-58, 98, -4, 100),
                    block(-63, 80, -61, 95),
                    bend(5, 3, 4, -95, 3),
                    bend(5, 3, 64, -95, 4),
                    bend(5, 3, -4, 95, 1),
                    bend(5, 3, -58, 95, 2),
                ]
            ),
            2 * (190 + 60 + 54 + 2 * 15) + 4 * arcs + 4,
            corners=[(4, -95, 5), (64, -95, 5), (69, -80, 0), (-4, 95, 5), (-58, 95, 5), (-63, 80, 0)],
        ),
        PARTS,
    )
    yield Reference(
        "hat",
        shape.hat(100, 80, 30, 2, 3),
        values(
            joined(
                [
                    block(-70, 0, -43, 2),
                    block(43, 0, 70, 2),
                    block(-40, 5, -38, 95),
                    block(38, 5, 40, 95),
                    block(-35, 98, 35, 100),
                    bend(5, 3, -43, 5, 4),
                    bend(5, 3, 43, 5, 3),
                    bend(5, 3, -35, 95, 2),
                    bend(5, 3, 35, 95, 1),
                ]
            ),
            2 * (2 * 27 + 2 * 90 + 70) + 4 * arcs + 4,
            box=(-70, 0, 70, 100),
        ),
        PARTS,
    )


REFERENCES: tuple[Reference, ...] = (
    *_solid_shapes(),
    *_round_shapes(),
    *_profiles(),
    *_hollow_shapes(),
    *_cold_formed(),
)

# Each as published to 15 digits for the dimensions used above.
PRINTED: Mapping[str, Mapping[str, str]] = {
    "rectangle": {
        "area": "1500.00000000000",
        "outer_perimeter": "160.000000000000",
        "second_moment_x": "312500.000000000",
        "second_moment_y": "112500.000000000",
        "polar_moment": "425000.000000000",
        "elastic_modulus_x_top": "12500.0000000000",
        "radius_of_gyration_x": "14.4337567297406",
    },
    "right triangle, legs +x and +y": {
        "area": "600.000000000000",
        "centroid_x": "10.0000000000000",
        "centroid_y": "13.3333333333333",
        "second_moment_x": "53333.3333333333",
        "second_moment_y": "30000.0000000000",
        "product_of_inertia": "-20000.0000000000",
        "product_of_inertia_origin": "60000.0000000000",
        "second_moment_x_origin": "160000.000000000",
        "principal_moment_1": "64820.7399824163",
        "principal_angle": "29.8717814182354",
    },
    "right triangle, legs -x and +y": {
        "product_of_inertia": "20000.0000000000",
    },
    "scalene triangle": {
        "area": "900.000000000000",
        "centroid_x": "22.6666666666667",
        "centroid_y": "12.0000000000000",
        "second_moment_x": "64800.0000000000",
        "second_moment_y": "96200.0000000000",
        "product_of_inertia": "-12600.0000000000",
        "outer_perimeter": "138.415601910165",
    },
    "semicircle": {
        "area": "981.747704246810",
        "outer_perimeter": "128.539816339745",
        "centroid_y": "10.6103295394597",
        "second_moment_x": "42873.8127525257",
        "second_moment_y": "153398.078788564",
    },
    "quarter circle": {
        "area": "1256.63706143592",
        "centroid_x": "16.9765272631355",
        "centroid_y": "16.9765272631355",
        "second_moment_x": "140488.909627476",
        "second_moment_y": "140488.909627476",
        "product_of_inertia": "-42165.9149468907",
        "product_of_inertia_origin": "320000.000000000",
    },
    "fillet spandrel": {
        "area": "30.9026644707674",
        "centroid_x": "2.68041526734902",
        "centroid_y": "2.68041526734902",
        "second_moment_x_origin": "378.479604738140",
        "second_moment_x": "156.455517944147",
        "product_of_inertia_origin": "129.983683790512",
        "product_of_inertia": "-92.0404030034809",
    },
    "segment": {
        "area": "1032.69046140226",
        "centroid_x": "38.7862441301704",
        "second_moment_x": "334205.535114529",
        "second_moment_y_origin": "1579109.54816205",
    },
    "annulus": {
        "area": "2563.53960532927",
        "second_moment_x": "1527869.60477625",
        "polar_moment": "3055739.20955249",
        "total_perimeter": "427.256600888212",
    },
    "circle": {
        "second_moment_x": "636172.512351933",
        "elastic_modulus_x_top": "21205.7504117311",
    },
    "annular sector": {
        "area": "1023.75000000000",
        "centroid_x": "49.2129604664472",
        "second_moment_x": "372583.025133695",
        "second_moment_y_origin": "2506713.84986631",
        "outer_perimeter": "166.500000000000",
    },
    "regular polygon of 3": {
        "area": "519.615242270663",
        "second_moment_x": "25980.7621135332",
        "second_moment_y": "25980.7621135332",
    },
    "regular polygon of 5": {
        "area": "951.056516295154",
        "second_moment_x": "73200.1886245515",
        "second_moment_y": "73200.1886245515",
    },
    "regular polygon of 6": {
        "area": "1039.23048454133",
        "second_moment_x": "86602.5403784439",
        "second_moment_y": "86602.5403784439",
    },
    "regular polygon of 8": {
        "area": "1131.37084989848",
        "second_moment_x": "102091.389993232",
        "second_moment_y": "102091.389993232",
    },
    "rounded rectangle": {
        "area": "3945.06192982975",
        "outer_perimeter": "246.265482457437",
        "second_moment_x": "803606.555264739",
        "second_moment_y": "2052987.07368960",
    },
    "unequal angle": {
        "area": "1216.00000000000",
        "centroid_x": "14.2631578947368",
        "centroid_y": "34.2631578947368",
        "second_moment_x": "1248001.12280702",
        "second_moment_y": "344321.122807018",
        "product_of_inertia": "-377684.210526316",
        "principal_moment_1": "1385062.42903828",
        "principal_moment_2": "207259.816575756",
        "principal_angle": "19.9457951654764",
    },
    "zed": {
        "area": "1128.00000000000",
        "second_moment_x": "1667936.00000000",
        "second_moment_y": "416984.000000000",
        "product_of_inertia": "-620400.000000000",
    },
    "tee": {
        "area": "1037.00000000000",
        "centroid_y": "56.3293153326905",
        "second_moment_x": "626513.205480553",
        "second_moment_y": "164029.416666667",
    },
    "channel": {
        "area": "1692.00000000000",
        "centroid_x": "20.2340425531915",
        "second_moment_x": "3864564.00000000",
        "second_moment_y": "610611.319148936",
    },
    "box": {
        "area": "1500.00000000000",
        "second_moment_x": "1962500.00000000",
        "second_moment_y": "862500.000000000",
    },
    "I section": {
        "second_moment_x": "20982666.6666667",
        "second_moment_y": "1669906.66666667",
    },
    "rectangle with an off-centre hole": {
        "area": "5547.61065788307",
        "centroid_x": "48.3690659997053",
        "centroid_y": "30.8154670001473",
        "second_moment_x": "1734785.96367495",
        "second_moment_y": "4788001.90364843",
        "product_of_inertia": "97856.0400176805",
    },
    "diamond": {
        "second_moment_x": "911250.000000000",
        "elastic_modulus_x_top": "20250.0000000000",
    },
    "trapezium": {
        "area": "1500.00000000000",
        "centroid_y": "14.0000000000000",
        "second_moment_x": "111000.000000000",
    },
}
