"""Files that are no workbook are told apart, each with a sentence that says what to do."""

from __future__ import annotations

import pytest

from workbook_tools.errors import Refusal
from workbook_tools.foreign_files import refuse_foreign_file, refuse_foreign_package

OLE = bytes.fromhex("D0CF11E0A1B11AE1") + bytes(504)


@pytest.mark.parametrize(
    ("data", "what", "remedy"),
    [
        (b"", "is empty", "restore"),
        (b"name,z\nQ1,2.5\n", "not a workbook", "save it as .xlsx"),
        (b"<html><table>", "not a workbook", "save it as .xlsx"),
        (OLE + "EncryptedPackage\0".encode("utf-16-le"), "encrypted", "password"),
        (OLE + "Workbook\0".encode("utf-16-le"), "old .xls kind", "save it as .xlsx"),
        (OLE + "Book\0".encode("utf-16-le"), "old .xls kind", "save it as .xlsx"),
        (OLE + "WordDocument\0".encode("utf-16-le"), "not a workbook", "save it as .xlsx"),
    ],
)
def test_each_kind_of_foreign_file_is_named(data: bytes, what: str, remedy: str) -> None:
    with pytest.raises(Refusal, match=r"^log\.xlsx is ") as caught:
        refuse_foreign_file(data, "log.xlsx")
    assert what in str(caught.value)
    assert remedy in str(caught.value)


def test_an_encrypted_workbook_that_keeps_old_streams_is_still_called_encrypted() -> None:
    streams = "Workbook\0".encode("utf-16-le") + "EncryptedPackage\0".encode("utf-16-le")
    with pytest.raises(Refusal, match="encrypted"):
        refuse_foreign_file(OLE + streams, "log.xlsx")


@pytest.mark.parametrize("start", [b"PK\x03\x04", b"PK\x05\x06"])
def test_a_zip_file_passes(start: bytes) -> None:
    refuse_foreign_file(start + bytes(30), "log.xlsx")


def test_an_open_document_file_is_refused() -> None:
    mimetype = b"application/vnd.oasis.opendocument.spreadsheet"
    with pytest.raises(Refusal, match=r"\.ods.*save it as \.xlsx"):
        refuse_foreign_package(["mimetype", "content.xml"], mimetype, "log.xlsx")


@pytest.mark.parametrize("name", ["_xmlsignatures/origin.sigs", "_XMLSignatures/sig1.xml"])
def test_a_signed_workbook_is_refused(name: str) -> None:
    with pytest.raises(Refusal, match="digitally signed"):
        refuse_foreign_package(["xl/workbook.xml", name], b"", "log.xlsx")


def test_an_empty_signature_folder_is_no_signature() -> None:
    refuse_foreign_package(["xl/workbook.xml", "_xmlsignatures/"], b"", "log.xlsx")
