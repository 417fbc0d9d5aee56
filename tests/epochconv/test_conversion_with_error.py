"""The public calls with errors: what they take, what they give, what they refuse."""

from __future__ import annotations

import math
import pickle
from decimal import Decimal

import numpy as np
import pint
import pytest

import epochconv
from epochconv import WithError, convert_with_error, convert_with_linear_error
from epochconv.errors import ArgumentError, OutOfRangeError, TwoAnswersError
from tests.closeness import assert_close, plain
from tests.reference.formula_points import dust, ruler

SPEED_OF_LIGHT_KM_PER_S = 299792.458


def numbers(found: WithError) -> list[np.ndarray]:
    """The bare numbers of the five quantities."""
    parts = (found.value, found.lower_error, found.upper_error, found.low, found.high)
    return [plain(part) for part in parts]


class TestResult:
    def test_is_the_images_of_the_ends(self) -> None:
        found = convert_with_error(6.3, (0.1, 0.3), "redshift", "age")
        low, middle, high = (
            epochconv.convert(z, "redshift", "age") for z in (6.3 + 0.3, 6.3, 6.3 - 0.1)
        )
        assert (found.low, found.value, found.high) == (low, middle, high)
        assert found.lower_error == middle - low
        assert found.upper_error == high - middle
        assert (found.cut_low, found.cut_high) == (False, False)

    def test_closed_form_in_units_of_ones_own(self) -> None:
        """D_C of matter alone, in Gly: 2c/H0 (1 - (1+z)^(-1/2)), one Gly per c and Gyr."""
        time = float(ruler(70)[0])
        found = convert_with_error(
            3, (1, 5), "redshift", "comoving distance", unit="Gly", history=dust(1)
        )
        expected = [2 * time * (1 - (1 + z) ** -0.5) for z in (2, 3, 8)]
        assert_close([found.low.magnitude, found.value.magnitude, found.high.magnitude], expected)
        assert {str(part.units) for part in (found.low, found.value, found.upper_error)} == {
            "gigalight_year"
        }

    def test_has_the_shape_of_the_value(self) -> None:
        z = np.array([[0.5, 1.0, 2.0], [3.0, 4.0, 5.0]])
        found = convert_with_error(z, 0.1, "redshift", "age")
        assert {part.shape for part in numbers(found)} == {(2, 3)}
        assert found.cut_low.shape == found.cut_high.shape == (2, 3)
        assert found.cut_low.dtype == np.bool_
        alone = convert_with_error(4.0, 0.1, "redshift", "age")
        assert_close([part[1, 1] for part in numbers(found)], np.array(numbers(alone)))
        empty = convert_with_error([], 0.1, "redshift", "age")
        assert {part.shape for part in numbers(empty)} == {(0,)}

    def test_of_one_number_holds_floats_and_bools(self) -> None:
        found = convert_with_error(0.1, 0.2, "redshift", "age")
        assert isinstance(found.low.magnitude, float)
        assert (found.cut_low, found.cut_high) == (False, True)
        assert type(found.cut_high) is bool

    def test_lives_in_the_registry_of_the_value(self) -> None:
        registry = pint.UnitRegistry()
        found = convert_with_error(registry.Quantity(900, "Myr"), 0.1, "age", "redshift")
        for part in (found.value, found.lower_error, found.upper_error, found.low, found.high):
            assert isinstance(part, registry.Quantity)
        wanted = convert_with_error(6, 0.1, "redshift", "age", unit=registry.Myr)
        assert isinstance(wanted.upper_error, registry.Quantity)

    def test_parts_share_no_memory(self) -> None:
        z = np.array([0.5, 1.0])
        found = convert_with_error(z, 0.1, "redshift", "redshift")
        found.value.magnitude[:] = found.low.magnitude[:] = 9
        assert z.tolist() == [0.5, 1.0]
        assert found.high.magnitude.tolist() == [0.6, 1.1]

    def test_can_be_pickled(self) -> None:
        found = convert_with_error([0.5, 6.0], 0.1, "redshift", "age")
        again = pickle.loads(pickle.dumps(found))
        for one, other in zip(numbers(found), numbers(again), strict=True):
            np.testing.assert_array_equal(one, other)
        assert again.assumes == found.assumes

    def test_cannot_be_changed(self) -> None:
        found = convert_with_error(6, 0.1, "redshift", "age")
        with pytest.raises(AttributeError):
            found.low = 0.0

    def test_names_its_history(self) -> None:
        found = convert_with_error(6, 0.1, "redshift", "age", history="wmap 2013")
        assert found.assumes.startswith("under wmap 2013: H0 69.32 km/s/Mpc")
        assert "counted" not in found.assumes


