"""No number of a random section is further off than three times the error that is given with it.

TORSION_SECTIONS=300 python -m pytest tests/test_torsion_honesty.py
"""

from __future__ import annotations

import os

import numpy as np
import pytest

from edgetally.section.frame import Frame
from edgetally.section.solver import solve
from torsion_sections import numbers, random_section, size_of

SECTIONS = int(os.environ.get("TORSION_SECTIONS", "42"))
HONEST = 3.0


@pytest.mark.parametrize("group", range(6))
def test_errors_of_random_sections(group: int) -> None:
    for seed in range(group, SECTIONS, 6):
        loops = random_section(np.random.default_rng(seed))
        solution = solve(loops)
        assert solution.reached or solution.findings, seed
        assert solution.torsion_constant.error < 1e-4, seed
        finer = solve(loops, tolerance=1e-9, max_unknowns=1800)
        if not finer.reached and finer.unknowns <= solution.unknowns:
            continue  # nothing finer within the time of a test
        frame = Frame.around(loops)
        warping = 1e-5 * float(frame.moments[0, 2] + frame.moments[2, 0]) ** 2 * frame.scale**6
        size = size_of(loops)
        true = numbers(finer)
        for key, (value, error) in numbers(solution).items():
            better, left = true[key]
            scale = size if "centre" in key else max(abs(better), warping) if "warping" in key else abs(better)
            assert abs(value - better) / scale <= HONEST * error + left, (seed, key)
