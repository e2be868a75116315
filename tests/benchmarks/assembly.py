"""Pieces → loops → regions: time at 1 000 to 100 000 shuffled pieces, and the exponent that fits.

Processor time, the best of three: on a machine that others use too, the clock on the wall tells of them as well.

python tests/benchmarks/assembly.py
"""

from __future__ import annotations

import random
import time

import numpy as np

from edgetally.curves import Arc, Curve, Line, Source
from edgetally.outline.assembly import assemble

SIZES = (1_000, 10_000, 18_000, 100_000)


def slots(count: int) -> list[Curve]:
    """Return `count` pieces: squares with rounded corners of nine pieces each, in a grid, shuffled and reversed."""
    pieces: list[Curve] = []
    side = int((count / 9) ** 0.5) + 1
    for k in range(count // 9):
        at = 30.0 * complex(k % side, k // side)
        corners = [2, 18, 20 + 2j, 20 + 10j, 20 + 18j, 18 + 20j, 2 + 20j, 18j, 2j]
        for n, start in enumerate(corners):
            end = corners[(n + 1) % 9]
            source = Source("PIECE", f"{len(pieces):X}", "0")
            bent = n in (1, 4, 6, 8)
            a, b = at + start, at + end
            pieces.append(Arc.from_bulge(a, b, 2**0.5 - 1, source) if bent else Line(a, b, source))
    shuffled = [piece.reversed() if k % 2 else piece for k, piece in enumerate(pieces)]
    random.Random(7).shuffle(shuffled)
    return shuffled


def main() -> None:
    times = []
    for size in SIZES:
        pieces = slots(size)
        best = float("inf")
        for _ in range(3):
            start = time.process_time()
            outline = assemble(pieces)
            best = min(best, time.process_time() - start)
        times.append(best)
        print(f"{len(pieces):7d} pieces  {len(outline.regions):6d} regions  {best:7.3f} s")
    exponent = np.polyfit(np.log(SIZES), np.log(times), 1)[0]
    print(f"fitted exponent {exponent:.2f}")


if __name__ == "__main__":
    main()
