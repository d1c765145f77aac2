"""Page one: identification, verdict, what governs it and how sure it is; then train and operating map."""

from __future__ import annotations

import math
from typing import Any

from quillshaft.assess.response_results import Response
from quillshaft.assess.results import Screening
from quillshaft.present.pdf.document import (
    FigureFlowable,
    Tone,
    bullets,
    data_table,
    heading,
    key_values,
    note,
    paragraph,
    stamp,
)
from quillshaft.present.report.response_front import closed_verdict
from quillshaft.present.units import SHOWN
from quillshaft.present.words import (
    apart_words,
    attention_sentences,
    bar_words,
    case_lines,
    counted,
    has_tolerances,
    hertz,
    mode_words,
    number,
    percent,
    plain,
    range_words,
    temperature_words,
    unclear_cases,
    unjudged_lines,
    verdict_sentence,
)
from quillshaft.version import __version__

RPM = 30.0 / math.pi
MOST_ON_PAGE_ONE = 4


def report_title(screening: Screening, response: Response | None = None) -> str:
    """Title of the document."""
    train = screening.train
    case = f", case {' + '.join(train.cases)}" if train.cases else ""
    what = "Torsional screening" if response is None else "Torsional screening and forced response"
    return f"{what}: {train.title}{case}"


def front_parts(screening: Screening, response: Response | None = None) -> list[Any]:
    """Page one and the train page as blocks of a report; with a response the verdict is the one it comes to."""
    if response is None:
        verdict = _verdict(screening)
    else:
        verdict = closed_verdict(response, headline(screening), [*_governing(screening, True), *_basis(screening)])
    return [*_identification(screening, response), *verdict, *_train(screening), *_operating_map(screening)]


def _identification(screening: Screening, response: Response | None) -> list[Any]:
    train, sign = screening.train, screening.train.sign_off
    pairs = [
        ("Train", train.title + (f" ({train.tag})" if train.tag else "")),
        ("Document", f"{sign.document or 'not numbered'}, revision {sign.revision or 'not stated'}"),
        ("Date and status", f"{sign.date or 'not dated'}, {sign.status}"),
    ]
    if sign.client:
        pairs.append(("Client", sign.client))
    for name, because in zip(train.cases, train.cases_because, strict=True):
        pairs.append(("Case", f"{name}: {because}" if because else name))
    pairs += [
        ("Input", f"{train.file.name}, SHA-256 {train.file.sha256}"),
        ("Made with", f"Quillshaft {__version__}"),
    ]
    return [heading(report_title(screening, response)), key_values(pairs)]


def headline(screening: Screening) -> tuple[str, Tone]:
    """The words of the stamp and its tone."""
    unclear = unclear_cases(screening)
    of_cases = f"; {unclear} of {counted(len(screening.cases or ()), 'case')} not clear" if unclear else ""
    if screening.narrow_bars:
        return f"NOT CLEAR: a barred speed range is too narrow{of_cases}", "fail"
    if screening.fails:
        return f"NOT CLEAR: forced response or a change of design is needed{of_cases}", "fail"
    if not screening.interferences:
        return f"NOTHING JUDGED: no mode lies in the reach of a source{apart_words(screening)}{of_cases}", "restriction"
    if screening.gravest_verdict == "barred":
        return (
            f"PASS WITH RESTRICTION: barred speed ranges must be kept{apart_words(screening)}{of_cases}",
            "restriction",
        )
    if apart_words(screening) or unclear or unjudged_lines(screening):
        base = " FOR THE BASE TRAIN" if unclear else ""
        return f"PASS{base}{apart_words(screening)}{of_cases}", "restriction"
    return "PASS: no interference within the required separation", "pass"


def _verdict(screening: Screening) -> list[Any]:
    detail = f"Over the tolerances: {verdict_sentence(screening, worst=True)}"
    detail += f"\nNominal: {verdict_sentence(screening, worst=False)}"
    detail += "".join(f"\n{line}" for line in (*case_lines(screening), *unjudged_lines(screening)))
    text, tone = headline(screening)
    parts: list[Any] = [stamp(text, tone, detail), key_values([*_governing(screening), *_basis(screening)])]
    accepted = [sentence for _, sentence in attention_sentences(screening, dismissed=True)]
    if accepted:
        parts.append(heading("Accepted by name", 2))
        parts += bullets(accepted[:MOST_ON_PAGE_ONE])
    unclear = [sentence for _, sentence in attention_sentences(screening, dismissed=False)]
    if unclear:
        parts.append(heading("What is not clear, worst first", 2))
        parts += bullets(unclear[:MOST_ON_PAGE_ONE])
        if len(unclear) > MOST_ON_PAGE_ONE:
            left = len(unclear) - MOST_ON_PAGE_ONE
            parts.append(note(f"{left} more follow below the interference diagram."))
    return parts


