"""Torsion and warping: converged tables, closed forms, laws, and outlines that are hard."""

from __future__ import annotations

from cmath import exp, rect
from functools import cache
from itertools import pairwise
from math import acos, pi, radians, sqrt, tan, tau

import numpy as np
import pytest

import outlines
from edgetally.curves import Arc, EllipticArc, Line
from edgetally.curves.spline import bspline_pieces
from edgetally.section.solver import TorsionSolution, UnsolvableError, solve
from torsion_sections import (
    TABLE,
    chopped,
    disc,
    hole,
    loops_of,
    mirrored,
    moved,
    numbers,
    polygon,
    rectangle_torsion,
    sector,
    sector_torsion,
    semicircle,
    size_of,
)

GOOD = 1e-6
HONEST = 3.0  # an error that is given may be exceeded by no more than this


@cache
def _row(index: int) -> TorsionSolution:
    return solve(TABLE[index].loops, poisson=0.0)


def _rows() -> list[pytest.param]:
    return [pytest.param(k, id=row.name) for k, row in enumerate(TABLE)]


@pytest.mark.parametrize("index", _rows())
def test_table_of_check_values(index: int) -> None:
    row, solution = TABLE[index], _row(index)
    assert solution.reached
    for key in ("torsion_constant", "warping_constant", "shear_area_x", "shear_area_y"):
        number, expected = getattr(solution, key), getattr(row, key)
        assert number.value == pytest.approx(expected, rel=GOOD), key
        assert abs(number.value / expected - 1) <= HONEST * number.error + 6e-10, key
    off = abs(solution.shear_centre - row.shear_centre) / size_of(row.loops)
    assert off <= min(GOOD, HONEST * solution.shear_centre_error + 6e-10)


def test_a_tighter_tolerance_is_met() -> None:
    row = TABLE[5]
    solution = solve(row.loops, poisson=0.0, tolerance=1e-8)
    assert solution.reached
    for key in ("torsion_constant", "warping_constant", "shear_area_x", "shear_area_y"):
        assert getattr(solution, key).value == pytest.approx(getattr(row, key), rel=1e-9)


# ---------------------------------------------------------------------------------------------- closed forms


ELLIPSE = EllipticArc.from_axes(0j, 2 + 0j, 0.5, 0.0, tau)
GROOVE = [
    Arc.from_centre(0j, 1.0, acos(1 - 0.045), tau - 2 * acos(1 - 0.045)),
    Arc.from_centre(1 + 0j, 0.3, acos(0.15) - pi, -2 * acos(0.15)),
]
SLOTTED = [
    Arc.from_centre(0j, 52.0, 0.01, tau - 0.02),
    Line(rect(52.0, -0.01), rect(48.0, -0.01)),
    Arc.from_centre(0j, 48.0, -0.01, -(tau - 0.02)),
    Line(rect(48.0, 0.01), rect(52.0, 0.01)),
]

# Sources: Timoshenko and Goodier, Theory of Elasticity (ellipse, triangle, rectangle, sector series, grooved bar after
# Weber); the eccentric tube by the Laurent series after a Möbius map, 60 terms (Macdonald 1893); the semicircle from
# the sector's series. Where a value has no closed form, two discretisations of another boundary solver agree on it.
CLOSED = {
    "circle": ([disc(2.0, 3 + 4j)], 8 * pi, 0.0),
    "tube": ([disc(2.0), hole(1.0)], 7.5 * pi, 0.0),
    "thin tube": ([disc(1.0), hole(0.999)], pi / 2 * (1 - 0.999**4), 0.0),
    "ellipse": ([[ELLIPSE]], 5.02654824574367, 0.376991118430775),
    "square": ([polygon((0, 0), (1, 0), (1, 1), (0, 1))], 0.140577014955154, 0.000134402346),
    "rectangle 2:1": ([polygon((0, 0), (2, 0), (2, 1), (0, 1))], 2 * 0.228681677119571, 8 * 0.002540333971),
    "rectangle 10:1": ([polygon((0, 0), (10, 0), (10, 1), (0, 1))], 10 * 0.312325037457205, 1000 * 0.006642911093),
    "triangle": ([polygon((0, 0), (2, 0), (1, sqrt(3)))], sqrt(3) / 5, 0.00274928699614108),
    "right triangle": ([polygon((0, 0), (1, 0), (0, 1))], 0.0260896517115133, 0.000118584053868106),
    "hexagon": (loops_of(outlines.regular_polygon(6, 1.0)), 1.03545894964124, None),
    "semicircle": (semicircle(), 0.297556782059734, 0.00592003499374720),
    "grooved bar": ([GROOVE], 1.35385339351818, None),
    "eccentric tube": ([disc(2.0), hole(1.0, 0.4 + 0j)], 22.1790512066133, None),
    "slit tube": ([SLOTTED], 6627.643, 9.8840327e9),
    "L of three squares": ([polygon((0, 0), (2, 0), (2, 1), (1, 1), (1, 2), (0, 2))], 0.8563032104, 0.08075436),
    "plate with hole": (loops_of(outlines.rectangle_with_hole(100, 60, 12, 70, 20)), 4164985.9323, 370596305.79),
}  # fmt: skip


