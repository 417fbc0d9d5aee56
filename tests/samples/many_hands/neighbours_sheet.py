"""A sheet of near objects: heliocentric redshifts, velocities, distances without a redshift."""

from __future__ import annotations

from dataclasses import dataclass

from xlsxwriter.workbook import Workbook

from tests.samples.looks import Looks
from tests.samples.many_hands.entries import Entry, write_entry
from tests.samples.many_hands.readings import Reading, left, reads, within

NAME = "Neighbours EL"
HEADER_ROW = 0  # counted from zero
FIRST_ROW = HEADER_ROW + 1
BLUE = "a negative redshift is a neighbour's peculiar motion towards us and no epoch"
_LOOK = {"font_name": "Verdana", "font_size": 9}
_HEADER = {**_LOOK, "bold": True, "bottom": 1}


@dataclass(frozen=True)
class Row:
    """One row: an object, its redshift with error, and what else is known of it."""

    name: str
    z: Entry
    error: Entry
    reading: Reading
    velocity: Entry = None
    host_age: Entry = None
    direct_distance: Entry = None


ROWS = (
    Row("HBN-N 01", 0.0016, 0.0001, within(0.0016, 0.0001), 480, 9.5, 6.9),
    Row("HBN-N 02", 0.0048, 0.0001, within(0.0048, 0.0001), 1439, None, 21.4),
    Row("HBN-N 03", 0.0231, 0.0002, within(0.0231, 0.0002), None, 4.2, None),
    Row("HBN-N 04", 0.0752, None, reads(0.0752), None, 7.0, None),
    Row("HBN-N 05", 0.1407, 0.0003, within(0.1407, 0.0003)),
    Row("HBN-N 06", -0.0008, 0.0001, left(BLUE, "-0.0008"), -240, None, 0.8),
)
LAST_ROW = FIRST_ROW + len(ROWS) - 1
COLUMNS = (
    ("Object", 12.0),
    ("z_hel", 9.0),
    ("e_z_hel", 9.0),
    ("cz [km/s]", 10.0),
    ("Host age [Gyr]", 13.0),
    ("TRGB distance [Mpc]", 17.0),
    ("log D_L [Mpc]", 13.0),
    ("D_L [Mpc]", 11.0),
    ("E_D_L", 9.0),
    ("e_D_L", 9.0),
    ("Lookback time [Myr]", 17.0),
)


def write_neighbours_sheet(book: Workbook, looks: Looks) -> None:
    """Add the sheet."""
    sheet = book.add_worksheet(NAME)
    for index, (heading, width) in enumerate(COLUMNS):
        sheet.set_column(index, index, width)
        write_entry(sheet, looks, (HEADER_ROW, index), heading, _HEADER)
    for offset, row in enumerate(ROWS):
        fields = (row.name, row.z, row.error, row.velocity, row.host_age, row.direct_distance)
        for index, entry in enumerate(fields):
            write_entry(sheet, looks, (FIRST_ROW + offset, index), entry, _LOOK)
