"""A fill from end to end: a workbook goes in, and openpyxl reads what came out."""

from __future__ import annotations

import datetime
import json
import math
import re
import zipfile
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

import epochconv
from tests.workbook_tools.package_rules import new_problems
from tests.workbook_tools.repack import part
from tests.workbook_tools.small_logs import (
    AGES,
    BARE,
    LOG,
    NOW,
    SHEET,
    Formula,
    Grid,
    Value,
    cells,
    dated_copies,
    new_cells,
    with_parts,
    write_log,
)
from workbook_tools import FillResult, Refusal, UsageError, fill, write_columns
from workbook_tools.report import json_report


def filled(path: Path, **choices: object) -> tuple[FillResult, dict[str, object]]:
    """Fill a workbook in place; return what it says and what is new in its sheet Log."""
    before = cells(path)
    result = fill(path, now=NOW, **choices)  # type: ignore[arg-type]  # per test
    return result, new_cells(before, path)


@pytest.fixture
def path(tmp_path: Path) -> Path:
    return tmp_path / "log.xlsx"


def test_a_heading_over_an_empty_column_is_filled(path: Path) -> None:
    result, new = filled(write_log(path))
    assert new == pytest.approx({f"C{row}": AGES[row - 1.0] for row in (2, 3, 4)}, rel=1e-5)
    assert (result.filled, result.left, result.written) == (3, [], True)
    assert not new_problems(dated_copies(path)[0], path)


def test_numbers_have_the_fifteen_digits_that_programs_keep(path: Path) -> None:
    redshifts = [0.0312, 1.0488, 6.3401, 1089.8, 1e-8]
    headings = ["Age [Gyr]", "D_C [Gly]", "T_CMB [K]", "H(z) [km/s/Mpc]", "µ [mag]", "a []"]
    _, new = filled(write_log(path, [["z", *headings], *([z] for z in redshifts)]))
    measures = ["age", "comoving distance", "CMB temperature", "Hubble rate", "distance modulus"]
    units = ["Gyr", "Gly", "K", "km/s/Mpc", "mag"]
    for column, measure, unit in zip("BCDEF", measures, units, strict=False):
        core = epochconv.convert(redshifts, "redshift", measure, unit=None)
        values = core.magnitude * (3.2615637771674333e-3 if unit == "Gly" else 1.0)
        found = [new[f"{column}{row}"] for row in range(2, 7)]
        assert found == pytest.approx(list(values), rel=2e-14)
        if unit != "Gly":
            assert found == [float(f"{value:.15g}") for value in values]
    written = re.findall(rb"<v>([^<]+)</v>", part(path, SHEET))
    assert all(len(re.sub(rb"e.*|[.-]|^0[.]0*", b"", text)) <= 15 for text in written[14:])


def test_a_partly_filled_column_that_agrees_gets_its_blanks(path: Path) -> None:
    _, new = filled(write_log(path, [*LOG[:1], ["a", 1.0, 5.84], ["b", 2.0], ["c", 3.0, 2.139]]))
    assert new == pytest.approx({"C3": AGES[2.0]}, rel=1e-5)


def test_one_that_disagrees_stops_everything_and_names_the_set_that_fits(path: Path) -> None:
    rows: Grid = [["z", "Age [Gyr]", "a []"], [1.0, 5.75], [2.0, 3.23], [3.0]]
    write_log(path, rows)
    before = path.read_bytes()
    with pytest.raises(Refusal, match=r"B2 holds 5\.75 where 5\.8423 belongs; B3 .* agrees with"):
        fill(path)
    assert path.read_bytes() == before
    assert dated_copies(path) == []
    assert filled(path, parameters="round numbers")[1].keys() == {"B4", "C2", "C3", "C4"}


NEGATIVE = "a negative redshift is a neighbour's peculiar motion towards us and no epoch"
_EMPTY_RESULT = '<c r="A3" t="str"><f>IF(1,"",2)</f><v></v>'
KINDS: Grid = [
    ["Object", "z", "Age [Gyr]"],
    ["number", 1.0],
    ["text number", "2"],
    ["formula", Formula("=B2+2", 3.0)],
    ["blank"],
    ["limit", ">6"],
    ["remark", "tbc"],
    ["blueshift", -0.0003],
    ["date", datetime.date(2026, 1, 2)],
    ["boolean", True],
    ["error", Formula("=1/0", "#DIV/0!")],
    ["white space", "  "],
    ["kept text", 1.0, "n/a"],
    ["kept number", 2.0, 3.27],
    ["Mean", Formula("=AVERAGE(B2:B3)", 1.5)],
]


