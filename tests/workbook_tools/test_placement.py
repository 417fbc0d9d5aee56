"""Where a result goes is settled first; what could not end well is refused before any work."""

from __future__ import annotations

from pathlib import Path

import pytest

from workbook_tools.errors import Refusal
from workbook_tools.file_system import FileSystem
from workbook_tools.placement import prepare


@pytest.fixture
def log(tmp_path: Path) -> Path:
    path = tmp_path / "log.xlsx"
    path.write_bytes(b"old")
    return path


def linked(link: Path, target: Path) -> Path:
    try:
        link.symlink_to(target)
    except OSError:
        pytest.skip("this system makes no symbolic links for us")
    return link


def test_without_an_output_the_workbook_is_the_destination(log: Path) -> None:
    placement = prepare(log)
    assert placement.in_place
    assert placement.destination == placement.source == log.resolve()
    assert placement.snapshot.size == 3


def test_a_link_is_followed_to_its_target(log: Path) -> None:
    link = linked(log.with_name("short.xlsx"), log)
    placement = prepare(link)
    assert placement.destination == log.resolve()
    assert placement.in_place
    assert placement.named == link


def test_an_output_is_a_new_file(log: Path) -> None:
    placement = prepare(log, output=log.with_name("filled.xlsx"))
    assert not placement.in_place
    assert placement.destination == log.resolve().with_name("filled.xlsx")


def test_an_output_that_exists_is_refused(log: Path) -> None:
    output = log.with_name("filled.xlsx")
    output.write_bytes(b"")
    with pytest.raises(
        Refusal, match=r"filled\.xlsx already exists; choose another name or delete"
    ):
        prepare(log, output=output)


def test_an_output_that_is_a_link_to_nothing_is_refused(log: Path) -> None:
    output = linked(log.with_name("filled.xlsx"), log.with_name("nothing.xlsx"))
    with pytest.raises(Refusal, match="already exists"):
        prepare(log, output=output)


def test_the_workbook_itself_as_output_is_refused(log: Path) -> None:
    linked(log.with_name("short.xlsx"), log)
    for output in (log, log.parent / "." / "log.xlsx", log.with_name("short.xlsx")):
        with pytest.raises(Refusal, match="names the workbook itself"):
            prepare(log, output=output)


def test_an_output_in_no_folder_is_refused(log: Path) -> None:
    with pytest.raises(Refusal, match=r"There is no folder .*new for --output"):
        prepare(log, output=log.parent / "new" / "filled.xlsx")


def test_a_missing_workbook_is_refused(log: Path) -> None:
    with pytest.raises(Refusal, match=r"There is no file .*lag\.xlsx"):
        prepare(log.with_name("lag.xlsx"))


def test_a_folder_is_refused(log: Path) -> None:
    with pytest.raises(Refusal, match="is not a file; name a workbook"):
        prepare(log.parent)


def test_a_circle_of_links_is_refused(log: Path) -> None:
    one = linked(log.with_name("one.xlsx"), log.with_name("two.xlsx"))
    linked(log.with_name("two.xlsx"), one)
    with pytest.raises(Refusal, match=r"one\.xlsx cannot be reached"):
        prepare(one)


@pytest.mark.parametrize("output", [None, "filled.xlsx"])
def test_an_open_workbook_is_refused_unless_told_otherwise(log: Path, output: str | None) -> None:
    log.with_name("~$log.xlsx").write_bytes(b"")
    target = log.with_name(output) if output else None
    with pytest.raises(Refusal, match="--ignore-lock"):
        prepare(log, output=target)
    assert prepare(log, output=target, ignore_lock=True).ignore_lock


def test_a_read_only_workbook_is_refused_but_may_be_filled_elsewhere(log: Path) -> None:
    log.chmod(0o444)
    with pytest.raises(Refusal, match=r"log\.xlsx is read-only.*--output"):
        prepare(log)
    assert not prepare(log, output=log.with_name("filled.xlsx")).in_place


@pytest.mark.parametrize("output", [None, "filled.xlsx"])
def test_a_folder_without_permission_is_refused(log: Path, output: str | None) -> None:
    class Guarded(FileSystem):
        """The tests may run as a person who may write everywhere."""

        def is_writable(self, path: Path) -> bool:
            return not path.is_dir() and super().is_writable(path)

    with pytest.raises(Refusal, match="No permission to write in"):
        prepare(log, output=log.with_name(output) if output else None, files=Guarded())
