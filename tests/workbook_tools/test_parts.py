"""The map of a workbook: made ones for each rule, and every workbook of the corpus."""

from __future__ import annotations

from pathlib import Path

import openpyxl
import pytest

from tests.workbook_tools.corpus import corpus_paths, needs_corpus
from tests.workbook_tools.loose_parts import (
    MAIN,
    PACKAGE,
    STRICT_DOCUMENT,
    STRICT_MAIN,
    LooseParts,
    applied,
    content_types,
    relations,
    small_book,
    workbook,
)
from workbook_tools.archive import Archive
from workbook_tools.errors import Refusal
from workbook_tools.parts import (
    DefinedName,
    Sheet,
    SheetKind,
    SheetState,
    WorkbookMap,
    read_workbook,
    recalculate_on_load,
    table_parts,
)
from workbook_tools.splice import EditKind
from workbook_tools.xml_offsets import parse

SHEETS = '<sheets><sheet name="Log" sheetId="1" r:id="rId1"/></sheets>'


def read(label: str = "log.xlsx", **changed: str) -> WorkbookMap:
    return read_workbook(LooseParts(small_book(**changed), label))


def test_a_small_workbook_has_one_sheet_and_nothing_else() -> None:
    assert read() == WorkbookMap(
        part="xl/workbook.xml",
        sheets=(
            Sheet("Log", 1, SheetState.VISIBLE, SheetKind.WORKSHEET, "xl/worksheets/sheet1.xml"),
        ),
        styles_part=None,
        shared_strings_part=None,
        content_types_part="[Content_Types].xml",
        names=(),
        strict=False,
        date1904=False,
        structure_locked=False,
        warnings=(),
    )


def test_the_workbook_may_lie_anywhere_under_any_name() -> None:
    parts = {
        "[Content_Types].xml": content_types(part="/Some/book.xml"),
        "_rels/.rels": relations(
            ("rId9", "extended-properties", "app.xml"), ("rId1", "officeDocument", "/some/Book.xml")
        ),
        "some/book.xml": workbook(SHEETS),
        "some/_rels/book.xml.rels": relations(("rId1", "worksheet", "../first.xml")),
        "first.xml": "",
    }
    found = read_workbook(LooseParts(parts))
    assert (found.part, found.sheets[0].part) == ("some/book.xml", "first.xml")


def test_sheets_come_in_the_order_of_their_tabs_with_state_and_kind() -> None:
    listed = [
        ("Plot", "7", "rId5", "", "chartsheet"),
        ("Log", "2", "rId1", 'state="hidden"', "worksheet"),
        ("Deep", "9", "rId3", 'state="veryHidden"', "worksheet"),
        ("Old", "1", "rId2", 'state="visible"', "xlMacrosheet"),
        ("Box", "4", "rId4", "", "dialogsheet"),
    ]
    inside = "".join(
        f'<sheet name="{name}" sheetId="{number}" {state} r:id="{link}"/>'
        for name, number, link, state, _ in listed
    )
    links = [(link, kind, f"worksheets/{link}.xml") for _, _, link, _, kind in sorted(listed)]
    parts = small_book(inside=f"<sheets>{inside}</sheets>", links=relations(*links))
    parts |= {f"xl/worksheets/{link}.xml": "" for link, _, _ in links}
    found = read_workbook(LooseParts(parts))
    assert [(s.name, s.sheet_id, s.part) for s in found.sheets] == [
        (name, int(number), f"xl/worksheets/{link}.xml") for name, number, link, _, _ in listed
    ]
    assert [s.kind for s in found.sheets] == [
        SheetKind.CHART,
        SheetKind.WORKSHEET,
        SheetKind.WORKSHEET,
        SheetKind.MACRO,
        SheetKind.DIALOG,
    ]
    assert [s.state for s in found.sheets] == [
        SheetState.VISIBLE,
        SheetState.HIDDEN,
        SheetState.VERY_HIDDEN,
        SheetState.VISIBLE,
        SheetState.VISIBLE,
    ]
    assert found.warnings == ("It has sheets of macros; what those read cannot be checked.",)


def test_styles_and_texts_are_found_by_their_relation() -> None:
    parts = small_book(
        links=relations(
            ("rId1", "worksheet", "worksheets/sheet1.xml"),
            ("rId2", "styles", "look.xml"),
            ("rId3", "sharedStrings", "/texts.xml"),
        )
    )
    found = read_workbook(LooseParts(parts | {"xl/look.xml": "", "texts.xml": ""}))
    assert (found.styles_part, found.shared_strings_part) == ("xl/look.xml", "texts.xml")


