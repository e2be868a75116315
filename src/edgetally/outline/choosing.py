"""Which of several outer boundaries make a section."""

from __future__ import annotations

import re
from collections.abc import Sequence

import numpy as np

from edgetally.curves.intersections import nearest
from edgetally.errors import OutlineError, UsageError
from edgetally.findings import Finding
from edgetally.outline.records import Region
from edgetally.outline.words import place

EACH = "each"
TOGETHER = "together"
LISTED = 40

_POINT = re.compile(r"\s*([-+]?[\d.]+(?:[eE][-+]?\d+)?)\s*,\s*([-+]?[\d.]+(?:[eE][-+]?\d+)?)\s*")


def choose(
    regions: Sequence[Region], selection: str | None, unit: str, labels: Sequence[tuple[str, complex]] = ()
) -> list[tuple[str, tuple[Region, ...]]]:
    """Return named groups of regions, each one section. Regions are numbered from 1 in the order given.

    `selection` is None (there must be one region), `each`, `together`, or what `--pick` was given: a number, a name
    (one of the `labels`, text and place, that lies inside) or a point `X,Y` in or nearest to the one meant. Raises
    OutlineError (`several-outlines`) listing the regions where a choice is needed, UsageError for a pick that names
    none.
    """
    if selection == EACH:
        return [(str(k + 1), (region,)) for k, region in enumerate(regions)]
    if selection == TOGETHER:
        return [("1" if len(regions) == 1 else "together", tuple(regions))]
    if selection is not None:
        k = _picked(regions, selection, unit, labels)
        return [(str(k + 1), (regions[k],))]
    if len(regions) == 1:
        return [("1", tuple(regions))]
    message = "\n".join([
        f"the drawing holds {len(regions)} separate outer boundaries:",
        *describe(regions, unit, names_of(regions, labels)),
        "say which make the section: --each for so many sections, --together for one section of several parts, or "
        "--pick with a number, a name or a point X,Y for one of them",
    ])  # fmt: skip
    x0, y0, _, _ = regions[0].box
    raise OutlineError(message, [Finding("several-outlines", "error", message, (x0, y0))])


def names_of(regions: Sequence[Region], labels: Sequence[tuple[str, complex]]) -> list[list[str]]:
    """Return for each region the texts that it is the innermost one around."""
    around = innermost_around(regions, [p for _, p in labels])
    return [[words for (words, _), k in zip(labels, around, strict=True) if k == n] for n in range(len(regions))]


def innermost_around(regions: Sequence[Region], points: Sequence[complex]) -> list[int | None]:
    """Return for each point the region whose outer boundary is the innermost one around it, None where none is."""
    innermost: list[int | None] = [None] * len(points)
    for k in sorted(range(len(regions)), key=lambda k: -regions[k].outer.area):
        x0, y0, x1, y1 = regions[k].box
        near = [n for n, p in enumerate(points) if x0 <= p.real <= x1 and y0 <= p.imag <= y1]
        if near:
            turns = regions[k].outer.packed.turning(np.array([points[n] for n in near]))
            for n, turn in zip(near, turns.tolist(), strict=True):
                if abs(turn) > np.pi:
                    innermost[n] = k
    return innermost


def describe(regions: Sequence[Region], unit: str, names: Sequence[Sequence[str]] = ()) -> list[str]:
    """Return one line a region: number, place, size, area, voids, names; in the drawing's unit."""
    lines = []
    for k, region in enumerate(regions[:LISTED]):
        x0, y0, x1, y1 = region.box
        voids = f", {len(region.voids)} void{'s' if len(region.voids) > 1 else ''}" if region.voids else ""
        lines.append(
            f"  {k + 1}: lower left at {place(complex(x0, y0))}, {x1 - x0:.6g} x {y1 - y0:.6g} {unit}, "
            f"area {region.area:.6g} {unit}^2{voids}{_named(names[k]) if names else ''}"
        )
    if len(regions) > LISTED:
        lines.append(f"  and {len(regions) - LISTED} more")
    return lines


def _named(names: Sequence[str]) -> str:
    return f", named {', '.join(map(repr, names[:3]))}" if names else ""


def _picked(regions: Sequence[Region], pick: str, unit: str, labels: Sequence[tuple[str, complex]]) -> int:
    if pick.strip().isdigit():
        number = int(pick)
        if not 1 <= number <= len(regions):
            raise UsageError(f"--pick {number}: the drawing holds the outer boundaries 1 to {len(regions)}")
        return number - 1
    names = names_of(regions, labels)
    called = [k for k, texts in enumerate(names) if pick.strip().casefold() in (t.casefold() for t in texts)]
    if len(called) == 1:
        return called[0]
    if called:
        raise UsageError(
            f"--pick {pick!r} names {len(called)} outer boundaries: give the number or a point X,Y instead"
        )
    match = _POINT.fullmatch(pick)
    if match is None:
        listed = "\n".join(describe(regions, unit, names))
        raise UsageError(
            f"--pick {pick!r} is neither a number, nor a text inside one, nor a point X,Y; the outer boundaries are:\n"
            f"{listed}"
        )
    try:
        p = complex(float(match.group(1)), float(match.group(2)))
    except ValueError:
        raise UsageError(f"--pick {pick!r} is not a point X,Y") from None
    inside = [k for k, region in enumerate(regions) if _contains(region, p)]
    if inside:
        return inside[0]
    return min(range(len(regions)), key=lambda k: min(nearest(c, p)[0] for c in regions[k].outer.curves))


def _contains(region: Region, p: complex) -> bool:
    x0, y0, x1, y1 = region.box
    if not (x0 <= p.real <= x1 and y0 <= p.imag <= y1):
        return False
    at = np.array([p])
    turns = sum(float(loop.packed.turning(at)[0]) for loop in region.loops)  # 2π in the material, 0 in a void
    return abs(turns) > np.pi
