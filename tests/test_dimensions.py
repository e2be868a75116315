"""Dimensions against what they measure, and the unit against the size."""

from __future__ import annotations

import os
from pathlib import Path
from typing import Any

import ezdxf
import pytest

from build import analyse_area as analyse
from command import run
from drawings import drawing, square
from edgetally.drawing.dimensions import _number, dimension_findings, dimensions_of
from edgetally.drawing.layers import Layers
from edgetally.output.dimension_table import dimension_block

SAMPLES = Path(__file__).parent.parent / "sample_drawings"
REAL = Path(os.environ.get("EDGETALLY_DRAWINGS", "")) / "sections"


def dimension(space: Any, a: tuple[float, float], b: tuple[float, float], text: str = "<>", **override: Any) -> None:
    made = space.add_linear_dim(base=(a[0], a[1] - 5), p1=a, p2=b, text=text, override=override,
                                dxfattribs={"layer": "NOTES"})  # fmt: skip
    made.render()


def found(tmp_path: Path, texts: list[str], scale: float = 1.0, size: float = 40.0, **override: Any) -> list[Any]:
    def draw(space: Any) -> None:
        square(space, size)
        for k, text in enumerate(texts):
            dimension(space, (0, 0), (10.0 * (k + 1), 0), text, **override)

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE", scale=scale)
    return [(f.code, f.severity, f.message) for f in analysis.findings]


def test_dimensions_that_show_what_they_measure(tmp_path: Path) -> None:
    assert found(tmp_path, ["<>", "", "30", "40.0 typ.", "<> H7", " "]) == []


def test_a_written_number_that_is_wrong_is_named(tmp_path: Path) -> None:
    ((code, severity, message),) = found(tmp_path, ["<>", "25", "30", "<>"])
    assert (code, severity) == ("dimension-overridden", "warning")
    assert "shows '25', but measures 20" in message


def test_half_a_unit_of_the_last_digit_is_allowed(tmp_path: Path) -> None:
    codes = [code for code, _, _ in found(tmp_path, ["10.1", "20", "30"])]
    assert codes == ["dimension-overridden"]
    assert found(tmp_path, ["10", "20", "30"]) == []


@pytest.mark.parametrize("how", ["written", "factor"])
def test_all_off_by_one_ratio_are_a_scale(tmp_path: Path, how: str) -> None:
    texts = ["20", "40", "60", "80"] if how == "written" else ["<>"] * 4
    override = {"dimlfac": 2.0} if how == "factor" else {}
    ((code, severity, message),) = found(tmp_path, texts, **override)
    assert (code, severity) == ("not-to-scale", "warning")
    assert "pass --scale 2" in message
    assert found(tmp_path, texts, scale=2.0, **override) == []


def test_a_ratio_of_two_units_is_a_doubt_about_the_unit(tmp_path: Path) -> None:
    ((code, _, message),) = found(tmp_path, ["254", "508", "762"])
    assert code == "units-suspect"
    assert "--units in" in message


def test_one_odd_one_among_a_scale(tmp_path: Path) -> None:
    codes = [code for code, _, _ in found(tmp_path, ["20", "40", "60", "80", "90", "120"])]
    assert codes == ["not-to-scale", "dimension-overridden"]


@pytest.mark.parametrize(
    ("text", "number"),
    [("12", 12.0), ("12,5", 12.5), ("%%c12", 12.0), ("4x Ø12", 12.0), ("R3.25", 3.25), ("12 ±0.1", 12.0),
     ("12 +0.2", 12.0), (r"\A1;12.0", 12.0), ("TYP", None), ("3 1/2", None), ("45%%d", None), ("12 x 30", None)],
)  # fmt: skip
def test_the_number_of_a_written_text(text: str, number: float | None) -> None:
    assert _number(text)[0] == number


@pytest.mark.parametrize("path", sorted(SAMPLES.glob("*.dxf")), ids=lambda p: p.stem)
def test_sample_drawings_give_no_doubt(path: Path) -> None:
    findings = analyse(
        path, layer="OUTLINE", units=None if path.stem != "corner-angle" else "mm", select="each"
    ).findings
    assert {f.code for f in findings} <= {"gap-joined"}


