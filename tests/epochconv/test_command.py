"""The command in this process: what it prints, where, and with which exit code."""

from __future__ import annotations

import errno
import io
import json
import re
from typing import Any

import pytest

import epochconv
from epochconv import parameter_sets
from epochconv.command import main
from epochconv.registry import measures

Captured = pytest.CaptureFixture[str]


def output_of(capsys: Captured, *arguments: str, expected: int = 0) -> str:
    """What is printed; errors must be empty if and only if all is well."""
    assert main(arguments) == expected
    captured = capsys.readouterr()
    assert bool(captured.err) == bool(expected), captured.err
    return captured.out


def complaint_of(capsys: Captured, *arguments: str, expected: int) -> str:
    """The one line of complaint; nothing else is printed."""
    assert main(arguments) == expected
    captured = capsys.readouterr()
    assert captured.out == ""
    assert captured.err.startswith("epochconv: ")
    assert captured.err.count("\n") == 1
    return captured.err.removeprefix("epochconv: ").rstrip()


def given_lines(monkeypatch: pytest.MonkeyPatch, text: str) -> None:
    monkeypatch.setattr("sys.stdin", io.StringIO(text))


def test_whole_epoch_is_printed_with_its_parameter_set(capsys: Captured) -> None:
    lines = output_of(capsys, "z = 2.5").splitlines()
    assert lines[0] == "z = 2.5"
    assert [line[:12].strip() for line in lines[1:-1] if line[:12].strip()] == [
        "when it was",
        "where it is",
        "how it looks",
    ]
    for measure in measures():
        assert any(f"  {measure.name} " in line for line in lines)
    age = epochconv.epoch(redshift=2.5).age.magnitude
    assert re.search(rf"age +{age:.6g}  Gyr", "\n".join(lines))
    assert lines[-1].startswith("under planck 2018: H0 67.36 km/s/Mpc, Ω_m 0.3153, flat, ")


@pytest.mark.parametrize("one", parameter_sets(), ids=lambda one: one.name)
def test_parameter_set_is_chosen_by_name(one: Any, capsys: Captured) -> None:
    name = one.name.upper().replace(" ", "-")
    printed = output_of(capsys, "z = 2.5", "--parameters", name)
    assert f"\nunder {one.name}: {one.history.assumptions}\n" in printed


@pytest.mark.parametrize(
    ("given", "to", "printed"),
    [
        # Planck 2018: from the same call in Python below; here the rounding and the unit.
        ("age = 1 Gyr", "comoving distance [Gly]", "26.97771568 Gly"),
        ("z = 1", "redshift", "1"),
        ("z = 1", "a", "0.5"),
        ("z = 1", "CMB temperature", "5.451 K"),
        ("z = 1", "T_CMB [mK]", "5451 mK"),
        ("a = 0.125", "z", "7"),
        ("T_CMB = 27.255 K", "z", "9"),
        ("age = 1 Gyr", "age [Myr]", "1000 Myr"),
        ("age = 1000 million years", "age", "1 Gyr"),
        ("mu = 44", "mu", "44 mag"),
        ("z = 1e9", "a", "9.99999999e-10"),
        ("z = 0", "lookback time", "0 Gyr"),
    ],
)
def test_one_measure_is_one_number_and_its_unit(
    given: str, to: str, printed: str, capsys: Captured
) -> None:
    assert output_of(capsys, given, "--to", to) == printed + "\n"


def test_printed_number_is_that_of_the_same_call_in_python(capsys: Captured) -> None:
    for name in (measure.name for measure in measures()):
        number = float(output_of(capsys, "z = 2.5", "--to", name).split()[0])
        expected = epochconv.convert(2.5, "redshift", name).magnitude
        assert number == pytest.approx(expected, rel=6e-10)


