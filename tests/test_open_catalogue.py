"""One real catalogue end to end: OpenNGC, written to a workbook, filled, and checked row by row.

OpenNGC by M. Verga, CC-BY-SA-4.0, read from the PyPI package pyongc (a test extra); none of its
data is kept here. Expected values come from scipy's quadrature of the Friedmann equation below,
which shares nothing with the tables under test.
"""

from __future__ import annotations

import importlib.resources
import math
import sqlite3
from pathlib import Path

import openpyxl
import pytest
import xlsxwriter
from scipy.integrate import quad

from workbook_tools import FillResult, fill

HUBBLE_CONSTANT, MATTER = 70.0, 0.3
HUBBLE_TIME_GYR = 977.7922216807891 / HUBBLE_CONSTANT  # IAU parsec, Julian year
HUBBLE_LENGTH_MPC = 299792.458 / HUBBLE_CONSTANT


def catalogue() -> list[tuple[str, float | None]]:
    """Return name and redshift of every object, in the order of the catalogue."""
    source = importlib.resources.files("pyongc") / "ongc.db"
    with importlib.resources.as_file(source) as path:
        connection = sqlite3.connect(path)
        try:
            return list(connection.execute("SELECT name, redshift FROM objects ORDER BY id"))
        finally:
            connection.close()


@pytest.fixture(scope="module")
def filled(tmp_path_factory: pytest.TempPathFactory) -> tuple[list[tuple], FillResult]:
    folder = tmp_path_factory.mktemp("catalogue")
    rows = catalogue()
    book = xlsxwriter.Workbook(str(folder / "log.xlsx"))
    sheet = book.add_worksheet("Catalogue")
    sheet.write_row(0, 0, ["Object", "Redshift", "Lookback time [Gyr]", "D_C [Mpc]"])
    for number, (name, redshift) in enumerate(rows, start=1):
        sheet.write_string(number, 0, name)
        if redshift is not None:
            sheet.write_number(number, 1, redshift)
    book.close()
    result = fill(folder / "log.xlsx", output=folder / "out.xlsx", parameters="round numbers")
    return rows, result


def sheet_rows(path: Path) -> list[tuple]:
    book = openpyxl.load_workbook(path, read_only=True)
    rows = list(book.active.iter_rows(min_row=2, max_col=4, values_only=True))
    book.close()
    return rows


def test_catalogue_is_large_enough_to_count(filled: tuple[list[tuple], FillResult]) -> None:
    rows, _ = filled
    assert sum(redshift is not None for _, redshift in rows) > 10_000


def test_every_row_is_filled_blank_or_named(filled: tuple[list[tuple], FillResult]) -> None:
    rows, result = filled
    named = {cell for _, cell, _ in result.left}
    for number, (source, written) in enumerate(
        zip(rows, sheet_rows(result.path), strict=True), start=2
    ):
        name, redshift = source
        assert written[0] == name
        assert written[1] == redshift
        if redshift is None:
            assert written[2:] == (None, None)
        elif redshift < 0:
            assert written[2:] == (None, None)
            assert f"B{number}" in named
        else:
            assert None not in written[2:]
            assert f"B{number}" not in named


def test_blueshifted_neighbours_each_end_with_the_reason(
    filled: tuple[list[tuple], FillResult],
) -> None:
    rows, result = filled
    blueshifted = sum(redshift is not None and redshift < 0 for _, redshift in rows)
    assert blueshifted > 10
    reasons = [reason for _, _, reason in result.left]
    assert len(reasons) == blueshifted
    assert all("peculiar motion" in reason for reason in reasons)


def test_filled_values_agree_with_quadrature(filled: tuple[list[tuple], FillResult]) -> None:
    def rate(z: float) -> float:
        return math.sqrt(MATTER * (1 + z) ** 3 + 1 - MATTER)

    _, result = filled
    measured = [row for row in sheet_rows(result.path) if row[2] is not None]
    for _, redshift, lookback, distance in measured[::97]:
        time = quad(lambda z: 1 / ((1 + z) * rate(z)), 0, redshift, epsrel=1e-13)[0]
        length = quad(lambda z: 1 / rate(z), 0, redshift, epsrel=1e-13)[0]
        assert lookback == pytest.approx(HUBBLE_TIME_GYR * time, rel=1e-12, abs=0)
        assert distance == pytest.approx(HUBBLE_LENGTH_MPC * length, rel=1e-12, abs=0)