class TestPrinted:
    def test_number(self) -> None:
        found = convert_with_error(3, (1, 2), "redshift", "age", history=dust(1))
        # 2/3 t_H / 8 = 1.164, / 3^1.5 = 1.792, / 6^1.5 = 0.634 with t_H = 13.968 (own sum)
        first, second = repr(found).splitlines()
        assert first == "1.16 +0.63 −0.53 Gyr"
        assert second == found.assumes

    def test_array(self) -> None:
        found = convert_with_error(np.arange(1.0, 8.0), 0.1, "redshift", "scale factor")
        first, _ = repr(found).splitlines()
        # 1/1.9 = 0.526, 1/2.1 = 0.476; 1/2.9 = 0.345, 1/3.1 = 0.323
        assert first.startswith("[0.500 +0.026 −0.024, 0.333 ± 0.011, ")
        assert first.endswith(", and 2 more]")
        five = convert_with_error(np.arange(1.0, 6.0), 0.1, "redshift", "scale factor")
        assert "more" not in repr(five)

    def test_cut_ends(self) -> None:
        found = convert_with_error([0.1, 0.1, 1], 0.2, "redshift", "age")
        assert repr(found).endswith("; cut at the end of the range: 0 low, 2 high")

    def test_unit_that_is_in_no_table(self) -> None:
        found = convert_with_error(1, 0.1, "redshift", "age", unit="fortnight")
        assert repr(found).splitlines()[0].endswith(" fortnight")


class TestErrors:
    @pytest.mark.parametrize(
        "error",
        [
            0.1,
            "0.1 Gyr",
            "100 Myr",
            (0.1, 0.1),
            ("0.1 Gyr", "100 Myr"),
            [0.1],
            np.float32(0.1),
            Decimal("0.1"),
            pint.UnitRegistry().Quantity(100, "megayear"),
            (pint.UnitRegistry().Quantity(100, "megayear"), 0.1),
        ],
    )
    def test_in_many_forms(self, error: object) -> None:
        value = [10.9] if isinstance(error, list) else 10.9
        found = convert_with_error(value, error, "lookback time", "age")
        assert_close(np.ravel(found.lower_error.magnitude), [0.1], relative=1e-7)
        assert_close(np.ravel(found.upper_error.magnitude), [0.1], relative=1e-7)

    def test_one_for_each_value(self) -> None:
        found = convert_with_error([5, 10], [0.1, 0.2], "age", "lookback time")
        assert_close(found.upper_error, [0.1, 0.2], relative=1e-10)
        pair = convert_with_error([5, 10], ([0.1, 0.2], 0.3), "age", "lookback time")
        assert_close(pair.upper_error, [0.1, 0.2], relative=1e-10)
        assert_close(pair.lower_error, [0.3, 0.3], relative=1e-10)

    def test_one_for_each_column(self) -> None:
        found = convert_with_error(np.full((3, 2), 5.0), [0.1, 0.2], "age", "lookback time")
        assert_close(found.upper_error, np.tile([0.1, 0.2], (3, 1)), relative=1e-10)

    def test_text_value(self) -> None:
        found = convert_with_error("10.9 Gyr", "0.1 Gyr", "lookback time", "lookback time")
        assert_close([found.low.magnitude, found.high.magnitude], [10.8, 11.0])

    def test_hidden_by_a_mask_are_unknown(self) -> None:
        error = np.ma.masked_array([0.1, 0.1], mask=[False, True])
        found = convert_with_error([5, 10], error, "age", "lookback time")
        assert np.isnan(found.low.magnitude).tolist() == [False, True]
        assert np.isfinite(found.value.magnitude).all()
        assert "(error not known)" in repr(found)

    @pytest.mark.parametrize(
        ("error", "words"),
        [
            (None, "no error was given"),
            (-0.1, "error of lookback time -0.1 is below zero"),
            ((0.1, -0.2), "upper error of lookback time -0.2 is below zero"),
            ((-0.1, 0.2), "lower error"),
            ("0.1", "no unit"),
            ("0.1 Mpc", "error of lookback time"),
            ("some", "not a number"),
            ([0.1, 0.2], r"shape \(2,\)"),
            ((0.1, 0.2, 0.3), "3 parts"),
            ((0.1,), "1 parts"),
            ({}, "error of lookback time"),
            (True, "not made of numbers"),
            (pint.UnitRegistry().Quantity(1, "Mpc"), "error of lookback time is in"),
        ],
    )
    def test_refused(self, error: object, words: str) -> None:
        with pytest.raises(ArgumentError, match=words):
            convert_with_error(10.9, error, "lookback time", "redshift")

    def test_of_too_many_values(self) -> None:
        with pytest.raises(ArgumentError, match=r"shape \(3,\) and the values have \(2,\)"):
            convert_with_error([1, 2], [0.1, 0.1, 0.1], "redshift", "age")


