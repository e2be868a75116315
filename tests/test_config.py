"""Options from `edgetally.toml`: where it is found, what may stand in it, what decides, and that the result says so."""

from __future__ import annotations

import json
import re
from pathlib import Path
from typing import Any

import pypdf
import pytest

from build import analyse_area
from command import run
from drawings import UNSET, draw_contours, drawing, square
from outlines import polygon

README = Path(__file__).parent.parent / "README.md"


@pytest.fixture
def bracket(tmp_path: Path) -> Path:
    """A drawing of two closed outlines, of which a layer has to be named, two folders down."""
    folder = tmp_path / "job" / "rev"
    folder.mkdir(parents=True)

    def draw(space: Any) -> None:
        square(space, 10)
        square(space, 3, at=(40, 0), layer="NOTES")

    return drawing(folder, draw, name="bracket.dxf")


def write(folder: Path, text: str, name: str = "edgetally.toml") -> Path:
    path = folder / name
    path.write_text(text)
    return path


def document(*words: object, stdin: bytes = b"") -> dict[str, Any]:
    code, out, err = run("tally", *words, "--json", stdin=stdin)
    assert (code, err) == (0, "")
    found: dict[str, Any] = json.loads(out)
    return found


def test_options_of_every_kind_with_dashes_or_underscores(bracket: Path) -> None:
    write(
        bracket.parent,
        'layer = "OUTLINE"\n--units = "mm"\nout_units = "cm"\n"join-gap" = "0.02mm"\nscale = 1\ndensity = 7850\n',
    )
    found = document(bracket)
    given = analyse_area(bracket, layer="OUTLINE", units="mm", out_units="cm", join_gap="0.02mm", scale=1, density=7850)
    properties = found["sections"][0]["properties"]
    for key, prop in given.sections[0].properties.items():
        assert properties[key]["value"] == prop.value
        assert properties[key]["unit"] == str(prop.unit)
    assert found["drawing"]["unit_source"] == "config"
    assert found["drawing"]["join_gap"] == 0.02
    assert found["drawing"]["options_from"] == {
        "file": "edgetally.toml",
        "options": ["layer", "units", "out-units", "join-gap", "scale", "density"],
    }


def test_the_nearest_file_decides_alone(bracket: Path, tmp_path: Path) -> None:
    write(tmp_path, 'layer = "OUTLINE"\nout-units = "m"\n')
    found = document(bracket)
    assert found["drawing"]["options_from"] == {"file": "../../edgetally.toml", "options": ["layer", "out-units"]}
    assert found["sections"][0]["properties"]["area"]["unit"] == "m^2"
    assert found["drawing"]["unit_source"] == "header"
    write(bracket.parent, 'layer = "OUTLINE"\nout-units = "cm"\n')
    assert document(bracket)["sections"][0]["properties"]["area"]["unit"] == "cm^2"


