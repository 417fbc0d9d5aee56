"""Intervals through the maps: exact ends, turning points, cuts, and what a sample says."""

from __future__ import annotations

import math

import numpy as np
import pytest

import epochconv
from epochconv.errors import OutOfRangeError, TwoAnswersError
from epochconv.history import ExpansionHistory
from epochconv.intervals import Image, Spread, image, image_of, span_at
from epochconv.registry import measure_named
from tests.closeness import EXACT, EXACT_MODULUS_MAG, assert_close
from tests.reference.build_frozen import UNIVERSES
from tests.reference.formula_points import dust, ruler
from tests.reference.frozen_rows import history_of, rows_of

PLANCK = "flat, one massive neutrino"
TODAY_GYR = 13.797  # age under it, Planck 2018 VI, table 2; good to 0.002 here
# E = (1 + z)^(3/2): every measure in closed form.
MATTER_ONLY = dust(1)
TIME_GYR, LENGTH_MPC = (float(size) for size in ruler(70))
# A closed universe of dust and dark energy in which light has passed the antipode.
LOITERING = dust(0.3, curvature=-0.96)
# Dark energy that grows: the expansion rate falls at first, and then rises.
PHANTOM = dust(0.3, dark_energy=(-2.5, 0))


def through(
    values: object,
    lower: object,
    upper: object,
    source: str,
    target: str,
    history: ExpansionHistory | None = None,
    **how: object,
) -> Image:
    """The image of intervals, given as numbers or lists."""
    spread = Spread(*np.broadcast_arrays(*(np.atleast_1d(a) for a in (values, lower, upper))))
    spread = Spread(*(np.array(a, dtype=np.float64) for a in spread))
    chosen = history_of(UNIVERSES[PLANCK]) if history is None else history
    return image(spread, measure_named(source), measure_named(target), chosen, **how)


def distance(z: float) -> float:
    """Comoving, in Mpc, of matter alone: 2c/H0 (1 - (1+z)^(-1/2))."""
    return -2 * LENGTH_MPC * math.expm1(-0.5 * math.log1p(z))


