"""The one place where measures are registered and looked up by name."""

from __future__ import annotations

import difflib
import importlib

from epochconv.errors import ArgumentError
from epochconv.measure import Measure
from epochconv.units import find_unit

# Modules whose MEASURES are registered when a measure is first asked for.
_PROVIDERS = ["epochconv.measures"]

_measures: dict[str, Measure] = {}
_by_name: dict[str, Measure] = {}
_by_symbol: dict[str, Measure] = {}


def folded(name: str) -> str:
    """Return a name without what does not matter in it: case, hyphens, underscores, blanks."""
    return " ".join(name.lower().replace("-", " ").replace("_", " ").split())


def add_measure(measure: Measure) -> None:
    """Verify a measure, then register it.

    Raises:
        ArgumentError: its unit is unknown, it has no way back to moments, or its name, alias or
            symbol is taken by another; nothing is registered then.
    """
    _load_providers()
    if find_unit(measure.unit) is None:
        raise ArgumentError(f"measure {measure.name!r}: unit {measure.unit!r} is not in the table")
    one_to_one = measure.moment_of is not None and measure.range_of is not None
    if not one_to_one and measure.slope_at is None and measure.rescaled_from is None:
        raise ArgumentError(
            f"measure {measure.name!r} needs moment_of together with range_of, or slope_at, "
            "or rescaled_from"
        )
    names = {folded(name) for name in (measure.name, *measure.aliases)}
    for kind, word in [*(("name", name) for name in sorted(names)), ("symbol", measure.symbol)]:
        # A symbol that is another's name would hide that name, and the other way round.
        taken = _by_symbol.get(word) or _by_name.get(folded(word))
        if taken is not None:
            raise ArgumentError(
                f"measure {measure.name!r}: the {kind} {word!r} belongs to {taken.name!r}; "
                "choose another"
            )
    _measures[measure.name] = measure
    _by_symbol[measure.symbol] = measure
    _by_name.update(dict.fromkeys(names, measure))


def find_measure(text: str) -> Measure | None:
    """Return the measure with this symbol (case matters), name or alias; None if there is none."""
    _load_providers()
    return _by_symbol.get(text) or _by_name.get(folded(text))


def measure_named(text: str) -> Measure:
    """Return the measure with this symbol, name or alias.

    Raises:
        ArgumentError: there is none; the message names the nearest and lists all.
    """
    found = find_measure(text) if isinstance(text, str) else None
    if found is None:
        near = difflib.get_close_matches(folded(str(text)), _by_name, n=1)
        hint = f" Did you mean {_by_name[near[0]].name!r}?" if near else ""
        raise ArgumentError(
            f"{text!r} is no measure known here.{hint} Known are: {', '.join(_measures)}"
        )
    return found


def measures() -> tuple[Measure, ...]:
    """Return all measures in the order of their registration."""
    _load_providers()
    return tuple(_measures.values())


def _load_providers() -> None:
    while _PROVIDERS:
        for measure in importlib.import_module(_PROVIDERS.pop(0)).MEASURES:
            add_measure(measure)
