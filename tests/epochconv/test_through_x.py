"""Any measure to any other on float arrays: ends of ranges, rounding there, and every refusal."""

from __future__ import annotations

import math

import numpy as np
import pytest

from epochconv import measures, through_x
from epochconv.errors import ArgumentError, OutOfRangeError, TwoAnswersError
from epochconv.history import ExpansionHistory
from epochconv.measure import Measure
from epochconv.measures import MEASURES
from epochconv.moment import Moment
from epochconv.published import history_of, parameter_set
from tests.closeness import assert_close

PLANCK = history_of("planck 2018")
ONE_TO_ONE = [measure for measure in MEASURES if measure.moment_of is not None]


def converted(values: list[float], source: Measure, target: Measure, **more: object) -> np.ndarray:
    return through_x.convert_values(np.array(values), source, target, PLANCK, **more)  # type: ignore[arg-type] # words, good and bad


def refused(value: float, measure: Measure) -> str:
    with pytest.raises(OutOfRangeError) as caught:
        converted([value], measure, measures.REDSHIFT)
    return str(caught.value)


@pytest.mark.parametrize(
    ("measure", "value", "words"),
    [
        (measures.REDSHIFT, -0.001, "redshift -0.001 is a neighbour's peculiar motion towards us"),
        (measures.REDSHIFT, -1e-300, "and no epoch; give the cosmological redshift, 0 or above"),
        (measures.REDSHIFT, 2e10, "is earlier than redshift 1e10, where the tables end"),
        (measures.REDSHIFT, math.inf, "redshift inf is earlier than redshift 1e10"),
        (measures.SCALE_FACTOR, 1.5, "scale factor 1.5 lies in the future"),
        (measures.SCALE_FACTOR, 0.0, "scale factor 0 is earlier than redshift 1e10"),
        (measures.LOOKBACK_TIME, 14.0, "lookback time 14 Gyr is older than the universe"),
        (measures.LOOKBACK_TIME, -1.0, "lookback time -1 Gyr lies in the future"),
        (measures.AGE, 14.0, "age 14 Gyr is more than the age of the universe today"),
        (measures.AGE, 0.0, "age 0 Gyr is earlier than redshift 1e10"),
        (measures.COMOVING_DISTANCE, 2e4, "20000 Mpc is beyond the particle horizon"),
        (measures.COMOVING_DISTANCE, -1.0, "comoving distance -1 Mpc is no distance"),
        (measures.CMB_TEMPERATURE, 2.0, "CMB temperature 2 K is colder than today's CMB"),
        (measures.CMB_TEMPERATURE, 1e13, "CMB temperature 1e13 K is earlier than redshift 1e10"),
        (measures.ANGULAR_DIAMETER_DISTANCE, 2e3, "above the largest angular diameter distance"),
        (measures.ANGULAR_DIAMETER_DISTANCE, -1.0, "is no distance that this history has"),
        (measures.TRANSVERSE_COMOVING_DISTANCE, 2e4, "is beyond any transverse distance"),
        (measures.LUMINOSITY_DISTANCE, -1.0, "is no distance that this history has"),
        (measures.LUMINOSITY_DISTANCE, 1e20, "is earlier than redshift 1e10"),
        (measures.DISTANCE_MODULUS, 120.0, "distance modulus 120 mag is earlier than"),
        (measures.HUBBLE_RATE, 60.0, "60 km/s/Mpc is below any expansion rate since the Big Bang"),
    ],
)
def test_value_that_no_epoch_has_is_refused_in_plain_words(
    measure: Measure, value: float, words: str
) -> None:
    assert words in refused(value, measure)


@pytest.mark.parametrize("measure", MEASURES, ids=lambda measure: measure.name)
def test_refusal_names_the_range_and_the_parameter_set(measure: Measure) -> None:
    """But a redshift below zero is no question of the set."""
    text = refused(1e30, measure)
    assert "under planck 2018 it lies between " in text
    assert text.endswith(measure.unit)


