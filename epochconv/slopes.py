"""Derivatives of one measure by another, from the exact slopes of both; no differences."""

from __future__ import annotations

import numpy as np

from epochconv import through_x
from epochconv.errors import ArgumentError
from epochconv.hermite import FloatArray
from epochconv.history import ExpansionHistory
from epochconv.measure import Measure
from epochconv.moment import Moment


def slope_ratio(
    moment: Moment, source: Measure, target: Measure, history: ExpansionHistory
) -> FloatArray:
    """Return d target / d source at moments of shape (n,), in the units of the two.

    It is infinite where the source turns over, and where a modulus begins, at redshift 0.

    Raises:
        ArgumentError: a measure has no slope (a guest may leave it out).
    """
    for measure in (source, target):
        if measure.slope_at is None:
            raise ArgumentError(
                f"{measure.name} came without slope_at, which linear errors and the parameters' "
                "errors need; add it to the measure, or map the error's two ends alone"
            )
    assert source.slope_at is not None
    assert target.slope_at is not None
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.asarray(target.slope_at(moment.x, history) / source.slope_at(moment.x, history))


def tangent(
    values: FloatArray,
    source: Measure,
    target: Measure,
    history: ExpansionHistory,
    *,
    side: str | None = None,
    outside: str = "raise",
    shape: tuple[int, ...] = (),
) -> tuple[FloatArray, FloatArray]:
    """Return `target` where `source` has the given values, and its derivative by the source there.

    Raises:
        OutOfRangeError, TwoAnswersError, ArgumentError: as a conversion, and as `slope_ratio`.
    """
    if source is target:
        same = through_x.convert_values(
            values, source, target, history, side=side, outside=outside, shape=shape
        )
        return same, np.where(np.isnan(same), np.nan, 1.0)
    moment = through_x.moment_at(values, source, history, side=side, outside=outside, shape=shape)
    result = np.array(through_x.values_at(moment, target, history, outside=outside, shape=shape))
    slope = slope_ratio(moment, source, target, history)
    return result, np.where(np.isnan(result), np.nan, slope)
