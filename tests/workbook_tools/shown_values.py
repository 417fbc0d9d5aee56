"""What LibreOffice shows of a filled workbook, against what it showed before."""

from __future__ import annotations

from collections.abc import Iterator

from tests.workbook_tools.fill_runs import Run, same_value
from tests.workbook_tools.office import Rows
from tests.workbook_tools.rules.sheet_view import Box, boxes, letters

_LAST_DECIMAL = 1e-20  # LibreOffice writes at most 20 decimals of a number without exponent


def wrongly_shown(one: Run, before: dict[str, Rows], after: dict[str, Rows]) -> Iterator[str]:
    """Cells that look otherwise than before, but for new ones and for formulas that read those.

    LibreOffice computes some formulas anew when it loads a workbook, so the readers of filled
    cells may change; the fill must have named each of them in its report.
    """
    yield from (f"sheet {name} is gone" for name in before if name not in after)
    for sheet in set(before) & set(after):
        old, new = before[sheet], after[sheet]
        values = one.new_cells if sheet == one.sheet else {}
        readers = _readers(one, sheet)
        for row in range(max(len(old), len(new))):
            for column in range(max(_width(old, row), _width(new, row))):
                was, now = _text(old, row, column), _text(new, row, column)
                value = values.get((row + 1, column + 1))
                if value is not None:
                    good = _shows(now, value)
                else:
                    good = was == now or any(e.holds(row + 1, column + 1) for e in readers)
                if not good:
                    yield f"{sheet} {letters(column + 1)}{row + 1}: {was!r} became {now!r}"


def _readers(one: Run, sheet: str) -> list[Box]:
    assert one.result is not None
    found = one.result.dependents.values()
    return boxes(place for readers in found for place in readers.cells.get(sheet, ()))


def _width(rows: Rows, row: int) -> int:
    return len(rows[row]) if row < len(rows) else 0


def _text(rows: Rows, row: int, column: int) -> str:
    return rows[row][column] if column < _width(rows, row) else ""


def _shows(text: str, value: object) -> bool:
    if not isinstance(value, int | float):
        return text == value
    try:
        number = float(text)
    except ValueError:
        return False
    return same_value(number, value) or abs(number - value) <= _LAST_DECIMAL
