"""The forms in which people part a heading into a name and a unit.

name [unit]   name (unit)   name / unit   name, unit   name - unit   name in unit
name_unit     name unit     nameUnit
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass

from workbook_tools.heading_words import without_brackets

_BRACKET = re.compile(r"\[(?P<square>[^\[\]]*)\]|\((?P<round>(?:[^()]|\([^()]*\))*)\)")
_RUN_TOGETHER = re.compile(r"(?P<name>.*[A-Za-zµ)])(?P<unit>[kMG](?:pc|yr|ly|lyr))")

# Whatever follows the second slash may divide the unit or the whole.
TWO_SLASHES = "after a slash, with another one in it"


@dataclass(frozen=True)
class Split:
    """One way to part a heading.

    Attributes:
        name: what stands outside the unit part.
        unit: the unit part, without brackets.
        form: how the unit is attached, in words: "in brackets".
        sure: whether the form itself says that the second part is a unit or a remark; otherwise
            it may just as well be a word of the name.
    """

    name: str
    unit: str
    form: str
    sure: bool


def splits(line: str) -> Iterator[Split]:
    """Yield the ways to part a plain line, the most explicit first."""
    yield from _bracketed(line)
    yield from _at_slashes(line)
    for sign, form in ((",", "after a comma"), (" - ", "after a dash"), (" in ", "after 'in'")):
        name, found, unit = line.rpartition(sign)
        if found:
            yield Split(name.strip(), without_brackets(unit), form, sure=sign == ",")
    for sign, form in (("_", "after an underscore"), (" ", "after the name")):
        for position, letter in enumerate(line):
            if letter == sign:
                yield Split(line[:position].strip(), line[position + 1 :].strip(), form, sure=False)
    together = _RUN_TOGETHER.fullmatch(line)
    if together is not None:
        yield Split(together["name"], together["unit"], "run together with the name", sure=False)


def _bracketed(line: str) -> Iterator[Split]:
    """Yield each bracket of a line as the unit, the last one first, the rest being the name."""
    for match in reversed(list(_BRACKET.finditer(line))):
        inner = match["square"] if match["square"] is not None else match["round"]
        before, after = line[: match.start()].rstrip(), line[match.end() :].lstrip()
        if before and not before.endswith(("/", "[", "(")):
            yield Split(f"{before} {after}".strip(), inner.strip(), "in brackets", sure=True)


def _at_slashes(line: str) -> Iterator[Split]:
    """Yield the parts around each slash outside brackets, from the left."""
    hidden = _BRACKET.sub(lambda bracket: "x" * len(bracket[0]), line)
    for position, sign in enumerate(hidden):
        if sign == "/" and line[:position].strip():
            unit = line[position + 1 :].strip()
            form = TWO_SLASHES if "/" in hidden[position + 1 :] else "after a slash"
            yield Split(line[:position].strip(), without_brackets(unit), form, sure=True)
