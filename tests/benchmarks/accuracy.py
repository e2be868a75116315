"""The worst differences from the references of the tests: closed forms of the area, check values of torsion.

python tests/benchmarks/accuracy.py
"""

from __future__ import annotations

import sys
from pathlib import Path

sys.path.insert(0, str(Path(__file__).parent.parent))

from build import measure
from edgetally.section.solver import solve
from references import REFERENCES
from torsion_sections import TABLE, size_of


def main() -> None:
    worst: dict[str, tuple[float, str]] = {}
    values = 0
    for reference in REFERENCES:
        found = measure(reference.contours, reference.unit, reference.density)
        for key, expected in reference.expected.items():
            values += 1
            value = found[key].value or 0.0
            if abs(expected) > 1e-9 and not key.startswith(("centroid", "product", "principal_angle")):
                difference = abs(value / expected - 1)
                if difference > worst.get("area", (0.0, ""))[0]:
                    worst["area"] = (difference, f"{key} of {reference.name}")
    print(f"{len(REFERENCES)} closed forms, {values} values: worst relative difference {worst['area'][0]:.1e}", end="")
    print(f" ({worst['area'][1]})")
    torsion = centre = 0.0
    for row in TABLE:
        solution = solve(row.loops, poisson=0.0)
        pairs = (
            (solution.torsion_constant.value, row.torsion_constant),
            (solution.warping_constant.value, row.warping_constant),
            (solution.shear_area_x.value, row.shear_area_x),
            (solution.shear_area_y.value, row.shear_area_y),
        )
        torsion = max(torsion, *(abs(found / expected - 1) for found, expected in pairs))
        if row.shear_centre != 0:
            centre = max(centre, abs(solution.shear_centre - row.shear_centre) / size_of(row.loops))
    print(f"{len(TABLE)} check sections: J, C_w, shear areas to {torsion:.1e}, shear centre to {centre:.1e} of size")


if __name__ == "__main__":
    main()
