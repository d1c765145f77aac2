"""Tables of a comparison for the terminal, as rich renderables."""

from __future__ import annotations

from collections.abc import Sequence

from rich.table import Table

from quillshaft.present.comparison_rows import (
    change_rows,
    duty_heads,
    duty_rows,
    mode_heads,
    mode_rows,
    pair_heads,
    pair_rows,
)
from quillshaft.present.tables import make_table
from quillshaft.study.compare import CaseComparison, Comparison


def changes_table(case: CaseComparison) -> Table:
    """Inputs that differ, and nothing else."""
    return make_table(f"Inputs that differ in {case.name}", "Where|before|after", change_rows(case))


def matched_table(comparison: Comparison) -> Table:
    """Natural frequencies side by side, modes matched by shape."""
    return make_table("Modes, matched by shape", _columns(mode_heads(comparison), ()), mode_rows(comparison))


def margins_table(comparison: Comparison) -> Table:
    """Every pair that is not clear before or after, or is judged otherwise."""
    heads = pair_heads(comparison)
    texts = (1, *(index for index, head in enumerate(heads) if head == "verdicts"))
    title = "Pairs that are not clear before or after, or are judged otherwise (verdicts: nominal / over tolerances)"
    return make_table(title, _columns(heads, texts), pair_rows(comparison))


def duties_table(comparison: Comparison) -> Table:
    """Mean torque, wind-up and share of the rated torque of couplings, and of what changed."""
    return make_table("Duty under the rated power", _columns(duty_heads(comparison), (0,)), duty_rows(comparison))


def _columns(heads: Sequence[str], texts: Sequence[int]) -> str:
    return "|".join(head if index in texts else f"{head}>" for index, head in enumerate(heads))
