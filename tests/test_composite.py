"""Composite sections: closed forms of the transformed section, laws, what parts may and may not do, the command."""

from __future__ import annotations

import csv
import io
import json
import math
from cmath import rect
from collections.abc import Sequence
from itertools import pairwise
from pathlib import Path
from typing import Any

import ezdxf
import pytest
import shapely
from hypothesis import assume, given, settings
from hypothesis import strategies as st

import edgetally
from build import curves_of
from command import run
from drawings import draw_contours
from edgetally import OutlineError, UsageError
from edgetally.curves import Bezier, Curve, Line
from edgetally.outline.assembly import assemble
from edgetally.outline.overlaps import refuse_overlaps
from edgetally.outline.records import Region
from edgetally.output.composite_picture import composite_picture
from edgetally.output.composite_words import composite_blocks, composite_name, composite_symbol
from edgetally.output.pens import Path as Drawn
from edgetally.section.area import area_properties
from edgetally.section.composite import KEYS, CompositeResult, Material, composite_result
from edgetally.section.record import Section, input_rounding
from edgetally.units import LBF, Unit, force_unit, parse_modulus
from outlines import Outline, circle, circular_hollow, i_section, polygon, rotated, translated
from test_laws import sections

EXACT = 1e-13


def rectangle(x: float, y: float, width: float, height: float) -> Outline:
    return [polygon([(x, y), (x + width, y), (x + width, y + height), (x, y + height)])]


def regions_of(outline: Outline) -> tuple[Region, ...]:
    return assemble(curves_of(outline)).regions


def composite(
    *parts: tuple[Outline, float], unit: str = "mm", out_unit: str | None = None, density: float | None = None
) -> CompositeResult:
    made = []
    for k, (outline, modulus) in enumerate(parts):
        regions = regions_of(outline)
        section = Section(str(k), regions, unit, input_rounding(regions))
        made.append((Material(str(k), modulus, density), section))
    return composite_result(made, out_unit or unit)


def value(result: CompositeResult, key: str) -> float:
    found = result.properties[key].value
    assert found is not None
    return found


# ------------------------------------------------------------------ closed forms


def test_flitch_beam_by_transformed_widths() -> None:
    """A timber of 150 × 250 between two steel plates of 8 × 200, as any text on strength of materials has it: the
    steel becomes timber of n times its width, I = Σ n·b·h³/12 (closed form)."""
    wood, steel = 11_000.0, 210_000.0
    plates = rectangle(-8, 25, 8, 200) + rectangle(150, 25, 8, 200)
    result = composite((rectangle(0, 0, 150, 250), wood), (plates, steel))
    n = steel / wood
    second = 150 * 250**3 / 12 + 2 * n * 8 * 200**3 / 12
    assert value(result, "transformed_second_moment_x") == pytest.approx(second, rel=EXACT)
    assert value(result, "bending_stiffness_x") == pytest.approx(wood * second, rel=EXACT)
    assert value(result, "transformed_area") == pytest.approx(150 * 250 + 2 * n * 8 * 200, rel=EXACT)
    assert value(result, "axial_stiffness") == pytest.approx(wood * 150 * 250 + steel * 2 * 8 * 200, rel=EXACT)
    assert value(result, "elastic_centroid_x") == pytest.approx(75, rel=EXACT)
    assert value(result, "elastic_centroid_y") == pytest.approx(125, rel=EXACT)
    # stresses from the moment M: timber M·125/I, steel n·M·100/I
    timber, plate = result.parts
    assert timber.properties["elastic_modulus_x_top"].value == pytest.approx(second / 125, rel=EXACT)
    assert plate.properties["elastic_modulus_x_top"].value == pytest.approx(second / (n * 100), rel=EXACT)
    assert plate.properties["fibre_bottom"].value == pytest.approx(100, rel=EXACT)


def test_sandwich_of_steel_and_aluminium() -> None:
    """Faces of t = 2 in steel on a core of h = 40 in aluminium, b = 100, closed form:
    EI = E_f·b·(H³ − h³)/12 + E_c·b·h³/12."""
    b, t, h = 100.0, 2.0, 40.0
    faces = rectangle(0, -t, b, t) + rectangle(0, h, b, t)
    result = composite((faces, 210_000.0), (rectangle(0, 0, b, h), 70_000.0), density=1000.0)
    high = h + 2 * t
    assert value(result, "bending_stiffness_x") == pytest.approx(
        210_000 * b * (high**3 - h**3) / 12 + 70_000 * b * h**3 / 12, rel=EXACT
    )
    assert value(result, "bending_stiffness_y") == pytest.approx((210_000 * 2 * t + 70_000 * h) * b**3 / 12, rel=EXACT)
    assert value(result, "mass_per_length") == pytest.approx(b * high * 1e-6 * 1000, rel=EXACT)