def test_json_of_one_measure(capsys: Captured) -> None:
    answer = json.loads(output_of(capsys, "age = 1 Gyr", "--to", "D_C [Gly]", "--json"))
    assert answer["format"] == "epochconv answer 1"
    assert answer["given"] == {"measure": "age", "value": 1.0, "unit": "Gyr"}
    assert answer["parameters"]["name"] == "planck 2018"
    assert answer["parameters"]["assumptions"].startswith("H0 67.36 km/s/Mpc, Ω_m 0.3153")
    expected = epochconv.convert(1, "age", "comoving distance", unit="Gly").magnitude
    assert answer["answer"]["value"] == pytest.approx(expected, rel=1e-14)
    assert (answer["answer"]["measure"], answer["answer"]["unit"]) == ("comoving distance", "Gly")
    assert "epoch" not in answer


def test_json_of_the_whole_epoch(capsys: Captured) -> None:
    answer = json.loads(output_of(capsys, "z = 0", "--json", "--parameters", "round numbers"))
    assert set(answer["epoch"]) == {measure.name for measure in measures()}
    assert answer["epoch"]["distance modulus"] == {"value": None, "unit": "mag"}
    assert answer["epoch"]["Hubble rate"] == {"value": 70.0, "unit": "km/s/Mpc"}
    assert answer["parameters"]["name"] == "round numbers"
    assert "answer" not in answer


def test_side_is_chosen_where_a_value_stands_for_two(capsys: Captured) -> None:
    found = [
        float(output_of(capsys, "D_A = 1500 Mpc", "--to", "z", "--side", side))
        for side in ("nearer", "farther")
    ]
    assert found == pytest.approx([0.676146, 3.78423], rel=1e-6)
    text = complaint_of(capsys, "D_A = 1500 Mpc", expected=1)
    assert "is that of redshift 0.676146 and 3.78423 under planck 2018" in text
    assert text.endswith("choose --side 'nearer' or --side 'farther'")


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["z = -0.1"], "redshift -0.1 is a neighbour's peculiar motion towards us and no epoch"),
        (["lookback time = 20 Gyr"], "lookback time 20 Gyr is older than the universe; under"),
        (["T_CMB = 2 K"], "CMB temperature 2 K is colder than today's CMB"),
        (["D_C = 50 Gly", "--json"], "is beyond the particle horizon"),
        (["z = 0", "--to", "mu"], "distance modulus does not exist at redshift 0"),
    ],
)
def test_value_without_an_answer_is_told_and_ends_with_1(
    arguments: list[str], words: str, capsys: Captured
) -> None:
    assert words in complaint_of(capsys, *arguments, expected=1)


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["2.5"], "'2.5' is not understood; write a measure, = and a value with its unit"),
        (["z"], "'z' is not understood"),
        ([""], "'' is not understood"),
        (["age = 1"], "'age = 1' has no unit; age needs one, such as 'age = 1 Gyr'"),
        (["age = 1 gyr"], "'gyr' in '1 gyr' is not a unit that is known here (case matters)"),
        (["age = 1 Mpc"], "Mpc does not fit age, which is a time; use yr, kyr, Myr, Gyr, d, s"),
        (["ag = 1 Gyr"], "'ag' is no measure known here. Did you mean 'age'?"),
        (["z = 1", "--to", "velocity"], "'velocity' is no measure known here"),
        (["z = 1", "--to", "age [Mpc]"], "Mpc does not fit age"),
        (["z = 1", "--to", ""], "'' is not understood; write a measure and, in brackets"),
        (["z = 1", "--parameters", "planck"], "'planck' is no parameter set known here"),
    ],
)
def test_wrong_words_are_told_and_end_with_2(
    arguments: list[str], words: str, capsys: Captured
) -> None:
    assert words in complaint_of(capsys, *arguments, expected=2)


@pytest.mark.parametrize(
    "arguments",
    [[], ["z = 1", "z = 2"], ["z = 1", "--side", "left"], ["z = 1", "--nothing"], ["z=1", "--to"]],
)
def test_wrong_options_end_with_2_and_the_usage(arguments: list[str], capsys: Captured) -> None:
    with pytest.raises(SystemExit) as caught:
        main(arguments)
    assert caught.value.code == 2
    assert capsys.readouterr().err.startswith("usage: epochconv")


