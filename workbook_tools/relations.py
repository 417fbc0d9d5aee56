"""How the parts of a package point at each other (ECMA-376 part 2, clause 9.3)."""

from __future__ import annotations

import posixpath
from typing import NamedTuple, Protocol
from urllib.parse import unquote

from workbook_tools.xml_offsets import parse


class Named(Protocol):
    """An entry of a package."""

    @property
    def name(self) -> str:
        """The name of the entry as the package spells it."""


class Package(Protocol):
    """What is asked of a package; `archive.Archive` is one."""

    label: str
    """How messages call the file."""

    def find(self, name: str) -> Named | None:
        """Return the entry of that name, whatever the case of its letters."""

    def read(self, name: str) -> bytes:
        """Return the content of the entry of exactly that name."""


class Relation(NamedTuple):
    """One line of a relations part.

    Attributes:
        id: what the source part calls it.
        type: the full URI of its type.
        target: as written.
        part: the part it leads to, as the package spells it; None outside the package or absent.
        external: whether it leads out of the package.
    """

    id: str
    type: str
    target: str
    part: str | None
    external: bool

    @property
    def kind(self) -> str:
        """Last step of the type, which transitional and strict files share, such as `worksheet`."""
        return self.type.rpartition("/")[2]


def relations_of(package: Package, part: str) -> tuple[Relation, ...]:
    """Return the relations of a part in the order of the file; none where it has no list of them.

    Args:
        package: where to look.
        part: name of the source part; empty for the package itself.
    Raises:
        Refusal: the list cannot be read.
    """
    found = package.find(relations_part(part))
    if found is None:
        return ()
    relations = []
    for line in parse(package.read(found.name), found.name).find_all("Relationship"):
        target = line.attributes.get("Target", "")
        external = line.attributes.get("TargetMode", "").lower() == "external"
        relations.append(
            Relation(
                id=line.attributes.get("Id", ""),
                type=line.attributes.get("Type", ""),
                target=target,
                part=None if external else _target_part(package, part, target),
                external=external,
            )
        )
    return tuple(relations)


def relations_part(part: str) -> str:
    """Return the name of the list of relations of a part; `""` gives that of the package."""
    folder, name = posixpath.split(part)
    return posixpath.join(folder, "_rels", f"{name}.rels")


def _target_part(package: Package, source: str, target: str) -> str | None:
    path = target.partition("#")[0]
    for spelling in (path, unquote(path)):
        whole = posixpath.normpath(posixpath.join("/", posixpath.dirname(source), spelling))
        found = package.find(whole.lstrip("/"))
        if path and found is not None:
            return found.name
    return None
