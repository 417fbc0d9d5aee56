"""Quintic pieces: exact for quintics, matched at knots, and right in the last digits near zero."""

from __future__ import annotations

import numpy as np
import pytest

from epochconv.hermite import BLOCK, FloatArray, HermitePieces, quintic_coefficients
from tests.closeness import assert_close

RANDOM = np.random.default_rng(20180716)


def pieces_of(polynomial: np.polynomial.Polynomial, origin: float, step: float) -> HermitePieces:
    knots = origin + step * np.arange(6)
    first, second = polynomial.deriv(1), polynomial.deriv(2)
    return HermitePieces(origin, step, polynomial(knots), first(knots), second(knots))


@pytest.mark.parametrize("degree", range(6))
@pytest.mark.parametrize(("origin", "step"), [(0.0, 0.5), (-3.0, 1.25), (10.0, 0.01)])
def test_polynomials_up_to_the_fifth_degree_are_exact(
    degree: int, origin: float, step: float
) -> None:
    polynomial = np.polynomial.Polynomial(RANDOM.uniform(-1, 1, degree + 1))
    pieces = pieces_of(polynomial, origin, step)
    positions = np.linspace(origin, origin + 5 * step, 101)
    scale = np.max(np.abs(polynomial(positions))) + 1e-3
    assert_close(pieces(positions), polynomial(positions), relative=0, absolute=1e-13 * scale)
    slope = polynomial.deriv(1)(positions)
    assert_close(pieces.slope(positions), slope, relative=0, absolute=1e-12 * scale / step)


def test_sixth_degree_is_not_exact() -> None:
    """Else the tests above would not tell a quintic from anything better."""
    polynomial = np.polynomial.Polynomial.basis(6)
    middle = np.array([0.25])
    assert abs(pieces_of(polynomial, 0.0, 0.5)(middle)[0] - polynomial(0.25)) > 1e-4


def test_error_falls_with_the_sixth_power_of_the_step() -> None:
    errors = []
    for count in (8, 16):
        knots = np.linspace(0, 4, count + 1)
        pieces = HermitePieces(0.0, 4 / count, np.sin(knots), np.cos(knots), -np.sin(knots))
        positions = np.linspace(0, 4, 1001)
        errors.append(np.max(np.abs(pieces(positions) - np.sin(positions))))
    assert 50 < errors[0] / errors[1] < 80  # 2⁶ = 64


def test_knots_are_met_exactly_the_last_one_too() -> None:
    values = RANDOM.uniform(-1, 1, 9)
    pieces = HermitePieces(0.0, 0.25, values, RANDOM.uniform(-1, 1, 9), RANDOM.uniform(-1, 1, 9))
    np.testing.assert_array_equal(pieces(0.25 * np.arange(9)), values)


def test_piece_that_starts_at_zero_keeps_relative_precision() -> None:
    """expm1 near 0: absolute precision alone would lose every digit at 1e-12."""
    knots = np.linspace(0, 1, 65)
    pieces = HermitePieces(0.0, knots[1], np.expm1(knots), np.exp(knots), np.exp(knots))
    positions = np.array([1e-15, 1e-12, 1e-9, 1e-6])
    assert_close(pieces(positions), np.expm1(positions), relative=1e-15)


@pytest.mark.parametrize("count", [0, 1, BLOCK - 1, BLOCK, BLOCK + 1, 2 * BLOCK + 7])
def test_blocks_are_seamless(count: int) -> None:
    knots = np.linspace(0, 7, 513)
    pieces = HermitePieces(0.0, knots[1], np.sin(knots), np.cos(knots), -np.sin(knots))
    positions = RANDOM.uniform(0, 7, count)
    found = pieces(positions)
    assert found.shape == (count,)
    assert_close(found, np.sin(positions), absolute=1e-14)


def test_nan_gives_nan_and_harms_no_neighbour() -> None:
    knots = np.linspace(0, 7, 513)
    pieces = HermitePieces(0.0, knots[1], np.sin(knots), np.cos(knots), -np.sin(knots))
    found = pieces(np.array([1.0, np.nan, 2.0]))
    assert_close(found, [np.sin(1), np.nan, np.sin(2)], absolute=1e-14)


def test_positions_are_not_changed() -> None:
    pieces = HermitePieces(1.0, 0.5, *np.ones((3, 4)))
    positions: FloatArray = np.array([1.1, 2.2])
    pieces(positions)
    pieces.slope(positions)
    np.testing.assert_array_equal(positions, [1.1, 2.2])


def test_coefficients_match_value_slope_and_curvature_at_both_ends() -> None:
    step = 0.3
    values, slopes, curvatures = RANDOM.uniform(-1, 1, (3, 5))
    rows = quintic_coefficients(step, values, slopes, curvatures)
    assert rows.shape == (6, 4)
    for i in range(4):
        piece = np.polynomial.Polynomial(rows[:, i])
        for end, fraction in ((i, 0.0), (i + 1, 1.0)):
            assert_close(piece(fraction), values[end], absolute=1e-14)
            assert_close(piece.deriv(1)(fraction) / step, slopes[end], absolute=1e-13)
            assert_close(piece.deriv(2)(fraction) / step**2, curvatures[end], absolute=1e-12)
