"""The parameter sets' own errors: published companions, a sample, and plain conversions."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

import epochconv
from epochconv import measures
from epochconv.errors import ArgumentError
from epochconv.history import ExpansionHistory
from epochconv.intervals import Spread, image_of, span_at
from epochconv.measure import Measure
from epochconv.moment import Moment
from epochconv.parameter_errors import (
    parameter_error,
    parameters_text,
    set_with_errors,
    with_parameter_error,
)
from epochconv.published import ParameterSet, parameter_set, parameter_sets
from epochconv.registry import measure_named
from epochconv.through_x import moment_at
from tests.reference.slopes import GYR_KM_PER_S_PER_MPC

SETS_WITH_ERRORS = [one for one in parameter_sets() if one.errors]
EVERY_SET = pytest.mark.parametrize("one", SETS_WITH_ERRORS, ids=lambda one: one.name)


def error_of(values: object, source: str, target: str, name: str, side: str | None = None) -> float:
    """The parameter error of a conversion of one value or several."""
    one, pair = parameter_set(name), (measure_named(source), measure_named(target))
    array = np.atleast_1d(np.asarray(values, dtype=np.float64))
    found = parameter_error(moment_at(array, pair[0], one.history, side=side), *pair, one)
    return float(found[0]) if np.ndim(values) == 0 else found


class TestPublishedCompanions:
    """Planck Collaboration VI 2020, A&A 641, A6, table 2 (seen)."""

    @pytest.mark.parametrize(
        ("name", "age_error_gyr", "within"),
        [("planck 2018", 0.023, 0.0015), ("planck 2018 with bao", 0.020, 0.0005)],
    )
    def test_age_error(self, name: str, age_error_gyr: float, within: float) -> None:
        """0.024 follows from the rounded parameters for the published 0.023; 0.020 for 0.020.

        A change of the error of Ω_m h³ by its rounding, 0.000005, is one of 0.0005 Gyr.
        """
        found = error_of(0, "redshift", "age", name)
        assert found == pytest.approx(age_error_gyr, abs=within)
        assert f"{error_of(0, 'redshift', 'age', 'planck 2018'):.3f}" == "0.024"

    @pytest.mark.parametrize(
        ("name", "correlation", "matter_h2", "its_error"),
        [
            ("planck 2018", -0.992, 0.1430, 0.0011),
            ("planck 2018 with bao", -0.986, 0.14240, 0.00087),
        ],
    )
    def test_correlation(
        self, name: str, correlation: float, matter_h2: float, its_error: float
    ) -> None:
        """From the error of Ω_m h³, it gives the published error of Ω_m h²."""
        one = parameter_set(name)
        assert list(one.correlations) == [("matter", "hubble_constant")]
        (found,) = one.correlations.values()
        assert found == pytest.approx(correlation, abs=0.0005)
        of_matter = one.errors["matter"] / one.history.matter
        of_rate = 2 * one.errors["hubble_constant"] / one.history.hubble_constant
        relative = math.sqrt(of_matter**2 + of_rate**2 + 2 * found * of_matter * of_rate)
        half_a_digit = 0.00005 if its_error > 0.001 else 0.000005
        assert relative * matter_h2 == pytest.approx(its_error, abs=half_a_digit)

    def test_combination_is_that_of_the_set(self) -> None:
        """Its published mean differs from that of the rounded parameters by less than its error."""
        for one in parameter_sets():
            if one.combination is None:
                assert one.correlations == {}
                continue
            product = one.history.matter * (one.history.hubble_constant / 100) ** 3
            assert product == pytest.approx(one.combination.value, abs=one.combination.error)

    def test_todays_rate_has_the_published_error(self) -> None:
        for one in SETS_WITH_ERRORS:
            found = error_of(0, "redshift", "Hubble rate", one.name)
            assert found == pytest.approx(one.errors["hubble_constant"], rel=1e-9)


def flat_age_gyr(rate: np.ndarray, matter: np.ndarray) -> np.ndarray:
    """Age of a flat universe of matter and a constant (Weinberg 1989, Rev. Mod. Phys. 61, 1)."""
    dark = 1 - matter
    return (
        GYR_KM_PER_S_PER_MPC / rate * 2 / (3 * np.sqrt(dark)) * np.arcsinh(np.sqrt(dark / matter))
    )


def test_sample_of_parameters_agrees() -> None:
    """10^5 pairs of H0 and Ω_m with Planck's correlation, through the closed form of the age.

    The standard deviation of a sample is good to 1/sqrt(2 n), and radiation, which the form lacks,
    changes the age by 4e-4 of itself.
    """
    draws = 100_000
    normal = np.random.default_rng(20260303).standard_normal((2, draws))
    correlation = -0.9920
    rate = 67.36 + 0.54 * normal[0]
    matter = 0.3153 + 0.0073 * (correlation * normal[0] + math.sqrt(1 - correlation**2) * normal[1])
    spread = float(np.std(flat_age_gyr(rate, matter)))
    found = error_of(0, "redshift", "age", "planck 2018")
    assert found == pytest.approx(spread, rel=3 / math.sqrt(2 * draws) + 1e-3)


def moved(one: ParameterSet, name: str, by: float) -> ExpansionHistory:
    """The set's history with one parameter moved."""
    old = one.history
    change = {name: by}
    w0, wa = old.dark_energy
    return ExpansionHistory(
        hubble_constant=old.hubble_constant + change.get("hubble_constant", 0),
        matter=old.matter + change.get("matter", 0),
        dark_energy=(w0 + change.get("w0", 0), wa + change.get("wa", 0)),
        temperature_today=old.temperature_today,
        radiation=old.radiation,
        neutrino_masses=old.neutrino_masses,
        neutrino_number=old.neutrino_number,
    )


