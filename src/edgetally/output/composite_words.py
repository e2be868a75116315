"""A composite section as blocks: the whole, its parts, and the extreme fibres of each."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from edgetally.output.blocks import Block, Cell, Figure
from edgetally.output.numbers import value_text
from edgetally.output.symbols import AXES, SymbolSet, name_of, symbol_of
from edgetally.section.composite import KEYS, SIDES, composite_unit

if TYPE_CHECKING:
    from edgetally.section.composite import CompositeResult

# key → (name, symbol); {x} {y} {1} {2} are the axis letters, as in `symbols`
_TABLE: dict[str, tuple[str, str]] = {
    "axial_stiffness": ("axial stiffness", "EA"),
    "elastic_centroid_x": ("elastic centroid, {x}", "{x}_e"),
    "elastic_centroid_y": ("elastic centroid, {y}", "{y}_e"),
    "bending_stiffness_x": ("bending stiffness about {x}", "EI_{x}"),
    "bending_stiffness_y": ("bending stiffness about {y}", "EI_{y}"),
    "bending_stiffness_xy": ("product stiffness", "EI_{x}{y}"),
    "bending_stiffness_1": ("bending stiffness, axis {1}", "EI_{1}"),
    "bending_stiffness_2": ("bending stiffness, axis {2}", "EI_{2}"),
    "transformed_area": ("transformed area", "A_t"),
    "transformed_second_moment_x": ("transformed second moment about {x}", "I_{x},t"),
    "transformed_second_moment_y": ("transformed second moment about {y}", "I_{y},t"),
    "transformed_product_of_inertia": ("transformed product of inertia", "I_{x}{y},t"),
    "transformed_principal_moment_1": ("transformed principal moment, axis {1}", "I_{1},t"),
    "transformed_principal_moment_2": ("transformed principal moment, axis {2}", "I_{2},t"),
}


def _filled(text: str, symbols: SymbolSet) -> str:
    letters = AXES[symbols]
    for key, letter in (("x", letters.x), ("y", letters.y), ("1", letters.first), ("2", letters.second)):
        text = text.replace("{" + key + "}", letter)
    return text


def composite_name(key: str, symbols: SymbolSet = "plain") -> str:
    """Return the plain name of a property of a composite section, with the axis letters of the set."""
    return _filled(_TABLE[key][0], symbols) if key in _TABLE else name_of(key, symbols)


def composite_symbol(key: str, symbols: SymbolSet = "plain") -> str:
    """Return its symbol, subscript after `_`."""
    return _filled(_TABLE[key][1], symbols) if key in _TABLE else symbol_of(key, symbols)


def composite_blocks(composite: CompositeResult, symbols: SymbolSet = "plain") -> tuple[Block, ...]:
    """Return the whole, the parts, and the parts' extreme fibres and moduli, in the unit of the results."""
    return _whole(composite, symbols), _parts(composite), _fibres(composite, symbols), _moduli(composite, symbols)


def _whole(composite: CompositeResult, symbols: SymbolSet) -> Block:
    rows: list[tuple[Cell, ...]] = []
    for key in KEYS:
        prop = composite.properties.get(key)
        if prop is not None:
            value = Figure(prop.value, value_text(prop, composite.natural_scale(key)))
            error = f"{prop.error:.0e}" if prop.error else ""
            rows.append((composite_symbol(key, symbols), composite_name(key, symbols), value, prop.unit.pretty, error))
    letters = AXES[symbols]
    notes: tuple[str, ...] = (
        f"Transformed to E_ref = {composite.reference:.7g} MPa, that of the first material "
        f"({composite.parts[0].material.layer}): n = E/E_ref, A_t = Σ n·A, I_t = Σ n·I about the elastic centroid. "
        "The parts are taken as bonded: plane sections stay plane.",
        f"EI_{letters.x}{letters.y} and its transformed product have the sign of +∫{letters.x}·{letters.y} dA.",
        "Torsion and shear of a composite section are not given.",
    )
    unknown = [part.material.layer for part in composite.parts if part.material.density is None]
    if 0 < len(unknown) < len(composite.parts):
        notes += (f"The mass is not given: {', '.join(unknown)} has no density.",)
    return Block("Composite section", ("", "", "", "unit", "relative error"), tuple(rows), notes, symbols_first=True)


