"""References of formulas: the forms by hand, and every formula of the corpus beside openpyxl's."""

from __future__ import annotations

import re

import pytest
from openpyxl.formula.tokenizer import Token, Tokenizer

from tests.workbook_tools.corpus import corpus_parts, needs_corpus
from workbook_tools.cell_address import Range, parse_range
from workbook_tools.formula_references import NameUse, References, TableUse, references
from workbook_tools.sheet_formulas import formulas_of


def areas(formula: str) -> list[str]:
    """Return the areas of a formula in short: `first:last!cells`."""
    found = references(formula)
    assert not found.uncertain
    return [
        (f"{a.first_sheet}:{a.last_sheet}!" if a.first_sheet else "") + a.cells.a1
        for a in found.areas
    ]


@pytest.mark.parametrize(
    ("formula", "expected"),
    [
        ("A1+B$2*$C3", ["A1", "B2", "C3"]),
        ("SUM(A1:B9,D4)", ["A1:B9", "D4"]),
        ("SUM(B9:A1)", ["A1:B9"]),
        ("a1+xfd1048576", ["A1", "XFD1048576"]),
        ("SUM(D:D)", ["D1:D1048576"]),
        ("SUM($D:B)", ["B1:D1048576"]),
        ("SUM(3:5)", ["A3:XFD5"]),
        ("Log!A1", ["Log:Log!A1"]),
        ("'My log'!A1:A3", ["My log:My log!A1:A3"]),
        ("'Ann''s log'!$A:$A", ["Ann's log:Ann's log!A1:A1048576"]),
        ("'A1 (B2)'!C3", ["A1 (B2):A1 (B2)!C3"]),
        ("Sheet1:Sheet3!B2", ["Sheet1:Sheet3!B2"]),
        ("'First one:Last one'!B2", ["First one:Last one!B2"]),
        ("[0]!A1", ["A1"]),
        ("[1]Log!A1+'[2]My log'!B2+'C:\\[book.xlsx]Log'!C3+D4", ["D4"]),
        ('"A1 ""B2"" C3"&D4', ["D4"]),
        ("LOG10(A1)+ATAN2(B1,C1)", ["A1", "B1", "C1"]),
        ("SUM (A1 A1:B2)", ["A1", "A1:B2"]),
        ("A1%-{1,2;3,4}+1.5E-3+.5+#REF!+Log!#REF!", ["A1"]),
        ("IF(A1<>B1,#N/A,@C1:C9)", ["A1", "B1", "C1:C9"]),
        ("Größe!A1+Лист1!B2", ["Größe:Größe!A1", "Лист1:Лист1!B2"]),
        ("_xlfn.XLOOKUP(A1,B:B,C:C)", ["A1", "B1:B1048576", "C1:C1048576"]),
        ("1+2", []),
        ("", []),
    ],
)
def test_cells_are_found(formula: str, expected: list[str]) -> None:
    assert areas(formula) == expected


@pytest.mark.parametrize(
    ("formula", "names"),
    [
        ("speed*2", [NameUse(None, "speed")]),
        ("Log!speed+'My log'!H_0", [NameUse("Log", "speed"), NameUse("My log", "H_0")]),
        ("[0]!speed+[1]!other", [NameUse(None, "speed")]),
        ("ABC1234567+XFE1+A0+A1048577", [
            NameUse(None, "ABC1234567"), NameUse(None, "XFE1"), NameUse(None, "A0"),
            NameUse(None, "A1048577"),
        ]),
        ("SUM(0:3,1:1048577)", [NameUse(None, "0:3"), NameUse(None, "1:1048577")]),
        ("\\a.b?+Ω_m", [NameUse(None, "\\a.b?"), NameUse(None, "Ω_m")]),
    ],
)  # fmt: skip
def test_names_are_found(formula: str, names: list[NameUse]) -> None:
    assert references(formula) == References((), tuple(names), (), False)


@pytest.mark.parametrize(
    ("formula", "table"),
    [
        ("SUM(Quasars[z])", TableUse("Quasars", ("z",))),
        ("Quasars[[#This Row],[Age [Gyr'']]]", None),
        ("Quasars[[#This Row],[z]]", TableUse("Quasars", ("z",))),
        ("Quasars[[#Headers],[#Data],[z]:[age]]", TableUse("Quasars", ("z", "age"))),
        ("Quasars[Age '[Gyr']]", TableUse("Quasars", ("Age [Gyr]",))),
        ("Quasars[[#Totals],[a'#b'']]", TableUse("Quasars", ("a#b'",))),
        ("Quasars[]", TableUse("Quasars", ())),
        ("Quasars[#All]", TableUse("Quasars", ())),
        ("Quasars[[#Headers],[#Data]]", TableUse("Quasars", ())),
    ],
)
def test_tables_are_found(formula: str, table: TableUse | None) -> None:
    found = references(formula)
    if table is None:
        assert found.uncertain
    else:
        assert found == References((), (), (table,), False)


def test_it_is_known_which_ends_move_along_when_copied() -> None:
    found = references("$A1:B$2+$C:D+$5:6+E$7").areas
    assert [area.moves for area in found] == [
        (True, False, False, True),
        (False, False, False, True),
        (False, False, True, False),
        (False, True, False, True),
    ]
    assert references("B$9:$A1").areas[0] == references("$A1:B$9").areas[0]


@pytest.mark.parametrize(
    "formula",
    [
        'INDIRECT("A1")',
        "indirect (B1)",
        "SUM(OFFSET(A1,1,1))",
        "_xlfn.ANCHORARRAY(A1)",
        "A1:INDEX(B:B,5)",
        "Log!A1:Log!B2:C3",
        "(A1):B2",
        "Quasars[a]:Quasars[b]",
        "[@z]*2",
        "!A1",
        "'unfinished",
        '"unfinished',
        "A1?B1",
    ],
)
def test_what_could_read_more_or_is_not_understood_is_uncertain(formula: str) -> None:
    assert references(formula).uncertain


@pytest.mark.long
@needs_corpus
def test_no_reference_that_openpyxl_sees_in_the_corpus_is_missed() -> None:
    seen = 0
    for _, xml in corpus_parts(".xml"):
        if b"<sheetData" not in xml:
            continue
        for formula in {formula.text for formula in formulas_of(xml)}:
            found = references(formula)
            if found.uncertain:
                continue
            ours = {area.cells for area in found.areas}
            for token in Tokenizer("=" + formula).items:
                if token.type == Token.OPERAND and token.subtype == Token.RANGE:
                    seen += _is_found(token.value, ours, found)
    assert seen > 1000


def _is_found(operand: str, ours: set[Range], found: References) -> bool:
    cells = operand.rpartition("!")[2] if not operand.endswith("!") else "#REF!"
    foreign = "[" in operand and "!" in operand
    if foreign or cells.startswith("#"):
        return False
    if re.fullmatch(r"\$?[A-Za-z]{1,3}\$?\d+(:.+)?|\$?[A-Za-z]+:.+|\$?\d+:.+", cells):
        assert parse_range(cells) in ours
    elif "[" in cells:
        assert cells.partition("[")[0] in {table.table for table in found.tables}
    else:
        assert cells in {name.name for name in found.names}
    return True
