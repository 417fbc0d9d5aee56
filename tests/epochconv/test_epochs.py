"""An epoch: its measures as attributes, its shape, what is kept, and how it is sent and shown."""

from __future__ import annotations

import copy
import pickle
from typing import Any

import numpy as np
import pint
import pytest

import epochconv
from epochconv import ArgumentError, Epoch, ExpansionHistory, OutOfRangeError, epoch
from epochconv.measures import MEASURES
from tests.closeness import assert_close, plain
from tests.epochconv.fresh_interpreter import in_fresh_interpreter

ATTRIBUTES = {
    "redshift": "redshift",
    "scale_factor": "scale factor",
    "lookback_time": "lookback time",
    "age": "age",
    "comoving_distance": "comoving distance",
    "cmb_temperature": "CMB temperature",
    "transverse_comoving_distance": "transverse comoving distance",
    "luminosity_distance": "luminosity distance",
    "angular_diameter_distance": "angular diameter distance",
    "distance_modulus": "distance modulus",
    "hubble_rate": "Hubble rate",
}


def test_every_measure_is_an_attribute() -> None:
    assert list(ATTRIBUTES.values()) == [measure.name for measure in MEASURES]
    assert dir(epoch(redshift=1)) == sorted([*ATTRIBUTES, "history", "shape"])


@pytest.mark.parametrize("name", ATTRIBUTES)
@pytest.mark.parametrize("z", [1.5, [0.5, 1.5, 9.0], [[1.0], [2.0]], np.zeros((2, 0))])
def test_attribute_is_what_a_conversion_gives(name: str, z: Any) -> None:
    one = epoch(redshift=z)
    found = getattr(one, name)
    expected = epochconv.convert(z, "redshift", ATTRIBUTES[name])
    assert found.units == expected.units
    assert type(found) is type(expected)
    assert type(found.magnitude) is type(expected.magnitude)
    assert np.shape(found.magnitude) == np.shape(z) == one.shape
    assert_close(found, plain(expected), relative=1e-15)


@pytest.mark.parametrize("name", ATTRIBUTES)
def test_attribute_is_computed_once(name: str) -> None:
    one = epoch(redshift=[1.0, 2.0])
    assert getattr(one, name) is getattr(one, name)


def test_times_belong_together() -> None:
    """Both come from one look at the table; asking for one does not change the other."""
    one, other = epoch(redshift=[0.1, 3.0]), epoch(redshift=[0.1, 3.0])
    age, lookback = one.age, one.lookback_time
    np.testing.assert_array_equal(other.lookback_time.magnitude, lookback.magnitude)
    np.testing.assert_array_equal(other.age.magnitude, age.magnitude)
    today = epoch(redshift=0).age.magnitude
    assert_close(age.magnitude + lookback.magnitude, [today, today], relative=1e-14)


@pytest.mark.parametrize("name", ATTRIBUTES)
def test_any_measure_may_be_given(name: str) -> None:
    value = getattr(epoch(redshift=[0.5, 1.2]), name)
    found = epoch(**{name: value}, side="nearer")
    assert_close(found.redshift, [0.5, 1.2], relative=1e-11)
    assert_close(getattr(found, name), plain(value), relative=1e-11)


def test_values_come_as_in_conversions(foreign: pint.UnitRegistry) -> None:
    expected = epoch(age=1.0).redshift
    for given in (
        "1 Gyr",
        "1000 million years",
        foreign.Quantity(1.0, "Gyr"),
        pint.Quantity("Gyr"),
    ):
        assert_close(epoch(age=given).redshift, expected.magnitude, relative=1e-14)
    assert epoch(z=2).redshift.magnitude == 2.0
    assert epoch(cosmic_age="1 Gyr").redshift == expected


def test_results_live_in_the_application_registry(
    other_application: pint.UnitRegistry, foreign: pint.UnitRegistry
) -> None:
    found = epoch(age=foreign.Quantity(1.0, "Gyr"))
    assert isinstance(found.lookback_time, other_application.Quantity)


def test_history_is_kept(matter_only: ExpansionHistory) -> None:
    assert epoch(redshift=1).history == epochconv.parameter_set("planck 2018").history
    assert epoch(redshift=1, history=matter_only).history is matter_only
    named = epoch(redshift=1, history="round-numbers")
    assert named.history == epochconv.parameter_set("round numbers").history


def test_caller_may_change_its_array_afterwards() -> None:
    values = np.array([1.0, 2.0])
    one = epoch(redshift=values)
    values[:] = 9.0
    assert one.redshift.magnitude.tolist() == [1.0, 2.0]
    assert_close(one.cmb_temperature, [5.451, 8.1765], relative=1e-15)


