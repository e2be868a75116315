"""Every surface moved: rates against exactly offset outlines, closed forms, and what cannot be moved."""

from __future__ import annotations

import cmath
import json
import math
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from build import curves_of, section_of
from command import run
from drawings import drawing, square
from edgetally.curves import Curve
from edgetally.errors import OutlineError
from edgetally.outline.offset import moved_outward
from edgetally.outline.records import Region
from edgetally.section.area import area_properties
from edgetally.section.offsets import offset_rates
from edgetally.section.record import Section
from outlines import i_section, lipped_channel

SAMPLES = Path(__file__).parent.parent / "sample_drawings"


def values(regions: tuple[Region, ...]) -> dict[str, float]:
    return {k: p.value or 0.0 for k, p in area_properties(Section("1", regions, "mm")).properties.items()}


def check_rates(curves: list[Curve], step: float) -> None:
    """Compare with Richardson's extrapolation of central differences of exactly moved outlines."""
    section = section_of(curves)
    result = area_properties(section)
    rates = offset_rates(section, result)
    moved = {d: values(moved_outward(section.regions, d).regions) for d in (-step, step, -step / 2, step / 2)}
    now = values(section.regions)
    for key, rate in rates.items():
        wide = (moved[step][key] - moved[-step][key]) / (2 * step)
        narrow = (moved[step / 2][key] - moved[-step / 2][key]) / step
        difference = (4 * narrow - wide) / 3
        natural = now["polar_moment"] if key.startswith("product") else max(1.0, abs(now[key]))
        assert rate == pytest.approx(difference, rel=2e-7, abs=2e-7 * natural / section.size), key


@settings(deadline=None, max_examples=30)
@given(st.floats(0.0, 6.0), st.floats(5.0, 14.0), st.floats(60.0, 300.0), st.floats(-1.5, 1.5), st.booleans())
def test_rates_are_those_of_exactly_moved_outlines(
    turn: float, radius: float, height: float, lean: float, channel: bool
) -> None:
    if channel:
        plain = lipped_channel(height, 60.0, 18.0, 2.0, 3.0)
    else:
        plain = i_section(height, 50.0 + 20.0 * lean, 5.0, 8.0, radius)
    place = cmath.rect(1.0, turn)
    check_rates([curve.moved(place, 40 - 70j) for curve in curves_of(plain)], 2e-3)


def test_a_plate_with_a_hole() -> None:
    outer = [(0, 0, 60, 0, 0), (60, 0, 60, 30, 0), (60, 30, 0, 30, 0), (0, 30, 0, 0, 0)]
    hole = [(15, 15, 25, 15, 1.0), (25, 15, 15, 15, 1.0)]
    curves = curves_of([outer, hole])
    check_rates(curves, 1e-3)
    section = section_of(curves)
    rates = offset_rates(section, area_properties(section), density=None)
    # closed forms: (b + 2δ)(h + 2δ) − π(r − δ)²
    assert rates["area"] == pytest.approx(2 * (60 + 30) + 2 * math.pi * 5, rel=1e-14)
    assert rates["outer_perimeter"] == pytest.approx(8.0, rel=1e-14)
    assert rates["total_perimeter"] == pytest.approx(8.0 - 2 * math.pi, rel=1e-14)
    assert rates["width"] == rates["height"] == pytest.approx(2.0, rel=1e-14)


