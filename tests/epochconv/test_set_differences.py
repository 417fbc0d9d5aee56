"""How much a column depends on the parameter set."""

from __future__ import annotations

import math

import numpy as np
import pytest

import epochconv
from epochconv.errors import ArgumentError
from epochconv.intervals import Spread, image
from epochconv.published import history_of
from epochconv.registry import measure_named
from epochconv.set_differences import AT_ODDS, Dependence, depends_on_parameters


def dependence(
    values: list[float],
    error: float,
    source: str,
    target: str,
    side: str | None = None,
    **how: object,
) -> Dependence:
    array = np.array(values)
    pair = measure_named(source), measure_named(target)
    errors = np.full_like(array, error)
    converted = image(
        Spread(array, errors, errors), *pair, history_of(None), side=side, outside="nan"
    )
    return depends_on_parameters(converted, array, *pair, side=side, **how)


def test_age_at_redshift_six() -> None:
    """0.929 Gyr for 67.66 and 0.3111, 0.877 for 73 and 0.3 (own quadrature, without radiation)."""
    found = dependence([6.0], 0.01, "redshift", "age")
    apart = [epochconv.convert(6, "redshift", "age", history=name).magnitude for name in AT_ODDS]
    assert found.difference[0] == pytest.approx(abs(apart[0] - apart[1]), rel=1e-13)
    assert 0.05 < found.difference[0] < 0.15
    assert found.beyond_error.tolist() == [True]


def test_near_distances_go_with_the_hubble_constant() -> None:
    """D_C = cz/H0 for small z: 73.04/67.36 - 1 is 8.4 %, more than a 1 % error, less than 10 %."""
    for error, beyond in ((1e-6, True), (1e-5, False)):
        found = dependence([1e-4], error, "redshift", "comoving distance")
        nearest = 299792.458 * 1e-4 / 73.04
        assert found.difference[0] / nearest == pytest.approx(73.04 / 67.36 - 1, rel=1e-3)
        assert found.beyond_error.tolist() == [beyond]


def test_larger_side_of_the_error_counts() -> None:
    """The age at z 6 differs by 0.1 Gyr: between the two sides of this error."""
    pair = measure_named("redshift"), measure_named("age")
    spread = Spread(np.array([6.0]), np.array([0.01]), np.array([3.0]))
    converted = image(spread, *pair, history_of(None))
    assert not depends_on_parameters(converted, spread.values, *pair).beyond_error[0]


def test_what_needs_no_history_depends_on_none() -> None:
    for target in ("scale factor", "CMB temperature", "redshift"):
        found = dependence([0.5, 6.0], 0.0, "redshift", target)
        assert found.difference.tolist() == [0.0, 0.0]
        assert not found.beyond_error.any()
    itself = ["angular diameter distance"] * 2  # where no side is needed
    assert dependence([1000.0], 1.0, *itself).difference.tolist() == [0.0]
    # Planck's temperature and WMAP's differ by 0.0005 K.
    found = dependence([1.0], 0.0, "redshift", "CMB temperature", sets=("planck 2018", "wmap 2013"))
    assert found.difference[0] == pytest.approx(0.001, rel=1e-9)


def test_time_older_than_one_of_the_universes() -> None:
    """13.3 Gyr ago was before the Big Bang of the distance ladder, 20 before everybody's."""
    found = dependence([1.0, 13.3, 20.0, math.nan], 0.1, "lookback time", "redshift")
    assert np.isfinite(found.difference[0])
    assert found.difference[1] == math.inf
    assert np.isnan(found.difference[2:]).all()
    assert found.beyond_error.tolist() == [False, True, False, False]


def test_values_that_stand_for_two_epochs() -> None:
    source, target = "angular diameter distance", "redshift"
    pair = measure_named(source), measure_named(target)
    for side in ("nearer", "farther"):
        found = dependence([1000.0], 1.0, source, target, side)
        assert found.difference[0] > 0.02
    converted = image(
        Spread(*(np.array([x]) for x in (1000.0, 1.0, 1.0))), *pair, history_of(None), side=side
    )
    found = depends_on_parameters(converted, np.array([1000.0]), *pair)
    assert np.isnan(found.difference).all()
    assert not found.beyond_error.any()


def test_unknown_error_is_not_exceeded() -> None:
    found = dependence([6.0], math.nan, "redshift", "age")
    assert found.difference[0] > 0
    assert not found.beyond_error.any()


def test_unknown_set_is_named() -> None:
    with pytest.raises(ArgumentError, match="planck 2081"):
        dependence([6.0], 0.0, "redshift", "age", sets=("planck 2018", "planck 2081"))
