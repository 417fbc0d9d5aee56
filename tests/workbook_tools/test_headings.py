"""Headings: the forms that people write, and what is no heading of ours."""

from __future__ import annotations

import pytest

from epochconv.measure import Measure
from epochconv.registry import measures
from epochconv.units import TABLE, Unit, find_unit, unit_named
from workbook_tools.headings import lacks_unit, read_heading, same_heading

DIMENSIONLESS = ("redshift", "scale factor")
ABBREVIATIONS = {
    "redshift": "z_spec, zspec, zsp, z_sp, z_phot, zphot, z_ph, zph, z_cmb, zCMB, z_CMB",
    "scale factor": "scale_factor",
    "lookback time": "t_lookback, t_lb, tL, t_lookb, LBT, t_look",
    "age": "t_age, t_z, t_univ",
    "comoving distance": "DC, d_c, Dc, D_com, Dcom, comoving_dist, comoving dist, comoving dist.",
    "CMB temperature": "TCMB, T_cmb, Tcmb, T(CMB), T_gamma, cmb temp, cmb temp.",
    "transverse comoving distance": "d_M",
    "luminosity distance": "DL, d_L, dL, Dlum, D_lum, lum_dist, lum. dist., luminosity dist.",
    "angular diameter distance": "DA, d_A, dA, Dang, D_ang, ang_dist, ang. diam. dist.",
    "distance modulus": "μ, m-M, m−M, dist_mod, distmod, DistMod, dist. mod., distance mod.",
    "Hubble rate": "H(z), Hz, H_z",
}


def read(text: str) -> tuple[str, str] | None:
    """Measure and unit symbol of a heading."""
    heading = read_heading(text)
    return None if heading is None else (heading.measure.name, heading.unit.symbol)


@pytest.mark.parametrize("form", ["{} [{}]", "{} ({})", "{} / {}", "{}/{}", "{}[{}]", "{}({})"])
@pytest.mark.parametrize("measure", measures(), ids=lambda one: one.name)
def test_each_measure_is_read_in_each_form(measure: Measure, form: str) -> None:
    unit = measure.unit or "1"
    expected = measure.name, unit_named(unit).symbol
    assert read(form.format(measure.name, unit)) == expected
    assert read(form.format(measure.symbol, unit)) == expected


@pytest.mark.parametrize("measure", measures(), ids=lambda one: one.name)
def test_a_bare_name_serves_only_where_there_is_no_unit(measure: Measure) -> None:
    bare = read(measure.name)
    assert bare == ((measure.name, "") if measure.name in DIMENSIONLESS else None)


@pytest.mark.parametrize("unit", TABLE, ids=lambda one: one.symbol or "number")
def test_each_unit_of_the_closed_table_is_read_in_each_spelling(unit: Unit) -> None:
    name = {
        "number": "redshift",
        "length": "comoving distance",
        "time": "lookback time",
        "temperature": "CMB temperature",
        "rate": "Hubble rate",
        "magnitude": "distance modulus",
    }[unit.dimension]
    for spelling in (unit.symbol, *unit.spellings):
        assert read(f"{name} [{spelling}]") == (name, unit.symbol)
        if spelling:
            assert read(f"{name} / {spelling}") == (name, unit.symbol)
            assert read(f"{name} / ({spelling})") == (name, unit.symbol)


