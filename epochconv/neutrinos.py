"""Energy density of massive neutrinos: the Fermi-Dirac integral itself, not a fit.

A relic species keeps the momentum distribution 1/(exp(q) + 1), q = p c / (k T), with which it
decoupled (Lesgourgues & Pastor 2006, Physics Reports 429, 307, section 2). Its energy density
over that of a massless one is F(y)/F(0), where y = m c^2 / (k T) at the epoch and

    F(y) = integral from 0 to infinity of q^2 sqrt(q^2 + y^2) / (exp(q) + 1) dq,  F(0) = 7π^4/120.
"""

from __future__ import annotations

import functools
import math

import numpy as np

from epochconv.hermite import FloatArray, HermitePieces

MASSLESS = 7.0 * math.pi**4 / 120.0

# Outside these ends the first terms of the expansions are exact to 1e-17.
_LOG_LOW, _LOG_HIGH = -21.0, 21.0
_PIECES = 4096
_TINY = 1e-300


def density_ratio(mass_over_temperature: FloatArray) -> FloatArray:
    """Return F(y)/F(0), at least 1, for y >= 0 of shape (n,)."""
    log_mass = np.log(np.maximum(mass_over_temperature, _TINY))
    if log_mass.size and log_mass.min() >= _LOG_LOW and log_mass.max() <= _LOG_HIGH:
        return np.exp(_log_ratio_pieces()(log_mass))
    result = np.maximum(1.0, mass_over_temperature * (_COLD_SLOPE / MASSLESS))
    result[log_mass < _LOG_LOW] = 1.0
    inside = (log_mass >= _LOG_LOW) & (log_mass <= _LOG_HIGH)
    result[inside] = np.exp(_log_ratio_pieces()(log_mass[inside]))
    return result


def log_slope(mass_over_temperature: FloatArray) -> FloatArray:
    """Return d ln F / d ln y, from 0 (relativistic) to 1 (cold), for y >= 0 of shape (n,)."""
    log_mass = np.log(np.maximum(mass_over_temperature, _TINY))
    result = (log_mass > 0.0).astype(np.float64)
    inside = (log_mass >= _LOG_LOW) & (log_mass <= _LOG_HIGH)
    result[inside] = _log_ratio_pieces().slope(log_mass[inside])
    return result


# 3 ζ(3) / 2, the number integral: F(y) tends to y times it when the species is cold.
_COLD_SLOPE = 1.803085354739391


@functools.cache
def _nodes() -> tuple[FloatArray, FloatArray]:
    """Momenta and weights of the trapezoidal rule in ln q.

    In ln q the nearest singularities (the poles of the distribution at q = ±iπ and the branch
    points at q = ±iy) stay π/2 off the real axis for every y, so that the rule converges
    geometrically (Trefethen & Weideman 2014, SIAM Review 56, 385): to 1e-16 for the step of 0.2.
    """
    momentum = np.exp(np.arange(-67, 21) * 0.2)
    weight = 0.2 * momentum**3 / (np.exp(momentum) + 1.0)
    return momentum, weight


def _moments(mass: FloatArray) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return F, y F' and y² F'' at each y, by direct quadrature."""
    momentum, weight = _nodes()
    energy = np.hypot(momentum[:, None], mass[None, :])
    square = mass * mass
    inverse = 1.0 / energy
    first = weight @ inverse
    second = (weight * momentum**2) @ inverse**3
    return weight @ energy, square * first, square * second


@functools.cache
def _log_ratio_pieces() -> HermitePieces:
    """Tabulate ln(F(y)/F(0)) on ln y; one table serves every mass, temperature and history."""
    knots = np.linspace(_LOG_LOW, _LOG_HIGH, _PIECES + 1)
    energy, stretch, bend = _moments(np.exp(knots))
    slope = stretch / energy
    curvature = (stretch + bend) / energy - slope * slope
    return HermitePieces(_LOG_LOW, knots[1] - knots[0], np.log(energy / MASSLESS), slope, curvature)