def test_lines_of_standard_input_are_answered_one_by_one(
    capsys: Captured, monkeypatch: pytest.MonkeyPatch
) -> None:
    given_lines(monkeypatch, "z = 1\n\n  age = 1 Gyr  \r\na = 0.5")
    assert output_of(capsys, "-", "--to", "z").splitlines() == ["1", "5.655625226", "1"]


def test_bad_line_is_named_by_its_number_and_the_others_are_answered(
    capsys: Captured, monkeypatch: pytest.MonkeyPatch
) -> None:
    given_lines(monkeypatch, "z = 1\n\nz = -1\nnonsense\nz = 3\n")
    assert main(["-", "--to", "a"]) == 1
    captured = capsys.readouterr()
    assert captured.out.splitlines() == ["0.5", "none", "none", "0.25"]
    first, second = captured.err.splitlines()
    assert first.startswith("epochconv: line 3: redshift -1 is a neighbour's")
    assert second.startswith("epochconv: line 4: 'nonsense' is not understood")


def test_json_of_many_is_one_object_per_line(
    capsys: Captured, monkeypatch: pytest.MonkeyPatch
) -> None:
    given_lines(monkeypatch, "z = 1\nz = 2\n")
    answers = [json.loads(line) for line in output_of(capsys, "-", "--json").splitlines()]
    assert [answer["given"]["value"] for answer in answers] == [1.0, 2.0]


def test_no_lines_are_no_answers(capsys: Captured, monkeypatch: pytest.MonkeyPatch) -> None:
    given_lines(monkeypatch, "")
    assert output_of(capsys, "-") == ""
    monkeypatch.setattr("sys.stdin", None)
    assert output_of(capsys, "-") == ""


def test_interrupt_ends_with_130(capsys: Captured, monkeypatch: pytest.MonkeyPatch) -> None:
    class Interrupted(io.StringIO):
        def __next__(self) -> str:
            raise KeyboardInterrupt

    monkeypatch.setattr("sys.stdin", Interrupted())
    assert main(["-"]) == 130


@pytest.mark.parametrize(
    ("failure", "code", "words"),
    [
        (BrokenPipeError(errno.EPIPE, "Broken pipe"), 0, ""),
        (OSError(errno.ENOSPC, "No space left on device"), 1, "No space left on device"),
    ],
)
def test_output_that_fails_is_no_crash(
    failure: OSError, code: int, words: str, capsys: Captured, monkeypatch: pytest.MonkeyPatch
) -> None:
    class Failing(io.StringIO):
        def write(self, text: str) -> int:
            raise failure

    monkeypatch.setattr("sys.stdout", Failing())
    assert main(["z = 1"]) == code
    complaint = capsys.readouterr().err
    assert complaint == (f"epochconv: reading or writing failed: {words}\n" if words else "")


def test_version_and_help(capsys: Captured) -> None:
    for option in ("--version", "--help"):
        with pytest.raises(SystemExit) as caught:
            main([option])
        assert caught.value.code == 0
    printed = capsys.readouterr().out
    assert printed.startswith(f"epochconv {epochconv.__version__}\n")
    folded = " ".join(printed.split())
    for one in parameter_sets():
        assert one.name in folded
    for measure in measures():
        unit = f" [{measure.unit}]" if measure.unit else ""
        assert f"{measure.name} {measure.symbol}{unit}" in folded
    for option in ("--to", "--parameters", "--side", "--json", "exit codes"):
        assert option in printed


def test_examples_in_the_help_work(capsys: Captured) -> None:
    """The lines in quotes after the name of the command, but the one with a pipe."""
    with pytest.raises(SystemExit):
        main(["--help"])
    examples = re.findall(r"^  epochconv (.*)$", capsys.readouterr().out, re.MULTILINE)
    assert len(examples) == 3
    for line in examples:
        arguments = [quoted or bare for quoted, bare in re.findall(r'"([^"]*)"|(\S+)', line)]
        assert output_of(capsys, *arguments)


def test_a_comma_is_named_as_such(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["z = 6,3"]) == 2
    assert "'6,3' has a comma; write the decimal mark as a point" in capsys.readouterr().err
