"""Run Python anew, in the clone, with nothing inherited that would change what is printed."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]


def plain_environment(**changes: str) -> dict[str, str]:
    """This process's environment without its own wishes for Python, plus `changes`."""
    kept = {
        name: value
        for name, value in os.environ.items()
        if not name.startswith("PYTHON") and name not in ("LC_ALL", "LANG", "LC_CTYPE")
    }
    return {**kept, "PYTHONPATH": str(ROOT), "PYTHONUTF8": "1", **changes}


def in_fresh_interpreter(
    *arguments: str, given: str | bytes = b"", expected: int = 0, **changes: str
) -> subprocess.CompletedProcess[str]:
    """Run `python ARGUMENTS`; fail unless the exit code is the expected one.

    Args:
        arguments: of the interpreter, such as "-m", "epochconv", "z = 1".
        given: standard input.
        expected: exit code.
        changes: environment variables.
    """
    done = subprocess.run(
        [sys.executable, *arguments],
        input=given.encode() if isinstance(given, str) else given,
        capture_output=True,
        cwd=ROOT,
        env=plain_environment(**changes),
        check=False,
        timeout=60,
    )
    output, errors = done.stdout.decode("utf-8"), done.stderr.decode("utf-8")
    assert done.returncode == expected, errors or output
    return subprocess.CompletedProcess(done.args, done.returncode, output, errors)
