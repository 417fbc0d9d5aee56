"""Every public thing says what it does, and every parameter and result has a type."""

from __future__ import annotations

import ast
import re

import pytest

from tests.house.source_files import Function, Module, modules

EVERY_MODULE = pytest.mark.parametrize("module", modules(), ids=lambda module: module.name)


@EVERY_MODULE
def test_module_says_what_it_is(module: Module) -> None:
    assert ast.get_docstring(module.tree)


@EVERY_MODULE
def test_public_things_say_what_they_do(module: Module) -> None:
    for name, node in module.public():
        text = ast.get_docstring(node)
        assert text, f"{name} has no docstring"
        first = text.split("\n\n")[0]
        assert first.endswith((".", ":")), f"{name}: the docstring begins with no sentence"


@EVERY_MODULE
def test_parameters_and_results_have_types(module: Module) -> None:
    """Private ones too: the checker is strict."""
    for name, function in module.functions():
        arguments = function.args
        every = [*arguments.posonlyargs, *arguments.args, *arguments.kwonlyargs]
        every += [one for one in (arguments.vararg, arguments.kwarg) if one is not None]
        bare = [
            one.arg for one in every if one.annotation is None and one.arg not in ("self", "cls")
        ]
        assert not bare, f"{name}: {bare} have no type"
        assert function.returns is not None, f"{name} has no type of result"


def documented_parameters(function: Function) -> list[str]:
    """Names under "Args:" in the docstring."""
    text = ast.get_docstring(function) or ""
    found = re.search(r"^Args:\n((?:    .*\n?|\n)*)", text, re.MULTILINE)
    if found is None:
        return []
    heads = re.findall(r"^    (\w[\w, ]*):", found[1], re.MULTILINE)
    return [name.strip() for head in heads for name in head.split(",")]


@EVERY_MODULE
def test_documented_parameters_exist(module: Module) -> None:
    for name, node in module.public():
        if isinstance(node, ast.ClassDef):
            continue
        arguments = node.args
        every = [*arguments.posonlyargs, *arguments.args, *arguments.kwonlyargs]
        every += [one for one in (arguments.vararg, arguments.kwarg) if one is not None]
        unknown = set(documented_parameters(node)) - {one.arg for one in every}
        assert not unknown, f"{name} documents {unknown}, which it does not take"


def test_documented_parameters_are_found() -> None:
    """Else the test above could not fail."""
    (convert,) = [
        node
        for module in modules()
        if module.name == "epochconv.conversion"
        for name, node in module.public()
        if name == "convert"
    ]
    assert isinstance(convert, Function)
    names = documented_parameters(convert)
    assert names == ["value", "source", "target", "unit", "history", "side", "outside"]


@EVERY_MODULE
def test_nothing_is_left_to_do(module: Module) -> None:
    """No notes of unfinished work; every exception from the type checker gives its reason."""
    assert not re.search(r"\b(TODO|FIXME|XXX|HACK)\b", module.text)
    for line in module.text.splitlines():
        if "type: ignore" in line:
            assert re.search(r"# type: ignore\[[\w-]+\]", line), line
