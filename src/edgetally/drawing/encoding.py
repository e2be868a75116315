"""How the texts of a drawing are encoded: what the file says, and what its bytes say where the two differ."""

from __future__ import annotations

import re
from collections.abc import Callable

from edgetally.findings import Finding

FIRST_UTF8 = "AC1021"  # since R2007 every DXF file is in UTF-8 (DXF reference)

# $DWGCODEPAGE of Windows and of DOS days → Python's name
_PAGES = {
    "ansi_874": "cp874", "ansi_932": "cp932", "ansi_936": "gbk", "ansi_949": "cp949", "ansi_950": "cp950",
    "ansi_1361": "johab", "dos932": "cp932", "mac-roman": "mac_roman", "macintosh": "mac_roman", "big5": "big5",
    "ksc5601": "euc_kr", "johab": "johab", "gb2312": "gbk", "ascii": "cp1252", "utf-8": "utf-8", "utf8": "utf-8",
    "ansi_65001": "utf-8",
} | {f"ansi_{n}": f"cp{n}" for n in range(1250, 1259)} | {
    f"dos{n}": f"cp{n}" for n in (437, 850, 852, 855, 857, 860, 861, 863, 864, 865, 866, 869)
} | {f"iso8859-{n}": f"iso8859_{n}" for n in range(1, 10)}  # fmt: skip

_MULTIBYTE = frozenset({"cp932", "gbk", "cp949", "cp950", "johab", "big5", "euc_kr"})

_MIF_PAGES = {"1": "cp932", "2": "cp950", "3": "cp949", "4": "johab", "5": "gbk"}
_ESCAPE = re.compile(r"\\U\+([0-9A-Fa-f]{4})|\\M\+([1-5])([0-9A-Fa-f]{4})")

Decode = Callable[[bytes], str]


def decoder_of(sample: bytes, version: str, code_page: str) -> tuple[Decode, Finding | None]:
    """Return the function that turns the bytes of a file into text, and a finding where the file says otherwise.

    `sample` holds all texts of the file, `version` and `code_page` what its header says. Text that is valid UTF-8
    beyond ASCII is UTF-8 whatever a single-byte code page would make of it: by chance that does not happen.
    """
    if sample.isascii():
        return _strict("ascii"), None
    page = _PAGES.get(code_page.lower(), "cp1252")
    said = code_page or "nothing of a code page"
    if version >= FIRST_UTF8:
        if _fits(sample, "utf-8"):
            return _strict("utf-8"), None
        if _fits(sample, page):
            text = f"the texts are not in UTF-8, as {version} demands; they were read as {page}"
            return _strict(page), Finding("repaired-file", "warning", text)
        return _with_marks(sample, "utf-8", f"the texts are not in UTF-8, as {version} demands")
    if page not in _MULTIBYTE and _fits(sample, "utf-8"):
        if page == "utf-8":
            return _strict("utf-8"), None
        text = f"the texts are in UTF-8, although the header says {said}; they were read as UTF-8"
        return _strict("utf-8"), Finding("repaired-file", "note", text)
    if _fits(sample, page):
        return _strict(page), None
    if _fits(sample, "utf-8"):
        text = f"the texts are in UTF-8, although the header says {said}; they were read as UTF-8"
        return _strict("utf-8"), Finding("repaired-file", "note", text)
    return _with_marks(sample, page, f"the header says {said}, which the texts do not fit")


def unescaped(text: str) -> str:
    r"""Replace the escapes \U+xxxx and \M+nxxxx, by which a DXF file writes signs that its code page lacks.

    Control characters stay escaped: a line feed would break the line.
    """
    if "\\U+" not in text and "\\M+" not in text:
        return text
    text = _ESCAPE.sub(_sign, text)
    # signs beyond U+FFFF are written as two escapes
    return text.encode("utf-16", "surrogatepass").decode("utf-16", "replace")


def utf16_text(data: bytes) -> str | None:
    """Return the text of a file in UTF-16, None where it is not. Text editors save it so when told to use Unicode."""
    if data[:2] not in (b"\xff\xfe", b"\xfe\xff"):
        return None
    return data.decode("utf-16", "replace")


def _sign(match: re.Match[str]) -> str:
    if match.group(1):
        number = int(match.group(1), 16)
        return match.group() if number < 0x20 or 0x7F <= number < 0xA0 else chr(number)
    try:
        sign = bytes.fromhex(match.group(3)).decode(_MIF_PAGES[match.group(2)])
    except UnicodeDecodeError:
        return match.group()
    return sign if sign.isprintable() else match.group()


def _fits(sample: bytes, encoding: str) -> bool:
    try:
        sample.decode(encoding)
    except UnicodeDecodeError:
        return False
    return True


def _strict(encoding: str) -> Decode:
    return lambda data: data.decode(encoding)


def _with_marks(sample: bytes, encoding: str, why: str) -> tuple[Decode, Finding]:
    count = sample.decode(encoding, "replace").count("\ufffd")
    text = f"{why}; {count} characters could not be read, and stand as \ufffd in names and texts"
    return lambda data: data.decode(encoding, "replace"), Finding("repaired-file", "warning", text)
