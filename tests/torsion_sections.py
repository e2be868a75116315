"""Sections for the tests of torsion and shear: loops of curves, the outer one first, and numbers to compare with."""

from __future__ import annotations

from cmath import exp
from collections.abc import Sequence
from math import hypot, pi, tanh, tau
from typing import NamedTuple

import numpy as np

import outlines
from build import curves_of
from edgetally.curves import Arc, Curve, Line
from edgetally.curves.nearest import nearest
from edgetally.section.solver import TorsionSolution

Loops = list[list[Curve]]


def loops_of(outline: outlines.Outline) -> Loops:
    return [curves_of([contour]) for contour in outline]


def polygon(*points: tuple[float, float]) -> list[Curve]:
    return curves_of([outlines.polygon(points)])


def disc(radius: float, centre: complex = 0j) -> list[Curve]:
    return [Arc.from_centre(centre, radius, 0.0, tau)]


def hole(radius: float, centre: complex = 0j) -> list[Curve]:
    return [Arc.from_centre(centre, radius, 0.0, -tau)]


def chopped(radius: float, count: int) -> list[Curve]:
    """A circle of `count` chords."""
    points = [radius * exp(1j * tau * k / count) for k in range(count)]
    return [Line(a, b) for a, b in zip(points, [*points[1:], points[0]], strict=True)]


def sector(angle: float, radius: float = 1.0) -> Loops:
    """The circular sector from +x counter-clockwise, its point at the origin."""
    return [
        [Line(0j, complex(radius)), Arc.from_centre(0j, radius, 0.0, angle), Line(radius * exp(1j * angle), 0j)],
    ]


def semicircle(radius: float = 1.0) -> Loops:
    return [[Arc.from_centre(0j, radius, 0.0, pi), Line(complex(-radius), complex(radius))]]


def moved(loops: Loops, factor: complex = 1.0, shift: complex = 0j) -> Loops:
    return [[curve.moved(factor, shift) for curve in loop] for loop in loops]


def mirrored(loops: Loops) -> Loops:
    return [[curve.mirrored().reversed() for curve in reversed(loop)] for loop in loops]


def size_of(loops: Loops) -> float:
    z = np.array([curve.point(t) for curve in loops[0] for t in (0.0, 0.25, 0.5, 0.75)])
    return float(max(np.ptp(z.real), np.ptp(z.imag)))


def rectangle_torsion(a: float, b: float) -> float:
    """J of a rectangle with sides a ≥ b: Saint-Venant's series (Timoshenko and Goodier, Theory of Elasticity)."""
    odd = range(1, 400, 2)
    return a * b**3 / 3 * (1 - 192 / pi**5 * b / a * sum(tanh(n * pi * a / 2 / b) / n**5 for n in odd))


def sector_torsion(angle: float) -> float:
    """J of a sector of radius 1: (tan α − α)/4 − (32/α) Σ 1/(L²(L + 2)²(L − 2)), L = (2n + 1)π/α, α not 90° or 270°."""
    steps = ((2 * n + 1) * pi / angle for n in range(20000))
    return float((np.tan(angle) - angle) / 4 - 32 / angle * sum(1 / (s**2 * (s + 2) ** 2 * (s - 2)) for s in steps))


class Checked(NamedTuple):
    """A row of the table of check values; shear areas at ν = 0."""

    name: str
    loops: Loops
    torsion_constant: float
    warping_constant: float
    shear_centre: complex
    shear_area_x: float
    shear_area_y: float


def _channel(bend: float) -> Loops:
    h, b, c, t = 200.0, 75.0, 20.0, 1.5
    outside = bend + t if bend else 0.0
    corners = [
        *((b, c, 0.0), (b - t, c, 0.0), (b - t, t, bend), (t, t, bend), (t, h - t, bend), (b - t, h - t, bend)),
        *((b - t, h - c, 0.0), (b, h - c, 0.0), (b, h, outside), (0.0, h, outside), (0.0, 0.0, outside)),
        (b, 0.0, outside),
    ]
    return loops_of([outlines.fillet_polygon(corners)])


def _tube(inside: float, outside: float) -> Loops:
    return loops_of(outlines.rectangular_hollow(100.0, 100.0, 2.0, outside, inside))


def _angle(root: float, toe: float) -> Loops:
    corners = [(0, 0, 0), (100, 0, 0), (100, 10, toe), (10, 10, root), (10, 100, toe), (0, 100, 0)]
    return loops_of([outlines.fillet_polygon(corners)])


