"""The before-and-after sheet: a comparison as a PDF for sign-off."""

from __future__ import annotations

from typing import Any

from quillshaft.assess.results import Screening
from quillshaft.present import comparison_rows as rows
from quillshaft.present.comparison_words import case_title, mode_notes, reapproval_sentences, shift_sentence
from quillshaft.present.pdf.blocks import KeptTogether
from quillshaft.present.pdf.document import (
    FigureFlowable,
    PageFrame,
    SignatureRow,
    build_pdf,
    bullets,
    caution_box,
    data_table,
    heading,
    key_values,
    note,
    paragraph,
    signature_block,
    stamp,
)
from quillshaft.present.report.closing import CAUTIONS
from quillshaft.present.report.front import headline, proof_sentence
from quillshaft.present.units import SHOWN
from quillshaft.present.words import hertz, mode_words, percent, plain, range_words, verdict_sentence
from quillshaft.study.compare import CaseComparison, Comparison
from quillshaft.version import __version__

FOOT = (
    "Comparison of torsional vibration only; no approval by any class society or purchaser. Valid only for the "
    "parts, data and limits listed. Local codes and site rules come first."
)


def comparison_pdf(comparison: Comparison) -> bytes:
    """A comparison as PDF bytes; the same input gives the same bytes, dates come from the train file."""
    sign = comparison.base.train.sign_off
    title = sheet_title(comparison)
    frame = PageFrame(
        document=sign.document or comparison.base.train.tag or "",
        revision=sign.revision or "",
        status=sign.status,
        title=title,
        date=sign.date or "",
        caution=FOOT,
        author=sign.prepared or "",
    )
    story: list[Any] = [heading(title), _identification(comparison)]
    for case in comparison.cases:
        story += case_parts(comparison.base, case)
    return build_pdf([*story, *_closing(comparison)], frame)


def sheet_title(comparison: Comparison) -> str:
    """Title of the document."""
    return f"Before and after: {comparison.base.train.title}"


def case_parts(base: Screening, case: CaseComparison) -> list[Any]:
    """Everything about one case as blocks of a report: verdict, sheet, chart, modes, margins, duties, approvals."""
    return [
        *_verdict(case),
        *_sheet(base, case),
        *_modes(base, case),
        *_margins(base, case),
        *_duties(base, case),
        *_approvals(case),
    ]


def _identification(comparison: Comparison) -> Any:
    train, sign = comparison.base.train, comparison.base.train.sign_off
    pairs = [
        ("Train", train.title + (f" ({train.tag})" if train.tag else "")),
        ("Document", f"{sign.document or 'not numbered'}, revision {sign.revision or 'not stated'}"),
        ("Date and status", f"{sign.date or 'not dated'}, {sign.status}"),
        ("Judged range", range_words(comparison.base)),
        ("Before", "the train file without its cases"),
    ]
    if sign.client:
        pairs.insert(3, ("Client", sign.client))
    pairs += [("After", case_title(case)) for case in comparison.cases]
    pairs += [
        ("Numerical proof", _proof(comparison)),
        ("Input", f"{train.file.name}, SHA-256 {train.file.sha256}"),
        ("Made with", f"Quillshaft {__version__}"),
    ]
    return key_values(pairs)


def _proof(comparison: Comparison) -> str:
    sides = [("before", comparison.base), *((f"after {case.name}", case.screening) for case in comparison.cases)]
    said = {name: proof_sentence(screening) for name, screening in sides}
    if len(set(said.values())) == 1:
        return f"{next(iter(said.values()))}, before and after"
    return "; ".join(f"{name}: {text}" for name, text in said.items())


def _verdict(case: CaseComparison) -> list[Any]:
    screening = case.screening
    text, tone = headline(screening)
    detail = f"Over the tolerances: {verdict_sentence(screening, worst=True)}"
    detail += f"\nNominal: {verdict_sentence(screening, worst=False)}"
    return [heading(f"After {case_title(case)}", 2), stamp(f"AFTER THE CHANGE: {text}", tone, detail)]


def _sheet(base: Screening, case: CaseComparison) -> list[Any]:
    """The two columns: everything a reader compares first."""
    unit = SHOWN[base.train.units].torque
    before, after = _facts(base), _facts(case.screening)
    lines = [(path, old, new) for path, old, new in rows.change_rows(case)]
    lines += [(label, old, after[label]) for label, old in before.items()]
    for item in case.matched:
        if item.mode_base in base.judged_modes or item.mode_case in case.screening.judged_modes:
            lines.append((f"Mode {item.mode_base}, Hz", _frequency(item.from_hz, item.from_bounds_hz), _now(item)))
    lines += [
        (f"{row[0]}: mean torque, wind-up", _duty(row[1:4], unit), _duty(row[4:7], unit))
        for row in rows.duty_rows(Comparison(base, (case,)))
    ]
    widths = (52, 54, 54)
    return [
        heading("The change on one sheet", 2),
        data_table(("", "Before", f"After {case.name}"), lines, column_widths=widths),
        note(
            "Values under the names of the train file are as the file writes them; nothing else in it differs. "
            "Frequencies: nominal, and the exact range over all tolerances."
        ),
    ]


