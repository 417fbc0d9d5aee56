"""Filling columns of a shared observing log without disturbing anything else in the workbook."""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING, Any

from workbook_tools.errors import Refusal, UsageError

if TYPE_CHECKING:
    from workbook_tools.filling import FillResult, fill, write_columns

__all__ = ["FillResult", "Refusal", "UsageError", "fill", "write_columns"]


def __getattr__(name: str) -> Any:
    # Loaded when first asked for, so that the command's --help answers at once. The module has
    # another name than the function, which importing the module would shadow.
    if name not in ("FillResult", "fill", "write_columns"):
        raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
    value = getattr(importlib.import_module(f"{__name__}.filling"), name)
    globals()[name] = value
    return value
