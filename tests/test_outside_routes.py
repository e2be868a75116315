"""Area, moments and extents against computations that share no code with this project.

- fontTools' moments pen (fontTools.pens.momentsPen, MIT): Green's theorem in closed form, generated from symbolic
  integration, for straight pieces and for quadratic and cubic Bézier pieces.
- shapely (GEOS): areas and centroids of polygons with n and 2n chords an arc, extrapolated to n → ∞ (Richardson).
- mpmath: quadrature at 30 digits of y² dA over the boundary, each arc by its angle.
- dense points for the extreme fibres.
"""

from __future__ import annotations

import math
import random
from cmath import rect

import mpmath
import numpy as np
import pytest
import shapely
from fontTools.pens.momentsPen import MomentsPen
from hypothesis import given, settings
from hypothesis import strategies as st

from build import curves_of, section_of
from edgetally.curves import Arc, Bezier, Curve, Line
from edgetally.section.area import area_properties
from outlines import Outline, circular_hollow, fillet_polygon, i_section, lipped_zed, rectangle_with_hole, spandrel

SECOND = ("second_moment_x", "second_moment_y", "product_of_inertia")


def values(curves: list[Curve]) -> dict[str, float]:
    return {key: prop.value or 0.0 for key, prop in area_properties(section_of(curves)).properties.items()}


def star(chance: random.Random, n: int) -> list[complex]:
    """A polygon seen whole from the origin, with n > 3 no two neighbouring corners half a turn apart."""
    shares = [chance.uniform(0.6, 1.4) for _ in range(n)]
    turns = np.cumsum(shares) * (2 * math.pi / sum(shares))
    return [chance.uniform(20, 60) * rect(1.0, float(turn)) for turn in turns]


def closed(points: list[complex]) -> list[tuple[complex, complex]]:
    return list(zip(points, [*points[1:], points[0]], strict=True))


# --------------------------------------------------------------------------------------------- fontTools' moments pen


def by_pen(contours: list[list[Curve]]) -> dict[str, float]:
    """Draw with the pen, and shift its moments from the origin to the centroid."""
    pen = MomentsPen()
    for contour in contours:
        pen.moveTo((contour[0].start.real, contour[0].start.imag))
        for curve in contour:
            if isinstance(curve, Bezier):
                points = [(z.real, z.imag) for z in curve.control[1:]]
                (pen.qCurveTo if curve.degree == 2 else pen.curveTo)(*points)
            else:
                pen.lineTo((curve.end.real, curve.end.imag))
        pen.closePath()
    area, x, y = pen.area, pen.momentX / pen.area, pen.momentY / pen.area
    return {
        "area": area,
        "centroid_x": x,
        "centroid_y": y,
        "second_moment_x_origin": pen.momentYY,
        "second_moment_y_origin": pen.momentXX,
        "product_of_inertia_origin": pen.momentXY,
        "second_moment_x": pen.momentYY - area * y * y,
        "second_moment_y": pen.momentXX - area * x * x,
        "product_of_inertia": pen.momentXY - area * x * y,
    }


def agree(found: dict[str, float], expected: dict[str, float], share: float) -> None:
    size = math.sqrt(expected["area"])
    for key, value in expected.items():
        power = 1 if key.startswith("centroid") else 2 if key == "area" else 4
        assert found[key] == pytest.approx(value, rel=share, abs=share * size**power), key


@given(st.integers(4, 40), st.integers(0, 10**6))
def test_polygons_with_a_void_against_the_moments_pen(n: int, seed: int) -> None:
    chance = random.Random(seed)
    corners = star(chance, n)
    outer: list[Curve] = [Line(a, b) for a, b in closed(corners)]
    inner: list[Curve] = [Line(a, b) for a, b in closed([0.4 * z for z in corners])]
    void: list[Curve] = [c.reversed() for c in reversed(inner)]
    agree(values([*outer, *inner]), by_pen([outer, void]), 1e-12)


@pytest.mark.parametrize("degree", [2, 3])
@given(st.integers(4, 12), st.integers(0, 10**6))
def test_bezier_outlines_against_the_moments_pen(degree: int, n: int, seed: int) -> None:
    """Bulged star polygons: each side a Bézier piece whose control points lie off its chord by up to a tenth of it."""
    chance = random.Random(seed)
    pieces: list[Curve] = []
    for a, b in closed([40 * rect(1.0, 2 * math.pi * k / n) * chance.uniform(0.9, 1.1) for k in range(n)]):
        inner = [a + (b - a) * complex(k / degree, chance.uniform(-0.1, 0.1)) for k in range(1, degree)]
        pieces.append(Bezier((a, *inner, b)))
    agree(values(pieces), by_pen([pieces]), 1e-12)


