"""Which formulas, names and charts read given cells, also through each other.

What cannot be told for sure counts as a reader: better to name a sheet too many than one too few.
Conditional formats and validations are not asked, since they store no results that could be stale.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from typing import NamedTuple

from workbook_tools.cell_address import CellAddress, Range
from workbook_tools.cell_set import CellSet
from workbook_tools.parts import SheetKind, WorkbookMap
from workbook_tools.reference_targets import TargetFinder, Targets
from workbook_tools.relations import Package, relations_of
from workbook_tools.sheet_formulas import formulas_of
from workbook_tools.xml_offsets import unescape

_CHART_FORMULA = re.compile(rb"<(?:[^\s<>/:]+:)?f(?:\s[^<>]*)?>([^<]*)</")
_CHART_KINDS = ("chart", "chartEx")
_OWN_NAMES = "_xlnm."  # names that programs keep for themselves, such as print areas and filters
_MAX_ROUNDS = 50
_CORNER = CellAddress(1, 1)


@dataclass(frozen=True)
class Dependents:
    """What reads the cells; false where nothing does.

    Attributes:
        cells: by sheet, the cells with such formulas, runs of a column joined (`H2:H99`).
        names: the defined names.
        charts: by sheet, how many of its charts.
    """

    cells: dict[str, tuple[str, ...]] = field(default_factory=dict)
    names: tuple[str, ...] = ()
    charts: dict[str, int] = field(default_factory=dict)

    def __bool__(self) -> bool:
        return bool(self.cells or self.names or self.charts)


class _Reader(NamedTuple):
    """A formula, by the cells that show its results."""

    sheet: str
    area: Range
    targets: Targets


def readers_of(
    package: Package, workbook: WorkbookMap, sheet_name: str, ranges: Sequence[Range]
) -> Dependents:
    """Return what reads cells of a sheet, as the file stands.

    Args:
        package: the file.
        workbook: its map.
        sheet_name: the sheet that the cells lie on.
        ranges: the cells.
    Raises:
        Refusal: a table of the workbook cannot be read.
    """
    finder = TargetFinder(package, workbook)
    stale = CellSet()
    for area in ranges:
        stale.add(sheet_name, area)
    readers = CellSet()
    for reader in _spread(_readers(package, workbook, finder), stale):
        readers.add(reader.sheet, reader.area)
    cells = {
        sheet.name: tuple(area.a1 for area in readers.areas(sheet.name))
        for sheet in workbook.sheets
    }
    return Dependents(
        cells={sheet: areas for sheet, areas in cells.items() if areas},
        names=tuple(
            name.name
            for name in workbook.names
            if not name.name.startswith(_OWN_NAMES) and finder.of_name(name).meets(stale)
        ),
        charts=_charts(package, workbook, finder, stale),
    )


def _readers(package: Package, workbook: WorkbookMap, finder: TargetFinder) -> Iterator[_Reader]:
    for sheet in workbook.sheets:
        if sheet.kind is not SheetKind.WORKSHEET:
            continue
        for formula in formulas_of(package.read(sheet.part)):
            origin = formula.origin
            copied_to = formula.area if formula.copied else Range(*origin, *origin)
            targets = finder.of_formula(formula.text, sheet.name, origin, copied_to)
            if targets.areas or targets.uncertain:
                yield _Reader(sheet.name, formula.area, targets)


def _spread(readers: Iterator[_Reader], stale: CellSet) -> list[_Reader]:
    """Return those that read stale cells, and make their own cells stale, until nothing changes.

    Every other round goes backwards, so that chains up and down a column both end soon.
    """
    found: list[_Reader] = []
    waiting = list(readers)
    for _ in range(_MAX_ROUNDS):
        rest: list[_Reader] = []
        for reader in waiting:
            if reader.targets.meets(stale):
                found.append(reader)
                stale.add(reader.sheet, reader.area)
            else:
                rest.append(reader)
        if len(rest) == len(waiting):
            return found
        waiting = rest[::-1]
    return found + waiting  # no chain of a real workbook is that tangled; count them all


def _charts(
    package: Package, workbook: WorkbookMap, finder: TargetFinder, stale: CellSet
) -> dict[str, int]:
    counts: dict[str, int] = {}
    for sheet in workbook.sheets:
        for part in _chart_parts(package, sheet.part):
            formulas = _CHART_FORMULA.findall(package.read(part))
            texts = {unescape(formula.decode("utf-8", "replace")) for formula in formulas}
            alone = Range(*_CORNER, *_CORNER)
            if any(finder.of_formula(t, sheet.name, _CORNER, alone).meets(stale) for t in texts):
                counts[sheet.name] = counts.get(sheet.name, 0) + 1
    return counts


def _chart_parts(package: Package, sheet_part: str) -> Iterator[str]:
    for drawing in relations_of(package, sheet_part):
        if drawing.kind == "drawing" and drawing.part is not None:
            for chart in relations_of(package, drawing.part):
                if chart.kind in _CHART_KINDS and chart.part is not None:
                    yield chart.part
