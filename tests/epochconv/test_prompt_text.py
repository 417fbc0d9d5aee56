"""The language of the one-shot command."""

from __future__ import annotations

import pytest

from epochconv.constants import LIGHT_YEAR_M, PARSEC_M
from epochconv.errors import ArgumentError
from epochconv.prompt_text import read_given, read_wanted


@pytest.mark.parametrize(
    ("text", "name", "value"),
    [
        ("z = 2.5", "redshift", 2.5),
        ("z=2.5", "redshift", 2.5),
        ("  Redshift  =  +2.5 ", "redshift", 2.5),
        ("a = .25", "scale factor", 0.25),
        ("age = 1 Gyr", "age", 1.0),
        ("age = 1000 million years", "age", 1.0),
        ("t = 1 Gyr", "age", 1.0),
        ("t_L = 1 Gyr", "lookback time", 1.0),
        ("look-back_time = 1 billion years", "lookback time", 1.0),
        ("CMB temperature = 3000 K", "CMB temperature", 3000.0),
        ("cmb-temperature = 3000000 mK", "CMB temperature", 3000.0),
        ("mu = 41", "distance modulus", 41.0),
        ("µ = 41 mag", "distance modulus", 41.0),
        ("H = 100 km/s/Mpc", "Hubble rate", 100.0),
        ("z = −0.5", "redshift", -0.5),
    ],
)
def test_given_is_read_in_the_unit_of_the_measure(text: str, name: str, value: float) -> None:
    measure, found = read_given(text)
    assert measure.name == name
    assert found == pytest.approx(value, rel=1e-15, abs=0)


def test_given_light_years_are_turned_into_parsecs() -> None:
    _, found = read_given("comoving distance = 45 Gly")
    assert found == pytest.approx(45e3 * LIGHT_YEAR_M / PARSEC_M, rel=1e-15)


@pytest.mark.parametrize("text", ["", "z", "2.5", "= 2.5", "z =", " = ", "z 2.5", "z: 2.5"])
def test_text_that_is_not_measure_equals_value_is_refused_with_an_example(text: str) -> None:
    with pytest.raises(ArgumentError, match="write a measure, = and a value") as caught:
        read_given(text)
    assert "'age = 1 Gyr'" in str(caught.value)


def test_missing_unit_is_refused_with_the_line_to_type() -> None:
    with pytest.raises(ArgumentError, match=r"age needs one, such as 'age = 1 Gyr'"):
        read_given("age = 1")


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("redshift = 2.5 Gyr", "Gyr does not fit redshift, which is a number; give a bare number"),
        ("age = 3 Mpc", "Mpc does not fit age, which is a time; use yr, kyr, Myr, Gyr, d, s"),
        ("mu = 3 K", "K does not fit distance modulus, which is a magnitude; use mag"),
        ("age = 3 gyr", "'gyr' in '3 gyr' is not a unit that is known here"),
        ("agee = 3 Gyr", "Did you mean 'age'?"),
        ("z = two", "'two' is not a number with a unit"),
    ],
)
def test_given_is_refused_in_plain_words(text: str, words: str) -> None:
    with pytest.raises(ArgumentError) as caught:
        read_given(text)
    assert words in str(caught.value)


@pytest.mark.parametrize(
    ("text", "name", "symbol"),
    [
        ("age", "age", "Gyr"),
        ("comoving distance [Gly]", "comoving distance", "Gly"),
        ("  D_C  [ Gly ] ", "comoving distance", "Gly"),
        ("D_C[billion light-years]", "comoving distance", "Gly"),
        ("redshift", "redshift", ""),
        ("z []", "redshift", ""),
        ("H [1/Gyr]", "Hubble rate", "1/Gyr"),
    ],
)
def test_wanted_measure_and_unit_are_read(text: str, name: str, symbol: str) -> None:
    measure, unit = read_wanted(text)
    assert (measure.name, unit.symbol) == (name, symbol)


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("", "write a measure and, in brackets, its unit"),
        ("[Gyr]", "write a measure and, in brackets, its unit"),
        ("age [Gyr", "write a measure and, in brackets, its unit"),
        ("age [Gyr] [Myr]", "write a measure and, in brackets, its unit"),
        ("age [gyr]", "'gyr' in 'age [gyr]' is not a unit that is known here"),
        ("age [Mpc]", "Mpc does not fit age, which is a time; use yr"),
        ("age []", "no unit does not fit age, which is a time; use yr"),
        ("distance", "Did you mean"),
    ],
)
def test_wanted_is_refused_in_plain_words(text: str, words: str) -> None:
    with pytest.raises(ArgumentError) as caught:
        read_wanted(text)
    assert words in str(caught.value)
