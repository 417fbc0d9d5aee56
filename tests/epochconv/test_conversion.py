"""The public call: what it takes, what it gives back, and what it never does to the input."""

from __future__ import annotations

import math
from decimal import Decimal
from fractions import Fraction
from typing import Any

import numpy as np
import pint
import pytest

import epochconv
from epochconv import ArgumentError, ExpansionHistory, OutOfRangeError, convert
from epochconv.measures import MEASURES
from epochconv.units import unit_named
from tests.closeness import assert_close, plain

# Redshifts whose measures under "round numbers" are not at an end of anything.
Z = np.array([[0.1, 0.5, 0.9], [2.0, 6.3, 1100.0]])


@pytest.mark.parametrize("target", MEASURES, ids=lambda measure: measure.name)
def test_result_is_a_quantity_in_the_documented_unit(target: Any) -> None:
    found = convert(1.5, "redshift", target.name)
    documented = {
        "": "dimensionless",
        "mag": "dimensionless",
        "Gyr": "gigayear",
        "Mpc": "megaparsec",
        "K": "kelvin",
        "km/s/Mpc": "kilometer / megaparsec / second",
    }
    assert isinstance(found, pint.get_application_registry().Quantity)
    assert found.units == pint.Unit(documented[target.unit])
    assert type(found.magnitude) is float


SHAPES: list[tuple[int, ...]] = [(6,), (2, 3), (1, 6, 1), (3, 1, 2), (0,), (2, 0), (1, 1, 1, 1, 6)]


@pytest.mark.parametrize("shape", SHAPES)
@pytest.mark.parametrize("target", ["age", "redshift", "distance modulus"])
def test_shape_is_kept(shape: tuple[int, ...], target: str) -> None:
    values = np.resize(Z, shape)
    found = convert(values, "redshift", target)
    assert found.magnitude.shape == shape
    expected = [convert(float(z), "redshift", target).magnitude for z in values.ravel()]
    assert_close(found.magnitude.ravel(), expected, relative=1e-15)
    back = convert(found, target, "redshift")
    assert back.magnitude.shape == shape
    assert_close(back, values, relative=1e-11)


@pytest.mark.parametrize(
    "scalar",
    [
        2,
        2.0,
        np.float64(2),
        np.float32(2),
        np.float16(2),
        np.int8(2),
        np.uint64(2),
        np.longdouble(2),
        np.array(2),
        np.array(2.0),
        Decimal("2"),
        Fraction(2),
        "2",
        " 2.0 ",
        pint.Quantity(2),
        pint.Quantity(200, "percent"),
        pint.Quantity(np.array(2.0), ""),
        pint.Quantity(Decimal(2), ""),
    ],
    ids=repr,
)
def test_one_number_of_any_kind_gives_one_float(scalar: object) -> None:
    found = convert(scalar, "redshift", "age")
    assert type(found.magnitude) is float
    assert_close(found, convert(2.0, "redshift", "age").magnitude, relative=1e-15)


@pytest.mark.parametrize(
    "many",
    [
        [1, 2, 3],
        (1, 2, 3),
        range(1, 4),
        np.array([1, 2, 3]),
        np.array([1, 2, 3], dtype=np.uint8),
        np.array([1, 2, 3], dtype=np.float32),
        np.array([1, 2, 3], dtype=">f8"),
        np.array([3.0, 2.0, 1.0])[::-1],
        np.arange(10.0)[1:4],
        np.array([[1.0, 9.0], [2.0, 9.0], [3.0, 9.0]])[:, 0],
        memoryview(np.array([1.0, 2.0, 3.0])),
        pint.Quantity([1, 2, 3], ""),
        np.ma.array([1.0, 2.0, 3.0]),
        [np.float32(1), 2, 3.0],
    ],
    ids=lambda value: type(value).__name__,
)
def test_many_numbers_of_any_kind_give_an_array(many: object) -> None:
    found = convert(many, "redshift", "age")
    assert type(found.magnitude) is np.ndarray
    assert found.magnitude.dtype == np.float64
    assert_close(found, plain(convert([1.0, 2.0, 3.0], "redshift", "age")), relative=1e-15)


