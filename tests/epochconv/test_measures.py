"""The built-in measures against their formulas, in a universe of matter alone and in bent ones.

In the universe of Einstein and de Sitter E = (1 + z)^(3/2), so that, with h = 1/H0 and l = c/H0,
the age is 2/3 h (1 + z)^(-3/2) and the distance 2 l (1 - 1/√(1 + z)) (Peebles 1993, section 13,
from memory). More closed forms are in tests/reference.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from epochconv import measures
from epochconv.history import ExpansionHistory
from epochconv.measure import Measure
from epochconv.measures import MEASURES
from epochconv.moment import Moment
from epochconv.units import find_unit
from tests.closeness import assert_close

Z = np.array([1e-8, 0.01, 0.5, 1.25, 3.0, 1100.0, 1e9])
ROOT = np.sqrt(1 + Z)
# 2 (1 - 1/√(1 + z)) without cancellation.
DISTANCE = 2 * Z / (ROOT * (1 + ROOT))


def at(measure: Measure, redshifts: np.ndarray, history: ExpansionHistory) -> np.ndarray:
    return measure.value_at(Moment(redshift=np.array(redshifts)), history)


@pytest.mark.parametrize(
    ("measure", "expected"),
    [
        (measures.REDSHIFT, Z),
        (measures.SCALE_FACTOR, 1 / (1 + Z)),
        (measures.CMB_TEMPERATURE, 2.7255 * (1 + Z)),
        (measures.AGE, 2 / 3 / ROOT**3),
        (measures.LOOKBACK_TIME, -2 / 3 * np.expm1(-1.5 * np.log1p(Z))),
        (measures.COMOVING_DISTANCE, DISTANCE),
        (measures.TRANSVERSE_COMOVING_DISTANCE, DISTANCE),
        (measures.LUMINOSITY_DISTANCE, DISTANCE * (1 + Z)),
        (measures.ANGULAR_DIAMETER_DISTANCE, DISTANCE / (1 + Z)),
        (measures.HUBBLE_RATE, ROOT**3),
    ],
    ids=lambda value: getattr(value, "name", ""),
)
def test_measure_follows_its_formula_where_there_is_matter_alone(
    measure: Measure, expected: np.ndarray, matter_only: ExpansionHistory
) -> None:
    scale = {
        "Gyr": matter_only.hubble_time_gyr,
        "Mpc": matter_only.hubble_length_mpc,
        "km/s/Mpc": 70.0,
    }.get(measure.unit, 1.0)
    assert_close(at(measure, Z, matter_only), expected * scale)


def test_modulus_is_the_logarithm_of_the_luminosity_distance(matter_only: ExpansionHistory) -> None:
    """m - M = 5 log10(D_L / 10 pc), so 10 pc have modulus 0 and 1 Mpc has 25."""
    forth, back = measures.DISTANCE_MODULUS.rescaled_from[1:]  # type: ignore[index] # it is there
    assert_close(forth(np.array([1e-5, 1.0, 10.0])), [0, 25, 30], absolute=1e-14)
    assert_close(back(np.array([0.0, 25.0, 30.0])), [1e-5, 1.0, 10.0], relative=1e-14)
    distance = at(measures.LUMINOSITY_DISTANCE, Z, matter_only)
    assert_close(
        at(measures.DISTANCE_MODULUS, Z, matter_only), 5 * np.log10(distance) + 25, relative=1e-15
    )


def test_modulus_today_is_no_number_and_no_warning(matter_only: ExpansionHistory) -> None:
    assert at(measures.DISTANCE_MODULUS, [0.0], matter_only)[0] == -math.inf


def test_space_bends_the_transverse_distance_alone(closed: ExpansionHistory) -> None:
    """D_M = sin(√-Ω_k D_C) / √-Ω_k in Hubble lengths when closed, sinh when open (Hogg 1999)."""
    opened = ExpansionHistory(hubble_constant=70, matter=0.3, curvature=0.2)
    for history, bend in ((closed, np.sin), (opened, np.sinh)):
        radius = history.hubble_length_mpc / math.sqrt(abs(history.curvature))
        straight = at(measures.COMOVING_DISTANCE, Z, history)
        across = at(measures.TRANSVERSE_COMOVING_DISTANCE, Z, history)
        assert_close(across, radius * bend(straight / radius))
        assert_close(at(measures.LUMINOSITY_DISTANCE, Z, history), across * (1 + Z))
        assert_close(at(measures.ANGULAR_DIAMETER_DISTANCE, Z, history), across / (1 + Z))


def test_distance_beyond_the_antipode_is_a_length(loitering: ExpansionHistory) -> None:
    """It falls to nothing at the antipode and grows again behind it; it is never negative."""
    redshifts = np.linspace(0.1, 20, 400)
    radius = loitering.hubble_length_mpc / math.sqrt(-loitering.curvature)
    angle = at(measures.COMOVING_DISTANCE, redshifts, loitering) / radius
    assert angle.max() > 1.2 * math.pi
    for measure, power in (
        (measures.TRANSVERSE_COMOVING_DISTANCE, 0),
        (measures.LUMINOSITY_DISTANCE, 1),
        (measures.ANGULAR_DIAMETER_DISTANCE, -1),
    ):
        values = at(measure, redshifts, loitering)
        assert np.all(values > 0)
        assert_close(values, radius * np.abs(np.sin(angle)) * (1 + redshifts) ** power)
    assert np.all(np.isfinite(at(measures.DISTANCE_MODULUS, redshifts, loitering)))


@pytest.mark.parametrize("universe", ["matter_only", "closed", "loitering", "phantom"])
@pytest.mark.parametrize(
    "measure", [m for m in MEASURES if m.slope_at is not None], ids=lambda measure: measure.name
)
def test_slope_is_that_of_the_measure(
    measure: Measure, universe: str, request: pytest.FixtureRequest
) -> None:
    """Against central differences in x, whose error falls with the square of the step."""
    history = request.getfixturevalue(universe)
    x = np.array([0.01, 0.3, 0.9, 1.7, 4.0, 12.0])
    # Shorter near today, where a modulus bends as fast as 1/x².
    step = 1e-4 * np.minimum(x, 0.1)
    assert measure.slope_at is not None
    ahead = measure.value_at(Moment(x=x + step), history)
    behind = measure.value_at(Moment(x=x - step), history)
    slope = measure.slope_at(x, history)
    scale = np.abs(measure.value_at(Moment(x=x), history))
    assert_close(slope, (ahead - behind) / (2 * step), relative=1e-8, absolute=1e-8 * scale)


@pytest.mark.parametrize(
    "measure", [m for m in MEASURES if m.moment_of is not None], ids=lambda measure: measure.name
)
def test_own_inverse_stays_in_its_range(measure: Measure, matter_only: ExpansionHistory) -> None:
    assert measure.moment_of is not None
    assert measure.range_of is not None
    low, high = measure.range_of(matter_only)
    middle = math.sqrt(max(low, 1e-9 * high) * high)
    values = np.array([low, middle, high])
    x = measure.moment_of(values, matter_only).x
    assert np.all((x >= 0) & (x <= math.log1p(1e10) * (1 + 1e-9)))
    found = measure.value_at(Moment(x=np.clip(x, 0, math.log1p(1e10))), matter_only)
    assert_close(found, values, relative=1e-11)


@pytest.mark.parametrize("measure", MEASURES, ids=lambda measure: measure.name)
def test_measure_says_what_it_is(measure: Measure) -> None:
    assert find_unit(measure.unit) is not None
    assert measure.meaning.endswith(".")
    assert measure.source
    assert not measure.below.endswith(".")


@pytest.mark.parametrize("measure", MEASURES, ids=lambda measure: measure.name)
def test_measure_leaves_the_moment_alone(measure: Measure, matter_only: ExpansionHistory) -> None:
    moment = Moment(redshift=Z.copy())
    x = moment.x.copy()
    measure.value_at(moment, matter_only)
    np.testing.assert_array_equal(moment.redshift, Z)
    np.testing.assert_array_equal(moment.x, x)


def test_temperature_today_is_that_of_the_history() -> None:
    warm = ExpansionHistory(hubble_constant=70, matter=0.3, temperature_today=3, radiation=False)
    assert_close(at(measures.CMB_TEMPERATURE, [0.0, 1.0, 999.0], warm), [3.0, 6.0, 3000.0])
