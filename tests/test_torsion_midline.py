"""The thin-walled second opinion: closed forms of the midline, which outlines are strips, and how far it is off."""

from __future__ import annotations

from cmath import exp
from itertools import pairwise
from math import cos, pi, sin, tau

import pytest

import outlines
from edgetally.curves import Arc, Line
from edgetally.section.midline import Strip, strip_of, thin_walled
from edgetally.section.solver import solve
from torsion_sections import TABLE, Loops, disc, hole, loops_of, moved, polygon


def _polyline(*points: tuple[float, float]) -> tuple[Line, ...]:
    return tuple(Line(complex(*a), complex(*b)) for a, b in pairwise(points))


def test_lipped_channel() -> None:
    """e = b(3h²b + 6h²c − 8c³)/(h³ + 6h²b + 6h²c + 8c³ − 12hc²) from the web (Roark and Young, Table 9.2)."""
    h, b, c, t = 198.0, 69.0, 19.0, 2.0
    line = _polyline((b, c), (b, 0), (0, 0), (0, h), (b, h), (b, h - c))
    found = thin_walled(Strip(t, line, closed=False))
    e = b * (3 * h**2 * b + 6 * h**2 * c - 8 * c**3) / (h**3 + 6 * h**2 * (b + c) + 8 * c**3 - 12 * h * c**2)
    assert found.shear_centre.real == pytest.approx(-e, rel=1e-12)
    assert found.shear_centre.imag == pytest.approx(h / 2, rel=1e-12)
    assert found.warping_constant == pytest.approx(4059635276.00232, rel=1e-12)  # by sectorial coordinates, 34 digits
    assert found.torsion_constant == pytest.approx(t**3 * (h + 2 * b + 2 * c) / 3, rel=1e-14)


def test_hat() -> None:
    h, b, c = 198.0, 69.0, 19.0
    line = _polyline((b, -c), (b, 0), (0, 0), (0, h), (b, h), (b, h + c))
    e = b * (3 * h**2 * b + 6 * h**2 * c - 8 * c**3) / (h**3 + 6 * h**2 * (b + c) + 8 * c**3 + 12 * h * c**2)
    assert thin_walled(Strip(2.0, line, closed=False)).shear_centre.real == pytest.approx(-e, rel=1e-12)


@pytest.mark.parametrize("turn", [0.0, 0.7])
def test_zed(turn: float) -> None:
    """C_w = t b³h²(b + 2h)/(12(2b + h)) about the middle (Timoshenko)."""
    b, h, t = 47.0, 94.0, 6.0
    line = _polyline((-b, h / 2), (0, h / 2), (0, -h / 2), (b, -h / 2))
    found = thin_walled(Strip(t, tuple(piece.moved(exp(1j * turn), 3 + 4j) for piece in line), closed=False))
    assert found.warping_constant == pytest.approx(t * b**3 * h**2 * (b + 2 * h) / (12 * (2 * b + h)), rel=1e-12)
    assert abs(found.shear_centre - (3 + 4j)) < 1e-9


@pytest.mark.parametrize("half", [1.0, pi / 2, pi])
def test_circular_arc(half: float) -> None:
    """e = 2R(sin α − α cos α)/(α − sin α cos α); C_w = (2tR⁵/3)(α³ − 6(sin α − α cos α)²/(α − sin α cos α))."""
    r, t = 50.0, 4.0
    arc = Arc.from_centre(0j, r, -half, 2 * half)
    found = thin_walled(Strip(t, (arc,), closed=False))
    part, whole = sin(half) - half * cos(half), half - sin(half) * cos(half)
    assert found.shear_centre.real == pytest.approx(2 * r * part / whole, rel=1e-10)
    assert found.warping_constant == pytest.approx(2 * t * r**5 / 3 * (half**3 - 6 * part**2 / whole), rel=1e-9)


def test_cells() -> None:
    """Bredt 4A²t/s, with t³s/3; a round tube keeps half its area in shear, a square one half as well, and warps not."""
    r, t = 50.0, 2.0
    tube = thin_walled(Strip(t, (Arc.from_centre(0j, r, 0.0, tau),), closed=True))
    assert tube.torsion_constant == pytest.approx(2 * pi * r**3 * t + t**3 * tau * r / 3, rel=1e-12)
    assert tube.shear_area_x == pytest.approx(pi * r * t, rel=1e-12)
    assert tube.warping_constant < 1e-10 * r**5 * t
    square = thin_walled(Strip(t, (*_polyline((0, 0), (90, 0), (90, 90), (0, 90), (0, 0)),), closed=True))
    assert square.torsion_constant == pytest.approx(90**3 * t + t**3 * 360 / 3, rel=1e-12)
    assert square.warping_constant < 1e-10 * 90**5 * t
    assert abs(square.shear_centre - (45 + 45j)) < 1e-10


BENT = [(0, 0, 2), (60, 0, 0), (60, 2, 0), (2, 2, 0), (2, 60, 0), (0, 60, 0)]
STRIPS: dict[str, tuple[Loops, float, bool]] = {
    "plate": ([polygon((0, 0), (80, 0), (80, 2), (0, 2))], 2.0, False),
    "sharp lipped channel": (TABLE[2].loops, 1.5, False),
    "bent lipped channel": (TABLE[0].loops, 1.5, False),
    "bent, far and turned": (moved(TABLE[1].loops, exp(0.4j), 5e5 + 2e5j), 1.5, False),
    "lipped zed": (loops_of(outlines.lipped_zed(150.0, 60.0, 50.0, 15.0, 2.0, 3.0)), 2.0, False),
    "sharp inside": (loops_of([outlines.fillet_polygon(BENT)]), 2.0, False),
    "split tube": (loops_of(outlines.split_tube(50.0, 3.0, 1.0)), 3.0, False),
    "round tube": ([disc(50.0), hole(48.0)], 2.0, True),
    "sharp square tube": (TABLE[7].loops, 2.0, True),
    "rounded square tube": (TABLE[8].loops, 2.0, True),
}  # fmt: skip


@pytest.mark.parametrize("name", STRIPS)
def test_strips_are_recognised(name: str) -> None:
    loops, thickness, closed = STRIPS[name]
    strip = strip_of(loops)
    assert strip is not None
    assert strip.thickness == pytest.approx(thickness, rel=1e-6)
    assert strip.closed == closed
    for a, b in pairwise(strip.midline):
        assert abs(a.end - b.start) < 1e-6
    exact, thin = solve(loops, poisson=0.0), thin_walled(strip)
    # on these the formulas are known to miss by so much
    assert thin.torsion_constant == pytest.approx(exact.torsion_constant.value, rel=0.06)
    if closed or name == "plate":
        return
    assert thin.warping_constant == pytest.approx(exact.warping_constant.value, rel=0.06, abs=1e6)
    assert abs(thin.shear_centre - exact.shear_centre) < 0.03 * 200
    assert thin.shear_area_y == pytest.approx(exact.shear_area_y.value, rel=0.1)


def test_what_is_no_strip() -> None:
    for loops in (
        TABLE[3].loops,
        TABLE[6].loops,
        [disc(1.0)],
        [polygon((0, 0), (1, 0), (1, 1), (0, 1))],
        [disc(2.0), hole(1.0, 0.4 + 0j)],
        [polygon((0, 0), (80, 0), (80, 3), (0, 2))],
        [disc(3.0), hole(1.0, 1j), hole(1.0, -1j)],
    ):
        assert strip_of(loops) is None
