"""`edgetally survey`: what a drawing holds."""

from __future__ import annotations

import json
from typing import TYPE_CHECKING

import click

from edgetally.cli.config import config_options, with_options_file
from edgetally.cli.options import EachDrawing, copied
from edgetally.findings import worst

if TYPE_CHECKING:
    from edgetally.survey import Survey


@click.command(epilog="Example: edgetally survey sample_drawings/bracket.dxf")
@click.argument("drawings", nargs=-1, required=True, type=click.Path(), metavar="DRAWING...")
@click.option(
    "--units",
    type=click.Choice(["mm", "cm", "m", "in", "ft"]),
    help="Length unit of the drawing; overrides its header.",
)
@click.option("--json", "as_json", is_flag=True, help="A JSON document; of several drawings one a line.")
@config_options
def survey(drawings: tuple[str, ...], units: str | None, as_json: bool) -> int:
    """Say what each DRAWING holds: unit, extents, and for each layer its entities, closed outlines, open ends.

    Gives each layer a verdict (usable, needs joining, no outline), and the layer that `sheet` would take.
    """
    from edgetally.output.survey_text import survey_text
    from edgetally.survey import survey as look

    def looked(drawing: str) -> Survey:
        options, file = with_options_file(drawing, {"units": units})
        unit = options["units"]
        source = "config" if file and "units" in file.options else "option"
        with copied(drawing) as (path, name):
            return look(path, units=unit, units_from=source, name=name)

    each = EachDrawing(drawings)
    for number, found in enumerate(each.results(looked)):
        if as_json:
            print(json.dumps(found.to_dict(), ensure_ascii=False, indent=2 if len(drawings) == 1 else None))
        else:
            print(("\n" if number else "") + survey_text(found))
        each.saw(worst(found.findings))
    return each.code