# Source: two boundary-integral implementations written apart from this one, converged, that agree to 6e-10 on every
# entry; finite elements on most of them agree as far as their meshes go (4e-6, the tubes' C_w 4e-5 to 2.5e-4).
TABLE = [
    Checked("lipped channel, bends 1.5", _channel(1.5), 426.7068839, 3.481247201e9, -32.67554851 + 100j, 141.7146096,
            247.146665),
    Checked("lipped channel, bends 3", _channel(3.0), 423.7629284, 3.423009455e9, -32.61270904 + 100j, 141.5653425,
            247.6497644),
    Checked("lipped channel, sharp", _channel(0.0), 432.4043904, 3.562627257e9, -32.74049805 + 100j, 142.6211872,
            246.9072548),
    Checked("I, root 15", loops_of(outlines.i_section(300.0, 150.0, 7.1, 10.7, 15.0)), 197529.8548, 1.24256522e11, 0j,
            2938.268303, 2075.595673),
    Checked("I, root sharp", loops_of(outlines.i_section(300.0, 150.0, 7.1, 10.7)), 153260.9291, 1.258516891e11, 0j,
            2707.198905, 1999.043355),
    Checked("angle, sharp", _angle(0.0, 0.0), 61957.41005, 4.672116726e7, 5.29598631 + 5.29598631j, 827.7194546,
            827.7194546),
    Checked("angle, root 12, toe 6", _angle(12.0, 6.0), 68205.34471, 4.427373967e7, 5.893752439 + 5.893752439j,
            846.8037403, 846.8037403),
    Checked("square tube, sharp", _tube(0.0, 0.0), 1899874.358, 313674.302, 0j, 329.6352994, 329.6352994),
    Checked("square tube, rounded", _tube(4.0, 6.0), 1918481.809, 718045.8135, 0j, 329.8348832, 329.8348832),
]  # fmt: skip


def numbers(solution: TorsionSolution) -> dict[str, tuple[float, float]]:
    """Every number of a solution with its error, the shear centre as two coordinates."""
    named = {
        name: getattr(solution, name)
        for name in ("torsion_constant", "warping_constant", "shear_area_1", "shear_area_2", "shear_area_x",
                     "shear_area_y")
    }  # fmt: skip
    found = {name: (number.value, number.error) for name, number in named.items()}
    found["shear_centre_x"] = (solution.shear_centre.real, solution.shear_centre_error)
    found["shear_centre_y"] = (solution.shear_centre.imag, solution.shear_centre_error)
    return found


def random_section(rng: np.random.Generator) -> Loops:
    """A plate, angle, channel, I or tee with random fillets and up to four round voids, some of them near a wall."""
    w, h = rng.uniform(40, 120), rng.uniform(40, 160)
    t, s = (10 ** rng.uniform(-2.0, -0.6) * min(w, h) for _ in range(2))
    kind = rng.integers(5)
    corners: Sequence[tuple[float, float]]
    if kind == 0:
        corners = [(0, 0), (w, 0), (w, h), (0, h)]
    elif kind == 1:
        corners = [(0, 0), (w, 0), (w, t), (s, t), (s, h), (0, h)]
    elif kind == 2:
        corners = [(0, 0), (w, 0), (w, t), (s, t), (s, h - t), (w, h - t), (w, h), (0, h)]
    elif kind == 3:
        a, b = (w - s) / 2, (w + s) / 2
        corners = [(0, 0), (w, 0), (w, t), (b, t), (b, h - t), (w, h - t), (w, h), (0, h), (0, h - t), (a, h - t)]
        corners = [*corners, (a, t), (0, t)]
    else:
        corners = [(0, 0), (w, 0), (w, h), (w / 2 + s / 2, h), (w / 2 + s / 2, t), (0, t)]
    least = min(w, h) if kind == 0 else min(t, s)
    radii = [0.0 if rng.random() < 0.35 else 0.9 * 10 ** rng.uniform(-5, -0.4) * least for _ in corners]
    outer = curves_of([outlines.fillet_polygon([(x, y, r) for (x, y), r in zip(corners, radii, strict=True)])])
    loops = [outer]
    for _ in range(int(rng.integers(0, 5))):
        place = complex(rng.uniform(0, w), rng.uniform(0, h))
        turns = sum(curve.turning(place) for loop in loops for curve in loop)
        room = min(nearest(curve, place)[0] for loop in loops for curve in loop)
        radius = room - max(room * 10 ** rng.uniform(-3, -0.3), 1e-3 * hypot(w, h))
        if abs(turns - tau) < 1.0 and radius > 1e-3 * least:
            loops.append(hole(radius, place))
    return moved(loops, exp(1j * rng.uniform(0, tau)), complex(rng.uniform(-1e3, 1e3), rng.uniform(-1e3, 1e3)))
