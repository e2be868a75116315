"""What the dimensions of a drawing say, against what they measure.

A DIMENSION measures from its definition points and shows that number times DIMLFAC, unless a person wrote another text
over it (DXF reference). So the shown number tells a drawing's scale, and a written one may be a lie.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from math import isfinite

from ezdxf.document import Drawing as Document
from ezdxf.entities.dimension import Dimension
from ezdxf.lldxf.const import DXFError
from ezdxf.tools.text import fast_plain_mtext

from edgetally.drawing.layers import Layers
from edgetally.findings import Finding

LENGTHS = {0: "linear", 1: "aligned", 3: "diameter", 4: "radius"}
"""Kinds that measure a length, by the lowest bits of the type flag; angles have no scale."""
AGREES = 1e-3
"""A shown number may be off by this share, or half a unit of its last digit: a dimension is rounded."""
SAME_RATIO = 5e-3
"""Ratios this near to each other are one scale."""
MOST, ENOUGH = 0.8, 3
"""So large a share of the dimensions, and so many, make a scale; fewer are single faults."""
UNIT_RATIOS = {25.4: "in", 1 / 25.4: "mm", 10.0: "cm", 1000.0: "m", 304.8: "ft"}
LISTED = 12

_NUMBER = re.compile(r"\d+(?:[.,]\d+)?|[.,]\d+")
_COUNT = re.compile(r"\b\d+[x×](?=[^\d])\s*", re.IGNORECASE)
_TOLERANCE = re.compile(r"(?:±|%%p|\+/-).*|[+-]\s*\d.*$", re.IGNORECASE)


@dataclass(frozen=True, slots=True)
class DimensionRow:
    """One dimension of a length: shown number with half a unit of its last digit, None where there is none; `measured`
    from the definition points, in drawn lengths; `written` where a person wrote the number; DIMLFAC."""

    handle: str
    kind: str
    at: complex
    text: str
    shown: float | None
    half_digit: float
    measured: float
    written: bool
    layer: str = ""
    factor: float = 1.0

    @property
    def reading(self) -> float:
        """What the dimension would show if nobody wrote over it: measured × DIMLFAC."""
        return self.measured * self.factor

    @property
    def words(self) -> str:
        """The text as shown, without formatting codes, the measurement in place of `<>`."""
        text = (self.text or "<>").replace("<>", f"{self.reading:.6g}")
        return " ".join(str(fast_plain_mtext(text)).split())

    @property
    def difference(self) -> float | None:
        """The shown number less `reading`, None where no one number is shown."""
        return None if self.shown is None else self.shown - self.reading


def dimensions_of(document: Document, layers: Layers) -> list[DimensionRow]:
    """Return the dimensions of lengths in model space that are on visible layers."""
    rows = []
    for entity in document.modelspace().query("DIMENSION"):
        if not isinstance(entity, Dimension) or entity.dimtype not in LENGTHS:
            continue
        if layers.hidden(entity.dxf.layer) is not None or entity.dxf.get("invisible", 0):
            continue
        try:
            measured = float(entity.get_measurement())
            factor = abs(float(entity.override().get("dimlfac", 1.0) or 1.0))
        except (DXFError, TypeError, ValueError, ZeroDivisionError, AttributeError):
            continue  # its style or its points are missing: it says nothing that could be relied on
        if not isfinite(measured) or measured <= 0.0:
            continue
        text = str(entity.dxf.get("text", ""))
        written = text not in ("", "<>") and "<>" not in text
        shown, half = _number(text) if written else (measured * factor, 0.0)
        place = entity.dxf.get("text_midpoint") or entity.dxf.get("defpoint")
        at = complex(place[0], place[1]) if place is not None else 0j
        handle, kind = entity.dxf.handle or "", LENGTHS[entity.dimtype]
        layer = str(entity.dxf.layer)
        rows.append(DimensionRow(handle, kind, at, text, shown, half, measured, written, layer, factor))
    return rows


def _number(text: str) -> tuple[float | None, float]:
    """Return the one number of a written text and half a unit of its last digit; None where there is none or several.

    Counts (4x), tolerances and formatting codes are taken out; a decimal comma is a point. Feet and inches with
    fractions are left alone: they are several numbers.
    """
    plain = str(fast_plain_mtext(text)).replace("%%c", "").replace("%%C", "")
    numbers = _NUMBER.findall(_TOLERANCE.sub("", _COUNT.sub("", plain)))
    if len(numbers) != 1 or "/" in plain or "°" in plain or "%%d" in plain.lower():
        return None, 0.0
    digits = numbers[0].replace(",", ".")
    places = len(digits.partition(".")[2])
    return float(digits), 0.5 * 10.0**-places


def dimension_findings(rows: Sequence[DimensionRow], scale: float) -> list[Finding]:
    """Return what the dimensions say against the drawing at the scale taken (drawn length × scale = real length).

    All, or nearly all, off by one ratio: one `not-to-scale` or, where the ratio is that of two units, `units-suspect`.
    A single one that shows another number than it measures: `dimension-overridden`. Each is a warning.
    """
    told = [row for row in rows if row.shown]
    if not told:
        return []
    ratios = sorted((row.shown or 0.0) / row.measured for row in told)
    middle = ratios[len(ratios) // 2]
    alike = [row for row in told if _agrees(row, middle)]
    common = middle if len(alike) >= max(ENOUGH, MOST * len(told)) else scale
    findings = []
    if abs(common / scale - 1) > SAME_RATIO:
        findings.append(_scale_finding(common, len(alike), len(told)))
    else:
        common = scale
    odd = [row for row in told if row.written and not _agrees(row, common)]
    for row in odd[:LISTED]:
        text = (
            f"dimension #{row.handle} shows {row.text!r}, but measures {row.measured * common:.6g}: the text was "
            "written over the measurement, and one of them is wrong"
        )
        findings.append(Finding("dimension-overridden", "warning", text, (row.at.real, row.at.imag), (row.handle,)))
    if len(odd) > LISTED:
        text = f"{len(odd) - LISTED} more dimensions show another number than they measure"
        handles = tuple(row.handle for row in odd[LISTED:])
        findings.append(Finding("dimension-overridden", "warning", text, handles=handles))
    return findings


def _agrees(row: DimensionRow, scale: float) -> bool:
    expected = row.measured * scale
    return abs((row.shown or 0.0) - expected) <= max(AGREES * expected, row.half_digit * (1 + 1e-9))


def _scale_finding(ratio: float, alike: int, told: int) -> Finding:
    counted = f"{alike} of {told} dimensions show {ratio:.6g} times what they measure"
    for known, unit in UNIT_RATIOS.items():
        if abs(ratio / known - 1) <= SAME_RATIO:
            text = (
                f"{counted}: the drawing looks as if it were in {unit}; check the unit, and pass --units {unit} if so"
            )
            return Finding("units-suspect", "warning", text)
    text = f"{counted}: the drawing is not at full size; pass --scale {ratio:.6g} if the dimensions are right"
    return Finding("not-to-scale", "warning", text)
