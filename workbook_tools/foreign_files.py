"""Files that are no workbook of ours, told apart so that the refusal can say what to do."""

from __future__ import annotations

from collections.abc import Iterable

from workbook_tools.errors import Refusal

_ZIP_STARTS = (b"PK\x03\x04", b"PK\x05\x06")
_OLE_START = bytes.fromhex("D0CF11E0A1B11AE1")
# Names of streams as an OLE directory spells them: UTF-16LE, closed by a NUL ([MS-CFB] 2.6.1).
_ENCRYPTED_STREAM = "EncryptedPackage\0".encode("utf-16-le")
_OLD_WORKBOOK_STREAMS = ("Workbook\0".encode("utf-16-le"), "Book\0".encode("utf-16-le"))
_OPEN_DOCUMENT = b"application/vnd.oasis.opendocument"
_SIGNATURE_FOLDER = "_xmlsignatures/"
_SAVE_AS = "open it in a spreadsheet program and save it as .xlsx"


def refuse_foreign_file(data: bytes, label: str) -> None:
    """Refuse bytes that do not begin as a zip file does.

    Args:
        data: the whole file.
        label: how the message calls the file.
    Raises:
        Refusal: empty, encrypted, an old .xls, or anything else that is no zip file.
    """
    if data.startswith(_ZIP_STARTS):
        return
    if not data:
        raise Refusal(f"{label} is empty (0 bytes); restore an older copy of it.")
    if not data.startswith(_OLE_START):
        raise Refusal(f"{label} is not a workbook, whatever its name says; {_SAVE_AS}.")
    if _ENCRYPTED_STREAM in data:
        raise Refusal(
            f"{label} is encrypted; open it with its password, save it without one, and run again."
        )
    if any(stream in data for stream in _OLD_WORKBOOK_STREAMS):
        raise Refusal(f"{label} is a workbook of the old .xls kind; {_SAVE_AS}.")
    raise Refusal(f"{label} is an Office file of an old kind, but not a workbook; {_SAVE_AS}.")


def refuse_foreign_package(names: Iterable[str], mimetype: bytes, label: str) -> None:
    """Refuse a zip file whose members show that it must not or cannot be filled.

    Args:
        names: the names of all members.
        mimetype: content of the member `mimetype`; empty where there is none.
        label: how the message calls the file.
    Raises:
        Refusal: an OpenDocument file, or a workbook with a digital signature.
    """
    if mimetype.startswith(_OPEN_DOCUMENT):
        raise Refusal(f"{label} is an OpenDocument file (.ods); {_SAVE_AS}.")
    for name in names:
        folder = name[: len(_SIGNATURE_FOLDER)].lower()
        if folder == _SIGNATURE_FOLDER and len(name) > len(folder):
            raise Refusal(
                f"{label} is digitally signed ({name}) and any change would void the signature;"
                " remove the signature in a spreadsheet program, or fill an unsigned copy."
            )
