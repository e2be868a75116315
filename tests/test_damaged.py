"""Files in any state: read with every repair listed, or refused with the true reason; never silently less."""

from __future__ import annotations

import os
from collections import Counter
from collections.abc import Callable
from functools import cache
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any

import ezdxf
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from command import run
from drawings import drawing
from edgetally import DrawingError, analyse
from edgetally.drawing.loading import Loaded, load
from edgetally.drawing.structure import read_structure
from edgetally.drawing.tags import BINARY, read_tags
from edgetally.errors import EdgetallyError
from edgetally.findings import Finding

OUTLINE = {"layer": "OUTLINE"}
REAL = os.environ.get("EDGETALLY_DRAWINGS")
PATHS = sorted(Path(REAL).glob("*/*.dxf")) if REAL else []


def plate(space: Any) -> None:
    """A plate with a rounded corner, a round hole, a hole from a block, and a hidden circle."""
    points = [(0, 0, 0), (40, 0, 0.3), (40, 30, 0), (0, 30, 0)]
    if space.doc.dxfversion == "AC1009":
        space.add_polyline2d(points, format="xyb", dxfattribs=OUTLINE).close(True)
    else:
        space.add_lwpolyline(points, format="xyb", close=True, dxfattribs=OUTLINE)
        space.add_open_spline([(5, 20), (9, 20), (9, 25), (5, 25)], dxfattribs=OUTLINE)
        space.add_line((5, 25), (5, 20), dxfattribs=OUTLINE)
    space.add_circle((12, 12), 5, dxfattribs=OUTLINE)
    space.doc.blocks.new("HOLE").add_circle((0, 0), 1)
    space.add_blockref("HOLE", (30, 15), dxfattribs=OUTLINE)
    space.doc.layers.add("HIDDEN").off()
    space.add_circle((20, 25), 1, dxfattribs={"layer": "HIDDEN"})
    space.add_line((0, 15), (60, 15), dxfattribs=OUTLINE | {"linetype": "CENTER"})


@cache
def whole(version: str) -> bytes:
    with TemporaryDirectory() as folder:
        return drawing(Path(folder), plate, version=version).read_bytes()


def written(folder: Path, content: bytes | str) -> Path:
    path = folder / "damaged.dxf"
    path.write_bytes(content.encode() if isinstance(content, str) else content)
    return path


def loaded(folder: Path, content: bytes | str, *words: str, severity: str = "warning") -> Loaded:
    """Load content that must be read with one repair of this severity, whose message holds the words."""
    found = load(written(folder, content))
    repairs = [f for f in found.findings if f.code == "repaired-file"]
    assert [f.severity for f in repairs] == [severity], [f.message for f in repairs]
    for word in words:
        assert word in repairs[0].message
    return found


def refused(folder: Path, content: bytes | str, *words: str, code: str | None = None) -> None:
    """Check that the command refuses content, with a message that holds the words."""
    path = written(folder, content)
    status, out, err = run("tally", path, "--layer", "OUTLINE", "--units", "mm")
    assert (status, out) == (2, "")
    assert err.startswith("edgetally: ")
    assert "fault of the program" not in err
    for word in words:
        assert word in err
    if code is not None:
        with pytest.raises(DrawingError) as caught:
            load(path)
        assert [f.code for f in caught.value.findings] == [code]


def entities(*lines: str) -> str:
    """A file of nothing but a section ENTITIES, as many small programs write it."""
    return "\n".join(["0", "SECTION", "2", "ENTITIES", *lines, "0", "ENDSEC", "0", "EOF", ""])


def line(x1: str = "0", y1: str = "0", x2: str = "9.5", y2: str = "0") -> list[str]:
    return ["0", "LINE", "5", "2F", "8", "OUTLINE", "10", x1, "20", y1, "11", x2, "21", y2]


# -- the end of the file -----------------------------------------------------------------------------------------------


