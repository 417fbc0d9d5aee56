"""What one column heading means: a measure and its unit, a doubt with its remedy, or none of ours.

Nothing is guessed: the kind of a distance, a time or a velocity stands in the heading, or the
heading is unclear. What else stands in the row decides nothing here (see `header_rows`).
"""

from __future__ import annotations

import functools
import re
from collections.abc import Iterator
from dataclasses import replace

from epochconv.measure import Measure
from epochconv.registry import measures
from epochconv.units import Unit, unit_named
from workbook_tools.cell_address import column_letters
from workbook_tools.column_meanings import Heading, Meaning, Role, unclear
from workbook_tools.heading_doubts import (
    DISTANCE,
    VELOCITY,
    Doubt,
    age_of_something,
    doubt_about,
    is_far_distance,
    is_z_magnitude,
    measured_directly,
    transformed,
)
from workbook_tools.heading_forms import TWO_SLASHES, Split, splits
from workbook_tools.heading_names import Name, read_name
from workbook_tools.heading_units import (
    LOGARITHM,
    PER_CENT,
    POWER_OF_TEN,
    UnitPart,
    is_like_a_unit,
    read_unit,
    says_no_unit,
)
from workbook_tools.heading_words import LONGEST_HEADING, plain_line

_BELOW = "in the row below"
_WITH_NUMBER_UNIT = ("in brackets", "after a slash", _BELOW)
_COMOVING = ("comoving distance", "transverse comoving distance")


def read_heading(text: str) -> Heading | None:
    """Return what a heading says by itself, or None where it is not one of ours."""
    return meaning_of(text).heading


def lacks_unit(text: str) -> Measure | None:
    """Return the measure that a heading names without the unit that it needs, None otherwise."""
    line = plain_line(text)
    name = read_name(line) if 1 < len(line) <= LONGEST_HEADING else None
    if name is None or name.unknown or unit_named(name.measure.unit).dimension == "number":
        return None
    return name.measure


def same_heading(first: str, second: str) -> bool:
    """Tell whether two headings are the same but for white space and capitals."""
    return " ".join(first.split()).casefold() == " ".join(second.split()).casefold()


def meaning_of(text: str, below: str = "", column: int | None = None) -> Meaning:
    """Return what a heading means by itself: a VALUE, UNCLEAR or OTHER.

    Args:
        text: the heading, line breaks and all.
        below: what stands under it in the row of units; there a unit wholly in square brackets says
            that the column holds logarithms.
        column: counted from 1, for the remedy that a reason names.
    """
    return _meaning_of(text, below, column, len(measures()))


@functools.lru_cache(maxsize=4096)
def _meaning_of(text: str, below: str, column: int | None, registered: int) -> Meaning:
    line = _AND_ERROR.sub("", plain_line(text))
    if not line or len(line) > LONGEST_HEADING:
        return Meaning(Role.OTHER)
    judge = _Judge(text, line, column)
    return judge.whole() or judge.parted(plain_line(below)) or Meaning(Role.OTHER)


def insist(column: int | None, as_text: str) -> str:
    """Return how to have a column taken for what its heading does not say."""
    letters = "" if column is None else column_letters(column)
    source = f"{letters}:{letters}" if letters else "and"
    return f"insist with --source {source} --as '{as_text}'"


