"""Registries of units as callers bring them, and histories with answers in closed form."""

from __future__ import annotations

from collections.abc import Iterator

import pint
import pytest

from epochconv.history import ExpansionHistory

# Enough for distances, times and temperatures, in a registry of somebody's own making. Its parsec
# is pint's, a tangent, 8e-12 away from the IAU's.
FEW_DEFINITIONS = (
    "kilo- = 1e3",
    "mega- = 1e6",
    "giga- = 1e9",
    "meter = [length]",
    "second = [time]",
    "kelvin = [temperature]",
    "year = 31557600 * second",
    "parsec = 3.0856775814671916e16 * meter",
    "light_year = 9460730472580800 * meter",
)


def made_registry(definitions: tuple[str, ...]) -> pint.UnitRegistry:
    """A registry that holds nothing but these definitions."""
    registry = pint.UnitRegistry(None)
    for line in definitions:
        registry.define(line)
    return registry


@pytest.fixture(scope="session")
def foreign() -> pint.UnitRegistry:
    """A full registry that is not the application's."""
    return pint.UnitRegistry()


@pytest.fixture(scope="session")
def small() -> pint.UnitRegistry:
    """A registry of a few definition lines."""
    return made_registry(FEW_DEFINITIONS)


@pytest.fixture
def other_application() -> Iterator[pint.UnitRegistry]:
    """The application registry, set anew for one test."""
    before = pint.get_application_registry().get()
    registry = pint.UnitRegistry()
    pint.set_application_registry(registry)
    yield registry
    pint.set_application_registry(before)


@pytest.fixture(scope="session")
def matter_only() -> ExpansionHistory:
    """Einstein and de Sitter's flat universe of matter alone: E = (1 + z)^(3/2)."""
    return ExpansionHistory(hubble_constant=70, matter=1, radiation=False)


@pytest.fixture(scope="session")
def closed() -> ExpansionHistory:
    """A closed universe whose transverse distance turns over, short of the antipode."""
    return ExpansionHistory(hubble_constant=70, matter=0.5, curvature=-0.5, radiation=False)


@pytest.fixture(scope="session")
def loitering() -> ExpansionHistory:
    """A closed universe so slow that light has passed the antipode: three times one distance."""
    return ExpansionHistory(hubble_constant=70, matter=0.3, curvature=-0.96, radiation=False)


@pytest.fixture(scope="session")
def phantom() -> ExpansionHistory:
    """Dark energy that grows: the expansion rate falls, then rises, so that it has a minimum."""
    return ExpansionHistory(hubble_constant=70, matter=0.3, dark_energy=(-2.5, 0))