def test_a_sheet_number_that_is_none_does_no_harm() -> None:
    sheets = '<sheets><sheet name="Log" sheetId="one" r:id="rId1"/></sheets>'
    assert read(inside=sheets).sheets[0].sheet_id == 0


def test_names_know_the_sheet_they_are_local_to() -> None:
    names = (
        '<definedNames><definedName name="a" hidden="1">Log!$A$1</definedName>'
        '<definedName name="b" localSheetId="0">"x &amp; y"</definedName>'
        '<definedName name="c" localSheetId="1">1</definedName></definedNames>'
    )
    assert read(inside=SHEETS + names).names == (
        DefinedName("a", "Log!$A$1", None, True),
        DefinedName("b", '"x & y"', "Log", False),
        DefinedName("c", "1", None, False),
    )


def test_settings_of_the_workbook_are_read() -> None:
    found = read(
        inside='<workbookPr date1904="true"/><workbookProtection lockStructure="1"/>' + SHEETS
    )
    assert (found.date1904, found.structure_locked) == (True, True)


def test_the_strict_family_is_recognised_by_the_namespace_of_the_workbook() -> None:
    parts = small_book(links=relations(("rId1", f"{STRICT_DOCUMENT}/worksheet", "/s.xml")))
    parts |= {"xl/workbook.xml": workbook(SHEETS, STRICT_MAIN, STRICT_DOCUMENT), "s.xml": ""}
    found = read_workbook(LooseParts(parts))
    assert (found.strict, found.sheets[0].part) == (True, "s.xml")


@pytest.mark.parametrize(
    ("inside", "label", "main", "words"),
    [
        (SHEETS, "log.XLSX", "", ""),
        (SHEETS, "log.xlsm", "", "content is that of a .xlsx file, but the name ends in .xlsm"),
        (SHEETS, "log", "", "but the name ends in nothing"),
        (
            SHEETS,
            "log.xlsx",
            "application/vnd.ms-excel.sheet.macroEnabled.main+xml",
            "content is that of a .xlsm file",
        ),
        (SHEETS + '<calcPr calcMode="manual"/>', "log.xlsx", "", "set to manual"),
        (SHEETS + '<calcPr fullPrecision="0"/>', "log.xlsx", "", "precision as displayed"),
        ('<fileSharing readOnlyRecommended="1"/>' + SHEETS, "log.xlsx", "", "read-only"),
    ],
)
def test_what_the_owner_should_know_is_said(inside: str, label: str, main: str, words: str) -> None:
    types = content_types(main) if main else content_types()
    warnings = read(label, inside=inside, types=types).warnings
    assert len(warnings) == (1 if words else 0)
    assert all(words in warning for warning in warnings)


@pytest.mark.parametrize(
    ("changed", "words"),
    [
        ({"root": relations(("r", "core-properties", "core.xml"))}, "holds no workbook"),
        ({"root": relations(("r", "officeDocument", "xl/absent.xml"))}, "holds no workbook"),
        (
            {
                "root": relations(
                    ("r", "officeDocument", "xl/workbook.xml"),
                    ("s", f"{PACKAGE}/relationships/digital-signature/origin", "origin.sigs"),
                )
            },
            "digitally signed",
        ),
        (
            {"types": content_types("application/vnd.ms-excel.sheet.binary.macroEnabled.main")},
            r"binary workbook \(\.xlsb\)",
        ),
        ({"types": content_types("word.document.main+xml")}, "of the type word.document.main"),
        ({"types": content_types(part="/other.xml")}, "of the type text/xml"),
        (
            {
                "links": relations(
                    ("rId1", "worksheet", "worksheets/sheet1.xml"),
                    ("rId2", "revisionHeaders", "revisions/revisionHeaders.xml"),
                )
            },
            "log of everybody's changes",
        ),
        (
            {
                "links": relations(
                    ("rId1", "worksheet", "worksheets/sheet1.xml"), ("rId2", "styles", "styles.xml")
                )
            },
            "'styles.xml', which is not in the file",
        ),
        (
            {"links": relations(("rId1", "worksheet", "gone.xml"))},
            "sheet 'Log' points to 'gone.xml'",
        ),
        ({"links": relations(("rId2", "worksheet", "gone.xml"))}, "sheet 'Log' leads to no part"),
        ({"links": relations(("rId1", "theme", "gone.xml"))}, "sheet 'Log' leads to no part"),
        ({"inside": "<sheets/>"}, "holds no sheets"),
        ({"inside": ""}, "holds no sheets"),
    ],
)
def test_what_is_no_workbook_of_ours_is_refused(changed: dict[str, str], words: str) -> None:
    with pytest.raises(Refusal, match=words):
        read(**changed)


