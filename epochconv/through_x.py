"""Any measure to any other through x = ln(1 + z), on float arrays in the measures' own units.

This is the whole of a conversion; what surrounds it only reads and writes units. Arrays are of
shape (n,); `shape` is the caller's, to name the place of a bad value in it.
"""

from __future__ import annotations

import numpy as np

from epochconv import inverse, measures
from epochconv.errors import ArgumentError, OutOfRangeError, TwoAnswersError
from epochconv.hermite import BoolArray, FloatArray
from epochconv.history import ExpansionHistory
from epochconv.measure import Measure
from epochconv.moment import Moment
from epochconv.printing import number_text, with_unit
from epochconv.published import label_of
from epochconv.tables import HIGHEST_REDSHIFT

SIDES = ("nearer", "farther")

# How far beyond an end a value may be and still count as rounding: the accuracy we promise.
_ROUNDING = 1e-12


def moment_at(
    values: FloatArray,
    measure: Measure,
    history: ExpansionHistory,
    *,
    side: str | None = None,
    outside: str = "raise",
    shape: tuple[int, ...] = (),
) -> Moment:
    """Return the moments at which a measure has the given values; NaN stays NaN.

    Args:
        values: in the measure's unit; never changed.
        side: "nearer" or "farther" where the map turns over; without effect elsewhere.
        outside: "raise", or "nan" for NaN where no moment has the value.
    Raises:
        OutOfRangeError: a value stands for no moment under this history.
        TwoAnswersError: a value stands for two moments and no side is chosen.
        ArgumentError: `side` or `outside` is another word.
    """
    _check_words(side, outside)
    low, high = inverse.range_of(measure, history)
    values = _inside(values, measure, history, (low, high), outside, shape)
    found = inverse.roots(measure, values, history)
    if len(found) == 1:
        return found[0]
    if side is None:
        nearest, farthest = (_joined(pick, found, None) for pick in (np.fmin, np.fmax))
        several = farthest > nearest
        if np.any(several):
            raise _two_answers(values, found, several, measure, history, shape)
    return Moment(x=_joined(np.fmax if side == "farther" else np.fmin, found, found[0].x))


def _joined(pick: np.ufunc, found: list[Moment], out: FloatArray | None) -> FloatArray:
    """Fold the branches' x into one array with fmin or fmax, which pass over NaN."""
    x = found[0].x
    for other in found[1:]:
        x = pick(x, other.x, out=out)
    return x


def values_at(
    moment: Moment,
    measure: Measure,
    history: ExpansionHistory,
    *,
    outside: str = "raise",
    shape: tuple[int, ...] = (),
) -> FloatArray:
    """Return a measure at moments, in its own unit; a new array.

    Raises:
        OutOfRangeError: the measure does not exist at a moment (unless `outside` is "nan").
    """
    values = measure.value_at(moment, history)
    absent = ~np.isfinite(values)
    if np.any(absent):
        absent &= ~np.isnan(moment.x)
        if np.any(absent):
            if outside == "raise":
                raise _missing(moment, absent, measure, shape)
            values[absent] = np.nan
    return values


def convert_values(
    values: FloatArray,
    source: Measure,
    target: Measure,
    history: ExpansionHistory,
    *,
    side: str | None = None,
    outside: str = "raise",
    shape: tuple[int, ...] = (),
) -> FloatArray:
    """Return `target` where `source` has the given values; both in their own units; a new array.

    Raises: as `moment_at` and `values_at`.
    """
    if source is target:
        _check_words(side, outside)
        limits = inverse.range_of(source, history)
        return np.array(_inside(values, source, history, limits, outside, shape), copy=True)
    moment = moment_at(values, source, history, side=side, outside=outside, shape=shape)
    result = values_at(moment, target, history, outside=outside, shape=shape)
    return result.copy() if result is values else result


