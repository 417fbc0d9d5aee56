"""Widths of new columns: elements are cut around them and everything else keeps its look."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tests.workbook_tools.odd_sheets import view_of
from tests.workbook_tools.rules.sheet_view import SheetView
from tests.workbook_tools.small_sheets import PART, scan_of
from workbook_tools.cell_address import MAX_COLUMN
from workbook_tools.column_widths import column_style, hidden_columns, width_edits
from workbook_tools.errors import Refusal
from workbook_tools.sheet_scan import SheetScan
from workbook_tools.splice import EditKind, spliced, undone

SPLIT, ADDED = EditKind.COLUMN_WIDTH_SPLIT, EditKind.COLUMN_WIDTH_ADDED


def with_columns(columns: str) -> SheetScan:
    return scan_of("", head=f'<dimension ref="A1"/><cols>{columns}</cols>')


def changed(columns: str, widths: dict[int, float]) -> tuple[str, list[EditKind]]:
    """The column elements with new widths, and the kinds of the edits."""
    scan = with_columns(columns)
    made = sorted(width_edits(scan, widths), key=lambda edit: (edit.start, edit.end))
    xml = b"".join(spliced(scan.xml, made)).decode()
    return xml.partition("<cols>")[2].partition("</cols>")[0], [edit.kind for edit in made]


@pytest.mark.parametrize(
    ("column", "expected"),
    [
        (3, '<col min="3" max="3" width="12" customWidth="1"/><col min="4" max="6" width="9"/>'),
        (
            5,
            '<col min="3" max="4" width="9"/><col min="5" max="5" width="12" customWidth="1"/>'
            '<col min="6" max="6" width="9"/>',
        ),
        (6, '<col min="3" max="5" width="9"/><col min="6" max="6" width="12" customWidth="1"/>'),
    ],
    ids=["first", "middle", "last"],
)
def test_an_element_over_several_columns_is_split(column: int, expected: str) -> None:
    assert changed('<col min="3" max="6" width="9"/>', {column: 12.0}) == (expected, [SPLIT])


def test_the_parts_of_a_split_element_keep_its_look() -> None:
    old = "<col min='2' max='16384' width='9.1' style='4' outlineLevel='1' customWidth='0'/>"
    assert changed(old, {7: 14.5})[0] == (
        old.replace("'2'", '"2"').replace("'16384'", '"6"')
        + '<col min="7" max="7" width="14.5" style=\'4\' outlineLevel=\'1\' customWidth="1"/>'
        + old.replace("'2'", '"8"').replace("'16384'", '"16384"')
    )


def test_a_hidden_column_is_shown_and_its_neighbours_stay_hidden() -> None:
    old = '<col min="4" max="5" width="0" hidden="1" bestFit="1"/>'
    assert changed(old, {4: 12.0})[0] == (
        '<col min="4" max="4" width="12" customWidth="1"/>'
        '<col min="5" max="5" width="0" hidden="1" bestFit="1"/>'
    )


def test_two_neighbours_are_cut_out_together() -> None:
    result, kinds = changed('<col min="1" max="9"/>', {5: 13.0, 4: 12.0})
    assert result == (
        '<col min="1" max="3"/><col min="4" max="4" width="12" customWidth="1"/>'
        '<col min="5" max="5" width="13" customWidth="1"/><col min="6" max="9"/>'
    )
    assert kinds == [SPLIT]


@pytest.mark.parametrize(
    ("column", "expected"),
    [(1, "{}<col min='2' max='3'/>{other}"), (4, "<col min='2' max='3'/>{}{other}")],
)
def test_a_column_without_an_element_gets_one_in_its_place(column: int, expected: str) -> None:
    other = '<col min="6" max="6"/>'
    new = f'<col min="{column}" max="{column}" width="12" customWidth="1"/>'
    result, kinds = changed(f"<col min='2' max='3'/>{other}", {column: 12.0})
    assert (result, kinds) == (expected.format(new, other=other), [ADDED])


def test_a_sheet_without_widths_gets_its_list_before_the_rows() -> None:
    head = '<sheetPr/><dimension ref="A1"/><sheetViews><sheetView/></sheetViews><sheetFormatPr/>'
    scan = scan_of("", head=head)
    (edit,) = width_edits(scan, {3: 12.0, 2: 11.0})
    assert edit.new == (
        b'<cols><col min="2" max="2" width="11" customWidth="1"/>'
        b'<col min="3" max="3" width="12" customWidth="1"/></cols>'
    )
    assert edit.start == edit.end == scan.xml.index(b"<sheetData>")


def test_the_list_begins_a_sheet_that_holds_nothing_else() -> None:
    scan = scan_of("", prefix="x")
    (edit,) = width_edits(scan, {2: 11.0})
    assert edit.new == b'<x:cols><x:col min="2" max="2" width="11" customWidth="1"/></x:cols>'
    assert edit.start == scan.outline.start_tag_end


def test_no_widths_no_edits() -> None:
    assert width_edits(with_columns('<col min="1" max="9"/>'), {}) == []


def test_hidden_columns_and_styles_are_told() -> None:
    scan = with_columns(
        '<col min="1" max="1" style="3"/><col min="3" max="5" hidden="1"/>'
        '<col min="7" max="9" hidden="0"/><col min="16380" max="99999" hidden="true"/>'
    )
    assert hidden_columns(scan) == {3, 4, 5, *range(16380, MAX_COLUMN + 1)}
    assert [column_style(scan, column) for column in (1, 2, 3)] == [3, 0, 0]


@pytest.mark.parametrize("tag", ['<col min="a" max="2"/>', '<col max="2"/>', '<col min="1"/>'])
def test_columns_that_are_none_are_refused(tag: str) -> None:
    with pytest.raises(Refusal, match=rf"{PART} says '.*' where a whole number belongs"):
        width_edits(with_columns(tag), {2: 9.0})


@st.composite
def _columns(draw: st.DrawFn) -> str:
    text, first = "", 0
    while first < 30 and draw(st.integers(0, 4)):
        first += draw(st.integers(1, 3))
        last = first + draw(st.integers(0, 8))
        style = draw(st.sampled_from(("", " style='2'", ' hidden="1"', ' style="7" collapsed="1"')))
        text += f'<col  min="{first}" max = "{last}"{style} width="8.5" />'
        first = last
    return text


def _looks(view: SheetView) -> dict[int, dict[str, str]]:
    """The attributes of each column, by number; each must occur once, in order."""
    looks: dict[int, dict[str, str]] = {}
    last = 0
    for element in view.root.iter("{*}col"):
        look = dict(element.attrib)
        first, new_last = int(look.pop("min")), int(look.pop("max"))
        assert last < first <= new_last
        last = new_last
        looks.update((column, look) for column in range(first, last + 1))
    return looks


@given(_columns(), st.dictionaries(st.integers(1, 45), st.sampled_from((11.0, 12.5)), max_size=5))
@settings(deadline=None)
def test_random_widths_change_the_new_columns_only(columns: str, widths: dict[int, float]) -> None:
    scan = with_columns(columns) if columns else scan_of("")
    made = sorted(width_edits(scan, widths), key=lambda edit: (edit.start, edit.end))
    result = b"".join(spliced(scan.xml, made))
    before, after = _looks(view_of(scan.xml)), _looks(view_of(result))
    for column in before.keys() | after.keys() | widths.keys():
        if column not in widths:
            assert after.get(column) == before.get(column)
            continue
        look = after[column]
        assert (float(look["width"]), look["customWidth"]) == (widths[column], "1")
        assert "hidden" not in look
        assert look.get("style") == before.get(column, {}).get("style")
    assert undone(result, made, [scan.xml[edit.start : edit.end] for edit in made]) == scan.xml
