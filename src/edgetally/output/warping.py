"""The picture of the warping: ω about the shear centre as a signed band along the outline.

The band stands outside the material, its height in proportion to |ω|: filled where ω is positive, open where negative.
The place of the largest shear stress of torsion is marked, and the sharp corners where the stress has no bound.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from edgetally.output.figure import shear_centre_mark
from edgetally.output.pens import (
    ACCENT,
    INK,
    MUTED,
    Item,
    Label,
    Path,
    Picture,
    Style,
    disc,
    polygon,
    stroke,
)
from edgetally.output.placing import Placing

if TYPE_CHECKING:
    from edgetally.results import SectionResult
    from edgetally.section.solution import TorsionSolution, WarpingLine

POSITIVE = Style(width=0.4, colour=ACCENT, fill=(0.80, 0.68, 0.75))
NEGATIVE = Style(width=0.5, colour=ACCENT, fill=(1.0, 1.0, 1.0))
PEAK = Style(width=0.9, colour=INK)
STRIP = 30.0
BAND = 22.0
"""Height [pt] of the band where |ω| is largest."""


def warping_picture(section: SectionResult, solution: TorsionSolution, width: float, height: float) -> Picture:
    """Tell the warping of a section on `width` × `height` points."""
    return _Warping(section, solution, width, height).picture()


class _Warping:
    def __init__(self, section: SectionResult, solution: TorsionSolution, width: float, height: float) -> None:
        self.section, self.solution = section, solution
        self.width, self.height = width, height
        self.placing = Placing.of(section.section, width, height, strip=STRIP, also=[solution.shear_centre])
        self.paper = self.placing.paper
        self.largest = max(float(np.abs(line.omega).max()) for line in solution.warping)

    def picture(self) -> Picture:
        bands = [item for line in self.solution.warping for item in self._bands(line)]
        items: list[Item] = [*bands, self.placing.material(), *self._centres(), *self._peaks(), *self._key()]
        return Picture(self.width, self.height, tuple(items))

    def _bands(self, line: WarpingLine) -> Iterable[Item]:
        """One filled piece for each run of one sign; at a corner, where the normal turns, a new piece begins."""
        if self.largest == 0.0:
            return
        z = self.placing.points * np.append(line.points, line.points[0]) + self.placing.shift
        omega = np.append(line.omega, line.omega[0])
        step = np.diff(z)
        normal = -1j * step / np.maximum(np.abs(step), 1e-300)
        height = BAND * np.abs(omega) / self.largest
        k = 0
        while k < len(step):
            stop = k + 1
            while (
                stop < len(step)
                and omega[stop] * omega[k] > 0
                and (normal[stop].conjugate() * normal[stop - 1]).real > 0.9
            ):
                stop += 1
            # the step across a corner is no stretch of the outline
            if max(height[k : stop + 1]) > 0.3 and float(np.abs(step[k:stop]).sum()) > 0.3:
                yield self._piece(z[k : stop + 1], height[k : stop + 1], normal[k:stop], positive=bool(omega[k] > 0))
            k = stop

    def _piece(
        self,
        z: NDArray[np.complexfloating],
        height: NDArray[np.floating],
        normal: NDArray[np.complexfloating],
        *,
        positive: bool,
    ) -> Path:
        at_nodes = np.concatenate([normal[:1], 0.5 * (normal[1:] + normal[:-1]), normal[-1:]])
        top = z + height * at_nodes
        corners = [complex(p) for p in (*z, *top[::-1])]
        return polygon(corners, POSITIVE if positive else NEGATIVE)

    def _centres(self) -> Iterable[Item]:
        yield from shear_centre_mark(self.paper(self.solution.shear_centre))

    def _peaks(self) -> Iterable[Item]:
        yield disc(self.paper(self.solution.torsion_peak.at), 3.6, PEAK)
        for corner in self.solution.corners:
            z = self.paper(corner)
            yield stroke(z - 2.5, z + 2.5, PEAK)
            yield stroke(z - 2.5j, z + 2.5j, PEAK)

    def _key(self) -> Iterable[Item]:
        x, y = 8.0, 18.0
        for style, words in ((POSITIVE, "ω > 0"), (NEGATIVE, "ω < 0")):
            corners = [complex(x, y - 1.0), complex(x + 12.0, y - 1.0), complex(x + 12.0, y + 5.0), complex(x, y + 5.0)]
            yield polygon(corners, style)
            yield Label(complex(x + 15.0, y), words, 7.0, colour=MUTED)
            x += 48.0
        yield from shear_centre_mark(complex(x + 4.0, y + 2.5), 2.8)
        yield Label(complex(x + 11.0, y), "shear centre", 7.0, colour=MUTED)
        x += 66.0
        yield disc(complex(x + 4.0, y + 2.5), 2.8, PEAK)
        yield Label(complex(x + 11.0, y), "largest shear stress of torsion", 7.0, colour=MUTED)
        x, y = 8.0, 6.0
        if self.solution.corners:
            yield stroke(complex(x + 1.5, y + 2.5), complex(x + 6.5, y + 2.5), PEAK)
            yield stroke(complex(x + 4.0, y), complex(x + 4.0, y + 5.0), PEAK)
            yield Label(complex(x + 11.0, y), "sharp re-entrant corner", 7.0, colour=MUTED)
            x += 110.0
        yield Label(complex(x, y), f"scale {self.placing.scale}", 7.0)
