"""A survey as text for the terminal."""

from __future__ import annotations

from edgetally.outline.choosing import describe
from edgetally.survey import Survey

LISTED = 8


def survey_text(survey: Survey) -> str:
    """Return what `survey` prints: the drawing, then each visible layer with its verdict, then what is hidden."""
    unit = survey.unit or "unit?"
    lines = [
        f"drawing       {survey.file}",
        f"SHA-256       {survey.sha256}",
        f"DXF version   {survey.dxf_version}",
        f"unit          {survey.unit} (from {survey.unit_source})"
        if survey.unit
        else f"unit          not said ({survey.unit_source}): pass it with --units",
    ]
    if survey.box:
        x0, y0, x1, y1 = survey.box
        lines.append(
            f"extents       x {x0:.6g} to {x1:.6g}, y {y0:.6g} to {y1:.6g}; {x1 - x0:.6g} x {y1 - y0:.6g} {unit}"
        )
    for layer in survey.layers:
        lines += ["", f"layer {layer.name}: {layer.verdict}"]
        if layer.reason:
            lines.append(f"  {layer.reason}")
        counts = ", ".join(f"{count} {kind}" for kind, count in layer.kinds.items())
        if counts:
            lines.append(f"  entities: {counts}")
        if layer.open_ends:
            lines.append(f"  open ends: {layer.open_ends}")
        if layer.regions:
            count = len(layer.regions)
            lines.append(f"  {count} closed outline{'s' if count > 1 else ''}:")
            lines += [f"  {line}" for line in describe(layer.regions[:LISTED], unit)]
            if count > LISTED:
                lines.append(f"    and {count - LISTED} more")
    if survey.hidden:
        lines += [
            "",
            "not visible, not read: " + ", ".join(f"{name} ({state})" for name, state in survey.hidden.items()),
        ]
    if survey.blocks:
        listed = ", ".join(f"{name} ({count})" for name, count in list(survey.blocks.items())[:20])
        more = f" and {len(survey.blocks) - 20} more" if len(survey.blocks) > 20 else ""
        lines += ["", f"blocks (entities in each): {listed}{more}"]
    lines.append("")
    if survey.taken:
        lines.append(f"`sheet` would take layer {survey.taken}")
    else:
        lines.append("`sheet` would ask for --layer")
    lines += [f"{finding.severity}: {finding.code}: {finding.message}" for finding in survey.findings]
    return "\n".join(lines)
