"""The public calls that carry errors: an interval's image, and the linear form beside it."""

from __future__ import annotations

from typing import Any, Literal, NamedTuple

import numpy as np

from epochconv import intervals, peculiar_motion
from epochconv.errors import ArgumentError
from epochconv.history import ExpansionHistory
from epochconv.intervals import Image, Spread
from epochconv.making_quantities import quantity_of
from epochconv.measure import Measure
from epochconv.parameter_errors import parameters_text, set_with_errors, with_parameter_error
from epochconv.published import ParameterSet, history_of, label_of
from epochconv.reading_errors import read_given
from epochconv.registry import measure_named
from epochconv.slopes import tangent
from epochconv.units import unit_named
from epochconv.with_error import WithError


class LinearError(NamedTuple):
    """A value and its symmetric error to first order: two quantities of one unit and shape."""

    value: Any
    error: Any


def convert_with_error(
    value: Any,
    error: Any,
    source: str,
    target: str,
    *,
    unit: Any = None,
    history: ExpansionHistory | str | None = None,
    side: Literal["nearer", "farther"] | None = None,
    outside: Literal["raise", "nan"] = "raise",
    parameter_error: bool = False,
    peculiar_velocity: Any = None,
) -> WithError:
    """Convert one measure of an epoch to another together with its error.

    The result's interval is the image of the input's: both ends are mapped, and a point between
    them where the map turns over. It is exact, and asymmetric where the map bends. If the error is
    a 68 % one, so is the interval where the map does not turn. Nothing is drawn.

    Args:
        value: as in `convert`; or numbers of the `uncertainties` package (one, a list or array of
            them, or a quantity of them), whose standard deviations are the errors.
        error: of the value, zero or above: a number or array in the source's documented unit, a
            quantity, or a text such as "0.1 Gyr"; or a tuple (lower, upper) of two such. One error
            serves all values; an array of them has their shape. NaN is an unknown error and gives
            NaN; infinity reaches as far as the measure does. None with uncertain numbers.
        source, target, unit, history, side, outside: as in `convert`. `side` also says on which
            side the interval lies: it ends where the source turns over.
        parameter_error: whether to add the published error of the history's parameters, to first
            order and in quadrature on each side. Parameters whose correlation is not published
            count as independent.
        peculiar_velocity: size of the objects' own motion along the line of sight, in km/s or a
            quantity, to add in quadrature to the error of a redshift (or scale factor).

    Returns:
        A WithError: value, lower_error, upper_error, low, high, which ends were cut, and what was
        assumed. An end that leaves the range of the measure is cut there: z - error below 0, a
        lookback time + error above the age of the universe.

    Raises:
        OutOfRangeError, TwoAnswersError: as `convert`, by the value; two answers also where only
            an end of the interval stands for two epochs.
        ArgumentError: as `convert`; an error that is missing, negative or of another shape; a
            parameter error without published errors; a peculiar velocity of no redshift.
    """
    measures = measure_named(source), measure_named(target)
    given, chosen = read_given(value, error, measures[0]), history_of(history)
    spread, notes = given.spread, [f"under {label_of(chosen)}: {chosen.assumptions}"]
    if peculiar_velocity is not None:
        speed = peculiar_motion.speed_of(peculiar_velocity)
        spread = peculiar_motion.widened(spread, measures[0], speed)
        notes.append(f"peculiar velocity ± {speed:g} km/s counted")
    parameters = None
    if parameter_error:
        parameters = set_with_errors(chosen)
        notes.append(parameters_text(parameters))
    image = _image(
        spread, *measures, chosen, parameters, side=side, outside=outside, shape=given.shape
    )
    own = unit_named(measures[1].unit)
    errors = image.values - image.low, image.high - image.values
    central, lower, upper, low, high = (
        quantity_of(_shaped(part, given.shape), own, unit, given.asker)
        for part in (image.values, *errors, image.low, image.high)
    )
    cut_low, cut_high = (_shaped(cut, given.shape) for cut in (image.cut_low, image.cut_high))
    return WithError(central, lower, upper, low, high, cut_low, cut_high, "; ".join(notes))


def convert_with_linear_error(
    value: Any,
    error: Any,
    source: str,
    target: str,
    *,
    unit: Any = None,
    history: ExpansionHistory | str | None = None,
    side: Literal["nearer", "farther"] | None = None,
    outside: Literal["raise", "nan"] = "raise",
) -> Any:
    """Convert a measure and give its error in the linear, symmetric form.

    This is the first-order formula, |d target / d source| times the error, with the exact
    derivative at the value. It is wrong where the map bends within the error (a redshift error of
    more than a tenth of the redshift, an epoch near today), and where the map turns over it gives
    zero or infinity. `convert_with_error` has none of these faults.

    Args:
        value, source, target, unit, history, side, outside: as in `convert_with_error`.
        error: as there, but without a pair: the form is symmetric.

    Returns:
        A LinearError (value, error) of two quantities. For numbers of the `uncertainties` package
        one quantity of such numbers, which stay correlated with the input.

    Raises:
        OutOfRangeError, TwoAnswersError, ArgumentError: as `convert_with_error`; also for a pair of
            errors, and for a guest's measure without a slope.
    """
    if isinstance(error, tuple):
        raise ArgumentError(
            "a linear error is symmetric and a pair (lower, upper) was given; give one error, or "
            "use convert_with_error()"
        )
    source_measure, target_measure = measure_named(source), measure_named(target)
    given = read_given(value, error, source_measure)
    values, slope = tangent(
        given.spread.values,
        source_measure,
        target_measure,
        history_of(history),
        side=side,
        outside=outside,
        shape=given.shape,
    )
    own = unit_named(target_measure.unit)
    if given.numbers is not None:
        # Arithmetic of the numbers' own keeps what they have in common.
        moved = slope * (given.numbers - given.spread.values) + values
        return quantity_of(_shaped(moved, given.shape), own, unit, given.asker)
    with np.errstate(invalid="ignore"):
        sizes = np.where(given.spread.lower == 0.0, 0.0, np.abs(slope) * given.spread.lower)
    return LinearError(
        *(
            quantity_of(_shaped(part, given.shape), own, unit, given.asker)
            for part in (values, sizes)
        )
    )


def _image(
    spread: Spread,
    source: Measure,
    target: Measure,
    history: ExpansionHistory,
    parameters: ParameterSet | None,
    *,
    side: str | None,
    outside: str,
    shape: tuple[int, ...],
) -> Image:
    """Return the image of the intervals, with the error of `parameters` unless that is None."""
    if source is target:  # no parameter matters, nor which of two epochs it is
        return intervals.image(
            spread, source, target, history, side=side, outside=outside, shape=shape
        )
    span = intervals.span_at(spread, source, history, side=side, outside=outside, shape=shape)
    image = intervals.image_of(span, target, history, outside=outside, shape=shape)
    if parameters is None:
        return image
    return with_parameter_error(image, span.moment, source, target, parameters)


def _shaped(part: Any, shape: tuple[int, ...]) -> Any:
    """Return a flat array in the caller's shape, or its only item."""
    if shape:
        return part.reshape(shape)
    return part.item() if isinstance(part, np.ndarray) else part
