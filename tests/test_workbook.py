"""The workbook of `tally --xlsx`, read back: full precision, no formulas, every finding, the same bytes."""

from __future__ import annotations

import io
import re
import sys
import zipfile
from functools import partial
from pathlib import Path
from typing import Any

import openpyxl
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from build import analyse_once
from command import run
from drawings import draw_contours, drawing, square
from edgetally.output.blocks import Block, Figure
from edgetally.output.symbols import KEYS
from edgetally.output.workbook import number_format, workbook_bytes
from outlines import polygon

SAMPLES = Path(__file__).parent.parent / "sample_drawings"
ZED = SAMPLES / "purlin-zed.dxf"
analyse = partial(analyse_once, torsion=False)


def read(data: bytes | Path) -> Any:
    return openpyxl.load_workbook(io.BytesIO(data) if isinstance(data, bytes) else data)


def rows_of(sheet: Any) -> list[tuple[Any, ...]]:
    return list(sheet.iter_rows(values_only=True))


def test_properties_at_full_precision_with_unit_and_error(tmp_path: Path) -> None:
    target = tmp_path / "zed.xlsx"
    code, out, err = run("tally", ZED, "--layer", "OUTLINE", "--density", "steel", "--xlsx", target)
    assert (code, err) == (0, "")
    assert "second moment about x" in out
    book = read(target)
    assert book.sheetnames == ["Properties", "Reading", "Findings", "Flats and bends", "The blank"]
    sheet = book["Properties"]
    assert sheet.freeze_panes == "D3"
    titles, heads, *rows = rows_of(sheet)
    assert titles[3] == "purlin-zed.dxf, section 1"
    assert heads == ("key", "name", "symbol", "value", "unit", "relative error")
    table = {row[0]: row for row in rows if row[0] in KEYS}
    section = analyse_once(ZED, layer="OUTLINE", density="steel").sections[0]
    assert list(table) == [key for key in KEYS if key in section.properties]
    for key, prop in section.properties.items():
        assert table[key][3:6] == (prop.value, str(prop.unit), prop.error)  # to the last digit
    assert table["second_moment_x"][1:3] == ("second moment about x", "I_x")
    assert "licensed professional" in rows[-1][0]


def test_reading_and_findings(tmp_path: Path) -> None:
    analysis = analyse(ZED, layer="OUTLINE")
    book = read(workbook_bytes([analysis]))
    reading = {what: words for _, what, words in rows_of(book["Reading"])}
    assert reading["SHA-256"] == analysis.drawing.sha256
    assert reading["unit of the drawing"] == "mm (from file header)"
    assert "closed loops" in reading["assembled to"]
    heads, *rows = rows_of(book["Findings"])
    assert heads == ("drawing", "section", "severity", "code", "message", "x", "y", "handles")
    assert len(rows) == len(analysis.all_findings) == 7
    for row, finding in zip(rows, analysis.findings, strict=True):
        assert row[2:5] == (finding.severity, finding.code, finding.message)
        assert (row[5], row[6]) == finding.at
        assert row[7] == " ".join(finding.handles)


def test_a_group_of_columns_a_section_of_several_drawings(tmp_path: Path) -> None:
    target = tmp_path / "all.xlsx"
    drawings = [SAMPLES / "two-clamps.dxf", SAMPLES / "round-edged-bar.dxf"]
    code, _, _ = run("tally", *drawings, "--layer", "OUTLINE", "--each", "--symbols", "en", "--xlsx", target)
    assert code == 0
    titles, heads, area, *rows = rows_of(read(target)["Properties"])
    assert [t for t in titles if t] == [
        "two-clamps.dxf, section 1", "two-clamps.dxf, section 2", "round-edged-bar.dxf, section 1"
    ]  # fmt: skip
    assert heads[3:] == ("value", "unit", "relative error") * 3
    assert area[4::3] == ("mm^2", "mm^2", "in^2")
    symbols = {row[0]: row[2] for row in rows}
    assert symbols["second_moment_x"] == "I_y"


