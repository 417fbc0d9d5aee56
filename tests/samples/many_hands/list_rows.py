"""Rows of the shared list: what hands typed as redshifts, and what each is to be read as.

Drawn from the project's policy for typed cells, row by row, before a fill was run; `\\u` escapes
stand where a sign is invisible or easily taken for another.
"""

from __future__ import annotations

import datetime
from dataclasses import dataclass

from epochconv.typed_outcomes import Reason, Remark
from tests.samples.many_hands.entries import DateOf, Entry, Formula, Rich, percent, struck
from tests.samples.many_hands.readings import (
    NOTHING,
    Reading,
    between,
    left,
    limit,
    no_row,
    no_value,
    pending,
    reads,
    unread,
    within,
)
from workbook_tools.typed_cells import FORMULA, STRUCK, TEXT

ZERO = "a redshift of exactly 0, which may stand for a missing value"
NEGATIVE_ERROR = "an error beside it that is negative, and is not used"
ERROR_LEFT = "an error beside it that is not read, and is not used"
ERROR_PERCENT = "an error beside it in percent, which may be relative, and is not used"
PARTLY_STRUCK = "struck through in part; keep one value"
REPEATED = "repeated headings"
A_DATE = "a date that a spreadsheet program made of something else, which is lost; type it again"
RAISED = "raised or lowered digits, which could be an exponent or a footnote; retype it"
BLUE = "a negative redshift is a neighbour's peculiar motion towards us and no epoch"
IMPOSSIBLE = "a redshift of -1 or below is impossible; --missing declares codes for no value"
A_TIME = "a time (Gyr) where the heading asks for a number"
LOGICAL = "not read: true or false and no number"
UNCOMPUTED = "a formula without a stored result; recalculate and save the workbook first"


@dataclass(frozen=True)
class Row:
    """One row of the list.

    Attributes:
        name: in the column of objects.
        z: what was typed as its redshift.
        reading: what that is to be read as, its companion column of errors included.
        error: what was typed as its error.
        lookback, age: what hands typed there before the fill.
        kind, by, note: in the columns of that name.
        hidden: whether somebody hid the row.
    """

    name: str
    z: Entry
    reading: Reading
    error: Entry = None
    lookback: Entry = None
    age: Entry = None
    kind: str = "quasar"
    by: str = "KJ"
    note: str = ""
    hidden: bool = False


def _header_again() -> list[Row]:
    """The headings and units once more, as somebody pasted them for a page break."""
    names = Row(
        "Object", "z", no_row(REPEATED), "σ_z", "Lookback time", None, "Class", "By", "Notes"
    )
    return [names, Row("", "---", no_row(REPEATED), "---", "Gyr", None, "", "")]


PLAIN = [
    Row("HBN 0006+13", 1.2874, within(1.2874, 0.0006), 0.0006, lookback=8.96),
    Row("HBN 0019-08", 0.1126, reads(0.1126), kind="supernova", lookback=1.51),
    Row("HBN 0031+22", 2.2197, within(2.2197, 0.0001), 0.0001, lookback=10.85, kind="absorber"),
    Row("HBN 0044-31", 2.8849, within(2.8849, 0.0009), 0.0009, lookback=11.562),
    Row("HBN 0052+05", "2.31", reads(2.31, TEXT), by="TW"),
    Row("HBN 0103-10", "\u00a02.07\u2009", reads(2.07, TEXT), by="TW", note="pasted"),
    Row("HBN 0117+40", 3.1, reads(3.1, NEGATIVE_ERROR), -99, by="TW", note="no error known"),
    Row("HBN 0126-17", 0.7, within(0.7, 0.0012), "0.0012", by="TW"),
    Row("HBN 0128+21", 0.71, reads(0.71, ERROR_LEFT), "0.001 or 0.002", by="TW"),
    Row("HBN 0129-50", 0.72, reads(0.72, ERROR_PERCENT), percent(0.02), by="TW"),
    Row("HBN 0131+02", "\u22120.0003", left(BLUE, "\u22120.0003"), kind="neighbour", by="RQ"),
    Row("HBN 0140-25", 0, reads(0.0, ZERO), by="RQ", note="typed to sort it first"),
    Row("HBN 0152+09", -99, left(IMPOSSIBLE, "-99"), by="RQ"),
    Row("HBN 0158-44", -99, left(IMPOSSIBLE, "-99"), by="RQ"),
]

