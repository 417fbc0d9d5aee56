"""Derivatives of measures by each other: closed forms, and mpmath's own derivative."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from mpmath import mp, mpf

from epochconv import measures
from epochconv.errors import ArgumentError
from epochconv.moment import Moment
from epochconv.registry import measure_named
from epochconv.slopes import slope_ratio, tangent
from tests.closeness import assert_close
from tests.reference.build_frozen import UNIVERSES
from tests.reference.formula_points import dust, ruler
from tests.reference.frozen_rows import history_of, rows_of
from tests.strategies import ALL_MEASURES

MATTER_ONLY = dust(1)


def by_redshift(target: str, z: np.ndarray) -> np.ndarray:
    """d target / dz of matter alone, from the package under test."""
    moment = Moment(redshift=z)
    return slope_ratio(moment, measures.REDSHIFT, measure_named(target), MATTER_ONLY)


@pytest.mark.parametrize(
    ("target", "formula"),
    [
        ("scale factor", lambda z, time, length: 1 / (1 + z)),
        ("age", lambda z, time, length: 2 * time / 3 * (1 + z) ** mpf(-1.5)),
        ("lookback time", lambda z, time, length: -2 * time / 3 * (1 + z) ** mpf(-1.5)),
        ("comoving distance", lambda z, time, length: -2 * length / mp.sqrt(1 + z)),
        ("CMB temperature", lambda z, time, length: mpf("2.7255") * z),
        ("transverse comoving distance", lambda z, time, length: -2 * length / mp.sqrt(1 + z)),
        (
            "luminosity distance",
            lambda z, time, length: 2 * length * (1 + z - mp.sqrt(1 + z)),
        ),
        (
            "angular diameter distance",
            lambda z, time, length: 2 * length / (1 + z) * (1 - 1 / mp.sqrt(1 + z)),
        ),
        (
            "distance modulus",
            lambda z, time, length: 5 * mp.log10(2 * length * (1 + z - mp.sqrt(1 + z))),
        ),
        ("Hubble rate", lambda z, time, length: 70 * (1 + z) ** mpf(1.5)),
        ("redshift", lambda z, time, length: z),
    ],
)
def test_of_matter_alone_are_those_that_mpmath_finds(target: str, formula: object) -> None:
    """Its derivative of the closed form, in 40 digits."""
    z = np.array([1e-6, 0.1, 1.0, 6.3, 1100.0])
    with mp.workdps(40):
        time, length = ruler(70)
        expected = [
            float(mp.diff(lambda s: formula(s, time, length), mpf(float(one)))) for one in z
        ]
    assert_close(by_redshift(target, z), expected, relative=2e-12)


@pytest.mark.parametrize("name", UNIVERSES)
def test_of_any_pair_agree_with_the_reference(name: str) -> None:
    """Ratios of the slopes of tests/reference, written from the definitions."""
    rows = [row for row in rows_of(name) if 1e-4 <= row.redshift <= 1e5]
    z = np.array([row.redshift for row in rows])
    for source in ALL_MEASURES:
        for target in ALL_MEASURES:
            found = slope_ratio(
                Moment(redshift=z),
                measure_named(source),
                measure_named(target),
                history_of(UNIVERSES[name]),
            )
            expected = [row.slopes[target] / row.slopes[source] for row in rows]
            # The frozen slope of the Hubble rate has ten digits.
            digits = 1e-8 if "Hubble rate" in (source, target) else 1e-10
            assert_close(found, expected, relative=digits)


def test_are_infinite_where_the_source_turns_and_where_a_modulus_begins() -> None:
    today = Moment(redshift=np.array([0.0]))
    found = slope_ratio(today, measures.REDSHIFT, measures.DISTANCE_MODULUS, MATTER_ONLY)
    assert found[0] == math.inf
    turn = Moment(redshift=np.array([1.25]))
    angular = measures.ANGULAR_DIAMETER_DISTANCE
    assert abs(slope_ratio(turn, angular, measures.REDSHIFT, MATTER_ONLY)[0]) > 1e9


@pytest.mark.parametrize("side", [None, "source"])
def test_of_a_guest_without_one_are_asked_for_by_name(side: str | None) -> None:
    bare = replace(measures.REDSHIFT, name="stretch less one", slope_at=None)
    pair = (bare, measures.AGE) if side else (measures.AGE, bare)
    with pytest.raises(ArgumentError, match="stretch less one came without slope_at"):
        slope_ratio(Moment(redshift=np.array([1.0])), *pair, MATTER_ONLY)


def test_tangent_is_the_conversion_and_its_slope() -> None:
    """t_L to z of matter alone, where dz/dt = (1+z)^(5/2)/t_H."""
    time = float(ruler(70)[0])
    z = np.array([0.5, 3.0])
    lookback = 2 / 3 * time * (1 - (1 + z) ** -1.5)
    values, slopes = tangent(lookback, measures.LOOKBACK_TIME, measures.REDSHIFT, MATTER_ONLY)
    assert_close(values, z, relative=1e-11)
    assert_close(slopes, (1 + z) ** 2.5 / time, relative=1e-11)


def test_tangent_of_a_measure_to_itself() -> None:
    values, slopes = tangent(
        np.array([1.0, np.nan]), measures.AGE, measures.AGE, MATTER_ONLY, outside="nan"
    )
    assert_close(values, [1, np.nan])
    assert_close(slopes, [1, np.nan])


def test_tangent_is_nothing_where_there_is_no_value() -> None:
    values, slopes = tangent(
        np.array([-1.0, 0.0, 1.0]),
        measures.REDSHIFT,
        measures.DISTANCE_MODULUS,
        MATTER_ONLY,
        outside="nan",
    )
    assert np.isnan(values).tolist() == np.isnan(slopes).tolist() == [True, True, False]
