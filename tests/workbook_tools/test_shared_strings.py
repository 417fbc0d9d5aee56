"""Shared texts: every way of writing one, and the corpus as openpyxl reads it."""

from __future__ import annotations

import io
import random
from xml.etree import ElementTree

import pytest
from openpyxl.reader.strings import read_string_table

from tests.workbook_tools.corpus import corpus_parts, needs_corpus
from tests.workbook_tools.loose_parts import MAIN
from workbook_tools.errors import Refusal
from workbook_tools.hex_escapes import decoded
from workbook_tools.shared_strings import SharedStrings, TypedText, read_text


def texts(*entries: str, prefix: str = "") -> SharedStrings:
    root, declared = (f"{prefix}:sst", f":{prefix}") if prefix else ("sst", "")
    xml = f'<?xml version="1.0"?>\n<{root} xmlns{declared}="{MAIN}">{"".join(entries)}</{root}>'
    return SharedStrings(xml.encode(), "xl/sharedStrings.xml")


@pytest.mark.parametrize(
    ("xml", "text"),
    [
        ("<si><t>quasar</t></si>", "quasar"),
        ('<si><t xml:space="preserve"> two  spaces </t></si>', " two  spaces "),
        ("<si>\n  <t>laid out</t>\n </si>\n ", "laid out"),
        ("<si><t>z &gt; 6 &amp; &#955;&#x3bb;</t></si>", "z > 6 & λλ"),
        ("<si><t>&amp;lt;</t></si>", "&lt;"),
        ("<si><t>two_x000a_lines</t></si>", "two\nlines"),
        ("<si><t>_x005F_x0041_</t></si>", "_x0041_"),
        ("<si><t>é Ω 😀</t></si>", "é Ω 😀"),
        ("<si><t>a\r\nb\rc</t></si>", "a\nb\nc"),
        ("<si><t>a&#13;b</t></si>", "a\rb"),
        ("<si><t></t></si>", ""),
        ("<si><t/></si>", ""),
        ("<si></si>", ""),
        ("<si/>", ""),
        ("<x:si><x:t>with a prefix</x:t></x:si>", "with a prefix"),
        ("<si><t>a<![CDATA[<b>&amp;]]>c</t></si>", "a<b>&amp;c"),
        ("<si><t>a<!-- <t>no</t> -->c</t></si>", "ac"),
        ("<is><t>in a cell</t></is>", "in a cell"),
        (
            "<si><t>東京</t><rPh sb='0' eb='2'><t>とう</t></rPh><phoneticPr fontId='1'/></si>",
            "東京",
        ),
    ],
)
def test_a_plain_text_is_read(xml: str, text: str) -> None:
    assert read_text(xml.encode()) == TypedText(text)


def run(look: str, text: str) -> str:
    return f"<r><rPr>{look}<sz val='11'/></rPr><t>{text}</t></r>"


@pytest.mark.parametrize(
    ("xml", "expected"),
    [
        ("<si><r><t>red</t></r><r><t>shift</t></r></si>", TypedText("redshift", True)),
        (
            "<si>" + run("<b/>", "H") + run("<vertAlign val='subscript'/>", "0") + "</si>",
            TypedText("H0", True, shifted=True),
        ),
        (
            "<si>" + run("<vertAlign val='superscript'/>", "2") + "</si>",
            TypedText("2", True, shifted=True),
        ),
        ("<si>" + run("<vertAlign val='baseline'/>", "2") + "</si>", TypedText("2", True)),
        ("<si>" + run("<strike/>", "6.3") + "</si>", TypedText("6.3", True, struck=True)),
        ("<si>" + run("<strike val='1'/>", "6.3") + "</si>", TypedText("6.3", True, struck=True)),
        ("<si>" + run("<strike val='0'/>", "6.3") + "</si>", TypedText("6.3", True)),
        (
            "<x:si><x:r><x:rPr><x:strike/></x:rPr><x:t>6</x:t></x:r><x:r><x:t>.3</x:t></x:r></x:si>",
            TypedText("6.3", True, struck=True, partly_struck=True),
        ),
        (
            "<si>" + run("<strike/>", "6.3") + "<r><t>, sky</t></r></si>",
            TypedText("6.3, sky", True, struck=True),
        ),
        (
            "<si><r><t>東</t></r><rPh sb='0' eb='1'><t>ひがし</t></rPh><r><t>京</t></r></si>",
            TypedText("東京", True),
        ),
        ("<si><r><t>_x00</t></r><r><t>41_</t></r></si>", TypedText("_x0041_", True)),
    ],
)
def test_runs_are_joined_and_what_their_look_could_mean_is_noted(
    xml: str, expected: TypedText
) -> None:
    assert read_text(xml.encode()) == expected


