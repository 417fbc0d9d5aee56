"""Headings of any sort: none raises, what is well formed is read, what does not matter does not."""

from __future__ import annotations

import re

from hypothesis import given
from hypothesis import strategies as st

from epochconv.measure import Measure
from epochconv.registry import measures
from epochconv.units import TABLE, Unit, unit_named
from workbook_tools.column_meanings import Meaning, Role
from workbook_tools.header_rows import read_headings
from workbook_tools.headings import read_heading, same_heading

FORMS = (
    "{name} [{unit}]",
    "{name} ({unit})",
    "{name}[{unit}]",
    "{name}({unit})",
    "{name} / {unit}",
    "{name}/{unit}",
    "{name} / ({unit})",
    "{name}, {unit}",
    "{name} – {unit}",
    "{name} in {unit}",
    "{name}_{unit}",
    "{name} {unit}",
)
NO_UNIT_FORMS = ("{name}", "{name} [-]", "{name} (1)", "{name} [dimensionless]")
BLANKS = (" ", "  ", "\n", "\u00a0", "\u2009", " \u200b", "\r\n", "\t")
# An exposure time, and the age of a source, are in such units; conventions 1.5.
OF_SOMETHING_ELSE = {"t": ("s", "d", "yr"), "age": ("s", "d"), "Age": ("s", "d"), "AGE": ("s", "d")}
COMPANIONS = {
    "e_{}": Role.ERROR,
    "{}_err": Role.ERROR,
    "{} error": Role.ERROR,
    "error of {}": Role.ERROR,
    "σ_{}": Role.ERROR,
    "± {}": Role.ERROR,
    "upper error of {}": Role.UPPER_ERROR,
    "{} error (lower)": Role.LOWER_ERROR,
    "l_{}": Role.LIMIT_FLAG,
    "q_{}": Role.CARRIED,
    "n_{}": Role.CARRIED,
}
BAND_NAMES = "u g r i y Y J K Ks B V R I W1 F814W"
SIGNS = "z a t T D H Z µ ± σ + − - _ [ ] ( ) / , 1 0 10³ h ⁻¹ e_ E_ l_ x_ log 1+z"
WORDS = "Gyr Mpc mpc K mag km/s h⁻¹ redshift Age distance comoving time host CMB phot err"
PIECES = (*SIGNS.split(), *WORDS.split(), *BLANKS)


@st.composite
def written(draw: st.DrawFn) -> tuple[str, Measure, Unit]:
    """A well-formed heading, with the measure and unit that it says."""
    measure = draw(st.sampled_from(measures()))
    own = unit_named(measure.unit)
    is_name = draw(st.booleans())
    name = draw(st.sampled_from((measure.name, *measure.aliases))) if is_name else measure.symbol
    if is_name:
        name = draw(st.sampled_from((name, name.capitalize(), name.upper())))
    unit = draw(st.sampled_from([unit for unit in TABLE if unit.dimension == own.dimension]))
    if own.dimension == "number":
        forms = NO_UNIT_FORMS[1:] if name == "a" else NO_UNIT_FORMS
        return draw(st.sampled_from(forms)).format(name=name), measure, own
    if unit.symbol in OF_SOMETHING_ELSE.get(name, ()):
        unit = own
    spelling = draw(st.sampled_from((unit.symbol, *unit.spellings)))
    form = draw(st.sampled_from(FORMS))
    return form.format(name=name, unit=spelling), measure, unit


# From nonsense to what nearly is a heading.
TEXTS = st.one_of(st.text(max_size=30), st.lists(st.sampled_from(PIECES), max_size=8).map("".join))


@given(written())
def test_well_formed_heading_is_read(case: tuple[str, Measure, Unit]) -> None:
    text, measure, unit = case
    found = read_heading(text)
    assert found is not None
    assert (found.measure.name, found.unit, found.h_power) == (measure.name, unit, 0)
    assert same_heading(found.text, text)


@given(written(), st.lists(st.sampled_from(BLANKS), min_size=1, max_size=12))
def test_white_space_does_not_matter(case: tuple[str, Measure, Unit], blanks: list[str]) -> None:
    text, measure, unit = case
    spaced = "".join(
        blanks[position % len(blanks)] if sign == " " else sign
        for position, sign in enumerate(f" {text} ")
    )
    found = read_heading(spaced)
    assert found is not None
    assert (found.measure.name, found.unit) == (measure.name, unit)


@given(written())
def test_unit_in_a_row_below_says_the_same(case: tuple[str, Measure, Unit]) -> None:
    _, measure, unit = case
    if unit.symbol in OF_SOMETHING_ELSE.get(measure.name, ()):
        unit = unit_named(measure.unit)
    # The row's other cells make it one of units.
    names = {1: "Object", 2: "Exposure", 3: "Wavelength", 4: measure.name}
    units = {2: "min", 3: "nm", 4: f"({unit.symbol})" if unit.symbol else "---"}
    found = read_headings([names, units])[4].heading
    assert found is not None
    assert (found.measure.name, found.unit) == (measure.name, unit)


@given(written(), st.sampled_from(list(COMPANIONS)))
def test_companion_finds_its_column(case: tuple[str, Measure, Unit], form: str) -> None:
    text, _, _ = case
    heading = read_heading(text)
    assert heading is not None
    found = read_headings([{2: text, 5: form.format(heading.name)}])
    assert found[2].role is Role.VALUE
    assert (found[5].role, found[5].owner) == (COMPANIONS[form], 2)
    assert found[5].of == heading.name


@given(st.lists(st.dictionaries(st.integers(1, 8), TEXTS, max_size=8), max_size=4))
def test_no_text_raises_and_every_column_has_a_meaning(texts: list[dict[int, str]]) -> None:
    found = read_headings(texts)
    filled = {column for row in texts for column, text in row.items() if text.strip()}
    assert set(found) == filled
    for column, meaning in found.items():
        check(column, meaning, filled)


@given(st.dictionaries(st.integers(1, 8), TEXTS, max_size=8), st.integers(10, 16384))
def test_a_column_further_on_changes_nothing(row: dict[int, str], column: int) -> None:
    after = read_headings([{**row, column: "Observer"}])
    del after[column]
    assert after == read_headings([row])


@given(written(), st.sampled_from(BAND_NAMES.split()))
def test_one_magnitude_beside_it_takes_no_meaning_away(
    case: tuple[str, Measure, Unit], band: str
) -> None:
    text, measure, unit = case
    heading = read_headings([{2: band, 3: text}])[3].heading
    assert heading is not None
    assert (heading.measure.name, heading.unit) == (measure.name, unit)


def check(column: int, meaning: Meaning, filled: set[int]) -> None:
    """Hold a meaning to what its role promises."""
    assert (meaning.heading is not None) == (meaning.role is Role.VALUE)
    assert meaning.owner is None or (meaning.owner in filled and meaning.owner != column)
    if meaning.role in (Role.UNCLEAR, Role.CARRIED):
        assert meaning.reason
    if meaning.owner is not None:
        assert meaning.of or meaning.role is Role.UNCLEAR
    if meaning.heading is not None:
        assert not re.search(r"\s{2}|^\s|\s$", meaning.heading.text)
        assert meaning.why
