"""Modes, interference diagram, margins, sources and damping."""

from __future__ import annotations

import math
from typing import Any

from quillshaft.assess.response_results import Response
from quillshaft.assess.results import Interference, ModeResult, Screening
from quillshaft.present.listed_modes import listed_modes, unlisted_sentence
from quillshaft.present.pdf.document import (
    FigureFlowable,
    bullets,
    data_table,
    heading,
    note,
    paragraph,
)
from quillshaft.present.pdf.style import FIGURE_HEIGHT_LIMIT_PT
from quillshaft.present.response_words import closed_sentences, closing_words
from quillshaft.present.rows import pair_row, source_rows
from quillshaft.present.viscous_words import viscous_rows
from quillshaft.present.words import attention_sentences, hertz, mode_words, plain

RPM = 30.0 / math.pi
SHAPES_A_FIGURE = 3
MOST_SHAPES = 8
HIGHEST_FIGURE_IN = FIGURE_HEIGHT_LIMIT_PT / 72.0


def finding_parts(screening: Screening, response: Response | None = None) -> list[Any]:
    """Modes, interferences, excitations and damping as blocks of a report; a response says what became of each."""
    return [
        *_modes(screening),
        *_shapes(screening),
        *_interferences(screening, response),
        *_excitations(screening),
        *_damping(screening, response is not None),
    ]


def _modes(screening: Screening) -> list[Any]:
    rows = [
        (
            f"{mode.mode}",
            hertz(mode.frequency_hz),
            f"{mode.cycles_per_min:.1f}",
            f"{hertz(mode.bounds_hz[0])} – {hertz(mode.bounds_hz[1])}",
            f"{mode.damping_ratio:.4f}",
            mode_words(mode) + _cluster_words(mode),
        )
        for mode in listed_modes(screening)
    ]
    head = ("Mode", "Hz", "cycles/min", "over tolerances, Hz", "damping ratio", "what it does")
    beyond = len(listed_modes(screening)) - len(screening.judged_modes)
    text = (
        "Undamped natural frequencies. The range is the exact lowest and highest value over all stiffness and "
        "inertia tolerances together: frequencies rise with every stiffness and fall with every inertia. Where "
        "ranges of neighbouring modes overlap, the shape may change inside them."
    )
    if beyond == 1:
        text += " The highest lies above every source and is listed without being judged."
    elif beyond:
        text += f" The {beyond} highest lie above every source and are listed without being judged."
    text += unlisted_sentence(screening)
    table = data_table(head, rows, align="rrrrrl")
    return [heading("Natural frequencies and modes"), paragraph(text), table]


def _cluster_words(mode: ModeResult) -> str:
    return "" if len(mode.cluster) == 1 else f" (one basis of {len(mode.cluster)} modes of equal frequency)"


def _shapes(screening: Screening) -> list[Any]:
    from quillshaft.present.charts import mode_shapes

    shown = screening.judged_modes[:MOST_SHAPES]
    parts: list[Any] = [heading("Mode shapes", 2)] if shown else []
    left = list(shown)
    while left:
        numbers, figure = left[:SHAPES_A_FIGURE], mode_shapes(screening, left[:SHAPES_A_FIGURE])
        while len(numbers) > 1 and figure.get_figheight() > HIGHEST_FIGURE_IN:
            numbers = numbers[:-1]
            figure = mode_shapes(screening, numbers)
        words = ", ".join(f"mode {number}" for number in numbers)
        parts.append(FigureFlowable(figure, bookmark_alt=f"Shape of {words}"))
        left = left[len(numbers) :]
    parts += _shape_tables(screening, shown)
    return parts


def _shape_tables(screening: Screening, shown: tuple[int, ...]) -> list[Any]:
    if not shown:
        return []
    columns = shown[:6]
    head = ("Station", *(f"mode {number}" for number in columns))
    angles = [
        (name, *(f"{screening.mode(number).shape[name]:+.4f}" for number in columns))
        for name in screening.graph.stations
    ]
    links = [link for link in screening.graph.links if link.stiffness_nm_rad is not None]
    shares = [
        (link.name, *(f"{screening.mode(number).strain_energy[link.name] * 100:.1f}" for number in columns))
        for link in links
    ]
    kinetic = [
        (name, *(f"{screening.mode(number).kinetic_energy[name] * 100:.1f}" for number in columns))
        for name in screening.mode(columns[0]).kinetic_energy
    ]
    align = "l" + "r" * len(columns)
    widths = (30, *([18] * len(columns)))
    return [
        heading("Angles at the stations (actual, largest = 1, positive in each shaft's own direction of rotation)", 3),
        data_table(head, angles, column_widths=widths, align=align),
        heading("Strain energy by link, %", 3),
        data_table(("Link", *head[1:]), shares, column_widths=widths, align=align),
        heading("Kinetic energy by station, %", 3),
        data_table(head, kinetic, column_widths=widths, align=align),
        note(
            "A share of strain energy is twice the relative change of the frequency per relative change of that "
            "stiffness; a share of kinetic energy minus twice that per relative change of that inertia."
        ),
    ]


