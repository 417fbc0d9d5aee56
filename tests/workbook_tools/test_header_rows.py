"""Headings together: which row is what, groups, neighbours; the table of headings has the rest."""

from __future__ import annotations

import pytest

from workbook_tools.column_meanings import Role
from workbook_tools.header_rows import holds_units, read_headings


@pytest.mark.parametrize(
    "row",
    [
        {2: "Mpc"},
        {1: "---", 2: "K"},
        {1: "deg", 2: "deg", 3: "mag"},
        {1: "[Mpc]"},
        {1: "(Gyr)", 2: "(Mpc)", 3: "see note"},
        {1: "Gyr", 2: "mpc"},
    ],
)
def test_rows_of_units(row: dict[int, str]) -> None:
    assert holds_units(row)


@pytest.mark.parametrize(
    "row",
    [
        {},
        {5: "K"},  # an observer
        {4: "-", 5: "K"},  # no value, and an observer
        {1: "-", 2: "--"},
        {1: "HBN 0938+04", 2: "quasar", 3: "s"},
        {1: "z", 2: "Gyr"},
        {1: "D", 2: "Mpc"},
        {1: "g", 2: "r", 3: "K"},
        {1: "value", 2: "err", 3: "mag"},
    ],
)
def test_other_rows(row: dict[int, str]) -> None:
    assert not holds_units(row)


def test_magnitudes_tip_the_balance_beside_one_band() -> None:
    row = {1: "r", 2: "z"}
    assert read_headings([row])[2].role is Role.VALUE
    doubted = read_headings([row], magnitudes=[2])[2]
    assert doubted.role is Role.UNCLEAR
    assert "--source B:B --as 'redshift'" in doubted.reason


def test_large_numbers_alone_make_no_band() -> None:
    assert read_headings([{1: "Object", 2: "z"}], magnitudes=[2])[2].role is Role.VALUE


def test_other_names_of_the_redshift_are_no_band() -> None:
    row = {1: "g", 2: "r", 3: "i", 4: "Redshift", 5: "z_spec"}
    found = read_headings([row], magnitudes=[4, 5])
    assert found[4].role is found[5].role is Role.VALUE


def test_a_gap_between_columns_parts_no_band_from_its_neighbours() -> None:
    assert read_headings([{1: "r", 3: "i", 5: "z"}])[5].role is Role.UNCLEAR


def test_the_heading_keeps_its_own_text() -> None:
    found = read_headings([{2: "Lookback\ntime"}, {2: "Gyr"}])[2]
    assert found.heading is not None
    assert (found.heading.text, found.heading.name) == ("Lookback time", "Lookback time")
    assert found.why == "name 'Lookback time', unit Gyr in the row below"


def test_blank_rows_and_cells_are_nothing() -> None:
    assert read_headings([]) == {}
    assert read_headings([{}, {3: "  ", 4: "\n"}]) == {}


def test_a_group_names_whose_age_it_is() -> None:
    found = read_headings([{1: "Stellar population"}, {1: "Age [Gyr]"}])[1]
    assert found.role is Role.OTHER
    assert "Stellar" in found.why


def test_a_group_tells_how_a_distance_was_measured() -> None:
    found = read_headings([{1: "Cepheids"}, {1: "distance modulus [mag]"}])[1]
    assert found.role is Role.UNCLEAR
    assert "without a redshift" in found.reason
