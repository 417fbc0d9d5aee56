"""The unit part of a heading, such as `Gyr`, `h^-1 Mpc` or `km s-1 Mpc-1`.

A unit is one of the closed table, or a product of those that equals one of it; prefixes are never
taken off an unknown word. What is recognised but cannot be taken (`mpc`, `10^3 Mpc`, `log Mpc`,
`h70^-1 Mpc`) says why. The h of `h^-1 Mpc` is H0/(100 km/s/Mpc), never an hour.
"""

from __future__ import annotations

import functools
import re
from dataclasses import dataclass

from epochconv.units import TABLE, Unit, find_unit, unit_named

# Safe after the name of a time or a length, but not in a cell, where 2.3a may be a note.
_IN_HEADINGS = {
    "Gyrs": "Gyr",
    "Myrs": "Myr",
    "kyrs": "kyr",
    "yrs": "yr",
    # VOUnits 1.1: a is the Julian year.
    "Ga": "Gyr",
    "Ma": "Myr",
    "ka": "kyr",
    "a": "yr",
    "bn yr": "Gyr",
    "bn yrs": "Gyr",
    "bn years": "Gyr",
    "billion yr": "Gyr",
    "billion yrs": "Gyr",
    "million yr": "Myr",
    "million yrs": "Myr",
    "bn ly": "Gly",
    "billion ly": "Gly",
    "million ly": "Mly",
}
_COMOVING = {"ckpc": "kpc", "cMpc": "Mpc", "cGpc": "Gpc"}
_PRODUCTS = {
    (("Mpc", -1), ("km", 1), ("s", -1)): "km/s/Mpc",
    (("Gyr", -1),): "1/Gyr",
    (("s", -1),): "1/s",
}
_VELOCITIES = {(("km", 1), ("s", -1)), (("m", 1), ("s", -1))}
_SAME = {"sec": "s", "kms": "km s"}

# Units of other columns, by which a row of units is known.
_FOREIGN = """
    arcsec arcmin deg degrees ° ' " mas mas/yr h hr hour hours hrs min minutes ks Å nm µm um mm
    cm Jy mJy µJy erg/s erg/s/cm2 keV eV MeV GHz MHz Hz Msun Lsun Zsun counts ct ct/s e- ADU
    mag/arcsec2 pc/cm3 cm-3 km/s m/s rad hms dms h:m:s d:m:s yyyy-mm-dd UT UTC JD MJD
    % °C hPa Pa
"""
_NO_UNIT = frozenset({"---", "--", "-", "1", "dimensionless", "unitless", "none"})

_FACTOR = re.compile(
    r"(?P<sign>[()/])|[·.*× ]|1(?= ?/)|"
    r"(?P<name>h_?[0-9]+|[A-Za-zµ]+)(?:(?:\^|\*\*)?(?P<power>\([+-]?[0-9]\)|[+-]?[0-9](?![0-9])))?"
)
_SCALED = re.compile(
    r"(?:[×x*·] ?)?(?:10 ?(?:\^|\*\*) ?\(?[+-]?[0-9]+\)?|1(?:\.0)?[eE][+-]?[0-9]+|10{2,})"
    r" ?(?:[×x*·] ?)?(?P<unit>.*)|(?P<divided>.+) ?[/×*] ?10(?:0+|\^-?[0-9]+)"
)
_LOGARITHM = re.compile(r"(?:log(?:_?10)?|lg|ln|dex)\b ?(?P<unit>.*)")
_H_IN_A_NAME = re.compile(r"(?P<unit>[kMG]?(?:pc|ly))_?(?:over_?)?h")
_LITTLE_H = re.compile(r"h(?:_?[0-9]+)?")

POWER_OF_TEN = (
    "a power of ten in a heading can be read in two opposite ways; write a unit with a prefix, such"
    " as Gyr or Mpc"
)
PER_CENT = "per cent are not read in a heading; give plain numbers"
LOGARITHM = "it holds a logarithm, which is not converted; add a column with the value itself"


@dataclass(frozen=True)
class UnitPart:
    """What the unit part of a heading says.

    Attributes:
        unit: the unit, None where there is a problem or the column holds a velocity.
        h_power: power of h = H0/(100 km/s/Mpc) that multiplies the unit: -1 for `h^-1 Mpc`.
        comoving: whether the unit says that the length is comoving, as `cMpc` does.
        velocity: whether the unit is one of velocity.
        problem: why a recognised unit is not taken, and what to write instead.
    """

    unit: Unit | None = None
    h_power: int = 0
    comoving: bool = False
    velocity: bool = False
    problem: str = ""


@functools.lru_cache(maxsize=4096)
def read_unit(text: str) -> UnitPart | None:
    """Return what a unit part says, None where it is no unit that is known here.

    Args:
        text: of a plain line; without the brackets that part it from the name.
    """
    trimmed = text.strip().rstrip(".")
    unit = find_unit(trimmed) or _in_headings(trimmed)
    if unit is not None:
        return UnitPart(unit)
    if not trimmed or len(trimmed) > 40:
        return None
    return _transformed(trimmed) or _product(trimmed) or _misspelt(trimmed)


