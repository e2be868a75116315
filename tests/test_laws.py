"""Laws that every section obeys, on random sections of lines and arcs, within the errors that are claimed."""

from __future__ import annotations

import math
import random
from cmath import rect

import numpy as np
import pytest
import shapely
from hypothesis import given
from hypothesis import strategies as st

from build import curves_of, section_of
from edgetally.curves import Arc, Curve, Line
from edgetally.outline.assembly import assemble
from edgetally.section.area import AreaResult, area_properties
from outlines import fillet_polygon, i_section


@st.composite
def sections(draw: st.DrawFn) -> list[Curve]:
    """A star-shaped outline with rounded corners and bulged sides, and up to three round voids near its middle."""
    n = draw(st.integers(3, 8))
    radii = draw(st.lists(st.floats(20, 60), min_size=n, max_size=n))
    corners = [r * rect(1.0, 2 * math.pi * k / n) for k, r in enumerate(radii)]
    rounding = draw(st.floats(0.0, 2.0))
    contour = fillet_polygon([(z.real, z.imag, rounding) for z in corners])
    bulges = st.sampled_from([0.0, 0.0, 0.1, -0.08, 0.25])
    outer = [(*p[:4], p[4] if p[4] else draw(bulges) * (abs(complex(p[2] - p[0], p[3] - p[1])) > 5)) for p in contour]
    curves = curves_of([outer])
    for k in range(draw(st.integers(0, 3))):
        centre = 3.2 * rect(1.0, 2 * math.pi * k / 3)
        curves.append(Arc.from_centre(centre, draw(st.floats(0.1, 2.0)), draw(st.floats(0, 6)), 2 * math.pi))
    return curves


def measured(curves: list[Curve]) -> AreaResult:
    return area_properties(section_of(curves))


def value(result: AreaResult, key: str) -> float:
    found = result.properties[key].value
    assert found is not None
    return found


def bound(result: AreaResult, key: str) -> float:
    """The absolute error that is claimed, on the natural scale of what may vanish."""
    prop = result.properties[key]
    width, height = value(result, "width"), value(result, "height")
    scale = abs(prop.value or 0.0)
    if key.startswith("centroid"):
        scale = max(scale, width, height)
    if key == "product_of_inertia":
        scale = max(scale, 0.5 * value(result, "polar_moment"))
    return (prop.error or 0.0) * scale


ABOUT_CENTROID = (
    "area", "total_perimeter", "second_moment_x", "second_moment_y", "product_of_inertia", "principal_moment_1",
    "principal_moment_2", "elastic_modulus_x_top", "elastic_modulus_y_right", "radius_of_gyration_1",
)  # fmt: skip


def same(one: AreaResult, other: AreaResult, keys: tuple[str, ...] = ABOUT_CENTROID, slack: float = 4.0) -> None:
    for key in keys:
        allowed = slack * (bound(one, key) + bound(other, key))
        assert abs(value(one, key) - value(other, key)) <= allowed, key


@given(sections(), st.floats(-5e5, 5e5), st.floats(-5e5, 5e5))
def test_translation(curves: list[Curve], dx: float, dy: float) -> None:
    moved = measured([c.moved(1.0, complex(dx, dy)) for c in curves])
    plain = measured(curves)
    same(plain, moved)
    assert value(moved, "centroid_x") - dx == pytest.approx(value(plain, "centroid_x"), abs=1e-9)
    assert value(moved, "centroid_y") - dy == pytest.approx(value(plain, "centroid_y"), abs=1e-9)


@given(sections(), st.floats(-math.pi, math.pi))
def test_rotation(curves: list[Curve], angle: float) -> None:
    turned, plain = measured([c.moved(rect(1.0, angle), 0j) for c in curves]), measured(curves)
    same(plain, turned, ("area", "total_perimeter", "polar_moment", "principal_moment_1", "principal_moment_2"))
    if not plain.axes.arbitrary and not turned.axes.arbitrary:
        off = plain.axes.angle.value + angle - turned.axes.angle.value
        allowed = 4 * (plain.axes.angle.slack + turned.axes.angle.slack) + 1e-15
        assert abs(math.sin(off)) <= allowed
    c, s = math.cos(angle), math.sin(angle)
    ix, iy, ixy = (value(plain, f"{key}") for key in ("second_moment_x", "second_moment_y", "product_of_inertia"))
    expected = ix * c * c + iy * s * s + 2 * ixy * s * c  # the section turned one way is the axes turned the other
    assert value(turned, "second_moment_x") == pytest.approx(expected, rel=1e-12)