def test_closed_forms_of_rectangle_and_ring() -> None:
    b, h = 60.0, 30.0
    section = section_of(curves_of([[(0, 0, b, 0, 0), (b, 0, b, h, 0), (b, h, 0, h, 0), (0, h, 0, 0, 0)]]))
    rates = offset_rates(section, area_properties(section))
    assert rates["second_moment_x"] == pytest.approx((2 * h**3 + 6 * b * h**2) / 12, rel=1e-13)
    assert rates["elastic_modulus_x_top"] == pytest.approx((2 * h**2 + 4 * b * h) / 6, rel=1e-13)
    d = 0.7
    moved = values(moved_outward(section.regions, d).regions)
    assert moved["second_moment_x"] == pytest.approx((b + 2 * d) * (h + 2 * d) ** 3 / 12, rel=1e-13)
    ring = [[(-10, 0, 10, 0, 1.0), (10, 0, -10, 0, 1.0)], [(-8, 0, 8, 0, 1.0), (8, 0, -8, 0, 1.0)]]
    section = section_of(curves_of(ring))
    result = area_properties(section)
    rates = offset_rates(section, result)
    assert rates["area"] == pytest.approx(2 * math.pi * 18, rel=1e-13)
    assert "principal_angle" not in rates  # every axis is principal
    for d in (-0.5, 0.5):
        moved = values(moved_outward(section.regions, d).regions)
        assert moved["area"] == pytest.approx(math.pi * ((10 + d) ** 2 - (8 - d) ** 2), rel=1e-13)
        assert moved["second_moment_x"] == pytest.approx(math.pi / 4 * ((10 + d) ** 4 - (8 - d) ** 4), rel=1e-13)


def test_what_cannot_be_moved_says_where() -> None:
    channel = section_of(curves_of(lipped_channel(100.0, 50.0, 15.0, 2.0, 3.0))).regions
    moved_outward(channel, -0.9)
    for distance, words in ((-1.1, "(meet|eats)"), (-3.0, "(meet|eats)"), (3.5, "eats")):
        with pytest.raises(OutlineError, match=words) as caught:
            moved_outward(channel, distance)
        assert caught.value.findings[0].code == "offset-impossible"
    circles = [[(-r, 0, r, 0, 1.0), (r, 0, -r, 0, 1.0)] for r in (10, 8)]
    ring = section_of(curves_of(circles))
    for distance in (-1.01, 8.01):
        with pytest.raises(OutlineError):
            moved_outward(ring.regions, distance)


def ellipse(space: Any) -> None:
    space.add_ellipse((5, 3), (30, 0), 0.5, dxfattribs={"layer": "OUTLINE"})


def test_an_ellipse_is_moved_by_fine_chords(tmp_path: Path) -> None:
    path = drawing(tmp_path, ellipse)
    code, out, _ = run("tally", path, "--layer", "OUTLINE", "--offset", "0.4mm", "--json")
    assert code == 0
    section = json.loads(out)["sections"][0]
    band = section["offset"]
    assert (band["delta"], band["unit"], band["by_chords"]) == (0.4, "mm", True)
    area = band["properties"]["area"]
    perimeter = section["properties"]["outer_perimeter"]["value"]
    assert area["rate"] == pytest.approx(perimeter, rel=1e-9)
    # Steiner: the area of the parallel body is A + P·δ + π·δ² for a convex outline, exactly
    exact = section["properties"]["area"]["value"] + 0.4 * perimeter + math.pi * 0.16
    assert area["exact_plus"] == pytest.approx(exact, rel=1e-6)


def test_units_text_and_bad_input(tmp_path: Path) -> None:
    path = drawing(tmp_path, square)
    code, out, _ = run("tally", path, "--layer", "OUTLINE", "--offset", "-0.1mm", "--out-units", "cm", "--json")
    assert code == 0
    band = json.loads(out)["sections"][0]["offset"]
    assert band["delta"] == pytest.approx(0.01)
    assert band["properties"]["area"]["rate"] == pytest.approx(4.0)
    assert band["properties"]["area"]["exact_plus"] == pytest.approx(1.02**2)
    code, out, _ = run("tally", path, "--layer", "OUTLINE", "--offset", "0.1mm")
    assert "Every surface moved by 0.1 mm" in out
    code, out, _ = run("tally", path, "--layer", "OUTLINE", "--offset", "6mm")
    assert code == 1
    assert "offset-impossible" in out
    for bad in ("0.1", "0mm", "nanmm", "1km"):
        code, _, err = run("tally", path, "--layer", "OUTLINE", "--offset", bad)
        assert code == 2, bad
        assert bad in err
