"""Plain lines: each sign written in one way, and nothing folded that tells headings apart."""

from __future__ import annotations

import pytest

from workbook_tools.heading_words import LONGEST_HEADING, plain_line, without_brackets


@pytest.mark.parametrize(
    ("text", "line"),
    [
        ("  Lookback\r\ntime\u00a0\u2009[Gyr] ", "Lookback time [Gyr]"),
        ("z\u200b\ufeff", "z"),
        ("soft\u00adened", "softened"),
        ("h⁻¹ Mpc", "h^-1 Mpc"),
        ("10³ Mpc", "10^3 Mpc"),
        ("H₀", "H_0"),
        ("h₇₀⁻¹", "h_70^-1"),
        ("h_₇₀", "h_70"),
        ("D_ʟ", "D_L"),
        ("Dₗ", "D_l"),
        ("m−M", "m-M"),
        ("D – Mpc", "D - Mpc"),
        ("Tully–Fisher", "Tully-Fisher"),
        ("μ", "µ"),
        ("Ｄ_Ｌ（Ｍｐｃ）", "D_L(Mpc)"),
        ("𝑧", "z"),
        ("ℎ⁻¹", "h^-1"),
        ("$D_{\\rm L}$ [Mpc]", "D_L [Mpc]"),
        ("$\\sigma_{z}$", "σ_z"),
        ("$h^{-1}\\,{\\rm Mpc}$", "h^-1 Mpc"),
        ("Redshift:", "Redshift"),
        ("Age [Gyr]†", "Age [Gyr]"),
        ("Age [Gyr]²", "Age [Gyr]"),
        ("+", "+"),
        ("*", "*"),
    ],
)
def test_one_spelling_of_each_sign(text: str, line: str) -> None:
    assert plain_line(text) == line
    assert plain_line(line) == line


@pytest.mark.parametrize(
    ("one", "other"),
    [("10³", "103"), ("E_z", "e_z"), ("Mpc²", "Mpc2"), ("½", "1/2"), ("D_L", "D_l"), ("Å", "A")],
)
def test_what_tells_headings_apart_stays(one: str, other: str) -> None:
    assert plain_line(one) != plain_line(other)


def test_a_long_text_only_loses_its_line_breaks() -> None:
    remark = "the line at 7,281 Å\n" * LONGEST_HEADING + "*" * 30_000
    assert plain_line(remark) == " ".join(remark.split())


@pytest.mark.parametrize(
    ("text", "inner"),
    [("(Mpc)", "Mpc"), ("[ Mpc ]", "Mpc"), ("(km/s)/(Mpc)", "(km/s)/(Mpc)"), ("((z))", "(z)")]
    + [(same, same) for same in ("Mpc", "(Mpc", "(Mpc]", "", "(")],
)
def test_one_pair_of_brackets_around_the_whole(text: str, inner: str) -> None:
    assert without_brackets(text) == inner
