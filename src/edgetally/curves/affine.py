"""The image of a curve under any affine map, as a block scaled unequally in x and y makes it."""

from __future__ import annotations

from edgetally.curves.arc import Arc
from edgetally.curves.bezier import Bezier
from edgetally.curves.curve import Curve
from edgetally.curves.elliptic import EllipticArc
from edgetally.curves.line import Line


def affine_image(curve: Curve, a: complex, b: complex, shift: complex) -> Curve:
    """Return the image of the curve under z → a·z + b·conj(z) + shift, exactly: of an arc, an elliptic arc.

    (x, y) → (p·x, q·y) is a = (p + q)/2, b = (p − q)/2. Areas scale by |a|² − |b|²: the image is mirrored if that is
    negative. Arcs stay arcs where the map scales all directions alike. Raises ValueError for a map that flattens an arc
    into a line (|a| = |b|), TypeError for an unknown kind of curve.
    """
    if isinstance(curve, Line):
        return Line(_image(curve.start, a, b, shift), _image(curve.end, a, b, shift), curve.source)
    if isinstance(curve, Bezier):
        return Bezier(tuple(_image(p, a, b, shift) for p in curve.control), curve.weights, curve.source)
    if isinstance(curve, Arc | EllipticArc):
        return EllipticArc.image(curve, a, b, shift)
    raise TypeError(f"no affine image of a curve of kind {type(curve).__name__}")


def _image(z: complex, a: complex, b: complex, shift: complex) -> complex:
    return a * z + b * z.conjugate() + shift
