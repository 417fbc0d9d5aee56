"""The unit part of a heading: the closed table, products of it, and what is refused with a reason.

Conventions of the catalogues and of VOUnits 1.1; h as of the practice of distances, H0/(100
km/s/Mpc). Expected values are written from these, none from the code.
"""

from __future__ import annotations

import pytest

from epochconv.units import TABLE, Unit
from workbook_tools.heading_units import (
    LOGARITHM,
    PER_CENT,
    POWER_OF_TEN,
    UnitPart,
    is_like_a_unit,
    read_unit,
    says_no_unit,
)


def symbol(text: str) -> str | None:
    """Symbol of the unit that a text is, None where it is none or is refused."""
    part = read_unit(text)
    return None if part is None or part.unit is None else part.unit.symbol


@pytest.mark.parametrize("unit", TABLE, ids=lambda one: one.symbol or "number")
def test_each_spelling_of_the_table(unit: Unit) -> None:
    for spelling in (unit.symbol, *unit.spellings):
        assert read_unit(spelling) == UnitPart(unit)


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("Ga", "Gyr"),
        ("a", "yr"),
        ("Gyrs", "Gyr"),
        ("bn ly", "Gly"),
        ("Kelvin", "K"),
        ("BILLION YEARS", "Gyr"),
        ("Megaparsecs", "Mpc"),
        ("km s^-1 Mpc^-1", "km/s/Mpc"),
        ("km s-1 Mpc-1", "km/s/Mpc"),
        ("Mpc^-1 km s^-1", "km/s/Mpc"),
        ("km s**-1 Mpc**-1", "km/s/Mpc"),
        ("km/(Mpc s)", "km/s/Mpc"),
        ("(km s-1)/Mpc", "km/s/Mpc"),
        ("km/sec/Mpc", "km/s/Mpc"),
        ("kms-1 Mpc-1", None),
        ("km/s Mpc", None),
        ("km/s/Mpc^2", None),
        ("km s-1 Mpc", None),
        ("s^(-1)", "1/s"),
        ("1 / Gyr", "1/Gyr"),
        ("Gyr^-2", None),
        ("Mpc^2", None),
        ("Mpc2", None),
        ("Mpc^3", None),
        ("Gyr Gyr", None),
        ("h", None),
        ("ha", None),
        ("pMpc", None),
        ("Mfurlong", None),
        ("/Mpc", None),
        ("Mpc/", None),
        ("(Mpc", None),
        ("Mpc)", None),
        ("unknown", None),
    ],
)
def test_products_and_spellings_of_headings(text: str, expected: str | None) -> None:
    assert symbol(text) == expected


@pytest.mark.parametrize(
    "text", ["h^-1 Mpc", "h-1 Mpc", "h^-1Mpc", "Mpc/h", "Mpc / h", "Mpc h^-1", "h**-1 Mpc"]
)
def test_a_distance_times_h(text: str) -> None:
    part = read_unit(text)
    assert part is not None
    assert (symbol(text), part.h_power, part.comoving) == ("Mpc", -1, False)


@pytest.mark.parametrize("text", ["cMpc/h", "h^-1 cMpc"])
def test_a_comoving_distance_times_h(text: str) -> None:
    part = read_unit(text)
    assert part is not None
    assert (symbol(text), part.h_power, part.comoving) == ("Mpc", -1, True)


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("h70^-1 Mpc", "h70"),
        ("h_70^-1 Mpc", "h70"),
        ("Mpc/h100", "h100"),
        ("h0^-1 Mpc", "h0"),
        ("h Mpc", "h^-1 Mpc"),
        ("h^-2 Mpc", "h^-1 Mpc"),
        ("h km/s/Mpc", "km/s/Mpc"),
        ("Mpc_h", "h^-1 Mpc"),
        ("mpc", "write Mpc"),
        ("MPC", "write Mpc"),
        ("gyr", "write Gyr"),
        ("GLY", "write Gly"),
        ("k", "write K"),
        ("10^3 Mpc", POWER_OF_TEN),
        ("×10^3 Mpc", POWER_OF_TEN),
        ("10**9 yr", POWER_OF_TEN),
        ("1000 Mpc", POWER_OF_TEN),
        ("1e3 Mpc", POWER_OF_TEN),
        ("10^3 h^-1 Mpc", POWER_OF_TEN),
        ("Mpc/1000", POWER_OF_TEN),
        ("10^-3", POWER_OF_TEN),
        ("log Mpc", LOGARITHM),
        ("log10(Mpc)", LOGARITHM),
        ("dex", LOGARITHM),
        ("%", PER_CENT),
    ],
)
def test_what_is_recognised_and_refused_says_why(text: str, said: str) -> None:
    part = read_unit(text)
    assert part is not None
    assert part.unit is None
    assert said in part.problem


def test_h_alone_is_an_hour_of_nobody_here() -> None:
    assert read_unit("h") is None
    assert read_unit("h^-1") is None
    assert read_unit("1/h") is None


@pytest.mark.parametrize("text", ["km/s", "km s^-1", "m/s", "km.s-1"])
def test_velocities_are_known_as_such(text: str) -> None:
    assert read_unit(text) == UnitPart(velocity=True)


@pytest.mark.parametrize("text", ["Gyr", "(Mpc)", "[Mpc]", "deg", "---", "erg/s/cm2", "mpc", "%"])
def test_cells_of_a_units_row(text: str) -> None:
    assert is_like_a_unit(text)


@pytest.mark.parametrize("text", ["", "quasar", "z", "09 38 21", "KJ", "tbc"])
def test_other_cells(text: str) -> None:
    assert not is_like_a_unit(text) or says_no_unit(text)
