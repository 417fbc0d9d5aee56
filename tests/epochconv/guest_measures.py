"""Measures of a stranger, made as a plugin would make them."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from epochconv import measures
from epochconv.hermite import FloatArray
from epochconv.history import ExpansionHistory
from epochconv.measure import Measure
from epochconv.moment import Moment


def stretch_of(moment: Moment, history: ExpansionHistory) -> FloatArray:
    """1 + z."""
    return 1.0 + moment.redshift


def moment_of_stretch(values: FloatArray, history: ExpansionHistory) -> Moment:
    """z from 1 + z."""
    return Moment(redshift=values - 1.0)


# One that knows its own inverse and range.
STRETCH = Measure(
    name="wave stretch",
    symbol="s_w",
    unit="",
    meaning="Wavelength received over wavelength sent.",
    source="made up for the tests",
    value_at=stretch_of,
    moment_of=moment_of_stretch,
    range_of=lambda history: (1.0, 1e10 + 1.0),
    aliases=("stretch factor",),
    below="is shorter than what was sent",
    above="is too long",
)


def swing_of(moment: Moment, history: ExpansionHistory) -> FloatArray:
    """A wave in x."""
    return np.sin(moment.x)


def swing_slope(x: FloatArray, history: ExpansionHistory) -> FloatArray:
    """Its derivative by x."""
    return np.cos(x)


# One whose inverse is searched, and that turns over seven times before z = 1e10.
SWING = Measure(
    name="swing",
    symbol="w",
    unit="",
    meaning="A wave in ln(1 + z), to turn over often.",
    source="made up for the tests",
    value_at=swing_of,
    slope_at=swing_slope,
)

# One that is another on a different scale.
LOG_DISTANCE = Measure(
    name="log distance",
    symbol="l_D",
    unit="",
    meaning="Decimal logarithm of the luminosity distance in Mpc.",
    source="made up for the tests",
    value_at=lambda moment, history: np.log10(
        measures.LUMINOSITY_DISTANCE.value_at(moment, history)
    ),
    rescaled_from=(
        measures.LUMINOSITY_DISTANCE,
        np.log10,
        lambda values: np.asarray(10.0**values),
    ),
    missing="does not exist at no distance",
)

# One that returns the very array that it is given.
PLAIN = replace(
    STRETCH,
    name="plain stretch",
    symbol="s_p",
    aliases=(),
    value_at=lambda moment, history: moment.redshift,
    moment_of=lambda values, history: Moment(redshift=values),
    range_of=lambda history: (0.0, 1e10),
)

GUESTS = (STRETCH, SWING, LOG_DISTANCE, PLAIN)

BROKEN = {
    "unknown unit": replace(STRETCH, unit="furlong"),
    "no way back": replace(STRETCH, moment_of=None),
    "no range": replace(STRETCH, range_of=None),
    "name taken": replace(STRETCH, name="Age"),
    "alias taken": replace(STRETCH, aliases=("free", "cosmic-age")),
    "symbol taken": replace(STRETCH, symbol="D_C"),
    "symbol is a name": replace(STRETCH, symbol="Lookback Time"),
    "name is a symbol": replace(STRETCH, name="z"),
}
