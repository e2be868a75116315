"""Bad input: exit 2, one clear message with what to do, nothing written, no traceback."""

from __future__ import annotations

import os
import shutil
from pathlib import Path

import pytest

from command import run
from drawings import INCH, UNSET, drawing, square

SAMPLES = Path(__file__).parent.parent / "sample_drawings"
PNG = b"\x89PNG\r\n\x1a\n\x00\x00\x00\rIHDR"


def refused(*words: object, folder: Path | None = None) -> str:
    """Run a command that must be refused; return its message."""
    before = sorted(folder.iterdir()) if folder else []
    code, out, err = run(*words)
    assert code == 2
    assert out == ""
    assert err.startswith(("edgetally: ", "Usage: "))
    assert "Traceback" not in err
    assert "fault of the program" not in err
    if folder:
        assert sorted(folder.iterdir()) == before
    return err


def text_with(folder: Path, old: str, new: str) -> Path:
    """A copy of a small drawing in which one text is replaced."""
    path = drawing(folder, lambda space: space.add_line((0, 0), (123.5, 0), dxfattribs={"layer": "OUTLINE"}))
    text = path.read_text()
    assert text.count(old) == 1
    path.write_text(text.replace(old, new))
    return path


def test_missing_file(tmp_path: Path) -> None:
    assert "there is no such file" in refused("tally", tmp_path / "none.dxf")


def test_folder_instead_of_a_file(tmp_path: Path) -> None:
    assert "is a folder" in refused("tally", tmp_path)


@pytest.mark.parametrize(
    ("content", "word"),
    [
        (b"", "is empty"),
        (b"  \r\n ", "is empty"),
        (PNG, "a PNG picture"),
        (b"AC1032\x00\x00", "a DWG drawing: save it as DXF"),
        (b"%PDF-1.7\n", "a PDF document"),
        (b"PK\x03\x04rest", "a ZIP archive"),
        (b"hello, world\n", "is not a DXF drawing"),
        (b"0\nSECTION\n2\nENTITIES\n0\nENDSEC\n", "ends before it is complete"),
    ],
)
def test_file_that_is_no_drawing(tmp_path: Path, content: bytes, word: str) -> None:
    path = tmp_path / "picture.dxf"
    path.write_bytes(content)
    assert word in refused("tally", path)


def test_drawing_cut_short_anywhere(tmp_path: Path) -> None:
    whole = (SAMPLES / "bracket.dxf").read_bytes()
    path = tmp_path / "cut.dxf"
    for share in (0.3, 0.6, 0.9, 0.99):
        path.write_bytes(whole[: int(share * len(whole))])
        assert "ends before it is complete" in refused("tally", path)


