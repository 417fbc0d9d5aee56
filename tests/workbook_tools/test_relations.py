"""Relations: where a target leads, and how one line is added."""

from __future__ import annotations

import pytest

from tests.workbook_tools.loose_parts import LooseParts, relations
from workbook_tools.errors import Refusal
from workbook_tools.relations import relations_of, relations_part


@pytest.mark.parametrize(
    ("part", "listed_in"),
    [
        ("", "_rels/.rels"),
        ("xl/workbook.xml", "xl/_rels/workbook.xml.rels"),
        ("book.xml", "_rels/book.xml.rels"),
    ],
)
def test_the_list_of_relations_lies_in_a_folder_beside_the_part(part: str, listed_in: str) -> None:
    assert relations_part(part) == listed_in


@pytest.mark.parametrize(
    ("target", "part"),
    [
        ("sheet1.xml", "xl/worksheets/sheet1.xml"),
        ("./sheet1.xml", "xl/worksheets/sheet1.xml"),
        ("../worksheets/sheet1.xml", "xl/worksheets/sheet1.xml"),
        ("/xl/worksheets/sheet1.xml", "xl/worksheets/sheet1.xml"),
        ("/XL/Worksheets/SHEET1.xml", "xl/worksheets/sheet1.xml"),
        ("../tables/My%20Table.xml", "xl/tables/My Table.xml"),
        ("../tables/raw%20name.xml", "xl/tables/raw%20name.xml"),
        ("sheet1.xml#A1", "xl/worksheets/sheet1.xml"),
        ("../../../../xl/worksheets/sheet1.xml", "xl/worksheets/sheet1.xml"),
        ("sheet2.xml", None),
        ("", None),
        ("#Log!A1", None),
    ],
)
def test_a_target_is_resolved_from_the_folder_of_its_source(target: str, part: str | None) -> None:
    package = LooseParts(
        {
            "xl/worksheets/_rels/sheet1.xml.rels": relations(("rId1", "table", target)),
            "xl/worksheets/sheet1.xml": "",
            "xl/tables/My Table.xml": "",
            "xl/tables/raw%20name.xml": "",
        }
    )
    (relation,) = relations_of(package, "xl/worksheets/sheet1.xml")
    assert relation.part == part
    assert (relation.id, relation.kind, relation.target) == ("rId1", "table", target)


def test_an_external_target_is_never_taken_for_a_part() -> None:
    lines = relations(("rId1", "hyperlink", "xl/workbook.xml")).replace(
        "Target=", 'TargetMode="External" Target='
    )
    (relation,) = relations_of(LooseParts({"_rels/.rels": lines, "xl/workbook.xml": ""}), "")
    assert (relation.external, relation.part) == (True, None)


def test_a_part_without_a_list_has_no_relations() -> None:
    assert relations_of(LooseParts({"xl/workbook.xml": ""}), "xl/workbook.xml") == ()


def test_a_damaged_list_is_refused_by_name() -> None:
    with pytest.raises(Refusal, match=r"^xl/_rels/workbook\.xml\.rels is not well-formed"):
        relations_of(LooseParts({"xl/_rels/workbook.xml.rels": "<a>"}), "xl/workbook.xml")
