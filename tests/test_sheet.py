"""The sheet, read back from the written PDF: text, vectors, angles, pages, fonts, bytes."""

from __future__ import annotations

import io
import math
import re
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pypdf
import pypdfium2
import pytest
from pypdf.generic import ContentStream

from build import analyse_once as analyse
from command import run
from drawings import INCH, draw_contours, draw_loose, drawing, square
from edgetally.output.blocks import Block, Figure
from edgetally.output.pages import Pages, Setup, whole_pdf
from edgetally.output.pens import ACCENT
from edgetally.output.sheet import Head, sheet_pdf
from edgetally.output.typesetting import set_blocks
from outlines import i_section

SAMPLES = Path(__file__).parent.parent / "sample_drawings"


def bracket(**options: Any) -> bytes:
    head = Head("Lower bracket", "DG4-17", "Q. V.", "2026-03-31")
    return sheet_pdf(analyse(SAMPLES / "bracket.dxf", layer="OUTLINE", **options), head=head)


def text_of(pdf: bytes) -> str:
    return "\n".join(page.extract_text() for page in pypdf.PdfReader(io.BytesIO(pdf)).pages)


def operations(page: Any) -> Iterator[tuple[list[float], bytes, tuple[float, ...]]]:
    """Yield (operands, operator, stroke colour) of a page's content."""
    colour: tuple[float, ...] = ()
    stack = []
    for operands, operator in ContentStream(page["/Contents"].get_object(), page.pdf).operations:
        if operator == b"q":
            stack.append(colour)
        elif operator == b"Q":
            colour = stack.pop()
        elif operator == b"RG":
            colour = tuple(float(c) for c in operands)
        yield operands, operator, colour


def test_every_property_is_on_the_page_with_name_value_and_unit() -> None:
    text = text_of(bracket(density="steel"))
    for words in (
        "second moment about x 3945040 mm⁴",
        "product of inertia −1200282 mm⁴",
        "area 2826.784 mm²",
        "angle from x to 1 23.6873 °",
        "elastic modulus 1, +2 side 63777.61 mm³",
        "mass per length at 7850 kg/m³ 22.19025 kg/m",
    ):
        assert words in re.sub(r"\s+", " ", text)


def test_head_evidence_and_caution_are_on_the_page() -> None:
    text = re.sub(r"\s+", " ", text_of(bracket()))
    digest = analyse(SAMPLES / "bracket.dxf", layer="OUTLINE").drawing.sha256
    for words in (
        "Lower bracket", "DG4-17", "Q. V.", "2026-03-31", "bracket.dxf", digest, "OUTLINE", "mm (from file header)",
        "1:1 (drawn = real)", "2 read = 2 used + 0 left out", "1 CIRCLE, 1 LWPOLYLINE", "scale 1:2",
        "1 outer boundary, 1 void", "page 1 of 2", "page 2 of 2", "edgetally 0.1.0", "licensed professional",
        "codes that apply",
        "Mohr's circle", "2θ = 47.3745°", "some texts use the other sign", "Checked by, date", "Signature",
    ):  # fmt: skip
        assert words in text


def test_everything_is_drawn_within_the_page() -> None:
    for page_size in ("a4", "letter"):
        pdf = sheet_pdf(analyse(SAMPLES / "rail-extrusion.dxf", layer="OUTLINE"), page=page_size)
        page = pypdf.PdfReader(io.BytesIO(pdf)).pages[0]
        width, height = float(page.mediabox.width), float(page.mediabox.height)
        points = 0
        for operands, operator, _ in operations(page):
            if operator in (b"m", b"l", b"c", b"re"):
                values = [float(v) for v in operands[: 2 if operator == b"re" else None]]
                for x, y in zip(values[::2], values[1::2], strict=True):
                    points += 1
                    assert 20 <= x <= width - 20
                    assert 20 <= y <= height - 20
        assert points > 400


@pytest.mark.parametrize(("page_size", "size"), [("a4", (595.28, 841.89)), ("letter", (612.0, 792.0))])
def test_paper(page_size: str, size: tuple[float, float]) -> None:
    pdf = sheet_pdf(analyse(SAMPLES / "bracket.dxf", layer="OUTLINE"), page=page_size)
    reader = pypdf.PdfReader(io.BytesIO(pdf))
    assert len(reader.pages) == 2
    assert (float(reader.pages[0].mediabox.width), float(reader.pages[0].mediabox.height)) == pytest.approx(
        size, abs=0.01
    )


