"""Random input in this folder: no time limit per example, since tests are never timed."""

from __future__ import annotations

from hypothesis import settings

settings.register_profile("laws", deadline=None, max_examples=60, print_blob=True)
settings.load_profile("laws")
