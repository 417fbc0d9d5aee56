"""Derivative of every measure with respect to x = ln(1+z): the condition of the inverse maps.

By hand from the definitions (dt = -dx/H, dD_C = c dz/H); float64, since only bounds use them.
"""

from __future__ import annotations

import math
from collections.abc import Mapping

from tests.reference.quadrature import SPEED_OF_LIGHT_M_PER_S, Universe

SPEED_OF_LIGHT_KM_PER_S = float(SPEED_OF_LIGHT_M_PER_S) / 1000
# Julian gigayears in Mpc s/km: 648000/pi au in 1e6 parsecs, over the seconds of 1e9 years.
GYR_KM_PER_S_PER_MPC = 648000 / math.pi * 149597870700 * 1e3 / 31557600e9


def slopes(universe: Universe, redshift: float, known: Mapping[str, float]) -> dict[str, float]:
    """d(measure)/d ln(1+z) at one redshift, keyed by the measure's name.

    Args:
        universe: the history's parameters.
        redshift: where; a bare number.
        known: the measures there, in Gyr, Mpc and km/s/Mpc: "Hubble rate", "hubble slope"
            (d ln H/dx), "comoving distance", "transverse comoving distance".
    """
    stretch = 1 + redshift
    rate, transverse = known["Hubble rate"], known["transverse comoving distance"]
    path_slope = SPEED_OF_LIGHT_KM_PER_S * stretch / rate
    root = math.sqrt(abs(universe.curvature))
    angle = root * known["comoving distance"] * universe.hubble_constant / SPEED_OF_LIGHT_KM_PER_S
    bend = math.cosh(angle) if universe.curvature > 0 else math.cos(angle)
    transverse_slope = bend * path_slope
    return {
        "redshift": stretch,
        "scale factor": -1 / stretch,
        "lookback time": GYR_KM_PER_S_PER_MPC / rate,
        "age": -GYR_KM_PER_S_PER_MPC / rate,
        "comoving distance": path_slope,
        "CMB temperature": universe.temperature_today * stretch,
        "transverse comoving distance": transverse_slope,
        "luminosity distance": stretch * (transverse + transverse_slope),
        "angular diameter distance": (transverse_slope - transverse) / stretch,
        "distance modulus": 5 / math.log(10) * (1 + transverse_slope / transverse),
        "Hubble rate": rate * known["hubble slope"],
    }
