"""How a number is printed: digits that mean something, and no others."""

from __future__ import annotations

from math import floor, isfinite, log10

from edgetally.section.record import Property

DIGITS = 7
"""Significant digits in print: more than any drawing's own tolerance, fewer than a page can be read with."""


def digits_of(error: float | None) -> int:
    """Return how many significant digits a relative error leaves, at most DIGITS."""
    if not error:
        return DIGITS
    return max(1, min(DIGITS, floor(-log10(error)))) if error < 1 else 1


def number_text(value: float, digits: int = DIGITS) -> str:
    """Write a value with `digits` significant digits: plain below 10⁷, then with an exponent divisible by 3."""
    if not isfinite(value):
        return str(value)
    if value == 0:
        return "0"
    value = float(f"{value:.{digits - 1}e}")
    exponent = floor(log10(abs(value)))
    if -4 <= exponent < 7:
        return f"{value:.{max(0, digits - 1 - exponent)}f}"
    power = 3 * (exponent // 3)
    return f"{value / 10.0**power:.{max(0, digits - 1 - exponent + power)}f}e{power}"


def mantissa_and_power(text: str) -> tuple[str, int]:
    """Split what number_text wrote into the digits and the power of ten."""
    mantissa, _, power = text.partition("e")
    return mantissa, int(power.replace("−", "-") or 0)


def value_text(prop: Property, scale: float = 0.0) -> str:
    """Write a property's value. A value below its own error on the natural `scale` is written as 0."""
    if prop.value is None:
        return "–"
    if prop.unit.base == "deg":
        return f"{prop.value + 0.0:.4f}"
    if prop.error is not None and abs(prop.value) <= 2.0 * prop.error * scale:
        return "0"
    return number_text(prop.value, digits_of(prop.error))
