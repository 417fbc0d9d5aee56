"""The file around a fill: replaced in one step or untouched, and foreign kinds refused."""

from __future__ import annotations

import datetime
import zipfile
from collections.abc import Callable
from pathlib import Path

import pytest

from tests.workbook_tools.made_workbooks import MADE, make
from tests.workbook_tools.package_rules import new_problems
from tests.workbook_tools.repack import part, repack
from tests.workbook_tools.small_logs import (
    LOG,
    NOW,
    SHEET,
    cells,
    dated_copies,
    new_cells,
    with_parts,
    write_log,
)
from tests.workbook_tools.untouched import compare
from workbook_tools import Refusal, UsageError, fill, filling, plan_of_workbook
from workbook_tools.plan import SheetPlan


@pytest.fixture
def path(tmp_path: Path) -> Path:
    return write_log(tmp_path / "log.xlsx")


def refused(path: Path, words: str, **choices: object) -> None:
    """A fill must be refused, the file untouched and nothing left beside it."""
    before, beside = path.read_bytes(), sorted(path.parent.iterdir())
    with pytest.raises(Refusal, match=words):
        fill(path, **choices)  # type: ignore[arg-type]  # per test
    assert path.read_bytes() == before
    assert sorted(path.parent.iterdir()) == beside


def test_in_place_a_dated_copy_of_the_old_workbook_is_kept(path: Path) -> None:
    old = path.read_bytes()
    result = fill(path, now=NOW)
    assert result.kept == path.with_name("log (kept 2026-12-01 14.03.22).xlsx")
    assert result.kept.read_bytes() == old
    assert compare(result.kept, path).faults == []
    assert sorted(path.parent.iterdir()) == sorted([path, result.kept])


def test_the_last_five_copies_are_kept(path: Path) -> None:
    rows = [list(row) for row in LOG]
    for day in range(1, 9):
        fill(write_log(path, rows), now=datetime.datetime(2026, 12, day))
    names = [f"log (kept 2026-12-0{day} 00.00.00).xlsx" for day in range(4, 9)]
    assert [copy.name for copy in dated_copies(path)] == names


def test_an_output_leaves_the_workbook_alone(path: Path, tmp_path: Path) -> None:
    before = path.read_bytes()
    output = tmp_path / "filled.xlsx"
    result = fill(path, output=output)
    assert (result.path, result.kept) == (output.resolve(), None)
    assert path.read_bytes() == before
    assert cells(output).keys() > cells(path).keys()
    assert compare(path, output).faults == []
    refused(path, r"filled\.xlsx already exists; choose another name or delete it", output=output)


def test_an_output_is_written_though_nothing_was_to_fill(tmp_path: Path) -> None:
    path = write_log(tmp_path / "log.xlsx", [["Object"]])
    result = fill(path, output=tmp_path / "same.xlsx")
    assert result.written
    comparison = compare(path, tmp_path / "same.xlsx")
    assert (comparison.changed, comparison.added, comparison.faults) == ([], [], [])


@pytest.mark.parametrize("name", ["filled.csv", "filled", "filled.xlsm"])
def test_an_output_of_another_kind_is_refused(path: Path, name: str) -> None:
    with pytest.raises(UsageError, match=r"so give it a name that ends in \.xlsx too"):
        fill(path, output=path.with_name(name))
    assert not path.with_name(name).exists()


def test_a_workbook_that_somebody_has_open_is_refused(path: Path) -> None:
    owner = path.with_name(f"~${path.name}")
    owner.write_bytes(bytes((5,)) + b"Minna".ljust(54) + b"\x05\0" + "Minna".encode("utf-16-le"))
    refused(path, r"log\.xlsx is open in another program by Minna .*pass --ignore-lock if that")
    assert fill(path, ignore_lock=True).filled == 3
    assert owner.exists()


@pytest.mark.parametrize("output", [None, "filled.xlsx"])
def test_a_workbook_that_changes_meanwhile_is_left_alone(
    path: Path, monkeypatch: pytest.MonkeyPatch, output: str | None
) -> None:
    def slowly(*arguments: object) -> SheetPlan:
        path.write_bytes(path.read_bytes() + b"typed meanwhile")
        return plan_sheet(*arguments)  # type: ignore[arg-type]  # passed on

    plan_sheet = plan_of_workbook.plan_sheet
    monkeypatch.setattr(plan_of_workbook, "plan_sheet", slowly)
    with pytest.raises(Refusal, match=r"log\.xlsx was changed while it was being filled; nothing"):
        fill(path, output=None if output is None else path.with_name(output))
    assert path.read_bytes().endswith(b"typed meanwhile")
    assert list(path.parent.iterdir()) == [path]


