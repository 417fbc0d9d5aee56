"""What is owed to the reader once per column: doubts about its redshifts, and about the choice of
parameters. They stand in the report and never in a cell.
"""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np

from epochconv.set_differences import AT_ODDS, depends_on_parameters
from workbook_tools.answers import Moments
from workbook_tools.column_meanings import Heading

_NEAR = 0.01
_FRAME_MATTERS = 0.1
_FAR = 20.0
_ANNIHILATION = 1e8
_MOTION_KM_PER_S = 300.0
_C_KM_PER_S = 299_792.458


def column_warnings(moments: Moments, filled: Iterable[Heading]) -> list[str]:
    """Return sentences about a source column and the columns filled from it."""
    return [*_about_redshifts(moments), *_about_parameters(moments, filled)]


def _about_redshifts(moments: Moments) -> list[str]:
    redshift = moments.moment.redshift
    known = redshift[~np.isnan(redshift)]
    heading = moments.source.heading
    if not len(known):
        return []
    sentences = []
    near = int(np.count_nonzero((known > 0.0) & (known < _NEAR)))
    if near:
        share = _MOTION_KM_PER_S / _C_KM_PER_S / float(known[known > 0.0].min())
        sentences.append(
            f"{_redshifts(near)} below {_NEAR:g}, where peculiar motion counts: 300 km/s are"
            f" {100.0 * share:.0f} % of the smallest"
        )
    moved = int(np.count_nonzero(known < _FRAME_MATTERS))
    if heading.measure.name == "redshift":
        if heading.frame and heading.frame != "CMB" and moved:
            sentences.append(
                f"the redshifts are {heading.frame} and taken as in the CMB frame; below"
                f" {_FRAME_MATTERS:g} ({moved} of them) that matters by up to 0.0012"
            )
        elif not heading.frame and moved:
            sentences.append(
                f"the heading names no frame; redshifts are taken as in the CMB frame, which"
                f" matters below {_FRAME_MATTERS:g} ({moved} of them)"
            )
        if heading.method == "photometric":
            sentences.append("the redshifts are photometric; their errors may have two peaks")
    far = int(np.count_nonzero((known > _FAR) & (known <= _ANNIHILATION)))
    if far:
        sentences.append(f"{_redshifts(far)} above {_FAR:g}, where no object is known")
    beyond = int(np.count_nonzero(known > _ANNIHILATION))
    if beyond:
        sentences.append(
            f"{_redshifts(beyond)} above {_ANNIHILATION:g}, where electron-positron annihilation"
            " makes the model itself untrue"
        )
    if heading.h_power:
        sentences.append(
            f"column {heading.text!r} holds values in powers of h, taken with"
            f" h = {moments.history.hubble_constant / 100.0:.6g}"
        )
    return sentences


def _redshifts(count: int) -> str:
    return "1 redshift is" if count == 1 else f"{count} redshifts are"


def _about_parameters(moments: Moments, filled: Iterable[Heading]) -> list[str]:
    """Return where the choice of parameters moves results by more than the column's own errors."""
    if not moments.source.has_errors:
        return []
    source = moments.source.heading.measure
    moved = []
    for heading in dict.fromkeys(filled):
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
