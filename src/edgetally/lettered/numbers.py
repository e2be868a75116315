"""Numbers as people letter them: decimal comma or point, digits in groups, powers of ten."""

from __future__ import annotations

import re
from dataclasses import dataclass

SPACES = "\u0020\u00a0\u2009\u202f'’"
"""What stands between groups of three digits, beside comma and point."""

NUMBER = (
    rf"[+-]?(?:\d{{1,3}}(?:[{SPACES}]\d{{3}})+(?:[.,]\d+)?(?!\d)|\d+(?:[.,]\d+)*|[.,]\d+)"
    r"(?:[eE][+-]?\d{1,2}(?!\w))?"
)
TEN = r"[x×·*]\s*10\s*(?:\^\s*\{?|\*\*\s*)?(?P<ten>[-+]?\d{1,2}|[⁺⁻]?[⁰¹²³⁴⁵⁶⁷⁸⁹]{1,2})\}?"
"""A power of ten after a number; between the sign of multiplication and a unit, 104 is 10⁴ written flat."""

RAISED = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻", "0123456789+-")


@dataclass(frozen=True, slots=True)
class Written:
    """One way to read a number, and half a unit of its last written digit."""

    value: float
    half_digit: float


def readings(text: str, ten: str | None = None) -> tuple[Written, ...]:
    """Return the ways to read what NUMBER matched, times the power of ten that TEN did.

    One comma or point is a decimal mark; with three digits after it and at most three before, it may part thousands
    as well: 1,234 is 1.234 or 1234. Of several marks the last, if it stands alone, is the decimal one.
    """
    plain = re.sub(rf"[{SPACES}]", "", text)
    mantissa, _, exponent = plain.lower().partition("e")
    power = int(exponent or 0) + int((ten or "0").translate(RAISED))
    found = []
    for digits in _decimals(mantissa):
        places = len(digits.partition(".")[2])
        found.append(Written(float(f"{digits}e{power}"), 0.5 * 10.0 ** (power - places)))
    return tuple(found)


def _decimals(text: str) -> list[str]:
    """Return the decimal numbers, with a point, that a text with commas and points may be."""
    marks = re.findall(r"[.,]", text)
    if not marks:
        return [text]
    last = max(text.rfind("."), text.rfind(","))
    whole, after = re.sub(r"[.,]", "", text[:last]), text[last + 1 :]
    if marks.count(marks[-1]) > 1:  # 1.234.567
        return [re.sub(r"[.,]", "", text)]
    decimal = f"{whole or '0'}.{after}" if whole not in ("+", "-") else f"{whole}0.{after}"
    grouped = len(marks) == 1 and len(after) == 3 and 1 <= len(whole.lstrip("+-")) <= 3
    return [decimal, whole + after] if grouped and whole.lstrip("+-0") else [decimal]