def _duty(cells: tuple[str, ...], unit: str) -> str:
    torque, wind, share = cells
    return f"{torque} {unit}, {wind}°" + ("" if share == rows.NOTHING else f", {share} % of rated")


def _facts(screening: Screening) -> dict[str, str]:
    governing = screening.governing()
    facts = {
        "Verdict, nominal": verdict_sentence(screening, worst=False),
        "Verdict over the tolerances": verdict_sentence(screening, worst=True),
        "Governing item": "nothing is judged",
        "Its margin": "–",
    }
    if governing is not None:
        mode = screening.mode(governing.mode)
        facts["Governing item"] = f"mode {mode.mode} ({mode_words(mode)}) and {governing.source}"
        facts["Its margin"] = (
            f"{percent(governing.margin, True)} nominal, {percent(governing.worst_margin, True)} over the tolerances; "
            f"required {plain(governing.required)} and {plain(governing.worst_required)}"
        )
    facts["Assumed values"] = f"{len(screening.assumed)}"
    facts["Dismissals applied"] = f"{sum(pair.dismissed is not None for pair in screening.interferences)}"
    return facts


def _frequency(frequency_hz: float, bounds_hz: tuple[float, float]) -> str:
    return f"{hertz(frequency_hz)} ({hertz(bounds_hz[0])} to {hertz(bounds_hz[1])})"


def _now(item: Any) -> str:
    text = _frequency(item.to_hz, item.to_bounds_hz)
    return f"{text}, now mode {item.mode_case}" if item.renumbered else text


def _modes(base: Screening, case: CaseComparison) -> list[Any]:
    from quillshaft.present.charts.comparison import comparison_chart

    one = Comparison(base, (case,))
    table = data_table(
        (
            "Mode",
            "before, Hz",
            "over tolerances, Hz",
            "mode now",
            "after, Hz",
            "over tolerances, Hz",
            "change, %",
            "alike",
        ),
        rows.mode_rows(one),
        column_widths=(14, 19, 32, 14, 19, 32, 18, 16),
        align="rrrrrrrr",
    )
    parts: list[Any] = [
        heading("Modes before and after", 2),
        FigureFlowable(comparison_chart(base, case), bookmark_alt=f"Modes before and after {case.name}"),
        paragraph(
            "Modes are matched by their shapes, not by their numbers: 1 means the same shape, 0 nothing in common "
            "(modal assurance, weighted with the inertia at every station that both trains have). A mode whose shape "
            "changes gradually is followed along the change."
        ),
        table,
    ]
    return parts + bullets(mode_notes(case))


def _margins(base: Screening, case: CaseComparison) -> list[Any]:
    one = Comparison(base, (case,))
    found = rows.pair_rows(one)
    shifts = [shift_sentence(pair) for pair in case.pairs if pair.changed(worst=False) or pair.changed(worst=True)]
    head = (
        "Mode",
        "source",
        "req., %",
        "before, %",
        "over tol., %",
        "verdicts",
        "after, %",
        "over tol., %",
        "verdicts",
    )
    parts: list[Any] = [heading("Verdicts that the change moves", 2)]
    parts += bullets(shifts) or [paragraph("None.")]
    parts.append(heading("Margins of every pair not clear before or after", 2))
    if not found:
        return [*parts, paragraph("Every pair is clear before and after.")]
    table = data_table(head, found, column_widths=(15, 29, 15, 17, 17, 21, 17, 17, 21), align="rlrrrlrrl")
    return [*parts, table, note("Verdicts: nominal / over the tolerances, one word where both agree.")]


def _duties(base: Screening, case: CaseComparison) -> list[Any]:
    one = Comparison(base, (case,))
    found = rows.duty_rows(one)
    parts: list[Any] = [heading("Mean torque and wind-up at rated power", 2)]
    if not found:
        return [*parts, paragraph("The train has no coupling, and no link's duty changes.")]
    unit = rows.duty_heads(one)[1].rsplit(", ", 1)[1]
    head = ("Link", f"before, {unit}", "wind-up, °", "of rated, %", f"after, {unit}", "wind-up, °", "of rated, %")
    table = data_table(head, found, column_widths=(34, 20, 18, 18, 20, 18, 18), align="lrrrrrr")
    return [*parts, table, note("Couplings, and every other link whose duty changes.")]


def _approvals(case: CaseComparison) -> list[Any]:
    lines = [f"{number}. {text}" for number, text in enumerate(reapproval_sentences(case), start=1)]
    return [heading("To be approved anew", 2), *(paragraph(line) for line in lines)]


def _closing(comparison: Comparison) -> list[Any]:
    sign = comparison.base.train.sign_off
    signatures = [
        SignatureRow("Prepared", sign.prepared or "", (sign.date or "") if sign.prepared else ""),
        SignatureRow("Checked", sign.checked or ""),
        SignatureRow("Approved", sign.approved or ""),
    ]
    if sign.client:
        signatures.append(SignatureRow("Client", sign.client))
    return [
        heading("Cautions"),
        KeptTogether([caution_box("\n".join(f"{number}. {text}" for number, text in enumerate(CAUTIONS, start=1)))]),
        heading("Sign-off"),
        signature_block(signatures),
    ]
