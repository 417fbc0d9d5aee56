"""DEVELOPERS.md lists the files in layers; imports run upwards in its lists."""

from __future__ import annotations

import re
from fnmatch import fnmatch

import pytest

from tests.house.source_files import PACKAGES, ROOT, modules

EVERY_PACKAGE = pytest.mark.parametrize("package", PACKAGES)


def layers_of(package: str) -> list[list[str]]:
    """File names, with stars, row by row of the package's table in DEVELOPERS.md."""
    manual = (ROOT / "DEVELOPERS.md").read_text("utf-8")
    part = manual.split(f"\n### {package}\n")[1].split("\n#")[0]
    rows = [line for line in part.splitlines() if line.startswith("| `")]
    return [re.findall(r"`([\w*]+)`", row.split("|")[1]) for row in rows]


def level_of(name: str, layers: list[list[str]]) -> int | None:
    """Number of the row that lists a module; None if none does."""
    for level, patterns in enumerate(layers):
        if any(fnmatch(name, pattern) for pattern in patterns):
            return level
    return None


def inner_imports(package: str) -> list[tuple[str, str]]:
    """Who imports whom at once within a package, its `__init__` and `__main__` apart."""
    found = []
    for module in modules():
        importer = module.name.removeprefix(f"{package}.")
        if importer in (module.name, "__main__"):  # another package, its own face, its start
            continue
        for name in sorted(module.imported_at_once()):
            imported = name.removeprefix(f"{package}.")
            if imported != name:
                found.append((importer, imported))
    return found


@EVERY_PACKAGE
def test_manual_lists_every_file_once(package: str) -> None:
    layers = layers_of(package)
    names = [
        module.name.removeprefix(f"{package}.")
        for module in modules()
        if module.name.startswith(f"{package}.") and not module.name.endswith(".__main__")
    ]
    assert [name for name in names if level_of(name, layers) is None] == []
    for pattern in (pattern for patterns in layers for pattern in patterns):
        assert any(fnmatch(name, pattern) for name in names), f"there is no {pattern}"
    for name in names:
        rows = [level for level, some in enumerate(layers) if level_of(name, [some]) == 0]
        assert len(rows) == 1, f"{name} is listed in {len(rows)} rows"


@EVERY_PACKAGE
def test_imports_run_upwards(package: str) -> None:
    layers = layers_of(package)
    imports = inner_imports(package)
    assert len(imports) > 30
    down = [
        f"{importer} imports {imported}"
        for importer, imported in imports
        if (level_of(importer, layers) or 0) < (level_of(imported, layers) or 0)
    ]
    assert down == []
