"""The report's section on the orders of engines and reciprocating compressors."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from quillshaft.assess.orders import OrderStudy
from quillshaft.present.order_words import (
    cylinder_heads,
    cylinder_rows,
    order_heads,
    order_note,
    order_rows,
    order_sentences,
    order_title,
)
from quillshaft.present.pdf.document import FigureFlowable, bullets, data_table, heading, note


def order_parts(studies: Sequence[OrderStudy]) -> list[Any]:
    """One section for each machine, as blocks of a report."""
    return [part for study in studies for part in _machine(study)]


def _machine(study: OrderStudy) -> list[Any]:
    from quillshaft.present.charts.stars import star_diagrams

    heads = order_heads(study)
    return [
        heading(order_title(study)),
        *bullets(order_sentences(study)),
        data_table(cylinder_heads(study), cylinder_rows(study), align="rlrrrl"),
        FigureFlowable(star_diagrams(study), bookmark_alt=f"Stars of the orders of {study.machine.name}"),
        data_table(heads, order_rows(study), align="rl" + "r" * (len(heads) - 2)),
        note(order_note(study)),
    ]
