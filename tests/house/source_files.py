"""The modules of both packages as syntax trees: what they import, define and promise."""

from __future__ import annotations

import ast
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache, cached_property
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
PACKAGES = ("epochconv", "workbook_tools")

Function = ast.FunctionDef | ast.AsyncFunctionDef


@dataclass(frozen=True)
class Module:
    """One source file.

    Attributes:
        name: dotted, without `__init__`.
        text: its source.
    """

    name: str
    text: str

    @cached_property
    def tree(self) -> ast.Module:
        """The syntax tree."""
        return ast.parse(self.text, self.name)

    @property
    def lines(self) -> int:
        """How many lines it has."""
        return len(self.text.splitlines())

    def imported_at_once(self) -> set[str]:
        """Dotted names that running the file imports: not for types alone, not in functions."""
        return {name for node in _run_at_once(self.tree) for name in _imported(node)}

    def imported_late(self) -> set[str]:
        """Dotted names that are imported inside functions."""
        return {
            name
            for _, function in self.functions()
            for node in ast.walk(function)
            for name in _imported(node)
        }

    def functions(self) -> Iterator[tuple[str, Function]]:
        """All functions and methods with their qualified names, nested ones too."""
        yield from _functions(self.tree, "")

    def public(self) -> Iterator[tuple[str, ast.ClassDef | Function]]:
        """Classes, functions and methods whose name, and whose class's, has no underscore first.

        `__init__` counts where it takes arguments: its class documents it.
        """
        for node in self.tree.body:
            if isinstance(node, ast.ClassDef | Function) and not node.name.startswith("_"):
                yield node.name, node
                if isinstance(node, ast.ClassDef):
                    for inner in node.body:
                        if isinstance(inner, Function) and not inner.name.startswith("_"):
                            yield f"{node.name}.{inner.name}", inner


@cache
def modules() -> tuple[Module, ...]:
    """All modules of both packages, by name."""
    found = []
    for package in PACKAGES:
        for path in sorted((ROOT / package).rglob("*.py")):
            dotted = ".".join(path.relative_to(ROOT).with_suffix("").parts)
            found.append(Module(dotted.removesuffix(".__init__"), path.read_text("utf-8")))
    return tuple(found)


def _run_at_once(node: ast.AST) -> Iterator[ast.AST]:
    """Nodes that run when the module does."""
    for child in ast.iter_child_nodes(node):
        if isinstance(child, Function | ast.Lambda):
            continue
        if isinstance(child, ast.If) and "TYPE_CHECKING" in ast.unparse(child.test):
            continue
        yield child
        yield from _run_at_once(child)


def _imported(node: ast.AST) -> Iterator[str]:
    if isinstance(node, ast.Import):
        yield from (alias.name for alias in node.names)
    elif isinstance(node, ast.ImportFrom):
        assert node.level == 0, "relative imports hide who imports whom"
        assert node.module is not None
        known = {module.name for module in modules()}
        for alias in node.names:
            full = f"{node.module}.{alias.name}"
            yield full if full in known else node.module


def _functions(node: ast.AST, prefix: str) -> Iterator[tuple[str, Function]]:
    for child in ast.iter_child_nodes(node):
        name = f"{prefix}{getattr(child, 'name', '')}"
        if isinstance(child, Function):
            yield name, child
        named = isinstance(child, Function | ast.ClassDef)
        yield from _functions(child, f"{name}." if named else prefix)
