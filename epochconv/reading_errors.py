"""Values with their errors, as callers bring them, as float arrays in a measure's own unit."""

from __future__ import annotations

from typing import Any, NamedTuple

import numpy as np

from epochconv.conversion import plain_values
from epochconv.errors import ArgumentError
from epochconv.hermite import FloatArray
from epochconv.intervals import Spread
from epochconv.measure import Measure
from epochconv.uncertain_numbers import best_values, deviations, uncertain_numbers
from epochconv.units import unit_named


class Given(NamedTuple):
    """What a caller gave.

    Attributes:
        spread: values and errors, of shape (n,).
        shape: of the caller's value; () for one number.
        numbers: the flat array of numbers that carry their own deviation, in the measure's unit,
            where the caller gave such; else None.
        asker: a plain value of the registry that results belong to.
    """

    spread: Spread
    shape: tuple[int, ...]
    numbers: Any
    asker: Any


def read_given(value: Any, error: Any, measure: Measure) -> Given:
    """Return a caller's values and errors.

    Args:
        value: as in a conversion, or numbers of the `uncertainties` package.
        error: None for the latter; else one error or a pair (lower, upper) as a tuple, each a
            number, a text, a quantity, or an array that fits the shape of `value`. NaN, and what a
            mask hides, is an unknown error.
    Raises:
        ArgumentError: it is unreadable, has the wrong dimension or shape, is below zero, is missing
            or is given twice.
    """
    numbers = uncertain_numbers(value, unit_named(measure.unit), measure.name)
    if numbers is not None:
        if error is not None:
            raise ArgumentError(
                f"{measure.name}: the values carry errors of their own, and error={error!r} was "
                "given besides; leave one of them out"
            )
        flat, shape, asker = numbers
        deviation = deviations(flat)
        return Given(Spread(best_values(flat), deviation, deviation), shape, flat, asker)
    if error is None:
        raise ArgumentError(
            f"{measure.name}: no error was given; give error=, or use convert() for values without"
        )
    values, shape = plain_values(value, measure)
    if not isinstance(error, tuple):
        both = _sizes(error, measure, "error", shape)
        return Given(Spread(values, both, both), shape, None, value)
    if len(error) != 2:
        raise ArgumentError(
            f"{measure.name}: an error of {len(error)} parts; give one, or a pair (lower, upper); "
            "an array of errors is no tuple"
        )
    lower, upper = (
        _sizes(one, measure, f"{word} error", shape)
        for word, one in zip(("lower", "upper"), error, strict=True)
    )
    return Given(Spread(values, lower, upper), shape, None, value)


def _sizes(error: Any, measure: Measure, word: str, shape: tuple[int, ...]) -> FloatArray:
    """Return errors in the measure's unit, spread over the shape of the values, flat."""
    name = f"{word} of {measure.name}"
    sizes, own_shape = plain_values(error, measure, name)
    try:
        spread = np.broadcast_to(sizes.reshape(own_shape), shape)
    except ValueError:
        raise ArgumentError(
            f"the {name} has the shape {own_shape} and the values have {shape}; give one error "
            "for all values or one for each"
        ) from None
    if np.any(sizes < 0.0):
        raise ArgumentError(
            f"the {name} {sizes[np.argmax(sizes < 0.0)]:g} is below zero; give sizes without sign"
        )
    return np.ravel(spread)
