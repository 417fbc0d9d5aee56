"""A moment in cosmic history, or an array of them: x = ln(1 + z) and z, each made when asked for.

Both are kept, since 1 + z loses the digits of a small z and x those of a round one.
"""

from __future__ import annotations

import numpy as np

from epochconv.hermite import FloatArray


class Moment:
    """Moments given by `x` or by `redshift`, arrays of shape (n,)."""

    __slots__ = ("_redshift", "_x")

    def __init__(self, *, x: FloatArray | None = None, redshift: FloatArray | None = None) -> None:
        self._x = x
        self._redshift = redshift

    @property
    def x(self) -> FloatArray:
        """ln(1 + z)."""
        if self._x is None:
            assert self._redshift is not None
            self._x = np.log1p(self._redshift)
        return self._x

    @property
    def redshift(self) -> FloatArray:
        """z."""
        if self._redshift is None:
            assert self._x is not None
            self._redshift = np.expm1(self._x)
        return self._redshift
