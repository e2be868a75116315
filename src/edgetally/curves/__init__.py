"""The vocabulary: plane curves that know their own geometry, and nothing of who integrates or draws them.

A point of the plane is one complex number x + iy, so that a rotation is a product and a mirror image a conjugate.
"""

from edgetally.curves.affine import affine_image
from edgetally.curves.arc import Arc
from edgetally.curves.bezier import Bezier
from edgetally.curves.curve import UNKNOWN, Curve, Source
from edgetally.curves.elliptic import EllipticArc
from edgetally.curves.line import Line
from edgetally.curves.packed import Packed
from edgetally.curves.spline import bspline_pieces, fit_spline

__all__ = [
    "UNKNOWN",
    "Arc",
    "Bezier",
    "Curve",
    "EllipticArc",
    "Line",
    "Packed",
    "Source",
    "affine_image",
    "bspline_pieces",
    "fit_spline",
]
