"""What a measure is: one way to say when or where an epoch is. Built-ins and guests share it."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from epochconv.hermite import FloatArray
from epochconv.history import ExpansionHistory
from epochconv.moment import Moment

ArrayMap = Callable[[FloatArray], FloatArray]


@dataclass(frozen=True)
class Measure:
    """A measure and its maps; all arrays are of shape (n,) and in the measure's own unit.

    Attributes:
        name: plain words, lower case but for proper names.
        symbol: as the trade writes it; case matters.
        unit: symbol of a unit of the closed table; "" for a pure number.
        meaning: one sentence for people.
        source: publication of the formula.
        value_at: the measure at moments under a history; may give -inf or NaN where the measure
            does not exist.
        moment_of: moments at values inside the range; for a measure that is one-to-one under every
            history and knows its own inverse.
        slope_at: derivative of the measure with respect to x = ln(1 + z), at x. A measure without
            `moment_of` needs it: its inverse is found by search, and its map may turn over. Any
            other does for linear errors and for the error of a parameter set.
        rescaled_from: for a measure that is another one on a different scale: that measure, the map
            from its values and the map back to them. The inverse is then the other's.
        range_of: lowest and highest value that stand for a moment; by default from the search.
        aliases: further names; case, hyphens and underscores do not matter in names.
        below, above: what is wrong with a value under or over the range.
        missing: what is wrong with a moment at which the measure does not exist.
    """

    name: str
    symbol: str
    unit: str
    meaning: str
    source: str
    value_at: Callable[[Moment, ExpansionHistory], FloatArray]
    moment_of: Callable[[FloatArray, ExpansionHistory], Moment] | None = None
    slope_at: Callable[[FloatArray, ExpansionHistory], FloatArray] | None = None
    rescaled_from: tuple[Measure, ArrayMap, ArrayMap] | None = None
    range_of: Callable[[ExpansionHistory], tuple[float, float]] | None = None
    aliases: tuple[str, ...] = ()
    below: str = "is below any that this history has"
    above: str = "is above any that this history has"
    missing: str = "does not exist"
