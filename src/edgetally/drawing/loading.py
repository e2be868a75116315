"""A file → a loaded DXF document, or a refusal that says what the file is."""

from __future__ import annotations

import hashlib
import logging
import struct
from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass, field
from itertools import chain
from pathlib import Path

from ezdxf.document import Drawing as Document
from ezdxf.entities.dxfentity import DXFEntity, DXFTagStorage
from ezdxf.entities.subentity import LinkedEntities
from ezdxf.lldxf.const import DXFError

from edgetally.drawing.encoding import utf16_text
from edgetally.drawing.limits import MAX_BYTES
from edgetally.drawing.repair import library_tags, lost, read_repaired
from edgetally.drawing.tags import BINARY, damaged, read_tags
from edgetally.errors import DrawingError
from edgetally.findings import Finding

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


_GRAPHIC = {8: "layer", 6: "linetype", 60: "invisible"}

# The library warns on standard error of what is repaired and listed here, or harmless.
logging.getLogger("ezdxf").addHandler(logging.NullHandler())


@dataclass(frozen=True, eq=False)
class Loaded:
    """A document in memory, what identifies the file it came from, and the repairs that were needed to read it.

    `version` is the one that the file's header names (`AC1009`), which the library may have raised; "" for none.
    """

    document: Document
    name: str
    sha256: str
    findings: tuple[Finding, ...] = field(default=())
    version: str = ""


def load(path: str | Path) -> Loaded:
    """Read a DXF file, ASCII or binary, whole: with the repairs listed that this takes, or not at all.

    Raises DrawingError where there is no such file, it is no DXF file, it is cut short, an entity is damaged, or the
    library would leave out a part of it.
    """
    path = Path(path)
    try:
        if path.is_dir():
            raise DrawingError(f"{path} is a folder; name a drawing in it")
        size = path.stat().st_size
        if size > MAX_BYTES:
            limit = f"files above {MAX_BYTES // 2**20} MiB are not read: save the section alone"
            message = f"{path} has {size / 2**20:.0f} MiB; {limit}"
            raise DrawingError(message, [Finding("limit-reached", "error", message)])
        data = path.read_bytes()
    except FileNotFoundError:
        raise DrawingError(f"{path}: there is no such file") from None
    except OSError as error:
        raise DrawingError(f"{path} cannot be read: {error.strerror or error}") from None
    _refuse_other_kinds(path, data)
    stream = read_tags(data, str(path))
    version = stream.version
    structure = read_repaired(stream)
    try:
        document = Document.load(library_tags(structure))
        document.modelspace()
    except _UNREADABLE as error:
        words = f"{error}" if isinstance(error, DXFError) else f"{type(error).__name__} {error}"
        raise damaged(str(path), f"the library that reads DXF says: {words}") from None
    left_out = lost(structure, _counts(document))
    if left_out is not None:
        raise DrawingError(left_out.message, [left_out])
    findings = tuple(structure.findings)
    return Loaded(document, path.name, hashlib.sha256(data).hexdigest(), findings, version)


def _refuse_other_kinds(path: Path, data: bytes) -> None:
    if not data.strip():
        raise DrawingError(f"{path} is empty; export the drawing again")
    if data.startswith(BINARY) or "SECTION" in (utf16_text(data) or ""):
        return
    if data.startswith(BINARY[:18]):
        raise DrawingError(
            f"{path} is a binary DXF file whose bytes were changed when it was sent as a text; copy it again as it is"
        )
    head = data[:64].lstrip(b"\xef\xbb\xbf \t\r\n")
    for magic, kind in _OTHER_KINDS.items():
        if head.startswith(magic):
            remedy = "" if ":" in kind else "; export the section as DXF"
            raise DrawingError(f"{path} is not a DXF drawing but {kind}{remedy}")
    if b"\x00" in data[:1024] or b"SECTION" not in data:
        raise DrawingError(f"{path} is not a DXF drawing; export the section as DXF")


def _counts(document: Document) -> dict[str, Counter[str]]:
    """Return the number of entities of each kind that the library holds in every block, by casefolded name.

    Model space and the paper space in use, which a file keeps in its section ENTITIES, are together under "".
    """
    found: dict[str, Counter[str]] = {}
    for record in document.block_records:
        count = Counter(kind for entity in record.entity_space for kind in _kinds(entity))
        found[record.dxf.name.casefold()] = count
    found[""] = found["*model_space"] + found["*paper_space"]
    return found


def _kinds(entity: DXFEntity) -> Iterator[str]:
    """Yield the kind of an entity, and of those that follow it in a file: vertices and attributes.

    An entity of a kind that the library does not know is told its layer, so that it can be listed as left out.
    """
    yield entity.dxftype()
    if isinstance(entity, DXFTagStorage):
        for tag in chain(*entity.xtags.subclasses[:2]):
            if tag.code in _GRAPHIC:
                entity.dxf.unprotected_set(_GRAPHIC[tag.code], tag.value)
        for name, default in (("layer", "0"), ("linetype", "BYLAYER"), ("invisible", 0)):
            if not entity.dxf.hasattr(name):
                entity.dxf.unprotected_set(name, default)
    if isinstance(entity, LinkedEntities):
        yield from (follower.dxftype() for follower in entity.all_sub_entities())