def test_a_composite_section_adds_its_tables(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        square(space, 10)
        draw_contours(space, [polygon([(10, 0), (15, 0), (15, 10), (10, 10)])], "NOTES")

    target = tmp_path / "composite.xlsx"
    words = ("--material", "OUTLINE=70GPa", "--material", "NOTES=210GPa")
    code, _, _ = run("tally", drawing(tmp_path, draw), *words, "--xlsx", target)
    assert code == 0
    book = read(target)
    assert book.sheetnames[3:] == [
        "Composite section", "Parts", "Extreme fibres of each part", "Elastic moduli of each part"
    ]  # fmt: skip
    values = {row[0]: row[2] for row in rows_of(book["Composite section"])}
    assert values["EA"] == pytest.approx(70e3 * 100 + 210e3 * 50)


HOSTILE = [
    "=1+1",
    "+1",
    "-1",
    "@SUM(A1)",
    "\t=1",
    '=HYPERLINK("http://x","y")',
    "#N/A",
    "#REF!",
    "1",
    "2026-03-31",
    "TRUE",
    "{=1}",
]


def test_no_text_becomes_a_formula_a_number_or_an_error() -> None:
    block = Block("=1+1", tuple(HOSTILE), tuple((text,) for text in HOSTILE), notes=("=2+2",))
    analysis = analyse(ZED, layer="OUTLINE", name="=cmd|' /C calc'!A0")
    data = workbook_bytes([analysis], blocks=[block])
    book = read(data)
    for sheet in book:
        for cells in sheet.iter_rows():
            for cell in cells:
                assert cell.data_type in ("s", "n")
                if cell.data_type == "n" and cell.value is not None:
                    assert isinstance(cell.value, int | float)
                if isinstance(cell.value, str) and cell.value[0] in "=+-@\t":
                    assert cell.quotePrefix
    texts = [row[0] for row in rows_of(book["=1+1"])]
    assert texts[2 : 2 + len(HOSTILE)] == HOSTILE
    assert texts[-1] == "=2+2"


@settings(deadline=None, max_examples=25)
@given(st.lists(st.text(max_size=40), min_size=1, max_size=4))
def test_any_text_can_be_written_and_names_a_sheet(texts: list[str]) -> None:
    analysis = analyse(ZED, layer="OUTLINE")
    blocks = [Block(text, (), ((text, Figure(1.5, "1.5")),)) for text in texts]
    book = read(workbook_bytes([analysis], blocks=blocks))
    assert len({name.casefold() for name in book.sheetnames}) == 3 + len(texts)
    for sheet in book.worksheets[3:]:
        assert len(sheet.title) <= 31
        assert sheet.cell(2, 2).value == 1.5


def test_texts_too_long_for_a_cell_are_cut_with_a_mark() -> None:
    analysis = analyse(ZED, layer="OUTLINE")
    book = read(workbook_bytes([analysis], blocks=[Block("T", (), (("x" * 40_000,),))]))
    text = book["T"].cell(2, 1).value
    assert len(text) == 32_767
    assert text.endswith("x…")


def test_a_number_that_cannot_be_given_is_no_number(tmp_path: Path) -> None:
    def two(space: Any) -> None:
        square(space, 10)
        square(space, 10, at=(30, 0))

    analysis = analyse(drawing(tmp_path, two), layer="OUTLINE", select="together", torsion=True)
    table = {row[0]: row for row in rows_of(read(workbook_bytes([analysis]))["Properties"])}
    assert table["warping_constant"][3:6] == ("–", "mm^6", None)


def test_the_same_results_give_the_same_bytes() -> None:
    analysis = analyse(ZED, layer="OUTLINE")
    data = workbook_bytes([analysis])
    assert workbook_bytes([analysis]) == data
    with zipfile.ZipFile(io.BytesIO(data)) as archive:
        assert {entry.date_time for entry in archive.infolist()} == {(1980, 1, 1, 0, 0, 0)}
        dates = re.findall(r"<dcterms:(?:created|modified)[^>]*>([^<]*)<", archive.read("docProps/core.xml").decode())
    assert dates == ["2000-01-01T00:00:00Z"] * 2


@pytest.mark.parametrize(
    ("value", "shown"),
    [(0.0, "0"), (3945039.65, "0"), (1234.5, "0.000"), (-0.5, "0.0000000"), (2.5e-6, "0.000000E+00"),
     (3.2e12, "0.000000E+00"), (12345678.0, "0")],
)  # fmt: skip
def test_numbers_are_shown_to_seven_digits(value: float, shown: str) -> None:
    assert number_format(value) == shown


def test_without_the_package_it_says_what_to_install(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setitem(sys.modules, "openpyxl", None)
    code, out, err = run("tally", ZED, "--layer", "OUTLINE", "--xlsx", tmp_path / "x.xlsx")
    assert (code, out) == (2, "")
    assert "pip install 'edgetally[xlsx]'" in err
    assert list(tmp_path.iterdir()) == []


def test_never_over_the_drawing_and_nothing_when_refused(tmp_path: Path) -> None:
    path = drawing(tmp_path, lambda space: space.add_line((0, 0), (1, 0), dxfattribs={"layer": "OUTLINE"}))
    before = path.read_bytes()
    code, _, err = run("tally", ZED, path, "--layer", "OUTLINE", "--xlsx", path)
    assert code == 2
    assert "is the drawing itself" in err
    assert path.read_bytes() == before
    code, _, _ = run("tally", path, "--layer", "OUTLINE", "--xlsx", tmp_path / "x.xlsx")
    assert code == 2
    assert [p.name for p in tmp_path.iterdir()] == ["drawing.dxf"]
