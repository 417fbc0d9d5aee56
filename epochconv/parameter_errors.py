"""What the published errors of a parameter set do to a conversion; on request, and to first order.

The published errors and the correlation make a covariance, and its root a few directions in the
space of the parameters. Along each, a pair of histories close to the published one gives the
derivative of the conversion by a central difference; the derivatives add in quadrature. A handful
of histories serves all values.
"""

from __future__ import annotations

import functools
import math

import numpy as np

from epochconv import inverse
from epochconv.errors import ArgumentError
from epochconv.hermite import FloatArray
from epochconv.history import ExpansionHistory
from epochconv.intervals import Image
from epochconv.measure import Measure
from epochconv.moment import Moment
from epochconv.published import ParameterSet, parameter_sets, set_with
from epochconv.slopes import slope_ratio

# Fraction of an error by which a parameter is moved: the third derivative, which the difference
# neglects, then counts below 1e-5, and rounding below 1e-8.
_STEP = 0.01

_SYMBOLS = {"hubble_constant": "H0", "matter": "Ω_m", "w0": "w0", "wa": "wa"}


def set_with_errors(history: ExpansionHistory) -> ParameterSet:
    """Return the published parameter set with this history, whose errors can be counted.

    Raises:
        ArgumentError: the history is nobody's published one, or the set has no published errors.
    """
    found = set_with(history)
    if found is not None and found.errors:
        return found
    usable = ", ".join(one.name for one in parameter_sets() if one.errors)
    which = "a history of your own parameters" if found is None else f"the set {found.name!r}"
    raise ArgumentError(
        f"{which} has no published errors, so the parameters' error cannot be counted; "
        f"leave it out, or choose one of: {usable}"
    )


def parameter_error(
    moment: Moment, source: Measure, target: Measure, parameters: ParameterSet
) -> FloatArray:
    """Return the error of `target` that the errors of a set's parameters cause.

    The source's value stays fixed: where it stands for another epoch under moved parameters, the
    epoch moves with them.

    Args:
        moment: moments under the set's own history, of shape (n,).
    Returns:
        The symmetric 68 % error in the target's unit, of shape (n,); infinite where the source
        stands still, NaN where the target does not exist.
    Raises:
        ArgumentError: the set has no errors; or the source depends on the parameters and one of
            the two measures, a guest's, came without a slope.
    """
    if not parameters.errors:
        set_with_errors(parameters.history)
    squared = np.zeros_like(moment.x)
    for less, more in _pairs(parameters.name):
        squared += _change(moment, source, target, parameters.history, (less, more)) ** 2
    return np.sqrt(squared)


def with_parameter_error(
    image: Image, moment: Moment, source: Measure, target: Measure, parameters: ParameterSet
) -> Image:
    """Return an image under a set's history with the set's own error added.

    It adds in quadrature on each side. An end is cut where the target ends whatever the parameters
    are, as a redshift does at 0; the age of the universe is no such end, since it moves with them.

    Args:
        image: of the target.
        moment: the moments of its values.
    Raises:
        ArgumentError: as `parameter_error`.
    """
    error = parameter_error(moment, source, target, parameters)
    values = image.values
    limits = _fixed_limits(target, parameters)
    low, beneath = inverse.cut_at(values - np.hypot(values - image.low, error), *limits)
    high, beyond = inverse.cut_at(values + np.hypot(image.high - values, error), *limits)
    # A value may itself be an ulp beyond the end of the measure.
    low, high = np.minimum(low, values), np.maximum(high, values)
    return Image(values, low, high, image.cut_low | beneath, image.cut_high | beyond)


def parameters_text(parameters: ParameterSet) -> str:
    """Return in one line what `parameter_error` counts and takes for granted."""
    parts = [
        f"{_SYMBOLS[name]} ± {parameters.error_of(name):.3g}"
        + (", the mean square of its unequal sides" if isinstance(error, tuple) else "")
        for name, error in parameters.errors.items()
    ]
    if parameters.combination is None:
        parts.append(
            "taken as independent, since no correlation is published, which can overstate the "
            "error several times"
        )
    else:
        known = parameters.combination
        parts += [
            f"correlation {value:.3f} from {known.symbol} {known.value:g} ± {known.error:g}"
            for value in parameters.correlations.values()
        ]
    return f"errors of {parameters.name} counted: {'; '.join(parts)}"


def _fixed_limits(measure: Measure, parameters: ParameterSet) -> tuple[float, float]:
    """Return the ends of a measure that do not depend on the parameters."""
    ends = {inverse.range_of(measure, parameters.history)}
    for pair in _pairs(parameters.name):
        ends |= {inverse.range_of(measure, history) for history in pair}
    lows, highs = {low for low, _ in ends}, {high for _, high in ends}
    lowest = min(lows)
    if len(lows) > 1:  # no age and no rate is negative, wherever it begins
        lowest = 0.0 if lowest >= 0.0 else -math.inf
    return lowest, max(highs) if len(highs) == 1 else math.inf


@functools.cache
def _pairs(name: str) -> tuple[tuple[ExpansionHistory, ExpansionHistory], ...]:
    """Return a pair of histories on both sides of the published one, per direction.

    The directions are the columns of the root (Cholesky's) of the covariance.
    """
    parameters = next(one for one in parameter_sets() if one.name == name)
    names = list(parameters.errors)
    covariance = np.diag([parameters.error_of(one) ** 2 for one in names])
    for pair, correlation in parameters.correlations.items():
        i, j = (names.index(one) for one in pair)
        product = correlation * parameters.error_of(names[i]) * parameters.error_of(names[j])
        covariance[i, j] = covariance[j, i] = product
    return tuple(
        (
            _moved(parameters.history, dict(zip(names, -_STEP * direction, strict=True))),
            _moved(parameters.history, dict(zip(names, _STEP * direction, strict=True))),
        )
        for direction in np.linalg.cholesky(covariance).T
    )


def _moved(history: ExpansionHistory, by: dict[str, float]) -> ExpansionHistory:
    w0, wa = history.dark_energy
    return ExpansionHistory(
        hubble_constant=history.hubble_constant + by.get("hubble_constant", 0.0),
        matter=history.matter + by.get("matter", 0.0),
        curvature=history.curvature,
        dark_energy=(w0 + by.get("w0", 0.0), wa + by.get("wa", 0.0)),
        temperature_today=history.temperature_today,
        radiation=history.radiation,
        neutrino_masses=history.neutrino_masses,
        neutrino_number=history.neutrino_number,
    )


def _change(
    moment: Moment,
    source: Measure,
    target: Measure,
    history: ExpansionHistory,
    pair: tuple[ExpansionHistory, ExpansionHistory],
) -> FloatArray:
    """Return the change of `target` at fixed `source` for one error along a direction.

    From the changes at fixed x: the epoch moves by what brings the source back to its value.
    """
    with np.errstate(divide="ignore", invalid="ignore"):
        change = _difference(moment, target, pair)
        of_source = _difference(moment, source, pair)
        if np.any(of_source != 0.0):
            change -= slope_ratio(moment, source, target, history) * of_source
    return change


def _difference(
    moment: Moment, measure: Measure, pair: tuple[ExpansionHistory, ExpansionHistory]
) -> FloatArray:
    less, more = (measure.value_at(moment, history) for history in pair)
    return np.asarray((more - less) / (2.0 * _STEP))
