"""Histories with dark energy or radiation whose age and distance have a closed form.

The formulas are standard (from memory; any text book of cosmology) and each is evaluated in
mpmath, so that no digit is lost on the side of the expectation. Units: Gyr and Mpc.
Matter alone is in test_matter_alone.py.
"""

from __future__ import annotations

import numpy as np
import pytest
from mpmath import mp, mpf

import epochconv
from epochconv.errors import ArgumentError
from tests.closeness import assert_close
from tests.reference.formula_points import REDSHIFTS, dust, each, measured, ruler
from tests.reference.quadrature import megaparsec_m


class TestMatterAndConstantDarkEnergy:
    """Flat: the age by asinh, the distance by a hypergeometric and an elliptic function."""

    matter = 0.3
    history = dust(0.3)
    time, length = ruler(70)

    def test_age(self) -> None:
        m, dark = mpf(self.matter), 1 - mpf(self.matter)
        first = 2 * self.time / (3 * mp.sqrt(dark))
        assert_close(
            measured(self.history, "age"),
            each(lambda z: first * mp.asinh(mp.sqrt(dark / m) * (1 + z) ** mpf(-1.5))),
        )

    def test_scale_factor_at_an_age(self) -> None:
        """The inverse has a closed form too: a = (m/dark)^(1/3) sinh^(2/3)(1.5 sqrt(dark) H0 t)."""
        ages = np.array([1e-6, 0.01, 1.0, 5.0, 9.0, 13.0])
        m, dark = mpf(self.matter), 1 - mpf(self.matter)
        expected = each(
            lambda t: (
                mp.cbrt(m / dark)
                * mp.sinh(mpf(1.5) * mp.sqrt(dark) * t / self.time) ** (mpf(2) / 3)
            ),
            ages,
        )
        found = epochconv.convert(ages, "age", "scale factor", history=self.history)
        assert_close(found, expected, relative=1e-11)

    def test_distance_by_the_hypergeometric_function(self) -> None:
        """M. Baes, P. Camps & D. Van De Putte 2017, MNRAS 468, 927 (from memory)."""
        m, dark = mpf(self.matter), 1 - mpf(self.matter)

        def from_big_bang(z: mpf) -> mpf:
            argument = -dark / m * (1 + z) ** -3
            sixth = mpf(1) / 6
            return mp.hyp2f1(sixth, mpf(1) / 2, 7 * sixth, argument) / mp.sqrt(1 + z)

        def path(z: mpf) -> mpf:
            return 2 * self.length / mp.sqrt(m) * (from_big_bang(mpf(0)) - from_big_bang(z))

        assert_close(measured(self.history, "comoving distance"), each(path))

    def test_distance_by_the_elliptic_integral(self) -> None:
        m, dark = mpf(self.matter), 1 - mpf(self.matter)
        scale = mp.cbrt(dark / m)
        parameter = (2 + mp.sqrt(3)) / 4  # k^2, not k

        def elliptic(z: mpf) -> mpf:
            u, root = (1 + z) / scale, mp.sqrt(3)
            return mp.ellipf(mp.acos((u + 1 - root) / (u + 1 + root)), parameter)

        def path(z: mpf) -> mpf:
            first = self.length / (mpf(3) ** mpf("0.25") * mp.sqrt(scale * m))
            return first * (elliptic(mpf(0)) - elliptic(z))

        assert_close(measured(self.history, "comoving distance"), each(path))

    def test_pinned_row(self) -> None:
        """z = 10 from 25-digit quadrature, made outside this project's code; H is exactly 1400."""
        pinned = {
            "comoving distance": 9440.2496264,
            "angular diameter distance": 858.204511491,
            "luminosity distance": 103842.74589,
            "distance modulus": 50.08188082,
            "lookback time": 13.0010967089,
            "age": 0.465887238154,
            "Hubble rate": 1400.0,
        }
        for measure, expected in pinned.items():
            found = epochconv.convert(10, "redshift", measure, history=self.history)
            assert_close(found, expected, relative=1e-10)


