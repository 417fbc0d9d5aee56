"""Numbers that carry a standard deviation of their own, as those of the `uncertainties` package.

They are known by what they offer, so that nothing has to be installed or imported; arithmetic on
them keeps track of what they have in common.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from epochconv.hermite import FloatArray
from epochconv.reading_quantities import is_quantity, magnitude_of
from epochconv.units import Unit


def uncertain_numbers(value: Any, unit: Unit, name: str) -> tuple[Any, tuple[int, ...], Any] | None:
    """Return a caller's uncertain numbers in `unit`.

    Args:
        value: one such number, a list or an array of them (plain ones between them count as
            exact), or a pint quantity or measurement that holds them.
        name: what the value is, for errors.
    Returns:
        A flat array of objects, the shape of `value`, and a plain quantity of the registry that
        `value` belongs to (None for bare numbers). None where `value` holds no such number.
    Raises:
        ArgumentError: a quantity has the wrong dimension.
    """
    held = value.magnitude if is_quantity(value) else value
    if not isinstance(held, np.ndarray):
        if not (_is_uncertain(held) or isinstance(held, list | tuple)):
            return None
        try:
            held = np.asarray(held)
        except ValueError:  # rows of unequal length
            return None
    if held.dtype.kind != "O" or not any(map(_is_uncertain, held.flat)):
        return None
    one = None
    if is_quantity(value):
        one = 1.0 * value.units  # a measurement is of a class that holds nothing plain
        held = np.asarray(magnitude_of(type(one)(held, value.units), unit, name))
    return np.ravel(held), held.shape, one


def best_values(numbers: Any) -> FloatArray:
    """Return the nominal values of a flat array of uncertain (and plain) numbers."""
    return np.array([float(getattr(one, "nominal_value", one)) for one in numbers])


def deviations(numbers: Any) -> FloatArray:
    """Return their standard deviations; that of a plain number is 0."""
    return np.array([float(getattr(one, "std_dev", 0.0)) for one in numbers])


def _is_uncertain(value: object) -> bool:
    return hasattr(value, "nominal_value") and hasattr(value, "std_dev")
