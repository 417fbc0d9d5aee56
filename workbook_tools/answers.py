"""Converting a column: the only place where the workbook meets the conversion core."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from epochconv import inverse, through_x
from epochconv.history import ExpansionHistory
from epochconv.measure import Measure
from epochconv.moment import Moment
from epochconv.printing import number_text, with_unit
from epochconv.published import label_of
from epochconv.units import Unit, factor, unit_named

FloatArray = NDArray[np.float64]


class Moments:
    """The moments that a source column stands for, under one history.

    Attributes:
        moment: one per cell; NaN where the cell stands for none.
        reasons: why, by position.
    """

    def __init__(
        self,
        numbers: FloatArray,
        measure: Measure,
        unit: Unit,
        history: ExpansionHistory,
        side: str | None,
    ) -> None:
        """Find the moments.

        Args:
            numbers: what the cells hold, in `unit`; NaN where nothing is to be converted.
        """
        own = unit_named(measure.unit)
        values = numbers * factor(unit, own)
        near = through_x.moment_at(values, measure, history, side="nearer", outside="nan")
        far = near
        if measure.moment_of is None:
            far = through_x.moment_at(values, measure, history, side="farther", outside="nan")
        self.history = history
        self.source, self.values, self.side = measure, values, side
        self.reasons: dict[int, str] = {}
        asked = ~np.isnan(numbers)
        low, high = inverse.range_of(measure, history)
        for position in np.flatnonzero(asked & np.isnan(near.x)).tolist():
            value = float(values[position])
            self.reasons[position] = _why_outside(value, measure, low, high, history)
        chosen = far if side == "farther" else near
        if side is None:
            several = far.x > near.x
            for position in np.flatnonzero(several).tolist():
                answers = [number_text(float(m.redshift[position])) for m in (near, far)]
                self.reasons[position] = (
                    f"two epochs have this {measure.name}, at redshift {answers[0]} and "
                    f"{answers[1]}; choose with --side nearer or --side farther"
                )
            if np.any(several):
                chosen = Moment(x=np.where(several, np.nan, near.x))
        self.moment = chosen

    def under(self, history: ExpansionHistory) -> Moments:
        """Return the moments of the same column under another history."""
        return Moments(self.values, self.source, unit_named(self.source.unit), history, self.side)

    def column(self, measure: Measure, unit: Unit) -> tuple[FloatArray, dict[int, str]]:
        """Return a measure at the moments, in `unit`, and the reasons where it does not exist.

        Values are NaN where there is no moment, or no value (then with a reason).
        """
        if measure is self.source:
            values = np.where(np.isnan(self.moment.x), np.nan, self.values)
        else:
            values = through_x.values_at(self.moment, measure, self.history, outside="nan")
        values = values * factor(unit_named(measure.unit), unit)
        missing = np.flatnonzero(np.isnan(values) & ~np.isnan(self.moment.x))
        return values, dict.fromkeys(missing.tolist(), f"{measure.name} {measure.missing}")


def _why_outside(
    value: float, measure: Measure, low: float, high: float, history: ExpansionHistory
) -> str:
    """Return one reason, the same words for every cell that fails in the same way."""
    if value < low:
        if measure.unit == "" and measure.name == "redshift":
            return f"a negative redshift {measure.below}"
        words, limit = f"{measure.name} {measure.below}", low
    else:
        words, limit = f"{measure.name} {measure.above}", high
    if limit == 0.0 or not math.isfinite(limit):
        return words
    return f"{words} ({with_unit(number_text(limit), measure.unit)} under {label_of(history)})"
