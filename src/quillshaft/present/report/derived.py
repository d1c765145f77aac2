"""Springs and dampers worked out from electrical data, as a section of the report."""

from __future__ import annotations

from typing import Any

from quillshaft.assess.results import Screening
from quillshaft.present.derived_rows import DERIVED_HEADS, derived_rows
from quillshaft.present.pdf.document import data_table, heading, note


def derived_parts(screening: Screening) -> list[Any]:
    """The table of worked-out values; nothing for a train of which only the load law is known."""
    if all(value.element.startswith("stations.") for value in screening.derived):
        return []
    return [
        heading("Worked out from electrical data and load curves", 2),
        data_table(DERIVED_HEADS, derived_rows(screening), align="llrll"),
        note(
            "Each value stands at its own shaft. The stiffness of a tie is in the modes; an induction motor's spring "
            "and all damping here are listed for the engineer and change no frequency and no verdict."
        ),
    ]
