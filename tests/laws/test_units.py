"""Units and registries: there and back in any unit, and every quantity stays in its registry."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
import pint
import pytest
from hypothesis import given
from hypothesis import strategies as st

import epochconv
from tests.closeness import EXACT, assert_close, plain
from tests.strategies import redshift_arrays, redshifts

LENGTHS = ("pc", "kpc", "Mpc", "Gpc", "ly", "Mly", "Gly", "m", "km", "au")
TIMES = ("yr", "kyr", "Myr", "Gyr", "s")
UNITS = {
    "lookback time": TIMES,
    "age": TIMES,
    "comoving distance": LENGTHS,
    "luminosity distance": LENGTHS,
    "CMB temperature": ("K", "mK"),
    "Hubble rate": ("km/s/Mpc", "1/Gyr", "1/s"),
}
MEASURE_AND_UNIT = st.sampled_from(list(UNITS)).flatmap(
    lambda measure: st.tuples(st.just(measure), st.sampled_from(UNITS[measure]))
)
# Three roundings of a factor, each of half an ulp.
ROUNDED = 1e-15


@pytest.fixture(scope="module")
def foreign() -> pint.UnitRegistry:
    """A registry that is not the application's, with a unit that no other one has."""
    registry = pint.UnitRegistry()
    registry.define("stride = 0.25 * gigaparsec")
    return registry


@pytest.fixture
def other_application() -> Iterator[pint.UnitRegistry]:
    before = pint.get_application_registry().get()
    registry = pint.UnitRegistry()
    pint.set_application_registry(registry)
    yield registry
    pint.set_application_registry(before)


def test_units_of_the_table_have_the_sizes_of_their_definitions() -> None:
    """IAU 2012 B2 and 2015 B2, Julian year (test_published_constants.py holds the sources)."""
    parsec, light_year, year = 30856775814913673.0, 9460730472580800.0, 31557600.0
    sizes = {
        "pc": parsec,
        "kpc": parsec * 1e3,
        "Mpc": parsec * 1e6,
        "Gpc": parsec * 1e9,
        "ly": light_year,
        "Mly": light_year * 1e6,
        "Gly": light_year * 1e9,
        "km": 1e3,
        "au": 149597870700.0,
    }
    metres = epochconv.convert(2, "redshift", "comoving distance", unit="m").magnitude
    for unit, size in sizes.items():
        found = epochconv.convert(2, "redshift", "comoving distance", unit=unit)
        assert_close(found, metres / size, relative=ROUNDED)
    seconds = epochconv.convert(2, "redshift", "age", unit="s").magnitude
    for unit, size in {"yr": year, "kyr": year * 1e3, "Myr": year * 1e6, "Gyr": year * 1e9}.items():
        found = epochconv.convert(2, "redshift", "age", unit=unit)
        assert_close(found, seconds / size, relative=ROUNDED)


@given(MEASURE_AND_UNIT, redshift_arrays())
def test_quantity_in_any_unit_comes_back(choice: tuple[str, str], z: np.ndarray) -> None:
    measure, unit = choice
    plainly = epochconv.convert(z, "redshift", measure)
    in_unit = epochconv.convert(z, "redshift", measure, unit=unit)
    again = epochconv.convert(in_unit, measure, measure, unit=plainly.units)
    assert again.units == plainly.units
    assert_close(again, plain(plainly), relative=ROUNDED)


@given(MEASURE_AND_UNIT, redshifts(1e-3, 1e6))
def test_text_says_the_same_as_the_quantity(choice: tuple[str, str], z: float) -> None:
    measure, unit = choice
    quantity = epochconv.convert(z, "redshift", measure, unit=unit)
    text = f"{float(quantity.magnitude)!r} {unit}"
    found = epochconv.convert(text, measure, "CMB temperature")
    expected = epochconv.convert(quantity, measure, "CMB temperature")
    # An ulp of the number is worth x + y/f' in x, which late times have in plenty.
    assert_close(found, plain(expected), relative=1e-6)
    assert_close(epochconv.convert(text, measure, measure, unit=unit), quantity.magnitude)


