"""Tables of time and distance in both directions, and their refinement for sharp histories.

The references here are closed forms: matter alone, E = (1 + z)^(3/2); and curvature alone (Milne),
E = 1 + z, where the lookback time is 1 - 1/(1 + z) and the distance ln(1 + z). Exactness against
quadrature is tested in test_exactness.py.
"""

from __future__ import annotations

import math

import numpy as np
import pytest
from mpmath import mp, mpf

from epochconv.errors import ArgumentError
from epochconv.expansion import Expansion
from epochconv.tables import HIGHEST_REDSHIFT, HIGHEST_X, Tables, age_before
from tests.closeness import assert_close

X = np.array([1e-12, 1e-8, 1e-3, 0.3, 0.7, 1.0, 2.0, 7.0, 15.0, 23.0])


def law(matter: float, curvature: float, dark_energy: float, **more: float) -> Expansion:
    return Expansion(
        cold_matter=matter,
        photons=more.get("photons", 0.0),
        massless_neutrinos=0.0,
        massive=(),
        curvature=curvature,
        dark_energy=dark_energy,
        w0=more.get("w0", -1.0),
        wa=more.get("wa", 0.0),
    )


@pytest.fixture(scope="module")
def matter() -> Tables:
    return Tables(law(1.0, 0.0, 0.0))


@pytest.fixture(scope="module")
def milne() -> Tables:
    return Tables(law(0.0, 1.0, 0.0))


