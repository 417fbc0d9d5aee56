"""The command `epochbook`: exit codes, what it prints, and that it never ends in a traceback."""

from __future__ import annotations

import io
import json
import os
import re
import subprocess
import sys
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from epochconv import __version__
from tests.workbook_tools.small_logs import (
    AGES,
    BARE,
    LOG,
    Grid,
    cells,
    dated_copies,
    write_log,
)
from workbook_tools.command import main

Said = tuple[int, str, str]
_CLONE = Path(__file__).resolve().parents[2]


@pytest.fixture
def path(tmp_path: Path) -> Path:
    return write_log(tmp_path / "log.xlsx")


def run(capsys: pytest.CaptureFixture[str], *arguments: object) -> Said:
    """Run the command in this process; return exit code, output and errors."""
    try:
        code = main([str(argument) for argument in arguments])
    except SystemExit as left:
        code = int(left.code or 0)
    said = capsys.readouterr()
    return code, said.out, said.err


def test_nothing_left_is_code_0(capsys: pytest.CaptureFixture[str], path: Path) -> None:
    code, out, err = run(capsys, "fill", path)
    assert (code, err) == (0, "")
    assert "C 'Age [Gyr]': 3 cells filled from B 'z'" in out
    assert f"written: {path}" in out
    assert cells(path)["C2"] == pytest.approx(AGES[1.0], rel=1e-5)
    assert run(capsys, "fill", path)[0] == 0
    assert len(dated_copies(path)) == 1


def test_something_left_is_code_3(capsys: pytest.CaptureFixture[str], path: Path) -> None:
    write_log(path, [*LOG, ["fourth", "2-3"]])
    code, out, err = run(capsys, "fill", path)
    assert (code, err) == (3, "")
    assert "left 1: not read: a range, not one value (B5 '2-3')" in out
    assert run(capsys, "fill", path)[0] == 3


def test_a_refusal_is_code_1_and_one_sentence(
    capsys: pytest.CaptureFixture[str], path: Path
) -> None:
    path.write_bytes(b"name,z\n")
    code, out, err = run(capsys, "fill", path)
    assert (code, out) == (1, "")
    assert err == (
        "epochbook: log.xlsx is not a workbook, whatever its name says; open it in a spreadsheet"
        " program and save it as .xlsx.\n"
    )
    assert path.read_bytes() == b"name,z\n"


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["--sheet", "Spring"], "log.xlsx has no sheet 'Spring'; it has 'Log'"),
        (
            ["--source", "Note"],
            "no sheet of log.xlsx has a column 'Note' with something to convert",
        ),
        (["--source", "A:A"], "column A of sheet 'Log' is headed 'Object', which is no measure"),
        (
            ["--source", "A:C", "--as", "z"],
            "--source A:C is more than one column; name one, as C:C",
        ),
        (["--source", "z", "--as", "speed"], "--as 'speed' is no heading that is known here"),
        (["--as", "redshift"], "--as says what a column holds; name that column with --source"),
        (["--add", "Age"], "age needs a unit: 'Age [Gyr]'"),
        (["--add", "Length [m]"], "--add 'Length [m]' is no heading that is known here"),
        (["--only", "Note"], "--only 'Note' is no heading of log.xlsx that can be filled"),
        (["--header-row", "0"], "row 0 of sheet 'Log' holds no headings"),
        (["--header-row", "9"], "row 9 of sheet 'Log' holds no headings"),
        (["--parameters", "plank 2018"], "Did you mean 'planck 2018'?"),
        (["--output", "filled.ods"], "so give it a name that ends in .xlsx too"),
        (["--report", "report.txt"], "the report is JSON, so give it a name that ends in .json"),
        (["--report", "nowhere/report.json"], "there is no folder nowhere for --report"),
        (["--side", "left"], "invalid choice: 'left'"),
        (["--header-row", "first"], "invalid int value: 'first'"),
        (["--colour", "red"], "unrecognized arguments: --colour red"),
    ],
)
def test_wrong_usage_is_code_2_and_nothing_is_touched(
    capsys: pytest.CaptureFixture[str],
    monkeypatch: pytest.MonkeyPatch,
    path: Path,
    arguments: list[str],
    words: str,
) -> None:
    monkeypatch.chdir(path.parent)
    before = path.read_bytes()
    code, out, err = run(capsys, "fill", path, *arguments)
    assert (code, out) == (2, "")
    assert words in err
    assert err.splitlines()[-1].startswith(("epochbook: ", "epochbook fill: error: "))
    assert (path.read_bytes(), os.listdir(path.parent)) == (before, ["log.xlsx"])


