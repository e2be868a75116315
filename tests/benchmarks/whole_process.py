"""Whole-process time of `tally` and `sheet` against the floor: importing the bare DXF library and reading the file.

    python tests/benchmarks/whole_process.py [DRAWING...]

Each command runs in a process of its own, alternating with the floor, so that both see the same machine; medians.
"""

from __future__ import annotations

import statistics
import subprocess
import sys
import tempfile
import time
from pathlib import Path

SAMPLES = Path(__file__).parent.parent.parent / "sample_drawings"
ROUNDS = 15


def seconds(command: list[str]) -> float:
    start = time.perf_counter()
    subprocess.run(command, check=True, capture_output=True)
    return time.perf_counter() - start


def main() -> None:
    drawings = [Path(p) for p in sys.argv[1:]] or [SAMPLES / "bracket.dxf", SAMPLES / "rail-extrusion.dxf"]
    with tempfile.TemporaryDirectory() as folder:
        for drawing in drawings:
            program = [sys.executable, "-m", "edgetally"]
            options = [str(drawing), "--layer", "OUTLINE"]
            commands = {
                "floor": [sys.executable, "-c", f"import ezdxf; ezdxf.readfile({str(drawing)!r})"],
                "tally": [*program, "tally", *options],
                "sheet": [*program, "sheet", *options, "-o", f"{folder}/sheet.pdf"],
            }
            times: dict[str, list[float]] = {name: [] for name in commands}
            for _ in range(ROUNDS):
                for name, command in commands.items():
                    times[name].append(seconds(command))
            floor = statistics.median(times["floor"])
            for name, values in times.items():
                median = statistics.median(values)
                print(f"{drawing.name:<24} {name:<6} {median:6.3f} s   {median / floor:4.2f} x floor")


if __name__ == "__main__":
    main()
