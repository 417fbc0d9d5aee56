"""A value and its errors as text."""

from __future__ import annotations

import math

import pytest

from epochconv.printing import value_with_errors


@pytest.mark.parametrize(
    ("value", "lower", "upper", "expected"),
    [
        # to the second digit of the smaller error
        (12.87123, 0.0412, 0.0412, "12.871 ± 0.041"),
        (12.87123, 0.0412, 0.0512, "12.871 +0.051 −0.041"),
        (0.95, 0.0951, 0.0999, "0.950 +0.100 −0.095"),
        (0.5, 0.5, 30.0, "0.50 +30.00 −0.50"),
        (-19.3, 0.25, 0.25, "-19.30 ± 0.25"),
        # equal as far as shown
        (1.0, 0.1001, 0.1, "1.00 ± 0.10"),
        # errors above ten
        (12345.0, 2345.0, 2345.0, "12300 ± 2300"),
        (1701.3, 180.0, 59.0, "1701 +59 −180"),
        # very small and very large numbers
        (1.2345e-9, 1.2e-10, 1.2e-10, "(1.23 ± 0.12)e-9"),
        (1.5e8, 1e6, 2e6, "(1.500 +0.020 −0.010)e8"),
        (200.0, 200.0, 1e10, "200 +10000000000 −200"),
        # no error, none that counts, none that is known, none that ends
        (2.34567, 0.0, 0.0, "2.34567 ± 0"),
        (0.0, 0.0, 0.0, "0 ± 0"),
        (0.0, 0.1, 0.2, "0.00 +0.20 −0.10"),
        (13.797, 1e-20, 1e-20, "13.797 ± 1e-20"),
        (5.0, math.nan, 0.1, "5 (error not known)"),
        (5.0, 0.1, math.nan, "5 (error not known)"),
        (math.nan, 0.1, 0.1, "none"),
        (28.15, math.inf, 2.42, "28.1 +2.4 −inf"),
        (28.15, math.inf, 0.0, "28.15 +0 −inf"),
    ],
)
def test_reads(value: float, lower: float, upper: float, expected: str) -> None:
    assert value_with_errors(value, lower, upper) == expected
