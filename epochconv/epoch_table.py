"""The small table of one epoch or a few: when it was, where it is, how it looks.

Works on floats in the measures' own units: the command prints it without a unit registry.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from html import escape

from epochconv import measures, through_x
from epochconv.hermite import FloatArray
from epochconv.history import ExpansionHistory
from epochconv.measure import Measure
from epochconv.moment import Moment
from epochconv.printing import number_text, text_table
from epochconv.published import label_of

SECTIONS: tuple[tuple[str, tuple[Measure, ...]], ...] = (
    ("when it was", (measures.LOOKBACK_TIME, measures.AGE)),
    (
        "where it is",
        (
            measures.COMOVING_DISTANCE,
            measures.TRANSVERSE_COMOVING_DISTANCE,
            measures.LUMINOSITY_DISTANCE,
            measures.ANGULAR_DIAMETER_DISTANCE,
            measures.DISTANCE_MODULUS,
        ),
    ),
    (
        "how it looks",
        (
            measures.REDSHIFT,
            measures.SCALE_FACTOR,
            measures.CMB_TEMPERATURE,
            measures.HUBBLE_RATE,
        ),
    ),
)

MOST_COLUMNS = 5


def measure_values(moment: Moment, history: ExpansionHistory) -> dict[str, FloatArray]:
    """Return every tabulated measure by name; NaN where one does not exist."""
    return {
        measure.name: through_x.values_at(moment, measure, history, outside="nan")
        for _, group in SECTIONS
        for measure in group
    }


def table_rows(moment: Moment, history: ExpansionHistory) -> list[list[str]]:
    """Return rows of section, measure, unit and one number per epoch (the first few)."""
    few = Moment(redshift=moment.redshift[:MOST_COLUMNS])
    values = measure_values(few, history)
    rows = []
    for section, group in SECTIONS:
        for i, measure in enumerate(group):
            numbers = [number_text(float(v)) for v in values[measure.name]]
            rows.append(["" if i else section, measure.name, *numbers, measure.unit])
    return rows


def plain_table(moment: Moment, history: ExpansionHistory) -> str:
    """Return the table for a terminal, with the parameter set and what it assumes below."""
    rows = table_rows(moment, history)
    numbers = len(rows[0]) - 3
    lines = [text_table(rows, [False, False, *[True] * numbers, False])]
    lines += _notes(len(moment.redshift), history)
    return "\n".join(lines)


def html_table(moment: Moment, history: ExpansionHistory) -> str:
    """Return the table for a notebook."""
    rows = "".join(_html_row(row) for row in table_rows(moment, history))
    notes = "<br>".join(escape(note) for note in _notes(len(moment.redshift), history))
    return f"<table>{rows}</table><p><small>{notes}</small></p>"


def _html_row(row: Sequence[str]) -> str:
    section, name, *numbers, unit = row
    cells = f"<th>{escape(section)}</th><td>{escape(name)}</td>"
    cells += "".join(f'<td style="text-align:right">{escape(n)}</td>' for n in numbers)
    return f"<tr>{cells}<td>{escape(unit)}</td></tr>"


def _notes(count: int, history: ExpansionHistory) -> list[str]:
    notes = [f"under {label_of(history)}: {history.assumptions}"]
    if count > MOST_COLUMNS:
        notes.insert(0, f"the first {MOST_COLUMNS} of {count} epochs")
    return notes


def json_values(moment: Moment, history: ExpansionHistory) -> dict[str, dict[str, object]]:
    """Return every tabulated measure of a single moment with its unit; None where there is none."""
    values = measure_values(moment, history)
    units = {measure.name: measure.unit for _, group in SECTIONS for measure in group}
    return {
        name: {
            "value": None if math.isnan(float(array[0])) else float(array[0]),
            "unit": units[name],
        }
        for name, array in values.items()
    }
