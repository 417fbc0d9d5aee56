"""Tables: what is read, which may grow, and that a grown one is whole in the eyes of others."""

from __future__ import annotations

import io
import zipfile

import openpyxl
import pytest
import xlsxwriter
from openpyxl.worksheet.table import Table as OpenpyxlTable

from tests.workbook_tools.corpus import corpus_parts, needs_corpus
from tests.workbook_tools.loose_parts import MAIN, applied
from tests.workbook_tools.schema_check import needs_schemas, schema_problems
from workbook_tools.cell_address import parse_range
from workbook_tools.errors import Refusal
from workbook_tools.splice import EditKind, undone
from workbook_tools.tables import MAX_NAME, Table, free_name, free_names, grow, read_table
from workbook_tools.xml_offsets import parse

COLUMNS = (
    '<tableColumns count="3"><tableColumn id="16" name="Object"/><tableColumn id="1" name="z"/>'
    '<tableColumn id="12" name="a&amp;b"/></tableColumns>'
)


def table(
    inside: str = COLUMNS, attributes: str = "", ref: str = "B3:D9", root: str = "table"
) -> bytes:
    return (
        f'<{root} xmlns="{MAIN}" id="4" name="Table4" displayName="Log" ref="{ref}" {attributes}>'
        f'{inside}<tableStyleInfo name="TableStyleLight9"/></{root}>'
    ).encode()


def test_a_table_is_read() -> None:
    assert read_table(table(), "xl/tables/table1.xml") == Table(
        part="xl/tables/table1.xml",
        name="Log",
        id=4,
        ref=parse_range("B3:D9"),
        header_rows=1,
        totals_rows=0,
        columns=("Object", "z", "a&b"),
        growable=True,
        reason="",
    )


def test_the_data_lie_between_header_and_totals() -> None:
    assert read_table(table(), "p").data == parse_range("B4:D9")
    whole = read_table(table(attributes='headerRowCount="0" totalsRowCount="1"'), "p")
    assert (whole.header_rows, whole.totals_rows) == (0, 1)
    assert whole.data == parse_range("B3:D8")


def test_a_totals_row_exists_only_where_it_is_counted() -> None:
    assert read_table(table(attributes='totalsRowShown="1"'), "p").totals_rows == 0


def test_escaped_names_are_read_as_the_header_shows_them() -> None:
    inside = (
        '<tableColumns count="1"><tableColumn id="1" name="redshift_x000a_(z) _x005f_x0041_"/>'
        "</tableColumns>"
    )
    assert read_table(table(inside, ref="A1:A5"), "p").columns == ("redshift\n(z) _x0041_",)


@pytest.mark.parametrize(
    ("xml", "words"),
    [
        (table(attributes='tableType="queryTable"'), "result of a query"),
        (table(COLUMNS.replace('id="1"', 'id="1" queryTableFieldId="2"')), "result of a query"),
        (table(attributes='tableType="xml"'), "mapped to an XML file"),
        (
            table(
                COLUMNS.replace(
                    '<tableColumn id="1" name="z"/>',
                    '<tableColumn id="1" name="z"><xmlColumnPr mapId="1"/></tableColumn>',
                )
            ),
            "mapped to an XML file",
        ),
        (table(attributes='tableType="other"'), "unknown kind 'other'"),
        (table(ref="B3:E9"), "lists 3 columns but covers 4"),
        (table(""), "lists 0 columns but covers 3"),
        (table(ref="XFB1:XFD4"), "last column of the sheet"),
    ],
)
def test_a_table_that_must_not_grow_says_why(xml: bytes, words: str) -> None:
    found = read_table(xml, "p")
    assert not found.growable
    assert words in found.reason
    with pytest.raises(ValueError, match="cannot grow"):
        grow(xml, "p", ["Age"])


@pytest.mark.parametrize(
    "xml",
    [
        table(root="notTable"),
        table(ref="B3:"),
        table(attributes='headerRowCount="x"'),
    ],
)
def test_what_is_no_table_is_refused_by_part(xml: bytes) -> None:
    with pytest.raises(Refusal, match=r"^xl/tables/table1\.xml should describe a table"):
        read_table(xml, "xl/tables/table1.xml")


def test_growing_changes_exactly_range_filter_count_and_columns() -> None:
    inside = (
        '<autoFilter ref="B3:D8"><filterColumn colId="1"/></autoFilter>'
        '<sortState ref="B4:D8"><sortCondition ref="C4:C8"/></sortState>' + COLUMNS
    )
    xml = table(inside, 'totalsRowCount="1"')
    edits = grow(xml, "p", ["Age [Gyr]", "Odd <\"&'> name"])
    assert [edit.kind for edit in edits] == [
        EditKind.ATTRIBUTE_CHANGED,
        EditKind.ATTRIBUTE_CHANGED,
        EditKind.ATTRIBUTE_CHANGED,
        EditKind.TABLE_COLUMN_APPENDED,
    ]
    after = applied(xml, edits)
    assert after == (
        table(inside, 'totalsRowCount="1"')
        .replace(b'ref="B3:D9"', b'ref="B3:F9"')
        .replace(b'Filter ref="B3:D8"', b'Filter ref="B3:F8"')
        .replace(b'count="3"', b'count="5"')
        .replace(
            b"</tableColumns>",
            b'<tableColumn id="17" name="Age [Gyr]"/>'
            b'<tableColumn id="18" name="Odd &lt;&quot;&amp;&apos;&gt; name"/></tableColumns>',
        )
    )
    assert read_table(after, "p").columns[3:] == ("Age [Gyr]", "Odd <\"&'> name")
    removed = [xml[edit.start : edit.end] for edit in edits]
    assert undone(after, edits, removed) == xml