def test_changing_one_result_changes_no_other() -> None:
    one = epoch(redshift=[1.0, 2.0])
    one.redshift.magnitude[:] = 9.0
    assert_close(one.scale_factor, [0.5, 1 / 3], relative=1e-15)


@pytest.mark.parametrize(
    ("arguments", "given"),
    [({}, "none"), ({"redshift": 1, "age": 2}, "redshift, age"), ({"history": None}, "none")],
)
def test_exactly_one_measure_is_taken(arguments: dict[str, Any], given: str) -> None:
    with pytest.raises(ArgumentError, match="exactly one measure by keyword") as caught:
        epoch(**arguments)
    assert str(caught.value).endswith(f"given: {given}")


def test_measure_must_be_named() -> None:
    with pytest.raises(TypeError):
        epoch(2.5)  # type: ignore[misc] # what must fail


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        ({"redshfit": 1}, "Did you mean 'redshift'?"),
        ({"redshift": "one"}, "'one' is not a number with a unit"),
        ({"redshift": True}, "is not made of numbers"),
        ({"age": "1 Mpc"}, "'1 Mpc' is a length, but age is a time"),
        ({"age": 1, "history": "nothing like it"}, "is no parameter set known here"),
        ({"age": 1, "side": "left"}, "side='left' is neither"),
        ({"age": 1, "outside": "zero"}, "outside='zero' is neither"),
        ({"angular_diameter_distance": 1000}, "choose side='nearer' or side='farther'"),
        ({"redshift": [1, -1]}, "(at index 1); give the cosmological redshift"),
    ],
)
def test_bad_arguments_are_refused_at_once(arguments: dict[str, Any], words: str) -> None:
    with pytest.raises(ArgumentError) as caught:
        epoch(**arguments)
    assert words in str(caught.value)


def test_side_and_outside_are_as_in_conversions() -> None:
    nearer, farther = (epoch(D_A=1500, side=side) for side in ("nearer", "farther"))  # type: ignore[arg-type] # one of both
    assert nearer.redshift < 1.6 < farther.redshift
    blanked = epoch(redshift=[1, -1], outside="nan")
    assert np.isnan(blanked.age.magnitude).tolist() == [False, True]
    assert np.isnan(blanked.redshift.magnitude).tolist() == [False, True]


@pytest.mark.parametrize("name", ["ages", "Age", "lookback", "CMB_temperature", "z", "cosmic_age"])
def test_unknown_attribute_is_told_what_there_is(name: str) -> None:
    """Aliases and other cases are for arguments; an attribute has one name."""
    with pytest.raises(AttributeError) as caught:
        getattr(epoch(redshift=1), name)
    text = str(caught.value)
    assert text.startswith(f"an epoch has no measure {name!r}; it has age, ")
    assert all(known in text for known in ATTRIBUTES)


def test_attribute_that_does_not_exist_there_is_refused_and_the_others_answer() -> None:
    one = epoch(redshift=[1.0, 0.0])
    with pytest.raises(OutOfRangeError, match="distance modulus does not exist at redshift 0"):
        _ = one.distance_modulus
    assert one.luminosity_distance.magnitude[1] == 0.0


@pytest.mark.parametrize(
    "way", [copy.copy, copy.deepcopy, lambda one: pickle.loads(pickle.dumps(one))]
)
def test_copies_and_pickles_are_the_same_epoch(way: Any) -> None:
    one = epoch(redshift=[[1.0, 2.0]], history="wmap 2013")
    _ = one.age
    again = way(one)
    assert type(again) is Epoch
    assert again.shape == (1, 2)
    assert again.history == one.history
    np.testing.assert_array_equal(again.age.magnitude, one.age.magnitude)
    assert repr(again) == repr(one)


def test_pickle_carries_no_unit_registry_to_another_process() -> None:
    one = epoch(age=[1.0, 2.0])
    _ = one.age
    script = (
        "import pickle, sys\n"
        "epoch = pickle.load(sys.stdin.buffer)\n"
        "print([repr(float(z)) for z in epoch.redshift.magnitude])\n"
    )
    done = in_fresh_interpreter("-c", script, given=pickle.dumps(one))
    assert done.stdout.strip() == str([repr(float(z)) for z in one.redshift.magnitude])


def test_it_shows_itself_as_a_table_in_terminal_and_notebook() -> None:
    one = epoch(redshift=2.5)
    assert repr(one).startswith("when it was ")
    assert one._repr_html_().startswith("<table>")
    assert len(repr(epoch(redshift=np.linspace(0, 9, 1000))).splitlines()) == 13
