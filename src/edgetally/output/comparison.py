"""A comparison as a document, as text, as blocks, as a PDF page."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from edgetally import __version__
from edgetally.outline.matching import Change, kind_of
from edgetally.outline.words import place
from edgetally.output.blocks import Block, Figure, block_lines
from edgetally.output.numbers import number_text
from edgetally.output.symbols import KEYS, SymbolSet, name_of, symbol_of
from edgetally.output.words import CAUTION

if TYPE_CHECKING:
    from edgetally.compare import Comparison, Pair, PropertyChange
    from edgetally.curves import Curve
    from edgetally.output.pages import Head
    from edgetally.results import Analysis

FORMAT = "edgetally.compare/1"


def comparison_document(comparison: Comparison) -> dict[str, Any]:
    """Return the comparison as plain dicts, lists, strings and numbers."""
    return {
        "format": FORMAT,
        "program": {"name": "edgetally", "version": __version__},
        "same": comparison.same,
        "old": _drawing(comparison.old),
        "new": _drawing(comparison.new),
        "sections": [
            {
                "old": pair.old.name,
                "new": pair.new.name,
                "same": pair.same,
                "shift": _point(pair.matching.shift),
                "curves": {
                    "unit": pair.old.section.unit,
                    "unchanged": pair.matching.unchanged,
                    "changes": [_change(n, change) for n, change in enumerate(pair.matching.changes, start=1)],
                },
                "properties": [
                    {
                        "key": p.key,
                        "unit": str(p.unit),
                        "before": p.before,
                        "after": p.after,
                        "change": p.change,
                        "percent": p.percent,
                        "same": p.same,
                    }
                    for p in pair.properties
                ],
            }
            for pair in comparison.pairs
        ],
        "vanished": [section.name for section in comparison.vanished],
        "appeared": [section.name for section in comparison.appeared],
        "findings": {
            state: [finding.to_dict() for finding in analysis.all_findings]
            for state, analysis in (("old", comparison.old), ("new", comparison.new))
        },
    }


def _drawing(analysis: Analysis) -> dict[str, Any]:
    d = analysis.drawing
    return {
        "file": d.file, "sha256": d.sha256, "unit": d.unit, "unit_source": d.unit_source, "scale": d.scale,
        "layers": list(d.reading.layers),
    }  # fmt: skip


def _change(number: int, change: Change) -> dict[str, Any]:
    return {
        "number": number,
        "kind": change.kind,
        "how": change.words,
        "before": [_curve(curve) for curve in change.before],
        "after": [_curve(curve) for curve in change.after],
    }


def _curve(curve: Curve) -> dict[str, Any]:
    return {
        "kind": kind_of(curve),
        "start": _point(curve.start),
        "end": _point(curve.end),
        "length": curve.length,
        "entity": curve.source.entity,
        "handle": curve.source.handle,
    }


def _point(z: complex) -> list[float]:
    return [z.real, z.imag]


def comparison_blocks(pair: Pair, symbols: SymbolSet) -> tuple[Block, Block]:
    """Return the curves that changed, and every property before, after and changed."""
    rows = [
        (str(n), change.kind, change.words, f"at {place((change.after or change.before)[0].point(0.5))}")
        for n, change in enumerate(pair.matching.changes, start=1)
    ]
    curves = Block("Curves that changed", ("no.", "", "how", "place"), tuple(rows), tuple(_notes(pair)))
    ordered = sorted(pair.properties, key=lambda p: KEYS.index(p.key))
    properties = tuple(_row(p, symbols) for p in ordered)
    heads = ("", "property", "before", "after", "change", "unit", "%")
    return curves, Block("Properties before and after", heads, properties, symbols_first=True)


def _row(p: PropertyChange, symbols: SymbolSet) -> tuple[str | Figure, ...]:
    change = Figure(0.0, "same") if p.same else Figure.of(p.change, 4)
    percent = "" if p.same or p.percent is None else _percent(p.percent)
    before, after = Figure.of(p.before, 7), Figure.of(p.after, 7)
    return symbol_of(p.key, symbols), name_of(p.key, symbols), before, after, change, p.unit.pretty, percent


def _percent(value: float) -> str:
    return f"{value:+.3f}".replace("-", "−") if abs(value) >= 5e-4 else "below 0.001"


def _notes(pair: Pair) -> list[str]:
    """Return the sentences on the outline as a whole."""
    matching, unit = pair.matching, pair.old.section.unit
    notes = []
    if matching.shift:
        by = f"({number_text(matching.shift.real)}, {number_text(matching.shift.imag)}) {unit}"
        notes.append(f"Everything was moved by {by}; the curves were compared after taking that back.")
    count = len(matching.changes)
    if count:
        notes.append(f"{matching.unchanged} curves lie where they were; lengths and places in {unit}.")
    else:
        notes.append(f"All {matching.unchanged} curves lie where they were.")
    return notes


def comparison_text(comparison: Comparison, symbols: SymbolSet = "plain") -> str:
    """Return what `compare` prints."""
    lines = [
        f"{state}  {a.drawing.file}, unit {a.drawing.unit}, layer {', '.join(a.drawing.reading.layers)}"
        for state, a in (("old", comparison.old), ("new", comparison.new))
    ]
    for pair in comparison.pairs:
        lines.append("")
        if len(comparison.old.sections) > 1 or len(comparison.new.sections) > 1:
            lines += [f"section {pair.old.name} → {pair.new.name}"]
        curves, properties = comparison_blocks(pair, symbols)
        lines += [*block_lines(curves), "", *block_lines(properties)]
    lines += [f"section {s.name} of the old drawing has none for it in the new one" for s in comparison.vanished]
    lines += [f"section {s.name} of the new drawing has none for it in the old one" for s in comparison.appeared]
    findings = [
        f"  {state}: {f.severity}: {f.code}: {f.message}"
        for state, a in (("old", comparison.old), ("new", comparison.new))
        for f in a.all_findings
    ]
    lines += ["", "findings", *findings] if findings else []
    verdict = "the same: every curve and every property" if comparison.same else "different"
    return "\n".join([*lines, "", f"result: {verdict}", "", CAUTION])


def comparison_pdf(comparison: Comparison, *, head: Head, page: str, symbols: SymbolSet) -> bytes:
    """Return the PDF: for each pair the overlay, the curves that changed, the properties."""
    from edgetally.output.overlay import overlay_picture
    from edgetally.output.pages import Pages, Setup, whole_pdf
    from edgetally.output.typesetting import set_blocks

    old, new = comparison.old.drawing, comparison.new.drawing
    setup = Setup(
        size=page,
        head=head,
        heading="Two states compared",
        facts=(
            ("Old drawing", old.file, 0.34),
            ("Unit", old.unit, 0.08),
            ("New drawing", new.file, 0.34),
            ("Unit", new.unit, 0.08),
            ("Unit of the results", comparison.old.out_unit, 0.16),
        ),
        line=("SHA-256, old and new", f"{old.sha256} {new.sha256}"),
        foot=(),
        title=f"{head.title or new.file}: compared with {old.file}",
        subject=f"{new.file} compared with {old.file}",
        keywords=f"sha256:{old.sha256} sha256:{new.sha256}",
    )

    def write(pages: Pages) -> None:
        for pair in comparison.pairs:
            several = len(comparison.pairs) > 1
            y = pages.open(f"Section {pair.old.name}" if several else new.file) - 6.0
            width, height = pages.right - pages.left, 340.0
            pages.frame(pages.left, y, width, height)
            pages.picture(overlay_picture(pair, width, height), pages.left, y - height)
            set_blocks(pages, comparison_blocks(pair, symbols), y - height - 6.0)
        lone = [f"Section {s.name} is in the old drawing only." for s in comparison.vanished]
        lone += [f"Section {s.name} is in the new drawing only." for s in comparison.appeared]
        if lone:
            set_blocks(
                pages, [Block("Sections without a partner", (), (), tuple(lone))], pages.open("Without a partner")
            )

    return whole_pdf(setup, write)
