"""A number with a standard deviation of its own, as packages for such numbers make them."""

from __future__ import annotations


class UncertainNumber:
    """It offers the two attributes by which such numbers are known, and linear arithmetic."""

    __array_ufunc__ = None  # numpy leaves arithmetic with scalars to it

    def __init__(self, nominal_value: float, std_dev: float) -> None:
        self.nominal_value = nominal_value
        self.std_dev = std_dev

    def __add__(self, other: float) -> UncertainNumber:
        return UncertainNumber(self.nominal_value + other, self.std_dev)

    def __sub__(self, other: float) -> UncertainNumber:
        return self + -other

    def __mul__(self, other: float) -> UncertainNumber:
        return UncertainNumber(self.nominal_value * other, self.std_dev * abs(other))

    __radd__, __rmul__ = __add__, __mul__
