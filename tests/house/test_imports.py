"""Imports go one way: no cycles, no package looks up, and the commands start light."""

from __future__ import annotations

import pytest

from tests.house.source_files import PACKAGES, Module, modules

COMMANDS = ("epochconv.command", "workbook_tools.command")
LATE_LOADERS = ("epochconv", "epochconv.registry", "workbook_tools")
"""They import by name, inside a function, what they are asked for."""


def at_once() -> dict[str, set[str]]:
    """Who imports whom when it is run, within the project."""
    names = {module.name for module in modules()}
    return {module.name: module.imported_at_once() & names for module in modules()}


def reached_from(start: str, edges: dict[str, set[str]]) -> set[str]:
    """Everything that is imported, directly or not."""
    reached: set[str] = set()
    waiting = [start]
    while waiting:
        for name in edges[waiting.pop()] - reached:
            reached.add(name)
            waiting.append(name)
    return reached


def test_there_is_something_to_look_at() -> None:
    names = [module.name for module in modules()]
    assert len(names) == len(set(names)) > 40
    assert {"epochconv", "epochconv.history", "workbook_tools.splice"} <= set(names)
    assert "epochconv.units" in at_once()["epochconv.conversion"]


def test_no_module_imports_itself_in_a_circle() -> None:
    edges = at_once()
    assert [name for name in edges if name in reached_from(name, edges)] == []


@pytest.mark.parametrize(
    "module", [m for m in modules() if m.name.startswith("epochconv")], ids=lambda m: m.name
)
def test_core_knows_nothing_of_workbooks(module: Module) -> None:
    imported = module.imported_at_once() | module.imported_late()
    assert {name.partition(".")[0] for name in imported}.isdisjoint({"workbook_tools", "openpyxl"})


@pytest.mark.parametrize("command", COMMANDS)
def test_command_does_not_load_scipy_pint_or_openpyxl_when_it_starts(command: str) -> None:
    """Nor numpy, so that help comes at once."""
    edges = at_once()
    imported = set().union(
        *(
            module.imported_at_once()
            for module in modules()
            if module.name in {command, *reached_from(command, edges)}
        )
    )
    tops = {name.partition(".")[0] for name in imported}
    assert tops.isdisjoint({"scipy", "pint", "openpyxl", "numpy"})


def test_no_module_of_the_core_needs_scipy() -> None:
    for module in modules():
        if module.name.startswith("epochconv"):
            imported = module.imported_at_once() | module.imported_late()
            assert "scipy" not in {name.partition(".")[0] for name in imported}


def test_only_commands_import_inside_functions() -> None:
    found = {module.name for module in modules() if module.imported_late()}
    assert found <= set(COMMANDS)


def test_only_the_late_loaders_import_by_name() -> None:
    found = {module.name for module in modules() if "import_module" in module.text}
    assert found == set(LATE_LOADERS)


def test_packages_are_these() -> None:
    assert {module.name.partition(".")[0] for module in modules()} == set(PACKAGES)
