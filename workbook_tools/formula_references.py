"""What a formula of the file refers to (ECMA-376 part 1, 18.17.2, the grammar of formulas).

Only references are looked for. What is not understood is not passed over in silence: it makes the
formula uncertain, and who asks must take it for one that could read anything.
"""

from __future__ import annotations

import re
from typing import NamedTuple

from workbook_tools.cell_address import MAX_COLUMN, MAX_ROW, Range, column_number
from workbook_tools.errors import UsageError

# functions that reach cells which the formula does not name
_REACHING = frozenset({"INDIRECT", "OFFSET", "EVALUATE", "ANCHORARRAY"})

_TOKEN = re.compile(
    r"""
      (?P<skip>
          "(?:[^"]|"")*"                                  # text
        | \#[A-Z/0-9_]+[!?]?                              # error value
        | [-+*/^&=<>%(),;{}@\s]+                          # operators, separators, white space
      )
    | (?P<sheet>
          '(?P<quoted>(?:[^']|'')+)'!
        | (?P<bare>(?:\[\d+\])?[\w.]+(?::[\w.]+)?|\[\d+\])!
      )?
      (?:
        (?P<cell>\$?[A-Za-z]{1,3}\$?[0-9]{1,7})(?::(?P<to>\$?[A-Za-z]{1,3}\$?[0-9]{1,7}))?(?![\w.(\[!])
        | (?P<columns>\$?[A-Za-z]{1,3}:\$?[A-Za-z]{1,3})(?![\w.(\[!])
        | (?P<rows>\$?[0-9]{1,7}:\$?[0-9]{1,7})(?![\w.])
        | (?P<name>[^\W\d][\w.?\\]*|\\[\w.?\\]*)
          (?: (?P<call>\s*\() | (?P<columns_of>\[(?:[^\[\]']|'.|\[(?:[^\[\]']|'.)*\])*\]) )?
        | (?P<error>\#REF!)
      )
    | (?P<number>(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[Ee][+-]?[0-9]+)?)
    """,
    re.VERBOSE | re.DOTALL,
)
_CORNER = re.compile(r"(\$?)([A-Za-z]{1,3})(\$?)([0-9]{1,7})")
_INNER = re.compile(r"\[((?:[^\[\]']|'.)*)\]")


class Area(NamedTuple):
    """Cells that a formula refers to.

    Attributes:
        first_sheet, last_sheet: the sheets from tab to tab; None for the formula's own sheet.
        cells: the cells on each of them, as seen from the cell that holds the formula.
        moves: whether first row, first column, last row and last column move along when the
            formula is copied (no dollar sign).
    """

    first_sheet: str | None
    last_sheet: str | None
    cells: Range
    moves: tuple[bool, bool, bool, bool]


class NameUse(NamedTuple):
    """A defined name or whole table; `sheet` is None where none is written before it."""

    sheet: str | None
    name: str


class TableUse(NamedTuple):
    """A table by columns, given from left to right end; without any where all are meant."""

    table: str
    columns: tuple[str, ...]


class References(NamedTuple):
    """All that a formula refers to.

    Attributes:
        areas, names, tables: in the order of the formula.
        uncertain: whether it may refer to other cells too.
    """

    areas: tuple[Area, ...]
    names: tuple[NameUse, ...]
    tables: tuple[TableUse, ...]
    uncertain: bool


def references(formula: str) -> References:
    """Return what a formula refers to; never fails.

    Args:
        formula: as the file holds it: English, commas, no equals sign.
    """
    areas: list[Area] = []
    names: list[NameUse] = []
    tables: list[TableUse] = []
    uncertain = False
    position = 0
    while position < len(formula):
        match = _TOKEN.match(formula, position)
        if match is None or match.end() == position:
            # a colon between what are no plain corners, a stray bracket, or a grammar of tomorrow
            uncertain = True
            position += 1
            continue
        position = match.end()
        if match["skip"] or match["number"] or match["error"]:
            continue
        first, last, foreign = _sheets(match)
        if match["call"]:
            uncertain |= match["name"].upper().rpartition(".")[2] in _REACHING
        elif foreign:
            continue
        elif match["columns_of"]:
            tables.append(TableUse(match["name"], _columns(match["columns_of"])))
        elif match["name"]:
            names.append(NameUse(first, match["name"]))
        else:
            area = _area(match, first, last)
            if area is not None:
                areas.append(area)
            else:
                names.append(NameUse(first, match[0].rpartition("!")[2]))
    return References(tuple(areas), tuple(names), tuple(tables), uncertain)


def _sheets(match: re.Match[str]) -> tuple[str | None, str | None, bool]:
    """Return first and last sheet, and whether they lie in another workbook."""
    if match["sheet"] is None:
        return None, None, False
    text = match["bare"] if match["quoted"] is None else match["quoted"].replace("''", "'")
    book, bracket, sheets = text.rpartition("]")
    if bracket and not book.endswith("[0"):
        return None, None, True  # [0] is the workbook itself
    first, _, last = sheets.partition(":")
    return first or None, last or first or None, False


def _area(match: re.Match[str], first: str | None, last: str | None) -> Area | None:
    """Return the cells meant; None for what only looks like a cell, such as the name ABC1234567."""
    try:
        if match["columns"]:
            left, right = match["columns"].split(":")
            ends = sorted([_end(left), _end(right)])
            cells = Range(1, ends[0][0], MAX_ROW, ends[1][0])
            return Area(first, last, cells, (False, ends[0][1], False, ends[1][1]))
        if match["rows"]:
            rows = sorted((int(end.strip("$")), "$" not in end) for end in match["rows"].split(":"))
            if not rows[0][0] or rows[1][0] > MAX_ROW:
                return None
            cells = Range(rows[0][0], 1, rows[1][0], MAX_COLUMN)
            return Area(first, last, cells, (rows[0][1], False, rows[1][1], False))
        corners = [_corner(match["cell"]), _corner(match["to"] or match["cell"])]
    except UsageError:
        return None
    (top, top_moves), (bottom, bottom_moves) = sorted(corner[0] for corner in corners)
    (left_end, left_moves), (right_end, right_moves) = sorted(corner[1] for corner in corners)
    if not top or bottom > MAX_ROW:
        return None
    cells = Range(top, left_end, bottom, right_end)
    return Area(first, last, cells, (top_moves, left_moves, bottom_moves, right_moves))


def _corner(text: str) -> tuple[tuple[int, bool], tuple[int, bool]]:
    match = _CORNER.fullmatch(text)
    assert match is not None  # the token has this form
    return (int(match[4]), not match[3]), (column_number(match[2]), not match[1])


def _end(column: str) -> tuple[int, bool]:
    return column_number(column), "$" not in column


def _columns(brackets: str) -> tuple[str, ...]:
    """Return the columns in `[z]`, `[[#This Row],[z]]` or `[[z]:[age]]`; none for `[#All]`."""
    inside = brackets[1:-1]
    parts = _INNER.findall(inside) or [inside]
    plain = [re.sub(r"'(.)", r"\1", part).strip() for part in parts if not part.startswith("#")]
    return tuple(part.removeprefix("@") for part in plain if part)
