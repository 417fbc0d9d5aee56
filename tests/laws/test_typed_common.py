"""The short cut for the commonest cells reads what the grammar reads, and nothing else."""

from __future__ import annotations

import random

from hypothesis import example, given, settings
from hypothesis import strategies as st

from epochconv.typed_common import read_common
from epochconv.typed_text import read_typed
from tests.laws.test_typed_text import ANY_TEXT, OPTIONS
from tests.laws.well_formed_cells import well_formed

# A text that long takes no short cut, and blanks at its end mean nothing.
PADDING = " " * 300
# Pieces of which common cells are made, in an order that often makes one.
COMMON = st.tuples(
    st.sampled_from(["", "<", ">", "≤", "~", "≈", "-", "−", "+"]),
    st.sampled_from(["2.34", "7", ".5", "5.", "1.3e3", "2,5", "0", "1e400", "2.345"]),
    st.sampled_from(
        [
            *("", "(12)", " ± 0.1", "±.02", " +/- 1", "+0.05-0.03", " +0.05/−0.03"),
            *(" (+0.05, -0.03)", "(+12,-10)", " (+12,-10)", "(+0,1-0,2)", " (+0.05-0.03"),
            " + 0.1 / - 0.2",
        ]
    ),
    st.sampled_from(["", " Gyr", "Mpc", " gyr", " K", "a", " (Gyr)"]),
).map("".join)


@given(st.one_of(COMMON, ANY_TEXT), OPTIONS)
@settings(max_examples=1500, deadline=None)
@example("2.34 (+0.05, -0.03)", {"decimal_comma": False, "brackets_are_notes": True})
@example("~7 Gyr", {"decimal_comma": False, "brackets_are_notes": False})
def test_short_cut_and_grammar_agree(text: str, options: dict[str, bool]) -> None:
    short = read_common(text, **options)
    if short is not None and len(text) < 100:
        assert short == read_typed(text + PADDING, **options)


def test_most_cells_take_the_short_cut() -> None:
    """Those of a plain log: a random mixture of every spelling takes it less often."""
    plain = ["2.31", "<0.9", ">6.1", "~7", "2.34 ± 0.02", "2.345(12)", "2.34 +0.05/-0.03"]
    plain += ["2.34 (+0.05, −0.03)", "13.2 Gyr", "850 ± 20 Myr", "−0.5", "≤ 4"]
    assert all(read_common(cell, False, False) is not None for cell in plain)
    mixture = [well_formed(random.Random(seed)).text for seed in range(200)]
    assert 20 < sum(read_common(cell, False, False) is not None for cell in mixture) < 190
