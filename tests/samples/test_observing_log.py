"""The sample log is what its builder makes, looks like a real one, and is whole."""

from __future__ import annotations

import re
import statistics
import warnings
import zipfile
from collections.abc import Sequence
from pathlib import Path

import openpyxl
import pytest
import xlsxwriter
from mpmath import mp
from openpyxl.worksheet.worksheet import Worksheet

from tests.reference.quadrature import Quadrature, Universe
from tests.samples.build_observing_log import BUILT_WITH, SAMPLE, build
from tests.workbook_tools.office import convert_to_csv, needs_office
from tests.workbook_tools.package_rules import problems
from tests.workbook_tools.read_back import Values, cell_values
from tests.workbook_tools.repack import part, repack
from tests.workbook_tools.schema_check import needs_schemas, package_schema_problems

LOG, OTHERS, SUMMARY, LISTS = "Log 2026", "Wide-field 2025", "Summary KJ", "Lists"
LOG_ROWS = range(6, 52)
OTHER_ROWS = range(5, 21)
# The default parameter set: Planck 2018 VI, table 2, TT,TE,EE+lowE+lensing.
PLANCK = Universe(hubble_constant=67.36, matter=0.3153)


@pytest.fixture(scope="module")
def shown() -> dict[str, Values]:
    return cell_values(SAMPLE, results=True)


@pytest.fixture(scope="module")
def formulas() -> dict[str, Values]:
    return cell_values(SAMPLE)


def load() -> openpyxl.Workbook:
    with warnings.catch_warnings():
        # openpyxl warns of the extensions that it would lose.
        warnings.simplefilter("ignore")
        return openpyxl.load_workbook(SAMPLE)


def column(values: Values, heading: str, header_row: int, rows: Sequence[int]) -> list[object]:
    """The cells under a heading, top down."""
    (at,) = (col for (row, col), text in values.items() if row == header_row and text == heading)
    return [values.get((row, at)) for row in rows]


def log_column(shown: dict[str, Values], heading: str) -> list[object]:
    return column(shown[LOG], heading, 5, LOG_ROWS)


def numbers(cells: Sequence[object]) -> list[float]:
    """The numbers among some cells, as a function over a range sees them."""
    return [float(cell) for cell in cells if isinstance(cell, int | float)]


@pytest.mark.skipif(
    xlsxwriter.__version__ != BUILT_WITH,
    reason=f"another XlsxWriter than {BUILT_WITH} may write the same content otherwise",
)
def test_the_committed_file_is_what_the_builder_makes(tmp_path: Path) -> None:
    # Compared part by part: another zlib may pack the same part otherwise.
    build(tmp_path / "built.xlsx")
    with zipfile.ZipFile(tmp_path / "built.xlsx") as built, zipfile.ZipFile(SAMPLE) as committed:
        assert built.namelist() == committed.namelist()
        for name in built.namelist():
            assert built.read(name) == committed.read(name), name


def test_the_committed_cells_are_those_that_the_builder_writes(tmp_path: Path) -> None:
    build(tmp_path / "built.xlsx")
    for results in (False, True):
        built = cell_values(tmp_path / "built.xlsx", results=results)
        assert built == cell_values(SAMPLE, results=results)


def test_built_twice_is_the_same_bytes(tmp_path: Path) -> None:
    build(tmp_path / "one.xlsx")
    build(tmp_path / "two.xlsx")
    assert (tmp_path / "one.xlsx").read_bytes() == (tmp_path / "two.xlsx").read_bytes()


def test_nothing_is_broken() -> None:
    assert problems(SAMPLE) == []


@needs_schemas
@pytest.mark.long
def test_all_parts_are_valid() -> None:
    found = package_schema_problems(SAMPLE)
    assert {name: what for name, what in found.items() if what} == {}


def test_about_sixty_objects(shown: dict[str, Values]) -> None:
    names = log_column(shown, "Object") + column(shown[OTHERS], "Target", 4, OTHER_ROWS)
    assert None not in names
    assert 55 <= len(set(names)) == len(names) <= 70