def test_core_that_fills_a_tube_whatever_way_its_circle_is_drawn() -> None:
    """EA = ΣEπr², EI = ΣEπr⁴/4 of disc and ring; the ring's inner circle in two halves, the core's in three arcs."""
    parts = [polygon_of_arcs(45.0, (0.3, 2.0, 5.0))]
    result = composite((circular_hollow(100, 5), 70_000.0), (parts, 1000.0))
    ring, disc = math.pi * (50**2 - 45**2), math.pi * 45**2
    assert value(result, "axial_stiffness") == pytest.approx(70_000 * ring + 1000 * disc, rel=EXACT)
    stiff = math.pi / 4 * (70_000 * (50**4 - 45**4) + 1000 * 45**4)
    for axis in "xy12":
        assert value(result, f"bending_stiffness_{axis}") == pytest.approx(stiff, rel=1e-12)
    assert result.axes.arbitrary
    refuse_overlaps([("TUBE", regions_of(circular_hollow(100, 5))), ("CORE", regions_of([parts[0]]))])


def polygon_of_arcs(radius: float, angles: Sequence[float]) -> list[tuple[float, float, float, float, float]]:
    """A full circle as arcs between the given polar angles [rad]."""
    pieces = []
    for a, b in zip(angles, [*angles[1:], angles[0] + 2 * math.pi], strict=True):
        start, end = radius * rect(1, a), radius * rect(1, b)
        pieces.append((start.real, start.imag, end.real, end.imag, math.tan((b - a) / 4)))
    return pieces


def test_a_part_on_one_side_of_the_axis_has_a_negative_fibre_and_modulus() -> None:
    """Two squares of side 10, the upper one 9 times as stiff: the axis at 0.1·5 + 0.9·15 = 14 (closed form)."""
    result = composite((rectangle(0, 0, 10, 10), 10.0), (rectangle(0, 10, 10, 10), 90.0))
    assert value(result, "elastic_centroid_y") == pytest.approx(14.0, rel=EXACT)
    second = 10**4 / 12 + 100 * 9**2 + 9 * (10**4 / 12 + 100 * 1**2)
    low = result.parts[0].properties
    assert low["fibre_top"].value == pytest.approx(-4.0, rel=EXACT)
    assert low["elastic_modulus_x_top"].value == pytest.approx(second / -4.0, rel=EXACT)
    assert result.parts[1].properties["elastic_modulus_x_bottom"].value == pytest.approx(second / 9 / 4.0, rel=EXACT)


def test_a_fibre_on_the_axis_is_not_stressed() -> None:
    result = composite((rectangle(0, 0, 10, 10), 5.0), (rectangle(0, 10, 10, 10), 5.0))
    assert result.parts[0].properties["elastic_modulus_x_top"].value is None
    assert "–" in json.dumps([[str(c) for c in row] for row in composite_blocks(result)[3].rows], ensure_ascii=False)


# ------------------------------------------------------------------ laws

PLAIN = {
    "transformed_area": "area", "elastic_centroid_x": "centroid_x", "elastic_centroid_y": "centroid_y",
    "transformed_second_moment_x": "second_moment_x", "transformed_second_moment_y": "second_moment_y",
    "transformed_product_of_inertia": "product_of_inertia", "transformed_principal_moment_1": "principal_moment_1",
    "transformed_principal_moment_2": "principal_moment_2", "principal_angle": "principal_angle",
}  # fmt: skip


