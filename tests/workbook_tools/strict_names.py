"""The namespaces of ISO/IEC 29500 strict and their transitional twins (parts 1 and 4)."""

from __future__ import annotations

_TWINS = {
    b"http://schemas.openxmlformats.org/spreadsheetml/2006/main": (
        b"http://purl.oclc.org/ooxml/spreadsheetml/main"
    ),
    b"http://schemas.openxmlformats.org/officeDocument/2006/extended-properties": (
        b"http://purl.oclc.org/ooxml/officeDocument/extendedProperties"
    ),
    b"http://schemas.openxmlformats.org/officeDocument/2006/": (
        b"http://purl.oclc.org/ooxml/officeDocument/"
    ),
    b"http://schemas.openxmlformats.org/drawingml/2006/": b"http://purl.oclc.org/ooxml/drawingml/",
}


def to_strict(xml: bytes) -> bytes:
    """A part with the strict names in place of the transitional ones."""
    for transitional, strict in _TWINS.items():
        xml = xml.replace(transitional, strict)
    return xml


def to_transitional(xml: bytes) -> bytes:
    """A part with the transitional names in place of the strict ones."""
    for transitional, strict in _TWINS.items():
        xml = xml.replace(strict, transitional)
    return xml