def test_hands_that_type_a_redshift_leave_all_kinds_of_cells(shown: dict[str, Values]) -> None:
    redshifts = log_column(shown, "z")
    assert [cell for cell in redshifts if isinstance(cell, str)] == ["2.31", ">6", "0.6692", "tbc"]
    assert redshifts.count(None) == 3
    assert [cell for cell in numbers(redshifts) if cell < 0] == [-0.0003]


def test_lookback_times_typed_by_hand_agree_with_the_default_set(shown: dict[str, Values]) -> None:
    typed = log_column(shown, "Lookback time [Gyr]")
    redshifts = [float(str(z)) for z, t in zip(log_column(shown, "z"), typed, strict=True) if t]
    with mp.workdps(18):
        answers = Quadrature(PLANCK).answers(redshifts)
    assert len(redshifts) > 30
    for redshift, time in zip(redshifts, numbers(typed), strict=True):
        digits = len(f"{time:.15g}".partition(".")[2])
        assert digits <= 3
        assert abs(float(answers[redshift].lookback_time) - time) <= 0.5 * 10**-digits


def test_the_newest_rows_have_no_lookback_time_yet(shown: dict[str, Values]) -> None:
    assert log_column(shown, "Lookback time [Gyr]")[-10:] == [None] * 10
    assert log_column(shown, "Lookback time [Gyr]")[-11] is not None


def test_headings_wait_over_empty_columns(shown: dict[str, Values]) -> None:
    for heading in ("Age (Gyr)", "Comoving distance / Mpc", "T_CMB [K]", "D_L [Mpc]"):
        assert set(log_column(shown, heading)) == {None}, heading
    for heading in (
        "scale factor",
        "Age of the universe (Gyr)",
        "Comoving distance\n(Gly)",
        "Distance modulus [mag]",
    ):
        assert set(column(shown[OTHERS], heading, 4, OTHER_ROWS)) == {None}, heading


def test_the_log_is_a_table_with_room_at_its_right() -> None:
    sheet = load()[LOG]
    (table,) = sheet.tables.values()
    assert (table.ref, table.autoFilter.ref) == ("A5:V51", "A5:V51")
    assert sheet.max_column == 22
    (rule,) = (one for one in table.tableColumns if one.calculatedColumnFormula)
    assert rule.name == "Lyα at [nm]"


def test_what_belongs_to_colleagues_is_there() -> None:
    book = load()
    log, others = book[LOG], book[OTHERS]
    assert (log.freeze_panes, others.freeze_panes) == ("B6", "B5")
    assert [str(one) for one in log.merged_cells.ranges] == ["A1:I1"]
    assert comments_of(log) >= 5
    assert comments_of(others) == 1
    assert {str(one.sqref) for one in log.conditional_formatting} == {
        "A6:A51",
        "H6:H51",
        "I6:I51",
        "M6:M51",
    }
    assert {one.type for one in log.data_validations.dataValidation} == {"list", "whole"}
    assert log["E6"].is_date
    assert log["A6"].hyperlink.target.startswith("https://hobnail.example/")
    assert log.column_dimensions["U"].hidden
    assert [log[cell].fill.fgColor.rgb for cell in ("N22", "N31")] == ["FFFFF2CC", "FFE3E3E3"]
    assert log.print_area == "'Log 2026'!$A$1:$V$51"
    assert others.auto_filter.ref == "A4:N20"
    assert [row for row in OTHER_ROWS if others.row_dimensions[row].hidden] == [10, 16]
    assert book[LISTS].sheet_state == "hidden"
    assert set(book.defined_names) == {"AllRedshifts", "ClassList", "Lookbacks"}


def comments_of(sheet: Worksheet) -> int:
    return sum(cell.comment is not None for row in sheet.iter_rows() for cell in row)


@pytest.mark.parametrize(
    ("member", "text"),
    [
        ("xl/worksheets/sheet1.xml", "x14:dataBar"),
        ("xl/worksheets/sheet1.xml", "<ignoredError "),
        ("xl/worksheets/sheet1.xml", '<c r="N6" s="'),  # styled, and nothing in it
        ("xl/worksheets/sheet2.xml", "<customFilter "),
        ("xl/worksheets/sheet3.xml", "x14:sparkline"),
        ("xl/drawings/drawing1.xml", 'txBox="1"'),
        ("xl/charts/chart1.xml", "<c:f>'Log 2026'!$M$6:$M$51</c:f>"),
        ("xl/charts/chart2.xml", "<c:barChart>"),
    ],
)
def test_what_other_programs_lose_is_there(member: str, text: str) -> None:
    assert text.encode() in part(SAMPLE, member)


