"""Pint quantities for results, in the registry and unit that the caller asks for."""

from __future__ import annotations

import re
import weakref
from typing import Any

import pint
from pint.util import UnitsContainer

from epochconv.errors import ArgumentError
from epochconv.reading_quantities import (
    BASE_NAMES,
    is_quantity,
    parsec_correction,
    table_unit_of,
)
from epochconv.units import Unit, factor, find_unit

# The parsers of some registries pass over all other signs in silence, and read "Mpc?" as Mpc.
_UNIT_TEXT = re.compile(r"[\w\s*/^().+·⁻⁰¹²³⁴⁵⁶⁷⁸⁹%°-]*")

# Quantity class of a registry -> {(unit wanted, our unit): (names of its units, factor)}.
# A unit object in place of the names would keep its registry alive for ever.
_targets: weakref.WeakKeyDictionary[type, dict[tuple[Any, Unit], tuple[UnitsContainer, float]]] = (
    weakref.WeakKeyDictionary()
)


def quantity_of(magnitude: Any, unit: Unit, wanted: Any, asker: object) -> Any:
    """Return `magnitude`, which is in `unit`, as a quantity.

    Args:
        magnitude: a float or an array, changed in place where it is an array.
        unit: a unit of our table.
        wanted: None (keep `unit`), the text of a unit (in the application registry), or a unit or
            quantity of any registry, in which the result then lives.
        asker: the value that the caller gave; without `wanted`, a quantity's registry is kept.
    Raises:
        ArgumentError: `wanted` is unknown or of another dimension, or the registry lacks our unit.
    """
    if wanted is None or isinstance(wanted, str):
        key: Any = wanted
        if wanted is None and is_quantity(asker):
            make: Any = type(asker)
        else:
            make = pint.get_application_registry().Quantity  # type: ignore[no-untyped-call]
    elif hasattr(wanted, "dimensionality"):
        one = wanted if is_quantity(wanted) else 1.0 * wanted
        if one.magnitude != 1:
            raise ArgumentError(f"unit={str(wanted)!r} is not one unit; give the unit alone")
        make, key = type(one), tuple(one.unit_items())
    else:
        raise ArgumentError(f"unit={wanted!r} is neither a text nor a pint unit")
    known = _targets.setdefault(make, {})
    target = known.get((key, unit))
    if target is None:
        one, scale = _target(make, wanted, unit)
        target = known[key, unit] = UnitsContainer(dict(one.unit_items())), scale
    units, scale = target
    if scale != 1.0:
        magnitude *= scale
    return make(magnitude, units)


def _target(make: Any, wanted: Any, unit: Unit) -> tuple[Any, float]:
    """Return one of the registry's unit and the factor from our unit to it."""
    if wanted is None:
        return _own_unit(make, unit), 1.0
    if isinstance(wanted, str):
        ours = find_unit(wanted)
        try:
            if ours is None and not _UNIT_TEXT.fullmatch(wanted):
                raise ValueError
            one = make(1.0, wanted if ours is None else ours.long_name)
        except Exception:  # a registry's parser raises many kinds for what it cannot read
            raise ArgumentError(f"unit={wanted!r} is not a unit that is known here") from None
    else:
        one = make(1.0, wanted.units if is_quantity(wanted) else wanted)
        ours = table_unit_of(one)
    if ours is not None and ours.dimension == unit.dimension:
        return one, factor(unit, ours)
    if unit.dimension == "magnitude" and ours is not None and ours.dimension == "number":
        return one, 1.0  # registries have no magnitudes: a bare number is what they hold
    base = make(1.0, BASE_NAMES[unit.dimension])
    if ours is not None or one.dimensionality != base.dimensionality:
        raise ArgumentError(
            f"unit={str(wanted)!r} does not fit: the result is a {unit.dimension}, "
            f"in {unit.symbol or 'no unit'}"
        )
    if make(0.0, one.units).m_as(base.units) != 0.0:
        raise ArgumentError(f"unit={str(wanted)!r} is a scale with its own zero; use K")
    return one, unit.size / (float(one.m_as(base.units)) * parsec_correction(one))


def _own_unit(make: Any, unit: Unit) -> Any:
    try:
        return make(1.0, unit.long_name)
    except AttributeError:  # what registries raise for a unit that they lack
        raise ArgumentError(
            f"the result is in {unit.symbol}, and the registry that it belongs to has no "
            f"{unit.long_name!r}; define it there, or choose another unit with unit="
        ) from None
