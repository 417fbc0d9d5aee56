"""The proof that a fill is harmless: real workbooks and made ones, filled and looked at closely.

The environment variable EPOCHBOOK_CORPUS names a folder of workbooks (any; they are only read).
Each is filled once: by the letters of a column of numbers where there is one, else given numbers
are put at the right edge. Then every promise is checked on every result. `pytest -m long -s` also
prints how many files exercised each kind of edit and each trait.
"""

from __future__ import annotations

import os
from collections import defaultdict
from collections.abc import Iterable
from pathlib import Path
from typing import NamedTuple

import pytest

from tests.workbook_tools.corpus import VARIABLE, corpus_paths, needs_corpus
from tests.workbook_tools.differences import part_change
from tests.workbook_tools.fill_runs import Run, run, run_given, wrong_cells
from tests.workbook_tools.made_workbooks import MADE, make_all
from tests.workbook_tools.office import convert_to_csv, needs_office
from tests.workbook_tools.package_rules import new_problems
from tests.workbook_tools.repack import part
from tests.workbook_tools.rules.package import Package
from tests.workbook_tools.schema_check import needs_schemas, schema_problems
from tests.workbook_tools.shown_values import wrongly_shown
from tests.workbook_tools.tag_differences import Difference, NotPermittedError
from tests.workbook_tools.traits import SEEN_IN_MADE, SEEN_IN_REAL, workbook_traits
from tests.workbook_tools.true_reasons import true_reasons
from tests.workbook_tools.untouched import compare
from workbook_tools.splice import EditKind

pytestmark = pytest.mark.long

_HAS_CORPUS = bool(os.environ.get(VARIABLE))
Faults = dict[str, object]


class Outcome(NamedTuple):
    """A run with the differences of its changed parts, by part, and what was not permitted."""

    run: Run
    differences: dict[str, list[Difference]]
    faults: list[str]


@pytest.fixture(scope="module")
def runs(tmp_path_factory: pytest.TempPathFactory) -> list[Run]:
    folder = tmp_path_factory.mktemp("filled")
    (folder / "made").mkdir()
    paths = make_all(folder / "made")
    found = [one for path in paths for one in run_given(path, folder)]
    if _HAS_CORPUS:
        paths += corpus_paths()
    return found + [run(path, folder) for path in paths]


@pytest.fixture(scope="module")
def filled(runs: list[Run]) -> list[Outcome]:
    return [_outcome(one) for one in runs if not one.refusal]


def _outcome(one: Run) -> Outcome:
    comparison = compare(one.before, one.after)
    faults = list(comparison.faults)
    differences = {}
    for name in comparison.changed:
        try:
            old = part(one.before, name)
            differences[name], undone = part_change(old, part(one.after, name))
            if undone != old:
                faults.append(f"{name}: undoing the edits does not give the old bytes")
        except (NotPermittedError, ValueError) as error:
            faults.append(f"{name}: {error}")
    if comparison.added:
        faults.append(f"parts were added: {comparison.added}")
    return Outcome(one, differences, faults)


def _is_made(one: Run) -> bool:
    return one.before.name in MADE


def _by_run(found: Iterable[tuple[Run, object]]) -> Faults:
    """What is wrong, by run, for the message of a failed test."""
    return {one.label: what for one, what in found if what}


@needs_corpus
def test_few_are_refused_and_each_for_a_true_reason(runs: list[Run]) -> None:
    refused = [one for one in runs if one.refusal]
    real = [one for one in runs if not _is_made(one)]
    print(f"\n{len(real) - len(refused)} of {len(real)} workbooks filled; refused:")
    for one in refused:
        print(f"  {one.before.name}: {one.refusal}")
    assert [one.before.name for one in refused if not true_reasons(one.before)] == []
    assert len(refused) <= len(real) * 15 / 112


def test_no_made_workbook_is_refused(runs: list[Run]) -> None:
    assert {one.label: one.refusal for one in runs if _is_made(one) and one.refusal} == {}


def test_all_other_bytes_are_as_they_were(filled: list[Outcome]) -> None:
    assert _by_run((o.run, o.faults) for o in filled) == {}


def test_something_was_filled_everywhere(filled: list[Outcome]) -> None:
    empty = [o.run.label for o in filled if not any(d.cells for d in _all(o))]
    assert empty == []


def _all(outcome: Outcome) -> Iterable[Difference]:
    return (d for found in outcome.differences.values() for d in found)


