"""The main sheet of the sample: the shared log of the season, in a table."""

from __future__ import annotations

import datetime
from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Any

from xlsxwriter.utility import xl_col_to_name
from xlsxwriter.workbook import Workbook
from xlsxwriter.worksheet import Worksheet

from tests.samples.looks import DATE, HEADER, MARKS, Looks
from tests.samples.programme import Row

NAME = "Log 2026"
TABLE = "NightLog"
HEADER_ROW = 4  # counted from zero, as XlsxWriter does
FIRST_ROW = HEADER_ROW + 1
# Lyman alpha in vacuum in nm (NIST Atomic Spectra Database, from memory).
LYMAN_ALPHA = 121.567
_REDSHIFT_HERE = f"{TABLE}[[#This Row],[z]]"
LYMAN_FORMULA = f'IF(ISNUMBER({_REDSHIFT_HERE}),{LYMAN_ALPHA}*(1+{_REDSHIFT_HERE}),"–")'


@dataclass(frozen=True)
class Column:
    """One column: heading, field that the observers typed ("" for none), width and look."""

    heading: str
    typed: str
    width: float
    look: dict[str, Any] = field(default_factory=dict)


_CENTRE: dict[str, Any] = {"align": "center"}
COLUMNS = (
    Column("Object", "object", 14.5, {"bold": True}),
    Column("Class", "class", 12.5),
    Column("RA", "ra", 10.5),
    Column("Dec", "dec", 10),
    Column("Night", "night", 11, DATE),
    Column("Site", "site", 11),
    Column("Instrument", "instrument", 11),
    Column("Exposure [s]", "exposure", 10.5, {"num_format": "#,##0"}),
    Column("Seeing [arcsec]", "seeing", 9, {"num_format": "0.0", "align": "center"}),
    Column("z", "z", 8),
    Column("e_z", "e_z", 7.5),
    Column("Quality", "quality", 8.5, _CENTRE),
    Column("Lookback time [Gyr]", "lookback", 12, {"num_format": "0.00"}),
    Column("Age (Gyr)", "", 9, {"num_format": "0.00"}),
    Column("Comoving distance / Mpc", "", 12),
    Column("T_CMB [K]", "", 9),
    Column("D_L [Mpc]", "", 10, {"num_format": "#,##0"}),
    Column("Lyα at [nm]", "", 10, {"num_format": "0.0", "align": "right"}),
    Column("Priority", "priority", 8.5, _CENTRE),
    Column("Observers", "observers", 10, _CENTRE),
    Column("Proposal", "proposal", 9, _CENTRE),
    Column("Notes", "notes", 40),
)
HIDDEN = "Proposal"
# Somebody formatted these columns beforehand: one down to a row, one as a whole.
FORMATTED_CELLS, FORMATTED_TO = "Age (Gyr)", 30
FORMATTED_WHOLE = "D_L [Mpc]"
LINKED = ("HBN 0938+04", "HBN 1107+19", "HBN 1556-18")
COMMENTS = {
    ("HBN 1210-26", "z"): ("TW", "Typed on the phone, sorry if it looks odd."),
    ("HBN 1433-09", "z"): ("YE", "Drop-out only, no line. Leave the sign, it is a limit."),
    ("HBN 1701-33", "Notes"): ("TW", "Two hours lost. RQ wants it back next season."),
    ("HBN 2342-21", "z"): ("OZ", "One line and a break. B until the red arm is back."),
}
HEADING_COMMENTS = {
    "Lookback time [Gyr]": (
        "KJ",
        "Did these one by one. Default parameters, two decimals will do.",
    ),
    "D_L [Mpc]": ("OZ", "Needed for the proposal. Could somebody fill it?"),
}


def column_index(heading: str) -> int:
    """Where a column stands, counted from zero."""
    return [column.heading for column in COLUMNS].index(heading)


def cells_of(heading: str, count: int) -> str:
    """The absolute address of a column's cells, without the sheet."""
    letters = xl_col_to_name(column_index(heading))
    return f"${letters}${FIRST_ROW + 1}:${letters}${FIRST_ROW + count}"


def write_log_sheet(book: Workbook, looks: Looks, rows: Sequence[Row]) -> None:
    """Add the sheet."""
    sheet = book.add_worksheet(NAME)
    _write_titles(sheet, looks)
    for index, column in enumerate(COLUMNS):
        whole = looks.of(column.look) if column.heading == FORMATTED_WHOLE else None
        hidden = {"hidden": True} if column.heading == HIDDEN else {}
        sheet.set_column(index, index, column.width, whole, hidden)
    columns: list[dict[str, Any]] = [
        {"header": column.heading, "header_format": looks.of(HEADER)} for column in COLUMNS
    ]
    columns[column_index("Lyα at [nm]")]["formula"] = LYMAN_FORMULA
    last_row = FIRST_ROW + len(rows) - 1
    style = {"name": TABLE, "columns": columns, "style": "Table Style Light 1"}
    sheet.add_table(HEADER_ROW, 0, last_row, len(COLUMNS) - 1, style)
    for offset, row in enumerate(rows):
        _write_row(sheet, looks, FIRST_ROW + offset, row)
    _write_comments(sheet, rows)
    _add_rules(book, sheet, last_row)
    _set_page(sheet, last_row)


