"""Quintic Hermite pieces on a uniform grid: one table row and five multiply-adds per element.

Value, slope and curvature are matched at every knot, so a piece that starts at zero keeps full
relative precision there, and the error falls with the sixth power of the step.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]
BoolArray = NDArray[np.bool_]

# Elements handled at a time: the handful of work arrays of this length stay in the second-level
# cache, which makes the evaluation several times faster than whole-array passes.
BLOCK = 16384


class HermitePieces:
    """A function tabulated on a uniform grid that starts at `origin`.

    Args:
        origin: position of the first knot.
        step: distance between knots.
        values, slopes, curvatures: function and its first two derivatives at the knots, 1-d.
    """

    def __init__(
        self,
        origin: float,
        step: float,
        values: FloatArray,
        slopes: FloatArray,
        curvatures: FloatArray,
    ) -> None:
        self.origin = origin
        self.inverse_step = 1.0 / step
        self.pieces = len(values) - 1
        # One piece more, for the last knot itself: no position then needs a check of its own (a
        # NaN looks into piece 0 and stays NaN).
        rows = quintic_coefficients(step, values, slopes, curvatures)
        end = np.array([[values[-1]], [slopes[-1] * step], [0.0], [0.0], [0.0], [0.0]])
        self.coefficients = np.concatenate([rows, end], axis=1)

    def __call__(self, positions: FloatArray) -> FloatArray:
        """Return the function at `positions` (1-d; NaN gives NaN; beyond the grid is our bug)."""
        result = np.empty_like(positions)
        for start in range(0, len(positions), BLOCK):
            piece, fraction = self.locate(positions[start : start + BLOCK])
            self.evaluate(piece, fraction, result[start : start + BLOCK])
        return result

    def slope(self, positions: FloatArray) -> FloatArray:
        """Return the derivative of the pieces at `positions` (1-d)."""
        piece, fraction = self.locate(positions)
        columns = np.take(self.coefficients, piece, axis=1, mode="clip")
        result: FloatArray = 5.0 * columns[5]
        for power in (4, 3, 2, 1):
            result *= fraction
            result += power * columns[power]
        result *= self.inverse_step
        return result

    def locate(self, positions: FloatArray) -> tuple[NDArray[np.intp], FloatArray]:
        """Return piece numbers and fractions in [0, 1] of one block of positions."""
        fraction = (
            positions * self.inverse_step
            if self.origin == 0.0
            else ((positions - self.origin) * self.inverse_step)
        )
        with np.errstate(invalid="ignore"):
            piece = fraction.astype(np.intp)
        fraction -= piece
        return piece, fraction

    def evaluate(self, piece: NDArray[np.intp], fraction: FloatArray, result: FloatArray) -> None:
        """Write the function at located positions into `result` (Horner's rule)."""
        scratch = np.empty_like(fraction)
        columns = self.coefficients
        np.take(columns[5], piece, out=result, mode="clip")
        for column in (columns[4], columns[3], columns[2], columns[1], columns[0]):
            np.take(column, piece, out=scratch, mode="clip")
            result *= fraction
            result += scratch


def quintic_coefficients(
    step: float, values: FloatArray, slopes: FloatArray, curvatures: FloatArray
) -> FloatArray:
    """Return the six rows of power coefficients (fraction of a step) of all pieces."""
    slope = slopes * step
    half_curvature = curvatures * (0.5 * step * step)
    rise = np.diff(values) - slope[:-1] - half_curvature[:-1]
    slope_gap = np.diff(slope) - 2.0 * half_curvature[:-1]
    curvature_gap = np.diff(half_curvature)
    rows = np.empty((6, len(values) - 1))
    rows[0] = values[:-1]
    rows[1] = slope[:-1]
    rows[2] = half_curvature[:-1]
    rows[3] = 10.0 * rise - 4.0 * slope_gap + curvature_gap
    rows[4] = -15.0 * rise + 7.0 * slope_gap - 2.0 * curvature_gap
    rows[5] = 6.0 * rise - 3.0 * slope_gap + curvature_gap
    return rows
