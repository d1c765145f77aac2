"""Report sections for what was asked beside the screening: windows, comparison, tolerance, drift and the rest."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from quillshaft.assess.damped_results import DampedResult
from quillshaft.assess.orders import OrderStudy
from quillshaft.assess.response_results import Response
from quillshaft.assess.results import Screening
from quillshaft.present.lever_rows import LEVER_HEADS, lever_notes, lever_rows, ways_title
from quillshaft.present.pdf.document import FigureFlowable, bullets, data_table, heading, note, paragraph
from quillshaft.present.question_rows import questions_by_supplier
from quillshaft.present.report.damped import damped_parts
from quillshaft.present.report.orders import order_parts
from quillshaft.present.report.response import response_parts
from quillshaft.present.report.restrictions import restriction_parts
from quillshaft.present.temperature_rows import coupling_rows, temperature_heads, temperature_lines, temperature_rows
from quillshaft.present.tolerance_words import driven_modes, driver_rows, mode_rows, pair_rows, study_sentences
from quillshaft.present.units import SHOWN
from quillshaft.study.compare import CaseComparison
from quillshaft.study.drift import Drift
from quillshaft.study.levers import WaysOut
from quillshaft.study.link_choice import OtherLink
from quillshaft.study.tolerance_results import ToleranceStudy
from quillshaft.study.windows import Windows


@dataclass(frozen=True)
class Studies:
    """Results of studies to print in the report; what was not asked for is empty or None."""

    windows: tuple[tuple[Windows, tuple[OtherLink, ...]], ...] = ()
    comparisons: tuple[CaseComparison, ...] = ()
    tolerance: ToleranceStudy | None = None
    drifts: tuple[Drift, ...] = ()
    temperatures: dict[str, Screening] | None = None
    levers: tuple[WaysOut, ...] | None = None
    questions: bool = False
    damped: DampedResult | None = None
    orders: tuple[OrderStudy, ...] = ()
    response: Response | None = None


def study_parts(screening: Screening, studies: Studies) -> list[Any]:
    """The sections that were asked for, as blocks of a report."""
    return [
        *response_parts(studies.response),
        *restriction_parts(studies.response),
        *_temperatures(screening, studies.temperatures),
        *(part for windows, others in studies.windows for part in _windows(screening, windows, others)),
        *_comparisons(screening, studies.comparisons),
        *_tolerance(studies.tolerance),
        *(part for drift in studies.drifts for part in _drift(drift)),
        *_levers(screening, studies.levers),
        *damped_parts(studies.damped),
        *order_parts(studies.orders),
        *_questions(screening, studies.questions),
    ]


def _temperatures(screening: Screening, states: dict[str, Screening] | None) -> list[Any]:
    if states is None:
        return []
    parts: list[Any] = [heading("Couplings cold, at 30 °C and hot"), *bullets(temperature_lines(states))]
    rows = coupling_rows(states)
    if rows:
        unit = SHOWN[screening.train.units].stiffness
        parts.append(data_table((f"Stiffness, {unit}", *states), rows, align="l" + "r" * len(states)))
    heads = temperature_heads(states)
    return [*parts, data_table(heads, temperature_rows(states), align="r" * len(heads))]


def _windows(screening: Screening, windows: Windows, others: Sequence[OtherLink]) -> list[Any]:
    from quillshaft.present.charts.windows import windows_chart
    from quillshaft.present.window_words import (
        dismissed_sentence,
        forbidden_rows,
        other_link_sentences,
        recommended_rows,
        window_sentences,
    )

    unit = SHOWN[screening.train.units].stiffness
    said = window_sentences(screening, windows)
    if windows.cannot_clear:
        said += other_link_sentences(screening, tuple(others))
    left_out = dismissed_sentence(windows)
    parts: list[Any] = [heading(f"Stiffness windows of {windows.link}"), *bullets(said)]
    parts += [paragraph(left_out)] if left_out else []
    parts.append(
        FigureFlowable(windows_chart(screening, windows), bookmark_alt=f"Natural frequencies against {windows.link}")
    )
    rows = forbidden_rows(screening, windows.forbidden, windows.nominal_nm_rad)
    if rows:
        heads = (f"from, {unit}", "to", "× nominal, from", "to", "mode", "because of", "where it forbids")
        parts += [heading("Forbidden as fitted, all else nominal", 2), data_table(heads, rows, align="rrrrrll")]
    good = recommended_rows(screening, windows)
    if good:
        columns = (f"from, {unit}", "to", "× nominal, from", "to", "limited below by", "limited above by")
        parts += [heading("Recommended, every tolerance at its worst", 2), data_table(columns, good, align="rrrrll")]
    return parts


def _comparisons(screening: Screening, comparisons: Sequence[CaseComparison]) -> list[Any]:
    from quillshaft.present.report.comparison import case_parts

    if not comparisons:
        return []
    return [heading("Before and after"), *(part for case in comparisons for part in case_parts(screening, case))]


def _tolerance(study: ToleranceStudy | None) -> list[Any]:
    from quillshaft.present.charts.tolerance import tolerance_chart

    if study is None:
        return []
    parts: list[Any] = [heading("Tolerance and what decides"), *bullets(study_sentences(study))]
    parts.append(FigureFlowable(tolerance_chart(study), bookmark_alt="Natural frequencies over the tolerances"))
    heads: tuple[str, ...] = ("Mode", "nominal, Hz", "bounds, Hz", "5 % below, Hz", "95 % below, Hz")
    parts.append(data_table(heads, mode_rows(study), align="rrrrr"))
    risky = pair_rows(study)
    if risky:
        heads = ("Mode", "source", "required", "nominal", "worst case", "chance not clear", "chance that they meet")
        parts += [heading("Chances", 2), data_table(heads, risky, align="rlrllrr")]
    for mode, sources in driven_modes(study):
        heads = ("Element", "quantity", "tolerance", "effect of +1 %", "share of the variance")
        parts += [
            heading(f"What decides mode {mode} ({sources})", 3),
            data_table(heads, driver_rows(study, mode), align="lllrr"),
        ]
    return parts


def _drift(drift: Drift) -> list[Any]:
    from quillshaft.present.charts.drift import drift_chart
    from quillshaft.present.drift_words import drift_heads, drift_rows, drift_sentences

    heads = tuple(head.rstrip(">") for head in drift_heads(drift).split("|"))
    return [
        heading(f"Drift of {drift.datum}"),
        *bullets(drift_sentences(drift)),
        FigureFlowable(drift_chart(drift), bookmark_alt=f"Natural frequencies against {drift.datum}"),
        data_table(heads, drift_rows(drift), align="r" * len(heads)),
    ]


def _levers(screening: Screening, found: tuple[WaysOut, ...] | None) -> list[Any]:
    if found is None:
        return []
    parts: list[Any] = [heading("Ways out")]
    if not found:
        return [*parts, paragraph("No interference needs a way out.")]
    for ways in found:
        parts.append(heading(ways_title(screening, ways), 2))
        rows = lever_rows(screening, ways)
        if rows:
            parts.append(data_table(LEVER_HEADS, rows, align="l" + "r" * 5 + "l" * (len(LEVER_HEADS) - 6)))
        parts += [note(line) for line in lever_notes(screening, ways)]
    return parts


def _questions(screening: Screening, asked: bool) -> list[Any]:
    if not asked:
        return []
    parts: list[Any] = [heading("Questions to suppliers")]
    for supplier, questions in questions_by_supplier(screening):
        parts.append(heading(supplier, 2))
        parts += bullets([f"{item.number}. {item.element}: {item.text}" for item in questions])
    return parts
