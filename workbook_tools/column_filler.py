"""Works out the new cells of a sheet's columns from one source column."""

from __future__ import annotations

import functools
from array import array
from collections import Counter
from collections.abc import Callable, Sequence
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from epochconv.number_text import plain_number
from epochconv.typed_text import typed_text
from workbook_tools.agreement import Agreement, disagreement
from workbook_tools.answers import Answers, FloatArray, Moments
from workbook_tools.cell_address import Range, column_letters
from workbook_tools.cell_looks import CellLooks
from workbook_tools.column_meanings import ERRORS, Heading, Role
from workbook_tools.errors import Refusal
from workbook_tools.number_formats import significant_digits
from workbook_tools.sheet_edits import NewCells
from workbook_tools.sheet_plan import FilledColumn, NamedCell, SheetPlan
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.styles import StyleSheet
from workbook_tools.typed_cells import EMPTY, LEFT, NUMBER, WHITE, WORD, ColumnCells

BoolArray = NDArray[np.bool_]

_HOLDS = {
    Role.VALUE: "values",
    Role.ERROR: "errors",
    Role.UPPER_ERROR: "upper errors",
    Role.LOWER_ERROR: "lower errors",
    Role.LIMIT_FLAG: "limit signs",
}
_LIMIT_DIGITS = (3, 5)
# Nobody types more of them; a stored 14.199999999999999 was 14.2.
_TYPED_DIGITS = 12
_CUT = "an error that reaches beyond what is possible, cut there"
# Sides of an error that differ by less are shown alike.
_SYMMETRIC = 1e-3


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

    def fill_existing(self, targets: Sequence[tuple[int, Heading]]) -> list[int]:
        """Plan the blanks of columns that are there, and of the companions that they have.

        Returns:
            The columns whose values are those of the source now, as they were or filled.
        Raises:
            Refusal: the filled cells of a column with blanks disagree, or it cannot be written to.
        """
        converted = []
        for column, heading in targets:
            (target,) = self.reading.columns([column])
            self._report_kept(target)
            has_room = self._has_room(target)
            if has_room:
                self._refuse_blocked(target)
            if target.count(NUMBER) and not self._agrees(target, heading, has_room):
                continue
            converted.append(column)
            if has_room:
                self.put(Role.VALUE, heading, column, target)
            for role in (*ERRORS, Role.LIMIT_FLAG):
                self._fill_companion(role, heading, column)
        return converted

    def put(
        self, role: Role, heading: Heading, column: int, target: ColumnCells | None, text: str = ""
    ) -> NewCells:
        """Add a column's new cells to the plan and return them.

        Args:
            role: whether it holds values, errors of one side or both, or the signs of limits.
            heading: what it holds, or the column to which its errors or signs belong.
            target: the column where it is there already; None for a new one.
            text: the heading of a new one.
        """
        blank = np.ones(len(self.wanted), dtype=bool)
        if target is not None:
            blank = np.frombuffer(target.kinds, dtype=np.uint8) <= EMPTY
        self.wanted |= blank
        answers = self.answers(heading)
        cells = NewCells(column)
        signs: dict[int, str] = {}
        if role is Role.VALUE:
            self._leave(answers.reasons, blank, column)
            signs = self._limit_texts(answers, blank, heading, target)
            plain = blank & ~np.isnan(answers.values)
            plain[list(signs)] = False
            self._put_numbers(cells, answers.values, plain, target)
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

    def answers(self, heading: Heading) -> Answers:
        """Return what a column with that heading holds for each row."""
        known = self._known.get(heading)
        if known is None:
            known = self._known[heading] = self.moments.answers(heading)
        return known

    def report_source(self) -> None:
        """List what stays unfilled because of the source column, and what to know of the rest."""
        source, column = self.source, self.source.cells.column
        where = self._where(column)
        if np.any(self.wanted):  # headings that are repeated stand in the other columns too
            passed = sorted(source.passed_over.items())
            self.plan.passed_over += [NamedCell(where(p), why) for p, why in passed]
        reasons = self.moments.reasons | source.reasons
        texts = self.reading.texts_of(column) if reasons else {}
        for position in sorted(reasons):
            if self.wanted[position]:
                shown = source.cells.shown.get(position, "")
                if source.cells.kinds[position] != LEFT:
                    shown = _as_typed(texts.get(position, ""))
                self.plan.left.append(NamedCell(where(position), reasons[position], shown))
        for remark, positions in source.remarks.items():
            read = (p for p in positions if p not in self.moments.reasons)
            asked = [where(p) for p in read if self.wanted[p]]
            if asked:
                self.plan.remarks.setdefault(remark, []).extend(asked)
        words = Counter(
            word
            for p, word in source.cells.shown.items()
            if source.cells.kinds[p] == WORD and self.wanted[p] and p not in source.passed_over
        )
        if words:
            listed = ", ".join(f"{word} ({count})" for word, count in words.most_common())
            self.plan.notes.append(f"no value in column {column_letters(column)}: {listed}")
        self.plan.notes += source.notes

    def _agrees(self, target: ColumnCells, heading: Heading, has_room: bool) -> bool:
        """Tell whether a column holds what the source gives; one with blanks must.

        Raises:
            Refusal: it has blanks, and does not agree.
        """
        values = self.answers(heading).values
        found = Agreement(values, target, heading.unit, self.looks.code)
        if found.wrong and has_room:
            where = self._where(target.column)
            raise Refusal(disagreement(self.moments, found, heading, where))
        return not found.wrong

    def _fill_companion(self, role: Role, heading: Heading, owner: int) -> None:
        """Plan the blanks of a companion; errors that disagree are left alone and named."""
        column = self.reading.companion(owner, role)
        if column is None:
            return
        (cells,) = self.reading.columns([column])
        if not self._has_room(cells):
            return
        if role in ERRORS and not self.moments.has_errors:
            self.plan.notes.append(
                f"column {column_letters(column)} stays blank, since column"
                f" {column_letters(self.source.cells.column)} gives no errors"
            )
            return
        meaning = self.reading.meanings[column]
        if meaning.unit is not None:
            heading = replace(heading, unit=meaning.unit)
        if role in ERRORS and cells.count(NUMBER):
            sizes = _sizes_for(role, self.answers(heading))
            found = Agreement(sizes, cells, heading.unit, self.looks.code)
            if found.wrong:
                self.plan.notes.append(
                    f"column {column_letters(column)} is left alone, since its errors are others:"
                    f" {found.faults(self._where(column))}"
                )
                return
        self._refuse_blocked(cells)
        self.put(role, heading, column, cells)

    def _limit_texts(
        self, answers: Answers, blank: BoolArray, heading: Heading, target: ColumnCells | None
    ) -> dict[int, str]:
        """Return the limits that this log writes as text: all, or none where signs stand apart."""
        if self.source.flagged:
            self._leave_unsigned(answers, blank, heading, target)
            return {}
        return {
            position: typed_text(
                float(answers.values[position]), limit=sign, digits=self._limit_digits[position]
            )
            for position, sign in answers.limits.items()
            if blank[position]
        }

    @functools.cached_property
    def _limit_digits(self) -> dict[int, int]:
        """How many digits each limit gets: as many as its source has, three to five."""
        fewest, most = _LIMIT_DIGITS
        numbers = self.source.cells.numbers
        return {
            position: min(max(significant_digits(numbers[position]), fewest), most)
            for position in self.source.limits
        }

    def _leave_unsigned(
        self, answers: Answers, blank: BoolArray, heading: Heading, target: ColumnCells | None
    ) -> None:
        """Leave limits whose sign would have no place: they never become plain numbers."""
        if target is None or self.reading.companion(target.column, Role.LIMIT_FLAG) is not None:
            return
        flag = flag_heading(self.reading, heading)
        reason = f"a limit, whose sign needs a column headed {flag!r}"
        self._leave(dict.fromkeys(answers.limits, reason), blank, target.column)
        blank[list(answers.limits)] = False

    def _sizes(
        self, role: Role, answers: Answers, blank: BoolArray, column: int
    ) -> tuple[FloatArray, BoolArray]:
        """Return the sizes of errors for an error column, and where they go."""
        sizes = _sizes_for(role, answers)
        endless = {
            p: "an error that reaches to redshift 0"
            if np.isinf(answers.lower[p])
            else "an error that reaches to the beginning"
            for p in np.flatnonzero(np.isinf(sizes) & blank).tolist()
        }
        self._leave(endless, blank, column)
        where = blank & np.isfinite(sizes)
        uneven = np.abs(answers.upper[where] - answers.lower[where]) > _SYMMETRIC * sizes[where]
        if role is Role.ERROR and np.any(uneven):
            self.plan.notes.append(
                f"column {column_letters(column)} holds the larger side of errors that are not"
                " symmetric; for both sides use columns headed 'upper error of' and"
                " 'lower error of'"
            )
        cut = [self._where(self.source.cells.column)(p) for p in answers.cut if blank[p]]
        if cut:
            known = self.plan.remarks.setdefault(_CUT, [])
            held = set(known)
            known += [one for one in cut if one not in held]
        return sizes, where

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
            shown = target.shown.get(position, "")
            address = self._where(target.column)(position)
            self.plan.left.append(NamedCell(address, "not overwritten", shown or "white space"))

    def _leave(self, reasons: dict[int, str], blank: BoolArray, column: int) -> None:
        where = self._where(column)
        self.plan.left += [NamedCell(where(p), reason) for p, reason in reasons.items() if blank[p]]

    def _where(self, column: int) -> Callable[[int], str]:
        return lambda position: self.reading.where(position, column)

    def _refuse_blocked(self, target: ColumnCells) -> None:
        """Raise where cells cannot be written to; a merge matters where a value would go into it.

        Raises:
            Refusal: it names the rectangle.
        """
        scan, rows = self.reading.scan, self.reading.rows
        numbers, column = scan.numbers, target.column
        area = Range(numbers[rows[0]], column, numbers[rows[-1]], column)
        blank = np.frombuffer(target.kinds, dtype=np.uint8) <= EMPTY
        busy = blank & ~np.isnan(self.moments.moment.x)
        for one in self.reading.blocked:
            if not one.intersects(area):
                continue
            inside = scan.rows_between(one.first_row, one.last_row)
            here = [i - rows.start for i in inside if rows.start <= i < rows.stop]
            if one in self.reading.merged and not np.any(busy[here]):
                continue
            raise Refusal(
                f"column {column_letters(column)} of sheet {self.reading.sheet.name!r} meets"
                f" {one.a1}, which is merged or belongs to one formula; fill another column, or"
                " undo that first"
            )


def _as_typed(text: str) -> str:
    """Return what a cell shows in one line, a number without the digits that only files hold."""
    line = " ".join(text.split())
    number = plain_number(line) if len(line) > _TYPED_DIGITS else None
    return line if number is None else f"{number:.6g}"


def flag_heading(reading: SheetReading, heading: Heading) -> str:
    """Return the heading of a column with the signs of another's limits."""
    others = (one for one in reading.headings.values() if not one.same_kind(heading))
    unit = f" [{heading.unit_text}]" if any(one.name == heading.name for one in others) else ""
    return f"limit flag of {heading.name}{unit}"


def _sizes_for(role: Role, answers: Answers) -> FloatArray:
    """Return the sizes of errors that a column of that role holds."""
    if role is Role.LOWER_ERROR:
        return answers.lower
    if role is Role.UPPER_ERROR:
        return answers.upper
    return np.maximum(answers.lower, answers.upper)
