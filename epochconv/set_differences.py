"""How much a conversion differs between published parameter sets, for warnings; on float arrays."""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

import numpy as np

from epochconv import inverse, through_x
from epochconv.hermite import BoolArray, FloatArray
from epochconv.history import ExpansionHistory
from epochconv.intervals import Image
from epochconv.measure import Measure
from epochconv.published import parameter_set

# Two ways to measure the same universe that disagree, and by how much is not settled.
AT_ODDS = ("planck 2018", "distance ladder 2022")


class Dependence(NamedTuple):
    """How converted values depend on the parameter set.

    Attributes:
        difference: between the largest and the smallest result, in the target's unit; infinite
            where a value stands for an epoch under some of the sets only, NaN where under none.
        beyond_error: where the difference is more than the value's own error, the larger of its
            two sides; False where no error is known.
    """

    difference: FloatArray
    beyond_error: BoolArray


def depends_on_parameters(
    image: Image,
    values: FloatArray,
    source: Measure,
    target: Measure,
    *,
    sets: Sequence[str] = AT_ODDS,
    side: str | None = None,
) -> Dependence:
    """Return how much the conversion of `values` differs between parameter sets.

    Args:
        image: the conversion itself with its errors, in the target's unit, under any history.
        values: of the source, of shape (n,).
        sets: names of published sets.
        side: as in a conversion; without one, values that stand for two epochs give NaN.
    Raises:
        ArgumentError: a set is unknown, or `side` is another word.
    """
    columns = np.array(
        [_converted(values, source, target, parameter_set(one).history, side) for one in sets]
    )
    absent = np.isnan(columns)
    difference = np.fmax.reduce(columns) - np.fmin.reduce(columns)
    difference[absent.any(axis=0) & ~absent.all(axis=0)] = np.inf
    own_error = np.maximum(image.values - image.low, image.high - image.values)
    return Dependence(difference, difference > own_error)


def _converted(
    values: FloatArray,
    source: Measure,
    target: Measure,
    history: ExpansionHistory,
    side: str | None,
) -> FloatArray:
    if source is target:
        return through_x.convert_values(values, source, target, history, outside="nan")
    moment = through_x.moment_at(values, source, history, side=side or "nearer", outside="nan")
    result = through_x.values_at(moment, target, history, outside="nan")
    if side is None and inverse.turning_points(source, history):
        other = through_x.moment_at(values, source, history, side="farther", outside="nan")
        result = np.where(other.x > moment.x, np.nan, result)
    return result
