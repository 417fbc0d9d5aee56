"""The schema check accepts what the standard allows and finds what it forbids."""

from __future__ import annotations

import zipfile

import pytest

from tests.workbook_tools.corpus import corpus_paths, needs_corpus
from tests.workbook_tools.schema_check import (
    needs_schemas,
    package_schema_problems,
    schema_problems,
)

pytestmark = needs_schemas
MAIN = "http://schemas.openxmlformats.org/spreadsheetml/2006/main"
STRICT = "http://purl.oclc.org/ooxml/spreadsheetml/main"


def sheet(body: str, uri: str = MAIN, attributes: str = "") -> bytes:
    return f'<worksheet xmlns="{uri}"{attributes}>{body}</worksheet>'.encode()


@pytest.mark.parametrize("uri", [MAIN, STRICT])
def test_a_plain_sheet_is_valid(uri: str) -> None:
    row = '<sheetData><row r="1"><c r="A1" s="0"><v>1.5</v></c></row></sheetData>'
    assert schema_problems(sheet(row, uri)) == []


@pytest.mark.parametrize(
    ("body", "word"),
    [
        ("<sheetData/><cols><col min='1' max='2'/></cols>", "cols"),
        ('<sheetData><row r="1"><c r="A1"><v>1</v><f>B1</f></c></row></sheetData>', "f"),
        ('<sheetData><row r="1"><c r="A1" s="bold"/></row></sheetData>', "bold"),
        ('<sheetData/><tableParts count="1"><table/></tableParts>', "table"),
    ],
)
def test_what_the_schema_forbids_is_found(body: str, word: str) -> None:
    found = schema_problems(sheet(body))
    assert found
    assert word in found[0]


def test_extensions_that_a_reader_may_drop_are_dropped() -> None:
    attributes = (
        ' xmlns:mc="http://schemas.openxmlformats.org/markup-compatibility/2006"'
        ' xmlns:own="urn:own" mc:Ignorable="own" own:uid="7"'
    )
    row = '<sheetData><row r="1" own:height="3"><c r="A1"/></row></sheetData>'
    chosen = "<mc:AlternateContent><mc:Choice Requires='own'><own:x/></mc:Choice>"
    chosen += "<mc:Fallback/></mc:AlternateContent><own:tail/>"
    assert schema_problems(sheet(row + chosen, attributes=attributes)) == []
    assert schema_problems(sheet(row + "<other/>", attributes=attributes)) != []


def test_a_part_without_schema_is_not_judged() -> None:
    assert schema_problems(b'<Relationships xmlns="urn:other"/>') is None


@pytest.mark.long
@needs_corpus
def test_workbooks_of_real_programs_are_valid() -> None:
    judged, wrong = 0, {}
    for path in corpus_paths():
        if zipfile.is_zipfile(path):
            found = package_schema_problems(path)
            judged += len(found)
            wrong |= {(path.name, name): what for name, what in found.items() if what}
    assert judged > 500
    assert wrong == {}
