"""The Fermi-Dirac energy density against adaptive quadrature in 30 digits, and its limits.

With y = m c²/(k T), F(y) is the integral over q of q² √(q² + y²)/(exp(q) + 1) (Lesgourgues & Pastor
2006, section 2); F(0) = 7 π⁴/120, and for large y the mass times the number, 3/2 ζ(3) y.
"""

from __future__ import annotations

import numpy as np
import pytest
from mpmath import mp, mpf

from epochconv.neutrinos import density_ratio, log_slope
from tests.closeness import assert_close

MASSES = [1e-6, 0.003, 0.11, 0.9, 1.0, 2.718281828, 31.0, 356.55, 1e4, 3e6]


def integral(mass: float, integrand: str) -> mpf:
    """F, or y F' with the integrand that the derivative by ln y gives."""
    square = mpf(mass) ** 2

    def density(q: mpf) -> mpf:
        energy = mp.sqrt(q * q + square)
        factor = energy if integrand == "energy" else square / energy
        return q * q * factor / (mp.exp(q) + 1)

    knots = sorted({mpf(k) for k in (0, 1, 5, 20, 60, 120)} | {mpf(min(mass, 119.0))})
    return mp.quad(density, knots)


@pytest.mark.parametrize("mass", MASSES)
def test_energy_density_is_the_integral(mass: float) -> None:
    with mp.workdps(30):
        expected = float(integral(mass, "energy") / (7 * mp.pi**4 / 120))
    assert_close(density_ratio(np.array([mass])), [expected], relative=2e-14)


@pytest.mark.parametrize("mass", MASSES)
def test_slope_is_that_of_the_integral(mass: float) -> None:
    with mp.workdps(30):
        expected = float(integral(mass, "slope") / integral(mass, "energy"))
    # Its use is multiplied by a density, not by 1/y²: absolute precision is what counts.
    assert_close(log_slope(np.array([mass])), [expected], relative=0, absolute=1e-11)


def test_massless_is_massless() -> None:
    np.testing.assert_array_equal(density_ratio(np.array([0.0, 1e-300, 1e-10])), 1.0)
    np.testing.assert_array_equal(log_slope(np.array([0.0, 1e-300, 1e-10])), 0.0)


@pytest.mark.parametrize("mass", [1e5, 1e8, 2e9, 1e15, 1e150])
def test_cold_is_mass_times_number(mass: float) -> None:
    """F tends to 3/2 ζ(3) y, and the next term is smaller by 13 or so over y²."""
    with mp.workdps(30):
        expected = float(mp.zeta(3) * 1.5 * mpf(mass) / (7 * mp.pi**4 / 120))
    assert_close(density_ratio(np.array([mass])), [expected], relative=20 / mass**2 + 2e-14)
    assert_close(log_slope(np.array([mass])), [1.0], absolute=40 / mass**2 + 1e-11)


def test_light_one_is_heavier_by_the_first_term() -> None:
    """F(y)/F(0) = 1 + 5 y²/(7 π²) + …, since the integral of q/(exp(q) + 1) is π²/12."""
    mass = np.array([1e-4, 1e-3])
    assert_close(density_ratio(mass) - 1, 5 * mass**2 / (7 * np.pi**2), relative=1e-5)


@pytest.mark.parametrize("edge", [np.exp(-21.0), np.exp(21.0)])
def test_table_meets_the_limits_without_a_step(edge: float) -> None:
    near = edge * np.array([1 - 1e-9, 1, 1 + 1e-9])
    ratio = density_ratio(near) / np.maximum(near, 1.0)
    assert np.ptp(ratio) <= 1e-13 * ratio[0]
    assert np.ptp(log_slope(near)) <= 1e-11


def test_one_far_mass_does_not_change_the_others() -> None:
    mass = np.array([0.5, 30.0])
    both = density_ratio(np.array([0.5, 1e-30, 30.0, 1e30]))
    np.testing.assert_array_equal(both[[0, 2]], density_ratio(mass))
    np.testing.assert_array_equal(
        log_slope(np.array([0.5, 1e-30, 30.0, 1e30]))[[0, 2]], log_slope(mass)
    )


def test_ratio_grows_and_slope_rises_from_0_to_1() -> None:
    mass = np.logspace(-12, 12, 4001)
    ratio, slope = density_ratio(mass), log_slope(mass)
    assert np.all(np.diff(ratio) >= 0)
    assert np.all((slope >= -1e-12) & (slope <= 1 + 1e-12))


def test_no_masses_are_no_ratios() -> None:
    assert density_ratio(np.array([])).shape == (0,)
    assert log_slope(np.array([])).shape == (0,)
