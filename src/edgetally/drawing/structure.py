"""Raw tags → sections of records, put right where they do not nest: nothing is dropped that could be drawn."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, field
from typing import Any

from edgetally.drawing.tags import TagStream, damaged, repaired
from edgetally.errors import DrawingError
from edgetally.findings import Finding

SECTIONS = frozenset({
    "HEADER", "CLASSES", "TABLES", "BLOCKS", "ENTITIES", "OBJECTS", "THUMBNAILIMAGE", "ACDSDATA",
})  # fmt: skip

TABLES = ("VPORT", "LTYPE", "LAYER", "STYLE", "VIEW", "UCS", "APPID", "DIMSTYLE", "BLOCK_RECORD")

# Kinds that stand behind the entity which they belong to, up to SEQEND.
FOLLOWERS = {"POLYLINE": "VERTEX", "INSERT": "ATTRIB"}

FIRST_WITH_OBJECTS = "AC1012"  # R13: every file has a section OBJECTS from then on (DXF reference)


@dataclass(slots=True, eq=False)
class Record:
    """The tags from one group code 0 to the next: an entity, a table entry, a header variable.

    `tags` stand in place of the file's own where the record was repaired or put in (`start` is then -1).
    """

    kind: str
    start: int
    stop: int
    tags: list[tuple[int, Any]] | None = None


@dataclass(eq=False)
class Structure:
    """The sections of a file, in order, each a list of records; the first record of HEADER holds its variables.

    `changed` tells whether what the library is given differs from the tags as they stand in the file.
    """

    stream: TagStream
    sections: dict[str, list[Record]] = field(default_factory=dict)
    findings: list[Finding] = field(default_factory=list)
    changed: bool = False

    def counts(self) -> dict[str, Counter[str]]:
        """Return the number of entities of each kind in every block, by casefolded name; "" is the section ENTITIES."""
        found = {"": Counter(r.kind for r in self.sections.get("ENTITIES", ()) if r.kind != "SEQEND")}
        block: Counter[str] | None = None
        for record in self.sections.get("BLOCKS", ()):
            if record.kind == "BLOCK":
                name = block_name(self.stream, record).casefold()
                block = found.setdefault(name, Counter()) if name else Counter()
            elif record.kind not in ("ENDBLK", "SEQEND") and block is not None:
                block[record.kind] += 1
        return found

    def where(self, record: Record) -> str:
        return self.stream.place(record.start)


def value_of(stream: TagStream, record: Record, code: int) -> Any:
    """Return the first value with a group code in a record, None where it has none."""
    if record.tags is not None:
        return next((value for c, value in record.tags if c == code), None)
    try:
        return stream.values[stream.codes.index(code, record.start, record.stop)]
    except ValueError:
        return None


def block_name(stream: TagStream, record: Record) -> str:
    return str(value_of(stream, record, 2) or value_of(stream, record, 3) or "")


def read_structure(stream: TagStream) -> Structure:
    """Sort the tags into sections and records.

    Raises DrawingError where the file ends within a section, or where an entity stands outside all of them.
    """
    structure = Structure(stream, findings=stream.findings)
    _sections(structure)
    _complete(structure)
    return structure


def mend_nesting(structure: Structure) -> None:
    """Repair blocks, tables and polylines that do not nest. Raises DrawingError where that takes a guess."""
    for name in ("BLOCKS", "ENTITIES"):
        _followers(structure, name)
    _blocks(structure)
    _tables(structure)


def _sections(structure: Structure) -> None:
    stream = structure.stream
    codes, values, sections = stream.codes, stream.values, structure.sections
    starts = [i for i, code in enumerate(codes) if code == 0]
    stray = starts[0] if starts else len(codes)  # tags that stand in no section
    current: list[Record] | None = None
    name, opened = "", 0
    twice: Counter[str] = Counter()
    lonely = 0
    for start, stop in zip(starts, [*starts[1:], len(codes)], strict=True):
        kind = values[start].strip()
        if kind == "SECTION":
            if current is not None:
                _not_closed(structure, name, opened, stream.place(start))
            name = str(values[start + 1]).strip().upper() if stop > start + 1 and codes[start + 1] == 2 else ""
            if not name:
                raise damaged(stream.name, f"a section without a name begins at {stream.place(start)}")
            opened = start
            if name in sections:
                twice[name] += 1
            current = sections.setdefault(name, [])
            if stop > start + 2:
                current.append(Record("SECTION", start + 2, stop))
        elif kind == "ENDSEC":
            lonely += current is None
            current = None
            stray += stop - start - 1
        elif current is None:
            raise damaged(stream.name, f"{kind or 'an entity'} at {stream.place(start)} stands outside all sections")
        else:
            current.append(Record(kind, start, stop))
    if current is not None:
        if not stream.complete or stream.tail_has_sections:
            raise _truncated(stream, f"the section {name} is not closed")
        _not_closed(structure, name, opened, "the end of the file")
    _list_oddities(structure, stray, lonely, twice)


def _list_oddities(structure: Structure, stray: int, lonely: int, twice: Counter[str]) -> None:
    if stray:
        structure.findings.append(repaired(f"{stray} tags that stand in no section were left out"))
    if lonely:
        text = f"{lonely} ends of sections (ENDSEC) that belong to no section were left out"
        structure.findings.append(repaired(text))
    for name, more in twice.items():
        structure.findings.append(repaired(f"the file has {more + 1} sections {name}, which were read as one"))
    for name in structure.sections:
        if name not in SECTIONS:
            count = len(structure.sections[name])
            text = f"the file has a section {name[:40]}, which DXF does not know; its {count} records were not read"
            structure.findings.append(repaired(text))
    structure.changed = bool(stray or lonely or twice)


def _not_closed(structure: Structure, name: str, opened: int, where: str) -> None:
    """List a section without its end, or refuse it where a piece of the drawing may be missing before the next."""
    stream = structure.stream
    if name in ("BLOCKS", "ENTITIES") and where != "the end of the file":
        what = f"the section {name}, begun at {stream.place(opened)}, is not closed before the next one at {where}"
        raise damaged(stream.name, f"{what}, so parts of the drawing may be missing", code="truncated-file")
    text = f"the section {name}, begun at {stream.place(opened)}, is not closed; it was taken to run to {where}"
    structure.findings.append(repaired(text))
    structure.changed = True


def _truncated(stream: TagStream, what: str) -> DrawingError:
    why = f"{what}, so parts of the drawing are missing"
    message = f"{stream.name} ends before it is complete: {why}; export or copy it again"
    return DrawingError(message, [Finding("truncated-file", "error", message)])


def _complete(structure: Structure) -> None:
    """Refuse a file that was cut between two sections; list it where nothing but the end mark is missing."""
    stream = structure.stream
    if stream.complete:
        return
    if not structure.sections.get("ENTITIES"):
        raise _truncated(stream, "it has neither the end mark (EOF) nor any entity")
    if stream.version >= FIRST_WITH_OBJECTS and "OBJECTS" not in structure.sections:
        raise _truncated(stream, "it has neither the end mark (EOF) nor the section OBJECTS, which comes last")
    text = "the end mark of the file (EOF) is missing; every section is complete, so the drawing was read as it stands"
    structure.findings.append(repaired(text))


def _put_in(kind: str) -> Record:
    return Record(kind, -1, -1, [(0, kind)])


def _followers(structure: Structure, section: str) -> None:
    """Close every run of vertices or attributes by its SEQEND, which the library insists on."""
    stream, records = structure.stream, structure.sections.get(section, [])
    if not any(r.kind in ("POLYLINE", "VERTEX", "INSERT", "SEQEND") for r in records):
        return
    result: list[Record] = []
    expected = ""
    added = dropped = 0
    for record in records:
        kind = record.kind
        if expected and kind not in (expected, "SEQEND"):
            result.append(_put_in("SEQEND"))
            added += 1
            expected = ""
        if kind == "SEQEND":
            if not expected:
                dropped += 1
                continue
            expected = ""
        elif kind == "VERTEX" and not expected:
            raise damaged(stream.name, f"VERTEX at {structure.where(record)} belongs to no POLYLINE")
        elif kind == "POLYLINE" or (kind == "INSERT" and float(value_of(stream, record, 66) or 0) != 0):
            expected = FOLLOWERS[kind]
        result.append(record)
    if expected:
        result.append(_put_in("SEQEND"))
        added += 1
    if added or dropped:
        structure.sections[section] = result
        structure.changed = True
    if added:
        structure.findings.append(repaired(f"{added} ends of polylines or attributes (SEQEND) were missing"))
    if dropped:
        structure.findings.append(repaired(f"{dropped} ends (SEQEND) that belong to no entity were left out"))


def _blocks(structure: Structure) -> None:
    """Close every block, and refuse two blocks of one name: references to it could mean either."""
    stream, records = structure.stream, structure.sections.get("BLOCKS", [])
    result: list[Record] = []
    names: dict[str, str] = {}
    opened: Record | None = None
    added = dropped = 0
    for record in records:
        if record.kind == "BLOCK":
            if opened is not None:
                result.append(_put_in("ENDBLK"))
                added += 1
            opened = record
            name = block_name(stream, record)
            if not name:
                text = f"the block at {structure.where(record)} has no name, so that nothing can refer to it"
                structure.findings.append(repaired(text))
            elif name.casefold() in names:
                where = f"{names[name.casefold()]} and {structure.where(record)}"
                raise damaged(stream.name, f"the block {name} is defined twice, at {where}")
            names[name.casefold()] = structure.where(record)
        elif record.kind == "ENDBLK":
            if opened is None:
                dropped += 1
                continue
            opened = None
        elif opened is None:
            what = f"{record.kind} at {structure.where(record)} stands in the section BLOCKS, but in no block"
            raise damaged(stream.name, what)
        result.append(record)
    if opened is not None:
        result.append(_put_in("ENDBLK"))
        added += 1
    if added or dropped:
        structure.sections["BLOCKS"] = result
        structure.changed = True
    if added:
        structure.findings.append(repaired(f"{added} ends of blocks (ENDBLK) were missing"))
    if dropped:
        structure.findings.append(repaired(f"{dropped} ends (ENDBLK) that belong to no block were left out"))


def _tables(structure: Structure) -> None:
    """Sort table entries into their tables where they do not stand in them, and leave out what no table holds."""
    stream, records = structure.stream, structure.sections.get("TABLES", [])
    heads: dict[str, Record] = {}
    entries: dict[str, list[Record]] = {name: [] for name in TABLES}
    table: str | None = None
    moved = 0
    odd: Counter[str] = Counter()
    for record in records:
        if record.kind == "TABLE":
            moved += table is not None  # the one before has no end
            table = str(value_of(stream, record, 2) or "").strip().upper()
            if table in entries:
                heads.setdefault(table, record)
            else:
                odd[f"TABLE {table}"] += 1
        elif record.kind == "ENDTAB":
            moved += table is None
            table = None
        elif record.kind in entries:
            moved += table != record.kind
            entry = value_of(stream, record, 2)  # a STYLE that loads shapes has the name ""
            if entry is None or (record.kind in ("LAYER", "LTYPE", "BLOCK_RECORD") and not str(entry).strip()):
                odd[f"{record.kind} without a name"] += 1
                continue
            entries[record.kind].append(record)
        else:
            odd[record.kind] += 1
    if not (moved or odd or table is not None):
        return
    result: list[Record] = []
    for name in TABLES:
        if name in heads or entries[name]:
            head = heads.get(name) or Record("TABLE", -1, -1, [(0, "TABLE"), (2, name)])
            result += [head, *entries[name], _put_in("ENDTAB")]
    structure.sections["TABLES"] = result
    structure.changed = True
    if moved or table is not None:
        structure.findings.append(
            repaired("the tables (of layers, line types and so on) do not nest; they were sorted")
        )
    if odd:
        listed = ", ".join(f"{count} x {kind[:40]}" for kind, count in odd.items())
        structure.findings.append(repaired(f"the tables hold what does not belong there, left out: {listed}"))
