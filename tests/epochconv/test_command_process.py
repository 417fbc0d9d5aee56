"""The command as a process of its own: what it loads, encodings, pipes, and how it is started."""

from __future__ import annotations

import importlib.metadata
import json
import os
import subprocess
import sys

import pytest

from tests.epochconv.fresh_interpreter import ROOT, in_fresh_interpreter, plain_environment

LOADED = "import sys; print(*sorted({name.partition('.')[0] for name in sys.modules}))"


def loaded_after(statements: str) -> set[str]:
    """Top-level names of what is imported once the statements have run."""
    script = f"import contextlib, io\n{statements}\n{LOADED}"
    return set(in_fresh_interpreter("-c", script).stdout.split())


def command(*arguments: str) -> str:
    """Statements that run the command in silence."""
    return (
        "from epochconv.command import main\n"
        "with contextlib.redirect_stdout(io.StringIO()), contextlib.suppress(SystemExit):\n"
        f"    main({list(arguments)!r})"
    )


def test_importing_the_package_imports_nothing_heavy() -> None:
    loaded = loaded_after("import epochconv")
    assert loaded.isdisjoint({"numpy", "pint", "scipy", "openpyxl", "mpmath", "workbook_tools"})


@pytest.mark.parametrize(
    "arguments",
    [
        ("z = 2.5",),
        ("z = 2.5", "--json"),
        ("age = 1 Gyr", "--to", "comoving distance [Gly]"),
        ("D_A = 1500 Mpc", "--side", "nearer", "--parameters", "wmap 2013"),
        ("z = -1",),
    ],
)
def test_an_answer_needs_numpy_but_no_registry_of_units(arguments: tuple[str, ...]) -> None:
    loaded = loaded_after(command(*arguments))
    assert "numpy" in loaded
    assert loaded.isdisjoint({"pint", "scipy", "openpyxl", "workbook_tools"})


@pytest.mark.parametrize("option", ["--help", "--version"])
def test_help_needs_not_even_numpy(option: str) -> None:
    loaded = loaded_after(command(option))
    assert loaded.isdisjoint({"numpy", "pint", "scipy", "openpyxl"})


def test_conversions_in_python_load_no_more_than_their_registry_of_units() -> None:
    """Which may load scipy where that is installed."""
    loaded = loaded_after("import epochconv; epochconv.convert(1, 'z', 'age')")
    registry = loaded_after("import numpy, pint; pint.UnitRegistry().Mpc")
    ours = {name for name in loaded - registry if name not in sys.stdlib_module_names}
    assert ours == {"epochconv"}


def test_module_answers_like_the_command() -> None:
    done = in_fresh_interpreter("-m", "epochconv", "age = 1 Gyr", "--to", "D_C [Gly]")
    assert (done.stdout.strip(), done.stderr) == ("26.97771568 Gly", "")


def test_exit_codes_reach_the_shell() -> None:
    assert in_fresh_interpreter("-m", "epochconv", "z = -1", expected=1).stdout == ""
    assert in_fresh_interpreter("-m", "epochconv", "nonsense", expected=2).stdout == ""
    usage = in_fresh_interpreter("-m", "epochconv", expected=2)
    assert usage.stderr.startswith("usage: epochconv")


def test_installed_command_is_the_function_that_is_tested() -> None:
    """As the project file declares it, which the installer turns into a command."""
    declared = (ROOT / "pyproject.toml").read_text("utf-8")
    assert 'epochconv = "epochconv.command:main"' in declared
    for point in importlib.metadata.entry_points(group="console_scripts", name="epochconv"):
        assert point.value == "epochconv.command:main"


@pytest.mark.parametrize("encoding", ["ascii", "cp1252", "latin-1"])
def test_letters_that_an_encoding_lacks_are_replaced(encoding: str) -> None:
    done = subprocess.run(
        [sys.executable, "-m", "epochconv", "z = 1"],
        capture_output=True,
        cwd=ROOT,
        env=plain_environment(PYTHONIOENCODING=encoding),
        check=False,
        timeout=60,
    )
    assert (done.returncode, done.stderr) == (0, b"")
    assert "under planck 2018: H0 67.36 km/s/Mpc, ?_m 0.3153" in done.stdout.decode(encoding)


def test_utf_8_is_printed_as_it_is() -> None:
    done = in_fresh_interpreter("-m", "epochconv", "µ = 44", "--json")
    assert "Ω_m" in done.stdout
    assert json.loads(done.stdout)["given"]["measure"] == "distance modulus"


def test_bytes_that_spell_nothing_are_a_bad_line_and_no_crash() -> None:
    done = in_fresh_interpreter(
        "-m",
        "epochconv",
        "-",
        "--to",
        "a",
        given=b"z = 1\n\xff\xfe\nz = 3\n",
        expected=1,
        PYTHONIOENCODING="utf-8",
    )
    assert done.stdout.split() == ["0.5", "none", "0.25"]
    assert done.stderr.startswith("epochconv: line 2: ")
    assert "Traceback" not in done.stderr


@pytest.mark.parametrize("lines", [1, 20_000])
def test_reader_that_has_had_enough_is_left_in_peace(lines: int) -> None:
    """As `| head -1` does: short output fails only when it is flushed, long output before."""
    running = subprocess.Popen(
        [sys.executable, "-m", "epochconv", "-", "--to", "a"],
        stdin=subprocess.PIPE,
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        cwd=ROOT,
        env=plain_environment(),
    )
    assert running.stdout is not None
    running.stdout.close()
    running.stdout = None
    _, errors = running.communicate(b"z = 1\n" * lines, timeout=60)
    assert (running.returncode, errors) == (0, b"")


@pytest.mark.skipif(not os.path.exists("/dev/full"), reason="no device that is always full here")
def test_full_disk_is_told_in_one_line() -> None:
    with open("/dev/full", "wb") as full:
        done = subprocess.run(
            [sys.executable, "-m", "epochconv", "z = 1"],
            stdout=full,
            stderr=subprocess.PIPE,
            cwd=ROOT,
            env=plain_environment(),
            check=False,
            timeout=60,
        )
    assert done.returncode == 1
    text = done.stderr.decode()
    assert text.startswith("epochconv: reading or writing failed: ")
    assert text.count("\n") == 1