class TestEnds:
    @pytest.mark.parametrize("name", UNIVERSES)
    @pytest.mark.parametrize(
        "target",
        ["age", "lookback time", "comoving distance", "luminosity distance", "Hubble rate"],
    )
    def test_agree_with_quadrature(self, name: str, target: str) -> None:
        """Three redshifts of the reference in a row: the middle one, and errors to the others."""
        rows = [row for row in rows_of(name) if row.redshift <= 1e5]
        z = np.array([row.redshift for row in rows])
        expected = np.array([row.measures[target] for row in rows])
        found = through(
            z[1:-1],
            z[1:-1] - z[:-2],
            z[2:] - z[1:-1],
            "redshift",
            target,
            history_of(UNIVERSES[name]),
        )
        assert_close(found.values, expected[1:-1])
        first, last = expected[:-2], expected[2:]
        # The subtraction of two doubles costs an ulp of the larger one.
        blur = 4 * np.finfo(np.float64).eps * z[1:-1] / z[:-2]
        low, high = (found.high, found.low) if target == "age" else (found.low, found.high)
        assert_close(low, first, absolute=blur * first)
        assert_close(high, last)
        assert not np.any(found.cut_low | found.cut_high)

    def test_closed_forms_of_matter_alone(self) -> None:
        """z 3 -1 +2: t = 2/3 (1+z)^(-3/2)/H0, D_M = D_C, and what follows from them."""
        age = through(3, 1, 2, "redshift", "age", MATTER_ONLY)
        ages = [2 / 3 * TIME_GYR * stretch**-1.5 for stretch in (6, 4, 3)]
        assert_close(np.ravel([age.low, age.values, age.high]), ages)
        modulus = through(3, 1, 2, "redshift", "distance modulus", MATTER_ONLY)
        moduli = [5 * math.log10((1 + z) * distance(z)) + 25 for z in (2, 3, 5)]
        assert_close(
            np.ravel([modulus.low, modulus.values, modulus.high]),
            moduli,
            relative=0,
            absolute=EXACT_MODULUS_MAG,
        )
        # Back: the same three epochs from their distances.
        spans = distance(3) - distance(2), distance(5) - distance(3)
        redshift = through(distance(3), *spans, "comoving distance", "redshift", MATTER_ONLY)
        assert_close(
            np.ravel([redshift.low, redshift.values, redshift.high]),
            [2, 3, 5],
            relative=20 * EXACT,
        )

    def test_flip_where_the_map_falls(self) -> None:
        """z + error is an earlier age: what was the upper end is the lower one."""
        rising = through(6, 0.1, 0.5, "redshift", "lookback time")
        falling = through(6, 0.1, 0.5, "redshift", "age")
        assert_close(falling.high - falling.values, rising.values - rising.low, relative=1e-9)
        assert_close(falling.values - falling.low, rising.high - rising.values, relative=1e-9)
        assert falling.values - falling.low > 2 * (falling.high - falling.values)
        twice = through(0.9, 0.1, 0.2, "age", "scale factor")
        assert twice.high - twice.values > twice.values - twice.low

    def test_are_asymmetric_where_the_map_bends(self) -> None:
        """t ~ (1+z)^(-3/2) is convex: its upper error is the larger, by 3/2 (5/4) (dz)^2 each."""
        found = through(1, 0.1, 0.1, "redshift", "age", MATTER_ONLY)
        upper, lower = found.high - found.values, found.values - found.low
        today = 2 / 3 * TIME_GYR
        expected = today * (1.9**-1.5 + 2.1**-1.5 - 2 * 2**-1.5)
        assert_close(upper - lower, [expected], relative=1e-10)
        assert expected > 0

    def test_of_no_error_are_the_value(self) -> None:
        found = through([0, 0.5, 6], 0, 0, "redshift", "angular diameter distance")
        np.testing.assert_array_equal(found.low, found.values)
        np.testing.assert_array_equal(found.high, found.values)
        assert not np.any(found.cut_low | found.cut_high)

    def test_are_not_on_the_wrong_side_of_the_value_for_tiny_errors(self) -> None:
        z = np.linspace(0.01, 9, 5000)
        for source, values in (("redshift", z), ("lookback time", 1.5 * z)):
            found = through(values, 1e-17, 1e-17, source, "luminosity distance")
            assert np.all(found.low <= found.values)
            assert np.all(found.values <= found.high)

    def test_of_the_same_measure_are_the_input(self) -> None:
        """Nothing is mapped, nor is a side asked for where one value stands for two epochs."""
        found = through([1000, 1500], 10, [20, 1e5], *["angular diameter distance"] * 2)
        np.testing.assert_array_equal(found.values, [1000, 1500])
        np.testing.assert_array_equal(found.low, [990, 1490])
        assert found.high[0] == 1020
        assert 1780 < found.high[1] < 1810
        assert (found.cut_high.tolist(), found.cut_low.tolist()) == ([False, True], [False] * 2)


