"""Companions: which column they belong to, and what leaves that open."""

from __future__ import annotations

import pytest

from workbook_tools.column_meanings import Meaning, Role
from workbook_tools.companion_names import companions_in
from workbook_tools.header_rows import read_headings


def read(*texts: str) -> list[Meaning]:
    """Meanings of one row of headings."""
    return list(read_headings([dict(enumerate(texts, 1))]).values())


@pytest.mark.parametrize(
    ("line", "role", "base"),
    [
        ("e_z", Role.ERROR, "z"),
        ("E_z", Role.UPPER_ERROR, "z"),
        ("l_D_L", Role.LIMIT_FLAG, "D_L"),
        ("q_z", Role.CARRIED, "z"),
        ("z_err", Role.ERROR, "z"),
        ("err(H(z))", Role.ERROR, "H(z)"),
        ("σz", Role.ERROR, "z"),
        ("z_errp", Role.UPPER_ERROR, "z"),
        ("z_errm", Role.LOWER_ERROR, "z"),
        ("+err", Role.UPPER_ERROR, ""),
        ("−".replace("−", "-"), Role.LOWER_ERROR, ""),
        ("± 1σ", Role.ERROR, ""),
        ("lower 68% error of z", Role.LOWER_ERROR, "z"),
        ("quality of the redshift", Role.CARRIED, "redshift"),
        ("z limit flag", Role.LIMIT_FLAG, "z"),
        ("z_type", Role.CARRIED, "z"),
    ],
)
def test_forms(line: str, role: Role, base: str) -> None:
    found = next(iter(companions_in(line)))
    assert (found.role, found.base) == (role, base)


@pytest.mark.parametrize(
    "line", ["z", "m-M", "RA", "Observer", "upper and lower error", "", "1-2", "mirror"]
)
def test_no_companions(line: str) -> None:
    assert not [one for one in companions_in(line) if not one.exact]


def test_capitals_tell_upper_from_lower_errors() -> None:
    """The CDS standard: E_ is the upper error beside e_, which alone is symmetric."""
    assert [one.role for one in read("z", "e_z")] == [Role.VALUE, Role.ERROR]
    z, upper, lower = read("z", "E_z", "e_z")
    assert (z.role, upper.role, lower.role) == (Role.VALUE, Role.UPPER_ERROR, Role.LOWER_ERROR)
    assert upper.owner == lower.owner == 1


def test_metallicity_has_its_own_error() -> None:
    _, error = read("z", "e_Z")
    assert error.role is Role.OTHER


def test_the_very_name_comes_before_the_measure() -> None:
    spec, phot, error = read("z_spec", "z", "e_z")
    assert spec.role is phot.role is Role.VALUE
    assert (error.role, error.owner) == (Role.ERROR, 2)


def test_an_error_of_two_redshifts_is_open() -> None:
    error = read("z_spec", "z_phot", "e_z")[2]
    assert error.role is Role.UNCLEAR
    assert "z_spec" in error.reason
    assert "z_phot" in error.reason


def test_the_method_settles_it() -> None:
    error = read("spectroscopic redshift", "photometric redshift", "e_zphot")[2]
    assert (error.role, error.owner) == (Role.ERROR, 2)


def test_a_bare_error_belongs_to_the_column_on_its_left() -> None:
    found = read("Object", "z", "err", "flag", "Age [Gyr]", "+", "−")
    assert [(one.role, one.owner) for one in found[2:]] == [
        (Role.ERROR, 2),
        (Role.CARRIED, None),
        (Role.VALUE, None),
        (Role.UPPER_ERROR, 5),
        (Role.LOWER_ERROR, 5),
    ]


def test_the_sign_of_the_declination_is_no_error() -> None:
    """CDS: DE- is a column of its own, beside DEd, DEm, DEs."""
    found = read("RAh", "RAm", "DE-", "DEd", "DEm", "z")
    assert found[2].role is Role.OTHER


def test_an_error_keeps_the_unit_that_it_states() -> None:
    _, stated, silent = read("Age [Gyr]", "E_Age [Myr]", "e_Age")
    assert stated.unit is not None
    assert stated.unit.symbol == "Myr"
    assert silent.unit is None


@pytest.mark.parametrize(
    ("column", "error", "said"),
    [
        ("Age [Gyr]", "e_Age [Mpc]", "Mpc"),
        ("Age [Gyr]", "e_Age [%]", "per cent"),
        ("Age [Gyr]", "e_Age [gyr]", "Gyr"),
        ("z", "e_z [km/s]", "velocity"),
        ("D_C [h^-1 Mpc]", "e_D_C [Mpc]", "power of h"),
        ("D_C [Mpc]", "e_D_C [dex]", "logarithm"),
    ],
)
def test_an_error_in_a_unit_that_does_not_fit(column: str, error: str, said: str) -> None:
    meaning = read(column, error)[1]
    assert meaning.role is Role.UNCLEAR
    assert said in meaning.reason


@pytest.mark.parametrize(
    "errors", [("e_z", "z_err"), ("e_z", "E_z", "z_err"), ("E_z", "z_err_up"), ("± z", "+", "−")]
)
def test_errors_stated_twice_are_open(errors: tuple[str, ...]) -> None:
    found = read("z", *errors)
    assert found[0].role is Role.VALUE
    assert {one.role for one in found[1:]} == {Role.UNCLEAR}


def test_units_by_row_take_the_column_out() -> None:
    value, unit = read("D_C [Mpc]", "x_D_C")
    assert value.role is Role.UNCLEAR
    assert "x_D_C" in value.reason
    assert (unit.role, unit.reason, unit.owner) == (Role.CARRIED, "unit", 1)


def test_an_error_without_its_column_says_whose_it_would_be() -> None:
    (error,) = read("e_Age [Gyr]")
    assert (error.role, error.of, error.owner) == (Role.ERROR, "Age", None)


def test_errors_of_columns_that_are_not_ours_are_tied_all_the_same() -> None:
    found = read("B", "e_B", "e_V")
    assert (found[1].role, found[1].owner) == (Role.ERROR, 1)
    assert found[2].role is Role.OTHER
