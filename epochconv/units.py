"""The closed table of units that headings, cells, prompts and calls may name.

Nothing here parses: a unit is known, in one of its listed spellings, or it is not. Prefixes are
written out, so that `mpc` or `h` can never slip through as something else. Case matters.
"""

from __future__ import annotations

import functools
from dataclasses import dataclass

from epochconv.constants import (
    ASTRONOMICAL_UNIT_M,
    GIGAYEAR_S,
    JULIAN_YEAR_S,
    LIGHT_YEAR_M,
    MEGAPARSEC_KM,
    PARSEC_M,
)


@dataclass(frozen=True)
class Unit:
    """One unit.

    Attributes:
        symbol: how we write it.
        dimension: "number", "length", "time", "temperature", "rate" or "magnitude".
        size: in m, s, K or 1/s; 1 for numbers and magnitudes.
        long_name: full name, as unit registries spell it; empty for numbers and magnitudes.
        spellings: further accepted spellings.
    """

    symbol: str
    dimension: str
    size: float
    long_name: str
    spellings: tuple[str, ...] = ()


def find_unit(text: str) -> Unit | None:
    """Return the unit that `text` spells, or None; case matters, inner white space folds."""
    return _by_spelling().get(_folded(text))


def unit_named(symbol: str) -> Unit:
    """Return the unit with this symbol or spelling.

    Raises:
        KeyError: the table has none (for text that people typed use `find_unit`).
    """
    return _by_spelling()[_folded(symbol)]


def factor(source: Unit, target: Unit) -> float:
    """Return what a magnitude in `source` is multiplied by to be in `target`.

    Raises:
        ValueError: the two units have different dimensions.
    """
    if source.dimension != target.dimension:
        raise ValueError(f"{source.symbol} ({source.dimension}) is no {target.dimension}")
    return 1.0 if source.size == target.size else source.size / target.size


def symbols(dimension: str) -> list[str]:
    """Return the symbols of the units of one dimension, in table order."""
    return [unit.symbol for unit in TABLE if unit.dimension == dimension and unit.symbol]


def _prefixed(
    stem: str, dimension: str, size: float, long_name: str, spellings: tuple[str, ...] = ()
) -> list[Unit]:
    """Return the unit with the prefixes none, k, M and G, spelled with symbols and with words."""
    words = {"": "", "k": "thousand ", "M": "million ", "G": "billion "}
    scales = {"": (1.0, ""), "k": (1e3, "kilo"), "M": (1e6, "mega"), "G": (1e9, "giga")}
    units = []
    for prefix, (scale, long_prefix) in scales.items():
        more = []
        for spelling in spellings:
            is_word = len(spelling) > 3
            more.append((words[prefix] if is_word else prefix) + spelling)
            if is_word:
                more.append(long_prefix + spelling.replace(" ", "").replace("-", ""))
        units.append(
            Unit(prefix + stem, dimension, scale * size, long_prefix + long_name, tuple(more))
        )
    return units


_RATE_SPELLINGS = (
    "km s-1 Mpc-1",
    "km s^-1 Mpc^-1",
    "km s⁻¹ Mpc⁻¹",
    "km/(s Mpc)",
    "km/(s·Mpc)",
    "(km/s)/Mpc",
    "km/sec/Mpc",
    "km.s-1.Mpc-1",
    "km·s⁻¹·Mpc⁻¹",
    "km/s / Mpc",
    "km / s / Mpc",
)

TABLE: tuple[Unit, ...] = (
    Unit("", "number", 1.0, "", ("1", "dimensionless", "-", "---")),
    *_prefixed("pc", "length", PARSEC_M, "parsec", ("parsec", "parsecs")),
    *_prefixed(
        "ly",
        "length",
        LIGHT_YEAR_M,
        "light_year",
        ("lyr", "light-year", "light-years", "light year", "light years", "lightyears"),
    ),
    Unit("au", "length", ASTRONOMICAL_UNIT_M, "astronomical_unit", ("AU",)),
    Unit("m", "length", 1.0, "meter", ("metre", "metres", "meter", "meters")),
    Unit("km", "length", 1e3, "kilometer", ("kilometre", "kilometres", "kilometers")),
    *_prefixed("yr", "time", JULIAN_YEAR_S, "year", ("year", "years")),
    Unit("d", "time", 86_400.0, "day", ("day", "days")),
    Unit("s", "time", 1.0, "second", ("sec", "second", "seconds")),
    Unit("K", "temperature", 1.0, "kelvin", ("kelvin", "kelvins")),
    Unit("mK", "temperature", 1e-3, "millikelvin", ("millikelvin",)),
    Unit("µK", "temperature", 1e-6, "microkelvin", ("μK", "uK", "microkelvin")),
    Unit(
        "km/s/Mpc", "rate", 1.0 / MEGAPARSEC_KM, "kilometer / second / megaparsec", _RATE_SPELLINGS
    ),
    Unit("1/Gyr", "rate", 1.0 / GIGAYEAR_S, "1 / gigayear", ("Gyr-1", "Gyr^-1", "Gyr⁻¹")),
    Unit("1/s", "rate", 1.0, "1 / second", ("s-1", "s^-1", "s⁻¹")),
    Unit("mag", "magnitude", 1.0, "", ("mags", "magnitude", "magnitudes")),
)


def _folded(text: str) -> str:
    return " ".join(text.split())


@functools.cache
def _by_spelling() -> dict[str, Unit]:
    return {
        _folded(spelling): unit
        for unit in TABLE
        for spelling in (unit.symbol, *unit.spellings, *_long_spelling(unit))
    }


def _long_spelling(unit: Unit) -> tuple[str, ...]:
    return (unit.long_name,) if unit.long_name else ()
