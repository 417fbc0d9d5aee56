"""The signs around a typed value: blanks and dashes, words for "no value", limits, flags, notes.

A text is made plain before it is read: every kind of blank, dash and fullwidth sign becomes the
ASCII one, and the usual TeX commands become the signs that they print. Superscripts stay what they
are, which Unicode's own compatibility forms would not let them: "10³" would become "103".
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field

from epochconv.typed_outcomes import NoValue, Remark
from epochconv.units import find_unit

_BLANKS = "\t\n\v\f\r \u0085\u00a0\u1680" + "".join(map(chr, range(0x2000, 0x200B)))
_BLANKS += "\u2028\u2029\u202f\u205f\u3000"
# Joiners, marks of direction and the byte order mark: they stand at the ends of pasted texts.
_ENDS = _BLANKS + "\u200b\u200c\u200d\u200e\u2060\ufeff"

_LIMIT_SHAPES = (("≦⩽", "≤"), ("≧⩾", "≥"), ("⪅", "≲"), ("⪆", "≳"))
_PLAIN: dict[int, str] = {
    **{ord(blank): " " for blank in _BLANKS},
    **dict.fromkeys((0x2010, 0x2011, 0x2012, 0x2013, 0x2212), "-"),
    **{0xFF01 + offset: chr(0x21 + offset) for offset in range(94)},
    **{ord(sign): "~" for sign in "∼≃≅≈"},
    **{ord(sign): plain for signs, plain in _LIMIT_SHAPES for sign in signs},
    0x2019: "'",
}
# Fullwidth letters are no part of any number or unit; only digits and signs are made plain.
for _letter in (*range(0xFF21, 0xFF3B), *range(0xFF41, 0xFF5B)):
    del _PLAIN[_letter]

_TEX = re.compile(
    r"\\(?:(?:(pm)|(times|cdot)|(sim|simeq|approx)|(lesssim)|(gtrsim)|(leq?)|(geq?))(?![A-Za-z])"
    r"|([,;: ]))"
)
_HAS_TEX = re.compile(r"[±×~≲≳≤≥]|[\^_][{+-]")
_TEX_SIGNS = ("±", "×", "~", "≲", "≳", "≤", "≥", " ")

_SILENT = frozenset(
    ("", "-", "--", "---", "—", "——", "...", "…", "n/a", "na", "n.a.", "none", "null", "nan", "nil")
)
_LISTED = frozenset(
    ("tbd", "tbc", "tba", "?", "??", "???", "x", "xx", "unknown", "pending", "missing", "no data")
)

_NAME = re.compile(r"([^\W\d][^=<>≤≥≲≳~±]*?) ?(=|(?=~? ?[<>≤≥≲≳]))")
_LIMIT = re.compile(r"(?:([≤≥≲≳]|[<>]=)|~ ?([<>])|([<>]) ?~|([<>])) ?(?![<>=≤≥≲≳~])")
_COMPARING = frozenset("<>=≤≥≲≳")
_LIMIT_SIGNS = {"<=": "≤", ">=": "≥"}
_ROUGH_LIMITS = {"<": "≲", ">": "≳"}
_ABOUT = re.compile(
    r"(?:~|(?:c\.|ca\.?|circa|approx\.?|approximately|about)(?=[ 0-9.,+-])) ?", re.IGNORECASE
)
_LEVEL = re.compile(
    r" ?\( ?[0-9.]+(?: ?σ| ?-?sigma| ?%(?: ?(?:CL|C\.L\.|confidence))?) ?\)\Z", re.IGNORECASE
)
# Not the brackets of an exponent or of a unit such as km/(s Mpc).
_BRACKET = re.compile(r" ?(?<![\^_/])[(\[]([^()\[\]]*)[)\]]")
_FLAG = re.compile(r" ?(?:(\?\??|::?|\(\?\))|[*†‡§¶]{1,3})\Z")
# A superscript is a footnote mark behind a decimal fraction; elsewhere it may be a power, and in
# "2.10³" the point may be a sign of multiplication.
_RAISED = re.compile(r"(?<=[.,])(?!10[¹²³⁰⁴-⁹])([0-9]+)[¹²³⁰⁴-⁹]{1,2}\Z")


def made_plain(text: str) -> str:
    """Return the text with plain blanks, dashes and signs, and none at its ends."""
    text = text.strip(_ENDS).translate(_PLAIN)
    if "\\" in text:
        text = _TEX.sub(lambda found: _TEX_SIGNS[(found.lastindex or 1) - 1], text)
    dollars = text.count("$")
    if dollars == 2 and (_HAS_TEX.search(text) or text[0] == text[-1] == "$"):
        text = text.replace("$", "")
    return " ".join(text.split())


def word_for_none(text: str, plain: str) -> NoValue | None:
    """Return a text as the word for "no value" that it is, or None; `plain` is it made plain."""
    word = plain.casefold()
    if word in _SILENT or word in _LISTED:
        return NoValue(text.strip(_ENDS), word in _LISTED)
    return None


def without_notes(plain: str) -> str:
    """Return a text, made plain, without the notes in brackets behind its first digit."""
    digit = re.search("[0-9]", plain)
    if digit is None:
        return plain
    start = digit.start()
    return plain[:start] + _BRACKET.sub(_note_or_not, plain[start:])


def _note_or_not(found: re.Match[str]) -> str:
    """Return a bracket that is no note as it is: an error, a unit, a flag, a level."""
    inner = found[1].strip()
    is_unit = len(inner) > 1 and find_unit(inner) is not None
    kept = inner[:1] in ("+", "-", "±", "?") or is_unit or _LEVEL.search(f"({inner})")
    return found.group() if kept else ""


@dataclass
class Marked:
    """A text without the marks around its value.

    Attributes:
        body: what is left of it.
        name: the quantity that it names, "" for none.
        limit: one of < > ≤ ≥ ≲ ≳, "" for none.
        remarks: what the marks say.
    """

    body: str
    name: str = ""
    limit: str = ""
    remarks: set[Remark] = field(default_factory=set)


def without_marks(plain: str) -> Marked:
    """Return a text, made plain, without name, limit, flags and footnote marks."""
    found = Marked(plain)
    _take_front(found)
    _take_end(found)
    return found


def _take_front(found: Marked) -> None:
    body = found.body
    if body[:1] == "'" and body[1:2].strip("0123456789.,+-") == "" and len(body) > 1:
        body = body[1:]
        found.remarks.add(Remark.TEXT_MARK)
    named = _NAME.match(body)
    if named is not None:
        found.name = named[1]
        found.remarks.add(Remark.NAMED)
        body = body[named.end() :].lstrip()
    limit = _LIMIT.match(body)
    if named is not None and named[2] and body[:1] in _COMPARING:
        body = named[2] + body  # "z => 6" is no limit that is known
    elif limit is not None:
        exact, before, behind, plain = limit.groups()
        rough = before or behind
        found.limit = _ROUGH_LIMITS[rough] if rough else plain or _LIMIT_SIGNS.get(exact, exact)
        body = body[limit.end() :]
    else:
        about = _ABOUT.match(body)
        # "z ~ 7" is prose: a name takes =.
        if about is not None and (named is None or named[2]):
            found.remarks.add(Remark.APPROXIMATE)
            body = body[about.end() :]
    found.body = body


def _take_end(found: Marked) -> None:
    body = found.body
    while body:
        level = _LEVEL.search(body)
        flag = _FLAG.search(body)
        raised = _RAISED.search(body)
        if level is not None:
            found.remarks.add(Remark.LEVEL)
            body = body[: level.start()]
        elif flag is not None:
            found.remarks.add(Remark.UNCERTAIN if flag[1] else Remark.FOOTNOTE)
            body = body[: flag.start()]
        elif raised is not None:
            found.remarks.add(Remark.FOOTNOTE)
            body = body[: raised.end(1)]
        else:
            break
    found.body = body
