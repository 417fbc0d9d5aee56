"""One door for built-in measures and a stranger's: what it lets in, and how it finds them."""

from __future__ import annotations

import numpy as np
import pytest

import epochconv
from epochconv import registry
from epochconv.errors import ArgumentError, OutOfRangeError, TwoAnswersError
from epochconv.registry import add_measure, find_measure, folded, measure_named, measures
from tests.closeness import assert_close
from tests.epochconv.fresh_interpreter import in_fresh_interpreter
from tests.epochconv.guest_measures import BROKEN, GUESTS, STRETCH, SWING

NAMES = [
    "redshift",
    "scale factor",
    "lookback time",
    "age",
    "comoving distance",
    "CMB temperature",
    "transverse comoving distance",
    "luminosity distance",
    "angular diameter distance",
    "distance modulus",
    "Hubble rate",
]


@pytest.fixture
def guests(monkeypatch: pytest.MonkeyPatch) -> None:
    """The strangers' measures, registered for one test."""
    measures()
    for table in ("_measures", "_by_name", "_by_symbol"):
        monkeypatch.setattr(registry, table, dict(getattr(registry, table)))
    for guest in GUESTS:
        add_measure(guest)


def test_measures_of_the_issue_are_there_in_their_order() -> None:
    assert [measure.name for measure in measures()] == NAMES


@pytest.mark.parametrize(
    ("text", "name"),
    [
        *((name, name) for name in NAMES),
        ("z", "redshift"),
        ("a", "scale factor"),
        ("t", "age"),
        ("t_L", "lookback time"),
        ("D_C", "comoving distance"),
        ("T_CMB", "CMB temperature"),
        ("D_M", "transverse comoving distance"),
        ("D_L", "luminosity distance"),
        ("D_A", "angular diameter distance"),
        ("µ", "distance modulus"),
        ("mu", "distance modulus"),
        ("H", "Hubble rate"),
        ("LOOKBACK TIME", "lookback time"),
        ("look-back_time", "lookback time"),
        ("  lookback   time ", "lookback time"),
        ("Cosmic Age", "age"),
        ("hubble parameter", "Hubble rate"),
        ("line of sight comoving distance", "comoving distance"),
        ("cmb_temperature", "CMB temperature"),
    ],
)
def test_name_alias_and_symbol_find_the_measure(text: str, name: str) -> None:
    found = find_measure(text)
    assert found is not None
    assert found.name == name
    assert measure_named(text) is found


@pytest.mark.parametrize("text", ["Z", "A", "T", "d_c", "D", "", "distance", "time", "velocity"])
def test_case_of_a_symbol_matters_and_half_a_name_is_none(text: str) -> None:
    assert find_measure(text) is None


def test_unknown_name_is_refused_with_the_nearest_and_all() -> None:
    with pytest.raises(ArgumentError) as caught:
        measure_named("look back tim")
    assert "Did you mean 'lookback time'?" in str(caught.value)
    assert all(name in str(caught.value) for name in NAMES)


@pytest.mark.parametrize("text", ["qqq", None, 3])
def test_name_that_resembles_nothing_gets_no_suggestion(text: object) -> None:
    with pytest.raises(ArgumentError, match="is no measure known here") as caught:
        measure_named(text)  # type: ignore[arg-type] # what a caller may do all the same
    assert "Did you mean" not in str(caught.value)


def test_folding_drops_what_does_not_matter() -> None:
    assert folded(" Look-Back__Time ") == folded("LOOK BACK TIME") == "look back time"
    assert folded("lookback") != folded("look back")


@pytest.mark.parametrize("fault", BROKEN)
def test_broken_measure_is_refused_by_name_and_leaves_nothing(fault: str) -> None:
    before = measures()
    with pytest.raises(ArgumentError) as caught:
        add_measure(BROKEN[fault])
    assert repr(BROKEN[fault].name) in str(caught.value)
    assert measures() == before
    assert find_measure("free") is None
    assert find_measure("s_w") is None


@pytest.mark.parametrize(
    ("fault", "culprit"),
    [
        ("unknown unit", "'furlong'"),
        ("no way back", "moment_of together with range_of"),
        ("no range", "moment_of together with range_of"),
        ("name taken", "'age' belongs to 'age'"),
        ("alias taken", "'cosmic age' belongs to 'age'"),
        ("symbol taken", "'D_C' belongs to 'comoving distance'"),
        ("symbol is a name", "'Lookback Time' belongs to 'lookback time'"),
        ("name is a symbol", "'z' belongs to 'redshift'"),
    ],
)
def test_refusal_names_the_culprit(fault: str, culprit: str) -> None:
    with pytest.raises(ArgumentError) as caught:
        add_measure(BROKEN[fault])
    assert culprit in str(caught.value)


