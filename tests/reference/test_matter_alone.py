"""Matter alone, or nothing at all: the oldest closed forms, exact to the last digits of a double.

The formulas are standard (from memory; any text book of cosmology) and each is evaluated in
mpmath, so that no digit is lost on the side of the expectation. Units: Gyr and Mpc.
"""

from __future__ import annotations

import numpy as np
import pytest
from mpmath import mp, mpf

import epochconv
from epochconv.errors import OutOfRangeError, TwoAnswersError
from tests.closeness import EXACT_MODULUS_MAG, assert_close
from tests.reference.formula_points import REDSHIFTS, dust, each, measured, ruler


class TestEinsteinDeSitter:
    """All matter: t = 2/(3H), D_C = 2c/H0 (1 - (1+z)^(-1/2))."""

    history = dust(1)
    time, length = ruler(70)

    def test_time(self) -> None:
        first = mpf(2) / 3 * self.time
        assert_close(measured(self.history, "age"), each(lambda z: first * (1 + z) ** mpf(-1.5)))
        assert_close(
            measured(self.history, "lookback time"),
            each(lambda z: -first * mp.expm1(mpf(-1.5) * mp.log1p(z))),
        )

    def test_distance(self) -> None:
        path = each(lambda z: -2 * self.length * mp.expm1(mp.log1p(z) / -2))
        assert_close(measured(self.history, "comoving distance"), path)
        assert_close(measured(self.history, "transverse comoving distance"), path)
        assert_close(measured(self.history, "luminosity distance"), path * (1 + REDSHIFTS))
        assert_close(measured(self.history, "angular diameter distance"), path / (1 + REDSHIFTS))
        assert_close(
            measured(self.history, "distance modulus"),
            5 * np.log10(path * (1 + REDSHIFTS)) + 25,
            relative=0,
            absolute=EXACT_MODULUS_MAG,
        )

    def test_rate(self) -> None:
        assert_close(measured(self.history, "Hubble rate"), 70 * (1 + REDSHIFTS) ** 1.5)
        assert_close(epochconv.convert(3, "redshift", "Hubble rate", history=self.history), 560.0)

    def test_angular_diameter_distance_is_greatest_at_five_quarters(self) -> None:
        """D_A = 8/27 c/H0 there; beyond it nothing lies, and the error names the maximum."""
        greatest = float(8 * self.length / 27)
        assert_close(
            epochconv.convert(1.25, "redshift", "angular diameter distance", history=self.history),
            greatest,
        )
        with pytest.raises(OutOfRangeError) as caught:
            epochconv.convert(
                greatest * 1.001, "angular diameter distance", "redshift", history=self.history
            )
        assert caught.value.high == pytest.approx(greatest, rel=1e-12)

    @pytest.mark.parametrize("fraction", [0.05, 0.5, 0.9, 0.999])
    def test_angular_diameter_distance_below_it_has_two_answers(self, fraction: float) -> None:
        """With s = (1+z)^(-1/2), D_A = 2c/H0 (s^2 - s^3): a cubic, solved by Viete's cosines."""
        value = float(8 * self.length / 27 * fraction)
        angle = mp.acos(1 - 2 * mpf(fraction)) / 3
        nearer, farther = (
            float((mpf(1) / 3 + 2 * mp.cos(angle - turn) / 3) ** -2 - 1)
            for turn in (0, 2 * mp.pi / 3)
        )
        with pytest.raises(TwoAnswersError) as caught:
            epochconv.convert(value, "angular diameter distance", "age", history=self.history)
        # The map is flat near its maximum: there a rounding of the value moves the redshift.
        bound = 1e-12 / (1 - fraction) ** 0.5
        assert caught.value.redshifts == pytest.approx((nearer, farther), rel=bound)
        assert caught.value.measure == "angular diameter distance"
        for side, expected in (("nearer", nearer), ("farther", farther)):
            found = epochconv.convert(
                value, "angular diameter distance", "redshift", history=self.history, side=side
            )
            assert_close(found, expected, relative=bound)

    def test_both_sides_meet_at_the_maximum(self) -> None:
        """A relative error e of the greatest value leaves z open by about sqrt(e)."""
        greatest = epochconv.convert(
            1.25, "redshift", "angular diameter distance", history=self.history
        ).magnitude
        for side in ("nearer", "farther"):
            found = epochconv.convert(
                greatest, "angular diameter distance", "redshift", history=self.history, side=side
            )
            assert_close(found, 1.25, relative=1e-6)


