"""The bytes of zip records, against the standard library's reader."""

from __future__ import annotations

import zipfile
from io import BytesIO

import pytest

from workbook_tools.zip_records import end_record, new_member


@pytest.mark.parametrize("name", ["xl/tables/table1.xml", "xl/größe.xml"])
def test_a_new_member_is_understood_by_another_reader(name: str) -> None:
    member = new_member(name)
    local = member.local_header()
    central = member.central_header(0)
    data = local + central + end_record(1, len(central), len(local), b"note")
    with zipfile.ZipFile(BytesIO(data)) as archive:
        (info,) = archive.infolist()
        assert archive.comment == b"note"
    assert info.filename == name
    assert info.compress_type == zipfile.ZIP_DEFLATED
    assert info.date_time == (1980, 1, 1, 0, 0, 0)
    assert (info.file_size, info.header_offset) == (0, 0)
