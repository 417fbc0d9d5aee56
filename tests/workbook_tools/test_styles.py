"""Styles: what a style shows, and that a new one is its neighbour in all but the number format."""

from __future__ import annotations

import io
import zipfile

import openpyxl
import pytest
import xlsxwriter

from tests.workbook_tools.corpus import corpus_parts, needs_corpus
from tests.workbook_tools.loose_parts import MAIN, STRICT_MAIN, applied
from tests.workbook_tools.schema_check import needs_schemas, schema_problems
from workbook_tools.errors import Refusal
from workbook_tools.splice import EditKind, undone
from workbook_tools.styles import MAX_CODE, MAX_STYLES, StyleSheet
from workbook_tools.xml_offsets import parse

CODE = '0.000" Mpc"'


def styles(xfs: str, before: str = "", after: str = "", family: str = MAIN) -> bytes:
    return (
        f'<styleSheet xmlns="{family}">{before}<fonts/><cellXfs count="{xfs.count("<xf")}">{xfs}'
        f"</cellXfs>{after}</styleSheet>"
    ).encode()


def with_formats(**codes: str) -> str:
    """Return a list of number formats; keys are their ids behind a letter."""
    inside = "".join(f'<numFmt numFmtId="{k[1:]}" formatCode="{v}"/>' for k, v in codes.items())
    return f'<numFmts count="{len(codes)}">{inside}</numFmts>'


PLAIN = '<xf numFmtId="0" fontId="0" fillId="0" borderId="0" xfId="0"/>'


def test_styles_are_counted_and_their_formats_read() -> None:
    sheet = StyleSheet(
        styles(
            PLAIN + '<xf numFmtId="2"/><xf numFmtId="170"/><xf numFmtId="171"/><xf/>',
            with_formats(n170="0.0&quot; Gyr&quot;"),
        ),
        "p",
    )
    assert len(sheet) == 5
    assert [sheet.format_code(style) for style in range(5)] == [
        "General",
        "0.00",
        '0.0" Gyr"',
        "General",
        "General",
    ]


def test_a_code_of_the_file_counts_before_the_built_in_one_of_the_same_id() -> None:
    xml = styles(PLAIN + '<xf numFmtId="2"/><xf numFmtId="14"/>', with_formats(n2="0.0", n14="0"))
    sheet = StyleSheet(xml, "p")
    assert (sheet.format_code(1), sheet.is_date(2)) == ("0.0", False)
    assert sheet.with_format(0, "0.00") == 3  # the built-in id 2 no longer means it
    assert b'<numFmt numFmtId="164" formatCode="0.00"/>' in applied(xml, sheet.edits())


def test_the_built_in_codes_are_those_of_the_standard() -> None:
    """ECMA-376 part 1, 18.8.30 (from memory): the codes that a fill is likely to ask for."""
    for number, code in {0: "General", 1: "0", 2: "0.00", 3: "#,##0", 11: "0.00E+00"}.items():
        sheet = StyleSheet(styles(f'<xf numFmtId="{number}"/>'), "p")
        assert sheet.format_code(0) == code


@pytest.mark.parametrize(
    ("code", "is_date"),
    [
        ("yyyy-mm-dd", True),
        ("[h]:mm", True),
        ("[$-409]d\\-mmm;@", True),
        ("h:mm AM/PM", True),
        ("General", False),
        ("0.00E+00", False),
        ('0.0" days"', False),
        ("0.00\\ \\M\\p\\c", False),
        ("[Red]0.0;[Blue]-0.0", False),
        ("#,##0_);(#,##0)", False),
        ("[>=1000]0;[<0.001]0.00E+00;0.0000", False),
        ("@", False),
    ],
)
def test_dates_are_told_from_numbers_by_their_code(code: str, is_date: bool) -> None:
    written = code.replace('"', "&quot;").replace("<", "&lt;").replace(">", "&gt;")
    sheet = StyleSheet(styles('<xf numFmtId="200"/>', with_formats(n200=written)), "p")
    assert sheet.format_code(0) == code
    assert sheet.is_date(0) is is_date


def test_built_in_ids_of_the_standard_are_dates_where_it_says_so() -> None:
    """ECMA-376 part 1, 18.8.30 (from memory): 14-22, 45-47, and by language 27-36 and 50-58."""
    numbers = range(164)
    sheet = StyleSheet(styles("".join(f'<xf numFmtId="{n}"/>' for n in numbers)), "p")
    dates = [n for n in numbers if sheet.is_date(n)]
    assert dates == [*range(14, 23), *range(27, 37), 45, 46, 47, *range(50, 59)]