def _check_words(side: str | None, outside: str) -> None:
    if side is not None and side not in SIDES:
        raise ArgumentError(f"side={side!r} is neither 'nearer' nor 'farther'")
    if outside not in ("raise", "nan"):
        raise ArgumentError(f"outside={outside!r} is neither 'raise' nor 'nan'")


def _inside(
    values: FloatArray,
    measure: Measure,
    history: ExpansionHistory,
    limits: tuple[float, float],
    outside: str,
    shape: tuple[int, ...],
) -> FloatArray:
    """Return the values with rounding beyond the limits taken off; refuse or blank the rest."""
    low, high = limits
    if len(values) == 0:
        return values
    least, most = np.fmin.reduce(values), np.fmax.reduce(values)
    if not (least < low or most > high):
        return values
    bad = (values < low - abs(low) * _ROUNDING) | (values > high + abs(high) * _ROUNDING)
    if np.any(bad) and outside == "raise":
        raise _out_of_range(values, bad, measure, history, limits, shape)
    clipped = np.clip(values, low, high)
    clipped[bad] = np.nan
    return clipped


def _out_of_range(
    values: FloatArray,
    bad: BoolArray,
    measure: Measure,
    history: ExpansionHistory,
    limits: tuple[float, float],
    shape: tuple[int, ...],
) -> OutOfRangeError:
    low, high = limits
    first = int(np.argmax(bad))
    value = float(values[first])
    why = measure.below if value < low else measure.above
    index, where = _place(first, int(np.count_nonzero(bad)), shape)
    if measure is measures.REDSHIFT and value < low:
        reach = "give the cosmological redshift, 0 or above"
    else:
        reach = (
            f"under {label_of(history)} it lies between {number_text(low)} and "
            f"{with_unit(number_text(high), measure.unit)}"
        )
    return OutOfRangeError(
        f"{measure.name} {with_unit(number_text(value, 12), measure.unit)} {why}{where}; {reach}",
        measure=measure.name,
        value=value,
        index=index,
        count=int(np.count_nonzero(bad)),
        low=low,
        high=high,
        unit=measure.unit,
    )


def _missing(
    moment: Moment, absent: BoolArray, measure: Measure, shape: tuple[int, ...]
) -> OutOfRangeError:
    first = int(np.argmax(absent))
    redshift = float(moment.redshift[first])
    count = int(np.count_nonzero(absent))
    index, where = _place(first, count, shape)
    return OutOfRangeError(
        f"{measure.name} {measure.missing}{where}; give a redshift above 0",
        measure=measure.name,
        value=redshift,
        index=index,
        count=count,
        low=0.0,
        high=HIGHEST_REDSHIFT,
        unit="",
    )


def _two_answers(
    values: FloatArray,
    found: list[Moment],
    several: BoolArray,
    measure: Measure,
    history: ExpansionHistory,
    shape: tuple[int, ...],
) -> TwoAnswersError:
    first = int(np.argmax(several))
    value = float(values[first])
    candidates = [float(np.expm1(one.x[first])) for one in found]
    redshifts = tuple(z for z in candidates if not np.isnan(z))
    _, where = _place(first, int(np.count_nonzero(several)), shape)
    answers = " and ".join(number_text(z) for z in redshifts)
    return TwoAnswersError(
        f"{measure.name} {with_unit(number_text(value, 12), measure.unit)} is that of redshift "
        f"{answers}{where} under {label_of(history)}; choose side='nearer' or side='farther'",
        measure=measure.name,
        value=value,
        redshifts=redshifts,
    )


def _place(first: int, count: int, shape: tuple[int, ...]) -> tuple[tuple[int, ...], str]:
    """Return the index of the first bad value in the caller's shape, and words for it."""
    if not shape:
        return (), ""
    index = tuple(int(i) for i in np.unravel_index(first, shape))
    place = ", ".join(str(i) for i in index)
    more = f", the first of {count} such values" if count > 1 else ""
    return index, f" (at index {place}{more})"
