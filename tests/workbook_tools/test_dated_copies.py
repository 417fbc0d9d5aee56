"""The old workbook is kept under a dated name, the last five times, and nothing else is removed."""

from __future__ import annotations

import os
from datetime import datetime, timedelta
from pathlib import Path

import pytest

from workbook_tools.dated_copies import KEPT, keep_copy, remove_oldest
from workbook_tools.file_system import REAL_FILES, FileSystem

NOON = datetime(2026, 12, 1, 14, 3, 22)


@pytest.fixture
def log(tmp_path: Path) -> Path:
    path = tmp_path / "observing [log].v2.xlsx"
    path.write_bytes(b"old" * 100_000)
    os.utime(path, ns=(10**18, 10**18))
    return path


def copies(log: Path) -> list[str]:
    return sorted(path.name for path in log.parent.iterdir() if "(kept" in path.name)


def test_the_copy_has_a_dated_name_the_content_and_the_time_of_the_original(log: Path) -> None:
    copy = keep_copy(log, NOON, REAL_FILES)
    assert copy == log.with_name("observing [log].v2 (kept 2026-12-01 14.03.22).xlsx")
    assert copy.read_bytes() == log.read_bytes()
    assert copy.stat().st_mtime_ns == log.stat().st_mtime_ns
    assert sorted(path.name for path in log.parent.iterdir()) == sorted([log.name, copy.name])


def test_a_name_that_is_taken_is_not_overwritten(log: Path) -> None:
    first = keep_copy(log, NOON, REAL_FILES)
    log.write_bytes(b"newer")
    second = keep_copy(log, NOON, REAL_FILES)
    third = keep_copy(log, NOON, REAL_FILES)
    assert first.read_bytes() == b"old" * 100_000
    assert second.name == "observing [log].v2 (kept 2026-12-01 14.03.22, 2).xlsx"
    assert third.name == "observing [log].v2 (kept 2026-12-01 14.03.22, 3).xlsx"


def test_the_last_five_stay(log: Path) -> None:
    for day in range(8):
        copy = keep_copy(log, NOON + timedelta(days=day), REAL_FILES)
        assert remove_oldest(log, copy, REAL_FILES) == []
    assert copies(log) == [
        f"observing [log].v2 (kept 2026-12-{day:02} 14.03.22).xlsx" for day in (4, 5, 6, 7, 8)
    ]


def test_copies_of_one_second_go_in_the_order_they_were_made(log: Path) -> None:
    for _ in range(12):
        copy = keep_copy(log, NOON, REAL_FILES)
    remove_oldest(log, copy, REAL_FILES)
    numbers = {name.partition(", ")[2].removesuffix(").xlsx") for name in copies(log)}
    assert numbers == {"8", "9", "10", "11", "12"}


def test_the_newest_copy_stays_when_the_clock_was_set_back(log: Path) -> None:
    for day in range(KEPT):
        keep_copy(log, NOON + timedelta(days=day), REAL_FILES)
    newest = keep_copy(log, NOON - timedelta(days=365), REAL_FILES)
    remove_oldest(log, newest, REAL_FILES)
    assert newest.exists()
    assert len(copies(log)) == KEPT


def test_nothing_else_is_removed(log: Path) -> None:
    others = [
        "observing [log].v2 (kept 2020-01-01 00.00.00) mine.xlsx",
        "observing [log].v2 (kept 2020-01-01).xlsx",
        "observing [log].v2 (kept 2020-01-01 00.00.00).xlsm",
        "observing [log] (kept 2020-01-01 00.00.00).xlsx",
        "my observing [log].v2 (kept 2020-01-01 00.00.00).xlsx",
        "observing l.v2 (kept 2020-01-01 00.00.00).xlsx",
        "observing [log].v2 (kept 2020-01-01 00.00.00, x).xlsx",
    ]
    for name in others:
        log.with_name(name).write_bytes(b"")
    for day in range(8):
        copy = keep_copy(log, NOON + timedelta(days=day), REAL_FILES)
    remove_oldest(log, copy, REAL_FILES)
    assert set(others) < set(copies(log))
    assert len(copies(log)) == len(others) + KEPT


def test_a_copy_that_cannot_be_removed_is_named(log: Path) -> None:
    class Clinging(FileSystem):
        def remove(self, path: Path) -> None:
            if "12-02" in path.name:
                raise PermissionError(13, "no")
            super().remove(path)

    for day in range(8):
        copy = keep_copy(log, NOON + timedelta(days=day), REAL_FILES)
    stuck = remove_oldest(log, copy, Clinging())
    assert stuck == ["observing [log].v2 (kept 2026-12-02 14.03.22).xlsx"]
    assert len(copies(log)) == KEPT + 1
