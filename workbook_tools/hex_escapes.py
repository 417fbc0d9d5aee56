"""Characters that XML cannot hold, written as `_xHHHH_` (ECMA-376 part 1, 22.9.2.19 ST_Xstring)."""

from __future__ import annotations

import re

_ESCAPE = re.compile(r"_x([0-9A-Fa-f]{4})_")
# what XML 1.0 forbids (clause 2.2), and a carriage return, which parsers turn into a line feed
_FORBIDDEN = "\\x00-\\x08\\x0b-\\x1f\ud800-\udfff\ufffe\uffff"
_TO_ESCAPE = re.compile(
    # also an underscore that would begin an escape, be the closing one typed or ours
    f"[{_FORBIDDEN}]|_(?=x[0-9A-Fa-f]{{4}}[_{_FORBIDDEN}])"
)


def decoded(text: str) -> str:
    """Return the text that is meant: `_x000D_` is a carriage return, `_x005F_` an underscore."""
    if "_x" not in text:
        return text
    plain = _ESCAPE.sub(lambda match: chr(int(match[1], 16)), text)
    if not any("\ud800" <= character <= "\udfff" for character in plain):
        return plain
    # two escapes may stand for the halves of one character beyond the first 65,536
    return plain.encode("utf-16", "surrogatepass").decode("utf-16", "replace")


def encoded(text: str) -> str:
    """Return the text as it is written; `decoded` gives it back."""
    return _TO_ESCAPE.sub(lambda match: f"_x{ord(match[0]):04X}_", text)
