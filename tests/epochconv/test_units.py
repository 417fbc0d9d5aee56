"""The closed table: sizes against their definitions, spellings that count and that do not."""

from __future__ import annotations

from fractions import Fraction

import pytest
from mpmath import mp, mpf

from epochconv import units
from epochconv.units import TABLE, Unit, factor, find_unit, symbols, unit_named

# IAU 2012 B2 (au), IAU 2015 B2 (parsec), Julian year, SI; the parsec to 30 digits.
with mp.workdps(30):
    PARSEC = Fraction(str(mpf(648000) / mp.pi * 149597870700))
YEAR = Fraction(31557600)
LIGHT_YEAR = Fraction(299792458) * YEAR
SIZES = {
    "": Fraction(1),
    "pc": PARSEC,
    "kpc": PARSEC * 10**3,
    "Mpc": PARSEC * 10**6,
    "Gpc": PARSEC * 10**9,
    "ly": LIGHT_YEAR,
    "kly": LIGHT_YEAR * 10**3,
    "Mly": LIGHT_YEAR * 10**6,
    "Gly": LIGHT_YEAR * 10**9,
    "au": Fraction(149597870700),
    "m": Fraction(1),
    "km": Fraction(1000),
    "yr": YEAR,
    "kyr": YEAR * 10**3,
    "Myr": YEAR * 10**6,
    "Gyr": YEAR * 10**9,
    "d": Fraction(86400),
    "s": Fraction(1),
    "K": Fraction(1),
    "mK": Fraction(1, 10**3),
    "µK": Fraction(1, 10**6),
    "km/s/Mpc": 1000 / (PARSEC * 10**6),
    "1/Gyr": 1 / (YEAR * 10**9),
    "1/s": Fraction(1),
    "mag": Fraction(1),
}
SAME_DIMENSION = [
    (one, other) for one in TABLE for other in TABLE if one.dimension == other.dimension
]


def test_table_holds_exactly_these_units() -> None:
    assert [unit.symbol for unit in TABLE] == list(SIZES)


@pytest.mark.parametrize("unit", TABLE, ids=lambda unit: unit.symbol)
def test_size_is_that_of_the_definition(unit: Unit) -> None:
    assert abs(Fraction(unit.size) / SIZES[unit.symbol] - 1) < Fraction(4, 10**16)


def test_every_factor_is_good_to_the_last_digits() -> None:
    for one, other in SAME_DIMENSION:
        exact = SIZES[one.symbol] / SIZES[other.symbol]
        error = Fraction(factor(one, other)) / exact - 1
        assert abs(error) < Fraction(7, 10**16), (one.symbol, other.symbol)


def test_factors_lead_back() -> None:
    for one, other in SAME_DIMENSION:
        assert factor(one, other) * factor(other, one) == pytest.approx(1, rel=3e-16, abs=0)
        assert factor(one, one) == 1.0


@pytest.mark.parametrize(
    ("source", "target", "expected"),
    [
        ("Gyr", "Myr", 1000.0),
        ("Gyr", "yr", 1e9),
        ("Gly", "Mly", 1000.0),
        ("K", "mK", 1000.0),
        ("km", "m", 1000.0),
        ("yr", "d", 365.25),
        ("d", "s", 86400.0),
        ("ly", "m", 9460730472580800.0),
        ("au", "m", 149597870700.0),
    ],
)
def test_whole_factors_are_whole(source: str, target: str, expected: float) -> None:
    assert factor(unit_named(source), unit_named(target)) == expected


def test_factor_between_dimensions_is_refused() -> None:
    with pytest.raises(ValueError, match=r"Gyr \(time\) is no length"):
        factor(unit_named("Gyr"), unit_named("Mpc"))


@pytest.mark.parametrize(
    ("text", "symbol"),
    [
        ("Gyr", "Gyr"),
        (" Gyr ", "Gyr"),
        ("billion years", "Gyr"),
        ("billion  year", "Gyr"),
        ("gigayears", "Gyr"),
        ("million years", "Myr"),
        ("thousand years", "kyr"),
        ("years", "yr"),
        ("billion light-years", "Gly"),
        ("billion light years", "Gly"),
        ("Glyr", "Gly"),
        ("gigalightyears", "Gly"),
        ("lightyears", "ly"),
        ("light_year", "ly"),
        ("megaparsec", "Mpc"),
        ("million parsecs", "Mpc"),
        ("AU", "au"),
        ("metres", "m"),
        ("kilometers", "km"),
        ("kelvin", "K"),
        ("uK", "µK"),
        ("\u03bcK", "µK"),
        ("\u00b5K", "µK"),
        ("km s-1 Mpc-1", "km/s/Mpc"),
        ("km s^-1 Mpc^-1", "km/s/Mpc"),
        ("km s⁻¹ Mpc⁻¹", "km/s/Mpc"),
        ("(km/s)/Mpc", "km/s/Mpc"),
        ("Gyr-1", "1/Gyr"),
        ("s^-1", "1/s"),
        ("mags", "mag"),
        ("", ""),
        ("1", ""),
        ("dimensionless", ""),
        ("-", ""),
    ],
)
def test_spelling_counts(text: str, symbol: str) -> None:
    found = find_unit(text)
    assert found is not None
    assert found.symbol == symbol
    assert unit_named(text) is found


@pytest.mark.parametrize(
    "text",
    [
        "mpc",  # not a millionth of a thousandth of a Mpc
        "MPC",
        "gyr",
        "GYR",
        "Mpc/h",
        "Mpc h^-1",
        "h^-1 Mpc",
        "h",
        "hour",
        "G yr",
        "Gyrs ago",
        "k",
        "Kelvin",
        "degC",
        "°C",
        "km/s",
        "c",
        "z",
        "%",
        "eV",
        "parsec2",
        "2 Mpc",
        "Mpc Mpc",
        "billion",
        "trillion years",
    ],
)
def test_anything_else_is_unknown(text: str) -> None:
    assert find_unit(text) is None
    with pytest.raises(KeyError):
        unit_named(text)


def test_no_spelling_stands_for_two_units() -> None:
    spelled: dict[str, str] = {}
    for unit in TABLE:
        for spelling in {unit.symbol, *unit.spellings, *([unit.long_name] * bool(unit.long_name))}:
            assert spelled.setdefault(spelling, unit.symbol) == unit.symbol


def test_symbols_of_a_dimension_come_in_table_order() -> None:
    assert symbols("time") == ["yr", "kyr", "Myr", "Gyr", "d", "s"]
    assert symbols("number") == []
    assert {unit.dimension for unit in units.TABLE} == {
        "number",
        "length",
        "time",
        "temperature",
        "rate",
        "magnitude",
    }