@pytest.mark.parametrize("name", CLOSED)
def test_closed_forms(name: str) -> None:
    loops, torsion, warping = CLOSED[name]
    solution = solve(loops)
    rounded = 2e-7 if name == "slit tube" else 1e-9  # printed to seven digits
    number = solution.torsion_constant
    assert abs(number.value / torsion - 1) <= min(GOOD, HONEST * number.error + rounded)
    if warping is not None:
        scale = warping or 1e-5 * torsion**2
        assert abs(solution.warping_constant.value - warping) / scale <= min(
            GOOD, HONEST * solution.warping_constant.error + 1e-8
        )


@pytest.mark.parametrize("degrees", [30, 45, 60, 120, 180, 300, 345])
def test_sectors_by_their_series(degrees: int) -> None:
    solution = solve(sector(radians(degrees)))
    assert solution.torsion_constant.value == pytest.approx(sector_torsion(radians(degrees)), rel=GOOD)


@pytest.mark.parametrize("ratio", [1.2, 3.0, 20.0, 100.0, 1000.0, 2000.0])
def test_rectangles_by_their_series(ratio: float) -> None:
    corners = np.array([0, ratio, ratio + 1j, 1j]) * exp(0.7j)
    solution = solve([polygon(*((z.real, z.imag) for z in corners))])
    number = solution.torsion_constant
    assert number.value == pytest.approx(rectangle_torsion(ratio, 1.0), rel=GOOD)
    assert abs(number.value / rectangle_torsion(ratio, 1.0) - 1) <= HONEST * number.error
    middle = complex(corners.mean())
    assert abs(solution.shear_centre - middle) <= GOOD * ratio


def test_thin_rectangle_warps_through_its_thickness() -> None:
    """C_w → b³t³/144 (Timoshenko)."""
    solution = solve([polygon((0, 0), (1000, 0), (1000, 1), (0, 1))])
    assert solution.warping_constant.value == pytest.approx(1000**3 / 144, rel=1e-3)


def test_shear_centre_of_the_solid_semicircle() -> None:
    """8R/(5π) above the flat side."""
    assert abs(solve(semicircle(5.0)).shear_centre - 8 * 5.0 / (5 * pi) * 1j) < 1e-6


def test_shear_centres_of_outlines_without_a_closed_form() -> None:
    plate = solve(CLOSED["plate with hole"][0])
    assert abs(plate.shear_centre - (48.0035862957 + 33.0093289668j)) < 1e-7
    slit = solve([SLOTTED])
    assert abs(slit.shear_centre + 99.8352465592) < 1e-5


def test_thin_tubes_tend_to_bredt() -> None:
    """4A²t/s + s·t³/3 with the middle line, to the order of t²."""
    for t, close in ((2.0, 3e-2), (0.5, 1e-2)):
        side = 100.0 - t
        solution = solve(loops_of(outlines.box(100.0, 100.0, t)))
        bredt = side**3 * t + 4 * side * t**3 / 3
        assert solution.torsion_constant.value == pytest.approx(bredt, rel=close)


