"""Names that could mean several things, or something that looks like one of our measures.

A doubt says what the name could be; the reason given to people is made of it. Names are those of
columns that stand in observing logs, each with the units beside which it is to be doubted: `D` in
megaparsecs is a distance of unnamed kind, in minutes of arc a diameter and none of ours.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

from workbook_tools.heading_names import frame_called, read_name
from workbook_tools.heading_words import without_brackets

_DISTANCES = (
    "comoving distance",
    "transverse comoving distance",
    "luminosity distance",
    "angular diameter distance",
)
_TIMES = ("age", "lookback time")


@dataclass(frozen=True)
class Doubt:
    """Why a name is not taken for a measure.

    Attributes:
        could_be: what it may mean, names of measures first.
        dimensions: of the units beside which it is doubted; beside others it is none of ours. ""
            stands for no unit at all.
        remark: what is to be said instead of the list.
    """

    could_be: tuple[str, ...] = ()
    dimensions: tuple[str, ...] = ("length",)
    remark: str = ""


DISTANCE = Doubt(_DISTANCES, ("length", ""))
VELOCITY = Doubt(
    ("velocity",),
    ("velocity", ""),
    "a velocity, whose convention (optical c·z, radio or relativistic) must be named and which is"
    " not converted yet; add a column with the redshift",
)
_TEMPERATURE = Doubt(("CMB temperature", "the temperature of another thing"), ("temperature",))
_CONSTANT = "a value of today, which belongs to the parameter set and not to a row"

_ANY_CASE = {
    "distance": DISTANCE,
    "dist": DISTANCE,
    "distances": DISTANCE,
    "proper distance": Doubt((*_DISTANCES, "distance at emission"), ("length", "")),
    "physical distance": Doubt((*_DISTANCES, "distance at emission"), ("length", "")),
    "cosmological distance": DISTANCE,
    "hubble distance": Doubt(
        (), ("length", ""), "c/H or c·z/H0, neither of which is a distance that is converted here"
    ),
    "hubble constant": Doubt((), ("rate", ""), _CONSTANT),
    "time": Doubt(_TIMES, ("time",)),
    "epoch": Doubt(_TIMES, ("time",)),
    "temperature": _TEMPERATURE,
    "temp": _TEMPERATURE,
    "radial velocity": VELOCITY,
    "velocity": VELOCITY,
    "vel": VELOCITY,
    "recession velocity": VELOCITY,
    "heliocentric velocity": VELOCITY,
    "heliocentric radial velocity": VELOCITY,
    "systemic velocity": VELOCITY,
    "dz": Doubt(("the error of z", "a difference of redshifts"), ("number", "")),
    "delta z": Doubt(("the error of z", "a difference of redshifts"), ("number", "")),
}
_TRAVELLED = Doubt(
    ("lookback time",),
    ("length", ""),
    "the lookback time times the speed of light; write 'lookback time [Gyr]', where a Gly is a Gyr",
)
_VOLUME = Doubt((), ("length", ""), "the volume-averaged distance, which is not converted here")
_LENS = Doubt(("luminosity distance", "angular diameter distance to a lens"), ("length", ""))
_AS_WRITTEN = {
    "D": Doubt((*_DISTANCES, "a diameter"), ("length", "")),
    "d": Doubt((*_DISTANCES, "a diameter"), ("length",)),
    "D_l": _LENS,
    "d_l": _LENS,
    "dl": _LENS,
    "D_V": _VOLUME,
    "D_H": Doubt((), ("length",), "the Hubble distance, which is not converted here"),
    "T": Doubt(
        ("CMB temperature", "another temperature", "age", "lookback time", "a galaxy's type"),
        ("temperature", "time", ""),
    ),
    "Z": Doubt(("redshift", "metallicity"), ("number", "")),
    "DM": Doubt(
        ("distance modulus", "dispersion measure", "transverse comoving distance"), ("number", "")
    ),
    "a": Doubt(("scale factor", "semi-major axis"), ("",)),
    "t": Doubt(("age", "another time"), ("",)),
    "H": Doubt(("Hubble rate", "an H magnitude"), ("",)),
    "H_0": Doubt((), ("rate", ""), _CONSTANT),
    "Hz": Doubt(("hertz", "Hubble rate"), ()),
    "H0": Doubt((), ("rate", ""), _CONSTANT),
    "t_0": Doubt((), ("time",), _CONSTANT),
    "t0": Doubt((), ("time",), _CONSTANT),
    "T_0": Doubt((), ("temperature",), _CONSTANT),
    "T0": Doubt((), ("temperature",), _CONSTANT),
    "Δz": Doubt(("the error of z", "a difference of redshifts"), ("number", "")),
    "δz": Doubt(("the error of z", "a difference of redshifts"), ("number", "")),
    "z_source": Doubt(("redshift", "where the redshift is from"), ("number", "")),
    "v": Doubt(VELOCITY.could_be, ("velocity",), VELOCITY.remark),
    "V": Doubt(VELOCITY.could_be, ("velocity",), VELOCITY.remark),
}
_TRAVEL = re.compile(r"(?:light[- ]travel(?:[- ]time)?|look-?back) dist(?:ance|\.)?")
_VELOCITY_SYMBOL = re.compile(
    r"cz|H?RV|[vV]_?(?:r|3k|hel|helio|bary|CMB|cmb|LSR|lsr|LG|lg|GSR|gsr|opt|rad|rel|sys|rec)|"
    r"VRAD|VOPT|ZOPT|VELO"
)
_POSSESSOR = re.compile(
    r" (?:to|of|from) (?:the )?(?:host|galaxy|object|target|source|quasar|burst|us|earth|sun)$",
    re.IGNORECASE,
)
_WORD = re.compile(r"[^\s_()\[\],]+")

_MEASURED_DIRECTLY = re.compile(
    r"\b(?:cepheids?|ceph|trgb|tip of (?:the )?red giant branch|parallax|geometric|tully[- ]fisher|"
    r"tf|sbf|surface brightness fluctuations?|s(?:n|ne|upernovae?) ?ia|snia|masers?|rr lyrae|pnlf|"
    r"gclf|fundamental plane|faber[- ]jackson|main[- ]sequence|photometric|spectroscopic|"
    r"kinematic|eclipsing|jagb|miras?|standard (?:candles?|sirens?)|sirens?|"
    r"redshift[- ]independent|z[- ]independent|distance ladder)\b",
    re.IGNORECASE,
)
_DISTANCE_WORD = re.compile(r"\b(?:dist(?:ance|\.)?s?|modulus|d(?:_?[lamc])?|dm|mu|µ|m-m)\b", re.I)
_FAR_DISTANCE = re.compile(r"\bdist(?:ance)?\b", re.IGNORECASE)
_AGE_WORD = re.compile(r"\bages?\b", re.IGNORECASE)
_HAS_AN_AGE = re.compile(
    r"\b(?:stars?|stellar|ssp|host|galax(?:y|ies)|gal|clusters?|populations?|pop|progenitor|"
    r"(?:mass|light|luminosity)[- ]weighted|mw|lw|burst|remnant|snr?|supernova|isochrone|sed|"
    r"white dwarf|dust)\b",
    re.IGNORECASE,
)
_Z_MAGNITUDE = re.compile(
    r"z'|[mM]_z|z[- _]?(?:band|mag|AB|filter|psf|petro|model|auto)(?:[ _].*)?|"
    r"z ?[\[(](?:mag|AB|AB mag|mag AB|Vega)[\])]"
)
_LOGARITHM = re.compile(r"(?:[Ll]og(?:_?10)?|lg|ln)(?:[ _(]|(?=[^a-z]))(?P<inner>.+)")
_MULTIPLIED = re.compile(
    r"(?:10{2,}|10 ?\^ ?-?[0-9]+|1[eE][0-9]+) ?[×x*·]? ?(?P<behind>.+)|"
    r"(?P<before>.+?) ?[×x*·/] ?(?:10{2,}|10\^-?[0-9]+|1[eE][0-9]+)"
)


def doubt_about(name: str) -> Doubt | None:
    """Return the doubt about a name as it stands without its unit, None where there is none."""
    plain = _POSSESSOR.sub("", without_brackets(name))
    known = _AS_WRITTEN.get(plain) or _ANY_CASE.get(plain.lower().rstrip("."))
    if known is not None:
        return known
    if _TRAVEL.fullmatch(plain.lower()):
        return _TRAVELLED
    if _VELOCITY_SYMBOL.fullmatch(plain):
        return VELOCITY
    words = [word for word in _WORD.findall(plain) if not frame_called(word)]
    unframed = _ANY_CASE.get(" ".join(words).lower())
    framed = unframed is VELOCITY or (words and _VELOCITY_SYMBOL.fullmatch(words[0]) is not None)
    return VELOCITY if framed and len(words) < 3 else None


def is_far_distance(name: str, unit: str) -> bool:
    """Tell whether a name of no known kind speaks of a distance, in a unit of the wide universe."""
    return unit in ("Mpc", "Gpc", "Mly", "Gly") and _FAR_DISTANCE.search(name) is not None


def measured_directly(name: str) -> str:
    """Return the word by which a distance is known to be measured without a redshift, or ""."""
    spaced = name.replace("_", " ")
    found = _MEASURED_DIRECTLY.search(spaced)
    if found is None:
        return ""
    rest = spaced[: found.start()] + " " + spaced[found.end() :]
    return found[0] if _DISTANCE_WORD.search(rest) else ""


def age_of_something(name: str) -> str:
    """Return the word that makes an age one of a star or a host, or ""."""
    spaced = name.replace("_", " ")
    found = _HAS_AN_AGE.search(spaced)
    return found[0] if found is not None and _AGE_WORD.search(spaced) else ""


def is_z_magnitude(line: str) -> bool:
    """Tell whether a heading names the photometric z band."""
    return _Z_MAGNITUDE.fullmatch(line) is not None


def transformed(line: str) -> str:
    """Return what a heading does to one of our measures: "log", "1+z", "multiplied"; else ""."""
    if _one_plus(line):
        return "1+z"
    match = _LOGARITHM.fullmatch(line)
    if match is not None:
        inner = match["inner"].strip("() ")
        inner = re.split(r"[\[/(,]", inner)[0].strip()
        return "log" if _one_plus(inner) or _is_ours(inner) else ""
    match = _MULTIPLIED.fullmatch(line)
    if match is not None:
        inner = (match["behind"] or match["before"]).strip()
        return "multiplied" if any(_is_ours(one) for one in (inner, inner.split("/")[-1])) else ""
    return ""


def _one_plus(text: str) -> bool:
    bare = text.replace(" ", "").strip("()").lower()
    return bare in ("1+z", "z+1", "1+redshift")


def _is_ours(name: str) -> bool:
    return read_name(name) is not None or doubt_about(name) is not None
