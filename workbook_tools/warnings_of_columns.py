"""What is owed to the reader once per column: doubts about its redshifts, and about the choice of
parameters. They stand in the report and never in a cell.
"""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Iterable

import numpy as np

from epochconv.constants import SPEED_OF_LIGHT_KM_PER_S
from epochconv.history import ExpansionHistory
from epochconv.set_differences import AT_ODDS, depends_on_parameters
from workbook_tools.answers import Moments
from workbook_tools.cell_address import column_letters
from workbook_tools.column_meanings import Heading
from workbook_tools.heading_names import frame_called
from workbook_tools.heading_words import plain_line
from workbook_tools.sheet_reading import SheetReading

_NEAR = 0.01
_FRAME_MATTERS = 0.1
_FAR = 20.0
_ANNIHILATION = 1e8
_MOTION_KM_PER_S = 300.0
# A column that says row by row in whose frame redshifts are.
_FRAME = re.compile(
    r"(?:z|redshift|velocity|ref(?:erence|\.)?)?[ _]?frame(?: of (?:z|redshift))?", re.I
)


def column_warnings(
    moments: Moments, filled: Iterable[Heading], reading: SheetReading
) -> list[str]:
    """Return sentences about a source column and the columns filled from it."""
    columns = list(dict.fromkeys(filled))
    return [
        *_about_near(moments),
        *_about_frames(moments, reading),
        *_about_far(moments),
        *_about_h([moments.source.heading, *columns], moments.history),
        *_about_parameters(moments, columns),
    ]


def _about_near(moments: Moments) -> list[str]:
    redshift = moments.moment.redshift
    near = redshift[(redshift > 0.0) & (redshift < _NEAR)]
    if not len(near):
        return []
    share = _MOTION_KM_PER_S / SPEED_OF_LIGHT_KM_PER_S / float(near.min())
    return [
        f"{_redshifts(len(near))} below {_NEAR:g}, where peculiar motion counts: 300 km/s are"
        f" {100.0 * share:.0f} % of the smallest"
    ]


def _about_far(moments: Moments) -> list[str]:
    redshift = moments.moment.redshift
    sentences = []
    if moments.source.heading.method == "photometric":
        sentences.append("the redshifts are photometric; their errors may have two peaks")
    far = int(np.count_nonzero((redshift > _FAR) & (redshift <= _ANNIHILATION)))
    if far:
        sentences.append(f"{_redshifts(far)} above {_FAR:g}, where no object is known")
    beyond = int(np.count_nonzero(redshift > _ANNIHILATION))
    if beyond:
        sentences.append(
            f"{_redshifts(beyond)} above {_ANNIHILATION:g}, where electron-positron annihilation"
            " makes the model itself untrue"
        )
    return sentences


def _about_frames(moments: Moments, reading: SheetReading) -> list[str]:
    """Return a sentence where redshifts so small that it matters may be in another frame."""
    heading, redshift = moments.source.heading, moments.moment.redshift
    near = np.flatnonzero(redshift < _FRAME_MATTERS).tolist()
    if heading.measure.name != "redshift" or not near:
        return []
    where = f"below {_FRAME_MATTERS:g} ({len(near)} of them)"
    if heading.frame == "CMB":
        return []
    if heading.frame:
        return [
            f"the redshifts are {heading.frame} and taken as in the CMB frame; {where} that matters"
            " by up to 0.0012"
        ]
    column = next((c for c, t in reading.texts.items() if _FRAME.fullmatch(plain_line(t))), None)
    if column is None:
        return [
            "the heading names no frame; redshifts are taken as in the CMB frame, which matters"
            f" {where}"
        ]
    texts = reading.texts_of(column)
    frames = Counter(frame_called(texts.get(p, "").strip()) or "unknown" for p in near)
    if set(frames) == {"CMB"}:
        return []
    listed = ", ".join(f"{frame} ({count})" for frame, count in frames.most_common())
    return [
        f"by column {column_letters(column)} the frames {where} are {listed}; all are taken as in"
        " the CMB frame"
    ]


def _about_h(headings: Iterable[Heading], history: ExpansionHistory) -> list[str]:
    """Return which columns hold values times a power of h, and the h that was taken."""
    scaled = [repr(heading.text) for heading in headings if heading.h_power]
    if not scaled:
        return []
    return [
        f"in powers of h, taken with h = {history.hubble_constant / 100.0:.6g}: {', '.join(scaled)}"
    ]


def _redshifts(count: int) -> str:
    return "1 redshift is" if count == 1 else f"{count} redshifts are"


def _about_parameters(moments: Moments, filled: Iterable[Heading]) -> list[str]:
    """Return where the choice of parameters moves results by more than the column's own errors."""
    if not moments.source.has_errors:
        return []
    source = moments.source.heading.measure
    moved = []
    for heading in filled:
        answers = moments.answers_in_own_unit(heading.measure)
        found = depends_on_parameters(
            answers, moments.spread.values, source, heading.measure, side=moments.side
        )
        count = int(np.count_nonzero(found.beyond_error))
        if count:
            moved.append(f"{heading.text} ({count})")
    if not moved:
        return []
    return [
        f"the choice of parameters ({AT_ODDS[0]} or {AT_ODDS[1]}) moves more than the error of the"
        f" value: {', '.join(moved)}"
    ]