def test_a_style_breaks_lines_only_where_its_alignment_says_so() -> None:
    inside = ("", "<alignment/>", '<alignment wrapText="1"/>', '<alignment wrapText="0"/>')
    sheet = StyleSheet(styles("".join(f"<xf>{text}</xf>" for text in inside)), "p")
    assert [sheet.wraps(style) for style in range(4)] == [False, False, True, False]


@pytest.mark.parametrize("style", [-1, 1, 99])
def test_a_style_that_is_not_there_is_refused(style: int) -> None:
    sheet = StyleSheet(styles(PLAIN), "xl/styles.xml")
    for ask in (
        sheet.format_code,
        sheet.is_date,
        sheet.wraps,
        lambda number: sheet.with_format(number, "0"),
    ):
        with pytest.raises(Refusal, match=rf"^xl/styles\.xml has no cell format number {style},"):
            ask(style)


def test_a_sheet_without_any_list_of_styles_shows_the_plain_one_and_cannot_grow() -> None:
    sheet = StyleSheet(f'<styleSheet xmlns="{MAIN}"/>'.encode(), "p")
    assert (len(sheet), sheet.format_code(0)) == (0, "General")
    assert not sheet.is_date(0)
    assert not sheet.wraps(0)
    for ask in (sheet.format_code, sheet.is_date, sheet.wraps):
        with pytest.raises(Refusal, match="no cell format number 1"):
            ask(1)
    with pytest.raises(Refusal, match="no cell format number 0"):
        sheet.with_format(0, "0.00")


def test_a_style_that_has_the_code_already_is_itself_the_answer() -> None:
    sheet = StyleSheet(styles(PLAIN + '<xf numFmtId="2" fontId="3"/>'), "p")
    assert sheet.with_format(1, "0.00") == 1
    assert sheet.edits() == []


def test_an_equal_style_is_used_whatever_the_order_of_its_attributes() -> None:
    sheet = StyleSheet(
        styles(
            '<xf numFmtId="0" fontId="1"/><xf numFmtId="2" fontId="1"/>'
            '<xf applyNumberFormat="1" quotePrefix="0" fontId="1" numFmtId="2"/>'
        ),
        "p",
    )
    assert sheet.with_format(0, "0.00") == 2
    assert sheet.edits() == []


def test_an_equal_format_of_the_file_or_a_built_in_one_is_used() -> None:
    xml = styles(PLAIN, with_formats(n180="0.000"))
    sheet = StyleSheet(xml, "p")
    assert [sheet.with_format(0, "0.000"), sheet.with_format(0, "0.00E+00")] == [1, 2]
    assert [edit.kind for edit in sheet.edits()] == [
        EditKind.ATTRIBUTE_CHANGED,
        EditKind.STYLE_APPENDED,
    ]
    after = StyleSheet(applied(xml, sheet.edits()), "p")
    assert [after.format_code(style) for style in range(3)] == ["General", "0.000", "0.00E+00"]
    assert b'numFmtId="180" fontId="0"' in applied(xml, sheet.edits())
    assert b'numFmtId="11" fontId="0"' in applied(xml, sheet.edits())


def test_the_same_wish_twice_appends_once_and_appended_styles_can_be_models() -> None:
    xml = styles(PLAIN)
    sheet = StyleSheet(xml, "p")
    first = sheet.with_format(0, CODE)
    assert (first, sheet.with_format(0, CODE), len(sheet)) == (1, 1, 2)
    assert sheet.with_format(first, "0.0000") == 2
    assert sheet.with_format(2, "General") == 3
    assert [sheet.format_code(style) for style in range(4)] == [
        "General",
        CODE,
        "0.0000",
        "General",
    ]
    after = StyleSheet(applied(xml, sheet.edits()), "p")
    assert len(after) == 4
    assert [after.format_code(style) for style in range(4)] == [
        sheet.format_code(style) for style in range(4)
    ]


NEIGHBOUR = (
    '<xf numFmtId="9" fontId="4" fillId="2" borderId="7" xfId="3" applyFont="1" quotePrefix="1"'
    ' pivotButton="true"><alignment horizontal="right" wrapText="1"/><protection locked="0"/>'
    "<extLst><ext uri='{box}'><q:boxes xmlns:q='u'/></ext></extLst></xf>"
)


