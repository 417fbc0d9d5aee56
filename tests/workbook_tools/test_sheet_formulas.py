"""Formulas of a sheet: where they stand, and that copies are given once."""

from __future__ import annotations

import openpyxl
import pytest
from openpyxl.worksheet.formula import ArrayFormula, DataTableFormula

from tests.workbook_tools.corpus import corpus_paths, needs_corpus
from tests.workbook_tools.loose_parts import MAIN
from workbook_tools.archive import Archive
from workbook_tools.parts import SheetKind, read_workbook
from workbook_tools.sheet_formulas import SheetFormula, formulas_of


def found(rows: str) -> list[tuple[str, str, str]]:
    """Return text, origin and area of each formula in a sheet of these rows."""
    return [(f.text, f.origin.a1, f.area.a1) for f in formulas_in(rows)]


def formulas_in(rows: str, prefix: str = "") -> list[SheetFormula]:
    declared, mark = (f":{prefix}", f"{prefix}:") if prefix else ("", "")
    xml = f"<{mark}worksheet xmlns{declared}='{MAIN}'><{mark}sheetData>{rows}</{mark}sheetData>"
    return list(formulas_of(f"{xml}</{mark}worksheet>".encode()))


def column(*formulas: str, letters: str = "C", first: int = 2) -> str:
    return "".join(
        f'<row r="{row}"><c r="{letters}{row}" s="1"><f>{formula}</f><v>1</v></c></row>'
        for row, formula in enumerate(formulas, first)
    )


def test_a_sheet_without_formulas_has_none() -> None:
    rows = '<row r="1"><c r="A1"><v>1</v></c><c r="B1" t="inlineStr"><is><t>f</t></is></c></row>'
    assert found(rows) == []
    assert found(rows + "</sheetData><conditionalFormatting/><sheetData>") == []


def test_a_formula_is_given_with_its_cell() -> None:
    rows = '<row r="5"><c r="AB5" t="str"><f ca="1">A1&amp;"&lt;"</f><v>x</v></c></row>'
    assert found(rows) == [('A1&"<"', "AB5", "AB5")]


def test_copies_down_a_column_are_joined() -> None:
    assert found(column("A2*$B$1", "A3*$B$1", "A4*$B$1")) == [("A2*$B$1", "C2", "C2:C4")]


def test_other_formulas_gaps_and_other_columns_are_not_joined() -> None:
    assert found(column("A2*2", "A3*3", "A4*2", "A5*2")) == [
        ("A2*2", "C2", "C2"),
        ("A3*3", "C3", "C3"),
        ("A4*2", "C4", "C4:C5"),
    ]
    assert found(column("A2*2") + column("A9*2", first=9)) == [
        ("A2*2", "C2", "C2"),
        ("A9*2", "C9", "C9"),
    ]
    assert found(column("A2*2") + column("A3*2", letters="D", first=3)) == [
        ("A2*2", "C2", "C2"),
        ("A3*2", "D3", "D3"),
    ]


@pytest.mark.parametrize(
    "formulas",
    [
        ("A$2*2", "A$3*2"),
        ("A2*2", "A2*2"),
        ('"A2"&amp;B2', '"A3"&amp;B3'),
        ("'A2'!B2", "'A3'!B3"),
        ("LOG10(A2)", "LOG11(A3)"),
        ("X.A2", "X.A3"),
    ],
)
def test_what_is_no_copy_is_not_joined(formulas: tuple[str, str]) -> None:
    assert [area for _, _, area in found(column(*formulas))] == ["C2", "C3"]


def test_a_formula_that_the_file_shares_is_given_once_with_all_its_cells() -> None:
    rows = (
        '<row r="2"><c r="C2"><f t="shared" ref="C2:C4" si="0">A2*2</f><v>1</v></c>'
        '<c r="D2"><f t="shared" si="1">A2*3</f></c></row>'
        '<row r="3"><c r="C3"><f t="shared" si="0"/><v>1</v></c><c r="D3"><f t="shared" si="1"/>'
        '</c></row><row r="4"><c r="C4"><f t="shared" si="0"></f><v>1</v></c></row>'
    )
    assert found(rows) == [("A2*2", "C2", "C2:C4"), ("A2*3", "D2", "D2:D3")]
    assert all(formula.copied for formula in formulas_in(rows))


