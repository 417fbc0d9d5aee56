"""The name part of a heading: a measure, in whose frame, by which method.

A name is that of a measure (its name, symbol or alias, or one of the trade's abbreviations below)
with words around it that leave it that measure: a frame, a method, an object, a spectral line, or
the measure's own symbol. Any other word is kept, for the caller to refuse by name.
"""

from __future__ import annotations

import functools
import re
from dataclasses import dataclass, replace

from epochconv.measure import Measure
from epochconv.registry import find_measure, folded, measures
from workbook_tools.heading_words import without_brackets

# Symbols that are none of a measure's own; case matters.
_SYMBOLS = {
    "scale factor": "a(t) a(z) 1/(1+z)",
    "lookback time": "t_lookback T_lookback tlook t_lb tL t_lookb LBT t_look tlb t_LB",
    "age": "t_age t_z t_univ t_U t_cosmic t(z)",
    "comoving distance": "DC d_c d_C dc Dc D_c D_com Dcom D_comoving d_com",
    "CMB temperature": "TCMB T_cmb Tcmb T(CMB) T_gamma",
    "transverse comoving distance": "DM d_M dM",
    "luminosity distance": "DL d_L dL Dlum D_lum d_lum",
    "angular diameter distance": "DA d_A dA Dang D_ang d_ang",
    "distance modulus": "DM m-M (m-M)",
    "Hubble rate": "H(z) Hz H_z",
}
# Words that are no name or alias of a measure; case, hyphens, underscores and stops do not matter.
_WORDS = {
    "redshift": "red shift, redshifts, z red, source redshift, redshift of the source,"
    " redshift of source",
    "scale factor": "cosmic scale factor, scalefactor",
    "lookback time": "look back, light travel time, lookbacktime",
    "age": "universe age, age universe, age of universe, cosmological age, age since big bang,"
    " age since the big bang, time since big bang, time after big bang, time after the big bang",
    "comoving distance": "co moving distance, co moving dist, comoving dist, comoving d,"
    " comov dist, com dist, line of sight comoving dist, radial comoving dist,"
    " los comoving distance",
    "CMB temperature": "cmb temp, temp of the cmb, temperature of cmb",
    "transverse comoving distance": "transverse comoving dist, comoving transverse dist,"
    " transverse co moving distance",
    "luminosity distance": "luminosity d, lum dist, lum distance, luminosity dist, lumdist",
    "angular diameter distance": "ang diam dist, angular diam dist, ang diam distance, ang dist,"
    " angular diameter dist, angular diam distance, angdist",
    "distance modulus": "dist mod, distance mod, dist modulus, distmod",
    "Hubble rate": "hubble expansion rate",
}
_FRAMES = {
    "heliocentric": "hel helio heliocentric",
    "barycentric": "bary barycentric",
    "CMB": "cmb",
    "LSR": "lsr lsrk",
    "Local Group": "lg localgroup",
    "Galactic standard of rest": "gsr",
    "galactocentric": "galactocentric",
    "geocentric": "geo geocentric",
    "topocentric": "topo topocentric",
}
_METHODS = {
    "spectroscopic": "spec sp spectroscopic specz",
    "photometric": "phot photo ph photometric photoz",
}
# Whose redshift, or how it was chosen; and spectral lines it may come from.
_OF_REDSHIFTS = """
    host galaxy gal lens qso quasar agn sn grb supernova burst absorber abs absorption em emission
    systemic sys cluster object target best final adopted cosmological measured obs observed
    lya lyα lyalpha lyb lyβ ha hα halpha hb hβ hbeta nv civ ciii siiv heii mgii cii co oii oiii
    nii 21cm line lines
"""
_FILLERS = "the in of at frame value values val"
_PHRASES = {
    "local group": "LG",
    "local standard of rest": "LSR",
    "galactic standard of rest": "GSR",
}
_PHRASE = re.compile("|".join(_PHRASES), re.IGNORECASE)
_GLUED = re.compile(r"z-?(?P<word>[A-Za-z]{2,6})|(?P<method>[Ss]pec|[Pp]hoto?)-?z")
_AT_Z = re.compile(r"\(z\)|\(?at (?:this |the )?(?:z|redshift|redshift z)\)?", re.IGNORECASE)
# Where Z has such a word with it, it is no metallicity.
_CAPITAL_Z = re.compile(r"Z_?(?:SPEC|PHOT|HEL|HELIO|CMB|BEST)")
_HYPHEN = re.compile(r"^- (?=\S)|(?<=\S) -$")
_TOKEN = re.compile(r"[^\s_()\[\],;]+")
_MOST_TOKENS = 10


@dataclass(frozen=True)
class Name:
    """What the name part of a heading says.

    Attributes:
        measure: the measure that it names.
        frame, method: in plain words; empty where the name says nothing of them.
        unknown: the words beside the measure that are not known.
        called: the part of the name that is the measure's.
    """

    measure: Measure
    frame: str = ""
    method: str = ""
    unknown: tuple[str, ...] = ()
    called: str = ""


def measure_called(name: str, dimension: str = "") -> Measure | None:
    """Return the measure that is called exactly so; `DM` needs the unit's dimension to tell."""
    if name == "DM":
        called = {"magnitude": "distance modulus", "length": "transverse comoving distance"}
        return find_measure(called[dimension]) if dimension in called else None
    if name[:1] in "-_" or name[-1:] in "-_":
        # Names fold these signs, but at an end they are more than a way to write the name.
        return None
    found = find_measure(name)
    if found is None:
        known = _by_symbol().get(name) or _by_words().get(_plain_words(name))
        found = None if known is None else find_measure(known)
    return found


