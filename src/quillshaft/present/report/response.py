"""The report's section on forced response: answer, closings, checks, torques, charts, and what it rests on."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from quillshaft.assess.response_results import Response
from quillshaft.present import response_rows as rows
from quillshaft.present import response_sources_rows as basis
from quillshaft.present import response_torque_rows as torques
from quillshaft.present.pdf.document import FigureFlowable, bullets, data_table, heading, note, paragraph
from quillshaft.present.response_duty_words import coupling_lines, damper_lines, generator_lines
from quillshaft.present.response_words import (
    answer_sentences,
    closing_sentences,
    fault_sentences,
    response_cautions,
    spread_sentence,
    unjudged_sentence,
)
from quillshaft.present.shown_text import assumed_rows

if TYPE_CHECKING:
    from matplotlib.figure import Figure

TORQUE_WIDTHS = (74, 118, 34, 58, 66, 54, 50)


def response_parts(response: Response | None) -> list[Any]:
    """Forced response as blocks of a report; nothing where it was not asked for."""
    if response is None:
        return []
    from quillshaft.present.charts import response_files

    figures = response_files(response)
    return [
        heading("Forced response"),
        *bullets(answer_sentences(response)),
        *_closings(response),
        *_findings(response),
        *_torques(response, figures),
        *_orders(response, figures),
        *_machines(response, figures),
        *_damping(response),
        *_basis(response),
        heading("Cautions on forced response", 2),
        *bullets(response_cautions(response)),
    ]


def _charts(figures: dict[str, Figure], kind: str) -> list[Any]:
    """The figures of one kind, each entered in the outline by its title."""
    from quillshaft.present.charts.look import title_of

    return [
        FigureFlowable(figure, bookmark_alt=title_of(figure))
        for name, figure in figures.items()
        if name.startswith(f"response-{kind}-")
    ]


def _closings(response: Response) -> list[Any]:
    found = closing_sentences(response)
    if not found:
        return [paragraph("The screening left no interference open.")]
    lines = [f"{status[0].upper()}{status[1:]}: {text}" for status, text in found]
    return [heading("What the screening left open", 2), *bullets(lines)]


def _findings(response: Response) -> list[Any]:
    table = data_table(rows.SHORT_FINDING_HEADS, rows.short_finding_rows(response), align="llrrrlll")
    text = (
        "The largest value of each check over all judged cases. Continuous: in the judged ranges; passing: at all "
        "other speeds from standstill to the highest."
    )
    limits = data_table(basis.LIMIT_HEADS, basis.limit_rows(response), column_widths=(26, 124))
    return [
        heading("Checks, the worst first", 2),
        table,
        note(text),
        heading("Limits of alternating torque and where they come from", 2),
        limits,
    ]


def _torques(response: Response, figures: dict[str, Figure]) -> list[Any]:
    heads = torques.torque_heads(response)
    parts: list[Any] = [heading("Alternating torque against speed", 2), *_charts(figures, "torque")]
    for title, cells in (
        ("Torques at rated speed", torques.rated_torque_rows(response)),
        ("Torques where the alternating one is largest", torques.largest_torque_rows(response)),
    ):
        if cells:
            parts += [heading(title, 2), data_table(heads, cells, column_widths=TORQUE_WIDTHS, align="llrrrrr")]
    text = (
        "Torque of each link at its first-named station. Alternating: half the peak-to-peak of the wave over a "
        "working cycle. By squares: the same with unlocked groups added by the root of their squares."
    )
    return [*parts, note(text)]


def _orders(response: Response, figures: dict[str, Figure]) -> list[Any]:
    heads, cells = torques.order_heads(response), torques.order_rows(response)
    parts: list[Any] = [heading("What shakes each link", 2)]
    if cells:
        parts.append(data_table(heads, cells, align="l" * (len(heads) - 1) + "r"))
        parts.append(note("Amplitudes of single sources in the normal case at rated speed, the largest first."))
    waves = _charts(figures, "wave")
    if waves:
        waves = [heading("Torque over a working cycle", 2), *waves]
    return [*parts, *_charts(figures, "orders"), *waves]


def _machines(response: Response, figures: dict[str, Figure]) -> list[Any]:
    """Generators, heat of couplings and dampers, and tooth separation, each where there is any."""
    parts: list[Any] = []
    heat = [*coupling_lines(response), *damper_lines(response)]
    from quillshaft.present.charts.response_gears import gear_lines, is_blank

    blank = [f"response-gear-{number}.pdf" for number, item in enumerate(response.maps, start=1) if is_blank(item)]
    figures = {name: figure for name, figure in figures.items() if name not in blank}
    for title, lines, kind in (
        ("With a damper at fault", fault_sentences(response), ""),
        ("Generators", generator_lines(response), ""),
        ("Heat of couplings and dampers", heat, "heat"),
        ("Where gear teeth separate", gear_lines(response), "gear"),
    ):
        drawn = _charts(figures, kind) if kind else []
        if lines or drawn:
            parts += [heading(title, 2), *bullets(lines), *drawn]
    return parts


def _damping(response: Response) -> list[Any]:
    cells = torques.spread_rows(response)
    said = spread_sentence(response, torques.spread_shares(response))
    if not cells or said is None:
        return []
    table = data_table(torques.spread_heads(response), cells, align="lrrrrr")
    return [heading("What damping decides", 2), paragraph(said), table]


def _basis(response: Response) -> list[Any]:
    """Cases, combination, amplitudes with their source, and what was assumed."""
    silent = unjudged_sentence(response)
    parts: list[Any] = [
        heading("Cases and combination", 2),
        paragraph(f"{basis.speed_words(response)}. {_sentence(response.combination)}"),
        data_table(basis.CASE_HEADS, basis.case_rows(response), column_widths=(50, 74, 26)),
    ]
    groups = basis.group_rows(response)
    if groups:
        parts.append(data_table(basis.GROUP_HEADS, groups, column_widths=(40, 110)))
    parts += [
        heading("Amplitudes used", 2),
        data_table(basis.AMPLITUDE_HEADS, basis.amplitude_rows(response), column_widths=(34, 28, 32, 34, 50)),
    ]
    parts += [paragraph(silent)] if silent else []
    if response.assumed:
        cells = assumed_rows(response.assumed, response.screening.train.units)
        head = ("Element", "key", "value", "why")
        parts += [heading("Assumed for the response", 2), data_table(head, cells, column_widths=(34, 26, 34, 60))]
    return [*parts, *bullets([_sentence(note) for note in response.notes])]


def _sentence(text: str) -> str:
    return f"{text[:1].upper()}{text[1:].rstrip('.')}."
