"""The tree of offsets: every span is checked by slicing the bytes it claims to describe."""

from __future__ import annotations

import random
from collections.abc import Iterator
from xml.etree import ElementTree
from xml.parsers import expat

import pytest

from workbook_tools.errors import Refusal
from workbook_tools.splice import Edit, EditKind, spliced
from workbook_tools.xml_offsets import (
    MAX_DEPTH,
    Element,
    append_child,
    check_well_formed,
    escape_attribute,
    escape_text,
    has_hidden_text,
    parse,
    qualified,
    root_name,
    set_attribute,
    unescape,
)

SAMPLE = (
    """<?xml version="1.0" encoding="UTF-8"?>\r\n<!-- <no> --><s:book xmlns:s="urn:one" """
    """xmlns:r='urn:two' a = "1>2/>" r:id='x "y"'\n><s:empty/><plain q='é'></plain>"""
    """<s:row n="Ω &lt; &#955;" >left<![CDATA[<raw/>]]><?skip <me/>?><s:c t="" />right</s:row >"""
    """<s:row/></s:book>\n<!-- after -->"""
).encode()


def walk(element: Element) -> Iterator[Element]:
    yield element
    for child in element.children:
        yield from walk(child)


def start_tag(element: Element) -> bytes:
    return element.source[element.start : element.start_tag_end]


def end_tag(element: Element) -> bytes:
    return element.source[element.end_tag_start : element.end]


def applied(xml: bytes, *edits: Edit) -> bytes:
    return b"".join(spliced(xml, sorted(edits, key=lambda edit: edit[1:3])))


def test_expat_reports_the_end_of_a_single_tag_behind_it_and_of_a_pair_at_its_closing_tag() -> None:
    """The trap that the tree works around; should expat change, this says so first."""
    xml = b"<a><b/><c></c></a>"
    seen: dict[str, int] = {}
    parser = expat.ParserCreate()
    parser.StartElementHandler = lambda _name, _attributes: None
    parser.EndElementHandler = lambda name: seen.setdefault(name, parser.CurrentByteIndex)
    parser.Parse(xml, True)
    assert seen == {
        "b": xml.index(b"<b/>") + 4,
        "c": xml.index(b"</c>"),
        "a": xml.index(b"</a>"),
    }


@pytest.mark.parametrize("mark", [b"", b"\xef\xbb\xbf"])
def test_the_spans_of_every_tag_cut_out_exactly_that_tag(mark: bytes) -> None:
    root = parse(mark + SAMPLE, "sample.xml")
    assert [(start_tag(e), end_tag(e)) for e in walk(root)] == [
        (
            b'<s:book xmlns:s="urn:one" xmlns:r=\'urn:two\' a = "1>2/>" r:id=\'x "y"\'\n>',
            b"</s:book>",
        ),
        (b"<s:empty/>", b""),
        ("<plain q='é'>".encode(), b"</plain>"),
        ('<s:row n="Ω &lt; &#955;" >'.encode(), b"</s:row >"),
        (b'<s:c t="" />', b""),
        (b"<s:row/>", b""),
    ]
    assert [e.self_closing for e in walk(root)] == [False, True, False, False, True, True]


def test_names_namespaces_attributes_and_text_are_read() -> None:
    root = parse(SAMPLE, "sample.xml")
    assert (root.uri, root.local, root.prefix) == ("urn:one", "book", "s")
    assert root.attributes == {"a": "1>2/>", "urn:two|id": 'x "y"'}
    plain = root.children[1]
    assert (plain.uri, plain.local, plain.prefix) == ("", "plain", "")
    row = root.children[2]
    assert row.attributes == {"n": "Ω < λ"}
    assert row.text == "left<raw/>right"
    assert root.text == ""


def test_find_looks_only_at_children_in_the_own_namespace() -> None:
    root = parse(b'<a xmlns="u" xmlns:o="v"><o:b n="0"/><b n="1"><b n="2"/></b><b n="3"/></a>', "p")
    found = root.find("b")
    assert found is not None
    assert found.attributes["n"] == "1"
    assert [b.attributes["n"] for b in root.find_all("b")] == ["1", "3"]
    assert root.find("c") is None


def test_descendants_come_in_the_order_of_the_file_from_any_depth() -> None:
    root = parse(
        b'<a xmlns="u" xmlns:o="v"><b n="1"><b n="2"/><b n="3"/></b>'
        b'<o:b/><o:c><b n="4"/></o:c><b n="5"/></a>',
        "p",
    )
    assert [b.attributes["n"] for b in root.descendants("b")] == list("12345")
    assert list(root.descendants("a")) == []


@pytest.mark.parametrize(
    ("written", "meant"),
    [("1", True), ("true", True), ("on", True), (" 1 ", True), ("0", False), ("false", False)],
)
def test_a_flag_follows_the_spellings_of_the_standard(written: str, meant: bool) -> None:
    assert parse(f'<a f="{written}"/>'.encode(), "p").flag("f", default=not meant) is meant


def test_a_flag_that_is_absent_takes_its_default() -> None:
    root = parse(b"<a/>", "p")
    assert root.flag("f") is False
    assert root.flag("f", default=True) is True