def read_name(name: str, dimension: str = "") -> Name | None:
    """Return what a name part says, None where it names no measure.

    Args:
        name: of a plain line.
        dimension: of the unit beside it, "" where there is none.
    """
    return _read_name(name, dimension, len(measures()))


@functools.lru_cache(maxsize=4096)
def _read_name(name: str, dimension: str, registered: int) -> Name | None:
    """Read a name under the measures that are registered; their number only ever grows."""
    name = name.replace("m - M", "m-M").replace("1 + z", "1+z")
    name = name.lower() if _CAPITAL_Z.fullmatch(name) else name
    name = without_brackets(name) if measure_called(name) is None else name
    whole = measure_called(name, dimension)
    if whole is not None:
        return Name(whole, called=name)
    name = _PHRASE.sub(lambda phrase: _PHRASES[phrase[0].lower()], name).replace(" = ", ", ")
    tokens = list(_TOKEN.finditer(name))
    if len(tokens) > _MOST_TOKENS or not _is_balanced(name):
        return None
    in_names = [_is_in_names(token[0], registered) for token in tokens]
    for length in range(len(tokens), 0, -1):
        for first in range(len(tokens) - length + 1):
            if not all(in_names[first : first + length]):
                continue
            core = _closed(name, tokens[first].start(), tokens[first + length - 1].end())
            measure = measure_called(core, dimension)
            found = None if measure is None else Name(measure, called=core)
            if found is not None:
                start = tokens[first].start()
                return _with_words(found, (name[:start], name[start + len(core) :]), dimension)
    for token in tokens:
        found = _glued(token[0])
        if found is not None:
            return _with_words(found, (name[: token.start()], name[token.end() :]), dimension)
    return None


def _is_balanced(name: str) -> bool:
    """Tell whether each bracket is closed; `a)` is an entry of a list."""
    return all(name.count(opening) == name.count(closing) for opening, closing in ("()", "[]"))


def _closed(name: str, start: int, end: int) -> str:
    """Return a part of a name, with the bracket behind it that closes one within it."""
    core = name[start:end]
    return core + ")" if name[end : end + 1] == ")" and core.count("(") > core.count(")") else core


def _is_in_names(token: str, registered: int) -> bool:
    """Tell whether a word is part of any name; most words of a log are not."""
    words = _words_of_names(registered)
    token = token.rstrip(".").lower()
    return token in words or all(part in words for part in token.split("-"))


@functools.lru_cache(maxsize=8)
def _words_of_names(registered: int) -> frozenset[str]:
    names = [name for m in measures() for name in (m.name, m.symbol, *m.aliases)]
    names += [*_by_symbol(), *_by_words(), "DM"]
    tokens = {token[0].lower() for name in names for token in _TOKEN.finditer(name)}
    return frozenset(tokens | {part for token in tokens for part in token.split("-")})


def _glued(core: str) -> Name | None:
    """Return what a `z` says to which a known word is glued, as in `zspec`."""
    redshift = find_measure("redshift")
    match = _GLUED.fullmatch(core)
    if redshift is None or match is None or _is_filler(match["word"]):
        return None
    return _qualified(Name(redshift, called=core), match["word"] or match["method"])


def _with_words(found: Name, around: tuple[str, str], dimension: str) -> Name:
    """Add what stands before and behind the measure's own name."""
    for part in around:
        words = _HYPHEN.sub("", part.strip(" ,;_"))
        inner = without_brackets(words)
        if (
            not inner
            or _AT_Z.fullmatch(words) is not None
            or any(
                measure_called(one, dimension) == found.measure
                for one in (words, inner, words.strip(" ()[]"))
            )
        ):
            continue
        tokens = [token[0].rstrip(".") for token in _TOKEN.finditer(inner)]
        if {token.lower() for token in tokens} <= _own_words(found.measure):
            continue
        together = _qualified(found, "".join(tokens))
        if together is not None:
            found = together
            continue
        for token in tokens:
            known = _qualified(found, token)
            found = known or replace(found, unknown=(*found.unknown, token))
    return found


def _qualified(found: Name, word: str) -> Name | None:
    """Return a name with one more word, None where the word is not known beside that measure."""
    word = word.lower()
    is_redshift = found.measure.name == "redshift"
    if _is_filler(word) or (is_redshift and word in _of_redshifts()):
        return found
    frame, method = _frames().get(word), _methods().get(word)
    if frame and (is_redshift or found.measure.unit in ("Mpc", "mag")) and not found.frame:
        return replace(found, frame=frame)
    if method and is_redshift and not found.method:
        return replace(found, method=method)
    return None


def frame_called(word: str) -> str:
    """Return the frame that a word names, in plain words, or ""."""
    return _frames().get(word.lower(), "")


@functools.cache
def _own_words(measure: Measure) -> frozenset[str]:
    """Return the words that the names of a measure are made of; they add nothing to it."""
    return frozenset(word for name in (measure.name, *measure.aliases) for word in name.split())


def _is_filler(word: str | None) -> bool:
    return word is not None and word.lower() in _FILLERS.split()


@functools.cache
def _of_redshifts() -> frozenset[str]:
    return frozenset(_OF_REDSHIFTS.split())


def _plain_words(name: str) -> str:
    return folded(name.replace(".", " "))


@functools.cache
def _by_symbol() -> dict[str, str]:
    return {short: measure for measure, shorts in _SYMBOLS.items() for short in shorts.split()}


@functools.cache
def _by_words() -> dict[str, str]:
    return {word.strip(): measure for measure, words in _WORDS.items() for word in words.split(",")}


@functools.cache
def _frames() -> dict[str, str]:
    return {word: frame for frame, words in _FRAMES.items() for word in words.split()}


@functools.cache
def _methods() -> dict[str, str]:
    return {word: method for method, words in _METHODS.items() for word in words.split()}
