"""Filling columns of a shared observing log without disturbing anything else in the workbook."""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING, Any

from workbook_tools.errors import Refusal, UsageError

if TYPE_CHECKING:
    from workbook_tools.filling import FillResult, fill, write_columns
    from workbook_tools.looking import Look, look
    from workbook_tools.request import Choices

__all__ = [
    "Choices",
    "FillResult",
    "Look",
    "Refusal",
    "UsageError",
    "fill",
    "look",
    "write_columns",
]


# Loaded when first asked for, so that the command's --help answers at once. No module has the name
# of a function here, which importing the module would shadow.
_HOMES = {
    "Choices": "request",
    "FillResult": "filling",
    "Look": "looking",
    "fill": "filling",
    "look": "looking",
    "write_columns": "filling",
}


def __getattr__(name: str) -> Any:
    home = _HOMES.get(name)
    if home is None:
        raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
    value = getattr(importlib.import_module(f"{__name__}.{home}"), name)
    globals()[name] = value
    return value
