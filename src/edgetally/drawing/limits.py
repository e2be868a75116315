"""Limits that protect the program from a hostile or a hopeless file, each with its reason."""

MAX_BYTES = 512 * 2**20
"""A drawing of a cross-section is rarely above 10 MB; the library needs about 20 times a file's size in memory."""

MAX_CURVES = 2_000_000
"""Curves taken from one drawing; beyond it the memory of an ordinary computer is at risk."""

MAX_COORDINATE = 1e10
"""A coordinate whose double precision is coarser than a micrometre in a millimetre drawing places nothing."""

MAX_LEAVES = 4_000_000
"""Entities after opening all block references; an array of 32 767 × 32 767 would take years."""

MAX_DEPTH = 64
"""Depth of nested blocks; drawings made by people stay below ten."""
