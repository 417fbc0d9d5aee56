"""Magnitudes of quantities that callers bring, from any pint registry, in our exact units.

A quantity is asked to convert itself, so that registries never mix. Only its parsec needs care:
pint defines it through a tangent, 8e-12 away from the IAU's; the quotient is divided out.
"""

from __future__ import annotations

import weakref
from typing import Any

import numpy as np

from epochconv.constants import PARSEC_M
from epochconv.errors import ArgumentError
from epochconv.units import Unit, factor, find_unit

BASE_NAMES = {
    "number": "",
    "magnitude": "",
    "length": "meter",
    "time": "second",
    "temperature": "kelvin",
    "rate": "1 / second",
    "energy": "joule",
    "speed": "meter / second",
}

# Quantity class of a registry -> {(units of the quantity, unit wanted): factor}.
_factors: weakref.WeakKeyDictionary[type, dict[tuple[Any, Unit], float]] = (
    weakref.WeakKeyDictionary()
)


def is_quantity(value: object) -> bool:
    """Tell whether `value` is a pint quantity, of whatever registry."""
    return hasattr(value, "m_as") and hasattr(value, "unit_items")


def magnitude_of(quantity: Any, unit: Unit, name: str) -> Any:
    """Return the magnitude of `quantity` in `unit`; `name` says in errors what it is.

    Raises:
        ArgumentError: the quantity has another dimension, an offset unit (degrees Celsius), or a
            registry that lacks the units to tell.
    """
    known = _factors.setdefault(type(quantity), {})
    key = (tuple(quantity.unit_items()), unit)
    scale = known.get(key)
    if scale is None:
        scale = known[key] = _factor(quantity, unit, name)
    if scale == 1.0:
        return quantity.magnitude
    try:
        return quantity.magnitude * scale
    except TypeError:  # a registry may count in Decimal or Fraction, which keep apart from floats
        return np.asarray(quantity.magnitude, dtype=np.float64) * scale


def parsec_correction(quantity: Any) -> float:
    """Return by what sizes in this quantity's unit grow when its parsec becomes the IAU's."""
    powers = sum(power for word, power in quantity.unit_items() if word.endswith("parsec"))
    if not powers:
        return 1.0
    theirs = type(quantity)(1.0, "parsec").m_as("meter")
    return float((PARSEC_M / theirs) ** powers)


def table_unit_of(quantity: Any) -> Unit | None:
    """Return the unit of our table that the quantity is in, or None if the table lacks it."""
    items = list(quantity.unit_items())
    if any(power not in (1, -1) for _, power in items):
        return None
    above = [word for word, power in items if power == 1] or ["1"]
    below = [word for word, power in items if power == -1]
    return find_unit(" / ".join(above + sorted(below, reverse=True)))


def _factor(quantity: Any, unit: Unit, name: str) -> float:
    ours = table_unit_of(quantity)
    if ours is not None and ours.dimension == unit.dimension:
        return factor(ours, unit)
    base = BASE_NAMES[unit.dimension]
    make = type(quantity)
    one = make(1.0, quantity.units)
    try:
        fits = one.dimensionality == make(1.0, base).dimensionality
    except AttributeError:  # what registries raise for a unit that they lack
        fits = False
    if not fits:
        remedy = f"give it in a unit such as {unit.symbol}" if unit.symbol else "give a bare number"
        raise ArgumentError(
            f"{name} is in {quantity.units}, which is no {_described(unit)}; {remedy}"
        )
    if make(0.0, quantity.units).m_as(base) != 0.0:
        raise ArgumentError(
            f"{name} is in {quantity.units}, a scale with its own zero; give it in {unit.symbol}"
        )
    return float(one.m_as(base)) * parsec_correction(one) / unit.size


def _described(unit: Unit) -> str:
    return {
        "number": "pure number",
        "magnitude": "magnitude (a pure number)",
        "rate": "rate (such as km/s/Mpc)",
    }.get(unit.dimension, unit.dimension)
