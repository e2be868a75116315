"""Real drawings by others: each gives a section or a refusal that names the true reason.

They are not part of the project. EDGETALLY_DRAWINGS names the folder that holds `sections/` and `odd/`.
"""

from __future__ import annotations

import os
import re
from pathlib import Path
from typing import Any

import ezdxf
import pytest
import shapely
from ezdxf.path import make_path

from build import analyse_area as analyse
from edgetally import EdgetallyError

FOLDER = Path(os.environ.get("EDGETALLY_DRAWINGS", "")) / "sections"

pytestmark = pytest.mark.skipif(
    not os.environ.get("EDGETALLY_DRAWINGS"), reason="EDGETALLY_DRAWINGS names no folder of drawings"
)

# (file, options, area, voids, relative tolerance): the areas "by flattening" come from elsewhere and are coarse
SECTIONS: list[tuple[str, dict[str, Any], float, int, float]] = [
    ("angle-rounded-toes", {}, 0.329752, 0, 3e-6),
    ("channel-MC12x31", {}, 9.12, 0, 5e-3),  # American steel manual: 9.12 in², printed to three figures
    ("multi-cell-bar", {}, 0.50655, 4, 3e-5),
    ("rectangular-tube", {}, 1.6875, 1, 1e-12),
    ("sharp-I", {}, 14400.0, 0, 1e-12),
    ("traced-block", {}, 5.809162, 0, 1e-6),  # no area stated elsewhere: by flattening, below
    ("tslot-1x1", {"units": "in"}, 0.4359026, 1, 1e-6),  # no area stated elsewhere for the T-slots: as read
    ("tslot-1x3", {"units": "in", "layer": "0", "join_gap": "0.11mm"}, 1.1537, 5, 5e-3),
    ("vslot-20x20", {}, 162.526, 1, 1e-5),
    ("spline-outline", {"units": "mm"}, 1024.384, 0, 1e-6),
    ("spline-ellipse-line", {"units": "mm", "join_gap": "0.09mm"}, 437.5, 1, 1e-2),
]

REFUSED: list[tuple[str, dict[str, Any], str]] = [
    ("curtain-wall-details", {"layer": "SHAPE"}, "does not say its unit"),
    ("curtain-wall-details", {"layer": "SHAPE", "units": "in"}, "run along each other|outline is open"),
    ("spline-ellipse-line", {"units": "mm"}, r"gap 0.0859 mm .* pass --join-gap 0.086mm"),
    ("spline-outline", {}, "does not say its unit"),
    ("tslot-1x3", {"units": "in", "layer": "0"}, r"gap 0.00401 in .* pass --join-gap 0.11mm"),
    ("tslot-2x4", {"units": "in", "layer": "0"}, r"outline is open: gap"),
]


@pytest.mark.parametrize(("name", "options", "area", "voids", "tolerance"), SECTIONS, ids=lambda v: str(v)[:24])
def test_section(name: str, options: dict[str, Any], area: float, voids: int, tolerance: float) -> None:
    analysis = analyse(FOLDER / f"{name}.dxf", **options)
    section = analysis.sections[0]
    assert section.properties["area"].value == pytest.approx(area, rel=tolerance)
    assert len(section.drawn[0].voids) == voids
    reading = analysis.drawing.reading
    assert reading.read == reading.used + len(reading.skips)


@pytest.mark.parametrize(("name", "layer"), [("spline-outline", "0"), ("traced-block", "0")])
def test_area_agrees_with_the_library_s_own_flattening(name: str, layer: str) -> None:
    """Another route: the DXF library chops each entity into chords, shapely polygonises what it gets."""
    lines = []
    for entity in ezdxf.readfile(FOLDER / f"{name}.dxf").modelspace().query(f'*[layer=="{layer}"]'):
        chords = [(round(p.x, 5), round(p.y, 5)) for p in make_path(entity).flattening(1e-5)]
        if len(set(chords)) > 1:
            lines.append(shapely.LineString(chords))
    parts = [shapely.Polygon(p.exterior) for p in shapely.get_parts(shapely.polygonize(lines))]
    outer, *inner = sorted((p.area for p in parts), reverse=True)
    section = analyse(FOLDER / f"{name}.dxf", units="mm", layer=layer).sections[0]
    assert section.properties["area"].value == pytest.approx(outer - sum(inner), rel=3e-4)


@pytest.mark.parametrize(("name", "options", "reason"), REFUSED, ids=lambda v: str(v)[:24])
def test_refusal(name: str, options: dict[str, Any], reason: str) -> None:
    with pytest.raises(EdgetallyError) as refused:
        analyse(FOLDER / f"{name}.dxf", **options)
    assert re.search(reason, str(refused.value))


def test_every_section_drawing_is_in_one_of_the_tables() -> None:
    named = {name for name, *_ in SECTIONS} | {name for name, *_ in REFUSED}
    assert {path.stem for path in FOLDER.glob("*.dxf")} == named


@pytest.mark.parametrize("path", sorted(FOLDER.parent.glob("*/*.dxf")), ids=lambda p: p.stem)
def test_no_drawing_ends_in_a_fault(path: Path) -> None:
    """A result whose account balances, or a refusal of the one family of errors."""
    try:
        analysis = analyse(path, units="mm", select="each")
    except EdgetallyError as error:
        assert len(str(error)) > 20  # noqa: PT017 (either outcome is right)
        return
    reading = analysis.drawing.reading
    assert reading.read == reading.used + len(reading.skips)
    for section in analysis.sections:
        assert (section.properties["area"].value or 0) > 0
