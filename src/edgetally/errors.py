"""The one family of errors: every refusal says what, where, and what to do about it."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Sequence

    from edgetally.findings import Finding


class EdgetallyError(Exception):
    """Root of every refusal. `findings` holds the same facts in a form a program can read."""

    exit_code = 2

    def __init__(self, message: str, findings: Sequence[Finding] = ()) -> None:
        super().__init__(message)
        self.findings = tuple(findings)


class UsageError(EdgetallyError):
    """An option, or a combination of options, that cannot be carried out."""


class DrawingError(EdgetallyError):
    """A file that cannot be read as a drawing, or a drawing that lacks what was asked of it."""


class OutlineError(EdgetallyError):
    """Curves that do not make an outline which can be trusted."""


class OutputError(EdgetallyError):
    """A result that cannot be written where it was asked for."""
