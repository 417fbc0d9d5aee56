"""Numbers that bring their own errors, with and without the package that makes them."""

from __future__ import annotations

import importlib
import math
import sys
from collections.abc import Callable
from types import ModuleType
from typing import Any

import numpy as np
import pint
import pytest

import epochconv
from epochconv.errors import ArgumentError
from epochconv.uncertain_numbers import best_values, deviations, uncertain_numbers
from epochconv.units import unit_named
from tests.epochconv.uncertain_number import UncertainNumber

NUMBER = unit_named("")


@pytest.fixture
def package() -> ModuleType:
    """The package itself: an extra of nobody, so that this may be skipped."""
    return pytest.importorskip("uncertainties", reason="the uncertainties package is optional")


def test_conversion_with_an_error_works_where_the_package_is_not(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    monkeypatch.setitem(sys.modules, "uncertainties", None)  # importing it raises
    with pytest.raises(ImportError):
        importlib.import_module("uncertainties")
    epochconv.convert_with_error(6.3, 0.1, "redshift", "age")
    found = epochconv.convert_with_linear_error(UncertainNumber(6.3, 0.1), None, "redshift", "age")
    assert isinstance(found.magnitude, UncertainNumber)


class TestKnownByWhatTheyOffer:
    @pytest.mark.parametrize(
        ("value", "shape"),
        [
            (UncertainNumber(1, 0.1), ()),
            ([UncertainNumber(1, 0.1), UncertainNumber(2, 0.2)], (2,)),
            ([[UncertainNumber(1, 0.1), 5]], (1, 2)),
            (np.array([[UncertainNumber(1, 0.1)], [UncertainNumber(2, 0.2)]]), (2, 1)),
        ],
    )
    def test_one_or_many(self, value: object, shape: tuple[int, ...]) -> None:
        found = uncertain_numbers(value, NUMBER, "redshift")
        assert found is not None
        flat, own_shape, asker = found
        assert (own_shape, asker, flat.shape) == (shape, None, (math.prod(shape),))
        assert best_values(flat)[0] == 1.0
        assert deviations(flat)[0] == 0.1

    def test_plain_numbers_between_them_are_exact(self) -> None:
        found = uncertain_numbers([5, UncertainNumber(1, 0.1), 2.5], NUMBER, "redshift")
        assert found is not None
        assert best_values(found[0]).tolist() == [5.0, 1.0, 2.5]
        assert deviations(found[0]).tolist() == [0.0, 0.1, 0.0]

    @pytest.mark.parametrize(
        "value",
        [1.5, "1.5", "10.9 Gyr", [1, 2.5], (1, 2), np.arange(3), [], [None], [[1], [2, 3]], None],
    )
    def test_others_are_none(self, value: object) -> None:
        assert uncertain_numbers(value, NUMBER, "redshift") is None

    def test_quantities_of_plain_numbers_are_none(self) -> None:
        quantity = pint.UnitRegistry().Quantity([1.0, 2.0], "Gyr")
        assert uncertain_numbers(quantity, unit_named("Gyr"), "age") is None


def one_of(kind: str, request: pytest.FixtureRequest) -> Callable[[float, float], Any]:
    """A maker of uncertain numbers: ours, or the package's."""
    if kind == "plain":
        return UncertainNumber
    return request.getfixturevalue("package").ufloat


@pytest.mark.parametrize("kind", ["plain", "package"])
class TestConversion:
    def test_gives_the_interval_of_their_deviation(
        self, kind: str, request: pytest.FixtureRequest
    ) -> None:
        number = one_of(kind, request)
        found = epochconv.convert_with_error(number(6.3, 0.1), None, "redshift", "age")
        expected = epochconv.convert_with_error(6.3, 0.1, "redshift", "age")
        assert isinstance(found.value.magnitude, float)
        for part in ("value", "lower_error", "upper_error", "low", "high"):
            assert getattr(found, part) == getattr(expected, part)

    def test_of_arrays(self, kind: str, request: pytest.FixtureRequest) -> None:
        number = one_of(kind, request)
        array = np.array([[number(0.5, 0.1), number(1.0, 0.2)], [number(6, 0.3), number(9, 1)]])
        found = epochconv.convert_with_error(array, None, "redshift", "age", unit="Myr")
        expected = epochconv.convert_with_error(
            [[0.5, 1.0], [6, 9]], [[0.1, 0.2], [0.3, 1]], "redshift", "age", unit="Myr"
        )
        np.testing.assert_array_equal(found.low.magnitude, expected.low.magnitude)
        assert found.value.units == expected.value.units

    def test_of_quantities(self, kind: str, request: pytest.FixtureRequest) -> None:
        number, registry = one_of(kind, request), pint.UnitRegistry()
        for given in (
            registry.Quantity(number(900.0, 30.0), "Myr"),
            registry.Quantity(np.array([number(900.0, 30.0)], dtype=object), "Myr"),
        ):
            found = epochconv.convert_with_error(given, None, "age", "lookback time")
            expected = epochconv.convert_with_error(0.9, 0.03, "age", "lookback time")
            np.testing.assert_allclose(
                np.ravel(found.low.magnitude), expected.low.magnitude, rtol=1e-12
            )
            assert isinstance(found.value, registry.Quantity)

    def test_linear_form_gives_such_numbers(
        self, kind: str, request: pytest.FixtureRequest
    ) -> None:
        number = one_of(kind, request)
        found = epochconv.convert_with_linear_error(number(6.3, 0.1), None, "redshift", "age")
        expected = epochconv.convert_with_linear_error(6.3, 0.1, "redshift", "age")
        assert found.units == expected.value.units
        assert found.magnitude.nominal_value == pytest.approx(expected.value.magnitude, rel=1e-15)
        assert found.magnitude.std_dev == pytest.approx(expected.error.magnitude, rel=1e-15)

    def test_linear_form_of_arrays(self, kind: str, request: pytest.FixtureRequest) -> None:
        number = one_of(kind, request)
        array = [[number(0.5, 0.1)], [number(6, 0.3)]]
        found = epochconv.convert_with_linear_error(array, None, "redshift", "age", unit="Myr")
        expected = epochconv.convert_with_linear_error(
            [[0.5], [6]], [[0.1], [0.3]], "redshift", "age", unit="Myr"
        )
        assert found.magnitude.shape == (2, 1)
        for index in ((0, 0), (1, 0)):
            item = found.magnitude[index]
            assert item.nominal_value == pytest.approx(expected.value.magnitude[index], rel=1e-14)
            assert item.std_dev == pytest.approx(expected.error.magnitude[index], rel=1e-14)

    def test_error_given_twice_is_refused(self, kind: str, request: pytest.FixtureRequest) -> None:
        number = one_of(kind, request)
        for call in (epochconv.convert_with_error, epochconv.convert_with_linear_error):
            with pytest.raises(ArgumentError, match="errors of their own"):
                call(number(6.3, 0.1), 0.1, "redshift", "age")


def test_linear_form_keeps_what_numbers_have_in_common(package: ModuleType) -> None:
    """Age and lookback time of one redshift add up to the age of the universe, without error."""
    z = package.ufloat(6.3, 0.1)
    age, lookback = (
        epochconv.convert_with_linear_error(z, None, "redshift", target)
        for target in ("age", "lookback time")
    )
    total = (age + lookback).magnitude
    today = epochconv.convert(0, "redshift", "age").magnitude
    assert total.nominal_value == pytest.approx(today, rel=1e-12)
    assert total.std_dev < 1e-12
    assert age.magnitude.std_dev > 0.01


def test_measurement_of_a_registry(package: ModuleType) -> None:
    """pint's own pair of value and error, of whatever unit."""
    registry = pint.UnitRegistry()
    for unit, size in (("Gyr", 10.9), ("century", 10.9e7)):
        measured = registry.Quantity(size, unit).plus_minus(size / 100)
        found = epochconv.convert_with_error(measured, None, "lookback time", "redshift")
        expected = epochconv.convert_with_error(10.9, 0.109, "lookback time", "redshift")
        assert found.low.magnitude == pytest.approx(expected.low.magnitude, rel=1e-11)
        assert isinstance(found.low, registry.Quantity)
        linear = epochconv.convert_with_linear_error(measured, None, "lookback time", "age")
        assert linear.magnitude.std_dev == pytest.approx(0.109, rel=1e-11)


def test_wrong_dimension_is_named() -> None:
    quantity = pint.UnitRegistry().Quantity(UncertainNumber(3.0, 0.1), "Mpc")
    with pytest.raises(ArgumentError, match="lookback time is in"):
        epochconv.convert_with_error(quantity, None, "lookback time", "redshift")
