"""What a column heading says: a measure and its unit, in the forms that people write.

`name [unit]`, `name (unit)`, `name / unit`, and the bare name of a measure without a unit. Names
are those of the measures with their symbols and aliases, and the abbreviations below; units are
those of the closed table. What is not wholly known is not a heading of ours.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

from epochconv.measure import Measure
from epochconv.registry import find_measure
from epochconv.units import Unit, find_unit, unit_named

# The trade's abbreviations that are no symbol or alias of a measure already; case matters.
ABBREVIATIONS = {
    "redshift": "z_spec zspec zsp z_sp z_phot zphot z_ph zph z_cmb zCMB z_CMB",
    "scale factor": "scale_factor",
    "lookback time": "t_lookback t_lb tL t_lookb LBT t_look",
    "age": "t_age t_z t_univ",
    "comoving distance": "DC d_C Dc d_c D_com Dcom D_comoving comoving_dist",
    "CMB temperature": "TCMB T_cmb Tcmb T(CMB) T_gamma",
    "transverse comoving distance": "d_M",
    "luminosity distance": "DL d_L dL Dlum D_lum lum_dist",
    "angular diameter distance": "DA d_A dA Dang D_ang ang_dist",
    "distance modulus": "μ m-M m−M dist_mod distmod DistMod",
    "Hubble rate": "H(z) Hz H_z",
}
ABBREVIATED_WORDS = {
    "comoving dist": "comoving distance",
    "comoving dist.": "comoving distance",
    "lum. dist.": "luminosity distance",
    "luminosity dist.": "luminosity distance",
    "ang. diam. dist.": "angular diameter distance",
    "angular diam. dist.": "angular diameter distance",
    "dist. mod.": "distance modulus",
    "distance mod.": "distance modulus",
    "cmb temp": "CMB temperature",
    "cmb temp.": "CMB temperature",
}

# One letter alone means many things in a log: a semi-major axis, a time of night, a magnitude.
_ALONE_ONLY_WITH_UNIT = {"t", "H", "a"}

_BRACKETS = re.compile(r"(?P<name>.*\S)\s*(?:\[(?P<square>[^\[\]]*)\]|\((?P<round>[^()]*)\))")
_SLASH = re.compile(r"(?P<name>[^/]*[^/\s])\s*/\s*(?P<unit>\S.*)")


@dataclass(frozen=True)
class Heading:
    """A recognised heading: the measure, the unit of the column, and the text as it stands."""

    measure: Measure
    unit: Unit
    text: str

    def same_kind(self, other: Heading) -> bool:
        """Tell whether the other one holds the same measure in the same unit."""
        return (self.measure, self.unit) == (other.measure, other.unit)


def read_heading(text: str) -> Heading | None:
    """Return what a heading says, or None where it is not one of ours."""
    line = " ".join(text.split())
    bare = _measure(line)
    if bare is not None:
        own = unit_named(bare.unit)
        if own.dimension == "number" and line not in _ALONE_ONLY_WITH_UNIT:
            return Heading(bare, own, line)
        return None
    for name, unit_text in _splits(line):
        measure, unit = _measure(name), find_unit(unit_text)
        if measure is None or unit is None:
            continue
        if unit.dimension == unit_named(measure.unit).dimension:
            return Heading(measure, unit, line)
    return None


def lacks_unit(text: str) -> Measure | None:
    """Return the measure that a heading names without the unit that it needs, None otherwise."""
    line = " ".join(text.split())
    measure = _measure(line)
    if measure is None or len(line) < 2 or unit_named(measure.unit).dimension == "number":
        return None
    return measure


def same_heading(first: str, second: str) -> bool:
    """Tell whether two headings are the same but for white space and capitals."""
    return " ".join(first.split()).casefold() == " ".join(second.split()).casefold()


def _splits(line: str) -> list[tuple[str, str]]:
    """Return the ways to part a heading into name and unit."""
    splits = []
    brackets = _BRACKETS.fullmatch(line)
    if brackets is not None:
        inner = brackets["square"] if brackets["square"] is not None else brackets["round"]
        splits.append((brackets["name"], inner))
    slash = _SLASH.fullmatch(line)
    if slash is not None:
        unit = slash["unit"]
        if unit.startswith("(") and unit.endswith(")"):
            splits.append((slash["name"], unit[1:-1]))
        splits.append((slash["name"], unit))
    return splits


def _measure(name: str) -> Measure | None:
    found = find_measure(name)
    if found is not None:
        return found
    known = _ABBREVIATED.get(name) or ABBREVIATED_WORDS.get(name.lower())
    return None if known is None else find_measure(known)


_ABBREVIATED = {
    short: measure for measure, shorts in ABBREVIATIONS.items() for short in shorts.split()
}