def test_a_main_part_of_another_kind_is_refused() -> None:
    parts = small_book() | {"xl/workbook.xml": f'<worksheet xmlns="{MAIN}"/>'}
    with pytest.raises(Refusal, match=r"main part xl/workbook\.xml is no workbook"):
        read_workbook(LooseParts(parts))


def test_tables_of_a_sheet_are_found_and_its_other_relations_are_not_taken_for_tables() -> None:
    parts = small_book() | {
        "xl/worksheets/_rels/sheet1.xml.rels": relations(
            ("rId1", "comments", "../comments1.xml"),
            ("rId2", "table", "../tables/table4.xml"),
            ("rId3", "tableSingleCells", "../tables/cells.xml"),
            ("rId4", "table", "/xl/tables/table2.xml"),
        ),
        "xl/tables/table4.xml": "",
        "xl/tables/table2.xml": "",
    }
    package = LooseParts(parts)
    sheet = read_workbook(package).sheets[0]
    assert table_parts(package, sheet) == ("xl/tables/table4.xml", "xl/tables/table2.xml")
    del package.parts["xl/tables/table2.xml"]
    with pytest.raises(Refusal, match=r"sheet 'Log' points to '/xl/tables/table2\.xml'"):
        table_parts(package, sheet)


@pytest.mark.parametrize(
    ("inside", "expected"),
    [
        ("<sheets/><calcPr calcId='1'/>", "<sheets/><calcPr calcId='1' fullCalcOnLoad=\"1\"/>"),
        (
            '<sheets/><calcPr fullCalcOnLoad="0"></calcPr>',
            '<sheets/><calcPr fullCalcOnLoad="1"></calcPr>',
        ),
        ("<sheets/><extLst/>", '<sheets/><calcPr fullCalcOnLoad="1"/><extLst/>'),
        (
            "<sheets/><definedNames></definedNames>\n<x:foreign xmlns:x='u'/><pivotCaches/>",
            '<sheets/><definedNames></definedNames><calcPr fullCalcOnLoad="1"/>'
            "\n<x:foreign xmlns:x='u'/><pivotCaches/>",
        ),
    ],
)
def test_the_flag_to_recalculate_is_set_in_its_right_place(inside: str, expected: str) -> None:
    xml = workbook(inside).encode()
    edits = recalculate_on_load(xml, "xl/workbook.xml")
    assert [edit.kind for edit in edits] == [EditKind.RECALCULATE_FLAG_SET]
    assert applied(xml, edits) == workbook(expected).encode()


def test_the_flag_takes_the_prefix_of_the_workbook() -> None:
    xml = b'<x:workbook xmlns:x="u"><x:sheets/></x:workbook>'
    after = applied(xml, recalculate_on_load(xml, "p"))
    assert after == (
        b'<x:workbook xmlns:x="u"><x:sheets/><x:calcPr fullCalcOnLoad="1"/></x:workbook>'
    )


@pytest.mark.parametrize("value", ["1", "true"])
def test_a_workbook_that_recalculates_already_is_left_alone(value: str) -> None:
    xml = workbook(f'<sheets/><calcPr fullCalcOnLoad="{value}"/>').encode()
    assert recalculate_on_load(xml, "p") == []


@pytest.mark.long
@needs_corpus
@pytest.mark.filterwarnings("ignore")  # openpyxl warns of all that it would drop
def test_the_corpus_is_mapped_as_openpyxl_maps_it() -> None:
    read_by_us = agreeing = 0
    for path in corpus_paths():
        try:
            archive = Archive.open(path)
            found = read_workbook(archive)
        except Refusal:
            continue
        read_by_us += 1
        assert all(archive.find(sheet.part) is not None for sheet in found.sheets)
        assert all(
            parse(archive.read(part), part).local == "table"
            for sheet in found.sheets
            for part in table_parts(archive, sheet)
        )
        agreeing += _agrees_with_openpyxl(path, found)
    assert read_by_us
    assert agreeing > 0.9 * read_by_us


def _agrees_with_openpyxl(path: Path, found: WorkbookMap) -> bool:
    if found.strict:
        return False  # openpyxl 3.1 sees no sheets there
    try:
        book = openpyxl.load_workbook(path)
    except Exception:
        return False  # openpyxl cannot open some files that spreadsheet programs can
    assert [s.name for s in found.sheets] == book.sheetnames
    assert [s.state for s in found.sheets] == [book[name].sheet_state for name in book.sheetnames]
    assert found.date1904 == (book.epoch.year == 1904)
    return True
