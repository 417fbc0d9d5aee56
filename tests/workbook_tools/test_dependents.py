"""Readers of a filled range: who is named, and who is not."""

from __future__ import annotations

import io
import zipfile
from collections.abc import Iterator

import openpyxl
import pytest
import xlsxwriter
from openpyxl.formula.tokenizer import Token, Tokenizer

from tests.workbook_tools.corpus import corpus_paths, needs_corpus
from tests.workbook_tools.loose_parts import LooseParts
from workbook_tools import dependents
from workbook_tools.archive import Archive
from workbook_tools.cell_address import Range, parse_range
from workbook_tools.dependents import Dependents, readers_of
from workbook_tools.errors import UsageError
from workbook_tools.parts import read_workbook

FILLED = "D2:D9"


def log_book() -> LooseParts:
    """A log whose column D will be filled, and sheets whose owners look at it or do not."""
    sink = io.BytesIO()
    book = xlsxwriter.Workbook(sink)
    log, sums, plots, apart = (book.add_worksheet(n) for n in ("Log", "My sums", "Plots", "Apart"))
    log.write_column("A1", ["Object", *"abcdefgh"])
    log.write_column("B1", ["z", *range(1, 9)])
    log.add_table("A1:D9", {"name": "Quasars", "columns": [{"header": h} for h in "Ozxd"]})
    for row in range(2, 10):
        log.write_formula(f"F{row}", f"=D{row}*2")  # reads the filled column
        log.write_formula(f"G{row}", f"=B{row}*2")
        log.write_formula(f"H{row}", f"=F{row}+1")  # reads it through F
    sums.write_formula("A1", "=SUM(Log!D:D)")
    sums.write_formula("A2", "=SUM(Log!B:B)")
    sums.write_formula("A3", "=AVERAGE(Quasars[d])")
    sums.write_formula("A4", "=AVERAGE(Quasars[z])")
    sums.write_formula("A5", "=ages*2")
    sums.write_formula("A6", "=redshifts*2")
    sums.write_formula("A7", "=A1+1")
    sums.write_formula("A8", '=INDIRECT("Log!D2")')
    sums.write_array_formula("C1:C3", "{=Log!D2:D4}")
    apart.write_formula("A1", "=SUM(Log!A1:C9,D2:D9)")
    apart.write_formula("A2", '=COUNTIF(B1:B9,"D2")')
    book.define_name("ages", "=Log!$D$2:$D$9")
    book.define_name("redshifts", "=Log!$B$2:$B$9")
    book.define_name("through", "='My sums'!$A$7")
    log.print_area("A1:D9")
    for values in ("=Log!$D$2:$D$9", "=Log!$B$2:$B$9", "='My sums'!$A$1:$A$1"):
        chart = book.add_chart({"type": "scatter"})
        chart.add_series({"categories": "=Log!$B$2:$B$9", "values": values})
        plots.insert_chart("A1", chart)
    alone = book.add_chart({"type": "line"})
    alone.add_series({"values": "=Log!$D$2:$D$9"})
    book.add_chartsheet("Whole").set_chart(alone)
    book.close()
    with zipfile.ZipFile(sink) as archive:
        return LooseParts({name: archive.read(name) for name in archive.namelist()})


def readers(package: LooseParts, *ranges: str, sheet: str = "Log") -> Dependents:
    areas = [parse_range(text) for text in ranges]
    return readers_of(package, read_workbook(package), sheet, areas)


def test_formulas_names_and_charts_are_named_also_through_each_other() -> None:
    found = readers(log_book(), FILLED)
    assert found == Dependents(
        cells={
            "Log": ("F2:F9", "H2:H9"),
            "My sums": ("A1", "A3", "A5", "A7:A8", "C1:C3"),
        },
        names=("ages", "through"),
        charts={"Plots": 2, "Whole": 1},
    )
    assert found


def test_what_nothing_reads_has_no_readers_but_the_uncertain_one() -> None:
    found = readers(log_book(), "J2:J9")
    assert found == Dependents(cells={"My sums": ("A8",)})


def test_without_ranges_only_the_uncertain_are_named() -> None:
    assert readers(log_book()).cells == {"My sums": ("A8",)}