@pytest.mark.parametrize(
    ("measure", "short"),
    [(name, short) for name, shorts in ABBREVIATIONS.items() for short in shorts.split(", ")],
)
def test_the_common_abbreviations_count_as_names(measure: str, short: str) -> None:
    unit = next(one.unit for one in measures() if one.name == measure)
    assert read(f"{short} [{unit or '1'}]") == (measure, unit)


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("z", ("redshift", "")),
        ("Redshift", ("redshift", "")),
        ("  z_spec ", ("redshift", "")),
        ("Lookback time [Gyr]", ("lookback time", "Gyr")),
        ("Look-back time (Gyr)", ("lookback time", "Gyr")),
        ("LOOKBACK TIME [Myr]", ("lookback time", "Myr")),
        ("Lookback\ntime\n[Gyr]", ("lookback time", "Gyr")),
        ("t_L / Gyr", ("lookback time", "Gyr")),
        ("Age of the universe (billion years)", ("age", "Gyr")),
        ("Comoving distance / Mpc", ("comoving distance", "Mpc")),
        ("D_C [Gly]", ("comoving distance", "Gly")),
        ("D_C (million light years)", ("comoving distance", "Mly")),
        ("T_CMB [K]", ("CMB temperature", "K")),
        ("T_CMB / mK", ("CMB temperature", "mK")),
        ("µ [mag]", ("distance modulus", "mag")),  # micro sign
        ("μ [mag]", ("distance modulus", "mag")),  # Greek letter
        ("m-M (mag)", ("distance modulus", "mag")),
        ("H(z) [km/s/Mpc]", ("Hubble rate", "km/s/Mpc")),
        ("H / (km/s/Mpc)", ("Hubble rate", "km/s/Mpc")),
        ("H(z) (km s^-1 Mpc^-1)", ("Hubble rate", "km/s/Mpc")),
        ("t [Gyr]", ("age", "Gyr")),
        ("a []", ("scale factor", "")),
        ("z (-)", ("redshift", "")),
    ],
)
def test_headings_as_people_write_them(text: str, expected: tuple[str, str]) -> None:
    assert read(text) == expected


@pytest.mark.parametrize(
    "text",
    [
        "",
        "Object",
        "Z",  # metallicity
        "a",  # a letter of many meanings
        "t",
        "H",
        "T [K]",
        "D [Mpc]",  # which distance?
        "distance [Mpc]",
        "Age",
        "Age [gyr]",
        "D_C [mpc]",  # a milliparsec to a general parser
        "D_C [Mpc/h70]",
        "D_C [h Mpc]",
        "D_C (10^3 Mpc)",
        "age [Mpc]",
        "D_L [mag]",
        "H [mag]",  # a photometric band
        "a [au]",  # a semi-major axis
        "t [K]",
        "z [mag]",
        "z_err",
        "e_z",
        "Age/lookback",
        "Age [Gyr] (2)",
        "Age [d]",  # of a supernova
        "[Gyr]",
        "(Gyr)",
        "/ Gyr",
        "Age [Gyr",
        "Age / (Gyrs",
        "Age / aGyr)",
        "Age [Gyr)",
        "Age [[Gyr]]",
        "km/s/Mpc",
        "log(D_L/Mpc)",
        "stellar age [Gyr]",
        "redshift of the dust lane",
    ],
)
def test_what_is_not_wholly_known_is_no_heading(text: str) -> None:
    assert read_heading(text) is None


def test_the_text_is_kept_as_it_stands_but_for_white_space() -> None:
    heading = read_heading(" Lookback  time\n[Gyr]")
    assert heading is not None
    assert heading.text == "Lookback time [Gyr]"


def test_headings_of_one_measure_in_one_unit_are_of_the_same_kind() -> None:
    texts = ("z", "z_phot", "Age [Gyr]", "Age [Myr]")
    found = [heading for text in texts if (heading := read_heading(text)) is not None]
    z, photometric, age, longer = found
    assert z.same_kind(photometric)
    assert not z.same_kind(age)
    assert not age.same_kind(longer)


@pytest.mark.parametrize(
    ("text", "unit"),
    [
        ("Age", "Gyr"),
        ("Lookback  time", "Gyr"),
        ("D_C", "Mpc"),
        ("mu", "mag"),
        ("H(z)", "km/s/Mpc"),
    ],
)
def test_a_measure_without_its_unit_is_told(text: str, unit: str) -> None:
    measure = lacks_unit(text)
    assert measure is not None
    assert measure.unit == unit
    assert find_unit(measure.unit) is not None


@pytest.mark.parametrize("text", ["z", "redshift", "t", "H", "Note", "", "Age [Gyr]"])
def test_other_headings_lack_no_unit(text: str) -> None:
    assert lacks_unit(text) is None


def test_white_space_and_capitals_do_not_tell_headings_apart() -> None:
    assert same_heading("Age  [Gyr]", " age\n[gyr]")
    assert not same_heading("Age [Gyr]", "Age [Myr]")
