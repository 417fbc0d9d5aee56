"""Random inputs that several tests draw from."""

from __future__ import annotations

import math

import numpy as np
from hypothesis import strategies as st
from hypothesis.extra import numpy as arrays
from numpy.typing import NDArray

from tests.reference.quadrature import Universe

LOWEST_REDSHIFT, HIGHEST_REDSHIFT = 1e-8, 1e9

# Under every history drawn below one value of these stands for one epoch.
STEADY_MEASURES = (
    "redshift",
    "scale factor",
    "lookback time",
    "age",
    "comoving distance",
    "CMB temperature",
    "luminosity distance",
    "distance modulus",
)
ALL_MEASURES = (
    *STEADY_MEASURES,
    "transverse comoving distance",
    "angular diameter distance",
    "Hubble rate",
)
FALLING_MEASURES = ("scale factor", "age")


def redshifts(
    low: float = LOWEST_REDSHIFT, high: float = HIGHEST_REDSHIFT
) -> st.SearchStrategy[float]:
    """Redshifts, uniform in the logarithm."""
    exponents = st.floats(math.log10(low), math.log10(high))
    return exponents.map(lambda exponent: min(max(10.0**exponent, low), high))


def redshift_arrays(min_dims: int = 0, max_dims: int = 3) -> st.SearchStrategy[NDArray[np.float64]]:
    """Arrays of redshifts of any shape, empty ones included."""
    shapes = arrays.array_shapes(min_dims=min_dims, max_dims=max_dims, min_side=0, max_side=5)
    return arrays.arrays(np.float64, shapes, elements=redshifts())


def universes(massive: bool = True) -> st.SearchStrategy[Universe]:
    """Histories that anybody might try: near the measured one, some way off in all directions."""
    masses = st.one_of(st.just(0.0), st.floats(1e-4, 0.4)) if massive else st.just(0.0)
    return st.builds(
        Universe,
        hubble_constant=st.floats(40, 100),
        matter=st.floats(0.15, 1.2),
        curvature=st.floats(-0.12, 0.3),
        dark_energy=st.one_of(
            st.just((-1.0, 0.0)), st.tuples(st.floats(-1.4, -0.6), st.floats(-1.0, 0.4))
        ),
        temperature_today=st.floats(2.0, 4.0),
        radiation=st.booleans(),
        neutrino_masses=st.tuples(masses, masses, masses),
        neutrino_number=st.floats(2.5, 4.5),
    )
