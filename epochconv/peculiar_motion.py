"""What the motion of an object within its surroundings does to a redshift that was observed.

(1 + z_observed) = (1 + z)(1 + z_motion) (Davis & Scrimgeour 2014, MNRAS 442, 1117, from memory),
so that a speed v along the line of sight, known only by its size, blurs z by (1 + z) v/c.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from epochconv.constants import SPEED_OF_LIGHT_KM_PER_S
from epochconv.errors import ArgumentError
from epochconv.hermite import FloatArray
from epochconv.intervals import Spread
from epochconv.measure import Measure
from epochconv.measures import REDSHIFT, SCALE_FACTOR
from epochconv.reading_quantities import is_quantity, magnitude_of
from epochconv.units import Unit

# What is read off a spectrum. A distance, a time or a temperature that was measured in another way
# knows nothing of the motion.
MOVED = (REDSHIFT, SCALE_FACTOR)

_SPEED = Unit("km/s", "speed", 1e3, "kilometer / second")


def widened(spread: Spread, source: Measure, speed_km_per_s: float) -> Spread:
    """Return redshifts or scale factors with the error of their peculiar motion added.

    It adds in quadrature on each side; where no error is known, none is known after.

    Raises:
        ArgumentError: the source is another measure.
    """
    if source not in MOVED:
        raise ArgumentError(
            f"a peculiar velocity blurs a redshift that was observed, and no {source.name}; "
            "leave it out, or convert from redshift"
        )
    stretch = 1.0 + spread.values if source is REDSHIFT else spread.values
    blur: FloatArray = stretch * (speed_km_per_s / SPEED_OF_LIGHT_KM_PER_S)
    return spread._replace(lower=np.hypot(spread.lower, blur), upper=np.hypot(spread.upper, blur))


def speed_of(peculiar_velocity: Any) -> float:
    """Return a caller's peculiar velocity, a number in km/s or a quantity, in km/s.

    Raises:
        ArgumentError: it is no finite speed of 0 or above, well below that of light.
    """
    value = peculiar_velocity
    if is_quantity(value):
        value = magnitude_of(value, _SPEED, "the peculiar velocity")
    try:
        speed = float("nan") if isinstance(value, str | bool) else float(value)
    except (TypeError, ValueError):
        speed = float("nan")
    if not 0.0 <= speed <= 0.1 * SPEED_OF_LIGHT_KM_PER_S:
        raise ArgumentError(
            f"peculiar_velocity={peculiar_velocity!r} is no speed from 0 to 30,000 km/s; "
            "give the size that motions usually have, such as 300"
        )
    return speed
