"""What kind of content each part of a package holds (ECMA-376 part 2, clause 10.1)."""

from __future__ import annotations

from typing import NamedTuple

from workbook_tools.errors import Refusal
from workbook_tools.relations import Package
from workbook_tools.xml_offsets import parse

CONTENT_TYPES_PART = "[Content_Types].xml"


class ContentTypes(NamedTuple):
    """The list of a package; keys are in lower case.

    Attributes:
        part: name of the list itself, as the package spells it.
        overrides: type by name of the part.
        defaults: type by file extension.
    """

    part: str
    overrides: dict[str, str]
    defaults: dict[str, str]

    def of(self, part: str) -> str | None:
        """Return the type of a part: its own line first, then that of its extension."""
        name = part.lstrip("/").lower()
        extension = name.rpartition("/")[2].rpartition(".")[2]
        return self.overrides.get(name, self.defaults.get(extension))


def read_content_types(package: Package) -> ContentTypes:
    """Read the list of content types.

    Raises:
        Refusal: there is none, so this is no workbook; or it cannot be read.
    """
    found = package.find(CONTENT_TYPES_PART)
    if found is None:
        raise Refusal(
            f"{package.label} holds no {CONTENT_TYPES_PART} and so is no workbook; open it in the"
            " program that made it and save it as .xlsx."
        )
    root = parse(package.read(found.name), found.name)
    return ContentTypes(
        part=found.name,
        overrides={
            line.attributes.get("PartName", "").lstrip("/").lower(): _type(line.attributes)
            for line in root.find_all("Override")
        },
        defaults={
            line.attributes.get("Extension", "").lower(): _type(line.attributes)
            for line in root.find_all("Default")
        },
    )


def _type(attributes: dict[str, str]) -> str:
    return attributes.get("ContentType", "").strip().lower()
