"""Arcs drawn as chords are found, with the area that they lose."""

from __future__ import annotations

import math
from cmath import rect

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from build import curves_of
from edgetally.curves import Arc, Bezier, Curve, Line
from edgetally.outline.assembly import assemble
from edgetally.outline.chords import chopped_arcs, chord_findings
from outlines import i_section, regular_polygon


def polygon(points: list[complex]) -> list[Curve]:
    return [Line(a, b) for a, b in zip(points, [*points[1:], points[0]], strict=True)]


def circle(n: int, radius: float = 10.0, centre: complex = 0j) -> list[complex]:
    return [centre + rect(radius, 2 * math.pi * k / n) for k in range(n)]


@pytest.mark.parametrize(("n", "percent"), [(32, 0.64), (72, 0.127), (360, 0.0051)])
def test_a_circle_of_chords_and_the_share_it_loses(n: int, percent: float) -> None:
    """An n-gon loses the share 1 − sin(2π/n)/(2π/n) of the circle's area (elementary geometry)."""
    region = assemble(polygon(circle(n))).regions[0]
    (arc,) = chopped_arcs(region.outer)
    assert (arc.count, arc.radius) == (n, pytest.approx(10.0, rel=1e-9))
    assert arc.area == pytest.approx(100 * math.pi - region.area, rel=1e-9)
    assert 100 * arc.area / (100 * math.pi) == pytest.approx(percent, rel=0.01)
    (finding,) = chord_findings([region], "mm")
    assert (finding.code, finding.severity) == ("chopped-arc", "warning")


def test_a_chopped_fillet_between_true_sides() -> None:
    n, r = 9, 5.0
    corner = [15 - r + 1j * r + rect(r, -math.pi / 2 + k * math.pi / 2 / n) for k in range(n + 1)]
    region = assemble(polygon([0j, *corner, 15 + 20j, 20j])).regions[0]
    (arc,) = chopped_arcs(region.outer)
    assert arc.count == n
    assert arc.radius == pytest.approx(r, rel=1e-9)
    whole = 300 - (1 - math.pi / 4) * r**2
    assert arc.area == pytest.approx(whole - region.area, rel=1e-9)


def test_a_chopped_void_leaves_too_much_material() -> None:
    outline = assemble(polygon([-20 - 20j, 20 - 20j, 20 + 20j, -20 + 20j]) + polygon(circle(48, 5.0)))
    (arc,) = chopped_arcs(outline.regions[0].voids[0])
    assert arc.area < 0
    assert outline.regions[0].area + arc.area == pytest.approx(1600 - 25 * math.pi, rel=1e-9)
    assert "has too much by" in chord_findings(outline.regions, "mm")[0].message


@pytest.mark.parametrize("sides", [3, 5, 6, 8, 12, 20])
def test_regular_polygons_of_few_sides_are_shapes_of_their_own(sides: int) -> None:
    assert chord_findings(assemble(curves_of(regular_polygon(sides, 20))).regions, "mm") == []


