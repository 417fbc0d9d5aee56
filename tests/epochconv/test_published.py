"""Parameter sets: the values as published, their errors and sources, and how names are read."""

from __future__ import annotations

import dataclasses
import math
import pickle

import pytest

from epochconv.errors import ArgumentError
from epochconv.history import ExpansionHistory
from epochconv.published import (
    DEFAULT,
    ParameterSet,
    history_of,
    label_of,
    parameter_set,
    parameter_sets,
)

ONE_MASS, MASSLESS = (0.06, 0.0, 0.0), (0.0, 0.0, 0.0)
# name, H0, Ω_m, (w0, wa), T today, N, masses, radiation: the table of what we agreed to publish.
AGREED = [
    ("planck 2018", 67.36, 0.3153, (-1, 0), 2.7255, 3.046, ONE_MASS, True),
    ("planck 2018 with bao", 67.66, 0.3111, (-1, 0), 2.7255, 3.046, ONE_MASS, True),
    ("wmap 2013", 69.32, 0.2865, (-1, 0), 2.725, 3.046, MASSLESS, True),
    ("distance ladder 2022", 73.04, 0.334, (-1, 0), 2.7255, 3.046, MASSLESS, True),
    ("round numbers", 70.0, 0.3, (-1, 0), 2.7255, None, None, False),
    (
        "evolving dark energy 2025",
        67.51,
        0.3114,
        (-0.838, -0.62),
        2.7255,
        3.046,
        ONE_MASS,
        True,
    ),
]
# Published 68 % errors, symmetric or (upper, lower). Planck 2018 VI table 2; Riess+ 2022 and
# Brout+ 2022 abstracts; Hinshaw+ 2013 and DESI DR2 H0 and Ω_m from memory, its w0, wa second-hand.
ERRORS = {
    "planck 2018": {"hubble_constant": 0.54, "matter": 0.0073},
    "planck 2018 with bao": {"hubble_constant": 0.42, "matter": 0.0056},
    "wmap 2013": {"hubble_constant": 0.80, "matter": (0.0096, 0.0095)},
    "distance ladder 2022": {"hubble_constant": 1.04, "matter": 0.018},
    "round numbers": {},
    "evolving dark energy 2025": {
        "hubble_constant": 0.59,
        "matter": 0.0057,
        "w0": 0.055,
        "wa": (0.22, 0.19),
    },
}
SOURCES = {
    "planck 2018": ("A&A 641, A6", "TT,TE,EE+lowE+lensing"),
    "planck 2018 with bao": ("A&A 641, A6", "TT,TE,EE+lowE+lensing+BAO"),
    "wmap 2013": ("Hinshaw", "ApJS 208, 19", "eCMB + BAO + H0"),
    "distance ladder 2022": ("Riess et al. 2022, ApJL 934, L7", "Brout et al. 2022, ApJ 938, 110"),
    "round numbers": ("common practice, no source",),
    "evolving dark energy 2025": ("arXiv:2503.14738", "DESI DR2 + CMB + Pantheon+"),
}


def test_sets_are_those_agreed_the_default_first() -> None:
    assert [one.name for one in parameter_sets()] == [row[0] for row in AGREED]
    assert parameter_sets()[0].name == DEFAULT == "planck 2018"


@pytest.mark.parametrize("row", AGREED, ids=lambda row: row[0])
def test_values_are_those_agreed(row: tuple) -> None:  # type: ignore[type-arg] # a row of all sorts
    name, rate, matter, dark_energy, temperature, number, masses, radiation = row
    history = parameter_set(name).history
    assert (history.hubble_constant, history.matter) == (rate, matter)
    assert history.curvature == 0.0
    assert history.dark_energy == dark_energy
    assert history.temperature_today == temperature
    assert history.radiation is radiation
    if radiation:
        assert (history.neutrino_number, history.neutrino_masses) == (number, masses)


def test_round_numbers_leave_seven_tenths_to_dark_energy() -> None:
    assert parameter_set("round numbers").history.expansion.dark_energy == pytest.approx(
        0.7, abs=1e-15
    )


