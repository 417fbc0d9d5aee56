"""Which column is converted from: named, found, or asked for where two could serve."""

from __future__ import annotations

from collections.abc import Sequence

import pytest

from tests.workbook_tools.small_sheets import Value, grid, reading_of, request
from workbook_tools.errors import UsageError
from workbook_tools.source_choice import (
    known_heading,
    named_source,
    possible_sources,
    refuse_several,
)


def sources(*rows: Sequence[Value]) -> list[int]:
    return possible_sources(reading_of(grid(*rows)))


HEADER = ("z", "Age [Gyr]", "z_phot", "Note")


@pytest.mark.parametrize(
    ("rows", "expected"),
    [
        ([[1.0], [2.0]], [1]),
        ([[1.0, 5.8], [2.0]], [1]),  # age waits for its new rows
        ([[1.0], [None, 5.8]], [1, 2]),
        ([[1.0, 5.8], [2.0, 3.3]], [1, 2]),  # both are complete
        ([[1.0, "tbc"], [2.0]], [1]),
        ([["tbc", 5.8], [2.0, 3.3]], [1, 2]),  # a text is something, so redshift does not wait
        ([[1.0, None, 1.1], [2.0]], [1, 3]),  # two redshifts never fill each other
        ([[None, None, None, "x"]], []),
        ([["?", "?"]], []),
    ],
)
def test_columns_that_could_serve(rows: list[list[Value]], expected: list[int]) -> None:
    assert sources(HEADER, *rows) == expected


def test_headings_repeated_among_the_rows_count_for_neither_column() -> None:
    rows = [[1.0, 5.8], list(HEADER), [None, "Gyr"], [2.0]]
    assert sources(HEADER, [None, "Gyr"], *rows) == [1]
    assert sources(("z", "Age"), (None, "Gyr"), *rows) == [1]


def test_two_candidates_are_listed() -> None:
    reading = reading_of(grid(HEADER, [1.0, 5.8]))
    with pytest.raises(UsageError) as caught:
        refuse_several(reading, [1, 2])
    assert str(caught.value) == (
        "sheet 'Log' has 2 columns to convert from: 'z' (A), 'Age [Gyr]' (B);"
        " choose one with --source"
    )
    refuse_several(reading, [1])


LOG = reading_of(grid(["Object", "z", "Age [Gyr]", "Note"], ["first", 1.0, 5.8, 2.0]))


def named(**choices: object) -> tuple[int, str, str] | None:
    found = named_source(LOG, request(**choices))
    return None if found is None else (found[0], found[1].measure.name, found[1].unit.symbol)


@pytest.mark.parametrize(
    "text", ["Age [Gyr]", "age  [gyr]", " Age [Gyr]\n", "C:C", "$c:$C", "c:c "]
)
def test_a_source_is_named_by_heading_or_letters(text: str) -> None:
    assert named(source=text) == (3, "age", "Gyr")


def test_what_the_column_holds_can_be_said_whatever_its_heading() -> None:
    assert named(source="D:D", source_measure="redshift") == (4, "redshift", "")
    assert named(source="Note", source_measure="D_C [Gly]") == (4, "comoving distance", "Gly")
    assert named(source="B:B", source_measure="Age [Myr]") == (2, "age", "Myr")


def test_a_heading_that_a_sheet_lacks_is_for_another_sheet() -> None:
    assert named(source="Distance modulus [mag]") is None
    assert named(source="") is None


@pytest.mark.parametrize(
    ("choices", "words"),
    [
        ({"source": "B:C"}, "--source B:C is more than one column; name one, as C:C"),
        ({"source": "XFE:XFE"}, "'XFE' is not a column; columns run from A to XFD"),
        ({"source": "Note"}, "column D of sheet 'Log' is headed 'Note', which is no measure"),
        ({"source": "Q:Q"}, "column Q of sheet 'Log' has no heading, which is no measure"),
        (
            {"source": "D:D", "source_measure": "speed"},
            "--as 'speed' is no heading that is known here; write a measure and its unit",
        ),
        (
            {"source": "D:D", "source_measure": "age"},
            r"--as 'age' is no heading that is known here; age needs a unit: 'age \[Gyr\]'",
        ),
    ],
)
def test_sources_that_cannot_be_taken(choices: dict[str, str], words: str) -> None:
    with pytest.raises(UsageError, match=words):
        named(**choices)


def test_a_heading_that_stands_twice_is_named_by_letters() -> None:
    twice = reading_of(grid(["z", "Note", "Z "], [1.0]))
    words = "has the heading 'z' more than once; name the column by its letters .*: A:A and C:C"
    with pytest.raises(UsageError, match=words):
        named_source(twice, request(source="z"))


def test_headings_on_the_command_line_are_read_like_others() -> None:
    heading = known_heading(" Age  [Gyr] ", "--add")
    assert (heading.measure.name, heading.unit.symbol, heading.text) == ("age", "Gyr", "Age [Gyr]")
    with pytest.raises(UsageError, match="--add 'Agee' is no heading"):
        known_heading("Agee", "--add")