@pytest.mark.parametrize("version", ["R12", "R2010"])
@pytest.mark.parametrize("binary", [False, True])
def test_cut_anywhere_is_refused_and_a_missing_end_mark_is_listed(tmp_path: Path, version: str, binary: bool) -> None:
    data = whole(version)
    if binary:
        document = ezdxf.readfile(written(tmp_path, data))
        document.saveas(tmp_path / "binary.dxf", fmt="bin")
        data = (tmp_path / "binary.dxf").read_bytes()
    mark = data.rindex(b"EOF")
    for cut in (*range(len(BINARY) + 60, mark - 20, len(data) // 25), data.rindex(b"ENDSEC") + 3):
        refused(tmp_path, data[:cut], "ends before it is complete", code="truncated-file")
    for cut in (mark, mark + 1, mark + 2):
        loaded(tmp_path, data[:cut], "the end mark of the file (EOF) is missing")
    assert load(written(tmp_path, data[: mark + 3] + (b"\x00" if binary else b""))).findings == ()


def test_cut_between_two_sections(tmp_path: Path) -> None:
    data = whole("R2010")
    refused(tmp_path, data[: data.rindex(b"  0\nSECTION")], "OBJECTS, which comes last", code="truncated-file")


@pytest.mark.parametrize("tail", [b"\x1a", b"\r\n \n", b"\x00\x00"])
def test_padding_after_the_end_is_no_matter(tmp_path: Path, tail: bytes) -> None:
    assert load(written(tmp_path, whole("R12") + tail)).findings == ()


def test_junk_after_the_end(tmp_path: Path) -> None:
    loaded(tmp_path, whole("R2010") + b"junk\n0\nEOF\n", "10 bytes after the end mark", severity="note")
    loaded(tmp_path, whole("R12") * 2, "there are more sections")


def test_section_not_closed(tmp_path: Path) -> None:
    text = entities(*line())
    loaded(tmp_path, text.replace("0\nENDSEC\n", ""), "the section ENTITIES, begun at line 2, is not closed")
    twice = text.replace("0\nENDSEC\n0\nEOF\n", "") + text
    refused(tmp_path, twice, "is not closed before the next one at line 20", code="truncated-file")


# -- structure ---------------------------------------------------------------------------------------------------------


def test_sections_of_one_name_are_all_read(tmp_path: Path) -> None:
    part = "\n".join(["0", "SECTION", "2", "ENTITIES", *line(), "0", "ENDSEC", ""])
    found = loaded(tmp_path, (part * 3 + "0\nEOF\n").replace("5\n2F\n", ""), "3 sections ENTITIES")
    assert len(found.document.modelspace()) == 3


def test_end_without_a_section_and_tags_outside(tmp_path: Path) -> None:
    found = load(written(tmp_path, entities(*line()).replace("0\nEOF", "9\n$EXTMIN\n10\n0\n20\n0\n0\nENDSEC\n0\nEOF")))
    assert [f.message.split(" that")[0] for f in found.findings] == ["3 tags", "1 ends of sections (ENDSEC)"]
    refused(tmp_path, "0\nCIRCLE\n" + entities(*line()), "CIRCLE at line 2 stands outside all sections")


def test_unknown_section(tmp_path: Path) -> None:
    text = entities(*line())
    loaded(tmp_path, text.replace("0\nEOF", "0\nSECTION\n2\nMYSTERY\n0\nLINE\n0\nENDSEC\n0\nEOF"), "MYSTERY", "1 rec")


@pytest.mark.parametrize("kind", ["ENDBLK", "SEQEND"])
def test_missing_end_of_block_or_polyline(tmp_path: Path, kind: str) -> None:
    def draw(space: Any) -> None:
        plate(space)
        space.doc.blocks.new("OTHER").add_circle((0, 0), 1)

    text = drawing(tmp_path, draw, version="R12").read_text()
    at = text.index(f"  0\n{kind}\n", text.index("HOLE") if kind == "ENDBLK" else 0)
    shorter = text[:at] + text[text.index("  0\n", at + 4) :]
    before = analyse(tmp_path / "drawing.dxf", layer="OUTLINE", units="mm").sections[0].properties["area"].value
    loaded(tmp_path, shorter, f"({kind}) were missing")
    after = analyse(tmp_path / "damaged.dxf", layer="OUTLINE", units="mm").sections[0].properties["area"].value
    assert after == before


def test_block_defined_twice(tmp_path: Path) -> None:
    text = whole("R12").decode()
    at = text.index("ENDSEC", text.index("HOLE")) - 4
    start = text.rindex("  0\nBLOCK\n", 0, at)
    refused(tmp_path, text[:at] + text[start:at] + text[at:], "the block HOLE is defined twice")


def test_vertex_without_polyline(tmp_path: Path) -> None:
    refused(tmp_path, entities("0", "VERTEX", "8", "0", "10", "1", "20", "1"), "VERTEX at line 6 belongs to no")


def test_line_too_few_or_too_many(tmp_path: Path) -> None:
    text = whole("R2010").decode()
    at = text.index("AcDbCircle")
    refused(tmp_path, text[:at] + text[text.index("\n", at) + 1 :], "where a group code", "missing or too many")
    refused(tmp_path, text[:at] + "\n" + text[at:], "where a group code")


def test_table_without_its_name_or_its_end(tmp_path: Path) -> None:
    text = whole("R12").decode()
    found = loaded(tmp_path, text.replace("  0\nENDTAB\n", "", 3), "do not nest")
    assert not found.document.layers.get("HIDDEN").is_on()
    at = text.index("TABLE\n  2\nLAYER\n")
    found = load(written(tmp_path, text[:at] + text[at:].replace("LAYER", "LAIER", 1)))
    assert "1 x TABLE LAIER" in found.findings[1].message
    assert not found.document.layers.get("HIDDEN").is_on()


def test_layer_without_a_name(tmp_path: Path) -> None:
    loaded(tmp_path, whole("R12").decode().replace("  2\nNOTES\n", "  2\n\n", 1), "1 x LAYER without a name")


def test_name_that_no_table_holds(tmp_path: Path) -> None:
    text = whole("R2010").decode()
    loaded(tmp_path, text.replace("  6\nCENTER\n", "  6\nCNTR\n"), "line types", "CNTR")
    at = text.index("AcDbEntity", text.index("ENTITIES"))
    loaded(tmp_path, text[:at] + text[at:].replace("OUTLINE", "OUTLYNE", 1), "layers", "OUTLYNE")


def test_table_that_a_program_does_not_fill(tmp_path: Path) -> None:
    table = "0\nSECTION\n2\nTABLES\n0\nTABLE\n2\nLAYER\n0\nLAYER\n2\n0\n70\n0\n0\nENDTAB\n0\nENDSEC\n"
    assert load(written(tmp_path, table + entities(*line()))).findings == ()


# -- single entities ---------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("value", "why"),
    [
        ("1,75", "decimal comma"),
        ("nan", "places nothing"),
        ("1e400", "places nothing"),
        ("-inf", "places nothing"),
        ("1.5D2", "a number must stand"),
        ("1_0", "a number must stand"),
        ("1.#QNAN", "a number must stand"),
        ("", "a number must stand"),
    ],
)
def test_number_that_is_none_is_refused_with_its_place(tmp_path: Path, value: str, why: str) -> None:
    text = entities(*line(x2=value))
    refused(tmp_path, text, "line 16 gives LINE #2F on layer OUTLINE the value", value, why, code="entity-unreadable")
    commented = text.replace("0\nLINE", "999\na comment\n0\nLINE")
    refused(tmp_path, "\n\n" + commented, "line 20 gives LINE #2F")


def test_whole_number_that_is_none(tmp_path: Path) -> None:
    refused(tmp_path, entities(*line(), "62", "1.5"), "(group code 62), where a whole number must stand")
    assert load(written(tmp_path, entities(*line(), "62", "7.0"))).findings == ()


def test_number_that_nothing_depends_on(tmp_path: Path) -> None:
    text = whole("R12").decode()
    at = text.index("$LTSCALE")
    found = loaded(tmp_path, text[:at] + text[at:].replace("1.0", "1,0", 1), "1 values that no outline depends on")
    assert found.document.header["$LTSCALE"] == 0


def test_binary_number_that_is_none(tmp_path: Path) -> None:
    path = drawing(tmp_path, lambda space: space.add_line((0, 0), (123.5, 0), dxfattribs=OUTLINE))
    ezdxf.readfile(path).saveas(path, fmt="bin")
    import struct

    data = path.read_bytes()
    assert data.count(struct.pack("<d", 123.5)) == 1
    refused(
        tmp_path, data.replace(struct.pack("<d", 123.5), struct.pack("<d", float("nan"))), "byte ", "places nothing"
    )


def test_value_that_an_entity_cannot_do_without(tmp_path: Path) -> None:
    circle = ["0", "CIRCLE", "5", "A", "8", "OUTLINE", "10", "0", "20", "0"]
    refused(tmp_path, entities(*circle), "CIRCLE #A on layer OUTLINE at line 6 has no value of its radius")
    refused(tmp_path, entities(*line()[:-4]), "LINE #2F", "has no value of its end (group code 11)")
    refused(tmp_path, entities(*line(), *line()[6:]), "LINE #2F", "has more than one value of its start")
    refused(tmp_path, entities(*line()[:-2]), "LINE #2F", "without its y (group code 21)")


def test_coordinates_in_another_order(tmp_path: Path) -> None:
    """As R2.6 wrote them, and as the DXF reference allows: x1, x2, y1, y2."""
    text = entities("0", "LINE", "8", "0", "10", "1", "11", "3", "20", "2", "21", "4", "30", "5", "31", "5")
    found = loaded(tmp_path, text, "1 x LINE", severity="note")
    (entity,) = found.document.modelspace()
    assert (entity.dxf.start, entity.dxf.end) == ((1, 2, 5), (3, 4, 5))


def test_handles_used_twice_or_none(tmp_path: Path) -> None:
    found = loaded(tmp_path, entities(*line(), *line()), "1 records whose handle is used", "LINE #2F is now #30")
    assert [e.dxf.handle for e in found.document.modelspace()] == ["2F", "30"]
    for bad in ("", "0", "XY"):
        text = entities(*line(), *line()).replace("2F", bad, 1)
        found = loaded(tmp_path, text, "no hexadecimal number", "is now #30")
        assert [e.dxf.handle for e in found.document.modelspace()] == ["30", "2F"]


def test_subclass_markers_missing(tmp_path: Path) -> None:
    text = whole("R2010").decode()
    area = analyse(written(tmp_path, text), layer="OUTLINE").sections[0].properties["area"].value
    for mark in ("100\nAcDbPolyline\n", "100\nAcDbSpline\n"):
        loaded(tmp_path, text.replace(mark, ""), "subclass markers", "1 x ")
        assert analyse(tmp_path / "damaged.dxf", layer="OUTLINE").sections[0].properties["area"].value == area
    start = text.index("  2\nENTITIES\n")
    end = text.index("ENDSEC", start)
    bare = "\n".join(x for x in _without_markers(text[start:end].split("\n")))
    loaded(tmp_path, text[:start] + bare + text[end:], "1 x LWPOLYLINE, 1 x SPLINE")
    assert analyse(tmp_path / "damaged.dxf", layer="OUTLINE").sections[0].properties["area"].value == area


def _without_markers(lines: list[str]) -> list[str]:
    pairs = zip(lines[0::2], lines[1::2], strict=False)
    return [x for code, value in pairs if code.strip() != "100" for x in (code, value)] + lines[len(lines) // 2 * 2 :]


@pytest.mark.parametrize("version", ["AC1006", "AC1009", "", "junk"])
def test_modern_entities_under_an_old_version(tmp_path: Path, version: str) -> None:
    """The library would lose the closed flag of a polyline whose file says R12, or nothing."""
    polyline = ["0", "LWPOLYLINE", "5", "A", "100", "AcDbEntity", "8", "OUTLINE", "100", "AcDbPolyline", "90", "3"]
    points = [x for p in ("00", "30", "03") for x in ("10", p[0], "20", p[1])]
    header = f"0\nSECTION\n2\nHEADER\n9\n$ACADVER\n1\n{version}\n0\nENDSEC\n" if version else ""
    content = header + entities(*polyline, "70", "1", *points)
    found = loaded(tmp_path, content, "it was read as")
    assert found.document.modelspace()[0].closed
    assert found.version == version
    assert analyse(written(tmp_path, content), layer="OUTLINE", units="mm").sections[0].properties["area"].value == 4.5


def test_count_that_is_not_true(tmp_path: Path) -> None:
    text = whole("R2010").decode()
    loaded(tmp_path, text.replace("100\nAcDbPolyline\n 90\n4\n", "100\nAcDbPolyline\n 90\n5\n"), "4 vertices", "has 5")


def test_kind_that_is_not_known_is_listed_as_left_out(tmp_path: Path) -> None:
    text = whole("R2010").decode()
    content = text.replace("  0\nCIRCLE\n", "  0\nWIGGLE\n").encode()
    found = analyse(written(tmp_path, content), layer="OUTLINE")
    assert any(f.severity == "warning" and "WIGGLE" in f.message for f in found.findings)


@pytest.mark.parametrize("kind", ["LAYER", "ENDBLK", "DICTIONARY"])
def test_kind_that_is_no_entity(tmp_path: Path, kind: str) -> None:
    refused(tmp_path, entities(*line(), "0", kind, "2", "A"), f"{kind} at line 20 stands among the entities")


def test_kind_in_small_letters(tmp_path: Path) -> None:
    found = loaded(tmp_path, entities(*line()).replace("LINE\n5", "Line\n5"), "1 x LINE", severity="note")
    assert found.document.modelspace()[0].dxftype() == "LINE"


# -- text --------------------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    "change",
    [
        lambda data: b"\xef\xbb\xbf" + data,
        lambda data: data.replace(b"\n", b"\r\n"),
        lambda data: data.replace(b"\n", b"\r"),
        lambda data: b"\r\n\n  \n" + data,
        lambda data: b"999\nmade by hand\n" + data.replace(b"  0\nENDSEC", b"999\nend\n  0\nENDSEC"),
    ],
)
@pytest.mark.parametrize("version", ["R12", "R2010"])
def test_other_lines_read_the_same(tmp_path: Path, version: str, change: Callable[[bytes], bytes]) -> None:
    found = load(written(tmp_path, change(whole(version))))
    assert found.findings == ()
    assert len(found.document.modelspace()) == len(load(written(tmp_path, whole(version))).document.modelspace())


def test_lines_that_no_program_should_write(tmp_path: Path) -> None:
    loaded(tmp_path, whole("R12").replace(b"\n", b"\r\r\n"), "doubled", severity="note")
    loaded(tmp_path, whole("R12").decode().encode("utf-16"), "UTF-16", severity="note")


NAME = "Höhe"


@pytest.mark.parametrize(
    ("version", "page", "encoding", "severity"),
    [
        ("AC1009", "ANSI_1252", "cp1252", None),
        ("AC1009", "", "cp1252", None),
        ("AC1009", "dos850", "cp850", None),
        ("AC1015", "ANSI_1250", "cp1250", None),
        ("AC1015", "ANSI_1252", "utf-8", "note"),
        ("AC1009", "", "utf-8", "note"),
        ("AC1027", "ANSI_1252", "utf-8", None),
        ("AC1027", "ANSI_1252", "cp1252", "warning"),
    ],
)
def test_layer_name_in_every_encoding(
    tmp_path: Path, version: str, page: str, encoding: str, severity: str | None
) -> None:
    code_page = f"9\n$DWGCODEPAGE\n3\n{page}\n" if page else ""
    header = f"0\nSECTION\n2\nHEADER\n9\n$ACADVER\n1\n{version}\n{code_page}0\nENDSEC\n"
    found = load(written(tmp_path, (header + entities(*line()).replace("OUTLINE", NAME)).encode(encoding)))
    assert found.document.modelspace()[0].dxf.layer == NAME
    assert [f.severity for f in found.findings] == ([severity] if severity else [])


def test_text_that_fits_no_encoding(tmp_path: Path) -> None:
    content = entities(*line()).encode().replace(b"OUTLINE", b"H\x81he")
    found = loaded(tmp_path, content, "1 characters could not be read")
    assert found.document.modelspace()[0].dxf.layer == "H\ufffdhe"


@pytest.mark.parametrize(
    ("written_as", "name"),
    [(r"H\U+00F6he", NAME), (r"\U+D83D\U+DE00", "\U0001f600"), (r"\M+1889F", "亜"), (r"a\U+000Ab", r"a\U+000Ab")],
)
def test_escapes(tmp_path: Path, written_as: str, name: str) -> None:
    found = load(written(tmp_path, entities(*line()).replace("OUTLINE", written_as)))
    assert found.document.modelspace()[0].dxf.layer == name


# -- hostile files -----------------------------------------------------------------------------------------------------


def doubling(space: Any) -> None:
    document = space.doc
    document.blocks.new("B0").add_circle((0, 0), 1, dxfattribs=OUTLINE)
    for level in range(1, 31):
        block = document.blocks.new(f"B{level}")
        block.add_blockref(f"B{level - 1}", (0, 0))
        block.add_blockref(f"B{level - 1}", (1, 0))
    space.add_blockref("B30", (0, 0), dxfattribs=OUTLINE)


def cycle(space: Any) -> None:
    for a, b in ("AB", "BA"):
        space.doc.blocks.new(a).add_blockref(b, (0, 0))
    space.add_blockref("A", (0, 0), dxfattribs=OUTLINE)


def array(space: Any) -> None:
    space.doc.blocks.new("A").add_circle((0, 0), 1, dxfattribs=OUTLINE)
    attribs = OUTLINE | {"row_count": 32767, "column_count": 32767}
    space.add_blockref("A", (0, 0), dxfattribs=attribs)


@pytest.mark.parametrize(("draw", "word"), [(doubling, "more than"), (cycle, "contains itself"), (array, "more than")])
def test_blocks_that_would_never_end(tmp_path: Path, draw: Callable[[Any], None], word: str) -> None:
    data = drawing(tmp_path, draw).read_bytes()
    refused(tmp_path, data, word)
    refused(tmp_path, data[: data.rindex(b"  0\nEOF")], word)  # repaired first


@pytest.mark.parametrize("text", ["0\n" * 3000 + "SECTION", "SECTION\n" * 3000, "0\nSECTION\n" * 3000, "9" * 9000])
def test_nonsense(tmp_path: Path, text: str) -> None:
    refused(tmp_path, text)
    refused(tmp_path, entities("0", "CIRCLE", "40", "9" * 9000, "10", text.replace("\n", "")[:5000], "20", "0"))


def test_binary_file_sent_as_text(tmp_path: Path) -> None:
    refused(tmp_path, BINARY.replace(b"\r\n", b"\n") + b"\x00SECTION\x00", "sent as a text")


# -- laws --------------------------------------------------------------------------------------------------------------

KEYS = ("area", "second_moment_x", "second_moment_y", "centroid_x")
JUNK = st.sampled_from(["junk", "", "?", "12,5", "nan", "1e400", "-", "x" * 300, "\u00f6", "0x1F", "LINE ", "{"])
LAW = settings(max_examples=40, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])