class TestTurningPoints:
    def test_are_in_the_image(self) -> None:
        """D_A of matter alone is greatest at z 5/4: 8/27 c/H0."""
        found = through(
            [1, 1.25, 2, 3], 0.9, 0.9, "redshift", "angular diameter distance", MATTER_ONLY
        )
        greatest = 8 / 27 * LENGTH_MPC
        assert_close(found.high[:3], [greatest] * 3)
        assert_close(found.high[3:], [distance(2.1) / 3.1])
        ends = [(0.1, 1.9), (0.35, 2.15), (1.1, 2.9), (2.1, 3.9)]
        expected = [min(distance(z) / (1 + z) for z in pair) for pair in ends]
        assert_close(found.low, expected)
        assert not np.any(found.cut_low | found.cut_high)

    def test_of_the_source_end_the_interval(self) -> None:
        """A little below the greatest D_A + 10 %: cut at the greatest, on the side chosen."""
        greatest = 8 / 27 * LENGTH_MPC
        value = 0.95 * greatest
        how = {"source": "angular diameter distance", "target": "redshift"}
        near = through(value, 50, 100, history=MATTER_ONLY, side="nearer", **how)
        far = through(value, 50, 100, history=MATTER_ONLY, side="farther", **how)
        # A maximum fixes its place to the root of the precision of its height.
        assert_close(near.high, [1.25], relative=1e-6)
        assert_close(far.low, [1.25], relative=1e-6)
        assert (near.cut_high[0], near.cut_low[0]) == (True, False)
        assert (far.cut_high[0], far.cut_low[0]) == (False, True)
        back = [distance(z) / (1 + z) for z in (near.low[0], far.high[0])]
        assert_close(back, [value - 50] * 2, relative=10 * EXACT)

    def test_of_the_source_ask_for_a_side(self) -> None:
        """Also where the value is the maximum itself, which one epoch alone has."""
        for value in (1200, 8 / 27 * LENGTH_MPC):
            with pytest.raises(TwoAnswersError):
                through(value, 10, 10, "angular diameter distance", "redshift", MATTER_ONLY)

    @pytest.mark.parametrize("side", ["nearer", "farther"])
    def test_at_the_value_leave_the_interval_on_the_side_chosen(self, side: str) -> None:
        greatest = 8 / 27 * LENGTH_MPC
        found = through(
            greatest,
            1,
            1,
            "angular diameter distance",
            "redshift",
            MATTER_ONLY,
            side=side,
        )
        assert_close(found.values, [1.25], relative=1e-6)
        assert (found.low[0] < 1.2) == (side == "nearer")
        assert (found.high[0] > 1.3) == (side == "farther")

    def test_several_in_one_interval(self) -> None:
        """Up to an antipode the distance rises, falls to nothing, and rises again."""
        found = through([1, 3], 0.99, 30, "redshift", "transverse comoving distance", LOITERING)
        z = np.linspace(0.01, 33, 200_001)
        all_of_it = epochconv.convert(
            z, "redshift", "transverse comoving distance", history=LOITERING
        ).magnitude
        # The antipode is no point of this grid, but within a step of one.
        assert 0 <= found.low[0] <= all_of_it[z <= 31].min()
        assert found.low[0] < 1e-6 * found.high[0]
        assert_close(found.high[0], all_of_it.max(), relative=1e-7)
        assert found.low[0] <= found.low[1]

    def test_of_a_distance_are_those_of_its_modulus(self) -> None:
        for z, error in ((1, 0.5), (3, 2.9)):
            length = through(z, error, 30, "redshift", "luminosity distance", LOITERING)
            modulus = through(z, error, 30, "redshift", "distance modulus", LOITERING)
            assert_close(modulus.high, 5 * np.log10(length.high) + 25)
            # Nearly nothing at the antipode: a modulus of about minus a hundred.
            assert length.low[0] < 1e-3
            assert modulus.low[0] < 10

    def test_leave_each_value_on_its_own_branch(self) -> None:
        """The farthest epoch of a small distance is where it rises, that of a large one beyond."""
        how = {"source": "transverse comoving distance", "target": "redshift"}
        values = np.array([500.0, 4300.0])
        found = through(values, 10, 20, history=LOITERING, side="farther", **how)
        assert found.values[0] < 10 < found.values[1]
        for i in (0, 1):
            alone = through(values[i], 10, 20, history=LOITERING, side="farther", **how)
            assert (found.low[i], found.high[i]) == (alone.low[0], alone.high[0])
        ends = epochconv.convert(
            np.concatenate([found.low, found.high]),
            "redshift",
            "transverse comoving distance",
            history=LOITERING,
        )
        # Behind the antipode the distance rises, as far as z 10.06, and then falls.
        assert_close(ends, [490, 4320, 520, 4290], relative=1e-9)
        sizes = np.array([10.0, 10.0]), np.array([20.0, 20.0])
        span = span_at(
            Spread(values, *sizes), measure_named(how["source"]), LOITERING, side="farther"
        )
        assert np.all(span.nearer.x < span.moment.x)
        assert np.all(span.moment.x < span.farther.x)

    def test_that_a_rate_has_under_growing_dark_energy(self) -> None:
        """The Hubble rate first falls; values above today's stand for one epoch only."""
        rates = epochconv.convert(
            np.linspace(0, 2, 200_001), "redshift", "Hubble rate", history=PHANTOM
        )
        lowest = rates.magnitude.min()
        assert lowest < 69
        found = through(0.2, 0.2, 0.8, "redshift", "Hubble rate", PHANTOM)
        assert_close(found.low, [lowest], relative=1e-9)
        alone = through(100, 20, 20, "Hubble rate", "redshift", PHANTOM)
        assert (alone.cut_low[0], alone.cut_high[0]) == (False, False)
        with pytest.raises(TwoAnswersError, match=r"Hubble rate 69\.5"):
            through(100, 30.5, 20, "Hubble rate", "redshift", PHANTOM)
        nearest = through(69.8, 0.1, 0.5, "Hubble rate", "redshift", PHANTOM, side="nearer")
        assert (nearest.low[0], nearest.cut_low[0], nearest.cut_high[0]) == (0.0, True, False)