def test_every_row_ends_as_filled_or_named(path: Path) -> None:
    result, new = filled(write_log(path, KINDS))
    assert new.pop("C6") == "<0.927"  # the age at redshift 6 is 0.9272 Gyr
    assert new == pytest.approx({"C2": AGES[1.0], "C3": AGES[2.0], "C4": AGES[3.0]}, rel=1e-5)
    (plan,) = result.plans
    assert plan.left == [
        ("C13", "not overwritten", "n/a"),
        ("B7", "no value yet", "tbc"),
        ("B8", NEGATIVE, "-0.0003"),
        (
            "B9",
            "a date that a spreadsheet program made of something else, which is lost; type it"
            " again",
            "",
        ),
        ("B10", "not read: true or false and no number", "TRUE"),
        ("B11", "a formula error", "#DIV/0!"),
    ]
    assert result.left == [("Log", one.cell, one.reason) for one in plan.left]
    assert result.counts == dict.fromkeys((one.reason for one in plan.left), 1)
    assert plan.passed_over == [("B15", "a line of totals", "")]
    assert plan.remarks == {
        "numbers typed as text": ["B3"],
        "results of formulas, as last stored": ["B4"],
        "a limit": ["B6"],
    }


def test_a_formula_without_a_stored_result_is_left(path: Path) -> None:
    write_log(path, [["z", "Age [Gyr]"], [1.0], [Formula("=A2*2", 2.0)]])
    with_parts(path, sheet=("<f>A2*2</f><v>2.0</v>", "<f>A2*2</f>"))
    result, new = filled(path)
    assert new.keys() == {"B2"}
    ((_, cell, reason),) = result.left
    assert (cell, reason.partition(";")[0]) == ("A3", "a formula without a stored result")


_SOURCES = st.sampled_from([1.0, 2.0, 3.0, 0.0, "2", -0.5, ">6", True, " ", None])
_TARGETS = st.sampled_from([None, None, None, "tbc", " "])


