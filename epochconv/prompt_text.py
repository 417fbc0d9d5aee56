"""The one-shot command's language: "z = 2.5", "age = 1 Gyr", "comoving distance [Gly]"."""

from __future__ import annotations

import re

from epochconv.errors import ArgumentError
from epochconv.measure import Measure
from epochconv.number_text import number_and_unit
from epochconv.registry import measure_named
from epochconv.units import Unit, factor, find_unit, symbols, unit_named

_WANTED = re.compile(r"(?P<name>[^\[\]]+?)\s*(?:\[(?P<unit>[^\[\]]*)\])?")


def read_given(text: str) -> tuple[Measure, float]:
    """Return the measure and its value, in the measure's unit, of a text such as "age = 1 Gyr".

    Raises:
        ArgumentError: the text is not a measure, "=" and a number with the unit that it needs.
    """
    name, equals, value = text.partition("=")
    if not equals or not name.strip() or not value.strip():
        raise ArgumentError(
            f"{text!r} is not understood; write a measure, = and a value with its unit, such as "
            "'z = 2.5' or 'age = 1 Gyr'"
        )
    measure = measure_named(name.strip())
    own = unit_named(measure.unit)
    number, unit = number_and_unit(value)
    if unit is None:
        if own.dimension not in ("number", "magnitude"):
            raise ArgumentError(
                f"{text!r} has no unit; {measure.name} needs one, such as "
                f"'{name.strip()} = {value.strip()} {own.symbol}'"
            )
        return measure, number
    _check_dimension(measure, own, unit)
    return measure, number * factor(unit, own)


def read_wanted(text: str) -> tuple[Measure, Unit]:
    """Return measure and unit of a text such as "comoving distance [Gly]"; own unit by default.

    Raises:
        ArgumentError: the measure or the unit is unknown, or the two do not fit.
    """
    match = _WANTED.fullmatch(text.strip())
    if match is None:
        raise ArgumentError(
            f"{text!r} is not understood; write a measure and, in brackets, its unit, such as "
            "'comoving distance [Gly]'"
        )
    measure = measure_named(match["name"])
    own = unit_named(measure.unit)
    if match["unit"] is None:
        return measure, own
    unit = find_unit(match["unit"])
    if unit is None:
        raise ArgumentError(
            f"{match['unit']!r} in {text!r} is not a unit that is known here (case matters)"
        )
    _check_dimension(measure, own, unit)
    return measure, unit


def _check_dimension(measure: Measure, own: Unit, unit: Unit) -> None:
    if unit.dimension != own.dimension:
        fitting = symbols(own.dimension)
        remedy = f"use {', '.join(fitting)}" if fitting else "give a bare number"
        raise ArgumentError(
            f"{unit.symbol or 'no unit'} does not fit {measure.name}, "
            f"which is a {own.dimension}; {remedy}"
        )
