"""The look of new cells: that of their neighbours, in a format that shows their digits."""

from __future__ import annotations

import numpy as np
import pytest

from tests.workbook_tools.loose_parts import MAIN
from tests.workbook_tools.small_sheets import cell, reading_of, row, scan_of
from workbook_tools.cell_looks import CellLooks
from workbook_tools.styles import StyleSheet

GENERAL, TWO_DIGITS, COLOURED, TEXT, DATE, WRAPPED, THOUSANDS = range(7)
STYLES = f"""<styleSheet xmlns="{MAIN}"><cellXfs count="7">
<xf numFmtId="0" fontId="0"/><xf numFmtId="2" fontId="1"/><xf numFmtId="0" fontId="2" fillId="2"/>
<xf numFmtId="49" fontId="3"/><xf numFmtId="14" fontId="4"/>
<xf numFmtId="0" fontId="5"><alignment wrapText="1"/></xf>
<xf numFmtId="4" fontId="6"/></cellXfs></styleSheet>""".encode()
HEADER = row(1, "z", "Age [Gyr]")


def look(
    source: int, own: list[int | None], typed: int | None = None, columns: str = ""
) -> list[tuple[str, str]]:
    """Font and format of each new cell of column B.

    Args:
        source: style of the redshifts in column A.
        own: style of each empty cell of column B, None for no cell.
        typed: style of a filled cell above them.
        columns: column elements of the sheet.
    """
    rows = HEADER
    if typed is not None:
        rows += f'<row r="2">{cell("A2", 1.0, source)}{cell("B2", 5.84, typed)}</row>'
    first = 2 if typed is None else 3
    for number, style in enumerate(own, first):
        empty = "" if style is None else cell(f"B{number}", None, style)
        rows += f'<row r="{number}">{cell(f"A{number}", 1.25, source)}{empty}</row>'
    styles = StyleSheet(STYLES, "styles.xml")
    reading = reading_of(scan_of(rows, head=f"<cols>{columns}</cols>" if columns else ""))
    redshifts, ages = reading.columns([1, 2])
    looks = CellLooks(reading, styles, redshifts)
    positions = np.arange(len(own)) + (first - 2)
    found = looks.of_numbers(2, positions, [5.84] * len(own), ages)
    return [(_font(styles, style), styles.format_code(style)) for style in found]


def _font(styles: StyleSheet, style: int) -> str:
    return str(styles._style(style).attributes["fontId"])


def test_without_a_look_of_its_own_a_cell_looks_like_its_source() -> None:
    assert look(COLOURED, [None, None]) == [("2", "0.00")] * 2
    assert look(TWO_DIGITS, [None]) == [("1", "0.00")]


def test_an_empty_cell_keeps_its_own_look() -> None:
    assert look(GENERAL, [COLOURED, None, TWO_DIGITS]) == [
        ("2", "0.00"),
        ("0", "0.00"),
        ("1", "0.00"),
    ]


def test_a_blank_below_filled_cells_looks_like_the_last_of_them() -> None:
    assert look(COLOURED, [None, None], typed=TWO_DIGITS) == [("1", "0.00")] * 2


def test_the_look_of_the_whole_column_comes_next() -> None:
    columns = '<col min="2" max="2" style="1"/>'
    assert look(COLOURED, [None], columns=columns) == [("1", "0.00")]
    assert look(COLOURED, [None], typed=WRAPPED, columns=columns) == [("5", "0.00")]


def test_cells_without_a_format_take_that_of_the_others_in_their_column() -> None:
    columns = '<col min="2" max="2" style="5"/>'
    expected = [("2", "#,##0.00"), ("6", "#,##0.00"), ("5", "#,##0.00")]
    assert look(TWO_DIGITS, [COLOURED, THOUSANDS, None], columns=columns) == expected


@pytest.mark.parametrize("style", [TEXT, DATE])
def test_a_format_for_texts_or_dates_gives_way_to_one_for_numbers(style: int) -> None:
    assert look(GENERAL, [style]) == [(str(style), "0.00")]
    assert look(GENERAL, [None], typed=style) == [(str(style), "0.00")]


def test_a_new_column_looks_like_its_source() -> None:
    rows = HEADER + "".join(
        f'<row r="{number}">{cell(f"A{number}", 1.2345, style)}</row>'
        for number, style in ((2, GENERAL), (3, COLOURED), (4, TWO_DIGITS))
    )
    styles = StyleSheet(STYLES, "styles.xml")
    reading = reading_of(rows)
    (redshifts,) = reading.columns([1])
    looks = CellLooks(reading, styles, redshifts)
    found = looks.of_numbers(3, np.array([0, 1, 2]), [5.8423, 3.27, 2.1], None)
    assert [_font(styles, style) for style in found] == ["0", "2", "1"]
    # five digits, as the source has
    assert {styles.format_code(style) for style in found} == {"0.0000"}


def test_a_heading_looks_like_the_last_one_before_it() -> None:
    rows = (
        '<row r="1"><c r="A1" s="1" t="inlineStr"><is><t>z</t></is></c><c r="B1" s="3"/>'
        '<c r="D1" s="5" t="inlineStr"><is><t>Age [Gyr]</t></is></c></row>'
    )
    reading = reading_of(rows + row(2, 1.0))
    looks = CellLooks(reading, StyleSheet(STYLES, "styles.xml"), reading.columns([1])[0])
    assert [looks.of_heading(0, column) for column in (2, 3, 4)] == [1, 1, 5]
    assert [looks.wraps(style) for style in (1, 5)] == [False, True]


def test_a_workbook_without_styles_has_none_to_give() -> None:
    header = '<row r="1"><c r="A1" s="3" t="inlineStr"><is><t>z</t></is></c></row>'
    reading = reading_of(header + row(2, 1.0))
    (redshifts,) = reading.columns([1])
    looks = CellLooks(reading, None, redshifts)
    assert looks.of_heading(0, 1) == 0
    assert list(looks.of_numbers(2, np.array([0]), [5.84], None)) == [0]
    assert looks.code(7) == "General"
    assert not looks.wraps(7)
