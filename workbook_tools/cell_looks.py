"""The style of new cells: that of their neighbours, in a number format that shows their digits."""

from __future__ import annotations

from array import array
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from workbook_tools.column_widths import column_style
from workbook_tools.number_formats import format_for, format_like, significant_digits
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.styles import GENERAL, StyleSheet
from workbook_tools.typed_cells import LIMIT, NUMBER, ColumnCells

_TEXT = "@"
_LAST_TYPED = 100


class CellLooks:
    """Chooses styles for the new cells of one sheet."""

    def __init__(
        self, reading: SheetReading, styles: StyleSheet | None, source: ColumnCells
    ) -> None:
        """Prepare for a sheet.

        Args:
            styles: of the workbook; None gives every cell style 0.
            source: the column that is converted from, whose look new columns take over.
        """
        self.reading = reading
        self.styles = styles
        self.source = source
        self.digits = _typical_digits(source)

    def code(self, style: int) -> str:
        """Return the number format of a style; -1 stands for a cell without one."""
        return GENERAL if self.styles is None else self.styles.format_code(max(style, 0))

    def of_numbers(
        self,
        column: int,
        positions: NDArray[np.intp],
        values: Sequence[float],
        target: ColumnCells | None,
    ) -> array[int]:
        """Return the style of each new number of a column.

        Args:
            positions: of the new cells, in the rows of the log.
            values: the numbers.
            target: the column where it is there already; None for a new one.
        """
        if self.styles is None:
            return array("q", bytes(8 * len(positions)))
        code = format_for(values, self.digits)
        models = np.maximum(np.array(self.source.styles)[positions], 0)
        keeps = np.zeros(len(positions), dtype=bool)
        if target is not None:
            own, code = self._own_look(column, target, code)
            own = own[positions]
            keeps = own > 0
            models = np.where(keeps, own, models)
        known: dict[tuple[int, bool], int] = {}
        for model, keep in set(zip(models.tolist(), keeps.tolist(), strict=True)):
            fits = keep and self._shows_digits(model)
            known[model, keep] = model if fits else self.styles.with_format(model, code)
        pairs = zip(models.tolist(), keeps.tolist(), strict=True)
        return array("q", [known[pair] for pair in pairs])

    def of_texts(
        self, column: int, positions: NDArray[np.intp], target: ColumnCells | None
    ) -> list[int]:
        """Return the style of each new text of a column: the cell's, or its row's source's."""
        if self.styles is None:
            return [0] * len(positions)
        models = np.maximum(np.array(self.source.styles)[positions], 0)
        if target is not None:
            own, _ = self._own_look(column, target, GENERAL)
            models = np.where(own[positions] > 0, own[positions], models)
        return [int(one) for one in models]

    def of_heading(self, index: int, column: int) -> int:
        """Return the style of the last heading up to a column in a row, 0 where there is none.

        Args:
            index: of the row in the scan.
        """
        if self.styles is None:
            return 0
        cells = self.reading.scan.cells(index)
        styles = [c.style for c in cells if c.column <= column and c.column in self.reading.texts]
        return styles[-1] if styles else 0

    def wraps(self, style: int) -> bool:
        """Tell whether a style breaks long texts into lines."""
        return self.styles is not None and self.styles.wraps(style)

    def _own_look(
        self, column: int, target: ColumnCells, code: str
    ) -> tuple[NDArray[np.int64], str]:
        """Return the style that an existing column gives each cell (0: none), and its format.

        An empty cell keeps its own style, a blank below filled ones takes that of the last of
        them, and the style of the whole column comes next. Without any of these a cell will look
        like its row's source. The format is that of the column's other cells, if they have one,
        else one with as many decimals as were typed there.
        """
        own = np.maximum(np.array(target.styles), 0)
        typed = np.flatnonzero(np.frombuffer(target.kinds, dtype=np.uint8) == NUMBER)
        fallback = column_style(self.reading.scan, column)
        if len(typed):
            fallback = int(own[typed[-1]])
        used = [int(one) for one in np.unique(own[own > 0])]
        used += [fallback] if fallback else []
        fitting = [self.code(one) for one in used if self._shows_digits(one)]
        if len(typed) and not fitting:
            fitting = [format_like([target.numbers[p] for p in typed[-_LAST_TYPED:]])]
        return np.where(own > 0, own, fallback), fitting[-1] if fitting else code

    def _shows_digits(self, style: int) -> bool:
        """Tell whether a style has a format of its own that is made for numbers."""
        assert self.styles is not None
        return self.code(style) not in (GENERAL, _TEXT) and not self.styles.is_date(style)


def _typical_digits(source: ColumnCells) -> int:
    """Return the median number of significant digits among a column's first thousand cells."""
    digits = sorted(
        significant_digits(source.numbers[p])
        for p, kind in enumerate(source.kinds[:1000])
        if kind in (NUMBER, LIMIT)
    )
    return digits[len(digits) // 2] if digits else 1
