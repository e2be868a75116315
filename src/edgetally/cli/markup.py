"""`edgetally markup`: the outline as understood, written back as DXF."""

from __future__ import annotations

from typing import Any

import click

from edgetally.cli.options import EXIT_OF, analysed, reading_options


@click.command(epilog="Example: edgetally markup sample_drawings/bracket.dxf --layer OUTLINE -o marked.dxf")
@click.argument("drawing", type=click.Path(), metavar="DRAWING")
@click.option("-o", "output", type=click.Path(), required=True, metavar="OUT.dxf", help="Where the drawing goes.")
@reading_options
def markup(drawing: str, output: str, **options: Any) -> int:
    """Write the outline of DRAWING as it was understood to a new DXF file, with true curves.

    Layers: OUTLINE, VOIDS, CENTROID, SHEAR CENTRE, PRINCIPAL AXES, JOINS, and FINDINGS with a mark and a text at each.
    """
    from edgetally.output.files import check_target, write_whole
    from edgetally.output.markup import markup_bytes

    check_target(output, drawing)
    analysis = analysed(drawing, options)
    write_whole(output, markup_bytes(analysis))
    print(f"written: {output}")
    return EXIT_OF[analysis.severity]
