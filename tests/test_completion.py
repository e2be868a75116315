"""Completion in a shell: the script that the README names, and what the program answers to it."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

import pytest

README = (Path(__file__).parent.parent / "README.md").read_text()


def asked(instruction: str, words: str = "") -> tuple[int, str]:
    environment = os.environ | {
        "_EDGETALLY_COMPLETE": instruction,
        "COMP_WORDS": words,
        "COMP_CWORD": str(len(words.split(" ")) - 1),
    }
    program = [sys.executable, "-c", "from edgetally.cli import main; main()"]
    done = subprocess.run(program, env=environment, capture_output=True, text=True, check=False)
    assert done.stderr == ""
    return done.returncode, done.stdout


@pytest.mark.parametrize("shell", ["bash", "zsh", "fish"])
def test_the_script_that_the_readme_names_is_produced(shell: str) -> None:
    assert f"_EDGETALLY_COMPLETE={shell}_source edgetally" in README
    code, script = asked(f"{shell}_source")
    assert code == 0
    assert f"_EDGETALLY_COMPLETE={shell}_complete" in script
    assert "edgetally" in script


@pytest.mark.parametrize(
    ("words", "offered"),
    [
        ("edgetally ta", ["plain,tally"]),
        ("edgetally tally --mat", ["plain,--material"]),
        ("edgetally tally --units m", ["plain,mm", "plain,m"]),
        ("edgetally tally br", ["file,br"]),
        ("edgetally sheet br", ["file,br"]),
    ],
)
def test_commands_options_values_and_files_are_offered(words: str, offered: list[str]) -> None:
    code, answer = asked("bash_complete", words)
    assert (code, answer.split()) == (0, offered)
