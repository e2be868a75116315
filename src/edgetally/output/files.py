"""A result file is written whole or not at all, and never over the drawing."""

from __future__ import annotations

import os
import tempfile
from pathlib import Path

from edgetally.errors import OutputError


def check_target(target: str | Path, drawing: str | Path) -> None:
    """Refuse, before any work, a target that is the drawing itself, a folder, or in a folder that is not there.

    Raises OutputError.
    """
    target, drawing = Path(target), Path(drawing)
    if target.is_dir():
        raise OutputError(f"{target} is a folder: name a file in it")
    if target.exists() and drawing.exists() and target.samefile(drawing):
        raise OutputError(f"{target} is the drawing itself, which is never overwritten: name another file")
    if not target.parent.is_dir():
        raise OutputError(f"the folder {target.parent} does not exist: make it first")
    if not os.access(target.parent, os.W_OK) or (target.exists() and not os.access(target, os.W_OK)):
        raise OutputError(f"{target} cannot be written: permission denied")


def write_whole(target: str | Path, data: bytes) -> None:
    """Write `data` beside the target first and move it there, so that no half-written file is ever seen.

    Raises OutputError.
    """
    target = Path(target)
    temporary = None
    try:
        with tempfile.NamedTemporaryFile(dir=target.parent, prefix=f".{target.name}.", delete=False) as file:
            temporary = Path(file.name)
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        temporary.chmod(0o666 & ~_umask())
        temporary.replace(target)
    except OSError as error:
        if temporary is not None:
            temporary.unlink(missing_ok=True)
        raise OutputError(f"{target} cannot be written: {error.strerror or error}") from None


def _umask() -> int:
    mask = os.umask(0)
    os.umask(mask)
    return mask
