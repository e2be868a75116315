"""The properties as text: a table for the terminal, and one CSV row a section."""

from __future__ import annotations

import csv
import io
from collections import defaultdict
from typing import TYPE_CHECKING

from edgetally.findings import RANK, Finding
from edgetally.output.blocks import block_lines, whole_part
from edgetally.output.composite_words import composite_blocks, composite_cells, composite_columns
from edgetally.output.dimension_table import dimension_block
from edgetally.output.numbers import value_text
from edgetally.output.section_blocks import section_blocks
from edgetally.output.symbols import KEYS, SymbolSet, symbol_of
from edgetally.output.words import CAUTION, described, evidence, header_fields

if TYPE_CHECKING:
    from edgetally.results import Analysis, SectionResult

LABEL = 28
SHORT_KEYS = (
    "area", "centroid_x", "centroid_y", "second_moment_x", "second_moment_y", "product_of_inertia",
    "principal_moment_1", "principal_moment_2", "principal_angle", "torsion_constant", "mass_per_length",
)  # fmt: skip


def analysis_text(analysis: Analysis, symbols: SymbolSet = "plain", *, short: bool = False) -> str:
    """Return what `tally` prints: the drawing, how it was read, the properties of each section, the findings."""
    lines = []
    for name, value in header_fields(analysis).items():
        if not (short and name in ("SHA-256", "DXF version")):
            lines.append(f"{name:<{LABEL}}{value}")
    told = [(name, value) for name, value in evidence(analysis) if not short or name == "options from"]
    lines += [f"{name:<{LABEL}}{value}" for name, value in told]
    for section in analysis.sections:
        lines.append("")
        if len(analysis.sections) > 1 or len(analysis.outline.regions) > 1:
            lines.append(f"section {section.name}")
        lines += property_lines(section, symbols, SHORT_KEYS if short else KEYS, analysis)
        if not short:
            lines += [line for block in section_blocks(section, symbols) for line in ("", *block_lines(block))]
    if analysis.composite is not None:
        blocks = composite_blocks(analysis.composite, symbols)
        lines += [line for block in (blocks[:1] if short else blocks) for line in ("", *block_lines(block))]
    dimensions = None if short else dimension_block(analysis)
    if dimensions is not None:
        lines += ["", *block_lines(dimensions)]
    findings = finding_lines(analysis.all_findings, analysis)
    if findings:
        lines += ["", "findings", *findings]
    if not short:
        lines += ["", CAUTION]
    return "\n".join(lines)


def property_lines(section: SectionResult, symbols: SymbolSet, keys: tuple[str, ...], analysis: Analysis) -> list[str]:
    """Return aligned lines: symbol, name, value with its decimal points under each other, unit, relative error."""
    rows = []
    for key in keys:
        prop = section.properties.get(key)
        if prop is not None:
            value = value_text(prop, section.natural_scale(key))
            rows.append(
                (symbol_of(key, symbols), described(key, symbols, analysis), value, prop.unit.pretty, prop.error)
            )
    symbol_width = max(len(row[0]) for row in rows)
    name_width = max(len(row[1]) for row in rows)
    before = max(len(whole_part(row[2])) for row in rows)
    after = max(len(row[2]) - len(whole_part(row[2])) for row in rows)
    head = f"  {'':<{symbol_width}}  {'':<{name_width}}  {'':<{before + after}}  {'unit':<5} relative error"
    lines = [head]
    for symbol, name, value, unit, error in rows:
        number = whole_part(value).rjust(before) + value[len(whole_part(value)) :].ljust(after)
        bound = f"{error:.0e}" if error else ""
        lines.append(f"  {symbol:<{symbol_width}}  {name:<{name_width}}  {number}  {unit:<5} {bound}".rstrip())
    return lines


def finding_lines(findings: tuple[Finding, ...], analysis: Analysis) -> list[str]:
    """Return the findings, gravest first; joins of one kind as one line, since the document lists every one."""
    joins: dict[str, list[Finding]] = defaultdict(list)
    lines = []
    for finding in sorted(findings, key=lambda f: -RANK[f.severity]):
        if finding.code == "gap-joined":
            joins[finding.severity].append(finding)
        else:
            lines.append(f"  {finding.severity}: {finding.code}: {finding.message}")
    for severity, group in joins.items():
        if len(group) == 1:
            lines += [f"  {severity}: {f.code}: {f.message}" for f in group]
        else:
            lines.append(f"  {severity}: gap-joined: {len(group)} gaps joined; --json lists each")
    return lines


def csv_header(out_unit: str, *, composite: bool = False) -> list[str]:
    """Return the column heads of the CSV: file and section, then every key with its unit in brackets.

    Where some drawing is `composite`, its own columns follow.
    """
    from edgetally.section.kinds import unit_of

    plain = ["drawing", "section", *(f"{key} [{unit_of(key, out_unit)}]" for key in KEYS), "findings"]
    return plain + (composite_columns(out_unit) if composite else [])


def csv_rows(analysis: Analysis) -> list[list[str]]:
    """Return one row a section, full precision, empty where a property was not asked for.

    A composite section has a row a part, and then one of its own, longer by `composite_columns`.
    """
    rows = []
    for section in analysis.sections:
        codes = " ".join(sorted({f.code for f in (*analysis.findings, *section.findings)}))
        values = [section.properties.get(key) for key in KEYS]
        numbers = ["" if p is None or p.value is None else repr(p.value) for p in values]
        rows.append([_cell(analysis.drawing.file), _cell(section.name), *numbers, codes])
    if analysis.composite is not None:
        mass = analysis.composite.properties.get("mass_per_length")
        own = [repr(mass.value) if key == "mass_per_length" and mass is not None else "" for key in KEYS]
        codes = " ".join(sorted({f.code for f in analysis.findings}))
        cells = composite_cells(analysis.composite)
        rows.append([_cell(analysis.drawing.file), "composite", *own, codes, *cells])
    return rows


def csv_text(rows: list[list[str]]) -> str:
    """Write rows as CSV with a line feed after each."""
    buffer = io.StringIO()
    csv.writer(buffer, lineterminator="\n").writerows(rows)
    return buffer.getvalue()


def _cell(text: str) -> str:
    """Guard a text from a drawing against being run as a formula by a spreadsheet."""
    return f"'{text}" if text[:1] in ("=", "+", "-", "@", "\t", "\r") else text
