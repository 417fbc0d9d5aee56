"""Headings of companions: the errors, limit flags, notes and qualities of another column.

    e_X E_X l_X q_X n_X ...   X err   error of X   σ_X   ± X   X (upper error)   ±   +   −

The one-letter prefixes are those of the CDS standard for catalogues; capitals tell an upper error
(`E_z`) from a lower one (`e_z`). Which column X is, is for `companions` to find.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass

from workbook_tools.column_meanings import Role
from workbook_tools.heading_forms import Split, splits
from workbook_tools.heading_units import UnitPart, read_unit, says_no_unit
from workbook_tools.heading_words import LONGEST_HEADING

_PREFIXED = re.compile(r"(?P<letter>[eElufqnrxowma])_(?P<base>.+)")
_PREFIX_ROLES = {"e": Role.ERROR, "E": Role.UPPER_ERROR, "l": Role.LIMIT_FLAG}
_PREFIX_CARRIES = {
    "u": "quality",
    "f": "quality",
    "q": "quality",
    "n": "note",
    "r": "reference",
    "x": "unit",
    "o": "number of observations",
    "w": "weight",
    "m": "multiplicity",
    "a": "aperture",
}
_GLUED = re.compile(r"(?P<base>[A-Za-zµ]\S*?)_?(?P<word>err|error|ERR|flag|ref)")

_ERROR = "err error errors unc uncertainty uncertainties ± +/- +-"
_SIGMA = "σ sigma sig"
_UPPER = "up upper plus hi high pos positive"
_LOWER = "lo low lower minus neg negative"
_UPPER_ERROR = "errp errup erru errplus errhi uperr perr"
_LOWER_ERROR = "errm errlo errl errlow errminus loerr lowerr merr"
_BOUND = "max min maximum minimum l68 u68 left right"
_QUALITY = "quality qual flag flags conf confidence"
_NOTE = "note notes comment comments remark remarks"
_REFERENCE = "ref refs reference references bibcode"
_LIMIT = "limit limits lim"
_FILLER = "of in on the for to"
_KINDS = {
    word: kind
    for kind, words in (
        ("error", _ERROR),
        ("sigma", _SIGMA),
        ("upper", _UPPER),
        ("lower", _LOWER),
        ("upper error", _UPPER_ERROR),
        ("lower error", _LOWER_ERROR),
        ("bound", _BOUND),
        ("quality", _QUALITY),
        ("note", _NOTE),
        ("reference", _REFERENCE),
        ("limit", _LIMIT),
        ("about", "type types method methods origin"),
        ("filler", _FILLER),
        ("plus", "+"),
        ("minus", "-"),
        ("level", "1σ 1-σ 1sigma 1-sigma 68% 68"),
        ("part", "stat statistical sys syst systematic random"),
    )
    for word in words.split()
}
_LEVEL = re.compile(r"(?<=\S) ?\((?:1-?(?:σ|sigma)|68 ?%)\)$")
_CARRIED = ("quality", "note", "reference")
_PIECE = re.compile(r"[^\s_()\[\],]+")
_LEADING = re.compile(r"\+/-|\+-|±|[+-]|σ(?=.)")
_TRAILING = re.compile(r"(?:\+/-|\+-|±|[+-])$")
_MOST_TOKENS = 10


@dataclass(frozen=True)
class Companion:
    """What a heading says if it is that of a companion.

    Attributes:
        role: an error, a limit flag, CARRIED or UNCLEAR.
        base: the name of the column that it belongs to; "" for the one on its left.
        carries: of CARRIED, what it carries; of UNCLEAR, what leaves the doubt.
        part: the unit part, None where the heading has none.
        prefix: the one-letter prefix, "" for other forms.
        exact: whether the base must be the very name of a column for this to be a companion.
    """

    role: Role
    base: str
    carries: str = ""
    part: UnitPart | None = None
    prefix: str = ""
    exact: bool = False


def companions_in(line: str, below: str = "") -> Iterator[Companion]:
    """Yield what a plain line may say as the heading of a companion, the likeliest first.

    Args:
        below: what stands under it in the row of units.
    """
    if len(line) > LONGEST_HEADING:
        return
    if not says_no_unit(below):
        part = read_unit(below.strip("()[] "))
        yield from _named(line, part)
        return
    line = _LEVEL.sub("", line)
    # In round brackets a dash is the sign of a lower error, in square ones it says "no unit".
    ways = [w for w in splits(line) if _has_unit(w) and (w.unit != "-" or "[-]" in line)]
    for way in ways:
        if way.sure:
            yield from _named(way.name, read_unit(way.unit))
    yield from _named(line, None)
    for way in ways:
        if not way.sure:
            yield from _named(way.name, read_unit(way.unit))


def _has_unit(way: Split) -> bool:
    part = read_unit(way.unit)
    if part is None or part.unit is None:
        return part is not None
    return part.unit.dimension != "number" or way.form == "in brackets"


def _named(name: str, part: UnitPart | None) -> Iterator[Companion]:
    prefixed = _PREFIXED.fullmatch(name)
    if prefixed is not None:
        letter, base = prefixed["letter"], prefixed["base"]
        role = _PREFIX_ROLES.get(letter, Role.CARRIED)
        carries = _PREFIX_CARRIES.get(letter, "")
        yield Companion(role, base, carries, part, letter, exact=letter not in _PREFIX_ROLES)
    found = _in_words(name, part)
    if found is not None:
        yield found
    glued = _GLUED.fullmatch(name)
    if glued is not None:
        word = glued["word"].lower()
        role = Role.CARRIED if word in ("flag", "ref") else Role.ERROR
        carries = {"flag": "quality", "ref": "reference"}.get(word, "")
        yield Companion(role, glued["base"], carries, part, exact=True)


def _in_words(name: str, part: UnitPart | None) -> Companion | None:
    """Return the companion that words and signs around a base make."""
    tokens = list(_tokens(name))
    if not tokens or len(tokens) > _MOST_TOKENS:
        return None
    kinds = [_KINDS.get(name[start:end].lower().rstrip("."), "base") for start, end in tokens]
    base_tokens = [position for position, kind in enumerate(kinds) if kind == "base"]
    base = ""
    if base_tokens:
        first, last = base_tokens[0], base_tokens[-1]
        if any(kind not in ("base", "filler") for kind in kinds[first:last]):
            return None
        base = _closed(name, tokens[first][0], tokens[last][1])
        if not any(map(str.isalnum, base)):
            return None
    role, carries = _role(set(kinds) - {"base", "filler"}, base)
    return None if role is None else Companion(role, base, carries, part)


def _role(kinds: set[str], base: str) -> tuple[Role | None, str]:
    """Return the role that the words around a base make, and what it carries or is doubted for."""
    upper, lower = kinds & {"upper", "plus"}, kinds & {"lower", "minus"}
    if kinds & {"upper error", "lower error"}:
        return (Role.UPPER_ERROR if "upper error" in kinds else Role.LOWER_ERROR), ""
    signed = bool(kinds & {"plus", "minus"})
    if "error" in kinds or ("sigma" in kinds and (base or signed or "level" in kinds)):
        if "part" in kinds:
            return Role.UNCLEAR, "it is a part of the error, statistical or systematic"
        if kinds - {"error", "sigma", "level", "upper", "lower", "plus", "minus"} or (
            upper and lower
        ):
            return None, ""
        return (Role.UPPER_ERROR if upper else Role.LOWER_ERROR if lower else Role.ERROR), ""
    if kinds == {"sigma"}:
        return Role.UNCLEAR, "σ may be the error of the column before it or a dispersion"
    if kinds == {"limit", "quality"}:
        return Role.LIMIT_FLAG, ""
    if kinds == {"level"} and not base:
        return Role.ERROR, ""
    if signed and kinds - {"level"} in ({"plus"}, {"minus"}):
        return (Role.UPPER_ERROR if upper else Role.LOWER_ERROR), ""
    if len(kinds) == 1 and kinds <= set(_CARRIED):
        return Role.CARRIED, next(iter(kinds))
    if base and kinds == {"about"}:
        return Role.CARRIED, "note"
    if kinds in ({"upper"}, {"lower"}) or (base and kinds and kinds <= {"upper", "lower", "bound"}):
        return Role.UNCLEAR, "it may be a bound or the size of an error"
    if kinds == {"limit"}:
        return Role.UNCLEAR, "'lim' may be the limit itself or a flag"
    return None, ""


def _tokens(name: str) -> Iterator[tuple[int, int]]:
    """Yield the ends of words and of the signs that stand before and behind them."""
    for piece in _PIECE.finditer(name):
        start, end = piece.span()
        if piece[0].lower().rstrip(".") in _KINDS:
            yield start, end
            continue
        leading = _LEADING.match(name, start, end)
        if leading is not None:
            yield leading.span()
            start = leading.end()
        trailing = _TRAILING.search(name[start:end])
        stop = end if trailing is None else start + trailing.start()
        if start < stop:
            yield start, stop
        if stop < end:
            yield stop, end


def _closed(name: str, start: int, end: int) -> str:
    """Return a part of a name, with the bracket behind it that closes one within it."""
    base = name[start:end]
    for opening, closing in ("()", "[]"):
        if base.count(opening) > base.count(closing) and name[end : end + 1] == closing:
            base += closing
    return base
