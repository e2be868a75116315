"""The command `tally`: table, document, CSV, units, symbols, several drawings, exit codes."""

from __future__ import annotations

import csv
import io
import json
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

import edgetally
from build import analyse_once as analyse
from command import run
from drawings import INCH, drawing, square
from edgetally.output.numbers import digits_of, number_text, value_text
from edgetally.output.symbols import KEYS, name_of, symbol_of
from edgetally.section.kinds import OWN_UNITS, POWERS, unit_of
from edgetally.section.record import Property
from edgetally.units import Unit, length_factor

SAMPLES = Path(__file__).parent.parent / "sample_drawings"
BRACKET = SAMPLES / "bracket.dxf"

STRIP_ONLY = ("strip_thickness", "strip_width")


def test_table_is_aligned_and_has_units() -> None:
    code, out, err = run("tally", BRACKET, "--layer", "OUTLINE", "--density", "aluminium")
    assert (code, err) == (0, "")
    properties = out.partition("Dimensions on the drawing")[0]
    rows = [line for line in properties.splitlines() if line.startswith("  ")][1:]
    assert len(rows) == len([key for key in KEYS if key not in STRIP_ONLY])
    points = {line.rindex(".") for line in rows if "." in line[48:]}
    assert len(points) == 1
    assert "mm⁴" in out
    assert "second moment about x" in out
    assert "licensed professional" in out


def test_document_has_the_fixed_keys() -> None:
    code, out, _ = run("tally", BRACKET, "--layer", "outline", "--json")
    document = json.loads(out)
    assert code == 0
    assert document["format"] == "edgetally.tally/1"
    assert document["program"] == {"name": "edgetally", "version": edgetally.__version__}
    drawing_part = document["drawing"]
    assert set(drawing_part) >= {
        "file", "sha256", "dxf_version", "unit", "unit_source", "layers", "join_gap", "entities"
    }  # fmt: skip
    assert drawing_part["unit_source"] == "header"
    assert drawing_part["join_gap"] == 0.01
    assert drawing_part["entities"]["read"] == drawing_part["entities"]["used"] == 2
    section = document["sections"][0]
    assert section["regions"] == [{"area": pytest.approx(2826.78373), "voids": 1}]
    for key in KEYS:
        if key != "mass_per_length" and key not in STRIP_ONLY:
            assert set(section["properties"][key]) == {"value", "unit", "error"}
            limit = 1e-6 if key.startswith(("torsion", "warping", "shear")) else 1e-12
            assert 0 <= section["properties"][key]["error"] <= limit
    assert section["properties"]["second_moment_x"]["unit"] == "mm^4"
    assert document == analyse(BRACKET, layer="OUTLINE").to_dict()


def test_errors_are_computed_not_constant() -> None:
    sections = [analyse(p, layer="OUTLINE", units="mm").sections[0] for p in sorted(SAMPLES.glob("*[lbge].dxf"))]
    assert len({s.properties["area"].error for s in sections}) == len(sections)


def test_findings_in_the_document_have_place_and_handles() -> None:
    _, out, _ = run("tally", SAMPLES / "purlin-zed.dxf", "--layer", "OUTLINE", "--json")
    findings = json.loads(out)["findings"]
    assert [f["code"] for f in findings] == ["gap-joined"] * len(findings)
    assert len(findings) == 7
    for finding in findings:
        assert set(finding) == {"code", "severity", "message", "at", "handles"}
        assert finding["severity"] == "note"
        assert len(finding["at"]) == 2
        assert len(finding["handles"]) == 2


def test_several_drawings_give_a_document_a_line() -> None:
    code, out, _ = run("tally", BRACKET, SAMPLES / "round-edged-bar.dxf", "--layer", "OUTLINE", "--json")
    documents = [json.loads(line) for line in out.splitlines()]
    assert code == 0
    assert [d["drawing"]["file"] for d in documents] == ["bracket.dxf", "round-edged-bar.dxf"]
    assert [d["drawing"]["unit"] for d in documents] == ["mm", "in"]


def test_csv_has_a_row_a_section_and_full_precision() -> None:
    code, out, _ = run("tally", SAMPLES / "two-clamps.dxf", "--layer", "OUTLINE", "--each", "--csv")
    rows = list(csv.DictReader(io.StringIO(out)))
    assert code == 0
    assert [row["section"] for row in rows] == ["1", "2"]
    sections = analyse(SAMPLES / "two-clamps.dxf", layer="OUTLINE", select="each").sections
    for row, section in zip(rows, sections, strict=True):
        assert float(row["area [mm^2]"]) == section.properties["area"].value
        assert row["mass_per_length [kg/m]"] == ""


def test_csv_of_drawings_in_different_units_wants_one_unit() -> None:
    both = (BRACKET, SAMPLES / "round-edged-bar.dxf", "--layer", "OUTLINE", "--csv")
    code, out, err = run("tally", *both)
    assert (code, out) == (2, "")
    assert "--out-units" in err
    code, out, _ = run("tally", *both, "--out-units", "cm")
    assert code == 0
    assert "second_moment_x [cm^4]" in out.splitlines()[0]


def test_standard_input(tmp_path: Path) -> None:
    code, out, _ = run("tally", "-", "--layer", "OUTLINE", "--json", stdin=BRACKET.read_bytes())
    document = json.loads(out)
    assert code == 0
    assert document["drawing"]["file"] == "standard input"
    assert document["sections"] == analyse(BRACKET, layer="OUTLINE").to_dict()["sections"]