class TestMilne:
    """Empty and open: t = 1/H, D_C = c/H0 ln(1+z), D_L = c/H0 (z + z^2/2)."""

    history = dust(0, curvature=1)
    time, length = ruler(70)

    def test_time(self) -> None:
        assert_close(measured(self.history, "age"), each(lambda z: self.time / (1 + z)))
        assert_close(
            measured(self.history, "lookback time"), each(lambda z: self.time * z / (1 + z))
        )

    def test_distance(self) -> None:
        assert_close(
            measured(self.history, "comoving distance"), each(lambda z: self.length * mp.log1p(z))
        )
        assert_close(
            measured(self.history, "luminosity distance"),
            each(lambda z: self.length * (z + z * z / 2)),
        )
        assert_close(
            measured(self.history, "angular diameter distance"),
            each(lambda z: self.length * (z + z * z / 2) / (1 + z) ** 2),
        )

    def test_angular_diameter_distance_never_turns_over(self) -> None:
        """It rises toward c/(2 H0): one answer, and no side needed."""
        near_limit = float(self.length / 2) * (1 - 1e-4)
        found = epochconv.convert(
            near_limit, "angular diameter distance", "redshift", history=self.history
        )
        # 1 - (1+z)^-2 = 1 - 1e-4
        assert_close(found, 99.0, relative=1e-8)


def test_milne_and_einstein_de_sitter_share_a_luminosity_distance() -> None:
    """D_L is 1.5 c/H0 at z = 1 in the one and at z = 5/4 in the other."""
    _, length = ruler(70)
    for history, redshift in ((dust(0, curvature=1), 1.0), (dust(1), 1.25)):
        found = epochconv.convert(
            float(1.5 * length), "luminosity distance", "redshift", history=history
        )
        assert_close(found, redshift)


@pytest.mark.parametrize("matter", [0.05, 0.3, 0.9, 1.5, 3.0])
def test_matter_alone_has_the_distance_of_mattig(matter: float) -> None:
    """W. Mattig 1958, Astronomische Nachrichten 284, 109 (from memory), for any curvature."""
    history = dust(matter, curvature=1 - matter)
    _, length = ruler(70)

    def transverse(z: mpf) -> mpf:
        m = mpf(matter)
        bracket = m * z + (m - 2) * (mp.sqrt(1 + m * z) - 1)
        return 2 * length * bracket / (m * m * (1 + z))

    assert_close(measured(history, "transverse comoving distance"), each(transverse))


@pytest.mark.parametrize("matter", [0.05, 0.3, 0.9, 1.5, 3.0])
def test_matter_alone_has_the_age_of_the_cycloid(matter: float) -> None:
    """Open with acosh, closed with acos; at z = 0 the form of every text book.

    The density at another epoch takes the place of today's: Omega(z) = Omega (1+z) / (1 + Omega z).
    """
    history = dust(matter, curvature=1 - matter)
    time, _ = ruler(70)

    def age(z: mpf) -> mpf:
        m = mpf(matter) * (1 + z) / (1 + mpf(matter) * z)
        rate = (1 + z) * mp.sqrt(1 + mpf(matter) * z)
        if matter < 1:
            part = 1 / (1 - m) - m / (2 * (1 - m) ** mpf(1.5)) * mp.acosh(2 / m - 1)
        else:
            part = m / (2 * (m - 1) ** mpf(1.5)) * mp.acos(2 / m - 1) - 1 / (m - 1)
        return time * part / rate

    assert_close(measured(history, "age"), each(age))


def test_ages_of_matter_alone_have_their_pinned_digits() -> None:
    """The same two formulas, their digits written out so that both sides cannot err alike."""
    for matter, expected in ((0.3, 11.2975964765), (1.5, 8.53835062987)):
        history = dust(matter, curvature=1 - matter)
        found = epochconv.convert(0, "redshift", "age", history=history)
        assert_close(found, expected, relative=1e-11)


def test_transverse_distance_turns_over_at_the_equator_of_a_closed_universe() -> None:
    """Omega 3: the greatest D_M is the radius of curvature, c/H0 / sqrt(2).

    Development angle, 1 - cos(t) = 2 (1 - 1/Omega)/(1+z) at z, and D_M = R sin(t0 - t): the
    two epochs of one D_M lie as far before as beyond a quarter of the way round.
    """
    history = dust(3, curvature=-2)
    _, length = ruler(70)
    radius = length / mp.sqrt(2)

    def redshift(angle: mpf) -> float:
        today = mp.acos(1 - 2 * (1 - mpf(1) / 3))
        return float(2 * (1 - mpf(1) / 3) / (1 - mp.cos(today - angle)) - 1)

    nearer, farther = redshift(mp.pi / 2 - mpf("0.3")), redshift(mp.pi / 2 + mpf("0.3"))
    value = float(radius * mp.cos(mpf("0.3")))
    with pytest.raises(TwoAnswersError) as caught:
        epochconv.convert(value, "transverse comoving distance", "age", history=history)
    assert caught.value.redshifts == pytest.approx((nearer, farther), rel=1e-11)
    with pytest.raises(OutOfRangeError) as beyond:
        epochconv.convert(2 * value, "transverse comoving distance", "age", history=history)
    assert beyond.value.high == pytest.approx(float(radius), rel=1e-12)