def accent_strokes(pdf: bytes) -> list[tuple[complex, complex]]:
    """The straight strokes in the colour of the principal axes."""
    found, start = [], 0j
    for operands, operator, colour in operations(pypdf.PdfReader(io.BytesIO(pdf)).pages[0]):
        if operator == b"m":
            start = complex(*map(float, operands))
        elif operator == b"l" and colour == pytest.approx(ACCENT, abs=1e-3):
            end = complex(*map(float, operands))
            found.append((start, end))
            start = end
    return found


def test_principal_axes_are_drawn_at_the_right_angle_through_the_centroid() -> None:
    analysis = analyse(SAMPLES / "bracket.dxf", layer="OUTLINE")
    theta = analysis.sections[0].properties["principal_angle"].value
    assert theta is not None
    axes = sorted(accent_strokes(sheet_pdf(analysis)), key=lambda s: -abs(s[1] - s[0]))[:2]
    angles = sorted(math.degrees(math.atan2((b - a).imag, (b - a).real)) % 180 for a, b in axes)
    assert angles == pytest.approx(sorted([theta % 180, (theta + 90) % 180]), abs=0.01)
    (a, b), (c, d) = axes
    t = ((c - a) * (d - c).conjugate()).imag / ((b - a) * (d - c).conjugate()).imag
    crossing = a + t * (b - a)
    # the drawing's axes are the longest muted strokes; they cross in the same point
    horizontal = vertical = 0.0
    start = 0j
    for operands, operator, colour in operations(pypdf.PdfReader(io.BytesIO(sheet_pdf(analysis))).pages[0]):
        if operator == b"m":
            start = complex(*map(float, operands))
        elif operator == b"l" and colour == pytest.approx((0.38, 0.40, 0.42), abs=1e-3):
            end = complex(*map(float, operands))
            if abs(end - start) > 250 and abs(end.imag - start.imag) < 1e-6:
                horizontal = start.imag
            if abs(end - start) > 250 and abs(end.real - start.real) < 1e-6:
                vertical = start.real
    assert crossing == pytest.approx(complex(vertical, horizontal), abs=0.05)


def test_the_figure_is_to_the_stated_scale(tmp_path: Path) -> None:
    """A square of 20 mm at 2:1 is 40 mm on paper: read from the filled path."""
    path = drawing(tmp_path, lambda space: square(space, 20))
    pdf = sheet_pdf(analyse(path, layer="OUTLINE"))
    assert "scale 2:1" in text_of(pdf)
    xs: list[float] = []
    run_xs: list[float] = []
    for operands, operator, _ in operations(pypdf.PdfReader(io.BytesIO(pdf)).pages[0]):
        if operator == b"m":
            run_xs = [float(operands[0])]
        elif operator == b"l":
            run_xs.append(float(operands[0]))
        elif operator in (b"B*", b"b*") and not xs:
            xs = run_xs
    assert max(xs) - min(xs) == pytest.approx(40 * 72 / 25.4, abs=0.01)


def test_fonts_are_embedded_and_nothing_else_is_used() -> None:
    reader = pypdf.PdfReader(io.BytesIO(bracket()))
    names = set()
    for font in reader.pages[0]["/Resources"]["/Font"].values():
        font = font.get_object()
        descendant = font.get("/DescendantFonts")
        holder = descendant[0].get_object() if descendant else font
        descriptor = holder.get("/FontDescriptor")
        if descriptor is not None:
            assert "/FontFile2" in descriptor.get_object()
            names.add(str(holder["/BaseFont"]))
    assert len(names) == 2
    assert all("DejaVuSansCondensed" in name for name in names)


def test_the_same_input_gives_the_same_bytes() -> None:
    assert bracket() == bracket()


def test_metadata_and_bookmarks_and_no_way_out() -> None:
    reader = pypdf.PdfReader(io.BytesIO(bracket()))
    assert reader.metadata is not None
    assert reader.metadata.title == "Lower bracket: section properties"
    assert reader.metadata.author == "Q. V."
    assert str(reader.metadata.creator).startswith("edgetally")
    assert [entry.title for entry in reader.outline[:1]] == ["bracket.dxf"]
    assert [entry.title for entry in reader.outline[1]] == ["Torsion and shear"]
    assert all("/Annots" not in page for page in reader.pages)
    assert "/AA" not in reader.trailer["/Root"]
    assert "/Names" not in reader.trailer["/Root"] or "/JavaScript" not in reader.trailer["/Root"]["/Names"]


