"""The expansion history of a homogeneous universe: its parameters, checked, and its tables."""

from __future__ import annotations

import functools
import math
from collections.abc import Sequence
from typing import Any

import numpy as np

from epochconv import constants, expansion, neutrinos
from epochconv.errors import ArgumentError
from epochconv.expansion import Expansion
from epochconv.hermite import FloatArray
from epochconv.reading_quantities import is_quantity, magnitude_of
from epochconv.tables import HIGHEST_X, Tables
from epochconv.units import Unit, unit_named

_ELECTRONVOLT = Unit("eV", "energy", constants.ELECTRONVOLT_J, "electron_volt", ("eV",))
_SPENT = 1e-12
# Beyond this density today it is this part, and not the dark energy, that overflows.
_ABSURD = 1e100


class ExpansionHistory:
    """Parameters of a homogeneous universe, and everything computed from them.

    Immutable, hashable and picklable; histories with equal parameters are equal and share one
    table; `repr` evaluates back.

    Args:
        hubble_constant: H0 in km/s/Mpc, or a pint quantity.
        matter: Ω_m, the fraction of the critical density today in all matter, massive neutrinos
            included (as Planck 2018 VI tabulates it).
        curvature: Ω_k; positive is open.
        dark_energy: (w0, wa) of w(a) = w0 + wa (1 - a) (Chevallier & Polarski 2001; Linder 2003).
            Its density is what the other parts leave of the budget: zero and below are allowed.
        temperature_today: of the cosmic microwave background in K, or a pint quantity.
        radiation: whether photons and neutrinos count in the budget. The law of the temperature
            holds either way.
        neutrino_masses: of the three species in eV, or pint quantities (of energy). A species with
            mass follows the exact Fermi-Dirac energy density at every epoch; one without is
            radiation.
        neutrino_number: N_eff, shared equally: T_ν = T (4/11)^(1/3) (N/3)^(1/4).

    Raises:
        ArgumentError: a parameter is not a finite number of the right dimension or out of its
            range; the matter is less than its massive neutrinos; there was no Big Bang; or E²
            falls to zero or below at some scale factor in (0, 1]. The message names the parameter.

    The tables reach from today to z = 1e10. The physics ends earlier: above z of about 1e8
    electron-positron pairs annihilate and feed the photons, which this model leaves out.
    """

    __slots__ = ("_expansion", "_parameters")

    _parameters: tuple[Any, ...]
    _expansion: Expansion

    def __init__(
        self,
        *,
        hubble_constant: Any,
        matter: Any,
        curvature: Any = 0.0,
        dark_energy: Sequence[Any] = (-1.0, 0.0),
        temperature_today: Any = 2.7255,
        radiation: bool = True,
        neutrino_masses: Sequence[Any] = (0.06, 0.0, 0.0),
        neutrino_number: Any = 3.046,
    ) -> None:
        rate = _number("hubble_constant", hubble_constant, unit_named("km/s/Mpc"))
        temperature = _number("temperature_today", temperature_today, unit_named("K"))
        species = _number("neutrino_number", neutrino_number)
        masses = [
            _number(f"neutrino_masses[{i}]", mass, _ELECTRONVOLT)
            for i, mass in enumerate(_items("neutrino_masses", neutrino_masses, 3))
        ]
        w0, wa = (
            _number(f"dark_energy[{i}] ({word})", value)
            for i, (word, value) in enumerate(
                zip(("w0", "wa"), _items("dark_energy", dark_energy, 2), strict=True)
            )
        )
        _above("hubble_constant", rate, 0.0)
        _above("temperature_today", temperature, 0.0)
        _not_below("neutrino_number", species, 0.0)
        for i, mass in enumerate(masses):
            _not_below(f"neutrino_masses[{i}]", mass, 0.0)
        if not isinstance(radiation, bool | np.bool_):
            raise ArgumentError(f"radiation={radiation!r} is neither True nor False")
        parameters = (
            rate,
            _number("matter", matter),
            _number("curvature", curvature),
            (w0, wa),
            temperature,
            bool(radiation),
            tuple(masses),
            species,
        )
        _not_below("matter", parameters[1], 0.0)
        object.__setattr__(self, "_parameters", parameters)
        object.__setattr__(self, "_expansion", _expansion_of(parameters))

    @property
    def hubble_constant(self) -> float:
        """H0 in km/s/Mpc."""
        return float(self._parameters[0])

    @property
    def matter(self) -> float:
        """Ω_m, massive neutrinos included."""
        return float(self._parameters[1])

    @property
    def curvature(self) -> float:
        """Ω_k; positive is open."""
        return float(self._parameters[2])

    @property
    def dark_energy(self) -> tuple[float, float]:
        """(w0, wa)."""
        w0, wa = self._parameters[3]
        return float(w0), float(wa)

    @property
    def temperature_today(self) -> float:
        """Temperature of the cosmic microwave background today in K."""
        return float(self._parameters[4])

    @property
    def radiation(self) -> bool:
        """Whether photons and neutrinos count in the budget."""
        return bool(self._parameters[5])

    @property
    def neutrino_masses(self) -> tuple[float, ...]:
        """Masses of the three species in eV."""
        return tuple(self._parameters[6])

    @property
    def neutrino_number(self) -> float:
        """N_eff."""
        return float(self._parameters[7])

    @property
    def expansion(self) -> Expansion:
        """Densities today and their laws."""
        return self._expansion

    @property
    def tables(self) -> Tables:
        """Tables of time and distance, built when first asked for and shared by equals."""
        return _tables_of(self._expansion)

    @property
    def hubble_time_gyr(self) -> float:
        """1/H0 in Gyr."""
        return constants.HUBBLE_TIME_GYR_KM_PER_S_MPC / self.hubble_constant

    @property
    def hubble_length_mpc(self) -> float:
        """c/H0 in Mpc."""
        return constants.SPEED_OF_LIGHT_KM_PER_S / self.hubble_constant

    @property
    def assumptions(self) -> str:
        """What every number under this history assumes, in one line."""
        w0, wa = self.dark_energy
        curvature = f"Ω_k {self.curvature:g}" if self.curvature else "flat"
        steady = (w0, wa) == (-1.0, 0.0)
        energy = "constant dark energy" if steady else f"dark energy w0 {w0:g}, wa {wa:g}"
        if self.radiation:
            masses = ", ".join(f"{mass:g}" for mass in self.neutrino_masses)
            radiation = (
                f"photons and {self.neutrino_number:g} neutrinos in the budget (masses {masses} eV)"
            )
        else:
            radiation = "no photons or neutrinos in the budget"
        return (
            f"H0 {self.hubble_constant:g} km/s/Mpc, Ω_m {self.matter:g}, {curvature}, {energy}, "
            f"CMB {self.temperature_today:g} K today, {radiation}; redshifts as in the CMB frame"
        )

    def __setattr__(self, name: str, value: object) -> None:
        raise AttributeError(f"an ExpansionHistory cannot be changed ({name}); make a new one")

    def __delattr__(self, name: str) -> None:
        raise AttributeError(f"an ExpansionHistory cannot be changed ({name}); make a new one")

    def __eq__(self, other: object) -> bool:
        if not isinstance(other, ExpansionHistory):
            return NotImplemented
        return self._parameters == other._parameters

    def __hash__(self) -> int:
        return hash(self._parameters)

    def __repr__(self) -> str:
        pairs = ", ".join(
            f"{name}={value!r}" for name, value in zip(_NAMES, self._parameters, strict=True)
        )
        return f"ExpansionHistory({pairs})"

    def __reduce__(self) -> tuple[Any, ...]:
        return _restored, (self._parameters,)


