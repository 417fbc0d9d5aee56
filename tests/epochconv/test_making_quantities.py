"""Results as quantities: in which registry they live, in which unit, and what is refused."""

from __future__ import annotations

import gc
import math
import weakref
from decimal import Decimal
from typing import Any

import numpy as np
import pint
import pytest

from epochconv.constants import GIGAYEAR_S, LIGHT_YEAR_M, PARSEC_M
from epochconv.errors import ArgumentError
from epochconv.making_quantities import quantity_of
from epochconv.units import unit_named
from tests.closeness import assert_close
from tests.epochconv.conftest import FEW_DEFINITIONS, made_registry

MPC, GYR, KELVIN, NUMBER, MODULUS, RATE = (
    unit_named(symbol) for symbol in ("Mpc", "Gyr", "K", "", "mag", "km/s/Mpc")
)
TANGENT_PARSEC_M = 149597870700 / math.tan(math.pi / 648000)


def test_without_a_wish_it_is_our_unit_in_the_application_registry(
    other_application: pint.UnitRegistry,
) -> None:
    for unit, text in (
        (MPC, "megaparsec"),
        (GYR, "gigayear"),
        (KELVIN, "kelvin"),
        (NUMBER, ""),
        (MODULUS, ""),
        (RATE, "kilometer / second / megaparsec"),
    ):
        found = quantity_of(1.5, unit, None, 3.0)
        assert isinstance(found, other_application.Quantity)
        assert found.magnitude == 1.5
        assert found.units == other_application.Unit(text)


def test_without_a_wish_it_lives_where_the_asking_quantity_lives(
    foreign: pint.UnitRegistry, small: pint.UnitRegistry
) -> None:
    for registry in (foreign, small):
        found = quantity_of(1.5, GYR, None, registry.Quantity(1.0, "meter"))
        assert isinstance(found, registry.Quantity)
        assert found.units == registry.Unit("gigayear")


def test_application_registry_is_the_one_of_the_moment(
    other_application: pint.UnitRegistry,
) -> None:
    before = quantity_of(1.0, GYR, "Myr", None)
    third = pint.UnitRegistry()
    pint.set_application_registry(third)
    after = quantity_of(1.0, GYR, "Myr", None)
    assert isinstance(before, other_application.Quantity)
    assert isinstance(after, third.Quantity)


@pytest.mark.parametrize(
    ("unit", "wanted", "expected"),
    [
        (MPC, "Mpc", 1.0),
        (MPC, "kpc", 1000.0),
        (MPC, "km", PARSEC_M * 1e3),
        (MPC, "Gly", PARSEC_M / LIGHT_YEAR_M * 1e-3),
        (MPC, "lightyear", PARSEC_M / LIGHT_YEAR_M * 1e6),
        (MPC, "billion light-years", PARSEC_M / LIGHT_YEAR_M * 1e-3),
        (MPC, "AU", PARSEC_M * 1e6 / 149597870700),
        (MPC, "cm", PARSEC_M * 1e8),
        (MPC, "mile", PARSEC_M * 1e6 / 1609.344),
        (GYR, "Myr", 1000.0),
        (GYR, "year", 1e9),
        (GYR, "million years", 1000.0),
        (GYR, "s", GIGAYEAR_S),
        (GYR, "hour", GIGAYEAR_S / 3600),
        (GYR, "century", 1e7),
        (KELVIN, "mK", 1000.0),
        (KELVIN, "degR", 1.8),
        (NUMBER, "", 1.0),
        (NUMBER, "dimensionless", 1.0),
        (NUMBER, "percent", 100.0),
        (MODULUS, "mag", 1.0),
        (MODULUS, "", 1.0),
        (RATE, "1/Gyr", GIGAYEAR_S / (PARSEC_M * 1e3)),
        (RATE, "m/s/Mpc", 1000.0),
        (RATE, "km s-1 Mpc-1", 1.0),
        (RATE, "Hz", 1 / (PARSEC_M * 1e3)),
    ],
)
def test_wanted_text_is_met_exactly(unit: Any, wanted: str, expected: float) -> None:
    found = quantity_of(1.0, unit, wanted, None)
    assert_close(found, expected, relative=1e-15)
    assert isinstance(found, pint.get_application_registry().Quantity)


def test_names_of_our_table_win_over_the_registry() -> None:
    """For pint "AU" is an absorbance unit."""
    found = quantity_of(1.0, MPC, "AU", None)
    assert found.units == pint.Unit("astronomical_unit")


@pytest.mark.parametrize("text", ["parsec", "Mpc", "m", "Gly"])
def test_unit_object_of_a_foreign_registry_takes_the_result_there(
    text: str, foreign: pint.UnitRegistry
) -> None:
    wanted = foreign.Unit(text)
    for wish in (wanted, foreign.Quantity(1.0, text)):
        found = quantity_of(1.0, MPC, wish, pint.Quantity(3, "Gyr"))
        assert isinstance(found, foreign.Quantity)
        assert found.units == wanted
        exact = {"parsec": 1e6, "Mpc": 1.0, "m": PARSEC_M * 1e6, "Gly": None}[text]
        assert_close(found, exact or PARSEC_M / LIGHT_YEAR_M * 1e-3, relative=1e-15)


