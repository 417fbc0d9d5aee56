"""Read frozen.json: the reference numbers as the exactness tests use them."""

from __future__ import annotations

import json
from dataclasses import dataclass
from functools import cache

import epochconv
from tests.reference.build_frozen import FROZEN, UNIVERSES
from tests.reference.quadrature import Universe
from tests.reference.slopes import slopes

FIELDS = {
    "lookback time": "lookback_time",
    "age": "age",
    "comoving distance": "comoving_distance",
    "transverse comoving distance": "transverse_comoving_distance",
    "luminosity distance": "luminosity_distance",
    "angular diameter distance": "angular_diameter_distance",
    "distance modulus": "distance_modulus",
    "Hubble rate": "hubble_rate",
}
"""Measures that need integrals or densities, and their fields in the file."""


@dataclass(frozen=True)
class Row:
    """One redshift of one universe: the measures and their slopes in ln(1+z), by name."""

    redshift: float
    measures: dict[str, float]
    slopes: dict[str, float]


def history_of(universe: Universe) -> epochconv.ExpansionHistory:
    """The package's history with the same parameters."""
    return epochconv.ExpansionHistory(**vars(universe))


@cache
def rows_of(name: str) -> tuple[Row, ...]:
    """All rows of one universe, rounded to double precision, lowest redshift first."""
    universe = UNIVERSES[name]
    rows = []
    for entry in json.loads(FROZEN.read_text(encoding="utf-8"))[name]["rows"]:
        z = entry["redshift"]
        measures = {measure: float(entry[field]) for measure, field in FIELDS.items()}
        known = {**measures, "hubble slope": float(entry["hubble_slope"])}
        measures |= {
            "redshift": z,
            "scale factor": 1 / (1 + z),
            "CMB temperature": universe.temperature_today * (1 + z),
        }
        rows.append(Row(z, measures, slopes(universe, z, known)))
    return tuple(rows)