@pytest.mark.parametrize("order", ["C", "F"])
@pytest.mark.parametrize("part", [np.s_[:], np.s_[::-1], np.s_[:, ::2]])
def test_layout_in_memory_does_not_matter(order: Any, part: Any) -> None:
    values = np.array(Z, order=order)[part]
    found = convert(values, "redshift", "comoving distance")
    expected = convert(np.ascontiguousarray(values), "redshift", "comoving distance")
    np.testing.assert_array_equal(found.magnitude, expected.magnitude)


@pytest.mark.parametrize("source", MEASURES, ids=lambda measure: measure.name)
@pytest.mark.parametrize("target", MEASURES, ids=lambda measure: measure.name)
@pytest.mark.parametrize("unit", [None, "other"])
def test_input_is_never_changed_nor_shared(source: Any, target: Any, unit: str | None) -> None:
    """Read-only input too; changing the result changes nothing else."""
    values = convert(Z, "redshift", source.name).magnitude.copy()
    kept = values.copy()
    values.flags.writeable = False
    other = {"Gyr": "Myr", "Mpc": "Gly", "K": "mK", "km/s/Mpc": "1/Gyr"}.get(target.unit)
    wanted = other if unit else None
    for given in (values, pint.Quantity(values, unit_named(source.unit).long_name)):
        found = convert(given, source.name, target.name, unit=wanted, side="nearer")
        assert not np.shares_memory(found.magnitude, values)
        found.magnitude[...] = -1.0
    np.testing.assert_array_equal(values, kept)


def test_lists_are_left_alone() -> None:
    values = [[1, 2], [3, 4]]
    convert(values, "redshift", "age")
    assert values == [[1, 2], [3, 4]]


@pytest.mark.parametrize("source", MEASURES, ids=lambda measure: measure.name)
def test_nan_in_is_nan_out_and_no_warning(source: Any) -> None:
    for target in MEASURES:
        assert math.isnan(convert(math.nan, source.name, target.name).magnitude)
        found = convert([[math.nan, math.nan]], source.name, target.name)
        assert np.isnan(found.magnitude).tolist() == [[True, True]]


def test_what_a_mask_hides_is_nan() -> None:
    """The hidden -999 of a catalogue is no redshift, and its place stays empty."""
    hidden = np.ma.array([1.0, -999.0, 3.0], mask=[False, True, False])
    for given in (hidden, pint.Quantity(hidden, "")):
        found = convert(given, "redshift", "age").magnitude
        assert not isinstance(found, np.ma.MaskedArray)
        assert np.isnan(found).tolist() == [False, True, False]
    whole = np.ma.array([1, 2], mask=[False, True])
    assert np.isnan(convert(whole, "redshift", "age").magnitude).tolist() == [False, True]
    np.testing.assert_array_equal(hidden.data, [1.0, -999.0, 3.0])


@pytest.mark.parametrize(
    ("text", "source", "bare"),
    [
        ("10.9 Gyr", "lookback time", 10.9),
        ("10.9 billion years", "lookback time", 10.9),
        ("10900 Myr", "lookback time", 10.9),
        ("4 Gpc", "comoving distance", 4000.0),
        ("3000 K", "CMB temperature", 3000.0),
        ("2.5", "redshift", 2.5),
        ("0.25", "scale factor", 0.25),
        ("44 mag", "distance modulus", 44.0),
        ("100 km/s/Mpc", "Hubble rate", 100.0),
    ],
)
def test_text_says_what_the_number_says(text: str, source: str, bare: float) -> None:
    found = convert(text, source, "age")
    assert type(found.magnitude) is float
    assert_close(found, convert(bare, source, "age").magnitude, relative=1e-13)


