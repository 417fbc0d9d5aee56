"""Magnitudes of quantities of any registry, in our exact units."""

from __future__ import annotations

import gc
import math
import weakref
from decimal import Decimal
from fractions import Fraction

import numpy as np
import pint
import pytest

from epochconv.constants import GIGAYEAR_S, LIGHT_YEAR_M, PARSEC_M
from epochconv.errors import ArgumentError
from epochconv.reading_quantities import is_quantity, magnitude_of, table_unit_of
from epochconv.units import unit_named
from tests.closeness import assert_close
from tests.epochconv.conftest import FEW_DEFINITIONS, made_registry

MPC, GYR, KELVIN, NUMBER, MODULUS, RATE = (
    unit_named(symbol) for symbol in ("Mpc", "Gyr", "K", "", "mag", "km/s/Mpc")
)
TANGENT_PARSEC_M = 149597870700 / math.tan(math.pi / 648000)


@pytest.mark.parametrize(
    "value",
    [1.0, "1 Gyr", np.ones(3), [pint.Quantity(1, "m")], pint.Unit("m"), None, pint.Quantity],
)
def test_only_a_quantity_is_a_quantity(value: object) -> None:
    assert not is_quantity(value) or value is pint.Quantity


def test_quantities_of_every_registry_are_quantities(
    foreign: pint.UnitRegistry, small: pint.UnitRegistry
) -> None:
    for registry in (foreign, small, pint.get_application_registry()):
        assert is_quantity(registry.Quantity(1, "meter"))


@pytest.mark.parametrize(
    ("value", "text", "unit", "expected"),
    [
        (3.0, "Mpc", MPC, 3.0),
        (3.0, "Gpc", MPC, 3000.0),
        (3.0, "pc", MPC, 3e-6),
        (3.0, "Gly", MPC, 3e3 * LIGHT_YEAR_M / PARSEC_M),
        (3.0, "lightyear", MPC, 3e-6 * LIGHT_YEAR_M / PARSEC_M),
        (3e22, "m", MPC, 3e16 / PARSEC_M),
        (3e19, "km", MPC, 3e16 / PARSEC_M),
        (3.0, "Gyr", GYR, 3.0),
        (3.0, "Myr", GYR, 0.003),
        (GIGAYEAR_S, "s", GYR, 1.0),
        (365.25, "day", GYR, 1e-9),
        (8766.0, "hour", GYR, 1e-9),
        (1.0, "millennium", GYR, 1e-6),
        (3.0, "K", KELVIN, 3.0),
        (3.0, "mK", KELVIN, 0.003),
        (9.0, "degR", KELVIN, 5.0),
        (3.0, "", NUMBER, 3.0),
        (50.0, "percent", NUMBER, 0.5),
        (3.0, "km/m", NUMBER, 3000.0),
        (41.0, "", MODULUS, 41.0),
        (70.0, "km/s/Mpc", RATE, 70.0),
        (70e5, "cm/s/Mpc", RATE, 70.0),
        (70e3, "m/s/Mpc", RATE, 70.0),
    ],
)
def test_magnitude_is_in_our_unit(
    value: float, text: str, unit: object, expected: float, foreign: pint.UnitRegistry
) -> None:
    """With the IAU's parsec, 8e-12 away from pint's: closer than 1e-15 here."""
    for registry in (foreign, pint.get_application_registry()):
        quantity = registry.Quantity(value, text)
        assert_close(magnitude_of(quantity, unit, "it"), expected, relative=1e-15)  # type: ignore[arg-type] # a Unit


@pytest.mark.parametrize("text", ["parsec", "kiloparsec", "Mpc", "1e3 * kpc**2 / pc / km * km"])
def test_parsec_is_the_iau_one_whatever_the_registry_says(
    text: str, foreign: pint.UnitRegistry, small: pint.UnitRegistry
) -> None:
    registries = (foreign, small) if text == "parsec" else (foreign,)
    for registry in registries:
        quantity = registry.Quantity(1.0, "parsec").to(registry.parse_expression(text).units)
        assert_close(magnitude_of(quantity, MPC, "it"), 1e-6, relative=1e-15)
    assert abs(TANGENT_PARSEC_M / PARSEC_M - 1) > 7e-12


