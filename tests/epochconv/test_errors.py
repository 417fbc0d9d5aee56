"""One root for all errors, what each carries, and that nothing is lost on the way to a worker."""

from __future__ import annotations

import copy
import pickle
from collections.abc import Callable

import pytest

import epochconv
from epochconv import errors


def test_one_root_and_one_family() -> None:
    for name in ("OutOfRangeError", "TwoAnswersError", "ArgumentError"):
        kind = getattr(epochconv, name)
        assert issubclass(kind, epochconv.EpochconvError)
        assert issubclass(kind, ValueError)
    assert issubclass(errors.OutOfRangeError, errors.ArgumentError)
    assert issubclass(errors.TwoAnswersError, errors.ArgumentError)


def test_out_of_range_error_carries_its_parts() -> None:
    with pytest.raises(errors.OutOfRangeError) as caught:
        epochconv.convert([[1, 99], [2, -5]], "age", "redshift", history="round numbers")
    error = caught.value
    assert (error.measure, error.value, error.index) == ("age", 99.0, (0, 1))
    assert (error.count, error.unit) == (2, "Gyr")
    assert 0 < error.low < 1e-9
    assert error.high == pytest.approx(13.467, abs=5e-4)


def test_two_answers_error_carries_both_redshifts() -> None:
    with pytest.raises(errors.TwoAnswersError) as caught:
        epochconv.convert(1500, "D_A", "redshift")
    error = caught.value
    assert (error.measure, error.value) == ("angular diameter distance", 1500.0)
    nearer, farther = error.redshifts
    assert nearer < 1.6 < farther
    for redshift in error.redshifts:
        distance = epochconv.convert(redshift, "redshift", "D_A").magnitude
        assert distance == pytest.approx(1500, rel=1e-11)


def pickled(error: Exception) -> Exception:
    again: Exception = pickle.loads(pickle.dumps(error))
    return again


@pytest.mark.parametrize("way", [copy.copy, copy.deepcopy, pickled])
@pytest.mark.parametrize(("value", "measure"), [(-1, "redshift"), (1500, "D_A"), (1, "nonsense")])
def test_errors_survive_the_way_from_a_worker(
    way: Callable[[Exception], Exception], value: float, measure: str
) -> None:
    """An error that cannot be pickled leaves a pool of processes waiting for ever."""
    with pytest.raises(errors.EpochconvError) as caught:
        epochconv.convert(value, measure, "age")
    again = way(caught.value)
    assert type(again) is type(caught.value)
    assert str(again) == str(caught.value)
    assert vars(again) == vars(caught.value)
