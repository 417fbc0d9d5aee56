"""Each rule of the checker catches a workbook that was damaged on purpose.

The damage is done to one clean workbook, in which the checker finds nothing.
"""

from __future__ import annotations

import datetime
import zipfile
from pathlib import Path

import pytest
import xlsxwriter

from tests.workbook_tools.package_rules import new_problems, problems
from tests.workbook_tools.repack import part, repack, swapped

SHEET = "xl/worksheets/sheet1.xml"
TABLE = "xl/tables/table1.xml"
SECOND_TABLE = "xl/tables/table2.xml"
WORKBOOK = "xl/workbook.xml"
STYLES = "xl/styles.xml"
CHAIN = "xl/calcChain.xml"
TYPES = "[Content_Types].xml"
STRICT = "http://purl.oclc.org/ooxml/spreadsheetml/main"


def write_base(path: Path) -> Path:
    """A clean workbook with tables, totals, merges, shared and array formulas, names, a chain."""
    raw = path.with_suffix(".raw.xlsx")
    book = xlsxwriter.Workbook(raw)
    book.set_properties({"created": datetime.datetime(2026, 1, 1)})
    bold, red = book.add_format({"bold": True}), book.add_format({"font_color": "red"})
    sheet = book.add_worksheet("Log")
    book.add_worksheet("Notes").write("A1", "nothing yet")
    book.define_name("Deep", "=Log!$B$4:$B$7")
    sheet.merge_range("A1:D1", "Observing log", bold)
    columns = [
        {"header": "Object", "total_string": "Total"},
        {"header": "Redshift"},
        {"header": "Night", "total_value": 3, "total_function": "sum"},
        {"header": "Flux"},
    ]
    rows = [["q1", 1.5, 1, 10], ["q2", 2.5, 1, 20], ["q3", 3.5, 1, 30], ["q4", 4.5, 0, 40]]
    sheet.add_table("A3:D8", {"columns": columns, "data": rows, "total_row": True, "name": "Log1"})
    sheet.add_table("J3:K5", {"columns": [{"header": "Who"}, {"header": "When"}]})
    for row in range(3, 6):
        sheet.write_formula(row, 5, f"B{row + 1}*2", None, rows[row - 3][1] * 2)
    sheet.write_array_formula("G4:G6", "{B4:B6+1}", None, 2.5)
    sheet.write_dynamic_array_formula("H4", "=_xlfn.SEQUENCE(2)", None, 1)
    sheet.conditional_format("B4:B7", {"type": "cell", "criteria": ">", "value": 3, "format": red})
    sheet.set_column("E:F", 12)
    sheet.set_column("L:N", 20)
    book.close()
    xml = part(raw, SHEET)
    xml = swapped(xml, "<f>B4*2</f>", '<f t="shared" ref="F4:F6" si="0">B4*2</f>')
    for child in ("B5", "B6"):
        xml = swapped(xml, f"<f>{child}*2</f>", '<f t="shared" si="0"/>')
    chain = (
        b'<calcChain xmlns="http://schemas.openxmlformats.org/spreadsheetml/2006/main">'
        b'<c r="F4" i="1"/><c r="F5"/><c r="F6"/><c r="G5"/></calcChain>'
    )
    kind = "application/vnd.openxmlformats-officedocument.spreadsheetml.calcChain+xml"
    types = f'<Override PartName="/{CHAIN}" ContentType="{kind}"/></Types>'
    relation = (
        '<Relationship Id="rId99" Type="http://schemas.openxmlformats.org/officeDocument/2006'
        '/relationships/calcChain" Target="calcChain.xml"/></Relationships>'
    )
    relations = "xl/_rels/workbook.xml.rels"
    changes = {
        SHEET: xml,
        CHAIN: chain,
        TYPES: swapped(part(raw, TYPES), "</Types>", types),
        relations: swapped(part(raw, relations), "</Relationships>", relation),
    }
    return repack(raw, path, changes)