def test_nobody_orders_a_recalculation() -> None:
    assert b"fullCalcOnLoad" not in part(SAMPLE, "xl/workbook.xml")


def test_wavelengths_are_stored_with_their_formulas(
    shown: dict[str, Values], formulas: dict[str, Values]
) -> None:
    wavelengths = log_column(shown, "Lyα at [nm]")
    for redshift, wavelength in zip(log_column(shown, "z"), wavelengths, strict=True):
        if isinstance(redshift, float):
            # Lyman alpha in vacuum, 121.567 nm (NIST Atomic Spectra Database, from memory).
            assert wavelength == pytest.approx(121.567 * (1 + redshift), rel=1e-14)
        else:
            assert wavelength == "–"
    assert all(str(text).startswith("=IF(") for text in log_column(formulas, "Lyα at [nm]"))


def test_results_on_the_summary_are_right(
    shown: dict[str, Values], formulas: dict[str, Values]
) -> None:
    classes = log_column(shown, "Class")
    measured = {
        heading: log_column(shown, heading)
        for heading in ("z", "Lookback time [Gyr]", "Exposure [s]", "Seeing [arcsec]")
    }
    summary = shown[SUMMARY]

    def of_class(name: str, heading: str) -> list[float]:
        pairs = zip(classes, measured[heading], strict=True)
        return numbers([cell for kind, cell in pairs if name in (kind, "all")])

    for row in range(5, 12):
        name = str(summary[row, 1])
        redshifts = of_class(name, "z")
        expected = [
            len(classes) if name == "all" else classes.count(name),
            len(redshifts),
            statistics.fmean(redshifts),
            statistics.fmean(of_class(name, "Lookback time [Gyr]")),
            sum(of_class(name, "Exposure [s]")) / 3600,
        ]
        assert [summary[row, at] for at in range(2, 7)] == pytest.approx(expected, rel=1e-14), name
        assert all(str(formulas[SUMMARY][row, at]).startswith("=") for at in range(2, 7))
    times = numbers(measured["Lookback time [Gyr]"])
    others = numbers(column(shown[OTHERS], "Redshift", 4, OTHER_ROWS))
    figures = {summary[row, 1]: summary[row, 2] for row in range(13, 23)}
    assert figures == {
        "Rows with a lookback time": len(times),
        "Rows without": len(LOG_ROWS) - len(times),
        "Rows with an age": 0,
        "Furthest z": 8.6,
        "Its object": "HBN 0148+05",
        "Oldest light / Gyr ago": max(times),
        "Median seeing / arcsec": statistics.median(numbers(measured["Seeing [arcsec]"])),
        "Wide-field: objects": len(OTHER_ROWS),
        "Wide-field: median z": statistics.median(others),
        "Wide-field: rows with an age": 0,
    }


@needs_office
@pytest.mark.long
def test_libreoffice_computes_the_stored_results(shown: dict[str, Values], tmp_path: Path) -> None:
    # It computes what has no stored result.
    names = ["xl/worksheets/sheet1.xml", "xl/worksheets/sheet3.xml"]
    bare = re.compile(rb"(</f>)<v>[^<]*</v>")
    changes: dict[str, bytes | None] = {
        name: bare.sub(rb"\1", part(SAMPLE, name)) for name in names
    }
    path = repack(SAMPLE, tmp_path / "without results.xlsx", changes)
    computed = convert_to_csv([path])[path]
    for sheet, columns in ((LOG, [18]), (SUMMARY, range(2, 7))):
        for (row, at), value in shown[sheet].items():
            if at in columns and row > 5:
                text = computed[sheet][row - 1][at - 1]
                if isinstance(value, str):
                    assert text == value
                else:
                    assert float(text) == pytest.approx(value, rel=1e-13), (sheet, row, at)