def test_splines_and_ellipses() -> None:
    """A spline that is a circle, a similar hollow ellipse (Roark), a closed B-spline against its own finer solution."""
    control = [40, 30 + 30j, 36j, -36 + 24j, -30 - 18j, 6 - 30j]
    pieces = list(bspline_pieces(3, list(range(13)), [complex(c) for c in control + control[:3]]))
    coarse, fine = solve([pieces]), solve([pieces], tolerance=1e-10)
    for key, (value, error) in numbers(coarse).items():
        true = numbers(fine)[key][0]
        assert abs(value - true) <= HONEST * error * max(abs(true), 76.0 if "centre" in key else 0.0), key
    inner = EllipticArc.from_axes(0j, 1.5 + 0j, 0.6, 0.0, tau).reversed()
    hollow = solve([[EllipticArc.from_axes(0j, 2 + 0j, 0.6, 0.0, tau)], [inner]])
    assert hollow.torsion_constant.value == pytest.approx(5.45736223831315, rel=1e-9)
    corner = sqrt(0.5)
    square = [complex(x, y) for x, y in ((1, 0), (1, 1), (0, 1), (-1, 1), (-1, 0), (-1, -1), (0, -1), (1, -1), (1, 0))]
    nurbs = bspline_pieces(2, [0, 0, 0, 1, 1, 2, 2, 3, 3, 4, 4, 4], square, [1, corner] * 4 + [1])
    assert solve([list(nurbs)]).torsion_constant.value == pytest.approx(pi / 2, rel=1e-9)


# ---------------------------------------------------------------------------------------------- laws


ANGLE = TABLE[6]
HOLED = [
    *loops_of([outlines.fillet_polygon([(0, 0, 3), (60, 0, 0), (50, 40, 5), (0, 30, 0)])]),
    hole(6.0, 15 + 12j),
    hole(4.0, 40 + 25j),
]


@cache
def _holed() -> TorsionSolution:
    return solve(HOLED)


def _agree(a: TorsionSolution, b: TorsionSolution, factor: complex = 1.0, shift: complex = 0j) -> None:
    scale = abs(factor)
    for key, power in (("torsion_constant", 4), ("warping_constant", 6), ("shear_area_1", 2), ("shear_area_2", 2)):
        assert getattr(b, key).value == pytest.approx(scale**power * getattr(a, key).value, rel=1e-9), key
    assert abs(b.shear_centre - (factor * a.shear_centre + shift)) < 1e-9 * scale * 60 + 1e-12 * abs(shift)


@pytest.mark.parametrize("factor", [1.0, 1e-3, 25.4, 1j, exp(0.3j)])
@pytest.mark.parametrize("shift", [0j, 5e5 - 3e5j])
def test_moving_turning_and_scaling(factor: complex, shift: complex) -> None:
    if abs(factor) != 1.0 and shift:
        shift *= abs(factor)
    _agree(_holed(), solve(moved(HOLED, factor, shift)), factor, shift)


def test_mirroring() -> None:
    solution, image = _holed(), solve(mirrored(HOLED))
    assert image.torsion_constant.value == pytest.approx(solution.torsion_constant.value, rel=1e-10)
    assert image.warping_constant.value == pytest.approx(solution.warping_constant.value, rel=1e-10)
    assert image.shear_area_x.value == pytest.approx(solution.shear_area_x.value, rel=1e-10)
    assert abs(image.shear_centre - solution.shear_centre.conjugate()) < 1e-8


@pytest.mark.parametrize("seed", range(4))
def test_splitting_curves_changes_nothing(seed: int) -> None:
    rng = np.random.default_rng(seed)
    for loops in (HOLED, [disc(2.0)], [[ELLIPSE]]):
        split = [[part for curve in loop for part in curve.split(float(rng.uniform(0.01, 0.99)))] for loop in loops]
        rolled = [[*loop[1:], loop[0]] for loop in split]
        a, b = solve(loops), solve(rolled)
        assert b.torsion_constant.value == pytest.approx(a.torsion_constant.value, rel=1e-6)
        assert b.shear_area_1.value == pytest.approx(a.shear_area_1.value, rel=1e-6)