@pytest.fixture(scope="module")
def base(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return write_base(tmp_path_factory.mktemp("rules") / "base.xlsx")


def test_a_clean_workbook_has_no_problems(base: Path) -> None:
    assert problems(base) == []


LONG = "x" * 32_768
DEEP = "B4" + "+B4" * 3_000
# rule, part, text in it, what stands there instead, words of the finding
DAMAGES = [
    ("R2", TYPES, f"/{CHAIN}", "/xl/gone.xml", "/xl/gone.xml, which is not there"),
    ("R2", "xl/_rels/workbook.xml.rels", '"styles.xml"', '"lost.xml"', "leads to /xl/lost.xml"),
    ("R3", "xl/_rels/workbook.xml.rels", '"rId6"', '"rId5"', "'rId5' occurs 2 times"),
    ("R3", SHEET, '<tablePart r:id="rId1"/>', '<tablePart r:id="rId8"/>', "rId8, which is missing"),
    ("R3", SHEET, "<tableParts", '<drawing r:id="rId1"/><tableParts', "rId1 of kind table"),
    ("R4", SHEET, "</sheetData>", "</sheetDate>", "not well-formed"),
    ("R4", SHEET, "<v>1.5</v>", "<v>1.5\x01</v>", "not well-formed"),
    ("R4", SHEET, "<worksheet ", "<!DOCTYPE worksheet><worksheet ", "document type"),
    ("R4", STYLES, "<fonts ", f'<x:fonts xmlns:x="{STRICT}"/><fonts ', "mixes strict"),
    ("R5", SHEET, "<tableParts", "<sheetPr/><tableParts", "<sheetPr> comes too late"),
    ("R5", SHEET, "<tableParts", "<tablePart/><tableParts", "<tablePart> does not belong"),
    (
        "R5",
        SHEET,
        "<f>SUBTOTAL(109,[Night])</f><v>3</v>",
        "<v>3</v><f>C4</f>",
        "<f> comes too late",
    ),
    ("R5", WORKBOOK, "<calcPr ", "<calcPr/><calcPr ", "<calcPr> comes twice"),
    ("R5", STYLES, "<fills ", "<numFmts/><fills ", "<numFmts> comes too late"),
    ("R5", TABLE, "<tableStyleInfo", "<autoFilter/><tableStyleInfo", "<autoFilter> comes too late"),
    ("R6", SHEET, '<row r="5"', '<row r="4"', "row 4 stands after row 4"),
    ("R6", SHEET, '<row r="8"', '<row r="1048577"', "no row 1048577"),
    ("R7", SHEET, '<c r="D4"', '<c r="C4"', "cell C4 stands after C4"),
    ("R7", SHEET, '<c r="D4"', '<c r="D5"', "cell D5 stands in row 4"),
    ("R7", SHEET, '<c r="H4" cm="1"', '<c r="XFE4" cm="1"', "no column 16385"),
    ("R7", SHEET, '<c r="D4"', '<c r="D:4"', "no cell address"),
    ("R8", SHEET, 'ref="A1:K8"', 'ref="A1:K7"', "A8 is outside the dimension"),
    ("R8", SHEET, '<row r="7" spans="1:11"', '<row r="7" spans="1:3"', "D7 is outside its row"),
    ("R9", SHEET, '<col min="12"', '<col min="6"', "6 to 14 overlaps"),
    ("R9", SHEET, 'max="14" width="20.7109375"', 'max="14" width="256"', "impossible width"),
    ("R9", SHEET, 'max="14"', 'max="16385"', "12 to 16385"),
    ("R10", SHEET, '<c r="B1" s="1"/>', '<c r="B1" s="2"/>', "style 2 at B1"),
    ("R10", SHEET, '<col min="12"', '<col style="7" min="12"', "style 7 at 12"),
    ("R11", STYLES, '<cellXfs count="2"', '<cellXfs count="3"', "<cellXfs> has a wrong count"),
    ("R11", SHEET, '<tableParts count="2"', '<tableParts count="1"', "<tableParts> has a wrong"),
    ("R11", "xl/sharedStrings.xml", 'uniqueCount="13"', 'uniqueCount="14"', "wrong uniqueCount"),
    ("R12", STYLES, '<xf numFmtId="0" fontId="1"', '<xf numFmtId="0" fontId="2"', "fontId 2"),
    ("R12", STYLES, '<xf numFmtId="0" fontId="1"', '<xf numFmtId="164" fontId="1"', "format 164"),
    ("R14", SHEET, '<c r="A4" t="s"><v>7</v>', '<c r="A4" t="s"><v>13</v>', "A4 names string 13"),
    ("R15", SHEET, "<v>1.5</v>", "<v>1,5</v>", "'1,5' is no value"),
    ("R15", SHEET, '<c r="B4">', '<c r="B4" t="b">', "'1.5' is no value of type 'b'"),
    ("R15", SHEET, '<c r="B4">', '<c r="B4" t="e">', "'1.5' is no value of type 'e'"),
    ("R15", SHEET, '<c r="B4">', '<c r="B4" t="inlineStr">', "<is> and t='inlineStr'"),
    ("R15", SHEET, '<c r="B4">', '<c r="B4" t="number">', "no type 'number'"),
    ("R16", "xl/sharedStrings.xml", "<t>q1</t>", f"<t>{LONG}</t>", "string 7 is too long"),
    ("R17", SHEET, "B4*2", "=B4*2", "starts with '='"),
    ("R17", SHEET, "B4*2", "(B4*2", "do not balance"),
    ("R17", SHEET, "B4*2", "B4*2&amp;&quot;x", "do not balance"),
    ("R17", SHEET, "B4*2", "CONCATE(B4)", "no function CONCATE"),
    ("R17", SHEET, "B4*2", DEEP, "too long"),
    ("R18", SHEET, ' ref="F4:F6" si="0"', ' ref="F4:F5" si="0"', "F6 is outside its master's"),
    ("R18", SHEET, ' ref="F4:F6" si="0"', ' ref="F4:F6" si="1"', "F5 has no master"),
    ("R20", SHEET, 'ref="A1:D1"/>', 'ref="A1:D1"/><mergeCell ref="D1:E2"/>', "meet at D1"),
    ("R20", SHEET, 'mergeCell ref="A1:D1"', 'mergeCell ref="A1:D3"', "meets a table"),
    ("R21", TABLE, ' ref="A3:D8"', ' ref="A3:E8"', "not as wide"),
    ("R21", TABLE, 'name="Flux"', 'name="Flow"', "header D3 is not the text 'Flow'"),
    ("R21", TABLE, 'name="Flux"', 'name="redshift"', "'redshift' is not unique"),
    ("R21", TABLE, '<tableColumn id="4"', '<tableColumn id="3"', "id '3' is not unique"),
    ("R21", SHEET, '<c r="D3" t="s"><v>6</v>', '<c r="D3"><v>6</v>', "header D3"),
    ("R22", SECOND_TABLE, 'id="2" name="T', 'id="1" name="T', "id '1' is not unique"),
    ("R22", SECOND_TABLE, 'displayName="Table2"', 'displayName="LOG1"', "'LOG1' is not unique"),
    ("R22", SECOND_TABLE, 'displayName="Table2"', 'displayName="deep"', "'deep' is not unique"),
    ("R23", TABLE, 'autoFilter ref="A3:D7"', 'autoFilter ref="A3:D8"', "without totals"),
    ("R23", SECOND_TABLE, "<table ", '<table headerRowCount="0" ', "no header row"),
    ("R24", SHEET, '<c r="A8" t="s"><v>2</v>', '<c r="A8" t="s"><v>3</v>', "A8 is not its label"),
    ("R24", SHEET, "<f>SUBTOTAL(109,[Night])</f>", "", "C8 has no SUBTOTAL"),
    ("R24", SHEET, '<c r="C8">', '<c r="B8"><v>1</v></c><c r="C8">', "B8 should be empty"),
    ("R25", SECOND_TABLE, ' ref="J3:K5" t', ' ref="D3:E5" t', "meets xl/tables/table1.xml"),
    ("R25", SHEET, '<tablePart r:id="rId2"/>', "", "differ"),
    ("R26", CHAIN, 'r="F6"', 'r="F7"', "F7 of sheet id 1 has no formula"),
    ("R26", CHAIN, 'i="1"', 'i="3"', "F4 of sheet id 3 has no formula"),
    ("R27", WORKBOOK, 'name="Deep"', 'name="AB12"', "'AB12' is no legal name"),
    ("R27", WORKBOOK, 'name="Deep"', 'name="Deep" localSheetId="2"', "sheet that does not exist"),
    (
        "R27",
        WORKBOOK,
        "<definedName ",
        '<definedName name="DEEP">1</definedName><definedName ',
        "'deep' occurs twice",
    ),
    ("R28", WORKBOOK, 'name="Notes"', 'name="log"', "'log' occurs twice"),
    ("R28", WORKBOOK, 'name="Notes"', 'name="No/tes"', "no legal sheet name"),
    ("R28", WORKBOOK, 'sheetId="2"', 'sheetId="1"', "id '1' is not unique"),
    ("R28", WORKBOOK, "<workbookView ", '<workbookView activeTab="2" ', "active sheet"),
    ("R29", SHEET, 'dxfId="0"', 'dxfId="1"', "dxfId that does not exist"),
    ("R29", SHEET, 'cm="1"', 'cm="2"', "H4 names cm"),
    ("R30", SHEET, "<v>1.5</v>", "<v>-inf</v>", "B4 holds '-inf'"),
    ("R30", SHEET, "<v>1.5</v>", "<v>NaN</v>", "B4 holds 'NaN'"),
]


@pytest.mark.parametrize("damage", DAMAGES, ids=[f"{rule} {what}" for rule, *_, what in DAMAGES])
def test_damage_is_caught_by_its_rule(
    base: Path, tmp_path: Path, damage: tuple[str, str, str, str, str]
) -> None:
    rule, name, old, new, what = damage
    damaged = repack(base, tmp_path / "damaged.xlsx", {name: swapped(part(base, name), old, new)})
    found = problems(damaged)
    assert any(text.startswith(f"{rule} ") and what in text for text in found), found


def test_every_rule_has_a_damage() -> None:
    special = {"R1", "R13", "R19"}  # those below, which one replacement in a part cannot do
    assert {rule for rule, *_ in DAMAGES} | special == {f"R{n}" for n in range(1, 31)}


def test_a_part_without_content_type_is_caught(base: Path, tmp_path: Path) -> None:
    damaged = repack(base, tmp_path / "damaged.xlsx", {"xl/media/image1.png": b"no picture"})
    assert problems(damaged) == ["R2 xl/media/image1.png: has no content type"]


def test_names_that_differ_in_case_only_are_caught(base: Path, tmp_path: Path) -> None:
    damaged = repack(base, tmp_path / "damaged.xlsx", {"XL/styles.xml": part(base, STYLES)})
    assert "R1 xl/styles.xml: name occurs twice in the zip" in problems(damaged)


@pytest.mark.parametrize(
    ("old", "new", "what"),
    [
        (b"PK\5\6", b"....PK\5\6", "not a zip (Bad magic number"),
        (b"PK\3\4", b"PK\3\3", "no local header"),
        (b"xl/styles.xml", b"xl/stales.xml", "another name"),
    ],
)
def test_a_damaged_zip_is_caught(
    base: Path, tmp_path: Path, old: bytes, new: bytes, what: str
) -> None:
    damaged = tmp_path / "damaged.xlsx"
    damaged.write_bytes(base.read_bytes().replace(old, new, 1))
    assert any(text.startswith("R1 ") and what in text for text in problems(damaged))


def test_bytes_before_the_first_member_are_caught(base: Path, tmp_path: Path) -> None:
    damaged = tmp_path / "damaged.xlsx"
    damaged.write_bytes(b"stub" + base.read_bytes())
    assert problems(damaged) == [
        f"R1 {TYPES}: bytes that belong to no member stand before it",
        "R1 : bytes that belong to nothing stand around the directory",
    ]


def test_bytes_after_the_end_are_caught(base: Path, tmp_path: Path) -> None:
    damaged = tmp_path / "damaged.xlsx"
    damaged.write_bytes(base.read_bytes() + b"tail")
    assert problems(damaged) == ["R1 : the file goes on after the end of the zip"]


def test_a_wrong_checksum_is_caught(base: Path, tmp_path: Path) -> None:
    data = bytearray(base.read_bytes())
    with zipfile.ZipFile(base) as archive:
        entry = archive.getinfo(STYLES)
    start = entry.header_offset + 30 + len(STYLES)
    data[start + entry.compress_size // 2] ^= 0xFF
    damaged = tmp_path / "damaged.xlsx"
    damaged.write_bytes(data)
    assert any(text.startswith(f"R1 {STYLES}: cannot be read") for text in problems(damaged))


def test_a_file_that_is_no_zip_is_caught(tmp_path: Path) -> None:
    path = tmp_path / "text.xlsx"
    path.write_text("no workbook", encoding="utf-8")
    assert problems(path) == ["R1 : not a zip (File is not a zip file)"]


def test_more_formats_than_excel_takes_are_caught(base: Path, tmp_path: Path) -> None:
    xf = '<xf numFmtId="0" fontId="0" fillId="0" borderId="0" xfId="0"/>'
    styles = swapped(part(base, STYLES), '<cellXfs count="2">', '<cellXfs count="64001">')
    styles = swapped(styles, "</cellXfs>", xf * 63_999 + "</cellXfs>")
    damaged = repack(base, tmp_path / "damaged.xlsx", {STYLES: styles})
    assert problems(damaged) == ["R13 styles: has more cell formats than Excel takes"]


def test_a_cell_filled_inside_a_merge_is_new(base: Path, tmp_path: Path) -> None:
    xml = swapped(part(base, SHEET), '<c r="B1" s="1"/>', '<c r="B1" s="1"><v>1</v></c>')
    after = repack(base, tmp_path / "after.xlsx", {SHEET: xml})
    assert problems(after) == []
    assert new_problems(base, after) == [f"R19 {SHEET}: B1 is new inside a merged range"]


def test_a_cell_filled_inside_an_array_is_new(base: Path, tmp_path: Path) -> None:
    with_gap = swapped(part(base, SHEET), '<c r="G6"><v>0</v></c>', "")
    before = repack(base, tmp_path / "before.xlsx", {SHEET: with_gap})
    what = f"R19 {SHEET}: G6 is new inside an array or data table"
    assert new_problems(before, base) == [what]


def test_a_changed_encoding_is_new(base: Path, tmp_path: Path) -> None:
    marked = b"\xef\xbb\xbf" + part(base, SHEET)
    after = repack(base, tmp_path / "after.xlsx", {SHEET: marked})
    assert problems(after) == []
    what = f"R4 {SHEET}: encoding or root element is not what it was"
    assert new_problems(base, after) == [what]


def test_a_problem_that_was_there_before_is_not_new(base: Path, tmp_path: Path) -> None:
    xml = swapped(part(base, SHEET), "<v>1.5</v>", "<v>1,5</v>")
    before = repack(base, tmp_path / "before.xlsx", {SHEET: xml})
    xml = swapped(xml, '<c r="B5"><v>2.5<', '<c r="B5"><v>NaN<')
    after = repack(base, tmp_path / "after.xlsx", {SHEET: xml})
    assert {text.split()[0] for text in new_problems(before, after)} == {"R15", "R30"}
    assert all("B5" in text for text in new_problems(before, after))
