"""The plan of one sheet: which cells get numbers, which are left, and why."""

from __future__ import annotations

import math

import pytest

from epochconv import convert
from tests.workbook_tools.small_logs import AGES
from tests.workbook_tools.small_sheets import (
    Value,
    cell,
    grid,
    reading_of,
    request,
    row,
    scan_of,
    table_at,
)
from workbook_tools.cell_address import parse_range
from workbook_tools.errors import Refusal, UsageError
from workbook_tools.plan import SheetPlan, plan_columns, plan_sheet
from workbook_tools.sheet_reading import SheetReading

NAN = float("nan")
NEGATIVE = "a negative redshift is a neighbour's peculiar motion towards us and no epoch"


def plan(rows: str | SheetReading, **choices: object) -> SheetPlan:
    reading = reading_of(rows) if isinstance(rows, str) else rows
    return plan_sheet(reading, request(**choices), None)


def numbers(made: SheetPlan) -> dict[str, float]:
    """The new numbers by address, to six significant digits."""
    letters = "ABCDEFGHIJ"
    return {
        f"{letters[one.column - 1]}{row}": float(f"{number:.6g}")
        for one in made.cells
        for row, number in zip(one.rows, one.numbers, strict=True)
    }


def log(*rows: list[Value], header: tuple[str, ...] = ("Object", "z", "Age [Gyr]")) -> str:
    return grid(list(header), *rows)


def test_the_blanks_of_an_empty_column_are_filled() -> None:
    made = plan(log(["a", 1.0], ["b", 2.0]))
    assert numbers(made) == {"C2": AGES[1.0], "C3": AGES[2.0]}
    (column,) = made.columns
    assert (column.heading.text, column.source.text) == ("Age [Gyr]", "z")
    assert (column.column, column.source_column, column.count, column.added) == (3, 2, 2, False)
    assert [one.a1 for one in made.changed] == ["C2:C3"]


def test_only_the_blanks_of_a_partly_filled_column_are_filled() -> None:
    made = plan(log(["a", 1.0, 5.84], ["b", 2.0], ["c", 3.0, None]))
    assert numbers(made) == {"C3": AGES[2.0], "C4": AGES[3.0]}


def test_a_partly_filled_column_that_disagrees_stops_everything() -> None:
    with pytest.raises(Refusal, match=r"column 'Age .Gyr.' does not agree .* C2 holds 6.1 where"):
        plan(log(["a", 1.0, 6.1], ["b", 2.0]))


def test_a_complete_column_is_left_alone_whatever_it_holds() -> None:
    header = ("z", "Age [Gyr]", "a []")
    made = plan(log([1.0, 9.9], [2.0, 9.9], header=header), source="z")
    assert numbers(made) == {"C2": 0.5, "C3": 0.333333}


def test_every_row_ends_as_filled_or_named() -> None:
    made = plan(
        log(
            ["a", 1.0],
            ["b", None],  # nothing to do
            ["c", "see below"],
            ["d", -0.0003],
            ["e", "2"],
            ["f", 2.0, "tbc"],
            ["g", 3.0, " "],
        )
    )
    assert numbers(made) == {"C2": AGES[1.0], "C6": AGES[2.0]}
    assert made.left == [
        ("C7", "not overwritten", "tbc"),
        ("C8", "not overwritten", "white space"),
        ("B4", "not read: no number", "see below"),
        ("B5", NEGATIVE, "-0.0003"),
    ]
    assert made.remarks == {"numbers typed as text": ["B6"]}


def test_rows_in_which_nothing_was_asked_for_are_not_named() -> None:
    made = plan(log(["a", "tbc", 0.9], ["b", 1.0]))
    assert (numbers(made), made.left) == ({"C3": AGES[1.0]}, [])


def test_a_moment_at_which_a_measure_does_not_exist_is_named_in_its_own_column() -> None:
    made = plan(log([0.0], [1.0], header=("z", "µ [mag]", "Age [Gyr]")))
    assert made.left == [("B2", "distance modulus does not exist at redshift 0", "")]
    assert made.remarks == {"a redshift of exactly 0, which may stand for a missing value": ["A2"]}
    assert numbers(made).keys() == {"B3", "C2", "C3"}


def test_lines_of_totals_are_passed_over() -> None:
    totals = '<row r="3"><c r="B3"><f>AVERAGE(B2:B2)</f><v>1</v></c></row>'
    several = '<row r="4"><c r="B4"><f>SUM(B2:B3)</f><v>1</v></c></row>'
    made = plan(log(["a", 1.0]) + totals + several)
    assert (made.passed_over, made.left) == ([("B4", "a line of totals", "")], [])
    assert numbers(made).keys() == {"C2", "C3"}
    assert made.remarks == {"results of formulas, as last stored": ["B3"]}


def test_a_sheet_without_a_source_or_without_blanks_gives_an_empty_plan() -> None:
    for rows in (log(["a", None, None]), log(["a", 1.0, 5.84]), log(), grid(["Object"], ["a"])):
        made = plan(rows)
        assert (made.columns, made.cells, made.left, made.changed) == ([], [], [], [])


