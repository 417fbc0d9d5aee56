"""Works out the new cells of a sheet's columns from one source column."""

from __future__ import annotations

from array import array
from collections.abc import Callable, Sequence

import numpy as np
from numpy.typing import NDArray

from epochconv.typed_text import typed_text
from workbook_tools import agreement
from workbook_tools.answers import Answers, FloatArray, Moments
from workbook_tools.cell_address import Range, column_letters
from workbook_tools.cell_looks import CellLooks
from workbook_tools.column_meanings import Heading, Role
from workbook_tools.column_widths import hidden_columns
from workbook_tools.errors import Refusal
from workbook_tools.number_formats import significant_digits
from workbook_tools.right_edge import right_edge
from workbook_tools.sheet_edits import NewCells
from workbook_tools.sheet_plan import FilledColumn, SheetPlan
from workbook_tools.styles import StyleSheet
from workbook_tools.tables import free_names
from workbook_tools.typed_cells import (
    EMPTY,
    LEFT,
    NOT_READ,
    NUMBER,
    SUMS_UP,
    WHITE,
    WORD,
    ColumnCells,
)

BoolArray = NDArray[np.bool_]

_HOLDS = {
    Role.VALUE: "values",
    Role.ERROR: "errors",
    Role.UPPER_ERROR: "upper errors",
    Role.LOWER_ERROR: "lower errors",
    Role.LIMIT_FLAG: "limit signs",
}
# Headings of new companions. E_ and e_ would differ in their case alone, which tables forbid.
_NEW = {
    Role.UPPER_ERROR: "upper error of {}",
    Role.LOWER_ERROR: "lower error of {}",
    Role.LIMIT_FLAG: "limit flag of {}",
}
_LIMIT_DIGITS = (3, 5)

NewColumn = tuple[Role, Heading, str]