def times(table: Tables, x: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    lookback, age = np.empty_like(x), np.empty_like(x)
    table.times(x, lookback, age)
    return lookback, age


def test_times_where_there_is_matter_alone(matter: Tables) -> None:
    lookback, age = times(matter, X)
    assert_close(age, 2 / 3 * np.exp(-1.5 * X))
    assert_close(lookback, -2 / 3 * np.expm1(-1.5 * X))
    assert_close(matter.age_today, 2 / 3)


def test_distance_where_there_is_matter_alone(matter: Tables) -> None:
    assert_close(matter.distance(X), -2 * np.expm1(-0.5 * X))
    assert_close(matter.distance_highest, -2 * math.expm1(-0.5 * HIGHEST_X))
    assert matter.distance_highest < 2.0 < matter.distance_horizon * 1.0001


def test_times_and_distance_where_there_is_curvature_alone(milne: Tables) -> None:
    """The horizon is infinite, and the inverse works all the same."""
    lookback, age = times(milne, X)
    assert_close(age, np.exp(-X))
    assert_close(lookback, -np.expm1(-X))
    assert_close(milne.distance(X), X)
    assert_close(milne.x_of_distance(X.copy()), X)
    assert_close(milne.x_of_age(age), X, absolute=1e-12)


@pytest.mark.parametrize("wanted", ["lookback", "age"])
def test_either_time_alone_is_the_same(matter: Tables, wanted: str) -> None:
    lookback, age = times(matter, X)
    alone = np.empty_like(X)
    if wanted == "lookback":
        matter.times(X, alone, None)
        np.testing.assert_array_equal(alone, lookback)
    else:
        matter.times(X, None, alone)
        np.testing.assert_array_equal(alone, age)


def test_inverse_maps_lead_back(matter: Tables) -> None:
    """|x^ - x| <= 1e-12 x (1 + |y/(x f')|), the promise."""
    lookback, age = times(matter, X)
    distance = matter.distance(X)
    for found, value, slope in (
        (matter.x_of_age(age), age, age * 1.5),
        (matter.x_of_lookback(lookback), lookback, age * 1.5),
        (matter.x_of_distance(distance), distance, np.exp(-0.5 * X)),
    ):
        assert_close(found, X, relative=0, absolute=1e-12 * X * (1 + value / (X * slope)))


def test_ends_of_the_tables_come_back(matter: Tables) -> None:
    highest = np.array([HIGHEST_X])
    _, age = times(matter, highest)
    assert math.isclose(HIGHEST_X, math.log(1 + HIGHEST_REDSHIFT), rel_tol=1e-15)
    assert_close(matter.x_of_age(age), highest)
    assert matter.x_of_age(np.array([matter.age_today]))[0] == 0.0
    assert matter.x_of_lookback(np.array([0.0]))[0] == 0.0
    assert matter.x_of_distance(np.array([0.0]))[0] == 0.0
    assert matter.x_of_distance(np.array([matter.distance_highest]))[0] <= HIGHEST_X


def test_lookback_time_that_is_the_age_gives_the_highest_redshift(matter: Tables) -> None:
    found = matter.x_of_lookback(np.array([matter.age_today, np.nan, 0.0]))
    assert_close(found, [HIGHEST_X, np.nan, 0.0], relative=1e-9)


def test_nan_gives_nan_and_input_is_not_changed(matter: Tables) -> None:
    values = np.array([0.5, np.nan, 0.1])
    kept = values.copy()
    lookback, age = times(matter, values)
    results = [
        lookback,
        age,
        matter.distance(values),
        matter.x_of_age(values),
        matter.x_of_lookback(values),
        matter.x_of_distance(values),
    ]
    for result in results:
        assert np.isnan(result).tolist() == [False, True, False]
    np.testing.assert_array_equal(values, kept)


def test_no_values_are_no_results(matter: Tables) -> None:
    nothing = np.array([])
    assert times(matter, nothing)[1].shape == (0,)
    assert matter.distance(nothing).shape == (0,)
    assert matter.x_of_lookback(nothing).shape == (0,)


SHARP = {
    # E² falls to 0.008 before it rises (at 1 + z = 3): the universe all but stands still.
    "loitering": law(0.1, -0.449, 1.349),
    # Dark energy that was a thousand times weaker a moment ago.
    "sudden dark energy": law(0.3, 0.0, 0.7, w0=-8.0, wa=0.0),
    "sudden evolution": law(0.3, 0.0, 0.7, w0=-1.0, wa=-25.0),
}


@pytest.mark.parametrize("name", SHARP)
def test_sharp_history_is_followed_as_exactly(name: str) -> None:
    """Against 20-digit quadrature on short panels."""
    sharp = SHARP[name]
    table = Tables(sharp)

    def rate(x: mpf) -> mpf:
        a = mp.exp(-x)
        w0, wa = mpf(sharp.w0), mpf(sharp.wa)
        dark = sharp.dark_energy * a ** (-3 * (1 + w0 + wa)) * mp.exp(-3 * wa * (1 - a))
        return mp.sqrt(sharp.cold_matter / a**3 + sharp.curvature / a**2 + dark)

    x = np.array([0.02, 0.4, 1.0, 3.0])
    with mp.workdps(20):
        lookback, distance = [], []
        for end in x:
            panels = [mpf(float(end)) * k / 30 for k in range(31)]
            time, length = (
                mp.quad(integrand, panels, method="gauss-legendre")
                for integrand in (lambda u: 1 / rate(u), lambda u: mp.exp(u) / rate(u))
            )
            lookback.append(float(time))
            distance.append(float(length))
    assert_close(times(table, x)[0], lookback)
    assert_close(table.distance(x), distance)
    slope = 1 / np.array([float(rate(mpf(float(one)))) for one in x])
    allowed = 1e-12 * (x + np.array(lookback) / slope)
    assert_close(table.x_of_lookback(np.array(lookback)), x, relative=0, absolute=allowed)
    allowed = 1e-12 * (x + np.array(distance) / (slope * np.exp(x)))
    assert_close(table.x_of_distance(np.array(distance)), x, relative=0, absolute=allowed)


@pytest.mark.parametrize("name", SHARP)
def test_sharp_history_gets_a_finer_grid(name: str, matter: Tables) -> None:
    assert len(Tables(SHARP[name]).knots) > len(matter.knots)


def test_history_that_no_table_follows_is_refused() -> None:
    """E² falls to 0.0008."""
    with pytest.raises(ArgumentError, match="no table follows it to 12 digits; change matter"):
        Tables(law(0.1, -0.4499, 1.3499))


def test_grid_and_rates_are_those_of_the_law(matter: Tables) -> None:
    assert matter.knots[0] == 0.0
    assert matter.knots[-1] == HIGHEST_X
    assert_close(matter.rates, np.exp(1.5 * matter.knots), relative=1e-13)


@pytest.mark.parametrize("x", [HIGHEST_X, 60.0])
def test_age_before_the_tables_in_closed_form(x: float) -> None:
    """Matter: 2/3 e^(-3x/2); radiation: e^(-2x)/2; both: the integral of a da/√(Ω_m a + Ω_r)."""
    assert_close(age_before(law(1.0, 0.0, 0.0), x), 2 / 3 * math.exp(-1.5 * x))
    assert_close(age_before(law(0.0, 0.0, 0.0, photons=1.0), x), 0.5 * math.exp(-2 * x))
    with mp.workdps(100):
        a = mp.exp(-mpf(x))
        root = mp.sqrt((a + 1) / 2)
        both = mpf(8) / 3 * root**3 - 4 * root + mpf(4) / 3 * mp.sqrt(2)
    assert_close(age_before(law(0.5, 0.0, 0.0, photons=0.5), x), float(both))
