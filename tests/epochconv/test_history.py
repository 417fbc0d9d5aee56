"""An expansion history is a value: checked once, never changed, the same wherever it is sent."""

from __future__ import annotations

import copy
import multiprocessing
import pickle
from decimal import Decimal
from fractions import Fraction
from typing import Any

import numpy as np
import pint
import pytest

import epochconv
from epochconv.history import ExpansionHistory
from tests.closeness import assert_close
from tests.epochconv.fresh_interpreter import in_fresh_interpreter

PARAMETERS: dict[str, Any] = {
    "hubble_constant": 67.5,
    "matter": 0.31,
    "curvature": -0.02,
    "dark_energy": (-0.9, -0.3),
    "temperature_today": 2.73,
    "radiation": True,
    "neutrino_masses": (0.05, 0.01, 0.0),
    "neutrino_number": 3.1,
}
OTHERS: dict[str, Any] = {
    "hubble_constant": 67.6,
    "matter": 0.32,
    "curvature": 0.0,
    "dark_energy": (-0.9, -0.2),
    "temperature_today": 2.74,
    "radiation": False,
    "neutrino_masses": (0.05, 0.0, 0.0),
    "neutrino_number": 3.0,
}


@pytest.fixture(scope="module")
def full() -> ExpansionHistory:
    return ExpansionHistory(**PARAMETERS)


def test_parameters_are_kept_as_given(full: ExpansionHistory) -> None:
    for name, value in PARAMETERS.items():
        assert getattr(full, name) == value


def test_defaults_are_those_documented() -> None:
    history = ExpansionHistory(hubble_constant=70, matter=0.3)
    assert history == ExpansionHistory(
        hubble_constant=70,
        matter=0.3,
        curvature=0,
        dark_energy=(-1, 0),
        temperature_today=2.7255,
        radiation=True,
        neutrino_masses=(0.06, 0, 0),
        neutrino_number=3.046,
    )


def test_rate_and_matter_must_be_given_and_by_name() -> None:
    with pytest.raises(TypeError, match="hubble_constant"):
        ExpansionHistory(matter=0.3)  # type: ignore[call-arg] # what must fail
    with pytest.raises(TypeError, match="matter"):
        ExpansionHistory(hubble_constant=70)  # type: ignore[call-arg] # what must fail
    with pytest.raises(TypeError):
        ExpansionHistory(70, 0.3)  # type: ignore[misc, call-arg] # what must fail


def test_numbers_of_every_kind_are_floats_afterwards() -> None:
    expected = ExpansionHistory(hubble_constant=70, matter=0.25, neutrino_masses=(0, 0, 0))
    for rate, matter in (
        (70, Fraction(1, 4)),
        (Decimal("70"), Decimal("0.25")),
        (np.float32(70), np.float64(0.25)),
        (np.int64(70), np.array(0.25)),
    ):
        history = ExpansionHistory(
            hubble_constant=rate, matter=matter, neutrino_masses=np.zeros(3), dark_energy=[-1, 0]
        )
        assert history == expected
        assert type(history.hubble_constant) is float
        assert repr(history) == repr(expected)


@pytest.mark.parametrize("name", [*PARAMETERS, "tables", "expansion", "anything"])
def test_nothing_can_be_changed_added_or_deleted(name: str, full: ExpansionHistory) -> None:
    before = repr(full)
    with pytest.raises(AttributeError, match=f"cannot be changed \\({name}\\); make a new one"):
        setattr(full, name, 1)
    with pytest.raises(AttributeError, match="cannot be changed"):
        delattr(full, name)
    assert repr(full) == before


def test_lists_that_were_given_are_not_kept() -> None:
    masses, dark_energy = [0.06, 0.0, 0.0], [-1.0, 0.0]
    history = ExpansionHistory(
        hubble_constant=70, matter=0.3, neutrino_masses=masses, dark_energy=dark_energy
    )
    masses[0], dark_energy[0] = 9.0, 9.0
    assert history.neutrino_masses == (0.06, 0, 0)
    assert history.dark_energy == (-1, 0)


def test_equal_parameters_are_one_key_and_one_table(full: ExpansionHistory) -> None:
    again = ExpansionHistory(**PARAMETERS)
    assert again == full
    assert again is not full
    assert hash(again) == hash(full)
    assert len({again, full}) == 1
    assert again.tables is full.tables


@pytest.mark.parametrize("name", OTHERS)
def test_each_parameter_makes_a_difference(name: str, full: ExpansionHistory) -> None:
    other = ExpansionHistory(**{**PARAMETERS, name: OTHERS[name]})
    assert other != full
    assert epochconv.epoch(age=1, history=other).redshift != (
        epochconv.epoch(age=1, history=full).redshift
    )


