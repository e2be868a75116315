"""What a line of text states about a section: a letter or word, a number, a unit.

`Ix = 123,4 cm4`, `AREA: 12.4 cm²`, `kg/m 3,21`. SCALE 1:2, A-A, A4, A = 20 mm state nothing about a section.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

from edgetally.lettered.numbers import NUMBER, RAISED, TEN, Written, readings
from edgetally.units import MM_PER

_AXIS = r"(?:x-x|y-y|z-z|xx|yy|zz|[xyzuv12]|max|min)"
_NAME = re.compile(
    rf"""(?<![\w./-])
    (?: (?P<word>(?:(?:cross[- ]?)?section(?:al)?\s+|gross\s+)?area | (?:outer\s+|total\s+)?perimeter | weight | mass
            | querschnittsfläche | fläche | umfang | gewicht | masse | kg\s*/\s*l?f?m | lbs?\s*/\s*ft)
      | (?P<letter>[ACGIJMPRSUWZ])
            (?:[ _.]?\{{?(?P<under>(?:el|pl)?[,. ]?{_AXIS}(?:[,. ]?(?:el|pl))?|[twpo]|ω)\}}?)? )
    (?![\w/]) \s* (?:[(\[](?P<head>[^)\]]{{0,24}})[)\]])? \s*
    (?P<sign>[=:≈~]|\.{{2,}}|…)? \s* (?:(?:ca\.?|≈|~)\s*)?""",
    re.IGNORECASE | re.VERBOSE,
)
_UNIT = r"""
    (?P<mass>(?:kg|g)\s*/\s*l?f?m | kg\s*/\s*ft | lbs?\s*/\s*ft)
  | (?:(?P<square>sq\.?|square)\s*)? (?P<length>mm|cm|dm|m|inch(?:es)?|in\.?|ft\.?|")
    \s* (?:\^|\*\*)? \s* \{?(?P<power>[12346¹²³⁴⁶])?\}? (?P<per>\s*/\s*m)?"""
_VALUE = re.compile(
    rf"(?P<number>{NUMBER})(?:\s*{TEN})?(?:\s*[(\[]?(?P<unit>{_UNIT})[)\]]?(?![\w²³⁴⁶^/°%]))?",
    re.IGNORECASE | re.VERBOSE,
)
_UNIT_ALONE = re.compile(_UNIT, re.IGNORECASE | re.VERBOSE)
_GOES_ON = re.compile(r"\s*[\w\"°%µ/:×*²³⁴⁶^]")

# exact by definition (the international pound and foot of 1959)
_MASSES = {"kg/m": 1.0, "g/m": 1e-3, "kg/ft": 1 / 0.3048, "lb/ft": 0.45359237 / 0.3048}
_LENGTHS = MM_PER | {"dm": 100.0, "inch": 25.4, "inches": 25.4, '"': 25.4}
_WORDS = {"area": "A", "fläche": "A", "perimeter": "P", "umfang": "P"}


@dataclass(frozen=True, slots=True)
class LetteredUnit:
    """A unit as lettered: `power` of a length of `factor` mm, or, where it is 0, `factor` kg/m."""

    words: str
    power: int
    factor: float


@dataclass(frozen=True, slots=True)
class Statement:
    """One value that a text states. `letter` in capitals, small only for i and r of gyration; `under` its subscript.

    `spelled` where the name cannot well mean anything but a property of a section.
    """

    words: str
    letter: str
    under: str
    spelled: bool
    numbers: tuple[Written, ...]
    unit: LetteredUnit | None


def statements_of(line: str) -> list[Statement]:
    """Return what a line states: `Ix = Iy = 12 cm4` states two values."""
    found: list[Statement] = []
    pending: list[re.Match[str]] = []
    at = 0
    while name := _NAME.search(line, at):
        if pending and name.start() != at:
            pending = []
        at = name.end()
        value = _VALUE.match(line, at)
        if value is None:
            pending = [*pending, name] if name["sign"] == "=" else []
            continue
        at = value.end()
        unit = _unit_of(value) or _unit_of(_UNIT_ALONE.fullmatch((name["head"] or name["word"] or "").strip()))
        goes_on = _GOES_ON.match(line, at) and not _NAME.match(line, at + len(line[at:]) - len(line[at:].lstrip()))
        if value["unit"] is None and goes_on:
            pending = []
            continue  # another unit, a ratio, a tolerance, a sentence: no property of a section
        for each in (*pending, name):
            statement = _statement(line[each.start() : at].strip(), each, value, unit)
            if statement is not None:
                found.append(statement)
        pending = []
    return found


def _statement(words: str, name: re.Match[str], value: re.Match[str], unit: LetteredUnit | None) -> Statement | None:
    word, letter, under = name["word"], name["letter"] or "", _subscript(name["under"] or "")
    if word:
        letter = next((sign for ending, sign in _WORDS.items() if word.lower().endswith(ending)), "M")
        if unit is None and not name["sign"]:
            return None
    elif not under:
        # a lone letter may be a mark, a size, a part: it needs its sign, and a unit that fits
        if letter not in "APUGWJMmISZ" or not name["sign"]:
            return None
        if unit is None and (name["sign"] == ":" or letter in "ISZ"):
            return None
        letter = letter.upper()
    else:
        if not _takes(letter.upper(), under) or (unit is None and not name["sign"]):
            return None
        gyration = letter.upper() in "IR" and (unit.power == 1 if unit else letter in "ir")
        letter = letter.lower() if gyration else letter.upper()
        if letter == "R":
            return None
    ten = value["ten"]
    return Statement(words, letter, under, bool(word or under), readings(value["number"], ten), unit)


def _subscript(text: str) -> str:
    """Write a subscript shortly: x-x and xx are x, el,x is x; pl,x stays."""
    key = re.sub(r"[,. ]", "", text.lower()).replace("ω", "w")
    plastic = "pl" in key
    key = key.replace("el", "").replace("pl", "")
    key = {"x-x": "x", "y-y": "y", "z-z": "z", "xx": "x", "yy": "y", "zz": "z"}.get(key, key)
    return f"pl,{key}" if plastic else key


def _takes(letter: str, under: str) -> bool:
    """Tell whether a letter with this subscript names a property of a section."""
    axis = under.removeprefix("pl,")
    if axis in ("t", "w", "p", "o"):
        return letter == "I" or (letter, axis) in (("J", "t"), ("J", "p"), ("C", "w"))
    if axis in ("1", "2"):
        return letter == "I"
    return letter in "IJWZSR"


def _unit_of(match: re.Match[str] | None) -> LetteredUnit | None:
    """Return the unit that a match of a unit, or of a value with one, gives."""
    if match is None:
        return None
    if match["mass"]:
        words = re.sub(r"\s", "", match["mass"].lower()).replace("lfm", "m").replace("lbs", "lb").replace("/fm", "/m")
        return LetteredUnit(words, 0, _MASSES[words])
    if not match["length"]:
        return None
    length = match["length"].lower().rstrip(".")
    power = int((match["power"] or "1").translate(RAISED)) if not match["square"] else 2
    if match["per"]:  # m²/m, the surface of a metre, is a perimeter
        if power != 2:
            return None
        return LetteredUnit(f"{length}^2/m", 1, _LENGTHS[length] ** 2 / 1000.0)
    shown = {'"': "in", "inch": "in", "inches": "in"}.get(length, length)
    return LetteredUnit(shown if power == 1 else f"{shown}^{power}", power, _LENGTHS[length])