class TestCuts:
    def test_of_a_redshift_at_today(self) -> None:
        found = through([0.1, 0.1], [0.2, 0.05], 0.1, "redshift", "age")
        assert found.cut_high.tolist() == [True, False]
        assert found.cut_low.tolist() == [False, False]
        assert_close(found.high[0], TODAY_GYR, relative=0, absolute=0.002)

    def test_of_a_lookback_time_at_the_beginning(self) -> None:
        """Where z has no end, it is the highest that the tables hold."""
        found = through(13.5, 0.1, 0.5, "lookback time", "redshift")
        assert found.cut_high.tolist() == [True]
        assert_close(found.high, [1e10], relative=0.1)
        age = through(13.5, 0.1, 0.5, "lookback time", "age")
        assert age.cut_low.tolist() == [True]
        assert 0 <= age.low[0] < 1e-10

    def test_at_the_other_ends(self) -> None:
        for measure, value, error, low, high in (
            ("scale factor", 0.9, 0.2, False, True),
            ("CMB temperature", 3.0, 0.5, True, False),
            ("age", 13.5, 1.0, False, True),
            ("comoving distance", 5.0, 6.0, True, False),
            ("comoving distance", 14000, 500, False, True),
            ("luminosity distance", 5.0, 6.0, True, False),
            ("Hubble rate", 70.0, 5.0, True, False),
            ("distance modulus", 40.0, math.inf, False, True),
        ):
            same = through(value, error, error, measure, measure)
            assert (same.cut_low[0], same.cut_high[0]) == (low, high), measure
            falls = measure in ("scale factor", "age")
            z = through(value, error, error, measure, "redshift")
            expected = (high, low) if falls else (low, high)
            assert (z.cut_low[0], z.cut_high[0]) == expected, measure

    def test_do_not_count_rounding(self) -> None:
        """0.3 - (0.1 + 0.2) is not zero in doubles, and no cut either."""
        error = 0.1 + 0.2
        assert 0.3 - error < 0
        for target in ("age", "redshift"):
            found = through(0.3, error, 0.1, "redshift", target)
            assert not np.any(found.cut_low | found.cut_high)
        assert through(0.3, error, 0.1, "redshift", "redshift").low[0] == 0.0

    def test_do_not_count_rounding_at_other_ends_than_zero(self) -> None:
        """2.7255 + e - e is below 2.7255 for many e, by an ulp or two."""
        errors = np.linspace(0.1, 5, 100)
        values = 2.7255 + errors
        assert np.any(values - errors < 2.7255)
        found = through(values, errors, 0, "CMB temperature", "redshift")
        assert not np.any(found.cut_low)
        assert through(3.0, 0.3, 0, "CMB temperature", "redshift").cut_low[0]

    def test_leave_a_modulus_without_an_end(self) -> None:
        """At redshift 0 there is none: the image goes down for ever."""
        found = through([0.1, 1], 0.5, 0.1, "redshift", "distance modulus")
        assert found.low[0] == -math.inf
        assert np.isfinite(found.low[1])
        assert found.cut_low.tolist() == [True, False]

    def test_of_infinite_errors(self) -> None:
        found = through(1.0, math.inf, math.inf, "redshift", "lookback time")
        assert (found.cut_low[0], found.cut_high[0]) == (True, True)
        assert found.low[0] == 0.0
        assert_close(found.high, [TODAY_GYR], relative=0, absolute=0.002)

    def test_do_not_save_a_value_that_is_outside(self) -> None:
        """z -0.001 ± 0.01 reaches to redshifts, but is none."""
        with pytest.raises(OutOfRangeError):
            through(-0.001, 0.01, 0.01, "redshift", "age")
        found = through([-0.001, 1], 0.01, 0.01, "redshift", "age", outside="nan")
        for part in found[:3]:
            assert np.isnan(part).tolist() == [True, False]
        assert not np.any(found.cut_low | found.cut_high)
        same = through([-0.001, 1], 0.01, 0.01, "redshift", "redshift", outside="nan")
        assert np.isnan(same.low).tolist() == np.isnan(same.high).tolist() == [True, False]
        assert not np.any(same.cut_low | same.cut_high)

    def test_do_not_ask_for_a_side_for_a_value_that_is_outside(self) -> None:
        """Its upper end would stand for two epochs."""
        found = through(1, 0, 68.7, "Hubble rate", "redshift", PHANTOM, outside="nan")
        assert np.isnan([found.values[0], found.high[0]]).all()


