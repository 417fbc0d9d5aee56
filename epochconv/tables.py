"""Tables of time and distance on x = ln(1 + z), built once per history and checked as built.

Each panel of the grid is integrated by Gauss-Legendre quadrature (two halves of five nodes), the
derivatives at the knots are exact, and the pieces are compared with the quadrature at every
panel's middle; if one deviates, the grid is made finer. Times are in Hubble times 1/H0 and
distances in Hubble lengths c/H0.
"""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np

from epochconv.errors import ArgumentError
from epochconv.expansion import Expansion
from epochconv.hermite import BLOCK, FloatArray, HermitePieces

HIGHEST_REDSHIFT = 1e10
HIGHEST_X = math.log1p(HIGHEST_REDSHIFT)

_TOLERANCE = 2e-14
_INVERSE_TOLERANCE = 1e-13
_NEWTON_TOLERANCE = 1e-7
_FEWEST_PANELS = 4096
_MOST_PANELS = 65536

_TOO_SHARP = (
    "this history comes so close to standing still that no table follows it to 12 digits; "
    "change matter, curvature or dark_energy slightly"
)

# For a depth u(x): u itself, dx/du, and by how much x may be off for one unit of relative error
# in the measure (the condition of the map, beyond x itself). Then d²x/du² from x and dx/du.
DepthLaw = Callable[[FloatArray], tuple[FloatArray, FloatArray, FloatArray]]
BendLaw = Callable[[FloatArray, FloatArray], FloatArray]

_GAUSS_NODES, _GAUSS_WEIGHTS = np.polynomial.legendre.leggauss(5)