def test_hostile_and_foreign_text_is_drawn_as_it_is(tmp_path: Path) -> None:
    title = "Łaźnia ⁴ ⌀ θ <img src='/etc/passwd'> & 断面\x07"
    pdf = sheet_pdf(analyse(SAMPLES / "bracket.dxf", layer="OUTLINE"), head=Head(title=title))
    text = text_of(pdf)
    assert "Łaźnia ⁴ ⌀ θ <img src='/etc/passwd'> & □□□" in text


def test_a_title_too_long_is_cut_with_a_mark() -> None:
    pdf = sheet_pdf(analyse(SAMPLES / "bracket.dxf", layer="OUTLINE"), head=Head(title="long " * 60))
    assert re.search(r"Title\n(long )+[long]*…\n", text_of(pdf))


def test_many_findings_flow_to_further_pages_in_full(tmp_path: Path) -> None:
    """200 joins: each is on paper, with place and handles, and the pages are numbered."""

    def draw(space: Any) -> None:
        for k in range(50):
            x = 20.0 * k
            corners = [(x, 0), (x + 10, 0), (x + 10, 10), (x, 10)]
            for j in range(4):
                a, b = corners[j], corners[(j + 1) % 4]
                space.add_line(a, (b[0] + 0.003, b[1]), dxfattribs={"layer": "OUTLINE"})

    analysis = analyse(drawing(tmp_path, draw), layer="OUTLINE", select="together", torsion=False)
    assert len(analysis.outline.joins) == 200
    pdf = sheet_pdf(analysis)
    reader = pypdf.PdfReader(io.BytesIO(pdf))
    pages = len(reader.pages)
    text = text_of(pdf)
    assert pages > 2
    assert text.count("gap-joined:") == 200
    for k in range(pages):
        assert f"page {k + 1} of {pages}" in reader.pages[k].extract_text()


def test_each_section_has_its_page() -> None:
    analysis = analyse(SAMPLES / "two-clamps.dxf", layer="OUTLINE", select="each")
    reader = pypdf.PdfReader(io.BytesIO(sheet_pdf(analysis)))
    assert len(reader.pages) == 4
    assert [entry.title for entry in reader.outline[::2]] == ["Section 1", "Section 2"]
    assert "section 1 of 2" in reader.pages[0].extract_text()


def test_the_torsion_page_has_numbers_errors_and_the_warping(tmp_path: Path) -> None:
    analysis = analyse(SAMPLES / "purlin-zed.dxf", layer="OUTLINE")
    reader = pypdf.PdfReader(io.BytesIO(sheet_pdf(analysis)))
    text = re.sub(r"\s+", " ", reader.pages[1].extract_text())
    solution = analysis.sections[0].connected.solution
    assert solution is not None
    for words in ("torsion constant 921.41", "shear area along axis 1", "ν = 0.3"):
        assert words in text
    assert len(re.findall(r"relative error \d × 10⁻[⁶⁷⁸⁹]", text)) >= 6
    # bands of both signs are there, and no more of them than the outline has pieces, or nearly
    filled = sum(1 for _, operator, colour in operations(reader.pages[1]) if operator in (b"B*", b"b*") and colour)
    assert 8 < filled < 80


def test_symbols_of_the_european_and_american_sets() -> None:
    analysis = analyse(SAMPLES / "bracket.dxf", layer="OUTLINE")
    european = re.sub(r"\s+", " ", text_of(sheet_pdf(analysis, symbols="en")))
    american = re.sub(r"\s+", " ", text_of(sheet_pdf(analysis, symbols="us")))
    assert "second moment about y 3945040" in european  # x as drawn is y-y there
    assert "angle from y to u" in european
    assert "second moment about x 3945040" in american
    assert "angle from x to w" in american


