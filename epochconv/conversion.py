"""The public call: quantities in, quantities out."""

from __future__ import annotations

from decimal import Decimal
from fractions import Fraction
from typing import Any, Literal

import numpy as np

from epochconv.errors import ArgumentError
from epochconv.hermite import FloatArray
from epochconv.history import ExpansionHistory
from epochconv.making_quantities import quantity_of
from epochconv.measure import Measure
from epochconv.number_text import number_and_unit
from epochconv.published import history_of
from epochconv.reading_quantities import is_quantity, magnitude_of
from epochconv.registry import measure_named
from epochconv.through_x import convert_values
from epochconv.units import factor, unit_named


def convert(
    value: Any,
    source: str,
    target: str,
    *,
    unit: Any = None,
    history: ExpansionHistory | str | None = None,
    side: Literal["nearer", "farther"] | None = None,
    outside: Literal["raise", "nan"] = "raise",
) -> Any:
    """Convert one measure of an epoch to another.

    Args:
        value: what to convert, of any shape: numbers, arrays or lists in the source measure's
            documented unit (Gyr, Mpc, K, mag, km/s/Mpc, or none); a pint quantity of any registry;
            or a text such as "10.9 Gyr". NaN in gives NaN out, and so does what a mask hides.
        source, target: names, aliases or symbols of measures: "redshift", "scale factor",
            "lookback time", "age", "comoving distance" (along the line of sight),
            "CMB temperature", "transverse comoving distance", "luminosity distance",
            "angular diameter distance", "distance modulus", "Hubble rate".
        unit: of the result: a text, in the application registry; or a unit of a registry of your
            own, in which the result then lives. By default the target's documented unit, in the
            registry of `value` if that is a quantity, else in the application registry.
        history: an ExpansionHistory or the name of a parameter set; by default "planck 2018".
        side: "nearer" or "farther" where the source turns over, so that one value stands for two
            epochs (angular diameter distance); without effect elsewhere.
        outside: "raise", or "nan" to get NaN for values outside the source's range.

    Returns:
        A pint quantity of the shape of `value`. A distance modulus is a pure number in pint, which
        has no magnitudes.

    Raises:
        OutOfRangeError: a value stands for no epoch under this history (a negative redshift, a
            time older than the universe, a temperature below today's, a distance beyond the
            particle horizon), or the target does not exist there (a modulus at redshift 0).
        TwoAnswersError: a value stands for two epochs and no side is chosen; names both.
        ArgumentError: an unknown measure, set or unit, a wrong dimension, no number.

    A lookback time that double precision cannot tell from the age of the universe gives the highest
    redshift that the tables hold, 1e10. Above z of about 1e8 electron-positron annihilation makes
    the model itself untrue.

    Accuracy: 1e-12 relative, forward, for redshifts of 1e-8 to 1e9, and the same backward where the
    map itself does not magnify errors.
    """
    source_measure, target_measure = measure_named(source), measure_named(target)
    values, shape = plain_values(value, source_measure)
    result = convert_values(
        values,
        source_measure,
        target_measure,
        history_of(history),
        side=side,
        outside=outside,
        shape=shape,
    )
    magnitude: Any = result.reshape(shape) if shape else float(result[0])
    return quantity_of(magnitude, unit_named(target_measure.unit), unit, value)


def plain_values(
    value: Any, measure: Measure, name: str | None = None
) -> tuple[FloatArray, tuple[int, ...]]:
    """Return a caller's value as a flat float array in the measure's unit, and its shape.

    The array may share memory with the caller's and is not to be changed. `name` says in errors
    what the value is; by default the measure.

    Raises:
        ArgumentError: it is no number, has the wrong dimension or an unknown unit.
    """
    unit, name = unit_named(measure.unit), name or measure.name
    if isinstance(value, str):
        number, given = number_and_unit(value)
        if given is not None:
            if given.dimension != unit.dimension:
                raise ArgumentError(
                    f"{value!r} is a {given.dimension}, but {name} is a {unit.dimension}"
                )
            number *= factor(given, unit)
        elif unit.dimension != "number":
            raise ArgumentError(
                f"{value!r} has no unit; a text for {name} needs one, such as "
                f"'{value.strip()} {unit.symbol}'"
            )
        value = number
    elif is_quantity(value):
        value = magnitude_of(value, unit, name)
    if isinstance(value, float):
        return np.array([value]), ()
    if isinstance(value, Decimal | Fraction):
        value = float(value)
    try:
        array = np.asanyarray(value)
    except (TypeError, ValueError):
        raise ArgumentError(
            f"{name}: {_shortened(value)} is no array of numbers; give numbers, or one "
            "quantity that holds an array of them"
        ) from None
    if array.dtype.kind not in "iuf":
        raise ArgumentError(f"{name}: {_shortened(value)} is not made of numbers")
    array = array.astype(np.float64, copy=False)
    if isinstance(array, np.ma.MaskedArray):
        array = array.filled(np.nan)
    return np.ravel(np.asarray(array)), array.shape


def _shortened(value: object) -> str:
    text = repr(value)
    return text if len(text) <= 60 else text[:57] + "..."