@given(sections())
def test_mirror(curves: list[Curve]) -> None:
    mirrored, plain = measured([c.mirrored() for c in curves]), measured(curves)
    same(plain, mirrored, ("area", "total_perimeter", "second_moment_x", "second_moment_y", "principal_moment_1"))
    total = value(plain, "product_of_inertia") + value(mirrored, "product_of_inertia")
    assert abs(total) <= 4 * (bound(plain, "product_of_inertia") + bound(mirrored, "product_of_inertia"))
    assert value(mirrored, "elastic_modulus_x_top") == pytest.approx(
        value(plain, "elastic_modulus_x_bottom"), rel=1e-12
    )


@given(sections())
def test_half_turn_swaps_the_sides(curves: list[Curve]) -> None:
    turned, plain = measured([c.moved(-1.0, 7 + 3j) for c in curves]), measured(curves)
    for one, other in (("x_top", "x_bottom"), ("x_bottom", "x_top"), ("y_left", "y_right"), ("y_right", "y_left")):
        key, swapped = f"elastic_modulus_{one}", f"elastic_modulus_{other}"
        allowed = 4 * (bound(plain, swapped) + bound(turned, key))
        assert abs(value(turned, key) - value(plain, swapped)) <= allowed
    same(plain, turned, ("area", "second_moment_x", "second_moment_y", "product_of_inertia", "width", "height"))


def test_moduli_about_axes_that_are_hard_to_find_claim_no_more_than_is_known() -> None:
    """A regular triangle with a small void off its middle: the axes are known to 1e-9 rad, the fibres no better."""
    corners = [20 + 0j, -9.999999999999996 + 17.320508075688775j, -10.000000000000009 - 17.320508075688767j]
    curves: list[Curve] = [Line(a, b) for a, b in zip(corners, [*corners[1:], corners[0]], strict=True)]
    curves.append(Arc.from_centre(3.2, 0.25, 0.0, 2 * math.pi))
    plain, small = measured(curves), measured([c.moved(0.001 + 0j, 0j) for c in curves])
    assert plain.axes.angle.slack > 1e-10
    for key in ("elastic_modulus_1_positive", "elastic_modulus_2_positive", "elastic_modulus_2_negative"):
        allowed = bound(plain, key) * 1e-9 + bound(small, key)
        assert abs(value(small, key) - 1e-9 * value(plain, key)) <= allowed


@given(sections(), st.floats(1e-3, 1e3))
def test_scale(curves: list[Curve], k: float) -> None:
    large, plain = measured([c.moved(complex(k), 0j) for c in curves]), measured(curves)
    for key, prop in plain.properties.items():
        if prop.unit.base == "mm" and abs(prop.value or 0.0) > 1e-6:
            allowed = 8 * (bound(plain, key) * k**prop.unit.power + bound(large, key))
            if not key.endswith("_origin"):
                assert abs(value(large, key) - k**prop.unit.power * value(plain, key)) <= allowed, key


@given(sections(), st.integers(0, 10**6))
def test_shuffled_reversed_pieces_and_another_start(curves: list[Curve], seed: int) -> None:
    chance = random.Random(seed)
    mixed = [c.reversed() if chance.random() < 0.5 else c for c in curves]
    chance.shuffle(mixed)
    same(measured(curves), measured(mixed))


@given(sections())
def test_drawn_the_other_way_round(curves: list[Curve]) -> None:
    """Outer boundaries clockwise, voids counter-clockwise: the drawing's sense means nothing."""
    same(measured(curves), measured([c.reversed() for c in reversed(curves)]))


@given(sections(), st.floats(0.05, 0.95))
def test_splitting_every_curve_changes_nothing(curves: list[Curve], t: float) -> None:
    same(measured(curves), measured([piece for c in curves for piece in c.split(t)]))


@given(sections(), sections())
def test_parts_add_up(one: list[Curve], other: list[Curve]) -> None:
    away = [c.moved(1.0, 300 + 50j) for c in other]
    both, first, second = measured(one + away), measured(one), measured(away)
    keys = ("area", "total_perimeter", "second_moment_x_origin", "second_moment_y_origin", "product_of_inertia_origin")
    for key in keys:
        assert value(both, key) == pytest.approx(value(first, key) + value(second, key), rel=1e-12, abs=1e-6)