class Tables:
    """Everything that one expansion law needs for conversion, in both directions.

    Attributes:
        age_today: in Hubble times.
        distance_highest: comoving distance to the highest redshift, in Hubble lengths.
        distance_horizon: what the inverse distance map measures from; the particle horizon where
            that is finite, else a length beyond the highest redshift.
        knots: the grid in x.
        rates: E at the knots.
    """

    def __init__(self, expansion: Expansion) -> None:
        panels = _FEWEST_PANELS
        while not self._build(expansion, panels):
            panels *= 2
            if panels > _MOST_PANELS:
                raise ArgumentError(_TOO_SHARP)
        self._build_inverses(expansion)

    def times(self, x: FloatArray, lookback: FloatArray | None, age: FloatArray | None) -> None:
        """Write lookback time and age (Hubble times) at x of shape (n,) into the given arrays."""
        for start in range(0, len(x), BLOCK):
            block = slice(start, start + BLOCK)
            piece, fraction = self._time.locate(x[block])
            smaller = np.empty_like(fraction)
            self._time.evaluate(piece, fraction, smaller)
            # Products with 0 and 1, as exact as a choice and twice as fast where it is random.
            early = (piece >= self._first_early_piece).astype(np.float64)
            late = 1.0 - early
            rest = np.subtract(self.age_today, smaller, out=fraction)
            if lookback is not None:
                np.multiply(late, smaller, out=lookback[block])
                lookback[block] += early * rest
            if age is not None:
                np.multiply(early, smaller, out=age[block])
                age[block] += late * rest

    def distance(self, x: FloatArray) -> FloatArray:
        """Return the comoving distance along the line of sight (Hubble lengths) at x, (n,)."""
        return self._distance(x)

    def x_of_lookback(self, lookback: FloatArray) -> FloatArray:
        """Return x at lookback times of shape (n,), from 0 to the age.

        Where double precision no longer tells the time from the age, x is the highest one.
        """
        depth = lookback / -self.age_today
        with np.errstate(divide="ignore", invalid="ignore"):
            np.log1p(depth, out=depth)
        np.negative(depth, out=depth)
        depth[~(depth <= self._deepest_time) & (lookback == lookback)] = self._deepest_time
        return self._x_of_time(depth)

    def x_of_age(self, age: FloatArray) -> FloatArray:
        """Return x at ages of shape (n,), from that of the highest redshift to today's."""
        depth = age / self.age_today
        np.log(depth, out=depth)
        np.negative(depth, out=depth)
        return self._x_of_time(depth)

    def x_of_distance(self, distance: FloatArray) -> FloatArray:
        """Return x at comoving distances of shape (n,), from 0 to `distance_highest`."""
        x = self._x_of_distance(self._depth_of_distance(distance))
        return np.minimum(x, HIGHEST_X, out=x)

    def _depth_of_distance(self, distance: FloatArray) -> FloatArray:
        """Return u = ln((1 + d)/(1 - d/horizon)): linear near 0, nearly linear in x far out."""
        rest = distance / -self.distance_horizon
        rest += 1.0
        depth = distance * (1.0 + 1.0 / self.distance_horizon)
        depth /= rest
        return np.log1p(depth, out=depth)

    def _build(self, expansion: Expansion, panels: int) -> bool:
        """Fill the forward tables; return whether they agree with the quadrature."""
        knots = np.linspace(0.0, HIGHEST_X, panels + 1)
        step = HIGHEST_X / panels
        rates = expansion.rate(knots)
        slope_of_log = expansion.log_rate_slope(knots)
        time_halves, distance_halves = _half_panel_integrals(expansion, knots, step)
        time_panels = time_halves.sum(axis=1)
        tail = age_before(expansion, HIGHEST_X)
        age = _running_sum(np.append(time_panels, tail)[::-1])[:0:-1]
        lookback = _running_sum(time_panels)
        distance = _running_sum(distance_halves.sum(axis=1))
        self.age_today = float(age[0])
        self.knots, self.rates = knots, rates

        slope, bend = 1.0 / rates, -slope_of_log / rates
        early = int(np.searchsorted(lookback, 0.5 * self.age_today))
        self._first_early_piece = early
        self._time = HermitePieces(0.0, step, lookback, slope, bend)
        early_time = HermitePieces(0.0, step, age, -slope, -bend)
        self._time.coefficients[:, early:] = early_time.coefficients[:, early:]
        stretch = np.exp(knots)
        self._distance = HermitePieces(
            0.0, step, distance, stretch * slope, stretch * (slope + bend)
        )
        self.distance_highest = float(distance[-1])
        self.distance_horizon = float(distance[-1] + stretch[-1] / rates[-1])

        middle_time = np.where(
            np.arange(panels) < early,
            lookback[:-1] + time_halves[:, 0],
            age[1:] + time_halves[:, 1],
        )
        middle_distance = distance[:-1] + distance_halves[:, 0]
        return _agrees(self._time, middle_time) and _agrees(self._distance, middle_distance)

    def _build_inverses(self, expansion: Expansion) -> None:
        def time_depth(x: FloatArray) -> tuple[FloatArray, FloatArray, FloatArray]:
            lookback, age = np.empty_like(x), np.empty_like(x)
            self.times(x, lookback, age)
            depth = np.log(self.age_today / age)
            late = lookback < 0.5 * self.age_today
            depth[late] = -np.log1p(-lookback[late] / self.age_today)
            return depth, age * expansion.rate(x), np.zeros_like(x)

        def distance_depth(x: FloatArray) -> tuple[FloatArray, FloatArray, FloatArray]:
            distance = self._distance(x)
            speed = expansion.rate(x) * np.exp(-x)
            slope = speed / (1.0 / (1.0 + distance) + 1.0 / (self.distance_horizon - distance))
            return self._depth_of_distance(distance), slope, distance * speed

        def time_bend(x: FloatArray, slope: FloatArray) -> FloatArray:
            return slope * (slope * expansion.log_rate_slope(x) - 1.0)

        def distance_bend(x: FloatArray, slope: FloatArray) -> FloatArray:
            distance = self._distance(x)
            near, far = 1.0 / (1.0 + distance), 1.0 / (self.distance_horizon - distance)
            per_distance = near + far
            steepening = slope * per_distance * (expansion.log_rate_slope(x) - 1.0)
            return slope * (steepening - (far * far - near * near) / per_distance) / per_distance

        self._x_of_time = _inverse_pieces(self.knots, time_depth, time_bend)
        self._x_of_distance = _inverse_pieces(self.knots, distance_depth, distance_bend)
        self._deepest_time = self._x_of_time.pieces / self._x_of_time.inverse_step


