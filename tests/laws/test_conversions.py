"""Laws of conversion that hold for any input: there and back, order, shape, NaN."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra import numpy as arrays

import epochconv
from tests.closeness import EXACT, assert_close, plain
from tests.reference.build_frozen import UNIVERSES
from tests.reference.frozen_rows import history_of
from tests.reference.quadrature import Universe
from tests.reference.slopes import slopes
from tests.strategies import (
    ALL_MEASURES,
    FALLING_MEASURES,
    STEADY_MEASURES,
    redshift_arrays,
    redshifts,
)

A_UNIVERSE = st.sampled_from(list(UNIVERSES.values()))
A_MEASURE = st.sampled_from(ALL_MEASURES)
STEADY = st.sampled_from(STEADY_MEASURES)
EPSILON = float(np.finfo(np.float64).eps)


def of_redshift(z: Any, measure: str, universe: Universe) -> np.ndarray:
    return plain(epochconv.convert(z, "redshift", measure, history=history_of(universe)))


def slopes_at(z: float, universe: Universe) -> dict[str, float]:
    """All slopes but that of the Hubble rate, which is replaced by its upper bound."""
    known = {
        measure: float(of_redshift(z, measure, universe))
        for measure in ("Hubble rate", "comoving distance", "transverse comoving distance")
    }
    return slopes(universe, z, known | {"hubble slope": 2.0})


@given(A_UNIVERSE, STEADY, STEADY, redshifts())
def test_there_and_back_is_where_it_began(
    universe: Universe, measure: str, other: str, z: float
) -> None:
    """Measure to other to measure, within the exactness that both maps promise.

    Forward, values are good to e; backward, x to e (x + |y / f'|); so x comes home within
    2 e (x + |y_other / f'_other|) and the value within f' times that, and e of its own.
    """
    history = history_of(universe)
    slope = slopes_at(z, universe)
    x = np.log1p(z)
    value = float(of_redshift(z, measure, universe))
    there = epochconv.convert(value, measure, other, history=history)
    back = epochconv.convert(there, other, measure, history=history)
    in_x = 2 * EXACT * (x + abs(there.magnitude / slope[other]) + abs(value / slope[measure]))
    assert_close(back, value, absolute=in_x * abs(slope[measure]))


@given(A_UNIVERSE, A_MEASURE, redshifts())
def test_a_value_gives_an_epoch_that_has_it(universe: Universe, measure: str, z: float) -> None:
    """Also where the map turns over, for both epochs."""
    value = float(of_redshift(z, measure, universe))
    slope = slopes_at(z, universe)[measure]
    for side in ("nearer", "farther"):
        found = epochconv.convert(
            value, measure, "redshift", history=history_of(universe), side=side
        )
        # The farther epoch of a small D_A is steep in x: its x carries the error of the value.
        steep = max(abs(slope), abs(slopes_at(float(found.magnitude), universe)[measure]))
        distance = EXACT * max(np.log1p(z), np.log1p(found.magnitude)) * steep
        assert_close(
            of_redshift(found.magnitude, measure, universe),
            value,
            relative=2 * EXACT,
            absolute=2 * distance,
        )


@given(A_UNIVERSE, st.sampled_from([*STEADY_MEASURES, "Hubble rate"]), redshifts(), redshifts())
def test_order_is_kept(universe: Universe, measure: str, one: float, other: float) -> None:
    """A larger redshift is earlier, farther, hotter, faster; strictly, where doubles can tell."""
    low, high = sorted((one, other))
    first, second = of_redshift([low, high], measure, universe)
    rise = first - second if measure in FALLING_MEASURES else second - first
    assert rise >= -EXACT * abs(first)
    slope = min(abs(slopes_at(z, universe)[measure]) for z in (low, high))
    sure = slope * (np.log1p(high) - np.log1p(low)) > 4 * EXACT * abs(first)
    if sure and measure != "Hubble rate":
        assert rise > 0


@given(A_UNIVERSE, A_MEASURE, redshift_arrays(min_dims=1))
def test_array_holds_what_each_scalar_gives(
    universe: Universe, measure: str, z: np.ndarray
) -> None:
    together = of_redshift(z, measure, universe)
    assert together.shape == z.shape
    for index in np.ndindex(z.shape):
        alone = epochconv.convert(
            float(z[index]), "redshift", measure, history=history_of(universe)
        )
        assert isinstance(alone.magnitude, float)
        assert_close(together[index], alone.magnitude, relative=4 * EPSILON)


@given(STEADY, redshift_arrays())
def test_any_shape_and_order_is_kept_both_ways(measure: str, z: np.ndarray) -> None:
    universe = UNIVERSES["flat, one massive neutrino"]
    before = z.copy()
    values = of_redshift(z, measure, universe)
    values.flags.writeable = False
    backwards = np.asfortranarray(values)[::-1] if z.ndim else values
    back = epochconv.convert(backwards, measure, "redshift", history=history_of(universe))
    assert plain(back).shape == z.shape
    straight = epochconv.convert(values, measure, "redshift", history=history_of(universe))
    assert_close(back.magnitude[::-1] if z.ndim else back, plain(straight), relative=4 * EPSILON)
    np.testing.assert_array_equal(z, before)


@given(st.lists(st.lists(redshifts(), min_size=2, max_size=2), min_size=1, max_size=4))
def test_lists_are_arrays(z: list[list[float]]) -> None:
    found = epochconv.convert(z, "redshift", "age")
    np.testing.assert_array_equal(
        found.magnitude, epochconv.convert(np.array(z), "redshift", "age").magnitude
    )


@given(A_UNIVERSE, A_MEASURE, A_MEASURE, redshift_arrays(), st.data())
def test_nan_in_is_nan_out_and_touches_nothing_else(
    universe: Universe, measure: str, other: str, z: np.ndarray, data: st.DataObject
) -> None:
    blank = data.draw(arrays.arrays(np.bool_, z.shape))
    values = of_redshift(z, measure, universe)
    history = history_of(universe)
    whole = epochconv.convert(values, measure, other, history=history, side="nearer")
    holed = epochconv.convert(
        np.where(blank, np.nan, values), measure, other, history=history, side="nearer"
    )
    assert_close(holed, np.where(blank, np.nan, plain(whole)), relative=4 * EPSILON)


# One value of each measure that no epoch has under any history here, and a redshift below zero.
BEYOND = {
    "redshift": -0.001,
    "scale factor": 1.1,
    "lookback time": 30.0,
    "age": 30.0,
    "comoving distance": 1e6,
    "CMB temperature": 1.0,
    "Hubble rate": 1.0,
    "luminosity distance": -1.0,
    "transverse comoving distance": -1.0,
    "angular diameter distance": 1e6,
}


@given(
    st.sampled_from(list(BEYOND)),
    A_MEASURE.filter(lambda name: name != "distance modulus"),
    arrays.arrays(np.float64, (2, 3), elements=redshifts()),
    arrays.arrays(np.bool_, (2, 3)),
)
def test_values_beyond_the_range_are_blanked_or_named(
    measure: str, other: str, z: np.ndarray, bad: np.ndarray
) -> None:
    """The error carries the measure, the value, the first index, the count and the range."""
    universe = UNIVERSES["flat, one massive neutrino"]
    history = history_of(universe)
    values = of_redshift(z, measure, universe)
    mixed = np.where(bad, BEYOND[measure], values)
    whole = plain(epochconv.convert(values, measure, other, history=history, side="farther"))
    found = epochconv.convert(mixed, measure, other, history=history, side="farther", outside="nan")
    assert_close(found, np.where(bad, np.nan, whole), relative=4 * EPSILON)
    if not bad.any():
        return
    with pytest.raises(epochconv.OutOfRangeError) as caught:
        epochconv.convert(mixed, measure, other, history=history, side="farther")
    error = caught.value
    assert (error.measure, error.value) == (measure, BEYOND[measure])
    assert error.index == tuple(np.argwhere(bad)[0])
    assert error.count == bad.sum()
    assert not error.low <= error.value <= error.high


@given(redshift_arrays())
def test_epoch_agrees_with_separate_conversions(z: np.ndarray) -> None:
    epoch = epochconv.epoch(redshift=z)
    for measure in ALL_MEASURES:
        apart = epochconv.convert(z, "redshift", measure)
        together = getattr(epoch, measure.lower().replace(" ", "_"))
        assert together.units == apart.units
        assert_close(together, plain(apart), relative=4 * EPSILON)


@pytest.mark.parametrize("name", UNIVERSES)
@pytest.mark.parametrize("measure", [m for m in ALL_MEASURES if m != "redshift"])
def test_last_redshift_of_the_tables_comes_back(name: str, measure: str) -> None:
    """1e10, and not NaN or another epoch because one map rounds beyond the end of the other."""
    history = history_of(UNIVERSES[name])
    value = epochconv.convert(1e10, "redshift", measure, history=history).magnitude
    # The angular diameter distance falls to there, so it has a nearer epoch besides.
    side = "farther" if measure == "angular diameter distance" else None
    found = epochconv.convert(value, measure, "redshift", history=history, side=side).magnitude
    assert_close(epochconv.convert(found, "redshift", measure, history=history), value)
    if measure in ("lookback time", "comoving distance", "transverse comoving distance"):
        # These hardly change any more: doubles cannot tell the last redshifts apart.
        assert found > 1e7
    else:
        assert_close(np.log1p(found), np.log1p(1e10), relative=2 * EXACT)


@pytest.mark.parametrize("measure", [m for m in ALL_MEASURES if m != "distance modulus"])
def test_today_comes_back(measure: str) -> None:
    """Redshift 0 has every measure but the modulus, which is refused there by name."""
    value = epochconv.convert(0, "redshift", measure).magnitude
    found = epochconv.convert(value, measure, "redshift", side="nearer")
    assert_close(found, 0.0, absolute=1e-12)


def test_modulus_does_not_exist_today() -> None:
    with pytest.raises(epochconv.OutOfRangeError, match="redshift 0"):
        epochconv.convert([1, 0], "redshift", "distance modulus")
    found = epochconv.convert([1, 0], "redshift", "distance modulus", outside="nan")
    assert np.isnan(found.magnitude).tolist() == [False, True]
