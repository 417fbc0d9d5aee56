"""What the README shows is what the commands print, and its Python runs."""

from __future__ import annotations

import os
import re
import shutil
from collections.abc import Sequence
from pathlib import Path

import pytest

import epochconv
from tests.house.source_files import ROOT
from workbook_tools.command import main

README = (ROOT / "README.md").read_text("utf-8")
SAMPLES = ROOT / "sample_sheets"


def blocks(language: str) -> list[str]:
    """The fenced blocks of one language, from the top."""
    return re.findall(rf"^```{language}\n(.*?)^```$", README, re.MULTILINE | re.DOTALL)


def assert_shows(shown: Sequence[str], printed: Sequence[str]) -> None:
    """All printed lines are shown in their order, but where dots stand for some of them."""
    place, gap = 0, False
    for line in shown:
        if line.strip() == "...":
            gap = True
            continue
        found = printed.index(line, place) if gap else place
        assert printed[found : found + 1] == [line]
        place, gap = found + 1, False
    assert gap or place == len(printed)


def test_dots_stand_for_lines_and_nothing_else_does() -> None:
    printed = ["one", "two", "three", "four"]
    assert_shows(["one", "  ...", "three", "four"], printed)
    assert_shows(["one", "..."], printed)
    for wrong in (["one", "three", "four"], ["one", "two"], ["one", "2", "..."]):
        with pytest.raises(AssertionError):
            assert_shows(wrong, printed)


def test_the_first_command_prints_what_is_shown(
    tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    (command,) = re.findall(r"epochbook (fill \S+ --output \S+)", blocks("sh")[0])
    shutil.copytree(SAMPLES, tmp_path / "sample_sheets")
    monkeypatch.chdir(tmp_path)
    assert main(command.split()) == 3
    printed = capsys.readouterr().out.replace(f"{tmp_path.resolve()}{os.sep}", "")
    assert_shows(blocks("text")[0].splitlines(), printed.replace(os.sep, "/").splitlines())


def test_a_look_prints_what_is_shown(
    capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    command, *shown = blocks("text")[1].splitlines()
    found = re.fullmatch(r'\$ epochbook look (\S+) --sheet "(.+)"', command)
    assert found is not None
    monkeypatch.chdir(ROOT)
    assert main(["look", found[1], "--sheet", found[2]]) == 3
    assert_shows(shown, capsys.readouterr().out.splitlines())


def test_python_runs_and_gives_what_is_said() -> None:
    known: dict[str, object] = {}
    for block in blocks("python"):
        exec(block, known)
    results = re.findall(
        r"^(epochconv\.convert_with_error\((?:[^#]|\n)*?\)) +# ([0-9].*)$",
        "\n".join(blocks("python")),
        re.MULTILINE,
    )
    assert len(results) == 3
    for call, said in results:
        assert str(eval(call, {"epochconv": epochconv})).splitlines()[0] == said
