"""The main sheet: the list that everybody types into, under groups, names and units."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

from xlsxwriter.utility import xl_col_to_name
from xlsxwriter.workbook import Workbook
from xlsxwriter.worksheet import Worksheet

from tests.samples.looks import HEADER, Looks
from tests.samples.many_hands.entries import Entry, Formula, Rich, write_entry
from tests.samples.many_hands.list_rows import ROWS, Row

NAME = "Everyone"
GROUPS_ROW, NAMES_ROW, UNITS_ROW = 3, 4, 5  # counted from zero, as XlsxWriter does
FIRST_ROW = UNITS_ROW + 1
LAST_ROW = FIRST_ROW + len(ROWS) - 1
TOTAL_ROW = LAST_ROW + 2
NOTES_ROW = TOTAL_ROW + 2


@dataclass(frozen=True)
class Column:
    """One column: group above, name, unit below, field of a row ("" for none), width and look."""

    group: str
    name: Entry
    unit: Entry
    typed: str
    width: float
    look: Mapping[str, Any] = field(default_factory=dict)


_TO_DERIVE = "Where (for the talk)"
COLUMNS = (
    Column("Target", "Object", None, "name", 13, {"bold": True}),
    Column("Target", "Class", None, "kind", 12),
    Column("Redshift", "z", "---", "z", 15, {"align": "left", "text_wrap": True}),
    Column("Redshift", "σ_z", "---", "error", 8),
    Column("When", "Lookback time", "Gyr", "lookback", 10, {"num_format": "0.00"}),
    Column("When", "Age of\nthe universe", "Gyr", "age", 10),
    Column(_TO_DERIVE, Rich((("D", ""), ("C", "lowered"))), "Mpc", "", 10),
    Column(_TO_DERIVE, "Luminosity\ndistance", "Gly", "", 10, {"num_format": "#,##0.0"}),
    Column(_TO_DERIVE, "T_CMB", "K", "", 8),
    Column(
        _TO_DERIVE,
        "H(z)",
        Rich((("km s", ""), ("-1", "raised"), (" Mpc", ""), ("-1", "raised"))),
        "",
        12,
    ),
    Column(_TO_DERIVE, "m\u2212M", "mag", "", 8, {"num_format": "0.00"}),
    Column("", "Epoch", None, "epoch", 8),
    Column("", "Stellar age", "Gyr", "stellar_age", 9),
    Column("", "Distance", "Mpc", "", 9),
    Column("", "By", None, "by", 5, {"align": "center"}),
    Column("", "Notes", None, "note", 22),
)
# Whose stars somebody has dated, in Gyr.
STELLAR_AGES = {"HBN 0455-35": 0.3, "HBN 0503+01": 1.1, "HBN 0849+21": 4.5}
MERGED = ("HBN 1508-37", "z")
TOTALS = (
    ("mean of the first four", "AVERAGE", 1.62615),
    ("of how many", "COUNT", 4.0),
)
NOTES = (
    "Notes:",
    "z in the CMB frame, we think. * one line only; † from the archive; ¹ see OZ's notebook.",
    "No commas please. (PM: then tell my keyboard.)",
)
COMMENTS = {
    ("HBN 0140-25", "z"): ("RQ", "Zero so that it sorts to the top. Not measured!"),
    ("HBN 0411-08", "z"): ("YE", "Drop-out only, no line. Leave the sign, it is a limit."),
    ("HBN 0849+21", "z"): ("KJ", "Sky line. Second one is right."),
    ("HBN 1037+16", "z"): ("PM", "I typed 2-3, as in: between two and three."),
    ("HBN 1446-14", "age"): ("OZ", "Did somebody work this one out already?"),
}


def column_index(typed: str) -> int:
    """Where the column of a field stands, counted from zero."""
    return [column.typed for column in COLUMNS].index(typed)


def cells_of(typed: str) -> str:
    """The absolute address of the cells of a field, without the sheet."""
    letters = xl_col_to_name(column_index(typed))
    return f"${letters}${FIRST_ROW + 1}:${letters}${LAST_ROW + 1}"


def write_list_sheet(book: Workbook, looks: Looks) -> None:
    """Add the sheet."""
    sheet = book.add_worksheet(NAME)
    title = looks.of({"bold": True, "font_size": 15, "font_color": "#3B5573"})
    sheet.merge_range("A1:H1", "Hobnail programme – the list that everyone types into", title)
    sheet.write("A2", "Type what you have. Somebody will put it on one clock.", looks.of())
    _write_headings(sheet, looks)
    for offset, row in enumerate(ROWS):
        _write_row(sheet, looks, FIRST_ROW + offset, row)
    z, first = column_index("z"), FIRST_ROW + [row.name for row in ROWS].index(MERGED[0])
    sheet.merge_range(first, z, first + 1, z, None, looks.of(COLUMNS[z].look, {"valign": "top"}))
    write_entry(sheet, looks, (first, z), ROWS[first - FIRST_ROW].z, {"valign": "top"})
    for offset, (label, function, result) in enumerate(TOTALS):
        total = Formula(f"={function}(C{FIRST_ROW + 1}:C{FIRST_ROW + 4})", result)
        write_entry(sheet, looks, (TOTAL_ROW + offset, 0), label, {"italic": True})
        write_entry(sheet, looks, (TOTAL_ROW + offset, z), total, {"italic": True})
    sheet.write(NOTES_ROW, 0, NOTES[0], looks.of({"bold": True}))
    for offset, text in enumerate(NOTES[1:], start=1):
        sheet.merge_range(
            NOTES_ROW + offset, 0, NOTES_ROW + offset, len(COLUMNS) - 1, text, looks.of()
        )
    _write_comments(sheet)
    _add_rules(book, sheet)
    sheet.freeze_panes(FIRST_ROW, 1)
    sheet.set_landscape()
    sheet.set_paper(8)  # A3
    sheet.fit_to_pages(1, 0)


def _write_headings(sheet: Worksheet, looks: Looks) -> None:
    start = 0
    while start < len(COLUMNS):
        group, stop = COLUMNS[start].group, start + 1
        while stop < len(COLUMNS) and COLUMNS[stop].group == group:
            stop += 1
        if group:
            sheet.merge_range(GROUPS_ROW, start, GROUPS_ROW, stop - 1, group, looks.of(HEADER))
        start = stop
    for index, column in enumerate(COLUMNS):
        sheet.set_column(index, index, column.width)
        write_entry(sheet, looks, (NAMES_ROW, index), column.name, HEADER)
        units = {**HEADER, "bold": False, "italic": True}
        write_entry(sheet, looks, (UNITS_ROW, index), column.unit or "", units)
    sheet.set_row(NAMES_ROW, 30)


def _write_row(sheet: Worksheet, looks: Looks, at: int, row: Row) -> None:
    lines = row.z.count("\n") + 1 if isinstance(row.z, str) else 1
    if row.hidden or lines > 1:
        sheet.set_row(at, 13 * lines, None, {"hidden": row.hidden})
    others: dict[str, Entry] = {
        "epoch": "J2000" if row.name.startswith("HBN") else None,
        "stellar_age": STELLAR_AGES.get(row.name),
    }
    for index, column in enumerate(COLUMNS):
        entry: Entry = None
        if column.typed:
            entry = others[column.typed] if column.typed in others else getattr(row, column.typed)
        if entry == "" or (row.name, column.typed) == MERGED:
            entry = None
        write_entry(sheet, looks, (at, index), entry, column.look)


def _write_comments(sheet: Worksheet) -> None:
    places = {row.name: FIRST_ROW + offset for offset, row in reversed(list(enumerate(ROWS)))}
    for (name, typed), (author, text) in COMMENTS.items():
        place = places[name], column_index(typed)
        sheet.write_comment(*place, f"{author}: {text}", {"author": author})


def _add_rules(book: Workbook, sheet: Worksheet) -> None:
    """Validations and conditional formats."""
    kind, age = column_index("kind"), column_index("lookback")
    kinds = ["quasar", "lensed galaxy", "burst", "supernova", "absorber", "neighbour"]
    choice = {"validate": "list", "source": kinds, "error_type": "warning"}
    sheet.data_validation(FIRST_ROW, kind, LAST_ROW, kind, choice)
    scale = {"type": "2_color_scale", "min_color": "#FFFFFF", "max_color": "#9FC5B0"}
    sheet.conditional_format(FIRST_ROW, age, LAST_ROW, age, scale)
    bad = book.add_format({"font_color": "#9C0006", "bg_color": "#FFD5D2"})
    rule = {"type": "formula", "criteria": f"=ISTEXT($C{FIRST_ROW + 1})", "format": bad}
    sheet.conditional_format(FIRST_ROW, 0, LAST_ROW, 0, rule)
    sheet.ignore_errors({"number_stored_as_text": f"C{FIRST_ROW + 1}:D{LAST_ROW + 1}"})
