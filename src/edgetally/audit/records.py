"""The nouns of an audit: what is declared, the work on one drawing, what came of it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any, Literal

from edgetally.units import Unit

Verdict = Literal["agrees", "differs", "unreadable", "undeclared", "missing"]


@dataclass(frozen=True, slots=True)
class Declared:
    """One declared value: the text of its cell, the number it is, its unit, half a unit of its last written digit."""

    text: str
    value: float
    unit: Unit
    half_digit: float


@dataclass(frozen=True, eq=False)
class DeclaredRow:
    """One row of a schedule. `number` is the row in the file, the heads being row 1; `drawing` is as written."""

    number: int
    drawing: str
    values: Mapping[str, Declared]
    section: str | None = None
    layer: str | None = None
    units: str | None = None
    scale: float | None = None
    allowed_percent: float = 1.0
    allowed_torsion_percent: float = 5.0


@dataclass(frozen=True, eq=False)
class Settings:
    """The options of the whole audit that change a result. They reach `analyse` under the same names."""

    layer: tuple[str, ...] = ()
    units: str | None = None
    scale: float = 1.0
    join_gap: str = "0.01mm"
    select: str | None = "each"
    out_units: str | None = None
    density: float | str | None = None
    poisson: float = 0.3
    symbols: Literal["plain", "en", "us"] = "plain"
    measure_only: bool = False
    pictures: bool = True


@dataclass(frozen=True, eq=False)
class Job:
    """The work on one drawing: its bytes, the name to show for it, the rows that declare sections of it, settings.

    Everything in it can be sent to another process or machine.
    """

    drawing: str
    data: bytes
    rows: tuple[DeclaredRow, ...] = ()
    settings: Settings = field(default_factory=Settings)


@dataclass(frozen=True, eq=False)
class Examined:
    """What came of one drawing: a row of the result, as the document of the audit carries it, for each section.

    `rows` are plain dicts, lists, strings and numbers, in the order of the schedule's rows, undeclared sections last;
    `declared` holds for each the number of the schedule's row, None for what nobody declared; `pictures` an SVG of
    the section for each, "" for none. The same job gives the same result, to the byte.
    """

    rows: tuple[dict[str, Any], ...]
    declared: tuple[int | None, ...]
    pictures: tuple[str, ...]