class TestValues:
    def test_outside_the_range(self) -> None:
        with pytest.raises(OutOfRangeError) as caught:
            convert_with_error([[1.0], [14.2]], 0.5, "lookback time", "redshift")
        assert caught.value.index == (1, 0)
        found = convert_with_error([1.0, 14.2], 0.5, "lookback time", "redshift", outside="nan")
        assert [np.isnan(part).tolist() for part in numbers(found)] == [[False, True]] * 5

    def test_that_stand_for_two_epochs(self) -> None:
        with pytest.raises(TwoAnswersError):
            convert_with_error(1500, 10, "angular diameter distance", "redshift")
        near, far = (
            convert_with_error(1500, 10, "D_A", "redshift", side=side)
            for side in ("nearer", "farther")
        )
        assert near.high.magnitude < far.low.magnitude
        itself = convert_with_error(1500, 10, "D_A", "D_A", unit="Gpc")
        assert_close([itself.low.magnitude, itself.high.magnitude], [1.49, 1.51])

    @pytest.mark.parametrize("bad", ["side", "outside"])
    def test_with_words_that_are_none(self, bad: str) -> None:
        for target in ("age", "redshift"):
            with pytest.raises(ArgumentError, match=f"{bad}='middle'"):
                convert_with_error(1, 0.1, "redshift", target, **{bad: "middle"})

    @pytest.mark.parametrize("call", [convert_with_error, convert_with_linear_error])
    def test_of_measures_that_are_none(self, call: object) -> None:
        with pytest.raises(ArgumentError, match="agee"):
            call(1, 0.1, "redshift", "agee")
        with pytest.raises(ArgumentError, match="furlong"):
            call(1, 0.1, "redshift", "age", unit="furlong")
        with pytest.raises(ArgumentError, match="history"):
            call(1, 0.1, "redshift", "age", history=70)