def test_the_span_of_an_attribute_cuts_out_its_value() -> None:
    root = parse(SAMPLE, "sample.xml")
    for element, name, value in [
        (root, "a", b"1>2/>"),
        (root, "r:id", b'x "y"'),
        (root.children[1], "q", "é".encode()),
        (root.children[2], "n", "Ω &lt; &#955;".encode()),
        (root.children[2].children[0], "t", b""),
    ]:
        start, end = element.attribute_span(name)
        assert SAMPLE[start:end] == value
    with pytest.raises(KeyError):
        root.attribute_span("id")


def test_a_name_within_a_value_is_not_taken_for_an_attribute() -> None:
    xml = b"""<a b=' c="1" ' c="2"/>"""
    start, end = parse(xml, "p").attribute_span("c")
    assert (xml[start - 1 : end + 1], start) == (b'"2"', xml.index(b"2"))


def test_bytes_may_be_passed_over_and_offsets_still_count_from_the_start() -> None:
    rows = b'<row r="1"/>' * 1000 + b"<unclosed>&nonsense;"
    xml = b'<sheet a="1"><cols/><data>' + rows + b'</data><after x="y"><in/></after></sheet>'
    hole = range(xml.index(rows), xml.index(rows) + len(rows))
    root = parse(xml, "sheet.xml", skipped=hole)
    assert [start_tag(e) for e in walk(root)] == [
        b'<sheet a="1">',
        b"<cols/>",
        b"<data>",
        b'<after x="y">',
        b"<in/>",
    ]
    data = root.children[1]
    assert (data.start_tag_end, data.end_tag_start) == (hole.start, hole.stop)
    assert [end_tag(e) for e in walk(root)] == [b"</sheet>", b"", b"</data>", b"</after>", b""]
    assert xml[slice(*root.children[2].attribute_span("x"))] == b"y"


def test_random_trees_agree_with_the_standard_library() -> None:
    chance = random.Random(20)

    def grown(depth: int) -> str:
        name = chance.choice(["a", "b", "row", "c.d", "é"])
        quote = chance.choice("'\"")
        values = ["", ">", "/>", "&amp;", "x y"]
        pieces = [
            chance.choice([" ", "\n"]) + f"k{i}={quote}{chance.choice(values)}{quote}"
            for i in range(chance.randrange(3))
        ]
        inside = [
            chance.choice(["", "t", "&lt;", "<!--<c/>-->", "<![CDATA[</a>]]>", grown(depth + 1)])
            for _ in range(chance.randrange(4) if depth < 6 else 0)
        ]
        tag = f"<{name}{''.join(pieces)}"
        if not inside and chance.random() < 0.5:
            return tag + chance.choice(["/>", " />"])
        return f"{tag}>{''.join(inside)}</{name}>"

    def same(ours: Element, theirs: ElementTree.Element) -> None:
        assert (ours.local, ours.attributes) == (theirs.tag, dict(theirs.attrib))
        assert ours.text == (theirs.text or "") + "".join(child.tail or "" for child in theirs)
        again = ElementTree.fromstring(ours.source[ours.start : ours.end])
        assert list(again.itertext()) == list(theirs.itertext())
        assert len(ours.children) == len(theirs)
        for child, other in zip(ours.children, theirs, strict=True):
            same(child, other)

    for _ in range(300):
        xml = grown(0).encode()
        same(parse(xml, "random.xml"), ElementTree.fromstring(xml))


DAMAGED = {
    b'<!DOCTYPE a [<!ENTITY e "x">]><a>&e;</a>': "document type definition",
    b'<!DOCTYPE a SYSTEM "other.dtd"><a/>': "document type definition",
    '<?xml version="1.0" encoding="UTF-16"?><a/>'.encode("utf-16"): "UTF-16",
    "<a/>".encode("utf-16-le"): "UTF-16",
    "<a/>".encode("utf-16-be"): "UTF-16",
    '<?xml version="1.0" encoding="ISO-8859-1"?><a>é</a>'.encode("latin-1"): "ISO-8859-1",
    b'<?xml version="1.0" encoding="us-ascii"?><a/>': "us-ascii",
    b"<a>\n<b></a>": r"line 2: mismatched tag",
    b"<a>\xff</a>": "not well-formed",
    b"<a>\xed\xa0\x80</a>": "not well-formed",
    b"<a>&nbsp;</a>": "undefined entity",
    b"<a><x:b/></a>": "unbound prefix",
    b"<a/><b/>": "junk after document element",
    b"<a": "line 1",
    b"": "no element found",
}


@pytest.mark.parametrize("xml", DAMAGED, ids=[str(i) for i in range(len(DAMAGED))])
def test_what_cannot_be_edited_safely_is_refused_with_the_part_and_the_cause(xml: bytes) -> None:
    for check in (parse, check_well_formed):
        with pytest.raises(Refusal, match=DAMAGED[xml]) as refused:
            check(xml, "xl/damaged.xml")
        assert str(refused.value).startswith("xl/damaged.xml ")
        assert "save it again" in str(refused.value)


