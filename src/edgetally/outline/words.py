"""How a refusal names a place and a length."""

from __future__ import annotations

from collections.abc import Iterable
from math import ceil, floor, log10

from edgetally.curves import Curve, Source
from edgetally.findings import Finding
from edgetally.units import MM_PER


def place(z: complex) -> str:
    """Write a point, in the drawing's coordinates: (120, 45.2)."""
    return f"({z.real + 0.0:.10g}, {z.imag + 0.0:.10g})"


def at(z: complex) -> tuple[float, float]:
    """Return the point as a finding carries it."""
    return z.real, z.imag


def handles(sources: Iterable[Source]) -> tuple[str, ...]:
    """Return the handles of the sources, each once, in order."""
    return tuple(dict.fromkeys(s.handle for s in sources if s.handle))


def length_text(value: float, unit: str) -> str:
    """Write a length of the drawing with its unit: `0.34 mm`."""
    return f"{value:.3g} {unit}"


def enough_mm(value: float, unit: str) -> str:
    """Write, in mm, the next round length that is not below `value`: what an option has to be to accept it."""
    mm = value * MM_PER[unit]
    step = 10.0 ** (floor(log10(mm)) - 1)
    return f"{ceil(mm / step * (1 - 1e-12)) * step:.6g}mm"


def stray_finding(curve: Curve) -> Finding:
    """Say that a single curve has nothing to do with any outline."""
    message = (
        f"{curve.source} from {place(curve.start)} to {place(curve.end)} belongs to no outline and was left out; move "
        "it to another layer"
    )
    return Finding("stray-curve", "warning", message, at(curve.start), handles((curve.source,)))