class TestUnknown:
    @pytest.mark.parametrize("source", ["redshift", "luminosity distance", "distance modulus"])
    def test_errors_leave_the_value(self, source: str) -> None:
        found = through([20, 20, 20], [np.nan, 1, 1], [1, np.nan, 1], source, "age")
        plain = through([20, 20, 20], 0, 0, source, "age")
        np.testing.assert_array_equal(found.values, plain.values)
        assert np.isnan(found.low).tolist() == [True, True, False]
        assert np.isnan(found.high).tolist() == [True, True, False]

    def test_values_have_no_interval(self) -> None:
        found = through([np.nan, 1], 0.1, 0.1, "redshift", "age")
        assert [bool(np.isnan(part[0])) for part in found[:3]] == [True] * 3

    def test_target_does_not_exist_at_a_value(self) -> None:
        with pytest.raises(OutOfRangeError, match="redshift 0"):
            through(0, 0, 0.1, "redshift", "distance modulus")
        found = through(0, 0, 0.1, "redshift", "distance modulus", outside="nan")
        assert np.isnan([found.values[0], found.low[0], found.high[0]]).all()

    def test_nothing_at_all(self) -> None:
        found = through([], [], [], "angular diameter distance", "age", side="nearer")
        assert [part.shape for part in found] == [(0,)] * 5


def test_one_span_serves_many_targets() -> None:
    history = history_of(UNIVERSES[PLANCK])
    spread = Spread(np.array([0.9, 5.0]), np.array([0.1, 0.2]), np.array([0.1, 0.4]))
    age = measure_named("age")
    span = span_at(spread, age, history)
    for target in ("redshift", "scale factor", "luminosity distance", "CMB temperature"):
        apart = image(spread, age, measure_named(target), history)
        together = image_of(span, measure_named(target), history)
        for one, other in zip(apart, together, strict=True):
            np.testing.assert_array_equal(one, other)


def test_input_and_span_are_left_as_they_were() -> None:
    history = history_of(UNIVERSES[PLANCK])
    z, lower, upper = np.array([0.1, 2.0]), np.array([0.3, 0.1]), np.array([0.0, 0.2])
    span = span_at(Spread(z, lower, upper), measure_named("redshift"), history)
    result = image_of(span, measure_named("redshift"), history)
    result.values[:] = result.low[:] = -1
    assert (z.tolist(), lower.tolist(), upper.tolist()) == ([0.1, 2.0], [0.3, 0.1], [0.0, 0.2])
    assert span.moment.redshift.tolist() == [0.1, 2.0]


DRAWS = 100_000
# The cumulative probabilities of one standard deviation below and above.
ONE_SIGMA = 0.5 * math.erfc(1 / math.sqrt(2))


@pytest.mark.parametrize(
    ("source", "value", "lower", "upper", "target", "side"),
    [
        ("redshift", 6.3, 0.1, 0.1, "age", None),
        ("redshift", 0.7, 0.12, 0.05, "luminosity distance", None),
        ("redshift", 2.0, 0.3, 0.4, "distance modulus", None),
        ("lookback time", 10.9, 0.3, 0.2, "redshift", None),
        ("age", 5.0, 0.4, 0.8, "comoving distance", None),
        ("CMB temperature", 9.0, 0.7, 0.7, "lookback time", None),
        ("angular diameter distance", 1000.0, 40.0, 60.0, "redshift", "farther"),
    ],
)
def test_sample_agrees(
    source: str, value: float, lower: float, upper: float, target: str, side: str | None
) -> None:
    """Draws of a normal curve in two halves: its quantiles are the ends, within their errors.

    The standard error of a quantile q of n draws is sqrt(p(1 - p)/n) over the density at q
    (common practice, in any text book of statistics), and the density of the target that of the
    source over the slope of the map, here from neighbouring quantiles of the sample itself.
    """
    normal = np.random.default_rng(20260302).standard_normal(DRAWS)
    drawn = value + normal * np.where(normal < 0, lower, upper)
    history = history_of(UNIVERSES[PLANCK])
    sample = epochconv.convert(drawn, source, target, history=history, side=side).magnitude
    found = through(value, lower, upper, source, target, history, side=side)
    window = 0.01
    for end, probability in ((found.low[0], ONE_SIGMA), (found.high[0], 1 - ONE_SIGMA)):
        before, quantile, after = np.quantile(
            sample, [probability - window, probability, probability + window]
        )
        density = 2 * window / (after - before)
        standard_error = math.sqrt(probability * (1 - probability) / DRAWS) / density
        assert abs(quantile - end) <= 3 * standard_error
        # and the check is sharp: a tenth of the error would not pass
        assert 3 * standard_error < 0.1 * abs(end - found.values[0])