def test_two_candidates_are_listed(capsys: pytest.CaptureFixture[str], path: Path) -> None:
    write_log(path, [["z", "Age [Gyr]", "a []"], [1.0, 5.84]])
    code, _, err = run(capsys, "fill", path)
    assert (code, err) == (
        2,
        "epochbook: sheet 'Log' has 2 columns to convert from: 'z' (A), 'Age [Gyr]' (B); choose one"
        " with --source\n",
    )
    assert run(capsys, "fill", path, "--source", "z")[0] == 0


def test_a_command_is_needed(capsys: pytest.CaptureFixture[str]) -> None:
    assert run(capsys)[0] == 2
    assert run(capsys, "fill")[0] == 2
    assert run(capsys, "empty", "log.xlsx")[0] == 2


def test_columns_are_added_by_heading(capsys: pytest.CaptureFixture[str], path: Path) -> None:
    write_log(path, BARE)
    arguments = ["--add", "Age [Gyr]", "--add", "D_C [Gly]", "--parameters", "round numbers"]
    code, out, _ = run(capsys, "fill", path, *arguments)
    assert code == 0
    assert "new column C 'Age [Gyr]': 3 cells filled" in out
    assert "new column D 'D_C [Gly]'" in out
    assert "under round numbers: H0 70 km/s/Mpc, Ω_m 0.3, flat" in out
    assert cells(path)["C1"] == "Age [Gyr]"


def test_every_option_reaches_the_fill(capsys: pytest.CaptureFixture[str], path: Path) -> None:
    rows: Grid = [["remark"], ["D", "a []", "z"], [1000.0]]
    write_log(path, rows, lambda book, sheet: sheet.protect())
    path.with_name(f"~${path.name}").write_bytes(b"")
    output = path.with_name("filled.xlsx")
    code, out, err = run(
        *(capsys, "fill", path, "--output", output, "--sheet", "log", "--header-row", 2),
        *("--source", "A:A", "--as", "D_A [Mpc]", "--side", "farther", "--only", "z"),
        *("--allow-protected", "--ignore-lock"),
    )
    assert (code, err) == (0, "")
    assert "C 'z': 1 cell filled from A 'D_A [Mpc]'" in out
    assert cells(output)["C3"] == pytest.approx(8.18131, rel=1e-5)
    assert "B3" not in cells(output)
    assert "C3" not in cells(path)


def test_the_report_goes_to_a_file(capsys: pytest.CaptureFixture[str], path: Path) -> None:
    report = path.with_name("report.json")
    report.write_text("an older one", encoding="utf-8")
    assert run(capsys, "fill", path, "--report", report)[0] == 0
    data = json.loads(report.read_text(encoding="utf-8"))
    assert (data["filled"], data["parameters"]["name"]) == (3, "planck 2018")
    assert "Ω_m" in report.read_text(encoding="utf-8")


def test_a_report_never_takes_the_place_of_a_workbook(
    capsys: pytest.CaptureFixture[str], tmp_path: Path
) -> None:
    path = write_log(tmp_path / "log.json")
    before = path.read_bytes()
    code, _, err = run(capsys, "fill", path, "--report", tmp_path / "." / "log.json")
    assert (code, path.read_bytes()) == (2, before)
    assert "--report names the workbook itself" in err