def test_a_new_style_is_its_neighbour_but_for_the_format_and_what_must_not_be_copied() -> None:
    xml = styles(PLAIN + NEIGHBOUR)
    sheet = StyleSheet(xml, "p")
    assert sheet.with_format(1, "0.0000") == 2
    after = applied(xml, sheet.edits())
    old, new = parse(after, "p").children[2].children[1:]
    assert new.attributes == old.attributes | {
        "numFmtId": "164",
        "applyNumberFormat": "1",
        "quotePrefix": "0",
        "pivotButton": "0",
    }
    assert after[new.start_tag_end : new.end_tag_start] == (
        b'<alignment horizontal="right" wrapText="1"/><protection locked="0"/>'
    )


@pytest.mark.parametrize("spoiler", ['quotePrefix="1"', 'pivotButton="1"', "extLst"])
def test_a_style_with_the_code_but_something_that_must_not_be_copied_is_no_answer(
    spoiler: str,
) -> None:
    marked = (
        '<xf numFmtId="2"><extLst/></xf>'
        if spoiler == "extLst"
        else f"<xf numFmtId='2' {spoiler}/>"
    )
    sheet = StyleSheet(styles(marked), "p")
    assert sheet.with_format(0, "0.00") == 1
    assert sheet.with_format(1, "0.00") == 1


def test_a_new_id_is_above_every_id_in_use_also_those_of_conditional_formats() -> None:
    differences = '<dxfs count="1"><dxf><numFmt numFmtId="300" formatCode="0"/></dxf></dxfs>'
    for before, after, number in [
        ("", "", 164),
        (with_formats(n5="0.0"), "", 164),
        (with_formats(n170="0.0"), "", 171),
        (with_formats(n170="0.0"), differences, 301),
    ]:
        xml = styles(PLAIN, before, after)
        sheet = StyleSheet(xml, "p")
        sheet.with_format(0, "0.00000")
        assert f'<numFmt numFmtId="{number}" formatCode="0.00000"/>'.encode() in applied(
            xml, sheet.edits()
        )


@pytest.mark.parametrize(
    ("before", "expected"),
    [
        ("", '<numFmts count="2">NEW</numFmts>'),
        ('<numFmts count="0"/>', '<numFmts count="2">NEW</numFmts>'),
        ("<numFmts/>", "<numFmts>NEW</numFmts>"),
        (
            with_formats(n170="a&amp;b"),
            with_formats(n170="a&amp;b").replace('"1"', '"3"').replace("</", "NEW</"),
        ),
        (
            '<numFmts count="2"><c:choice xmlns:c="u"><numFmt numFmtId="170" formatCode="0.0"/>'
            '</c:choice><numFmt numFmtId="160" formatCode="0"/></numFmts>',
            '<numFmts count="4"><c:choice xmlns:c="u"><numFmt numFmtId="170" formatCode="0.0"/>'
            '</c:choice><numFmt numFmtId="160" formatCode="0"/>NEW</numFmts>',
        ),
    ],
)
def test_formats_are_appended_to_the_list_or_with_a_new_list_before_the_fonts(
    before: str, expected: str
) -> None:
    xml = styles(PLAIN, before)
    sheet = StyleSheet(xml, "p")
    sheet.with_format(0, CODE)
    sheet.with_format(0, "0.0000&<>")
    first = 171 if "170" in before else 164
    new = (
        f'<numFmt numFmtId="{first}" formatCode="0.000&quot; Mpc&quot;"/>'
        f'<numFmt numFmtId="{first + 1}" formatCode="0.0000&amp;&lt;&gt;"/>'
    )
    after = applied(xml, sheet.edits()).decode()
    listed = expected.replace("NEW", new)
    assert after.startswith(
        f'<styleSheet xmlns="{MAIN}">{listed}<fonts/><cellXfs count="3">{PLAIN}'
    )


def test_edits_come_in_order_and_undoing_them_gives_the_old_bytes() -> None:
    xml = styles(PLAIN + NEIGHBOUR, with_formats(n170="0.0"))
    sheet = StyleSheet(xml, "p")
    sheet.with_format(1, CODE)
    sheet.with_format(0, CODE)
    edits = sheet.edits()
    assert [edit.kind for edit in edits] == [
        EditKind.ATTRIBUTE_CHANGED,
        EditKind.NUMBER_FORMAT_APPENDED,
        EditKind.ATTRIBUTE_CHANGED,
        EditKind.STYLE_APPENDED,
    ]
    removed = [xml[edit.start : edit.end] for edit in edits]
    assert undone(applied(xml, edits), edits, removed) == xml