@pytest.mark.parametrize(
    ("text", "source", "words"),
    [
        ("10.9", "age", "'10.9' has no unit; a text for age needs one, such as '10.9 Gyr'"),
        ("44", "distance modulus", "such as '44 mag'"),
        ("10.9 Mpc", "age", "'10.9 Mpc' is a length, but age is a time"),
        ("2.5 Gyr", "redshift", "'2.5 Gyr' is a time, but redshift is a number"),
        ("10.9 gyr", "age", "'gyr' in '10.9 gyr' is not a unit that is known here"),
        ("about 3 Gyr", "age", "is not a number with a unit"),
        ("", "redshift", "'' is not a number with a unit"),
        ("nan", "redshift", "'nan' is not a number with a unit"),
        ("3 1", "redshift", "'1' in '3 1' is not a unit"),
    ],
)
def test_text_that_is_not_plain_is_refused(text: str, source: str, words: str) -> None:
    with pytest.raises(ArgumentError) as caught:
        convert(text, source, "redshift")
    assert words in str(caught.value)


@pytest.mark.parametrize(
    "value",
    [
        True,
        np.bool_(True),
        np.array([True, False]),
        1j,
        np.array([1 + 0j]),
        None,
        b"2",
        ["1", "2"],
        np.array(["1"]),
        np.array([1.0, 2.0], dtype=object),
        [1.0, None],
        {"a": 1},
        {1.0, 2.0},
        object(),
        np.array(["2020-01-01"], dtype="datetime64[D]"),
        np.array([1], dtype="timedelta64[s]"),
        10**400,
        iter([1.0, 2.0]),
        pint.Quantity(1j, ""),
        pint.Unit("m"),
    ],
    ids=lambda value: type(value).__name__,
)
def test_what_is_no_number_is_refused(value: object) -> None:
    with pytest.raises(ArgumentError, match=r"^redshift: .* is not made of numbers$"):
        convert(value, "redshift", "age")


@pytest.mark.parametrize(
    "value", [[1, [2, 3]], [pint.Quantity(1, "Gyr"), pint.Quantity(2, "Gyr")]], ids=["ragged", "q"]
)
def test_what_is_no_array_is_refused(value: object) -> None:
    with pytest.raises(ArgumentError, match="is no array of numbers; give numbers, or one quant"):
        convert(value, "age", "redshift")


def test_refusal_of_something_long_is_short() -> None:
    with pytest.raises(ArgumentError) as caught:
        convert(["x"] * 1000, "redshift", "age")
    assert len(str(caught.value)) < 120


@pytest.mark.parametrize("measure", MEASURES, ids=lambda measure: measure.name)
def test_measure_to_itself_in_another_unit(measure: Any) -> None:
    value = convert(1.2, "redshift", measure.name).magnitude
    for unit, factor in {
        "Gyr": (("Myr", 1e3), ("s", 3.15576e16)),
        "Mpc": (("kpc", 1e3), ("m", 3.0856775814913673e22)),
        "K": (("mK", 1e3), ("µK", 1e6)),
        "km/s/Mpc": (("m/s/Mpc", 1e3), ("1/Gyr", 1 / 977.7922216807891)),
        "": (("percent", 1e2), ("", 1.0)),
        "mag": (("mag", 1.0), ("", 1.0)),
    }[measure.unit]:
        found = convert(value, measure.name, measure.name, unit=unit)
        assert_close(found, value * factor, relative=1e-15)


def test_source_and_target_may_be_symbols_and_aliases() -> None:
    expected = convert(2.5, "redshift", "lookback time")
    for source, target in (("z", "t_L"), ("Redshift", "Look-Back Time"), ("z", "lookback_time")):
        assert convert(2.5, source, target) == expected


@pytest.mark.parametrize(("source", "target"), [("zz", "age"), ("age", "zz"), (None, "age")])
def test_unknown_measure_is_refused(source: Any, target: Any) -> None:
    with pytest.raises(ArgumentError, match="is no measure known here"):
        convert(1.0, source, target)


def test_history_by_object_by_name_and_by_default(matter_only: ExpansionHistory) -> None:
    age = convert(3.0, "redshift", "age", history=matter_only)
    assert_close(age, 2 / 3 * 977.7922216807891 / 70 / 8)
    assert convert(3.0, "z", "age") == convert(3.0, "z", "age", history="Planck 2018")
    assert convert(3.0, "z", "age") != convert(3.0, "z", "age", history="WMAP-2013")
    with pytest.raises(ArgumentError, match="'planck' is no parameter set"):
        convert(3.0, "z", "age", history="planck")
    with pytest.raises(ArgumentError, match="history=3 is neither"):
        convert(3.0, "z", "age", history=3)  # type: ignore[arg-type] # what must fail


