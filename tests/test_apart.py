"""A faulty neighbour does not refuse a sound outline that is picked, and never lets a doubtful one be measured."""

from __future__ import annotations

import math
from collections.abc import Callable
from itertools import pairwise
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from build import analyse_area as analyse
from command import run
from drawings import drawing, square
from edgetally import OutlineError, UsageError
from edgetally.curves import Arc, Curve, Line
from edgetally.outline.apart import assemble_sound
from edgetally.outline.assembly import assemble
from edgetally.outline.views import widest_view

OUTLINE = {"layer": "OUTLINE"}


def line(space: Any, *points: tuple[float, float]) -> None:
    for a, b in pairwise(points):
        space.add_line(a, b, dxfattribs=OUTLINE)


def crossing(space: Any) -> None:
    square(space, 10, (100, 0))
    square(space, 10, (105, 5))


def touching(space: Any) -> None:
    square(space, 10, (100, 0))
    space.add_circle((115, 5), 5, dxfattribs=OUTLINE)


def bow_tie(space: Any) -> None:
    space.add_lwpolyline([(100, 0), (110, 10), (110, 0), (100, 10)], close=True, dxfattribs=OUTLINE)


def lying_over(space: Any) -> None:
    square(space, 10, (100, 0))
    space.add_lwpolyline([(100, 2), (105, 2), (105, 8), (100, 8)], close=True, dxfattribs=OUTLINE)


def open_chain(space: Any) -> None:
    line(space, (100, 0), (110, 0), (110, 10), (100, 10), (100, 1))


def branch(space: Any) -> None:
    line(space, (100, 0), (110, 0), (110, 10), (100, 10), (100, 0))
    line(space, (100, 0), (110, 10))


def t_junction(space: Any) -> None:
    square(space, 10, (100, 0))
    line(space, (105, 0), (105, 5))


def too_wide(space: Any) -> None:
    line(space, (100, 0), (110, 0), (110, 10), (100, 10), (100, 0.05), (100, 0.009))


def flat(space: Any) -> None:
    space.add_lwpolyline([(100, 0), (110, 0), (105, 0)], close=True, dxfattribs=OUTLINE)


def tube_with_a_faulty_void(space: Any) -> None:
    space.add_circle((110, 10), 10, dxfattribs=OUTLINE)
    line(space, (107, 8), (113, 8), (113, 12), (107, 12), (107, 9))


FAULTS: list[tuple[Callable[[Any], None], str]] = [
    (crossing, "crossing"), (touching, "crossing"), (bow_tie, "crossing"), (lying_over, "regions-overlap"),
    (open_chain, "open-chain"), (branch, "branch"), (t_junction, "branch"), (too_wide, "gap-too-wide"),
    (flat, "crossing"), (tube_with_a_faulty_void, "open-chain"),
]  # fmt: skip


@pytest.mark.parametrize(("fault", "code"), FAULTS, ids=lambda p: getattr(p, "__name__", ""))
def test_a_sound_outline_is_measured_beside_a_faulty_one(
    tmp_path: Path, fault: Callable[[Any], None], code: str
) -> None:
    """A square of 10 with a round void of 2: 100 − 4π."""

    def draw(space: Any) -> None:
        square(space)
        space.add_circle((5, 5), 2, dxfattribs=OUTLINE)
        fault(space)
        square(space, 20, (200, 0))
        space.add_text("C", dxfattribs={"layer": "NOTES", "insert": (205, 5)})

    path = drawing(tmp_path, draw)
    for pick, name, area in (("1", "1", 100 - 4 * math.pi), ("5,1", "1", 100 - 4 * math.pi), ("C", "3", 400.0),
                             ("200,30", "3", 400.0), ("3", "3", 400.0)):  # fmt: skip
        analysis = analyse(path, layer="OUTLINE", select=pick)
        (section,) = analysis.sections
        assert section.name == name
        assert section.properties["area"].value == pytest.approx(area, rel=1e-12)
        warnings = [f for f in analysis.findings if f.severity == "warning"]
        assert {f.code for f in warnings} == {code}
        assert all("left out" in f.message for f in warnings)
        assert warnings[0].at is not None
        assert warnings[0].at[0] == pytest.approx(105, abs=16)
    each = analyse(path, layer="OUTLINE", select="each")
    assert [s.name for s in each.sections] == ["1", "3"]
    assert code in {f.code for f in each.findings if f.severity == "warning"}
    for select in (None, "together", "2", "105,3", "99,5"):
        with pytest.raises(OutlineError) as error:
            analyse(path, layer="OUTLINE", select=select)
        assert error.value.findings[0].code == code
        assert error.value.findings[0].severity == "error"
    with pytest.raises(UsageError, match="1 to 3"):
        analyse(path, layer="OUTLINE", select="4")


