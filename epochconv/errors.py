"""Every error that this project raises on purpose, with one root."""

from __future__ import annotations


class EpochconvError(Exception):
    """Root of all errors raised on purpose; each text speaks to the person at the keyboard."""


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
