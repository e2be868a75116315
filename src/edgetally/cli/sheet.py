"""`edgetally sheet`: the PDF for the calculation file."""

from __future__ import annotations

import datetime
from typing import Any

import click

from edgetally.cli.options import EXIT_OF, analysed, material_option, reading_options
from edgetally.errors import UsageError


@click.command(
    epilog="Example: edgetally sheet sample_drawings/bracket.dxf --layer OUTLINE -o bracket.pdf --title 'Bracket'"
)
@click.argument("drawing", type=click.Path(), metavar="DRAWING")
@click.option("-o", "output", type=click.Path(), required=True, metavar="OUT.pdf", help="Where the sheet goes.")
@reading_options
@material_option
@click.option("--title", default="", help="Title in the head of the page.")
@click.option("--reference", default="", help="Reference in the head of the page.")
@click.option("--prepared", default="", help="Who prepared it.")
@click.option("--date", "day", default="", metavar="YYYY-MM-DD", help="The date in the head of the page.")
@click.option("--page", type=click.Choice(["a4", "letter"]), default="a4", show_default=True, help="Paper.")
def sheet(
    drawing: str, output: str, title: str, reference: str, prepared: str, day: str, page: str, **options: Any
) -> int:
    """Write a PDF sheet of the section on a layer of DRAWING: figure, axes, properties, evidence.

    Prints a short summary too. What is not given for the head of the page is left blank, to fill in by hand.
    """
    from edgetally.output.files import check_target, write_whole

    if day:
        try:
            datetime.date.fromisoformat(day)
        except ValueError:
            raise UsageError(f"--date {day!r} is not a date: write it as 2026-03-31") from None
    check_target(output, drawing)
    analysis = analysed(drawing, options)
    from edgetally.output.sheet import Head, sheet_pdf
    from edgetally.output.table import analysis_text

    head = Head(title, reference, prepared, day)
    write_whole(output, sheet_pdf(analysis, head=head, page=page, symbols=options["symbols"]))
    print(analysis_text(analysis, options["symbols"], short=True))
    print(f"\nwritten: {output}")
    return EXIT_OF[analysis.severity]
