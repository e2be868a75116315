"""What the user sees on stderr while work goes on: nothing for a second, then the stage and the seconds."""

from __future__ import annotations

import sys
import threading
import time
from collections.abc import Iterable, Iterator

import click

PATIENCE = 1.0
"""Work shorter than this [s] is not announced."""
STEP = 0.5


def with_progress(drawings: tuple[str, ...]) -> Iterator[str]:
    """Yield the drawings; on a terminal, and where there are several, with a bar on stderr."""
    if len(drawings) == 1 or not sys.stderr.isatty():
        yield from drawings
        return
    with click.progressbar(drawings, label="drawings", file=sys.stderr) as bar:
        items: Iterable[str] = bar
        yield from items


class Stages:
    """Shows the stage that work is in once it has taken a second; only on a terminal, and wiped at the end.

    Call it with the name of each stage as it begins.
    """

    def __init__(self, *, shown: bool = True) -> None:
        self._shown = shown and sys.stderr.isatty()
        self._stage = ""
        self._done = threading.Event()

    def __call__(self, stage: str) -> None:
        self._stage = stage

    def __enter__(self) -> Stages:
        self._since = time.monotonic()
        if self._shown:
            self._thread = threading.Thread(target=self._watch, daemon=True)
            self._thread.start()
        return self

    def __exit__(self, *_: object) -> None:
        self._done.set()
        if self._shown:
            self._thread.join()

    def _watch(self) -> None:
        width = 0
        wait = PATIENCE
        while not self._done.wait(wait):
            wait = STEP
            line = f"edgetally: {self._stage} … {time.monotonic() - self._since:.0f} s"
            width = max(width, len(line))
            print("\r" + line.ljust(width), end="", file=sys.stderr, flush=True)
        if width:
            print("\r" + " " * width + "\r", end="", file=sys.stderr, flush=True)
