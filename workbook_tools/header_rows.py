"""All headings of a sheet together: names, the units below them, groups above, neighbours.

A row of units is known by its cells; a row above the names holds groups. What a heading means by
itself is for `headings` to say; here it is completed by its group and its row of units, doubted
where its neighbours say that it is a photometric band, and tied to the column that it belongs to.
"""

from __future__ import annotations

import re
from collections.abc import Collection, Iterator, Mapping, Sequence

from workbook_tools.column_meanings import Meaning, Role, unclear
from workbook_tools.companion_names import companions_in
from workbook_tools.companions import Column, tie_companions
from workbook_tools.heading_doubts import age_of_something, measured_directly
from workbook_tools.heading_forms import splits
from workbook_tools.heading_units import is_like_a_unit, read_unit
from workbook_tools.heading_words import plain_line
from workbook_tools.headings import insist, meaning_of

_JUST_THE_VALUE = ("value", "values", "val", "best", "measured")
_PHOTOMETRY = re.compile(r"photometry|magnitudes?|mags?|bands?|filters?", re.IGNORECASE)
_BAND = re.compile(
    r"(?:m_)?(?P<band>[ugriyYJHKUBVRI]'?|K_?s|W[1-4]|[FN]UV|F[0-9]{3}[WMLN]P?)"
    r"(?:[ _]?(?:mag|band|AB|Vega))?(?: ?[\[(](?:mag|AB|Vega|AB mag|mag AB)[\])])?"
)
# The z band stands next to one of these; a z behind B and V, or behind H and K, is a redshift.
_NEXT_TO_Z = re.compile(r"[rRiIyYJ]'?|W1|F[0-9]{3}[WMLN]P?")


def read_headings(
    rows: Sequence[Mapping[int, str]], magnitudes: Collection[int] = ()
) -> dict[int, Meaning]:
    """Return what the columns of a sheet mean by their headings.

    Args:
        rows: the header rows from top to bottom, texts by column: names, or names and their units,
            or groups and names, or all three; a merged cell's text stands in each of its columns.
        magnitudes: columns whose numbers look like magnitudes; that decides nothing by itself.
    """
    names, below, above = _sorted_out(rows)
    columns = []
    for number in sorted({*names, *above, *below}):
        group, unit = plain_line(above.get(number, "")), below.get(number, "")
        text = names.get(number, "")
        if not text and not group:
            text, unit = unit, ""
        if not text.strip() or plain_line(text).lower() in _JUST_THE_VALUE:
            text, group = above.get(number, text), ""
        columns.append(_column(number, text, unit, group))
    _doubt_bands(columns, {c for c in above if _PHOTOMETRY.search(above[c])}, magnitudes)
    tie_companions(columns)
    return {column.number: column.meaning for column in columns}


def _sorted_out(
    rows: Sequence[Mapping[int, str]],
) -> tuple[Mapping[int, str], Mapping[int, str], Mapping[int, str]]:
    """Return the names, the units below them and the groups above them."""
    filled = [{c: text for c, text in row.items() if text.strip()} for row in rows]
    filled = [row for row in filled if row]
    below: Mapping[int, str] = {}
    if len(filled) > 1 and holds_units(filled[-1]):
        below = filled.pop()
    names = filled.pop() if filled else {}
    above: dict[int, str] = {}
    for row in filled:
        for column, text in row.items():
            above[column] = f"{above[column]} {text}" if column in above else text
    return names, below, above


def holds_units(row: Mapping[int, str]) -> bool:
    """Tell whether a row below the names holds their units.

    One short sign may be anything in the first row of a log, such as a night's K or an observer's;
    it takes a unit that is unmistakable, or two, or the mark `---` of catalogues beside it.
    """
    lines = [plain_line(text) for text in row.values()]
    if any(meaning_of(line).role in (Role.VALUE, Role.UNCLEAR) for line in lines):
        return False
    liked = [line for line in lines if is_like_a_unit(line)]
    named = [line for line in liked if any(letter.isalpha() for letter in line)]
    sure = any(read_unit(line.strip("()[] ")) is not None and len(line) > 1 for line in named)
    enough = sure or len(named) > 1 or (bool(named) and "---" in lines)
    return enough and 2 * len(liked) >= len(lines)