def test_a_table_without_header_or_filter_gets_none() -> None:
    xml = table(attributes='headerRowCount="0"')
    after = parse(applied(xml, grow(xml, "p", ["Age"])), "p")
    assert after.find("autoFilter") is None
    assert after.attributes["headerRowCount"] == "0"
    assert after.attributes["ref"] == "B3:E9"


def test_prefixes_and_missing_counts_are_kept() -> None:
    xml = (
        f"<x:table xmlns:x='{MAIN}' id='1' displayName='T' ref='A1:A3'>\n <x:tableColumns>\n"
        "  <x:tableColumn id='7' name='z'/>\n </x:tableColumns>\n</x:table>"
    ).encode()
    after = applied(xml, grow(xml, "p", ["Age"]))
    assert after == xml.replace(b"A1:A3", b"A1:B3").replace(
        b"</x:tableColumns>", b'<x:tableColumn id="8" name="Age"/></x:tableColumns>'
    )


def test_ids_begin_at_one_where_no_column_has_any() -> None:
    xml = table('<tableColumns><tableColumn name="z"/></tableColumns>', ref="A1:A3")
    assert b'<tableColumn id="1" name="Age"/><' in applied(xml, grow(xml, "p", ["Age"]))


def test_names_that_look_like_escapes_are_protected() -> None:
    xml = table()
    assert read_table(applied(xml, grow(xml, "p", ["_x0041_"])), "p").columns[-1] == "_x0041_"


@pytest.mark.parametrize(
    "names", [["Z"], ["A&B"], ["Age", "AGE"], ["two\nlines"], [""], ["x" * 256]]
)
def test_names_that_are_not_free_are_a_bug_of_the_caller(names: list[str]) -> None:
    with pytest.raises(ValueError, match="not free"):
        grow(table(), "p", names)


def test_no_table_grows_beyond_the_sheet() -> None:
    xml = table(ref="XFA1:XFC4")
    assert grow(xml, "p", ["Age"])
    with pytest.raises(ValueError, match="cannot grow"):
        grow(xml, "p", ["Age", "Distance"])


@pytest.mark.parametrize(
    ("wanted", "taken", "name"),
    [
        ("Age [Gyr]", [], "Age [Gyr]"),
        ("Age [Gyr]", ["AGE [gyr]"], "Age [Gyr] (2)"),
        ("Age", ["age", "Age (2)", "AGE (3)"], "Age (4)"),
        ("STRASSE", ["straße"], "STRASSE (2)"),
        ("two\r\nlines\tor more", [], "two lines or more"),
        ("  ", ["column"], "Column (2)"),
        ("", [], "Column"),
        ("x" * 300, [], "x" * 255),
        ("x" * 300, ["X" * 255], "x" * 251 + " (2)"),
        ("😀" * 200, [], "😀" * 127),
    ],
)
def test_a_free_name_is_as_wanted_or_numbered(wanted: str, taken: list[str], name: str) -> None:
    assert free_name(wanted, taken) == name
    assert len(name.encode("utf-16-le")) // 2 <= MAX_NAME


def test_several_free_names_are_free_of_each_other() -> None:
    assert free_names(["Age", "age", "z"], ["Z"]) == ["Age", "age (2)", "z (2)"]


def table_of_a_real_writer() -> dict[str, bytes]:
    sink = io.BytesIO()
    book = xlsxwriter.Workbook(sink)
    sheet = book.add_worksheet()
    columns = [
        {"header": "Object", "total_string": "all"},
        {"header": "z", "total_function": "sum"},
    ]
    sheet.add_table("B3:C8", {"columns": columns, "total_row": True, "name": "Quasars"})
    sheet.write("D3", "Age [Gyr]")
    book.close()
    with zipfile.ZipFile(sink) as archive:
        return {name: archive.read(name) for name in archive.namelist()}


def test_openpyxl_sees_the_grown_table() -> None:
    parts = table_of_a_real_writer()
    xml = parts["xl/tables/table1.xml"]
    assert read_table(xml, "p").totals_rows == 1
    parts["xl/tables/table1.xml"] = applied(xml, grow(xml, "p", ["Age [Gyr]"]))
    sink = io.BytesIO()
    with zipfile.ZipFile(sink, "w") as target:
        for name, content in parts.items():
            target.writestr(name, content)
    seen: OpenpyxlTable = openpyxl.load_workbook(sink).active.tables["Quasars"]
    assert (seen.ref, seen.autoFilter.ref, seen.totalsRowCount) == ("B3:D8", "B3:D7", 1)
    assert [column.name for column in seen.tableColumns] == ["Object", "z", "Age [Gyr]"]
    assert len({column.id for column in seen.tableColumns}) == 3


@pytest.mark.long
@needs_corpus
@needs_schemas
def test_the_tables_of_the_corpus_grow_and_stay_valid() -> None:
    grown = fixed = 0
    for file, xml in corpus_parts(".xml"):
        if b"<table " in xml[:300]:
            found = read_table(xml, file)
            if not found.growable:
                fixed += 1
                assert "query" in found.reason or "XML" in found.reason
                continue
            grown += 1
            after = applied(xml, grow(xml, file, free_names(["Age", "z"], found.columns)))
            again = read_table(after, file)
            assert again.ref.width == len(again.columns) == found.ref.width + 2
            assert schema_problems(after) == schema_problems(xml)
    assert (grown > 0, fixed > 0) == (True, True)
