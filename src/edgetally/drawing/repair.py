"""Records put right one by one: handles, subclass markers, values that an entity cannot do without.

What cannot be put right without a guess at the drawing is refused; all else is listed.
"""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Iterator
from typing import Any

from ezdxf.entities.dxfentity import DXFTagStorage
from ezdxf.entities.dxfgfx import DXFGraphic
from ezdxf.entities.factory import ENTITY_CLASSES
from ezdxf.lldxf.types import DXFTag

from edgetally.drawing.nesting import mend_nesting
from edgetally.drawing.numerals import check_numbers, describe
from edgetally.drawing.structure import Record, Structure, read_structure, value_of
from edgetally.drawing.tags import TagStream, damaged, repaired, tag_of
from edgetally.findings import Finding

R13 = "AC1012"

# Values without which the library would put a default of its own: (group code, what it is).
NEEDED: dict[str, tuple[tuple[int, str], ...]] = {
    "LINE": ((10, "start"), (11, "end")),
    "CIRCLE": ((10, "centre"), (40, "radius")),
    "ARC": ((10, "centre"), (40, "radius"), (50, "start angle"), (51, "end angle")),
    "ELLIPSE": ((10, "centre"), (11, "major axis"), (40, "ratio of axes")),
    "SOLID": ((10, "first corner"), (11, "second corner"), (12, "third corner")),
    "TRACE": ((10, "first corner"), (11, "second corner"), (12, "third corner")),
    "3DFACE": ((10, "first corner"), (11, "second corner"), (12, "third corner")),
    "VERTEX": ((10, "place"),),
    "INSERT": ((2, "block"), (10, "place")),
}

# (group code of the number said, group code counted, what it is)
COUNTED: dict[str, tuple[tuple[int, int, str], ...]] = {
    "LWPOLYLINE": ((90, 10, "vertices"),),
    "SPLINE": ((72, 40, "knots"), (73, 10, "control points"), (74, 11, "fit points")),
}

# Kinds of which the library reads nothing without the second marker. R12 has none of them.
MARKED = {"LWPOLYLINE": "AcDbPolyline", "SPLINE": "AcDbSpline", "HATCH": "AcDbHatch", "MTEXT": "AcDbMText"}

# Group codes that any entity may have (DXF reference, common group codes for graphical objects).
COMMON = frozenset({6, 8, 48, 60, 62, 67, 284, 347, 348, 370, 380, 390, 410, 420, 430, 440})

# Kinds of tables and settings, which stand in other sections than the entities.
NOT_DRAWN = frozenset(
    kind for kind, known in ENTITY_CLASSES.items() if not issubclass(known, DXFGraphic | DXFTagStorage)
)

_HANDLE = re.compile(r"\s*[0-9A-Fa-f]{1,16}\s*")
_HANDLES = re.compile(r"(?:[1-9A-F][0-9A-F]{0,15} )*")


def read_repaired(stream: TagStream) -> Structure:
    """Return the structure of a file, repaired; every repair is in its findings.

    Raises DrawingError where a repair would be a guess.
    """
    structure = read_structure(stream)
    check_numbers(structure)
    mend_nesting(structure)
    _check_names(structure)
    _check_entities(structure)
    _check_handles(structure)
    _check_version(structure)
    return structure


def library_tags(structure: Structure) -> Iterator[DXFTag]:
    """Yield the tags that the library is given: those of the file, with the repairs."""
    stream = structure.stream
    plain = stream.version < R13  # R12 has no subclass markers, and the library is confused by them there
    if not structure.changed and not (plain and 100 in stream.codes):
        yield from map(tag_of if stream.binary else DXFTag, stream.codes, stream.values)
    else:
        for name, records in structure.sections.items():
            yield from (DXFTag(0, "SECTION"), DXFTag(2, name))
            for record in records:
                yield from (tag_of(*tag) for tag in _tags(structure, record) if tag[0] != 100 or not plain)
            yield DXFTag(0, "ENDSEC")
    yield DXFTag(0, "EOF")


def _own(structure: Structure, record: Record) -> list[int]:
    if record.tags is not None:
        return [code for code, _ in record.tags]
    return structure.stream.codes[record.start : record.stop]


def _tags(structure: Structure, record: Record) -> list[tuple[int, Any]]:
    if record.tags is not None:
        return record.tags
    stream, part = structure.stream, slice(record.start, record.stop)
    return list(zip(stream.codes[part], stream.values[part], strict=True))