def test_nothing_at_all_is_false() -> None:
    package = log_book()
    for name in list(package.parts):
        if name.startswith("xl/worksheets/sheet2"):
            package.parts[name] = b"<worksheet><sheetData/></worksheet>"
    found = readers(package, "J2:J9")
    assert found == Dependents()
    assert not found


def test_any_kind_of_reader_counts() -> None:
    assert Dependents(cells={"Log": ("A1",)})
    assert Dependents(names=("ages",))
    assert Dependents(charts={"Plots": 1})


def test_a_shared_formula_is_named_with_all_its_cells() -> None:
    package = log_book()
    rows = "".join(
        f'<row r="{row}"><c r="A{row}"><f t="shared" si="0"'
        + (' ref="A2:A400">Log!D2*2</f>' if row == 2 else "/>")
        + "<v>1</v></c></row>"
        for row in range(2, 401)
    )
    package.parts["xl/worksheets/sheet4.xml"] = (
        f"<worksheet><sheetData>{rows}</sheetData></worksheet>".encode()
    )
    assert readers(package, "D300").cells["Apart"] == ("A2:A400",)
    assert "Apart" not in readers(package, "D401").cells


@pytest.mark.parametrize("upwards", [False, True])
def test_a_long_chain_of_formulas_is_followed_to_its_end(upwards: bool) -> None:
    package = log_book()
    step = 1 if upwards else -1
    rows = "".join(
        # in columns that alternate, so that no two are copies of each other
        f'<row r="{row}"><c r="A{row}"><f>B{row}</f></c>'
        f'<c r="B{row}"><f>A{row + step}*{row}</f></c></row>'
        for row in range(2, 1000)
    )
    package.parts["xl/worksheets/sheet4.xml"] = (
        f"<worksheet><sheetData>{rows}</sheetData></worksheet>".encode()
    )
    start = "A1000" if upwards else "A1"
    assert readers(package, start, sheet="Apart").cells["Apart"] == ("A2:A999", "B2:B999")


def test_a_chain_that_will_not_end_counts_as_reading(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(dependents, "_MAX_ROUNDS", 1)
    found = readers(log_book(), FILLED)
    assert found.cells["Log"] == ("F2:F9", "G2:G9", "H2:H9")


def test_a_drawing_without_its_charts_is_passed_over() -> None:
    package = log_book()
    gone = [name for name in package.parts if name.startswith("xl/charts/")]
    for name in gone:
        del package.parts[name]
    assert readers(package, FILLED).charts == {}


@pytest.mark.long
@needs_corpus
@pytest.mark.filterwarnings("ignore")  # openpyxl warns of all that it would drop
def test_every_direct_reader_that_openpyxl_sees_in_the_corpus_is_named() -> None:
    named = 0
    for path in corpus_paths():
        try:
            archive = Archive.open(path)
            workbook = read_workbook(archive)
            book = openpyxl.load_workbook(path)
        except Exception:
            continue  # refused, or openpyxl cannot open what spreadsheet programs can
        for sheet in book.worksheets[:3]:
            letters = openpyxl.utils.get_column_letter(min(sheet.max_column, 3))
            filled = parse_range(f"{letters}1:{letters}{sheet.max_row}")
            found = readers_of(archive, workbook, sheet.title, [filled])
            ours = {name: [parse_range(a) for a in areas] for name, areas in found.cells.items()}
            for name, row, column in direct_readers(book, sheet.title, filled):
                assert any(area.contains(row, column) for area in ours.get(name, [])), (path, name)
                named += 1
    assert named > 1000


def direct_readers(
    book: openpyxl.Workbook, filled_sheet: str, filled: Range
) -> Iterator[tuple[str, int, int]]:
    """Yield the cells whose formula names cells of the range, as openpyxl splits formulas."""
    for sheet in book.worksheets:
        for cells in sheet.iter_rows():
            for cell in cells:
                if cell.data_type != "f" or not isinstance(cell.value, str):
                    continue
                for token in Tokenizer(cell.value).items:
                    if token.type != Token.OPERAND or token.subtype != Token.RANGE:
                        continue
                    before, _, area = token.value.rpartition("!")
                    try:
                        read = parse_range(area)
                    except UsageError:
                        continue  # a name or a table
                    on = before.strip("'").replace("''", "'") or sheet.title
                    if on == filled_sheet and read.intersects(filled):
                        yield sheet.title, cell.row, cell.column
                        break
