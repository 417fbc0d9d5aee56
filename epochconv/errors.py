"""Every error that this project raises on purpose, with one root."""

from __future__ import annotations

from typing import Any


class EpochconvError(Exception):
    """Root of all errors raised on purpose; each text speaks to the person at the keyboard.

    All of them can be copied and pickled, so that they come back from worker processes.
    """

    def __reduce__(self) -> tuple[Any, ...]:
        return _restored, (type(self), self.args, vars(self))


class ArgumentError(EpochconvError, ValueError):
    """A bad parameter, an unknown name, a wrong dimension or an unreadable text."""


class OutOfRangeError(ArgumentError):
    """One or more values lie where the measure does not exist under this history.

    Attributes:
        measure: name of the measure.
        value: the first offending value, in `unit`.
        index: its position (a tuple; empty for a scalar).
        count: how many values offend.
        low, high: the range that is allowed, in `unit`.
        unit: symbol of the unit of the three numbers.
    """

    def __init__(
        self,
        message: str,
        *,
        measure: str,
        value: float,
        index: tuple[int, ...],
        count: int,
        low: float,
        high: float,
        unit: str,
    ) -> None:
        super().__init__(message)
        self.measure = measure
        self.value = value
        self.index = index
        self.count = count
        self.low = low
        self.high = high
        self.unit = unit


class TwoAnswersError(ArgumentError):
    """A map turns over, so that one value stands for two epochs, and no side was chosen.

    Attributes:
        measure: name of the measure.
        value: the first such value.
        redshifts: the redshifts of its epochs, nearer first.
    """

    def __init__(
        self, message: str, *, measure: str, value: float, redshifts: tuple[float, ...]
    ) -> None:
        super().__init__(message)
        self.measure = measure
        self.value = value
        self.redshifts = redshifts


def _restored(kind: type[EpochconvError], args: tuple[Any, ...], parts: dict[str, Any]) -> Any:
    """Make an error again without its __init__, which asks for the parts by keyword."""
    error = kind.__new__(kind, *args)
    vars(error).update(parts)
    return error
