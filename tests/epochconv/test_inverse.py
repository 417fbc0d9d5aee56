"""From values back to moments where a map rises, falls or turns over, on all sides of a turn."""

from __future__ import annotations

import math

import numpy as np
import pytest

from epochconv import inverse, measures
from epochconv.history import ExpansionHistory
from epochconv.measure import Measure
from epochconv.moment import Moment
from epochconv.published import history_of
from tests.closeness import assert_close
from tests.epochconv.guest_measures import SWING


def value_at(measure: Measure, x: float, history: ExpansionHistory) -> float:
    return float(measure.value_at(Moment(x=np.array([x])), history)[0])


def found_x(measure: Measure, value: float, history: ExpansionHistory) -> list[float]:
    """All answers, nearest first."""
    every = [float(one.x[0]) for one in inverse.roots(measure, np.array([value]), history)]
    return [x for x in every if not math.isnan(x)]


def test_measure_with_its_own_inverse_uses_it() -> None:
    history = history_of(None)
    (found,) = inverse.roots(measures.SCALE_FACTOR, np.array([0.25]), history)
    assert found.redshift[0] == 3.0


def test_angular_distance_of_matter_alone_turns_at_five_quarters(
    matter_only: ExpansionHistory,
) -> None:
    """D_A = 2 l (1 - (1 + z)^(-1/2))/(1 + z) has its maximum 8/27 l at z = 5/4."""
    high = inverse.range_of(measures.ANGULAR_DIAMETER_DISTANCE, matter_only)[1]
    assert_close(high, 8 / 27 * matter_only.hubble_length_mpc)
    nearer, farther = found_x(measures.ANGULAR_DIAMETER_DISTANCE, 0.999999 * high, matter_only)
    assert nearer < math.log(2.25) < farther
    # A parabola's top is where the two sides meet: half a digit of x per digit of the value.
    assert_close(0.5 * (nearer + farther), math.log(2.25), relative=1e-5)
    top = found_x(measures.ANGULAR_DIAMETER_DISTANCE, high, matter_only)
    assert_close(top, np.full(len(top), math.log(2.25)), relative=1e-7)


def test_transverse_distance_of_a_closed_universe_turns_at_a_right_angle(
    closed: ExpansionHistory,
) -> None:
    radius = closed.hubble_length_mpc / math.sqrt(-closed.curvature)
    low, high = inverse.range_of(measures.TRANSVERSE_COMOVING_DISTANCE, closed)
    assert low == 0.0
    assert_close(high, radius)
    answers = found_x(measures.TRANSVERSE_COMOVING_DISTANCE, 0.95 * radius, closed)
    assert len(answers) == 2
    for x, angle in zip(answers, (math.asin(0.95), math.pi - math.asin(0.95)), strict=True):
        assert_close(value_at(measures.COMOVING_DISTANCE, x, closed), angle * radius)


def test_beyond_the_antipode_there_are_three_answers(loitering: ExpansionHistory) -> None:
    radius = loitering.hubble_length_mpc / math.sqrt(-loitering.curvature)
    answers = found_x(measures.TRANSVERSE_COMOVING_DISTANCE, 0.2 * radius, loitering)
    angles = [
        value_at(measures.COMOVING_DISTANCE, x, loitering) / radius / math.pi for x in answers
    ]
    first = math.asin(0.2) / math.pi
    assert_close(angles, [first, 1 - first, 1 + first], relative=1e-11)


def test_expansion_rate_under_phantom_energy_has_a_minimum(phantom: ExpansionHistory) -> None:
    """Where the rate neither falls nor rises; on both sides of it each rate stands for two."""
    low, high = inverse.range_of(measures.HUBBLE_RATE, phantom)
    today = value_at(measures.HUBBLE_RATE, 0.0, phantom)
    assert low < today == 70.0 < high
    rate = 0.5 * (low + today)
    nearer, farther = found_x(measures.HUBBLE_RATE, rate, phantom)
    assert 0 < nearer < farther
    for x in (nearer, farther):
        assert_close(value_at(measures.HUBBLE_RATE, x, phantom), rate)
    assert len(found_x(measures.HUBBLE_RATE, 71.0, phantom)) == 1
    lowest = np.min(phantom.hubble_constant * phantom.expansion.rate(np.linspace(0, 1, 20001)))
    assert_close(low, lowest, relative=1e-7)
    assert low <= lowest


