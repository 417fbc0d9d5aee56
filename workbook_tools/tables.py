"""The tables of a sheet (ListObjects), and how one grows at its right edge.

A grown table must stay what Excel takes for whole: range, filter range, number of columns and names
agree (ECMA-376 part 1, 18.5.1.2 and 18.5.1.3).
"""

from __future__ import annotations

import re
from collections.abc import Collection, Sequence
from dataclasses import dataclass

from workbook_tools.cell_address import MAX_COLUMN, Range, parse_range
from workbook_tools.errors import Refusal, UsageError
from workbook_tools.hex_escapes import decoded, encoded
from workbook_tools.splice import Edit, EditKind
from workbook_tools.xml_offsets import (
    Element,
    append_child,
    escape_attribute,
    parse,
    qualified,
    set_attribute,
)

MAX_NAME = 255
"""Characters of the name of a column, counted as UTF-16 does."""

_CONTROL = re.compile(r"[\x00-\x1f\x7f\ud800-\udfff\ufffe\uffff]+")


@dataclass(frozen=True)
class Table:
    """One table.

    Attributes:
        part: the part that describes it.
        name: the name that formulas use.
        id: its number, unique in the workbook.
        ref: the cells it covers, header and totals included.
        header_rows, totals_rows: 0 or 1.
        columns: names from left to right.
        growable: whether columns may be added.
        reason: why not; empty where they may.
        filtered: whether its filter hides rows.
    """

    part: str
    name: str
    id: int
    ref: Range
    header_rows: int
    totals_rows: int
    columns: tuple[str, ...]
    growable: bool
    reason: str
    filtered: bool = False

    @property
    def data(self) -> Range:
        """The rows between header and totals."""
        return self.ref._replace(
            first_row=self.ref.first_row + self.header_rows,
            last_row=self.ref.last_row - self.totals_rows,
        )


def read_table(xml: bytes, part: str) -> Table:
    """Read the description of a table.

    Raises:
        Refusal: the part cannot be read or is no table.
    """
    return _table(parse(xml, part), part)


def grow(xml: bytes, part: str, new_columns: Sequence[str]) -> list[Edit]:
    """Return the edits of a table's part that add columns at its right edge, in order.

    The header cells must get the same names; the cells of a totals row stay empty.

    Args:
        xml: the part.
        part: its name.
        new_columns: names from left to right, made free before (see `free_name`).
    Raises:
        Refusal: the part cannot be read.
        ValueError: the table cannot grow, or a name is not free (a bug of ours).
    """
    root = parse(xml, part)
    table = _table(root, part)
    if not table.growable or table.ref.last_column + len(new_columns) > MAX_COLUMN:
        raise ValueError(f"table {table.name!r} cannot grow")
    if free_names(new_columns, table.columns) != list(new_columns):
        raise ValueError(f"names {new_columns!r} are not free in table {table.name!r}")
    ref = table.ref._replace(last_column=table.ref.last_column + len(new_columns))
    edits = [set_attribute(root, "ref", ref.a1)]
    auto_filter = root.find("autoFilter")
    if auto_filter is not None:
        filtered = ref._replace(last_row=ref.last_row - table.totals_rows)
        edits.append(set_attribute(auto_filter, "ref", filtered.a1))
    listed = root.find("tableColumns")
    assert listed is not None  # a table without it is not growable
    edits += _column_edits(listed, new_columns)
    return sorted(edits, key=lambda edit: (edit.start, edit.end))


def free_name(wanted: str, taken: Collection[str]) -> str:
    """Return a column name like `wanted` that no column has yet, whatever the case of its letters.

    Line breaks become spaces and what is too long is cut, because the header cell must hold the
    very same text; a name that is taken gets a number behind it, such as `Age [Gyr] (2)`.
    """
    plain = _shortened(_CONTROL.sub(" ", wanted), MAX_NAME)
    if not plain.strip():
        plain = "Column"
    used = {name.casefold() for name in taken}
    name, number = plain, 1
    while name.casefold() in used:
        number += 1
        ending = f" ({number})"
        name = _shortened(plain, MAX_NAME - len(ending)) + ending
    return name


def free_names(wanted: Sequence[str], taken: Collection[str]) -> list[str]:
    """Return `free_name` of each in turn, free of each other too."""
    names: list[str] = []
    for name in wanted:
        names.append(free_name(name, [*taken, *names]))
    return names


def _table(root: Element, part: str) -> Table:
    attributes = root.attributes
    try:
        ref = parse_range(attributes.get("ref", ""))
        number = int(attributes.get("id", "0"))
        header_rows = int(attributes.get("headerRowCount", "1"))
        totals_rows = int(attributes.get("totalsRowCount", "0"))
    except (UsageError, ValueError) as error:
        raise _no_table(part) from error
    if root.local != "table":
        raise _no_table(part)
    listed = root.find("tableColumns")
    columns = list(listed.find_all("tableColumn")) if listed is not None else []
    reason = _why_not(root, ref, columns)
    return Table(
        part=part,
        name=attributes.get("displayName", attributes.get("name", "")),
        id=number,
        ref=ref,
        header_rows=header_rows,
        totals_rows=totals_rows,
        columns=tuple(decoded(column.attributes.get("name", "")) for column in columns),
        growable=not reason,
        reason=reason,
        filtered=any(list(one.find_all("filterColumn")) for one in root.find_all("autoFilter")),
    )


def _why_not(root: Element, ref: Range, columns: list[Element]) -> str:
    kind = root.attributes.get("tableType", "worksheet")
    if kind == "queryTable" or any("queryTableFieldId" in c.attributes for c in columns):
        return "it shows the result of a query, which lists its columns elsewhere"
    if kind == "xml" or any(c.find("xmlColumnPr") is not None for c in columns):
        return "its columns are mapped to an XML file"
    if kind != "worksheet":
        return f"it is of the unknown kind {kind!r}"
    if len(columns) != ref.width:
        return f"it lists {len(columns)} columns but covers {ref.width}"
    if ref.last_column == MAX_COLUMN:
        return "it ends at the last column of the sheet"
    return ""


def _column_edits(listed: Element, new_columns: Sequence[str]) -> list[Edit]:
    columns = list(listed.find_all("tableColumn"))
    ids = [int(c.attributes["id"]) for c in columns if c.attributes.get("id", "").isdecimal()]
    name = qualified(listed.prefix, "tableColumn")
    tags = "".join(
        f'<{name} id="{number}" name="{escape_attribute(encoded(column))}"/>'
        for number, column in enumerate(new_columns, max(ids, default=0) + 1)
    )
    edits = [append_child(listed, tags.encode(), EditKind.TABLE_COLUMN_APPENDED)]
    if "count" in listed.attributes:
        edits.append(set_attribute(listed, "count", str(len(columns) + len(new_columns))))
    return edits


def _shortened(name: str, length: int) -> str:
    return name.encode("utf-16-le")[: 2 * length].decode("utf-16-le", "ignore")


def _no_table(part: str) -> Refusal:
    return Refusal(
        f"{part} should describe a table and does not; open the workbook in its own program, let it"
        " repair the file and save it again."
    )