def test_a_plan_knows_its_source() -> None:
    assert plan(log(["a", 1.0])).source == 2
    assert plan(log(["a", None])).source is None
    assert plan(log(["a", None]), source="z").source == 2
    assert plan(log(["a", 1.0]), source="Note").source is None
    assert plan(log(["a", 1.0]), source="Q:Q", source_measure="z").source is None


def test_columns_of_one_measure_in_one_unit_do_not_fill_each_other() -> None:
    header = ("z", "z_phot", "Age [Gyr]", "Age [Myr]")
    rows = log([1.0, None], [2.0, None], header=header)
    assert numbers(plan(rows)).keys() == {"C2", "C3", "D2", "D3"}
    assert plan(grid(["z", "z_phot"], [1.0, 1.1], [None, 1.2], [1.3, None])).columns == []


def test_two_candidates_stop_the_plan_only_where_something_waits() -> None:
    header = ("z", "Age [Gyr]", "a []")
    with pytest.raises(UsageError, match=r"2 columns to convert from: 'z' \(A\), 'Age"):
        plan(log([1.0, 5.84], header=header))
    with pytest.raises(UsageError, match="choose one with --source"):
        plan(log([1.0, 5.84], header=header[:2]), add=("a []",))
    assert plan(log([1.0, 5.84], header=header[:2])).columns == []


def test_a_named_source_decides() -> None:
    rows = log([1.0, 3.27], header=("z", "Age [Gyr]", "a []"))
    assert numbers(plan(rows, source="z")) == {"C2": 0.5}
    assert numbers(plan(rows, source="Age [Gyr]"))["C2"] == pytest.approx(1 / 3, rel=1e-4)
    said = numbers(plan(rows, source="A:A", source_measure="Age [Gyr]"))
    assert said["C2"] == pytest.approx(convert(1.0, "age", "scale factor").magnitude, rel=1e-5)


def test_what_a_column_holds_is_said_of_a_named_column_only() -> None:
    with pytest.raises(UsageError, match="--as says what a column holds; name that column with"):
        plan(log(["a", 1.0]), source_measure="redshift")


def test_only_the_columns_asked_for_are_filled() -> None:
    rows = log([1.0], header=("z", "Age [Gyr]", "a []", "D_C [Mpc]"))
    assert numbers(plan(rows, only=("a []",))) == {"C2": 0.5}
    assert numbers(plan(rows, only=("A  []", "age [gyr]"))).keys() == {"B2", "C2"}
    assert plan(rows, only=("z",)).columns == []


def test_new_columns_stand_at_the_right_edge_with_headings() -> None:
    made = plan(log(["a", 1.0], ["b", 2.0], header=("Object", "z")), add=("Age [Gyr]", "a []"))
    assert numbers(made) == {"C2": AGES[1.0], "C3": AGES[2.0], "D2": 0.5, "D3": 0.333333}
    assert [one.texts for one in made.cells] == [{1: ("Age [Gyr]", 0)}, {1: ("a []", 0)}]
    assert [one.added for one in made.columns] == [True, True]


@pytest.mark.parametrize(
    ("heading", "width"),
    [
        ("a []", 11),
        ("Lookback time [Gyr]", 22),
        ("Line-of-sight comoving distance (million light years)", 40),
    ],
)
def test_a_new_column_is_as_wide_as_its_heading_within_reason(heading: str, width: int) -> None:
    (made,) = plan(log(["a", 1.0], header=("Object", "z")), add=(heading,)).cells
    assert made.width == width


def test_a_column_asked_for_twice_is_added_once() -> None:
    made = plan(log(["a", 1.0], header=("Object", "z")), add=("Age [Gyr]", "age  [Gyr]"))
    assert numbers(made) == {"C2": AGES[1.0]}


def test_a_column_that_is_there_is_filled_and_not_added_again() -> None:
    made = plan(log(["a", 1.0]), add=("age  [Gyr]",), only=("nothing else",))
    assert numbers(made) == {"C2": AGES[1.0]}
    assert made.notes == ["'age  [Gyr]' is there already (column C), so no column is added"]
    source = plan(log(["a", 1.0], header=("Object", "z")), add=("z",))
    assert (source.cells, len(source.notes)) == ([], 1)


def test_what_cannot_be_added_is_refused_with_a_hint() -> None:
    with pytest.raises(UsageError, match=r"--add 'Age' .* age needs a unit: 'Age \[Gyr\]'"):
        plan(log(["a", 1.0]), add=("Age",))


@pytest.mark.parametrize("values", [["tbc", "?"], [-1.0, -2.0], [None, None]])
def test_no_column_is_added_where_no_row_has_a_value(values: list[Value]) -> None:
    rows = log(*(["a", value] for value in values), header=("Object", "z"))
    made = plan(rows, add=("Age [Gyr]",), source="z")
    assert made.cells == []
    assert [one.cell for one in made.left] == ([] if values == [None, None] else ["B2", "B3"])


