"""Curves and words → a DXF drawing: the outline as it was understood, for a CAD program to open."""

from __future__ import annotations

import io
from cmath import phase, rect
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from math import tan
from typing import Any

import ezdxf
from ezdxf.lldxf.const import DXFError

from edgetally.curves import Arc, Bezier, Curve, EllipticArc, Line
from edgetally.errors import OutputError
from edgetally.units import INSUNITS

VERSION = "R2010"
SHARP = 3.0
"""An arc that turns by more than this [rad] is written in halves: its bulge would grow without bound."""


@dataclass(frozen=True, slots=True)
class Mark:
    """What is drawn on one layer: runs of curves, and texts (place, words, height)."""

    layer: str
    colour: int
    runs: tuple[tuple[Curve, ...], ...] = ()
    texts: tuple[tuple[complex, str, float], ...] = ()


def markup_dxf(marks: Sequence[Mark], unit: str) -> bytes:
    """Return a DXF file with each mark on a layer of its own, curves as true curves, in the drawing's unit.

    Raises OutputError where the library cannot write it.
    """
    document = ezdxf.new(VERSION)  # type: ignore[attr-defined]
    document.header["$INSUNITS"] = next(code for code, name in INSUNITS.items() if name == unit)
    space = document.modelspace()
    try:
        for mark in marks:
            if mark.layer not in document.layers:
                document.layers.add(mark.layer, color=mark.colour)
            attributes = {"layer": mark.layer}
            for run in mark.runs:
                _draw_run(space, run, attributes)
            for place, words, height in mark.texts:
                text = space.add_text(words, height=height, dxfattribs=attributes)
                text.dxf.insert = (place.real, place.imag)
        stream = io.StringIO()
        document.write(stream)
    except (DXFError, ValueError) as error:
        raise OutputError(f"the drawing cannot be written: {error}") from None
    return stream.getvalue().encode(document.output_encoding)


def _draw_run(space: Any, run: tuple[Curve, ...], attributes: dict[str, str]) -> None:
    """Draw connected curves: lines and arcs in polylines with bulges, other kinds as entities of their own."""
    if len(run) == 1 and isinstance(run[0], Arc) and run[0].is_full_circle:
        centre = run[0].centre
        space.add_circle((centre.real, centre.imag), run[0].radius, dxfattribs=attributes)
        return
    closed = abs(run[-1].end - run[0].start) <= 1e-12 * (abs(run[0].start) + sum(c.length for c in run))
    if all(isinstance(curve, Line | Arc) for curve in run):
        _polyline(space, run, closed, attributes)
        return
    simple: list[Curve] = []
    for curve in run:
        if isinstance(curve, Line | Arc):
            simple.append(curve)
            continue
        if simple:
            _polyline(space, simple, False, attributes)
            simple = []
        _single(space, curve, attributes)
    if simple:
        _polyline(space, simple, False, attributes)


def _polyline(space: Any, run: Iterable[Curve], closed: bool, attributes: dict[str, str]) -> None:
    pieces: list[Curve] = []
    for curve in run:
        pieces += curve.split(0.5) if isinstance(curve, Arc) and abs(curve.sweep) > SHARP else (curve,)
    vertices = [(c.start.real, c.start.imag, tan(c.sweep / 4) if isinstance(c, Arc) else 0.0) for c in pieces]
    if not closed:
        vertices.append((pieces[-1].end.real, pieces[-1].end.imag, 0.0))
    space.add_lwpolyline(vertices, format="xyb", close=closed, dxfattribs=attributes)


def _single(space: Any, curve: Curve, attributes: dict[str, str]) -> None:
    if isinstance(curve, EllipticArc):
        arc = curve if curve.sweep > 0 else curve.reversed()
        # u·e^{iφ} and v·e^{−iφ} point the same way at φ = (arg v − arg u)/2, the end of the major axis
        longer, shorter = arc.semi_axes
        major = rect(longer, 0.5 * (phase(arc.u) + phase(arc.v)))
        start = 0.5 * (phase(arc.u) - phase(arc.v))
        ends = (start, start + arc.sweep)
        centre = (arc.centre.real, arc.centre.imag)
        space.add_ellipse(centre, (major.real, major.imag), shorter / longer, *ends, dxfattribs=attributes)
        return
    assert isinstance(curve, Bezier)
    degree = len(curve.control) - 1
    knots = [0.0] * (degree + 1) + [1.0] * (degree + 1)
    points = [(p.real, p.imag, 0.0) for p in curve.control]
    spline = space.add_spline(degree=degree, dxfattribs=attributes)
    spline.control_points, spline.knots = points, knots
    if curve.weights is not None:
        spline.weights = list(curve.weights)