def measured(path: Path) -> tuple[tuple[float, ...], list[Finding]]:
    found = analyse(path, layer="OUTLINE", units="mm")
    assert len(found.sections) == 1
    values = (found.sections[0].properties[key].value for key in KEYS)
    return tuple(v for v in values if v is not None), list(found.all_findings)


@cache
def expected(version: str) -> tuple[float, ...]:
    with TemporaryDirectory() as folder:
        return measured(written(Path(folder), whole(version)))[0]


def check_law(folder: Path, version: str, content: bytes) -> None:
    """The same numbers; or others, with a warning that says why; or a refusal. Nothing else."""
    path = written(folder, content)
    try:
        values, findings = measured(path)
    except EdgetallyError:
        return
    if values != pytest.approx(expected(version), rel=1e-9):
        findings += load(path).findings
        repairs = [f for f in findings if f.code in ("repaired-file", "entity-skipped") and f.severity == "warning"]
        assert [f for f in repairs if "CENTER" not in f.message], "other numbers, and no word about it"


@LAW
@given(version=st.sampled_from(["R12", "R2010"]), share=st.floats(0, 1))
def test_law_of_a_cut(tmp_path: Path, version: str, share: float) -> None:
    data = whole(version)
    check_law(tmp_path, version, data[: round(share * len(data))])