def test_a_report_that_cannot_be_written_is_said(
    capsys: pytest.CaptureFixture[str], path: Path
) -> None:
    report = path.with_name("report.json")
    report.mkdir()
    code, out, err = run(capsys, "fill", path, "--report", report)
    assert code == 1
    assert "written:" in out
    assert re.search(
        r"epochbook: the report .*report\.json was not written \((?!unknown).+\)\n", err
    )


@pytest.mark.skipif(sys.platform != "linux", reason="other systems have no such file names")
def test_a_file_name_that_is_no_text_ends_in_no_traceback(
    capsys: pytest.CaptureFixture[str], tmp_path: Path
) -> None:
    path = tmp_path / os.fsdecode(b"log \xff.xlsx")
    write_log(path)
    report = tmp_path / "report.json"
    code, out, _ = run(capsys, "fill", path, "--report", report)
    assert code == 0
    assert "written: " in out
    assert os.fsencode(json.loads(report.read_text(encoding="utf-8"))["file"]) == b"log \xff.xlsx"


def test_the_version_and_the_help_are_printed(capsys: pytest.CaptureFixture[str]) -> None:
    assert run(capsys, "--version")[:2] == (0, f"epochbook {__version__}\n")
    code, out, _ = run(capsys, "fill", "--help")
    assert code == 0
    options = "output add only source as side sheet header-row parameters report"
    for option in [*options.split(), "allow-protected", "ignore-lock"]:
        assert f"--{option} " in out or f"--{option}\n" in out
    assert "exit codes: 0 nothing was left; 3 some cells were left with a reason; 2" in out


def test_ctrl_c_is_no_traceback(
    capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch, path: Path
) -> None:
    def interrupted(*_: object, **__: object) -> None:
        raise KeyboardInterrupt

    before = path.read_bytes()
    monkeypatch.setattr("workbook_tools.plan_of_workbook.plan_sheet", interrupted)
    assert run(capsys, "fill", path)[0] == 130
    assert path.read_bytes() == before


def test_a_screen_without_greek_letters_is_no_traceback(
    monkeypatch: pytest.MonkeyPatch, path: Path
) -> None:
    raw = io.BytesIO()
    monkeypatch.setattr(sys, "stdout", io.TextIOWrapper(raw, encoding="ascii", write_through=True))
    assert main(["fill", str(path)]) == 0
    assert b"?_m 0.3153" in raw.getvalue()


def test_the_module_runs_as_a_program(path: Path) -> None:
    command = [sys.executable, "-m", "workbook_tools", "fill", str(path)]
    done = subprocess.run(command, capture_output=True, cwd=_CLONE, check=False)
    assert (done.returncode, done.stderr) == (0, b"")
    assert b"3 cells filled from B 'z'" in done.stdout


def test_help_answers_without_the_libraries_for_numbers() -> None:
    code = "import sys, workbook_tools.command as c\ntry: c.main(['fill', '--help'])\n"
    code += "finally: assert not {'numpy', 'scipy', 'pint', 'openpyxl'} & set(sys.modules)"
    command = [sys.executable, "-c", code]
    done = subprocess.run(command, capture_output=True, cwd=_CLONE, check=False)
    assert (done.returncode, done.stderr) == (0, b"")


# What a person might type, right or wrong; the operating system passes anything but NUL.
_TYPED = st.text(st.characters(exclude_characters="\0", exclude_categories=("Cs",)), max_size=12)
_HEADINGS = st.sampled_from(
    ["z", "Age [Gyr]", "a []", "D_A [Mpc]", "Age", "redshift", "Log", "B:B", "C:A", "ZZZ:ZZZ", ":"]
)
_NAMES = st.sampled_from(["Log", "log", "Other", "Hidden", "planck 2018", "round-numbers", ""])
_NUMBERS = st.integers(-3, 12).map(str) | st.just("9" * 30)
_OPTIONS = st.one_of(
    st.tuples(st.sampled_from(["--add", "--only", "--source", "--as"]), _HEADINGS | _TYPED),
    st.tuples(st.sampled_from(["--sheet", "--parameters", "--side"]), _NAMES | _TYPED),
    st.tuples(st.just("--header-row"), _NUMBERS | _TYPED),
    st.tuples(st.just("--output"), st.sampled_from(["o.xlsx", "log.xlsx", "", ".", "x" * 300])),
    st.tuples(
        st.just("--report"), st.sampled_from(["r.json", "log.xlsx", "", "x" * 300 + ".json"])
    ),
    st.tuples(st.sampled_from(["--allow-protected", "--ignore-lock", "--help", "-x"])),
)
_ODD_LOG: Grid = [
    ["z", "Age [Gyr]", "D_A [Mpc]", "Note"],
    [1.0, 5.84, None, "x"],
    [">6"],
    [-1.0, None, 100.0],
    [None, 3.27],
]


