"""Intervals through the maps, on float arrays in the measures' own units: errors without a formula.

The image of an interval is exact: both ends are mapped, and where the target turns over in between
so is the turning point. Nothing is linearised and nothing is drawn. As in a conversion, arrays are
of shape (n,), and `shape` is the caller's.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from epochconv import inverse, through_x
from epochconv.hermite import BoolArray, FloatArray
from epochconv.history import ExpansionHistory
from epochconv.measure import Measure
from epochconv.moment import Moment

# A difference of two numbers this close, relative to them, is rounding.
_ROUNDING = 4.0 * float(np.finfo(np.float64).eps)


class Spread(NamedTuple):
    """Values with their errors, in a measure's unit.

    Attributes:
        values: NaN where there is none.
        lower, upper: sizes of the errors, zero or above; infinity reaches to the end of the
            measure's range, NaN means that no error is known.
    """

    values: FloatArray
    lower: FloatArray
    upper: FloatArray


class Span(NamedTuple):
    """Moments with those between which they lie.

    Attributes:
        moment: of the values.
        nearer, farther: of the two ends; NaN where no error is known.
        cut_nearer, cut_farther: whether the end left the range of the measure that it came from,
            on the side that was chosen, and was cut there.
    """

    moment: Moment
    nearer: Moment
    farther: Moment
    cut_nearer: BoolArray
    cut_farther: BoolArray


class Image(NamedTuple):
    """Values with the intervals in which they lie, in a measure's unit.

    Attributes:
        values: as a plain conversion gives them.
        low, high: ends of the intervals, low <= values <= high; NaN where no error is known (on
            either side: the sides mix where a map turns over). A distance modulus goes down to
            minus infinity where the interval reaches today.
        cut_low, cut_high: whether the end belongs to one that was cut at the end of the source's
            range: the true one lies at least as far out.
    """

    values: FloatArray
    low: FloatArray
    high: FloatArray
    cut_low: BoolArray
    cut_high: BoolArray


def span_at(
    spread: Spread,
    source: Measure,
    history: ExpansionHistory,
    *,
    side: str | None = None,
    outside: str = "raise",
    shape: tuple[int, ...] = (),
) -> Span:
    """Return the moments at which a measure has the given values and the ends of their intervals.

    Where the source turns over, an interval stays on the branch of its value and is cut at the
    turning point.

    Raises:
        OutOfRangeError: a value (not an end) stands for no moment, unless `outside` is "nan".
        TwoAnswersError: a value or an end stands for two moments and no side is chosen.
        ArgumentError: `side` or `outside` is another word.
    """
    moment = through_x.moment_at(
        spread.values, source, history, side=side, outside=outside, shape=shape
    )
    ends = [np.where(np.isnan(moment.x), np.nan, end) for end in _ends(spread)]
    if side is None and inverse.turning_points(source, history):
        limits = inverse.range_of(source, history)
        for end in ends:
            through_x.moment_at(np.clip(end, *limits), source, history, shape=shape)
    (one, cut_one), (other, cut_other) = (
        inverse.followed(source, end, moment, history, side=side) for end in ends
    )
    falls = one.x > other.x
    if not np.any(falls):
        return Span(moment, one, other, cut_one, cut_other)
    if np.all(falls | ~(one.x < other.x)):
        return Span(moment, other, one, cut_other, cut_one)
    return Span(
        moment,
        Moment(x=np.where(falls, other.x, one.x)),
        Moment(x=np.where(falls, one.x, other.x)),
        np.where(falls, cut_other, cut_one),
        np.where(falls, cut_one, cut_other),
    )


def image_of(
    span: Span,
    target: Measure,
    history: ExpansionHistory,
    *,
    outside: str = "raise",
    shape: tuple[int, ...] = (),
) -> Image:
    """Return a measure at moments and all the values that it takes between their ends.

    Raises:
        OutOfRangeError: the measure does not exist at a moment (not an end), unless `outside` is
            "nan".
    """
    values = np.array(
        through_x.values_at(span.moment, target, history, outside=outside, shape=shape)
    )
    with np.errstate(divide="ignore", invalid="ignore"):
        near, far = (target.value_at(end, history) for end in (span.nearer, span.farther))
    # With the value itself, which rounding may put an ulp beyond the ends of a tiny interval.
    low = np.minimum(np.minimum(near, far), values)
    high = np.maximum(np.maximum(near, far), values)
    turns = np.array(inverse.turning_points(target, history))
    turned = target.value_at(Moment(x=turns), history)
    for x, value in zip(turns, turned, strict=True):
        inside = (span.nearer.x < x) & (x < span.farther.x)
        low[inside] = np.minimum(low[inside], value)
        high[inside] = np.maximum(high[inside], value)
    return Image(
        values,
        low,
        high,
        (span.cut_nearer & (near == low)) | (span.cut_farther & (far == low)),
        (span.cut_nearer & (near == high)) | (span.cut_farther & (far == high)),
    )


def image(
    spread: Spread,
    source: Measure,
    target: Measure,
    history: ExpansionHistory,
    *,
    side: str | None = None,
    outside: str = "raise",
    shape: tuple[int, ...] = (),
) -> Image:
    """Return the image of each interval [value - lower, value + upper] from source to target.

    Raises: as `span_at` and `image_of`.
    """
    if source is not target:
        span = span_at(spread, source, history, side=side, outside=outside, shape=shape)
        return image_of(span, target, history, outside=outside, shape=shape)
    values = through_x.convert_values(
        spread.values, source, source, history, side=side, outside=outside, shape=shape
    )
    ends = [np.where(np.isnan(values), np.nan, end) for end in _ends(spread)]
    (low, cut_low), (high, cut_high) = (
        inverse.cut_at(end, *inverse.range_of(source, history)) for end in ends
    )
    return Image(values, np.minimum(low, values), np.maximum(high, values), cut_low, cut_high)


def _ends(spread: Spread) -> tuple[FloatArray, FloatArray]:
    """Return the lower and the upper end of each interval, NaN where either error is."""
    known = np.where(np.isnan(spread.lower) | np.isnan(spread.upper), np.nan, spread.values)
    low, high = known - spread.lower, known + spread.upper
    low[np.abs(low) <= _ROUNDING * np.abs(known)] = 0.0
    return low, high
