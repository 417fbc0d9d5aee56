"""What "close" means in all numeric tests, said once."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

EXACT = 1e-12
"""Greatest relative error of a measure that is promised (issue: "exactness")."""
EXACT_MODULUS_MAG = 5e-11
"""Greatest error of a distance modulus in magnitudes; it may be zero, so not a relative one."""


def plain(value: Any) -> NDArray[np.float64]:
    """The bare numbers of a quantity, a number, a list or an array; the unit is dropped."""
    return np.asarray(getattr(value, "magnitude", value), dtype=np.float64)


def assert_close(
    found: Any, expected: ArrayLike, *, relative: float = EXACT, absolute: ArrayLike = 0.0
) -> None:
    """Fail unless each number is within relative * |expected| + absolute of the expected one.

    Shapes must be equal (a scalar expectation serves all elements), NaN agrees with NaN and
    with nothing else, an infinity with the same infinity.

    Args:
        found: quantity or numbers; units are not compared.
        expected: numbers.
        relative: greatest relative error; bare.
        absolute: greatest absolute error, in the unit of the numbers; broadcast to their shape.
    """
    have, want = plain(found), plain(expected)
    if want.shape:
        assert have.shape == want.shape, f"shape {have.shape} instead of {want.shape}"
    want = np.broadcast_to(want, have.shape)
    same = (have == want) | (np.isnan(have) & np.isnan(want))
    with np.errstate(invalid="ignore"):
        allowed = relative * np.abs(want) + np.asarray(absolute)
        good = same | (np.abs(have - want) <= allowed)
    if not np.all(good):
        worst = np.unravel_index(
            int(np.argmax(np.where(good, 0.0, np.nan_to_num(np.abs(have - want), nan=np.inf)))),
            have.shape,
        )
        raise AssertionError(
            f"{np.sum(~good)} of {good.size} differ; worst at {tuple(map(int, worst))}: "
            f"found {have[worst]!r}, expected {want[worst]!r}, "
            f"difference {have[worst] - want[worst]:.3g}"
        )