def test_unit_object_of_a_registry_of_few_lines(small: pint.UnitRegistry) -> None:
    found = quantity_of(1.0, MPC, small.kiloparsec, None)
    assert isinstance(found, small.Quantity)
    assert found.magnitude == 1000.0
    found = quantity_of(1.0, RATE, small.Unit("1 / gigayear"), None)
    assert_close(found, GIGAYEAR_S / (PARSEC_M * 1e3), relative=1e-15)


def test_modulus_may_live_in_any_registry(
    foreign: pint.UnitRegistry, small: pint.UnitRegistry
) -> None:
    for registry in (foreign, small):
        found = quantity_of(44.0, MODULUS, registry.dimensionless, None)
        assert isinstance(found, registry.Quantity)
        assert found.dimensionless
        assert found.magnitude == 44.0


def test_registry_that_counts_in_decimals_takes_floats() -> None:
    registry = pint.UnitRegistry(non_int_type=Decimal)
    found = quantity_of(1.5, GYR, registry.Myr, None)
    assert (found.magnitude, found.units) == (1500.0, registry.Unit("megayear"))
    assert quantity_of(1.5, RATE, None, registry.Quantity(1, "m")).magnitude == 1.5


@pytest.mark.parametrize(
    ("unit", "wanted", "words"),
    [
        (MPC, "Gyr", "unit='Gyr' does not fit: the result is a length, in Mpc"),
        (MPC, "", "unit='' does not fit: the result is a length, in Mpc"),
        (MPC, "Mpc/h", "unit='Mpc/h' does not fit"),  # h is the hour
        (MPC, "kg", "unit='kg' does not fit"),
        (MPC, "mag", "unit='mag' does not fit"),
        (NUMBER, "Mpc", "unit='Mpc' does not fit: the result is a number, in no unit"),
        (NUMBER, "mag", "unit='mag' does not fit: the result is a number, in no unit"),
        (KELVIN, "degC", "unit='degC' is a scale with its own zero; use K"),
        (KELVIN, "degF", "unit='degF' is a scale with its own zero; use K"),
        (MPC, "no such unit", "unit='no such unit' is not a unit that is known here"),
        (MPC, "2 Mpc", "unit='2 Mpc' is not a unit that is known here"),
        (MPC, "Mpc +", "unit='Mpc +' is not a unit that is known here"),
        (MPC, "=", "unit='=' is not a unit that is known here"),
        (MPC, "km.s-1", "unit='km.s-1' is not a unit that is known here"),
        (MPC, "Mpc?", "unit='Mpc?' is not a unit that is known here"),
        (MPC, "~Mpc", "unit='~Mpc' is not a unit that is known here"),
        (MPC, "[Mpc]", "unit='[Mpc]' is not a unit that is known here"),
        (MPC, 3, "unit=3 is neither a text nor a pint unit"),
        (MPC, b"Mpc", "unit=b'Mpc' is neither a text nor a pint unit"),
        (MPC, ["Mpc"], "unit=['Mpc'] is neither a text nor a pint unit"),
    ],
)
def test_wish_that_cannot_be_met_is_refused(unit: Any, wanted: object, words: str) -> None:
    with pytest.raises(ArgumentError) as caught:
        quantity_of(1.0, unit, wanted, None)
    assert words in str(caught.value)


def test_wrong_unit_object_is_refused(foreign: pint.UnitRegistry) -> None:
    for wanted, words in (
        (foreign.kilogram, "unit='kilogram' does not fit: the result is a temperature, in K"),
        (foreign.degC, "is a scale with its own zero; use K"),
        (foreign.Quantity(2.0, "K"), "unit='2.0 kelvin' is not one unit; give the unit alone"),
    ):
        with pytest.raises(ArgumentError) as caught:
            quantity_of(1.0, KELVIN, wanted, None)
        assert words in str(caught.value)


def test_registry_that_lacks_our_unit_is_told_so() -> None:
    bare = made_registry(
        ("mega- = 1e6", "meter = [length]", "parsec = 3.0856775814913673e16 meter")
    )
    with pytest.raises(ArgumentError) as caught:
        quantity_of(1.0, GYR, None, bare.Quantity(3.0, "megaparsec"))
    assert "in Gyr, and the registry that it belongs to has no 'gigayear'" in str(caught.value)
    assert "or choose another unit with unit=" in str(caught.value)
    with pytest.raises(ArgumentError, match="does not fit"):
        quantity_of(1.0, MPC, pint.Unit("s"), None)


def test_arrays_are_handed_over_not_copied() -> None:
    values = np.array([1.0, 2.0])
    found = quantity_of(values, GYR, "Myr", None)
    assert found.magnitude is values
    np.testing.assert_array_equal(values, [1000.0, 2000.0])


def test_registry_that_is_done_with_is_let_go() -> None:
    """What is remembered about a registry must not keep it alive."""
    registry = made_registry(FEW_DEFINITIONS)
    quantity_of(1.0, GYR, None, registry.Quantity(3.0, "meter"))
    quantity_of(1.0, MPC, registry.kiloparsec, None)
    gone = weakref.ref(registry)
    del registry
    gc.collect()
    assert gone() is None
