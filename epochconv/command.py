"""The command `epochconv`: arguments, call, print. It imports numbers only once it needs them."""

from __future__ import annotations

import argparse
import contextlib
import os
import sys
from collections.abc import Iterable, Sequence
from typing import TYPE_CHECKING, Any

from epochconv import __version__
from epochconv.errors import EpochconvError

if TYPE_CHECKING:
    from epochconv.history import ExpansionHistory

_DESCRIPTION = "Say when and where an epoch of the universe is: give one measure, get the rest."
_EXAMPLES = """\
examples:
  epochconv "z = 2.5"
  epochconv "age = 1 Gyr" --to "comoving distance [Gly]"
  epochconv "D_A = 1500 Mpc" --side farther --parameters "round numbers"
  printf 'z = 1\\nz = 2\\n' | epochconv - --to "lookback time"

measures (name, symbol, unit):
  redshift z; scale factor a; lookback time t_L [Gyr]; age t [Gyr]; comoving distance D_C [Mpc];
  CMB temperature T_CMB [K]; transverse comoving distance D_M [Mpc]; luminosity distance D_L [Mpc];
  angular diameter distance D_A [Mpc]; distance modulus µ [mag]; Hubble rate H [km/s/Mpc]

exit codes: 0 all answered; 1 a value has no answer; 2 wrong usage
"""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command and return its exit code."""
    _speak_plainly_where_needed()
    parser = _parser()
    options = parser.parse_args(arguments)
    try:
        code = _run(options)
        if sys.stdout is not None:
            sys.stdout.flush()
    except KeyboardInterrupt:
        return 130
    except OSError as error:
        _stop_writing()
        if isinstance(error, BrokenPipeError):  # whoever reads has had enough
            return 0
        return _complain(f"reading or writing failed: {error.strerror or error}", 1)
    return code


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="epochconv",
        description=_DESCRIPTION,
        epilog=_EXAMPLES,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    parser.add_argument(
        "given",
        metavar="GIVEN",
        help="a measure, = and a value with its unit; - reads one per line from standard input",
    )
    parser.add_argument(
        "--to", metavar="MEASURE", help="print this measure alone, such as 'age' or 'D_C [Gly]'"
    )
    parser.add_argument(
        "--parameters",
        metavar="SET",
        help="name of a parameter set: planck 2018 (the default), planck 2018 with bao, wmap 2013, "
        "distance ladder 2022, round numbers, evolving dark energy 2025",
    )
    parser.add_argument(
        "--side", choices=("nearer", "farther"), help="which epoch, where one value stands for two"
    )
    parser.add_argument("--json", action="store_true", help="print JSON, one object per line")
    parser.add_argument("--version", action="version", version=f"%(prog)s {__version__}")
    return parser


def _run(options: argparse.Namespace) -> int:
    # Imported here and not above, so that --help answers without loading numpy.
    from epochconv.prompt_text import read_wanted
    from epochconv.published import history_of

    try:
        history = history_of(options.parameters)
        wanted = None if options.to is None else read_wanted(options.to)
    except EpochconvError as error:
        return _complain(str(error), 2)
    many = options.given == "-"
    texts: Iterable[str] = (sys.stdin or ()) if many else [options.given]
    worst = 0
    for number, text in enumerate(texts, start=1):
        if many and not text.strip():
            continue
        try:
            print(_answer(text.strip(), wanted, history, options))
        except EpochconvError as error:
            where = f"line {number}: " if many else ""
            worst = max(worst, _complain(where + str(error), 1 if many else _code_of(error)))
            if many:
                # One answer for each question: who pastes them side by side must not slip a line.
                print(_no_answer(number, error, options))
    return worst


def _answer(text: str, wanted: Any, history: ExpansionHistory, options: argparse.Namespace) -> str:
    """Return what to print for one given text."""
    import json

    import numpy as np

    from epochconv import epoch_table, through_x
    from epochconv.printing import number_text, with_unit
    from epochconv.prompt_text import read_given
    from epochconv.published import label_of
    from epochconv.units import factor, unit_named

    source, value = read_given(text)
    moment = through_x.moment_at(np.array([value]), source, history, side=options.side)
    answer: dict[str, Any] = {
        "format": "epochconv answer 1",
        "given": {"measure": source.name, "value": value, "unit": source.unit},
        "parameters": {"name": label_of(history), "assumptions": history.assumptions},
    }
    if wanted is None:
        if options.json:
            answer["epoch"] = epoch_table.json_values(moment, history)
            return json.dumps(answer, ensure_ascii=False, allow_nan=False)
        return f"{text}\n{epoch_table.plain_table(moment, history)}"
    target, unit = wanted
    same = source is target
    result = value if same else float(through_x.values_at(moment, target, history)[0])
    result *= factor(unit_named(target.unit), unit)
    if options.json:
        answer["answer"] = {"measure": target.name, "value": result, "unit": unit.symbol}
        return json.dumps(answer, ensure_ascii=False, allow_nan=False)
    return with_unit(number_text(result, 10), unit.symbol)


def _no_answer(line: int, error: EpochconvError, options: argparse.Namespace) -> str:
    """Return what stands in the place of an answer among others."""
    import json

    if not options.json:
        return "none"
    answer = {"format": "epochconv answer 1", "line": line, "error": str(error)}
    return json.dumps(answer, ensure_ascii=False, allow_nan=False)


def _code_of(error: EpochconvError) -> int:
    """Return 1 where a well-formed value has no answer, 2 where the words are wrong."""
    from epochconv.errors import OutOfRangeError, TwoAnswersError

    return 1 if isinstance(error, OutOfRangeError | TwoAnswersError) else 2


def _complain(message: str, code: int) -> int:
    print(f"epochconv: {message.replace('side=', '--side ')}", file=sys.stderr)
    return code


def _stop_writing() -> None:
    """Point standard output nowhere, so that the interpreter's last flush cannot fail again."""
    if sys.stdout is not None:
        with contextlib.suppress(OSError, ValueError), open(os.devnull, "w") as nowhere:
            os.dup2(nowhere.fileno(), sys.stdout.fileno())


def _speak_plainly_where_needed() -> None:
    """Replace letters such as Ω where an encoding has none, and bytes that spell none."""
    for stream in (sys.stdin, sys.stdout, sys.stderr):
        reconfigure = getattr(stream, "reconfigure", None)
        if reconfigure is not None:
            reconfigure(errors="replace")