def _governing(screening: Screening, closed: bool = False) -> list[tuple[str, str]]:
    governing = screening.governing()
    if governing is None:
        return []
    mode = screening.mode(governing.mode)
    low, high = mode.bounds_hz
    margin = (
        f"{percent(governing.margin, True)} nominal, {percent(governing.worst_margin, True)} over the tolerances; "
        f"required {plain(governing.required)} and {plain(governing.worst_required)}"
    )
    span = f"{hertz(low)} to {hertz(high)} Hz over all tolerances together"
    return [
        ("Governing item", f"mode {mode.mode} ({mode_words(mode)}) and {governing.source}"),
        ("Its margin", margin + bar_words(governing, closed)),
        (
            "Its uncertainty",
            f"natural frequency {hertz(mode.frequency_hz)} Hz, "
            + (span if has_tolerances(screening) else "no tolerances considered"),
        ),
    ]


def _basis(screening: Screening) -> list[tuple[str, str]]:
    dismissed = sum(pair.dismissed is not None for pair in screening.interferences)
    off = ", ".join(source.name for source, _ in screening.sources_off)
    state = temperature_words(screening)
    rows = [
        ("Judged range", range_words(screening) + (f"; {state}" if state else "")),
        (
            "Assumed",
            f"{counted(len(screening.assumed), 'value')} that the file does not state (listed under Assumptions); "
            f"{counted(len(screening.flags), 'question')} about the data",
        ),
        (
            "Dismissed",
            f"{counted(dismissed, 'interference')} accepted by name; "
            f"{counted(len(screening.stale_dismissals), 'dismissal')} stated but not applied",
        ),
    ]
    if off:
        rows.append(("Switched off", f"{off} (reasons under Dismissals)"))
    return [*rows, ("Numerical proof", proof_sentence(screening))]


def proof_sentence(screening: Screening) -> str:
    """Whether every frequency is bracketed and none is missed."""
    check = screening.self_check
    if check.modes == 0:
        return "the train has no elastic mode"
    if not check.all_proven:
        return "NOT all natural frequencies could be proven by counting: do not use these results"
    return f"{check.modes} natural frequencies, each bracketed by counting the modes below it; none is missed"


def _train(screening: Screening) -> list[Any]:
    from quillshaft.present.charts import train_diagram

    figure = FigureFlowable(train_diagram(screening), bookmark_alt="The train as a diagram")
    return [heading("Train"), figure]


def _operating_map(screening: Screening) -> list[Any]:
    train, operation = screening.train, screening.train.operation
    rows = [("Rated speed", f"{operation.rated_rad_s * RPM:.1f} rpm at {operation.speed_at}")]
    rows.append(("Judged range", range_words(screening)))
    if operation.idle_rad_s is not None:
        rows.append(("Idle", f"{operation.idle_rad_s * RPM:.0f} rpm"))
    if operation.trip_rad_s is not None:
        rows.append(("Trip", f"{operation.trip_rad_s * RPM:.0f} rpm"))
    for low, high in operation.barred_rad_s:
        rows.append(("Barred", f"{low * RPM:.0f} to {high * RPM:.0f} rpm: {operation.barred_because}"))
    for name, speed in operation.speeds_rad_s.items():
        rows.append((f"Speed of {name}", f"{speed * RPM:.1f} rpm at rated, in proportion elsewhere"))
    if any(machine.supply_hz for machine in train.machines):
        rows.append(("Supply band", f"±{plain(operation.supply_band)}"))
    parts: list[Any] = [heading("Operating map", 2), key_values(rows)]
    parts += [heading("Mean power at rated speed", 3), *_power(screening)]
    return parts


def _power(screening: Screening) -> list[Any]:
    power = screening.train.power
    if power is None:
        return [paragraph("No power is given: mean torques and wind-up are not worked out.")]
    units, graph = SHOWN[screening.train.units], screening.graph
    rows = []
    for name, watts in screening.station_power_w:
        ratio = float(graph.speed_ratio[graph.number(name)])
        speed = screening.train.operation.rated_rad_s * ratio
        shown = f"{number(watts / 1e3 * units.per_kw)} {units.power}"
        if power.stations_w[name] is None:
            shown += " (balance)"
        torque = f"{number(watts / abs(speed) * units.per_nm)} {units.torque}"
        rows.append((name, shown, f"{speed * RPM:.1f}", torque))
    table = data_table(("Station", "mean power, + drives", "rpm", "mean torque there"), rows, align="lrrr")
    law = power.law
    if law is None:
        return [table]
    words = law if isinstance(law, str) else ", ".join(f"{n * RPM:.0f} rpm {plain(s)}" for n, s in law)
    return [table, note(f"Load law: {words}.")]