def _check_names(structure: Structure) -> None:
    """Give the kinds of entities in capitals, as DXF has them."""
    lower: Counter[str] = Counter()
    kinds = {record.kind for name in ("BLOCKS", "ENTITIES") for record in structure.sections.get(name, ())}
    if all(map(str.isupper, kinds)):
        return
    for name in ("BLOCKS", "ENTITIES"):
        for record in structure.sections.get(name, ()):
            if not record.kind.isupper() and record.kind.upper() in KNOWN:
                record.kind = record.kind.upper()
                record.tags = [(0, record.kind), *_tags(structure, record)[1:]]
                lower[record.kind] += 1
    if lower:
        structure.changed = True
        listed = ", ".join(f"{count} x {kind}" for kind, count in lower.items())
        structure.findings.append(repaired(f"kinds of entities were written in small letters: {listed}", "note"))


KNOWN = frozenset(NEEDED) | frozenset(MARKED) | {"POLYLINE", "SEQEND", "BLOCK", "ENDBLK", "POINT", "TEXT", "DIMENSION"}


def _check_entities(structure: Structure) -> None:
    stream = structure.stream
    layers: set[str] = set()
    line_types: set[str] = set()
    unmarked: Counter[str] = Counter()
    for name in ("BLOCKS", "ENTITIES"):
        for record in structure.sections.get(name, ()):
            if record.kind in NOT_DRAWN and not (name == "BLOCKS" and record.kind in ("BLOCK", "ENDBLK")):
                raise damaged(stream.name, f"{record.kind} at {structure.where(record)} stands among the entities")
            own = _own(structure, record)
            if record.kind in NEEDED:
                for code, what in NEEDED[record.kind]:
                    if own.count(code) != 1:
                        who, handle = describe(structure, record)
                        many = "more than one value" if code in own else "no value"
                        text = f"{who} at {structure.where(record)} has {many} of its {what} (group code {code})"
                        raise damaged(stream.name, text, handle)
            elif record.kind in MARKED:
                for said_by, code, what in COUNTED.get(record.kind, ()):
                    _check_count(structure, record, own, said_by, code, what)
                if not _is_marked(structure, record):
                    _mark(structure, record)
                    unmarked[record.kind] += 1
            if record.tags is None and 8 in own:
                layers.add(stream.values[record.start + own.index(8)])
            if record.tags is None and 6 in own:
                line_types.add(stream.values[record.start + own.index(6)])
    if unmarked:
        structure.changed = True
        listed = ", ".join(f"{count} x {kind}" for kind, count in unmarked.items())
        structure.findings.append(repaired(f"subclass markers (group code 100) were missing and were put in: {listed}"))
    _check_table(structure, "LAYER", layers, "layers", {"0", "defpoints"})
    layer_entries = (r for r in structure.sections.get("TABLES", ()) if r.kind == "LAYER")
    line_types |= {str(value_of(stream, r, 6) or "") for r in layer_entries}
    _check_table(structure, "LTYPE", line_types, "line types", {"", "bylayer", "byblock", "continuous"})


def _check_count(structure: Structure, record: Record, own: list[int], said_by: int, code: int, what: str) -> None:
    said = value_of(structure.stream, record, said_by)
    found = own.count(code)
    if said is not None and int(float(said)) != found:
        who, handle = describe(structure, record)
        text = f"{who} has {found} {what}, but says that it has {int(float(said))}; it was read with those it has"
        structure.findings.append(repaired(text, handles=(handle,) if handle else ()))


def _is_marked(structure: Structure, record: Record) -> bool:
    markers = [str(value) for code, value in _tags(structure, record) if code == 100]
    return markers == ["AcDbEntity", MARKED[record.kind]]


def _mark(structure: Structure, record: Record) -> None:
    """Sort the tags of an entity into the common ones and its own, each under the marker of its subclass."""
    head: list[tuple[int, Any]] = []
    rest = [tag for tag in _tags(structure, record) if tag[0] != 100]
    group = False  # within {...} of group code 102
    while rest and (group or rest[0][0] in (0, 5, 102, 330)):
        if rest[0][0] == 102:
            group = str(rest[0][1]).startswith("{")
        head.append(rest.pop(0))
    common: list[tuple[int, Any]] = []
    while rest and rest[0][0] in COMMON:
        common.append(rest.pop(0))
    record.tags = [*head, (100, "AcDbEntity"), *common, (100, MARKED[record.kind]), *rest]