@EVERY_SET
@pytest.mark.parametrize(
    ("source", "values", "target", "side"),
    [
        ("redshift", [0.1, 1.0, 6.3, 1100.0], "luminosity distance", None),
        ("redshift", [0.1, 6.3], "distance modulus", None),
        ("redshift", [0.0, 1.0, 6.3], "Hubble rate", None),
        ("lookback time", [0.5, 5.0, 11.0], "redshift", None),
        ("lookback time", [0.5, 5.0, 11.0], "age", None),
        ("comoving distance", [100.0, 8000.0], "lookback time", None),
        ("age", [0.5, 2.0], "comoving distance", None),
        ("angular diameter distance", [1000.0], "redshift", "farther"),
        ("angular diameter distance", [1000.0], "age", "nearer"),
        ("distance modulus", [35.0, 47.0], "redshift", None),
        ("CMB temperature", [5.0, 20.0], "age", None),
    ],
)
def test_is_what_moved_histories_give_at_a_fixed_source(
    one: ParameterSet, source: str, values: list[float], target: str, side: str | None
) -> None:
    """Whole conversions, back and forth, under histories moved by a hundredth of each error."""
    step = 0.01
    names = list(one.errors)
    sizes = [one.error_of(name) for name in names]
    changes = []
    for name, size in zip(names, sizes, strict=True):
        less, more = (
            epochconv.convert(
                values, source, target, history=moved(one, name, sign * step * size), side=side
            ).magnitude
            for sign in (-1, 1)
        )
        changes.append((more - less) / (2 * step))
    expected = sum(change**2 for change in changes)
    for pair, correlation in one.correlations.items():
        first, second = (changes[names.index(name)] for name in pair)
        expected = expected + 2 * correlation * first * second
    found = error_of(values, source, target, one.name, side)
    # 1 % steps leave 1e-5 of the third derivative; correlations cancel, which magnifies rounding.
    np.testing.assert_allclose(found, np.sqrt(expected), rtol=1e-4)