def _interferences(screening: Screening, response: Response | None) -> list[Any]:
    from quillshaft.present.charts import interference_diagram

    criteria = screening.train.criteria
    base = "source" if criteria.margin_on == "excitation" else "natural"
    required = ", ".join(f"{kind} {plain(share)}" for kind, share in criteria.separation.items())
    worst = ", ".join(f"{kind} {plain(share)}" for kind, share in criteria.worst_case.items())
    parts: list[Any] = [
        heading("Interference diagram and margins"),
        FigureFlowable(interference_diagram(screening), bookmark_alt="Interference diagram"),
        paragraph(
            f"Margin = (f natural − f source) / f {base}, the smallest over the judged range; it is zero where "
            f"they meet there. Required nominally: {required}; over the tolerances: {worst}. These are the file's "
            "own requirements; no edition of a standard or class rule is applied or claimed."
        ),
        heading("What is not clear, worst first", 2),
    ]
    found = attention_sentences(screening, dismissed=False) if response is None else closed_sentences(response)
    unclear = [sentence for _, sentence in found]
    parts += bullets(unclear) or [paragraph("Nothing.")]
    parts += [heading("Critical speeds", 2), *_critical(screening, response)]
    return parts


def _critical(screening: Screening, response: Response | None) -> list[Any]:
    """Where modes and sources meet between standstill and a little above the highest speed."""
    operation = screening.train.operation
    top = 1.2 * max(operation.trip_rad_s or 0.0, operation.ranges_rad_s[-1][1]) * RPM
    found = [
        (speed, pair)
        for pair in screening.interferences
        for speed in pair.critical_speeds_rpm
        if speed <= top and _counts(screening, pair)
    ]
    if not found:
        return [paragraph(f"No mode meets a source that follows speed below {top:.0f} rpm.")]
    found = sorted(found, key=lambda item: item[0])
    rows = [
        (
            f"{speed:.0f}",
            f"{pair.mode}",
            hertz(screening.mode(pair.mode).frequency_hz),
            pair.source,
            "–" if pair.excitability is None else f"{pair.excitability:.3f}",
            _place(screening, speed),
        )
        for speed, pair in found
    ]
    head = ("rpm", "mode", "Hz", "source", "excitability", "where")
    text = f"All meetings up to {top:.0f} rpm, in order of speed; minor engine orders only in the judged range."
    if response is None:
        return [data_table(head, rows, align="rrrlrl"), note(text)]
    closed = [(*row, closing_words(response, pair)) for row, (_, pair) in zip(rows, found, strict=True)]
    return [data_table((*head, "forced response"), closed, align="rrrlrll"), note(text)]


def _counts(screening: Screening, pair: Interference) -> bool:
    minor = screening.source(pair.source).major is False
    return not minor or pair.verdict in ("crossing", "barred")


def _place(screening: Screening, speed_rpm: float) -> str:
    ranges = [(low * RPM, high * RPM) for low, high in screening.train.operation.ranges_rad_s]
    if any(low <= speed_rpm <= high for low, high in ranges):
        return "in the judged range"
    if speed_rpm > ranges[-1][1]:
        return "above it"
    return "below it: passed on the way up" if speed_rpm < ranges[0][0] else "between two ranges"


def _excitations(screening: Screening) -> list[Any]:
    head = ("Source", "at", "line", "speed ratio", "when", "order", "amplitude or remark")
    return [
        heading("Excitations"),
        paragraph(
            "Every source that shafts, gears and machines imply, and those the file gives. Screening asks only "
            "where they are; a source without an amplitude is judged by separation alone."
        ),
        data_table(head, source_rows(screening), align="lllrlll"),
    ]


VISCOUS_COUNTS = (
    "A viscous link counts in that ratio as η = c ω / k, damping of a station to ground as c θ² / (2 ω Σ J θ²); the "
    "fluid of untuned dampers does not count in it. The damped modes hold all of them."
)


def _damping(screening: Screening, shaken: bool) -> list[Any]:
    """Damping as stated and assumed; `shaken` where a forced response, which rests on it, is in the report."""
    enters = "Damping does not enter the verdicts by separation"
    enters += "; those by forced response rest on it." if shaken else "."
    train = screening.train
    stated = [
        (link.name, f"{link.loss_factor:.4f}", f"{link.loss_factor * 2 * math.pi:.3f}", "stated")
        for link in screening.graph.links
        if link.loss_factor is not None and not link.viscous_nms_rad
    ]
    viscous = viscous_rows(screening)
    stated += [(row[0], "viscous", "–", f"stated: {row[1]}") for row in viscous]
    low, high = train.zeta
    rows = [
        *stated,
        ("every other link", f"{2 * low:.4f}", f"{4 * math.pi * low:.3f}", "assumed for the train"),
    ]
    return [
        heading("Damping"),
        paragraph(
            f"Links that state no damping take a loss factor 2ζ with ζ = {plain(low)} to {plain(high)}; the low "
            "value is used. The damping ratio of a mode is half its links' loss factors weighted by their shares "
            f"of strain energy. {enters}"
        ),
        *([paragraph(VISCOUS_COUNTS)] if viscous else ()),
        data_table(("Link", "loss factor η", "ψ = 2π η", "where from"), rows, align="lrrl"),
    ]


def margin_matrix(screening: Screening) -> list[Any]:
    """Every judged pair, a table for each mode, for the appendix."""
    if not screening.interferences:
        return [paragraph("No mode lies in the reach of any source.")]
    head = (
        "source",
        "critical speed, rpm",
        "margin, %",
        "worst margin, %",
        "required, %",
        "excitability",
        "nominal",
        "worst case",
    )
    parts: list[Any] = []
    for number in screening.judged_modes:
        rows = [pair_row(screening, pair)[2:] for pair in screening.interferences if pair.mode == number]
        parts.append(heading(f"Mode {number}, {hertz(screening.mode(number).frequency_hz)} Hz", 3))
        parts.append(data_table(head, rows, column_widths=(100, 50, 52, 54, 60, 70, 52, 52), align="lrrrrrll"))
    return parts
