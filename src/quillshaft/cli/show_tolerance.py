"""What `quillshaft tolerance` prints."""

from __future__ import annotations

from rich.console import Console

from quillshaft.present import tolerance_words as words
from quillshaft.present.tables import make_table
from quillshaft.present.words import range_words
from quillshaft.study.tolerance_results import ToleranceStudy


def show_tolerance(study: ToleranceStudy, out: Console) -> None:
    """The answer; natural frequencies; pairs that may be not clear; what decides them."""
    screening = study.screening
    train = screening.train
    tag = f" ({train.tag})" if train.tag else ""
    case = f", case {' + '.join(train.cases)}" if train.cases else ""
    out.print(f"{train.title}{tag}{case}", style="bold")
    out.print(f"Judged range: {range_words(screening)}")
    for line in words.study_sentences(study):
        out.print(line)
    out.print()
    rows = words.pair_rows(study)
    if rows:
        heads = "Mode>|source|required>|nominal|over tolerances|chance not clear|chance that they meet"
        out.print(make_table("Pairs that may be not clear", heads, rows))
        out.print()
    heads = "Mode>|Hz>|bounds over tolerances, Hz>|5 % below, Hz>|95 % below, Hz>"
    out.print(make_table("Natural frequencies", heads, words.mode_rows(study)))
    for mode, sources in words.driven_modes(study):
        out.print()
        heads = "Element|quantity|tolerance>|+1 % moves it by>|share of its variance>"
        out.print(make_table(f"What decides mode {mode} ({sources})", heads, words.driver_rows(study, mode)))
