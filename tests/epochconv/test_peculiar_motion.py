"""What an object's own motion adds to the error of its redshift."""

from __future__ import annotations

import math

import numpy as np
import pint
import pytest

from epochconv import measures
from epochconv.errors import ArgumentError
from epochconv.intervals import Spread
from epochconv.peculiar_motion import speed_of, widened

SPEED_OF_LIGHT_KM_PER_S = 299792.458


def spread_of(values: list[float], lower: float, upper: float) -> Spread:
    count = len(values)
    return Spread(np.array(values), np.full(count, lower), np.full(count, upper))


def test_share_of_a_redshift() -> None:
    """300 km/s are all of redshift 0.001, a tenth of 0.01 and a hundredth of 0.1 (own sums)."""
    z = [0.001, 0.01, 0.1]
    found = widened(spread_of(z, 0, 0), measures.REDSHIFT, 300)
    np.testing.assert_allclose(found.upper / z, [1, 0.1, 0.01], rtol=0.11)
    np.testing.assert_array_equal(found.upper, found.lower)


def test_grows_with_the_stretch_of_light() -> None:
    """(1 + z)(1 + v/c) - (1 + z)."""
    found = widened(spread_of([0, 6], 0, 0), measures.REDSHIFT, 299.792458)
    np.testing.assert_allclose(found.lower, [0.001, 0.007], rtol=1e-13)


def test_of_a_scale_factor_is_that_of_its_redshift() -> None:
    """To first order: a = 1/(1 + z)."""
    z, speed = 1.0, 30.0
    found = widened(spread_of([0.5], 0, 0), measures.SCALE_FACTOR, speed)
    moved = (1 + z) * speed / SPEED_OF_LIGHT_KM_PER_S
    np.testing.assert_allclose(found.upper, 0.5 - 1 / (1 + z + moved), rtol=2e-4)


def test_adds_in_quadrature_on_each_side() -> None:
    blur = 300 / SPEED_OF_LIGHT_KM_PER_S
    found = widened(spread_of([0.0], 3 * blur, 4 * blur), measures.REDSHIFT, 300)
    np.testing.assert_allclose(found.lower, blur * math.sqrt(10))
    np.testing.assert_allclose(found.upper, blur * math.sqrt(17))
    assert found.values.tolist() == [0.0]


def test_leaves_unknown_errors_unknown() -> None:
    found = widened(spread_of([0.1], math.nan, 0.1), measures.REDSHIFT, 300)
    assert np.isnan(found.lower[0])
    assert found.upper[0] > 0.1


@pytest.mark.parametrize(
    "measure",
    [one for one in measures.MEASURES if one.name not in ("redshift", "scale factor")],
    ids=lambda measure: measure.name,
)
def test_is_refused_where_no_redshift_was_observed(measure: measures.Measure) -> None:
    with pytest.raises(ArgumentError, match=f"no {measure.name}"):
        widened(spread_of([1.0], 0, 0), measure, 300)


def test_speed_is_a_number_or_a_quantity() -> None:
    registry = pint.UnitRegistry()
    assert speed_of(300) == 300.0
    assert speed_of(0) == 0.0
    assert speed_of(registry.Quantity(3e5, "m/s")) == pytest.approx(300, rel=1e-14)
    assert speed_of(registry.Quantity(0.3, "megameter/second")) == pytest.approx(300, rel=1e-14)


@pytest.mark.parametrize(
    "bad", [-1, math.nan, math.inf, 1e6, "300", "fast", True, [1, 2], None, 2 + 1j]
)
def test_speed_that_is_none(bad: object) -> None:
    with pytest.raises(ArgumentError, match="300"):
        speed_of(bad)


def test_speed_of_another_dimension() -> None:
    with pytest.raises(ArgumentError, match="peculiar velocity"):
        speed_of(pint.UnitRegistry().Quantity(3, "km"))