@st.composite
def cuts(draw: st.DrawFn) -> tuple[Outline, Outline, Outline, float]:
    """A leaning quadrilateral with a round void, the two parts that a straight cut makes of it, and a modulus."""
    low, high = draw(st.floats(20, 60)), draw(st.floats(20, 60))
    left, right = draw(st.floats(0.2, 0.8)), draw(st.floats(0.2, 0.8))
    corners = [(0.0, 0.0), (100.0, -low), (130.0, high), (10.0, 80.0)]
    a = (corners[0][0] + right * 100.0, -right * low)
    b = (corners[3][0] + left * 120.0, 80.0 + left * (high - 80.0))
    whole: Outline = [polygon(corners)]
    first: Outline = [polygon([corners[0], a, b, corners[3]])]
    second: Outline = [polygon([a, corners[1], corners[2], b])]
    return whole, first, second, draw(st.floats(1.0, 1e6))


@settings(deadline=None, max_examples=30)
@given(cuts())
def test_parts_of_one_material_are_the_plain_section_of_their_union(
    found: tuple[Outline, Outline, Outline, float],
) -> None:
    whole, first, second, modulus = found
    refuse_overlaps([("1", regions_of(first)), ("2", regions_of(second))])
    result = composite((first, modulus), (second, modulus))
    regions = regions_of(whole)
    plain = area_properties(Section("1", regions, "mm", input_rounding(regions))).properties
    scale = 0.5 * (plain["polar_moment"].value or 0.0)
    for key, same in PLAIN.items():
        expected = plain[same].value
        natural = {"transformed_product_of_inertia": scale, "principal_angle": 57.3}.get(key, abs(expected or 0.0))
        if key.startswith("elastic_centroid"):
            natural = 130.0
        assert value(result, key) == pytest.approx(expected, abs=2e-13 * natural)


@settings(deadline=None, max_examples=30)
@given(st.floats(-1e4, 1e4), st.floats(-1e4, 1e4), st.floats(-180, 180), st.floats(0.01, 100.0), st.floats(1.0, 3e5))
def test_moved_and_turned(dx: float, dy: float, turn: float, ratio: float, modulus: float) -> None:
    beam, slab = i_section(200, 100, 5.6, 8.5, 12), rectangle(-70, 100, 120, 40)
    still = composite((beam, modulus), (slab, ratio * modulus))
    moved = composite(
        (translated(rotated(beam, turn), dx, dy), modulus), (translated(rotated(slab, turn), dx, dy), ratio * modulus)
    )
    near = 1e-11  # what coordinates of 1e4 leave of lengths of 5
    for key in ("axial_stiffness", "bending_stiffness_1", "bending_stiffness_2"):
        assert value(moved, key) == pytest.approx(value(still, key), rel=near)
    centroid = complex(value(still, "elastic_centroid_x"), value(still, "elastic_centroid_y"))
    at = centroid * rect(1, math.radians(turn)) + complex(dx, dy)
    assert value(moved, "elastic_centroid_x") == pytest.approx(at.real, abs=1e-9)
    assert value(moved, "elastic_centroid_y") == pytest.approx(at.imag, abs=1e-9)
    twice = math.radians(2 * (value(moved, "principal_angle") - value(still, "principal_angle") - turn))
    assert math.cos(twice) == pytest.approx(1.0, abs=1e-12)


@settings(deadline=None, max_examples=30)
@given(st.permutations([0, 1, 2]), st.lists(st.floats(10.0, 3e5), min_size=3, max_size=3))
def test_the_order_of_the_materials_changes_the_reference_alone(order: list[int], moduli: list[float]) -> None:
    outlines = [rectangle(0, 0, 30, 10), rectangle(5, 10, 10, 40), [circle(60.0, 5.0, 12.0)]]
    one = composite(*((outlines[k], moduli[k]) for k in range(3)))
    other = composite(*((outlines[k], moduli[k]) for k in order))
    assert other.reference == moduli[order[0]]
    for key in KEYS:
        if key == "mass_per_length":
            continue
        factor = one.reference / other.reference if key.startswith("transformed") else 1.0
        size = {"principal_angle": 57.3, "bending_stiffness_xy": one.natural_scale("bending_stiffness_xy")}
        size["transformed_product_of_inertia"] = factor * one.natural_scale("transformed_product_of_inertia")
        natural = max(abs(value(other, key)), size.get(key, 0.0))
        assert value(other, key) == pytest.approx(factor * value(one, key), abs=1e-12 * natural)


