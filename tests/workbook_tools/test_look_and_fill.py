"""What `look` says a fill would do is what `fill` does, once, on every workbook of the tests."""

from __future__ import annotations

import json
import os
import shutil
from pathlib import Path
from typing import Any

import pytest

from epochconv.errors import EpochconvError
from tests.workbook_tools.made_workbooks import MADE, make
from workbook_tools import FillResult, Look, Refusal, fill, look
from workbook_tools.command import main
from workbook_tools.look_report import look_json, look_text
from workbook_tools.report import json_report

SAMPLES = sorted((Path(__file__).resolve().parents[2] / "sample_sheets").glob("*.xlsx"))
BY_LETTERS = {"source": "B:B", "source_measure": "redshift", "add": ["D_C [Gly]", "Age [Gyr]"]}
CHOICES: list[dict[str, Any]] = [
    {},
    {"with_errors": True},
    {"with_errors": True, "parameter_error": True, "decimal_comma": True, "missing": [-99.0]},
    {**BY_LETTERS, "allow_protected": True},
    {"add": ["Lookback time [Gyr]"]},
    {"parameters": "round numbers", "parameter_error": True},
]


@pytest.fixture
def path(request: pytest.FixtureRequest, tmp_path: Path) -> Path:
    """A made workbook by its name, or a copy of a sample."""
    name = request.param
    folder = tmp_path / "in"
    folder.mkdir()
    if name in MADE:
        return make(name, folder)
    return Path(shutil.copy2(SAMPLES[0].parent / name, folder / name))


every_workbook = pytest.mark.parametrize(
    "path", [*MADE, *(sample.name for sample in SAMPLES)], indirect=True
)


def attempted(path: Path, output: Path, choices: dict[str, Any]) -> FillResult | EpochconvError:
    output.unlink(missing_ok=True)
    try:
        return fill(path, output=output, **choices)
    except EpochconvError as error:
        return error


def state(path: Path) -> tuple[bytes, int, list[str]]:
    """A file's bytes and time, and what lies beside it."""
    return path.read_bytes(), path.stat().st_mtime_ns, sorted(os.listdir(path.parent))


def planned(seen: Look) -> list[Any]:
    """What `look` says would be done, sheet by sheet."""
    sheets = look_json(seen)["sheets"]
    return [sheet["fill"] for sheet in sheets if sheet["fill"] is not None]


def done(result: FillResult) -> list[Any]:
    """What a fill says it has done; who reads filled cells is known only then."""
    nobody = {"cells": {}, "names": [], "charts": {}}
    return [sheet | {"readers": nobody} for sheet in json_report(result)["sheets"]]


@every_workbook
def test_look_and_fill_never_disagree(path: Path, tmp_path: Path) -> None:
    for choices in CHOICES:
        before = state(path)
        seen = look(path, **choices)
        assert state(path) == before
        result = attempted(path, tmp_path / f"filled{path.suffix}", choices)
        if isinstance(result, EpochconvError):
            assert (type(seen.stop), str(seen.stop)) == (type(result), str(result))
            assert planned(seen) == []
        else:
            assert seen.stop is None
            assert planned(seen) == done(result)
            assert seen.left == bool(result.left)


@every_workbook
def test_a_second_run_finds_nothing_more_to_fill(path: Path, tmp_path: Path) -> None:
    for choices in CHOICES:
        output = tmp_path / f"filled{path.suffix}"
        result = attempted(path, output, choices)
        # Where there is no row of headings, nothing tells that a column was added before.
        if isinstance(result, EpochconvError) or any(
            p.reading.header is None for p in result.plans
        ):
            continue
        before = state(output)
        again = fill(output, **choices)
        assert (again.written, again.filled) == (False, 0), choices
        assert {one for one in again.left if one not in result.left} == set()
        assert state(output) == before


@every_workbook
def test_exit_codes_are_those_of_a_fill(
    path: Path, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    for arguments in ([], ["--add", "Age [Gyr]"], ["--sheet", "Log", "--with-errors"]):
        output = tmp_path / f"filled{path.suffix}"
        output.unlink(missing_ok=True)
        filled = main(["fill", str(path), "--output", str(output), *arguments])
        capsys.readouterr()
        looked = main(["look", str(path), *arguments])
        assert looked == filled
        if looked in (0, 3):
            out = capsys.readouterr().out
            assert out.splitlines()[-1].startswith("under planck 2018: ")


@every_workbook
def test_the_json_of_a_look_holds_no_number_that_is_none(path: Path) -> None:
    def refused(constant: str) -> None:
        raise AssertionError(constant)

    seen = look(path, with_errors=True)
    text = json.dumps(look_json(seen), ensure_ascii=False, allow_nan=False)
    assert json.loads(text, parse_constant=refused)["format"] == "epochbook look 1"
    assert look_text(seen)


def test_a_stop_keeps_its_kind(tmp_path: Path) -> None:
    seen = look(make("protected.xlsx", tmp_path), add=["Age [Gyr]"])
    assert isinstance(seen.stop, Refusal)
    assert "is protected; ask its owner" in look_text(seen)
