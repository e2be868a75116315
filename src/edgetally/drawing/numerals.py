"""The numbers of a drawing, checked before the library reads them: it takes NaN, 1e400 and half a decimal comma."""

from __future__ import annotations

import math
import re
from bisect import bisect_right
from collections.abc import Callable, Iterable
from typing import Any

import numpy as np
from ezdxf.lldxf.types import BINARY_DATA, BYTES, DOUBLE, INT16, INT32, INT64, MAX_GROUP_CODE, POINT_CODES

from edgetally.drawing.structure import Record, Structure, value_of
from edgetally.drawing.tags import damaged, repaired
from edgetally.errors import DrawingError

# What an outline depends on: here a wrong number is refused. Elsewhere (views, text styles, header) it is replaced.
VITAL_SECTIONS = frozenset({"BLOCKS", "ENTITIES"})
VITAL_KINDS = frozenset({"LAYER", "LTYPE", "SPATIAL_FILTER"})

# Kinds with one value of each coordinate, so that their order, which DXF leaves open, can be restored.
ONE_OF_EACH = frozenset({
    "LINE", "ARC", "CIRCLE", "ELLIPSE", "POINT", "SOLID", "TRACE", "3DFACE", "INSERT", "VERTEX", "POLYLINE", "BLOCK",
    "RAY", "XLINE", "TEXT", "ATTRIB", "ATTDEF", "SHAPE", "DIMENSION",
})  # fmt: skip
LETTERED = frozenset({"TEXT", "MTEXT", "ATTRIB", "ATTDEF", "DIMENSION", "LEADER", "TOLERANCE", "VIEWPORT"})

_FLOAT, _INT, _BINARY = 1, 2, 3
_KIND = np.zeros(MAX_GROUP_CODE + 1, dtype=np.int8)
_KIND[sorted(DOUBLE)] = _FLOAT
_KIND[sorted(INT16 | INT32 | INT64 | BYTES)] = _INT
_KIND[sorted(BINARY_DATA)] = _BINARY
_POINT = np.zeros(MAX_GROUP_CODE + 1, dtype=bool)
_POINT[sorted(POINT_CODES)] = True
_COMMA = re.compile(r"\s*[-+]?\d*,\d+\s*")


def check_numbers(structure: Structure) -> None:
    """Refuse a number of an entity that is none or not finite; replace those elsewhere by 0 and list them.

    The whole file is converted at once; a single value is looked at only where that failed.
    """
    stream = structure.stream
    codes = np.array(stream.codes, dtype=np.int16)
    kinds = _KIND[codes] if len(codes) else codes
    places = _Places(structure)
    for kind, total, good in ((_FLOAT, _sum_of_floats, _is_float), (_INT, _sum_of_ints, _is_int)):
        where = np.flatnonzero(kinds == kind).tolist()
        if not total([stream.values[i] for i in where]):
            _replace(structure, places, [i for i in where if not good(stream.values[i])], kind)
    if not stream.binary:
        where = np.flatnonzero(kinds == _BINARY).tolist()
        for i in where:
            if not _is_hex(stream.values[i]):  # previews and data of other programs: no outline depends on them
                stream.values[i] = ""
                structure.changed = True
                structure.findings.append(repaired(f"the binary data at {stream.place(i)} are no hexadecimal digits"))
    check_points(structure, codes, places)


def _sum_of_floats(values: list[Any]) -> bool:
    """Tell whether all values are finite numbers; a sum that overflows leads to a closer look only."""
    try:
        return math.isfinite(sum(map(float, values))) and "_" not in _joined(values)
    except (ValueError, TypeError):
        return False


def _sum_of_ints(values: list[Any]) -> bool:
    try:
        sum(map(int, values))
    except (ValueError, TypeError):
        return False
    return "_" not in _joined(values)


def _joined(values: list[Any]) -> str:
    """Join values that are text: Python reads 1_0 as 10, DXF does not."""
    return "".join(values) if values and isinstance(values[0], str) else ""


def _is_float(value: Any) -> bool:
    try:
        return math.isfinite(float(value)) and "_" not in str(value)
    except ValueError:
        return False


def _is_int(value: Any) -> bool:
    """Whole numbers written with a point, as some programs do, count."""
    return _is_float(value) and float(value).is_integer()


def _is_hex(value: str) -> bool:
    digits = value.strip()
    return len(digits) % 2 == 0 and re.fullmatch(r"[0-9A-Fa-f]*", digits) is not None


class _Places:
    """Finds the record in which a tag stands."""

    def __init__(self, structure: Structure) -> None:
        self._structure = structure
        self._records: list[tuple[int, str, Record]] = []

    def __call__(self, index: int) -> tuple[str, Record] | None:
        if not self._records:
            sections = self._structure.sections
            self._records = sorted(((r.start, s, r) for s, rs in sections.items() for r in rs), key=lambda x: x[0])
        at = bisect_right(self._records, index, key=lambda x: x[0]) - 1
        if at < 0 or index >= self._records[at][2].stop:
            return None
        return self._records[at][1:]


