"""Cells that are plainly well formed, in every mixture of spellings, with what they say.

Values are exact fractions, made beside the text and never from it.
"""

from __future__ import annotations

import random
from dataclasses import dataclass
from fractions import Fraction

NAMES = ("z", "redshift")

# Spellings of one unit each, after the project's closed table.
_UNITS = {
    "Gyr": ("Gyr", "billion years", "gigayears"),
    "Myr": ("Myr",),
    "yr": ("yr", "years"),
    "Mpc": ("Mpc", "megaparsec"),
    "Gly": ("Gly", "billion light years"),
    "K": ("K", "kelvin"),
    "mag": ("mag",),
    "km/s/Mpc": ("km/s/Mpc", "km s^-1 Mpc^-1", "km s⁻¹ Mpc⁻¹"),
    "s": ("s",),
}
_LIMITS = {
    "<": ("<", "< ", "\uff1c"),
    ">": (">", "> "),
    "≤": ("≤", "<=", "≤ ", "<= ", "⩽"),
    "≥": ("≥", ">=", ">= "),
    "≲": ("≲", "<~", "~<", "≲ "),
    "≳": ("≳", ">~", "~>", "≳ "),
}
_UNEVEN = (
    "{value}+{upper}-{lower}",
    "{value}+{upper}/-{lower}",
    "{value} +{upper}/-{lower}",
    "{value} +{upper} -{lower}",
    "{value} + {upper} - {lower}",
    "{value} (+{upper}, -{lower})",
    "{value} (+{upper}/-{lower})",
    "{value} [+{upper}, -{lower}]",
    "{value}^{{+{upper}}}_{{-{lower}}}",
    "{value}_{{-{lower}}}^{{+{upper}}}",
    "{value} -{lower} +{upper}",
    "{value} -{lower}/+{upper}",
    "{value}\n+{upper}\n-{lower}",
)
_EVEN = ("{value}±{upper}", "{value} ± {upper}", "{value} +/- {upper}", "{value} +- {upper}")
_EVEN += ("{value}+/-{upper}", "{value} \\pm {upper}", "{value} (±{upper})")
_RAISED = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")
_FULLWIDTH = str.maketrans("0123456789", "０１２３４５６７８９")


@dataclass(frozen=True)
class Cell:
    """A text and what it says; errors and value are in `unit`, "" for none."""

    text: str
    value: Fraction
    upper: Fraction | None
    lower: Fraction | None
    limit: str
    unit: str
    decimal_comma: bool


