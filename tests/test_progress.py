"""What a user at a terminal sees while work goes on."""

from __future__ import annotations

import io
import sys
import time

import pytest

from edgetally.cli.progress import Stages


class Terminal(io.StringIO):
    def isatty(self) -> bool:
        return True


def test_long_work_names_its_stage_and_leaves_no_trace(monkeypatch: pytest.MonkeyPatch) -> None:
    screen = Terminal()
    monkeypatch.setattr(sys, "stderr", screen)
    monkeypatch.setattr("edgetally.cli.progress.PATIENCE", 0.01)
    with Stages() as stages:
        stages("measuring section 1 of 2")
        until = time.monotonic() + 5.0
        while not screen.getvalue() and time.monotonic() < until:
            time.sleep(0.005)
    text = screen.getvalue()
    assert "measuring section 1 of 2 … 0 s" in text
    assert text.split("\r")[-1] == ""
    assert text.split("\r")[-2].strip() == ""


def test_short_work_and_work_into_a_file_say_nothing(monkeypatch: pytest.MonkeyPatch) -> None:
    for screen in (Terminal(), io.StringIO()):
        monkeypatch.setattr(sys, "stderr", screen)
        with Stages() as stages:
            stages("reading the drawing")
        assert screen.getvalue() == ""
