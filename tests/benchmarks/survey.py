"""Survey and tally of large drawings against the floor: importing the bare DXF library and reading the same file.

python tests/benchmarks/survey.py
"""

from __future__ import annotations

import math
import statistics
import subprocess
import sys
import tempfile
import time
from pathlib import Path

import ezdxf

ROUNDS = 3


def loose_pieces(path: Path, count: int) -> None:
    document = ezdxf.new("R2010")
    space = document.modelspace()
    for k in range(count // 4):
        x, y = 30.0 * (k % 80), 30.0 * (k // 80)
        corners = [(x, y), (x + 20, y), (x + 20, y + 20), (x, y + 20)]
        for n in range(4):
            space.add_line(corners[n], corners[(n + 1) % 4])
    document.header["$INSUNITS"] = 4
    document.saveas(path)


def one_outline(path: Path, count: int) -> None:
    document = ezdxf.new("R2010")
    turn = [2 * math.pi * k / count for k in range(count)]
    points = [((100 + 10 * math.cos(7 * t)) * math.cos(t), (100 + 10 * math.cos(7 * t)) * math.sin(t)) for t in turn]
    document.modelspace().add_lwpolyline(points, close=True)
    document.header["$INSUNITS"] = 4
    document.saveas(path)


def seconds(command: list[str]) -> float:
    times = []
    for _ in range(ROUNDS):
        start = time.perf_counter()
        subprocess.run(command, check=False, capture_output=True)
        times.append(time.perf_counter() - start)
    return statistics.median(times)


def main() -> None:
    with tempfile.TemporaryDirectory() as folder:
        for name, make, count in (
            ("24 000 loose pieces", loose_pieces, 24_000),
            ("100 000 vertices", one_outline, 100_000),
        ):
            path = Path(folder) / "large.dxf"
            make(path, count)
            floor = seconds([sys.executable, "-c", f"import ezdxf; ezdxf.readfile({str(path)!r})"])
            ours = seconds([sys.executable, "-m", "edgetally", "survey", str(path)])
            print(f"{name:<22} floor {floor:6.2f} s   survey {ours:6.2f} s   {ours / floor:4.2f} x floor")


if __name__ == "__main__":
    main()