def test_a_result_that_lacks_parts_is_not_put_in_place(
    path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def short(archive: filling.Archive, sink: object, changed: object) -> None:
        with zipfile.ZipFile(sink, "w") as written:  # type: ignore[call-overload]  # an open file
            written.writestr("[Content_Types].xml", "")

    monkeypatch.setattr(filling.Archive, "rewrite", short)
    refused(path, r"the result of log\.xlsx lacks parts after writing; check the disk")


OLE = bytes.fromhex("D0CF11E0A1B11AE1") + bytes(504)


@pytest.mark.parametrize(
    ("name", "content", "words"),
    [
        ("log.xlsx", b"name,z\nfirst,1.0\n", "log.xlsx is not a workbook"),
        ("log.xlsx", b"", "log.xlsx is empty"),
        ("log.xls", OLE + "Workbook\0".encode("utf-16-le"), r"log\.xls is .* old \.xls kind; .*"),
        ("log.xlsx", OLE + "EncryptedPackage\0".encode("utf-16-le"), "log.xlsx is encrypted; open"),
    ],
)
def test_files_of_other_kinds_are_refused(
    tmp_path: Path, name: str, content: bytes, words: str
) -> None:
    (tmp_path / name).write_bytes(content)
    refused(tmp_path / name, words)


def test_a_missing_file_is_refused(tmp_path: Path) -> None:
    with pytest.raises(Refusal, match=r"There is no file .*none\.xlsx; check its name and folder"):
        fill(tmp_path / "none.xlsx")


Change = Callable[[Path], dict[str, bytes | None]]
WORKBOOK_TYPE = b"application/vnd.openxmlformats-officedocument.spreadsheetml.sheet.main+xml"
BINARY_TYPE = b"application/vnd.ms-excel.sheet.binary.macroEnabled.main"


def _types(path: Path) -> bytes:
    return part(path, "[Content_Types].xml")


FOREIGN: dict[str, tuple[str, Change]] = {
    "open document": (
        r"\.ods.*save it as \.xlsx",
        lambda path: {"mimetype": b"application/vnd.oasis.opendocument.spreadsheet"},
    ),
    "binary": (
        r"\.xlsb.*save it as \.xlsx",
        lambda path: {"[Content_Types].xml": _types(path).replace(WORKBOOK_TYPE, BINARY_TYPE)},
    ),
    "signed": ("digitally signed", lambda path: {"_xmlsignatures/sig1.xml": b"<Signature/>"}),
    "no content types": ("no workbook", lambda path: {"[Content_Types].xml": None}),
    "bomb": (
        "larger than can be read safely",
        lambda path: {SHEET: b"<worksheet>" + bytes(30_000_000)},
    ),
    "entities": (
        "document type definition",
        lambda path: {
            SHEET: b'<!DOCTYPE a [<!ENTITY b "cccc"><!ENTITY d "&b;&b;">]>' + part(path, SHEET)
        },
    ),
    "external entity": (
        "document type definition",
        lambda path: {
            "xl/styles.xml": b'<!DOCTYPE a SYSTEM "file:///etc/hosts">'
            + part(path, "xl/styles.xml").partition(b"?>")[2]
        },
    ),
    "cut off": ("not well-formed", lambda path: {SHEET: part(path, SHEET)[:-20]}),
    "rows twice": (
        "rows or cells out of order",
        lambda path: {
            SHEET: part(path, SHEET).replace(b"</sheetData>", b'<row r="2"/></sheetData>')
        },
    ),
    "no such text": (
        "holds 6 texts but a cell asks for number 99",
        lambda path: {SHEET: part(path, SHEET).replace(b"<v>0</v>", b"<v>99</v>")},
    ),
    "no such style": (
        "no cell format number 77",
        lambda path: {SHEET: part(path, SHEET).replace(b'r="B2"', b'r="B2" s="77"')},
    ),
    "UTF-16": (
        "UTF-16",
        lambda path: {SHEET: part(path, SHEET).partition(b"?>")[2].decode().encode("utf-16")},
    ),
    "shared with a log": (
        "shared with a log of everybody's changes",
        lambda path: {
            "xl/_rels/workbook.xml.rels": part(path, "xl/_rels/workbook.xml.rels").replace(
                b"</Relationships>",
                b'<Relationship Id="rIdR" Target="revisions/h.xml" Type="http://schemas.openxml'
                b'formats.org/officeDocument/2006/relationships/revisionHeaders"/></Relationships>',
            ),
            "xl/revisions/h.xml": b"<headers/>",
        },
    ),
}


@pytest.mark.parametrize("kind", FOREIGN)
def test_what_cannot_be_filled_without_harm_is_refused(path: Path, kind: str) -> None:
    words, change = FOREIGN[kind]
    repack(path, path, change(path))
    refused(path, words)


@pytest.mark.parametrize("name", [name for name in MADE if name != "protected.xlsx"])
def test_every_made_workbook_is_filled_and_whole(tmp_path: Path, name: str) -> None:
    """Macros, templates, strict, prefixed, 1904 and all: the parts that need not change do not."""
    path = make(name, tmp_path)
    sheet = next(iter(cells_of_first(path)))
    before = cells(path, sheet)
    source = {"source": "B:B", "source_measure": "redshift"}
    result = fill(path, sheet=sheet, add=["Age [Gyr]"], now=NOW, **source)
    assert result.kept is not None
    assert result.kept.suffix == path.suffix
    comparison = compare(result.kept, path)
    assert comparison.faults == []
    assert not new_problems(result.kept, path)
    new = new_cells(before, path, sheet)
    assert sum(isinstance(value, float) for value in new.values()) == result.filled >= 7
    assert "xl/vbaProject.bin" not in comparison.changed
    if name != "without styles.xlsx":
        assert "[Content_Types].xml" not in comparison.changed


def cells_of_first(path: Path) -> list[str]:
    """Names of the sheets, in order."""
    with zipfile.ZipFile(path) as archive:
        text = archive.read("xl/workbook.xml").decode()
    return [piece.partition('"')[0] for piece in text.split('sheet name="')[1:]]


def test_days_counted_from_1904_stay_dates(tmp_path: Path) -> None:
    path = make("merged 1904.xlsx", tmp_path)
    nights = {at: value for at, value in cells(path).items() if at.startswith("E")}
    fill(path, add=["Age [Gyr]"])
    assert {at: value for at, value in cells(path).items() if at.startswith("E")} == nights
    assert b'date1904="1"' in part(path, "xl/workbook.xml")


def test_warnings_of_the_workbook_are_passed_on(path: Path) -> None:
    with_parts(path, workbook=("<calcPr ", '<calcPr calcMode="manual" '))
    (warning,) = fill(path).warnings
    assert warning.startswith("Calculation is set to manual")
