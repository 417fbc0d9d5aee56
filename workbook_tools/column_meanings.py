"""What a column can be taken for: a value, a companion of one, a doubt, or none of ours."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum

from epochconv.measure import Measure
from epochconv.units import Unit


class Role(StrEnum):
    """What a column is, beside others."""

    VALUE = "value"
    ERROR = "error"
    UPPER_ERROR = "upper error"
    LOWER_ERROR = "lower error"
    LIMIT_FLAG = "limit flag"
    CARRIED = "carried"
    UNCLEAR = "unclear"
    OTHER = "other"


ERRORS = (Role.ERROR, Role.UPPER_ERROR, Role.LOWER_ERROR)


@dataclass(frozen=True)
class Heading:
    """A recognised heading.

    Attributes:
        measure, unit: what the column holds.
        text: the heading as it stands, in one line.
        h_power: power of h = H0/(100 km/s/Mpc) in the unit; -1 for `h^-1 Mpc`, where the numbers
            are the measure times h.
        frame: in plain words ("heliocentric", "CMB", "LSR", "Local Group"); "" if not said.
        method: "photometric", "spectroscopic" or "".
        name: the heading without its unit part.
    """

    measure: Measure
    unit: Unit
    text: str
    h_power: int = 0
    frame: str = ""
    method: str = ""
    name: str = ""

    @property
    def unit_text(self) -> str:
        """The unit as it is written behind a name, "" for none."""
        return f"h^{self.h_power} {self.unit.symbol}" if self.h_power else self.unit.symbol

    @property
    def was_measured(self) -> bool:
        """Whether it says that its values are observed: then none is to be computed."""
        return bool(self.method) or self.frame not in ("", "CMB")

    def same_kind(self, other: Heading) -> bool:
        """Tell whether the other one holds the same measure in the same unit."""
        return (self.measure, self.unit, self.h_power) == (
            other.measure,
            other.unit,
            other.h_power,
        )


@dataclass(frozen=True)
class Meaning:
    """What a column is taken for.

    Attributes:
        role: its part in the sheet.
        heading: of a VALUE, what it holds.
        of: of a companion, the name part of the heading of the column that it belongs to.
        owner: of a companion, the number of that column; None where the sheet has none.
        unit: of an error, the unit that its heading states; None where it states none, and it is
            then that of the column it belongs to, as the power of h always is.
        reason: of an UNCLEAR one, why it is refused and what settles it; of a CARRIED one, what it
            carries: quality, note, reference or unit.
        why: one phrase that says what it was recognised by.
    """

    role: Role
    heading: Heading | None = None
    of: str = ""
    owner: int | None = None
    unit: Unit | None = None
    reason: str = ""
    why: str = ""


def unclear(reason: str) -> Meaning:
    """Return the meaning of a column that is refused for a reason."""
    return Meaning(Role.UNCLEAR, reason=reason)
