"""Which of several outer boundaries make a section."""

from __future__ import annotations

import re
from collections.abc import Sequence

import numpy as np

from edgetally.curves.intersections import nearest
from edgetally.errors import OutlineError, UsageError
from edgetally.findings import Finding
from edgetally.outline.records import LeftOut, Region
from edgetally.outline.words import place

EACH = "each"
TOGETHER = "together"
LISTED = 40

_POINT = re.compile(r"\s*([-+]?[\d.]+(?:[eE][-+]?\d+)?)\s*,\s*([-+]?[\d.]+(?:[eE][-+]?\d+)?)\s*")


def choose(
    regions: Sequence[Region],
    selection: str | None,
    unit: str,
    labels: Sequence[tuple[str, complex]] = (),
    left_out: Sequence[LeftOut] = (),
) -> list[tuple[str, tuple[Region, ...]]]:
    """Return named groups of regions, each one section, numbered as `numbers_of` says.

    `selection` is None (there must be one region), `each`, `together`, or what `--pick` was given: a number, a name
    (one of the `labels`, text and place, that lies inside) or a point `X,Y` in or nearest to the one meant. Raises
    OutlineError (`several-outlines`) listing the regions where a choice is needed, or with its fault where one of
    `left_out` is picked; UsageError for a pick that names none.
    """
    numbers, _ = numbers_of(regions, left_out)
    if selection == EACH:
        return [(str(numbers[k]), (region,)) for k, region in enumerate(regions)]
    if selection == TOGETHER:
        return [("1" if len(regions) == 1 else "together", tuple(regions))]
    if selection is not None:
        k = _picked(regions, selection, unit, labels, left_out)
        return [(str(numbers[k]), (regions[k],))]
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


def numbers_of(regions: Sequence[Region], left_out: Sequence[LeftOut] = ()) -> tuple[list[int], list[int]]:
    """Number regions and what was left out together, from 1, by their left, then lower, edge: so a number means the
    same outline when the faulty ones are mended."""
    if not left_out:
        return list(range(1, len(regions) + 1)), []
    boxes = [*(region.box for region in regions), *(each.box for each in left_out)]
    order = sorted(range(len(boxes)), key=lambda k: boxes[k][:2])
    number = {k: n + 1 for n, k in enumerate(order)}
    numbers = [number[k] for k in range(len(boxes))]
    return numbers[: len(regions)], numbers[len(regions) :]


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


def describe(
    regions: Sequence[Region], unit: str, names: Sequence[Sequence[str]] = (), numbers: Sequence[int] | None = None
) -> list[str]:
    """Return one line a region: number, place, size, area, voids, names; in the drawing's unit."""
    lines = []
    numbers = numbers or range(1, len(regions) + 1)
    for k, region in enumerate(regions[:LISTED]):
        x0, y0, x1, y1 = region.box
        voids = f", {len(region.voids)} void{'s' if len(region.voids) > 1 else ''}" if region.voids else ""
        lines.append(
            f"  {numbers[k]}: lower left at {place(complex(x0, y0))}, {x1 - x0:.6g} x {y1 - y0:.6g} {unit}, "
            f"area {region.area:.6g} {unit}^2{voids}{_named(names[k]) if names else ''}"
        )
    if len(regions) > LISTED:
        lines.append(f"  and {len(regions) - LISTED} more")
    return lines


def _named(names: Sequence[str]) -> str:
    return f", named {', '.join(map(repr, names[:3]))}" if names else ""


def _picked(
    regions: Sequence[Region],
    pick: str,
    unit: str,
    labels: Sequence[tuple[str, complex]],
    left_out: Sequence[LeftOut],
) -> int:
    numbers, numbers_out = numbers_of(regions, left_out)
    if pick.strip().isdigit():
        number = int(pick)
        if number in numbers_out:
            raise _refused(pick, left_out[numbers_out.index(number)])
        if number not in numbers:
            total = len(regions) + len(left_out)
            raise UsageError(f"--pick {number}: the drawing holds the outer boundaries 1 to {total}")
        return numbers.index(number)
    names = names_of(regions, labels)
    wanted = pick.strip().casefold()
    called = [k for k, texts in enumerate(names) if wanted in (t.casefold() for t in texts)]
    faulty = [each for each in left_out if any(words.casefold() == wanted and _within(each, p) for words, p in labels)]
    if (count := len(called) + len(faulty)) > 1:
        raise UsageError(f"--pick {pick!r} names {count} outer boundaries: give the number or a point X,Y instead")
    if called:
        return called[0]
    if faulty:
        raise _refused(pick, faulty[0])
    match = _POINT.fullmatch(pick)
    if match is None:
        listed = "\n".join(describe(regions, unit, names, numbers))
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
    away = [min(nearest(c, p)[0] for c in region.outer.curves) for region in regions]
    for each in left_out:
        if _within(each, p) or min(nearest(c, p)[0] for c in each.curves) <= min(away):
            raise _refused(pick, each)
    return min(range(len(regions)), key=away.__getitem__)


def _refused(pick: str, left: LeftOut) -> OutlineError:
    finding = left.finding
    message = f"--pick {pick}: {finding.message}"
    return OutlineError(message, [Finding(finding.code, "error", message, finding.at, finding.handles)])


def _within(left: LeftOut, p: complex) -> bool:
    x0, y0, x1, y1 = left.box
    return x0 <= p.real <= x1 and y0 <= p.imag <= y1


def _contains(region: Region, p: complex) -> bool:
    x0, y0, x1, y1 = region.box
    if not (x0 <= p.real <= x1 and y0 <= p.imag <= y1):
        return False
    at = np.array([p])
    turns = sum(float(loop.packed.turning(at)[0]) for loop in region.loops)  # 2π in the material, 0 in a void
    return abs(turns) > np.pi