def test_the_claimed_errors_hold_far_from_the_origin() -> None:
    beam, slab = i_section(200, 100, 5.6, 8.5, 12), rectangle(-70, 100, 120, 40)
    near = composite((beam, 210e3), (slab, 30e3))
    far = composite((translated(beam, 5e5, 2.5e5), 210e3), (translated(slab, 5e5, 2.5e5), 30e3))
    for key in ("axial_stiffness", "bending_stiffness_x", "bending_stiffness_y", "bending_stiffness_xy"):
        prop = far.properties[key]
        natural = max(abs(value(near, key)), near.natural_scale(key))
        assert prop.error is not None
        assert abs(value(far, key) - value(near, key)) <= (prop.error + 1e-13) * natural
        assert prop.error < 1e-9


# ------------------------------------------------------------------ units


@pytest.mark.parametrize(
    ("out_unit", "force", "stiffness", "newtons", "mm"),
    [("mm", "N", "N*mm^2", 1.0, 1.0), ("cm", "kN", "kN*cm^2", 1e3, 10.0), ("m", "kN", "kN*m^2", 1e3, 1e3),
     ("in", "lbf", "lbf*in^2", LBF, 25.4)],
)  # fmt: skip
def test_units_of_the_stiffnesses(out_unit: str, force: str, stiffness: str, newtons: float, mm: float) -> None:
    """EA and EI of a steel bar of 2 in × 1 in, drawn in inches, in every unit of the results."""
    result = composite((rectangle(0, 0, 2, 1), 210e3), unit="in", out_unit=out_unit)
    axial, bending = result.properties["axial_stiffness"], result.properties["bending_stiffness_x"]
    assert (str(axial.unit), str(bending.unit)) == (force, stiffness)
    assert axial.value == pytest.approx(210e3 * 2 * 25.4**2 / newtons, rel=EXACT)
    assert bending.value == pytest.approx(210e3 * 2 / 12 * 25.4**4 / newtons / mm**2, rel=EXACT)
    assert str(result.properties["transformed_second_moment_x"].unit) == f"{out_unit}^4"


def test_the_pound_force_gives_back_a_stiffness_in_psi() -> None:
    """29 000 ksi on 1 in² is 29e6 lbf; 1 psi = 6894.757293168361 Pa (NIST SP 811, appendix B)."""
    assert parse_modulus("29000ksi") == pytest.approx(29e6 * 6894.757293168361e-6, rel=1e-15)
    result = composite((rectangle(0, 0, 1, 1), parse_modulus("29000ksi")), unit="in")
    assert value(result, "axial_stiffness") == pytest.approx(29e6, rel=EXACT)


@pytest.mark.parametrize(
    ("text", "mpa"),
    [("210GPa", 210e3), ("70000", 70e3), ("70000 MPa", 70e3), ("7e4N/mm^2", 70e3), ("7e4 N/mm²", 70e3),
     ("21000kN/cm2", 210e3), ("2.1e11Pa", 210e3), ("1.2e4psi", 82.73708751802033)],
)  # fmt: skip
def test_moduli_are_read_with_their_unit(text: str, mpa: float) -> None:
    assert parse_modulus(text) == pytest.approx(mpa, rel=1e-15)


@pytest.mark.parametrize("text", ["", "GPa", "210gpa", "mPa", "0", "-5GPa", "nan", "inf", "1e999", "210 GPa 3", "1,5"])
def test_moduli_that_are_refused(text: str) -> None:
    with pytest.raises(UsageError, match="modulus"):
        parse_modulus(text)


def test_compound_units_in_print() -> None:
    assert force_unit("m", 2).pretty == "kN·m²"
    assert force_unit("mm").pretty == "N"
    assert Unit("mm", 4).pretty == "mm⁴"


# ------------------------------------------------------------------ parts that touch, parts over each other


def parts(*outlines: Outline) -> list[tuple[str, tuple[Region, ...]]]:
    return [(f"P{k}", regions_of(outline)) for k, outline in enumerate(outlines)]


