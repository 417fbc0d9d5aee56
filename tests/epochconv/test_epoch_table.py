"""The small table: its order and labels, few columns, and what it says where nothing is."""

from __future__ import annotations

import math
from html.parser import HTMLParser

import numpy as np
import pytest

from epochconv import epoch_table
from epochconv.history import ExpansionHistory
from epochconv.measures import MEASURES
from epochconv.moment import Moment
from epochconv.published import history_of

PLANCK = history_of("planck 2018")
LABELS = [
    ("when it was", "lookback time", "Gyr"),
    ("", "age", "Gyr"),
    ("where it is", "comoving distance", "Mpc"),
    ("", "transverse comoving distance", "Mpc"),
    ("", "luminosity distance", "Mpc"),
    ("", "angular diameter distance", "Mpc"),
    ("", "distance modulus", "mag"),
    ("how it looks", "redshift", ""),
    ("", "scale factor", ""),
    ("", "CMB temperature", "K"),
    ("", "Hubble rate", "km/s/Mpc"),
]


def at(*redshifts: float) -> Moment:
    return Moment(redshift=np.array(redshifts, dtype=float))


class Cells(HTMLParser):
    """The text of every cell, row by row."""

    def __init__(self, html: str) -> None:
        super().__init__()
        self.rows: list[list[str]] = []
        self.open: list[str] = []
        self.feed(html)
        assert not self.open, "every tag is closed"

    def handle_starttag(self, tag: str, attrs: object) -> None:
        if tag == "br":
            return
        self.open.append(tag)
        if tag == "tr":
            self.rows.append([])
        elif tag in ("th", "td"):
            self.rows[-1].append("")

    def handle_endtag(self, tag: str) -> None:
        assert self.open.pop() == tag

    def handle_data(self, data: str) -> None:
        if self.open[-1] in ("th", "td"):
            self.rows[-1][-1] += data


def test_rows_are_when_where_and_how() -> None:
    rows = epoch_table.table_rows(at(1.0), PLANCK)
    assert [(row[0], row[1], row[-1]) for row in rows] == LABELS


def test_every_built_in_measure_has_its_row() -> None:
    assert {label[1] for label in LABELS} == {measure.name for measure in MEASURES}


def test_numbers_have_six_digits(matter_only: ExpansionHistory) -> None:
    """Matter alone at z = 3: age H0⁻¹/12, distance c/H0, and so on."""
    rows = {row[1]: row[2] for row in epoch_table.table_rows(at(3.0), matter_only)}
    assert rows["age"] == "1.16404"  # 977.79222/70 · 2/3/8
    assert rows["comoving distance"] == "4282.75"  # 299792.458/70
    assert rows["luminosity distance"] == "17131"  # ·4, 17130.998
    assert rows["redshift"] == "3"
    assert rows["scale factor"] == "0.25"
    assert rows["CMB temperature"] == "10.902"
    assert rows["Hubble rate"] == "560"


def test_today_has_every_measure_but_the_modulus() -> None:
    rows = {row[1]: row[2] for row in epoch_table.table_rows(at(0.0), PLANCK)}
    assert rows["distance modulus"] == "none"
    assert rows["lookback time"] == rows["redshift"] == rows["luminosity distance"] == "0"
    assert [name for name, text in rows.items() if text == "none"] == ["distance modulus"]


def test_blank_epoch_has_none_of_them() -> None:
    rows = epoch_table.table_rows(at(math.nan, 1.0), PLANCK)
    assert {row[2] for row in rows} == {"none"}
    assert "none" not in {row[3] for row in rows}


@pytest.mark.parametrize(("count", "shown"), [(0, 0), (1, 1), (5, 5), (6, 5), (1000, 5)])
def test_only_the_first_few_epochs_are_shown(count: int, shown: int) -> None:
    moment = at(*np.linspace(0.5, 9, count))
    rows = epoch_table.table_rows(moment, PLANCK)
    assert {len(row) for row in rows} == {shown + 3}
    text = epoch_table.plain_table(moment, PLANCK)
    html = epoch_table.html_table(moment, PLANCK)
    for table in (text, html):
        assert (f"the first 5 of {count} epochs" in table) == (count > shown)


def test_table_ends_with_the_set_and_what_it_assumes() -> None:
    last = epoch_table.plain_table(at(1.0), PLANCK).splitlines()[-1]
    assert last == f"under planck 2018: {PLANCK.assumptions}"
    own = ExpansionHistory(hubble_constant=70, matter=0.4)
    assert "\nunder own parameters: H0 70 km/s/Mpc" in epoch_table.plain_table(at(1.0), own)


def test_columns_line_up() -> None:
    lines = epoch_table.plain_table(at(0.1, 10.0, 1000.0), PLANCK).splitlines()[:11]
    ends = {line.index(unit) for line, (_, _, unit) in zip(lines, LABELS, strict=True) if unit}
    assert len(ends) == 1
    assert all(line == line.rstrip() for line in lines)


def test_notebook_shows_the_same_cells() -> None:
    moment = at(0.0, 1.0, 1100.0)
    cells = Cells(epoch_table.html_table(moment, PLANCK))
    assert cells.rows == epoch_table.table_rows(moment, PLANCK)
    assert "Ω_m 0.3153" in epoch_table.html_table(moment, PLANCK)


def test_values_by_name_and_as_json() -> None:
    values = epoch_table.measure_values(at(0.0, 1.0), PLANCK)
    assert set(values) == {measure.name for measure in MEASURES}
    assert values["redshift"].tolist() == [0.0, 1.0]
    assert math.isnan(values["distance modulus"][0])
    found = epoch_table.json_values(at(0.0), PLANCK)
    assert found["distance modulus"] == {"value": None, "unit": "mag"}
    assert found["scale factor"] == {"value": 1.0, "unit": ""}
    assert list(found) == [label[1] for label in LABELS]