def is_like_a_unit(text: str) -> bool:
    """Tell whether a cell could stand in a row of units, under whatever column."""
    inner = text.strip()
    if inner[:1] + inner[-1:] in ("()", "[]"):
        inner = inner[1:-1].strip()
    return inner in _NO_UNIT or inner in _FOREIGN.split() or read_unit(inner) is not None


def says_no_unit(text: str) -> bool:
    """Tell whether a cell of a units row marks a column without a unit."""
    return text.strip() in _NO_UNIT or not text.strip()


def _in_headings(text: str) -> Unit | None:
    known = _IN_HEADINGS.get(text)
    if known is not None:
        return unit_named(known)
    # Written-out words have no capitals that matter.
    known = _words().get(text.lower())
    return None if known is None else unit_named(known)


def _transformed(text: str) -> UnitPart | None:
    if text == "%":
        return UnitPart(problem=PER_CENT)
    match = _H_IN_A_NAME.fullmatch(text)
    if match is not None:
        return UnitPart(problem=f"{text} may divide by h or not; write [h^-1 {match['unit']}]")
    match = _LOGARITHM.fullmatch(text)
    if match is not None:
        inner = match["unit"].strip("() ")
        return UnitPart(problem=LOGARITHM) if not inner or read_unit(inner) else None
    match = _SCALED.fullmatch(text)
    if match is not None:
        inner = (match["unit"] or match["divided"] or "").strip("() ")
        return UnitPart(problem=POWER_OF_TEN) if not inner or read_unit(inner) else None
    return None


def _product(text: str) -> UnitPart | None:
    """Return the unit that a product of units is, with its power of h."""
    factors = _factors(text)
    if factors is None:
        return None
    of_h = {name: power for name, power in factors.items() if _LITTLE_H.fullmatch(name)}
    others = {name: power for name, power in factors.items() if name not in of_h}
    comoving = any(name in _COMOVING for name in others)
    others = {_COMOVING.get(name, name): power for name, power in others.items()}
    ordered = tuple(sorted(others.items()))
    if ordered in _VELOCITIES and not of_h:
        return UnitPart(velocity=True)
    unit = unit_named(_PRODUCTS[ordered]) if ordered in _PRODUCTS else None
    if unit is None and list(others.values()) == [1]:
        unit = find_unit(ordered[0][0])
    if unit is None or unit.dimension == "number":
        return None
    if of_h == {"h": -1} and unit.dimension in ("length", "time"):
        return UnitPart(unit, h_power=-1, comoving=comoving)
    if of_h:
        return UnitPart(problem=_h_problem(of_h, unit))
    return UnitPart(unit, comoving=comoving)


def _h_problem(of_h: dict[str, int], unit: Unit) -> str:
    name = next((one for one in of_h if one != "h"), "h").replace("_", "")
    if name != "h":
        return (
            f"{name} names an h of its own, which is not taken; convert the column to"
            f" h^-1 {unit.symbol} or to {unit.symbol}"
        )
    if unit.dimension == "rate":
        return f"an h before {unit.symbol} is not read; give the rate in {unit.symbol}"
    return f"only h^-1 {unit.symbol} is read, as the value times h; other powers of h are not"


def _factors(text: str) -> dict[str, int] | None:
    """Return the powers of the names in a product, None where the text is none.

    A slash divides by the one factor or bracket behind it.
    """
    factors: dict[str, int] = {}
    signs = [1]
    over = False
    position = 0
    while position < len(text):
        match = _FACTOR.match(text, position)
        if match is None:
            return None
        position = match.end()
        if match["sign"] == "/":
            over = True
        elif match["sign"] == "(":
            signs.append(-signs[-1] if over else signs[-1])
            over = False
        elif match["sign"] == ")":
            signs.pop()
            if not signs:
                return None
        elif match["name"]:
            power = signs[-1] * int((match["power"] or "1").strip("()"))
            for name in _SAME.get(match["name"], match["name"]).split():
                factors[name] = factors.get(name, 0) + (-power if over else power)
            over = False
    return None if over or len(signs) > 1 or not factors else factors


def _misspelt(text: str) -> UnitPart | None:
    """Return a problem for a unit that differs from a known one in capitals alone."""
    if len(text) < 2 and text != "k":
        return None
    known = _by_capitals().get(text.casefold())
    if known is None:
        return None
    return UnitPart(problem=f"capitals matter in a unit and {text!r} is none; write {known}")


@functools.cache
def _words() -> dict[str, str]:
    """Return the symbols of units by their written-out names of four letters and more."""
    return {
        spelling: unit.symbol
        for unit in TABLE
        for spelling in (unit.long_name, *unit.spellings)
        if len(spelling) > 3 and spelling.replace(" ", "").replace("-", "").isalpha()
        if spelling.islower()
    }


@functools.cache
def _by_capitals() -> dict[str, str]:
    return {
        spelling.casefold(): unit.symbol
        for unit in TABLE
        if unit.symbol
        for spelling in (unit.symbol, *unit.spellings)
    }
