"""The comparison of two versions of a part names what is permitted and refuses all else."""

from __future__ import annotations

import pytest

from tests.workbook_tools.differences import part_change
from tests.workbook_tools.tag_differences import Difference, NotPermittedError
from workbook_tools.splice import EditKind

HEAD = (
    '<?xml version="1.0"?>\n<worksheet xmlns="u"><dimension ref="A1:B4"/>'
    '<cols><col min="1" max="9" width="9" style="1"/></cols><sheetData>'
)
ROWS = (
    '<row r="1" spans="1:2"><c r="A1" t="s"><v>0</v></c><c r="B1" s="3"/></row>\n'
    '<row r="3"/><row r="4"><c r="B4"><f>A1</f><v>2</v></c></row>'
)
OLD = f"{HEAD}{ROWS}</sheetData><!-- end --></worksheet>"
STYLES = (
    '<styleSheet><fonts count="1"><font/></fonts><cellXfs count="1"><xf a="1"/>\n</cellXfs>'
    "</styleSheet>"
)
TABLE = (
    '<table ref="A1:B9" name="T"><autoFilter ref="A1:B9"/><tableColumns count="2">'
    '<tableColumn id="1" name="a"/><tableColumn id="2" name="b"/></tableColumns></table>'
)
WORKBOOK = '<workbook><sheets><sheet name="Log"/></sheets></workbook>'


def part_differences(old: bytes, new: bytes) -> list[Difference]:
    """The differences, after a look whether undoing them gives the old bytes."""
    change = part_change(old, new)
    assert change.undone == old
    return change.differences


@pytest.mark.parametrize(
    ("part", "old", "new", "kind"),
    [
        (OLD, "</v></c></row></s", '</v></c><c r="C4"><v>1</v></c></row></s', "cell inserted"),
        (OLD, '<c r="B4"', '<c r="A4"><v>1</v></c><c r="B4"', "cell inserted"),
        (OLD, '<c r="B1" s="3"/>', '<c r="B1" s="4"><v>1</v></c>', "empty cell replaced"),
        (
            OLD,
            '<row r="3"/>',
            '<row r="2"><c r="A2"><v>1</v></c></row><row r="3"/>',
            "row inserted",
        ),
        (OLD, 'ref="A1:B4"', 'ref="A1:C4"', "attribute changed"),
        (OLD, 'spans="1:2"', 'spans="1:3"', "attribute changed"),
        (
            STYLES,
            "<fonts",
            '<numFmts count="1"><numFmt/></numFmts><fonts',
            "number format appended",
        ),
        (WORKBOOK, "</sheets>", '</sheets><calcPr fullCalcOnLoad="1"/>', "recalculate flag set"),
    ],
)
def test_one_permitted_edit_is_named(part: str, old: str, new: str, kind: str) -> None:
    changed = part.replace(old, new, 1)
    assert changed != part
    assert [d.kind.value for d in part_differences(part.encode(), changed.encode())] == [kind]


def test_a_column_element_is_split_around_a_filled_column() -> None:
    old = '<col min="1" max="9" width="9" style="1"/>'
    new = '<col min="{}" max="{}" width="{}" style="1"/>'.format
    changed = OLD.replace(old, new(1, 2, 9) + new(3, 3, 12) + new(4, 9, 9))
    with pytest.raises(NotPermittedError, match="unfilled"):
        part_differences(OLD.encode(), changed.encode())
    changed = changed.replace("</v></c></row></s", '</v></c><c r="C4"><v>1</v></c></row></s')
    found = part_differences(OLD.encode(), changed.encode())
    assert [d.kind for d in found] == [EditKind.COLUMN_WIDTH_SPLIT, EditKind.CELL_INSERTED]


def test_a_column_element_is_added_for_a_filled_column() -> None:
    changed = OLD.replace("</cols>", '<col min="10" max="10" width="12"/></cols>')
    with pytest.raises(NotPermittedError, match="unfilled"):
        part_differences(OLD.encode(), changed.encode())
    changed = changed.replace("</v></c></row></s", '</v></c><c r="J4"><v>1</v></c></row></s')
    found = part_differences(OLD.encode(), changed.encode())
    assert [d.kind for d in found] == [EditKind.COLUMN_WIDTH_ADDED, EditKind.CELL_INSERTED]


def test_an_empty_row_is_opened_and_its_cells_are_counted() -> None:
    changed = OLD.replace('<row r="3"/>', '<row r="3"><c r="C3"><v>1</v></c></row>')
    found = part_differences(OLD.encode(), changed.encode())
    assert [d.kind for d in found] == [EditKind.EMPTY_ROW_OPENED, EditKind.CELL_INSERTED]
    assert [d.cells for d in found] == [(), ((3, 3),)]


def test_an_empty_sheet_gets_rows() -> None:
    old = "<worksheet><sheetData/></worksheet>"
    new = '<worksheet><sheetData><row r="2"><c r="A2"><v>1</v></c></row></sheetData></worksheet>'
    found = part_differences(old.encode(), new.encode())
    assert [(d.kind, d.cells) for d in found] == [(EditKind.ROW_INSERTED, ((2, 1),))]


