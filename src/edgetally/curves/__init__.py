"""The vocabulary: plane curves that know their own geometry, and nothing of who integrates or draws them.

A point of the plane is one complex number x + iy, so that a rotation is a product and a mirror image a conjugate.
"""

from edgetally.curves.arc import Arc
from edgetally.curves.curve import UNKNOWN, Curve, Source
from edgetally.curves.line import Line
from edgetally.curves.packed import Packed

__all__ = ["UNKNOWN", "Arc", "Curve", "Line", "Packed", "Source"]
