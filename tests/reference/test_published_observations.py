"""Measurements of the very quantities that are converted: temperatures, distances, moduli.

Marks as in test_published.py: "seen" or "memory".
"""

from __future__ import annotations

import numpy as np
import pytest

import epochconv
from tests.closeness import assert_close
from tests.reference.slopes import SPEED_OF_LIGHT_KM_PER_S

FIXSEN_2009 = epochconv.ExpansionHistory(
    hubble_constant=67.36, matter=0.3153, temperature_today=2.72548
)
OLDER = epochconv.ExpansionHistory(hubble_constant=70, matter=0.3, temperature_today=2.725)


@pytest.mark.parametrize(
    ("redshift", "printed_k", "half_a_digit", "history"),
    [
        # Srianand et al. 2008, A&A 482, L39 (seen): expected 9.315 +- 0.007 K with 2.725 K today.
        (2.41837, 9.315, 0.0005, OLDER),
        # Muller et al. 2013, A&A 551, A109 (memory): 5.14 K; 0.89 for the redshift would give 5.15.
        (0.88582, 5.14, 0.005, FIXSEN_2009),
        # Riechers et al. 2022, Nature 602, 58 (seen): 20.0 K.
        (6.34, 20.0, 0.05, FIXSEN_2009),
    ],
)
def test_temperature_that_papers_expect(
    redshift: float, printed_k: float, half_a_digit: float, history: epochconv.ExpansionHistory
) -> None:
    found = epochconv.convert(redshift, "redshift", "CMB temperature", history=history)
    assert_close(found, printed_k, relative=0, absolute=half_a_digit)


@pytest.mark.parametrize(
    ("redshift", "measured_k", "above_k", "below_k"),
    [
        # Noterdaeme et al. 2011, A&A 526, L7, table 1 (memory): CO absorbers.
        (1.7293, 7.5, 1.6, 1.2),
        (1.7738, 7.8, 0.7, 0.6),
        (2.0377, 8.6, 1.1, 1.0),
        (2.6896, 10.5, 0.8, 0.6),
        # Srianand et al. 2008 (seen).
        (2.41837, 9.15, 0.72, 0.72),
        # Riechers et al. 2022 (seen): 16.4 K to 30.2 K.
        (6.34, 20.0, 10.2, 3.6),
    ],
)
def test_measured_temperature_agrees_within_its_error(
    redshift: float, measured_k: float, above_k: float, below_k: float
) -> None:
    """T = T0 (1+z) lies inside every printed 68 % interval."""
    found = epochconv.convert(redshift, "redshift", "CMB temperature", history=FIXSEN_2009)
    assert measured_k - below_k <= found.magnitude <= measured_k + above_k


def test_temperature_at_last_scattering() -> None:
    """About 3000 K in every text book; 2.7255 K times 1090.92, Planck 2018 VI table 2 (seen)."""
    found = epochconv.convert(1089.92, "redshift", "CMB temperature")
    assert_close(found, 2973.302, relative=1e-6)


class TestBaryonAcousticOscillations:
    """DESI Collaboration 2025, arXiv:2503.14738, table IV and its public data file (seen).

    The best flat fit to these data alone, Omega_m 0.2975 and h r_d 101.54 Mpc (memory), must be
    within 2 sigma of each. With H0 = 100 the distances come out in Mpc/h.
    """

    history = epochconv.ExpansionHistory(hubble_constant=100, matter=0.2975, radiation=False)
    sound_horizon = 101.54

    @pytest.mark.parametrize(
        ("redshift", "kind", "measured", "sigma"),
        [
            (0.295, "mean", 7.94167639, 0.0761),
            (0.510, "across", 13.58758434, 0.1684),
            (0.510, "along", 21.86294686, 0.4289),
            (0.934, "across", 21.57563956, 0.1618),
            (0.934, "along", 17.64149464, 0.2010),
            (1.484, "across", 30.51190063, 0.76),
            (1.484, "along", 12.81699964, 0.52),
            (2.330, "across", 38.988973961958784, 0.53),
            (2.330, "along", 8.631545674846294, 0.10),
        ],
    )
    def test_distance_over_sound_horizon(
        self, redshift: float, kind: str, measured: float, sigma: float
    ) -> None:
        epoch = epochconv.epoch(redshift=redshift, history=self.history)
        across = epoch.transverse_comoving_distance.magnitude
        along = SPEED_OF_LIGHT_KM_PER_S / epoch.hubble_rate.magnitude
        mean = (redshift * across**2 * along) ** (1 / 3)
        found = {"across": across, "along": along, "mean": mean}[kind] / self.sound_horizon
        assert abs(found - measured) < 2 * sigma


# W. L. Freedman et al. 2001, ApJ 553, 47, tables 4 and 5: distance in Mpc (seen) and modulus in
# mag (memory; every pair agrees) of the galaxies with Cepheids.
KEY_PROJECT = {
    "NGC 300": (2.00, 26.50),
    "NGC 925": (9.16, 29.81),
    "NGC 1326A": (16.14, 31.04),
    "NGC 1365": (17.95, 31.27),
    "NGC 1425": (21.88, 31.70),
    "NGC 2403": (3.22, 27.54),
    "NGC 2541": (11.22, 30.25),
    "NGC 2090": (11.75, 30.35),
    "NGC 3031": (3.63, 27.80),
    "NGC 3198": (13.80, 30.70),
    "NGC 3351": (10.00, 30.00),
    "NGC 3368": (10.52, 30.11),
    "NGC 3621": (6.64, 29.11),
    "NGC 4321": (15.21, 30.91),
    "NGC 4414": (17.70, 31.24),
    "NGC 4496A": (14.86, 30.86),
    "NGC 4548": (16.22, 31.05),
    "NGC 4535": (15.78, 30.99),
    "NGC 4536": (14.93, 30.87),
    "NGC 4639": (21.98, 31.71),
    "NGC 4725": (12.36, 30.46),
    "IC 4182": (4.49, 28.26),
    "NGC 5253": (3.15, 27.49),
    "NGC 7331": (14.72, 30.84),
}


@pytest.mark.parametrize("galaxy", KEY_PROJECT)
def test_modulus_of_a_galaxy_gives_its_printed_distance(galaxy: str) -> None:
    distance_mpc, modulus = KEY_PROJECT[galaxy]
    found = epochconv.convert(modulus, "distance modulus", "luminosity distance")
    assert_close(found, distance_mpc, relative=0, absolute=0.0051)


def test_printed_distances_give_their_moduli_back() -> None:
    distances, moduli = np.array(list(KEY_PROJECT.values())).T
    found = epochconv.convert(distances, "luminosity distance", "distance modulus")
    # Half of 0.01 Mpc is 0.0054 mag at 2 Mpc; half of 0.01 mag comes on top.
    assert_close(found, moduli, relative=0, absolute=0.0054 * 2 / distances + 0.005)


@pytest.mark.parametrize(
    ("distance", "modulus", "half_a_digit"),
    [
        # Pietrzynski et al. 2019, Nature 567, 200 (memory): the Large Magellanic Cloud.
        ("49.59 kpc", 18.477, 0.0005),
        # Walker 2012, Ap&SS 341, 43 (seen): 49.7 kpc for 18.48 mag; half of 0.1 kpc is 0.0022 mag.
        ("49.7 kpc", 18.48, 0.0022 + 0.005),
    ],
)
def test_modulus_of_the_nearest_galaxy(distance: str, modulus: float, half_a_digit: float) -> None:
    found = epochconv.convert(distance, "luminosity distance", "distance modulus")
    assert_close(found, modulus, relative=0, absolute=half_a_digit)
