"""The built-in measures. They reach the registry as a guest's would.

Distances and times follow Hogg 1999 (arXiv:astro-ph/9905116), with the notation of Peebles 1993.
"""

from __future__ import annotations

import math

import numpy as np

from epochconv.hermite import FloatArray
from epochconv.history import ExpansionHistory
from epochconv.measure import Measure
from epochconv.moment import Moment
from epochconv.printing import number_text
from epochconv.tables import HIGHEST_REDSHIFT

_BEFORE_TABLE = f"is earlier than redshift {number_text(HIGHEST_REDSHIFT)}, where the tables end"
_HOGG = "Hogg 1999, arXiv:astro-ph/9905116"
_NO_EPOCH = "is a neighbour's peculiar motion towards us and no epoch"


def _stretch(x: FloatArray, history: ExpansionHistory) -> FloatArray:
    return np.exp(x)


def _scale_factor(moment: Moment, history: ExpansionHistory) -> FloatArray:
    return 1.0 / (1.0 + moment.redshift)


def _scale_factor_slope(x: FloatArray, history: ExpansionHistory) -> FloatArray:
    return -np.exp(-x)


def _temperature(moment: Moment, history: ExpansionHistory) -> FloatArray:
    return history.temperature_today * (1.0 + moment.redshift)


def _temperature_slope(x: FloatArray, history: ExpansionHistory) -> FloatArray:
    return history.temperature_today * np.exp(x)


def _lookback_time(moment: Moment, history: ExpansionHistory) -> FloatArray:
    result = np.empty_like(moment.x)
    history.tables.times(moment.x, result, None)
    result *= history.hubble_time_gyr
    return result


def _lookback_slope(x: FloatArray, history: ExpansionHistory) -> FloatArray:
    return history.hubble_time_gyr / history.expansion.rate(x)


def _age_slope(x: FloatArray, history: ExpansionHistory) -> FloatArray:
    return -_lookback_slope(x, history)


def _age(moment: Moment, history: ExpansionHistory) -> FloatArray:
    result = np.empty_like(moment.x)
    history.tables.times(moment.x, None, result)
    result *= history.hubble_time_gyr
    return result


def _comoving_distance(moment: Moment, history: ExpansionHistory) -> FloatArray:
    result = history.tables.distance(moment.x)
    result *= history.hubble_length_mpc
    return result


def _comoving_slope(x: FloatArray, history: ExpansionHistory) -> FloatArray:
    return history.hubble_length_mpc * np.exp(x) / history.expansion.rate(x)


def _transverse(x: FloatArray, history: ExpansionHistory) -> tuple[FloatArray, FloatArray]:
    """Return the transverse comoving distance in Mpc and its derivative by x."""
    length, curvature = history.hubble_length_mpc, history.curvature
    distance = history.tables.distance(x)
    slope = np.exp(x) / history.expansion.rate(x)
    if curvature != 0.0:
        root = math.sqrt(abs(curvature))
        angle = root * distance
        if curvature > 0.0:
            distance, slope = np.sinh(angle) / root, slope * np.cosh(angle)
        else:
            # Beyond the antipode the sine is negative, but the distance is a length all the same.
            sine = np.sin(angle)
            distance = np.abs(sine) / root
            slope = slope * np.cos(angle) * np.copysign(1.0, sine)
    return length * distance, length * slope


def _transverse_distance(moment: Moment, history: ExpansionHistory) -> FloatArray:
    distance = _comoving_distance(moment, history)
    if history.curvature != 0.0:
        length = history.hubble_length_mpc / math.sqrt(abs(history.curvature))
        bend = np.sinh if history.curvature > 0.0 else np.sin
        distance /= length
        bend(distance, out=distance)
        np.abs(distance, out=distance)
        distance *= length
    return distance


def _transverse_slope(x: FloatArray, history: ExpansionHistory) -> FloatArray:
    return _transverse(x, history)[1]


def _luminosity_distance(moment: Moment, history: ExpansionHistory) -> FloatArray:
    result = _transverse_distance(moment, history)
    result *= 1.0 + moment.redshift
    return result


def _luminosity_slope(x: FloatArray, history: ExpansionHistory) -> FloatArray:
    distance, slope = _transverse(x, history)
    return np.exp(x) * (distance + slope)


