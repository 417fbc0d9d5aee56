"""What a measure holds, and that it is a value."""

from __future__ import annotations

import dataclasses

import pytest

from epochconv import measures
from epochconv.measure import Measure


def test_measure_cannot_be_changed() -> None:
    with pytest.raises(dataclasses.FrozenInstanceError):
        measures.AGE.unit = "Myr"  # type: ignore[misc] # what must fail


def test_equal_measures_are_one_key() -> None:
    again = dataclasses.replace(measures.AGE)
    assert again == measures.AGE
    assert {again: 1}[measures.AGE] == 1
    assert dataclasses.replace(measures.AGE, symbol="T") != measures.AGE


def test_words_for_what_is_wrong_have_defaults() -> None:
    bare = Measure(
        name="x", symbol="x", unit="", meaning="", source="", value_at=lambda moment, _: moment.x
    )
    assert (bare.below, bare.above, bare.missing) == (
        "is below any that this history has",
        "is above any that this history has",
        "does not exist",
    )
    assert (bare.moment_of, bare.slope_at, bare.rescaled_from, bare.range_of) == (None,) * 4
    assert bare.aliases == ()