SQUARE = rectangle(0, 0, 10, 10)
RING = circular_hollow(100, 5)
BESIDE = {
    "along a whole side": (SQUARE, rectangle(10, 0, 5, 10)),
    "along a piece of a side": (SQUARE, rectangle(10, 3, 5, 30)),
    "in a corner": (SQUARE, rectangle(10, 10, 5, 5)),
    "apart": (SQUARE, rectangle(20, 0, 5, 5)),
    "a disc touches a side": (SQUARE, [circle(13.0, 5.0, 3.0)]),
    "a disc in a ring": (RING, [circle(1.0, 2.0, 20.0)]),
    "a disc that touches a ring from within": (RING, [circle(25.0, 0.0, 20.0)]),
    "a core that fills a ring": (RING, [circle(0.0, 0.0, 45.0)]),
    "a core and a sleeve": (RING, [circle(0.0, 0.0, 45.0), circle(0, 0, 60), circle(0, 0, 50, void=True)]),
    "two halves of a core": (
        RING,
        [[(45.0, 0.0, -45.0, 0.0, 1.0), (-45.0, 0.0, 45.0, 0.0, 0.0)]],
        [[(-45.0, 0.0, 45.0, 0.0, 1.0), (45.0, 0.0, -45.0, 0.0, 0.0)]],
    ),
    "six decimals": (rotated(SQUARE, 30), [polygon([(round(x, 6), round(y, 6)) for x, y, *_ in contour])
                                           for contour in rotated(rectangle(10, 2, 5, 30 / 7), 30)]),
}  # fmt: skip
OVER = {
    "crossing": (SQUARE, rectangle(5, 5, 10, 10)),
    "the same": (SQUARE, SQUARE),
    "the same circle, started elsewhere": ([circle(0, 0, 10)], [polygon_of_arcs(10.0, (1.0, 2.5, 4.0))]),
    "inside": (SQUARE, rectangle(2, 2, 3, 3)),
    "inside, on a side": (SQUARE, rectangle(2, 0, 3, 3)),
    "inside, in a corner": (SQUARE, rectangle(0, 0, 3, 3)),
    "a bar across": (SQUARE, rectangle(-5, 4, 20, 2)),
    "of one height, across": (SQUARE, rectangle(-5, 0, 20, 10)),
    "a disc over a ring": (RING, [circle(0.0, 0.0, 80.0)]),
    "a core too large": (RING, [circle(0.0, 0.0, 45.00001)]),
    "a core off its place": (RING, [circle(0.001, 0.0, 45.0)]),
    "a thin overlap": (SQUARE, rectangle(10 - 1e-4, 0, 5, 10)),
    "the bulge of an arc": (
        SQUARE,
        [[(10, 10, 10, 0, 0.001), (10, 0, 15, 0, 0), (15, 0, 15, 10, 0), (15, 10, 10, 10, 0)]],
    ),
    "one of several regions": (SQUARE + rectangle(40, 0, 10, 10), rectangle(20, 0, 5, 5) + rectangle(42, 2, 1, 1)),
}  # fmt: skip


@pytest.mark.parametrize("which", BESIDE)
def test_parts_may_touch(which: str) -> None:
    refuse_overlaps(parts(*BESIDE[which]))
    refuse_overlaps(parts(*reversed(BESIDE[which])))


@pytest.mark.parametrize("which", OVER)
def test_parts_may_not_lie_over_each_other(which: str) -> None:
    for outlines in (OVER[which], OVER[which][::-1]):
        with pytest.raises(OutlineError, match="layers P0 and P1 lie over each other at") as error:
            refuse_overlaps(parts(*outlines))
        found = error.value.findings[0]
        assert (found.code, found.severity) == ("regions-overlap", "error")
        assert found.at is not None


def test_the_place_of_an_overlap_is_in_it() -> None:
    with pytest.raises(OutlineError) as error:
        refuse_overlaps(parts(SQUARE, rectangle(5, 5, 10, 10)))
    x, y = error.value.findings[0].at or (math.nan, math.nan)
    assert 5 <= x <= 10
    assert 5 <= y <= 10


def test_parts_share_a_free_curve() -> None:
    """A hill of a cubic on the ground below it, and a mould that has the hill's own curve; raised, they overlap."""
    hill = Bezier((30 + 0j, 10 + 40j, -10 + 40j, -30 + 0j))
    solid: list[Curve] = [hill, Line(-30 + 0j, 30 + 0j)]
    frame = [30 + 0j, 60 + 0j, 60 + 60j, -60 + 60j, -60 + 0j, -30 + 0j]
    mould = [hill.reversed(), *(Line(a, b) for a, b in pairwise(frame))]
    below, above = assemble(solid).regions, assemble(mould).regions
    refuse_overlaps([("HILL", below), ("MOULD", above)])
    raised = assemble([curve.moved(1.0, 0.01j) for curve in solid]).regions
    with pytest.raises(OutlineError, match="HILL and MOULD lie over each other"):
        refuse_overlaps([("HILL", raised), ("MOULD", above)])


