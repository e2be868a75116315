"""Run the command line as a user does, in this process."""

from __future__ import annotations

import io
import sys
from contextlib import redirect_stderr, redirect_stdout

from edgetally.cli import main


def run(*words: object, stdin: bytes = b"") -> tuple[int, str, str]:
    """Run `edgetally` with the given words; return exit code, standard output and standard error."""
    out, err = io.StringIO(), io.StringIO()
    argv, real_stdin = sys.argv, sys.stdin
    sys.argv = ["edgetally", *map(str, words)]
    sys.stdin = io.TextIOWrapper(io.BytesIO(stdin))
    try:
        with redirect_stdout(out), redirect_stderr(err):
            main()
    except SystemExit as stop:
        return int(stop.code or 0), out.getvalue(), err.getvalue()
    finally:
        sys.argv, sys.stdin = argv, real_stdin
    raise AssertionError("the command did not exit")