def test_private_registry_is_asked_in_its_own_words(small: pint.UnitRegistry) -> None:
    assert magnitude_of(small.Quantity(3.0, "gigayear"), GYR, "age") == 3.0
    assert_close(
        magnitude_of(small.Quantity(3.0, "megalight_year"), MPC, "it"),
        3 * LIGHT_YEAR_M / PARSEC_M,
        relative=1e-15,
    )
    assert magnitude_of(small.Quantity(2.7, "kelvin"), KELVIN, "it") == 2.7


@pytest.mark.parametrize("value", [2, 2.0, Decimal(2), Fraction(2), np.float32(2), np.int64(2)])
def test_numbers_of_every_kind_are_converted(value: object) -> None:
    registry = pint.UnitRegistry(non_int_type=Decimal)
    for ureg in (registry, pint.get_application_registry()):
        assert_close(magnitude_of(ureg.Quantity(value, "Gpc"), MPC, "it"), 2000.0, relative=1e-15)
        assert float(magnitude_of(ureg.Quantity(value, "Mpc"), MPC, "it")) == 2.0


def test_arrays_keep_their_shape_and_are_not_changed(foreign: pint.UnitRegistry) -> None:
    values = np.arange(6.0).reshape(2, 3)
    quantity = foreign.Quantity(values, "Gpc")
    np.testing.assert_array_equal(magnitude_of(quantity, MPC, "it"), values * 1000)
    np.testing.assert_array_equal(quantity.magnitude, np.arange(6.0).reshape(2, 3))


@pytest.mark.parametrize(
    ("text", "unit", "words"),
    [
        ("kg", MPC, "age is in kilogram, which is no length; give it in a unit such as Mpc"),
        ("Mpc", GYR, "age is in megaparsec, which is no time; give it in a unit such as Gyr"),
        ("Gyr", NUMBER, "age is in gigayear, which is no pure number; give a bare number"),
        ("m", MODULUS, "which is no magnitude (a pure number); give it in a unit such as mag"),
        ("km/s", RATE, "which is no rate (such as km/s/Mpc); give it in a unit such as km/s/Mpc"),
        ("degC", KELVIN, "age is in degree_Celsius, a scale with its own zero; give it in K"),
        ("degF", KELVIN, "a scale with its own zero; give it in K"),
    ],
)
def test_wrong_dimension_and_offset_units_are_refused(
    text: str, unit: object, words: str, foreign: pint.UnitRegistry
) -> None:
    with pytest.raises(ArgumentError) as caught:
        magnitude_of(foreign.Quantity(3.0, text), unit, "age")  # type: ignore[arg-type] # a Unit
    assert words in str(caught.value)


def test_registry_that_lacks_the_dimension_is_refused_in_our_words() -> None:
    bare = made_registry(("meter = [length]",))
    with pytest.raises(ArgumentError, match="age is in meter, which is no time"):
        magnitude_of(bare.Quantity(3.0, "meter"), GYR, "age")


def test_unit_of_our_table_is_recognised_however_it_is_written(
    foreign: pint.UnitRegistry,
) -> None:
    for text, symbol in (
        ("Mpc", "Mpc"),
        ("light_year", "ly"),
        ("", ""),
        ("km/s/Mpc", "km/s/Mpc"),
        ("1/s * km/Mpc", "km/s/Mpc"),
        ("1/Gyr", "1/Gyr"),
        ("K", "K"),
        ("microkelvin", "µK"),
    ):
        found = table_unit_of(foreign.Quantity(1.0, text))
        assert found is not None
        assert found.symbol == symbol
    for text in ("Mpc**2", "kg", "hour", "km/s", "Mpc*s", "percent"):
        assert table_unit_of(foreign.Quantity(1.0, text)) is None


def test_registry_that_is_done_with_is_let_go() -> None:
    registry = made_registry(FEW_DEFINITIONS)
    magnitude_of(registry.Quantity(3.0, "gigaparsec"), MPC, "it")
    gone = weakref.ref(registry)
    del registry
    gc.collect()
    assert gone() is None
