"""Measures of an expansion history by multiple-precision quadrature, written from the physics.

Nothing here imports the package under test. Every integral is taken in mpmath with
`WORKING_DIGITS` digits, so that `DIGITS` of them can be trusted (test_frozen.py shows it).

Friedmann's equation, with x = ln(1+z) and the budget closed by dark energy, as in any text
book (P. J. E. Peebles, "Principles of Physical Cosmology", 1993, ch. 13; D. W. Hogg 1999,
astro-ph/9905116 for the distances; M. Chevallier & D. Polarski 2001 and E. Linder 2003 for the
dark energy; J. Lesgourgues & S. Pastor 2006, sec. 2, for the neutrinos), all from memory.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from functools import cache

from mpmath import mp, mpf

DIGITS = 30
WORKING_DIGITS = 45

# CODATA 2022; all but the constant of gravitation are exact in the SI since 2019.
SPEED_OF_LIGHT_M_PER_S = "299792458"
BOLTZMANN_J_PER_K = "1.380649e-23"
PLANCK_J_S = "6.62607015e-34"
ELEMENTARY_CHARGE_C = "1.602176634e-19"
GRAVITATION_M3_PER_KG_S2 = "6.67430e-11"
# IAU 2012 resolution B2 (au), IAU 2015 resolution B2 (parsec = 648000/pi au), Julian year.
ASTRONOMICAL_UNIT_M = "149597870700"
JULIAN_YEAR_S = "31557600"


def megaparsec_m() -> mpf:
    """One megaparsec in metres."""
    return mpf("1e6") * 648000 / mp.pi * mpf(ASTRONOMICAL_UNIT_M)


def gigayear_s() -> mpf:
    """One gigayear of Julian years in seconds."""
    return mpf("1e9") * mpf(JULIAN_YEAR_S)


@cache
def _log_nodes(working_digits: int) -> list[tuple[mpf, mpf]]:
    """Nodes q^2 and weights of the integral over q of q^2 g(q) / (exp(q) + 1).

    The trapezoid rule in s = ln q converges like exp(-pi^2/h) whatever the mass is, because
    the branch points q = +-iy of the root below lie at Im s = pi/2, and there only.
    """
    step = mpf(4) / working_digits
    lowest = -int(working_digits * mp.log(10) / 3 / step) - 5
    highest = int(mp.log(mpf(working_digits) * 3) / step) + 2
    momenta = [mp.exp(k * step) for k in range(lowest, highest)]
    return [(q * q, step * q**3 / (mp.exp(q) + 1)) for q in momenta]


def fermi_dirac_energy(mass_ratio: mpf) -> mpf:
    """Integral over q from 0 to infinity of q^2 sqrt(q^2 + y^2) / (exp(q) + 1), y = m c^2 / kT."""
    square = mass_ratio * mass_ratio
    return mp.fsum(w * mp.sqrt(q2 + square) for q2, w in _log_nodes(mp.dps))


def fermi_dirac_energy_directly(mass_ratio: mpf) -> mpf:
    """The same integral by adaptive quadrature in q, to check the other: slow."""
    knots = [0, 1, 5, 20, 60, 200]
    if 0 < mass_ratio < 1:
        knots.insert(1, mass_ratio)
    return mp.quad(
        lambda q: q * q * mp.sqrt(q * q + mass_ratio * mass_ratio) / (mp.exp(q) + 1), knots
    )


@dataclass(frozen=True)
class Universe:
    """The parameters of one history; bare numbers in the units of the class under test."""

    hubble_constant: float
    matter: float
    curvature: float = 0.0
    dark_energy: tuple[float, float] = (-1.0, 0.0)
    temperature_today: float = 2.7255
    radiation: bool = True
    neutrino_masses: tuple[float, float, float] = (0.06, 0.0, 0.0)
    neutrino_number: float = 3.046


@dataclass(frozen=True)
class Answers:
    """What one redshift is; in Gyr, Mpc, mag and km/s/Mpc, the slope bare."""

    lookback_time: mpf
    age: mpf
    comoving_distance: mpf
    transverse_comoving_distance: mpf
    luminosity_distance: mpf
    angular_diameter_distance: mpf
    distance_modulus: mpf
    hubble_rate: mpf
    hubble_slope: mpf  # d ln H / d ln(1+z)


class Quadrature:
    """All measures of one universe, at the working precision that holds when it is made.

    Args:
        universe: its parameters.
        method: rule of the outer integrals, "gauss-legendre" or "tanh-sinh".
        panel: greatest width of a panel of them, in ln(1+z).
    """

    def __init__(
        self, universe: Universe, method: str = "gauss-legendre", panel: float = 1.0
    ) -> None:
        self.universe = universe
        self.method = method
        self.panel = panel
        self.worst_estimate = mpf(0)
        """The largest relative error that mpmath estimated for any panel."""
        self._rates: dict[mpf, mpf] = {}
        self.hubble_per_s = mpf(universe.hubble_constant) * 1000 / megaparsec_m()
        self.hubble_time_gyr = 1 / self.hubble_per_s / gigayear_s()
        self.hubble_distance_mpc = mpf(SPEED_OF_LIGHT_M_PER_S) / 1000 / universe.hubble_constant
        self._set_budget()

    def _set_budget(self) -> None:
        """Fractions of the critical density today."""
        u = self.universe
        self.photons, self.massless, self.massive = mpf(0), mpf(0), []
        if u.radiation:
            self.photons = mp.pi**2 / 15 * self._thermal_fraction(mpf(u.temperature_today))
            share = mpf(u.neutrino_number) / 3
            temperature = mpf(u.temperature_today) * mp.cbrt(mpf(4) / 11) * mp.sqrt(mp.sqrt(share))
            # One species counts its neutrino and its antineutrino: g = 2, g / (2 pi^2) = 1/pi^2.
            scale = self._thermal_fraction(temperature) / mp.pi**2
            energy_ev = mpf(BOLTZMANN_J_PER_K) * temperature / mpf(ELEMENTARY_CHARGE_C)
            for mass in u.neutrino_masses:
                if mass > 0:
                    self.massive.append((scale, mpf(mass) / energy_ev))
                else:
                    self.massless += scale * 7 * mp.pi**4 / 120
        neutrinos_today = mp.fsum(s * fermi_dirac_energy(y) for s, y in self.massive)
        self.cold = mpf(u.matter) - neutrinos_today
        self.dark = 1 - mpf(u.matter) - u.curvature - self.photons - self.massless

    def _thermal_fraction(self, temperature_k: mpf) -> mpf:
        """(kT)^4 / (hbar c)^3 as a mass density, over the critical density 3 H0^2 / (8 pi G)."""
        c = mpf(SPEED_OF_LIGHT_M_PER_S)
        hbar = mpf(PLANCK_J_S) / (2 * mp.pi)
        density = (mpf(BOLTZMANN_J_PER_K) * temperature_k) ** 4 / (hbar * c) ** 3 / c**2
        return density * 8 * mp.pi * mpf(GRAVITATION_M3_PER_KG_S2) / (3 * self.hubble_per_s**2)

    def rate(self, x: mpf) -> mpf:
        """H(x) / H0 at x = ln(1+z)."""
        if x not in self._rates:
            self._rates[x] = mp.sqrt(self._rate_squared(x))
        return self._rates[x]

    def _rate_squared(self, x: mpf) -> mpf:
        stretch = mp.exp(x)
        w0, wa = (mpf(w) for w in self.universe.dark_energy)
        dark = self.dark * mp.exp(3 * (1 + w0 + wa) * x - 3 * wa * (1 - 1 / stretch))
        neutrinos = mp.fsum(s * fermi_dirac_energy(y / stretch) for s, y in self.massive)
        return (
            (self.photons + self.massless + neutrinos) * stretch**4
            + self.cold * stretch**3
            + self.universe.curvature * stretch**2
            + dark
        )

    def slope(self, x: mpf) -> mpf:
        """d ln H / dx by a central difference, good to a third of the working digits or more."""
        step = mpf(10) ** (-mp.dps // 3)
        rise = self._rate_squared(x + step) - self._rate_squared(x - step)
        return rise / (4 * step * self._rate_squared(x))

    def _integral(self, integrand, low: mpf, high: mpf) -> mpf:
        panels = max(1, int(mp.ceil((high - low) / self.panel)))
        total = mpf(0)
        for k in range(panels):
            left = low + (high - low) * k / panels
            right = low + (high - low) * (k + 1) / panels
            value, error = mp.quad(integrand, [left, right], method=self.method, error=True)
            self.worst_estimate = max(self.worst_estimate, error / value)
            total += value
        return total

    def _time_before(self, x: mpf) -> mpf:
        """H0 times the age at x, from the Big Bang on, in the scale factor a = exp(-x)."""
        first = mp.exp(-x)
        value, error = mp.quad(
            lambda a: 1 / (a * mp.sqrt(self._rate_squared(-mp.log(a)))), [0, first], error=True
        )
        self.worst_estimate = max(self.worst_estimate, error / value)
        return value

    def answers(self, redshifts: Iterable[float]) -> dict[float, Answers]:
        """All measures at each redshift, keyed by it; each float counts as the number it is."""
        ordered = sorted(set(redshifts))
        xs = [mp.log1p(mpf(z)) for z in ordered]
        times, paths = [], []
        for low, high in zip([mpf(0), *xs], xs, strict=False):
            times.append(self._integral(lambda x: 1 / self.rate(x), low, high))
            paths.append(self._integral(lambda x: mp.exp(x) / self.rate(x), low, high))
        first_time = self._time_before(xs[-1])
        return {
            z: self._answer(
                x,
                lookback=mp.fsum(times[: k + 1]),
                age=mp.fsum([first_time, *times[k + 1 :]]),
                path=mp.fsum(paths[: k + 1]),
            )
            for k, (z, x) in enumerate(zip(ordered, xs, strict=True))
        }

    def _answer(self, x: mpf, lookback: mpf, age: mpf, path: mpf) -> Answers:
        curvature = mpf(self.universe.curvature)
        root = mp.sqrt(abs(curvature))
        if curvature > 0:
            transverse = mp.sinh(root * path) / root
        elif curvature < 0:
            transverse = mp.sin(root * path) / root
        else:
            transverse = path
        transverse *= self.hubble_distance_mpc
        luminosity = transverse * mp.exp(x)
        return Answers(
            lookback_time=lookback * self.hubble_time_gyr,
            age=age * self.hubble_time_gyr,
            comoving_distance=path * self.hubble_distance_mpc,
            transverse_comoving_distance=transverse,
            luminosity_distance=luminosity,
            angular_diameter_distance=transverse * mp.exp(-x),
            distance_modulus=5 * mp.log10(luminosity) + 25,
            hubble_rate=self.rate(x) * self.universe.hubble_constant,
            hubble_slope=self.slope(x),
        )
