"""Escaped characters: examples by hand, and there and back for all others."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from workbook_tools.hex_escapes import decoded, encoded
from workbook_tools.xml_offsets import escape_text, parse


@pytest.mark.parametrize(
    ("written", "meant"),
    [
        ("Age [Gyr]", "Age [Gyr]"),
        ("two_x000a_lines", "two\nlines"),
        ("_x000D__x000A_", "\r\n"),
        ("_x005F_x0041_", "_x0041_"),
        ("_x005F_x005F_x005f_x0041_", "_x005F_x0041_"),
        ("_xD83D__xDE00_", "😀"),
        ("_x03a9_m", "Ωm"),
        ("a_x41_ _X0041_ _xZZZZ_ x0041_ _x0041", "a_x41_ _X0041_ _xZZZZ_ x0041_ _x0041"),
        ("_xD83D_", "\ufffd"),
    ],
)
def test_escapes_are_read(written: str, meant: str) -> None:
    assert decoded(written) == meant


@pytest.mark.parametrize(
    ("meant", "written"),
    [
        ("tab\tand\nline", "tab\tand\nline"),
        ("bell\x07", "bell_x0007_"),
        ("a\rb", "a_x000D_b"),
        ("_x0041_", "_x005F_x0041_"),
        ("_x41_", "_x41_"),
        ("_x0041\x01", "_x005F_x0041_x0001_"),
        ("\uffff", "_xFFFF_"),
    ],
)
def test_only_what_needs_it_is_escaped(meant: str, written: str) -> None:
    assert encoded(meant) == written


@settings(deadline=None)
@given(st.text(st.characters(exclude_categories=["Cs"])) | st.text("_x0041FfaA\x01\r", max_size=40))
def test_any_text_comes_back_through_a_parser(text: str) -> None:
    xml = f"<t>{escape_text(encoded(text))}</t>".encode()
    assert decoded(parse(xml, "p").text) == text
