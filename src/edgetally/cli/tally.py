"""`edgetally tally`: the properties on the terminal, or for another program."""

from __future__ import annotations

import json
from typing import TYPE_CHECKING, Any

import click

from edgetally.cli.options import EachDrawing, analysed, material_option, reading_options
from edgetally.errors import UsageError

if TYPE_CHECKING:
    from edgetally.results import Analysis


@click.command(
    epilog="Example: edgetally tally sample_drawings/bracket.dxf --layer OUTLINE --out-units cm --density steel"
)
@click.argument("drawings", nargs=-1, required=True, type=click.Path(), metavar="DRAWING...")
@reading_options
@material_option
@click.option("--json", "as_json", is_flag=True, help="The JSON document; of several drawings one a line.")
@click.option("--csv", "as_csv", is_flag=True, help="A table with one row a section.")
@click.option("--svg", type=click.Path(), metavar="FILE", help="Write the figure of the section too.")
@click.option("--xlsx", type=click.Path(), metavar="FILE", help="Write a workbook of the results too.")
def tally(
    drawings: tuple[str, ...], as_json: bool, as_csv: bool, svg: str | None, xlsx: str | None, **options: Any
) -> int:
    """Print the properties of the section on a layer of each DRAWING; `-` reads standard input."""
    if as_json and as_csv:
        raise UsageError("--json and --csv contradict each other: give one of them")
    if svg is not None:
        if len(drawings) > 1:
            raise UsageError("--svg takes one drawing at a time")
        from edgetally.output.files import check_target

        check_target(svg, drawings[0])
    if xlsx is not None:
        from edgetally.output.files import check_target
        from edgetally.output.workbook import check_installed

        check_installed()
        for drawing in drawings:
            check_target(xlsx, drawing)
    analyses: list[Analysis] = []
    rows: list[list[str]] = []
    csv_units: set[str] = set()
    each = EachDrawing(drawings)
    for number, analysis in enumerate(
        each.results(lambda drawing: analysed(drawing, options, alone=len(drawings) == 1))
    ):
        each.saw(analysis.severity)
        if as_json:
            print(json.dumps(analysis.to_dict(), ensure_ascii=False, indent=2 if len(drawings) == 1 else None))
        elif as_csv:
            from edgetally.output.table import csv_rows

            rows += csv_rows(analysis)
            csv_units.add(analysis.out_unit)
        else:
            from edgetally.output.table import analysis_text

            print(("\n" if number else "") + analysis_text(analysis, options["symbols"]))
        if svg is not None:
            _write_svg(svg, analysis, options["symbols"])
        if xlsx is not None:
            analyses.append(analysis)
    if as_csv and rows:
        if len(csv_units) > 1:
            raise UsageError("the drawings have different units: say with --out-units which the table is to have")
        from edgetally.output.table import csv_header, csv_text

        header = csv_header(csv_units.pop(), composite=len({len(row) for row in rows}) > 1)
        print(csv_text([header, *(row + [""] * (len(header) - len(row)) for row in rows)]), end="")
    if xlsx is not None and analyses:
        _write_workbook(xlsx, analyses, options["symbols"])
    return each.code


def _write_svg(svg: str, analysis: Any, symbols: Any) -> None:
    from edgetally.output.files import write_whole
    from edgetally.output.svg import figure_svg

    if len(analysis.sections) > 1:
        raise UsageError("--svg draws one section: say which with --pick, or --together")
    write_whole(svg, figure_svg(analysis.sections[0], symbols).encode())


def _write_workbook(xlsx: str, analyses: list[Analysis], symbols: Any) -> None:
    from edgetally.output.composite_words import composite_blocks
    from edgetally.output.files import write_whole
    from edgetally.output.section_blocks import section_blocks
    from edgetally.output.workbook import workbook_bytes

    blocks = [block for a in analyses if a.composite for block in composite_blocks(a.composite, symbols)]
    blocks += [block for a in analyses for section in a.sections for block in section_blocks(section, symbols)]
    write_whole(xlsx, workbook_bytes(analyses, symbols, blocks))
