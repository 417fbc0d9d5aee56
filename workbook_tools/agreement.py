"""Whether the filled cells of a partly filled column are what the chosen parameters give."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from epochconv.published import label_of, parameter_sets
from workbook_tools.answers import FloatArray, Moments
from workbook_tools.column_meanings import Heading
from workbook_tools.errors import Refusal
from workbook_tools.number_formats import shown_step
from workbook_tools.typed_cells import NUMBER, ColumnCells

# Beyond the last digit shown: rounding of a half, and what 15 digits leave of a number.
_SLACK = 1.0 + 1e-9
_STORED = 2e-14


def refuse_disagreement(
    moments: Moments,
    target: ColumnCells,
    heading: Heading,
    code_of: Callable[[int], str],
    where: Callable[[int], str],
) -> None:
    """Raise where a filled cell differs from its row's conversion by more than its printed digits.

    Args:
        moments: of the source column.
        target: the partly filled column.
        code_of: the number format of a style.
        where: the address of a cell of the target column, by position.
    Raises:
        Refusal: names the first such cells and, where there is one, the set that they agree with.
    """
    values = moments.answers(heading).values
    compared = [
        p for p, kind in enumerate(target.kinds) if kind == NUMBER and not np.isnan(values[p])
    ]
    steps = np.array([shown_step(target.numbers[p], code_of(target.styles[p])) for p in compared])
    typed = np.array([target.numbers[p] for p in compared])
    wrong = np.flatnonzero(~_agree(values[compared], typed, steps))
    if not len(wrong):
        return
    first = [
        f"{where(compared[i])} holds {typed[i]:.15g} where {values[compared[i]]:.6g} belongs"
        for i in wrong[:3].tolist()
    ]
    more = f" and {len(wrong) - 3} more" if len(wrong) > 3 else ""
    raise Refusal(
        f"column {heading.text!r} does not agree with {label_of(moments.history)}:"
        f" {'; '.join(first)}{more}; nothing was filled"
        f"{_better_set(moments, heading, compared, typed, steps)}"
    )


def _agree(values: FloatArray, typed: FloatArray, steps: FloatArray) -> np.ndarray:
    allowed = steps * _SLACK + np.abs(values) * _STORED
    return np.abs(values - typed) <= allowed


def _better_set(
    moments: Moments,
    heading: Heading,
    compared: list[int],
    typed: FloatArray,
    steps: FloatArray,
) -> str:
    """Return words for the published set with which all cells agree, if there is one."""
    for one in parameter_sets():
        other = moments.under(one.history)
        values = other.answers(heading).values
        if bool(np.all(_agree(values[compared], typed, steps))):
            return f"; it agrees with --parameters '{one.name}'"
    return "; correct these cells, or fill another column"