def test_true_arcs_and_sections_are_left_alone() -> None:
    assert chord_findings(assemble([Arc.from_centre(0, 5, 0, 2 * math.pi)]).regions, "mm") == []
    assert chord_findings(assemble(curves_of(i_section(200, 100, 5.6, 8.5, 12))).regions, "mm") == []
    comb = [0j] + [complex(k // 2, 3 + k % 2) for k in range(40)] + [20 + 0j]
    assert chord_findings(assemble(polygon(comb)).regions, "mm") == []


def test_fine_chords_are_a_note() -> None:
    (finding,) = chord_findings(assemble(polygon(circle(2000))).regions, "mm")
    assert finding.severity == "note"


def test_points_rounded_to_three_decimals_are_still_found() -> None:
    points = [complex(round(z.real, 3), round(z.imag, 3)) for z in circle(60, 12.0)]
    (arc,) = chopped_arcs(assemble(polygon(points)).regions[0].outer)
    assert arc.count == 60


def ellipse(n: int, a: float, b: float, turn: float = 0.0) -> list[complex]:
    angles = [2 * math.pi * k / n for k in range(n)]
    return [rect(1.0, turn) * complex(a * math.cos(t), b * math.sin(t)) for t in angles]


@pytest.mark.parametrize(
    ("a", "b", "n", "within"),
    [(20, 10, 36, 0.01), (20, 10, 72, 0.003), (20, 18, 36, 1e-3), (20, 4, 120, 0.006), (50, 5, 360, 0.002)],
)
def test_an_ellipse_of_chords_and_about_what_it_loses(a: float, b: float, n: int, within: float) -> None:
    """πab less the n-gon of equal parameter steps, ½n·sin(2π/n)·ab (closed forms); the estimate says that it is one."""
    region = assemble(polygon(ellipse(n, a, b, 0.3))).regions[0]
    (run,) = chopped_arcs(region.outer)
    assert (run.count, run.radius) == (n, None)
    lost = math.pi * a * b - 0.5 * n * math.sin(2 * math.pi / n) * a * b
    assert region.area + lost == pytest.approx(math.pi * a * b, rel=1e-12)
    assert run.area == pytest.approx(lost, rel=within)
    (finding,) = chord_findings([region], "mm")
    assert (finding.code, finding.severity) == ("chopped-arc", "warning")
    assert "1 other curve was drawn as chords: the area lacks about" in finding.message
    assert "estimated" in finding.message


def test_the_estimate_is_of_second_order() -> None:
    """Twice as many chords: a quarter of the loss, and a quarter of the estimate's own relative error."""
    errors = []
    for n in (120, 240, 480):
        region = assemble(polygon(ellipse(n, 20, 8))).regions[0]
        (run,) = chopped_arcs(region.outer)
        errors.append(run.area / (math.pi * 160 - region.area) - 1)
    assert errors[0] / errors[1] == pytest.approx(4, rel=0.1)
    assert errors[1] / errors[2] == pytest.approx(4, rel=0.1)


@pytest.mark.parametrize("how", ["even", "halved"])
def test_a_chopped_spline_between_true_sides(how: str) -> None:
    """A cubic on top of a plate, by even steps and as an exporter that halves does it; area by the cubic itself."""
    control = [40 + 20j, 30 + 34j, 10 + 26j, 20j]
    curve = Bezier(tuple(control))
    steps = [k / 24 for k in range(25)]
    if how == "halved":
        steps = [k / 32 for k in range(16)] + [0.5 + k / 16 for k in range(9)]
    points = [curve.point(t) for t in steps]
    region = assemble(polygon([0j, 40 + 0j, *points])).regions[0]
    true = assemble([Line(0j, 40 + 0j), Line(40 + 0j, 40 + 20j), curve, Line(20j, 0j)]).regions[0]
    (run,) = chopped_arcs(region.outer)
    assert run.count == 24
    assert run.radius is None
    assert run.area == pytest.approx(true.area - region.area, rel=0.03)


def test_a_chopped_elliptic_void_leaves_too_much_material() -> None:
    region = assemble(polygon([-40 - 20j, 40 - 20j, 40 + 20j, -40 + 20j]) + polygon(ellipse(60, 20, 10))).regions[0]
    (finding,) = chord_findings([region], "mm")
    assert "has too much by about" in finding.message
    (run,) = chopped_arcs(region.voids[0])
    assert region.area + run.area == pytest.approx(3200 - 200 * math.pi, abs=0.02)


def test_arcs_of_different_radii_are_arcs_and_no_other_curve() -> None:
    """An oval of four tangent arcs, each of even chords: radii 10 and 30, over 120° and 60° each."""
    points: list[complex] = []
    # half angle 60° at the ends: centres on the x axis at ±d, on the y axis at ±d·tan 60° below, radii apart by 2d
    d, small = 10.0, 10.0
    large = small + 2 * d
    for centre, radius, begin, sweep, n in (
        (complex(d, 0), small, -60.0, 120.0, 24),
        (complex(0, -d * math.sqrt(3)), large, 60.0, 60.0, 24),
        (complex(-d, 0), small, 120.0, 120.0, 24),
        (complex(0, d * math.sqrt(3)), large, 240.0, 60.0, 24),
    ):
        points += [centre + rect(radius, math.radians(begin + sweep * k / n)) for k in range(n)]
    found = chopped_arcs(assemble(polygon(points)).regions[0].outer)
    assert sorted(round(arc.radius or 0.0, 6) for arc in found) == [10.0, 10.0, 30.0, 30.0]


def star(n: int, inner: float) -> list[complex]:
    return [rect(20.0 if k % 2 else inner, math.pi * k / n) for k in range(2 * n)]


FACETED = {
    "octagon": [rect(20, math.pi * k / 4) for k in range(8)],
    "octagon bar with uneven sides": [10 + 0j, 20 + 0j, 28 + 8j, 28 + 20j, 20 + 28j, 10 + 28j, 2 + 20j, 2 + 8j],
    "hexagon": [rect(20, math.pi * k / 3) for k in range(6)],
    "twelve points": star(12, 17.0),
    "twelve flat points": star(12, 19.8),
    "sixteen sides": [rect(20, math.pi * k / 8) for k in range(16)],
    "oval of sixteen sides": [complex(1.2 * z.real, z.imag) for z in (rect(20, math.pi * k / 8) for k in range(16))],
    "slightly roofed plate": [0j, 100 + 0j, 100 + 10j, 80 + 14j, 60 + 16j, 40 + 16j, 20 + 14j, 10j],
    "gear of straight flanks": [rect(20.0 + (k % 4 > 1), math.pi * k / 30) for k in range(60)],
    "saw": [0j, 100 + 0j, *(complex(100 - 2 * k, 20 + k % 2) for k in range(50))],
}


@pytest.mark.parametrize("points", FACETED.values(), ids=FACETED.keys())
def test_faceted_designs_are_what_they_are(points: list[complex]) -> None:
    assert chord_findings(assemble(polygon(points)).regions, "mm") == []


@settings(deadline=None, max_examples=40)
@given(st.lists(st.floats(0.8, 1.2), min_size=5, max_size=40), st.floats(0, 6))
def test_ragged_polygons_are_what_they_are(radii: list[float], turn: float) -> None:
    """Corners at even angles and random distances: what a person digitised, or a ragged edge."""
    n = len(radii)
    if any(abs(a - b) < 0.02 for a, b in zip(radii, [*radii[1:], radii[0]], strict=True)):
        return
    points = [rect(20 * r, turn + 2 * math.pi * k / n) for k, r in enumerate(radii)]
    assert all(run.count < 12 for run in chopped_arcs(assemble(polygon(points)).regions[0].outer))
