"""Errors of the workbook tools; the root is `epochconv.errors.EpochconvError`."""

from __future__ import annotations

from epochconv.errors import EpochconvError


class Refusal(EpochconvError):
    """The workbook is refused and the file untouched (exit code 1).

    The text is one sentence that says what was wrong, where, and what to do.
    """


class UsageError(EpochconvError):
    """The call is wrong or leaves a choice open, such as two candidates (exit code 2)."""
