"""Values lettered on a drawing: what is understood, what is left alone, and what comes of the comparison."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from build import analyse_area as analyse
from build import analyse_once
from drawings import INCH, MM, drawing, square
from edgetally.curves import Source
from edgetally.drawing.lettering import Lettering
from edgetally.findings import Finding
from edgetally.lettered.comparing import lettered_findings
from edgetally.lettered.numbers import readings
from edgetally.lettered.statements import statements_of
from edgetally.units import MM_PER

SAMPLES = Path(__file__).parent.parent / "sample_drawings"

NOTES = {"layer": "NOTES"}


@pytest.mark.parametrize(
    ("line", "letter", "under", "number", "unit"),
    [
        ("A = 12.4 cm²", "A", "", 12.4, "cm^2"),
        ("Ix = 123,4 cm4", "I", "x", 123.4, "cm^4"),
        ("I_x=123.4cm^4", "I", "x", 123.4, "cm^4"),
        ("I_{xx} : 123.4 cm^{4}", "I", "x", 123.4, "cm^4"),
        ("IX-X = 123.4 CM4", "I", "x", 123.4, "cm^4"),
        ("Iy 55 mm⁴", "I", "y", 55.0, "mm^4"),
        ("Jx = 12.5×10⁴ mm⁴", "J", "x", 125000.0, "mm^4"),
        ("Ix = 12.5 x 10^4 mm^4", "I", "x", 125000.0, "mm^4"),
        ("Ix = 12.5x104 mm4", "I", "x", 125000.0, "mm^4"),
        ("Ix = 1.25e5 mm4", "I", "x", 125000.0, "mm^4"),
        ("Wx = 12 cm3", "W", "x", 12.0, "cm^3"),
        ("Wel,x = 12 cm3", "W", "x", 12.0, "cm^3"),
        ("Wpl.y = 12 cm3", "W", "pl,y", 12.0, "cm^3"),
        ("Sx = 3 in.3", "S", "x", 3.0, "in^3"),
        ("rx = 12.5 mm", "r", "x", 12.5, "mm"),
        ("IX = 12.5 MM", "i", "x", 12.5, "mm"),
        ("kg/m 3,21", "M", "", 3.21, "kg/m"),
        ("kg/m = 3.21", "M", "", 3.21, "kg/m"),
        ("m = 3.2 kg/m", "M", "", 3.2, "kg/m"),
        ("WEIGHT: 3.2 KG/M", "M", "", 3.2, "kg/m"),
        ("W=3.2 lb/ft", "W", "", 3.2, "lb/ft"),
        ("P = 123 mm", "P", "", 123.0, "mm"),
        ("U = 0,423 m2/m", "U", "", 0.423, "m^2/m"),
        ("PERIMETER 1 234,5 mm", "P", "", 1234.5, "mm"),
        ("AREA 12.4 SQ. IN.", "A", "", 12.4, "in^2"),
        ("Area (cm2) = 12.4", "A", "", 12.4, "cm^2"),
        ("Section area ....... 12.4 [cm²]", "A", "", 12.4, "cm^2"),
        ("A = ca. 12.4 cm2", "A", "", 12.4, "cm^2"),
        ("Cw = 5 cm6", "C", "w", 5.0, "cm^6"),
        ("It = 5 cm4", "I", "t", 5.0, "cm^4"),
        ("A = 12.4", "A", "", 12.4, None),
    ],
)
def test_what_a_line_states(line: str, letter: str, under: str, number: float, unit: str | None) -> None:
    (statement,) = statements_of(line)
    assert (statement.letter, statement.under) == (letter, under)
    assert [n.value for n in statement.numbers] == pytest.approx([number])
    assert (statement.unit.words if statement.unit else None) == unit


@pytest.mark.parametrize(
    "line",
    ["SCALE 1:2", "A-A", "A4", "SECTION A-A", "VIEW A: 1:2", "M = 1:2", "M 1:5", "R2 = 5", "R 5", "IT7", "WEIGHT 12 kg",
     "A = 12.4 kN", "P = 5 kN", "m = 3.2 kg/m2", "A = 5 holes", "POS. 12", "DWG NO. A 1234", "P=12 TYP", "ISO 2768-m",
     "EN AW-6063 T66", "NOTES 1. A = B", "Ix", "A =", "W = 3.2 kg/m3", "A = 3°", "M = 12 %", "A1 = 20", "P.A = 3",
     "MAX 5", "S = 5", "I = 3", "Z = 2", "3 x A = 4 x 5", "RZ = 6,3 µm", ""],
)  # fmt: skip
def test_what_states_nothing(line: str) -> None:
    assert statements_of(line) == []


def test_several_statements_in_a_line_and_a_chain() -> None:
    found = statements_of("A=12.4cm2; Ix = Iy = 55 cm4  (gross)")
    assert [(s.letter + s.under, s.numbers[0].value) for s in found] == [("A", 12.4), ("Ix", 55.0), ("Iy", 55.0)]


@settings(deadline=None, max_examples=60)
@given(st.integers(1, 10**9), st.integers(0, 4), st.sampled_from(["", " ", ",", ".", "'"]))
def test_a_number_is_read_in_every_way_that_it_is_written(digits: int, places: int, group: str) -> None:
    """Python writes the number, with groups of three by its own format; of the readings one is that number."""
    value = digits / 10**places
    whole, _, after = f"{value:,.{places}f}".partition(".")
    mark = "," if group in (".", "'", " ") else "."
    text = whole.replace(",", group) + (mark + after if after else "")
    found = [n for n in readings(text) if n.value == pytest.approx(value, rel=1e-15)]
    assert found
    assert found[0].half_digit == pytest.approx(0.5 * 10.0**-places)


RECTANGLE = (40.0, 60.0)
"""b = 40, h = 60 [mm]: A = bh, I_x = bh³/12, I_y = hb³/12, W_x = bh²/6, i = h/√12 (closed forms)."""


def compared(
    folder: Path, texts: Sequence[str], units: int = MM, size: float = 1.0, **options: Any
) -> list[tuple[str, str, str]]:
    """Letter the texts beside a rectangle and return what comes of them."""

    def draw(space: Any) -> None:
        b, h = (size * s for s in RECTANGLE)
        space.add_lwpolyline([(0, 0), (b, 0), (b, h), (0, h)], close=True, dxfattribs={"layer": "OUTLINE"})
        for k, text in enumerate(texts):
            space.add_text(text, dxfattribs=NOTES | {"insert": (0, -10 - 5 * k)})

    found = analyse(drawing(folder, draw, units=units), layer="OUTLINE", **options).findings
    return [(f.code, f.severity, f.message) for f in found if f.code.startswith("lettered")]


@pytest.mark.parametrize(
    "text",
    ["A = 24 cm²", "A = 24,00 cm2", "A = 2400 mm^2", "Area 2.400 mm2", "A = 24.2 cm2", "Ix = 72 cm4",
     "Ix = 720 000 mm4",
     "I_y = 32.0 cm⁴", "Wx = 24 cm3", "W = 16 cm3", "P = 20 cm", "PERIMETER: 200 mm", "U = 0.2 m2/m", "ix = 17.3 mm",
     "A = 3.72 in²", "Ix = 72", "Ix = 720000", "A = 24", "I1 = 72 cm4", "Imin = 32 cm4", "Ip = 104 cm4",
     "W = 18.84", "I = 72 cm4", "S = 24 cm3", "Z = 16 cm3", "kg/m 18,84", "G = 6.48 kg/m", "A = 0.0024 m2"],
)  # fmt: skip
def test_what_agrees_is_a_note(tmp_path: Path, text: str) -> None:
    ((code, severity, message),) = compared(tmp_path, [text])
    assert (code, severity) == ("lettered-agrees", "note")
    assert text in message


@pytest.mark.parametrize(
    ("text", "word"),
    [("A = 25 cm²", "is 24 cm^2, the lettered value is off by +4.2 %"), ("Ix = 70,0 cm4", "off by -2.8 %"),
     ("A = 24.0 in2", "is 3.72001 in^2"), ("Wx = 26 cm3", "elastic modulus"), ("P = 180 mm", "outer perimeter"),
     ("Ix = 72 cm3", "its unit cm^3 is not that of a fourth power"), ("Ix = 55", "no unit and agrees in none"),
     ("Zx = 36 cm3", "unless it is a plastic modulus")],
)  # fmt: skip
def test_what_differs_is_a_warning(tmp_path: Path, text: str, word: str) -> None:
    ((code, severity, message),) = compared(tmp_path, [text])
    assert (code, severity) == ("lettered-differs", "warning")
    assert word in message


def test_a_lone_letter_without_a_unit_is_a_warning_to_nobody(tmp_path: Path) -> None:
    for text in ("A = 31", "P = 12", "W = 7"):
        ((code, severity, message),) = compared(tmp_path, [text])
        assert (code, severity) == ("lettered-differs", "note")
        assert "no unit" in message
    assert compared(tmp_path, ["A = 20 mm", "P = 5 cm2", "S = 20 mm", "I = 5 m", "W = 20 mm", "SCALE 1:2", "A4"]) == []


@pytest.mark.parametrize(
    "text", ["Ix = 32 cm4", "Iy = 72.0 cm4", "Wy = 24 cm3", "iy = 17.3 mm", "I1 = 32 cm4", "Imin = 72 cm4"]
)
def test_the_exchanged_axis_is_named(tmp_path: Path, text: str) -> None:
    ((code, severity, message),) = compared(tmp_path, [text])
    assert (code, severity) == ("lettered-differs", "warning")
    assert "the lettered value is that about the other axis" in message


def test_a_moment_about_the_origin_is_named(tmp_path: Path) -> None:
    """bh³/3 about the base."""
    ((_, _, message),) = compared(tmp_path, ["Ix = 288 cm4"])
    assert "about the drawing's origin" in message


def test_y_and_z_without_x_are_the_european_axes(tmp_path: Path) -> None:
    """EN 1993-1-1, 1.7: y horizontal, z vertical."""
    assert {code for code, _, _ in compared(tmp_path, ["Iy = 72 cm4", "Iz = 32 cm4"])} == {"lettered-agrees"}
    found = compared(tmp_path, ["Ix = 72 cm4", "Iy = 32 cm4", "Iz = 104 cm4"])  # mechanics: z along the piece
    assert {code for code, _, _ in found} == {"lettered-agrees"}


def test_mass_with_a_density_and_without(tmp_path: Path) -> None:
    """0.0024 m² of steel at 7850 kg/m³ are 18.84 kg/m."""
    ((code, _, message),) = compared(tmp_path, ["m = 18.8 kg/m"], density="steel")
    assert code == "lettered-agrees"
    ((code, severity, _),) = compared(tmp_path, ["m = 18.8 kg/m"], density="aluminium")
    assert (code, severity) == ("lettered-differs", "warning")
    ((code, _, message),) = compared(tmp_path, ["m = 18.8 kg/m"])
    assert code == "lettered-agrees"
    assert "of steel, 7850 kg/m³" in message
    ((code, severity, message),) = compared(tmp_path, ["m = 10 kg/m"])
    assert (code, severity) == ("lettered-differs", "note")
    assert "4167 kg/m³; pass --density" in message
    ((code, _, _),) = compared(tmp_path, ["W = 12.66 lb/ft"], density="steel")  # 18.84 · 0.3048 / 0.45359237
    assert code == "lettered-agrees"


def test_scale_and_units_of_the_drawing_and_the_results(tmp_path: Path) -> None:
    (found,) = compared(tmp_path, ["A = 24 cm²"], size=0.5, scale=2.0)
    assert found[0] == "lettered-agrees"
    (found,) = compared(tmp_path, ["A = 24 in2"], units=INCH, size=0.1, out_units="mm")
    assert found[0] == "lettered-agrees"


def test_a_lettered_value_changes_no_number(tmp_path: Path) -> None:
    def draw(space: Any, *, lettered: bool = True) -> None:
        square(space)
        if lettered:
            space.add_text("A = 77 cm2, Ix = 5 cm4, kg/m 9", dxfattribs=NOTES)

    with_text = analyse(drawing(tmp_path, draw), layer="OUTLINE", density="steel").sections[0].properties
    bare = drawing(tmp_path, lambda space: draw(space, lettered=False), name="bare.dxf")
    without = analyse(bare, layer="OUTLINE", density="steel").sections[0].properties
    assert with_text == without


def beside(folder: Path, texts: dict[tuple[float, float], str], **options: Any) -> list[Finding]:
    """Letter texts at places around a square of 10 at the origin and one of 20 at (100, 0)."""

    def draw(space: Any) -> None:
        square(space)
        square(space, 20, (100, 0))
        for at, text in texts.items():
            space.add_text(text, dxfattribs=NOTES | {"insert": at})

    found = analyse(drawing(folder, draw), layer="OUTLINE", **options).findings
    return [f for f in found if f.code.startswith("lettered")]


def test_of_several_sections_the_nearest_or_the_one_around_it(tmp_path: Path) -> None:
    texts = {(2, 4): "A = 1 cm2", (104, 4): "A = 4 cm2", (0, -5): "A = 1,00 cm2", (130, 0): "A = 400 mm2"}
    found = beside(tmp_path, texts, select="each")
    assert [f.code for f in found] == ["lettered-agrees"] * 4
    assert ["section 1" in f.message for f in found] == [True, False, True, False]
    (wrong,) = beside(tmp_path, {(2, 4): "A = 4 cm2"}, select="each")
    assert (wrong.code, wrong.severity, wrong.at) == ("lettered-differs", "warning", (2, 4))


def test_beside_an_outline_that_is_not_measured_nothing_is_compared(tmp_path: Path) -> None:
    texts = {(2, 4): "A = 1 cm2", (104, 4): "A = 4 cm2"}
    (found,) = beside(tmp_path, texts, select="1")
    assert found.message.count("A = 1 cm2") == 1


def test_a_text_between_two_sections_is_said_to_be(tmp_path: Path) -> None:
    (fits,) = beside(tmp_path, {(55, 5): "A = 4 cm2"}, select="each")
    assert fits.code == "lettered-agrees"
    assert "it stands about as near to section" in fits.message
    (neither,) = beside(tmp_path, {(55, 5): "A = 5 cm2"}, select="each")
    assert (neither.code, neither.severity) == ("lettered-differs", "warning")
    (unknown,) = beside(tmp_path, {(55, 5): "A = 5 cm2"}, select="1")
    assert unknown.severity == "note"
    assert "an outline that was not measured" in unknown.message


def test_formatting_codes_hidden_layers_and_attributes(tmp_path: Path) -> None:
    """MTEXT with fonts, heights and stacked letters; special characters; attributes; what is hidden is not read."""

    def draw(space: Any) -> None:
        square(space, 100)
        document = space.doc
        document.layers.add("HIDDEN").off()
        text = r"{\H3.5;\fArial|b0|i0|c0|p34;I\H0.7x;\S^ x;} = 833,3 cm{\H0.7x;\S4^ ;}\PA = 100 cm\S2^ ;\P{\LP} = 0.4 m"
        space.add_mtext(text, dxfattribs=NOTES | {"insert": (0, -20)})
        space.add_text("A = 100 cm%%178", dxfattribs=NOTES)
        space.add_text("A = 55 cm2", dxfattribs={"layer": "HIDDEN"})
        space.add_text("A = 56 cm2", dxfattribs=NOTES | {"invisible": 1})
        block = document.blocks.new("TITLE")
        block.add_attdef("AREA", (0, 0))
        reference = space.add_blockref("TITLE", (0, -50), dxfattribs=NOTES)
        reference.add_attrib("AREA", "Area: 10000 mm²", (0, -50), dxfattribs=NOTES)
        reference.add_attrib("SECRET", "A = 57 cm2", (0, -60), dxfattribs=NOTES | {"flags": 1})

    found = [f for f in analyse(drawing(tmp_path, draw), layer="OUTLINE").findings if f.code.startswith("lettered")]
    assert [f.code for f in found] == ["lettered-agrees"] * 5
    assert "states 'Ix = 833,3 cm4'" in found[0].message
    assert {f.message.split()[0] for f in found} == {"MTEXT", "TEXT", "ATTRIB"}


def test_thousands_of_lettered_values_are_listed_in_part(tmp_path: Path) -> None:
    found = compared(tmp_path, ["A = 24 cm2"] * 100 + ["A = 30 cm2"] * 2)
    assert [severity for _, severity, _ in found].count("warning") == 2
    assert len(found) == 61
    assert "42 more" in found[-1][2]


LETTERS = {
    "area": ["A", "AREA", "Section area"], "total_perimeter": ["P", "U", "perimeter"],
    "second_moment_x": ["Ix", "I_x", "Ixx", "Jx", "IX-X"], "second_moment_y": ["Iy", "I_{y}", "Iyy"],
    "elastic_modulus_x_top": ["Wx", "W_el,x", "Sx", "Zx"], "elastic_modulus_y_left": ["Wy", "Wel,y"],
    "radius_of_gyration_x": ["ix", "rx"], "principal_moment_1": ["I1", "Imax", "Iu"], "polar_moment": ["Ip"],
}  # fmt: skip


@settings(deadline=None, max_examples=150)
@given(
    st.sampled_from(sorted(LETTERS)).flatmap(lambda key: st.tuples(st.just(key), st.sampled_from(LETTERS[key]))),
    st.sampled_from(["mm", "cm", "m", "in"]),
    st.sampled_from(["{}{}", "{} {}", "{} [{}]"]),
    st.sampled_from([("^{}", "."), ("{}", ","), ("²³⁴", ".")]),
    st.integers(3, 7),
    st.sampled_from([0.0, 0.0, -0.1, 0.06]),
)
def test_what_is_computed_agrees_however_it_is_lettered(
    name: tuple[str, str], unit: str, form: str, raised: tuple[str, str], digits: int, off: float
) -> None:
    """The value in any unit, written with 3 and more digits, agrees; one that is 6 % and more off does not."""
    analysis = analyse_once(str(SAMPLES / "bracket.dxf"), layer="OUTLINE")
    section = analysis.sections[0]
    key, letter = name
    prop = section.properties[key]
    assert prop.value is not None
    power = prop.unit.power
    number = f"{prop.value / MM_PER[unit] ** power * (1 + off):.{digits - 1}e}"
    mantissa, _, exponent = number.partition("e")
    plain = f"{float(number):.{max(0, digits - 1 - int(exponent))}f}"
    text = (mantissa + " x 10^" + str(int(exponent)) if len(plain) > 12 else plain).replace(".", raised[1])
    signs, _ = raised
    sign = "" if power == 1 else (signs[power - 2] if signs.startswith("²") else signs.format(power))
    line = f"{letter} = " + form.format(text, unit + sign)
    (found,) = lettered_findings([Lettering((line,), 200 + 5j, Source("TEXT", "F", "0"))], analysis.outline, [section])
    assert (found.code == "lettered-agrees") == (off == 0.0), (line, found.message)
