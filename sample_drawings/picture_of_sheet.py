"""Make the README's picture: the sheet of the sample bracket, from the program's real output.

    python sample_drawings/picture_of_sheet.py

Needs the test extra (pypdfium2, pillow).
"""

from __future__ import annotations

from pathlib import Path

import pypdfium2

from edgetally import analyse
from edgetally.output.sheet import Head, sheet_pdf

HERE = Path(__file__).parent


def main() -> None:
    analysis = analyse(HERE / "bracket.dxf", layer="OUTLINE", density="aluminium")
    head = Head("Lower bracket, dipping gantry DG4", "DG4-17 / calculation 3", "Q. V.", "2026-03-31")
    page = pypdfium2.PdfDocument(sheet_pdf(analysis, head=head))[0]
    picture = page.render(scale=1.6).to_pil().quantize(32)
    picture.save(HERE / "sheet.png", optimize=True)


if __name__ == "__main__":
    main()
