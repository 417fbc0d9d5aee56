"""Laws of intervals: they hold every point between their ends, and grow with the error."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
from hypothesis import given
from hypothesis import strategies as st

import epochconv
from tests.closeness import EXACT, EXACT_MODULUS_MAG, assert_close, plain
from tests.reference.build_frozen import UNIVERSES
from tests.reference.frozen_rows import history_of
from tests.reference.quadrature import Universe
from tests.reference.slopes import slopes
from tests.strategies import ALL_MEASURES, FALLING_MEASURES, STEADY_MEASURES, redshifts

A_UNIVERSE = st.sampled_from(list(UNIVERSES.values()))
A_MEASURE = st.sampled_from(ALL_MEASURES)
STEADY = st.sampled_from(STEADY_MEASURES)
EPSILON = float(np.finfo(np.float64).eps)
SIZES = st.floats(0.0, 3.0)
# Far enough for every map, near enough that an inverse determines x to many digits.
REACH = redshifts(1e-6, 1e3)

# Under every history drawn the angular diameter distance is greatest between these: from 1.25, of
# matter alone, to 1.90 (own search).
NEARER, FARTHER = redshifts(1e-6, 1.2), redshifts(2.0, 1e3)


def of_redshift(z: Any, measure: str, universe: Universe) -> np.ndarray:
    return plain(epochconv.convert(z, "redshift", measure, history=history_of(universe)))


def slopes_at(z: float, universe: Universe) -> dict[str, float]:
    """All slopes by x; that of the Hubble rate is replaced by its upper bound."""
    known = {
        measure: float(of_redshift(z, measure, universe))
        for measure in ("Hubble rate", "comoving distance", "transverse comoving distance")
    }
    return slopes(universe, z, known | {"hubble slope": 2.0})


def slack(z: float, universe: Universe, source: str, target: str, rounding: float) -> float:
    """How far the image of an epoch may be off: what both maps promise, forward and backward.

    `rounding` is what the source's value there has lost, in its own unit.
    """
    slope = slopes_at(z, universe)
    value, of_source = (float(of_redshift(z, m, universe)) for m in (target, source))
    in_x = EXACT * math.log1p(z) + (EXACT * abs(of_source) + rounding) / abs(slope[source])
    # A neighbour's slope may be larger than that at z, but not much within such a step.
    return EXACT_MODULUS_MAG + 2 * (EXACT * abs(value) + in_x * abs(slope[target]))


def check_inner_points(
    universe: Universe, source: str, target: str, three: list[float], inner: list[float], side: Any
) -> None:
    """The image of [first, third] around the second holds the target at every redshift within."""
    first, middle, last = sorted(three)
    ends = sorted(float(of_redshift(z, source, universe)) for z in (first, last))
    value = float(np.clip(of_redshift(middle, source, universe), *ends))
    found = epochconv.convert_with_error(
        value,
        (value - ends[0], ends[1] - value),
        source,
        target,
        history=history_of(universe),
        side=side,
    )
    assert found.low <= found.value <= found.high
    # value - (value - end) is not quite the end.
    rounding = 2 * EPSILON * max(abs(value), abs(ends[0]), abs(ends[1]))
    allowed = max(slack(z, universe, source, target, rounding) for z in (first, middle, last))
    points = np.array([first, last, *(first + f * (last - first) for f in inner)])
    values = of_redshift(points, target, universe)
    assert np.all(values >= found.low.magnitude - allowed)
    assert np.all(values <= found.high.magnitude + allowed)


@given(
    A_UNIVERSE,
    STEADY,
    A_MEASURE,
    st.lists(REACH, min_size=3, max_size=3),
    st.lists(st.floats(0, 1), max_size=20),
)
def test_interval_holds_the_image_of_every_inner_point(
    universe: Universe, source: str, target: str, three: list[float], inner: list[float]
) -> None:
    check_inner_points(universe, source, target, three, inner, None)


@given(A_UNIVERSE, A_MEASURE, st.data())
def test_interval_stays_on_the_side_that_was_chosen(
    universe: Universe, target: str, data: st.DataObject
) -> None:
    side, reach = data.draw(st.sampled_from([("nearer", NEARER), ("farther", FARTHER)]))
    three = data.draw(st.lists(reach, min_size=3, max_size=3))
    inner = data.draw(st.lists(st.floats(0, 1), max_size=20))
    check_inner_points(universe, "angular diameter distance", target, three, inner, side)


@given(A_UNIVERSE, STEADY, A_MEASURE, REACH, SIZES, SIZES, SIZES, SIZES)
def test_larger_error_gives_an_interval_that_holds_the_smaller(
    universe: Universe,
    source: str,
    target: str,
    z: float,
    lower: float,
    upper: float,
    more_below: float,
    more_above: float,
) -> None:
    value = float(of_redshift(z, source, universe))
    scale = abs(value)
    history = history_of(universe)
    inner, outer = (
        epochconv.convert_with_error(value, pair, source, target, history=history)
        for pair in (
            (scale * lower, scale * upper),
            (scale * (lower + more_below), scale * (upper + more_above)),
        )
    )
    for side, sign in (("low", 1), ("high", -1)):
        one, other = (float(getattr(found, side).magnitude) for found in (inner, outer))
        if one != other:  # which infinite ends are
            ulps = 1e-11 * max(abs(one), abs(other)) + EXACT_MODULUS_MAG
            assert sign * (one - other) >= -ulps
    for side in ("cut_low", "cut_high"):
        if target in STEADY_MEASURES:
            assert getattr(inner, side) <= getattr(outer, side)


@given(A_UNIVERSE, STEADY, STEADY, REACH, SIZES, SIZES)
def test_ends_are_what_a_conversion_gives(
    universe: Universe, source: str, target: str, z: float, lower: float, upper: float
) -> None:
    """Sorted: the other way round where just one of the two maps falls; or cut, and said so."""
    value = float(of_redshift(z, source, universe))
    history = history_of(universe)
    errors = abs(value) * lower, abs(value) * upper
    found = epochconv.convert_with_error(value, errors, source, target, history=history)
    sides = [("low", value - errors[0]), ("high", value + errors[1])]
    if source != target and (source in FALLING_MEASURES) != (target in FALLING_MEASURES):
        sides = [("high", value - errors[0]), ("low", value + errors[1])]
    for side, end in sides:
        try:
            expected = epochconv.convert(end, source, target, history=history).magnitude
        except epochconv.OutOfRangeError:
            rounding = abs(end) <= 1e-15 * abs(value)
            missing = target == "distance modulus"
            assert getattr(found, f"cut_{side}") or rounding or missing
            continue
        assert not getattr(found, f"cut_{side}")
        assert_close(getattr(found, side), expected, relative=4 * EPSILON)


@given(A_MEASURE, st.lists(st.tuples(REACH, SIZES, SIZES), max_size=5))
def test_array_holds_what_each_scalar_gives(
    target: str, rows: list[tuple[float, float, float]]
) -> None:
    z, lower, upper = (np.array(column) for column in zip(*rows, strict=True)) if rows else [()] * 3
    together = epochconv.convert_with_error(z, (lower, upper), "redshift", target)
    for i, (one, below, above) in enumerate(rows):
        alone = epochconv.convert_with_error(one, (below, above), "redshift", target)
        for part in ("value", "lower_error", "upper_error", "low", "high"):
            assert_close(
                getattr(together, part)[i],
                getattr(alone, part).magnitude,
                relative=1e-13,
                absolute=1e-13 * abs(alone.value.magnitude),
            )
        assert together.cut_low[i] == alone.cut_low
        assert together.cut_high[i] == alone.cut_high