def age_before(expansion: Expansion, x: float) -> float:
    """Return the age of the universe at x in Hubble times: the integral of dx/E from x to infinity.

    With n the power of 1 + z that leads at last, E² = exp(n x) g(x), and u = exp(n (x - x')/2)
    turns the integral into that of 1/√g over u from 0 to 1, on panels that halve towards 0.
    """
    power = expansion.late_power
    edges = np.concatenate([[0.0], 0.5 ** np.arange(60, -1, -1)])
    widths = np.diff(edges)[:, None]
    nodes = edges[:-1, None] + widths * (0.5 + 0.5 * _GAUSS_NODES)
    shape = expansion.late_shape(x - 2.0 / power * np.log(nodes.ravel()))
    weights = (0.5 * widths * _GAUSS_WEIGHTS).ravel()
    return float(2.0 / power * math.exp(-0.5 * power * x) * (weights @ shape**-0.5))


def _half_panel_integrals(
    expansion: Expansion, knots: FloatArray, step: float
) -> tuple[FloatArray, FloatArray]:
    """Return the integrals of 1/E and exp(x)/E over both halves of each panel, (panels, 2)."""
    half = 0.5 * step
    inner = half * (0.5 + 0.5 * _GAUSS_NODES)
    nodes = knots[:-1, None, None] + np.stack([inner, half + inner])[None, :, :]
    rates = expansion.rate(nodes.ravel()).reshape(nodes.shape)
    weights = 0.5 * half * _GAUSS_WEIGHTS
    return (1.0 / rates) @ weights, (np.exp(nodes) / rates) @ weights


def _running_sum(parts: FloatArray) -> FloatArray:
    """Return 0 and the partial sums, in two levels so that rounding does not pile up."""
    width = 64
    padded = np.zeros(-(-len(parts) // width) * width)
    padded[: len(parts)] = parts
    inner = np.cumsum(padded.reshape(-1, width), axis=1)
    inner[1:] += np.cumsum(inner[:-1, -1])[:, None]
    return np.concatenate([[0.0], inner.ravel()[: len(parts)]])


def _agrees(pieces: HermitePieces, middles: FloatArray) -> bool:
    """Tell whether the pieces reproduce the values at the middles of their panels."""
    found = np.empty_like(middles)
    pieces.evaluate(np.arange(len(middles)), np.full_like(middles, 0.5), found)
    return bool(np.max(np.abs(found / middles - 1.0)) <= _TOLERANCE)


def _inverse_pieces(knots: FloatArray, depth_law: DepthLaw, bend_law: BendLaw) -> HermitePieces:
    """Tabulate x on a uniform grid of the depth u(x), by Newton's method from the forward grid."""
    depth_at_knots = depth_law(knots)[0]
    panels = _FEWEST_PANELS
    while True:
        grid = np.linspace(0.0, depth_at_knots[-1], panels + 1)
        x = np.interp(grid, depth_at_knots, knots)
        moved = np.inf
        while moved > _NEWTON_TOLERANCE:
            depth, slope, _ = depth_law(x)
            correction = (grid - depth) * slope
            x = np.clip(x + correction, 0.0, HIGHEST_X)
            # Relative to the depth, since near today x must be right relative to itself; the far
            # half is left out, where rounding of the depth alone moves x.
            moves = np.abs(correction[1 : panels // 2]) / grid[1 : panels // 2]
            previous, moved = moved, float(np.max(moves))
            if moved >= 0.5 * previous:
                break
        slope = depth_law(x)[1]
        pieces = HermitePieces(0.0, grid[1], x, slope, bend_law(x, slope))
        if _inverts(pieces, grid[:-1] + 0.5 * grid[1], depth_law):
            return pieces
        panels *= 2
        if panels > _MOST_PANELS:
            raise ArgumentError(_TOO_SHARP)


def _inverts(pieces: HermitePieces, depths: FloatArray, depth_law: DepthLaw) -> bool:
    """Tell whether the pieces lead back to the depths that they are given."""
    found = pieces(depths)
    depth, slope, forgiven = depth_law(found)
    error = np.abs(depth - depths) * slope
    return bool(np.all(error <= _INVERSE_TOLERANCE * (found + forgiven)))