_NAMES = (
    "hubble_constant",
    "matter",
    "curvature",
    "dark_energy",
    "temperature_today",
    "radiation",
    "neutrino_masses",
    "neutrino_number",
)


def _restored(parameters: tuple[Any, ...]) -> ExpansionHistory:
    return ExpansionHistory(**dict(zip(_NAMES, parameters, strict=True)))


@functools.lru_cache(maxsize=64)
def _tables_of(law: Expansion) -> Tables:
    return Tables(law)


@functools.lru_cache(maxsize=256)
def _expansion_of(parameters: tuple[Any, ...]) -> Expansion:
    """Split the budget and check that it describes a universe with a Big Bang."""
    rate, matter, curvature, (w0, wa), temperature, radiation, masses, species = parameters
    photons = massless = 0.0
    massive: list[tuple[float, float]] = []
    if radiation:
        photons = _photons(temperature, rate)
        one = expansion.massless_species_density(photons, species)
        neutrino_temperature = expansion.neutrino_temperature(temperature, species)
        massless = one * masses.count(0.0)
        massive = [
            (one, expansion.mass_over_temperature(mass, neutrino_temperature))
            for mass in masses
            if mass > 0.0 and species > 0.0
        ]
    heavy = sum(
        density * float(neutrinos.density_ratio(np.array([mass]))[0]) for density, mass in massive
    )
    if heavy > matter:
        raise ArgumentError(
            f"matter={matter!r} is less than its massive neutrinos ({heavy:.6g}); "
            "raise matter or lower neutrino_masses"
        )
    left = 1.0 - matter - curvature - photons - massless
    law = Expansion(
        cold_matter=matter - heavy,
        photons=photons,
        massless_neutrinos=massless,
        massive=tuple(massive),
        curvature=curvature,
        dark_energy=0.0 if abs(left) <= _SPENT else left,
        w0=w0,
        wa=wa,
    )
    _check_big_bang(law, parameters)
    return law


