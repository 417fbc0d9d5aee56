"""Is a part valid under the published ECMA-376 (transitional) XML schemas?

The schemas are not part of this project. The environment variable EPOCHBOOK_SCHEMAS names a
folder that holds them (sml.xsd and what it imports); tests that need them skip where it is unset.
"""

from __future__ import annotations

import os
import zipfile
from functools import lru_cache
from pathlib import Path

import pytest
from lxml import etree

from tests.workbook_tools.rules.package import COMPATIBILITY, namespace_and_name
from tests.workbook_tools.strict_names import to_transitional

VARIABLE = "EPOCHBOOK_SCHEMAS"
needs_schemas = pytest.mark.skipif(
    not os.environ.get(VARIABLE), reason=f"{VARIABLE} does not name the folder of schemas"
)

_TRANSITIONAL = "http://schemas.openxmlformats.org/"
_SCHEMA_OF = {
    f"{_TRANSITIONAL}spreadsheetml/2006/main": "sml.xsd",
    f"{_TRANSITIONAL}drawingml/2006/chart": "dml-chart.xsd",
    f"{_TRANSITIONAL}drawingml/2006/spreadsheetDrawing": "dml-spreadsheetDrawing.xsd",
}
_XML_SPACE = "{http://www.w3.org/XML/1998/namespace}space"


def schema_problems(xml: bytes) -> list[str] | None:
    """What a part breaks in its schema, without line numbers; None where there is no schema.

    Raises:
        lxml.etree.XMLSyntaxError: the part is not well-formed.
    """
    # One set of schemas serves both kinds of workbook.
    root = etree.fromstring(
        to_transitional(xml), etree.XMLParser(huge_tree=True, resolve_entities=False)
    )
    name = _SCHEMA_OF.get(namespace_and_name(root.tag)[0])
    if name is None or root.tag.endswith("}MapInfo"):  # which holds a schema of its own
        return None
    _keep_the_standard(root)
    schema = _schema(name)
    schema.validate(root)
    return [error.message for error in schema.error_log]


def package_schema_problems(path: Path) -> dict[str, list[str]]:
    """`schema_problems` of every XML part of a workbook that has a schema."""
    found = {}
    with zipfile.ZipFile(path) as archive:
        for name in archive.namelist():
            if name.endswith(".xml"):
                result = schema_problems(archive.read(name))
                if result is not None:
                    found[name] = result
    return found


@lru_cache(maxsize=8)
def _schema(name: str) -> etree.XMLSchema:
    return etree.XMLSchema(etree.parse(Path(os.environ[VARIABLE]) / name))


def _keep_the_standard(root: etree._Element) -> None:
    """Drop what markup compatibility lets a reader drop (ECMA-376 part 3), in place."""
    for item in list(root.iter(f"{{{COMPATIBILITY}}}AlternateContent")):
        _take_fallback(item)
    ignorable = {COMPATIBILITY}
    for element in root.iter(etree.Element):
        prefixes = element.get(f"{{{COMPATIBILITY}}}Ignorable", "").split()
        ignorable |= {uri for prefix in prefixes if (uri := element.nsmap.get(prefix))}
    for element in list(root.iter(etree.Element)):
        parent = element.getparent()
        extension = parent is not None and parent.tag.endswith("}ext")  # is there for strangers
        if namespace_and_name(element.tag)[0] in ignorable and parent is not None and not extension:
            parent.remove(element)
            continue
        for key in list(element.attrib):
            if namespace_and_name(key)[0] in ignorable or key == _XML_SPACE:
                del element.attrib[key]


def _take_fallback(item: etree._Element) -> None:
    parent = item.getparent()
    fallback = item.find(f"{{{COMPATIBILITY}}}Fallback")
    place = parent.index(item)
    parent[place : place + 1] = [] if fallback is None else list(fallback)
