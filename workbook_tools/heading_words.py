"""Plain lines of what people, spreadsheets and typesetting make of a heading.

One line, one spelling of each sign: superscripts as `^-1`, subscripts as `_0`, one minus, one mu,
letters of mathematical and full-width alphabets as letters. Nothing is folded that tells two
headings apart: case stays, and so do superscripts (`10³` never becomes `103`).
"""

from __future__ import annotations

import re
import unicodedata

_SUPERSCRIPTS = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻", "0123456789+-")
# Unicode has no subscript capitals; small capitals are what people take for them.
_SUBSCRIPTS = str.maketrans("₀₁₂₃₄₅₆₇₈₉₊₋ₐₑₕₖₗₘₙₒₚₛₜₓᴀʙᴄᴅᴇʜʟᴍ", "0123456789+-aehklmnopstxABCDEHLM")
_SUPERSCRIPT = re.compile("[⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻]+")
_SUBSCRIPT = re.compile("[₀-₉₊₋ₐₑₕₖₗₘₙₒₚₛₜₓᴀʙᴄᴅᴇʜʟᴍ]+")
_INVISIBLE = dict.fromkeys(map(ord, "\u00ad\u200b\u200c\u200d\u2060\ufeff"), "")
_DASHES = dict.fromkeys(map(ord, "‐‑‒–—−﹣"), "-")
_ONE_SIGN = str.maketrans({"μ": "µ", "∕": "/", "⁄": "/", "⋅": "·", "∙": "·", "Å": "Å", "’": "'"})
_TYPESET = {
    r"\mu": "µ",
    r"\sigma": "σ",
    r"\Delta": "Δ",
    r"\delta": "δ",
    r"\alpha": "α",
    r"\pm": "±",
    r"\times": "×",
    r"\odot": "sun",
    r"\log": "log",
    r"\ln": "ln",
    r"\,": " ",
}
_COMMAND = re.compile(r"\\(?:[A-Za-z]+ ?|,)")
_TYPESET_MARKS = re.compile(r"[${}]")
# Signs that refer to a note below the table; an asterisk also after a word, where it is no product.
_NOTE_MARKS = re.compile(r"(?<=[\w\])])[*†‡§¶:]+$|(?<=[\])])\^\d$")

# A longer text is a remark and no heading.
LONGEST_HEADING = 100


def plain_line(text: str) -> str:
    """Return a heading as one line in which each sign is written in one way.

    Line breaks and runs of blanks become one blank; invisible signs, typesetting and marks that
    refer to notes are dropped. A text that is too long for a heading only loses its line breaks.
    """
    line = text.translate(_INVISIBLE) if len(text) < 10 * LONGEST_HEADING else text
    line = " ".join(line.split())
    if len(line) > 2 * LONGEST_HEADING:
        return line
    if not line.isascii():
        line = "".join(map(_ordinary, line))
        line = _SUPERSCRIPT.sub(_raised, line)
        line = _SUBSCRIPT.sub(_lowered, line).translate(_DASHES).translate(_ONE_SIGN)
    if "$" in line or "{" in line:
        line = _COMMAND.sub(lambda command: _TYPESET.get(command[0].strip(), ""), line)
        line = _TYPESET_MARKS.sub("", line)
    line = " ".join(line.split())
    return _NOTE_MARKS.sub("", line).rstrip()


def without_brackets(text: str) -> str:
    """Return a text without blanks and without one pair of brackets around the whole of it."""
    inner = text.strip()
    if len(inner) > 1 and inner[0] + inner[-1] in ("()", "[]"):
        depth = 0
        for position, sign in enumerate(inner):
            depth += (sign in "([") - (sign in ")]")
            if depth == 0:
                return inner[1:-1].strip() if position == len(inner) - 1 else inner
    return inner


def _ordinary(sign: str) -> str:
    """Return a letter of a mathematical or full-width alphabet as a plain one."""
    if "\U0001d400" <= sign <= "\U0001d7ff" or "\uff01" <= sign <= "\uff5e" or sign == "ℎ":
        return unicodedata.normalize("NFKC", sign)
    return sign


def _raised(run: re.Match[str]) -> str:
    return "^" + run[0].translate(_SUPERSCRIPTS)


def _lowered(run: re.Match[str]) -> str:
    joined = run.start() == 0 or run.string[run.start() - 1] == "_"
    return ("" if joined else "_") + run[0].translate(_SUBSCRIPTS)
