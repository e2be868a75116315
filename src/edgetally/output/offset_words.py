"""The band of each property under a tolerance, as a block and for the document."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from edgetally.output.blocks import Block, Cell, Figure
from edgetally.output.symbols import KEYS, SymbolSet, name_of, symbol_of
from edgetally.units import length_factor

if TYPE_CHECKING:
    from edgetally.results import SectionResult
    from edgetally.section.offsets import OffsetBand

DIGITS = 5


def _values(section: SectionResult, band: OffsetBand, key: str) -> dict[str, float | None]:
    """Return the rate, what it makes of the value both ways, and what the moved outline has; in the results' unit."""
    length = length_factor(section.section.unit, section.out_unit)
    prop = section.properties[key]
    # a power of the length unit; the unit of an angle or a mass stands for itself
    power = prop.unit.power if prop.unit.base == section.out_unit else 0
    factor, value = length**power, prop.value or 0.0
    change = band.rates[key] * band.distance * factor
    exact = [None if side is None else side[key] * factor for side in (band.inward, band.outward)]
    return {
        "rate": band.rates[key] * factor / length,
        "minus": value - change,
        "plus": value + change,
        "exact_minus": exact[0],
        "exact_plus": exact[1],
    }


def offset_document(section: SectionResult, band: OffsetBand) -> dict[str, Any]:
    """Return the band as plain dicts and numbers; rates per unit of length."""
    return {
        "delta": band.distance * length_factor(section.section.unit, section.out_unit),
        "unit": section.out_unit,
        "by_chords": band.by_chords,
        "properties": {key: _values(section, band, key) for key in KEYS if key in band.rates},
    }


def offset_block(section: SectionResult, symbols: SymbolSet) -> Block | None:
    """Return the table: value, its band to first order, and as the moved outline has it."""
    band = section.offset
    if band is None:
        return None
    rows: list[tuple[Cell, ...]] = []
    for key in KEYS:
        if key not in band.rates:
            continue
        found, prop = _values(section, band, key), section.properties[key]
        columns = (prop.value, found["minus"], found["plus"], found["exact_minus"], found["exact_plus"])
        cells = [Figure.of(value, DIGITS) for value in columns]
        rows.append((symbol_of(key, symbols), name_of(key, symbols), *cells, prop.unit.pretty))
    f, unit = length_factor(section.section.unit, section.out_unit), section.out_unit
    distance = f"{band.distance * f:.6g} {unit}"
    notes = [
        "First order: value ± rate × distance, the rates being integrals along the boundary. Moved: the outline with "
        "every surface moved by that distance, corners left sharp"
        + (", its curves as fine chords." if band.by_chords else ", exact."),
        "Torsion, warping, shear and plastic values are not among them.",
    ]
    notes += [f"Not possible: {finding.message}." for finding in band.refused]
    heads = ("", "property", "value", "first order, in", "out", "moved, in", "out", "unit")
    return Block(f"Every surface moved by {distance}", heads, tuple(rows), tuple(notes), symbols_first=True)