ERRORS = [
    Row("HBN 0207+31", "2.345(12)", within(2.345, 0.012), lookback=11.01),
    Row("HBN 0219-03", "2.34(0.05)", within(2.34, 0.05, Remark.ERROR_IN_BRACKETS), by="OZ"),
    Row("HBN 0224+18", "6(1)", within(6.0, 1.0, Remark.ERROR_OR_NOTE), by="OZ"),
    Row("HBN 0236-29", "2.345(12)", within(2.345, 0.012), 0.5, by="OZ", note="the cell counts"),
    Row("HBN 0248+07", "0.5 ± 0.1", within(0.5, 0.1), by="OZ"),
    Row("HBN 0255-12", "1.52 +/- 0.02", within(1.52, 0.02), by="OZ"),
    Row("HBN 0301+26", "1.52+-.02", within(1.52, 0.02), by="YE"),
    Row("HBN 0313-37", "2.34+0.05-0.03", between(2.34, 0.05, 0.03, Remark.ASYMMETRIC), by="YE"),
    Row(
        "HBN 0322+11",
        "2.34 +0.05/\u22120.03",
        between(2.34, 0.05, 0.03, Remark.ASYMMETRIC),
        by="YE",
    ),
    Row(
        "HBN 0334-06",
        "2.34\n+0.05\n\u22120.03",
        between(2.34, 0.05, 0.03, Remark.ASYMMETRIC),
        by="YE",
    ),
    Row(
        "HBN 0341+20",
        "2.34 (\u22120.03, +0.05)",
        between(2.34, 0.05, 0.03, Remark.ASYMMETRIC),
        by="UB",
    ),
    Row("HBN 0356-14", "0.05 ± 0.08", within(0.05, 0.08), kind="supernova", by="UB"),
    Row("HBN 0402+33", "1.3 ± ?", unread("1.3 ± ?", Reason.NO_ERROR), by="UB"),
]

LIMITS = [
    Row("HBN 0411-08", ">6", limit(">", 6.0), by="YE", lookback=">12.88", kind="burst"),
    Row("HBN 0423+15", "<0.1", limit("<", 0.1), by="YE", kind="supernova"),
    Row("HBN 0430-21", "≥ 5.5", limit("≥", 5.5), by="YE", kind="burst"),
    Row("HBN 0442+28", "≲3", limit("≲", 3.0), by="YE", kind="burst"),
    Row("HBN 0455-35", ">~4.25", limit("≳", 4.25), by="OZ", kind="burst"),
    Row("HBN 0503+01", "<= 2", limit("≤", 2.0), by="OZ", kind="lensed galaxy"),
    Row("HBN 0514-19", "> 2 ± 0.1", unread("> 2 ± 0.1", Reason.LIMIT_ERROR), by="OZ"),
    Row("HBN 0526+12", "1.2 < z < 1.5", unread("1.2 < z < 1.5", Reason.RANGE), by="OZ"),
]

MARKS = [
    Row("HBN 0533-27", "~7", reads(7.0, Remark.APPROXIMATE), by="EL", kind="lensed galaxy"),
    Row("HBN 0541+36", "≈1.1", reads(1.1, Remark.APPROXIMATE), by="EL"),
    Row("HBN 0558-02", "c. 2", reads(2.0, Remark.APPROXIMATE), by="EL"),
    Row("HBN 0607+24", "2.1:", reads(2.1, Remark.UNCERTAIN), by="EL"),
    Row("HBN 0615-16", "2.1?", reads(2.1, Remark.UNCERTAIN), by="EL"),
    Row("HBN 0622+08", "z=1.2?", reads(1.2, Remark.NAMED, Remark.UNCERTAIN), by="EL"),
    Row("HBN 0634-40", "z~7", unread("z~7", Reason.WORDS), by="EL"),
    Row("HBN 0640+17", "v=1.2", unread("v=1.2", Reason.OTHER_NAME), by="EL"),
    Row("HBN 0653-11", "2.3*", reads(2.3, Remark.FOOTNOTE), by="UB"),
    Row("HBN 0701+30", "2.3†", reads(2.3, Remark.FOOTNOTE), by="UB"),
    Row("HBN 0716-23", "2.3¹", reads(2.3, Remark.FOOTNOTE), by="UB"),
    Row("HBN 0728+04", Rich((("2.3", ""), ("1", "raised"))), left(RAISED, "2.31"), by="UB"),
    Row("HBN 0739-33", "2.3^a", unread("2.3^a", Reason.LETTER), by="UB"),
    Row("HBN 0744+19", "2.3a", unread("2.3a", Reason.LETTER), by="UB"),
    Row("HBN 0757-07", "2.3(a)", unread("2.3(a)", Reason.BRACKET), by="UB"),
    Row("HBN 0805+27", "2.3 (2)", unread("2.3 (2)", Reason.BRACKET), by="UB"),
    Row("HBN 0812-18", "2.3 [5]", unread("2.3 [5]", Reason.BRACKET), by="UB"),
    Row("HBN 0826+10", struck(0.83), reads(0.83, STRUCK), by="KJ", note="not this one?"),
    Row("HBN 0838-30", struck("0.91 ± 0.02"), within(0.91, 0.02, STRUCK), by="KJ"),
    Row(
        "HBN 0849+21",
        Rich((("0.5", "struck"), ("0.7", ""))),
        left(PARTLY_STRUCK, "0.50.7"),
        by="KJ",
        note="0.7 it is",
    ),
]

