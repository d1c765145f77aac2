"""The report's operating restrictions and its measurement plan, where a forced response was worked out."""

from __future__ import annotations

from typing import Any

from quillshaft.assess.response_results import Response
from quillshaft.present import response_rows as rows
from quillshaft.present.pdf.document import bullets, data_table, heading, note, paragraph
from quillshaft.present.response_limits_words import (
    GAUGE_NOTES,
    dead_note,
    gauge_sentences,
    passage_note,
    restriction_sentences,
    tolerable_note,
)


def restriction_parts(response: Response | None) -> list[Any]:
    """Operating restrictions and measurement plan as blocks of a report; nothing where there is no response."""
    if response is None:
        return []
    return [*_restrictions(response), *_measurement(response)]


def _restrictions(response: Response) -> list[Any]:
    parts: list[Any] = [heading("Operating restrictions"), *bullets(restriction_sentences(response))]
    found = response.restrictions
    if found.dead_loads:
        parts.append(note(dead_note()))
    passed = rows.passage_rows(response)
    if passed:
        table = data_table(rows.PASSAGE_HEADS, passed, align="lrrrrr")
        parts += [heading("Resonances passed at the stated ramp", 2), table, note(passage_note())]
    sources = rows.tolerable_rows(response)
    if sources:
        table = data_table(rows.tolerable_heads(response), sources, align="llrrrll")
        parts += [heading("How large a source may be", 2), table, note(tolerable_note(response))]
    return parts


def _measurement(response: Response) -> list[Any]:
    parts: list[Any] = [heading("Measurement plan")]
    cells = rows.gauge_rows(response)
    if not cells:
        return [*parts, paragraph("No mode lies in the reach of a source: nothing has to be measured.")]
    table = data_table(rows.gauge_heads(response), cells, align="rrlrrrllr")
    return [*parts, *bullets(gauge_sentences(response)), table, *(note(line) for line in GAUGE_NOTES)]