class TestParameterError:
    def test_adds_in_quadrature_and_says_so(self) -> None:
        """Today's age: 0.024 Gyr of the parameters, and nothing of the redshift but its error."""
        alone = convert_with_error(0, 0, "redshift", "age", parameter_error=True)
        assert f"{alone.lower_error.magnitude:.3f}" == "0.024"
        assert "errors of planck 2018 counted: H0 ± 0.54" in alone.assumes
        without = convert_with_error(6.3, 0.1, "redshift", "age")
        within = convert_with_error(6.3, 0.1, "redshift", "age", parameter_error=True)
        parameters = convert_with_error(6.3, 0, "redshift", "age", parameter_error=True)
        for side in ("lower_error", "upper_error"):
            one, other, both = (
                getattr(found, side).magnitude for found in (without, parameters, within)
            )
            assert both == pytest.approx(math.hypot(one, other), rel=1e-9)

    def test_of_a_measure_to_itself_is_none(self) -> None:
        found = convert_with_error(10.9, 0.1, "age", "age", parameter_error=True)
        assert_close(found.lower_error, 0.1, relative=1e-10)

    @pytest.mark.parametrize("target", ["age", "redshift"])
    @pytest.mark.parametrize("history", ["round numbers", dust(0.3)])
    def test_without_published_errors(self, history: object, target: str) -> None:
        with pytest.raises(ArgumentError, match="no published errors"):
            convert_with_error(1, 0.1, "redshift", target, history=history, parameter_error=True)

    def test_is_known_of_a_history_that_is_published(self) -> None:
        history = epochconv.parameter_set("planck 2018").history
        found = convert_with_error(0, 0, "redshift", "age", history=history, parameter_error=True)
        assert f"{found.upper_error.magnitude:.3f}" == "0.024"


class TestPeculiarVelocity:
    def test_widens_a_redshift_before_it_is_mapped(self) -> None:
        blur = 1.01 * 300 / SPEED_OF_LIGHT_KM_PER_S
        size = math.hypot(0.002, blur)
        found = convert_with_error(
            0.01, 0.002, "redshift", "distance modulus", peculiar_velocity=300
        )
        expected = convert_with_error(0.01, size, "redshift", "distance modulus")
        assert_close(np.array(numbers(found)), np.array(numbers(expected)))
        assert found.assumes.endswith("; peculiar velocity ± 300 km/s counted")

    def test_of_near_objects_reaches_to_today(self) -> None:
        found = convert_with_error(
            [0.0005, 0.1], 0, "redshift", "lookback time", peculiar_velocity=300
        )
        assert found.cut_low.tolist() == [True, False]
        assert found.low.magnitude[0] == 0.0

    def test_of_a_time_is_refused(self) -> None:
        with pytest.raises(ArgumentError, match="no lookback time"):
            convert_with_error(1, 0.1, "lookback time", "redshift", peculiar_velocity=300)


class TestLinear:
    def test_is_the_derivative_times_the_error(self) -> None:
        """Of matter alone dt/dz = -t_H (1+z)^(-5/2)."""
        time = float(ruler(70)[0])
        found = convert_with_linear_error(
            [1.0, 3.0], 0.1, "redshift", "age", history=dust(1), unit="Myr"
        )
        assert_close(found.value, [2000 / 3 * time * s**-1.5 for s in (2, 4)])
        assert_close(found.error, [100 * time * s**-2.5 for s in (2, 4)])
        value, error = found
        assert value.units == error.units

    def test_agrees_with_the_interval_of_a_small_error_only(self) -> None:
        for size, alike in ((1e-6, True), (0.5, False)):
            exact = convert_with_error(1, size, "redshift", "age").upper_error.magnitude
            linear = convert_with_linear_error(1, size, "redshift", "age").error.magnitude
            assert math.isclose(linear, exact, rel_tol=1e-5) is alike

    def test_of_one_number_holds_floats(self) -> None:
        found = convert_with_linear_error("10.9 Gyr", "0.1 Gyr", "lookback time", "redshift")
        assert isinstance(found.value.magnitude, float)
        assert isinstance(found.error.magnitude, float)

    def test_no_error_stays_none_where_the_slope_has_no_bound(self) -> None:
        found = convert_with_linear_error(
            8 / 27 * float(ruler(70)[1]), 0, "D_A", "redshift", history=dust(1), side="nearer"
        )
        assert found.error.magnitude == 0.0

    def test_refuses_a_pair(self) -> None:
        with pytest.raises(ArgumentError, match="symmetric"):
            convert_with_linear_error(1, (0.1, 0.2), "redshift", "age")

    def test_refuses_no_error(self) -> None:
        with pytest.raises(ArgumentError, match="no error was given"):
            convert_with_linear_error(1, None, "redshift", "age")
