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
                if stop == len(codes) and not stream.complete:
                    raise _truncated(stream, "a section begins at its end")
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
            if stop == len(codes) and not stream.complete:
                if "EOF".startswith(kind):
                    continue  # a piece of the end mark
                raise _truncated(stream, "it breaks off behind a section")
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
    structure.changed |= bool(stray or lonely or twice)


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
