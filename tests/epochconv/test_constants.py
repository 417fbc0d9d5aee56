"""Constants against their definitions, in exact or 30-digit arithmetic."""

from __future__ import annotations

import math

from mpmath import mp, mpf

from epochconv import constants

ULP = 2.3e-16


def relative_error(found: float, expected: mpf) -> float:
    return abs(float((mpf(found) - expected) / expected))


def test_exact_definitions_are_exact() -> None:
    """SI Brochure, 9th edition (2019); IAU 2012 resolution B2; IAU style manual (1989)."""
    assert constants.SPEED_OF_LIGHT_M_PER_S == 299792458
    assert constants.SPEED_OF_LIGHT_KM_PER_S == 299792.458
    assert constants.PLANCK_J_S == 6.62607015e-34
    assert constants.BOLTZMANN_J_PER_K == 1.380649e-23
    assert constants.ELECTRONVOLT_J == 1.602176634e-19
    assert constants.ASTRONOMICAL_UNIT_M == 149597870700
    assert constants.JULIAN_YEAR_S == 31557600
    assert constants.LIGHT_YEAR_M == 9460730472580800
    assert constants.GIGAYEAR_S == 31557600 * 10**9


def test_newtonian_constant_is_that_of_codata_2022() -> None:
    assert constants.NEWTON_M3_PER_KG_S2 == 6.67430e-11


def test_parsec_is_that_of_the_iau() -> None:
    """IAU 2015 resolution B2: 648000/π au; pint's own, au/tan(1"), is 8e-12 smaller or larger."""
    with mp.workdps(30):
        parsec = mpf(648000) / mp.pi * 149597870700
        assert relative_error(constants.PARSEC_M, parsec) < ULP
        assert relative_error(constants.MEGAPARSEC_KM, parsec * 1000) < 2 * ULP
        tangent = mpf(149597870700) / mp.tan(mp.pi / 648000)
        assert relative_error(constants.PARSEC_M, tangent) > 7e-12


def test_radiation_constant_follows_from_exact_ones() -> None:
    """σ = 2 π⁵ k⁴ / (15 h³ c²), 5.670374419e-8 W/m²/K⁴ (CODATA 2018, from memory)."""
    with mp.workdps(30):
        planck, boltzmann = mpf("6.62607015e-34"), mpf("1.380649e-23")
        sigma = 2 * mp.pi**5 * boltzmann**4 / (15 * planck**3 * mpf(299792458) ** 2)
        assert relative_error(constants.STEFAN_BOLTZMANN_W_PER_M2_K4, sigma) < 6 * ULP
    assert math.isclose(constants.STEFAN_BOLTZMANN_W_PER_M2_K4, 5.670374419e-8, rel_tol=1e-10)


def test_hubble_time_of_one_unit() -> None:
    """(1 km/s/Mpc)⁻¹ in Gyr of Julian years."""
    with mp.workdps(30):
        parsec = mpf(648000) / mp.pi * 149597870700
        expected = parsec * 10**6 / 1000 / (mpf(31557600) * 10**9)
        assert relative_error(constants.HUBBLE_TIME_GYR_KM_PER_S_MPC, expected) < 3 * ULP
