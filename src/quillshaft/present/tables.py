"""Tables for the terminal, as rich renderables."""

from __future__ import annotations

from collections.abc import Iterable

from rich.table import Table
from rich.text import Text

from quillshaft.assess.results import Screening
from quillshaft.present.derived_rows import DERIVED_HEADS, derived_rows
from quillshaft.present.listed_modes import listed_modes
from quillshaft.present.rows import (
    link_heads,
    link_rows,
    pair_row,
    source_rows,
    station_heads,
    station_rows,
)
from quillshaft.present.shown_text import assumed_rows
from quillshaft.present.viscous_words import VISCOUS_HEADS, viscous_rows
from quillshaft.present.words import attention_sentences, hertz, mode_words
from quillshaft.present.written_rows import written_rows


def make_table(title: str, columns: str, rows: Iterable[Iterable[str]]) -> Table:
    """A plain table; `columns` are headings split at "|", a heading ending in ">" is set to the right."""
    table = Table(title=title, title_justify="left", title_style="bold", box=None, pad_edge=False)
    for heading in columns.split("|"):
        right = heading.endswith(">")
        table.add_column(heading.rstrip(">").strip(), justify="right" if right else "left", overflow="fold")
    for row in rows:
        table.add_row(*(Text(cell) for cell in row))
    return table


def modes_table(screening: Screening) -> Table:
    """Natural frequencies with their range over the tolerances."""
    rows = (
        (
            f"{mode.mode}",
            hertz(mode.frequency_hz),
            f"{mode.cycles_per_min:.1f}",
            f"{hertz(mode.bounds_hz[0])} – {hertz(mode.bounds_hz[1])}",
            f"{mode.damping_ratio:.4f}",
            "proven" if mode.proof.proven else "NOT PROVEN",
            mode_words(mode) + ("" if len(mode.cluster) == 1 else f" (one basis of {len(mode.cluster)} equal modes)"),
        )
        for mode in listed_modes(screening)
    )
    return make_table(
        "Natural frequencies", "Mode>|Hz>|cycles/min>|over tolerances, Hz>|damping>|proof|what it does", rows
    )


def matrix_table(screening: Screening) -> Table:
    """Every judged pair of source and mode."""
    columns = (
        "Mode>|Hz>|source|critical speed, rpm>|margin, %>|worst margin, %>|required, %>|excitability>"
        "|nominal|worst case"
    )
    rows = (pair_row(screening, pair) for pair in screening.interferences)
    return make_table("All pairs of mode and source", columns, rows)


def attention_lines(screening: Screening, dismissed: bool) -> list[str]:
    """What is not clear, worst first, one numbered sentence each: the dismissed ones, or all others."""
    sentences = attention_sentences(screening, dismissed)
    return [f"{index}. [{verdict}] {text}" for index, (verdict, text) in enumerate(sentences, start=1)]


def stations_table(screening: Screening) -> Table:
    """The equivalent system's stations, actual and referred side by side."""
    head = station_heads(screening)
    columns = f"{head[0]}|{head[1]}>|{head[2]}>|{head[3]}>|{head[4]}>|{head[5]}"
    title = f"Stations (referred to {screening.train.operation.speed_at})"
    return make_table(title, columns, station_rows(screening))


def links_table(screening: Screening) -> Table:
    """Links: stiffness actual and referred, mean torque and wind-up."""
    head = link_heads(screening)
    columns = "|".join((*head[:3], *(f"{word}>" for word in head[3:8]), head[8]))
    return make_table("Links (stiffness and torque at the first-named station)", columns, link_rows(screening))


def derived_table(screening: Screening) -> Table:
    """Damping and springs worked out from load laws and electrical data."""
    head = DERIVED_HEADS
    columns = f"{head[0]}|{head[1]}|{head[2]}>|{head[3]}|{head[4]}"
    return make_table("Worked out from electrical data and load curves", columns, derived_rows(screening))


def sources_table(screening: Screening) -> Table:
    """Every source by the name that [excitations-off], [dismissals] and [criteria] use."""
    return make_table("Sources", "Source|at|line|speed ratio>|when|order|remark", source_rows(screening))


def viscous_table(screening: Screening) -> Table:
    """Viscous damping of links and stations."""
    heads = f"{VISCOUS_HEADS[0]}|{VISCOUS_HEADS[1]}>|{VISCOUS_HEADS[2]}>|{VISCOUS_HEADS[3]}"
    return make_table("Viscous damping", heads, viscous_rows(screening))


def written_table(screening: Screening) -> Table:
    """Every element with every key as the file writes it."""
    return make_table("As the file writes it", "Element|keys and values", written_rows(screening.train))


def assumed_table(screening: Screening) -> Table:
    """What was assumed, in the order met."""
    rows = assumed_rows(screening.assumed, screening.train.units)
    return make_table(f"Assumed ({len(screening.assumed)})", "Element|key|value|why", rows)