@pytest.mark.parametrize(("size", "units", "doubt"), [(1.0, 4, True), (5.9, 4, True), (6.1, 4, False), (4000, 4, False),
                                                      (6000, 4, True), (1.0, 1, False), (300, 1, True)])  # fmt: skip
def test_a_size_that_few_sections_have_is_a_doubt_about_the_header_s_unit(
    tmp_path: Path, size: float, units: int, doubt: bool
) -> None:
    path = drawing(tmp_path, lambda space: square(space, size), units=units)
    assert [f.code for f in analyse(path, layer="OUTLINE").findings] == ["units-suspect"] * doubt
    said = analyse(path, layer="OUTLINE", units="mm" if units == 4 else "in")
    assert said.findings == ()  # who gives the unit is not doubted


@pytest.mark.skipif(not os.environ.get("EDGETALLY_DRAWINGS"), reason="EDGETALLY_DRAWINGS names no folder of drawings")
def test_real_drawings() -> None:
    """A shop drawing with 293 dimensions: none of those with a number is written over. The headers that lie."""
    document = ezdxf.readfile(REAL / "curtain-wall-details.dxf")
    for layer in document.layers:  # they are on layers that are off
        layer.on()
        layer.thaw()
    rows = dimensions_of(document, Layers(document))
    assert len(rows) > 100
    assert dimension_findings(rows, 1.0) == []
    for name, options in (("rectangular-tube", {}), ("tslot-1x1", {})):
        codes = [f.code for f in analyse(REAL / f"{name}.dxf", **options).findings]
        assert "units-suspect" in codes
    for name in ("vslot-20x20", "sharp-I", "channel-MC12x31", "angle-rounded-toes"):
        assert "units-suspect" not in [f.code for f in analyse(REAL / f"{name}.dxf").findings]


def test_the_table_of_dimensions(tmp_path: Path) -> None:
    """Shown text, `<>` expanded, measured × DIMLFAC, difference: in the document, on the terminal, as a block."""

    def draw(space: Any) -> None:
        square(space, 40)
        for k, text in enumerate(["<>", "25", "<> H7", "TYP", r"\A1;{\H2;39.6}"]):
            dimension(space, (0, 0), (10.0 * (k + 1), 0) if k < 4 else (40, 0), text)
        dimension(space, (0, 0), (5, 0), dimlfac=2.0)

    path = drawing(tmp_path, draw)
    analysis = analyse(path, layer="OUTLINE")
    rows = analysis.to_dict()["drawing"]["dimensions"]
    assert [(r["shown"], r["measured"], r["difference"]) for r in rows] == [
        ("10", 10.0, 0.0), ("25", 20.0, 5.0), ("30 H7", 30.0, 0.0), ("TYP", 40.0, None),
        ("39.6", 40.0, pytest.approx(-0.4)), ("10", 10.0, 0.0),
    ]  # fmt: skip
    assert {r["layer"] for r in rows} == {"NOTES"}
    handles = [e.dxf.handle for e in ezdxf.readfile(path).modelspace().query("DIMENSION")]
    assert [r["handle"] for r in rows] == handles
    block = dimension_block(analysis)
    assert block is not None
    assert len(block.rows) == 6
    _, out, _ = run("tally", path, "--layer", "OUTLINE")
    (line,) = [line for line in out.splitlines() if line.split()[:1] == [f"#{handles[1]}"]]
    assert [float(word) for word in line.split()[2:]] == [25.0, 20.0, 5.0]
    assert "Dimensions on the drawing" in out


def test_a_drawing_without_dimensions_has_no_table(tmp_path: Path) -> None:
    analysis = analyse(drawing(tmp_path, square), layer="OUTLINE")
    assert analysis.to_dict()["drawing"]["dimensions"] == []
    assert dimension_block(analysis) is None


def test_a_long_table_keeps_what_differs(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space, 40)
        for k in range(50):
            dimension(space, (0, 0), (20, 0), "21" if k == 45 else "<>")

    block = dimension_block(analyse(drawing(tmp_path, draw), layer="OUTLINE"))
    assert block is not None
    assert len(block.rows) == 40
    assert block.rows[0][2] == "21"
    assert "10 more" in block.notes[-1]
