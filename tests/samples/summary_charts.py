"""The two charts on the colleague's sheet of the sample."""

from __future__ import annotations

import datetime
from typing import Any

from xlsxwriter.chart import Chart
from xlsxwriter.workbook import Workbook

SEASON = (datetime.date(2026, 2, 1), datetime.date(2026, 12, 1))
_MONTH = 30.4  # days
_DAY_ZERO = datetime.date(1899, 12, 30)


def lookback_chart(book: Workbook, nights: str, lookbacks: str) -> Chart:
    """Lookback time against the night, from two ranges of the log; it fills as the log does."""
    chart = book.add_chart({"type": "scatter"})
    dot = {"type": "circle", "size": 6, "fill": {"color": "#3B5573"}}
    chart.add_series({"categories": f"={nights}", "values": f"={lookbacks}", "marker": dot})
    first, last = ((day - _DAY_ZERO).days for day in SEASON)
    season = {"min": first, "max": last, "major_unit": _MONTH, "num_format": "mmm"}
    chart.set_x_axis({**season, "major_gridlines": _thin()})
    chart.set_y_axis({"name": "Gyr ago", "min": 0, "max": 14, "major_gridlines": _thin()})
    return _titled(chart, "How far back each night took us")


def class_chart(book: Workbook, classes: str, counts: str) -> Chart:
    """Objects per class, from two ranges of the summary."""
    chart = book.add_chart({"type": "column"})
    green = {"color": "#9FC5B0"}
    chart.add_series({"categories": f"={classes}", "values": f"={counts}", "fill": green})
    chart.set_y_axis({"major_gridlines": _thin()})
    return _titled(chart, "Objects per class")


def _titled(chart: Chart, title: str) -> Chart:
    chart.set_title({"name": title, "name_font": {"size": 12}})
    chart.set_legend({"none": True})
    return chart


def _thin() -> dict[str, Any]:
    return {"visible": True, "line": {"color": "#D9D9D9", "width": 0.5}}