@pytest.mark.parametrize("unit", ["mm", "cm", "m", "in"])
def test_units_of_the_results_are_exact(tmp_path: Path, unit: str) -> None:
    path = drawing(tmp_path, lambda space: square(space, 3.0), units=INCH)
    plain = analyse(path, layer="OUTLINE").sections[0].properties
    other = analyse(path, layer="OUTLINE", out_units=unit, density=1000).sections[0].properties
    factor = length_factor("in", unit)
    for key, prop in plain.items():
        if prop.unit.base != "in":
            continue
        assert other[key].value == pytest.approx((prop.value or 0.0) * factor**prop.unit.power, rel=4e-16)
        assert str(other[key].unit) == str(unit_of(key, unit))
    assert other["mass_per_length"].value == pytest.approx((3 * 25.4) ** 2 * 1e-6 * 1000, rel=1e-15)


def test_symbols_change_symbols_and_never_values() -> None:
    tables = {s: run("tally", BRACKET, "--layer", "OUTLINE", "--symbols", s)[1] for s in ("plain", "en", "us")}
    assert "I_y " in tables["en"]
    assert "W_el,y,top" in tables["en"]
    assert "S_x,top" in tables["us"]
    assert "r_x" in tables["us"]
    numbers = {
        s: sorted(word for line in t.splitlines() for word in line.split() if word.replace(".", "").isdigit())
        for s, t in tables.items()
    }
    assert numbers["plain"] != []
    assert len({"".join(n for n in v if "." in n) for v in numbers.values()}) == 1


def test_every_key_has_name_symbol_and_unit() -> None:
    assert len(KEYS) == len(set(KEYS))
    assert set(KEYS) == set(POWERS) | set(OWN_UNITS)
    for key in KEYS:
        for symbols in ("plain", "en", "us"):
            assert "{" not in name_of(key, symbols) + symbol_of(key, symbols)
        assert str(unit_of(key, "mm"))


def test_a_warning_makes_exit_code_one(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space)
        space.add_ray((0, 0), (1, 0), dxfattribs={"layer": "OUTLINE"})

    code, out, _ = run("tally", drawing(tmp_path, draw), "--layer", "OUTLINE")
    assert code == 1
    assert "warning: entity-skipped: RAY #" in out


def test_a_gap_beyond_the_default_is_joined_on_request_with_a_warning(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        space.add_lwpolyline([(0, 0), (10, 0), (10, 10), (0, 10), (0, 0.05)], dxfattribs={"layer": "OUTLINE"})

    path = drawing(tmp_path, draw)
    code, _, err = run("tally", path, "--layer", "OUTLINE")
    assert code == 2
    assert "pass --join-gap 0.05mm" in err
    code, out, _ = run("tally", path, "--layer", "OUTLINE", "--join-gap", "0.05mm")
    assert code == 1
    assert "gap of 0.05 mm joined" in out


def test_each_together_and_pick() -> None:
    path = SAMPLES / "two-clamps.dxf"
    each = analyse(path, layer="OUTLINE", select="each").sections
    together = analyse(path, layer="OUTLINE", select="together").sections
    picked = analyse(path, layer="OUTLINE", select="2").sections
    named = analyse(path, layer="OUTLINE", select="b").sections
    assert named[0].name == picked[0].name == "2"
    by_point = analyse(path, layer="OUTLINE", select="150,5").sections
    areas = [s.properties["area"].value or 0.0 for s in each]
    assert together[0].properties["area"].value == pytest.approx(sum(areas), rel=1e-14)
    assert picked[0].properties["area"].value == by_point[0].properties["area"].value == areas[1]


def test_help_shows_a_worked_example() -> None:
    for command in ("tally", "sheet"):
        code, out, _ = run(command, "--help")
        assert code == 0
        assert f"Example: edgetally {command} sample_drawings/" in " ".join(out.split())
    code, out, _ = run("--version")
    assert (code, out) == (0, f"edgetally {edgetally.__version__}\n")


def test_svg_of_the_figure(tmp_path: Path) -> None:
    target = tmp_path / "figure.svg"
    code, _, _ = run("tally", BRACKET, "--layer", "OUTLINE", "--svg", target)
    assert code == 0
    assert target.read_text().startswith("<svg")


@pytest.mark.parametrize(
    ("value", "digits", "text"),
    [
        (0.0, 7, "0"),
        (1234567.89, 7, "1234568"),
        (9999999.6, 7, "10.00000e6"),
        (12345678.9, 7, "12.34568e6"),
        (-0.00123456789, 7, "-0.001234568"),
        (0.0000123, 3, "12.3e-6"),
        (1e15, 7, "1.000000e15"),
        (999999.96, 7, "1000000"),
        (5.0, 1, "5"),
    ],
)
def test_numbers_in_print(value: float, digits: int, text: str) -> None:
    assert number_text(value, digits) == text


@given(st.floats(1e-30, 1e30), st.integers(1, 7))
def test_a_printed_number_is_within_half_its_last_digit(value: float, digits: int) -> None:
    printed = float(number_text(value, digits))
    assert abs(printed - value) <= 0.5000001 * 10.0 ** (1 - digits) * value


def test_digits_follow_the_error() -> None:
    assert digits_of(1e-13) == 7
    assert digits_of(1e-5) == 5
    assert digits_of(2e-3) == 2
    assert value_text(Property("area", 1234.567, Unit("mm", 2), 2e-3)) == "1200"
    assert value_text(Property("centroid_x", 1e-15, Unit("mm"), 1e-15), scale=100.0) == "0"
    assert value_text(Property("torsion_constant", None, Unit("mm", 4), None)) == "–"
