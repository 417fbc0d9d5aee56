"""Companions tied to their columns: whose error, limit, note or quality a column holds."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace

from epochconv.units import unit_named
from workbook_tools.cell_address import column_letters
from workbook_tools.column_meanings import Heading, Meaning, Role, unclear
from workbook_tools.companion_names import Companion
from workbook_tools.heading_names import read_name
from workbook_tools.heading_units import UnitPart

_ERRORS = (Role.ERROR, Role.UPPER_ERROR, Role.LOWER_ERROR)


@dataclass
class Column:
    """A column while its meaning is sought.

    Attributes:
        number: counted from 1.
        name: the name part of its heading.
        lines: plain lines of its heading, with and without a group above it.
        meaning: what it means by itself, then beside the others.
        possible: what it may be as a companion.
        prefix: the one-letter prefix by which it was tied.
    """

    number: int
    name: str
    lines: tuple[str, ...]
    meaning: Meaning
    possible: Sequence[Companion] = ()
    prefix: str = field(default="", init=False)

    @property
    def is_value(self) -> bool:
        """Whether it holds a measure."""
        return self.meaning.role is Role.VALUE


def tie_companions(columns: Sequence[Column]) -> None:
    """Give the companions among the columns of a sheet their roles and owners.

    What by its heading alone is a measure stays one. Two columns that state the same error, and a
    column whose unit another one states row by row, become UNCLEAR.

    Args:
        columns: in the order of the sheet.
    """
    by_number = {column.number: column for column in columns}
    owners = [column for column in columns if column.is_value or not column.possible]
    for column in columns:
        if not column.is_value:
            _tie(column, owners, by_number)
    for owner in owners:
        mine = [one for one in columns if one.meaning.owner == owner.number]
        _tell_apart(owner, mine)
        _refuse_units_by_row(owner, mine)


def _tie(column: Column, owners: Sequence[Column], by_number: dict[int, Column]) -> None:
    """Tie one column by the first reading that finds an owner, else by what its words say."""
    fitting: list[tuple[Companion, list[Column]]] = []
    for one in column.possible:
        found = _owners(one, column, owners, by_number)
        if found:
            fitting.append((one, found))
            break
    if fitting:
        companion, found = fitting[0]
        column.prefix = companion.prefix
        column.meaning = _tied(companion, found)
        return
    for one in column.possible:
        if one.role is Role.CARRIED and not one.base:
            column.meaning = Meaning(Role.CARRIED, reason=one.carries, why=f"word {one.carries!r}")
            return
        name = read_name(one.base) if one.base and not one.exact else None
        if name is not None and not name.unknown and one.role is not Role.UNCLEAR:
            column.meaning = _as(one, one.base, None)
            return


def _owners(
    one: Companion, column: Column, owners: Sequence[Column], by_number: dict[int, Column]
) -> list[Column]:
    """Return the columns that a companion may belong to; more than one leaves a doubt."""
    if not one.base:
        left = _on_the_left(column, owners, by_number)
        doubtful = one.role is Role.UNCLEAR and not (left and left[0].is_value)
        return [] if one.role is Role.CARRIED or doubtful else left
    same = [owner for owner in owners if one.base == owner.name or one.base in owner.lines]
    if not same:
        folded = one.base.casefold()
        # One letter in the other case is another quantity, as Z is a metallicity.
        same = [o for o in owners if len(folded) > 1 and folded == o.name.casefold()]
    if not same and not one.exact:
        same = _same_measure(one.base, owners)
    return same


def _on_the_left(
    column: Column, owners: Sequence[Column], by_number: dict[int, Column]
) -> list[Column]:
    """Return the nearest column on the left that is no companion itself."""
    number = column.number - 1
    while number in by_number and by_number[number] not in owners:
        number -= 1
    found = by_number.get(number)
    return [] if found is None else [found]


def _same_measure(base: str, owners: Sequence[Column]) -> list[Column]:
    """Return the columns that hold the measure which a base names, by its method if it says one."""
    found = []
    for owner in owners:
        heading = owner.meaning.heading
        if heading is None:
            continue
        name = read_name(base, unit_named(heading.unit.symbol).dimension)
        if name is None or name.unknown or name.measure != heading.measure:
            continue
        if name.frame in ("", heading.frame) and name.method in ("", heading.method):
            found.append(owner)
    return found


def _tied(one: Companion, found: Sequence[Column]) -> Meaning:
    part = one.part
    if len(found) > 1 and part is not None and part.unit is not None:
        # A unit tells columns of one name apart.
        units = [(c, c.meaning.heading) for c in found]
        fitting = [c for c, h in units if h and (h.unit, h.h_power) == (part.unit, part.h_power)]
        found = fitting or found
    if len(found) > 1:
        listed = " and ".join(f"{c.name!r} ({column_letters(c.number)})" for c in found)
        return unclear(f"may belong to {listed}; name one of them in full")
    owner = found[0]
    if one.role is Role.UNCLEAR:
        return unclear(
            f"beside {owner.name!r}: {one.carries}; if it belongs to it, write 'error of"
            f" {owner.name}', 'upper error of {owner.name}' or 'limit flag of {owner.name}'"
        )
    if owner.meaning.heading is not None and one.part is not None and one.role in _ERRORS:
        problem = _misfit(one.part, owner.meaning.heading)
        if problem:
            return unclear(f"error of {owner.name!r}: {problem}")
    return _as(one, owner.name, owner.number)


def _misfit(part: UnitPart, heading: Heading) -> str:
    """Return why an error in that unit is none of the column, "" where it is."""
    if part.problem or part.unit is None:
        return part.problem or "it cannot be in a unit of velocity"
    if part.unit.dimension != heading.unit.dimension:
        return f"it cannot be in {part.unit.symbol}; the column is in {heading.unit.symbol or '1'}"
    if part.h_power != heading.h_power:
        return "its unit has another power of h than that of the column; give both in one"
    return ""


def _as(one: Companion, of: str, owner: int | None) -> Meaning:
    unit = one.part.unit if one.part is not None and one.role in _ERRORS else None
    kind = one.carries if one.role is Role.CARRIED else one.role.value
    why = f"{kind} of {of!r}"
    return Meaning(one.role, None, of, owner, unit, one.carries, why)


def _tell_apart(owner: Column, mine: Sequence[Column]) -> None:
    """Make `e_X` beside `E_X` the lower error, and refuse several that state the same."""
    errors = [one for one in mine if one.meaning.role in _ERRORS]
    if {one.prefix for one in errors} == {"e", "E"} and len(errors) == 2:
        for one in errors:
            if one.prefix == "e":
                one.meaning = replace(
                    one.meaning, role=Role.LOWER_ERROR, why=f"lower error of {owner.name!r}"
                )
    roles = [one.meaning.role for one in errors]
    if len(set(roles)) < len(roles) or (Role.ERROR in roles and len(roles) > 1):
        listed = " and ".join(column_letters(one.number) for one in errors)
        for one in errors:
            one.meaning = unclear(
                f"columns {listed} both state the error of {owner.name}; rename the one that does"
                " not count, or tell them apart as 'upper error' and 'lower error'"
            )


def _refuse_units_by_row(owner: Column, mine: Sequence[Column]) -> None:
    for one in mine:
        if one.prefix == "x" and owner.is_value:
            owner.meaning = unclear(
                f"{one.lines[0]} states the unit row by row; bring the column to one unit and"
                f" rename or remove {one.lines[0]}"
            )
