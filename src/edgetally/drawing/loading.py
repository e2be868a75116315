"""A file → a loaded DXF document, or a refusal that says what the file is."""

from __future__ import annotations

import hashlib
import struct
from dataclasses import dataclass
from pathlib import Path

from ezdxf.document import Drawing as Document
from ezdxf.filemanagement import readfile
from ezdxf.lldxf.const import DXFError

from edgetally.drawing.limits import MAX_BYTES
from edgetally.errors import DrawingError
from edgetally.findings import Finding

BINARY = b"AutoCAD Binary DXF\r\n\x1a\x00"  # the sentinel that the DXF reference prescribes

# what people send under the name .dxf, by the first bytes
_OTHER_KINDS = {
    b"AC10": "a DWG drawing: save it as DXF",
    b"\x89PNG": "a PNG picture",
    b"\xff\xd8\xff": "a JPEG picture",
    b"GIF8": "a GIF picture",
    b"II*\x00": "a TIFF picture",
    b"MM\x00*": "a TIFF picture",
    b"BM": "a BMP picture",
    b"%PDF": "a PDF document",
    b"PK\x03\x04": "a ZIP archive: unpack it first",
    b"\xd0\xcf\x11\xe0": "an office document",
    b"<?xml": "an XML file",
    b"<svg": "an SVG picture",
    b"ISO-10303-21": "a STEP file",
}

# What the library raises on a file whose tags do not make sense. The list is long because its readers do not wrap
# what goes wrong below them; each was seen on a damaged file.
_UNREADABLE = (
    DXFError,
    OSError,
    ValueError,
    TypeError,
    KeyError,
    IndexError,
    AttributeError,
    AssertionError,
    RecursionError,
    OverflowError,
    struct.error,
)


@dataclass(frozen=True, eq=False)
class Loaded:
    """A document in memory, and what identifies the file it came from."""

    document: Document
    name: str
    sha256: str


def load(path: str | Path) -> Loaded:
    """Read a DXF file, ASCII or binary.

    Raises DrawingError where there is no such file, it is no DXF file, it is cut short, or its structure is broken.
    """
    path = Path(path)
    try:
        if path.is_dir():
            raise DrawingError(f"{path} is a folder; name a drawing in it")
        size = path.stat().st_size
        if size > MAX_BYTES:
            message = f"{path} has {size / 2**20:.0f} MiB; files above {MAX_BYTES // 2**20} MiB are not read"
            raise DrawingError(message, [Finding("limit-reached", "error", message)])
        data = path.read_bytes()
    except FileNotFoundError:
        raise DrawingError(f"{path}: there is no such file") from None
    except OSError as error:
        raise DrawingError(f"{path} cannot be read: {error.strerror or error}") from None
    _refuse_other_kinds(path, data)
    _refuse_truncated(path, data)
    try:
        document = readfile(path)
    except _UNREADABLE as error:
        message = f"{path} is damaged or no DXF file: {error}; open it in a CAD program and save it again as DXF"
        raise DrawingError(message, [Finding("entity-unreadable", "error", message)]) from None
    return Loaded(document, path.name, hashlib.sha256(data).hexdigest())


def _refuse_other_kinds(path: Path, data: bytes) -> None:
    if not data.strip():
        raise DrawingError(f"{path} is empty; export the drawing again")
    if data.startswith(BINARY):
        return
    head = data[:64].lstrip(b"\xef\xbb\xbf \t\r\n")
    for magic, kind in _OTHER_KINDS.items():
        if head.startswith(magic):
            raise DrawingError(f"{path} is not a DXF drawing but {kind}")
    if b"\x00" in data[:1024] or b"SECTION" not in data:
        raise DrawingError(f"{path} is not a DXF drawing; export the section as DXF")


def _refuse_truncated(path: Path, data: bytes) -> None:
    """Refuse a file without its end mark: the library would load what is there without a word."""
    complete = False
    if data.startswith(BINARY):
        complete = data.rstrip(b"\x00\r\n\x1a").endswith(b"EOF")
    else:
        place = data.rfind(b"EOF")
        while place >= 0 and not complete:
            before = data[max(0, place - 16) : place].split(b"\n")
            complete = len(before) >= 2 and before[-1].strip() == b"" and before[-2].strip() == b"0"
            place = data.rfind(b"EOF", 0, place)
    if not complete:
        message = (
            f"{path} ends before it is complete: the end mark of a DXF file is missing, so parts of the drawing may be "
            "missing too; export or copy it again"
        )
        raise DrawingError(message, [Finding("truncated-file", "error", message)])