def test_the_folder_is_that_of_the_drawing_not_of_the_user(
    bracket: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    write(bracket.parent, 'layer = "OUTLINE"\nout-units = "cm"\n')
    elsewhere = tmp_path / "elsewhere"
    elsewhere.mkdir()
    write(elsewhere, 'out-units = "ft"\n')  # which would be refused
    monkeypatch.chdir(elsewhere)
    assert document("../job/rev/bracket.dxf")["sections"][0]["properties"]["area"]["unit"] == "cm^2"
    monkeypatch.chdir(bracket.parent)
    assert document("bracket.dxf")["sections"][0]["properties"]["area"]["unit"] == "cm^2"


def test_the_command_line_decides_over_the_table_and_the_table_over_the_top(bracket: Path) -> None:
    write(bracket.parent, 'layer = "OUTLINE"\nout-units = "m"\n[tally]\nout-units = "cm"\n[sheet]\nout-units = "in"\n')
    assert document(bracket)["sections"][0]["properties"]["area"]["unit"] == "cm^2"
    found = document(bracket, "--out-units", "mm", "--units", "mm")
    assert found["sections"][0]["properties"]["area"]["unit"] == "mm^2"
    assert found["drawing"]["unit_source"] == "option"
    assert found["drawing"]["options_from"]["options"] == ["layer"]
    # the same value as the default still decides when it is given
    write(bracket.parent, 'layer = "OUTLINE"\nscale = 3\n')
    assert document(bracket, "--scale", "1")["drawing"]["scale"] == 1


def test_another_file_or_none(bracket: Path, tmp_path: Path) -> None:
    write(bracket.parent, 'layer = "OUTLINE"\nout-units = "m"\n')
    other = write(tmp_path, 'layer = "OUTLINE"\nout-units = "in"\n', "mine.toml")
    found = document(bracket, "--config", other)
    assert found["sections"][0]["properties"]["area"]["unit"] == "in^2"
    assert found["drawing"]["options_from"]["file"] == str(other)
    found = document(bracket, "--no-config", "--layer", "OUTLINE")
    assert found["sections"][0]["properties"]["area"]["unit"] == "mm^2"
    assert "options_from" not in found["drawing"]
    code, _, err = run("tally", bracket, "--no-config", "--config", other)
    assert code == 2
    assert "--config and --no-config contradict" in err
    code, _, err = run("tally", bracket, "--config", tmp_path / "none.toml")
    assert code == 2
    assert "none.toml cannot be read" in err


def test_standard_input_has_no_folder(bracket: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    other = write(bracket.parent, 'layer = "OUTLINE"\nout-units = "m"\n')
    monkeypatch.chdir(bracket.parent)
    found = document("-", "--layer", "OUTLINE", stdin=bracket.read_bytes())
    assert found["sections"][0]["properties"]["area"]["unit"] == "mm^2"
    found = document("-", "--config", other, stdin=bracket.read_bytes())
    assert found["sections"][0]["properties"]["area"]["unit"] == "m^2"


def test_each_of_several_drawings_has_its_own_file(tmp_path: Path) -> None:
    for name, text in (("a", 'units = "mm"\n'), ("b", 'units = "in"\nout-units = "mm"\n'), ("c", "")):
        (tmp_path / name).mkdir()
        drawing(tmp_path / name, lambda space: square(space, 10), units=UNSET)
        write(tmp_path / name, text)
    paths = [tmp_path / name / "drawing.dxf" for name in "abc"]
    code, out, err = run("tally", *paths, "--layer", "OUTLINE", "--json")
    assert code == 2
    assert "c/drawing.dxf: the drawing does not say its unit" in err
    areas = [json.loads(line)["sections"][0]["properties"]["area"]["value"] for line in out.splitlines()]
    assert areas == [pytest.approx(100), pytest.approx(100 * 25.4**2)]


def test_what_holds_for_the_command_as_a_whole_must_agree(tmp_path: Path) -> None:
    for name in "ab":
        (tmp_path / name).mkdir()
        drawing(tmp_path / name, lambda space: square(space, 10))
    paths = [tmp_path / name / "drawing.dxf" for name in "ab"]
    write(tmp_path / "a", "[tally]\ncsv = true\n")
    code, _, err = run("tally", *paths, "--layer", "OUTLINE")
    assert code == 2
    assert "the drawings do not agree on csv" in err
    (tmp_path / "a" / "edgetally.toml").unlink()
    write(tmp_path, '[tally]\ncsv = true\n[sheet]\ntitle = "no option of tally"\n')
    code, out, _ = run("tally", *paths, "--layer", "OUTLINE")
    assert code == 0
    assert out.startswith("drawing,section,area")
    assert len(out.splitlines()) == 3
    code, out, _ = run("tally", *paths, "--layer", "OUTLINE", "--json")  # puts csv out of force
    assert [json.loads(line)["drawing"]["file"] for line in out.splitlines()] == ["drawing.dxf"] * 2


def test_options_that_contradict(tmp_path: Path) -> None:
    def two(space: Any) -> None:
        square(space, 10)
        square(space, 10, at=(30, 0))

    path = drawing(tmp_path, two)
    write(tmp_path, 'layer = "OUTLINE"\neach = true\npick = 2\n')
    code, _, err = run("tally", path)
    assert code == 2
    assert "--each and --pick contradict each other" in err
    write(tmp_path, 'layer = "OUTLINE"\neach = true\n')
    assert [s["name"] for s in document(path)["sections"]] == ["1", "2"]
    # the command line puts the file's out of force, as a table does with what stands at the top
    assert [s["name"] for s in document(path, "--pick", "2")["sections"]] == ["2"]
    write(tmp_path, 'layer = "OUTLINE"\neach = true\n[tally]\npick = 2\n')
    assert [s["name"] for s in document(path)["sections"]] == ["2"]


def test_a_composite_section_from_a_file(tmp_path: Path) -> None:
    def draw(space: Any) -> None:
        draw_contours(space, [polygon([(0, 0), (10, 0), (10, 10), (0, 10)])], "OUTLINE")
        draw_contours(space, [polygon([(10, 0), (15, 0), (15, 10), (10, 10)])], "NOTES")

    path = drawing(tmp_path, draw)
    write(tmp_path, 'material = ["OUTLINE=70GPa", "NOTES=210GPa"]\n')
    assert document(path)["composite"]["properties"]["axial_stiffness"]["value"] == pytest.approx(7e6 + 210e3 * 50)
    assert "composite" not in document(path, "--layer", "NOTES")
    write(tmp_path, 'layer = "NOTES"\nmaterial = "OUTLINE=70GPa"\n')
    code, _, err = run("tally", path)
    assert code == 2
    assert "--layer and --material contradict" in err


def test_the_table_and_the_sheet_say_which_file_set_what(bracket: Path, tmp_path: Path) -> None:
    write(bracket.parent, 'layer = "OUTLINE"\n[sheet]\ntitle = "From the file"\ndate = 2026-03-31\npage = "letter"\n')
    _, out, _ = run("tally", bracket)
    assert re.search(r"^options from +edgetally\.toml: layer$", out, re.MULTILINE)
    code, out, _ = run("sheet", bracket, "-o", tmp_path / "sheet.pdf")
    assert code == 0
    assert "edgetally.toml: layer, title, date, page" in out
    page = pypdf.PdfReader(tmp_path / "sheet.pdf").pages[0]
    text = re.sub(r"\s+", " ", page.extract_text())
    for words in ("From the file", "2026-03-31", "edgetally.toml: layer, title, date, page"):
        assert words in text
    assert float(page.mediabox.width) == pytest.approx(612)


def test_survey_and_markup_take_it_too(tmp_path: Path) -> None:
    path = drawing(tmp_path, lambda space: square(space, 10), units=UNSET)
    write(tmp_path, 'units = "cm"\nlayer = "OUTLINE"\n')
    _, out, _ = run("survey", path, "--json")
    found = json.loads(out)["drawing"]
    assert (found["unit"], found["unit_source"]) == ("cm", "config")
    _, out, _ = run("survey", path, "--json", "--units", "m")
    assert json.loads(out)["drawing"]["unit_source"] == "option"
    code, _, _ = run("markup", path, "-o", tmp_path / "marked.dxf")
    assert code == 0


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ('layr = "A"', "the option 'layr' is not known; the nearest known one is layer"),
        ('join_gaps = "1mm"', "the option 'join_gaps' is not known; the nearest known one is join-gap"),
        ('[sheet]\nlayr = "A"', "the option 'layr' in [sheet] is not known; the nearest known one is layer"),
        ('[tally]\ntitle = "A"', "the option 'title' in [tally] is not known"),
        ('[shet]\ntitle = "A"', "the table 'shet' is not known; the nearest known one is sheet"),
        ('[sheet.layer]\nname = "A"', "the table 'layer' in [sheet] is not known"),
        ('scale = "two"', "scale must be a number, not 'two'"),
        ("scale = true", "scale must be a number, not true"),
        ('each = "yes"', "each must be true or false, not 'yes'"),
        ("each = 1", "each must be true or false, not 1"),
        ("layer = true", "layer must be a text, or a list of them, not true"),
        ('layer = [["A"]]', "layer must be a text, or a list of them, not a list"),
        ('pick = ["1", "2"]', "pick must be a text, not a list"),
        ('units = "miles"', "units = 'miles': "),
        ("units = 5", "units = 5: "),
        ('[sheet]\npage = "a3"', "[sheet] page = 'a3': "),
        ('svg = "figure.svg"', "svg names a file of its own: give it on the command line"),
        ('config = "other.toml"', "the option 'config' is not known"),
        ("layer = A", "is not a file of options in TOML"),
        ('layer = "OUTLINE"\nlayer = "B"', "is not a file of options in TOML"),
    ],
)
def test_refusals_name_file_and_key(bracket: Path, text: str, message: str) -> None:
    path = write(bracket.parent, text + "\n")
    code, out, err = run("tally", bracket)
    assert (code, out) == (2, "")
    assert message in err
    assert str(path) in err


