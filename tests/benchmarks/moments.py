"""Moments up to the second order of a polygon of 10⁶ vertices against shapely's area of the same polygon.

python tests/benchmarks/moments.py
"""

from __future__ import annotations

import time
from collections.abc import Callable

import numpy as np
import shapely

from edgetally.curves import Packed
from edgetally.curves.green import moments

VERTICES = 1_000_000
ROUNDS = 20


def best(job: Callable[[], object]) -> float:
    times = []
    for _ in range(ROUNDS):
        start = time.perf_counter()
        job()
        times.append(time.perf_counter() - start)
    return min(times)


def main() -> None:
    t = np.linspace(0.0, 2 * np.pi, VERTICES, endpoint=False)
    z = (1 + 0.1 * np.cos(7 * t)) * np.exp(1j * t)
    polygon = shapely.Polygon(np.column_stack([z.real, z.imag]))
    packed = Packed.polygon(z)
    floor = best(lambda: shapely.area(polygon))
    ours = best(lambda: moments(packed))
    print(f"area alone, shapely      {1e3 * floor:7.2f} ms")
    print(f"six moments with errors  {1e3 * ours:7.2f} ms   {ours / floor:4.1f} x floor")


if __name__ == "__main__":
    main()