@pytest.mark.parametrize("family", [MAIN, STRICT_MAIN])
def test_prefix_and_family_of_the_namespace_are_kept(family: str) -> None:
    xml = (
        f"<x:styleSheet xmlns:x='{family}'>\n  <x:fonts/>\n  <x:cellXfs count='1'>\n"
        "    <x:xf numFmtId='0'><x:alignment/></x:xf>\n  </x:cellXfs>\n</x:styleSheet>"
    ).encode()
    sheet = StyleSheet(xml, "p")
    assert sheet.with_format(0, "0.0000") == 1
    after = applied(xml, sheet.edits())
    root = parse(after, "p")
    assert [(child.uri, child.prefix, child.local) for child in root.children] == [
        (family, "x", "numFmts"),
        (family, "x", "fonts"),
        (family, "x", "cellXfs"),
    ]
    assert StyleSheet(after, "p").format_code(1) == "0.0000"


def test_a_code_that_is_too_long_is_refused() -> None:
    sheet = StyleSheet(styles(PLAIN), "p")
    sheet.with_format(0, "0" * MAX_CODE)
    with pytest.raises(Refusal, match=f"has {MAX_CODE + 1} characters"):
        sheet.with_format(0, "0" * (MAX_CODE + 1))


def test_more_styles_than_excel_allows_are_refused() -> None:
    sheet = StyleSheet(styles(PLAIN * (MAX_STYLES - 1)), "xl/styles.xml")
    assert sheet.with_format(0, "0.00") == MAX_STYLES - 1
    with pytest.raises(Refusal, match=r"^xl/styles\.xml holds 64,000 cell formats"):
        sheet.with_format(0, "0.0")
    assert sheet.with_format(5, "0.00") == MAX_STYLES - 1


def formatted_workbook() -> bytes:
    """A workbook of a real writer with a font, a fill and alignments."""
    sink = io.BytesIO()
    book = xlsxwriter.Workbook(sink)
    look = book.add_format({"bold": True, "bg_color": "#DDEEFF", "align": "right", "locked": False})
    dated = book.add_format({"num_format": "yyyy-mm-dd", "italic": True})
    sheet = book.add_worksheet()
    sheet.write(0, 0, 1.5, look)
    sheet.write(1, 0, 44000, dated)
    sheet.write(2, 0, 44000)
    book.close()
    return sink.getvalue()


def test_openpyxl_sees_the_neighbours_look_with_the_new_format() -> None:
    source = zipfile.ZipFile(io.BytesIO(formatted_workbook()))
    sheet = StyleSheet(source.read("xl/styles.xml"), "xl/styles.xml")
    assert [sheet.is_date(style) for style in range(3)] == [False, False, True]
    new = sheet.with_format(1, CODE)
    parts = {name: source.read(name) for name in source.namelist()}
    parts["xl/styles.xml"] = applied(parts["xl/styles.xml"], sheet.edits())
    rows = parts["xl/worksheets/sheet1.xml"]
    parts["xl/worksheets/sheet1.xml"] = rows.replace(b'r="A3"', b'r="A3" s="%d"' % new)
    sink = io.BytesIO()
    with zipfile.ZipFile(sink, "w") as target:
        for name, content in parts.items():
            target.writestr(name, content)
    cells = openpyxl.load_workbook(sink).active
    old, filled = cells["A1"], cells["A3"]
    assert filled.number_format == CODE
    for side in ("font", "fill", "border", "alignment", "protection"):
        assert repr(getattr(filled, side)) == repr(getattr(old, side)), side
    assert filled.font.b
    assert not filled.protection.locked
    assert (old.number_format, cells["A2"].number_format) == ("General", "yyyy-mm-dd")


@pytest.mark.long
@needs_corpus
@needs_schemas
def test_every_style_of_the_corpus_can_be_a_model_and_the_part_stays_valid() -> None:
    seen = 0
    for file, xml in corpus_parts("/styles.xml"):
        sheet = StyleSheet(xml, file)
        before = [sheet.format_code(style) for style in range(len(sheet))]
        new = [sheet.with_format(style, CODE) for style in range(len(before))]
        after = applied(xml, sheet.edits())
        again = StyleSheet(after, file)
        assert [again.format_code(style) for style in range(len(before))] == before
        assert {again.format_code(style) for style in new} == {CODE}
        assert len(again) == len(sheet)
        assert schema_problems(after) == schema_problems(xml)
        seen += 1
    assert seen > 50