def _angular_distance(moment: Moment, history: ExpansionHistory) -> FloatArray:
    result = _transverse_distance(moment, history)
    result /= 1.0 + moment.redshift
    return result


def _angular_slope(x: FloatArray, history: ExpansionHistory) -> FloatArray:
    distance, slope = _transverse(x, history)
    return np.exp(-x) * (slope - distance)


def _modulus_of_distance(distance_mpc: FloatArray) -> FloatArray:
    return 5.0 * np.log10(distance_mpc) + 25.0


def _distance_of_modulus(modulus: FloatArray) -> FloatArray:
    return np.asarray(10.0 ** (0.2 * (modulus - 25.0)))


def _modulus(moment: Moment, history: ExpansionHistory) -> FloatArray:
    with np.errstate(divide="ignore", invalid="ignore"):
        return _modulus_of_distance(_luminosity_distance(moment, history))


def _modulus_slope(x: FloatArray, history: ExpansionHistory) -> FloatArray:
    distance, slope = _transverse(x, history)
    with np.errstate(divide="ignore"):
        return 5.0 / math.log(10.0) * (1.0 + slope / distance)


def _hubble_rate(moment: Moment, history: ExpansionHistory) -> FloatArray:
    return history.hubble_constant * history.expansion.rate(moment.x)


def _hubble_slope(x: FloatArray, history: ExpansionHistory) -> FloatArray:
    law = history.expansion
    return history.hubble_constant * law.rate(x) * law.log_rate_slope(x)


def _one(value: float) -> FloatArray:
    return np.array([value])


def _highest(history: ExpansionHistory) -> Moment:
    return Moment(redshift=_one(HIGHEST_REDSHIFT))


REDSHIFT = Measure(
    name="redshift",
    symbol="z",
    unit="",
    meaning="Stretch of light on its way to us, less one; the cosmological part alone.",
    source=_HOGG + ", section 3",
    value_at=lambda moment, history: moment.redshift,
    moment_of=lambda values, history: Moment(redshift=values),
    slope_at=_stretch,
    range_of=lambda history: (0.0, HIGHEST_REDSHIFT),
    below=_NO_EPOCH,
    above=_BEFORE_TABLE,
)

SCALE_FACTOR = Measure(
    name="scale factor",
    symbol="a",
    unit="",
    meaning="Size of the universe relative to today, 1/(1 + z).",
    source=_HOGG + ", section 3",
    value_at=_scale_factor,
    moment_of=lambda values, history: Moment(redshift=(1.0 - values) / values),
    slope_at=_scale_factor_slope,
    range_of=lambda history: (1.0 / (1.0 + HIGHEST_REDSHIFT), 1.0),
    below=_BEFORE_TABLE,
    above="lies in the future",
)

LOOKBACK_TIME = Measure(
    name="lookback time",
    symbol="t_L",
    unit="Gyr",
    meaning="Time that light has travelled to reach us today.",
    source=_HOGG + ", section 10",
    aliases=("lookback", "look-back time", "time ago"),
    value_at=_lookback_time,
    moment_of=lambda values, history: Moment(
        x=history.tables.x_of_lookback(values / history.hubble_time_gyr)
    ),
    slope_at=_lookback_slope,
    range_of=lambda history: (0.0, history.tables.age_today * history.hubble_time_gyr),
    below="lies in the future",
    above="is older than the universe",
)

AGE = Measure(
    name="age",
    symbol="t",
    unit="Gyr",
    meaning="Time since the Big Bang at which the light set out.",
    source="Peebles 1993, Principles of Physical Cosmology, section 13",
    aliases=("age of the universe", "cosmic age", "cosmic time", "time since the Big Bang"),
    value_at=_age,
    moment_of=lambda values, history: Moment(
        x=history.tables.x_of_age(values / history.hubble_time_gyr)
    ),
    slope_at=_age_slope,
    range_of=lambda history: (
        float(_age(_highest(history), history)[0]),
        history.tables.age_today * history.hubble_time_gyr,
    ),
    below=_BEFORE_TABLE,
    above="is more than the age of the universe today",
)