def test_stiffness_is_at_most_the_polar_moment() -> None:
    """With equality for the circle and the concentric tube (Saint-Venant)."""
    for row in TABLE[3:7]:
        area = abs(sum(0.5 * (c.start.conjugate() * c.end).imag for c in row.loops[0]))
        assert row.torsion_constant < area**2 / (2 * pi)  # and of all of one area the circle is stiffest (Pólya)
    assert solve([disc(1.0)]).torsion_constant.value == pytest.approx(pi / 2, rel=1e-12)


def test_warping_along_the_outline() -> None:
    """The outline is followed in order, and ω of a symmetric section is odd across its axis."""
    solution = _row(3)
    (line,) = solution.warping
    assert len(line.points) == len(line.omega) == solution.unknowns
    order = np.argsort(line.omega)
    low, high = line.points[order[0]], line.points[order[-1]]
    assert line.omega[order[0]] == pytest.approx(-line.omega[order[-1]], rel=1e-6)
    # ω of a flange's tip is h/2·b/2 with the middle line's height
    assert line.omega[order[-1]] == pytest.approx((300 - 10.7) / 2 * 75, rel=0.05)
    assert min(abs(abs(z.real) - 75) for z in (low, high)) < 1e-2
    lines = _holed().warping
    assert len(lines) == 3
    assert sum(len(one.points) for one in lines) == _holed().unknowns


def test_order_of_convergence() -> None:
    """Finer tolerances cost few unknowns: the method converges exponentially in their square root."""
    counts = []
    for tolerance in (1e-4, 1e-6, 1e-8):
        solution = solve(TABLE[5].loops, tolerance=tolerance)
        assert solution.reached
        counts.append(solution.unknowns)
    assert counts[2] < 3 * counts[0]


# ---------------------------------------------------------------------------------------------- hard outlines


def _reentrant(radius: float) -> list[list]:
    corners = [(0, 0), (2, 0), (2, 1), (1, 1), (1, 2), (0, 2)]
    return loops_of([outlines.fillet_polygon([(x, y, radius) for x, y in corners])])


@pytest.mark.parametrize("radius", [1e-3, 1e-6, 1e-9, 1e-12])
def test_fillets_of_any_size(radius: float) -> None:
    """The stiffness goes over into that of the sharp L, 0.8563032104."""
    solution = solve(_reentrant(radius))
    assert solution.reached
    assert solution.torsion_constant.value == pytest.approx(0.8563032104, rel=1e-7 + 20 * radius ** (4 / 3) + radius)


@pytest.mark.parametrize("tiny", [1e-9, 1e-12, 1e-15])
def test_tiny_pieces_do_no_harm(tiny: float) -> None:
    corners = [(0, 0), (0.3, 0), (0.3 + tiny, 0), (1, 0), (1, 1 - tiny), (1 - tiny, 1), (0.5, 1), (0, 1)]
    assert solve([polygon(*corners)]).torsion_constant.value == pytest.approx(0.140577014955154, rel=1e-7)


def test_wedges() -> None:
    """J of a thin isosceles wedge is that of its thickness, ∫t³/3: h⁴α³/12 with the angle α and the height h."""
    for degrees, close in ((0.1, 1e-4), (1.0, 1e-3)):
        angle = radians(degrees)
        loops = [polygon((0, 0), (100, -100 * tan(angle / 2)), (100, 100 * tan(angle / 2)))]
        solution = solve(loops)
        assert solution.reached
        assert solution.torsion_constant.value == pytest.approx(100**4 * angle**3 / 12, rel=30 * angle + close)


def test_a_notch_of_a_tenth_of_a_degree() -> None:
    """The sector of 359.9° is close to the bar slit along a radius, 0.878055685 (Saint-Venant's series)."""
    solution = solve(sector(radians(359.9)))
    assert solution.reached
    assert solution.torsion_constant.value == pytest.approx(0.878055685, rel=2e-3)
    assert solution.torsion_constant.value == pytest.approx(sector_torsion(radians(359.9)), rel=GOOD)


@pytest.mark.parametrize("gap", [1e-1, 1e-2, 1e-3, 1e-4])
def test_a_void_near_the_wall(gap: float) -> None:
    """Exact: the region between two eccentric circles is a Möbius image of a ring, and J a series (Macdonald 1893)."""
    solution = solve([disc(2.0), hole(1.0, complex(1 - gap))])
    assert solution.reached
    assert solution.torsion_constant.value == pytest.approx(_eccentric(2.0, 1.0, 1 - gap), rel=GOOD)