def _check_table(structure: Structure, table: str, used: set[str], what: str, always: set[str]) -> None:
    """List names that no table explains: a layer or line type whose name was damaged would change what is read.

    A table with nothing but the names that every drawing has comes from a program that does not fill it.
    """
    records = [r for r in structure.sections.get("TABLES", ()) if r.kind == table]
    known = {str(value_of(structure.stream, r, 2)).strip().casefold() for r in records}
    missing = sorted(name for name in used if name.strip().casefold() not in known | always)
    if known - always and missing:
        listed = ", ".join(name[:60] for name in missing[:10]) + (" and more" if len(missing) > 10 else "")
        text = f"entities name {what} that are not in the drawing's table of {what}: {listed}; one may be misspelt"
        structure.findings.append(repaired(text))


def _check_handles(structure: Structure) -> None:
    """Give a new handle where one is used twice or is none; table entries and objects keep theirs."""
    stream = structure.stream
    handles = [str(value) for code, value in zip(stream.codes, stream.values, strict=True) if code in (5, 105)]
    if len(set(handles)) == len(handles) and _HANDLES.fullmatch(" ".join([*handles, ""])):
        return  # as in every sound file; the rest looks at them one by one
    seen: set[str] = set()
    twice: list[Record] = []
    none: list[Record] = []
    for section in ("TABLES", "OBJECTS", "BLOCKS", "ENTITIES"):
        for record in structure.sections.get(section, ()):
            handle = value_of(stream, record, 105 if record.kind == "DIMSTYLE" else 5)
            if handle is None:
                continue
            key = str(handle).strip().upper().lstrip("0")
            if not _HANDLE.fullmatch(str(handle)) or not key:
                none.append(record)
            elif key in seen and section in ("BLOCKS", "ENTITIES"):
                twice.append(record)
            else:
                seen.add(key)
    number = max((int(key, 16) for key in seen), default=0)
    for records, what in ((twice, "whose handle is used already"), (none, "whose handle is no hexadecimal number")):
        given: list[str] = []
        for record in records:
            number += 1
            code = 105 if record.kind == "DIMSTYLE" else 5
            tags = _tags(structure, record)
            at = next(i for i, tag in enumerate(tags) if tag[0] == code)
            old = str(tags[at][1]).strip()[:20]
            given.append(f"{record.kind}{f' #{old}' if old else ''} is now #{number:X}")
            record.tags = [*tags[:at], (code, f"{number:X}"), *tags[at + 1 :]]
        if given:
            structure.changed = True
            listed = ", ".join(given[:5]) + (f" and {len(given) - 5} more" if len(given) > 5 else "")
            structure.findings.append(repaired(f"{len(given)} records {what} were given new ones: {listed}"))


def _check_version(structure: Structure) -> None:
    """Read a file as R2000 where its header names no version, or an older one than its entities need."""
    stream = structure.stream
    known = re.fullmatch(r"AC1\d{3}", stream.version) is not None
    kinds = {r.kind for name in ("BLOCKS", "ENTITIES") for r in structure.sections.get(name, ())}
    modern = sorted(kinds & MARKED.keys())
    if known and (stream.version >= R13 or not modern):
        return
    if not known and not stream.version and not modern:
        return  # R12 by definition
    new = "AC1015" if modern or 100 in stream.codes else "AC1009"
    if modern and (known or not stream.version):
        said = f"the header says {stream.version}" if known else "the header names no version"
        text = f"{said}, but the drawing holds {', '.join(modern)}, which came with R13: it was read as R2000"
    else:
        text = f"the header names the version {stream.version[:40]}, which there is not: it was read as {new}"
    structure.findings.append(repaired(text))
    header = structure.sections.get("HEADER", [])
    variables = _tags(structure, header[0]) if header else []
    at = next((i for i, tag in enumerate(variables) if tag == (9, "$ACADVER")), None)
    if at is not None:
        variables = variables[:at] + variables[at + 2 :]
    record = Record("SECTION", -1, -1, [(9, "$ACADVER"), (1, new), *variables])
    structure.sections = {"HEADER": [record], **{k: v for k, v in structure.sections.items() if k != "HEADER"}}
    structure.changed = True
    stream.version = new


def lost(structure: Structure, loaded: dict[str, Counter[str]]) -> Finding | None:
    """Compare the entities of the file with those in the library, block by block; return what is missing there."""
    missing: list[str] = []
    for block, kinds in structure.counts().items():
        for kind, count in kinds.items():
            have = loaded.get(block, Counter())[kind]
            if have < count:
                missing.append(f"{count - have} of {count} {kind}" + (f" in block {block}" if block else ""))
    if not missing:
        return None
    message = f"{structure.stream.name} cannot be read whole: the library left out {', '.join(missing)}"
    return Finding("entity-unreadable", "error", f"{message}; export the drawing again, or report the file")
