"""The public face of the package."""

from __future__ import annotations

import re

import pytest

import epochconv
from epochconv import (
    conversion,
    conversion_with_error,
    epochs,
    errors,
    history,
    published,
    with_error,
)
from tests.epochconv.fresh_interpreter import ROOT


def test_public_names_are_these() -> None:
    expected = {
        "ArgumentError": errors.ArgumentError,
        "Epoch": epochs.Epoch,
        "EpochconvError": errors.EpochconvError,
        "ExpansionHistory": history.ExpansionHistory,
        "LinearError": conversion_with_error.LinearError,
        "OutOfRangeError": errors.OutOfRangeError,
        "ParameterSet": published.ParameterSet,
        "TwoAnswersError": errors.TwoAnswersError,
        "WithError": with_error.WithError,
        "convert": conversion.convert,
        "convert_with_error": conversion_with_error.convert_with_error,
        "convert_with_linear_error": conversion_with_error.convert_with_linear_error,
        "epoch": epochs.epoch,
        "parameter_set": published.parameter_set,
        "parameter_sets": published.parameter_sets,
    }
    assert sorted(epochconv.__all__) == sorted(expected)
    for name, home in expected.items():
        assert getattr(epochconv, name) is home
    assert sorted(dir(epochconv)) == sorted([*expected, "__version__"])


def test_unknown_name_is_an_attribute_error() -> None:
    with pytest.raises(AttributeError, match="'epochconv' has no attribute 'anything'"):
        _ = epochconv.anything
    with pytest.raises(ImportError):
        from epochconv import anything  # noqa: F401


def test_everything_can_be_imported_at_once() -> None:
    names: dict[str, object] = {}
    exec("from epochconv import *", names)
    assert set(epochconv.__all__) <= set(names)


def test_version_is_that_of_the_project_file() -> None:
    found = re.search(r'^version = "(.+)"$', (ROOT / "pyproject.toml").read_text("utf-8"), re.M)
    assert found is not None
    assert epochconv.__version__ == found[1]


def test_types_are_shipped() -> None:
    assert (ROOT / "epochconv" / "py.typed").is_file()
