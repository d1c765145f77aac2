"""The report's section on damped modes."""

from __future__ import annotations

from typing import Any

from quillshaft.assess.damped_results import DampedResult
from quillshaft.present.damped_words import (
    APERIODIC_HEADS,
    DAMPED_HEADS,
    MOST_COLUMNS,
    aperiodic_rows,
    damped_notes,
    damped_rows,
    damped_sentences,
    energy_heads,
    energy_rows,
    shown_modes,
)
from quillshaft.present.pdf.document import bullets, data_table, heading, note, paragraph

WIDTHS = (14, 26, 23, 21, 27, 20, 29, 26)


def damped_parts(result: DampedResult | None) -> list[Any]:
    """Damped modes as blocks of a report; nothing where they were not asked for."""
    if result is None:
        return []
    shown = shown_modes(result)
    parts: list[Any] = [heading("Damped modes"), *bullets(damped_sentences(result))]
    if shown:
        parts.append(data_table(DAMPED_HEADS, damped_rows(shown), column_widths=WIDTHS, align="rrrrrrll"))
    else:
        parts.append(paragraph("No motion oscillates."))
    if len(shown) < len(result.modes):
        parts.append(note(f"{len(result.modes) - len(shown)} more above the highest source are not printed here."))
    aperiodic = aperiodic_rows(result)
    if aperiodic:
        parts += [heading("Motions that do not oscillate", 2), data_table(APERIODIC_HEADS, aperiodic, align="rrlll")]
    rows = energy_rows(shown)
    if rows:
        heads = energy_heads(shown)
        parts += [heading("Energy lost in a cycle, %", 2), data_table(heads, rows, align="l" + "r" * (len(heads) - 1))]
    if rows and len(shown) > MOST_COLUMNS:
        parts.append(note(f"The table holds the first {MOST_COLUMNS} modes; all of them are in the numbers as JSON."))
    return [*parts, *(note(line) for line in damped_notes())]