def test_nothing_depends_where_the_map_knows_no_parameter() -> None:
    for source, target in (
        ("redshift", "scale factor"),
        ("redshift", "CMB temperature"),
        ("scale factor", "redshift"),
        ("redshift", "redshift"),
    ):
        assert error_of(0.5, source, target, "planck 2018") == 0.0


def test_today_is_certain_but_its_age_is_not() -> None:
    for target in ("lookback time", "comoving distance", "luminosity distance"):
        assert error_of(0, "redshift", target, "planck 2018") == 0.0
    assert error_of(0, "redshift", "age", "planck 2018") > 0.02


def test_grows_without_bound_where_the_source_stands_still() -> None:
    """At the greatest D_A a change of the parameters moves the redshift by any amount."""
    one = parameter_set("planck 2018")
    z = np.array([1.0, 1.5, 1.58, 1.587])
    errors = parameter_error(
        Moment(redshift=z), measures.ANGULAR_DIAMETER_DISTANCE, measures.REDSHIFT, one
    )
    assert np.all(np.diff(errors) > 0)
    assert errors[-1] > 1


class TestCombined:
    @staticmethod
    def both(
        values: list[float], error: float, source: Measure, target: Measure, name: str
    ) -> tuple:
        one = parameter_set(name)
        array = np.array(values)
        errors = np.full_like(array, error)
        span = span_at(Spread(array, errors, 2 * errors), source, one.history)
        image = image_of(span, target, one.history)
        size = parameter_error(span.moment, source, target, one)
        return image, size, with_parameter_error(image, span.moment, source, target, one)

    def test_in_quadrature_on_each_side(self) -> None:
        image, size, found = self.both(
            [0.5, 6.3], 0.01, measures.REDSHIFT, measures.AGE, "planck 2018"
        )
        np.testing.assert_array_equal(found.values, image.values)
        lower, upper = image.values - image.low, image.high - image.values
        np.testing.assert_allclose(found.values - found.low, np.sqrt(lower**2 + size**2))
        np.testing.assert_allclose(found.high - found.values, np.sqrt(upper**2 + size**2))
        assert not np.any(found.cut_low | found.cut_high)

    def test_and_cut_where_the_target_ends(self) -> None:
        """7 Myr after the Big Bang by its lookback time, 24 Myr of error: z reaches to today."""
        image, _, found = self.both(
            [13.79], 1e-4, measures.LOOKBACK_TIME, measures.REDSHIFT, "planck 2018"
        )
        assert image.low[0] > 50
        assert (found.low[0], found.cut_low[0]) == (0.0, True)

    def test_but_not_where_the_end_moves_with_the_parameters(self) -> None:
        """The age of the universe is uncertain itself, on both sides; so is all before it."""
        _, size, found = self.both([0.0], 0.0, measures.REDSHIFT, measures.AGE, "planck 2018")
        np.testing.assert_allclose(found.high - found.values, size)
        np.testing.assert_allclose(found.values - found.low, size)
        assert not found.cut_high[0]
        for target in (measures.LOOKBACK_TIME, measures.COMOVING_DISTANCE):
            _, size, found = self.both([1e9], 0.0, measures.REDSHIFT, target, "planck 2018")
            np.testing.assert_allclose(found.high - found.values, size)
            assert not found.cut_high[0]

    def test_and_never_below_nothing(self) -> None:
        """The universe of this lookback time is 7 ± 24 Myr old."""
        _, size, found = self.both(
            [13.79], 1e-4, measures.LOOKBACK_TIME, measures.AGE, "planck 2018"
        )
        assert size[0] > found.values[0]
        assert (found.low[0], found.cut_low[0]) == (0.0, True)

    def test_and_never_beyond_the_value_itself(self) -> None:
        """2.725e10 K is the hottest of WMAP's tables, and rounds to a redshift above 1e10."""
        hottest = 2.725 * (1 + 1e10)
        for target in (measures.REDSHIFT, measures.SCALE_FACTOR, measures.CMB_TEMPERATURE):
            _, _, found = self.both([hottest], 0.0, measures.CMB_TEMPERATURE, target, "wmap 2013")
            assert found.low[0] <= found.values[0] <= found.high[0]

    def test_with_unknown_errors_stays_unknown(self) -> None:
        image, _, found = self.both([1.0], math.nan, measures.REDSHIFT, measures.AGE, "planck 2018")
        assert np.isnan([image.low[0], found.low[0], found.high[0]]).all()

    def test_with_no_end_stays_without(self) -> None:
        _, _, found = self.both(
            [0.1], 0.2, measures.REDSHIFT, measures.DISTANCE_MODULUS, "planck 2018"
        )
        assert found.low[0] == -math.inf
        assert found.cut_low[0]


