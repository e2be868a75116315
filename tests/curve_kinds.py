"""Random curves of every kind for the tests of laws, and plain measures of them that share no code with the package."""

from collections.abc import Callable
from itertools import pairwise
from math import pi, tau

import numpy as np
from hypothesis import assume
from hypothesis import strategies as st

from edgetally.curves import Arc, Bezier, Curve, EllipticArc, Line

shares = st.floats(0.02, 0.98)
angles = st.floats(-pi, pi)
# sixteenths: what shrinks to readable numbers and still mixes all digits after a rotation
coordinates = st.integers(-800, 800).map(lambda n: n / 16)
places = st.builds(complex, coordinates, coordinates)
sweeps = st.builds(lambda size, sign: size * sign, st.floats(0.05, tau), st.sampled_from([1.0, -1.0]))
sizes = st.floats(0.5, 60.0)


@st.composite
def lines(draw: Callable) -> Line:
    start, end = draw(places), draw(places)
    assume(abs(end - start) > 0.5)
    return Line(start, end)


arcs = st.builds(Arc.from_centre, places, sizes, angles, sweeps)


@st.composite
def elliptic_arcs(draw: Callable) -> EllipticArc:
    major = draw(sizes) * np.exp(1j * draw(angles))
    start = draw(angles)
    arc = EllipticArc.from_axes(draw(places), complex(major), draw(st.floats(0.03, 0.97)), start, start + draw(sweeps))
    return arc.reversed() if draw(st.booleans()) else arc


@st.composite
def beziers(draw: Callable, *, rational: bool | None = None) -> Bezier:
    control = tuple(draw(st.lists(places, min_size=2, max_size=6)))
    assume(min(abs(b - a) for a, b in pairwise(control)) > 0.5)
    if rational is None:
        rational = draw(st.booleans())
    weight = st.floats(0.3, 3.0)
    weights = tuple(draw(st.lists(weight, min_size=len(control), max_size=len(control)))) if rational else None
    return Bezier(control, weights)


curves = st.one_of(lines(), arcs, elliptic_arcs(), beziers())


def size_of(curve: Curve) -> float:
    """How large the numbers are that describe the curve: what rounding is relative to."""
    z = curve.points(np.linspace(0, 1, 65))
    control = np.abs(curve.control) if isinstance(curve, Bezier) else [0.0]
    return float(max(np.abs(z).max(), max(control)))


def chopped(curve: Curve, pieces: int = 400) -> np.ndarray:
    return curve.points(np.linspace(0, 1, pieces + 1))


def clearance(curve: Curve, p: complex) -> float:
    """About how far p is from the curve."""
    return float(np.abs(chopped(curve) - p).min())


def runs_back(curve: Curve) -> bool:
    """Whether it is a Bézier piece squeezed into a line, which may run back over itself."""
    if not isinstance(curve, Bezier) or curve.degree == 1:
        return False
    across = [((p - curve.start) * (curve.end - curve.start).conjugate()).imag for p in curve.control]
    return max(across) - min(across) <= 1