@settings(deadline=None, max_examples=40)
@given(sections(), st.floats(-180, 180), st.floats(-1e5, 1e5), st.floats(0, 360))
def test_a_section_its_mould_and_its_cores(curves: list[Curve], turn: float, far: float, way: float) -> None:
    """Wherever it lies and however it is turned, a section touches a mould that has its outline, and cores that fill
    its voids; moved by a hundredth it lies over the mould and over each core."""
    drawn = [curve.moved(rect(1, math.radians(turn)), complex(far, -0.7 * far)) for curve in curves]
    solid = assemble(drawn).regions
    outer = solid[0].outer
    x0, y0, x1, y1 = outer.packed.box
    frame = curves_of(rectangle(x0 - 5, y0 - 5, x1 - x0 + 10, y1 - y0 + 10))
    others = [("MOULD", assemble([*outer.curves, *frame]).regions)]
    others += [(f"CORE {k}", assemble(list(void.curves)).regions) for k, void in enumerate(solid[0].voids)]
    refuse_overlaps([("SOLID", solid), *others])
    moved = assemble([curve.moved(1.0, 0.01 * rect(1, math.radians(way))) for curve in drawn]).regions
    for other in others:
        with pytest.raises(OutlineError, match=f"SOLID and {other[0]} lie over each other"):
            refuse_overlaps([("SOLID", moved), other])


@st.composite
def stars(draw: st.DrawFn) -> list[tuple[float, float]]:
    """A star-shaped polygon with corners on a coarse grid, so that corners and sides meet others often."""
    n = draw(st.integers(3, 7))
    radii = draw(st.lists(st.integers(4, 12), min_size=n, max_size=n))
    x, y = draw(st.integers(-12, 12)), draw(st.integers(-12, 12))
    return [
        (x + round(r * math.cos(2 * math.pi * k / n)), y + round(r * math.sin(2 * math.pi * k / n)))
        for k, r in enumerate(radii)
    ]


@settings(deadline=None, max_examples=150)
@given(stars(), stars())
def test_overlaps_are_those_that_a_polygon_library_finds(
    one: list[tuple[float, float]], other: list[tuple[float, float]]
) -> None:
    a, b = shapely.Polygon(one), shapely.Polygon(other)
    assume(a.is_valid and b.is_valid and min(a.area, b.area) > 1)
    both = parts([polygon(one)], [polygon(other)])
    if a.intersection(b).area > 1e-9:
        with pytest.raises(OutlineError, match="lie over each other"):
            refuse_overlaps(both)
    else:
        refuse_overlaps(both)


def test_many_curves_that_touch_cost_no_square() -> None:
    """Two combs of 2000 teeth that fill each other: the search stays with the neighbours."""
    teeth = 500
    line = [complex(0.5 * (k + 1), float(k % 4 in (1, 2))) for k in range(2 * teeth)]
    upper = [*line, complex(teeth, 5), complex(0.5, 5)]
    lower = [*line, complex(teeth, -5), complex(0.5, -5)]
    refuse_overlaps(parts(*([polygon([(z.real, z.imag) for z in comb])] for comb in (upper, lower))))


# ------------------------------------------------------------------ drawings and the command


def drawn(folder: Path, draw: Any, units: int = 4) -> Path:
    document = ezdxf.new("R2010", setup=["linetypes"])
    document.header["$INSUNITS"] = units
    for layer in ("WOOD", "STEEL", "EMPTY"):
        document.layers.add(layer)
    draw(document.modelspace())
    path = folder / "composite.dxf"
    document.saveas(path)
    return path


def flitch(space: Any) -> None:
    draw_contours(space, rectangle(0, 0, 150, 250), "WOOD")
    draw_contours(space, rectangle(150, 0, 10, 250), "STEEL")
    space.add_text("steel", dxfattribs={"layer": "STEEL"})
    draw_contours(space, rectangle(500, 0, 10, 10), "0")


BOTH = ("--material", "WOOD=11GPa,500", "--material", "steel=210GPa,steel")