@given(st.lists(_OPTIONS, max_size=4), st.sampled_from(["log.xlsx", "none.xlsx", ".", "", "n.txt"]))
@settings(
    deadline=None, max_examples=250, suppress_health_check=[HealthCheck.function_scoped_fixture]
)
def test_no_command_line_ends_in_a_traceback(
    capsys: pytest.CaptureFixture[str],
    monkeypatch: pytest.MonkeyPatch,
    tmp_path: Path,
    options: list[tuple[str, ...]],
    name: str,
) -> None:
    monkeypatch.chdir(tmp_path)
    for old in tmp_path.iterdir():
        old.unlink()
    write_log(tmp_path / "log.xlsx", _ODD_LOG, more={"Other": [["z", "a []"], [2.0]], "Empty": []})
    (tmp_path / "n.txt").write_text("a note", encoding="utf-8")
    before = (tmp_path / "log.xlsx").read_bytes()
    flat = [text for option in options for text in option]
    code, out, err = run(capsys, "fill", name, *flat)
    assert code in (0, 1, 2, 3)
    assert bool(out) == (code in (0, 3))
    assert bool(err) == (code in (1, 2))
    if code in (1, 2) or "written: " not in out or name != "log.xlsx":
        assert (tmp_path / "log.xlsx").read_bytes() == before
    if code == 0 and "written: " in out:
        filled = tmp_path / out.rpartition("written: ")[2].strip()
        assert cells(filled).items() >= cells(next(iter(dated_copies(filled)), filled)).items()


TYPED = [["z", "Age [Gyr]"], ["1,0 (a)"], ["2.0(1)"], [-99.0], [1.0]]


def test_choices_of_reading_are_passed_on(
    capsys: pytest.CaptureFixture[str], tmp_path: Path
) -> None:
    path = write_log(tmp_path / "log.xlsx", TYPED)
    code, out, _ = run(capsys, "fill", path, "--output", tmp_path / "plain.xlsx")
    assert code == 3
    assert "left 1: a redshift of -1 or below is impossible" in out
    options = ["--decimal-comma", "--brackets-are-notes", "--missing", "-99"]
    for command in (["fill", path, "--output", tmp_path / "out.xlsx"], ["look", path]):
        code, out, _ = run(capsys, *command, *options)
        assert code == 0
        assert "note: no value in column A: -99 (1)" in out
        assert "(--decimal-comma)" in out
        assert "(--brackets-are-notes)" in out
    assert run(capsys, "look", path, *options[:2], "--missing=-99")[0] == 0


def test_choices_of_errors_are_passed_on(
    capsys: pytest.CaptureFixture[str], tmp_path: Path
) -> None:
    path = write_log(tmp_path / "log.xlsx", [["z", "Age [Gyr]"], ["2.0(1)"]])
    options = ["--with-errors", "--parameter-error", "--peculiar-velocity", "300"]
    code, out, _ = run(capsys, "fill", path, *options)
    assert code == 0
    assert "new column C 'upper error of Age [Gyr]': 1 cell filled from A 'z'" in out
    assert "errors of planck 2018 counted: H0 ± 0.54" in out
    assert "errors count peculiar motions of 300 km/s" in out
    code, _, err = run(capsys, "fill", path, "--peculiar-velocity=-3")
    assert (code, err.count("\n")) == (2, 1)
    assert "is no speed from 0 to 30,000 km/s" in err
