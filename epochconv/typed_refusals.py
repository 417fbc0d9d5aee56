"""Why a typed text is not read: the first cause that fits, the plainest ones first."""

from __future__ import annotations

import re
import unicodedata

from epochconv.typed_outcomes import Reason
from epochconv.units import find_unit

_N = r"[+-]?[0-9.,]*[0-9][.,]?(?:[eE][+-]?[0-9]+)?"
_U = r"(?: ?[^\W\d]+)?"

_FORMULA_ERROR = re.compile(
    r"#(?:N/A|REF!|DIV/0!|VALUE!|NAME\?|NULL!|NUM!|SPILL!|CALC!|GETTING_DATA)"
)
_FRACTION = re.compile("[¼-¾⅐-⅞↉]")

# Tried in this order on a text made plain and without its name.
_CAUSES: tuple[tuple[Reason, re.Pattern[str]], ...] = tuple(
    (reason, re.compile(pattern))
    for reason, pattern in (
        (Reason.CHANGE, rf"{_N}{_U} ?(?:→|⇒|➔|[-=]+>) ?{_N}"),
        (Reason.DATE_OR_TIME, r"[0-9]{4}-[0-9]{1,2}-[0-9]{1,2}|[0-9]{1,2}-[0-9]{1,2}-[0-9]{2,4}\Z"),
        (Reason.DATE_OR_TIME, r"[0-9]{1,4}/[0-9]{1,2}/[0-9]{1,4}|[0-9]{1,2}\.[0-9]{1,2}\.[0-9]{4}"),
        (Reason.DATE_OR_TIME, r"[+-]?[0-9]{1,3} ?(?::[0-9]{2}|[°h] ?[0-9])"),
        (Reason.POINTS, r"[+-]?[0-9]*\.[0-9]+\.[0-9]"),
        (Reason.FORTRAN, r"[+-]?[0-9.]+[dD][+-]?[0-9]+\Z"),
        (Reason.ERROR_ALONE, rf"± ?{_N}|\+{_N} ?[,/;]? ?-{_N}\Z|-{_N} ?[,/;]? ?\+{_N}\Z"),
        (Reason.ONE_ERROR, rf"{_N}{_U}(?: ?\+ ?| -)[0-9.,]+{_U}\Z"),
        (Reason.RANGE, rf"{_N}{_U} ?(?:-|—|~|\.\.\.?|…|to\b) ?{_N}{_U}\Z"),
        (Reason.RANGE, rf"{_N} ?[<≤>≥]=? ?[^\W\d]\w* ?[<≤>≥]=? ?{_N}"),
        (Reason.RANGE, rf"{_N}{_U} ?(?:[,;&]|and\b) ?[<≤>≥]=? ?{_N}"),
        (Reason.CANDIDATES, rf"{_N}{_U} ?(?:/|;|, |\||&|or\b|and\b) ?{_N}"),
        (Reason.CANDIDATES, r"[+-]?[0-9]*\.[0-9]+,[0-9]*\.[0-9]"),
        (Reason.TWO_ERRORS, r".*(?:±.*±|\([0-9.]+\)\([0-9.]+\))"),
        (Reason.TWO_ERRORS, rf"{_N}{_U} ?(?:\+ ?{_N} ?[,/;]? ?\+|- ?{_N} ?[,/;]? ?-)"),
        (Reason.NO_ERROR, r".*± ?(?:[?—…-]+|\.\.\.|[Nn]/?[Aa]\b.*)?\Z"),
        (Reason.LIMIT_SIGN, r"(?:[<>=≤≥≲≳~]{2,}|[≪≫≠]|!=)"),
        (Reason.SIGNS, r"[+-][ +-]|.*[<>+-]\Z|.*± ?[+-]"),
        (Reason.POWER, r"[+-]?[0-9.]+ ?[×xX*·⋅] ?10 ?[0-9]+\Z"),
        (Reason.TWO_NUMBERS, rf"{_N}{_U}(?: {_N}{_U})+\Z"),
        (Reason.POWER_OR_NOTE, r"[+-]?[0-9]+(?:\.10)?[⁺⁻]?[⁰¹²³⁴-⁹]+\Z"),
        (Reason.BRACKETED, rf"[(\[] ?{_N}{_U} ?[)\]]|[(\[].*[)\]]\Z"),
        (Reason.BRACKET, rf"{_N}.*[(\[].*[)\]]"),
        (Reason.LETTER, r"[+-]?[0-9.]+ ?\^?[A-Za-zªº]\Z"),
    )
)
_SUPERSCRIPTS = "⁺⁻⁰¹²³⁴-⁹"
_BEHIND = re.compile(rf"{_N} ?(?![eE] ?[+-]?[0-9])([^\W\d_{_SUPERSCRIPTS}].*)")
_POWER_MARKS = re.compile(rf"[0-9^{_SUPERSCRIPTS}]")
_WORD = re.compile(r"[A-Za-zµμ]+")


def reason_for(text: str, body: str) -> Reason:
    """Return why a text is not read.

    Args:
        text: made plain.
        body: the same without the marks that are understood, and with ± for its other spellings.
    """
    early = _unreadable(text)
    if early is not None:
        return early
    for reason, pattern in _CAUSES:
        if pattern.match(body) is not None:
            return reason
    if body[:1].isalpha():
        return Reason.WORDS
    behind = _BEHIND.fullmatch(body)
    if behind is not None:
        return Reason.UNKNOWN_UNIT if _looks_like_unit(behind[1]) else Reason.WORDS
    has_words = any(len(word) > 1 and not _is_unit_word(word) for word in _WORD.findall(body))
    return Reason.WORDS if has_words else Reason.UNCLEAR


def may_group_thousands(text: str, mark: str) -> bool:
    """Tell whether each such mark may stand before a group of three digits."""
    groups = re.findall(rf"(?<![0-9.,])[1-9][0-9]{{0,2}}[{mark}][0-9]{{3}}(?![0-9.,])", text)
    return len(groups) == text.count(mark) > 0


def _unreadable(text: str) -> Reason | None:
    """Return why no number can be looked for in a text."""
    if _FORMULA_ERROR.fullmatch(text) is not None:
        return Reason.FORMULA_ERROR
    if any(unicodedata.category(sign) in ("Cc", "Cf", "Cs", "Co", "Cn") for sign in text):
        return Reason.INVISIBLE
    if any(sign.isdecimal() and not sign.isascii() for sign in text):
        return Reason.OTHER_DIGITS
    if _FRACTION.search(text) is not None:
        return Reason.FRACTION
    if not any(sign.isdecimal() for sign in text):
        return Reason.NO_NUMBER
    return None


def _looks_like_unit(text: str) -> bool:
    """Tell a unit that is not in the table ("mpc", "km s-1") from words ("phot", "Gyr ago")."""
    if " " in text:
        return all(_is_unit_word(part) or _POWER_MARKS.search(part) for part in text.split())
    return _is_unit_word(text) or "/" in text or any(sign.isupper() for sign in text[1:])


def _is_unit_word(text: str) -> bool:
    """Tell whether a text begins with a unit of the table, in any case of letters."""
    found = _WORD.match(text)
    if found is None:
        return False
    stem = found.group()
    return any(find_unit(form) for form in (stem, stem.lower(), stem.capitalize(), stem.upper()))
