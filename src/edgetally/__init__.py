"""edgetally: section properties of a cross-section drawn in DXF, with the evidence of how it was read."""

__version__ = "0.1.0"