def test_command_measures_and_warns(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space)
        crossing(space)

    path = drawing(tmp_path, draw)
    code, out, _ = run("tally", path, "--layer", "OUTLINE", "--pick", "1")
    assert code == 1
    assert "warning: crossing: the outline from (100, 0) to (115, 15) was left out" in out
    code, out, err = run("tally", path, "--layer", "OUTLINE")
    assert (code, out) == (2, "")
    assert "cross, touch or run over each other" in err
    assert "1 other outline on the layer is sound: --each measures what is sound, --pick one of them" in err
    code, out, err = run("tally", path, "--layer", "OUTLINE", "--together")
    assert (code, out) == (2, "")
    assert "sound" not in err


def test_a_text_in_a_faulty_outline_is_no_name_of_its_neighbour(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space)
        crossing(space)
        for at in ((105, 8), (200, 200)):
            space.add_text("B", dxfattribs={"layer": "NOTES", "insert": at})

    path = drawing(tmp_path, draw)
    with pytest.raises(OutlineError, match="--pick B: the outline from") as error:
        analyse(path, layer="OUTLINE", select="B")
    assert error.value.findings[0].code == "crossing"


def box(x: float, y: float, width: float, height: float) -> list[Curve]:
    z = complex(x, y)
    points = [z, z + width, z + complex(width, height), z + 1j * height]
    return [Line(a, b) for a, b in zip(points, [*points[1:], points[0]], strict=True)]


def circle(x: float, y: float, r: float) -> list[Curve]:
    return [Arc.from_centre(complex(x, y), r, 0.0, 2 * math.pi)]


BOW = [Line(a, b) for a, b in ((0j, 4 + 4j), (4 + 4j, 4 + 0j), (4 + 0j, 4j), (4j, 0j))]


def bow(x: float, y: float, size: float = 1.0) -> list[Curve]:
    return [curve.moved(complex(size), complex(x, y)) for curve in BOW]


@pytest.mark.parametrize(
    "doubtful",
    [
        box(0, 0, 20, 20) + bow(8, 8),  # a fault inside
        box(0, 0, 20, 20) + circle(10, 10, 6) + bow(8, 8),  # inside its void
        bow(0, 0, 10) + circle(30, 20, 1),  # a sound void, it may be, of a faulty outline
        box(0, 0, 20, 20)[:3] + circle(10, 10, 5),  # of an open one
        box(0, 0, 20, 20)[:3] + circle(3, 10, 1),
        [Line(9 + 20j, 20j), Line(20j, 0j), Line(0j, 9 + 0j), Line(11 + 0j, 20 + 0j), Line(20 + 0j, 20 + 20j),
         Line(20 + 20j, 11 + 20j), *circle(10, 10, 5)],  # of two brackets
        box(0, 0, 20, 20) + circle(20, 10, 3),  # crossed
        box(0, 0, 20, 20) + circle(17, 10, 3),  # touched
    ],
)  # fmt: skip
def test_what_a_fault_may_concern_is_never_measured(doubtful: list[Curve]) -> None:
    with pytest.raises(OutlineError):
        assemble(doubtful)
    with pytest.raises(OutlineError):
        assemble_sound(doubtful)
    outline = assemble_sound([*doubtful, *box(500, 0, 10, 10)])
    assert [region.area for region in outline.regions] == pytest.approx([100.0])
    assert outline.left_out


def test_a_fault_in_the_mouth_of_an_outline_does_not_concern_it() -> None:
    channel = [0j, 20 + 0j, 20 + 3j, 3 + 3j, 3 + 17j, 20 + 17j, 20 + 20j, 20j]
    curves: list[Curve] = [Line(a, b) for a, b in zip(channel, [*channel[1:], channel[0]], strict=True)]
    outline = assemble_sound([*curves, *bow(8, 8)])
    assert [region.area for region in outline.regions] == pytest.approx([2 * 60 + 42])


def test_a_stray_line_beside_a_fault_stays_a_stray() -> None:
    outline = assemble_sound([*box(0, 0, 10, 10), *bow(100, 0), Line(300 + 0j, 310 + 0j)])
    assert [(f.code, f.severity) for f in outline.findings] == [("stray-curve", "warning"), ("crossing", "warning")]
    assert len(outline.regions) == 1


def test_a_sound_layer_is_assembled_as_ever() -> None:
    curves = [*box(0, 0, 10, 10), *circle(5, 5, 2), *box(30, 0, 10, 10)]
    one, other = assemble(curves), assemble_sound(curves)
    assert [r.area for r in one.regions] == [r.area for r in other.regions]
    assert other.left_out == ()


@pytest.mark.parametrize("nothing", [[], [Line(0j, 10 + 0j)], BOW])
def test_where_nothing_is_sound_the_refusal_is_the_same(nothing: list[Curve]) -> None:
    with pytest.raises(OutlineError) as one:
        assemble(nothing)
    with pytest.raises(OutlineError) as other:
        assemble_sound(nothing)
    assert str(one.value) == str(other.value)


