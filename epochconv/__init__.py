"""Unit-aware conversion among redshift, time, distance and temperature of cosmic epochs."""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from epochconv.conversion import convert
    from epochconv.conversion_with_error import (
        LinearError,
        convert_with_error,
        convert_with_linear_error,
    )
    from epochconv.epochs import Epoch, epoch
    from epochconv.errors import (
        ArgumentError,
        EpochconvError,
        OutOfRangeError,
        TwoAnswersError,
    )
    from epochconv.history import ExpansionHistory
    from epochconv.published import ParameterSet, parameter_set, parameter_sets
    from epochconv.with_error import WithError

__version__ = "0.1.0"

# Loaded when first asked for: the command line answers without ever importing pint. No module has
# the name of a public function, which importing the module would shadow.
_HOMES = {
    "ArgumentError": "errors",
    "Epoch": "epochs",
    "EpochconvError": "errors",
    "ExpansionHistory": "history",
    "LinearError": "conversion_with_error",
    "OutOfRangeError": "errors",
    "ParameterSet": "published",
    "TwoAnswersError": "errors",
    "WithError": "with_error",
    "convert": "conversion",
    "convert_with_error": "conversion_with_error",
    "convert_with_linear_error": "conversion_with_error",
    "epoch": "epochs",
    "parameter_set": "published",
    "parameter_sets": "published",
}

__all__ = [
    "ArgumentError",
    "Epoch",
    "EpochconvError",
    "ExpansionHistory",
    "LinearError",
    "OutOfRangeError",
    "ParameterSet",
    "TwoAnswersError",
    "WithError",
    "convert",
    "convert_with_error",
    "convert_with_linear_error",
    "epoch",
    "parameter_set",
    "parameter_sets",
]


def __getattr__(name: str) -> Any:
    home = _HOMES.get(name)
    if home is None:
        raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
    value = getattr(importlib.import_module(f"{__name__}.{home}"), name)
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    return [*__all__, "__version__"]