@pytest.mark.usefixtures("guests")
def test_same_measure_twice_is_refused() -> None:
    with pytest.raises(ArgumentError, match="belongs to 'wave stretch'"):
        add_measure(STRETCH)


@pytest.mark.usefixtures("guests")
def test_measure_of_a_stranger_converts_like_any_other() -> None:
    z = np.array([[0.0, 0.5], [3.0, 1e6]])
    stretch = epochconv.convert(z, "redshift", "wave stretch")
    np.testing.assert_array_equal(stretch.magnitude, 1 + z)
    assert_close(epochconv.convert(stretch, "stretch factor", "redshift"), z)
    assert_close(epochconv.convert(2.5, "s_w", "age"), epochconv.convert(1.5, "z", "age").magnitude)
    assert epochconv.epoch(redshift=1).wave_stretch.magnitude == 2.0
    assert "wave_stretch" in dir(epochconv.epoch(redshift=1))
    assert epochconv.epoch(wave_stretch=2).redshift.magnitude == 1.0


@pytest.mark.usefixtures("guests")
def test_its_refusals_speak_its_words() -> None:
    with pytest.raises(OutOfRangeError, match=r"wave stretch 0\.5 is shorter than what was sent"):
        epochconv.convert(0.5, "wave stretch", "age")
    missing = pytest.raises(OutOfRangeError, match="log distance does not exist at no distance")
    with np.errstate(divide="ignore"), missing:
        epochconv.convert(0, "redshift", "log distance")


@pytest.mark.usefixtures("guests")
def test_rescaled_measure_of_a_stranger_uses_the_inverse_of_the_other() -> None:
    found = epochconv.convert([1.0, 2.5, 4.0], "log distance", "luminosity distance")
    assert_close(found, [10.0, 10**2.5, 1e4])


@pytest.mark.usefixtures("guests")
def test_measure_that_hands_out_what_it_is_given_gives_no_access_to_it() -> None:
    values = np.array([1.0, 2.0])
    found = epochconv.convert(values, "redshift", "plain stretch")
    found.magnitude[:] = 9.0
    assert values.tolist() == [1.0, 2.0]


@pytest.mark.usefixtures("guests")
def test_searched_measure_that_turns_over_names_every_answer() -> None:
    """sin x = 0.5 at x = π/6, 5π/6, and both of these a full turn or two or three later."""
    with pytest.raises(TwoAnswersError) as caught:
        epochconv.convert(0.5, "swing", "redshift")
    sixth = np.pi / 6
    expected = [k * sixth for k in (1, 5, 13, 17, 25, 29, 37, 41)]
    assert_close(np.log1p(caught.value.redshifts), expected)
    for side, answer in (("nearer", expected[0]), ("farther", expected[-1])):
        found = epochconv.convert(0.5, "swing", "redshift", side=side)
        assert_close(np.log1p(found.magnitude), answer)


@pytest.mark.usefixtures("guests")
def test_range_of_a_searched_measure_is_found() -> None:
    with pytest.raises(OutOfRangeError) as caught:
        epochconv.convert([0.5, 1.5], "swing", "redshift", side="nearer")
    assert_close([caught.value.low, caught.value.high], [-1, 1])


def test_guest_is_gone_after_its_test() -> None:
    assert find_measure(STRETCH.name) is None
    assert find_measure(SWING.symbol) is None
    assert [measure.name for measure in measures()] == NAMES


def test_first_guest_cannot_take_a_built_in_name_either() -> None:
    """The built-in measures are loaded late, but before any guest."""
    script = (
        "import dataclasses\n"
        "from epochconv import registry\n"
        "from tests.epochconv.guest_measures import STRETCH\n"
        "try:\n"
        "    registry.add_measure(dataclasses.replace(STRETCH, name='redshift'))\n"
        "except ValueError as error:\n"
        "    print(error)\n"
        "print(registry.measure_named('redshift').symbol, len(registry.measures()))\n"
    )
    done = in_fresh_interpreter("-c", script)
    assert "'redshift' belongs to 'redshift'" in done.stdout
    assert done.stdout.endswith("z 11\n")