def test_a_style_is_appended_and_counted() -> None:
    changed = STYLES.replace('count="1"><xf a="1"/>', 'count="2"><xf a="1"/><xf a="2"/>')
    kinds = [d.kind for d in part_differences(STYLES.encode(), changed.encode())]
    assert kinds == [EditKind.ATTRIBUTE_CHANGED, EditKind.STYLE_APPENDED]


def test_a_table_grows() -> None:
    changed = TABLE.replace("A1:B9", "A1:C9").replace('count="2"', 'count="3"')
    changed = changed.replace("</tableColumns>", '<tableColumn id="3" name="c"/></tableColumns>')
    kinds = [d.kind for d in part_differences(TABLE.encode(), changed.encode())]
    assert kinds == [EditKind.ATTRIBUTE_CHANGED] * 3 + [EditKind.TABLE_COLUMN_APPENDED]


def test_the_flag_of_a_calculation_element_is_set() -> None:
    old = '<workbook><calcPr calcId="7"/></workbook>'
    new = '<workbook><calcPr calcId="7" fullCalcOnLoad="1"/></workbook>'
    found = part_differences(old.encode(), new.encode())
    assert [d.kind for d in found] == [EditKind.RECALCULATE_FLAG_SET]


def test_cells_without_addresses_are_counted() -> None:
    old = "<worksheet><sheetData><row><c/></row><row><c/><c/></row></sheetData></worksheet>"
    new = old.replace("</row></s", '<c r="C2"><v>1</v></c></row></s')
    assert [d.cells for d in part_differences(old.encode(), new.encode())] == [((2, 3),)]


@pytest.mark.parametrize(
    ("part", "old", "new"),
    [
        (OLD, "<v>2</v>", "<v>3</v>"),
        (OLD, '<c r="B4"><f>A1</f><v>2</v></c>', ""),
        (OLD, '<row r="3"/>', ""),
        (OLD, '<row r="3"/>', '<row r="2"/>'),
        (OLD, '<row r="3"/>', '<row r="3" ht="9"/>'),
        (OLD, '<row r="3"/>', "<row r='3'/>"),
        (OLD, '<row r="3"/>', '<row  r="3"/>'),
        (OLD, "\n<row", "<row"),
        (OLD, "<!-- end -->", "<!-- END -->"),
        (OLD, "<!-- end -->", '<autoFilter ref="A1:B2"/><!-- end -->'),
        (OLD, "</worksheet>", "</worksheet >"),
        (OLD, 'ref="A1:B4"/>', 'ref="A1:C4" />'),
        (OLD, 'version="1.0"', 'version="1.1"'),
        (OLD, 'xmlns="u"', 'xmlns="v"'),
        (OLD, 'ref="A1:B4"', 'ref="B1:C4"'),
        (OLD, 'spans="1:2"', 'spans="2:3"'),
        (OLD, ' spans="1:2"', ""),
        (OLD, 'width="9" style="1"', 'width="12" style="1"'),
        (OLD, 'width="9" style="1"', 'width="9" style="2"'),
        (OLD, 'max="9"', 'max="8"'),
        (OLD, '<c r="B1" s="3"/>', '<c r="B1" s="4"/>'),
        (OLD, '<c r="B4"', '<x:c r="A4"><v>1</v></x:c><c r="B4"'),
        (STYLES, '<xf a="1"/>', '<xf a="0"/><xf a="1"/>'),
        (STYLES, '<xf a="1"/>', '<xf a="2"/>'),
        (STYLES, "<font/>", "<font/><font/>"),
        (STYLES, "<fonts", '<numFmts count="1"><numFmt/></numFmts><numFmts/><fonts'),
        (TABLE, 'ref="A1:B9" n', 'ref="A1:B8" n'),
        (TABLE, 'ref="A1:B9" n', 'ref="A1:C10" n'),
        (TABLE, 'name="b"', 'name="c"'),
        (TABLE, 'count="2"', 'count="3"'),
        (TABLE, '<tableColumn id="2"', '<tableColumn id="3" name="c"/><tableColumn id="2"'),
        (WORKBOOK, '<sheet name="Log"/>', '<sheet name="Log"/><sheet name="More"/>'),
        (WORKBOOK, "<sheets>", '<calcPr fullCalcOnLoad="0"/><sheets visible="1">'),
    ],
)
def test_any_other_difference_is_refused(part: str, old: str, new: str) -> None:
    changed = part.replace(old, new, 1)
    assert changed != part
    with pytest.raises(NotPermittedError):
        part_differences(part.encode(), changed.encode())


def test_equal_parts_have_no_differences() -> None:
    assert part_differences(OLD.encode(), OLD.encode()) == []


@pytest.mark.parametrize("part", ["<a><b></a></b>", "<a>", "<a", "<a></a><"])
def test_a_part_that_is_not_xml_is_refused(part: str) -> None:
    with pytest.raises(ValueError, match=r"token|nest|ends inside"):
        part_differences(part.encode(), OLD.encode())