def test_the_page_is_not_blank_when_rendered() -> None:
    """The rendered page carries ink in each of its blocks: head, figure, circle, table, evidence, foot."""
    page = pypdfium2.PdfDocument(bracket())[0]
    image = page.render(scale=1.0).to_pil().convert("L")
    width, height = image.size
    for box in (
        (0.08, 0.03, 0.95, 0.15),
        (0.10, 0.18, 0.60, 0.55),
        (0.66, 0.20, 0.94, 0.60),
        (0.08, 0.63, 0.95, 0.82),
        (0.08, 0.83, 0.95, 0.90),
        (0.08, 0.91, 0.95, 0.98),
    ):
        part = image.crop((int(box[0] * width), int(box[1] * height), int(box[2] * width), int(box[3] * height)))
        dark = sum(part.histogram()[:128])
        assert dark > 0.003 * part.size[0] * part.size[1]


def test_command_writes_the_sheet_and_a_summary(tmp_path: Path) -> None:
    target = tmp_path / "sheet.pdf"
    code, out, err = run(
        "sheet", SAMPLES / "round-edged-bar.dxf", "--layer", "OUTLINE", "-o", target, "--page", "letter"
    )
    assert (code, err) == (0, "")
    assert "second moment about x" in out
    assert f"written: {target}" in out
    assert target.read_bytes().startswith(b"%PDF-")
    assert [p.name for p in tmp_path.iterdir()] == ["sheet.pdf"]


def test_inch_drawing_and_other_units_of_the_results(tmp_path: Path) -> None:
    path = drawing(tmp_path, lambda space: draw_loose(space, i_section(8, 4, 0.25, 0.4, 0.3)), units=INCH)
    text = re.sub(r"\s+", " ", text_of(sheet_pdf(analyse(path, layer="OUTLINE", out_units="cm"))))
    assert "in (from file header)" in text
    assert "cm⁴" in text
    assert "joins" in text


def test_closed_polylines_with_bulges_reach_the_sheet(tmp_path: Path) -> None:
    path = drawing(tmp_path, lambda space: draw_contours(space, i_section(200, 100, 5.6, 8.5, 12)))
    text = re.sub(r"\s+", " ", text_of(sheet_pdf(analyse(path, layer="OUTLINE", out_units="cm"))))
    assert "second moment about x 1943.168 cm⁴" in text  # EN 10365, IPE 200: 1943 cm⁴


def test_pages_named_are_written_and_no_others(tmp_path: Path) -> None:
    target = tmp_path / "sheet.pdf"
    words = ("sheet", SAMPLES / "bracket.dxf", "--layer", "OUTLINE", "-o", target)
    for pages, titles in (("main", ["bracket.dxf"]), ("torsion", ["Torsion and shear"]), ("Main,torsion", None)):
        code, _, err = run(*words, "--pages", pages)
        assert (code, err) == (0, "")
        reader = pypdf.PdfReader(target)
        assert len(reader.pages) == (2 if titles is None else 1)
        if titles:
            assert [entry.title for entry in reader.outline] == titles
    # what the torsion page shows, the first page has where it stands alone
    run(*words, "--pages", "main")
    assert "warping constant" in pypdf.PdfReader(target).pages[0].extract_text()
    run(*words)
    assert "warping constant" not in pypdf.PdfReader(target).pages[0].extract_text()
    code, _, err = run(*words, "--pages", "main,front")
    assert code == 2
    assert "'front' is not known" in err


def test_a_long_block_flows_over_pages_with_its_heads() -> None:
    """400 rows: each is on paper once, with the heads of the columns on each page."""
    setup = Setup("a4", Head(), "Test", (("Drawing", "a.dxf", 1.0),), ("SHA-256", "0"), (), "t", "s", "k")
    rows = tuple((f"row {k:03d}", Figure.of(1.5 * k), "words that go on " * (k % 9)) for k in range(400))
    block = Block("Long", ("name", "value", "remark"), rows, ("A note at the end.",))

    def write(pages: Pages) -> None:
        set_blocks(pages, [block], pages.open("Start") - 6.0)

    reader = pypdf.PdfReader(io.BytesIO(whole_pdf(setup, write)))
    texts = [page.extract_text() for page in reader.pages]
    text = "\n".join(texts)
    assert len(texts) > 5
    for k in range(400):
        assert text.count(f"row {k:03d}") == 1
    assert all("remark" in page for page in texts)
    assert text.count("A note at the end.") == 1
    assert texts[0].startswith("Long\n") is False
    assert all("Long, continued" in page for page in texts[1:])