def test_history_is_equal_to_nothing_else(full: ExpansionHistory) -> None:
    assert full != repr(full)
    assert full != 70
    assert (full == None) is False  # noqa: E711 # the operator is what is tested


def test_repr_evaluates_back(full: ExpansionHistory) -> None:
    for history in (full, ExpansionHistory(hubble_constant=1 / 3, matter=1, radiation=False)):
        again = eval(repr(history), {"ExpansionHistory": ExpansionHistory})
        assert again == history
        assert repr(again) == repr(history)


@pytest.mark.parametrize("way", [copy.copy, copy.deepcopy])
def test_copies_are_equal_and_share_the_table(way: Any, full: ExpansionHistory) -> None:
    again = way(full)
    assert again == full
    assert again.tables is full.tables


@pytest.mark.parametrize("protocol", range(2, pickle.HIGHEST_PROTOCOL + 1))
def test_pickle_is_small_and_leads_back(protocol: int, full: ExpansionHistory) -> None:
    """Tables are not sent along."""
    _ = full.tables
    data = pickle.dumps(full, protocol=protocol)
    assert len(data) < 1000
    again = pickle.loads(data)
    assert again == full
    assert again.tables is full.tables


def test_pickle_is_read_by_another_process(full: ExpansionHistory) -> None:
    script = (
        "import pickle, sys\n"
        "history = pickle.load(sys.stdin.buffer)\n"
        "import epochconv\n"
        "print(history)\n"
        "print(repr(epochconv.convert(2.5, 'redshift', 'age', history=history).magnitude))\n"
    )
    done = in_fresh_interpreter("-c", script, given=pickle.dumps(full))
    text, number = done.stdout.splitlines()
    assert text == repr(full)
    assert float(number) == epochconv.convert(2.5, "redshift", "age", history=full).magnitude


def test_histories_and_errors_pass_through_a_pool(full: ExpansionHistory) -> None:
    with multiprocessing.get_context("spawn").Pool(1) as pool:
        age = pool.apply(age_of, (full, 2.5))
        with pytest.raises(epochconv.OutOfRangeError, match="peculiar motion") as caught:
            pool.apply(age_of, (full, -2.5))
    assert age == epochconv.convert(2.5, "redshift", "age", history=full).magnitude
    assert caught.value.value == -2.5


def age_of(history: ExpansionHistory, redshift: float) -> float:
    """Age in Gyr; a function that a worker process can import."""
    return float(epochconv.convert(redshift, "redshift", "age", history=history).magnitude)


def test_hubble_time_and_length() -> None:
    history = ExpansionHistory(hubble_constant=100, matter=0.3)
    assert_close(history.hubble_time_gyr, 9.777922216807891, relative=1e-15)
    assert_close(history.hubble_length_mpc, 2997.92458, relative=1e-15)


def test_budget_is_closed_by_dark_energy(full: ExpansionHistory) -> None:
    for history in (full, ExpansionHistory(hubble_constant=70, matter=1)):
        law = history.expansion
        assert_close(law.rate_squared(np.array([0.0])), [1.0], relative=1e-15)
        heavy = history.matter - law.cold_matter
        left = 1 - history.matter - history.curvature - law.photons - law.massless_neutrinos
        assert heavy > 0
        assert_close(law.dark_energy, left, relative=1e-13)


def test_massive_species_is_part_of_matter() -> None:
    """Ω_ν h² = Σm / 93.14 eV, within a percent: common practice (94.1 (N/3)^(-3/4) eV)."""
    law = ExpansionHistory(hubble_constant=100, matter=0.14, neutrino_masses=(0.06, 0, 0)).expansion
    assert_close(0.14 - law.cold_matter, 0.06 / 93.14, relative=0.01)


def test_all_matter_with_radiation_has_less_than_no_dark_energy() -> None:
    """What is left of the budget is then minus the radiation."""
    law = ExpansionHistory(hubble_constant=70, matter=1).expansion
    assert -1e-4 < law.dark_energy < -7e-5
    assert_close(law.dark_energy, -law.photons - law.massless_neutrinos, relative=1e-11)


@pytest.mark.parametrize(
    ("excess", "left"), [(0.0, 0.0), (1e-13, 0.0), (-9e-13, 0.0), (1e-11, -1e-11), (-1e-11, 1e-11)]
)
def test_remainder_within_rounding_is_nothing(excess: float, left: float) -> None:
    history = ExpansionHistory(
        hubble_constant=70, matter=0.7, curvature=0.3 + excess, radiation=False
    )
    assert history.expansion.dark_energy == pytest.approx(left, rel=1e-4, abs=1e-300)


