"""What somebody asks of a fill or a look; plain data, checked where it is used."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TypedDict, Unpack

from epochconv.history import ExpansionHistory
from epochconv.peculiar_motion import speed_of
from epochconv.published import history_of


class Choices(TypedDict, total=False):
    """The choices of a fill and of a look, all optional.

    sheet: name of the sheet; by default every visible one that has something to fill.
    header_row: number of the row of headings; by default it is found.
    add: headings of columns to append at the right edge of the data, such as "Age [Gyr]".
    only: headings of the existing columns to fill; by default all that are recognised.
    source: heading of the column to convert from, or its letters as "C:C".
    source_measure: what that column holds, whatever its heading says: "redshift", "age [Gyr]".
    parameters: an ExpansionHistory or the name of a parameter set; by default "planck 2018".
    side: "nearer" or "farther" where the source's map turns over.
    decimal_comma: whether commas in typed numbers are decimal marks.
    brackets_are_notes: whether a bracket behind a number is a note, "2.3 (a)".
    missing: numbers that stand for "no value", such as -99.
    with_errors: append error columns for filled columns that have none.
    parameter_error: count the parameter set's own published errors in error columns.
    peculiar_velocity: size of peculiar motions in km/s to count in error columns.
    allow_protected: fill protected sheets too.
    """

    sheet: str | None
    header_row: int | None
    add: Sequence[str]
    only: Sequence[str]
    source: str | None
    source_measure: str | None
    parameters: ExpansionHistory | str | None
    side: str | None
    decimal_comma: bool
    brackets_are_notes: bool
    missing: Sequence[float]
    with_errors: bool
    parameter_error: bool
    peculiar_velocity: float | None
    allow_protected: bool


@dataclass(frozen=True)
class ErrorTerms:
    """What is added, in quadrature, to the errors of a source on request.

    Attributes:
        parameters: whether the parameter set's own published errors count.
        peculiar_velocity: size of peculiar motions in km/s, None for none.
    """

    parameters: bool = False
    peculiar_velocity: float | None = None


@dataclass(frozen=True)
class Request:
    """The choices of a fill, settled; see `Choices`."""

    history: ExpansionHistory
    sheet: str | None = None
    header_row: int | None = None
    add: tuple[str, ...] = ()
    only: tuple[str, ...] = ()
    source: str | None = None
    source_measure: str | None = None
    side: str | None = None
    decimal_comma: bool = False
    brackets_are_notes: bool = False
    missing: tuple[float, ...] = ()
    with_errors: bool = False
    error_terms: ErrorTerms = ErrorTerms()
    allow_protected: bool = False


def request_of(**choices: Unpack[Choices]) -> Request:
    """Settle the choices of a fill.

    Raises:
        ArgumentError: no such parameter set, or a peculiar velocity that is none.
        TypeError: there is no such choice.
    """
    unknown = set(choices) - set(Choices.__annotations__)
    if unknown:
        raise TypeError(f"no such choice: {', '.join(sorted(unknown))}")
    velocity = choices.get("peculiar_velocity")
    return Request(
        history=history_of(choices.get("parameters")),
        sheet=choices.get("sheet"),
        header_row=choices.get("header_row"),
        add=tuple(choices.get("add", ())),
        only=tuple(choices.get("only", ())),
        source=choices.get("source"),
        source_measure=choices.get("source_measure"),
        side=choices.get("side"),
        decimal_comma=choices.get("decimal_comma", False),
        brackets_are_notes=choices.get("brackets_are_notes", False),
        missing=tuple(choices.get("missing", ())),
        with_errors=choices.get("with_errors", False),
        error_terms=ErrorTerms(
            choices.get("parameter_error", False), None if velocity is None else speed_of(velocity)
        ),
        allow_protected=choices.get("allow_protected", False),
    )
