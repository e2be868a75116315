"""Moments of areas against routes that share nothing with the package: mpmath, fontTools and closed forms."""

from math import cos, pi, sin, tau

import mpmath
import numpy as np
import pytest
from fontTools.pens.momentsPen import MomentsPen
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from curve_kinds import beziers, curves, elliptic_arcs, places
from edgetally.curves import Arc, Bezier, Curve, EllipticArc, Line, Packed
from edgetally.curves.green import enclosed_area, moments
from edgetally.curves.packed import ARC_NODES, ARC_PANEL
from edgetally.curves.quadrature import gauss

few = settings(max_examples=80, deadline=None)
ORDERS = ((0, 0), (1, 0), (0, 1), (2, 0), (1, 1), (0, 2))


def of(*loop: Curve) -> list[float]:
    m = moments(Packed.of(loop))
    return [m.m00, m.m10, m.m01, m.m20, m.m11, m.m02]


def closed(*some: Curve) -> list[Curve]:
    """The curves, each joined to the next one by a chord."""
    loop: list[Curve] = []
    for curve, following in zip(some, [*some[1:], some[0]], strict=True):
        loop.append(curve)
        if curve.end != following.start:
            loop.append(Line(curve.end, following.start))
    return loop


def scale(loop: list[Curve]) -> list[float]:
    """What the rounding of each moment is relative to: perimeter × size^(order + 1)."""
    z = np.concatenate([c.points(np.linspace(0, 1, 33)) for c in loop])
    size, length = float(np.abs(z).max()), sum(c.length for c in loop)
    return [length * size ** (p + q + 1) for p, q in ORDERS]


def test_rectangle() -> None:
    assert of(*closed(Line(1 + 2j, 5 + 2j), Line(5 + 5j, 1 + 5j))) == [12, 36, 42, 124, 126, 156]


@few
@given(st.lists(places, min_size=3, max_size=12, unique=True))
def test_polygons_against_fonttools(vertices: list[complex]) -> None:
    pen = MomentsPen()
    pen.moveTo((vertices[0].real, vertices[0].imag))
    for z in vertices[1:]:
        pen.lineTo((z.real, z.imag))
    pen.closePath()
    loop = Packed.polygon(np.array(vertices))
    outside = [pen.area, pen.momentX, pen.momentY, pen.momentXX, pen.momentXY, pen.momentYY]
    m = moments(loop)
    for ours, theirs, slack in zip(of(*closed(*map(Line, vertices, [*vertices[1:], vertices[0]]))), outside,
                                   m.slack.values(), strict=True):  # fmt: skip
        assert ours == pytest.approx(theirs, abs=4 * slack)
    assert [m.m00, m.m10, m.m01, m.m20, m.m11, m.m02] == pytest.approx(outside, abs=4 * max(m.slack.values()))


@few
@given(st.lists(beziers(rational=False).filter(lambda b: b.degree in (2, 3)), min_size=1, max_size=4))
def test_bezier_outlines_against_fonttools(pieces: list[Bezier]) -> None:
    pen = MomentsPen()
    start = pieces[0].start
    pen.moveTo((start.real, start.imag))
    for piece in pieces:
        points = [(z.real, z.imag) for z in map(complex, piece.control)]
        pen.lineTo(points[0])
        (pen.qCurveTo if piece.degree == 2 else pen.curveTo)(*points[1:])
    pen.closePath()
    outside = [pen.area, pen.momentX, pen.momentY, pen.momentXX, pen.momentXY, pen.momentYY]
    loop = closed(*pieces)
    for ours, theirs, size in zip(of(*loop), outside, scale(loop), strict=True):
        assert ours == pytest.approx(theirs, abs=1e-14 * size)


def quadrature_at_30_digits(centre: complex, radius: float, start: float, sweep: float) -> list[float]:
    """Moments of the segment between an arc and its chord by adaptive quadrature of ½·∮x^(p+1)·y^q dy …"""
    with mpmath.workdps(30):
        cx, cy, r = mpmath.mpf(centre.real), mpmath.mpf(centre.imag), mpmath.mpf(radius)
        a, w = mpmath.mpf(start), mpmath.mpf(sweep)

        def arc(t: mpmath.mpf) -> tuple:
            c, s = mpmath.cos(a + w * t), mpmath.sin(a + w * t)
            return cx + r * c, cy + r * s, w * r * c

        x0, y0, _ = arc(mpmath.mpf(1))
        x1, y1, _ = arc(mpmath.mpf(0))

        def chord(t: mpmath.mpf) -> tuple:
            return x0 + (x1 - x0) * t, y0 + (y1 - y0) * t, y1 - y0

        def integral(p: int, q: int) -> mpmath.mpf:
            total = mpmath.mpf(0)
            for path in (arc, chord):
                total += mpmath.quad(
                    lambda t, path=path: (lambda x, y, dy: x ** (p + 1) * y**q * dy)(*path(t)), [0, 0.5, 1]
                )
            return total / (p + 1)

        return [float(integral(p, q)) for p, q in ORDERS]