@given(redshift_arrays())
def test_foreign_quantity_gives_a_foreign_result(foreign: pint.UnitRegistry, z: np.ndarray) -> None:
    """Without a unit the result lives where the value lives, with one where the unit lives."""
    plainly = epochconv.convert(z, "redshift", "comoving distance")
    theirs = epochconv.convert(foreign.Quantity(z, ""), "redshift", "comoving distance")
    asked = epochconv.convert(z, "redshift", "comoving distance", unit=foreign.megaparsec)
    for found in (theirs, asked):
        assert isinstance(found, foreign.Quantity)
        assert found.units == foreign.megaparsec
        assert_close(found, plain(plainly), relative=ROUNDED)
    back = epochconv.convert(asked, "comoving distance", "redshift")
    assert isinstance(back, foreign.Quantity)
    ours = epochconv.convert(plainly, "comoving distance", "redshift")
    assert_close(back, plain(ours), relative=ROUNDED)


def test_unit_that_only_a_foreign_registry_knows(foreign: pint.UnitRegistry) -> None:
    found = epochconv.convert(1, "redshift", "comoving distance", unit=foreign.stride)
    plainly = epochconv.convert(1, "redshift", "comoving distance", unit="Gpc")
    assert found.units == foreign.stride
    # Pint's own parsec, a tangent, is 8e-12 away from the IAU's; here it cancels or not.
    assert_close(found, plainly.magnitude * 4, relative=1e-11)
    assert_close(epochconv.convert(found, "comoving distance", "redshift"), 1, relative=2 * EXACT)


def test_foreign_parsec_is_read_as_the_iau_parsec(foreign: pint.UnitRegistry) -> None:
    """A distance in Mpc means the same, in whatever registry it comes."""
    for unit in (foreign.megaparsec, foreign.gigaparsec, foreign.parsec):
        quantity = foreign.Quantity(3000.0, "megaparsec").to(unit)
        found = epochconv.convert(quantity, "comoving distance", "redshift")
        expected = epochconv.convert(3000.0, "comoving distance", "redshift")
        assert_close(found, expected.magnitude, relative=2e-15)


def test_results_live_in_the_application_registry(
    other_application: pint.UnitRegistry,
) -> None:
    """In the one that is set when the question is asked, with any unit given as text."""
    for unit in (None, "Gly", "parsec"):
        found = epochconv.convert(1.5, "redshift", "comoving distance", unit=unit)
        assert isinstance(found, other_application.Quantity)
    assert isinstance(epochconv.epoch(redshift=1.5).age, other_application.Quantity)
    # They take part in the owner's arithmetic.
    total = found + 1 * other_application.megaparsec
    assert_close(total.to("parsec"), found.magnitude + 1e6, relative=ROUNDED)


def test_history_takes_quantities(foreign: pint.UnitRegistry) -> None:
    """The parameters in other units make the same history, up to the rounding of the factors."""
    bare = epochconv.ExpansionHistory(hubble_constant=70, matter=0.3)
    rich = epochconv.ExpansionHistory(
        hubble_constant=foreign.Quantity(70e3, "m/s/Mpc"),
        matter=foreign.Quantity(30, "percent"),
        temperature_today=foreign.Quantity(2725.5, "millikelvin"),
        neutrino_masses=foreign.Quantity([60, 0, 0], "meV"),
    )
    z = [0.1, 1, 1000]
    assert_close(
        epochconv.convert(z, "redshift", "age", history=rich),
        plain(epochconv.convert(z, "redshift", "age", history=bare)),
        relative=1e-14,
    )


@pytest.mark.parametrize(
    ("value", "measure", "unit"),
    [
        (pint.Quantity(3, "Mpc"), "age", None),
        (pint.Quantity(3, "Gyr"), "redshift", None),
        (pint.Quantity(3, "degC"), "CMB temperature", None),
        ("3 Gyr", "comoving distance", None),
        (3, "CMB temperature", "Gyr"),
        (3, "CMB temperature", "no such unit"),
        ("3", "age", None),
    ],
)
def test_wrong_dimension_is_refused(value: object, measure: str, unit: str | None) -> None:
    with pytest.raises(epochconv.ArgumentError) as caught:
        epochconv.convert(value, measure, measure, unit=unit)
    assert not isinstance(caught.value, epochconv.OutOfRangeError)


def test_units_are_case_sensitive() -> None:
    """Mpc is a distance; mpc is none that anybody means."""
    with pytest.raises(epochconv.ArgumentError):
        epochconv.convert("3 mpc", "comoving distance", "age")