def test_a_table_grows_by_names_that_are_free() -> None:
    table = table_at(parse_range("A1:B3"), "Object", "z")
    reading = reading_of(log(["a", 1.0], ["b", 2.0], header=("Object", "z")), tables=[table])
    made = plan(reading, add=("Age [Gyr]",))
    assert made.grown == (table, ["Age [Gyr]"])
    assert made.notes == []


def test_a_name_that_a_table_has_elsewhere_gets_a_number() -> None:
    """A table may list a name that its header cell no longer shows."""
    table = table_at(parse_range("A1:B2"), "age [gyr]", "z")
    reading = reading_of(log(["a", 1.0], header=("Object", "z")), tables=[table])
    made = plan(reading, add=("Age [Gyr]",))
    assert made.grown == (table, ["Age [Gyr] (2)"])
    assert made.cells[0].texts == {1: ("Age [Gyr] (2)", 0)}


def test_a_table_that_cannot_grow_is_noted() -> None:
    table = table_at(parse_range("A1:B2"), "Object", "z", growable=False)
    reading = reading_of(log(["a", 1.0], header=("Object", "z")), tables=[table])
    made = plan(reading, add=("Age [Gyr]",))
    assert made.grown is None
    assert "table 'Objects' cannot grow" in made.notes[0]


def test_a_column_that_meets_a_merge_or_an_array_is_refused() -> None:
    merge = '<mergeCells count="1"><mergeCell ref="C3:D3"/></mergeCells>'
    rows = log(["a", 1.0], ["b", 2.0])
    with pytest.raises(Refusal, match="column C of sheet 'Log' meets C3:D3, which is merged or"):
        plan(reading_of(scan_of(rows, tail=merge)))
    array = '<row r="4"><c r="C4"><f t="array" ref="C4:C6">B2:B4</f><v>1</v></c></row>'
    with pytest.raises(Refusal, match="meets C4:C6"):
        plan(rows + array, source="z")
    title = '<mergeCells count="1"><mergeCell ref="A1:D1"/></mergeCells>'
    shifted = row(1, "Programme") + row(2, "z", "Age [Gyr]") + row(3, 1.0)
    assert numbers(plan(reading_of(scan_of(shifted, tail=title)))) == {"B3": AGES[1.0]}


def test_a_merge_that_gets_no_value_refuses_nothing() -> None:
    merge = '<mergeCells count="1"><mergeCell ref="C3:D3"/></mergeCells>'
    for third in (["b", 2.0, 3.27], ["b", None], ["Spring nights"]):
        rows = log(["a", 1.0], third, ["c", 3.0])
        made = plan(reading_of(scan_of(rows, tail=merge)))
        assert numbers(made) == {"C2": AGES[1.0], "C4": AGES[3.0]}


def test_a_hidden_column_that_is_taken_is_shown_and_said() -> None:
    head = '<cols><col min="3" max="9" hidden="1"/></cols>'
    scan = scan_of(log(["a", 1.0], header=("Object", "z")), head=head)
    made = plan(reading_of(scan), add=("Age [Gyr]",))
    assert made.notes == ["column C was hidden and is shown, as it is new"]


def test_a_column_of_numbers_without_a_heading_can_be_converted() -> None:
    made = plan(grid([1.0], [2.0]), source="A:A", source_measure="redshift", add=("Age [Gyr]",))
    assert numbers(made) == {"B1": AGES[1.0], "B2": AGES[2.0]}
    assert made.cells[0].texts == {}
    assert made.notes == ["no row of headings was found, so the new columns have none"]


def test_an_empty_cell_with_a_colour_is_blank_too() -> None:
    rows = row(1, "z", "Age [Gyr]") + f'<row r="2">{cell("A2", 1.0)}{cell("B2", None, 4)}</row>'
    assert numbers(plan(rows)) == {"B2": AGES[1.0]}
    blank_source = rows + f'<row r="3">{cell("A3", None, 4)}</row>'
    assert numbers(plan(blank_source)) == {"B2": AGES[1.0]}


def test_zero_is_written_without_a_sign() -> None:
    made = plan(grid(["z", "D_C [Mpc]"], ["-0"], [1.0]))
    (column,) = made.cells
    assert math.copysign(1.0, column.numbers[0]) == 1.0
    assert column.numbers[0] == 0.0


def test_given_numbers_go_to_the_right_edge() -> None:
    reading = reading_of(log(["a", 1.0], ["b", 2.0]))
    made = plan_columns(reading, {"P": [0.5, None, -0.0], "Q": [1e-320]}, 2, None)
    assert numbers(made) == {"D2": 0.5, "D4": 0.0, "E2": 0.0}
    assert math.copysign(1.0, made.cells[0].numbers[1]) == 1.0
    assert [one.texts for one in made.cells] == [{1: ("P", 0)}, {1: ("Q", 0)}]
    top = plan_columns(reading, {"P": [0.5]}, 1, None)
    assert top.cells[0].texts == {}


@pytest.mark.parametrize("number", [NAN, math.inf, -math.inf])
def test_given_numbers_that_no_cell_can_hold_are_refused(number: float) -> None:
    with pytest.raises(UsageError, match="column 'P' holds a number that no cell can hold"):
        plan_columns(reading_of(""), {"P": [0.5, number]}, 2, None)
