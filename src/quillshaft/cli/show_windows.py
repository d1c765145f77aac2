"""What `quillshaft windows` prints."""

from __future__ import annotations

from rich.console import Console

from quillshaft.assess.results import Screening
from quillshaft.present import window_words as words
from quillshaft.present.tables import make_table
from quillshaft.present.units import SHOWN
from quillshaft.present.words import range_words
from quillshaft.study.link_choice import OtherLink
from quillshaft.study.window_map import WindowMap
from quillshaft.study.windows import Windows


def _head(screening: Screening, out: Console) -> None:
    train = screening.train
    tag = f" ({train.tag})" if train.tag else ""
    case = f", case {' + '.join(train.cases)}" if train.cases else ""
    out.print(f"{train.title}{tag}{case}", style="bold")
    out.print(f"Judged range: {range_words(screening)}")


def show_windows(screening: Screening, windows: Windows, others: tuple[OtherLink, ...], out: Console) -> None:
    """The answer in sentences, then recommended and forbidden ranges with what limits them."""
    _head(screening, out)
    for line in words.window_sentences(screening, windows):
        out.print(line)
    if not windows.allowed:
        for line in words.other_link_sentences(screening, others):
            out.print(line)
    dismissed = words.dismissed_sentence(windows)
    if dismissed is not None:
        out.print(dismissed)
    unit = SHOWN[screening.train.units].stiffness
    searched = words.range_text(screening, windows.search_nm_rad)
    head = f"from, {unit}>|to>|× nominal, from>|to>"
    if windows.recommended:
        out.print()
        rows = words.recommended_rows(screening, windows)
        title = "Recommended nominal stiffness, over the tolerances"
        out.print(make_table(title, f"{head}|lower end set by|upper end set by", rows))
    out.print()
    forbidden = words.forbidden_rows(screening, windows.forbidden, windows.nominal_nm_rad)
    if forbidden:
        title = f"Forbidden as fitted, all else nominal (searched {searched})"
        out.print(make_table(title, f"{head}|mode>|because of|where it forbids", forbidden))
    else:
        out.print(f"Nothing is forbidden as fitted, all else nominal, from {searched}.")


def show_window_map(screening: Screening, found: WindowMap, out: Console) -> None:
    """The clear boxes of two links."""
    _head(screening, out)
    for line in words.map_sentences(screening, found):
        out.print(line)
    searched = " and ".join(
        f"{link} {words.range_text(screening, reach)}"
        for link, reach in zip(found.links, found.search_nm_rad, strict=True)
    )
    out.print(f"Searched: {searched}, on {len(found.lines)} exact lines. The map itself: --charts DIR.")
