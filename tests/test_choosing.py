"""Several outer boundaries: listed, then each, together, or one of them."""

from __future__ import annotations

import math

import pytest

from edgetally import OutlineError, UsageError
from edgetally.curves import Arc, Curve, Line
from edgetally.outline.assembly import assemble
from edgetally.outline.choosing import choose
from edgetally.outline.records import Region


def box(x: float, y: float, width: float, height: float) -> list[Curve]:
    points = [complex(x, y), complex(x + width, y), complex(x + width, y + height), complex(x, y + height)]
    return [Line(a, b) for a, b in zip(points, [*points[1:], points[0]], strict=True)]


RING = [Arc.from_centre(50 + 5j, r, 0.0, 2 * math.pi) for r in (10.0, 8.0)]
DISC = Arc.from_centre(50 + 5j, 2.0, 0.0, 2 * math.pi)
REGIONS = assemble([*box(0, 0, 10, 20), *RING, DISC]).regions  # a plate, a ring, a disc inside the ring


def numbers(selection: str | None) -> list[tuple[str, list[int]]]:
    return [(name, [REGIONS.index(r) + 1 for r in regions]) for name, regions in choose(REGIONS, selection, "mm")]


def test_one_boundary_needs_no_choice() -> None:
    one: list[Region] = [REGIONS[0]]
    assert choose(one, None, "mm") == [("1", (REGIONS[0],))]
    assert choose(one, "together", "mm") == [("1", (REGIONS[0],))]


def test_several_are_listed_with_number_place_size_and_area() -> None:
    with pytest.raises(OutlineError) as error:
        choose(REGIONS, None, "mm")
    message = str(error.value)
    assert error.value.findings[0].code == "several-outlines"
    assert "3 separate outer boundaries" in message
    assert "1: lower left at (0, 0), 10 x 20 mm, area 200 mm^2" in message
    assert "2: lower left at (40, -5), 20 x 20 mm, area 113.097 mm^2, 1 void" in message
    for option in ("--each", "--together", "--pick"):
        assert option in message


def test_each_and_together() -> None:
    assert numbers("each") == [("1", [1]), ("2", [2]), ("3", [3])]
    assert numbers("together") == [("together", [1, 2, 3])]


@pytest.mark.parametrize(
    ("pick", "number"),
    [("1", 1), ("3", 3), (" 2 ", 2), ("5,5", 1), ("5, 19.9", 1), ("41,5", 2), ("50,5", 3), ("12,5", 1), ("38,5", 2),
     ("-100,0", 1), ("1e3,5", 2), ("53,5", 3)],
)  # fmt: skip
def test_pick_by_number_or_by_a_point_in_or_nearest(pick: str, number: int) -> None:
    assert numbers(pick) == [(str(number), [number])]


LABELS = [("Plate", 5 + 5j), ("TUBE 12", 41 + 5j), ("core", 50 + 5j), ("far away", 200 + 0j), ("2", 5 + 6j)]


def test_pick_by_a_text_inside_in_any_case() -> None:
    for pick, number in (("plate", 1), ("tube 12", 2), ("core", 3), ("2", 2)):  # a number is a number first
        ((name, regions),) = choose(REGIONS, pick, "mm", LABELS)
        assert (name, regions) == (str(number), (REGIONS[number - 1],))
    with pytest.raises(UsageError, match="names 2 outer boundaries"):
        choose(REGIONS, "plate", "mm", [*LABELS, ("plate", 50 + 5j)])
    with pytest.raises(UsageError, match=r"neither a number, nor a text inside one(.|\n)*named 'Plate', '2'"):
        choose(REGIONS, "far away", "mm", LABELS)


@pytest.mark.parametrize("pick", ["0", "4", "A", "1,2,3", "", "1;2", "--", "nan,1", "."])
def test_picks_that_name_none(pick: str) -> None:
    with pytest.raises(UsageError, match="--pick"):
        choose(REGIONS, pick, "mm")