def _photons(temperature: float, rate: float) -> float:
    try:
        return expansion.photon_density(temperature, rate)
    except (OverflowError, ZeroDivisionError):
        raise ArgumentError(
            f"hubble_constant={rate!r} and temperature_today={temperature!r} are too far apart to "
            "compute the density of radiation; give H0 in km/s/Mpc and the temperature in K"
        ) from None


def _check_big_bang(law: Expansion, parameters: tuple[Any, ...]) -> None:
    """Refuse a history that never began, or whose E² is not above zero all the way back."""
    rate, matter, curvature, (w0, wa), temperature, _, _, species = parameters
    if law.late_power <= 0.0:
        raise ArgumentError(
            f"matter={matter!r}: with no matter, curvature or radiation that leads early on there "
            "was no Big Bang and no epoch has an age; give matter above 0"
        )
    x = np.linspace(0.0, HIGHEST_X, 4097)
    with np.errstate(over="ignore", invalid="ignore"):
        lowest, where = _lowest(law, x)
        late = law.late_shape(HIGHEST_X + np.linspace(0.0, 60.0, 241))
    if not np.isfinite(lowest) or not np.all(np.isfinite(late)):
        for cause, density in (
            (f"matter={matter!r}", matter),
            (f"curvature={curvature!r}", curvature),
            (f"hubble_constant={rate!r} with temperature_today={temperature!r}", law.photons),
            (f"neutrino_number={species!r}", law.massless_neutrinos),
        ):
            if abs(density) > _ABSURD:
                raise ArgumentError(
                    f"{cause} makes densities beyond all numbers; check the number and its unit"
                )
        raise ArgumentError(
            f"dark_energy=({w0!r}, {wa!r}) grows beyond all numbers in the early universe; "
            "give w0 + wa below about 1"
        )
    if lowest > 0.0 and late.min() > 0.0:
        return
    if lowest > 0.0:
        where = HIGHEST_X
    parts = {
        f"curvature={law.curvature!r}": law.curvature * math.exp(2.0 * where),
        f"dark_energy=({w0!r}, {wa!r}) with {law.dark_energy:.6g} of the budget left to it": (
            law.dark_energy * math.exp(3.0 * ((1.0 + w0 + wa) * where + wa * math.expm1(-where)))
        ),
    }
    culprit = min(parts, key=lambda name: parts[name])
    raise ArgumentError(
        f"{culprit}: E² is not above zero at scale factor {math.exp(-where):.4g} "
        f"(redshift {math.expm1(where):.4g}), so this universe has no Big Bang that leads to today"
    )


def _lowest(law: Expansion, x: FloatArray) -> tuple[float, float]:
    """Return the lowest E² / (1 + z)^2 over the span of x and where it lies, by zooming in."""
    for _ in range(3):
        scaled = law.rate_squared(x) * np.exp(-2.0 * x)
        if not np.all(np.isfinite(scaled)):
            return math.nan, 0.0
        i = int(np.argmin(scaled))
        lowest, where = float(scaled[i]), float(x[i])
        if lowest <= 0.0:
            break
        x = np.linspace(x[max(i - 1, 0)], x[min(i + 1, len(x) - 1)], 257)
    return lowest, where


def _items(name: str, value: Any, count: int) -> tuple[Any, ...]:
    if is_quantity(value):
        value = [type(value)(item, value.units) for item in np.atleast_1d(value.magnitude)]
    try:
        items = tuple(value)
    except TypeError:
        items = ()
    if isinstance(value, str) or len(items) != count:
        raise ArgumentError(f"{name}={value!r} must hold {count} numbers")
    return items


def _number(name: str, value: Any, unit: Unit | None = None) -> float:
    """Return a parameter as a finite float in its documented unit."""
    if is_quantity(value):
        value = magnitude_of(value, unit or unit_named(""), name)
    array = isinstance(value, np.ndarray) and value.ndim > 0
    if array or isinstance(value, bool | np.bool_ | np.complexfloating | str | bytes):
        raise ArgumentError(f"{name}={value!r} is not a number")
    try:
        number = float(value)
    except (TypeError, ValueError):
        raise ArgumentError(f"{name}={value!r} is not a number") from None
    except OverflowError:
        number = math.inf
    if not math.isfinite(number):
        raise ArgumentError(f"{name}={value!r} is not a finite number")
    return number


def _above(name: str, value: float, limit: float) -> None:
    if value <= limit:
        raise ArgumentError(f"{name}={value!r} is not above {limit:g}; give a number that is")


def _not_below(name: str, value: float, limit: float) -> None:
    if value < limit:
        raise ArgumentError(f"{name}={value!r} is below {limit:g}; give {limit:g} or above")
