"""Arcs drawn as chords are found, with the area that they lose."""

from __future__ import annotations

import math
from cmath import rect

import pytest

from build import curves_of
from edgetally.curves import Arc, Curve, Line
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