def test_an_array_stands_in_its_whole_area_but_is_not_copied() -> None:
    rows = '<row r="2"><c r="C2"><f t="array" ref="C2:E4">A2:A9*2</f><v>1</v></c></row>'
    (formula,) = formulas_in(rows)
    assert (formula.text, formula.area.a1, formula.copied) == ("A2:A9*2", "C2:E4", False)


def test_a_what_if_table_reads_its_inputs_and_what_stands_beside_it() -> None:
    rows = '<row r="3"><c r="C3"><f t="dataTable" ref="C3:D5" dt2D="1" r1="A1" r2="A2"/></c></row>'
    assert found(rows) == [("A1,A2,B2:D5", "C3", "C3:D5")]
    rows = '<row r="1"><c r="A1"><f t="dataTable" ref="A1:B2" r1="C1"/></c></row>'
    assert found(rows) == [("C1,A1:B2", "A1", "A1:B2")]


def test_cells_without_an_address_are_counted() -> None:
    rows = (
        "<row><c/><c r='D1'/><c><f>A1</f></c></row><row r='7'><c><f>A7*3</f></c></row>"
        "<row><c/><c t='n'><f>A8</f></c></row>"
    )
    assert found(rows) == [("A1", "E1", "E1"), ("A7*3", "A7", "A7"), ("A8", "B8", "B8")]


def test_a_prefix_is_respected() -> None:
    rows = "<x:row r='1'><x:c r='A1'><x:f>B1</x:f></x:c><x:c r='C1'><x:v>1</x:v></x:c></x:row>"
    assert [(f.text, f.area.a1) for f in formulas_in(rows, "x")] == [("B1", "A1")]


def test_comments_and_cdata_are_seen_through() -> None:
    rows = (
        "<!-- <c r='Z9'><f>no</f></c> --><row r='1'><c r='A1'><!-- x --><f><![CDATA[B1<C1]]></f>"
        "</c></row>"
    )
    assert found(rows) == [("B1<C1", "A1", "A1")]
    rows = "<?go <c r='Z9'><f>no</f></c>?><row r='1'><c r='A1'><f>B1</f></c></row>"
    assert found(rows) == [("B1", "A1", "A1")]


def test_a_sheet_in_utf16_is_read_too() -> None:
    xml = f'<worksheet xmlns="{MAIN}"><sheetData>{column("Ω*2")}</sheetData></worksheet>'
    assert [f.text for f in formulas_of(xml.encode("utf-16"))] == ["Ω*2"]


@pytest.mark.long
@needs_corpus
@pytest.mark.filterwarnings("ignore")  # openpyxl warns of all that it would drop
def test_the_formula_cells_of_the_corpus_are_those_that_openpyxl_finds() -> None:
    compared = 0
    for path in corpus_paths():
        try:
            archive = Archive.open(path)
            sheets = read_workbook(archive).sheets
            book = openpyxl.load_workbook(path)
        except Exception:
            continue  # refused, or openpyxl cannot open what spreadsheet programs can
        for sheet in sheets:
            if sheet.kind is SheetKind.WORKSHEET and sheet.name in book.sheetnames:
                theirs: dict[str, object] = {
                    cell.coordinate: cell.value
                    for row in book[sheet.name].iter_rows()
                    for cell in row
                    if cell.data_type == "f"
                }
                compared += _same_cells(archive.read(sheet.part), theirs)
    assert compared > 1000


def _same_cells(xml: bytes, theirs: dict[str, object]) -> int:
    ours = list(formulas_of(xml))
    covered = {
        f"{openpyxl.utils.get_column_letter(column)}{row}"
        for formula in ours
        for row in range(formula.area.first_row, formula.area.last_row + 1)
        for column in range(formula.area.first_column, formula.area.last_column + 1)
    }
    assert set(theirs) <= covered
    for formula in ours:
        value = theirs.get(formula.origin.a1)
        if isinstance(value, ArrayFormula):
            assert (value.text or "").removeprefix("=") == formula.text
        elif not isinstance(value, DataTableFormula):
            # a parser makes one line feed of the two characters that end a line
            assert value == "=" + formula.text.replace("\r\n", "\n")
    return len(theirs)
