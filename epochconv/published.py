"""Published parameter sets by name, each with its citation, errors and assumptions."""

from __future__ import annotations

import difflib
import math
from collections.abc import Mapping
from dataclasses import dataclass, field

from epochconv.errors import ArgumentError
from epochconv.history import ExpansionHistory
from epochconv.registry import folded

DEFAULT = "planck 2018"


@dataclass(frozen=True)
class Combination:
    """A published product of powers of two parameters, whose error tells their correlation.

    Attributes:
        symbol: as the publication writes it.
        powers: by parameter.
        value, error: published, with the 68 % error.
    """

    symbol: str
    powers: Mapping[str, int] = field(hash=False)
    value: float
    error: float


@dataclass(frozen=True)
class ParameterSet:
    """Published parameters under a name.

    Attributes:
        name: plain words with a year.
        history: the expansion history that they describe.
        citation: where they are published.
        errors: published 68 % errors by parameter: one number, or (upper, lower).
        assumptions: what the publication combines and assumes; says so where a value comes from
            memory and was not read again.
        combination: a further published number, from which the correlation of two parameters
            follows; None where there is none.
    """

    name: str
    history: ExpansionHistory
    citation: str
    errors: dict[str, float | tuple[float, float]] = field(hash=False)
    assumptions: str
    combination: Combination | None = None

    @property
    def correlations(self) -> dict[tuple[str, str], float]:
        """Correlation by pair of parameters, where the publication tells it; others count as 0.

        To first order, the relative error of a product p^k q^l is the root of
        (k dp/p)² + (l dq/q)² + 2 r (k dp/p) (l dq/q), which is solved for r.
        """
        if self.combination is None:
            return {}
        (one, other), (p, q) = self.combination.powers, self._relative_errors()
        squared = (self.combination.error / self.combination.value) ** 2
        return {(one, other): (squared - p * p - q * q) / (2.0 * p * q)}

    def error_of(self, parameter: str) -> float:
        """Return the symmetric 68 % error of a parameter in `errors`.

        Two unequal sides are averaged in quadrature.
        """
        error = self.errors[parameter]
        if isinstance(error, tuple):
            return math.sqrt(0.5 * (error[0] ** 2 + error[1] ** 2))
        return error

    def _relative_errors(self) -> list[float]:
        """Return k dp/p for the parameters of the combination."""
        assert self.combination is not None
        return [
            power * self.error_of(name) / float(getattr(self.history, name))
            for name, power in self.combination.powers.items()
        ]


_SETS = (
    ParameterSet(
        name="planck 2018",
        history=ExpansionHistory(hubble_constant=67.36, matter=0.3153),
        citation="Planck Collaboration VI 2020, A&A 641, A6, table 2 (TT,TE,EE+lowE+lensing)",
        errors={"hubble_constant": 0.54, "matter": 0.0073},
        assumptions="flat; matter includes one neutrino of 0.06 eV; N_eff 3.046; "
        "T 2.7255 K (Fixsen 2009, ApJ 707, 916, rounded)",
        combination=Combination(
            "Ω_m h³", {"matter": 1, "hubble_constant": 3}, value=0.09633, error=0.00030
        ),
    ),
    ParameterSet(
        name="planck 2018 with bao",
        history=ExpansionHistory(hubble_constant=67.66, matter=0.3111),
        citation="Planck Collaboration VI 2020, A&A 641, A6, table 2 (TT,TE,EE+lowE+lensing+BAO)",
        errors={"hubble_constant": 0.42, "matter": 0.0056},
        assumptions="flat; matter includes one neutrino of 0.06 eV; N_eff 3.046; T 2.7255 K",
        combination=Combination(
            "Ω_m h³", {"matter": 1, "hubble_constant": 3}, value=0.09635, error=0.00030
        ),
    ),
    ParameterSet(
        name="wmap 2013",
        history=ExpansionHistory(
            hubble_constant=69.32,
            matter=0.2865,
            temperature_today=2.725,
            neutrino_masses=(0.0, 0.0, 0.0),
        ),
        citation="Hinshaw et al. 2013, ApJS 208, 19 (nine-year WMAP + eCMB + BAO + H0)",
        errors={"hubble_constant": 0.80, "matter": (0.0096, 0.0095)},
        assumptions="flat; massless neutrinos; T 2.725 K; values and errors from memory, "
        "consistent with the published age of 13.772 Gyr",
    ),
    ParameterSet(
        name="distance ladder 2022",
        history=ExpansionHistory(
            hubble_constant=73.04, matter=0.334, neutrino_masses=(0.0, 0.0, 0.0)
        ),
        citation="H0: Riess et al. 2022, ApJL 934, L7; Ω_m: Brout et al. 2022, ApJ 938, 110",
        errors={"hubble_constant": 1.04, "matter": 0.018},
        assumptions="flat; two publications combined here; massless neutrinos",
    ),
    ParameterSet(
        name="round numbers",
        history=ExpansionHistory(
            hubble_constant=70.0, matter=0.3, radiation=False, neutrino_masses=(0.0, 0.0, 0.0)
        ),
        citation="common practice, no source",
        errors={},
        assumptions="flat; no photons or neutrinos in the budget",
    ),
    ParameterSet(
        name="evolving dark energy 2025",
        history=ExpansionHistory(hubble_constant=67.51, matter=0.3114, dark_energy=(-0.838, -0.62)),
        citation="DESI Collaboration 2025, arXiv:2503.14738 (DESI DR2 + CMB + Pantheon+)",
        errors={
            "hubble_constant": 0.59,
            "matter": 0.0057,
            "w0": 0.055,
            "wa": (0.22, 0.19),
        },
        assumptions="flat; one neutrino of 0.06 eV; w0 and wa seen second-hand; H0, Ω_m and their "
        "errors from memory",
    ),
)

_BY_NAME = {folded(one.name): one for one in _SETS}


def parameter_sets() -> tuple[ParameterSet, ...]:
    """Return all published parameter sets, the default first."""
    return _SETS


def parameter_set(name: str) -> ParameterSet:
    """Return the published parameter set of this name; case and hyphens do not matter.

    Raises:
        ArgumentError: there is none; the message names the nearest and lists all.
    """
    found = _BY_NAME.get(folded(name)) if isinstance(name, str) else None
    if found is None:
        near = difflib.get_close_matches(folded(str(name)), _BY_NAME, n=1)
        hint = f" Did you mean {near[0]!r}?" if near else ""
        raise ArgumentError(
            f"{name!r} is no parameter set known here.{hint} Known are: {', '.join(_BY_NAME)}"
        )
    return found


def history_of(history: ExpansionHistory | str | None) -> ExpansionHistory:
    """Return the history itself, that of a named set, or the default's for None.

    Raises:
        ArgumentError: the name is unknown, or `history` is something else.
    """
    if isinstance(history, ExpansionHistory):
        return history
    if history is None:
        return _BY_NAME[DEFAULT].history
    if not isinstance(history, str):
        raise ArgumentError(
            f"history={history!r} is neither an ExpansionHistory nor the name of a parameter set"
        )
    return parameter_set(history).history


def set_with(history: ExpansionHistory) -> ParameterSet | None:
    """Return the published parameter set with this history, or None."""
    return next((one for one in _SETS if one.history == history), None)


def label_of(history: ExpansionHistory) -> str:
    """Return the name of the parameter set with this history, or "own parameters"."""
    found = set_with(history)
    return "own parameters" if found is None else found.name
