"""Expansion rate of a homogeneous universe as a function of x = ln(1 + z); floats only.

E² = H²/H0² is the Friedmann equation with the densities today in units of the critical one
(Peebles 1993, Principles of Physical Cosmology, section 13). Dark energy follows
w(a) = w0 + wa (1 - a) (Chevallier & Polarski 2001, Int. J. Mod. Phys. D 10, 213; Linder 2003,
Phys. Rev. Lett. 90, 091301).
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from epochconv import constants, neutrinos
from epochconv.hermite import FloatArray


@dataclass(frozen=True)
class Expansion:
    """Densities today (fractions of the critical density) and the laws by which they change.

    Attributes:
        cold_matter: matter without its massive neutrinos.
        photons, massless_neutrinos: what scales as (1 + z)^4.
        massive: for each massive species its density if it were massless, and m c²/(k T) today.
        curvature: Ω_k; positive is open.
        dark_energy: what is left of the budget; may be zero or negative.
        w0, wa: equation of state of the dark energy.
    """

    cold_matter: float
    photons: float
    massless_neutrinos: float
    massive: tuple[tuple[float, float], ...]
    curvature: float
    dark_energy: float
    w0: float
    wa: float

    def rate_squared(self, x: FloatArray) -> FloatArray:
        """Return E² at each x of shape (n,)."""
        return sum_of(self._terms(x))

    def rate(self, x: FloatArray) -> FloatArray:
        """Return E = H/H0 at each x of shape (n,)."""
        return np.sqrt(self.rate_squared(x))

    def log_rate_slope(self, x: FloatArray) -> FloatArray:
        """Return d ln E / dx at each x of shape (n,)."""
        terms = self._terms(x)
        slope = sum_of([term * power for term, power in zip(terms, self._powers(x), strict=True)])
        return 0.5 * slope / sum_of(terms)

    @property
    def late_power(self) -> float:
        """Power of 1 + z of the term of E² that leads as z grows without bound."""
        return max((power for density, power in self._late_laws() if density != 0.0), default=0.0)

    def late_shape(self, x: FloatArray) -> FloatArray:
        """Return E² / (1 + z)^late_power at x of shape (n,) beyond any mass or mixing of terms.

        Massive neutrinos count as relativistic; the quotient cannot overflow.
        """
        lead = self.late_power
        shape = np.zeros_like(x)
        for density, power in self._late_laws():
            if density != 0.0:
                shape += density * np.exp((power - lead) * x)
        if self.dark_energy != 0.0 and self.wa != 0.0:
            law = 3.0 * (1.0 + self.w0 + self.wa)
            drift = np.expm1(3.0 * self.wa * np.exp(-x))
            shape += self._late_dark_energy() * np.exp((law - lead) * x) * drift
        return shape

    def _late_laws(self) -> list[tuple[float, float]]:
        relativistic = self.photons + self.massless_neutrinos + sum(d for d, _ in self.massive)
        return [
            (relativistic, 4.0),
            (self.cold_matter, 3.0),
            (self.curvature, 2.0),
            (self._late_dark_energy(), 3.0 * (1.0 + self.w0 + self.wa)),
        ]

    def _late_dark_energy(self) -> float:
        return self.dark_energy * math.exp(-3.0 * self.wa)

    def _terms(self, x: FloatArray) -> list[FloatArray]:
        stretch = np.exp(x)
        square = stretch * stretch
        fourth = square * square
        terms = [
            self.cold_matter * (square * stretch),
            (self.photons + self.massless_neutrinos) * fourth,
            self.curvature * square,
        ]
        if self.dark_energy != 0.0:
            terms.append(self._dark_energy_term(x))
        for density, mass_today in self.massive:
            terms.append(density * fourth * neutrinos.density_ratio(mass_today / stretch))
        return terms

    def _powers(self, x: FloatArray) -> list[FloatArray | float]:
        powers: list[FloatArray | float] = [3.0, 4.0, 2.0]
        if self.dark_energy != 0.0:
            powers.append(3.0 * (1.0 + self.w0 - self.wa * np.expm1(-x)))
        for _, mass_today in self.massive:
            powers.append(4.0 - neutrinos.log_slope(mass_today * np.exp(-x)))
        return powers

    def _dark_energy_term(self, x: FloatArray) -> FloatArray:
        if self.w0 == -1.0 and self.wa == 0.0:
            return np.full_like(x, self.dark_energy)
        exponent = 3.0 * ((1.0 + self.w0 + self.wa) * x + self.wa * np.expm1(-x))
        return self.dark_energy * np.exp(exponent)


def sum_of(terms: list[FloatArray]) -> FloatArray:
    """Add arrays in place of the first (which is ours to change)."""
    total = terms[0].copy()
    for term in terms[1:]:
        total += term
    return total


def photon_density(temperature_k: float, hubble_constant_km_per_s_mpc: float) -> float:
    """Return Ω_γ today: black-body energy density 4σT⁴/c over the critical 3H0²c²/(8πG)."""
    rate_per_s = hubble_constant_km_per_s_mpc / constants.MEGAPARSEC_KM
    energy = (
        4.0
        * constants.STEFAN_BOLTZMANN_W_PER_M2_K4
        * temperature_k**4
        / constants.SPEED_OF_LIGHT_M_PER_S
    )
    critical = (
        3.0
        * rate_per_s**2
        * constants.SPEED_OF_LIGHT_M_PER_S**2
        / (8.0 * math.pi * constants.NEWTON_M3_PER_KG_S2)
    )
    return energy / critical


def neutrino_temperature(temperature_k: float, neutrino_number: float) -> float:
    """Return T_ν today in K: T (4/11)^(1/3) (N/3)^(1/4), three species sharing N equally."""
    return temperature_k * math.pow(4.0 / 11.0, 1.0 / 3.0) * math.pow(neutrino_number / 3.0, 0.25)


def massless_species_density(photons: float, neutrino_number: float) -> float:
    """Return Ω today of one massless species: 7/8 (T_ν/T)⁴ Ω_γ."""
    return photons * 0.875 * math.pow(4.0 / 11.0, 4.0 / 3.0) * neutrino_number / 3.0


def mass_over_temperature(mass_ev: float, temperature_k: float) -> float:
    """Return m c²/(k T) for a mass in eV/c²."""
    return mass_ev * constants.ELECTRONVOLT_J / (constants.BOLTZMANN_J_PER_K * temperature_k)
