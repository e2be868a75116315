"""Options that mean the same in every command, and how they reach `analyse`."""

from __future__ import annotations

import datetime
import sys
import tempfile
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any, TypeVar

import click

from edgetally.cli.config import config_options, with_options_file
from edgetally.cli.progress import Stages, with_progress
from edgetally.errors import EdgetallyError, UsageError

if TYPE_CHECKING:
    from edgetally.findings import Severity
    from edgetally.results import Analysis

Command = TypeVar("Command", bound=Callable[..., Any])
Result = TypeVar("Result")

EXIT_OF: dict[Severity | None, int] = {None: 0, "note": 0, "warning": 1, "error": 2}

_READING = [
    click.option(
        "--layer",
        multiple=True,
        metavar="PATTERN",
        help="Layer to read; repeatable, shell-style wildcards, any case. Without it: the only visible layer that "
        "carries a closed outline.",
    ),
    click.option(
        "--units",
        type=click.Choice(["mm", "cm", "m", "in", "ft"]),
        help="Length unit of the drawing; overrides its header.",
    ),
    click.option("--scale", type=float, default=1.0, show_default=True, help="Drawn length × N = real length."),
    click.option(
        "--join-gap",
        default="0.01mm",
        show_default=True,
        metavar="LENGTH",
        help="Largest gap between ends that is joined, with its unit; at most 0.15mm.",
    ),
    click.option("--each", is_flag=True, help="Several outer boundaries are so many sections."),
    click.option("--together", is_flag=True, help="Several outer boundaries are one section of several parts."),
    click.option("--pick", metavar="WHICH", help="Take one outer boundary: its number, a text inside, or a point X,Y."),
    click.option("--out-units", type=click.Choice(["mm", "cm", "m", "in"]), help="Unit of the results."),
    click.option(
        "--symbols",
        type=click.Choice(["plain", "en", "us"]),
        default="plain",
        show_default=True,
        help="Symbols beside the names: plain, EN 1993 style, US style.",
    ),
    click.option(
        "--density",
        metavar="VALUE",
        help="kg/m³, or steel, aluminium, stainless: adds the mass per length.",
    ),
    click.option("--poisson", type=float, default=0.3, show_default=True, help="Poisson's ratio, for the shear areas."),
    click.option(
        "--offset",
        metavar="LENGTH",
        help="Every surface moved outward and inward by so much, with its unit, as 0.2mm: the band of each property.",
    ),
    click.option(
        "--neutral-axis",
        type=float,
        metavar="K",
        help="Of a cold-formed strip: the neutral layer of bends as a share of the thickness, 0 to 0.5. Without it: "
        "DIN 6935.",
    ),
]


def reading_options(command: Command) -> Command:
    """Add the options that say how a drawing is read and in what terms the results are given, and --config."""
    command = config_options(command)
    for option in reversed(_READING):
        command = option(command)
    return command


material_option = click.option(
    "--material",
    multiple=True,
    metavar="LAYER=E[,DENSITY]",
    help="A part of a composite section: its layer, its modulus in MPa or with its unit, and its density, as "
    "STEEL=210GPa,7850; repeatable.",
)


_HEAD = [
    click.option("--title", default="", help="Title in the head of the page."),
    click.option("--reference", default="", help="Reference in the head of the page."),
    click.option("--prepared", default="", help="Who prepared it."),
    click.option("--date", "day", default="", metavar="YYYY-MM-DD", help="The date in the head of the page."),
    click.option("--page", type=click.Choice(["a4", "letter"]), default="a4", show_default=True, help="Paper."),
]


def head_options(command: Command) -> Command:
    """Add the options that fill the head of a page: title, reference, prepared, day; and page, the paper."""
    for option in reversed(_HEAD):
        command = option(command)
    return command


def checked_date(day: str) -> None:
    """Refuse a day that is no date. Raises UsageError."""
    if day:
        try:
            datetime.date.fromisoformat(day)
        except ValueError:
            raise UsageError(f"--date {day!r} is not a date: write it as 2026-03-31") from None


def selection(*, each: bool, together: bool, pick: str | None) -> str | None:
    """Turn the three options into what `analyse` takes. Raises UsageError where they contradict."""
    given = [name for name, on in (("--each", each), ("--together", together), ("--pick", pick is not None)) if on]
    if len(given) > 1:
        raise UsageError(f"{' and '.join(given)} contradict each other: give one of them")
    return "each" if each else "together" if together else pick


def settings_of(options: dict[str, Any]) -> dict[str, Any]:
    """Turn the reading options of a command into what `analyse` takes."""
    return {
        "layer": list(options["layer"]) or None,
        "units": options["units"],
        "scale": options["scale"],
        "join_gap": options["join_gap"],
        "select": selection(each=options["each"], together=options["together"], pick=options["pick"]),
        "out_units": options["out_units"],
        "density": options["density"],
        "poisson": options["poisson"],
        "neutral_axis": options["neutral_axis"],
        "offset": options["offset"],
        "material": list(options.get("material", ())),
    }


def analysed(drawing: str, options: dict[str, Any], *, alone: bool = True) -> Analysis:
    """Analyse one drawing as the command's reading options say; `-` is standard input.

    Of a drawing that is `alone` the stage is shown when it takes long; of several there is a bar.
    """
    from edgetally.analysis import analyse

    options, options_file = with_options_file(drawing, options)
    settings = settings_of(options) | {"options_file": options_file}
    with copied(drawing) as (path, name), Stages(shown=alone) as stages:
        return analyse(path, name=name, progress=stages, **settings)


@contextmanager
def copied(drawing: str) -> Iterator[tuple[str | Path, str | None]]:
    """Give the path of a drawing and the name to print for it; standard input, `-`, goes to a file of its own first."""
    if drawing != "-":
        yield drawing, None
        return
    with tempfile.TemporaryDirectory() as folder:
        copy = Path(folder) / "standard-input.dxf"
        copy.write_bytes(sys.stdin.buffer.read())
        yield copy, "standard input"


@dataclass
class EachDrawing:
    """Goes through the drawings of one command; of several, one that is refused is said on stderr and passed over.

    `code` is the worst exit code so far.
    """

    drawings: tuple[str, ...]
    code: int = 0

    def results(self, work: Callable[[str], Result]) -> Iterator[Result]:
        """Yield what `work` makes of each drawing. Of a single drawing the refusal is raised."""
        for drawing in with_progress(self.drawings):
            try:
                yield work(drawing)
            except EdgetallyError as error:
                if len(self.drawings) == 1:
                    raise
                print(f"edgetally: {drawing}: {error}", file=sys.stderr)
                self.code = 2

    def saw(self, severity: Severity | None) -> None:
        """Take account of the gravest finding of a drawing."""
        self.code = max(self.code, EXIT_OF[severity])
