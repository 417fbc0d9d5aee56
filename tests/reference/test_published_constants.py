"""Constants and parameter sets, against what the publications print.

The constants reach a user only through answers, so most are read off an answer: in an empty
universe the age today is 1/H0 and the luminosity distance at z = 1 is 1.5 c/H0.
Marks as in test_published.py: "seen" or "memory".
"""

from __future__ import annotations

import pytest

import epochconv
from epochconv import constants
from tests.closeness import assert_close


def test_exact_constants_are_those_of_the_resolutions() -> None:
    """SI Brochure 2019; IAU 2012 B2, 2015 B2 (arXiv:1510.06262: 30 856 775 814 913 673 m); seen."""
    assert constants.SPEED_OF_LIGHT_M_PER_S == 299792458
    assert constants.PLANCK_J_S == 6.62607015e-34
    assert constants.BOLTZMANN_J_PER_K == 1.380649e-23
    assert constants.ELECTRONVOLT_J == 1.602176634e-19
    assert constants.ASTRONOMICAL_UNIT_M == 149597870700
    assert constants.JULIAN_YEAR_S == 31557600
    assert_close(constants.PARSEC_M, 30856775814913673, relative=2e-16)
    assert constants.LIGHT_YEAR_M == 9460730472580800


def test_measured_constant_is_that_of_codata() -> None:
    """CODATA 2022, unchanged from 2018: 6.67430(15)e-11 (seen)."""
    assert constants.NEWTON_M3_PER_KG_S2 == 6.67430e-11


def test_stefan_boltzmann_constant_follows() -> None:
    """CODATA: 5.670374419...e-8 W m^-2 K^-4 (memory)."""
    assert_close(constants.STEFAN_BOLTZMANN_W_PER_M2_K4, 5.670374419e-8, relative=1e-10)


def empty(hubble_constant: float) -> epochconv.ExpansionHistory:
    return epochconv.ExpansionHistory(
        hubble_constant=hubble_constant, matter=0, curvature=1, radiation=False
    )


def test_hubble_time_counts_julian_years() -> None:
    """9.7779222 Gyr/h; the Particle Data Group's 9.777752 (memory) counts sidereal years.

    Their ratio is that of the years, 31 558 149.8 s (PDG 2012, seen) to 31 557 600 s.
    """
    found = epochconv.convert(0, "redshift", "age", history=empty(100))
    assert_close(found, 9.777752 * 31558149.8 / 31557600, relative=1e-7)


def test_hubble_time_of_a_lecture() -> None:
    """14.40078 Gyr for 67.9 km/s/Mpc, in a solution sheet of a university course (seen).

    It counts tropical years of 31 556 925.2 s (PDG 2012, seen).
    """
    found = epochconv.convert(0, "redshift", "age", history=empty(67.9))
    assert_close(found, 14.40078 * 31556925.2 / 31557600, relative=1e-6)


def test_hubble_distance() -> None:
    """D. W. Hogg 1999, astro-ph/9905116: 3000 Mpc/h = 9.26e25 m/h (memory)."""
    found = epochconv.convert(1, "redshift", "luminosity distance", history=empty(100))
    assert_close(found.magnitude / 1.5, 3000, relative=0.001)
    assert_close(found.to("m").magnitude / 1.5, 9.26e25, relative=0.0011)


@pytest.mark.parametrize(
    ("name", "published"),
    [
        # Planck Collaboration VI 2020, A&A 641, A6, table 2 (seen).
        (
            "planck 2018",
            {"hubble_constant": (67.36, 0.54), "matter": (0.3153, 0.0073)},
        ),
        (
            "planck 2018 with bao",
            {"hubble_constant": (67.66, 0.42), "matter": (0.3111, 0.0056)},
        ),
        # Hinshaw et al. 2013, ApJS 208, 19, with eCMB, BAO and H0 (memory).
        (
            "wmap 2013",
            {"hubble_constant": (69.32, 0.80), "matter": (0.2865, (0.0096, 0.0095))},
        ),
        # Riess et al. 2022, ApJL 934, L7 and Brout et al. 2022, ApJ 938, 110 (seen).
        (
            "distance ladder 2022",
            {"hubble_constant": (73.04, 1.04), "matter": (0.334, 0.018)},
        ),
        # DESI Collaboration 2025, arXiv:2503.14738: w0, wa seen second-hand, the others memory.
        (
            "evolving dark energy 2025",
            {
                "hubble_constant": (67.51, 0.59),
                "matter": (0.3114, 0.0057),
                "w0": (-0.838, 0.055),
                "wa": (-0.62, (0.22, 0.19)),
            },
        ),
        # Common practice, no source.
        ("round numbers", {"hubble_constant": (70, None), "matter": (0.3, None)}),
    ],
)
def test_parameter_set_is_the_published_one(name: str, published: dict) -> None:
    found = epochconv.parameter_set(name)
    history = found.history
    values = {
        "hubble_constant": history.hubble_constant,
        "matter": history.matter,
        "w0": history.dark_energy[0],
        "wa": history.dark_energy[1],
    }
    expected = {"w0": (-1, None), "wa": (0, None)} | published
    assert values == {key: value for key, (value, _) in expected.items()}
    assert found.errors == {key: error for key, (_, error) in expected.items() if error is not None}
    assert history.curvature == 0


def test_sets_treat_radiation_and_neutrinos_as_their_authors_did() -> None:
    """Planck: one of 0.06 eV in the matter, 3.046 in all (seen). WMAP: massless (memory)."""
    for name in ("planck 2018", "planck 2018 with bao", "evolving dark energy 2025"):
        history = epochconv.parameter_set(name).history
        assert history.neutrino_masses == (0.06, 0, 0)
        assert history.neutrino_number == 3.046
        assert history.temperature_today == 2.7255
    for name in ("wmap 2013", "distance ladder 2022"):
        history = epochconv.parameter_set(name).history
        assert history.neutrino_masses == (0, 0, 0)
        assert history.radiation
    assert epochconv.parameter_set("wmap 2013").history.temperature_today == 2.725
    assert not epochconv.parameter_set("round numbers").history.radiation