@given(sections())
def test_inequalities_and_sums(curves: list[Curve]) -> None:
    r = measured(curves)
    i1, i2 = value(r, "principal_moment_1"), value(r, "principal_moment_2")
    assert i1 >= i2 > 0
    assert i1 + i2 == pytest.approx(value(r, "second_moment_x") + value(r, "second_moment_y"), rel=1e-13)
    assert value(r, "polar_moment") == value(r, "second_moment_x") + value(r, "second_moment_y")
    assert value(r, "total_perimeter") >= value(r, "outer_perimeter")
    assert value(r, "outer_perimeter") ** 2 >= 4 * math.pi * value(r, "area")  # isoperimetric
    assert i1 * i2 >= (value(r, "area") ** 2 / (4 * math.pi)) ** 2 * (1 - 1e-12)  # the disc has the least
    top, bottom = (value(r, "second_moment_x") / value(r, f"elastic_modulus_x_{side}") for side in ("top", "bottom"))
    assert top + bottom == pytest.approx(value(r, "height"), rel=1e-12)


@given(sections(), st.floats(0.1, 6.2))
def test_extents_are_those_of_dense_points(curves: list[Curve], angle: float) -> None:
    packed = section_of(curves).packed
    direction = rect(1.0, angle)
    t = np.linspace(0, 1, 400)
    sampled = max(float((c.points(t) * direction.conjugate()).real.max()) for c in curves)
    reach = float(packed.supports(direction).max())
    assert sampled <= reach + 1e-9
    assert reach <= sampled + 1e-3


def test_area_and_moments_against_shapely_with_extrapolation() -> None:
    """Another route: polygons of n and 2n chords an arc; the error falls as 1/n², so (4f(2n) − f(n))/3 is better.

    shapely gives area and centroid; the second moment follows from its areas of a fan of triangles.
    """
    contours = i_section(200, 100, 5.6, 8.5, 12)

    def chopped(n: int) -> tuple[float, float]:
        points: list[complex] = []
        for curve in curves_of(contours):
            count = n if isinstance(curve, Arc) else 1
            points += [complex(z) for z in curve.points(np.arange(count) / count)]
        polygon = shapely.Polygon([(z.real, z.imag) for z in points])
        moment = 0.0
        for a, b in zip(points, [*points[1:], points[0]], strict=True):
            triangle = shapely.Polygon([(0, 0), (a.real, a.imag), (b.real, b.imag)])
            sign = 1.0 if (a.conjugate() * b).imag > 0 else -1.0
            moment += sign * triangle.area * (a.imag**2 + a.imag * b.imag + b.imag**2) / 6
        return polygon.area, moment

    coarse, fine = np.array(chopped(200)), np.array(chopped(400))
    area, moment = (4 * fine - coarse) / 3
    plain = measured(curves_of(contours))
    assert value(plain, "area") == pytest.approx(area, rel=1e-10)
    assert value(plain, "second_moment_x") == pytest.approx(moment, rel=1e-10)


def test_plate_two_thousand_by_one_at_forty_degrees() -> None:
    """I₂ = bh³/12 of a 2000 × 1 plate turned by 40°, which (I_x + I_y)/2 − R would lose to cancellation."""
    corners = [rect(1.0, math.radians(40)) * z for z in (-1000 - 0.5j, 1000 - 0.5j, 1000 + 0.5j, -1000 + 0.5j)]
    curves: list[Curve] = [Line(a, b) for a, b in zip(corners, [*corners[1:], corners[0]], strict=True)]
    r = measured(curves)
    assert value(r, "principal_moment_2") == pytest.approx(2000 / 12, rel=1e-11)
    assert value(r, "principal_moment_1") == pytest.approx(2000**3 / 12, rel=1e-13)
    assert r.properties["principal_moment_2"].error is not None
    assert r.properties["principal_moment_2"].error < 1e-10


def test_sections_are_what_they_are_meant_to_be() -> None:
    """The strategy above makes sections that assemble to one region; a sample of them, counted."""
    made = []

    @given(sections())
    def collect(curves: list[Curve]) -> None:
        made.append(len(assemble(curves).regions[0].voids))

    collect()
    assert set(made) == {0, 1, 2, 3}