@pytest.mark.parametrize("w", [-1.3, -0.9, -0.6])
def test_constant_pressure_ratio_has_a_hypergeometric_age_and_distance(w: float) -> None:
    history = dust(0.3, dark_energy=(w, 0))
    time, length = ruler(70)
    m, dark = mpf(0.3), 1 - mpf(0.3)

    def age(z: mpf) -> mpf:
        order = -1 / (2 * mpf(w))
        argument = -dark / m * (1 + z) ** (3 * mpf(w))
        grown = mp.hyp2f1(mpf(1) / 2, order, 1 + order, argument)
        return 2 * time / (3 * mp.sqrt(m)) * (1 + z) ** mpf(-1.5) * grown

    def from_big_bang(z: mpf) -> mpf:
        order = -1 / (6 * mpf(w))
        argument = -dark / m * (1 + z) ** (3 * mpf(w))
        return mp.hyp2f1(mpf(1) / 2, order, 1 + order, argument) / mp.sqrt(1 + z)

    def path(z: mpf) -> mpf:
        return 2 * length / mp.sqrt(m) * (from_big_bang(mpf(0)) - from_big_bang(z))

    assert_close(measured(history, "age"), each(age))
    assert_close(measured(history, "comoving distance"), each(path))


def test_pressure_ratio_of_minus_a_third_expands_like_curvature_but_stays_flat() -> None:
    """The same H and D_C as an open universe, but D_M = D_C."""
    fluid, open_one = dust(0.3, dark_energy=(-1 / 3, 0)), dust(0.3, curvature=0.7)
    for measure in ("Hubble rate", "age", "comoving distance"):
        assert_close(measured(fluid, measure), measured(open_one, measure))
    path = measured(fluid, "comoving distance")
    assert_close(measured(fluid, "transverse comoving distance"), path)
    assert measured(open_one, "transverse comoving distance")[4] > 1.04 * path[4]


def test_evolving_dark_energy_has_its_pinned_digits() -> None:
    """f = (1+z)^(3(1+w0+wa)) exp(-3 wa z/(1+z)) (Chevallier & Polarski 2001, Linder 2003).

    25-digit quadrature made outside this project's code, without radiation.
    """
    history = epochconv.ExpansionHistory(
        hubble_constant=67.51, matter=0.3114, dark_energy=(-0.838, -0.62), radiation=False
    )
    pinned = {
        "Hubble rate": (90.1776055693, 120.094909849, 201.782969265),
        "comoving distance": (1923.82884503, 3368.95365816, 5299.31234681),
        "age": (8.63005283052, 5.89949359889, 3.3015902058),
    }
    for measure, expected in pinned.items():
        found = epochconv.convert([0.5, 1, 2], "redshift", measure, history=history)
        assert_close(found, expected, relative=1e-11)
    assert_close(
        epochconv.convert(0, "redshift", "age", history=history), 13.7678570002, relative=1e-11
    )


def radiation_today(temperature: float) -> mpf:
    """Fraction of the critical density in photons and three massless neutrinos, H0 70, N 3.

    From the Stefan-Boltzmann law: rho = 4 sigma T^4 / c^3, sigma = 2 pi^5 k^4 / (15 h^3 c^2),
    and a neutrino-to-photon ratio of N 7/8 (4/11)^(4/3).
    """
    k, h, c = mpf("1.380649e-23"), mpf("6.62607015e-34"), mpf(299792458)
    sigma = 2 * mp.pi**5 * k**4 / (15 * h**3 * c**2)
    rate = mpf(70) * 1000 / megaparsec_m()
    critical = 3 * rate**2 / (8 * mp.pi * mpf("6.67430e-11"))
    neutrinos = 3 * mpf(7) / 8 * (mpf(4) / 11) ** (mpf(4) / 3)
    return 4 * sigma * mpf(temperature) ** 4 / c**3 / critical * (1 + neutrinos)