CHOICES = [
    Row("HBN 0901-05", "2,345", unread("2,345", Reason.COMMA_OR_GROUPS), by="PM"),
    Row("HBN 0914+14", "2,3", unread("2,3", Reason.DECIMAL_COMMA), by="PM"),
    Row("HBN 0927-26", "1 2", unread("1 2", Reason.TWO_NUMBERS), by="PM"),
    Row("HBN 0933+38", "2\u20133", unread("2\u20133", Reason.RANGE), by="PM"),
    Row("HBN 0948-13", "2 to 3", unread("2 to 3", Reason.RANGE), by="PM"),
    Row("HBN 0955+03", "1.2/3.4", unread("1.2/3.4", Reason.CANDIDATES), by="PM"),
    Row("HBN 1002-22", "1.2 or 3.4", unread("1.2 or 3.4", Reason.CANDIDATES), by="PM"),
    Row("HBN 1016+29", "1.2, 3.4", unread("1.2, 3.4", Reason.CANDIDATES), by="PM"),
    Row("HBN 1023-09", "0.5→0.7", unread("0.5→0.7", Reason.CHANGE), by="PM"),
    Row("HBN 1037+16", DateOf(datetime.date(2026, 3, 2)), left(A_DATE), by="PM", note="was 2-3"),
]

WORDS = [
    Row("HBN 1045-34", "—", no_value("—"), by="TW"),
    Row("HBN 1058+06", "n/a", no_value("n/a"), by="TW"),
    Row("HBN 1104-20", "N/A", no_value("N/A"), by="TW"),
    Row("HBN 1119+23", "...", no_value("..."), by="TW"),
    Row("HBN 1128-01", "none", no_value("none"), by="TW"),
    Row("HBN 1133+32", "n/a", no_value("n/a"), by="TW"),
    Row("HBN 1147-15", " ", NOTHING, by="TW", note="a lone blank"),
    Row("HBN 1155+11", None, NOTHING, by="TW", note="clouds"),
    Row("HBN 1201-28", "TBD", pending("TBD"), by="TW"),
    Row("HBN 1214+20", "?", pending("?"), by="TW"),
    Row("HBN 1226-04", "x", pending("x"), by="TW"),
]

PROGRAMS = [
    Row("HBN 1239+35", "1.1×10³", reads(1100.0, TEXT), by="RQ", note="last scattering, a test"),
    Row("HBN 1242-12", "1.1x10^3", reads(1100.0, TEXT), by="RQ"),
    Row("HBN 1251+26", "1.1E1", reads(11.0, TEXT), by="RQ", kind="lensed galaxy"),
    Row("HBN 1303-24", "1.1d1", unread("1.1d1", Reason.FORTRAN), by="RQ"),
    Row("HBN 1318+02", "13.2 Gyr", left(A_TIME, "13.2 Gyr")),
    Row("HBN 1325-17", percent(0.05), reads(0.05, Remark.PERCENT), kind="supernova"),
    Row("HBN 1336+30", "5%", reads(0.05, Remark.PERCENT), kind="supernova"),
    Row("HBN 1344-08", True, left(LOGICAL, "TRUE"), by="RQ"),
    Row("HBN 1357+13", Formula("=1.2+0.05", 1.25), reads(1.25, FORMULA), by="RQ"),
    Row("HBN 1402-31", Formula('="3.0"&"5"', "3.05"), reads(3.05, FORMULA, TEXT), by="RQ"),
    Row("HBN 1415+18", Formula("=1.3+0.01", None), left(UNCOMPUTED), by="RQ"),
    Row("HBN 1429-06", Formula("=NA()", "#N/A"), left("a formula error", "#N/A"), by="RQ"),
    Row("HBN 1433+22", Formula("=1/0", "#DIV/0!"), left("a formula error", "#DIV/0!"), by="RQ"),
]

NEWEST = [
    Row("HBN 1446-14", 1.05, reads(1.05), age="ask KJ", by="OZ"),
    Row("HBN 1452+09", 0.2581, no_row("a row hidden by hand"), 0.0004, by="OZ", hidden=True),
    Row("HBN 1508-37", 4.6, no_row("merged cells"), 0.2, by="OZ", kind="lensed galaxy"),
    Row("HBN 1508-37", None, NOTHING, by="OZ", kind="lensed galaxy", note="second night"),
]

ROWS: list[Row] = [
    *PLAIN,
    *ERRORS,
    *LIMITS,
    *_header_again(),
    *MARKS,
    *CHOICES,
    *WORDS,
    *PROGRAMS,
    *NEWEST,
]