def test_utf8_is_let_in_with_or_without_mark_and_declaration() -> None:
    for xml in (b"<a/>", b'<?xml version="1.0" encoding="utf-8"?><a/>', b"\xef\xbb\xbf<a/>"):
        check_well_formed(xml, "p")
        assert parse(xml, "p").start == xml.index(b"<a/>")


@pytest.mark.parametrize(
    ("xml", "name"),
    [
        (b"<a/>", ("", "a")),
        (b"\xef\xbb\xbf<?xml version='1.0'?>\n<x:a b='c:d'>", ("x", "a")),
        (b"<!-- <no> --><?go <no/>?>\r\n<a\n b=''></a>", ("", "a")),
    ],
)
def test_the_name_of_the_root_is_found_without_parsing(xml: bytes, name: tuple[str, str]) -> None:
    assert root_name(xml) == name


@pytest.mark.parametrize(
    ("xml", "hidden"),
    [
        (b"<a/>", False),
        (b'<?xml version="1.0"?><a/>', False),
        (b'\xef\xbb\xbf<?xml version="1.0"?><a/>', False),
        (b"<?go?><a/>", True),
        (b'<?xml version="1.0"?><?go?><a/>', True),
        (b"<a><!-- --></a>", True),
        (b"<a><![CDATA[]]></a>", True),
    ],
)
def test_it_is_known_whether_a_plain_search_could_go_wrong(xml: bytes, hidden: bool) -> None:
    assert has_hidden_text(xml) is hidden


def test_nesting_is_limited() -> None:
    def nested(depth: int) -> bytes:
        return b"<a>" * depth + b"</a>" * depth

    assert parse(nested(MAX_DEPTH), "p").local == "a"
    with pytest.raises(Refusal, match=f"more than {MAX_DEPTH} deep"):
        parse(nested(MAX_DEPTH + 1), "p")


AWKWARD = "a&b<c>\"d\"'e'\tf\ng\rh]]>é Ω 😀 &amp;"


def test_escaped_text_comes_back_from_a_parser() -> None:
    xml = f"<a>{escape_text(AWKWARD)}</a>".encode()
    assert parse(xml, "p").text == ElementTree.fromstring(xml).text == AWKWARD


@pytest.mark.parametrize("quote", ["'", '"'])
def test_escaped_attributes_come_back_from_a_parser_whatever_the_quotes(quote: str) -> None:
    xml = f"<a b={quote}{escape_attribute(AWKWARD)}{quote}/>".encode()
    assert parse(xml, "p").attributes["b"] == ElementTree.fromstring(xml).attrib["b"] == AWKWARD


def test_character_references_are_resolved_once() -> None:
    assert unescape("&lt;&gt;&amp;amp;&quot;&apos;&#955;&#x3bb;&#x1F600;") == "<>&amp;\"'λλ😀"
    assert unescape(escape_attribute(AWKWARD)) == AWKWARD
    assert unescape("plain") == "plain"


def test_a_qualified_name_has_a_colon_only_with_a_prefix() -> None:
    assert (qualified("x", "row"), qualified("", "row")) == ("x:row", "row")


@pytest.mark.parametrize(
    ("xml", "expected"),
    [
        (b"<a b='1' c=\"2\"/>", b"<a b='1&apos;&amp;' c=\"2\"/>"),
        (b'<a c="2"/>', b'<a c="2" b="1&apos;&amp;"/>'),
        (b'<a c="/>"></a>', b'<a c="/>" b="1&apos;&amp;"></a>'),
        (b"<a></a>", b'<a b="1&apos;&amp;"></a>'),
    ],
)
def test_an_attribute_is_replaced_where_it_is_or_added_at_the_end(
    xml: bytes, expected: bytes
) -> None:
    edit = set_attribute(parse(xml, "p"), "b", "1'&")
    assert edit.kind is EditKind.ATTRIBUTE_CHANGED
    assert applied(xml, edit) == expected


def test_an_attribute_with_a_prefix_of_the_same_local_name_is_left_alone() -> None:
    xml = b'<a xmlns:x="u" x:b="0"/>'
    edit = set_attribute(parse(xml, "p"), "b", "1", EditKind.RECALCULATE_FLAG_SET)
    assert edit.kind is EditKind.RECALCULATE_FLAG_SET
    assert applied(xml, edit) == b'<a xmlns:x="u" x:b="0" b="1"/>'


@pytest.mark.parametrize(
    ("xml", "expected"),
    [
        (b"<x:a xmlns:x='u'/>", b"<x:a xmlns:x='u' n=\"1\"><new/></x:a>"),
        (b"<a n='0' />", b"<a n='1' ><new/></a>"),
        (b"<a n='0'><b/>\n</a>", b"<a n='1'><b/>\n<new/></a>"),
    ],
)
def test_a_child_is_appended_and_an_empty_element_opened_for_it(
    xml: bytes, expected: bytes
) -> None:
    root = parse(xml, "p")
    edits = [append_child(root, b"<new/>", EditKind.STYLE_APPENDED), set_attribute(root, "n", "1")]
    assert applied(xml, *edits) == expected