def test_error_names_the_place_in_the_callers_shape() -> None:
    values = np.array([[[1.0, 2.0]], [[3.0, -1e-3]], [[-5.0, 1.0]]])
    with pytest.raises(OutOfRangeError, match="at index 1, 0, 1, the first of 2") as caught:
        convert(values, "redshift", "age")
    assert (caught.value.index, caught.value.count) == ((1, 0, 1), 2)
    assert caught.value.value == -1e-3
    with pytest.raises(OutOfRangeError) as caught:
        convert(np.asfortranarray(values.reshape(3, 2)), "redshift", "age")
    assert caught.value.index == (1, 1)


def test_value_in_the_error_is_in_our_unit_whatever_came() -> None:
    with pytest.raises(OutOfRangeError, match="lookback time 20 Gyr is older than") as caught:
        convert(pint.Quantity(20000.0, "Myr"), "lookback time", "redshift")
    assert (caught.value.value, caught.value.unit) == (20.0, "Gyr")
    assert caught.value.low == 0.0
    assert_close(caught.value.high, convert(0, "z", "age").magnitude)


def test_outside_nan_gives_nan_for_scalars_and_for_elements() -> None:
    assert math.isnan(convert(-1, "redshift", "age", outside="nan").magnitude)
    found = convert([1, -1, 2], "redshift", "age", outside="nan", unit="Myr")
    assert np.isnan(found.magnitude).tolist() == [False, True, False]
    assert math.isnan(convert(-1, "redshift", "redshift", outside="nan").magnitude)


@pytest.mark.parametrize("wrong", [{"side": "far"}, {"outside": "none"}, {"side": 1}])
def test_bad_words_are_refused(wrong: dict[str, Any]) -> None:
    ((name, word),) = wrong.items()
    for target in ("age", "redshift"):
        with pytest.raises(ArgumentError, match=f"^{name}={word!r} is neither"):
            convert(1.0, "redshift", target, **wrong)


def test_dimension_of_a_quantity_is_checked_also_to_itself(foreign: pint.UnitRegistry) -> None:
    for target in ("age", "redshift"):
        with pytest.raises(ArgumentError, match="age is in megaparsec, which is no time"):
            convert(foreign.Quantity(3, "Mpc"), "age", target)


def test_registry_of_the_value_is_kept_unless_a_unit_says_otherwise(
    foreign: pint.UnitRegistry, small: pint.UnitRegistry
) -> None:
    for registry in (foreign, small):
        value = registry.Quantity([500.0, 4000.0], "megaparsec")
        for unit in (None, registry.Unit("megayear")):
            found = convert(value, "comoving distance", "lookback time", unit=unit)
            assert isinstance(found, registry.Quantity)
        by_text = convert(value, "comoving distance", "lookback time", unit="Myr")
        assert isinstance(by_text, pint.get_application_registry().Quantity)
        assert_close(by_text, plain(found), relative=1e-14)
        expected = plain(convert([500.0, 4000.0], "comoving distance", "lookback time"))
        assert_close(found, expected * 1000, relative=1e-14)


def test_registry_set_by_the_owner_of_the_program_is_used(
    other_application: pint.UnitRegistry,
) -> None:
    other_application.define("nap = 20 * minute")
    found = convert(3.0, "redshift", "age", unit="nap")
    assert isinstance(found, other_application.Quantity)
    assert_close(found, convert(3.0, "z", "age", unit="s").magnitude / 1200, relative=1e-15)
    total = convert(1, "redshift", "age") + other_application.Quantity(1, "Gyr")
    assert total.units == other_application.gigayear


def test_every_public_name_leads_somewhere() -> None:
    for name in epochconv.__all__:
        assert getattr(epochconv, name).__name__ == name
