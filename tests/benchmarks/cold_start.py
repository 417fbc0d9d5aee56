"""Cold start of the one-shot command, as ratios to a bare start of numpy and pint.

Run it from the top of the project:

    python -m tests.benchmarks.cold_start

Each command runs in a new interpreter, in turns; medians are compared. The console script does
no more than import and call `main`, as done here, so it need not be installed.
"""

from __future__ import annotations

import subprocess
import sys

from tests.benchmarks.ratios import machine, medians, verdict

ROUNDS = 15
UNIT = "import numpy, pint; pint.UnitRegistry().Mpc"
COMMAND = "import sys; from epochconv.command import main; sys.exit(main())"
HEAVY = ("pint", "scipy", "openpyxl")


def start(program: str, *arguments: str) -> None:
    """Run a program text in a new interpreter, without its output."""
    subprocess.run(
        [sys.executable, "-c", program, *arguments], check=True, stdout=subprocess.DEVNULL
    )


def loaded(*arguments: str) -> list[str]:
    """Which of the heavy packages the command imports."""
    program = (
        "import sys, atexit; from epochconv.command import main\n"
        f"atexit.register(lambda: print(*[p for p in {HEAVY!r} if p in sys.modules], "
        "file=sys.stderr))\n"
        "sys.exit(main())"
    )
    run = subprocess.run(
        [sys.executable, "-c", program, *arguments], check=True, capture_output=True, text=True
    )
    return run.stderr.split()


def main() -> None:
    """Print all figures."""
    print(machine())
    works = {
        "unit": lambda: start(UNIT),
        "answer": lambda: start(COMMAND, "z = 2.5"),
        "help": lambda: start(COMMAND, "--help"),
        "interpreter": lambda: start("pass"),
    }
    for work in works.values():
        work()  # compiled modules are written here
    seconds = medians(works, ROUNDS)
    unit = seconds["unit"]
    print(f"unit: python -c {UNIT!r}, {unit * 1e3:.0f} ms")
    print(f"the interpreter alone {seconds['interpreter'] / unit:.3f}")
    print(verdict('epochconv "z = 2.5"', seconds["answer"] / unit, 0.8))
    print(verdict("epochconv --help", seconds["help"] / unit, 0.3))
    print(f"heavy packages imported for an answer: {', '.join(loaded('z = 2.5')) or 'none'}")


if __name__ == "__main__":
    main()
