"""What a fill of the shared list must write, worked out without the code under test.

Values come from multiple-precision quadrature of the default parameter set (Planck 2018 VI, table
2, TT,TE,EE+lowE+lensing). The one thing that it lacks, the redshift at which a time or a distance
is reached, is taken from `epochconv.convert`, and checked by going back.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass

from mpmath import mp, mpf

import epochconv
from tests.reference.quadrature import (
    ASTRONOMICAL_UNIT_M,
    JULIAN_YEAR_S,
    SPEED_OF_LIGHT_M_PER_S,
    Answers,
    Quadrature,
    Universe,
)
from tests.samples.many_hands.readings import Reading

PLANCK = Universe(hubble_constant=67.36, matter=0.3153)
# Closer to today than any digit of a cell tells.
TODAY = 1e-25
_GLY_PER_MPC = (
    (mp.mpf("1e6") * 648000 / mp.pi * mpf(ASTRONOMICAL_UNIT_M))
    / (mpf(SPEED_OF_LIGHT_M_PER_S) * mpf(JULIAN_YEAR_S))
    / mpf("1e9")
)
_FLIPPED = {"<": ">", ">": "<", "≤": "≥", "≥": "≤", "≲": "≳", "≳": "≲"}

OF_EPOCH: Mapping[str, Callable[[float, Answers], mpf]] = {
    "z": lambda z, _: mpf(z),
    "scale factor": lambda z, _: 1 / (1 + mpf(z)),
    "lookback / Gyr": lambda _, a: a.lookback_time,
    "lookback / Myr": lambda _, a: a.lookback_time * 1000,
    "age / Gyr": lambda _, a: a.age,
    "age / Myr": lambda _, a: a.age * 1000,
    "D_C / Mpc": lambda _, a: a.comoving_distance,
    "D_C / Mpc/h": lambda _, a: a.comoving_distance * mpf("0.6736"),
    "D_L / Mpc": lambda _, a: a.luminosity_distance,
    "D_L / Gly": lambda _, a: a.luminosity_distance * _GLY_PER_MPC,
    "D_A / Mpc": lambda _, a: a.angular_diameter_distance,
    "modulus": lambda _, a: a.distance_modulus,
    "H": lambda _, a: a.hubble_rate,
    "T_CMB / K": lambda z, _: mpf("2.7255") * (1 + mpf(z)),
}
_FALLING = ("scale factor", "age / Gyr", "age / Myr")
_SOURCES = {
    "z": None,
    "lookback / Gyr": ("lookback time", "Gyr"),
    "D_C / Mpc": ("comoving distance", "Mpc"),
}


@dataclass(frozen=True)
class Converted:
    """One measure of one row: value, ends of its interval, sign and digits of a limit.

    An end is infinite where the interval reaches beyond what is tabulated.
    """

    value: float
    low: float | None
    high: float | None
    sign: str
    digits: int

    @property
    def text(self) -> str:
        """A limit as the log writes it: the sign, and as many digits as its source, 3 to 5.

        What stands before the point is not rounded.
        """
        decimals = self.digits - 1 - math.floor(math.log10(self.value))
        shown = f"{self.value:.{max(decimals, 0)}f}"
        return self.sign + (shown.rstrip("0").rstrip(".") if "." in shown else shown)

    @property
    def upper(self) -> float | None:
        """The size of the upper error."""
        return None if self.high is None else self.high - self.value

    @property
    def lower(self) -> float | None:
        """The size of the lower error."""
        return None if self.low is None else self.value - self.low


class Expected:
    """The measures of all rows of a sheet."""

    def __init__(self, source: str, readings: Sequence[Reading]) -> None:
        """Work out the rows.

        Args:
            source: what the readings are values of, one of `OF_EPOCH`.
            readings: of the rows, top down.
        """
        self._source = source
        self._readings = readings
        self._epochs = [self._redshifts(one) for one in readings]
        wanted = {z for epochs in self._epochs for z in epochs if z is not None}
        with mp.workdps(20):
            self._answers = Quadrature(PLANCK).answers(wanted)
            self._check_source()

    def of(self, measure: str) -> list[Converted | None]:
        """Return a measure of every row, None where a row has none."""
        return [
            self._converted(measure, reading, epochs)
            for reading, epochs in zip(self._readings, self._epochs, strict=True)
        ]

    def _converted(
        self, measure: str, reading: Reading, epochs: Sequence[float | None]
    ) -> Converted | None:
        if epochs[0] is None:
            return None
        value, *ends = (math.inf if z is None else float(self._at(measure, z)) for z in epochs)
        sign = reading.limit
        if sign and (measure in _FALLING) != (self._source in _FALLING):
            sign = _FLIPPED[sign]
        digits = len(f"{reading.value:.12g}".replace(".", "").strip("0"))
        low, high = sorted(ends) if reading.lower is not None else (None, None)
        return Converted(value, low, high, sign, min(max(digits, 3), 5))

    def _at(self, measure: str, z: float) -> mpf:
        return OF_EPOCH[measure](z, self._answers[z])

    def _redshifts(self, reading: Reading) -> tuple[float | None, float | None, float | None]:
        """Return the redshifts of the value and of the ends of its interval, cut where they end."""
        if reading.value is None or reading.reason or reading.passed_over:
            return None, None, None
        ends: Iterable[float | None] = (None, None)
        if reading.lower is not None and reading.upper is not None:
            ends = (reading.value - reading.lower, reading.value + reading.upper)
        return tuple(self._redshift(one) for one in (reading.value, *ends))  # type: ignore[return-value]

    def _redshift(self, value: float | None) -> float | None:
        measure = _SOURCES[self._source]
        if value is None:
            return None
        if measure is None:
            return max(value, TODAY)
        found = epochconv.convert(value, measure[0], "redshift", outside="nan").magnitude
        return None if math.isnan(found) else float(found)

    def _check_source(self) -> None:
        """Go back from the redshifts to the values that were typed."""
        for reading, (z, low, high) in zip(self._readings, self._epochs, strict=True):
            sides = ((z, 0.0), (low, -(reading.lower or 0.0)), (high, reading.upper or 0.0))
            for epoch, shift in sides:
                if epoch is not None and epoch > TODAY:
                    typed = (reading.value or 0.0) + shift
                    assert mp.almosteq(self._at(self._source, epoch), typed, rel_eps=1e-11)
