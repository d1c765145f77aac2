"""What `respond` prints: the answer, what was open, findings, torques, restrictions, and what it rests on."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import TYPE_CHECKING

from quillshaft.assess.response_results import Response
from quillshaft.assess.response_standing import standing
from quillshaft.present import response_rows as rows
from quillshaft.present import response_sources_rows as basis
from quillshaft.present import response_torque_rows as torques
from quillshaft.present.response_duty_words import coupling_lines, damper_lines, generator_lines
from quillshaft.present.response_limits_words import (
    dead_note,
    gauge_sentences,
    passage_note,
    restriction_sentences,
    tolerable_note,
)
from quillshaft.present.response_words import (
    answer_sentences,
    closing_sentences,
    fault_sentences,
    response_cautions,
    spread_sentence,
    unjudged_sentence,
)
from quillshaft.present.shown_text import assumed_rows
from quillshaft.present.tables import make_table
from quillshaft.present.words import counted, range_words, temperature_words

if TYPE_CHECKING:
    from rich.console import Console

MOST_SHOWN = 12
Links = tuple[str, ...] | None


def show_response(response: Response, out: Console, links: Links, every: bool) -> None:
    """The answer first; then tables and sentences, the long ones in full where `every`."""
    _head(response, out)
    for line in answer_sentences(response):
        out.print(line)
    _closings(response, out, every)
    _findings(response, out, links, every)
    _torques(response, out, links)
    _lines(out, "Generators", generator_lines(response))
    _lines(out, "With a damper at fault", fault_sentences(response))
    _lines(out, "Heat", [*coupling_lines(response), *damper_lines(response)])
    _restrictions(response, out)
    _basis(response, out, every)


def say_answer(response: Response, out: Console) -> bool:
    """Print what the response comes to; True where no limit is exceeded and nothing is left open."""
    out.print(f"Forced response: {answer_sentences(response)[0]}")
    return standing(response).clean


def _head(response: Response, out: Console) -> None:
    screening = response.screening
    train = screening.train
    tag = f" ({train.tag})" if train.tag else ""
    case = f", case {' + '.join(train.cases)}" if train.cases else ""
    out.print(f"{train.title}{tag}{case}", style="bold")
    state = temperature_words(screening)
    out.print(f"Judged range: {range_words(screening)}" + (f"; {state}" if state else ""))


def _lines(out: Console, title: str, lines: Sequence[str]) -> None:
    if lines:
        out.print()
        out.print(title, style="bold")
        for line in lines:
            out.print(line)


def _table(out: Console, title: str, heads: Sequence[str], cells: Sequence[Sequence[str]], left: int = 1) -> None:
    """A table whose first `left` columns are words and whose others are numbers; nothing without rows."""
    if cells:
        out.print()
        columns = "|".join(head if place < left else f"{head}>" for place, head in enumerate(heads))
        out.print(make_table(title, columns, cells))


def _closings(response: Response, out: Console, every: bool) -> None:
    found = closing_sentences(response)
    lines = [f"[{status}] {text}" for status, text in found]
    shown = lines if every else lines[:MOST_SHOWN]
    more = [f"… and {len(lines) - len(shown)} more: --all shows them."] if len(lines) > len(shown) else []
    _lines(out, "What the screening left open", [*shown, *more])


def _findings(response: Response, out: Console, links: Links, every: bool) -> None:
    cells = rows.finding_rows(response, links)
    if not every:
        cells = [row for row in cells if row[-1] != rows.FINDING_WORDS["no limit given"]][:MOST_SHOWN] or cells[
            :MOST_SHOWN
        ]
    heads = "|".join(
        (*rows.FINDING_HEADS[:2], *(f"{head}>" for head in rows.FINDING_HEADS[2:4]), rows.FINDING_HEADS[4])
    )
    heads += "|" + "|".join((*(f"{head}>" for head in rows.FINDING_HEADS[5:7]), *rows.FINDING_HEADS[7:]))
    out.print()
    out.print(make_table("Checks, the worst first", heads, cells))
    left = len(response.findings) - len(cells)
    if not every and links is None and left > 0:
        out.print(f"{counted(left, 'check')} more, most of them without a limit: --all shows them.")


def _torques(response: Response, out: Console, links: Links) -> None:
    heads = torques.torque_heads(response)
    _table(out, "Torques at rated speed", heads, torques.rated_torque_rows(response, links), left=2)
    _table(out, "Torques where the alternating one is largest", heads, torques.largest_torque_rows(response, links), 2)
    orders = torques.order_rows(response, links)
    _table(out, "Leading sources at rated speed, normal", torques.order_heads(response), orders, left=5)


def _restrictions(response: Response, out: Console) -> None:
    found = response.restrictions
    _lines(out, "Restrictions", restriction_sentences(response))
    if found.dead_loads:
        out.print(dead_note())
    _table(out, "Resonances passed", rows.PASSAGE_HEADS, rows.passage_rows(response))
    if found.passages:
        out.print(passage_note())
    _table(out, "How large a source may be", rows.tolerable_heads(response), rows.tolerable_rows(response), left=2)
    if found.tolerable:
        out.print(tolerable_note(response))


def _basis(response: Response, out: Console, every: bool) -> None:
    """What it rests on: damping, combination, assumptions, cautions; with `every` amplitudes, limits and gauges too."""
    _table(out, "Low and high damping", torques.spread_heads(response), torques.spread_rows(response) if every else ())
    if every:
        tables: tuple[tuple[str, Sequence[str], Callable[[Response], list[tuple[str, ...]]]], ...] = (
            ("Cases", basis.CASE_HEADS, basis.case_rows),
            ("Amplitudes", basis.AMPLITUDE_HEADS, basis.amplitude_rows),
            ("Limits", basis.LIMIT_HEADS, basis.limit_rows),
        )
        for title, heads, make in tables:
            _table(out, title, heads, make(response), left=len(heads))
        _lines(out, "Where to measure", gauge_sentences(response))
    said = [basis.speed_words(response) + f", {counted(len(response.cases), 'case')}.", _sentence(response.combination)]
    said += [line for line in (spread_sentence(response, torques.spread_shares(response)),) if line]
    said += [line for line in (unjudged_sentence(response),) if line]
    assumed = assumed_rows(response.assumed, response.screening.train.units)
    said += [f"Assumed: {element}, {key} = {value}: {why}." for element, key, value, why in assumed]
    said += [_sentence(note) for note in response.notes]
    _lines(out, "What it rests on", said)
    _lines(out, "Cautions", response_cautions(response))
    if not every:
        out.print("Every check, cases, amplitudes, limits and where to measure: --all.")


def _sentence(text: str) -> str:
    return f"{text[:1].upper()}{text[1:].rstrip('.')}."
