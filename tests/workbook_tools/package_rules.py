"""Does Excel take this workbook? Thirty rules that schemas and other readers do not check.

Each rule, R1 to R30, is a thing for which Excel is known to offer a repair, or to refuse; the
first line of its function says what it asks. Sources: ECMA-376 and the Open Packaging Conventions,
and reports of repairs by users of programs that write workbooks. No Excel was at hand to confirm.
"""

from __future__ import annotations

import zipfile
from collections import Counter
from collections.abc import Callable, Iterator
from pathlib import Path

from tests.workbook_tools.rules import (
    book_rules,
    cell_rules,
    formula_rules,
    order_rules,
    style_rules,
    table_rules,
    zip_rules,
)
from tests.workbook_tools.rules.package import Package, Problem

RULES: tuple[Callable[[Package], Iterator[Problem]], ...] = (
    zip_rules.r1_zip_directory,
    zip_rules.r2_types_and_targets,
    zip_rules.r3_relation_ids,
    zip_rules.r4_well_formed,
    order_rules.r5_child_order,
    cell_rules.r6_rows_ascend,
    cell_rules.r7_cells_ascend,
    cell_rules.r8_extents,
    cell_rules.r9_column_elements,
    cell_rules.r10_style_indexes,
    order_rules.r11_counts,
    style_rules.r12_style_parts,
    style_rules.r13_format_limit,
    cell_rules.r14_string_indexes,
    cell_rules.r15_values_fit_types,
    cell_rules.r16_text_lengths,
    formula_rules.r17_formula_text,
    formula_rules.r18_shared_formulas,
    table_rules.r20_merges,
    table_rules.r21_table_columns,
    table_rules.r22_table_names,
    table_rules.r23_table_filters,
    table_rules.r24_table_totals,
    table_rules.r25_table_places,
    formula_rules.r26_calculation_chain,
    book_rules.r27_defined_names,
    book_rules.r28_sheet_list,
    style_rules.r29_differential_and_metadata,
    cell_rules.r30_no_infinities,
)
EDIT_RULES: tuple[Callable[[Package, Package], Iterator[Problem]], ...] = (
    zip_rules.changed_encodings,
    formula_rules.r19_nothing_new_inside,
)


def problems(path: Path, before: Path | None = None) -> list[str]:
    """All breaches in a workbook, as `rule part: what`.

    Args:
        path: the workbook.
        before: what it was before an edit; then R4 and R19 also look at what the edit did.
    """
    try:
        package = Package(path)
        old = Package(before) if before else None
    except zipfile.BadZipFile as error:
        return [f"R1 : not a zip ({error})"]
    found = [str(problem) for rule in RULES for problem in rule(package)]
    if old is not None:
        found += [str(problem) for rule in EDIT_RULES for problem in rule(old, package)]
    return found


def new_problems(before: Path, after: Path) -> list[str]:
    """The breaches that an edit brought in; those that the file had already are its own."""
    extra = Counter(problems(after, before)) - Counter(problems(before))
    return sorted(extra.elements())
