"""The top level holds what it is to hold, and nothing else."""

from __future__ import annotations

import tomllib
from fnmatch import fnmatch

from tests.house.source_files import PACKAGES, ROOT

ALLOWED = {
    "README.md",
    "DEVELOPERS.md",
    "pyproject.toml",
    "epochconv",
    "workbook_tools",
    "tests",
    "sample_sheets",
}


def kept_names() -> set[str]:
    """What lies at the top, but for dot-files and what git is told to ignore."""
    ignored = [
        line.rstrip("/")
        for line in (ROOT / ".gitignore").read_text("utf-8").splitlines()
        if line and not line.startswith("#")
    ]
    return {
        path.name
        for path in ROOT.iterdir()
        if not path.name.startswith(".")
        and not any(fnmatch(path.name, pattern) for pattern in ignored)
    }


def test_top_level_is_exactly_this() -> None:
    assert kept_names() == ALLOWED


def test_both_packages_and_nothing_else_is_installed() -> None:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text("utf-8"))
    patterns = project["tool"]["setuptools"]["packages"]["find"]["include"]
    assert sorted(patterns) == [f"{package}*" for package in PACKAGES]
    for package in PACKAGES:
        assert (ROOT / package / "py.typed").is_file()


def test_licence_is_stated_in_the_project_file_and_in_the_readme() -> None:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text("utf-8"))["project"]
    assert project["license"] in (ROOT / "README.md").read_text("utf-8")


def test_warnings_are_errors_in_tests() -> None:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text("utf-8"))
    assert project["tool"]["pytest"]["ini_options"]["filterwarnings"][0] == "error"
