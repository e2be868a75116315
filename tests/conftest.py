"""Settings of the suite: property-based tests are the same on every run, unless asked to explore.

HYPOTHESIS_PROFILE=explore python -m pytest
"""

from __future__ import annotations

import os

# as the command line does, before numpy is loaded: the matrices of one section are too small for several threads
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

from hypothesis import settings

settings.register_profile("same", derandomize=True, deadline=None, print_blob=True)
settings.register_profile("explore", deadline=None, max_examples=1000)
settings.load_profile(os.environ.get("HYPOTHESIS_PROFILE", "same"))
