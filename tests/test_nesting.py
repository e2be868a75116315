"""Loops → regions with voids: true containment, even-odd, order, directions."""

from __future__ import annotations

import math
import random
from cmath import rect

import numpy as np
import pytest
import shapely
from hypothesis import given
from hypothesis import strategies as st

from build import curves_of
from edgetally.curves import Arc, Bezier, Curve, Line
from edgetally.outline.assembly import assemble
from edgetally.outline.nesting import nest, turning_about
from edgetally.outline.records import Loop, Outline, Region
from edgetally.outline.senses import rough_areas


def circle(centre: complex, radius: float, start: float = 0.0) -> Curve:
    return Arc.from_centre(centre, radius, start, 2 * math.pi)


def box(x: float, y: float, width: float, height: float) -> list[Curve]:
    points = [complex(x, y), complex(x + width, y), complex(x + width, y + height), complex(x, y + height)]
    return [Line(a, b) for a, b in zip(points, [*points[1:], points[0]], strict=True)]


def voids(outline: Outline) -> list[int]:
    return [len(region.voids) for region in outline.regions]


def test_a_disc_in_the_mouth_of_a_c_is_no_void_of_it() -> None:
    """Its box lies inside the box of the C, its curve outside the material's outline."""
    points = [0j, 10 + 0j, 10 + 2j, 2 + 2j, 2 + 8j, 10 + 8j, 10 + 10j, 10j]
    c_shape: list[Curve] = [Line(a, b) for a, b in zip(points, [*points[1:], points[0]], strict=True)]
    outline = assemble([*c_shape, circle(6 + 5j, 1.5)])
    assert voids(outline) == [0, 0]
    assert outline.islands == ()


@pytest.mark.parametrize("sweep", [1, -1])
def test_containment_is_that_of_the_arc_not_of_its_chord(sweep: int) -> None:
    """A small disc between an arc and its chord: inside where the arc bulges outward, outside where inward."""
    bulge = math.tan(sweep * 0.4 * math.pi / 4)
    outer = curves_of([[(0, 0, 20, 0, bulge), (20, 0, 20, 20, 0), (20, 20, 0, 20, 0), (0, 20, 0, 0, 0)]])
    crown = -20 * math.tan(0.1 * math.pi) / 2 * sweep
    outline = assemble([*outer, circle(complex(10, 0.5 * crown), 0.3)])
    assert voids(outline) == ([1] if sweep > 0 else [0, 0])


@pytest.mark.parametrize("start", [0.0, 0.5 * math.pi, math.pi, 2.0])
def test_a_witness_on_the_diameter_or_the_chord_line_decides_as_any_other(start: float) -> None:
    outer = [Arc.from_centre(0, 10, start, math.pi), Arc.from_centre(0, 10, start + math.pi, math.pi)]
    for inner in (circle(0, 4, start), circle(2 + 0j, 3), circle(0, 4, start + math.pi)):
        assert voids(assemble([*outer, inner])) == [1]
    assert voids(assemble([circle(0, 10), circle(15 + 0j, 3, math.pi)])) == [0, 0]


def test_even_odd_to_depth_five() -> None:
    outline = assemble([circle(0, r) for r in (6, 5, 4, 3, 2, 1)])
    assert voids(outline) == [1, 1, 1]
    assert [round(region.area / math.pi) for region in outline.regions] == [11, 7, 3]
    assert outline.islands == (1, 2)


def test_five_hundred_rings_one_in_the_other() -> None:
    outline = assemble([circle(0, 1.0 + 0.1 * k) for k in range(500)])
    assert voids(outline) == [1] * 250


@pytest.mark.parametrize("bulge", [0.0, 0.2])
def test_looking_at_runs_of_curves_decides_as_looking_at_each(bulge: float) -> None:
    """A wreath of 3000 curves and points all over it, near it and on its curves' chords, against the plain sum."""
    n = 3000
    corners = [(40 + 8 * math.sin(37 * k)) * rect(1.0, 2 * math.pi * k / n) for k in range(n)]
    pairs = zip(corners, [*corners[1:], corners[0]], strict=True)
    loop = Loop(tuple(Arc.from_bulge(a, b, bulge) if bulge else Line(a, b) for a, b in pairs))
    chance = np.random.default_rng(2)
    points = chance.uniform(-60, 60, 400) + 1j * chance.uniform(-60, 60, 400)
    near = np.array(corners[:200]) * chance.choice([1 - 1e-7, 1 + 1e-7], 200)
    points = np.concatenate([points, near])
    plain = loop.packed.turning(points)
    assert turning_about(loop, points) == pytest.approx(plain, abs=1e-9)
    assert {0.0, 1.0} <= set(np.round(plain / (2 * math.pi)))