class ColumnFiller:
    """Fills the columns of one plan from one source column."""

    def __init__(self, plan: SheetPlan, moments: Moments, styles: StyleSheet | None) -> None:
        """Prepare for a sheet; `moments` are those of its source column."""
        self.plan = plan
        self.reading = plan.reading
        self.moments = moments
        self.source = moments.source
        self.looks = CellLooks(plan.reading, styles, self.source.cells)
        # Positions in the rows of the log at which a blank cell was asked for.
        self.wanted = np.zeros(len(self.source.values), dtype=bool)
        self._known: dict[Heading, Answers] = {}

    def fill_existing(self, targets: Sequence[tuple[int, Heading]]) -> None:
        """Plan the blanks of columns that are there, and of the companions that they have."""
        for column, heading in targets:
            (target,) = self.reading.columns([column])
            self._report_kept(target)
            if self._has_room(target):
                self._refuse_blocked(column)
                if target.count(NUMBER):
                    agreement.refuse_disagreement(
                        self.moments, target, heading, self.looks.code, self._where(column)
                    )
                self._fill(Role.VALUE, heading, column, target)
            for role in (Role.ERROR, Role.UPPER_ERROR, Role.LOWER_ERROR, Role.LIMIT_FLAG):
                companion = self.reading.companion(column, role)
                if companion is None:
                    continue
                (cells,) = self.reading.columns([companion])
                if self._has_room(cells):
                    self._refuse_blocked(companion)
                    self._fill(role, heading, companion, cells)

    def append(self, headings: Sequence[Heading], filled: Sequence[Heading], errors: bool) -> None:
        """Plan new columns at the right edge of the data, where there is a value for any cell.

        Args:
            headings: of the columns that were asked for.
            filled: of existing columns that are filled.
            errors: whether columns get error columns where they have none.
        """
        wanted: list[NewColumn] = []
        for heading in headings:
            wanted.append((Role.VALUE, heading, heading.text))
            wanted += self._companions(heading, errors)
        if errors and self.source.has_errors:
            for heading in filled:
                wanted += self._error_columns(heading)
        if not wanted:
            return
        if np.all(np.isnan(self.moments.moment.x)):
            self.wanted[:] = True
            return
        first, table, note = right_edge(self.reading, self.source.cells.column, len(wanted))
        self.plan.notes += [note] if note else []
        names = [text for _, _, text in wanted]
        if table is not None:
            names = free_names(names, table.columns)
            self.plan.grown = (table, names)
        hidden = hidden_columns(self.reading.scan)
        style = 0
        for offset, ((role, heading, _), name) in enumerate(zip(wanted, names, strict=True)):
            column = first + offset
            cells = self._fill(role, heading, column, None, name)
            if self.reading.header_row is not None:
                style = self.looks.of_heading(first - 1)
                cells.texts[self.reading.header_row] = (name, style)
            cells.width = float(min(max(len(name) + 3, 11), 15 if self.looks.wraps(style) else 40))
            if column in hidden:
                self.plan.notes.append(
                    f"column {column_letters(column)} was hidden and is shown, as it is new"
                )
        if self.reading.header_row is None:
            self.plan.notes.append("no row of headings was found, so the new columns have none")

    def report_source(self) -> None:
        """List what stays unfilled because of the source column, and what to know of the rest."""
        source, column = self.source, self.source.cells.column
        where = self._where(column)
        for position in sorted(set(source.reasons) | set(self.moments.reasons)):
            if not self.wanted[position]:
                continue
            reason = source.reasons.get(position) or self.moments.reasons[position]
            repeated = f"{NOT_READ}{self.reading.texts.get(column, '').strip()} ("
            if reason == SUMS_UP or reason.startswith(repeated):
                self.plan.passed_over.append(where(position))
            else:
                self.plan.left.append((where(position), reason))
        for remark, positions in source.remarks.items():
            asked = [where(p) for p in positions if self.wanted[p]]
            if asked:
                self.plan.remarks.setdefault(remark, []).extend(asked)
        if any(one.rows or one.texts for one in self.plan.cells):
            self.plan.notes += source.notes

    def _companions(self, heading: Heading, errors: bool) -> list[NewColumn]:
        """Return the companions that a new column gets: errors on request, signs where needed."""
        found = self._error_columns(heading) if errors and self.source.has_errors else []
        if self.source.flagged and self._answers(heading).limits:
            flag = _NEW[Role.LIMIT_FLAG].format(heading.name)
            found.append((Role.LIMIT_FLAG, heading, flag))
        return found

    def _error_columns(self, heading: Heading) -> list[NewColumn]:
        """Return the error columns that a column still lacks."""
        column = next((c for c, one in self.reading.headings.items() if one == heading), None)
        if column is not None and any(
            self.reading.companion(column, role) is not None
            for role in (Role.ERROR, Role.UPPER_ERROR, Role.LOWER_ERROR)
        ):
            return []
        return [
            (role, heading, _NEW[role].format(heading.text))
            for role in (Role.UPPER_ERROR, Role.LOWER_ERROR)
        ]

    def _fill(
        self,
        role: Role,
        heading: Heading,
        column: int,
        target: ColumnCells | None,
        text: str = "",
    ) -> NewCells:
        """Add a column's new cells to the plan."""
        blank = np.ones(len(self.wanted), dtype=bool)
        if target is not None:
            blank = np.frombuffer(target.kinds, dtype=np.uint8) <= EMPTY
        self.wanted |= blank
        answers = self._answers(heading)
        cells = NewCells(column)
        signs: dict[int, str] = {}
        if role is Role.VALUE:
            signs = self._limit_texts(answers, blank, heading, target)
            plain = blank & ~np.isnan(answers.values)
            plain[list(self._textual(answers))] = False
            self._put_numbers(cells, answers.values, plain, target)
            self._leave(answers.reasons, blank, column)
        elif role is Role.LIMIT_FLAG:
            signs = {p: sign for p, sign in answers.limits.items() if blank[p]}
        else:
            self._put_numbers(cells, *self._sizes(role, answers, blank, column), target)
        self._put_texts(cells, signs, target)
        self.plan.cells.append(cells)
        self.plan.columns.append(
            FilledColumn(
                text or " ".join(self.reading.texts.get(column, "").split()),
                heading,
                _HOLDS[role],
                column,
                self.source.heading,
                self.source.cells.column,
                len(cells.rows) + len(signs),
                sum(1 for p in answers.limits if blank[p]) if role is Role.VALUE else 0,
                target is None,
            )
        )
        return cells

    def _textual(self, answers: Answers) -> dict[int, str]:
        """Return the limits that this log writes as text: all, or none where signs stand apart."""
        return {} if self.source.flagged else answers.limits

    def _limit_texts(
        self, answers: Answers, blank: BoolArray, heading: Heading, target: ColumnCells | None
    ) -> dict[int, str]:
        """Return the limits as the log writes them, as text; number and sign apart are no text."""
        if self.source.flagged:
            self._leave_unsigned(answers, blank, heading, target)
            return {}
        return {
            position: typed_text(
                float(answers.values[position]), limit=sign, digits=self._limit_digits(position)
            )
            for position, sign in answers.limits.items()
            if blank[position]
        }

    def _limit_digits(self, position: int) -> int:
        """Return how many digits a limit gets: as many as its source has, three to five."""
        digits = significant_digits(float(self.source.values[position]))
        return min(max(digits, _LIMIT_DIGITS[0]), _LIMIT_DIGITS[1])

    def _leave_unsigned(
        self, answers: Answers, blank: BoolArray, heading: Heading, target: ColumnCells | None
    ) -> None:
        """Leave limits whose sign would have no place: they never become plain numbers."""
        if target is None or self.reading.companion(target.column, Role.LIMIT_FLAG) is not None:
            return
        flag = _NEW[Role.LIMIT_FLAG].format(heading.name)
        reason = f"a limit, whose sign needs a column headed {flag!r}"
        unsigned = dict.fromkeys(answers.limits, reason)
        self._leave(unsigned, blank, target.column)
        for position in answers.limits:
            blank[position] = False

    def _sizes(
        self, role: Role, answers: Answers, blank: BoolArray, column: int
    ) -> tuple[FloatArray, BoolArray]:
        """Return the sizes of errors for an error column, and where they go."""
        sizes = {
            Role.LOWER_ERROR: answers.lower,
            Role.UPPER_ERROR: answers.upper,
            Role.ERROR: np.maximum(answers.lower, answers.upper),
        }[role]
        endless = np.flatnonzero(np.isinf(sizes) & blank).tolist()
        self._leave(dict.fromkeys(endless, "an error that reaches to redshift 0"), blank, column)
        if role is Role.ERROR and np.any(blank & np.isfinite(sizes)):
            self.plan.notes.append(
                f"column {column_letters(column)} holds the larger side of errors that are not"
                " symmetric; for both sides use --with-errors or columns headed E_ and e_"
            )
        cut = [self._where(self.source.cells.column)(p) for p in answers.cut if blank[p]]
        if cut:
            remark = "an error that reaches beyond what is possible, cut there"
            known = self.plan.remarks.setdefault(remark, [])
            known += [one for one in cut if one not in set(known)]
        return sizes, blank & np.isfinite(sizes)

    def _put_numbers(
        self, cells: NewCells, values: FloatArray, where: BoolArray, target: ColumnCells | None
    ) -> None:
        positions = np.flatnonzero(where)
        # No -0 and nothing below normal doubles, which spreadsheet programs do not know.
        kept = np.where(np.abs(values) < np.finfo(np.float64).tiny, 0.0, values)[positions]
        numbers = np.array(self.reading.scan.numbers)
        cells.rows = array("q", numbers[self.reading.rows.start + positions].tobytes())
        cells.numbers = array("d", kept.tobytes())
        cells.styles = self.looks.of_numbers(cells.column, positions, cells.numbers, target)

    def _put_texts(
        self, cells: NewCells, texts: dict[int, str], target: ColumnCells | None
    ) -> None:
        positions = np.array(list(texts), dtype=np.intp)
        styles = self.looks.of_texts(cells.column, positions, target)
        for position, style in zip(texts, styles, strict=True):
            row = self.reading.scan.numbers[self.reading.rows[position]]
            cells.texts[row] = (texts[position], style)

    def _answers(self, heading: Heading) -> Answers:
        known = self._known.get(heading)
        if known is None:
            known = self._known[heading] = self.moments.answers(heading)
        return known

    def _has_room(self, target: ColumnCells) -> bool:
        """Tell whether a blank cell of the column stands beside something in the source."""
        blank = np.frombuffer(target.kinds, dtype=np.uint8) <= EMPTY
        source = np.frombuffer(self.source.cells.kinds, dtype=np.uint8)
        return bool(np.any(blank & (source >= NUMBER)))

    def _report_kept(self, target: ColumnCells) -> None:
        """List the cells that hold no value where one would belong."""
        kinds = np.frombuffer(target.kinds, dtype=np.uint8)
        held = (kinds == WHITE) | (kinds == WORD) | (kinds == LEFT)
        for position in np.flatnonzero(held & ~np.isnan(self.moments.moment.x)).tolist():
            shown = target.reasons.get(position, "white space or a word for no value")
            address = self._where(target.column)(position)
            self.plan.left.append((address, f"not overwritten: {shown.removeprefix(NOT_READ)}"))

    def _leave(self, reasons: dict[int, str], blank: BoolArray, column: int) -> None:
        where = self._where(column)
        self.plan.left += [(where(p), reason) for p, reason in reasons.items() if blank[p]]

    def _where(self, column: int) -> Callable[[int], str]:
        return lambda position: self.reading.where(position, column)

    def _refuse_blocked(self, column: int) -> None:
        scan, rows = self.reading.scan, self.reading.rows
        area = Range(scan.numbers[rows[0]], column, scan.numbers[rows[-1]], column)
        for one in self.reading.blocked:
            if one.intersects(area):
                raise Refusal(
                    f"column {column_letters(column)} of sheet {self.reading.sheet.name!r} meets"
                    f" {one.a1}, which is merged or belongs to one formula; fill another column, or"
                    " undo that first"
                )