# ---------------------------------------------------------------------------------------- shapely with extrapolation


def chopped(contours: Outline, n: int) -> np.ndarray:
    """Area, first and second moments about the origin of polygons with n chords an arc.

    Area and centroid are those of shapely; second moments sum, over shapely's triangles inside the polygon, the area
    times the mean of x², y² and xy at the middles of the sides, which is exact for polynomials of degree 2.
    """
    rings = []
    for contour in contours:
        points: list[complex] = []
        for curve in curves_of([contour]):
            points += [complex(z) for z in curve.points(np.arange(n if isinstance(curve, Arc) else 1) / n)]
        rings.append([(z.real, z.imag) for z in points])
    polygon = shapely.Polygon(rings[0], rings[1:])
    triangles = shapely.get_parts(shapely.constrained_delaunay_triangles(polygon))
    areas = shapely.area(triangles)
    corners = np.array([shapely.get_coordinates(t)[:3] for t in triangles])
    middles = 0.5 * (corners + np.roll(corners, 1, axis=1))
    squares = (areas[:, None] * (middles**2).mean(axis=1)).sum(axis=0)
    product = float((areas * (middles[..., 0] * middles[..., 1]).mean(axis=1)).sum())
    area, centroid = polygon.area, polygon.centroid
    assert areas.sum() == pytest.approx(area, rel=1e-12)
    return np.array([area, area * centroid.x, area * centroid.y, squares[1], squares[0], product])


@pytest.mark.parametrize(
    "contours",
    [
        i_section(200, 100, 5.6, 8.5, 12),
        lipped_zed(200, 70, 62, 20, 2, 4),
        rectangle_with_hole(60, 40, 9, 20, 17),
        circular_hollow(60.3, 4),
        spandrel(12),
    ],
    ids=["I", "zed", "plate with hole", "tube", "spandrel"],
)
def test_chords_extrapolated(contours: Outline) -> None:
    """The error of n chords falls as 1/n² and then 1/n⁴: two steps of Richardson's extrapolation from n, 2n, 4n."""
    one, two, four = (chopped(contours, n) for n in (24, 48, 96))
    better, best = (4 * two - one) / 3, (4 * four - two) / 3
    best += (best - better) / 15
    found = values(curves_of(contours))
    expected = dict(zip(
        ("area", "first_x", "first_y", "second_moment_x_origin", "second_moment_y_origin", "product_of_inertia_origin"),
        best.tolist(),
        strict=True,
    ))  # fmt: skip
    found["first_x"], found["first_y"] = (found["area"] * found[f"centroid_{axis}"] for axis in "xy")
    size = math.sqrt(found["area"])
    for key, value in expected.items():
        power = 2 if key == "area" else 3 if key.startswith("first") else 4
        assert found[key] == pytest.approx(value, rel=2e-10, abs=2e-10 * size**power), key


# ------------------------------------------------------------------------------------------------- mpmath at 30 digits


def by_mpmath(curves: list[Curve], origin: complex = 0j) -> dict[str, float]:
    """Integrate ∮f dx and ∮f dy about `origin` with 30 digits, arcs by their angle, from the very doubles stored.

    About an origin far away, the last digits by which ends miss each other would count.
    """
    with mpmath.workdps(30):
        sums = [mpmath.mpf(0)] * 6
        for curve in curves:
            start, end = mpmath.mpc(curve.start) - origin, mpmath.mpc(curve.end) - origin
            if isinstance(curve, Arc):
                spoke, sweep = mpmath.mpc(curve.spoke), mpmath.mpf(curve.sweep)
                centre = start - spoke

                def point(t: mpmath.mpf, centre=centre, spoke=spoke, sweep=sweep) -> mpmath.mpc:  # type: ignore[no-untyped-def]
                    return centre + spoke * mpmath.expj(sweep * t)

                def slope(t: mpmath.mpf, spoke=spoke, sweep=sweep) -> mpmath.mpc:  # type: ignore[no-untyped-def]
                    return 1j * sweep * spoke * mpmath.expj(sweep * t)
            else:

                def point(t: mpmath.mpf, start=start, end=end) -> mpmath.mpc:  # type: ignore[no-untyped-def,misc]
                    return start + t * (end - start)

                def slope(t: mpmath.mpf, start=start, end=end) -> mpmath.mpc:  # type: ignore[no-untyped-def,misc]
                    return end - start

            def along(t: mpmath.mpf, p: int, q: int, power: int, point=point, slope=slope) -> mpmath.mpf:  # type: ignore[no-untyped-def]
                z, d = point(t), slope(t)
                return z.real**p * z.imag**q * (d.imag if power == 0 else d.real)

            # ∫dA = ∮x dy, ∫x = ½∮x² dy, ∫y = −½∮y² dx, ∫y² = −⅓∮y³ dx, ∫x² = ⅓∮x³ dy, ∫xy = ½∮x²y dy
            terms = ((1, 0, 0, 1), (2, 0, 0, 2), (0, 2, 1, -2), (0, 3, 1, -3), (3, 0, 0, 3), (2, 1, 0, 2))
            for k, (p, q, power, part) in enumerate(terms):
                sums[k] += mpmath.quad(lambda t, p=p, q=q, power=power: along(t, p, q, power), [0, 0.5, 1]) / part
        area, mx, my, xx, yy, xy = sums
        x, y = mx / area, my / area
        about = {
            "area": area,
            "centroid_x": x + origin.real,
            "centroid_y": y + origin.imag,
            "second_moment_x": xx - area * y * y,
            "second_moment_y": yy - area * x * x,
            "product_of_inertia": xy - area * x * y,
        }
        half, off = (about["second_moment_x"] - about["second_moment_y"]) / 2, about["product_of_inertia"]
        middle, radius = (about["second_moment_x"] + about["second_moment_y"]) / 2, mpmath.sqrt(half**2 + off**2)
        about |= {"principal_moment_1": middle + radius, "principal_moment_2": middle - radius}
        return {key: float(value) for key, value in about.items()}