@pytest.mark.parametrize("name", ERRORS)
def test_errors_and_citation_are_those_published(name: str) -> None:
    one = parameter_set(name)
    assert one.errors == ERRORS[name]
    for words in SOURCES[name]:
        assert words in one.citation


@pytest.mark.parametrize("name", ["wmap 2013", "evolving dark energy 2025"])
def test_what_is_from_memory_says_so(name: str) -> None:
    assert "from memory" in parameter_set(name).assumptions


def test_assumptions_tell_of_neutrinos_and_radiation() -> None:
    for one in parameter_sets():
        words = one.assumptions
        assert "flat" in words
        if not one.history.radiation:
            assert "no photons or neutrinos" in words
        elif any(one.history.neutrino_masses):
            assert "one neutrino of 0.06 eV" in words
        else:
            assert "massless neutrinos" in words


@pytest.mark.parametrize(
    "text",
    [
        "planck 2018 with bao",
        "Planck 2018 with BAO",
        "PLANCK-2018-WITH-BAO",
        "planck_2018_with_bao",
        "  planck   2018 with-BAO ",
    ],
)
def test_case_hyphens_underscores_and_blanks_do_not_matter(text: str) -> None:
    assert parameter_set(text).name == "planck 2018 with bao"
    assert history_of(text) is parameter_set("planck 2018 with bao").history


@pytest.mark.parametrize("text", ["", "planck", "2018", "planck2018", "planck 2015"])
def test_half_a_name_or_a_fused_one_is_none(text: str) -> None:
    with pytest.raises(ArgumentError, match="is no parameter set known here"):
        parameter_set(text)


@pytest.mark.parametrize(
    ("text", "meant"),
    [
        ("planck 2019", "planck 2018"),
        ("planck2018", "planck 2018"),
        ("wmap2013", "wmap 2013"),
        ("Round Number", "round numbers"),
        ("distance lader 2022", "distance ladder 2022"),
    ],
)
def test_unknown_name_gets_the_nearest_and_all(text: str, meant: str) -> None:
    with pytest.raises(ArgumentError) as caught:
        history_of(text)
    assert repr(text) in str(caught.value)
    assert f"Did you mean {meant!r}?" in str(caught.value)
    assert all(name in str(caught.value) for name in ERRORS)


def test_name_like_nothing_gets_no_suggestion() -> None:
    with pytest.raises(ArgumentError) as caught:
        parameter_set("xyzzy")
    assert "Did you mean" not in str(caught.value)


def test_history_is_given_by_itself_by_name_or_not_at_all() -> None:
    own = ExpansionHistory(hubble_constant=50, matter=0.9)
    assert history_of(own) is own
    assert history_of(None) is parameter_set("planck 2018").history


@pytest.mark.parametrize("wrong", [3, 70.0, ("planck 2018",), parameter_sets()[0]])
def test_anything_else_is_no_history(wrong: object) -> None:
    with pytest.raises(ArgumentError, match=r"^history=.* is neither an ExpansionHistory nor"):
        history_of(wrong)  # type: ignore[arg-type] # what a caller may do all the same


def test_label_is_found_by_the_parameters() -> None:
    for one in parameter_sets():
        again = pickle.loads(pickle.dumps(one.history))
        assert label_of(again) == one.name
    assert label_of(ExpansionHistory(hubble_constant=67.36, matter=0.3154)) == "own parameters"


def test_set_is_a_value_that_can_be_sent_to_a_worker() -> None:
    one = parameter_set("wmap 2013")
    again = pickle.loads(pickle.dumps(one))
    assert again == one
    assert hash(again) == hash(one)
    with pytest.raises(dataclasses.FrozenInstanceError):
        one.name = "mine"  # type: ignore[misc] # what must fail
    assert isinstance(one, ParameterSet)


def test_every_error_is_above_zero_and_well_below_its_value() -> None:
    for one in parameter_sets():
        values = {
            "hubble_constant": one.history.hubble_constant,
            "matter": one.history.matter,
            "w0": one.history.dark_energy[0],
            "wa": one.history.dark_energy[1],
        }
        for name, error in one.errors.items():
            for side in error if isinstance(error, tuple) else (error,):
                assert 0 < side < 0.4 * math.fabs(values[name])