def test_the_analysis_has_the_parts_and_the_composite(tmp_path: Path) -> None:
    path = drawn(tmp_path, flitch)
    analysis = edgetally.analyse(path, material=["WOOD=11GPa,500", "steel=210GPa,steel"])
    assert [s.name for s in analysis.sections] == ["WOOD", "STEEL"]
    assert analysis.drawing.reading.layers == ("WOOD", "STEEL")
    assert (analysis.drawing.reading.read, analysis.drawing.reading.used) == (3, 2)
    assert analysis.drawing.reading.elsewhere == 1
    assert analysis.sections[0].properties["mass_per_length"].value == pytest.approx(0.0375 * 500)
    assert "torsion_constant" not in analysis.sections[0].properties
    assert [f.code for f in analysis.findings if "torsion" in f.message] == ["torsion-unsolved"]
    assert analysis.composite is not None
    bending = analysis.composite.properties["bending_stiffness_x"]
    assert bending.value == pytest.approx((11e3 * 150 + 210e3 * 10) * 250**3 / 12, rel=EXACT)
    assert edgetally.analyse(path, layer="WOOD", torsion=False).composite is None


def test_scale_and_units_reach_the_composite(tmp_path: Path) -> None:
    plain = edgetally.analyse(drawn(tmp_path, flitch), material=["WOOD=11GPa", "STEEL=210GPa"]).composite
    scaled = edgetally.analyse(
        drawn(tmp_path, flitch), material=["WOOD=11GPa", "STEEL=210GPa"], scale=2, out_units="m"
    ).composite
    assert plain is not None
    assert scaled is not None
    assert value(scaled, "axial_stiffness") == pytest.approx(4 * value(plain, "axial_stiffness") / 1e3, rel=EXACT)
    assert value(scaled, "bending_stiffness_y") == pytest.approx(
        16 * value(plain, "bending_stiffness_y") / 1e9, rel=EXACT
    )
    assert "mass_per_length" not in plain.properties
    half = edgetally.analyse(drawn(tmp_path, flitch), material=["WOOD=11GPa", "STEEL=210GPa,steel"]).composite
    assert half is not None
    assert "mass_per_length" not in half.properties
    assert composite_blocks(half)[0].notes[-1] == "The mass is not given: WOOD has no density."
    alone = edgetally.analyse(drawn(tmp_path, flitch), material="STEEL=210GPa").composite
    assert alone is not None
    assert value(alone, "axial_stiffness") == pytest.approx(210e3 * 2500, rel=EXACT)


def test_table_and_document(tmp_path: Path) -> None:
    path = drawn(tmp_path, flitch)
    code, out, err = run("tally", path, *BOTH)
    assert (code, err) == (0, "")
    for words in ("Composite section", "EI_x", "N·mm²", "E_ref = 11000 MPa", "Extreme fibres of each part",
                  "section WOOD", "torsion and shear of a composite section are not given"):  # fmt: skip
        assert words in out
    code, out, _ = run("tally", path, *BOTH, "--json")
    document = json.loads(out)
    found = document["composite"]
    assert set(found) == {"reference_modulus", "parts", "properties"}
    assert found["reference_modulus"] == {"value": 11000.0, "unit": "MPa"}
    assert [part["layer"] for part in found["parts"]] == ["WOOD", "STEEL"]
    assert found["parts"][1]["density"] == {"value": 7850.0, "unit": "kg/m^3"}
    assert found["parts"][1]["area"]["value"] == pytest.approx(2500)
    assert set(found["properties"]) == set(KEYS)
    assert found["properties"]["bending_stiffness_y"]["unit"] == "N*mm^2"
    assert all(0 <= p["error"] < 1e-12 for p in found["properties"].values())
    assert "composite" not in edgetally.analyse(path, layer="WOOD", torsion=False).to_dict()


def test_csv_has_a_row_a_part_and_one_of_the_whole_in_columns_of_its_own(tmp_path: Path) -> None:
    _, out, _ = run("tally", drawn(tmp_path, flitch), *BOTH, "--csv")
    rows = list(csv.DictReader(io.StringIO(out)))
    assert [row["section"] for row in rows] == ["WOOD", "STEEL", "composite"]
    assert float(rows[0]["area [mm^2]"]) == pytest.approx(37500)
    assert rows[2]["area [mm^2]"] == rows[0]["axial_stiffness [N]"] == ""
    assert float(rows[2]["axial_stiffness [N]"]) == pytest.approx(11e3 * 37500 + 210e3 * 2500)
    assert float(rows[2]["mass_per_length [kg/m]"]) == pytest.approx(0.0375 * 500 + 0.0025 * 7850)
    assert len({len(row) for row in csv.reader(io.StringIO(out))}) == 1


