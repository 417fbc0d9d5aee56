"""The wording of refusals that several readers of zip files share."""

from __future__ import annotations

from workbook_tools.errors import Refusal


def damaged(label: str, what: str) -> Refusal:
    """Return the refusal of a file that was cut, mixed up or altered on its way."""
    return Refusal(f"{label} is damaged: {what}; fetch it again or restore an older copy.")


def to_save_again(label: str, what: str) -> Refusal:
    """Return the refusal of a sound file of a kind that spreadsheet programs themselves avoid."""
    return Refusal(f"{label} {what}; open it in a spreadsheet program and save it again as .xlsx.")


def too_large(label: str, what: str) -> Refusal:
    """Return the refusal of a file that could exhaust the memory, on purpose or not."""
    return Refusal(
        f"{label} is larger than can be read safely: {what};"
        " if you trust its sender, move what you need into a smaller workbook."
    )
