"""What looks like one of our measures and is none, or may be several: the reason and the remedy."""

from __future__ import annotations

import pytest

from workbook_tools.column_meanings import Role
from workbook_tools.heading_doubts import (
    age_of_something,
    doubt_about,
    is_z_magnitude,
    measured_directly,
    transformed,
)
from workbook_tools.headings import meaning_of


@pytest.mark.parametrize(
    ("line", "function"),
    [
        ("1 + z", "1+z"),
        ("(1+z)", "1+z"),
        ("log(1+z)", "log"),
        ("log10 D_L", "log"),
        ("ln a", "log"),
        ("Log age [yr]", "log"),
        ("1000 z", "multiplied"),
        ("z × 1000", "multiplied"),
        ("10^3 K/T_CMB", "multiplied"),
        ("log M* [Msun]", ""),
        ("log", ""),
        ("logbook", ""),
        ("lookback time [Gyr]", ""),
        ("1/(1+z)", ""),
        ("100 µm flux", ""),
    ],
)
def test_functions_of_measures(line: str, function: str) -> None:
    assert transformed(line) == function


@pytest.mark.parametrize(
    ("name", "word"),
    [
        ("Cepheid distance", "Cepheid"),
        ("D_TRGB", "TRGB"),
        ("distance modulus (SN Ia)", "SN Ia"),
        ("Tully-Fisher distance", "Tully-Fisher"),
        ("Cepheid period", ""),
        ("parallax", ""),
        ("photometric redshift", ""),
        ("SN Ia host", ""),
        ("luminosity distance", ""),
    ],
)
def test_distances_measured_without_a_redshift(name: str, word: str) -> None:
    assert measured_directly(name) == word


@pytest.mark.parametrize(
    "name", ["stellar age", "age_star", "Age (SSP)", "age of the host", "mass-weighted age"]
)
def test_ages_of_things(name: str) -> None:
    assert age_of_something(name)


@pytest.mark.parametrize("name", ["age", "age of the universe", "host", "star", "cosmic age"])
def test_ages_of_the_universe(name: str) -> None:
    assert not age_of_something(name)


@pytest.mark.parametrize("line", ["z_mag", "z'", "z [AB]", "zmag", "M_z", "z_psf", "z band err"])
def test_z_magnitudes(line: str) -> None:
    assert is_z_magnitude(line)


@pytest.mark.parametrize("line", ["z", "z_spec", "z (hel)", "z_m", "zab"])
def test_no_z_magnitudes(line: str) -> None:
    assert not is_z_magnitude(line)


@pytest.mark.parametrize("name", ["v_hel", "cz_hel", "heliocentric cz", "Radial velocity (LSR)"])
def test_velocities_in_their_frames(name: str) -> None:
    doubt = doubt_about(name)
    assert doubt is not None
    assert "convention" in doubt.remark


@pytest.mark.parametrize("name", ["velocity dispersion", "v_rot", "CMB", "frame", "heliocentric"])
def test_no_velocities_of_recession(name: str) -> None:
    assert doubt_about(name) is None


@pytest.mark.parametrize(
    ("text", "column", "remedy"),
    [
        ("distance [Gly]", 3, "--source C:C --as 'comoving distance [Gly]'"),
        ("D [h^-1 Mpc]", 27, "--source AA:AA --as 'comoving distance [h^-1 Mpc]'"),
        ("time [Myr]", None, "--source and --as 'age [Myr]'"),
        ("T [K]", 1, "--as 'CMB temperature [K]'"),
        ("Z", 2, "--source B:B --as 'redshift'"),
        ("Cepheid distance [Mpc]", 4, "--source D:D --as 'luminosity distance [Mpc]'"),
        ("SBF modulus [mag]", 4, "--as 'distance modulus [mag]'"),
        ("z_best_guess", 5, "--source E:E --as 'redshift'"),
        ("D_L (Planck) [Gly]", 5, "--as 'luminosity distance [Gly]'"),
    ],
)
def test_the_remedy_can_be_typed_as_it_stands(text: str, column: int | None, remedy: str) -> None:
    meaning = meaning_of(text, column=column)
    assert meaning.role is Role.UNCLEAR
    assert remedy in meaning.reason
    # What --as is given must itself be a heading.
    assert meaning_of(remedy.split("--as ")[1].strip("'")).role is Role.VALUE


@pytest.mark.parametrize(
    "text", ["a)", "a value", "(t)", "Age [Gyr", "z)", "Redshift or age", "z=2"]
)
def test_texts_of_remarks_and_lists_are_no_measures(text: str) -> None:
    assert meaning_of(text).role is not Role.VALUE


def test_a_remark_that_begins_like_a_heading_is_none() -> None:
    assert meaning_of("Age [Gyr]" + " of the host, from its colours" * 4).role is Role.OTHER
