"""Exactness under histories that nobody chose, against quadrature made on the spot."""

from __future__ import annotations

import numpy as np
from hypothesis import assume, example, given, settings
from hypothesis import strategies as st
from mpmath import mp

import epochconv
from tests.closeness import EXACT, EXACT_MODULUS_MAG, assert_close, plain
from tests.reference.frozen_rows import FIELDS, history_of
from tests.reference.quadrature import Answers, Quadrature, Universe
from tests.reference.slopes import slopes
from tests.strategies import STEADY_MEASURES, redshifts, universes

# Half the digits of the frozen file suffice here, and make the neutrino sums quick.
QUICK_DIGITS = 19

ONE_REDSHIFT_EACH = st.tuples(redshifts(1e-8, 0.1), redshifts(0.1, 20), redshifts(20, 1e9))


def made_or_skipped(universe: Universe) -> epochconv.ExpansionHistory:
    """The history, unless it is refused: E^2 <= 0 somewhere, or less matter than neutrinos."""
    try:
        return history_of(universe)
    except epochconv.ArgumentError:
        assume(False)
        raise


def assert_exact(universe: Universe, z: tuple[float, ...]) -> None:
    """Fail unless all maps keep the promise of test_exactness.py, forward and backward."""
    history = made_or_skipped(universe)
    with mp.workdps(QUICK_DIGITS):
        answers = Quadrature(universe, method="tanh-sinh", panel=7.0).answers(z)
    x = np.log1p(z)
    for measure, field in FIELDS.items():
        expected = np.array([float(getattr(answers[one], field)) for one in z])
        found = epochconv.convert(list(z), "redshift", measure, history=history)
        if measure == "distance modulus":
            assert_close(found, expected, relative=0, absolute=EXACT_MODULUS_MAG)
        else:
            assert_close(found, expected, relative=EXACT)
        if measure in STEADY_MEASURES:
            slope = np.array([slopes_of(universe, one, answers[one])[measure] for one in z])
            back = epochconv.convert(expected, measure, "redshift", history=history)
            allowed = EXACT * x * (1 + np.abs(expected / (x * slope)))
            assert_close(np.log1p(back.magnitude), x, relative=0, absolute=allowed)


def slopes_of(universe: Universe, z: float, answers: Answers) -> dict[str, float]:
    known = {measure: float(getattr(answers, field)) for measure, field in FIELDS.items()}
    return slopes(universe, z, known | {"hubble slope": float(answers.hubble_slope)})


@settings(max_examples=25)
@given(universes(massive=False), ONE_REDSHIFT_EACH)
# Negative dark energy: the late end of the inverse of the age needs the last digits of Newton.
@example(Universe(70.0, 1.15625, curvature=0.28125, radiation=False), (1e-8, 0.5, 1e9))
def test_forward_maps_are_exact_with_massless_neutrinos(
    universe: Universe, z: tuple[float, ...]
) -> None:
    assert_exact(universe, z)


@settings(max_examples=6)
@given(universes(), ONE_REDSHIFT_EACH)
def test_forward_maps_are_exact_with_massive_neutrinos(
    universe: Universe, z: tuple[float, ...]
) -> None:
    assert_exact(universe, z)


@settings(max_examples=25)
@given(universes())
def test_equal_parameters_are_one_history(universe: Universe) -> None:
    """Equal, of one hash, and repr evaluates back to it with the same answers."""
    history = made_or_skipped(universe)
    again = eval(repr(history), {"ExpansionHistory": epochconv.ExpansionHistory})
    assert again == history
    assert hash(again) == hash(history)
    z = [1e-8, 0.5, 1e9]
    np.testing.assert_array_equal(
        plain(epochconv.convert(z, "redshift", "age", history=again)),
        plain(epochconv.convert(z, "redshift", "age", history=history)),
    )
