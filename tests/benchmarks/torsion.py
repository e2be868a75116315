"""Error against time of the boundary method and of finite elements, on sections whose numbers are known.

    python tests/benchmarks/torsion.py

Elements are quadratic and quartic triangles (scikit-fem) on meshes of well-shaped triangles halved again and again
towards every corner, built without a mesher: their times are of assembly and solution only, and include the same three
problems. Errors are the largest relative one of J, C_w and both shear areas. Times are the best of three, on one core
if OPENBLAS_NUM_THREADS=1.
"""

from __future__ import annotations

import sys
from collections.abc import Callable
from pathlib import Path
from time import perf_counter

import numpy as np

sys.path.insert(0, str(Path(__file__).parent.parent))

from edgetally.section.solver import TorsionSolution, solve
from torsion_sections import TABLE, Checked, Loops, chopped, loops_of

ROWS = {row.name: row for row in TABLE}
TOLERANCES = (1e-4, 1e-6, 1e-8)


def best_of_three(job: Callable[[], object]) -> tuple[float, object]:
    times = []
    for _ in range(3):
        begun = perf_counter()
        result = job()
        times.append(perf_counter() - begun)
    return min(times), result


def error_of(row: Checked, j: float, warping: float, area_x: float, area_y: float) -> float:
    pairs = (
        (j, row.torsion_constant),
        (warping, row.warping_constant),
        (area_x, row.shear_area_x),
        (area_y, row.shear_area_y),
    )
    return max(abs(value / expected - 1) for value, expected in pairs)


def boundary(row: Checked, tolerance: float) -> None:
    seconds, found = best_of_three(lambda: solve(row.loops, poisson=0.0, tolerance=tolerance))
    assert isinstance(found, TorsionSolution)
    error = error_of(
        row,
        found.torsion_constant.value,
        found.warping_constant.value,
        found.shear_area_x.value,
        found.shear_area_y.value,
    )
    print(
        f"  boundary, asked {tolerance:7.0e}      error {error:8.1e}   {seconds:6.3f} s   {found.unknowns:7d} unknowns"
    )


def elements(row: Checked, xs: list[float], ys: list[float], solid: Callable[..., np.ndarray], wall: float) -> None:
    try:
        import skfem as fem

        from torsion_elements import by_elements, graded_to_corners
    except ImportError:
        print("  (scikit-fem is not installed: no rival)")
        return
    for name, element, size, levels in (
        ("quadratic", fem.ElementTriP2(), wall, 8),
        ("quadratic", fem.ElementTriP2(), wall / 2, 12),
        ("quartic", fem.ElementTriP4(), 2 * wall, 10),
        ("quartic", fem.ElementTriP4(), wall, 16),
        ("quartic", fem.ElementTriP4(), wall, 24),
    ):
        mesh = graded_to_corners(xs, ys, solid, size, levels)
        seconds, found = best_of_three(lambda m=mesh, e=element: by_elements(m, e))
        f = found.compliance
        error = error_of(row, found.torsion_constant, found.warping_constant, 1 / f[0, 0], 1 / f[1, 1])
        label = f"{name}, size {size:4.1f}, {levels} levels"
        print(f"  {label:32s} error {error:8.1e}   {seconds:6.3f} s   {found.unknowns:7d} unknowns")


def extrusion() -> Loops:
    """Six cells and six T-slots, every corner rounded: 152 curves."""
    import outlines

    width, height, t = 180.0, 100.0, 2.5
    slot = [(-4, 0, 0.5), (-4, t, 0.5), (-8, t, 1.0), (-8, 7, 1.0), (8, 7, 1.0), (8, t, 1.0), (4, t, 0.5), (4, 0, 0.5)]
    corners = [(0.0, 0.0, 3.0)]
    corners += [(x + u, v, r) for x in (30, 90, 150) for u, v, r in slot]
    corners += [(width, 0.0, 3.0), (width, height, 3.0)]
    corners += [(x - u, height - v, r) for x in (150, 90, 30) for u, v, r in slot]
    corners += [(0.0, height, 3.0)]
    contours = [outlines.fillet_polygon(corners)]
    for i in range(3):
        x0, x1 = 60 * i + (t if i == 0 else t / 2), 60 * (i + 1) - (t if i == 2 else t / 2)
        for y0, y1 in ((t + 7, 50 - t / 2), (50 + t / 2, 100 - t - 7)):
            cell = [(x0, y0, 1.5), (x1, y0, 1.5), (x1, y1, 1.5), (x0, y1, 1.5)]
            contours.append(outlines.backwards(outlines.fillet_polygon(cell)))
    return loops_of(contours)


def main() -> None:
    for name, row in ROWS.items():
        print(name)
        for tolerance in TOLERANCES:
            boundary(row, tolerance)
        if name == "lipped channel, sharp":
            xs, ys = [0, 1.5, 73.5, 75], [0, 1.5, 20, 180, 198.5, 200]
            elements(
                row,
                xs,
                ys,
                lambda x, y: (x < 1.5) | (y < 1.5) | (y > 198.5) | ((x > 73.5) & ((y < 20) | (y > 180))),
                1.5,
            )
        if name == "I, root sharp":
            xs, ys = [-75, -3.55, 3.55, 75], [-150, -139.3, 139.3, 150]
            elements(row, xs, ys, lambda x, y: (abs(x) < 3.55) | (abs(y) > 139.3), 7.1)
    for name, loops in (("extrusion of 152 curves", extrusion()), ("circle of 1000 chords", [chopped(50.0, 1000)])):
        seconds, found = best_of_three(lambda given=loops: solve(given))
        assert isinstance(found, TorsionSolution)
        given = max(found.torsion_constant.error, found.warping_constant.error, found.shear_area_x.error)
        print(f"{name}: error given {given:.1e}, {seconds:.3f} s, {found.unknowns} unknowns")


if __name__ == "__main__":
    main()