COMOVING_DISTANCE = Measure(
    name="comoving distance",
    symbol="D_C",
    unit="Mpc",
    meaning="Distance along the line of sight today, with the expansion frozen.",
    source=_HOGG + ", section 4",
    aliases=(
        "line-of-sight comoving distance",
        "comoving radial distance",
        "radial comoving distance",
    ),
    value_at=_comoving_distance,
    moment_of=lambda values, history: Moment(
        x=history.tables.x_of_distance(values / history.hubble_length_mpc)
    ),
    slope_at=_comoving_slope,
    range_of=lambda history: (0.0, history.tables.distance_highest * history.hubble_length_mpc),
    below="is no distance",
    above="is beyond the particle horizon",
)

CMB_TEMPERATURE = Measure(
    name="CMB temperature",
    symbol="T_CMB",
    unit="K",
    meaning="Temperature of the cosmic microwave background at the epoch, T today times 1 + z.",
    source="Peebles 1993, Principles of Physical Cosmology, section 6",
    aliases=("temperature of the CMB", "background temperature", "T CMB"),
    value_at=_temperature,
    moment_of=lambda values, history: Moment(
        redshift=(values - history.temperature_today) / history.temperature_today
    ),
    slope_at=_temperature_slope,
    range_of=lambda history: (
        history.temperature_today,
        history.temperature_today * (1.0 + HIGHEST_REDSHIFT),
    ),
    below="is colder than today's CMB",
    above=_BEFORE_TABLE,
)

TRANSVERSE_COMOVING_DISTANCE = Measure(
    name="transverse comoving distance",
    symbol="D_M",
    unit="Mpc",
    meaning="Comoving distance across the line of sight for one radian on the sky.",
    source=_HOGG + ", section 5",
    aliases=("comoving transverse distance", "proper motion distance"),
    value_at=_transverse_distance,
    slope_at=_transverse_slope,
    below="is no distance that this history has",
    above="is beyond any transverse distance that this history has",
)

LUMINOSITY_DISTANCE = Measure(
    name="luminosity distance",
    symbol="D_L",
    unit="Mpc",
    meaning="Distance that the dimming of a source of known bolometric luminosity suggests.",
    source=_HOGG + ", section 7",
    aliases=("luminosity dist",),
    value_at=_luminosity_distance,
    slope_at=_luminosity_slope,
    below="is no distance that this history has",
    above=_BEFORE_TABLE,
)

ANGULAR_DIAMETER_DISTANCE = Measure(
    name="angular diameter distance",
    symbol="D_A",
    unit="Mpc",
    meaning="Distance that the angle under which a source of known size is seen suggests.",
    source=_HOGG + ", section 6",
    aliases=("angular size distance", "angular distance"),
    value_at=_angular_distance,
    slope_at=_angular_slope,
    below="is no distance that this history has",
    above="is above the largest angular diameter distance",
)

DISTANCE_MODULUS = Measure(
    name="distance modulus",
    symbol="µ",
    unit="mag",
    meaning="Apparent less absolute bolometric magnitude, 5 log10(D_L/Mpc) + 25.",
    source=_HOGG + ", section 7",
    aliases=("mu", "modulus"),
    value_at=_modulus,
    slope_at=_modulus_slope,
    rescaled_from=(LUMINOSITY_DISTANCE, _modulus_of_distance, _distance_of_modulus),
    above=_BEFORE_TABLE,
    missing="does not exist at redshift 0",
)

HUBBLE_RATE = Measure(
    name="Hubble rate",
    symbol="H",
    unit="km/s/Mpc",
    meaning="Expansion rate at the epoch.",
    source=_HOGG + ", section 2",
    aliases=("Hubble parameter", "expansion rate", "H(z)"),
    value_at=_hubble_rate,
    slope_at=_hubble_slope,
    below="is below any expansion rate since the Big Bang under this history",
    above=_BEFORE_TABLE,
)

MEASURES = (
    REDSHIFT,
    SCALE_FACTOR,
    LOOKBACK_TIME,
    AGE,
    COMOVING_DISTANCE,
    CMB_TEMPERATURE,
    TRANSVERSE_COMOVING_DISTANCE,
    LUMINOSITY_DISTANCE,
    ANGULAR_DIAMETER_DISTANCE,
    DISTANCE_MODULUS,
    HUBBLE_RATE,
)
