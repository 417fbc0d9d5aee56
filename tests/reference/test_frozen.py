"""The references themselves: that frozen.json is the script's, and that its digits are right."""

from __future__ import annotations

import json
from dataclasses import asdict

import pytest
from mpmath import mp, mpf

from tests.reference.build_frozen import (
    DIGITS,
    FROZEN,
    UNIVERSES,
    WORKING_DIGITS,
    as_text,
    frozen_histories,
    redshifts_of,
)
from tests.reference.quadrature import (
    Answers,
    Quadrature,
    Universe,
    fermi_dirac_energy,
    fermi_dirac_energy_directly,
)

# Those without massive neutrinos take half a second each, the others ten seconds and more.
QUICK = [
    name
    for name, universe in UNIVERSES.items()
    if not universe.radiation or max(universe.neutrino_masses) == 0
]


def frozen() -> dict:
    return json.loads(FROZEN.read_text(encoding="utf-8"))


def assert_row_agrees(row: dict, answers: Answers) -> None:
    """Fail unless all thirty digits agree, give or take the last one's rounding."""
    for field, value in vars(answers).items():
        digits = 9 if field == "hubble_slope" else DIGITS - 1
        assert abs(mpf(row[field]) / value - 1) < mpf(10) ** -digits, field


def test_file_holds_the_universes_and_redshifts_of_the_script() -> None:
    in_file = {
        name: (entry["parameters"], [row["redshift"] for row in entry["rows"]])
        for name, entry in frozen().items()
    }
    in_script = {
        name: (json.loads(json.dumps(asdict(universe))), redshifts_of(name))
        for name, universe in UNIVERSES.items()
    }
    assert in_file == in_script


@pytest.mark.parametrize("name", QUICK)
def test_script_writes_the_same_digits_again(name: str) -> None:
    with mp.workdps(WORKING_DIGITS):
        again = Quadrature(UNIVERSES[name]).answers(redshifts_of(name))
        rows = [{"redshift": z, **as_text(answers)} for z, answers in again.items()]
    assert rows == frozen()[name]["rows"]


@pytest.mark.long
def test_script_writes_the_whole_file_again() -> None:
    assert json.loads(json.dumps(frozen_histories())) == frozen()


@pytest.mark.parametrize("name", QUICK)
def test_another_rule_with_more_digits_agrees_to_thirty(name: str) -> None:
    """Tanh-sinh on panels of 2 instead of Gauss-Legendre on panels of 1, at 60 digits."""
    rows = frozen()[name]["rows"]
    with mp.workdps(60):
        quadrature = Quadrature(UNIVERSES[name], method="tanh-sinh", panel=2.0)
        answers = quadrature.answers(redshifts_of(name))
        assert quadrature.worst_estimate < mpf(10) ** -40
        for row in rows:
            assert_row_agrees(row, answers[row["redshift"]])


@pytest.mark.parametrize("name", ["flat, one massive neutrino", "closed, two massive neutrinos"])
def test_massive_neutrinos_agree_under_another_rule(name: str) -> None:
    """Two redshifts each: all that is quick enough."""
    rows = {row["redshift"]: row for row in frozen()[name]["rows"]}
    with mp.workdps(38):
        answers = Quadrature(UNIVERSES[name], method="tanh-sinh", panel=7.0).answers([1.0, 1100.0])
        for z, answer in answers.items():
            assert_row_agrees(rows[z], answer)


@pytest.mark.parametrize("mass_ratio", ["0", "1e-9", "1e-3", "0.7", "3.14159", "30", "358", "1e4"])
def test_neutrino_integral_agrees_with_adaptive_quadrature(mass_ratio: str) -> None:
    with mp.workdps(WORKING_DIGITS):
        y = mpf(mass_ratio)
        quick = fermi_dirac_energy(y)
        with mp.workdps(WORKING_DIGITS + 10):
            slow = fermi_dirac_energy_directly(y)
        assert abs(quick / slow - 1) < mpf(10) ** -(DIGITS + 8)


def test_neutrino_integral_has_its_textbook_limits() -> None:
    """7 pi^4/120, and 3/2 zeta(3) m at rest (Kolb & Turner 1990, sec. 3.3, from memory)."""
    with mp.workdps(WORKING_DIGITS):
        tiny = mpf(10) ** -(WORKING_DIGITS + 5)
        assert abs(fermi_dirac_energy(mpf(0)) / (7 * mp.pi**4 / 120) - 1) < tiny * 10**10
        heavy = mpf(10) ** 20
        # The next term of the expansion is of relative size <q^2>/(2 y^2), some 1e-39 here.
        assert abs(fermi_dirac_energy(heavy) / (mpf(3) / 2 * mp.zeta(3) * heavy) - 1) < 1e-37


def test_densities_agree_with_published_ones() -> None:
    """Photons: PDG, Omega_gamma h^2 = 2.473e-5 (T 2.7255 K), from memory.

    One neutrino: Planck 2018 VI, table 1, Omega_m h^2 0.14314 = 0.022383 + 0.12011 + omega_nu,
    seen; and the rule m / 93.14 eV (Mangano et al. 2005 and PDG, from memory), which holds for
    species that are a little hotter than an equal share of 3.046: within 0.3 %.
    """
    with mp.workdps(20):
        h = 67.32 / 100
        budget = Quadrature(Universe(hubble_constant=67.32, matter=0.3158))
        neutrino = 1 - budget.dark - budget.photons - budget.massless - budget.cold
        assert abs(budget.photons * h**2 - mpf("2.473e-5")) < 0.0005e-5
        assert abs(0.022383 + 0.12011 + neutrino * h**2 - mpf("0.14314")) < 0.00001
        assert abs(neutrino * h**2 / (mpf("0.06") / mpf("93.14")) - 1) < 0.003