def _column(number: int, text: str, unit: str, group: str) -> Column:
    """Return a column with what its heading means by itself or under its group."""
    line = plain_line(text)
    lines: tuple[str, ...] = (line,)
    meaning = meaning_of(text, unit, number)
    if group:
        lines = (*_under_group(line, group), line)
        meaning = _grouped(meaning, lines, unit, number, f"{group} {line}")
    heading = meaning.heading
    name = heading.name if heading is not None else _name_part(line)
    possible = [one for each in lines for one in companions_in(each, plain_line(unit))]
    return Column(number, name, lines, meaning, possible)


def _under_group(line: str, group: str) -> Iterator[str]:
    """Yield the headings that a name and the group above it make together."""
    yield f"{group} {line}"
    if read_unit(group) is not None:
        yield f"{line} [{group}]"
    for way in splits(group):
        if way.sure and read_unit(way.unit) is not None:
            yield f"{line} {_singular(way.name)} [{way.unit}]"
            yield f"{line} [{way.unit}]"
    yield f"{line} {_singular(group)}"


def _grouped(
    alone: Meaning, lines: Sequence[str], unit: str, number: int, together: str
) -> Meaning:
    """Return the meaning of a name under its group, which may complete or contradict it."""
    if age_of_something(together) or measured_directly(together):
        return meaning_of(together, unit, number)
    if any(one.role is Role.ERROR and one.base for one in companions_in(lines[0])):
        return Meaning(Role.OTHER)
    best = alone
    for each in lines:
        meaning = meaning_of(each, unit, number)
        heading = meaning.heading
        if heading is None:
            continue
        if best.heading is None or (
            best.heading.measure == heading.measure
            and len(heading.frame + heading.method) > len(best.heading.frame + best.heading.method)
        ):
            best = meaning
    return best


def _singular(group: str) -> str:
    return re.sub(r"(?<=[a-z]{3})s\b", "", group)


def _name_part(line: str) -> str:
    """Return a heading of another kind without its unit, as companions name it."""
    for way in splits(line):
        if way.sure and way.form in ("in brackets", "after a slash") and is_like_a_unit(way.unit):
            return way.name
    return line


def _doubt_bands(
    columns: Sequence[Column], photometry: Collection[int], magnitudes: Collection[int]
) -> None:
    """Doubt a `z`, and drop an `H`, that stands among photometric bands."""
    main = [column for column in columns if column.is_value or not column.possible]
    bands = [_BAND.fullmatch(column.lines[-1]) for column in main]
    for position, column in enumerate(main):
        if column.lines[-1] not in ("z", "H"):
            continue
        before, behind = bands[:position][::-1], bands[position + 1 :]
        if column.lines[-1] == "H":
            if any(before[:1] + behind[:1]):
                column.meaning = Meaning(Role.OTHER, why="the H band, among others")
            continue
        beside = _run(before) + _run(behind)
        beside += (column.number in photometry) * 2 + (column.number in magnitudes and beside > 0)
        if column.is_value and beside > 1:
            column.meaning = unclear(
                "stands among photometric bands, so it could be the z band: name it 'redshift', or"
                f" {insist(column.number, 'redshift')}"
            )


def _run(bands: Sequence[re.Match[str] | None]) -> int:
    """Return how many bands follow one another from the start, none if the first is far from z."""
    if not bands or bands[0] is None or not _NEXT_TO_Z.fullmatch(bands[0]["band"]):
        return 0
    return next((n for n, band in enumerate(bands) if band is None), len(bands))
