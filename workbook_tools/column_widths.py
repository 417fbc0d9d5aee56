"""Widths for new columns; a column element that covers more than the new column is split."""

from __future__ import annotations

import re
from collections.abc import Iterator

from workbook_tools.cell_address import MAX_COLUMN
from workbook_tools.sheet_scan import SheetScan
from workbook_tools.splice import Edit, EditKind
from workbook_tools.written_values import whole_number
from workbook_tools.xml_offsets import Element, qualified

_BEFORE_COLUMNS = ("sheetPr", "dimension", "sheetViews", "sheetFormatPr")


def hidden_columns(scan: SheetScan) -> set[int]:
    """Return the columns that are hidden, by element or by zero width."""
    hidden: set[int] = set()
    for group in scan.outline.find_all("cols"):
        for column in group.find_all("col"):
            if column.flag("hidden"):
                hidden.update(_reach(column, scan.part))
    return hidden


def column_style(scan: SheetScan, column: int) -> int:
    """Return the format that a whole column has, 0 where it has none."""
    for group in scan.outline.find_all("cols"):
        for holder in group.find_all("col"):
            if column in _reach(holder, scan.part):
                return whole_number(holder.attributes.get("style", "0"), scan.part)
    return 0


def width_edits(scan: SheetScan, widths: dict[int, float]) -> list[Edit]:
    """Return the edits that give columns a width and show them, where they were hidden.

    Args:
        widths: in characters, by column.
    """
    if not widths:
        return []
    groups = list(scan.outline.find_all("cols"))
    columns = [column for group in groups for column in group.find_all("col")]
    edits_of_widths: list[Edit] = []
    loose: dict[int, float] = {}
    for column, width in widths.items():
        holder = next((one for one in columns if column in _reach(one, scan.part)), None)
        if holder is None:
            loose[column] = width
    for holder in columns:
        reach = _reach(holder, scan.part)
        inside = {column: width for column, width in widths.items() if column in reach}
        if inside:
            pieces = b"".join(_split(holder, reach, inside))
            edits_of_widths.append(
                Edit(EditKind.COLUMN_WIDTH_SPLIT, holder.start, holder.end, pieces)
            )
    return edits_of_widths + _added_widths(scan, groups, columns, loose)


def _reach(column: Element, part: str) -> range:
    first, last = (whole_number(column.attributes.get(end, ""), part) for end in ("min", "max"))
    return range(first, min(last, MAX_COLUMN) + 1)


def _split(holder: Element, reach: range, widths: dict[int, float]) -> Iterator[bytes]:
    """Yield the elements that replace one: the columns with a width of their own cut out of it."""
    tag = holder.source[holder.start : holder.end]
    position = reach.start
    for column in sorted(widths):
        if position < column:
            yield _with(tag, min=str(position), max=str(column - 1))
        yield _with(
            tag,
            min=str(column),
            max=str(column),
            width=f"{widths[column]:g}",
            customWidth="1",
            hidden=None,
            bestFit=None,
        )
        position = column + 1
    if position < reach.stop:
        yield _with(tag, min=str(position), max=str(reach.stop - 1))


def _with(tag: bytes, **attributes: str | None) -> bytes:
    """Return a tag with attributes changed, added, or (None) taken out."""
    for name, value in attributes.items():
        pattern = rb"""(\s%b\s*=\s*)("[^"]*"|'[^']*')""" % name.encode()
        if value is None:
            tag = re.sub(pattern, b"", tag)
        elif re.search(pattern, tag):
            tag = re.sub(pattern, rb'\g<1>"%b"' % value.encode(), tag)
        else:
            end = tag.index(b"/>") if b"/>" in tag else tag.index(b">")
            tag = b'%b %b="%b"%b' % (tag[:end], name.encode(), value.encode(), tag[end:])
    return tag


def _added_widths(
    scan: SheetScan, groups: list[Element], columns: list[Element], widths: dict[int, float]
) -> list[Edit]:
    if not widths:
        return []
    name = qualified(scan.data.prefix, "col")
    tags = {
        column: f'<{name} min="{column}" max="{column}" width="{width:g}" customWidth="1"/>'
        for column, width in widths.items()
    }
    kind = EditKind.COLUMN_WIDTH_ADDED
    if not columns:
        body = "".join(tags[column] for column in sorted(tags))
        before = [e for local in _BEFORE_COLUMNS for e in scan.outline.find_all(local)]
        position = max((e.end for e in before), default=scan.outline.start_tag_end)
        wrapper = qualified(scan.data.prefix, "cols")
        return [Edit(kind, position, position, f"<{wrapper}>{body}</{wrapper}>".encode())]
    added: dict[int, list[str]] = {}
    for column in sorted(tags):
        earlier = [one.end for one in columns if _reach(one, scan.part).start < column]
        place = max(earlier) if earlier else columns[0].start
        added.setdefault(place, []).append(tags[column])
    return [Edit(kind, place, place, "".join(body).encode()) for place, body in added.items()]
