"""What was seen in a workbook, in words for people and as JSON; pure."""

from __future__ import annotations

from typing import Any

from epochconv.published import label_of
from workbook_tools.cell_address import column_letters
from workbook_tools.column_meanings import Meaning, Role
from workbook_tools.looking import CellKinds, Look, SeenColumn, SeenSheet
from workbook_tools.parts import SheetKind, SheetState
from workbook_tools.report import sheet_data, sheet_lines

_ONE = {"numbers": "number", "limits": "limit", "with errors": "with an error"}


def look_text(seen: Look) -> str:
    """Return what was seen as text."""
    lines = []
    for sheet in seen.sheets:
        lines += _sheet_text(sheet, stopped=seen.stop is not None)
    lines += [f"note: {warning}" for warning in seen.warnings]
    if seen.stop is not None:
        lines.append(f"a fill would stop: {seen.stop}")
    lines.append(f"under {label_of(seen.history)}: {seen.history.assumptions}")
    return "\n".join(lines)


def look_json(seen: Look) -> dict[str, Any]:
    """Return what was seen as plain data."""
    return {
        "format": "epochbook look 1",
        "file": seen.label,
        "parameters": {
            "name": label_of(seen.history),
            "assumptions": seen.history.assumptions,
        },
        "sheets": [_sheet_data(sheet) for sheet in seen.sheets],
        "stop": None if seen.stop is None else str(seen.stop),
        "warnings": seen.warnings,
    }


def _sheet_text(seen: SeenSheet, *, stopped: bool) -> list[str]:
    name = f"sheet {seen.sheet.name!r}"
    if seen.sheet.kind is not SheetKind.WORKSHEET:
        return [f"{name}: a {seen.sheet.kind}, nothing to fill"]
    if not seen.columns and seen.header_row is None:
        if seen.sheet.state is not SheetState.VISIBLE:
            return [f"{name}: hidden, filled only when named with --sheet"]
        return [f"{name}: no row of headings that are known here"]
    rows = f", rows {seen.rows[0]} to {seen.rows[1]}" if seen.rows else ", no rows below"
    lines = [f"{name}: headings in row {seen.header_row}{rows}"]
    for column in seen.columns:
        lines += _column_text(column)
    others = [column_letters(one.column) for one in seen.columns if one.meaning.role is Role.OTHER]
    if others:
        lines.append(f"  none of ours: {', '.join(others)}")
    if seen.plan is None:
        lines += [] if stopped else ["  nothing to fill"]
    else:
        lines.append("  a fill would do this:")
        lines += [f"  {line}" for line in sheet_lines(seen.plan, None)[1:]]
    return lines


def _column_text(seen: SeenColumn) -> list[str]:
    meaning = seen.meaning
    if meaning.role is Role.OTHER:
        return []
    lines = [f"  {column_letters(seen.column)} {seen.text!r}: {_meaning_text(meaning)}"]
    if seen.cells is not None:
        lines += [f"      {line}" for line in _cell_lines(seen.cells)]
    return lines


def _meaning_text(meaning: Meaning) -> str:
    why = f" ({meaning.why})" if meaning.why else ""
    if meaning.role is Role.UNCLEAR:
        return f"unclear: {meaning.reason}"
    if meaning.heading is None:
        place = "" if meaning.owner is None else f", column {column_letters(meaning.owner)}"
        of = f" of {meaning.of}{place}" if meaning.of else ""
        what = meaning.reason if meaning.role is Role.CARRIED else str(meaning.role)
        return f"{what}{of}{why}"
    heading = meaning.heading
    said = [heading.frame, heading.method]
    words = "".join(f", {word}" for word in said if word)
    unit = f" in {heading.unit.symbol}" if heading.unit.symbol else ""
    # h^-1 is the only power that a heading may have.
    scaled = ", times h" if heading.h_power else ""
    return f"{heading.measure.name}{unit}{scaled}{words}{why}"


def _cell_lines(cells: CellKinds) -> list[str]:
    parts = []
    for kind, count in cells.counts.items():
        words = f": {', '.join(f'{w} ({n})' for w, n in cells.words.items())}"
        said = words if kind == "no value" else ""
        named = _ONE.get(kind, kind) if count == 1 else kind
        parts.append(f"{count} {named} (first {cells.first[kind]}{said})")
    lines = [", ".join(parts)] if parts else []
    for verb, grouped in (("left", cells.left), ("read", cells.remarks)):
        lines += [
            f"{verb} {count}: {why} (first {first})" for why, (count, first) in grouped.items()
        ]
    return lines


def _sheet_data(seen: SeenSheet) -> dict[str, Any]:
    return {
        "sheet": seen.sheet.name,
        "state": str(seen.sheet.state),
        "kind": str(seen.sheet.kind),
        "header_row": seen.header_row,
        "rows": None if seen.rows is None else list(seen.rows),
        "columns": [_column_data(column) for column in seen.columns],
        "fill": None if seen.plan is None else sheet_data(seen.plan, None),
    }


def _column_data(seen: SeenColumn) -> dict[str, Any]:
    meaning = seen.meaning
    heading = meaning.heading
    return {
        "column": column_letters(seen.column),
        "heading": seen.text,
        "role": str(meaning.role),
        "measure": None if heading is None else heading.measure.name,
        "unit": None if heading is None else heading.unit.symbol,
        "frame": None if heading is None else heading.frame or None,
        "method": None if heading is None else heading.method or None,
        "belongs_to": None if meaning.owner is None else column_letters(meaning.owner),
        "reason": meaning.reason or None,
        "why": meaning.why or None,
        "cells": None
        if seen.cells is None
        else {
            "counts": seen.cells.counts,
            "first": seen.cells.first,
            "left": _counted(seen.cells.left),
            "remarks": _counted(seen.cells.remarks),
            "words_for_no_value": seen.cells.words,
        },
    }


def _counted(grouped: dict[str, tuple[int, str]]) -> dict[str, dict[str, Any]]:
    return {why: {"count": count, "first": first} for why, (count, first) in grouped.items()}
