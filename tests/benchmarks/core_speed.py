"""Speed and memory of the core as ratios measured in one run, with the bars beside them.

Run it from the top of the project:

    python -m tests.benchmarks.core_speed

The unit of the array ratios is one numpy.interp of the same million redshifts (unsorted,
log-uniform from 1e-3 to 1e3) on 4,096 knots uniform in ln(1+z), on one thread. Each figure is
that of the least disturbed of 25 rounds, in which all take turns.
"""

from __future__ import annotations

import time
import tracemalloc
from collections.abc import Callable

import numpy as np
import pint

import epochconv
from tests.benchmarks.ratios import least, machine, verdict

ROWS = 1_000_000
KNOTS = 4096
ROUNDS = 25
FIRST_SIX = (
    "redshift",
    "scale factor",
    "lookback time",
    "age",
    "comoving distance",
    "CMB temperature",
)
INVERSES = ("age", "lookback time", "comoving distance", "CMB temperature")
SET = "planck 2018"


def sample() -> np.ndarray:
    """A million redshifts, the same in every run."""
    return 10 ** np.random.default_rng(1929).uniform(-3, 3, ROWS)


def through_one_epoch(z: np.ndarray) -> list[np.ndarray]:
    """All six first measures of one epoch, every magnitude read."""
    epoch = epochconv.epoch(redshift=z, history=SET)
    return [
        epoch.redshift.magnitude,
        epoch.scale_factor.magnitude,
        epoch.lookback_time.magnitude,
        epoch.age.magnitude,
        epoch.comoving_distance.magnitude,
        epoch.cmb_temperature.magnitude,
    ]


def through_convert(z: np.ndarray) -> list[np.ndarray]:
    """The same through separate calls."""
    return [
        epochconv.convert(z, "redshift", measure, history=SET).magnitude for measure in FIRST_SIX
    ]


def back(values: np.ndarray, measure: str) -> np.ndarray:
    return epochconv.convert(values, measure, "redshift", history=SET).magnitude


def array_lines(z: np.ndarray) -> list[str]:
    """Times of whole arrays in units of one numpy.interp."""
    knots = np.expm1(np.linspace(0, np.log1p(1e3), KNOTS))
    heights = np.sqrt(knots)
    values = {
        measure: epochconv.convert(z, "redshift", measure, history=SET).magnitude
        for measure in INVERSES
    }
    works: dict[str, Callable[[], object]] = {
        "unit": lambda: np.interp(z, knots, heights),
        "epoch": lambda: through_one_epoch(z),
        "convert": lambda: through_convert(z),
    }
    for measure in INVERSES:
        works[measure] = lambda measure=measure: back(values[measure], measure)
    for work in works.values():
        work()  # tables and caches are built here, and not counted
    seconds = least(works, ROUNDS)
    unit = seconds["unit"]
    return [
        f"unit: numpy.interp of {ROWS:,} redshifts, {unit * 1e3:.1f} ms",
        verdict(
            "six measures through one epoch, every magnitude read", seconds["epoch"] / unit, 0.8
        ),
        verdict("six measures through separate convert calls", seconds["convert"] / unit, 1.2),
        *(
            verdict(f"{measure} back to redshift", seconds[measure] / unit, 1.5)
            for measure in INVERSES
        ),
    ]


def new_history_line() -> str:
    """A new history with one massive neutrino, its first answer included: no table is shared."""

    def first_answer(matter: float) -> float:
        begun = time.perf_counter()
        history = epochconv.ExpansionHistory(hubble_constant=67.36, matter=matter)
        epochconv.convert(1.0, "redshift", "age", history=history)
        return time.perf_counter() - begun

    taken = min(first_answer(0.3 + 1e-4 * k) for k in range(ROUNDS))
    return verdict("new history with one massive neutrino", taken * 1e3, 40, " ms")


def scalar_line() -> str:
    """A scalar conversion, units in and out, against one bare pint conversion to a unit object."""
    registry = pint.get_application_registry()
    distance, light_year = registry.Quantity(3000.0, "Mpc"), registry.Unit("gigalight_year")
    year = registry.Unit("megayear")

    def repeated(work: Callable[[], object]) -> Callable[[], None]:
        def run() -> None:
            for _ in range(200):
                work()

        return run

    works: dict[str, Callable[[], object]] = {
        "bare": repeated(lambda: distance.to(light_year)),
        "ours": repeated(
            lambda: epochconv.convert(distance, "comoving distance", "age", unit=year, history=SET)
        ),
    }
    for work in works.values():
        work()
    seconds = least(works, ROUNDS)
    return verdict(
        f"scalar convert with units (bare pint .to: {seconds['bare'] / 200 * 1e6:.1f} us)",
        seconds["ours"] / seconds["bare"],
        12,
    )


def memory_lines(z: np.ndarray) -> list[str]:
    """Peak extra memory beside the results, in arrays of the input's size."""
    values = dict(zip(FIRST_SIX, through_convert(z), strict=True))
    works: dict[str, Callable[[], object]] = {
        "six measures through one epoch": lambda: through_one_epoch(z),
        **{
            f"redshift to {measure}": lambda measure=measure: (
                epochconv.convert(z, "redshift", measure, history=SET).magnitude
            )
            for measure in FIRST_SIX
        },
        **{
            f"{measure} back to redshift": lambda measure=measure: back(values[measure], measure)
            for measure in INVERSES
        },
    }
    return [
        verdict(f"peak extra memory, {name}", extra_arrays(work, z), 3, " arrays")
        for name, work in works.items()
    ]


def extra_arrays(work: Callable[[], object], z: np.ndarray) -> float:
    """Peak traced memory of the work, less what its result keeps, over the input's size."""
    tracemalloc.start()
    result = work()
    kept, peak = tracemalloc.get_traced_memory()
    tracemalloc.stop()
    del result
    return (peak - kept) / z.nbytes


def main() -> None:
    """Print all figures."""
    print(f"{machine()}, numpy {np.__version__}, pint {pint.__version__}")
    z = sample()
    for line in array_lines(z):
        print(line)
    print(new_history_line())
    print(scalar_line())
    for line in memory_lines(z):
        print(line)


if __name__ == "__main__":
    main()
