"""How random input is drawn: the same way in every run, so that a green run stays green.

HYPOTHESIS_PROFILE=explore draws anew each time; run it when the code under a law has changed.
"""

from __future__ import annotations

import os

from hypothesis import settings

settings.register_profile(
    "steady", deadline=None, max_examples=60, derandomize=True, print_blob=True
)
settings.register_profile("explore", deadline=None, max_examples=200, print_blob=True)
settings.load_profile(os.environ.get("HYPOTHESIS_PROFILE", "steady"))
