"""From values of a measure back to moments, also where the map turns over.

A measure without an inverse of its own is cut at its turning points into branches on which it is
monotone. On a branch each value is bracketed by two knots of the history's grid and found by
Newton's method with the exact derivative, kept inside the bracket.
"""

from __future__ import annotations

import functools
import itertools
from dataclasses import dataclass

import numpy as np

from epochconv.hermite import BLOCK, BoolArray, FloatArray
from epochconv.history import ExpansionHistory
from epochconv.measure import Measure
from epochconv.moment import Moment

_MOST_STEPS = 80
_ROUNDING = 1e-12
_EPSILON = float(np.finfo(np.float64).eps)


def roots(measure: Measure, values: FloatArray, history: ExpansionHistory) -> list[Moment]:
    """Return the moments at `values`, one entry per branch, the nearer branch first.

    Where a branch does not reach a value its entry is NaN; values are of shape (n,).
    """
    if measure.moment_of is not None:
        return [measure.moment_of(values, history)]
    if measure.rescaled_from is not None:
        base, _, back = measure.rescaled_from
        return roots(base, np.clip(back(values), *range_of(base, history)), history)
    return [
        Moment(x=_solve(branch, measure, values, history)) for branch in _branches(measure, history)
    ]


def range_of(measure: Measure, history: ExpansionHistory) -> tuple[float, float]:
    """Return the lowest and the highest value of the measure under the history."""
    if measure.range_of is not None:
        return measure.range_of(history)
    if measure.rescaled_from is not None:
        base, forth, _ = measure.rescaled_from
        with np.errstate(divide="ignore"):
            low, high = forth(np.array(range_of(base, history)))
        return float(low), float(high)
    ends = [value for branch in _branches(measure, history) for value in branch.values]
    return float(min(ends)), float(max(ends))


def turning_points(measure: Measure, history: ExpansionHistory) -> tuple[float, ...]:
    """Return the x at which the measure turns over under the history; mostly none."""
    if measure.moment_of is not None:
        return ()
    if measure.rescaled_from is not None:
        return turning_points(measure.rescaled_from[0], history)
    return tuple(float(branch.knots[0]) for branch in _branches(measure, history)[1:])


def followed(
    measure: Measure,
    values: FloatArray,
    start: Moment,
    history: ExpansionHistory,
    *,
    side: str | None = None,
) -> tuple[Moment, BoolArray]:
    """Return the moments at values, each on the branch on which its `start` lies.

    A value beyond an end of that branch is cut there. NaN in either gives NaN.

    Args:
        values: in the measure's unit, of shape (n,); infinities are cut.
        start: moments of shape (n,).
        side: "farther" puts a start on a turning point onto the branch that begins there; it
            lies on the one that ends there otherwise.
    Returns:
        The moments, and a mask of those that were cut.
    """
    if measure.rescaled_from is not None:
        base, _, back = measure.rescaled_from
        with np.errstate(over="ignore"):
            based = back(values)
        return followed(base, based, start, history, side=side)
    if measure.moment_of is not None:
        within, cut = cut_at(values, *range_of(measure, history))
        return measure.moment_of(within, history), cut
    x = np.full_like(values, np.nan)
    cut = np.zeros(len(values), dtype=np.bool_)
    branches = _branches(measure, history)
    for branch in branches if side == "farther" else branches[::-1]:
        # Later ones overwrite: a turning point is on two branches.
        on = (start.x >= branch.knots[0]) & (start.x <= branch.knots[-1])
        ends = sorted((float(branch.values[0]), float(branch.values[-1])))
        within, cut[on] = cut_at(values[on], ends[0], ends[1])
        x[on] = _solve(branch, measure, within, history)
    return Moment(x=x), cut


def cut_at(values: FloatArray, low: float, high: float) -> tuple[FloatArray, BoolArray]:
    """Return the values cut at the two ends, and which were beyond them by more than rounding."""
    within = np.clip(values, low, high)
    with np.errstate(invalid="ignore"):  # minus infinity is an end of its own, of a modulus
        cut = np.abs(values - within) > _ROUNDING * np.abs(within)
    return within, cut


