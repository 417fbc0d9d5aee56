"""Relations: where a target leads, and how one line is added."""

from __future__ import annotations

import pytest

from tests.workbook_tools.loose_parts import DOCUMENT, PACKAGE, LooseParts, applied, relations
from workbook_tools.errors import Refusal
from workbook_tools.relations import append_relation, relations_of, relations_part
from workbook_tools.splice import EditKind
from workbook_tools.xml_offsets import parse


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


@pytest.mark.parametrize(
    "xml",
    [
        relations(("rId3", "table", "a"), ("x", "table", "b"), ("rId12", "table", "c")),
        relations(("rId12", "table", "a")).replace("rels", "rels"),
    ],
)
def test_a_relation_is_added_last_under_a_free_id(xml: str) -> None:
    edit = append_relation(xml.encode(), "w.rels", f"{DOCUMENT}/styles", "a&b.xml")
    assert edit.kind is EditKind.STYLE_APPENDED
    added = parse(applied(xml.encode(), [edit]), "w.rels").children[-1]
    assert added.attributes == {
        "Id": "rId13",
        "Type": f"{DOCUMENT}/styles",
        "Target": "a&b.xml",
    }


def test_a_relation_is_added_to_a_prefixed_empty_list() -> None:
    xml = f'<p:Relationships xmlns:p="{PACKAGE}/relationships"/>'.encode()
    after = applied(xml, [append_relation(xml, "w.rels", "t", "s.xml")])
    package = LooseParts({"_rels/.rels": after, "s.xml": ""})
    assert [(r.id, r.part) for r in relations_of(package, "")] == [("rId1", "s.xml")]
