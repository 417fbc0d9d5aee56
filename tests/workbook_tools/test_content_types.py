"""Content types: which line counts for a part, and how one is added."""

from __future__ import annotations

import pytest

from tests.workbook_tools.loose_parts import PACKAGE, LooseParts
from workbook_tools.content_types import read_content_types
from workbook_tools.errors import Refusal

LIST = (
    f'<Types xmlns="{PACKAGE}/content-types">'
    '<Default Extension="XML" ContentType="text/Plain"/><Default Extension="vml" ContentType="v"/>'
    '<Override PartName="/xl/WorkBook.xml" ContentType="Main"/></Types>'
)


@pytest.mark.parametrize(
    ("part", "content_type"),
    [
        ("xl/workbook.xml", "main"),
        ("/XL/workbook.XML", "main"),
        ("xl/other.xml", "text/plain"),
        ("xl/drawing.VML", "v"),
        ("xl/drawing.bin", None),
        ("xl.xml/drawing", None),
    ],
)
def test_the_line_of_the_part_comes_before_that_of_its_extension(
    part: str, content_type: str | None
) -> None:
    assert read_content_types(LooseParts({"[Content_Types].xml": LIST})).of(part) == content_type


def test_a_package_without_the_list_is_no_workbook() -> None:
    with pytest.raises(Refusal, match=r"^notes\.xlsx holds no \[Content_Types\]\.xml"):
        read_content_types(LooseParts({"word.xml": ""}, "notes.xlsx"))


def test_the_list_is_found_in_any_case() -> None:
    assert read_content_types(LooseParts({"[content_types].XML": LIST})).part == (
        "[content_types].XML"
    )