@dataclass(frozen=True)
class _Branch:
    """A stretch of x on which a measure rises or falls throughout, on the grid's knots."""

    knots: FloatArray
    values: FloatArray

    @property
    def rises(self) -> bool:
        return bool(self.values[-1] >= self.values[0])


@functools.lru_cache(maxsize=256)
def _branches(measure: Measure, history: ExpansionHistory) -> tuple[_Branch, ...]:
    assert measure.slope_at is not None
    knots = history.tables.knots
    slopes = measure.slope_at(knots, history)
    turns = np.flatnonzero(np.sign(slopes[:-1]) * np.sign(slopes[1:]) < 0)
    cuts = [_turning_point(measure, history, knots[i], knots[i + 1]) for i in turns]
    edges = [knots[0], *cuts, knots[-1]]
    branches = []
    for low, high in itertools.pairwise(edges):
        inner = knots[(knots > low) & (knots < high)]
        stretch = np.concatenate([[low], inner, [high]])
        branches.append(_Branch(stretch, measure.value_at(Moment(x=stretch), history)))
    return tuple(branches)


def _turning_point(measure: Measure, history: ExpansionHistory, low: float, high: float) -> float:
    """Return x between two knots at which the slope changes sign, by bisection."""
    assert measure.slope_at is not None
    sign = np.sign(measure.slope_at(np.array([low]), history)[0])
    while True:
        middle = 0.5 * (low + high)
        if middle in (low, high):
            return middle
        if np.sign(measure.slope_at(np.array([middle]), history)[0]) == sign:
            low = middle
        else:
            high = middle


def _solve(
    branch: _Branch, measure: Measure, values: FloatArray, history: ExpansionHistory
) -> FloatArray:
    result = np.empty_like(values)
    for start in range(0, len(values), BLOCK):
        block = slice(start, start + BLOCK)
        result[block] = _solve_block(branch, measure, values[block], history)
    return result


def _solve_block(
    branch: _Branch, measure: Measure, values: FloatArray, history: ExpansionHistory
) -> FloatArray:
    assert measure.slope_at is not None
    sign = 1.0 if branch.rises else -1.0
    climb, wanted = sign * branch.values, sign * values
    # An end belongs to the branch also where rounding puts a value an ulp beyond it.
    clipped = np.clip(wanted, climb[0], climb[-1])
    outside = ~(np.abs(wanted - clipped) <= _ROUNDING * np.abs(clipped))
    wanted = np.where(outside, climb[0], clipped)
    piece = np.clip(np.searchsorted(climb, wanted, side="right") - 1, 0, len(climb) - 2)
    low, high = branch.knots[piece], branch.knots[piece + 1]
    rise = climb[piece + 1] - climb[piece]
    x = low + (high - low) * np.divide(
        wanted - climb[piece], rise, out=np.zeros_like(rise), where=rise > 0.0
    )
    result = np.empty_like(x)
    unsettled = np.arange(len(x))
    for _ in range(_MOST_STEPS):
        gap = sign * measure.value_at(Moment(x=x), history) - wanted
        low = np.where(gap < 0.0, x, low)
        high = np.where(gap > 0.0, x, high)
        slope = sign * measure.slope_at(x, history)
        step = np.divide(gap, slope, out=np.zeros_like(gap), where=slope != 0.0)
        trial = x - step
        halved = ~((trial >= low) & (trial <= high)) | (slope <= 0.0)
        trial = np.where(halved & (gap != 0.0), 0.5 * (low + high), trial)
        moved = np.abs(trial - x)
        x = trial
        blur = np.divide(wanted, slope, out=np.zeros_like(gap), where=slope > 0.0)
        going = ~(moved <= _EPSILON * (2.0 * x + 4.0 * np.abs(blur)))
        left = np.count_nonzero(going)
        if left == 0:
            break
        if left > 0.25 * len(x):
            continue
        # Few go on: near a turning point the steps shrink slowly.
        result[unsettled] = x
        unsettled, x, wanted = unsettled[going], x[going], wanted[going]
        low, high = low[going], high[going]
    result[unsettled] = x
    result[outside] = np.nan
    return result
