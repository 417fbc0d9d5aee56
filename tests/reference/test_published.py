"""Ages, distances and epochs printed in publications.

Marks: "seen" - the number was read again in the publication or a copy of it for this test;
"memory" - it is quoted from memory of the publication. Tolerances are those of the printed
digits, unless a comment gives another reason.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

import epochconv
from tests.closeness import assert_close
from tests.reference.formula_points import dust
from tests.reference.slopes import SPEED_OF_LIGHT_KM_PER_S

# Omega h^2 of one neutrino of 0.06 eV at the temperature of an equal share of 3.046: 0.06/93.0,
# pinned against Planck's printed sum in test_frozen.py.
NEUTRINO_H2 = 0.000645


def planck(hubble_constant: float, baryons_h2: float, cold_h2: float) -> epochconv.ExpansionHistory:
    matter = (baryons_h2 + cold_h2 + NEUTRINO_H2) / (hubble_constant / 100) ** 2
    return epochconv.ExpansionHistory(hubble_constant=hubble_constant, matter=matter)


BEST_FIT = planck(67.32, 0.022383, 0.12011)
WITH_LENSING = planck(67.36, 0.02237, 0.1200)
WITH_BAO = planck(67.66, 0.02242, 0.11933)


class TestPlanck2018:
    """Planck Collaboration VI 2020, A&A 641, A6, tables 1 and 2 (seen)."""

    @pytest.mark.parametrize(
        ("history", "age_gyr"),
        [
            (BEST_FIT, 13.7971),
            (WITH_LENSING, 13.797),
            (WITH_BAO, 13.787),
            ("planck 2018", 13.797),
            ("planck 2018 with bao", 13.787),
        ],
    )
    def test_age(self, history: epochconv.ExpansionHistory | str, age_gyr: float) -> None:
        """Within 0.002: a rounding of H0 by 0.005 moves it by 0.0006, one of a mean by more."""
        found = epochconv.convert(0, "redshift", "age", history=history)
        assert_close(found, age_gyr, relative=0, absolute=0.002)

    @pytest.mark.parametrize(
        ("history", "redshift", "sound_horizon_mpc", "angle"),
        [
            (WITH_LENSING, 1089.92, 144.43, 0.0104110),
            (WITH_BAO, 1089.80, 144.57, 0.0104119),
        ],
    )
    def test_distance_to_last_scattering(
        self,
        history: epochconv.ExpansionHistory,
        redshift: float,
        sound_horizon_mpc: float,
        angle: float,
    ) -> None:
        """D_M(z*) = r*/theta*; r* is printed to 0.005 of 144, which is 0.5 Mpc, the rest to 3."""
        found = epochconv.convert(
            redshift, "redshift", "transverse comoving distance", history=history
        )
        assert_close(found, sound_horizon_mpc / angle, relative=0, absolute=3)

    @pytest.mark.parametrize(
        ("hubble_constant", "matter_h2", "redshift"),
        [(67.36, 0.02237 + 0.1200, 3402), (67.66, 0.02242 + 0.11933, 3387)],
    )
    def test_equality_of_matter_and_radiation(
        self, hubble_constant: float, matter_h2: float, redshift: float
    ) -> None:
        """Planck counts baryons and cold matter against photons and 3.046 massless neutrinos.

        With the massive one among the matter it would be 15 more.
        """
        matter = matter_h2 / (hubble_constant / 100) ** 2
        found = equality(hubble_constant, matter)
        assert found == pytest.approx(redshift, abs=1)
        with_neutrino = equality(
            hubble_constant, matter + NEUTRINO_H2 / (hubble_constant / 100) ** 2
        )
        assert with_neutrino - found == pytest.approx(15, abs=1)


def equality(hubble_constant: float, matter: float) -> float:
    """The redshift where matter equals radiation, from the expansion rate at z = 1e5 alone.

    There dark energy is nothing, so E^2 / (matter (1+z)^3) - 1 = (1+z) / (1 + z_eq).
    """
    history = epochconv.ExpansionHistory(
        hubble_constant=hubble_constant, matter=matter, neutrino_masses=(0, 0, 0)
    )
    stretch = 1 + 1e5
    rate = epochconv.convert(1e5, "redshift", "Hubble rate", history=history).magnitude
    return stretch / ((rate / hubble_constant) ** 2 / (matter * stretch**3) - 1) - 1


def test_age_of_the_nine_year_wmap_parameters() -> None:
    """Hinshaw et al. 2013, ApJS 208, 19: 13.772 +- 0.059 Gyr (memory).

    Omega_m 0.2865 is itself rounded: half its last digit moves the age by 0.002 Gyr.
    """
    found = epochconv.convert(0, "redshift", "age", history="wmap 2013")
    assert_close(found, 13.772, relative=0, absolute=0.005)


class TestDavisLineweaver:
    """T. M. Davis & C. H. Lineweaver 2004, PASA 21, 97 (memory): H0 70, 0.3, 0.7, no radiation."""

    history = "round numbers"

    def test_galaxies_that_recede_at_the_speed_of_light(self) -> None:
        """At redshift 1.46: where D_C = c/H0."""
        found = epochconv.convert(
            SPEED_OF_LIGHT_KM_PER_S / 70, "comoving distance", "redshift", history=self.history
        )
        assert_close(found, 1.46, relative=0, absolute=0.005)

    def test_event_horizon(self) -> None:
        """Redshift 1.8 and 16 billion light years are one place."""
        found = epochconv.convert(
            1.8, "redshift", "comoving distance", unit="Gly", history=self.history
        )
        assert_close(found, 16, relative=0, absolute=0.5)

    def test_particle_horizon(self) -> None:
        """46 Gly; the last redshift of the tables, 1e10, sees all but 1e-5 of it."""
        found = epochconv.convert(
            1e10, "redshift", "comoving distance", unit="Gly", history=self.history
        )
        assert_close(found, 46, relative=0, absolute=0.5)

    def test_speed_of_the_matter_that_sent_the_microwave_background(self) -> None:
        """Rate times proper distance: 3.2 c now, 58.1 c at emission (z 1100)."""
        path = epochconv.convert(1100, "redshift", "comoving distance", history=self.history)
        rates = epochconv.convert([0, 1100], "redshift", "Hubble rate", history=self.history)
        speeds = rates.magnitude * path.magnitude / [1, 1101]
        assert_close(speeds / SPEED_OF_LIGHT_KM_PER_S, [3.2, 58.1], relative=0, absolute=0.05)

    def test_age(self) -> None:
        assert_close(
            epochconv.convert(0, "redshift", "age", history=self.history),
            13.5,
            relative=0,
            absolute=0.05,
        )


# What papers print beside a redshift. Each used its own parameters; they are given where known.
@pytest.mark.parametrize(
    ("redshift", "history", "printed_gyr", "half_a_digit"),
    [
        # Mortlock et al. 2011, Nature 474, 616: 0.77 Gyr (seen; parameters of WMAP7, memory).
        pytest.param(
            7.085,
            epochconv.ExpansionHistory(hubble_constant=70.4, matter=0.272, radiation=False),
            0.77,
            0.005,
            id="quasar at 7.085",
        ),
        # Banados et al. 2018, Nature 553, 473: 690 Myr (seen).
        pytest.param(7.54, "planck 2018", 0.69, 0.005, id="quasar at 7.54"),
        # Bosman et al. 2022, MNRAS 514, 55: reionisation ends at z 5.3, t 1.1 Gyr (seen).
        pytest.param(5.3, "planck 2018", 1.1, 0.05, id="end of reionisation"),
        # Madau & Dickinson 2014, ARA&A 52, 415 (seen): "approximately 3.5 Gyr", z about 1.9.
        pytest.param(1.9, "round numbers", 3.5, 0.15, id="peak of star formation"),
        # Same: "one Gyr after the Big Bang", z = 6; round words, so to a tenth.
        pytest.param(6, "round numbers", 1.0, 0.1, id="redshift six"),
    ],
)
def test_age_printed_beside_a_redshift(
    redshift: float, history: str, printed_gyr: float, half_a_digit: float
) -> None:
    found = epochconv.convert(redshift, "redshift", "age", history=history)
    assert_close(found, printed_gyr, relative=0, absolute=half_a_digit)


def test_lookback_time_printed_for_redshift_six_depends_on_the_parameters() -> None:
    """Riechers et al. 2022, Nature 602, 58: 12.8 Gyr at z 6.34 (seen), of WMAP-like parameters.

    Under Planck 2018 it would have been 12.9: always name the set beside a number.
    """
    wmap_like = epochconv.ExpansionHistory(hubble_constant=71, matter=0.27, radiation=False)
    found = epochconv.convert(6.34, "redshift", "lookback time", history=wmap_like)
    assert_close(found, 12.8, relative=0, absolute=0.05)
    found = epochconv.convert(6.34, "redshift", "lookback time", history="planck 2018")
    assert_close(found, 12.93, relative=0, absolute=0.005)


def test_onset_of_acceleration() -> None:
    """Melchiorri et al. 2007, PRD 76, 041301: z 0.76, 6.7 +- 0.4 Gyr ago (seen).

    Particle Data Group, 2020 to 2024: z 0.636 +- 0.018, t 7.70 +- 0.10 Gyr (memory).
    """
    older = epochconv.ExpansionHistory(hubble_constant=70, matter=0.268, radiation=False)
    found = epochconv.convert(0.76, "redshift", "lookback time", history=older)
    assert_close(found, 6.7, relative=0, absolute=0.4)
    # Acceleration begins where the velocity H/(1+z) of a comoving distance is least.
    epochs = np.linspace(0.5, 0.8, 3001)
    speed = epochconv.convert(epochs, "redshift", "Hubble rate").magnitude / (1 + epochs)
    onset = epochs[np.argmin(speed)]
    assert onset == pytest.approx(0.636, abs=0.018)
    assert_close(epochconv.convert(onset, "redshift", "age"), 7.70, relative=0, absolute=0.10)


def test_age_at_last_scattering_and_at_reionisation() -> None:
    """Particle Data Group, 2020 to 2024: 372.9 +- 1.0 kyr; 690 +- 90 Myr at z 7.7 (memory)."""
    found = epochconv.convert(1089.92, "redshift", "age", unit="kyr")
    assert_close(found, 372.9, relative=0, absolute=2.0)
    found = epochconv.convert(7.7, "redshift", "age", unit="Myr")
    assert_close(found, 690, relative=0, absolute=90)


class TestTextBooks:
    """B. Ryden, Introduction to Cosmology; S. Weinberg, Cosmology, 2008 (memory)."""

    first_edition = epochconv.ExpansionHistory(
        hubble_constant=70, matter=0.3, neutrino_masses=(0, 0, 0)
    )
    second_edition = epochconv.ExpansionHistory(
        hubble_constant=68, matter=0.31, neutrino_masses=(0, 0, 0)
    )

    def test_ryden_first_edition(self) -> None:
        """Table 6.2: a 2.8e-4 at 4.7e4 yr, a 0.75 at 9.8 Gyr, now 13.5 Gyr; horizon 3.24 c/H0.

        The 0.75 is (matter/dark energy)^(1/3), where the two are equal. The book's radiation,
        8.4e-5, is 1.5 % less than ours, which moves the first age by 3 %.
        """
        equal = epochconv.convert(
            2.8e-4, "scale factor", "age", unit="year", history=self.first_edition
        )
        assert_close(equal, 4.7e4, relative=0.03)
        found = epochconv.convert(
            [(0.3 / 0.7) ** (1 / 3), 1], "scale factor", "age", history=self.first_edition
        )
        assert_close(found, [9.8, 13.5], relative=0, absolute=0.05)
        horizon = epochconv.convert(
            1e10, "redshift", "comoving distance", history=self.first_edition
        )
        assert_close(horizon, 3.24 * SPEED_OF_LIGHT_KM_PER_S / 70, relative=0.005 / 3.24 + 1e-4)

    def test_ryden_second_edition(self) -> None:
        """Table 5.2: a 2.9e-4 at 0.050 Myr, a 0.77 at 10.2 Gyr, now 13.7 Gyr; horizon 14 Gpc."""
        equal = epochconv.convert(
            2.9e-4, "scale factor", "age", unit="Myr", history=self.second_edition
        )
        assert_close(equal, 0.050, relative=0, absolute=0.0005)
        found = epochconv.convert(
            [(0.31 / 0.69) ** (1 / 3), 1], "scale factor", "age", history=self.second_edition
        )
        assert_close(found, [10.2, 13.7], relative=0, absolute=0.05)
        horizon = epochconv.convert(
            1e10, "redshift", "comoving distance", unit="Gpc", history=self.second_edition
        )
        assert_close(horizon, 14.0, relative=0, absolute=0.15)

    def test_weinberg(self) -> None:
        """Matter alone 9.3e9 (70/H0) years; with 0.3 and 0.7 from 13.4e9 to 13.5e9."""
        assert_close(
            epochconv.convert(0, "redshift", "age", history=dust(1)),
            9.3,
            relative=0,
            absolute=0.05,
        )
        found = epochconv.convert(0, "redshift", "age", history=dust(0.3)).magnitude
        assert 13.4 <= found <= 13.5

    def test_low_redshift_series(self) -> None:
        """M. Visser 2004, Class. Quant. Grav. 21, 2603 (memory), flat, third order in z.

        D_L = cz/H0 (1 + (1 - q0) z/2 - (1 - q0 - 3 q0^2 + j0) z^2/6), here with j0 = 1.
        """
        z, q = 0.01, 1.5 * 0.3 - 1
        series = 1 + (1 - q) * z / 2 - (1 - q - 3 * q * q + 1) * z * z / 6
        found = epochconv.convert(z, "redshift", "luminosity distance", history=dust(0.3))
        assert_close(found, SPEED_OF_LIGHT_KM_PER_S * z / 70 * series, relative=z**3)
        assert not math.isclose(found.magnitude, SPEED_OF_LIGHT_KM_PER_S * z / 70, rel_tol=z / 2)
