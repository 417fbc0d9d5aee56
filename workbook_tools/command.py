"""The command `epochbook`: arguments, call, print, exit code."""

from __future__ import annotations

import argparse
import json
import sys
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from epochconv import __version__
from epochconv.errors import EpochconvError

if TYPE_CHECKING:
    from workbook_tools.request import Choices

_DESCRIPTION = "Fill columns of a shared observing log and change nothing else in the workbook."
_FILL = """\
Fill the columns that a log's headings ask for: empty columns and the blanks of partly filled ones,
and new columns named with --add. A heading is a measure and its unit: Lookback time [Gyr],
Age (Gyr), D_C / Mpc, T_CMB [K], z.
"""
_LOOK = """\
Show what the tool sees in a workbook: sheets, the row of headings, what each column is taken for
and why, how its cells read, what a fill with the same options would do, and what is unclear and
which option settles it. Nothing is changed.

exit codes: as those that a fill would end with
"""
_EXAMPLES = """\
examples:
  epochbook fill log.xlsx
  epochbook fill log.xlsx --add "Age [Gyr]" --add "D_C [Gly]" --output filled.xlsx
  epochbook fill log.xlsx --sheet Spring --source "z" --parameters "round numbers"
  epochbook fill log.xlsx --source C:C --as redshift --add "Lookback time [Gyr]"

exit codes: 0 nothing was left; 3 some cells were left with a reason; 2 wrong usage; 1 refused, the
file is untouched
"""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command and return its exit code."""
    for stream in (sys.stdout, sys.stderr):
        reconfigure = getattr(stream, "reconfigure", None)
        if reconfigure is not None:
            reconfigure(errors="replace")
    options = _parser().parse_args(arguments)
    try:
        return int(options.run(options))
    except BrokenPipeError:
        sys.stderr.close()
        return 0
    except KeyboardInterrupt:
        return 130


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(prog="epochbook", description=_DESCRIPTION)
    parser.add_argument("--version", action="version", version=f"%(prog)s {__version__}")
    commands = parser.add_subparsers(required=True, metavar="COMMAND")
    fill = commands.add_parser(
        "fill",
        help="fill columns of a workbook",
        description=_FILL,
        epilog=_EXAMPLES,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    fill.set_defaults(run=_fill)
    _add_choices(fill)
    add = fill.add_argument
    add(
        "--output",
        type=Path,
        metavar="FILE",
        help="write a new file; by default FILE is replaced in one step and a dated copy of it"
        " kept beside it, the last five of them",
    )
    add("--report", type=Path, metavar="FILE", help="write all that was done as JSON")
    add(
        "--ignore-lock",
        action="store_true",
        help="go on though an owner file says that somebody has the workbook open",
    )
    look = commands.add_parser(
        "look",
        help="show what is seen in a workbook and would be filled; change nothing",
        description=_LOOK,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    look.set_defaults(run=_look)
    _add_choices(look)
    look.add_argument("--json", action="store_true", help="print JSON")
    return parser


def _add_choices(parser: argparse.ArgumentParser) -> None:
    """Add the arguments that a fill and a look share."""
    add = parser.add_argument
    add("file", type=Path, metavar="FILE", help="the workbook (.xlsx, .xlsm, .xltx, .xltm)")
    add(
        "--add",
        action="append",
        default=[],
        metavar="HEADING",
        help="append this column at the right edge of the data (repeatable)",
    )
    add(
        "--only",
        action="append",
        default=[],
        metavar="HEADING",
        help="of the existing columns fill only this one (repeatable)",
    )
    add("--source", metavar="HEADING", help="column to convert from: heading, or letters as C:C")
    add(
        "--as",
        dest="source_measure",
        metavar="MEASURE",
        help="what the source column holds, whatever its heading says: redshift, 'age [Gyr]'",
    )
    add(
        "--side",
        choices=("nearer", "farther"),
        help="which epoch, where one source value stands for two (angular diameter distance)",
    )
    add(
        "--sheet",
        metavar="NAME",
        help="sheet to fill; by default every visible one that has something to fill",
    )
    add("--header-row", type=int, metavar="N", help="row of the headings; by default it is found")
    add(
        "--parameters",
        metavar="SET",
        help="parameter set: planck 2018 (the default), planck 2018 with bao, wmap 2013,"
        " distance ladder 2022, round numbers, evolving dark energy 2025",
    )
    add(
        "--decimal-comma",
        action="store_true",
        help="commas in typed numbers are decimal marks (2,345 is 2.345)",
    )
    add(
        "--brackets-are-notes",
        action="store_true",
        help="a bracket behind a number is a note and passed over: 2.3 (a)",
    )
    add(
        "--missing",
        action="append",
        default=[],
        type=float,
        metavar="NUMBER",
        help="this number stands for no value, as in --missing=-99 (repeatable)",
    )
    add(
        "--with-errors",
        action="store_true",
        help="append columns of upper and lower errors for filled columns that have none",
    )
    add(
        "--parameter-error",
        action="store_true",
        help="count the parameter set's own published errors in error columns",
    )
    add(
        "--peculiar-velocity",
        type=float,
        metavar="KM_PER_S",
        help="count peculiar motions of this size in error columns, as in 300",
    )
    add("--allow-protected", action="store_true", help="fill protected sheets too")


def _choices(options: argparse.Namespace) -> Choices:
    """Return the arguments that a fill and a look share."""
    return {
        "sheet": options.sheet,
        "header_row": options.header_row,
        "add": options.add,
        "only": options.only,
        "source": options.source,
        "source_measure": options.source_measure,
        "parameters": options.parameters,
        "side": options.side,
        "decimal_comma": options.decimal_comma,
        "brackets_are_notes": options.brackets_are_notes,
        "missing": options.missing,
        "with_errors": options.with_errors,
        "parameter_error": options.parameter_error,
        "peculiar_velocity": options.peculiar_velocity,
        "allow_protected": options.allow_protected,
    }


def _fill(options: argparse.Namespace) -> int:
    # Imported here, so that --help answers at once.
    from workbook_tools.errors import Refusal
    from workbook_tools.filling import fill
    from workbook_tools.report import json_report, text_report

    if options.report is not None:
        fault = _fault_of_report(options.report, options.file)
        if fault is not None:
            return _complain(fault, 2)
    try:
        result = fill(
            options.file,
            output=options.output,
            ignore_lock=options.ignore_lock,
            **_choices(options),
        )
    except Refusal as error:
        return _complain(error, 1)
    except EpochconvError as error:
        return _complain(error, 2)
    print(text_report(result))
    if options.report is not None:
        text = json.dumps(json_report(result), ensure_ascii=False, allow_nan=False, indent=1)
        try:
            # a file name that is no text is written as JSON escapes it
            options.report.write_text(text + "\n", encoding="utf-8", errors="backslashreplace")
        except OSError as error:
            reason = error.strerror or "unknown"
            return _complain(f"the report {options.report} was not written ({reason})", 1)
    return 3 if result.left else 0


def _look(options: argparse.Namespace) -> int:
    # Imported here, so that --help answers at once.
    from workbook_tools.errors import Refusal
    from workbook_tools.look_report import look_json, look_text
    from workbook_tools.looking import look

    try:
        seen = look(options.file, **_choices(options))
    except Refusal as error:
        return _complain(error, 1)
    except EpochconvError as error:
        return _complain(error, 2)
    if options.json:
        print(json.dumps(look_json(seen), ensure_ascii=False, allow_nan=False, indent=1))
    else:
        print(look_text(seen))
    if seen.stop is not None:
        return 1 if isinstance(seen.stop, Refusal) else 2
    return 3 if seen.left else 0


def _fault_of_report(report: Path, workbook: Path) -> str | None:
    """Return why a report cannot go there, before anything is filled; None where it can."""
    if report.suffix.lower() != ".json":
        return f"--report {report}: the report is JSON, so give it a name that ends in .json"
    try:
        if not report.parent.is_dir():
            return f"there is no folder {report.parent} for --report; make it or choose another"
        if report.exists() and workbook.exists() and report.samefile(workbook):
            return f"--report names the workbook itself ({report}); choose another name"
    except OSError as error:
        return f"--report {report} cannot be reached ({error.strerror}); choose another name"
    return None


def _complain(error: Exception | str, code: int) -> int:
    print(f"epochbook: {error}", file=sys.stderr)
    return code
