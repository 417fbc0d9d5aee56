"""Where headings stand: one row or two, units below the names, merged groups above; titles."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

import pytest
from xlsxwriter.workbook import Workbook
from xlsxwriter.worksheet import Worksheet

from tests.workbook_tools.small_logs import write_log
from tests.workbook_tools.small_sheets import Value, grid, reading_of, request, scan_of
from workbook_tools.column_meanings import Role
from workbook_tools.filling import fill
from workbook_tools.plan import plan_sheet
from workbook_tools.sheet_reading import SheetReading


def read(*rows: Sequence[Value], merged: str = "", header_row: int | None = None) -> SheetReading:
    """Read rows from row 1 on; `merged` lists ranges."""
    areas = "".join(f'<mergeCell ref="{one}"/>' for one in merged.split())
    tail = f"<mergeCells>{areas}</mergeCells>" if areas else ""
    return reading_of(scan_of(grid(*rows), tail=tail), header_row=header_row)


def meant(reading: SheetReading) -> dict[int, str]:
    """What the columns of values hold: measure and unit."""
    return {
        column: f"{one.measure.name} {one.unit_text}".strip()
        for column, one in reading.headings.items()
    }


def block(reading: SheetReading) -> tuple[int, int, int]:
    """Rows of the names and of the last header row, and the first row of the log."""
    assert reading.header is not None
    numbers = reading.scan.numbers
    first = numbers[reading.rows.start]
    return numbers[reading.header.names], numbers[reading.header.last], first


def test_one_row_of_headings() -> None:
    reading = read(["A log"], ["Object", "z", "Age [Gyr]"], ["a", 1.0])
    assert block(reading) == (2, 2, 3)
    assert meant(reading) == {2: "redshift", 3: "age Gyr"}


@pytest.mark.parametrize(
    "units",
    [
        [None, None, "Gyr", "Mpc"],
        [None, "-", "(Gyr)", "(Mpc)"],
        ["", "---", "Gyr", "Mpc"],
        [None, "", "[Gyr]", "Mpc"],
        [" ", 1, "Gyr", "Mpc"],
    ],
)
def test_units_may_stand_in_a_row_below_the_names(units: list[Value]) -> None:
    reading = read(["Object", "z", "Age", "D_C"], units, ["a", 1.0])
    assert block(reading) == (1, 2, 3)
    expected = {2: "redshift", 3: "age Gyr", 4: "comoving distance Mpc"}
    if "[Gyr]" in units:  # a unit wholly in square brackets says that the column holds its log10
        del expected[3]
        assert reading.meanings[3].role is Role.UNCLEAR
        assert "log10" in reading.meanings[3].reason
    assert meant(reading) == expected


@pytest.mark.parametrize(
    "first",
    [["a", 1.0, "n/a"], ["K", 1.0], ["a", ">6", "tbc"], ["first", "2.3(1)", "12 Gyr"]],
)
def test_the_first_row_of_a_log_is_no_row_of_units(first: list[Value]) -> None:
    reading = read(["Object", "z", "Age [Gyr]"], first, ["b", 2.0])
    assert block(reading) == (1, 1, 2)


def test_a_row_of_units_may_not_stand_apart() -> None:
    rows = grid(["Object", "z", "Age"]) + '<row r="3"><c r="C3" t="str"><v>Gyr</v></c></row>'
    assert meant(reading_of(rows)) == {2: "redshift"}


def test_groups_above_complete_the_names() -> None:
    reading = read(
        [None, "Redshift", None, "Distances", None],
        ["Object", "value", "error", "D_C [Mpc]", "D_L [Mpc]"],
        ["a", 1.0, 0.1],
        merged="B1:C1 D1:E1",
    )
    assert block(reading) == (2, 2, 3)
    assert meant(reading)[2] == "redshift"
    assert reading.companion(2, Role.ERROR) == 3
    assert meant(reading)[4] == "comoving distance Mpc"


def test_groups_count_where_they_alone_name_the_measures() -> None:
    reading = read(
        ["Object", "Redshift", None, "Age [Gyr]", None],
        [None, "value", "error", "value", "error"],
        ["a", 1.0, 0.1],
        merged="B1:C1 D1:E1",
    )
    assert block(reading) == (2, 2, 3)
    assert meant(reading) == {2: "redshift", 4: "age Gyr"}
    assert (reading.companion(2, Role.ERROR), reading.companion(4, Role.ERROR)) == (3, 5)


def test_headings_merged_over_two_rows_stand_beside_groups() -> None:
    reading = read(
        ["Object", "z", "Age [Gyr]", "Distances", None],
        [None, None, None, "D_C [Mpc]", "D_L [Mpc]"],
        ["a", 1.0],
        merged="A1:A2 B1:B2 C1:C2 D1:E1",
    )
    assert block(reading) == (2, 2, 3)
    assert meant(reading) == {
        2: "redshift",
        3: "age Gyr",
        4: "comoving distance Mpc",
        5: "luminosity distance Mpc",
    }
    assert reading.texts[2] == "z"


def test_three_rows_of_groups_names_and_units() -> None:
    reading = read(
        [None, None, "Distances", None],
        ["Object", "z", "D_C", "D_L"],
        [None, None, "Mpc", "Gly"],
        ["a", 1.0],
        merged="C1:D1",
    )
    assert block(reading) == (2, 3, 4)
    assert meant(reading) == {
        2: "redshift",
        3: "comoving distance Mpc",
        4: "luminosity distance Gly",
    }


def test_a_unit_in_a_group_is_that_of_its_columns() -> None:
    reading = read(
        [None, None, "Distances [Mpc]", None],
        ["Object", "z", "D_C", "D_L"],
        ["a", 1.0],
        merged="C1:D1",
    )
    assert meant(reading) == {
        2: "redshift",
        3: "comoving distance Mpc",
        4: "luminosity distance Mpc",
    }


@pytest.mark.parametrize(
    ("title", "merged"),
    [
        ("Ages of stars and galaxies", ""),
        ("Ages of stars and galaxies", "A1:D1"),
        ("Ages of stars and galaxies", "A1:C1"),
        ("Stellar ages", "A1:B1"),
    ],
)
def test_a_title_right_above_the_names_is_no_group(title: str, merged: str) -> None:
    reading = read([title], ["z", "Age [Gyr]", "Seeing", "Note"], [1.0], merged=merged)
    assert meant(reading) == {1: "redshift", 2: "age Gyr"}
    assert reading.texts[1] == "z"


def test_a_group_of_stars_makes_ages_theirs() -> None:
    reading = read(
        ["Object", "z", "Stars", None, "Seeing"],
        ["name", None, "Age [Gyr]", "Mass", "arcsec"],
        ["a", 1.0],
        merged="C1:D1",
    )
    assert 3 not in reading.headings


def test_the_row_that_is_named_may_be_that_of_the_groups() -> None:
    rows = (
        ["z"],
        ["Object", "Redshift", None, "Age [Gyr]", None],
        [None, "value", "error", "value", "error"],
        ["a", 1.0],
    )
    reading = read(*rows, merged="B2:C2 D2:E2", header_row=2)
    assert block(reading) == (3, 3, 4)
    assert meant(reading) == {2: "redshift", 4: "age Gyr"}


def test_texts_below_merged_headings_may_be_the_first_of_the_log() -> None:
    reading = read(
        ["Object", "z", None, "Age [Gyr]"],
        ["a", "2.3(1)", "see notes"],
        ["b", 2.0],
        merged="B1:C1",
    )
    assert block(reading) == (1, 1, 2)


@pytest.mark.parametrize("words", [["tbc", None], ["n/a", "-"], [">6", "limit"]])
def test_words_for_no_value_below_merged_headings_are_no_names(words: list[Value]) -> None:
    reading = read(["Object", "z", None, "Age [Gyr]"], ["a", *words], ["b", 2.0], merged="B1:C1")
    assert block(reading) == (1, 1, 2)


def test_runs_and_line_breaks_of_a_heading_are_joined() -> None:
    rich = (
        '<row r="1"><c r="A1" t="inlineStr"><is><r><t>z</t></r></is></c>'
        '<c r="B1" t="inlineStr"><is><r><t>D</t></r><r><rPr><vertAlign val="subscript"/></rPr>'
        "<t>L</t></r><r><t>\n[Mpc]</t></r></is></c></row>"
    )
    assert meant(reading_of(rich)) == {1: "redshift", 2: "luminosity distance Mpc"}


def test_a_new_column_gets_its_unit_where_the_units_stand() -> None:
    rows = grid(["Object", "z", "Age"], [None, "---", "Gyr"], ["a", 1.0], ["b", 2.0])
    reading = reading_of(rows)
    made = plan_sheet(reading, request(add=("D_C [h^-1 Mpc]", "scale factor")), None)
    texts = {one.column: one.texts for one in made.cells}
    assert texts == {
        3: {},
        4: {1: ("D_C", 0), 2: ("h^-1 Mpc", 0)},
        5: {1: ("scale factor", 0)},
    }


@pytest.mark.parametrize("text", ["Age [Gyr]", "age  [gyr]", "Age"])
def test_a_column_is_called_by_name_and_unit_wherever_the_unit_stands(text: str) -> None:
    rows = grid(["Object", "z", "Age", "D_C"], [None, "---", "Gyr", "Mpc"], ["a", 1.0])
    made = plan_sheet(reading_of(rows), request(only=(text,)), None)
    assert [one.column for one in made.columns] == [3]
    if text == "Age [Gyr]":
        made = plan_sheet(reading_of(rows), request(add=(text,)), None)
        assert [one.column for one in made.columns] == [3, 4]
        assert "is there already (column C)" in made.notes[0]


@pytest.mark.parametrize("first", [["a", 1.0, "100 Myr"], ["a", "1.5", "100 Myr"]])
def test_a_value_with_a_unit_in_the_first_row_makes_it_none_of_units(first: list[Value]) -> None:
    reading = read(["Object", "z", "Age [Gyr]"], first, ["b", 2.0])
    assert block(reading) == (1, 1, 2)
    assert meant(reading) == {2: "redshift", 3: "age Gyr"}


def test_a_pure_number_may_have_the_unit_1() -> None:
    reading = read(["Object", "z", "Age"], [None, 1, "Gyr"], ["a", 1.0])
    assert block(reading) == (1, 2, 3)


def test_a_table_without_headings_of_its_own_is_the_log_below_them(tmp_path: Path) -> None:
    rows = [["Object", "z", "Age [Gyr]"], ["HBN 0001", 1.5, None], ["HBN 0002", 2.5, None]]

    def dress(_book: Workbook, sheet: Worksheet) -> None:
        sheet.add_table(1, 0, 2, 2, {"header_row": False})

    log = write_log(tmp_path / "log.xlsx", rows, dress)
    assert fill(log, output=tmp_path / "out.xlsx").filled == 2
