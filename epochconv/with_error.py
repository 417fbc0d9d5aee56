"""The result of a conversion with an error: a value, its two errors, and what they assume."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from epochconv.printing import value_with_errors, with_unit
from epochconv.reading_quantities import table_unit_of

_MOST_SHOWN = 5


@dataclass(frozen=True, eq=False, repr=False)
class WithError:
    """Values with their errors; made by `convert_with_error(...)`.

    The quantities are of one unit and of the shape of the input.

    Attributes:
        value: as `convert` gives it.
        lower_error, upper_error: sizes, zero or above: value - low and high - value. Infinite where
            the interval has no end (a distance modulus, where it reaches today); NaN where the
            error of the input is.
        low, high: the interval's ends.
        cut_low, cut_high: True (or an array of bools) where the end was cut at the end of what the
            measure can be, so that the true one lies at least as far out.
        assumes: the history and every error that was counted besides the input's, in one line.
    """

    value: Any
    lower_error: Any
    upper_error: Any
    low: Any
    high: Any
    cut_low: Any
    cut_high: Any
    assumes: str

    def __repr__(self) -> str:
        own = table_unit_of(self.value)
        unit = str(self.value.units) if own is None else own.symbol
        parts = [
            np.ravel(part.magnitude) for part in (self.value, self.lower_error, self.upper_error)
        ]
        texts = [value_with_errors(*map(float, row)) for row in zip(*parts, strict=True)]
        if np.ndim(self.value.magnitude) == 0:
            (text,) = texts
        else:
            more = len(texts) - _MOST_SHOWN
            listed = texts[:_MOST_SHOWN] + ([f"and {more} more"] if more > 0 else [])
            text = f"[{', '.join(listed)}]"
        cuts = [int(np.count_nonzero(cut)) for cut in (self.cut_low, self.cut_high)]
        cut = f"; cut at the end of the range: {cuts[0]} low, {cuts[1]} high" if any(cuts) else ""
        shown = with_unit(text, "" if unit == "dimensionless" else unit)
        return f"{shown}\n{self.assumes}{cut}"
