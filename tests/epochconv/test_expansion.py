"""The Friedmann equation term by term, written out anew here from the parameters."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from mpmath import mp, mpf

from epochconv import expansion
from epochconv.expansion import Expansion
from tests.closeness import assert_close

X = np.array([0.0, 1e-6, 0.5, 1.0, 3.0, 10.0, 23.0])
EMPTY = Expansion(
    cold_matter=0.0,
    photons=0.0,
    massless_neutrinos=0.0,
    massive=(),
    curvature=0.0,
    dark_energy=0.0,
    w0=-1.0,
    wa=0.0,
)
FULL = Expansion(
    cold_matter=0.3,
    photons=5e-5,
    massless_neutrinos=2e-5,
    massive=((1e-5, 300.0), (1e-5, 20.0)),
    curvature=-0.1,
    dark_energy=0.79,
    w0=-0.9,
    wa=-0.4,
)


@pytest.mark.parametrize(
    ("part", "power"),
    [("cold_matter", 3), ("photons", 4), ("massless_neutrinos", 4), ("curvature", 2)],
)
def test_each_part_thins_out_by_its_own_power(part: str, power: int) -> None:
    law = replace(EMPTY, **{part: 0.7})
    assert_close(law.rate_squared(X), 0.7 * np.exp(power * X), relative=1e-14)
    assert_close(law.rate(X), np.sqrt(0.7) * np.exp(power / 2 * X), relative=1e-14)
    assert_close(law.log_rate_slope(X), np.full_like(X, power / 2), relative=1e-14)
    assert law.late_power == power


@pytest.mark.parametrize(("w0", "wa"), [(-1, 0), (-0.9, 0), (-1.2, 0.3), (-0.8, -0.7), (0, 0)])
def test_dark_energy_follows_its_equation_of_state(w0: float, wa: float) -> None:
    """ρ ∝ a^(-3(1 + w0 + wa)) exp(-3 wa (1 - a)) (Chevallier & Polarski 2001; Linder 2003)."""
    law = replace(EMPTY, dark_energy=0.7, w0=w0, wa=wa)
    a = np.exp(-X)
    density = a ** (-3 * (1 + w0 + wa)) * np.exp(-3 * wa * (1 - a))
    assert_close(law.rate_squared(X), 0.7 * density, relative=1e-13)
    assert_close(law.log_rate_slope(X), 1.5 * (1 + w0 + wa * (1 - a)), relative=1e-13, absolute=0)


def test_constant_dark_energy_is_constant() -> None:
    law = replace(EMPTY, dark_energy=0.7)
    np.testing.assert_array_equal(law.rate_squared(X), 0.7)


def test_massive_species_is_radiation_early_and_matter_late() -> None:
    density, mass = 1e-5, 400.0
    law = replace(EMPTY, massive=((density, mass),))
    early = np.array([20.0, 23.0])
    assert_close(law.rate_squared(early), density * np.exp(4 * early), relative=1e-9)
    assert_close(law.log_rate_slope(early), [2.0, 2.0], relative=1e-9)
    late = np.array([0.0, 0.5])
    number = 1.5 * float(mp.zeta(3)) / (7 * math.pi**4 / 120)
    cold = density * number * mass * np.exp(3 * late)
    assert_close(law.rate_squared(late), cold, relative=1e-3)  # 1 + O((T/m)²)
    assert_close(law.log_rate_slope(late), [1.5, 1.5], relative=1e-3)


def test_parts_add_up() -> None:
    parts = [
        replace(EMPTY, cold_matter=0.3),
        replace(EMPTY, photons=5e-5, massless_neutrinos=2e-5),
        replace(EMPTY, curvature=-0.1),
        replace(EMPTY, dark_energy=0.79, w0=-0.9, wa=-0.4),
        *(replace(EMPTY, massive=(one,)) for one in FULL.massive),
    ]
    assert_close(FULL.rate_squared(X), sum(part.rate_squared(X) for part in parts), relative=1e-14)


def test_slope_is_that_of_the_rate() -> None:
    step = 1e-5
    x = X[2:]
    slope = (np.log(FULL.rate(x + step)) - np.log(FULL.rate(x - step))) / (2 * step)
    assert_close(FULL.log_rate_slope(x), slope, relative=1e-9)


@pytest.mark.parametrize(
    ("law", "power"),
    [
        (FULL, 4.0),
        (replace(EMPTY, cold_matter=0.3, curvature=0.7), 3.0),
        (replace(EMPTY, curvature=1.0), 2.0),
        (replace(EMPTY, massive=((1e-5, 1e3),)), 4.0),
        (replace(EMPTY, cold_matter=1.0, dark_energy=0.1, w0=0.2, wa=0.3), 4.5),
        (replace(EMPTY, dark_energy=1.0), 0.0),
        (EMPTY, 0.0),
    ],
)
def test_late_power_is_that_of_the_leading_part(law: Expansion, power: float) -> None:
    assert law.late_power == pytest.approx(power, abs=1e-14)


@pytest.mark.parametrize(
    "law",
    [
        replace(FULL, massive=()),
        replace(EMPTY, cold_matter=0.3, curvature=0.2, dark_energy=0.5, w0=-0.7, wa=0.5),
        replace(EMPTY, cold_matter=1.0, dark_energy=0.1, w0=0.2, wa=0.3),
    ],
)
def test_late_shape_is_the_rate_without_its_leading_power(law: Expansion) -> None:
    x = np.array([0.5, 5.0, 20.0])
    shape = law.late_shape(x)
    assert_close(shape, law.rate_squared(x) * np.exp(-law.late_power * x), relative=1e-12)
    assert np.all(np.isfinite(law.late_shape(np.array([500.0, 5000.0]))))


def test_sum_changes_nothing_that_it_is_given() -> None:
    terms = [np.ones(3), np.full(3, 2.0)]
    np.testing.assert_array_equal(expansion.sum_of(terms), 3.0)
    np.testing.assert_array_equal(terms[0], 1.0)


def test_photons_fill_the_budget_as_a_black_body() -> None:
    """Ω_γ h² = 8π G/(3 (100 km/s/Mpc)²) · 4σT⁴/c³, in 30 digits; 2.4728e-5 (PDG, from memory)."""
    with mp.workdps(30):
        c, planck, k = mpf(299792458), mpf("6.62607015e-34"), mpf("1.380649e-23")
        sigma = 2 * mp.pi**5 * k**4 / (15 * planck**3 * c**2)
        mass_density = 4 * sigma * mpf("2.7255") ** 4 / c**3
        rate = mpf(100) * 1000 / (10**6 * 648000 / mp.pi * 149597870700)
        expected = mass_density * 8 * mp.pi * mpf("6.67430e-11") / (3 * rate**2)
    assert_close(expansion.photon_density(2.7255, 100.0), float(expected), relative=5e-15)
    assert_close(expansion.photon_density(2.7255, 100.0), 2.4728e-5, relative=1e-4)
    quarter = expansion.photon_density(2.7255, 200.0)
    assert_close(quarter, float(expected) / 4, relative=5e-15)


def test_neutrinos_share_their_number_equally() -> None:
    """T_ν = T (4/11)^(1/3) (N/3)^(1/4); N species of massless ones weigh 7/8 (4/11)^(4/3) N."""
    assert_close(expansion.neutrino_temperature(2.7255, 3.0), 1.94538, relative=1e-5)
    assert_close(
        expansion.neutrino_temperature(2.0, 3.046), 2.0 * (4 / 11) ** (1 / 3) * (3.046 / 3) ** 0.25
    )
    three = 3 * expansion.massless_species_density(5e-5, 3.046)
    assert_close(three, 5e-5 * 7 / 8 * (4 / 11) ** (4 / 3) * 3.046, relative=1e-15)
    assert expansion.massless_species_density(5e-5, 0.0) == 0.0


def test_mass_is_counted_in_temperatures() -> None:
    """1 eV is k times 11,604.518 K (CODATA 2018, from memory)."""
    assert_close(expansion.mass_over_temperature(1.0, 1.0), 11604.518, relative=1e-7)
    assert_close(expansion.mass_over_temperature(0.06, 2.0), 0.03 * 11604.518, relative=1e-7)
