"""The promised exactness, against the frozen 30-digit quadrature of tests/reference.

Forward 1e-12 relative (the modulus 5e-11 mag) for redshifts of 1e-8 to 1e9; backward, with
x = ln(1+z) and f the map, |x^ - x| <= 1e-12 x (1 + |y / (x f'(x))|).
"""

from __future__ import annotations

import numpy as np
import pytest

import epochconv
from tests.closeness import EXACT, EXACT_MODULUS_MAG, assert_close
from tests.reference.build_frozen import (
    HIGHEST_REDSHIFT,
    LOWEST_REDSHIFT,
    UNIVERSES,
)
from tests.reference.frozen_rows import FIELDS, history_of, rows_of

EVERY_UNIVERSE = pytest.mark.parametrize("name", UNIVERSES)
MEASURES = ("scale factor", "CMB temperature", *FIELDS)


@EVERY_UNIVERSE
def test_reference_reaches_both_ends_of_the_promise(name: str) -> None:
    redshifts = [row.redshift for row in rows_of(name)]
    assert redshifts[0] == LOWEST_REDSHIFT
    assert redshifts[-1] == HIGHEST_REDSHIFT
    assert len(redshifts) >= 25


@EVERY_UNIVERSE
@pytest.mark.parametrize("measure", MEASURES)
def test_forward_map_agrees_with_quadrature(name: str, measure: str) -> None:
    rows = rows_of(name)
    found = epochconv.convert(
        np.array([row.redshift for row in rows]),
        "redshift",
        measure,
        history=history_of(UNIVERSES[name]),
    )
    expected = np.array([row.measures[measure] for row in rows])
    if measure == "distance modulus":
        assert_close(found, expected, relative=0, absolute=EXACT_MODULUS_MAG)
    else:
        assert_close(found, expected, relative=EXACT)


@EVERY_UNIVERSE
@pytest.mark.parametrize("measure", MEASURES)
def test_inverse_map_finds_the_redshift_that_the_value_determines(name: str, measure: str) -> None:
    history = history_of(UNIVERSES[name])
    for side in ("nearer", "farther"):
        rows = [
            row
            for row in rows_of(name)
            # The angular diameter distance rises as far as its maximum: the nearer side.
            if measure != "angular diameter distance"
            or (row.slopes[measure] > 0) == (side == "nearer")
        ]
        found = epochconv.convert(
            [row.measures[measure] for row in rows],
            measure,
            "redshift",
            history=history,
            side=side,
        )
        x = np.log1p([row.redshift for row in rows])
        value = np.array([row.measures[measure] for row in rows])
        slope = np.array([row.slopes[measure] for row in rows])
        allowed = EXACT * x * (1 + np.abs(value / (x * slope)))
        assert_close(np.log1p(found.magnitude), x, relative=0, absolute=allowed)


@EVERY_UNIVERSE
def test_age_keeps_its_digits_at_the_highest_redshift(name: str) -> None:
    """A difference of two nearly equal times would have none left: age/today is below 1e-13."""
    row = rows_of(name)[-1]
    found = epochconv.convert(1e9, "redshift", "age", history=history_of(UNIVERSES[name]))
    assert row.measures["age"] < 1e-12
    assert_close(found, row.measures["age"])


@EVERY_UNIVERSE
@pytest.mark.parametrize(
    "measure", ["lookback time", "comoving distance", "luminosity distance", "redshift"]
)
def test_small_redshift_keeps_its_digits_there_and_back(name: str, measure: str) -> None:
    """1 + 1e-8 holds only half the digits of 1e-8."""
    row = rows_of(name)[0]
    history = history_of(UNIVERSES[name])
    assert_close(
        epochconv.convert(1e-8, "redshift", measure, history=history), row.measures[measure]
    )
    assert_close(
        epochconv.convert(row.measures[measure], measure, "redshift", history=history),
        1e-8,
        relative=2 * EXACT,
    )


def test_epoch_gives_the_same_exact_numbers() -> None:
    name = "flat, one massive neutrino"
    rows = rows_of(name)
    epoch = epochconv.epoch(
        redshift=[row.redshift for row in rows], history=history_of(UNIVERSES[name])
    )
    for measure in MEASURES:
        found = getattr(epoch, measure.lower().replace(" ", "_"))
        absolute = EXACT_MODULUS_MAG if measure == "distance modulus" else 0.0
        assert_close(found, [row.measures[measure] for row in rows], absolute=absolute)
