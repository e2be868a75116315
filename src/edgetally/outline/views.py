"""What can be seen from an outline: whether curves that close nothing are all around it."""

from __future__ import annotations

from math import radians

import numpy as np
from numpy.typing import NDArray

from edgetally.outline.records import Loop

VIEW = radians(60.0)
"""An outline that open curves leave no wider view than this may be a void of what they were meant to be."""
POINTS = 8


def closed_in(loop: Loop, boxes: NDArray[np.float64]) -> bool:
    """Tell whether the `boxes` (n, 4) of open curves leave a loop no wide view outwards.

    A boundary is enclosed or not as a whole: where one of its points looks out, it is not.
    """
    some = loop.curves[:: max(1, len(loop.curves) // POINTS)]
    return all(widest_view(curve.start, boxes) < VIEW for curve in some)


def widest_view(p: complex, boxes: NDArray[np.float64]) -> float:
    """Return the widest angle [rad] in which none of the `boxes` (n, 4) is seen from p."""
    x0, y0, x1, y1 = (boxes - np.array([p.real, p.imag, p.real, p.imag])).T
    if np.any((x0 <= 0) & (x1 >= 0) & (y0 <= 0) & (y1 >= 0)):
        return 0.0
    corners = np.angle(np.stack([x + 1j * y for x in (x0, x1) for y in (y0, y1)]))
    aside = np.mod(corners - corners[0] + np.pi, 2 * np.pi) - np.pi  # a box outside of which p lies spans less than π
    begin = np.mod(corners[0] + aside.min(axis=0), 2 * np.pi)
    order = np.argsort(begin)
    end = (begin + np.ptp(aside, axis=0))[order]
    begin = np.concatenate([begin[order], begin[order] + 2 * np.pi])  # twice around, for what goes on past the first
    reached = np.maximum.accumulate(np.concatenate([end, end + 2 * np.pi]))
    return float((begin[1:] - reached[:-1]).max(initial=0.0, where=np.arange(1, len(begin)) >= len(order)))
