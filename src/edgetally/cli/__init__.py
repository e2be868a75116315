"""The command line: arguments, printing, progress, exit codes. The only place that imports click, prints or exits."""

from __future__ import annotations

import os
import sys

import click

from edgetally import __version__
from edgetally.cli.compare import compare
from edgetally.cli.markup import markup
from edgetally.cli.sheet import sheet
from edgetally.cli.survey import survey
from edgetally.cli.tally import tally
from edgetally.errors import EdgetallyError


@click.group(context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100})
@click.version_option(__version__, prog_name="edgetally", message="%(prog)s %(version)s")
def cli() -> None:
    """Section properties of a cross-section drawn in DXF, with the evidence of how the outline was read.

    Exit codes: 0 done, nothing to report above a note; 1 done, with warnings; 2 not done.
    """


cli.add_command(survey)
cli.add_command(tally)
cli.add_command(sheet)
cli.add_command(markup)
cli.add_command(compare)


# The matrices of one section are too small for several threads: with two, the same work was measured to take twice as
# long. Must be set before numpy is loaded; who sets it outside keeps that.
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")


def main() -> None:
    """Run the command line. Every refusal is a message on stderr and exit code 2, never a traceback."""
    try:
        code = cli.main(standalone_mode=False, prog_name="edgetally")
    except click.exceptions.Abort:
        print("edgetally: stopped", file=sys.stderr)
        code = 2
    except click.ClickException as error:
        error.show()
        code = 2
    except EdgetallyError as error:
        print(f"edgetally: {error}", file=sys.stderr)
        code = error.exit_code
    except BrokenPipeError:  # the reader of a pipe has left, as `head` does
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        code = 2
    except Exception as error:
        if os.environ.get("EDGETALLY_DEBUG"):
            raise
        print(
            f"edgetally: a fault of the program itself, no result: {type(error).__name__}: {error}\n"
            "Please report it with the drawing; EDGETALLY_DEBUG=1 shows where it happened.",
            file=sys.stderr,
        )
        code = 2
    sys.exit(code if isinstance(code, int) else 0)
