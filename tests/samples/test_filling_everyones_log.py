"""The log that everyone typed into, filled sheet by sheet: every row, remark and reason.

What is expected stands beside what was typed (tests/samples/many_hands) or below, written by hand
from the project's policy; values come from quadrature.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import NamedTuple

import pytest
from openpyxl.utils import column_index_from_string

import epochconv
from tests.samples.build_everyones_log import SAMPLE
from tests.samples.many_hands import (
    catalogue_sheet,
    commas_sheet,
    list_sheet,
    neighbours_sheet,
    summary_sheet,
    times_sheet,
)
from tests.samples.many_hands.expected import Converted, Expected
from tests.samples.many_hands.list_rows import ROWS
from tests.samples.many_hands.readings import Reading
from tests.workbook_tools.office import convert_to_csv, needs_office
from tests.workbook_tools.package_rules import new_problems
from tests.workbook_tools.read_back import Values, cell_values
from tests.workbook_tools.schema_check import needs_schemas, package_schema_problems
from tests.workbook_tools.untouched import compare
from workbook_tools import Choices, FillResult, fill
from workbook_tools.command import main

CLOSE = 2e-12
UNNAMED_FRAME = (
    "the heading names no frame; redshifts are taken as in the CMB frame, which matters below 0.1"
)
CUT = "an error that reaches beyond what is possible, cut there"
BOTH_SIDES = (
    "holds the larger side of errors that are not symmetric; for both sides use columns headed"
    " 'upper error of' and 'lower error of'"
)


class Target(NamedTuple):
    """One column that gets cells: letters, measure, and "value" or what it holds of that."""

    letters: str
    measure: str
    holds: str = "value"


@dataclass(frozen=True)
class Case:
    """One sheet, how it is filled, and what must come of it beyond its rows.

    Attributes:
        sheet, choices: the sheet and the options with which it is filled.
        source, letters: what the readings are values of, and the column in which they stand.
        first_row: row of the first reading.
        readings: of the rows, top down.
        targets: the columns that get cells.
        limits: how limits are written: "text", or "flag" for a number beside a sign.
        left: reason and text by address, besides the cells of the source column.
        passed_over: why by address, besides the rows of the readings.
        remarks: by address, besides those of the readings.
        notes: sentences about the sheet, but for the one on the choice of parameters.
        headings: of new columns: name and unit below it, or the whole heading.
        differing: heading and measure of the columns that the note on parameters can name.
    """

    sheet: str
    choices: Choices
    source: str
    letters: str
    first_row: int
    readings: Sequence[Reading]
    targets: Sequence[Target]
    limits: str = "text"
    left: Mapping[str, tuple[str, str]] = field(default_factory=dict)
    passed_over: Mapping[str, str] = field(default_factory=dict)
    remarks: Mapping[str, Sequence[str]] = field(default_factory=dict)
    notes: Sequence[str] = ()
    headings: Mapping[str, tuple[str, str]] = field(default_factory=dict)
    differing: Sequence[tuple[str, str]] = ()

    def address(self, letters: str, offset: int) -> str:
        """The address of the cell in a row, counted from the first reading."""
        return f"{letters}{self.first_row + offset}"


def _row_of(name: str) -> int:
    return list_sheet.FIRST_ROW + 1 + [row.name for row in ROWS].index(name)


_LIST_MEASURES = (
    ("E", "lookback / Gyr", "Lookback time", "Gyr"),
    ("F", "age / Gyr", "Age of the universe", "Gyr"),
    ("G", "D_C / Mpc", "DC", "Mpc"),
    ("H", "D_L / Gly", "Luminosity distance", "Gly"),
    ("I", "T_CMB / K", "T_CMB", "K"),
    ("J", "H", "H(z)", "km/s/Mpc"),
    ("K", "modulus", "m-M", "mag"),
)
_LIST_ERRORS = ("Q", "S", "U", "W", "Y", "AA", "AC"), ("R", "T", "V", "X", "Z", "AB", "AD")

LIST = Case(
    sheet=list_sheet.NAME,
    choices={"with_errors": True},
    source="z",
    letters="C",
    first_row=list_sheet.FIRST_ROW + 1,
    readings=[row.reading for row in ROWS],
    targets=[
        *(Target(letters, measure) for letters, measure, _, _ in _LIST_MEASURES),
        *(
            Target(letters, measure, side)
            for side, row in zip(("upper", "lower"), _LIST_ERRORS, strict=True)
            for letters, (_, measure, _, _) in zip(row, _LIST_MEASURES, strict=True)
        ),
    ],
    left={
        f"F{_row_of('HBN 1446-14')}": ("not overwritten", "ask KJ"),
        f"K{_row_of('HBN 0140-25')}": ("distance modulus does not exist at redshift 0", ""),
        f"AD{_row_of('HBN 0356-14')}": ("an error that reaches to redshift 0", ""),
    },
    passed_over={
        f"C{list_sheet.TOTAL_ROW + 1}": "a line of totals",
        f"C{list_sheet.TOTAL_ROW + 2}": "a line of totals",
    },
    remarks={CUT: [f"C{_row_of('HBN 0356-14')}"]},
    notes=[
        "no value in column C: n/a (2), — (1), N/A (1), ... (1), none (1)",
        "-99 stands 2 times in column C and looks like a code for a missing value; if it is one,"
        " say so with --missing=-99",
        "-99 stands in column D and looks like a code for a missing value; if it is one, say so"
        " with --missing=-99",
        # 0, 0.05 ± 0.08, and 5 % twice
        f"{UNNAMED_FRAME} (4 of them)",
        "2 redshifts are above 20, where no object is known",
    ],
    headings={
        letters: (f"{side} error of {name}", unit)
        for side, row in zip(("upper", "lower"), _LIST_ERRORS, strict=True)
        for letters, (_, _, name, unit) in zip(row, _LIST_MEASURES, strict=True)
    },
    differing=[
        (name.replace("m-M", "m\u2212M"), measure) for _, measure, name, _ in _LIST_MEASURES
    ],
)

_LIMITS_OZ = (7, 8, 9, 10, 18)  # rows of the catalogue


def _lacks_flag(name: str) -> tuple[str, str]:
    return f"a limit, whose sign needs a column headed 'limit flag of {name}'", ""


CATALOGUE = Case(
    sheet=catalogue_sheet.NAME,
    choices={"missing": (-99.0,)},
    source="z",
    letters="C",
    first_row=catalogue_sheet.FIRST_ROW + 1,
    readings=[row.reading for row in catalogue_sheet.ROWS],
    targets=[
        Target("H", "age / Gyr"),
        Target("I", "age / Gyr", "sign"),
        Target("J", "age / Gyr", "upper"),
        Target("K", "age / Gyr", "lower"),
        Target("L", "D_L / Mpc", "measured"),
        Target("M", "D_L / Mpc", "larger"),
        Target("N", "lookback / Gyr"),
        Target("O", "lookback / Gyr", "sign"),
        Target("P", "D_A / Mpc", "measured"),
        Target("Q", "scale factor", "measured"),
    ],
    limits="flag",
    left={
        **{f"L{row}": _lacks_flag("D_L") for row in _LIMITS_OZ},
        **{f"P{row}": _lacks_flag("D_A") for row in _LIMITS_OZ},
        **{f"Q{row}": _lacks_flag("scale factor") for row in _LIMITS_OZ},
        # At or below redshift 2.4 the angular diameter distance rises and falls.
        "P10": (
            "a limit beyond which angular diameter distance turns over, so it stands for none",
            "",
        ),
    },
    notes=[
        f"column M {BOTH_SIDES}",
        "no value in column C: -99 (2)",
        "taken for no value, as declared with --missing: -99",
    ],
    differing=[
        ("Age [Gyr]", "age / Gyr"),
        ("D_L / Mpc", "D_L / Mpc"),
        ("t_L (Gyr)", "lookback / Gyr"),
        ("D_A (Mpc)", "D_A / Mpc"),
        ("scale factor", "scale factor"),
    ],
)

COMMAS = Case(
    sheet=commas_sheet.NAME,
    choices={"decimal_comma": True, "with_errors": True},
    source="D_C / Mpc",
    letters="B",
    first_row=commas_sheet.FIRST_ROW + 1,
    readings=[row.reading for row in commas_sheet.ROWS],
    targets=[
        Target("C", "z"),
        Target("D", "z", "larger"),
        Target("E", "age / Myr"),
        Target("G", "age / Myr", "upper"),
        Target("H", "age / Myr", "lower"),
    ],
    notes=[
        f"column D {BOTH_SIDES}",
        "no value in column B: — (1)",
        "commas in typed numbers were taken for decimal marks (--decimal-comma)",
    ],
    headings={"G": ("upper error of Age [Myr]", ""), "H": ("lower error of Age [Myr]", "")},
    differing=[("z", "z"), ("Age (Myr)", "age / Myr")],
)

TIMES = Case(
    sheet=times_sheet.NAME,
    choices={"brackets_are_notes": True},
    source="lookback / Gyr",
    letters="F",
    first_row=times_sheet.FIRST_ROW + 1,
    readings=[row.reading for row in times_sheet.ROWS],
    targets=[
        Target("G", "z"),
        Target("H", "z", "upper"),
        Target("I", "z", "lower"),
        Target("J", "D_C / Mpc/h"),
        Target("K", "T_CMB / K"),
    ],
    # 13.7 ± 0.2 Gyr reaches beyond the age of the universe.
    left={"H15": ("an error that reaches to the beginning", "")},
    notes=[
        "brackets behind numbers were taken for notes (--brackets-are-notes)",
        "1 redshift is above 20, where no object is known",
        "in powers of h, taken with h = 0.6736: 'D_C [h\u207b\u00b9 Mpc]'",
    ],
    differing=[
        ("Redshift", "z"),
        ("D_C [h\u207b\u00b9 Mpc]", "D_C / Mpc/h"),
        ("T_CMB (K)", "T_CMB / K"),
    ],
)

NEIGHBOURS = Case(
    sheet=neighbours_sheet.NAME,
    choices={"peculiar_velocity": 300.0, "parameter_error": True},
    source="z",
    letters="B",
    first_row=neighbours_sheet.FIRST_ROW + 1,
    readings=[row.reading for row in neighbours_sheet.ROWS],
    targets=[Target("H", "D_L / Mpc"), Target("K", "lookback / Myr")],
    notes=[
        "errors of planck 2018 counted: H0 ± 0.54; Ω_m ± 0.0073; correlation -0.992 from"
        " Ω_m h³ 0.09633 ± 0.0003",
        "errors count peculiar motions of 300 km/s",
        # 300 / 299,792.458 / 0.0016 is 62.5 %.
        "2 redshifts are below 0.01, where peculiar motion counts: 300 km/s are 63 % of the"
        " smallest",
        "the redshifts are heliocentric and taken as in the CMB frame; below 0.1 (4 of them) that"
        " matters by up to 0.0012",
    ],
)

CASES = (LIST, CATALOGUE, COMMAS, TIMES, NEIGHBOURS)
by_sheet = pytest.mark.parametrize("case", CASES, ids=lambda case: case.sheet)


class Filled(NamedTuple):
    """The sample after all fills: files before and after each, and what each said."""

    paths: list[Path]
    results: dict[str, FillResult]


@pytest.fixture(scope="module")
def filled(tmp_path_factory: pytest.TempPathFactory) -> Filled:
    folder = tmp_path_factory.mktemp("everyone")
    paths, results = [SAMPLE], {}
    for number, case in enumerate(CASES):
        output = folder / f"{number}.xlsx"
        results[case.sheet] = fill(paths[-1], output=output, sheet=case.sheet, **case.choices)
        paths.append(output)
    return Filled(paths, results)


@pytest.fixture(scope="module")
def before() -> dict[str, Values]:
    return cell_values(SAMPLE)


@pytest.fixture(scope="module")
def after(filled: Filled) -> dict[str, Values]:
    return cell_values(filled.paths[-1])


@pytest.fixture(scope="module")
def measures() -> dict[str, Expected]:
    return {case.sheet: Expected(case.source, case.readings) for case in CASES}


def expected_cell(case: Case, target: Target, one: Converted | None) -> float | str | None:
    """What a blank cell of a target gets."""
    if one is None:
        return None
    if target.holds in ("value", "measured"):
        if one.sign and target.holds == "measured":
            return None
        return one.text if one.sign and case.limits == "text" else one.value
    if target.holds == "sign":
        return one.sign or None
    if one.upper is None or one.lower is None or one.sign:
        return None
    sizes = {"upper": one.upper, "lower": one.lower, "larger": max(one.upper, one.lower)}
    size = sizes[target.holds]
    return size if math.isfinite(size) else None


def new_cells(case: Case, expected: Expected) -> Iterator[tuple[str, float | str | None, float]]:
    """Address, content and scale of each cell of the targets, whether blank before or not."""
    for target in case.targets:
        for offset, one in enumerate(expected.of(target.measure)):
            scale = 0.0 if one is None else abs(one.value)
            yield case.address(target.letters, offset), expected_cell(case, target, one), scale


def place(address: str) -> tuple[int, int]:
    letters = address.rstrip("0123456789")
    return int(address[len(letters) :]), column_index_from_string(letters)


@by_sheet
def test_every_cell_of_every_row(
    case: Case,
    before: dict[str, Values],
    after: dict[str, Values],
    measures: dict[str, Expected],
) -> None:
    old, new = before[case.sheet], after[case.sheet]
    reported = {place(address) for address in case.left}
    seen = 0
    for address, expected, scale in new_cells(case, measures[case.sheet]):
        where = place(address)
        found = new.get(where)
        if where in old:
            assert found == old[where], address
        elif where in reported:
            assert found is None, address
        elif isinstance(expected, float):
            assert isinstance(found, int | float), (address, found, expected)
            # Of an error, the digits of the values count whose difference it is.
            near = math.isclose(found, expected, rel_tol=CLOSE, abs_tol=CLOSE * scale + 1e-15)
            assert near, (address, found, expected)
            seen += 1
        else:
            assert found == expected, address
            seen += expected is not None
    assert seen >= 10


@by_sheet
def test_nothing_but_these_cells_is_new(
    case: Case,
    before: dict[str, Values],
    after: dict[str, Values],
    measures: dict[str, Expected],
) -> None:
    old, new = before[case.sheet], after[case.sheet]
    targets = {place(address) for address, _, _ in new_cells(case, measures[case.sheet])}
    if case is NEIGHBOURS:
        targets |= {(row, column) for row in range(2, 8) for column in (9, 10)}
    headings = {
        (row, place(f"{letters}1")[1]): text
        for letters, texts in case.headings.items()
        for row, text in zip(_heading_rows(case), texts, strict=False)
        if text
    }
    assert {where: value for where, value in new.items() if where in old} == old
    assert {where: new[where] for where in new.keys() - old.keys() - targets} == headings


def _heading_rows(case: Case) -> tuple[int, ...]:
    if case is LIST:
        return list_sheet.NAMES_ROW + 1, list_sheet.UNITS_ROW + 1
    return (case.first_row - 1,)


@by_sheet
def test_every_reason_with_its_address(case: Case, filled: Filled) -> None:
    expected = dict(case.left)
    for offset, reading in enumerate(case.readings):
        if reading.reason:
            address = case.address(case.letters, offset)
            expected[address] = with_ends(reading.reason), reading.shown
    (plan,) = filled.results[case.sheet].plans
    assert {cell: (reason, text) for cell, reason, text in plan.left} == expected
    assert len(plan.left) == len(expected)


def with_ends(reason: str) -> str:
    """A reason with the end that it speaks of, under the default parameter set."""
    if reason == commas_sheet.BEYOND:
        # Where the tables end, at redshift 1e10.
        return f"{reason} ({_at_the_end('comoving distance'):.6g} Mpc under planck 2018)"
    if reason == times_sheet.TOO_OLD:
        # Planck 2018 VI, table 2: 13.797 ± 0.023 Gyr.
        age = _at_the_end("lookback time")
        assert age == pytest.approx(13.797, abs=0.0015)
        return f"{reason} ({age:.6g} Gyr under planck 2018)"
    return reason


def _at_the_end(measure: str) -> float:
    return float(epochconv.convert(1e10, "redshift", measure).magnitude)


@by_sheet
def test_every_remark_with_its_addresses(case: Case, filled: Filled) -> None:
    expected = {remark: list(cells) for remark, cells in case.remarks.items()}
    for offset, reading in enumerate(case.readings):
        marks = [*reading.remarks, *(["a limit"] if reading.limit else [])]
        for remark in marks:
            expected.setdefault(remark, []).append(case.address(case.letters, offset))
    (plan,) = filled.results[case.sheet].plans
    assert plan.remarks == expected


@by_sheet
def test_every_row_that_is_none_of_the_log(case: Case, filled: Filled) -> None:
    expected = dict(case.passed_over)
    for offset, reading in enumerate(case.readings):
        if reading.passed_over:
            expected[case.address(case.letters, offset)] = reading.passed_over
    (plan,) = filled.results[case.sheet].plans
    assert {cell: why for cell, why, _ in plan.passed_over} == expected


@by_sheet
def test_every_note(case: Case, filled: Filled, measures: dict[str, Expected]) -> None:
    (plan,) = filled.results[case.sheet].plans
    counts = moved_by_parameters(case, filled, measures[case.sheet])
    listed = ", ".join(f"{heading} ({count})" for heading, count in counts if count)
    last = (
        "the choice of parameters (planck 2018 or distance ladder 2022) moves more than the error"
        f" of the value: {listed}"
    )
    assert plan.notes == [*case.notes, last]


_CALLED = {
    "z": ("redshift", None),
    "scale factor": ("scale factor", None),
    "lookback / Gyr": ("lookback time", "Gyr"),
    "lookback / Myr": ("lookback time", "Myr"),
    "age / Gyr": ("age", "Gyr"),
    "age / Myr": ("age", "Myr"),
    "D_C / Mpc": ("comoving distance", "Mpc"),
    "D_C / Mpc/h": ("comoving distance", "Mpc"),
    "D_L / Mpc": ("luminosity distance", "Mpc"),
    "D_L / Gly": ("luminosity distance", "Gly"),
    "D_A / Mpc": ("angular diameter distance", "Mpc"),
    "modulus": ("distance modulus", None),
    "H": ("Hubble rate", None),
    "T_CMB / K": ("CMB temperature", "K"),
}


def moved_by_parameters(
    case: Case, filled: Filled, expected: Expected
) -> Iterator[tuple[str, int]]:
    """How many values of each column move by more than their error under another set."""
    if case is NEIGHBOURS:
        # Its errors hold those of the parameters: only the two farthest are still beyond.
        yield from (("D_L [Mpc]", 2), ("Lookback time [Myr]", 2))
        return
    for heading, measure in case.differing:
        name, unit = _CALLED[measure]
        count = 0
        for reading, one in zip(case.readings, expected.of(measure), strict=True):
            if one is None or one.upper is None or one.lower is None or reading.limit:
                continue
            under = [
                epochconv.convert(
                    reading.value,
                    _CALLED[case.source][0],
                    name,
                    unit=unit,
                    history=history,
                    outside="nan",
                ).magnitude
                for history in ("planck 2018", "distance ladder 2022")
            ]
            scale = 0.6736 if measure == "D_C / Mpc/h" else 1.0
            # What exists under one of them only differs by more than any error.
            same = scale * abs(under[0] - under[1]) <= max(one.upper, one.lower)
            count += not same
        yield heading, count


def test_errors_that_count_motion_and_parameters(after: dict[str, Values]) -> None:
    """E_D_L and e_D_L of the neighbours, with what was asked for added to the error of z."""
    new = after[neighbours_sheet.NAME]
    for row, one in enumerate(neighbours_sheet.ROWS, start=2):
        sizes = [new.get((row, column)) for column in (9, 10)]
        if one.reading.value is None or one.error is None:
            assert sizes == [None, None]
            continue
        found = epochconv.convert_with_error(
            one.z,
            one.error,
            "redshift",
            "luminosity distance",
            parameter_error=True,
            peculiar_velocity=300,
        )
        expected = [found.upper_error.magnitude, found.lower_error.magnitude]
        assert sizes == pytest.approx(expected, rel=1e-9)
        # Peculiar motion alone blurs D_L by more than the typed error would.
        assert sizes[0] > 3.0 * one.error / one.z * new[row, 8] or one.z > 0.02


def test_each_sheet_is_filled_by_its_own_run_alone(filled: Filled) -> None:
    for case, first, second in zip(CASES, filled.paths[:-1], filled.paths[1:], strict=True):
        old, new = cell_values(first), cell_values(second)
        assert [name for name in old if old[name] != new[name]] == [case.sheet]
        assert compare(first, second).faults == []
        assert new_problems(first, second) == []


def test_readers_of_filled_cells_are_named(filled: Filled) -> None:
    (first,) = (filled.results[LIST.sheet].dependents[LIST.sheet],)
    assert first.cells == {summary_sheet.NAME: ("B2:B3",)}
    assert list(first.names) == ["Lookbacks"]
    assert first.charts == {summary_sheet.NAME: 1}
    second = filled.results[CATALOGUE.sheet].dependents[CATALOGUE.sheet]
    assert second.cells == {summary_sheet.NAME: ("B4",)}


@by_sheet
def test_a_second_run_writes_nothing(case: Case, filled: Filled) -> None:
    path = filled.paths[-1]
    held = path.read_bytes()
    again = fill(path, sheet=case.sheet, **case.choices)
    assert not again.written
    assert path.read_bytes() == held


def test_the_command_ends_with_exit_code_3(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    output = str(tmp_path / "filled.xlsx")
    options = ["--sheet", TIMES.sheet, "--brackets-are-notes", "--output", output]
    assert main(["fill", str(SAMPLE), *options]) == 3
    said = capsys.readouterr().out
    for line in (
        "  G 'Redshift': 15 cells filled from F 'Lookback time [Gyr]', 1 of them a limit",
        "  left 2: lookback time is older than the universe (13.7958 Gyr under planck 2018)"
        " (F21 '14.2 Gyr', F22 '14.2')",
        "  read 2: a note in brackets, passed over (F9, F10)",
    ):
        assert line in said.splitlines()


@needs_schemas
@pytest.mark.long
def test_all_parts_of_the_result_are_valid(filled: Filled) -> None:
    found = package_schema_problems(filled.paths[-1])
    assert {name: what for name, what in found.items() if what} == {}


@needs_office
@pytest.mark.long
def test_libreoffice_shows_the_new_cells(
    filled: Filled, before: dict[str, Values], after: dict[str, Values]
) -> None:
    shown = convert_to_csv([filled.paths[-1]])[filled.paths[-1]]
    for case in CASES:
        for row, column in after[case.sheet].keys() - before[case.sheet].keys():
            value, text = after[case.sheet][row, column], shown[case.sheet][row - 1][column - 1]
            if isinstance(value, int | float):
                assert float(text) == pytest.approx(value, rel=1e-14), (case.sheet, row, column)
            else:
                assert text == value
