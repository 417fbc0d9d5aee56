"""Whether the filled cells of a partly filled column are what the chosen parameters give."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

from epochconv.published import label_of, parameter_sets
from epochconv.units import factor
from workbook_tools.answers import FloatArray, Moments
from workbook_tools.column_meanings import Heading
from workbook_tools.number_formats import shown_step
from workbook_tools.typed_cells import NUMBER, ColumnCells

BoolArray = NDArray[np.bool_]

# Beyond the last digit shown: rounding of a half, and what 15 digits leave of a number.
_SLACK = 1.0 + 1e-9
_STORED = 2e-14


class Agreement:
    """The filled cells of one column beside what belongs there.

    Attributes:
        wrong: positions of cells that differ by more than their printed digits.
    """

    def __init__(
        self,
        belongs: FloatArray,
        target: ColumnCells,
        heading: Heading,
        code_of: Callable[[int], str],
    ) -> None:
        """Compare a column.

        Args:
            belongs: what the source's conversion gives for each row, NaN for nothing.
            target: the cells of the column.
            heading: of the column, whose unit counts.
            code_of: the number format of a style.
        """
        unit = heading.unit
        typed, steps = np.full(len(belongs), np.nan), np.zeros(len(belongs))
        for position, kind in enumerate(target.kinds):
            if kind != NUMBER or np.isnan(belongs[position]):
                continue
            own = target.units.get(position)
            if own is None or (own.dimension == unit.dimension and not heading.h_power):
                number, scale = target.numbers[position], factor(own or unit, unit)
                typed[position] = number * scale
                steps[position] = scale * shown_step(number, code_of(target.styles[position]))
        self._belongs, self._typed, self._steps = belongs, typed, steps
        self.wrong: list[int] = np.flatnonzero(self._differs(belongs)).tolist()

    def faults(self, where: Callable[[int], str]) -> str:
        """Return the first cells that disagree, with what belongs there, in words.

        Args:
            where: the address of a cell of the column, by position.
        """
        first = [
            f"{where(p)} holds {self._typed[p]:.15g} where {self._belongs[p]:.6g} belongs"
            for p in self.wrong[:3]
        ]
        more = f" and {len(self.wrong) - 3} more" if len(self.wrong) > 3 else ""
        return "; ".join(first) + more

    def better_set(self, moments: Moments, heading: Heading) -> str:
        """Return the name of the published set with which all cells agree, "" for none."""
        for one in parameter_sets():
            values = moments.under(one.history).answers(heading).values
            if not np.any(self._differs(values)):
                return one.name
        return ""

    def _differs(self, belongs: FloatArray) -> BoolArray:
        """Tell which cells differ from what belongs there; never those without a number."""
        allowed = self._steps * _SLACK + np.abs(belongs) * _STORED
        compared = ~np.isnan(self._typed)
        return np.asarray(compared & ~(np.abs(belongs - self._typed) <= allowed))


def disagreement(
    moments: Moments, found: Agreement, heading: Heading, where: Callable[[int], str]
) -> str:
    """Return the sentence about a column whose cells disagree.

    Args:
        moments: of the source column.
        found: the comparison.
        heading: of the column.
        where: the address of a cell of the column, by position.
    """
    better = found.better_set(moments, heading)
    remedy = (
        f"it agrees with --parameters '{better}'"
        if better
        else ("correct these cells, or name the columns to fill with --only")
    )
    return (
        f"column {heading.text!r} does not agree with {label_of(moments.history)}:"
        f" {found.faults(where)}; nothing was filled; {remedy}"
    )