def test_the_sheet_is_written(tmp_path: Path) -> None:
    target = tmp_path / "sheet.pdf"
    code, out, _ = run("sheet", drawn(tmp_path, flitch), *BOTH, "-o", target)
    assert code == 0
    assert "Composite section" in out
    assert target.read_bytes().startswith(b"%PDF-")


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (("--material", "WOOD"), "write LAYER=E or LAYER=E,DENSITY"),
        (("--material", "WOOD=,500"), "write LAYER=E or LAYER=E,DENSITY"),
        (("--material", "WOOD=11GPa,"), "write LAYER=E or LAYER=E,DENSITY"),
        (("--material", "=11GPa"), "write LAYER=E or LAYER=E,DENSITY"),
        (("--material", "WOOD=0"), "must be finite and greater than 0"),
        (("--material", "WOOD=-3GPa"), "must be finite and greater than 0"),
        (("--material", "WOOD=nan"), "modulus 'nan' is not understood"),
        (("--material", "WOOD=11GPa,oak"), "density 'oak' is not understood"),
        (("--material", "WOOD=11GPa,-1"), "density '-1' is not understood"),
        (("--material", "WOOD=1", "--material", "wood=2"), "layer wood is given a material twice"),
        (("--material", "W*=1"), "no layer"),
        (("--material", "GLASS=1"), "no layer"),
        (("--material", "EMPTY=1"), "nothing is drawn on layer EMPTY"),
        ((*BOTH, "--layer", "WOOD"), "--layer and --material contradict"),
        ((*BOTH, "--each"), "--each and --material contradict"),
        ((*BOTH, "--pick", "1"), "--pick and --material contradict"),
        ((*BOTH, "--density", "steel"), "--density and --material contradict"),
    ],
)
def test_refusals(tmp_path: Path, words: tuple[str, ...], message: str) -> None:
    code, out, err = run("tally", drawn(tmp_path, flitch), *words)
    assert (code, out) == (2, "")
    assert message in err


def test_a_layer_without_an_outline_and_one_over_another_are_refused_by_name(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        draw_contours(space, rectangle(0, 0, 150, 250), "WOOD")
        space.add_line((0, 0), (10, 0), dxfattribs={"layer": "STEEL"})

    code, _, err = run("tally", drawn(tmp_path, draw), *BOTH)
    assert code == 2
    assert "layer STEEL: " in err

    def over(space: Any) -> None:
        draw_contours(space, rectangle(0, 0, 150, 250), "WOOD")
        draw_contours(space, rectangle(149, 0, 10, 250), "STEEL")

    code, _, err = run("tally", drawn(tmp_path, over), *BOTH)
    assert code == 2
    assert "the parts on layers WOOD and STEEL lie over each other at (" in err
    assert "LWPOLYLINE #" in err


def test_every_key_has_a_name_a_symbol_and_a_unit() -> None:
    for symbols in ("plain", "en", "us"):
        for key in KEYS:
            assert "{" not in composite_name(key, symbols) + composite_symbol(key, symbols)
    assert composite_symbol("bending_stiffness_x", "en") == "EI_y"
    readme = (Path(__file__).parent.parent / "README.md").read_text()
    for key in KEYS:
        assert f"`{key}`" in readme


def test_the_picture_has_a_grey_a_part_within_the_paper() -> None:
    result = composite((rectangle(0, 0, 150, 250), 11e3), (rectangle(150, 0, 10, 250), 210e3), (SHELF, 70e3))
    picture = composite_picture(result, 400.0, 300.0)
    bodies = [item for item in picture.items[:3] if isinstance(item, Drawn)]
    greys = [body.style.fill[0] for body in bodies if body.style.fill]
    assert greys[0] > greys[2] > greys[1]  # the stiffer the darker
    for item in picture.items:
        if isinstance(item, Drawn):
            for run_ in item.runs:
                for curve in run_:
                    assert 0 <= curve.start.real <= 400
                    assert 0 <= curve.start.imag <= 300


SHELF = rectangle(0, 250, 160, 20)