class _Judge:
    """Weighs the ways to read one heading; a certain reading wins, then the first doubt."""

    def __init__(self, text: str, line: str, column: int | None) -> None:
        self.text = " ".join(text.split())
        self.line = line
        self.column = column

    def whole(self) -> Meaning | None:
        """Return what the heading as a whole gives away, whatever its parts say."""
        if is_z_magnitude(self.line):
            return Meaning(Role.OTHER, why="the photometric z band")
        function = transformed(self.line)
        if function:
            return unclear(_TRANSFORMED[function])
        word = age_of_something(self.line)
        if word:
            return Meaning(Role.OTHER, why=f"{word!r} makes it no age of the universe")
        word = measured_directly(self.line)
        if word:
            is_modulus = any(read_unit(s.unit) == _MAGNITUDES for s in splits(self.line))
            as_text = "distance modulus [mag]" if is_modulus else "luminosity distance [Mpc]"
            return unclear(
                f"{word!r} says that it was measured without a redshift, and such a distance is not"
                f" turned into an epoch unasked; {insist(self.column, as_text)}"
            )
        return None

    def parted(self, below: str) -> Meaning | None:
        """Return the best reading of the heading with its unit in it or below it."""
        doubts = []
        for meaning in self._readings(below):
            if meaning.role is Role.VALUE:
                return meaning
            doubts.append(meaning)
        return doubts[0] if doubts else self._with_unknown_words()

    def _readings(self, below: str) -> Iterator[Meaning]:
        ways = list(splits(self.line))
        if not says_no_unit(below):
            inner = below.strip("() ")
            logarithm = below.startswith("[") and below.endswith("]")
            ways = [Split(self.line, inner.strip("[]"), _BELOW, sure=True)]
            own = meaning_of(self.text)
            if own.heading is not None and own.heading.name != self.line:
                yield self._both_units(own, read_unit(inner), below)
                return
            if logarithm and read_unit(ways[0].unit) is not None:
                if self._is_ours():
                    yield unclear(
                        f"a units row that says {below} means log10 of the value; take the brackets"
                        " away if it does not, or add a column with the value itself"
                    )
                return
        else:
            bare = self._bare()
            if bare is not None:
                yield bare
        for way in ways:
            meaning = self._part(way)
            if meaning is not None:
                yield meaning

    def _is_ours(self) -> bool:
        return read_name(self.line, "length") is not None or doubt_about(self.line) is not None

    def _both_units(self, own: Meaning, below: UnitPart | None, shown: str) -> Meaning:
        heading = own.heading
        assert heading is not None
        if below is not None and (below.unit, below.h_power) == (heading.unit, heading.h_power):
            return own
        return unclear(
            f"the heading says {heading.unit.symbol or 'no unit'} and the row below it {shown};"
            " leave the one that is true"
        )

    def _bare(self) -> Meaning | None:
        """Return what the heading means if no part of it is a unit."""
        doubt = doubt_about(self.line)
        if doubt is not None and "" in doubt.dimensions:
            return self._doubted(doubt, None)
        name = read_name(self.line)
        if name is None or name.unknown or doubt is not None or name.called == "a":
            return None
        own = unit_named(name.measure.unit)
        if own.dimension == "number":
            return self._value(name, own, self.line, "which has no unit")
        return unclear(
            f"{name.measure.name} without a unit; write '{self.line} [{name.measure.unit}]'"
        )

    def _with_unknown_words(self) -> Meaning | None:
        """Return a doubt where a measure without a unit has words around it that are not known."""
        name = read_name(self.line)
        if name is None or not name.unknown or name.measure.unit:
            return None
        if len(name.called) < 2 and not _Z_WITH.match(self.line):
            return None
        if any(way.sure and is_like_a_unit(way.unit) for way in splits(self.line)):
            return None
        return self._strange(name, "")

    def _part(self, way: Split) -> Meaning | None:
        part = read_unit(way.unit)
        if part is None:
            return self._no_unit(way)
        if part.problem:
            return self._unusable(way, part)
        dimension = "velocity" if part.unit is None else part.unit.dimension
        if dimension == "number" and way.form not in _WITH_NUMBER_UNIT:
            return None
        name, doubt = read_name(way.name, dimension), doubt_about(way.name)
        if doubt is not None and dimension in doubt.dimensions:
            return self._doubted(doubt, part)
        if name is not None:
            own = unit_named(name.measure.unit)
            if part.unit is not None and own.dimension == dimension:
                return self._fitting(way, name, part)
            if name.measure.name == "redshift" and part.velocity and not name.unknown:
                return unclear(VELOCITY.remark)
        strange = name is None or name.unknown
        if strange and part.unit is not None and is_far_distance(way.name, part.unit.symbol):
            return self._doubted(DISTANCE, part)
        if name is None or name.unknown or not way.sure or len(way.name) < 3:
            return None
        if not name.measure.unit:
            return unclear(f"{name.measure.name} has no unit, and {way.unit} is one")
        remedy = f"write '{way.name} [{name.measure.unit}]'"
        return unclear(f"{way.unit} is no unit of {name.measure.name}; {remedy}")

    def _no_unit(self, way: Split) -> Meaning | None:
        """Return the doubt about a heading with something else where a unit would stand."""
        name = read_name(way.name) if way.sure else None
        if name is None or name.unknown:
            return None
        if way.form.startswith("after a slash"):
            if len(way.name) < 2 and way.name != "z":
                return None
            return unclear(
                f"{way.unit!r} is no unit that is known here, so it names two things; name one"
            )
        if len(way.name) < 3 or name.measure.unit == "" or read_name(way.unit) is not None:
            return None
        return unclear(f"{way.unit!r} is no unit that is known here; write [{name.measure.unit}]")

    def _unusable(self, way: Split, part: UnitPart) -> Meaning | None:
        """Return the doubt about a unit that is recognised but not taken."""
        if not way.sure and part.problem in (POWER_OF_TEN, PER_CENT, LOGARITHM):
            return None
        ours = read_name(way.name, "length") is not None or doubt_about(way.name) is not None
        letter = len(way.name) == 1 and way.name != "z" and part.problem == PER_CENT
        return unclear(part.problem) if ours and not letter else None

    def _fitting(self, way: Split, name: Name, part: UnitPart) -> Meaning | None:
        """Return the value, or what stands against it, where the unit fits the measure."""
        unit = part.unit
        assert unit is not None
        if name.unknown:
            return self._strange(name, unit.symbol)
        if way.name == "t" and unit.symbol in ("s", "d", "yr"):
            return None
        if way.name.lower() == "age" and unit.symbol in ("s", "d"):
            return unclear(
                f"an age in {unit.symbol} is that of a source rather than of the universe; write"
                f" 'age of the universe [{unit.symbol}]' if it is not"
            )
        if part.comoving and name.measure.name not in _COMOVING:
            return unclear(f"{way.unit} is a comoving length and no {name.measure.name}")
        if part.h_power and way.form == TWO_SLASHES:
            return unclear(
                f"with two slashes it may be the value times h or over h; write"
                f" '{way.name} [h^-1 {unit.symbol}]'"
            )
        meaning = self._value(name, unit, way.name, way.form)
        assert meaning.heading is not None
        return replace(meaning, heading=replace(meaning.heading, h_power=part.h_power))

    def _value(self, name: Name, unit: Unit, shown: str, form: str) -> Meaning:
        heading = Heading(
            name.measure, unit, self.text, frame=name.frame, method=name.method, name=shown
        )
        why = f"name {shown!r}"
        if unit.symbol:
            why += f", unit {unit.symbol} {form}"
        return Meaning(Role.VALUE, heading, why=why)

    def _strange(self, name: Name, unit: str) -> Meaning:
        words = " ".join(name.unknown)
        as_text = f"{name.measure.name} [{unit}]" if unit else name.measure.name
        return unclear(
            f"{words!r} beside {name.measure.name} is not known here; name the column"
            f" '{as_text}', or {insist(self.column, as_text)}"
        )

    def _doubted(self, doubt: Doubt, part: UnitPart | None) -> Meaning:
        if doubt.remark:
            return unclear(doubt.remark)
        first = read_name(doubt.could_be[0])
        as_text = doubt.could_be[0]
        if first is not None and first.unknown:
            first = None
        if first is not None and first.measure.unit:
            unit = part.unit if part is not None and part.unit is not None else None
            own = unit_named(first.measure.unit)
            fitting = unit if unit is not None and unit.dimension == own.dimension else own
            h = "h^-1 " if part is not None and part.h_power else ""
            as_text += f" [{h}{fitting.symbol}]"
        listed = ", ".join(doubt.could_be[:-1]) + f" or {doubt.could_be[-1]}"
        remedy = "name it in the heading"
        if first is not None:
            remedy += f", or {insist(self.column, as_text)}"
        return unclear(f"could be {listed}: {remedy}")


# The cells of `z ± σ` hold values, each with its error.
_AND_ERROR = re.compile(
    r"(?<=\S) ?(?:±|\+/-|\+-) ?(?:1?σ|1-?sigma|err(?:or)?|unc(?:ertainty)?|[σΔδ]_?[A-Za-z]\w*)\b"
)
# A `z` with a word so attached to it is a redshift of some sort; with others it may be anything.
_Z_WITH = re.compile(r"z ?[_(\[]")
_MAGNITUDES = read_unit("mag")
_TRANSFORMED = {
    "log": LOGARITHM,
    "1+z": "it holds 1+z and not z, which is not converted; add a column with the redshift",
    "multiplied": POWER_OF_TEN,
}