def is_vital(section: str, record: Record) -> bool:
    return section in VITAL_SECTIONS or record.kind in VITAL_KINDS


def _replace(structure: Structure, places: _Places, wrong: Iterable[int], kind: int) -> None:
    stream = structure.stream
    replaced: list[int] = []
    for index in wrong:
        found = places(index)
        if found is not None and is_vital(*found):
            raise _refusal(structure, index, found[1], kind)
        stream.values[index] = 0 if stream.binary else "0"
        replaced.append(index)
    if replaced:
        structure.changed = True
        text = f"{len(replaced)} values that no outline depends on are no numbers, and were taken as 0: "
        names = [f"group code {stream.codes[i]} at {stream.place(i)}" for i in replaced[:3]]
        structure.findings.append(repaired(text + ", ".join(names) + (" and more" if len(replaced) > 3 else "")))


def describe(structure: Structure, record: Record) -> tuple[str, str]:
    """Return how a message names a record, and its handle."""
    handle = str(value_of(structure.stream, record, 5) or "").strip()
    layer = value_of(structure.stream, record, 8)
    named = f"{record.kind} #{handle}" if handle else record.kind
    return named + (f" on layer {layer}" if layer else ""), handle


def _refusal(structure: Structure, index: int, record: Record, kind: int) -> DrawingError:
    stream = structure.stream
    value = str(stream.values[index]).strip()
    who, handle = describe(structure, record)
    if _COMMA.fullmatch(value):
        why = "with a decimal comma, where DXF has a point"
    elif not _is_finite_or_no_number(value):
        why = "which places nothing"
    else:
        why = f"where a {'whole ' if kind == _INT else ''}number must stand"
    what = f"{stream.place(index)} gives {who} the value {value[:40]} (group code {stream.codes[index]}), {why}"
    return damaged(stream.name, what, handle)


def _is_finite_or_no_number(value: str) -> bool:
    try:
        return math.isfinite(float(value))
    except ValueError:
        return True


def check_points(structure: Structure, codes: Any, places: Callable[[int], tuple[str, Record] | None]) -> None:
    """Put the coordinates of a point together: the library wants y right behind x, and z behind y."""
    stream = structure.stream
    if len(codes) < 2:
        return
    after = np.append(codes[1:], 0)
    before = np.insert(codes[:-1], 0, 0)
    wrong = _POINT[codes] & (after != codes + 10)
    wrong |= (codes >= 30) & (codes < 38) & (before != codes - 10)
    ordered: dict[str, int] = {}
    dropped: list[int] = []
    for index in np.flatnonzero(wrong).tolist():
        found = places(index)
        code = stream.codes[index]
        if found is None or found[1].tags is not None:
            continue
        section, record = found
        own = stream.codes[record.start : record.stop]
        partner = code + 10 if code in POINT_CODES else code - 20
        if code not in POINT_CODES and record.kind not in ONE_OF_EACH:
            continue
        if record.kind in ONE_OF_EACH and all(own.count(c) <= 1 for c in range(10, 38)) and partner in own:
            record.tags = _in_order(list(zip(own, stream.values[record.start : record.stop], strict=True)))
            ordered[record.kind] = ordered.get(record.kind, 0) + 1
        elif code not in POINT_CODES:
            continue
        elif is_vital(section, record) and record.kind not in LETTERED:
            who, handle = describe(structure, record)
            what = f"{who} has an x at {stream.place(index)} (group code {code}) without its y (group code {code + 10})"
            raise damaged(stream.name, what, handle)
        else:
            dropped.append(index)
    _drop(structure, dropped, places)
    if ordered:
        listed = ", ".join(f"{count} x {kind}" for kind, count in ordered.items())
        text = f"coordinates that were not in the order x, y, z were put into it: {listed}"
        structure.findings.append(repaired(text, "note"))
        structure.changed = True


def _in_order(tags: list[tuple[int, Any]]) -> list[tuple[int, Any]]:
    """Move every y and z behind its x."""
    present = {code for code, _ in tags}
    followers = {code + step for code in present if 10 <= code < 19 for step in (10, 20)}
    value = dict(tags)
    result: list[tuple[int, Any]] = []
    for code, own in tags:
        if code not in followers:
            result.append((code, own))
            if 10 <= code < 19:
                result += [(c, value[c]) for c in (code + 10, code + 20) if c in present]
    return result


def _drop(structure: Structure, dropped: list[int], places: Callable[[int], tuple[str, Record] | None]) -> None:
    stream = structure.stream
    for index in dropped:
        found = places(index)
        assert found is not None
        record = found[1]
        record.tags = [
            (stream.codes[i], stream.values[i]) for i in range(record.start, record.stop) if i not in dropped
        ]
    if dropped:
        structure.changed = True
        text = f"{len(dropped)} x coordinates of texts and settings have no y, and were left out, the first at "
        structure.findings.append(repaired(text + stream.place(dropped[0])))
