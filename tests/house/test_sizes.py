"""Small rooms: no long module, no long function, few parameters."""

from __future__ import annotations

import pytest

from tests.house.source_files import Function, Module, modules

MOST_LINES_OF_A_MODULE = 400
MOST_LINES_OF_A_FUNCTION = 60
MOST_PARAMETERS = 6

# Options, one after the other, and a call whose documentation is most of it. Remove what no longer
# exceeds the limit.
LONGER = {
    "epochconv.conversion_with_error.convert_with_error": 67,
    "workbook_tools.command._add_choices": 77,
}
# They take one by one what people choose one by one.
MORE_PARAMETERS = {
    "epochconv.conversion.convert": 7,
    "epochconv.conversion_with_error._image": 8,
    "epochconv.conversion_with_error.convert_with_error": 10,
    "epochconv.conversion_with_error.convert_with_linear_error": 8,
    "epochconv.intervals.image": 7,
    "epochconv.slopes.tangent": 7,
    "epochconv.through_x.convert_values": 7,
    "workbook_tools.filling.write_columns": 7,
}
EVERY_MODULE = pytest.mark.parametrize("module", modules(), ids=lambda module: module.name)


def lines_of(function: Function) -> int:
    """From its first line to its last, decorators apart."""
    assert function.end_lineno is not None
    return function.end_lineno - function.lineno + 1


def parameters_of(function: Function) -> int:
    """How many parameters a caller sees."""
    arguments = function.args
    every = [*arguments.posonlyargs, *arguments.args, *arguments.kwonlyargs]
    return len([one for one in every if one.arg not in ("self", "cls")])


@EVERY_MODULE
def test_module_is_short(module: Module) -> None:
    assert module.lines <= MOST_LINES_OF_A_MODULE


@EVERY_MODULE
def test_functions_are_short(module: Module) -> None:
    for name, function in module.functions():
        lines = lines_of(function)
        most = LONGER.get(f"{module.name}.{name}", MOST_LINES_OF_A_FUNCTION)
        assert lines <= most, f"{name} has {lines} lines"


@EVERY_MODULE
def test_functions_take_few_parameters(module: Module) -> None:
    """But for constructors, which name what a value holds."""
    for name, function in module.functions():
        if function.name != "__init__":
            most = MORE_PARAMETERS.get(f"{module.name}.{name}", MOST_PARAMETERS)
            count = parameters_of(function)
            assert count <= most, f"{name} takes {count} parameters"


def test_exceptions_are_still_needed() -> None:
    """One that is no longer exceeded has to go."""
    functions = {
        f"{module.name}.{name}": function
        for module in modules()
        for name, function in module.functions()
    }
    for name in LONGER:
        assert lines_of(functions[name]) > MOST_LINES_OF_A_FUNCTION, f"take {name} off the list"
    for name in MORE_PARAMETERS:
        assert parameters_of(functions[name]) > MOST_PARAMETERS, f"take {name} off the list"
