"""The ladder that is told in every lecture: common practice, no source.

Each rule is held against the default parameters (Planck 2018) in the digits in which it is
told. Where it disagrees the test says so, and pins the figure that the computation gives.
"""

from __future__ import annotations

import numpy as np
import pytest

import epochconv
from tests.closeness import assert_close

LAST_SCATTERING = 1089.92  # Planck 2018 VI, table 2 (seen)


def answer(value: object, source: str, target: str, unit: str | None = None) -> float:
    return float(epochconv.convert(value, source, target, unit=unit).magnitude)


def test_age_is_13_8_gyr() -> None:
    assert round(answer(0, "redshift", "age", "Gyr"), 1) == 13.8


def test_microwave_background_was_released_at_380_000_years() -> None:
    """Disagrees by 2 %: 371,700 years, so the round figure is 370,000."""
    found = answer(LAST_SCATTERING, "redshift", "age", "kyr")
    assert_close(found, 371.7, relative=0, absolute=0.05)
    assert round(found, -1) != 380
    assert round(found / 380, 1) == 1.0  # right to the one digit that "about 400,000" has


def test_microwave_background_comes_from_matter_now_45_4_gly_away() -> None:
    """Disagrees in the last digit: 45.24 Gly.

    45.4 would be right for matter that sent it 242,000 years after the Big Bang.
    """
    found = answer(LAST_SCATTERING, "redshift", "comoving distance", "Gly")
    assert_close(found, 45.24, relative=0, absolute=0.005)
    assert round(found, 1) != 45.4
    assert round(found) == round(45.4)
    assert_close(
        answer("45.4 Gly", "comoving distance", "age", "kyr"), 242, relative=0, absolute=0.5
    )


def test_horizon_is_at_46_gly() -> None:
    """Read off the error that a distance beyond it gives, in Mpc."""
    with pytest.raises(epochconv.OutOfRangeError) as caught:
        epochconv.convert("50 Gly", "comoving distance", "redshift")
    assert "horizon" in str(caught.value)
    horizon_gly = caught.value.high * 3.261563777167434e-3  # IAU parsec and light-year
    assert round(horizon_gly) == 46


def test_one_gyr_is_at_about_27_gly() -> None:
    assert round(answer("1 Gyr", "age", "comoving distance", "Gly")) == 27


def test_700_to_800_myr_is_at_29_gly() -> None:
    """29 Gly is 726 Myr. The ends of the span are at 29.2 and 28.4 Gly: 800 Myr rounds to 28."""
    assert 700 <= answer("29 Gly", "comoving distance", "age", "Myr") <= 800
    assert_close(
        answer("700 Myr", "age", "comoving distance", "Gly"), 29.2, relative=0, absolute=0.05
    )
    assert_close(
        answer("800 Myr", "age", "comoving distance", "Gly"), 28.4, relative=0, absolute=0.05
    )


def test_550_myr_is_at_31_gly() -> None:
    """550 Myr is at 30.6 Gly, which rounds to 31; yet 31 Gly themselves are 509 Myr."""
    found = answer("550 Myr", "age", "comoving distance", "Gly")
    assert round(found) == 31
    assert_close(found, 30.6, relative=0, absolute=0.05)
    assert_close(answer("31 Gly", "comoving distance", "age", "Myr"), 509, relative=0, absolute=0.5)


def test_microwave_background_glows_visibly_red_at_3_myr_and_44_gly() -> None:
    """Bodies begin to glow at 798 K (J. W. Draper 1847, from memory)."""
    assert round(answer("798 K", "CMB temperature", "age", "Myr")) == 3
    assert round(answer("798 K", "CMB temperature", "comoving distance", "Gly")) == 44
    assert answer("3 Myr", "age", "CMB temperature", "K") > 798


def test_acceleration_began_more_than_6_gyr_ago() -> None:
    """It begins where the velocity H/(1+z) of a comoving distance is least."""
    epochs = np.linspace(0.3, 1, 7001)
    rate = epochconv.convert(epochs, "redshift", "Hubble rate").magnitude
    onset = float(epochs[np.argmin(rate / (1 + epochs))])
    found = answer(onset, "redshift", "lookback time", "Gyr")
    assert found > 6
    assert_close(found, 6.10, relative=0, absolute=0.005)