@pytest.mark.parametrize(
    ("centre", "radius", "start", "sweep"),
    [(0, 1, 0, pi), (3 - 2j, 10, 0.3, 1.0), (3 - 2j, 10, 0.3, -1.0), (100 + 50j, 7, 2, 5.5), (-1j, 2, -1, -6.1),
     (0, 5, 0.1, pi / 3), (1, 1, 1, 1e-2)],
)  # fmt: skip
def test_arcs_against_quadrature(centre: complex, radius: float, start: float, sweep: float) -> None:
    arc = Arc.from_centre(centre, radius, start, sweep)
    loop = closed(arc)
    wanted = quadrature_at_30_digits(complex(centre), radius, start, sweep)
    for ours, exact, size in zip(of(*loop), wanted, scale(loop), strict=True):
        assert ours == pytest.approx(exact, abs=2e-15 * size)


def test_twelve_nodes_integrate_a_panel_of_60_degrees() -> None:
    """The proof of ARC_NODES: on an arc every moment up to the fourth order is a trigonometric polynomial of degree 6.

    So it is enough that the rule integrates e^{ikθ} over a panel for |k| ≤ 6, whatever radius, place or axis ratio. The
    rule's own error, in 40 digits: 3e-19 at k = 6; what is left in double precision is rounding.
    """
    with mpmath.workdps(40):
        panel = mpmath.pi / 3
        nodes = [mpmath.findroot(lambda x: mpmath.legendre(ARC_NODES, x), mpmath.mpf(float(2 * t - 1)))
                 for t in gauss(ARC_NODES)[0]]  # fmt: skip
        slopes = [mpmath.diff(lambda x: mpmath.legendre(ARC_NODES, x), x) for x in nodes]
        weights = [1 / ((1 - x * x) * d * d) for x, d in zip(nodes, slopes, strict=True)]
        for k in range(1, 7):
            rule = sum(w * mpmath.expj(k * panel * (1 + x) / 2) for x, w in zip(nodes, weights, strict=True))
            exact = (mpmath.expj(k * panel) - 1) / (1j * k * panel)
            assert abs(rule - exact) < 4e-19
    t, w = gauss(ARC_NODES)
    for k in range(1, 7):
        exact = (np.exp(1j * k * ARC_PANEL) - 1) / (1j * k * ARC_PANEL)
        assert abs(w @ np.exp(1j * k * ARC_PANEL * t) - exact) < 4e-16


@pytest.mark.parametrize("ratio", [1.0, 0.5, 0.1, 1e-3])
@pytest.mark.parametrize("sweep", [0.7, pi / 3, 2.0, 5.0, tau])
def test_nodes_are_enough_up_to_fourth_moments(ratio: float, sweep: float) -> None:
    """On their own axes elliptic arcs are squeezed circles: the rule's relative error is that of the circle.

    What is left is the rounding of the points, ε times the long axis, of which a slim ellipse's y is a small share.
    """
    arc = EllipticArc.from_axes(0, 1, ratio, 0.2, 0.2 + sweep)
    many = np.linspace(0, 1, 41)
    t, w = gauss(30)
    t = (many[:-1, None] + np.diff(many)[:, None] * t).ravel()
    z, dz = arc.points(t), np.tile(w / 40, 40) * arc.derivatives(t)
    blocks = list(Packed.of([arc]).curved_nodes())
    for p in range(5):
        for q in range(5 - p):
            fine = z.real ** (p + 1) * z.imag**q @ dz.imag
            ours = sum((b.real ** (p + 1) * b.imag**q * d.imag).sum() for b, d in blocks)
            assert ours == pytest.approx(fine, abs=4e-15 * ratio**q)


@few
@given(beziers())
def test_bezier_nodes_are_enough_up_to_fourth_moments(piece: Bezier) -> None:
    piece = piece.moved(1 / max(abs(p - piece.start) for p in piece.control), 0)
    piece = piece.moved(1, -piece.start)
    many = np.linspace(0, 1, 201)
    t, w = gauss(12)
    t = (many[:-1, None] + np.diff(many)[:, None] * t).ravel()
    z, dz = piece.points(t), np.tile(w / 200, 200) * piece.derivatives(t)
    blocks = list(Packed.of([piece]).curved_nodes())
    for p in range(5):
        for q in range(5 - p):
            fine = z.real ** (p + 1) * z.imag**q @ dz.imag
            ours = sum((b.real ** (p + 1) * b.imag**q * d.imag).sum() for b, d in blocks)
            assert ours == pytest.approx(fine, abs=1e-13)