class _Maker:
    """Draws one cell."""

    def __init__(self, rng: random.Random) -> None:
        self.rng = rng
        self.comma = rng.random() < 0.2

    def chance(self, probability: float) -> bool:
        return self.rng.random() < probability

    def cell(self) -> Cell:
        kind = self.rng.choice(("bare", "bare", "limit", "even", "uneven", "concise"))
        value, digits = self.number()
        upper = lower = None
        exponent, power = self.power()
        if kind in ("bare", "limit"):
            text = digits + power
        elif kind == "concise":
            text, upper = self.concise(value, digits)
            lower = upper
            text += power
        else:
            text, upper, lower = self.with_errors(kind, digits, power)
        scale = Fraction(10) ** exponent
        unit, text, scale = self.with_unit(kind, text, scale)
        sign = -1 if self.chance(0.15) else 1
        # In brackets the sign belongs to the value within.
        minus = self.rng.choice(("-", "−", "–")) if sign < 0 else ""
        text = f"({minus}{text[1:]}" if text.startswith("(") else minus + text
        text, limit = self.with_front(kind, text)
        if self.chance(0.2):
            text += self.rng.choice(("?", " ?", ":", "*", "†", " (?)"))
        if self.chance(0.05):
            text = text.translate(_FULLWIDTH)
        if self.chance(0.2):
            text = f"\u00a0{text} "
        errors = (None if one is None else one * scale for one in (upper, lower))
        return Cell(text, sign * value * scale, *errors, limit, unit, self.comma)

    def number(self) -> tuple[Fraction, str]:
        """Draw a value with up to six digits before and after the mark, perhaps in groups."""
        decimals = self.rng.choice((0, 1, 2, 3, 4, 5))
        whole = self.rng.randrange(10 ** self.rng.choice((1, 1, 1, 2, 3, 4, 6, 7)))
        fraction = self.rng.randrange(10**decimals)
        value = whole + Fraction(fraction, 10**decimals)
        mark, group = (",", ".") if self.comma else (".", ",")
        text = str(whole)
        if whole >= 1000 and self.chance(0.5):
            marks = [" ", "\u00a0", "\u2009", "\u202f", "'"]
            # 2,345 alone could be a decimal fraction.
            marks += [group] if decimals or whole >= 10**6 else []
            text = f"{whole:,}".replace(",", self.rng.choice(marks))
        if decimals:
            text += f"{mark}{fraction:0{decimals}d}"
            if whole == 0 and self.chance(0.1):
                text = text.removeprefix("0")
        return value, text

    def size(self) -> tuple[Fraction, str]:
        """Draw an error."""
        decimals = self.rng.choice((0, 1, 2, 3, 4))
        digits = self.rng.randrange(1, 10 ** self.rng.choice((1, 2)))
        whole, fraction = divmod(digits, 10**decimals)
        mark = "," if self.comma else "."
        tail = f"{mark}{fraction:0{decimals}d}" if decimals else ""
        return Fraction(digits, 10**decimals), f"{whole}{tail}"

    def power(self) -> tuple[int, str]:
        if self.chance(0.75):
            return 0, ""
        exponent = self.rng.randrange(-6, 7)
        raised = str(exponent).translate(_RAISED)
        spellings = (
            f"e{exponent}",
            f"E{exponent:+03d}",
            f"×10{raised}",
            f" × 10{raised}",
            f"x10^{exponent}",
            f" x 10^{exponent}",
            f"×10^{{{exponent}}}",
            f"*10^{exponent}",
            f" · 10{raised}",
        )
        return exponent, self.rng.choice(spellings)

    def concise(self, value: Fraction, digits: str) -> tuple[str, Fraction]:
        decimals = len(digits.partition("," if self.comma else ".")[2])
        if value == int(value) and not decimals:
            error = self.rng.randrange(1, 100)
            return f"{digits}({error})", Fraction(error)
        error = self.rng.randrange(1, 10 ** min(decimals or 1, 2))
        return f"{digits}({error})", Fraction(error, 10**decimals)

    def with_errors(self, kind: str, digits: str, power: str) -> tuple[str, Fraction, Fraction]:
        """Write errors behind a value; a power of ten stands behind each or behind brackets."""
        (upper, upper_text), (lower, lower_text) = self.size(), self.size()
        template = self.rng.choice(_EVEN if kind == "even" else _UNEVEN)
        if kind == "even":
            lower = upper
        each = power if power[:1] in ("e", "E") and self.chance(0.5) else ""
        text = template.format(
            value=digits + each, upper=upper_text + each, lower=lower_text + each
        )
        if power and not each:
            text = f"({text}){power}"
        return text, upper, lower

    def with_unit(self, kind: str, text: str, scale: Fraction) -> tuple[str, str, Fraction]:
        """Return unit, text and scale of a text with a unit or a % behind it, or without."""
        whole = kind in ("bare", "limit", "concise") or text.startswith("(")
        if whole and self.chance(0.07):
            return "", text + self.rng.choice(("%", " %")), scale / 100
        if self.chance(0.6):
            return "", text, scale
        unit = self.rng.choice(tuple(_UNITS))
        spelling = self.rng.choice(_UNITS[unit])
        blank = "" if len(spelling) > 1 and self.chance(0.4) else " "
        if not whole and self.chance(0.3):
            text = f"({text})"
        return unit, text + blank + spelling, scale

    def with_front(self, kind: str, text: str) -> tuple[str, str]:
        """Return text and limit with a limit, a mark of approximation or a name before it."""
        limit = ""
        name = self.rng.choice(NAMES) if self.chance(0.1) else ""
        if kind == "limit":
            limit = self.rng.choice(tuple(_LIMITS))
            text = self.rng.choice(_LIMITS[limit]) + text
            return name + self.rng.choice(("", " ")) + text if name else text, limit
        if self.chance(0.15):
            text = self.rng.choice(("~", "~ ", "≈", "c. ", "ca. ", "≃ ")) + text
        if name:
            text = name + self.rng.choice(("=", " = ")) + text
        return text, limit


def well_formed(rng: random.Random) -> Cell:
    """Draw one well-formed cell."""
    return _Maker(rng).cell()
