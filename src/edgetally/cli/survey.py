"""`edgetally survey`: what a drawing holds."""

from __future__ import annotations

import json
import sys

import click

from edgetally.cli.options import copied
from edgetally.cli.tally import with_progress
from edgetally.errors import EdgetallyError


@click.command(epilog="Example: edgetally survey sample_drawings/bracket.dxf")
@click.argument("drawings", nargs=-1, required=True, metavar="DRAWING...")
@click.option(
    "--units",
    type=click.Choice(["mm", "cm", "m", "in", "ft"]),
    help="Length unit of the drawing; overrides its header.",
)
@click.option("--json", "as_json", is_flag=True, help="A JSON document; of several drawings one a line.")
def survey(drawings: tuple[str, ...], units: str | None, as_json: bool) -> int:
    """Say what each DRAWING holds: unit, extents, and for each layer its entities, closed outlines, open ends.

    Gives each layer a verdict (usable, needs joining, no outline), and the layer that `sheet` would take.
    """
    from edgetally.output.survey_text import survey_text
    from edgetally.survey import survey as look

    code = 0
    for number, drawing in enumerate(with_progress(drawings)):
        try:
            with copied(drawing) as (path, name):
                found = look(path, units=units, name=name)
        except EdgetallyError as error:
            if len(drawings) == 1:
                raise
            print(f"edgetally: {drawing}: {error}", file=sys.stderr)
            code = 2
            continue
        if as_json:
            print(json.dumps(found.to_dict(), ensure_ascii=False, indent=2 if len(drawings) == 1 else None))
        else:
            print(("\n" if number else "") + survey_text(found))
        code = max(code, int(any(f.severity == "warning" for f in found.findings)))
    return code