@pytest.mark.parametrize("ratio", [1e3, 1e6, 1e8])
def test_a_flat_arc_keeps_the_digits_of_its_sagitta(ratio: float) -> None:
    """Radius = ratio × chord: the segment's area is ⅔·chord·sagitta to relative (chord/radius)²."""
    chord, direction = 2.0, complex(cos(0.6), sin(0.6))
    bulge = 1 / (4 * ratio)  # tan(sweep/4), sweep ≈ chord/radius
    arc = Arc.from_bulge(0.3 + 0.2j, 0.3 + 0.2j + chord * direction, bulge)
    assert arc.radius == pytest.approx(ratio * chord, rel=1e-6)
    sagitta = bulge * chord / 2
    assert enclosed_area(Packed.of(closed(arc))) == pytest.approx(2 / 3 * chord * sagitta, rel=1e-6, abs=1e-15)
    assert arc.length == pytest.approx(chord, rel=1e-6)
    assert arc.end == pytest.approx(0.3 + 0.2j + chord * direction, rel=1e-15)
    reach, t = arc.support(-1j * direction)
    assert t == pytest.approx(0.5, abs=1e-4)
    on_chord = (1j * direction.conjugate() * (0.3 + 0.2j)).real
    assert reach - on_chord == pytest.approx(sagitta, abs=1e-15)


@few
@given(st.lists(curves, min_size=1, max_size=3), places, st.floats(-pi, pi))
def test_moments_follow_the_frame(some: list[Curve], origin: complex, angle: float) -> None:
    """Steiner's rule and the turn of axes, from the moments in one frame to those in another."""
    loop = closed(*some)
    a, x, y, xx, xy, yy = of(*loop)
    m = moments(Packed.of(loop).framed(origin, complex(cos(angle), sin(angle))))
    p, q, c, s = origin.real, origin.imag, cos(angle), sin(angle)
    x, y, xx, xy, yy = (
        x - a * p, y - a * q, xx - 2 * p * x + a * p * p, xy - p * y - q * x + a * p * q, yy - 2 * q * y + a * q * q,
    )  # fmt: skip
    length, far = (
        sum(k.length for k in loop),
        max(map(abs, [origin, *(k.start for k in loop)])) + sum(k.length for k in loop),
    )
    wanted = (a, c * x + s * y, c * y - s * x, c * c * xx + 2 * c * s * xy + s * s * yy,
              (c * c - s * s) * xy + c * s * (yy - xx), s * s * xx - 2 * c * s * xy + c * c * yy)  # fmt: skip
    for ours, value, (i, j) in zip((m.m00, m.m10, m.m01, m.m20, m.m11, m.m02), wanted, ORDERS, strict=True):
        # rounding all along the boundary, and at the ends where the neighbours miss each other by some ε
        assert ours == pytest.approx(value, abs=4e-15 * (10 * length + far) * far ** (i + j + 1))


@few
@given(st.lists(curves, min_size=1, max_size=3), places)
def test_slack_bounds_a_shift_of_the_boundary(some: list[Curve], shift: complex) -> None:
    loop = closed(*some)
    tiny = shift / 50 * 1e-6
    m = moments(Packed.of(loop), input_rounding=abs(tiny))
    assume(abs(m.m00) > 1)  # the bound is of the first order: a loop without breadth has only the second
    moved = moments(Packed.of([k.moved(1, tiny) for k in loop]))
    keys = ("m00", "m10", "m01", "m20", "m11", "m02")
    for key in keys:
        assert abs(getattr(moved, key) - getattr(m, key)) <= 1.001 * m.slack[key]


@few
@given(elliptic_arcs(), st.integers(2, 5))
def test_areas_add_over_parts(arc: EllipticArc, n: int) -> None:
    parts: list[Curve] = []
    rest: EllipticArc = arc
    for k in range(n, 1, -1):
        part, rest = rest.split(1 / k)
        parts.append(part)
    parts.append(rest)
    whole = closed(arc)
    for ours, theirs, size in zip(of(*whole), of(*parts, *whole[1:]), scale(whole), strict=True):
        assert ours == pytest.approx(theirs, abs=1e-14 * size)


def test_many_vertices_in_blocks() -> None:
    """The same outline as one block and as several, with arcs and splines in between."""
    n = 20000
    ring = 100 * np.exp(2j * pi * np.arange(n) / n)
    m = moments(Packed.polygon(ring))
    assert m.m00 == pytest.approx(0.5 * n * 1e4 * sin(2 * pi / n), rel=1e-14)
    assert m.m02 == pytest.approx(n / 24 * 1e8 * sin(2 * pi / n) * (2 + cos(2 * pi / n)), rel=1e-13)
    lines: list[Curve] = [Line(a, b) for a, b in zip(ring.tolist()[:-1], ring.tolist()[1:], strict=True)]
    last = Arc.from_bulge(complex(ring[-1]), complex(ring[0]), 0.5)
    mixed = moments(Packed.of([*lines, last]))
    cap = moments(Packed.of(closed(last)))
    assert mixed.m00 == pytest.approx(m.m00 + cap.m00, rel=1e-14)