def _eccentric(outer: float, inner: float, apart: float) -> float:
    """J of an eccentric tube, by the Fourier series of the conjugate v = ½|z|² on the two circles of a ring.

    z = outer·(w + a)/(1 + aw) maps ρ < |w| < 1 to the tube. Where v has the coefficients v_k on |w| = 1 and u_k on
    |w| = ρ, the part A·rᵏ + B·(ρ/r)ᵏ between them has the energy 4πk(|A|² + |B|²)(1 − ρ²ᵏ), and J = I_p − ∫|∇ω|² dA.
    """
    d, r = apart / outer, inner / outer
    s = (1 + d * d - r * r) / (2 * d)
    a = s - sqrt(s * s - 1)  # inverse points of both circles
    rho = (d + r - a) / (1 - a * (d + r))
    count = 1 << 16
    turn = np.exp(2j * pi * np.arange(count) / count)
    k = np.arange(1, count // 2)

    def coefficients(w: np.ndarray) -> np.ndarray:
        return np.fft.fft(0.5 * np.abs(outer * (w + a) / (1 + a * w)) ** 2)[k] / count

    v, u, power = coefficients(turn), coefficients(rho * turn), rho**k
    left = 1 - power**2
    energy = np.sum(4 * pi * k * (np.abs(v - power * u) ** 2 + np.abs(u - power * v) ** 2) / left)
    return float(pi / 2 * (outer**4 - inner**4) - pi * inner**2 * apart**2 - energy)


def test_fifty_voids() -> None:
    places = [(i, j) for i in range(10) for j in range(5)]
    voids = [hole(3.5 + 0.1 * ((7 * i + 3 * j) % 5), complex(5 + 10 * i, 5 + 10 * j)) for i, j in places]
    solution = solve([polygon((0, 0), (100, 0), (100, 50), (0, 50)), *voids])
    assert solution.reached
    assert solution.torsion_constant.value == pytest.approx(1165840.13, rel=1e-6)


def test_thin_slots_in_any_direction() -> None:
    plate = polygon((0, 0), (100, 0), (100, 50), (0, 50))
    corners = [(-20, -0.05, 0.04), (20, -0.05, 0.04), (20, 0.05, 0.04), (-20, 0.05, 0.04)]
    slot = outlines.translated(outlines.rotated([outlines.backwards(outlines.fillet_polygon(corners))], 30), 50, 25)
    solution = solve([plate, *loops_of(slot)])
    assert solution.reached
    assert abs(solution.shear_centre - (50 + 25j)) < 1e-6


def test_thin_walls() -> None:
    """A channel with walls of 1/1000 of its height: J is that of three plates, less and more what corners do."""
    corners = [(0, 0), (500, 0), (500, 1), (1, 1), (1, 999), (500, 999), (500, 1000), (0, 1000)]
    solution = solve([polygon(*corners)])
    assert solution.reached
    assert solution.torsion_constant.value == pytest.approx((2 * 499.5 + 999) / 3, rel=1e-3)


def test_near_tangent_joints() -> None:
    for off in (0.0, 1e-9, 1e-6, 1e-3):
        arc = Arc.from_bulge(1 + 0j, 1 + 1j, 1.0 + off)
        solution = solve([[Line(0j, 1 + 0j), arc, Line(1 + 1j, 1j), Line(1j, 0j)]])
        assert solution.reached
        assert solution.torsion_constant.value == pytest.approx(0.268064, rel=2e-5 + 2 * off)


@pytest.mark.parametrize("count", [24, 72, 450, 1000, 3000])
def test_circles_of_chords(count: int) -> None:
    """J of a regular polygon is short of that of the circle of its area by 0.0315·θ³ (hexagon) to 0.0386·θ³ (θ → 0)."""
    solution = solve([chopped(1.0, count)])
    turn = tau / count
    number = solution.torsion_constant
    area = 0.5 * count * np.sin(turn)
    circle = area**2 / (2 * pi)
    shortfall = (0.0386 - 0.0095 * turn) * turn**3
    assert abs(number.value / circle - (1 - shortfall)) <= 1e-9 + 2e-4 * turn**3 + number.error
    assert solution.reached


def test_a_chopped_half_circle_beside_straight_sides() -> None:
    """The smooth curve that stands for the chords against the chords themselves."""
    count = 220
    points = [exp(1j * pi * k / count) for k in range(count)] + [-1 + 0j]
    chords = [Line(a, b) for a, b in pairwise(points)]
    rest = [Line(-1 + 0j, -1 - 1j), Line(-1 - 1j, 1 - 1j), Line(1 - 1j, 1 + 0j)]
    direct, smooth = solve([[*chords, *rest]]), _smooth([*chords, *rest])
    assert smooth.unknowns < direct.unknowns
    assert smooth.torsion_constant.value == pytest.approx(direct.torsion_constant.value, rel=1e-6)
    assert smooth.shear_area_x.value == pytest.approx(direct.shear_area_x.value, rel=1e-6)


def _smooth(loop: list) -> TorsionSolution:
    from edgetally.section import chords

    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(chords, "SLIGHT", 0.02)
        return solve([loop])


# ---------------------------------------------------------------------------------------------- refusals


def test_what_cannot_be_solved_says_why() -> None:
    square = polygon((0, 0), (2, 0), (2, 2), (0, 2))
    refused = {
        "no positive area": [[Line(0j, 1j), Line(1j, 1 + 1j), Line(1 + 1j, 1 + 0j), Line(1 + 0j, 0j)]],
        "no boundary": [[]],
        "positive area": [polygon((0, 0), (1, 0), (1, 0), (0, 0))],
        "touch or cross|thinner": [square, hole(1.1, 1 + 1j)],
        "thinner": [polygon((0, 0), (1, 0), (1, 1e-9), (0, 1e-9))],
    }
    for words, loops in refused.items():
        with pytest.raises(UnsolvableError, match=words):
            solve(loops)
    with pytest.raises(UnsolvableError, match="limit of 40") as caught:
        solve([square], max_unknowns=40)
    assert caught.value.findings[0].at is not None


def test_a_limit_that_is_reached_is_said() -> None:
    solution = solve(TABLE[0].loops, max_unknowns=800)
    assert not solution.reached
    (finding,) = solution.findings
    assert (finding.code, finding.severity) == ("limit-reached", "warning")
    assert solution.unknowns <= 800
    worst = abs(solution.torsion_constant.value / TABLE[0].torsion_constant - 1)
    assert worst <= HONEST * solution.torsion_constant.error


# ---------------------------------------------------------------------------------------------- stress


def test_largest_stress_of_torsion() -> None:
    """Ellipse 2T/(πab²) at the ends of the minor axis, triangle 20T/a³ at mid-sides, circle 2T/(πR³), rectangle by its
    series (Timoshenko and Goodier)."""
    ellipse = solve([[ELLIPSE]]).torsion_peak
    assert ellipse.stress == pytest.approx(2 / (2 * pi), rel=1e-8)
    assert abs(abs(ellipse.at.imag) - 1) < 1e-9
    triangle = solve(CLOSED["triangle"][0]).torsion_peak
    assert triangle.stress == pytest.approx(20 / 8, rel=1e-8)
    assert solve([disc(3.0)]).torsion_peak.stress == pytest.approx(2 / (pi * 27), rel=1e-8)
    rectangle = solve(CLOSED["rectangle 2:1"][0]).torsion_peak
    assert rectangle.stress == pytest.approx(1 / (0.245878342023428 * 2), rel=1e-6)
    assert abs(rectangle.at.real - 1) < 1e-6


def test_sharp_corners_are_named() -> None:
    solution = _row(5)
    assert [abs(z - (10 + 10j)) < 1e-9 for z in solution.corners] == [True]
    assert solution.torsion_peak.clear_of_corners > 0
    assert abs(solution.torsion_peak.at - (10 + 10j)) >= solution.torsion_peak.clear_of_corners * 0.99
    assert _row(6).corners == ()
    assert abs(_row(6).torsion_peak.at - (13.5 + 13.5j)) < 0.1