def test_binary_drawing_cut_short(tmp_path: Path) -> None:
    whole = (SAMPLES / "slotted-tube.dxf").read_bytes()
    assert whole.startswith(b"AutoCAD Binary DXF")
    path = tmp_path / "cut.dxf"
    path.write_bytes(whole[: len(whole) // 2])
    assert "ends before it is complete" in refused("tally", path)


def test_layer_that_is_not_there_lists_the_nearest_first() -> None:
    message = refused("tally", SAMPLES / "bracket.dxf", "--layer", "OUTLIN")
    assert "no layer OUTLIN" in message
    listed = message.split("nearest name first: ")[1]
    assert listed.startswith("OUTLINE")
    assert "NOTES" in listed


def test_empty_layer(tmp_path: Path) -> None:
    path = drawing(tmp_path, square)
    assert "nothing is drawn on layer NOTES" in refused("tally", path, "--layer", "NOTES")


def test_layer_off_or_frozen_is_said(tmp_path: Path) -> None:
    for state in ("off", "freeze"):

        def draw(space: object, state: str = state) -> None:
            square(space)
            getattr(space.doc.layers.get("OUTLINE"), state)()  # type: ignore[attr-defined]

        path = drawing(tmp_path, draw)
        message = refused("tally", path, "--layer", "OUTLINE")
        assert f"layer OUTLINE is {'frozen' if state == 'freeze' else 'off'}" in message


def test_section_in_paper_space_only(tmp_path: Path) -> None:
    path = drawing(tmp_path, lambda space: square(space.doc.layout("Layout1")))
    message = refused("tally", path, "--layer", "OUTLINE")
    assert "the layout Layout1 holds 1 entities" in message
    assert "model space" in message


def test_no_units_shows_the_extents_in_each(tmp_path: Path) -> None:
    path = drawing(tmp_path, lambda space: square(space, 25.4), units=UNSET)
    message = refused("tally", path, "--layer", "OUTLINE")
    for unit in ("mm", "cm", "m", "in", "ft"):
        assert f"25.4 x 25.4 {unit}" in message
    assert "--units" in message


def test_unit_that_no_section_is_drawn_in(tmp_path: Path) -> None:
    path = drawing(tmp_path, square, units=7)
    assert "the header names kilometres" in refused("tally", path, "--layer", "OUTLINE")


@pytest.mark.parametrize("bad", ["nan", "1e400", "-inf"])
def test_coordinate_that_is_no_number(tmp_path: Path, bad: str) -> None:
    path = text_with(tmp_path, "123.5", bad)
    message = refused("tally", path, "--layer", "OUTLINE")
    assert "LINE #" in message
    assert "places nothing" in message


def test_decimal_comma(tmp_path: Path) -> None:
    path = text_with(tmp_path, "123.5", "123,5")
    assert "damaged" in refused("tally", path, "--layer", "OUTLINE")


@pytest.mark.parametrize("radius", [0.0, -2.0])
@pytest.mark.parametrize("kind", ["CIRCLE", "ARC"])
def test_radius_not_positive(tmp_path: Path, kind: str, radius: float) -> None:
    def draw(space: object) -> None:
        square(space)
        attribs = {"layer": "OUTLINE", "radius": radius, "start_angle": 0.0, "end_angle": 90.0}
        if kind == "CIRCLE":
            attribs = {"layer": "OUTLINE", "radius": radius}
        space.new_entity(kind, attribs)  # type: ignore[attr-defined]

    message = refused("tally", drawing(tmp_path, draw), "--layer", "OUTLINE")
    assert f"{kind} #" in message
    assert f"the radius {radius:g}" in message


def test_tilted_entity_is_named(tmp_path: Path) -> None:
    def draw(space: object) -> None:
        square(space)
        space.add_circle((5, 5), 1, dxfattribs={"layer": "OUTLINE", "extrusion": (0, 0.5, 0.8)})  # type: ignore[attr-defined]

    message = refused("tally", drawing(tmp_path, draw), "--layer", "OUTLINE")
    assert "CIRCLE #" in message
    assert "outside the plane" in message


def test_open_outline_names_the_skip_that_may_be_the_cause(tmp_path: Path) -> None:
    def draw(space: object) -> None:
        space.add_lwpolyline([(0, 0), (10, 0), (10, 10)], dxfattribs={"layer": "OUTLINE"})  # type: ignore[attr-defined]
        space.add_ray((0, 0), (1, 0), dxfattribs={"layer": "OUTLINE"})  # type: ignore[attr-defined]

    message = refused("tally", drawing(tmp_path, draw), "--layer", "OUTLINE")
    assert "outline is open" in message
    assert "RAY #" in message


@pytest.mark.parametrize(
    ("options", "word"),
    [
        (("--scale", "nan"), "scale"),
        (("--scale", "0"), "scale"),
        (("--scale", "-2"), "scale"),
        (("--join-gap", "0.05"), "unit"),
        (("--join-gap", "1mm"), "0.15 mm"),
        (("--join-gap", "-1mm"), "not negative"),
        (("--density", "wood"), "density"),
        (("--density", "inf"), "density"),
        (("--each", "--together"), "contradict"),
        (("--each", "--pick", "1"), "contradict"),
        (("--json", "--csv"), "contradict"),
        (("--units", "yard"), "yard"),
    ],
)
def test_options_that_cannot_be_carried_out(options: tuple[str, ...], word: str) -> None:
    assert word in refused("tally", SAMPLES / "bracket.dxf", "--layer", "OUTLINE", *options)


def test_sheet_refuses_its_own_drawing_and_leaves_it_alone(tmp_path: Path) -> None:
    path = tmp_path / "bracket.dxf"
    shutil.copy(SAMPLES / "bracket.dxf", path)
    before = path.read_bytes()
    assert "never overwritten" in refused("sheet", path, "-o", path, folder=tmp_path)
    link = tmp_path / "link.pdf"
    link.symlink_to(path)
    assert "never overwritten" in refused("sheet", path, "-o", link, folder=tmp_path)
    assert path.read_bytes() == before


def test_sheet_into_a_folder_that_is_not_there(tmp_path: Path) -> None:
    target = tmp_path / "none" / "sheet.pdf"
    assert "does not exist" in refused("sheet", SAMPLES / "bracket.dxf", "-o", target, folder=tmp_path)


def test_sheet_onto_a_folder(tmp_path: Path) -> None:
    assert "is a folder" in refused("sheet", SAMPLES / "bracket.dxf", "-o", tmp_path, folder=tmp_path)


@pytest.mark.skipif(os.name != "posix" or os.geteuid() == 0, reason="the superuser may write anywhere")
def test_sheet_into_a_folder_without_permission(tmp_path: Path) -> None:
    tmp_path.chmod(0o500)
    assert "permission" in refused("sheet", SAMPLES / "bracket.dxf", "-o", tmp_path / "sheet.pdf", folder=tmp_path)


def test_disk_that_takes_no_more(tmp_path: Path) -> None:
    if not Path("/dev/full").exists():
        pytest.skip("this system has no device that is always full")
    from edgetally.errors import OutputError
    from edgetally.output import files

    real = files.os.fsync
    files.os.fsync = lambda _: (_ for _ in ()).throw(OSError(28, "No space left on device"))  # type: ignore[assignment]
    try:
        with pytest.raises(OutputError, match="No space left"):
            files.write_whole(tmp_path / "sheet.pdf", b"data")
    finally:
        files.os.fsync = real
    assert list(tmp_path.iterdir()) == []


def test_sheet_of_a_refused_drawing_writes_nothing(tmp_path: Path) -> None:
    path = SAMPLES / "two-clamps.dxf"
    message = refused("sheet", path, "--layer", "OUTLINE", "-o", tmp_path / "sheet.pdf", folder=tmp_path)
    assert "2 separate outer boundaries" in message


def test_a_date_that_is_none(tmp_path: Path) -> None:
    message = refused(
        "sheet", SAMPLES / "bracket.dxf", "-o", tmp_path / "s.pdf", "--date", "31.12.2026", folder=tmp_path
    )
    assert "2026-03-31" in message


def test_one_bad_drawing_of_several_does_not_stop_the_others(tmp_path: Path) -> None:
    good = drawing(tmp_path, square, units=INCH)
    code, out, err = run("tally", tmp_path / "none.dxf", good, "--json")
    assert code == 2
    assert out.count('"format": "edgetally.tally/1"') == 1
    assert "none.dxf" in err


def test_unknown_command_and_missing_argument() -> None:
    assert "No such command" in refused("weigh", "a.dxf")
    assert "Missing" in refused("sheet", SAMPLES / "bracket.dxf")