def _write_titles(sheet: Worksheet, looks: Looks) -> None:
    title = looks.of({"bold": True, "font_size": 15, "font_color": "#3B5573", "valign": "vcenter"})
    sheet.set_row(0, 24)
    sheet.merge_range("A1:I1", "Hobnail programme – shared night log, season 2026", title)
    sheet.write("A2", "One row per object and night, newest at the bottom.", looks.of())
    sheet.write_url("M2", "internal:'Summary KJ'!A1", looks.of({"underline": 1}), "to KJ's summary")
    sheet.write("A3", "Rows:", looks.of({"bold": True}))
    sheet.write("B3", "observe again", looks.of(MARKS["again"]))
    sheet.write("C3", "dropped", looks.of(MARKS["dropped"]))
    key = "Quality: A = two lines or more, B = one line, C = photometric (z in italics)"
    sheet.write("E3", key, looks.of({"italic": True}))
    sheet.set_row(HEADER_ROW, 44)


def _write_row(sheet: Worksheet, looks: Looks, at: int, row: Row) -> None:
    mark = MARKS.get(str(row["mark"]), {})
    for index, column in enumerate(COLUMNS):
        value = row[column.typed] if column.typed else None
        look = looks.of(column.look, mark, _look_of_redshift(column, row))
        if column.heading == "Lyα at [nm]":
            sheet.write_formula(at, index, LYMAN_FORMULA, look, lyman_alpha_at(row))
        elif column.heading == "Object" and value in LINKED:
            address = f"https://hobnail.example/charts/{str(value).split()[1]}"
            linked = looks.of(column.look, mark, {"underline": 1, "font_color": "#1F5FA8"})
            sheet.write_url(at, index, address, linked, str(value))
        elif isinstance(value, str):
            sheet.write_string(at, index, value, look)
        elif isinstance(value, datetime.date):
            sheet.write_datetime(at, index, value, look)
        elif value is not None:
            sheet.write_number(at, index, value, look)
        elif mark or (column.heading == FORMATTED_CELLS and at < FORMATTED_TO):
            sheet.write_blank(at, index, None, look)


def _look_of_redshift(column: Column, row: Row) -> dict[str, Any]:
    if column.typed != "z":
        return {}
    if isinstance(row["z"], str):
        return {"num_format": "@"}
    return {"italic": row["quality"] == "C"}


def lyman_alpha_at(row: Row) -> float | str:
    """What the formula of the table shows in a row."""
    redshift = row["z"]
    return LYMAN_ALPHA * (1 + redshift) if isinstance(redshift, float) else "–"


def _write_comments(sheet: Worksheet, rows: Sequence[Row]) -> None:
    places = {row["object"]: FIRST_ROW + offset for offset, row in enumerate(rows)}
    comments = {(places[name], head): said for (name, head), said in COMMENTS.items()}
    comments |= {(HEADER_ROW, head): said for head, said in HEADING_COMMENTS.items()}
    for (at, heading), (author, text) in sorted(comments.items()):
        sheet.write_comment(at, column_index(heading), f"{author}: {text}", {"author": author})


def _add_rules(book: Workbook, sheet: Worksheet, last_row: int) -> None:
    """Validations and conditional formats, as several hands left them."""

    def place(heading: str) -> tuple[int, int, int, int]:
        index = column_index(heading)
        return FIRST_ROW, index, last_row, index

    sheet.data_validation(*place("Class"), {"validate": "list", "source": "=ClassList"})
    sheet.data_validation(*place("Quality"), {"validate": "list", "source": ["A", "B", "C"]})
    priority = {"validate": "integer", "criteria": "between", "minimum": 1, "maximum": 3}
    priority |= {"input_title": "Priority", "input_message": "1 = this month, 3 = any time"}
    sheet.data_validation(*place("Priority"), priority)
    bars = {"type": "data_bar", "bar_color": "#A9C4E0", "bar_solid": True, "data_bar_2010": True}
    sheet.conditional_format(*place("Exposure [s]"), bars)
    bad = book.add_format({"font_color": "#9C0006", "bg_color": "#FFD5D2"})
    rule = {"type": "cell", "criteria": ">", "value": 1.2, "format": bad}
    sheet.conditional_format(*place("Seeing [arcsec]"), rule)
    scale = {"type": "2_color_scale", "min_color": "#FFFFFF", "max_color": "#9FC5B0"}
    sheet.conditional_format(*place("Lookback time [Gyr]"), scale)
    urgent = book.add_format({"bold": True, "font_color": "#C00000"})
    urgent_rule = {"type": "formula", "criteria": f'=AND($S{FIRST_ROW + 1}=1,$J{FIRST_ROW + 1}="")'}
    sheet.conditional_format(*place("Object"), {**urgent_rule, "format": urgent})
    text_numbers = f"J{FIRST_ROW + 1}:J{last_row + 1}"
    sheet.ignore_errors({"number_stored_as_text": text_numbers})


def _set_page(sheet: Worksheet, last_row: int) -> None:
    sheet.freeze_panes(FIRST_ROW, 1)
    sheet.set_zoom(90)
    sheet.print_area(0, 0, last_row, len(COLUMNS) - 1)
    sheet.repeat_rows(HEADER_ROW)
    sheet.set_landscape()
    sheet.set_paper(8)  # A3
    sheet.fit_to_pages(1, 0)
    sheet.set_margins(left=0.4, right=0.4, top=0.6, bottom=0.6)
    sheet.set_footer("&LHobnail night log&C&A&RPage &P of &N")