@pytest.mark.parametrize("prefix", ["", "x"])
def test_texts_are_numbered_from_zero(prefix: str) -> None:
    mark = f"{prefix}:" if prefix else ""
    entries = [f"<{mark}si><{mark}t>text {n}</{mark}t></{mark}si>" for n in range(50)]
    entries[7] = f"<{mark}si/>"
    entries[8] = f"<{mark}si  >\n<{mark}r><{mark}t>eight</{mark}t></{mark}r></{mark}si>\n"
    found = texts(*entries, prefix=prefix)
    assert len(found) == 50
    expected = [TypedText(f"text {n}") for n in range(50)]
    expected[7], expected[8] = TypedText(""), TypedText("eight", True)
    assert [found[n] for n in range(50)] == expected


@pytest.mark.parametrize(
    "hiding", ["<!-- <si> -->", "<si><t><![CDATA[<si><t>no</t></si>]]></t></si>", "<?go <si/>?>"]
)
def test_a_tag_within_a_comment_is_no_text(hiding: str) -> None:
    found = texts("<si><t>a</t></si>", hiding, "<si><t>b</t></si>")
    read = [found[n].text for n in range(len(found))]
    assert (read[0], read[-1]) == ("a", "b")
    assert read[1:-1] == (["<si><t>no</t></si>"] if "CDATA" in hiding else [])


@pytest.mark.parametrize("root", ["<sst/>", "<sst></sst>", "<sst count='5'> </sst>"])
def test_an_empty_list_holds_nothing(root: str) -> None:
    found = SharedStrings(root.encode(), "xl/sharedStrings.xml")
    assert len(found) == 0
    with pytest.raises(Refusal, match=r"^xl/sharedStrings\.xml holds 0 texts .* number 0;"):
        found[0]


@pytest.mark.parametrize("number", [-1, 2, 10**9])
def test_a_text_that_is_not_there_is_refused(number: int) -> None:
    with pytest.raises(Refusal, match=rf"holds 2 texts but a cell asks for number {number};"):
        texts("<si/>", "<si/>")[number]


@pytest.mark.parametrize(
    ("xml", "words"),
    [
        (b"<sst><si></sst>", "not well-formed"),
        (b"<!DOCTYPE sst><sst/>", "document type definition"),
        (b"<other/>", "should list the texts"),
    ],
)
def test_what_is_no_list_of_texts_is_refused(xml: bytes, words: str) -> None:
    with pytest.raises(Refusal, match=f"^xl/texts.xml .*{words}"):
        SharedStrings(xml, "xl/texts.xml")


def test_random_lists_agree_with_the_standard_library() -> None:
    chance = random.Random(3)

    def written() -> str:
        inside = "".join(
            chance.choices(["a", "Ω", "&amp;", "&#9;", "\r\n", " ", "<!--x-->", "]"], k=5)
        )
        tag = chance.choice(["<t>{}</t>", '<t xml:space="preserve">{}</t>', "<r><t>{}</t></r>"])
        return tag.format(inside) * chance.randrange(4)

    for _ in range(200):
        xml = f"<sst>{''.join(f'<si>{written()}</si>' for _ in range(5))}</sst>"
        found = SharedStrings(xml.encode(), "p")
        meant = ["".join(t.text or "" for t in si.iter("t")) for si in ElementTree.fromstring(xml)]
        assert [found[n].text for n in range(len(found))] == meant


@pytest.mark.long
@needs_corpus
def test_the_texts_of_the_corpus_are_those_that_openpyxl_reads() -> None:
    seen = rich = 0
    for file, xml in corpus_parts("sharedstrings.xml"):
        found = SharedStrings(xml, file)
        ours = [found[n] for n in range(len(found))]
        rich += sum(text.rich for text in ours)
        seen += len(ours)
        if b"purl.oclc.org" not in xml:  # openpyxl 3.1 reads no strict texts
            theirs = read_string_table(io.BytesIO(xml))
            assert [text.text for text in ours] == [decoded(text) for text in theirs]
    assert seen > 1000
    assert rich > 0
