"""What the tests of closed forms share: the redshifts, the rulers, and a formula over them."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from mpmath import mpf

import epochconv
from tests.reference.quadrature import SPEED_OF_LIGHT_M_PER_S, gigayear_s, megaparsec_m

REDSHIFTS = np.array([1e-8, 1e-4, 0.1, 0.5, 1.0, 1.25, 2.0, 3.0, 10.0, 1100.0, 1e5, 1e9])


def ruler(hubble_constant: float) -> tuple[mpf, mpf]:
    """1/H0 in Gyr and c/H0 in Mpc."""
    per_second = mpf(hubble_constant) * 1000 / megaparsec_m()
    return 1 / per_second / gigayear_s(), mpf(SPEED_OF_LIGHT_M_PER_S) / 1000 / hubble_constant


def each(formula: Callable[[mpf], mpf], points: np.ndarray = REDSHIFTS) -> np.ndarray:
    """The formula at each point, in the working digits that hold, rounded to doubles."""
    return np.array([float(formula(mpf(float(point)))) for point in points])


def dust(matter: float, **other: object) -> epochconv.ExpansionHistory:
    """A history of H0 70 without radiation."""
    return epochconv.ExpansionHistory(hubble_constant=70, matter=matter, radiation=False, **other)


def measured(history: epochconv.ExpansionHistory, measure: str) -> np.ndarray:
    """What the package under test says of this measure at the redshifts."""
    return epochconv.convert(REDSHIFTS, "redshift", measure, history=history).magnitude