@given(st.lists(st.tuples(_SOURCES, _TARGETS), min_size=1, max_size=8))
@settings(deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
def test_of_random_rows_each_ends_as_filled_or_named(
    path: Path, rows: list[tuple[Value, Value]]
) -> None:
    """But for rows that have nothing to convert, and remarks beside a number that cannot be."""
    write_log(path, [["z", "Age [Gyr]"], *rows])
    output = path.with_name("filled.xlsx")
    output.unlink(missing_ok=True)
    result = fill(path, output=output, source="z")
    new = new_cells(cells(path), output)
    named = {cell for _, cell, _ in result.left}
    for number, (source, target) in enumerate(rows, 2):
        good = source in (0.0, 1.0, 2.0, 3.0, "2", ">6") and source is not True
        blank = source in (None, " ")
        assert (f"B{number}" in new) == (good and target is None)
        assert (f"B{number}" in named) == (good and target is not None)
        assert (f"A{number}" in named) == (not good and not blank and target is None)


def test_a_formula_that_shows_nothing_is_nothing_to_do(path: Path) -> None:
    write_log(path, [["z", "Age [Gyr]"], [1.0], [Formula('=IF(1,"",2)', 2.0)]])
    with_parts(path, sheet=('<c r="A3"><f>IF(1,"",2)</f><v>2.0</v>', _EMPTY_RESULT))
    result, new = filled(path)
    assert (new.keys(), result.left) == ({"B2"}, [])


def test_a_second_run_writes_nothing(path: Path) -> None:
    filled(write_log(path, KINDS))
    before, stamp = path.read_bytes(), path.stat().st_mtime_ns
    result = fill(path)
    assert (result.written, result.kept, result.filled) == (False, None, 0)
    assert len(result.left) == 6
    assert (path.read_bytes(), path.stat().st_mtime_ns) == (before, stamp)
    assert len(dated_copies(path)) == 1


@pytest.mark.parametrize("choices", [{"source": "z"}, {"source": "B:B"}])
def test_a_second_run_with_a_named_source_writes_nothing_either(
    path: Path, choices: dict[str, str]
) -> None:
    filled(write_log(path), **choices)
    before = path.read_bytes()
    assert not fill(path, **choices).written  # type: ignore[arg-type]  # per test
    assert path.read_bytes() == before


def test_a_named_source_that_holds_nothing_yet_is_no_mistake(path: Path) -> None:
    write_log(path, [["Object", "z", "Age [Gyr]"], ["first"]])
    assert not fill(path, source="z", add=["a []"]).written


def test_new_rows_at_the_bottom_are_the_daily_case(path: Path) -> None:
    filled(write_log(path, [["z", "Age [Gyr]", "D_C [Mpc]"], [1.0], [2.0]]))
    values = cells(path)
    rows = [[values.get(f"{column}{row}") for column in "ABC"] for row in (1, 2, 3)]
    result, new = filled(write_log(path, [*rows, [3.0]]))  # type: ignore[list-item]  # read back
    assert new.keys() == {"B4", "C4"}
    assert result.counts == {}


@pytest.mark.parametrize("value", [0.0, 1e9, 1e-300, 5e-324, 1e12, 1e300])
def test_no_cell_ever_holds_an_infinity(path: Path, value: float) -> None:
    headings = ["Age [Gyr]", "µ [mag]", "D_L [m]", "D_A [Mpc]", "H(z) [1/s]", "a []", "t_L [s]"]
    write_log(path, [["z", *headings], [1.0], [value]])
    result, new = filled(path)
    assert all(math.isfinite(number) for number in new.values() if isinstance(number, float))
    rows = {re.sub("[A-Z]", "", cell) for _, cell, _ in result.left}
    assert len([cell for cell in new if cell.endswith("3")]) == len(headings) or rows == {"3"}
    assert not re.search(rb"(?i)<v>[^<]*(nan|inf)", part(path, SHEET))
    json.dumps(json_report(result), allow_nan=False)


def test_minus_zero_is_written_as_zero(path: Path) -> None:
    filled(write_log(path, [["z", "D_C [Mpc]", "t_L [Gyr]"], ["-0"], [1.0]]))
    assert b"<v>-0</v>" not in part(path, SHEET)
    assert cells(path)["B2"] == cells(path)["C2"] == 0


def test_the_header_row_can_be_named(path: Path) -> None:
    rows: Grid = [["z", "a []", "Age [Gyr]"], ["z", "Age [Gyr]"], [1.0]]
    assert filled(write_log(path, rows), header_row=2)[1].keys() == {"B3"}
    with pytest.raises(UsageError, match="row 7 of sheet 'Log' holds no headings"):
        fill(path, header_row=7)


def test_only_the_columns_named_are_filled(path: Path) -> None:
    rows: Grid = [["z", "Age [Gyr]", "a []"], [1.0]]
    assert filled(write_log(path, rows), only=["A []"])[1] == {"C2": 0.5}
    with pytest.raises(UsageError, match=r"--only 'D_L \[Mpc\]' is no heading of log\.xlsx"):
        fill(write_log(path), only=["Age [Gyr]", "D_L [Mpc]"])
    with pytest.raises(UsageError, match="--only 'Object'"):
        fill(write_log(path), only=["Object"])


def test_the_parameters_can_be_chosen(path: Path) -> None:
    own = epochconv.ExpansionHistory(hubble_constant=50, matter=1, radiation=False)
    _, new = filled(write_log(path), parameters=own)
    # Einstein-de Sitter: t = (2/3) / H0 / (1 + z)^1.5; Peebles 1993, section 13
    assert new["C4"] == pytest.approx(2 / 3 * 977.792221 / 50 / 8, rel=1e-8)
    _, new = filled(write_log(path), parameters="Round-Numbers")
    expected = epochconv.convert(3, "redshift", "age", history="round numbers")
    assert new["C4"] == pytest.approx(expected.m_as("gigayear"), rel=1e-13)
    with pytest.raises(epochconv.ArgumentError, match="no parameter set"):
        fill(path, parameters="plonk")


DISTANCES: Grid = [["D_A [Mpc]", "z"], [1000.0], [9000.0], [-1.0]]


def test_where_a_map_turns_over_the_reason_holds_both_answers(path: Path) -> None:
    result, new = filled(write_log(path, DISTANCES), add=["Age [Gyr]"])
    assert new == {}
    reasons = {cell: why for _, cell, why in result.left}
    assert "at redshift 0.322744 and 8.18131; choose with --side nearer or" in reasons["A2"]
    assert "above the largest angular diameter distance (1794.74 Mpc" in reasons["A3"]
    assert reasons["A4"].endswith("is no distance that this history has")


@pytest.mark.parametrize(("side", "redshift"), [("nearer", 0.322744), ("farther", 8.18131)])
def test_a_side_settles_it(path: Path, side: str, redshift: float) -> None:
    result, new = filled(write_log(path, DISTANCES), side=side)
    assert new == pytest.approx({"B2": redshift}, rel=1e-5)
    assert len(result.left) == 2


def test_a_source_is_chosen_by_heading_or_letters(path: Path) -> None:
    rows: Grid = [["z", "z_phot", "Age [Gyr]", "x"], [1.0, 2.0, None, 3.0]]
    with pytest.raises(UsageError, match=r"2 columns to convert from: 'z' \(A\), 'z_phot' \(B\)"):
        fill(write_log(path, rows))
    for choices, age in (
        ({"source": "z_phot"}, AGES[2.0]),
        ({"source": "A:A"}, AGES[1.0]),
        ({"source": "D:D", "source_measure": "redshift"}, AGES[3.0]),
        ({"source": "x", "source_measure": "z"}, AGES[3.0]),
    ):
        _, new = filled(write_log(path, rows), **choices)
        assert new == pytest.approx({"C2": age}, rel=1e-5)


@pytest.mark.parametrize(
    ("source", "words"),
    [
        ("Nope", r"no sheet of log\.xlsx has a column 'Nope' with something to convert; name a"),
        ("Z:Z", "no sheet of log.xlsx has a column 'Z:Z' with something"),
        ("A:A", "column A of sheet 'Log' is headed 'Object', which is no measure"),
        ("ZZZ:ZZZ", "'ZZZ' is not a column"),
    ],
)
def test_wrong_sources_are_refused(path: Path, source: str, words: str) -> None:
    measure = "redshift" if source == "Z:Z" else None
    with pytest.raises(UsageError, match=words):
        fill(write_log(path), source=source, source_measure=measure)


def test_a_column_without_a_heading_is_converted_by_its_letters(path: Path) -> None:
    rows: Grid = [[None, 1.0], [None, 2.0]]
    choices = {"source": "B:B", "source_measure": "z", "add": ["Age [Gyr]"]}
    _, new = filled(write_log(path, rows), **choices)
    assert new == pytest.approx({"C1": AGES[1.0], "C2": AGES[2.0]}, rel=1e-5)


def test_without_anything_to_convert_an_addition_is_refused(path: Path) -> None:
    with pytest.raises(UsageError, match=r"log\.xlsx has no recognised column with numbers"):
        fill(write_log(path, [["Object", "magnitude"], ["first", 21.0]]), add=["Age [Gyr]"])


def test_what_is_there_already_is_said_and_not_added(path: Path) -> None:
    write_log(path, BARE)
    result, new = filled(path, add=["z"])
    assert (new, result.written) == ({}, False)
    assert result.plans[0].notes == [
        "'z' is there already (column B), so no column is added",
    ]


@pytest.mark.parametrize("rows", [[], [["Object"]], [["z", "Age [Gyr]"]], [[1.0, 2.0]]])
def test_a_workbook_with_nothing_to_fill_stays_as_it_is(path: Path, rows: Grid) -> None:
    write_log(path, rows)
    before = path.read_bytes()
    result = fill(path)
    assert (result.written, result.plans) == (False, [])
    assert path.read_bytes() == before


def test_measures_without_a_unit_are_mentioned(path: Path) -> None:
    result, _ = filled(write_log(path, [["z", "Age", "a []"], [1.0]]))
    assert result.warnings == [
        "sheet 'Log': heading 'Age' (B1) is left alone: age without a unit; write 'Age [Gyr]'"
    ]


def test_given_numbers_are_put_at_the_right_edge(path: Path, tmp_path: Path) -> None:
    before = cells(write_log(path, LOG))
    output = tmp_path / "out.xlsx"
    given: list[float | None] = [0.1 + 0.2, None, 1e-320, -0.0]
    result = write_columns(path, output, "log", {"P": given, "Q": [7.0]}, first_row=2)
    new = new_cells(before, output)
    assert new == {"D1": "P", "E1": "Q", "D2": 0.3, "D4": 0, "D5": 0, "E2": 7}
    assert (result.path, result.filled) == (output.resolve(), 4)
    with pytest.raises(UsageError, match="no cell can hold"):
        write_columns(path, tmp_path / "b.xlsx", "Log", {"P": [math.nan]}, first_row=2)
    assert not (tmp_path / "b.xlsx").exists()


def test_the_number_of_edits_of_each_kind_is_told(path: Path) -> None:
    rows: Grid = [["z", "a []"], [0.12345], [1.2345]]
    result, _ = filled(write_log(path, rows))
    assert {name: dict(counts) for name, counts in result.edit_counts.items()} == {
        SHEET: {"cell inserted": 2},
        "xl/styles.xml": {
            "number format appended": 1,
            "attribute changed": 1,
            "style appended": 1,
        },
    }
    with zipfile.ZipFile(path) as archive:
        assert archive.testzip() is None


def test_values_of_any_kind_survive(path: Path) -> None:
    odd: list[Value] = [True, Formula('="a"&"b"', "ab"), datetime.date(2026, 5, 6), "ünï ¼ 漢字"]
    write_log(path, [["z", "Age [Gyr]", *"PQRS"], [1.0, None, *odd]])
    before = cells(path, results=True)
    filled(path)
    after = cells(path, results=True)
    assert {address: after[address] for address in before} == before