def test_without_radiation_neutrinos_do_not_count_and_the_temperature_law_stays() -> None:
    bare = ExpansionHistory(hubble_constant=70, matter=0.3, radiation=False)
    law = bare.expansion
    assert (law.photons, law.massless_neutrinos, law.massive) == (0, 0, ())
    assert law.cold_matter == 0.3
    assert epochconv.convert(1, "redshift", "CMB temperature", history=bare).magnitude == 5.451


def test_neutrino_number_zero_leaves_photons_alone() -> None:
    law = ExpansionHistory(hubble_constant=70, matter=0.3, neutrino_number=0).expansion
    assert law.photons > 0
    assert (law.massless_neutrinos, law.massive, law.cold_matter) == (0, (), 0.3)


def test_order_of_the_masses_is_kept_but_makes_no_other_universe() -> None:
    one = ExpansionHistory(hubble_constant=70, matter=0.3, neutrino_masses=(0.06, 0, 0))
    other = ExpansionHistory(hubble_constant=70, matter=0.3, neutrino_masses=(0, 0, 0.06))
    assert one != other
    assert one.expansion == other.expansion
    assert one.tables is other.tables


def test_assumptions_are_told_in_one_line(full: ExpansionHistory) -> None:
    assert full.assumptions == (
        "H0 67.5 km/s/Mpc, Ω_m 0.31, Ω_k -0.02, dark energy w0 -0.9, wa -0.3, CMB 2.73 K today, "
        "photons and 3.1 neutrinos in the budget (masses 0.05, 0.01, 0 eV); "
        "redshifts as in the CMB frame"
    )
    plain = ExpansionHistory(hubble_constant=70, matter=0.3, radiation=False).assumptions
    assert "flat, constant dark energy" in plain
    assert "no photons or neutrinos in the budget" in plain


@pytest.mark.parametrize("registry", ["foreign", "application"])
def test_quantities_of_any_registry_are_read_in_their_own_units(
    registry: str, foreign: pint.UnitRegistry
) -> None:
    ureg = foreign if registry == "foreign" else pint.get_application_registry()
    expected = ExpansionHistory(
        hubble_constant=70, matter=0.3, temperature_today=2.7, neutrino_masses=(0.06, 0.05, 0)
    )
    history = ExpansionHistory(
        hubble_constant=ureg.Quantity(70.0, "km/s/Mpc"),
        matter=ureg.Quantity(0.3, ""),
        curvature=ureg.Quantity(0.0, ""),
        dark_energy=ureg.Quantity([-1.0, 0.0], ""),
        temperature_today=ureg.Quantity(2.7, "K"),
        neutrino_masses=ureg.Quantity([0.06, 0.05, 0.0], "eV"),
        neutrino_number=ureg.Quantity(3.046, ""),
    )
    assert history == expected


@pytest.mark.parametrize(
    ("name", "value", "unit", "expected"),
    [
        ("hubble_constant", 70e3, "m/s/Mpc", 70.0),
        ("hubble_constant", 70.0, "Mpc**-1 * km * s**-1", 70.0),
        ("hubble_constant", 0.07, "1/Gyr", 0.07 * 977.7922216807891),
        ("hubble_constant", 2.2e-18, "1/s", 2.2e-18 * 30856775814913672.8 * 1e3),
        ("matter", 31.0, "percent", 0.31),
        ("temperature_today", 2725.5, "mK", 2.7255),
        ("temperature_today", 4.9, "degR", 4.9 / 1.8),
        ("neutrino_number", 304.6, "percent", 3.046),
    ],
)
def test_quantity_in_another_unit_is_converted(
    name: str, value: float, unit: str, expected: float, foreign: pint.UnitRegistry
) -> None:
    """The parsec is the IAU's, though pint's own is 8e-12 away."""
    parameters = {"hubble_constant": 70, "matter": 0.3, name: foreign.Quantity(value, unit)}
    history = ExpansionHistory(**parameters)
    assert_close(getattr(history, name), expected, relative=1e-15)


def test_masses_may_be_quantities_one_by_one(foreign: pint.UnitRegistry) -> None:
    masses = [foreign.Quantity(60, "meV"), 0.05, pint.Quantity(0, "joule")]
    history = ExpansionHistory(hubble_constant=70, matter=0.3, neutrino_masses=masses)
    assert_close(history.neutrino_masses, [0.06, 0.05, 0.0], relative=1e-15)
    joule = foreign.Quantity(np.array([1.602176634e-20, 0, 0]), "joule")
    history = ExpansionHistory(hubble_constant=70, matter=0.3, neutrino_masses=joule)
    assert_close(history.neutrino_masses, [0.1, 0, 0], relative=1e-15)
