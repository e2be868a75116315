"""The raw tags of a DXF file, ASCII or binary: (group code, value) pairs, and where in the file each stands.

The library's readers stop at the first oddity, or pass over it without a word. This one knows the place of every tag,
tells a file that is cut short from one that is merely badly ended, and says what it had to put right.
"""

from __future__ import annotations

import re
import struct
from dataclasses import dataclass, field
from typing import Any

from ezdxf.lldxf.types import BINARY_DATA, BYTES, DOUBLE, INT16, INT32, INT64, MAX_GROUP_CODE, DXFBinaryTag, DXFTag

from edgetally.drawing.encoding import decoder_of, unescaped, utf16_text
from edgetally.errors import DrawingError
from edgetally.findings import Finding, Severity

BINARY = b"AutoCAD Binary DXF\r\n\x1a\x00"  # the sentinel that the DXF reference prescribes
END_OF_FILE = "EOF"
COMMENT = 999
HEAD = 1 << 18
"""The version and the code page stand in the header, at the start of the file; no header seen was longer than 20 kB."""


def repaired(text: str, severity: Severity = "warning", handles: tuple[str, ...] = ()) -> Finding:
    """Return the finding that lists one repair."""
    return Finding("repaired-file", severity, text, handles=handles)


def damaged(name: str, what: str, handle: str = "", code: str = "entity-unreadable") -> DrawingError:
    """Return the refusal of a file that holds something wrong."""
    message = f"{name} is damaged: {what}; correct it in a CAD program, or export the drawing again"
    return DrawingError(message, [Finding(code, "error", message, handles=(handle,) if handle else ())])


@dataclass(eq=False)
class TagStream:
    """The tags of a file up to its end mark, comments left out. `complete` tells whether there was an end mark.

    Values of an ASCII file are text as written; those of a binary file have the type that the group code prescribes.
    `version` is what the header says (`AC1015`), "" where it says nothing.
    """

    name: str
    codes: list[int]
    values: list[Any]
    version: str
    complete: bool
    binary: bool
    findings: list[Finding] = field(default_factory=list)
    tail_has_sections: bool = False
    positions: list[int] | None = None  # byte of each tag in a binary file; index of each where comments were left out
    first_line: int = 1

    def place(self, index: int) -> str:
        """Return where the value of a tag stands: its line, or its byte in a binary file."""
        if self.binary:
            return f"byte {self.positions[index] if self.positions else 0}"
        number = self.positions[index] if self.positions else index
        return f"line {self.first_line + 2 * number + 1}"


def tag_of(code: int, value: Any) -> DXFTag:
    return DXFBinaryTag(code, value) if isinstance(value, bytes) else DXFTag(code, value)


def read_tags(data: bytes, name: str) -> TagStream:
    """Read the tags of a DXF file. Raises DrawingError where its lines make no tags."""
    return _read_binary(data, name) if data.startswith(BINARY) else _read_ascii(data, name)


def _read_ascii(data: bytes, name: str) -> TagStream:
    findings: list[Finding] = []
    text = utf16_text(data)
    if text is not None:
        findings.append(repaired("the file is written in UTF-16, which DXF does not use; it was read as such", "note"))
    else:
        data = data.removeprefix(b"\xef\xbb\xbf")
        if b"\r\r\n" in data and data.count(b"\r\r\n") == data.count(b"\n"):
            data = data.replace(b"\r\r\n", b"\n")
            findings.append(repaired("the line ends are doubled (CR CR LF); they were read as single ones", "note"))
        decode, finding = decoder_of(data, _head_word(data, rb"\$ACADVER\s+1"), _head_word(data, rb"\$DWGCODEPAGE\s+3"))
        findings += [finding] if finding else []
        text = decode(data)
    version = re.search(r"\$ACADVER\s+1\s+(\S+)", text[:HEAD])
    text = unescaped(text).replace("\r\n", "\n").replace("\r", "\n")
    lines = text.rstrip("\x00\x1a \t\n").split("\n")
    first = next((i for i, line in enumerate(lines) if line.strip()), 0)
    del lines[:first]
    words, values = lines[0::2], lines[1::2]
    end = _end_mark(words, values)
    stream = TagStream(
        name, [], values, version.group(1) if version else "", end is not None, False, findings, first_line=first + 1
    )
    if end is not None:
        _note_tail(stream, "\n".join(lines[2 * end + 2 :]))
        del words[end:], values[end:]
    elif len(words) > len(values) and (not words[-1].strip() or words[-1].strip().isdigit()):
        words.pop()  # the file ends between a group code and its value
    stream.codes = _codes(stream, words)
    if COMMENT in stream.codes:
        stream.positions = [i for i, code in enumerate(stream.codes) if code != COMMENT]
        stream.codes = [stream.codes[i] for i in stream.positions]
        stream.values = [values[i] for i in stream.positions]
    return stream


def _head_word(data: bytes, before: bytes) -> str:
    """Return the word that follows in the header, "" where there is none."""
    match = re.search(before + rb"\s+(\S+)", data[:HEAD])
    return match.group(1).decode("ascii", "replace") if match else ""


