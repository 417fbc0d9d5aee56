"""Write frozen.json: the measures of ten histories at 26 redshifts each, to 30 digits.

Run it from the top of the project, which takes a minute or two:

    python -m tests.reference.build_frozen

The redshifts are drawn with a fixed seed, so a second run writes the same bytes.
"""

from __future__ import annotations

import json
import random
from dataclasses import asdict
from pathlib import Path

from mpmath import mp

from tests.reference.quadrature import DIGITS, WORKING_DIGITS, Answers, Quadrature, Universe

FROZEN = Path(__file__).with_name("frozen.json")
SEED = 20260214
FIXED_REDSHIFTS = (1e-8, 1e-3, 0.5, 1.0, 1100.0, 1e9)
DRAWN_REDSHIFTS = 20
LOWEST_REDSHIFT, HIGHEST_REDSHIFT = 1e-8, 1e9

UNIVERSES = {
    "flat, one massive neutrino": Universe(67.36, 0.3153),
    "flat, no radiation": Universe(70.0, 0.3, radiation=False),
    "flat, massless neutrinos": Universe(
        69.32, 0.2865, temperature_today=2.725, neutrino_masses=(0.0, 0.0, 0.0)
    ),
    "open, massless neutrinos": Universe(
        72.0, 0.25, curvature=0.1, neutrino_masses=(0.0, 0.0, 0.0)
    ),
    "open, no dark energy, no radiation": Universe(70.0, 0.3, curvature=0.7, radiation=False),
    "closed, two massive neutrinos": Universe(
        68.0, 0.32, curvature=-0.05, neutrino_masses=(0.05, 0.0005, 0.0)
    ),
    "evolving dark energy, one massive neutrino": Universe(
        67.51, 0.3114, dark_energy=(-0.838, -0.62)
    ),
    "evolving dark energy, open, no radiation": Universe(
        70.0, 0.28, curvature=0.03, dark_energy=(-1.25, 0.5), radiation=False
    ),
    "constant w, closed, three heavy neutrinos, hotter": Universe(
        65.0,
        0.35,
        curvature=-0.02,
        dark_energy=(-0.8, 0.0),
        temperature_today=3.1,
        neutrino_masses=(0.3, 0.301, 0.305),
        neutrino_number=3.5,
    ),
    "all matter, with radiation": Universe(70.0, 1.0, neutrino_masses=(0.0, 0.0, 0.0)),
}


def redshifts_of(name: str) -> list[float]:
    """The redshifts frozen for this universe: some fixed, the others drawn by its name."""
    drawn = random.Random(f"{SEED} {name}")
    low, high = mp.log10(LOWEST_REDSHIFT), mp.log10(HIGHEST_REDSHIFT)
    exponents = [drawn.uniform(float(low), float(high)) for _ in range(DRAWN_REDSHIFTS)]
    # Rounded, so that the file shows no digits that the platform's power function chose.
    return sorted({*FIXED_REDSHIFTS, *(float(f"{10.0**e:.9g}") for e in exponents)})


def as_text(answers: Answers) -> dict[str, str]:
    """The measures as decimal strings of 30 significant digits; the slope, needed less, of 10."""
    return {
        name: mp.nstr(value, 10 if name == "hubble_slope" else DIGITS, min_fixed=0, max_fixed=0)
        for name, value in vars(answers).items()
    }


def frozen_histories() -> dict[str, dict[str, object]]:
    """Everything that the file holds, by the name of the universe."""
    histories: dict[str, dict[str, object]] = {}
    with mp.workdps(WORKING_DIGITS):
        for name, universe in UNIVERSES.items():
            answers = Quadrature(universe).answers(redshifts_of(name))
            histories[name] = {
                "parameters": asdict(universe),
                "rows": [{"redshift": z, **as_text(a)} for z, a in answers.items()],
            }
    return histories


def main() -> None:
    """Write the file beside this script."""
    text = json.dumps(frozen_histories(), indent=1)
    FROZEN.write_text(text + "\n", encoding="utf-8", newline="\n")


if __name__ == "__main__":
    main()
