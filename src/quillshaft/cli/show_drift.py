"""What `quillshaft drift` prints."""

from __future__ import annotations

from rich.console import Console

from quillshaft.present import drift_words as words
from quillshaft.present.tables import make_table
from quillshaft.study.drift import Drift


def show_drift(drift: Drift, out: Console) -> None:
    """What appears on the way, then the natural frequencies along it."""
    train = drift.train
    tag = f" ({train.tag})" if train.tag else ""
    case = f", case {' + '.join(train.cases)}" if train.cases else ""
    out.print(f"{train.title}{tag}{case}", style="bold")
    for line in words.drift_sentences(drift):
        out.print(line)
    out.print()
    out.print(words.drift_table_title(drift), style="bold")
    table = make_table("", words.drift_heads(drift), words.drift_rows(drift))
    table.title = None  # it would be folded to the table's width
    out.print(table)