def test_many_outlines_with_few_faults() -> None:
    """400 squares of which three cross others; each of the rest is found."""
    curves = [piece for k in range(400) for piece in box(20 * (k % 20), 20 * (k // 20), 10, 10)]
    for k in (5, 210, 399):
        curves += bow(20 * (k % 20) + 8, 20 * (k // 20) + 8)
    outline = assemble_sound(curves)
    assert len(outline.regions) == 397
    assert [left.finding.code for left in outline.left_out] == ["crossing"] * 3


@pytest.mark.parametrize("seed", range(20))
def test_thewidest_view_against_rays(seed: int) -> None:
    """Rays in 3600 directions against the sides of each box, by slabs."""
    chance = np.random.default_rng(seed)
    low = chance.uniform(-10, 10, (chance.integers(1, 7), 2))
    boxes = np.hstack([low, low + chance.uniform(0, 8, low.shape)])
    angles = 2 * np.pi * (np.arange(3600) + 0.5) / 3600
    ray = np.stack([np.cos(angles), np.sin(angles)], axis=1)[:, None, :]
    near, far = boxes[:, :2] / ray, boxes[:, 2:] / ray
    enters, leaves = np.minimum(near, far).max(axis=2), np.maximum(near, far).min(axis=2)
    free = "".join("10"[hit] for hit in np.any((enters <= leaves) & (leaves >= 0), axis=1).astype(int).tolist())
    widest = min(3600, max(map(len, (free * 2).split("0")))) * 2 * np.pi / 3600
    assert widest_view(0j, boxes) == pytest.approx(widest, abs=0.004)


def test_a_layer_of_faults_is_refused_without_trying_each() -> None:
    """3000 open corners and one square: no drawing of sections."""
    corners = [Line(complex(20 * (k // 2), 50), complex(20 * (k // 2) + 9, 50 + 9 * (k % 2))) for k in range(6000)]
    with pytest.raises(OutlineError):
        assemble_sound([*box(0, 0, 10, 10), *corners])
    strays = [Line(complex(20 * k, 50), complex(20 * k + 9, 50)) for k in range(6000)]
    outline = assemble_sound([*box(0, 0, 10, 10), *strays, *bow(100, 0)])
    assert len(outline.regions) == 1
    assert len(outline.left_out) == 1


places = st.builds(complex, st.integers(0, 60), st.integers(0, 60))


@settings(deadline=None, max_examples=80)
@given(st.lists(st.tuples(places, st.integers(2, 44).map(lambda r: r / 3 + 0.1)), min_size=1, max_size=9, unique=True))
def test_circles_anywhere_are_measured_only_where_no_fault_concerns_them(circles: list[tuple[complex, float]]) -> None:
    """Circles c, r cross where |r − r′| ≤ |c − c′| ≤ r + r′, and lie in each other where |c − c′| < r′ − r: what may be
    measured is known in closed form. It is measured, too, where the box of the only group of faults is away."""

    def crosses(i: int, j: int) -> bool:
        d = abs(circles[i][0] - circles[j][0])
        return abs(circles[i][1] - circles[j][1]) - 1e-6 <= d <= circles[i][1] + circles[j][1] + 1e-6

    def near(i: int, j: int) -> bool:
        d, r, q = abs(circles[i][0] - circles[j][0]), circles[i][1], circles[j][1]
        return min(abs(d - r - q), abs(d + r - q), abs(d + q - r)) < 1

    def inside(i: int, j: int) -> bool:
        return not crosses(i, j) and abs(circles[i][0] - circles[j][0]) < circles[j][1] - circles[i][1]

    every = range(len(circles))
    bad = [i for i in every if any(crosses(i, j) for j in every if j != i)]
    around = {i: [j for j in every if inside(i, j)] for i in every}
    fine = {}
    for i in every:
        if i not in bad and len(around[i]) % 2 == 0 and not any(b in around[i] or i in around[b] for b in bad):
            voids = [j for j in every if i in around[j] and len(around[j]) == len(around[i]) + 1]
            fine[i] = math.pi * (circles[i][1] ** 2 - sum(circles[j][1] ** 2 for j in voids))
    try:
        outline = assemble_sound([Arc.from_centre(c, r, 0.3, 2 * math.pi) for c, r in circles])
    except OutlineError:
        outline = None
        assert bad
    found = {}
    for region in outline.regions if outline else ():
        x0, y0, x1, y1 = region.box
        (k,) = [i for i in fine if abs(complex(x0 + x1, y0 + y1) / 2 - circles[i][0]) < 1e-9
                and abs((x1 - x0) / 2 - circles[i][1]) < 1e-9]  # fmt: skip
        found[k] = region.area
    assert all(found[k] == pytest.approx(fine[k], rel=1e-12) for k in found)
    if not bad:
        assert found.keys() == fine.keys()
    if len(bad) == 2 and not any(near(i, j) for i in bad for j in every if j not in bad):
        boxes = [(c.real - r, c.imag - r, c.real + r, c.imag + r) for c, r in (circles[b] for b in bad)]
        a0, b0, a1, b1 = (pick(side) for pick, side in zip((min, min, max, max), zip(*boxes, strict=True), strict=True))
        for k, (c, r) in ((k, circles[k]) for k in fine):
            if c.real - r > a1 or c.real + r < a0 or c.imag - r > b1 or c.imag + r < b0:
                assert k in found
