"""The sentences that terminal, sheet and page share: evidence, conventions, caution."""

from __future__ import annotations

from typing import TYPE_CHECKING

from edgetally.outline.words import length_text, place
from edgetally.output.dimension_table import dimension_evidence
from edgetally.output.numbers import mantissa_and_power, number_text
from edgetally.output.symbols import SymbolSet, name_of
from edgetally.units import Unit

if TYPE_CHECKING:
    from edgetally.results import Analysis

CAUTION = (
    "The results describe the outline as drawn. They are no proof of strength, stability or fitness: check them "
    "against the codes that apply, and have them used by a licensed professional."
)

UNIT_WORDS = {"option": "option", "header": "file header", "config": "options file"}

_SUPERSCRIPT = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")


def conventions(x: str, y: str, first: str, second: str) -> list[str]:
    """Return the sign conventions, with the letters of the axes in use."""
    return [
        f"{x} to the right, {y} up, as drawn. I_{x} = ∫{y}² dA and I_{y} = ∫{x}² dA about the centroid C; "
        f"I_{x}{y} = +∫{x}·{y} dA (some texts use the other sign).",
        f"I_{first} ≥ I_{second}. θ is the angle from +{x} to axis {first}, counter-clockwise positive; axis {second} "
        f"is axis {first} turned by +90°.",
        f"Elastic moduli are I over the distance to the extreme fibre of the true outline on the side named; for axis "
        f"{first} the + side is towards +{second}, for axis {second} towards +{first}.",
    ]


def in_print(text: str) -> str:
    """Turn the exponent that number_text wrote into a power of ten: 19.43e6 → 19.43 × 10⁶."""
    mantissa, power = mantissa_and_power(text.replace("-", "−"))
    return f"{mantissa} × 10{str(power).translate(_SUPERSCRIPT)}" if power else mantissa


def described(key: str, symbols: SymbolSet, analysis: Analysis) -> str:
    """Return the name of a property, with the density or Poisson's ratio that it was taken at."""
    name = name_of(key, symbols)
    if key == "mass_per_length" and analysis.density is not None:  # of a composite section each part has its own
        return f"{name} at {analysis.density:g} kg/m³"
    return f"{name}, ν = {analysis.poisson:g}" if key.startswith("shear_area") else name


def evidence(analysis: Analysis) -> list[tuple[str, str]]:
    """Return (what, words) lines that show how the outline was read."""
    reading, outline = analysis.drawing.reading, analysis.outline
    used = ", ".join(f"{count} {kind}" for kind, (_, count) in reading.kinds.items() if count) or "none"
    file = analysis.drawing.options_file
    lines = [("options from", f"{file.file}: {', '.join(file.options)}")] if file else []
    lines += [
        ("entities on the layer", f"{reading.read} read = {reading.used} used + {len(reading.skips)} left out"),
        ("used", used),
    ]
    if reading.skips:
        left = ", ".join(f"{n - u} {kind}" for kind, (n, u) in reading.kinds.items() if n - u)
        lines.append(("left out", left))
    lines.append(("on other layers", f"{reading.elsewhere} entities, not read"))
    voids = sum(len(region.voids) for region in outline.regions)
    lines.append((
        "assembled to",
        f"{len(reading.curves)} curves, {len(outline.regions) + voids} closed loops: "
        f"{_count(len(outline.regions), 'outer boundary', 'outer boundaries')}, {_count(voids, 'void', 'voids')}",
    ))  # fmt: skip
    if dimensions := dimension_evidence(analysis):
        lines.append(("dimensions", dimensions))
    effect, unit = analysis.join_effect, analysis.drawing.unit
    limit = f"up to {length_text(analysis.drawing.join_gap, unit)}"
    if effect is None:
        lines.append(("joins", f"none: all ends meet exactly (joined {limit})"))
    else:
        lines.append(
            ("joins", f"{effect.count} ({limit}), widest {length_text(effect.widest, unit)} at {place(effect.at)}")
        )
        out = analysis.out_unit
        lines.append((
            "largest effect of the joins",
            f"area {_power(effect.area, 2, out)}{_share(analysis, effect.area)}, "
            f"second moments {_power(effect.second_moment, 4, out)}",
        ))  # fmt: skip
    return lines


def _share(analysis: Analysis, area: float) -> str:
    """The effect on the area in percent, where there is one section to relate it to."""
    if len(analysis.sections) != 1:
        return ""
    return f" ({100 * area / (analysis.sections[0].properties['area'].value or area):.1g} %)"


def _count(n: int, one: str, many: str) -> str:
    return f"{n} {one if n == 1 else many}"


def _power(value: float, power: int, unit: str) -> str:
    return f"± {in_print(number_text(value, 2))} {Unit(unit, power).pretty}"


def drawn_scale(scale: float) -> str:
    """Write the drawing's scale: drawn length × N = real length."""
    if scale == 1:
        return "1:1 (drawn = real)"
    return f"drawn × {scale:.12g} = real"


def header_fields(analysis: Analysis) -> dict[str, str]:
    """Return the facts that name the drawing, in the order of print."""
    drawing = analysis.drawing
    unit = f"{drawing.unit} (from {UNIT_WORDS[drawing.unit_source]})"
    return {
        "drawing": drawing.file,
        "layer": ", ".join(drawing.reading.layers),
        "unit of the drawing": unit,
        "scale of the drawing": drawn_scale(drawing.scale),
        "unit of the results": analysis.out_unit,
        "DXF version": drawing.dxf_version,
        "SHA-256": drawing.sha256,
    }
