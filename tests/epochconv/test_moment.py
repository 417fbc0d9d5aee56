"""Moments keep the digits of what they were made from."""

from __future__ import annotations

import numpy as np
import pytest

from epochconv.moment import Moment


def test_what_is_given_is_kept_and_not_copied() -> None:
    values = np.array([0.0, 1e-12, 1.0, 1e10, np.nan])
    assert Moment(redshift=values).redshift is values
    assert Moment(x=values).x is values


def test_the_other_is_made_with_full_relative_precision() -> None:
    """ln(1 + z) = z - z²/2 + …: 1 + 1e-12 alone would keep four digits."""
    small = np.array([1e-12])
    assert Moment(redshift=small).x[0] == pytest.approx(1e-12 - 5e-25, rel=1e-15, abs=0)
    assert Moment(x=small).redshift[0] == pytest.approx(1e-12 + 5e-25, rel=1e-15, abs=0)
    assert Moment(redshift=np.array([np.e - 1])).x[0] == pytest.approx(1, rel=1e-15)


def test_the_other_is_made_once() -> None:
    moment = Moment(redshift=np.array([1.0, 2.0]))
    assert moment.x is moment.x
    moment = Moment(x=np.array([1.0, 2.0]))
    assert moment.redshift is moment.redshift


def test_nan_stays() -> None:
    assert np.isnan(Moment(redshift=np.array([np.nan])).x[0])