def test_bytes_that_are_no_text_are_refused(bracket: Path) -> None:
    (bracket.parent / "edgetally.toml").write_bytes(b'layer = "\xff"\n')
    code, _, err = run("tally", bracket)
    assert code == 2
    assert "is not a file of options in TOML" in err


def test_a_folder_of_that_name_is_no_file(bracket: Path) -> None:
    (bracket.parent / "edgetally.toml").mkdir()
    assert "options_from" not in document(bracket, "--layer", "OUTLINE")["drawing"]


def test_the_example_of_the_readme(bracket: Path, tmp_path: Path) -> None:
    example = re.search(r"```toml\n(.+?)```", README.read_text(), re.DOTALL)
    assert example is not None
    write(bracket.parent, example[1])
    area = document(bracket)["sections"][0]["properties"]["area"]
    assert (area["value"], area["unit"]) == (pytest.approx(1.0), "cm^2")
    code, out, _ = run("sheet", bracket, "-o", tmp_path / "sheet.pdf")
    assert code == 0
    assert "edgetally.toml: layer, out-units, prepared, page" in out


def test_two_drawings_that_are_compared_must_agree(tmp_path: Path) -> None:
    for name in "ab":
        (tmp_path / name).mkdir()
        drawing(tmp_path / name, lambda space: square(space, 10), units=UNSET)
    paths = [tmp_path / name / "drawing.dxf" for name in "ab"]
    write(tmp_path / "a", 'units = "mm"\n')
    code, _, err = run("compare", *paths)
    assert code == 2
    assert "the drawings do not agree on units" in err
    write(tmp_path / "b", 'units = "mm"\n')
    code, _, err = run("compare", *paths)
    assert code == 0
    assert err == "edgetally: options from edgetally.toml: units\n"