def hot(matter: float, temperature: float) -> epochconv.ExpansionHistory:
    return epochconv.ExpansionHistory(
        hubble_constant=70,
        matter=matter,
        temperature_today=temperature,
        neutrino_masses=(0, 0, 0),
        neutrino_number=3,
    )


@pytest.mark.parametrize("temperature", [2.7255, 8.0])
def test_matter_and_radiation_have_a_closed_age_and_distance(temperature: float) -> None:
    """Flat, with a_eq = radiation/matter (e.g. B. Ryden, Introduction to Cosmology, sec. 5.3)."""
    matter = float(1 - radiation_today(temperature))
    ratio = radiation_today(temperature) / mpf(matter)
    time, length = ruler(70)
    root = mp.sqrt(mpf(matter))
    history = hot(matter, temperature)

    def age(z: mpf) -> mpf:
        with mp.workdps(80):  # a difference of nearly equal terms early on
            a, r = 1 / (1 + z), ratio
            return 2 * time / (3 * root) * ((a - 2 * r) * mp.sqrt(a + r) + 2 * r ** mpf(1.5))

    def path(z: mpf) -> mpf:
        return 2 * length / root * (mp.sqrt(1 + ratio) - mp.sqrt(1 / (1 + z) + ratio))

    assert_close(measured(history, "age"), each(age))
    assert_close(measured(history, "comoving distance"), each(path))


def test_radiation_and_constant_dark_energy_have_a_closed_age() -> None:
    """a^2 = sqrt(radiation/dark) sinh(2 sqrt(dark) H0 t), without any matter."""
    radiation = radiation_today(15.0)
    dark = 1 - radiation
    time, _ = ruler(70)
    assert_close(
        measured(hot(0, 15.0), "age"),
        each(
            lambda z: (
                time / (2 * mp.sqrt(dark)) * mp.asinh(mp.sqrt(dark / radiation) / (1 + z) ** 2)
            )
        ),
    )


def test_radiation_alone_has_the_simplest_forms() -> None:
    """t = 1/(2H), D_C = c/H0 z/(1+z)."""
    temperature = float(2.7255 / radiation_today(2.7255) ** mpf("0.25"))
    time, length = ruler(70)
    history = hot(0, temperature)
    assert_close(measured(history, "age"), each(lambda z: time / 2 / (1 + z) ** 2))
    assert_close(measured(history, "comoving distance"), each(lambda z: length * z / (1 + z)))


def test_universe_without_a_beginning_is_refused() -> None:
    """De Sitter: D_C = cz/H0, but the age is infinite, so there is no clock to read."""
    with pytest.raises(ArgumentError, match="Big Bang"):
        dust(0)


@pytest.mark.parametrize("history", ["planck 2018", "round numbers", "evolving dark energy 2025"])
def test_angular_diameter_distance_turns_where_the_recession_reaches_light(history: str) -> None:
    """Flat: dD_A/dz = 0 exactly where D_C H = c (1 + z)."""
    epochs = np.linspace(1.0, 2.5, 20001)
    size = epochconv.convert(epochs, "redshift", "angular diameter distance", history=history)
    top = epochs[np.argmax(size.magnitude)]
    rate = epochconv.convert(top, "redshift", "Hubble rate", history=history).magnitude
    path = epochconv.convert(top, "redshift", "comoving distance", history=history).magnitude
    assert_close(rate * path, 299792.458 * (1 + top), relative=1e-4)


def test_luminosity_and_angular_diameter_distances_obey_etherington() -> None:
    """I. M. H. Etherington 1933, Phil. Mag. 15, 761 (from memory): D_L = (1+z)^2 D_A."""
    for curvature in (-0.1, 0, 0.1):
        history = epochconv.ExpansionHistory(hubble_constant=70, matter=0.3, curvature=curvature)
        luminosity = measured(history, "luminosity distance")
        assert_close(
            luminosity,
            measured(history, "angular diameter distance") * (1 + REDSHIFTS) ** 2,
            relative=1e-14,
        )
