"""Expectations in this folder are computed in 40 digits, unless a test says otherwise."""

from __future__ import annotations

from collections.abc import Iterator

import pytest
from mpmath import mp


@pytest.fixture(autouse=True)
def forty_digits() -> Iterator[None]:
    with mp.workdps(40):
        yield
