"""Warnings, once per column: near and far redshifts, frames, methods, the choice of parameters."""

from __future__ import annotations

from collections.abc import Sequence

import pytest

from tests.workbook_tools.small_sheets import Value, grid, reading_of, request
from workbook_tools.plan import plan_sheet


def notes(*rows: Sequence[Value], **choices: object) -> list[str]:
    return plan_sheet(reading_of(grid(*rows)), request(**choices), None).notes


def test_far_away_in_the_cmb_frame_there_is_nothing_to_say() -> None:
    assert notes(["zCMB", "Age [Gyr]"], [1.0], [2.0]) == []
    assert notes(["z", "Age [Gyr]"], [0.1], [2.0]) == []


def test_near_redshifts_are_named_once_with_what_motion_does_to_them() -> None:
    found = notes(["zCMB", "Age [Gyr]", "D_C [Mpc]"], [0.001], [0.005], [0.5])
    # 300 km/s are 0.0010007 of the speed of light
    assert found == [
        "2 redshifts are below 0.01, where peculiar motion counts: 300 km/s are 100 % of the"
        " smallest"
    ]
    (one,) = notes(["zCMB", "Age [Gyr]"], [0.009], [0.5])
    assert one.startswith("1 redshift is below 0.01")
    assert "11 % of the smallest" in one


@pytest.mark.parametrize(
    ("heading", "frame"),
    [
        ("z_hel", "heliocentric"),
        ("z (heliocentric)", "heliocentric"),
        ("z_LSR", "LSR"),
        ("z_LG", "Local Group"),
        ("z_GSR", "Galactic standard of rest"),
    ],
)
def test_another_frame_is_named_where_it_matters(heading: str, frame: str) -> None:
    # 369.8 km/s of the Sun against the CMB are 0.00123 of the speed of light
    assert notes([heading, "Age [Gyr]"], [0.05], [0.5]) == [
        f"the redshifts are {frame} and taken as in the CMB frame; below 0.1 (1 of them) that"
        " matters by up to 0.0012"
    ]
    assert notes([heading, "Age [Gyr]"], [0.5]) == []


def test_a_frame_that_is_not_named_is_said() -> None:
    assert notes(["z", "Age [Gyr]"], [0.05], [0.06], [0.5]) == [
        "the heading names no frame; redshifts are taken as in the CMB frame, which matters below"
        " 0.1 (2 of them)"
    ]


@pytest.mark.parametrize("heading", ["Frame", "z_frame", "ref. frame", "frame of z"])
def test_frames_may_be_mixed(heading: str) -> None:
    rows = [
        ["z", heading, "Age [Gyr]"],
        [0.05, "hel"],
        [0.06, "CMB"],
        [0.07, "hel"],
        [0.08],
        [0.5, "LG"],
    ]
    assert notes(*rows) == [
        "by column B the frames below 0.1 (4 of them) are heliocentric (2), CMB (1), unknown (1);"
        " all are taken as in the CMB frame"
    ]
    assert notes(rows[0], [0.05, "CMB"], [0.5, "hel"]) == []


def test_photometric_redshifts_may_have_two_peaks() -> None:
    assert notes(["z_phot", "Age [Gyr]"], [1.0]) == [
        "the redshifts are photometric; their errors may have two peaks"
    ]


def test_beyond_what_is_known_and_beyond_the_model() -> None:
    assert notes(["zCMB", "T_CMB [K]"], [1.0], [21.0], [1100.0], [1e9]) == [
        "2 redshifts are above 20, where no object is known",
        "1 redshift is above 1e+08, where electron-positron annihilation makes the model itself"
        " untrue",
    ]


def test_other_sources_have_no_frame() -> None:
    assert notes(["Lookback time [Gyr]", "z"], [1.0], [2.0]) == []


def test_results_that_depend_on_the_parameters_more_than_on_their_errors() -> None:
    # The age at z = 1 is 5.84 Gyr under planck 2018 and 5.2 Gyr under distance ladder 2022.
    rows = [["zCMB", "e_z", "Age [Gyr]", "e_Age", "T_CMB [K]"], [1.0, 0.001], [1.0, 1.0], [1.0]]
    assert notes(*rows)[-1:] == [
        "the choice of parameters (planck 2018 or distance ladder 2022) moves more than the error"
        " of the value: Age [Gyr] (1)"
    ]
    assert not any("choice of parameters" in one for one in notes(rows[0], [1.0, 1.0]))
    assert not any("choice of parameters" in one for one in notes(rows[0], [1.0]))


def test_warnings_are_said_only_where_something_is_filled() -> None:
    assert notes(["z", "Age [Gyr]"], [0.001, 13.78], source="z") == []


def test_warnings_never_go_into_cells() -> None:
    made = plan_sheet(reading_of(grid(["z_hel", "Age [Gyr]"], [0.001])), request(), None)
    assert all(not one.texts for one in made.cells)
