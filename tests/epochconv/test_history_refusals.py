"""Every history that is refused, by the parameter at fault and with what to do."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pint
import pytest

from epochconv.errors import ArgumentError
from epochconv.history import ExpansionHistory

MASSLESS = (0.0, 0.0, 0.0)


def refusal(**parameters: Any) -> str:
    """The text with which these parameters, and good ones besides, are refused."""
    with pytest.raises(ArgumentError) as caught:
        ExpansionHistory(**{"hubble_constant": 70, "matter": 0.3, **parameters})
    text = str(caught.value)
    assert "\n" not in text
    return text


NUMBERS = [
    "hubble_constant",
    "matter",
    "curvature",
    "temperature_today",
    "neutrino_number",
]


@pytest.mark.parametrize("name", NUMBERS)
@pytest.mark.parametrize(
    "value",
    [
        None,
        "70",
        b"70",
        True,
        np.bool_(False),
        1j,
        np.complex128(70),
        [70],
        np.array([70.0]),
        {"a": 1},
        object(),
    ],
    ids=repr,
)
def test_what_is_no_number_is_refused(name: str, value: object) -> None:
    assert refusal(**{name: value}).startswith(f"{name}=")
    assert "is not a number" in refusal(**{name: value})


@pytest.mark.parametrize("name", NUMBERS)
@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf, 10**400, np.float32("nan")])
def test_what_is_not_finite_is_refused(name: str, value: float) -> None:
    assert refusal(**{name: value}).startswith(f"{name}=")
    assert "is not a finite number" in refusal(**{name: value})


@pytest.mark.parametrize(
    ("name", "value", "words"),
    [
        ("dark_energy", -1, "dark_energy=-1 must hold 2 numbers"),
        ("dark_energy", (-1,), "must hold 2 numbers"),
        ("dark_energy", (-1, 0, 0), "must hold 2 numbers"),
        ("dark_energy", "ab", "dark_energy='ab' must hold 2 numbers"),
        ("dark_energy", (None, 0), "dark_energy[0] (w0)=None is not a number"),
        ("dark_energy", (-1, math.inf), "dark_energy[1] (wa)=inf is not a finite number"),
        ("neutrino_masses", 0.06, "neutrino_masses=0.06 must hold 3 numbers"),
        ("neutrino_masses", (0.06,), "neutrino_masses=(0.06,) must hold 3 numbers"),
        ("neutrino_masses", (0, 0, "x"), "neutrino_masses[2]='x' is not a number"),
        ("neutrino_masses", (0, math.nan, 0), "neutrino_masses[1]=nan is not a finite number"),
        ("neutrino_masses", (0, 0, -0.1), "neutrino_masses[2]=-0.1 is below 0; give 0 or above"),
        ("hubble_constant", 0, "hubble_constant=0.0 is not above 0"),
        ("hubble_constant", -70, "hubble_constant=-70.0 is not above 0"),
        ("temperature_today", 0, "temperature_today=0.0 is not above 0"),
        ("neutrino_number", -3, "neutrino_number=-3.0 is below 0; give 0 or above"),
        ("matter", -0.1, "matter=-0.1 is below 0; give 0 or above"),
        ("radiation", 1, "radiation=1 is neither True nor False"),
        ("radiation", "no", "radiation='no' is neither True nor False"),
        ("radiation", None, "radiation=None is neither True nor False"),
    ],
)
def test_parameter_out_of_its_range_is_named(name: str, value: object, words: str) -> None:
    assert words in refusal(**{name: value})


def test_less_matter_than_its_massive_neutrinos_is_refused() -> None:
    """0.06 eV weigh Ω h² = 0.00065: 0.0013 of the budget at 70 km/s/Mpc."""
    text = refusal(matter=0.001)
    assert text.startswith("matter=0.001 is less than its massive neutrinos (0.0013")
    assert text.endswith("raise matter or lower neutrino_masses")
    assert "neutrino_masses" in refusal(matter=0)
    assert ExpansionHistory(hubble_constant=70, matter=0.0014)
    assert ExpansionHistory(hubble_constant=70, matter=0, neutrino_masses=MASSLESS)


def test_universe_without_a_beginning_is_refused() -> None:
    """Constant dark energy alone expands for ever, and did so for ever."""
    text = refusal(matter=0, radiation=False, neutrino_masses=MASSLESS)
    assert text.startswith("matter=0.0: ")
    assert "no Big Bang" in text
    assert text.endswith("give matter above 0")


@pytest.mark.parametrize(
    ("parameters", "culprit"),
    [
        ({"curvature": -3}, "curvature=-3.0: E² is not above zero at scale factor 0.3"),
        ({"matter": 0.1, "curvature": -0.8}, "curvature=-0.8: E² is not above zero"),
        # Far beyond the last grid point: curvature that wins over weak matter.
        ({"matter": 0.0, "curvature": -1e-3, "radiation": False}, "curvature=-0.001: E²"),
        ({"matter": 1.5, "dark_energy": (0.5, 0)}, "dark_energy=(0.5, 0.0) with -0.5"),
        ({"matter": 1.2, "dark_energy": (-0.1, 0.5)}, "dark_energy=(-0.1, 0.5) with -0.2"),
    ],
)
def test_universe_that_did_not_come_from_a_big_bang_is_refused(
    parameters: dict[str, Any], culprit: str
) -> None:
    text = refusal(neutrino_masses=MASSLESS, **parameters)
    assert text.startswith(culprit)
    assert "no Big Bang that leads to today" in text


def test_turning_back_is_found_however_narrow_it_is() -> None:
    """With Ω_m = 0.3 and Λ, E² touches zero for Ω_k = -1.0134604: a root of 4 k³/(27 Ω_m²) = Ω_Λ.

    The dip below zero is then some 1e-4 wide in x, less than a step of any coarse grid.
    """
    curvature = -1.013460402873446
    parameters = {"radiation": False, "neutrino_masses": MASSLESS}
    assert "curvature=" in refusal(curvature=curvature * (1 + 1e-9), **parameters)
    assert ExpansionHistory(
        hubble_constant=70, matter=0.3, curvature=curvature * (1 - 1e-9), radiation=False
    )


@pytest.mark.parametrize("dark_energy", [(0.0, 200.0), (50.0, 0.0), (-1.0, 1e6)])
def test_dark_energy_beyond_all_numbers_is_refused(dark_energy: tuple[float, float]) -> None:
    text = refusal(dark_energy=dark_energy)
    assert text.startswith(f"dark_energy={dark_energy!r} grows beyond all numbers")


@pytest.mark.parametrize(
    ("parameters", "culprit"),
    [
        ({"matter": 1e300}, "matter=1e+300"),
        ({"curvature": 1e300}, "curvature=1e+300"),
        ({"hubble_constant": 1e300}, "hubble_constant=1e+300"),
        ({"hubble_constant": 1e-300}, "hubble_constant=1e-300"),
        ({"temperature_today": 1e100}, "hubble_constant=70.0 and temperature_today=1e+100"),
        ({"neutrino_masses": (1e300, 0, 0)}, "matter=0.3 is less than its massive neutrinos"),
        ({"neutrino_number": 1e300, "neutrino_masses": MASSLESS}, "neutrino_number=1e+300"),
        ({"hubble_constant": 1e-135, "neutrino_masses": MASSLESS}, "hubble_constant=1e-135 with"),
    ],
)
def test_absurd_numbers_are_refused_by_name_and_not_by_overflow(
    parameters: dict[str, Any], culprit: str
) -> None:
    assert refusal(**parameters).startswith(culprit)


@pytest.mark.parametrize(
    ("name", "unit", "words"),
    [
        ("hubble_constant", "Mpc", "which is no rate (such as km/s/Mpc)"),
        ("hubble_constant", "km/s", "which is no rate (such as km/s/Mpc)"),
        ("hubble_constant", "", "which is no rate (such as km/s/Mpc)"),
        ("matter", "Mpc", "which is no pure number; give a bare number"),
        ("curvature", "1/Mpc**2", "which is no pure number"),
        ("temperature_today", "eV", "which is no temperature; give it in a unit such as K"),
        ("temperature_today", "degC", "a scale with its own zero; give it in K"),
        ("temperature_today", "degF", "a scale with its own zero; give it in K"),
        ("neutrino_number", "K", "which is no pure number"),
    ],
)
def test_wrong_dimension_is_refused(
    name: str, unit: str, words: str, foreign: pint.UnitRegistry
) -> None:
    text = refusal(**{name: foreign.Quantity(1.0, unit)})
    assert text.startswith(f"{name} is in ")
    assert words in text


@pytest.mark.parametrize("unit", ["kg", "K", "eV/c**2", "m", "degC"])
def test_wrong_dimension_of_a_mass_is_refused(unit: str, foreign: pint.UnitRegistry) -> None:
    for masses in (
        (0, foreign.Quantity(0.06, unit), 0),
        foreign.Quantity([0.06, 0.0, 0.0], unit),
    ):
        text = refusal(neutrino_masses=masses)
        assert text.startswith(("neutrino_masses[0] is in ", "neutrino_masses[1] is in "))
        assert "which is no energy; give it in a unit such as eV" in text


def test_array_of_rates_is_refused(foreign: pint.UnitRegistry) -> None:
    text = refusal(hubble_constant=foreign.Quantity(np.array([70.0, 71.0]), "km/s/Mpc"))
    assert text.startswith("hubble_constant=array([70., 71.]) is not a number")


def test_quantity_that_is_not_finite_is_refused(foreign: pint.UnitRegistry) -> None:
    text = refusal(hubble_constant=foreign.Quantity(math.nan, "km/s/Mpc"))
    assert text == "hubble_constant=nan is not a finite number"
