"""`edgetally sheet`: the PDF for the calculation file."""

from __future__ import annotations

from typing import Any

import click

from edgetally.cli.options import EXIT_OF, analysed, checked_date, head_options, material_option, reading_options
from edgetally.errors import UsageError

PAGES = ("main", "torsion", "stress", "extrusion", "strip")


@click.command(
    epilog="Example: edgetally sheet sample_drawings/bracket.dxf --layer OUTLINE -o bracket.pdf --title 'Bracket'"
)
@click.argument("drawing", type=click.Path(), metavar="DRAWING")
@click.option("-o", "output", type=click.Path(), required=True, metavar="OUT.pdf", help="Where the sheet goes.")
@reading_options
@material_option
@head_options
@click.option(
    "--pages",
    metavar="NAMES",
    help=f"Which pages, separated by commas: {', '.join(PAGES)}, or all. Without it: those that apply.",
)
def sheet(
    drawing: str,
    output: str,
    title: str,
    reference: str,
    prepared: str,
    day: str,
    page: str,
    pages: str | None,
    **options: Any,
) -> int:
    """Write a PDF sheet of the section on a layer of DRAWING: figure, axes, properties, evidence.

    Prints a short summary too. What is not given for the head of the page is left blank, to fill in by hand.
    """
    from edgetally.output.files import check_target, write_whole

    checked_date(day)
    wanted = _named(pages)
    check_target(output, drawing)
    analysis = analysed(drawing, options)
    from edgetally.output.sheet import Head, sheet_pdf
    from edgetally.output.table import analysis_text

    head = Head(title, reference, prepared, day)
    write_whole(output, sheet_pdf(analysis, head=head, page=page, symbols=options["symbols"], pages=wanted))
    print(analysis_text(analysis, options["symbols"], short=True))
    print(f"\nwritten: {output}")
    return EXIT_OF[analysis.severity]


def _named(pages: str | None) -> tuple[str, ...]:
    """Return the names of the pages asked for; none for those that apply. Raises UsageError for an unknown one."""
    if pages is None:
        return ()
    names = tuple(name.strip().lower() for name in pages.split(","))
    unknown = [name for name in names if name not in (*PAGES, "all")]
    if unknown:
        raise UsageError(f"--pages {unknown[0]!r} is not known: name some of {', '.join(PAGES)}, or all")
    return ("all",) if "all" in names else names
