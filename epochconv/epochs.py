"""One epoch, or an array of them, under one history; its measures are attributes with units."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from epochconv import epoch_table, registry, through_x
from epochconv.conversion import plain_values
from epochconv.errors import ArgumentError
from epochconv.history import ExpansionHistory
from epochconv.making_quantities import quantity_of
from epochconv.measures import AGE, LOOKBACK_TIME
from epochconv.moment import Moment
from epochconv.published import history_of
from epochconv.units import unit_named


class Epoch:
    """One epoch or an array of them; made by `epoch(...)`.

    Every measure is an attribute with underscores for blanks (`.lookback_time`,
    `.cmb_temperature`, ...): a pint quantity of the application registry, in the measure's
    documented unit and the shape of the input, computed when asked for and then kept.

    Attributes:
        history: the expansion history.
        shape: that of the input; () for one epoch.
    """

    def __init__(self, moment: Moment, history: ExpansionHistory, shape: tuple[int, ...]) -> None:
        self.history = history
        self.shape = shape
        self._moment = moment
        self._known: dict[str, Any] = {}

    def __getattr__(self, name: str) -> Any:
        """Return a measure of the epoch as a quantity.

        Raises:
            AttributeError: there is no such measure.
            OutOfRangeError: the measure does not exist at one of the moments.
        """
        measure = None if name.startswith("_") else registry.find_measure(name)
        if measure is None or name != registry.folded(measure.name).replace(" ", "_"):
            raise AttributeError(f"an epoch has no measure {name!r}; it has {', '.join(dir(self))}")
        if name not in self._known:
            if measure in (LOOKBACK_TIME, AGE):
                self._compute_times()
            else:
                values = through_x.values_at(self._moment, measure, self.history, shape=self.shape)
                self._keep(name, values, measure.unit)
        return self._known[name]

    def __dir__(self) -> list[str]:
        names = [registry.folded(one.name).replace(" ", "_") for one in registry.measures()]
        return [*names, "history", "shape"]

    def __repr__(self) -> str:
        return epoch_table.plain_table(self._moment, self.history)

    def _repr_html_(self) -> str:
        return epoch_table.html_table(self._moment, self.history)

    def __reduce__(self) -> tuple[Any, ...]:
        return _restored, (self._moment.redshift, self.history, self.shape)

    def _compute_times(self) -> None:
        """Compute lookback time and age together: they share every step but the last."""
        x = self._moment.x
        lookback, age = np.empty_like(x), np.empty_like(x)
        self.history.tables.times(x, lookback, age)
        for name, values in (("lookback_time", lookback), ("age", age)):
            values *= self.history.hubble_time_gyr
            self._keep(name, values, "Gyr")

    def _keep(self, name: str, values: Any, unit: str) -> None:
        if values is self._moment.redshift:
            values = values.copy()
        magnitude = values.reshape(self.shape) if self.shape else float(values[0])
        self._known[name] = quantity_of(magnitude, unit_named(unit), None, None)


def epoch(
    *,
    history: ExpansionHistory | str | None = None,
    side: Literal["nearer", "farther"] | None = None,
    outside: Literal["raise", "nan"] = "raise",
    **measure: Any,
) -> Epoch:
    """Return the epoch, or array of epochs, at which one measure has the given value.

    Args:
        measure: exactly one measure by keyword, underscores for blanks, such as `redshift=[2, 6]`,
            `age="1 Gyr"` or `comoving_distance=quantity`; values as in `convert`.
        history, side, outside: as in `convert`.

    Raises:
        ArgumentError, OutOfRangeError, TwoAnswersError: as in `convert`; also for no measure or
            more than one.
    """
    if len(measure) != 1:
        given = ", ".join(measure) or "none"
        raise ArgumentError(
            f"epoch() takes exactly one measure by keyword, such as redshift=2.5; given: {given}"
        )
    ((name, value),) = measure.items()
    source = registry.measure_named(name)
    values, shape = plain_values(value, source)
    chosen = history_of(history)
    moment = through_x.moment_at(
        np.array(values), source, chosen, side=side, outside=outside, shape=shape
    )
    return Epoch(moment, chosen, shape)


def _restored(redshift: Any, history: ExpansionHistory, shape: tuple[int, ...]) -> Epoch:
    return Epoch(Moment(redshift=redshift), history, shape)
