"""`edgetally compare`: two revisions of one section."""

from __future__ import annotations

import json
import sys
from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

from edgetally.cli.config import with_options_file
from edgetally.cli.options import checked_date, copied, head_options, reading_options, settings_of
from edgetally.errors import UsageError

if TYPE_CHECKING:
    from edgetally.compare import Comparison
    from edgetally.output.pages import Head
    from edgetally.output.symbols import SymbolSet


@click.command(epilog="Example: edgetally compare bracket-a.dxf bracket-b.dxf --layer OUTLINE -o change.pdf")
@click.argument("old", type=click.Path(), metavar="OLD")
@click.argument("new", type=click.Path(), metavar="NEW")
@click.option("-o", "output", type=click.Path(), metavar="FILE", help="The overlay as .pdf, with the tables, or .svg.")
@click.option("--json", "as_json", is_flag=True, help="The comparison as a JSON document.")
@reading_options
@head_options
def compare(
    old: str,
    new: str,
    output: str | None,
    as_json: bool,
    title: str,
    reference: str,
    prepared: str,
    day: str,
    page: str,
    **options: Any,
) -> int:
    """Say what differs between the section in OLD and in NEW: the curves that moved, and every property.

    The exit code is 0 if both are the same, 1 if they differ, 2 if one cannot be read.
    """
    from edgetally.compare import compare as compared
    from edgetally.output.comparison import comparison_document, comparison_text
    from edgetally.output.files import check_target, write_whole

    checked_date(day)
    if old == new == "-":
        raise UsageError("only one of the two drawings can be read from standard input")
    if output is not None:
        for drawing in (old, new):
            check_target(output, drawing)
        if Path(output).suffix.lower() not in (".pdf", ".svg"):
            raise UsageError(f"-o {output}: name a file that ends in .pdf or .svg")
    options, options_file = with_options_file(old, options)
    if options_file is not None:
        print(f"edgetally: options from {options_file.file}: {', '.join(options_file.options)}", file=sys.stderr)
    settings = settings_of(options) | {"options_file": options_file}
    with copied(old) as (old_path, old_name), copied(new) as (new_path, new_name):
        found = compared(old_path, new_path, names=(old_name, new_name), **settings)
    if output is not None:
        from edgetally.output.pages import Head

        head = Head(title, reference, prepared, day)
        write_whole(output, _drawn(found, output, head, page, options["symbols"]))
    if as_json:
        print(json.dumps(comparison_document(found), ensure_ascii=False, indent=2))
    else:
        print(comparison_text(found, options["symbols"]))
        if output is not None:
            print(f"\nwritten: {output}")
    return 0 if found.same else 1


def _drawn(found: Comparison, output: str, head: Head, page: str, symbols: SymbolSet) -> bytes:
    if output.lower().endswith(".pdf"):
        from edgetally.output.comparison import comparison_pdf

        return comparison_pdf(found, head=head, page=page, symbols=symbols)
    from edgetally.output.overlay import overlay_picture
    from edgetally.output.svg import picture_svg

    if len(found.pairs) != 1:
        raise UsageError("an .svg shows one section: say which with --pick, or name a .pdf")
    return picture_svg(overlay_picture(found.pairs[0], 480.0, 420.0), "two states of a section").encode()