class TestSetsWithErrors:
    @EVERY_SET
    def test_are_found_by_their_history(self, one: ParameterSet) -> None:
        assert set_with_errors(one.history) is one

    def test_round_numbers_have_none(self) -> None:
        one = parameter_set("round numbers")
        with pytest.raises(ArgumentError, match=r"'round numbers' has no published errors.*planck"):
            set_with_errors(one.history)
        with pytest.raises(ArgumentError, match="no published errors"):
            error_of(1, "redshift", "age", "round numbers")

    def test_own_parameters_have_none(self) -> None:
        with pytest.raises(ArgumentError, match="your own parameters has no published errors"):
            set_with_errors(ExpansionHistory(hubble_constant=70, matter=0.3))

    def test_guest_without_a_slope_is_named_where_it_is_needed(self) -> None:
        one = parameter_set("planck 2018")
        bare = replace(measures.LOOKBACK_TIME, name="time so far", slope_at=None)
        moment = Moment(redshift=np.array([1.0]))
        with pytest.raises(ArgumentError, match="time so far came without slope_at"):
            parameter_error(moment, bare, measures.REDSHIFT, one)
        # As a target of a redshift it needs none.
        found = parameter_error(moment, measures.REDSHIFT, bare, one)
        assert found[0] == pytest.approx(error_of(1, "redshift", "lookback time", one.name))


class TestSymmetricErrors:
    def test_unequal_sides_are_averaged_in_quadrature(self) -> None:
        one = parameter_set("evolving dark energy 2025")
        assert one.errors["wa"] == (0.22, 0.19)
        assert one.error_of("wa") == pytest.approx(math.sqrt(0.04225), rel=1e-14)
        assert one.error_of("w0") == 0.055


class TestWords:
    def test_name_the_correlation_and_where_it_is_from(self) -> None:
        found = parameters_text(parameter_set("planck 2018"))
        assert found == (
            "errors of planck 2018 counted: H0 ± 0.54; Ω_m ± 0.0073; "
            "correlation -0.992 from Ω_m h³ 0.09633 ± 0.0003"
        )

    def test_say_what_is_taken_as_independent_and_averaged(self) -> None:
        found = parameters_text(parameter_set("evolving dark energy 2025"))
        assert "wa ± 0.206, the mean square of its unequal sides" in found
        assert "w0 ± 0.055;" in found
        assert "independent" in found
        for one in SETS_WITH_ERRORS:
            assert ("independent" in parameters_text(one)) == (one.combination is None)


def test_a_handful_of_histories_serves_all_values(monkeypatch: pytest.MonkeyPatch) -> None:
    """No table is built for a value: none at all once a set has been used."""
    error_of(1.0, "redshift", "age", "planck 2018")

    def build(*_: object) -> None:
        raise AssertionError("a table was built")

    monkeypatch.setattr("epochconv.history.Tables", build)
    found = error_of(np.linspace(0.1, 9, 50), "redshift", "age", "planck 2018")
    assert found.shape == (50,)