def test_range_in_the_refusal_is_that_of_the_history() -> None:
    with pytest.raises(
        OutOfRangeError, match=r"under own parameters .* and 9\.31231 Gyr"
    ) as caught:
        through_x.convert_values(
            np.array([10.0]),
            measures.AGE,
            measures.REDSHIFT,
            ExpansionHistory(hubble_constant=70, matter=1, radiation=False),
        )
    assert_close(caught.value.high, 2 / 3 * 977.7922216807891 / 70)


def test_error_carries_value_place_count_and_range() -> None:
    with pytest.raises(OutOfRangeError) as caught:
        through_x.moment_at(
            np.array([1.0, -2.0, 3.0, 20.0, np.nan, 30.0]),
            measures.LOOKBACK_TIME,
            PLANCK,
            shape=(2, 3),
        )
    error = caught.value
    assert (error.measure, error.value, error.index) == ("lookback time", -2.0, (0, 1))
    assert (error.count, error.low, error.unit) == (3, 0.0, "Gyr")
    assert error.high == pytest.approx(13.7958, abs=1e-4)
    assert "(at index 0, 1, the first of 3 such values)" in str(error)


def test_lone_bad_value_of_an_array_is_not_called_the_first() -> None:
    with pytest.raises(OutOfRangeError, match=r"\(at index 2\);"):
        converted([1.0, 2.0, -1.0], measures.REDSHIFT, measures.AGE, shape=(3,))


def test_scalar_has_no_index() -> None:
    with pytest.raises(OutOfRangeError) as caught:
        converted([-1.0], measures.REDSHIFT, measures.AGE)
    assert caught.value.index == ()
    assert "index" not in str(caught.value)


@pytest.mark.parametrize("source", MEASURES, ids=lambda measure: measure.name)
@pytest.mark.parametrize(
    "target", [m for m in MEASURES if m is not measures.DISTANCE_MODULUS], ids=lambda m: m.name
)
def test_outside_nan_blanks_what_is_out_of_range_and_that_alone(
    source: Measure, target: Measure
) -> None:
    good = float(source.value_at(Moment(redshift=np.array([2.0])), PLANCK)[0])
    found = converted([good, 1e30, np.nan, good], source, target, outside="nan", side="farther")
    assert np.isnan(found).tolist() == [False, True, True, False]
    expected = target.value_at(Moment(redshift=np.array([2.0])), PLANCK)
    if source is not measures.ANGULAR_DIAMETER_DISTANCE:
        assert_close(found[[0, 3]], np.repeat(expected, 2), relative=1e-11)


@pytest.mark.parametrize("measure", ONE_TO_ONE, ids=lambda measure: measure.name)
def test_end_of_a_range_is_inside_and_rounding_beyond_it_is_forgiven(measure: Measure) -> None:
    assert measure.range_of is not None
    low, high = measure.range_of(PLANCK)
    for end, outwards in ((low, -1.0), (high, 1.0)):
        exact, rounded = (
            through_x.moment_at(np.array([value]), measure, PLANCK).x[0]
            for value in (end, end + outwards * 5e-13 * abs(end))
        )
        assert exact == rounded
        beyond = np.array([end + outwards * max(3e-12 * abs(end), 1e-300)])
        with pytest.raises(OutOfRangeError):
            through_x.moment_at(beyond, measure, PLANCK)


def test_modulus_today_is_refused_as_a_target() -> None:
    with pytest.raises(OutOfRangeError) as caught:
        converted([3.0, 0.0, 0.0], measures.REDSHIFT, measures.DISTANCE_MODULUS, shape=(3,))
    error = caught.value
    assert (error.measure, error.index, error.count) == ("distance modulus", (1,), 2)
    assert "distance modulus does not exist at redshift 0 (at index 1, the first of 2" in str(error)
    assert str(error).endswith("give a redshift above 0")
    found = converted([3.0, 0.0], measures.REDSHIFT, measures.DISTANCE_MODULUS, outside="nan")
    assert np.isnan(found).tolist() == [False, True]