def _codes(stream: TagStream, words: list[str]) -> list[int]:
    """Turn the lines of group codes into numbers; the distinct ones are few, so that a table makes it quick."""
    table: dict[str, int] = {}
    wrong: set[str] = set()
    for word in set(words):
        digits = word.strip()
        if digits.isascii() and digits.isdigit() and len(digits) < 9 and int(digits) <= MAX_GROUP_CODE:
            table[word] = int(digits)
        else:
            wrong.add(word)
    if wrong:
        index = next(i for i, word in enumerate(words) if word in wrong)
        raise damaged(
            stream.name,
            f"line {stream.first_line + 2 * index} holds {words[index].strip()[:40]!r} where a group code (a number "
            f"from 0 to {MAX_GROUP_CODE}) must stand, so this line is wrong, or one above it is missing or too many",
        )
    return [table[word] for word in words]


def _end_mark(words: list[str], values: list[str]) -> int | None:
    """Return the index of the tag that ends the file, None where there is none."""
    start = 0
    while True:
        try:
            start = values.index(END_OF_FILE, start)
        except ValueError:
            break
        if words[start].strip() == "0":
            return start
        start += 1
    spaced = (i for i, v in enumerate(values) if v.strip() == END_OF_FILE and words[i].strip() == "0")
    return next(spaced, None)


def _note_tail(stream: TagStream, tail: str) -> None:
    """List what stands after the end mark. A Ctrl-Z, which DOS programs append, is no matter."""
    left = tail.strip("\x00\x1a \t\r\n")
    if not left:
        return
    stream.tail_has_sections = "ENDSEC" in left
    if stream.tail_has_sections:
        text = "after the end mark of the file (EOF) there are more sections, which were not read"
        stream.findings.append(repaired(text))
    else:
        count = len(left.encode("utf-8", "replace"))
        stream.findings.append(repaired(f"{count} bytes after the end mark of the file (EOF) were left out", "note"))


_FORMATS: dict[int, struct.Struct] = {
    code: struct.Struct(form)
    for form, codes in (("<h", INT16), ("<d", DOUBLE), ("<i", INT32), ("<q", INT64), ("<B", BYTES))
    for code in codes
}


def _read_binary(data: bytes, name: str) -> TagStream:
    """Read a binary file: group codes of one byte up to R12, of two bytes since R13 (DXF reference)."""
    codes: list[int] = []
    values: list[Any] = []
    positions: list[int] = []
    at, complete = len(BINARY), False
    # a file begins with (0, SECTION) or a comment (999): in one byte 00 "S" or FF E7 03, in two bytes 00 00 or E7 03
    wide = data[at + 1 : at + 2] in (b"\x00", b"\x03")
    try:
        while True:
            place = at
            if wide:
                code = data[at] | data[at + 1] << 8
                at += 2
            elif data[at] == 255:  # extended data
                code = data[at + 1] | data[at + 2] << 8
                at += 3
            else:
                code = data[at]
                at += 1
            value: Any
            if (form := _FORMATS.get(code)) is not None:
                (value,) = form.unpack_from(data, at)
                at += form.size
            elif code in BINARY_DATA:
                value = data[at + 1 : at + 1 + data[at]]
                if len(value) < data[at]:
                    break
                at += 1 + len(value)
            elif code > MAX_GROUP_CODE:
                raise damaged(name, f"byte {place} holds {code} where a group code must stand")
            else:
                end = data.index(b"\x00", at)
                value = data[at:end]
                at = end + 1
                if code == 0 and value == b"EOF":
                    complete = True
                    break
                value = _Text(value)
            codes.append(code)
            values.append(value)
            positions.append(place)
    except (IndexError, ValueError, struct.error):
        pass  # the data end within a tag
    stream = TagStream(name, codes, values, "", complete, True, positions=positions)
    if complete:
        _note_tail(stream, data[at:].decode("latin-1"))
    _decode_texts(stream)
    return stream


class _Text(bytes):
    """Bytes of a text whose encoding is not known yet, as against a chunk of binary data."""


def _decode_texts(stream: TagStream) -> None:
    head = {}
    for i in range(min(len(stream.codes) - 1, 2000)):
        if stream.codes[i] == 9:
            head[bytes(stream.values[i])] = stream.values[i + 1]
    version, page = (bytes(head.get(key, b"")) for key in (b"$ACADVER", b"$DWGCODEPAGE"))
    stream.version = version.decode("ascii", "replace")
    texts = [i for i, value in enumerate(stream.values) if isinstance(value, _Text)]
    sample = b"\n".join(stream.values[i] for i in texts)
    decode, finding = decoder_of(sample, stream.version, page.decode("ascii", "replace"))
    stream.findings += [finding] if finding else []
    for i in texts:
        stream.values[i] = unescaped(decode(bytes(stream.values[i])))
    if COMMENT in stream.codes:
        kept = [i for i, code in enumerate(stream.codes) if code != COMMENT]
        stream.codes = [stream.codes[i] for i in kept]
        stream.values = [stream.values[i] for i in kept]
        stream.positions = [(stream.positions or [])[i] for i in kept]