@LAW
@given(version=st.sampled_from(["R12", "R2010"]), share=st.floats(0, 1, exclude_max=True), count=st.integers(1, 3))
def test_law_of_missing_lines(tmp_path: Path, version: str, share: float, count: int) -> None:
    lines = whole(version).split(b"\n")
    at = int(share * len(lines))
    if count != 2:  # two missing lines can be a tag that was optional
        check_law(tmp_path, version, b"\n".join(lines[:at] + lines[at + count :]))


@LAW
@given(version=st.sampled_from(["R12", "R2010"]), share=st.floats(0, 1, exclude_max=True), junk=JUNK)
def test_law_of_junk_lines(tmp_path: Path, version: str, share: float, junk: str) -> None:
    lines = whole(version).split(b"\n")
    # half of the lines of a drawing are its header: those of tables, blocks and entities are tried as often
    lowest = lines.index(b"BLOCKS") if junk != "junk" else 0
    at = lowest + int(share * (len(lines) - lowest))
    check_law(tmp_path, version, b"\n".join([*lines[:at], junk.encode(), *lines[at + 1 :]]))


# -- drawings by others ------------------------------------------------------------------------------------------------


@pytest.mark.skipif(not PATHS, reason="EDGETALLY_DRAWINGS does not name a folder of drawings")
def test_real_drawings_are_read_whole() -> None:
    """Every entity of the raw tags is in the document, kind by kind; nothing is refused, and repairs are listed."""
    repaired = set()
    for path in PATHS:
        found = load(path)
        assert all(f.code == "repaired-file" for f in found.findings)
        if found.findings:
            repaired.add(path.stem)
        raw = read_structure(read_tags(path.read_bytes(), path.name)).counts()
        for block, kinds in raw.items():
            if block:
                space = list(found.document.blocks.get(block) or ())
            else:
                spaces = (found.document.modelspace(), found.document.layouts.active_layout())
                space = [e for s in spaces for e in s if not (s is spaces[1] and e.dxftype() == "VIEWPORT")]
            have = Counter(e.dxftype() for e in space)
            for kind in kinds.keys() - {"VERTEX", "ATTRIB", "VIEWPORT"}:
                assert have[kind] == kinds[kind], (path.name, block, kind)
    assert repaired == {
        "broken-structure", "duplicate-handles", "empty-handles", "no-subclass-markers", "r2.6-lines",
        "trash-after-eof",
    }  # fmt: skip