def arc_outline(seed: int, shift: complex) -> list[Curve]:
    chance = random.Random(seed)
    contour = fillet_polygon([(z.real, z.imag, chance.uniform(0.5, 3)) for z in star(chance, 7)])
    bulged = [(*p[:4], p[4] or chance.choice([0.0, 0.15, -0.1])) for p in contour]
    curves = [*curves_of([bulged]), *(c.reversed() for c in [Arc.from_centre(1 + 2j, 4.0, 0.3, 2 * math.pi)])]
    return [c.moved(1.0, shift) for c in curves]


@pytest.mark.parametrize("seed", [1, 2, 3])
def test_arc_outlines_against_thirty_digits(seed: int) -> None:
    curves = arc_outline(seed, 0j)
    found, expected = values(curves), by_mpmath(curves)
    for key in expected:
        scale = expected["second_moment_x"] if key.startswith("product") else 0.0
        assert found[key] == pytest.approx(expected[key], rel=1e-12, abs=1e-13 * scale + 1e-13), key


def test_arc_outline_at_survey_coordinates_against_thirty_digits() -> None:
    """At 5e5 nothing is lost beyond what the coordinates' own last digits have lost: the claimed error bounds it."""
    curves = arc_outline(4, 5e5 - 4e5j)
    result, expected = area_properties(section_of(curves)).properties, by_mpmath(curves, 5e5 - 4e5j)
    for key in ("area", "second_moment_x", "second_moment_y", "principal_moment_1", "principal_moment_2"):
        prop = result[key]
        assert prop.value == pytest.approx(expected[key], rel=1e-10)
        assert prop.error is not None
        assert abs((prop.value or 0.0) - expected[key]) <= prop.error * expected[key], key


# ------------------------------------------------------------------------------------------------------ extreme fibres


@settings(max_examples=40)
@given(st.integers(0, 10**6), st.floats(-math.pi, math.pi))
def test_extreme_fibres_of_arcs_against_dense_points(seed: int, turn: float) -> None:
    """The distances I/W from the centroid, in the section's own axes and in the principal ones."""
    curves = [c.moved(rect(1.0, turn), 0j) for c in arc_outline(seed, 0j)]
    found = values(curves)
    t = np.linspace(0.0, 1.0, 2001)
    z = np.concatenate([c.points(t) for c in curves]) - complex(found["centroid_x"], found["centroid_y"])
    own = z * rect(1.0, -math.radians(found["principal_angle"]))
    bend = max(c.bend for c in curves)
    for key, moment, distance in (
        ("x_top", "second_moment_x", z.imag.max()), ("x_bottom", "second_moment_x", -z.imag.min()),
        ("y_right", "second_moment_y", z.real.max()), ("y_left", "second_moment_y", -z.real.min()),
        ("1_positive", "principal_moment_1", own.imag.max()), ("1_negative", "principal_moment_1", -own.imag.min()),
        ("2_positive", "principal_moment_2", own.real.max()), ("2_negative", "principal_moment_2", -own.real.min()),
    ):  # fmt: skip
        reach = found[moment] / found[f"elastic_modulus_{key}"]
        assert -1e-9 <= reach - distance <= bend / 2000**2 / 8 + 1e-9, key