@pytest.mark.parametrize("name", ["planck 2018", "round numbers", "evolving dark energy 2025"])
def test_luminosity_distance_rises_throughout(name: str) -> None:
    assert len(inverse.roots(measures.LUMINOSITY_DISTANCE, np.ones(1), history_of(name))) == 1


def test_many_turns_are_all_found() -> None:
    """sin x up to x = ln(1 + 1e10) = 23.03: turns at π/2, 3π/2, …, 15π/2 would be beyond."""
    history = history_of(None)
    assert_close(inverse.range_of(SWING, history), [-1, 1])
    answers = found_x(SWING, -0.25, history)
    dip = math.asin(0.25)
    assert_close(
        answers,
        [math.pi * k + (dip if k % 2 else -dip) for k in range(1, 8)],
        relative=1e-12,
    )


def test_values_between_the_knots_are_found_in_any_order_and_number(
    closed: ExpansionHistory,
) -> None:
    """More than a block, unsorted; each answer is the one that it would be alone."""
    x = np.random.default_rng(5).uniform(0.01, 0.9, 40_000)
    values = measures.TRANSVERSE_COMOVING_DISTANCE.value_at(Moment(x=x), closed)
    nearer = inverse.roots(measures.TRANSVERSE_COMOVING_DISTANCE, values, closed)[0].x
    assert_close(nearer, x, relative=1e-11)


def test_nan_and_unreached_values_are_nan_on_a_branch(closed: ExpansionHistory) -> None:
    radius = closed.hubble_length_mpc / math.sqrt(-closed.curvature)
    values = np.array([np.nan, 0.1 * radius, 0.95 * radius, 2 * radius])
    kept = values.copy()
    nearer, farther = inverse.roots(measures.TRANSVERSE_COMOVING_DISTANCE, values, closed)
    assert np.isnan(nearer.x).tolist() == [True, False, False, True]
    assert np.isnan(farther.x).tolist() == [True, True, False, True]
    np.testing.assert_array_equal(values, kept)


def test_ends_of_a_branch_belong_to_it() -> None:
    """Also where rounding puts the value an ulp beyond."""
    history = history_of(None)
    low, high = inverse.range_of(measures.HUBBLE_RATE, history)
    assert low == history.hubble_constant
    (found,) = inverse.roots(
        measures.HUBBLE_RATE, np.array([low, np.nextafter(high, np.inf)]), history
    )
    assert_close(found.x, [0.0, math.log1p(1e10)], absolute=1e-14)


def test_range_of_a_rescaled_measure_is_that_of_the_other() -> None:
    history = history_of(None)
    low, high = inverse.range_of(measures.DISTANCE_MODULUS, history)
    assert low == -math.inf
    assert_close(
        high, 5 * math.log10(inverse.range_of(measures.LUMINOSITY_DISTANCE, history)[1]) + 25
    )


def test_ranges_of_one_to_one_measures(matter_only: ExpansionHistory) -> None:
    hubble_time, hubble_length = matter_only.hubble_time_gyr, matter_only.hubble_length_mpc
    expected = {
        measures.REDSHIFT: (0.0, 1e10),
        measures.SCALE_FACTOR: (1 / (1 + 1e10), 1.0),
        measures.LOOKBACK_TIME: (0.0, 2 / 3 * hubble_time),
        measures.AGE: (2 / 3 * hubble_time * (1 + 1e10) ** -1.5, 2 / 3 * hubble_time),
        measures.COMOVING_DISTANCE: (0.0, 2 * hubble_length * (1 - (1 + 1e10) ** -0.5)),
        measures.CMB_TEMPERATURE: (2.7255, 2.7255 * (1 + 1e10)),
    }
    for measure, limits in expected.items():
        assert_close(inverse.range_of(measure, matter_only), limits)