def test_two_epochs_are_both_named_and_either_side_is_given() -> None:
    with pytest.raises(TwoAnswersError) as caught:
        converted([0.001, 1500.0], measures.ANGULAR_DIAMETER_DISTANCE, measures.AGE, shape=(2,))
    error = caught.value
    assert error.value == 0.001
    assert "(at index 0, the first of 2 such values)" in str(error)
    assert "choose side='nearer' or side='farther'" in str(error)
    with pytest.raises(TwoAnswersError, match=r"redshift 0\.676146 and 3\.78423 under"):
        converted([1500.0], measures.ANGULAR_DIAMETER_DISTANCE, measures.AGE)
    sides = [
        converted([1500.0], measures.ANGULAR_DIAMETER_DISTANCE, measures.REDSHIFT, side=side)[0]
        for side in ("nearer", "farther")
    ]
    assert_close(sides, [0.676146, 3.78423], relative=1e-6)


def test_epochs_named_are_those_of_the_value_named() -> None:
    with pytest.raises(TwoAnswersError) as caught:
        converted(
            [np.nan, 1500.0, 10.0], measures.ANGULAR_DIAMETER_DISTANCE, measures.AGE, shape=(3,)
        )
    assert caught.value.value == 1500.0
    assert_close(caught.value.redshifts, [0.676146, 3.78423], relative=1e-6)
    assert "(at index 1, the first of 2 such values)" in str(caught.value)


def test_top_of_a_map_is_one_epoch_and_needs_no_side() -> None:
    with pytest.raises(OutOfRangeError) as caught:
        converted([1e5], measures.ANGULAR_DIAMETER_DISTANCE, measures.REDSHIFT)
    (top,) = converted([caught.value.high], measures.ANGULAR_DIAMETER_DISTANCE, measures.REDSHIFT)
    around = converted(
        [0.999 * top, top, 1.001 * top], measures.REDSHIFT, measures.ANGULAR_DIAMETER_DISTANCE
    )
    assert around[1] == max(around)


def test_side_has_no_effect_where_nothing_turns_over() -> None:
    values = [0.5, 3.0]
    for side in ("nearer", "farther"):
        np.testing.assert_array_equal(
            converted(values, measures.AGE, measures.REDSHIFT, side=side),
            converted(values, measures.AGE, measures.REDSHIFT),
        )


@pytest.mark.parametrize("source", [measures.AGE, measures.ANGULAR_DIAMETER_DISTANCE])
@pytest.mark.parametrize("target", [measures.AGE, measures.ANGULAR_DIAMETER_DISTANCE])
@pytest.mark.parametrize(
    "words", [{"side": "near"}, {"side": "Nearer"}, {"outside": "NaN"}, {"outside": "ignore"}]
)
def test_bad_word_is_refused_whatever_is_asked(
    source: Measure, target: Measure, words: dict[str, str]
) -> None:
    """Also from a measure to itself, where nothing would be looked up with it."""
    ((name, word),) = words.items()
    with pytest.raises(ArgumentError, match=f"{name}='{word}' is neither '"):
        converted([1.0], source, target, **words)


@pytest.mark.parametrize("measure", MEASURES, ids=lambda measure: measure.name)
def test_measure_to_itself_is_a_checked_copy(measure: Measure) -> None:
    values = measure.value_at(Moment(redshift=np.array([0.5, 1.2])), PLANCK)
    found = through_x.convert_values(values, measure, measure, PLANCK)
    np.testing.assert_array_equal(found, values)
    assert not np.shares_memory(found, values)
    with pytest.raises(OutOfRangeError):
        converted([1e30], measure, measure)


@pytest.mark.parametrize("source", MEASURES, ids=lambda measure: measure.name)
@pytest.mark.parametrize("target", MEASURES, ids=lambda measure: measure.name)
def test_result_shares_no_memory_with_the_input(source: Measure, target: Measure) -> None:
    values = np.array(source.value_at(Moment(redshift=np.array([0.5, 1.2])), PLANCK))
    kept = values.copy()
    found = through_x.convert_values(values, source, target, PLANCK, side="nearer")
    found += 1.0
    np.testing.assert_array_equal(values, kept)


def test_no_values_are_no_results() -> None:
    for source in MEASURES:
        assert converted([], source, measures.AGE).shape == (0,)


def test_label_in_messages_is_the_published_one() -> None:
    history = parameter_set("wmap 2013").history
    with pytest.raises(OutOfRangeError, match="under wmap 2013 it lies"):
        through_x.moment_at(np.array([99.0]), measures.AGE, history)