def test_thousands_of_voids_in_an_outline_of_thousands_of_curves() -> None:
    points = [0j]
    for k in range(2000):
        points += [complex(k + x, y) for x, y in ((0.25, 0), (0.25, 5), (0.75, 5), (0.75, 0))]
    points += [2000 + 0j, 2000 - 2j, -2j]
    comb: list[Curve] = [Line(a, b) for a, b in zip(points, [*points[1:], points[0]], strict=True)]
    teeth = [circle(complex(k + 0.5, 2.5), 0.1) for k in range(2000)]
    between = [circle(complex(k, 2.5), 0.1) for k in range(1, 2000)]
    outline = assemble([*comb, *teeth, *between])
    assert sorted(voids(outline)) == [0] * 1999 + [2000]


def test_loops_are_directed_with_the_material_on_the_left() -> None:
    for flip in (False, True):
        curves = [c.reversed() for c in box(0, 0, 10, 10)[::-1]] if flip else box(0, 0, 10, 10)
        hole = circle(5 + 5j, 2).reversed() if flip else circle(5 + 5j, 2)
        region = assemble([*curves, hole]).regions[0]
        assert region.outer.area == pytest.approx(100)
        assert region.voids[0].area == pytest.approx(-4 * math.pi)
        assert region.area == pytest.approx(100 - 4 * math.pi)


@given(
    st.lists(st.floats(-6.28, 6.28).filter(lambda turn: abs(turn) > 1e-8), min_size=3, max_size=6), st.floats(0, 1e5)
)
def test_rough_areas_decide_as_the_integrals_do(turns: list[float], shift: float) -> None:
    """Polygons with arcs of any turn for sides, which may cross themselves, beside one with a side that is no arc."""
    corners = [shift + rect(10.0, k) for k in range(len(turns))]
    pairs = zip(corners, [*corners[1:], corners[0]], turns, strict=True)
    bent = Loop(tuple(Arc.from_bulge(a, b, math.tan(turn / 4)) for a, b, turn in pairs))
    other = Loop((Bezier((0j, 5 - 5j, 10 + 0j)), Line(10, 0)))
    areas, perimeters = rough_areas([bent, other, bent.reversed()])
    assert perimeters == pytest.approx([bent.perimeter, other.perimeter, bent.perimeter], rel=1e-14)
    assert np.abs(areas - [bent.area, other.area, -bent.area]).max() <= 1e-14 * perimeters.max() ** 2 + 1e-13 * shift


def test_regions_and_voids_come_from_left_to_right() -> None:
    curves = box(50, 0, 10, 10) + box(0, 5, 10, 10) + box(0, -20, 10, 10) + [circle(57 + 5j, 1), circle(53 + 5j, 1)]
    outline = assemble(curves)
    assert [region.box[:2] for region in outline.regions] == [(0, -20), (0, 5), (50, 0)]
    assert [round(void.packed.box[0]) for void in outline.regions[2].voids] == [52, 56]


def polygon_of(loop: Loop) -> shapely.Polygon:
    points = [z for curve in loop.curves for z in curve.points(np.linspace(0, 1, 60, endpoint=False))]
    return shapely.Polygon([(z.real, z.imag) for z in points])


def shape(chance: random.Random) -> Loop:
    at = complex(chance.uniform(0, 100), chance.uniform(0, 100))
    size = 10 ** chance.uniform(-0.5, 1.5)
    if chance.random() < 0.5:
        return Loop((circle(at, size / 2, chance.uniform(0, 6)),))
    half = complex(size / 2, size / 4)
    x, y = half.real, half.imag
    slot = [(-x, -y, x, -y, 0.0), (x, -y, x, y, 1.0), (x, y, -x, y, 0.0), (-x, y, -x, -y, 1.0)]
    turn = complex(math.cos(size), math.sin(size))
    return Loop(tuple(curve.moved(turn, at) for curve in curves_of([slot])))


@pytest.mark.parametrize("seed", range(12))
def test_random_nests_against_polygons_of_fine_chords(seed: int) -> None:
    """shapely decides containment of polygons with 60 chords an arc; loops nearer than the chops are not used."""
    chance = random.Random(seed)
    kept: list[tuple[Loop, shapely.Polygon]] = []
    while len(kept) < 40:
        loop = shape(chance)
        polygon = polygon_of(loop)
        if all(polygon.exterior.distance(other.exterior) > 0.05 for _, other in kept):
            kept.append((loop, polygon))
    regions, _ = nest([loop for loop, _ in kept])
    expected: dict[float, int] = {}
    depth = [sum(other.contains(polygon) for _, other in kept if other is not polygon) for _, polygon in kept]
    for (loop, polygon), level in zip(kept, depth, strict=True):
        if level % 2 == 0:
            inner = [p for (_, p), d in zip(kept, depth, strict=True) if d == level + 1 and polygon.contains(p)]
            expected[round(loop.packed.box[0], 9)] = len(inner)
    found = {round(region.outer.packed.box[0], 9): len(region.voids) for region in regions}
    assert found == expected


def test_region_area_is_that_of_its_loops() -> None:
    region = Region(Loop(tuple(box(0, 0, 4, 4))), (Loop((circle(2 + 2j, 1).reversed(),)),))
    assert region.area == pytest.approx(16 - math.pi)
    assert region.scaled(2).area == pytest.approx(4 * (16 - math.pi))
