"""Converting a column: the only place where the workbook meets the conversion core."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from epochconv import intervals, inverse, through_x
from epochconv.history import ExpansionHistory
from epochconv.intervals import Image, Spread
from epochconv.measure import Measure
from epochconv.moment import Moment
from epochconv.parameter_errors import (
    parameters_text,
    set_with_errors,
    with_parameter_error,
)
from epochconv.peculiar_motion import widened
from epochconv.printing import number_text, with_unit
from epochconv.published import label_of
from epochconv.tables import HIGHEST_REDSHIFT
from epochconv.units import factor, unit_named
from workbook_tools.cell_address import column_letters
from workbook_tools.column_meanings import Heading
from workbook_tools.request import ErrorTerms
from workbook_tools.value_columns import ValueColumn

FloatArray = NDArray[np.float64]

NO_TERMS = ErrorTerms()

_ABOVE = (">", "≥", "≳")
# By this much at least a measure without an end grows in the last decade of the tables.
_GROWING = 1.001
_FLIPPED = {"<": ">", ">": "<", "≤": "≥", "≥": "≤", "≲": "≳", "≳": "≲"}


@dataclass(frozen=True)
class Answers:
    """One measure for every row of a log, in the unit of its heading.

    Attributes:
        values: NaN where there is none.
        lower, upper: sizes of the errors; NaN where none is known, infinite where the interval
            reaches to redshift 0 or to the beginning and the measure has no end there.
        limits: the sign of each limit, by position.
        reasons: why there is no value although there is a moment, by position.
        cut: positions whose interval was cut at the end of what source or measure can be.
    """

    values: FloatArray
    lower: FloatArray
    upper: FloatArray
    limits: dict[int, str]
    reasons: dict[int, str]
    cut: list[int]


class Moments:
    """The moments that a source column stands for, under one history.

    Attributes:
        moment: one per cell; NaN where the cell stands for none.
        reasons: why, by position.
    """

    def __init__(
        self,
        source: ValueColumn,
        history: ExpansionHistory,
        side: str | None,
        terms: ErrorTerms = NO_TERMS,
    ) -> None:
        """Find the moments.

        Raises:
            ArgumentError: an error term is asked for that the source or the set lacks.
        """
        measure = source.heading.measure
        self.terms = terms
        self._set = set_with_errors(history) if terms.parameters else None
        scale = _scale(source.heading, history)
        self.source, self.history, self.side = source, history, side
        # Without any error in the column, terms that somebody asks for are all there is.
        self.exact = terms != NO_TERMS and not source.has_errors
        self.has_errors = self.exact or source.has_errors
        lower, upper = source.lower * scale, source.upper * scale
        if self.exact:
            lower = np.where(np.isnan(source.values), np.nan, 0.0)
            lower[list(source.limits)] = np.nan
            upper = lower
        self.spread = Spread(source.values * scale, lower, upper)
        if terms.peculiar_velocity is not None:
            self.spread = widened(self.spread, measure, terms.peculiar_velocity)
        self.reasons: dict[int, str] = {}
        self.moment = self._moments(measure)
        self._span: intervals.Span | None = None

    def under(self, history: ExpansionHistory) -> Moments:
        """Return the moments of the same column under another history."""
        return Moments(self.source, history, self.side)  # its errors do not matter there

    def error_notes(self) -> list[str]:
        """Return what was added to the errors of the source, in sentences for the report."""
        notes = []
        if self.exact:
            letters = column_letters(self.source.cells.column)
            notes.append(f"column {letters} gives no errors; those written count only what follows")
        if self._set is not None:
            notes.append(parameters_text(self._set))
        if self.terms.peculiar_velocity is not None:
            notes.append(f"errors count peculiar motions of {self.terms.peculiar_velocity:g} km/s")
        return notes

    def answers(self, heading: Heading) -> Answers:
        """Return what a column with that heading holds for each row."""
        measure = heading.measure
        scale = 1.0 / _scale(heading, self.history)
        image = self.answers_in_own_unit(measure)
        values = image.values * scale
        missing = np.flatnonzero(np.isnan(values) & ~np.isnan(self.moment.x)).tolist()
        reasons = dict.fromkeys(missing, f"{measure.name} {measure.missing}")
        limits = self._limits(measure, image.values, reasons)
        values[list(set(self.source.limits) & set(reasons))] = np.nan
        lower, upper = values - image.low * scale, image.high * scale - values
        upper[image.cut_high & (image.high > _endless_from(measure, self.history))] = np.inf
        cut = (image.cut_low & np.isfinite(lower)) | (image.cut_high & np.isfinite(upper))
        cut_at = np.flatnonzero(cut & ~np.isnan(values)).tolist()
        return Answers(values, lower, upper, limits, reasons, cut_at)

    def answers_in_own_unit(self, measure: Measure) -> Image:
        """Return values and intervals of a measure, in its own unit."""
        image = self._image(measure)
        if self._set is None:
            return image
        return with_parameter_error(
            image, self.moment, self.source.heading.measure, measure, self._set
        )

    def _moments(self, measure: Measure) -> Moment:
        """Return the moments of the values alone, and note why a value has none."""
        values, history = self.spread.values, self.history
        near = through_x.moment_at(values, measure, history, side="nearer", outside="nan")
        far = near
        if measure.moment_of is None:
            far = through_x.moment_at(values, measure, history, side="farther", outside="nan")
        asked = ~np.isnan(values)
        low, high = inverse.range_of(measure, history)
        for position in np.flatnonzero(asked & np.isnan(near.x)).tolist():
            value = float(values[position])
            self.reasons[position] = _why_outside(value, measure, low, high, history)
        if self.side is not None:
            return far if self.side == "farther" else near
        several = far.x > near.x
        for position in np.flatnonzero(several).tolist():
            answers = [number_text(float(m.redshift[position])) for m in (near, far)]
            self.reasons[position] = (
                f"two epochs have this {measure.name}, at redshift {answers[0]} and "
                f"{answers[1]}; choose with --side nearer or --side farther"
            )
        return Moment(x=np.where(several, np.nan, near.x)) if np.any(several) else near

    def _image(self, target: Measure) -> Image:
        """Return the target's values and intervals; without errors, the values alone."""
        source = self.source.heading.measure
        if not self.has_errors:
            if target is source:
                values = np.where(np.isnan(self.moment.x), np.nan, self.spread.values)
            else:
                values = through_x.values_at(self.moment, target, self.history, outside="nan")
            nothing = np.full(len(values), np.nan)
            never = np.zeros(len(values), dtype=bool)
            return Image(values, nothing, nothing, never, never)
        known = np.where(np.isnan(self.moment.x), np.nan, self.spread.values)
        spread = self.spread._replace(values=known)
        side = self.side or "nearer"
        if target is source:
            return intervals.image(spread, source, target, self.history, side=side, outside="nan")
        if self._span is None:
            self._span = intervals.span_at(spread, source, self.history, side=side, outside="nan")
        return intervals.image_of(self._span, target, self.history, outside="nan")

    def _limits(
        self, target: Measure, values: FloatArray, reasons: dict[int, str]
    ) -> dict[int, str]:
        """Return the signs of limits in the target, flipped where the map falls.

        A limit stays one where the target does not turn over beyond it.

        Args:
            values: of the target in its own unit; NaN where it does not exist.
            reasons: gets why a limit stands for none.
        """
        source = self.source.heading.measure
        signs = {p: s for p, s in self.source.limits.items() if not np.isnan(values[p])}
        if not signs or target is source:
            return signs
        if inverse.turning_points(source, self.history):
            reason = f"a limit on {source.name}, which turns over, so it stands for no other limit"
            reasons.update(dict.fromkeys(signs, reason))
            return {}
        ends = Moment(redshift=np.array([0.0, HIGHEST_REDSHIFT]))
        with np.errstate(divide="ignore"):
            falls = bool(np.diff(source.value_at(ends, self.history))[0] < 0.0)
            nearest, farthest = target.value_at(ends, self.history)
        turns = np.array(inverse.turning_points(target, self.history))
        found = {}
        for position, sign in signs.items():
            in_redshift = _FLIPPED[sign] if falls else sign
            x, value = self.moment.x[position], values[position]
            beyond = in_redshift in _ABOVE
            if len(turns) and np.any(turns > x if beyond else turns < x):
                reasons[position] = (
                    f"a limit beyond which {target.name} turns over, so it stands for none"
                )
                continue
            start, end = (value, farthest) if beyond else (nearest, value)
            rises = end > start if len(turns) else farthest > nearest
            found[position] = in_redshift if rises else _FLIPPED[in_redshift]
        return found


