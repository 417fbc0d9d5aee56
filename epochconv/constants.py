"""Physical constants: exact definitions first, measured values after, each with its source.

Exact: SI Brochure, 9th edition (2019); IAU 2012 Resolution B2 (astronomical unit); IAU 2015
Resolution B2 (parsec as 648000/π au); the Julian year of 365.25 days (IAU Style Manual, 1989).
Measured: CODATA 2022 (Newtonian constant, 6.67430(15)e-11, unchanged since CODATA 2018).
"""

from __future__ import annotations

import math

SPEED_OF_LIGHT_M_PER_S = 299_792_458.0
SPEED_OF_LIGHT_KM_PER_S = 299_792.458
PLANCK_J_S = 6.62607015e-34
BOLTZMANN_J_PER_K = 1.380649e-23
ELECTRONVOLT_J = 1.602176634e-19
ASTRONOMICAL_UNIT_M = 149_597_870_700.0
PARSEC_M = 648_000.0 / math.pi * ASTRONOMICAL_UNIT_M
JULIAN_YEAR_S = 365.25 * 86_400.0
LIGHT_YEAR_M = SPEED_OF_LIGHT_M_PER_S * JULIAN_YEAR_S

NEWTON_M3_PER_KG_S2 = 6.67430e-11

STEFAN_BOLTZMANN_W_PER_M2_K4 = (
    2.0 * math.pi**5 * BOLTZMANN_J_PER_K**4 / (15.0 * PLANCK_J_S**3 * SPEED_OF_LIGHT_M_PER_S**2)
)

MEGAPARSEC_KM = PARSEC_M * 1e3
GIGAYEAR_S = JULIAN_YEAR_S * 1e9

# (1 km/s/Mpc)^-1 in Gyr: 977.7922216807891
HUBBLE_TIME_GYR_KM_PER_S_MPC = MEGAPARSEC_KM / GIGAYEAR_S
