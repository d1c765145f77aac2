"""What the commands print."""

from __future__ import annotations

from rich.console import Console

from quillshaft.assess.results import Screening
from quillshaft.present import tables
from quillshaft.present.listed_modes import listed_modes, unlisted_sentence
from quillshaft.present.shown_text import shown_text
from quillshaft.present.viscous_words import viscous_rows
from quillshaft.present.words import (
    case_lines,
    counted,
    range_words,
    temperature_words,
    unjudged_lines,
    verdict_sentence,
)

MOST_SHOWN = 12


def _head(screening: Screening, out: Console) -> None:
    train = screening.train
    tag = f" ({train.tag})" if train.tag else ""
    case = f", case {' + '.join(train.cases)}" if train.cases else ""
    out.print(f"{train.title}{tag}{case}", style="bold")
    state = temperature_words(screening)
    out.print(f"Judged range: {range_words(screening)}" + (f"; {state}" if state else ""))


def show_screening(screening: Screening, out: Console, every: bool) -> None:
    """What is not clear, worst first; then the natural frequencies; every pair where asked."""
    _head(screening, out)
    out.print(f"Nominal:             {verdict_sentence(screening, worst=False)}")
    out.print(f"Over the tolerances: {verdict_sentence(screening, worst=True)}")
    for line in case_lines(screening):
        out.print(line)
    for line in unjudged_lines(screening):
        out.print(line)
    out.print()
    attention = tables.attention_lines(screening, dismissed=False)
    quiet = "Every pair that counts is clear." if screening.interferences else "No pair of mode and source is judged."
    out.print("Not clear, worst first" if attention else quiet, style="bold")
    for line in attention if every else attention[:MOST_SHOWN]:
        out.print(line)
    if not every and len(attention) > MOST_SHOWN:
        out.print(f"… and {len(attention) - MOST_SHOWN} more of the same: --all shows them.")
    accepted = tables.attention_lines(screening, dismissed=True)
    if accepted:
        out.print("Not clear, but dismissed by name", style="bold")
    for line in accepted:
        out.print(line)
    for item in screening.stale_dismissals:
        out.print(f"Dismissal {item.dismissal.name} was not applied: {item.why}.")
    out.print()
    out.print(tables.modes_table(screening))
    beyond, left = len(listed_modes(screening)) - len(screening.judged_modes), unlisted_sentence(screening)
    if beyond:
        verb = "is" if beyond == 1 else "are"
        out.print(f"{counted(beyond, 'mode')} above the highest source {verb} listed and not judged.{left}")
    elif left:
        out.print(left.strip())
    if every:
        out.print()
        out.print(tables.matrix_table(screening))
    out.print()
    check = screening.self_check
    proven = "all proven by counting" if check.all_proven else "NOT all proven"
    out.print(
        f"{counted(check.modes, 'mode')}, {proven}; {counted(len(screening.assumed), 'value')} assumed, "
        f"{counted(len(screening.flags), 'question')} about the data (see `quillshaft check`)."
    )
    if not every:
        out.print("The full matrix of pairs: --all." + (" The cheapest ways out: --levers." if attention else ""))


def show_check(screening: Screening, out: Console) -> None:
    """The equivalent system, actual and referred; sources; assumptions; what is odd."""
    _head(screening, out)
    for table in (tables.stations_table, tables.links_table, tables.sources_table, tables.assumed_table):
        out.print()
        out.print(table(screening))
    out.print()
    out.print(tables.written_table(screening))
    if screening.derived:
        out.print()
        out.print(tables.derived_table(screening))
    if viscous_rows(screening):
        out.print()
        out.print(tables.viscous_table(screening))
    out.print()
    out.print(f"Questions about the data ({len(screening.flags)})", style="bold")
    for flag in screening.flags:
        out.print(f"- {flag.element}: {shown_text(flag.text, screening.train.units)}")