def _endless_from(measure: Measure, history: ExpansionHistory) -> float:
    """Return the value beyond which a measure only grows into the beginning, infinity for none."""
    moments = Moment(redshift=np.array([HIGHEST_REDSHIFT / 10.0, HIGHEST_REDSHIFT]))
    early, earliest = measure.value_at(moments, history)
    return float(early) if earliest > early * _GROWING else math.inf


def _scale(heading: Heading, history: ExpansionHistory) -> float:
    """Return what a number under a heading is multiplied by to be in the measure's own unit.

    A column in h^-1 Mpc holds the distance times h; h is that of the history.
    """
    own = unit_named(heading.measure.unit)
    return factor(heading.unit, own) * (history.hubble_constant / 100.0) ** heading.h_power


def _why_outside(
    value: float, measure: Measure, low: float, high: float, history: ExpansionHistory
) -> str:
    """Return one reason, the same words for every cell that fails in the same way."""
    if value < low:
        if measure.unit == "" and measure.name == "redshift":
            if value <= -1.0:
                return (
                    "a redshift of -1 or below is impossible; --missing declares codes for no value"
                )
            return f"a negative redshift {measure.below}"
        words, limit = f"{measure.name} {measure.below}", low
    else:
        words, limit = f"{measure.name} {measure.above}", high
    if limit == 0.0 or not math.isfinite(limit):
        return words
    return f"{words} ({with_unit(number_text(limit), measure.unit)} under {label_of(history)})"