def test_the_reported_edits_are_those_that_were_made(filled: list[Outcome]) -> None:
    """Part by part; a row that was opened or put in holds cells that are no edit of their own."""
    inner = {EditKind.CELL_INSERTED}
    wrong = {}
    for outcome in filled:
        result = outcome.run.result
        assert result is not None
        said = {name: set(kinds) - inner for name, kinds in result.edit_counts.items()}
        seen = {name: {d.kind for d in ds} - inner for name, ds in outcome.differences.items()}
        if said != seen:
            wrong[outcome.run.label] = (said, seen)
    assert wrong == {}


def test_openpyxl_reads_the_old_values_unchanged(filled: list[Outcome]) -> None:
    assert _by_run((o.run, _changed_values(o.run)) for o in filled) == {}


def _changed_values(one: Run) -> list[str]:
    found = []
    for sheet, cells in one.old.items():
        now = one.new.get(sheet, {})
        found += [f"{sheet} {p}: {v!r}" for p, v in cells.items() if now.get(p) != v]
        if sheet != one.sheet and set(now) != set(cells):
            found.append(f"{sheet} got cells")
    return found


def test_openpyxl_reads_the_new_values(filled: list[Outcome]) -> None:
    assert _by_run((o.run, wrong_cells(o.run)) for o in filled) == {}


def test_no_rule_is_newly_broken(filled: list[Outcome]) -> None:
    found = ((o.run, new_problems(o.run.before, o.run.after)) for o in filled)
    assert _by_run(found) == {}


@needs_schemas
def test_changed_parts_are_as_valid_as_before(filled: list[Outcome]) -> None:
    wrong, judged = {}, 0
    for outcome in filled:
        for name in outcome.differences:
            before = schema_problems(part(outcome.run.before, name))
            after = schema_problems(part(outcome.run.after, name))
            judged += after == []
            if not before and after:
                wrong[outcome.run.label, name] = after
    assert wrong == {}
    assert judged >= len(filled)


@needs_office
def test_libreoffice_shows_the_old_and_the_new_values(filled: list[Outcome]) -> None:
    paths = [path for o in filled for path in (o.run.before, o.run.after)]
    shown = convert_to_csv(paths)
    wrong: list[tuple[Run, object]] = []
    for one in (o.run for o in filled):
        if one.before in shown:
            shown_after = shown.get(one.after, {})
            wrong.append((one, list(wrongly_shown(one, shown[one.before], shown_after))))
    print(f"\n{len(wrong)} of {len(filled)} results were shown by LibreOffice")
    assert _by_run(wrong) == {}
    assert len(wrong) >= 0.98 * len(filled)  # it cannot load every workbook that Excel wrote


def test_every_kind_of_edit_and_every_trait_was_exercised(filled: list[Outcome]) -> None:
    """Counted in files, some of which are filled in several ways."""
    kinds: defaultdict[str, set[Path]] = defaultdict(set)
    traits: defaultdict[str, set[Path]] = defaultdict(set)
    for outcome in filled:
        for kind in {d.kind.value for d in _all(outcome)}:
            kinds[kind].add(outcome.run.before)
        for trait in _traits(outcome):
            traits[trait].add(outcome.run.before)
    print(f"\n{len({o.run.before for o in filled})} workbooks filled,", end=" ")
    print(sum(o.run.column is not None for o in filled), "by the letters of a column of numbers")
    for group in (kinds, traits):
        for name, files in sorted(group.items(), key=lambda item: -len(item[1])):
            print(f"  {len(files):4} {name}")
    wanted = {kind.value for kind in EditKind} | SEEN_IN_MADE
    wanted |= SEEN_IN_REAL if _HAS_CORPUS else set()
    missing = sorted(wanted - set(kinds) - set(traits))
    assert not missing, f"no file exercised: {', '.join(missing)}"


def _traits(outcome: Outcome) -> set[str]:
    one = outcome.run
    package = Package(one.before)
    sheet_part = next(sheet.part for sheet in package.sheets if sheet.name == one.sheet)
    found = workbook_traits(package, sheet_part)
    kinds = {d.kind for d in _all(outcome)}
    if "table on the sheet" in found:
        grown = EditKind.TABLE_COLUMN_APPENDED in kinds
        found.add("table grown" if grown else "table left as it was")
    if {"table with totals", "table grown"} <= found:
        found.add("table with totals grown")
    return found