def _parts(composite: CompositeResult) -> Block:
    unit = composite.parts[0].area.unit.pretty
    total = composite.properties["transformed_area"].value or 1.0
    rows: list[tuple[Cell, ...]] = []
    for part in composite.parts:
        n = part.material.modulus / composite.reference
        modulus = Figure(part.material.modulus, f"{part.material.modulus:.7g}")
        known = part.material.density
        density = Figure(known, "–" if known is None else f"{known:.7g}")
        area = Figure(part.area.value, value_text(part.area))
        share = Figure.of(100.0 * n * (part.area.value or 0.0) / total, 4)
        rows.append((part.material.layer, modulus, Figure.of(n), density, area, share))
    heads = ("layer", "E [MPa]", "n", "density [kg/m³]", f"A [{unit}]", "share of EA [%]")
    return Block("Parts", heads, tuple(rows))


def _fibres(composite: CompositeResult, symbols: SymbolSet) -> Block:
    letters, unit = AXES[symbols], composite.out_unit
    rows: list[tuple[Cell, ...]] = []
    for part in composite.parts:
        found = [part.properties[f"fibre_{side}"] for _, side in SIDES]
        size = composite.natural_scale("elastic_centroid_x")
        rows.append((part.material.layer, *(Figure(p.value, value_text(p, size)) for p in found)))
    heads = ("layer", *(f"{side} [{unit}]" for _, side in SIDES))
    note = (
        f"Distances from the elastic centroid along {letters.y} (top, bottom) and {letters.x} (left, right); negative "
        "where the whole part lies on the other side."
    )
    return Block("Extreme fibres of each part", heads, tuple(rows), (note,))


def _moduli(composite: CompositeResult, symbols: SymbolSet) -> Block:
    letters = {"x": AXES[symbols].x, "y": AXES[symbols].y}
    rows: list[tuple[Cell, ...]] = []
    for part in composite.parts:
        found = [part.properties[f"elastic_modulus_{axis}_{side}"] for axis, side in SIDES]
        rows.append((part.material.layer, *(Figure(p.value, value_text(p)) for p in found)))
    unit = found[0].unit.pretty
    heads = ("layer", *(f"{letters[axis]}, {side} [{unit}]" for axis, side in SIDES))
    note = (
        "EI/(E·distance): a moment over it is the stress in that fibre of the part. Valid about axes for which the "
        "product stiffness is 0, as those of a plain section are; – where the fibre lies on the axis."
    )
    return Block("Elastic moduli of each part", heads, tuple(rows), (note,))


def composite_document(composite: CompositeResult) -> dict[str, Any]:
    """Return the composite section as the JSON document carries it; moduli in MPa, densities in kg/m³."""
    return {
        "reference_modulus": {"value": composite.reference, "unit": "MPa"},
        "parts": [
            {
                "layer": part.material.layer,
                "modulus": {"value": part.material.modulus, "unit": "MPa"},
                "density": None
                if part.material.density is None
                else {"value": part.material.density, "unit": "kg/m^3"},
                "area": _number(part.area),
                "properties": {key: _number(p) for key, p in part.properties.items()},
            }
            for part in composite.parts
        ],
        "properties": {key: _number(p) for key, p in composite.properties.items()},
    }


def _number(prop: Any) -> dict[str, Any]:
    return {"value": prop.value, "unit": str(prop.unit), "error": prop.error}


def composite_columns(out_unit: str) -> list[str]:
    """Return the heads of the CSV columns of a composite section, each with its unit in brackets."""
    return [f"{key} [{composite_unit(key, out_unit)}]" for key in _CSV_KEYS]


def composite_cells(composite: CompositeResult) -> list[str]:
    """Return its numbers for those columns, at full precision."""
    found = [composite.properties.get(key) for key in _CSV_KEYS]
    return ["" if p is None or p.value is None else repr(p.value) for p in found]


_CSV_KEYS = tuple(_TABLE)
