"""Blocks, tables and polylines that do not nest, put right: the library drops what it finds in the wrong place."""

from __future__ import annotations

from collections import Counter

from edgetally.drawing.structure import Record, Structure, block_name, value_of
from edgetally.drawing.tags import damaged, repaired

TABLES = ("VPORT", "LTYPE", "LAYER", "STYLE", "VIEW", "UCS", "APPID", "DIMSTYLE", "BLOCK_RECORD")

# Kinds that stand behind the entity which they belong to, up to SEQEND.
FOLLOWERS = {"POLYLINE": "VERTEX", "INSERT": "ATTRIB"}


def mend_nesting(structure: Structure) -> None:
    """Repair blocks, tables and polylines that do not nest. Raises DrawingError where that takes a guess."""
    for name in ("BLOCKS", "ENTITIES"):
        _followers(structure, name)
    _blocks(structure)
    _tables(structure)


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
