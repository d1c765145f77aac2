"""Dismissals, assumptions, questions, self-check, cautions, the input as read, and the lines to sign."""

from __future__ import annotations

from typing import Any

from quillshaft.assess.results import Interference, Screening
from quillshaft.present.pdf.document import (
    SignatureRow,
    bullets,
    caution_box,
    data_table,
    heading,
    note,
    paragraph,
    signature_block,
    verbatim,
)
from quillshaft.present.report.findings import margin_matrix
from quillshaft.present.report.front import proof_sentence
from quillshaft.present.shown_text import assumed_rows, shown_text
from quillshaft.present.words import attention_sentences, hertz

CAUTIONS = (
    "The results hold for the parts, data and limits listed here and for nothing else. A margin smaller than its "
    "uncertainty is no margin.",
    "Only twisting vibration is covered: no lateral or axial vibration, no blade or casing resonance.",
    "Damping is estimated. Resonance amplitudes that rest on it can be wrong by a factor of two: confirm by "
    "measurement where the verdict depends on them.",
    "A healthy train is taken for granted apart from the cases stated. A converter is taken to behave as its maker "
    "describes it.",
    "Stay out of a speed at which an interference was found until it is cleared. Speed restrictions must reach the "
    "operator and allow for the error of the tachometer.",
    "Stop the train on unusual noise, rubber dust, heat at a coupling or a swinging torque or current.",
    "Work on rotating shafts, strain gauging included, needs guarding and a permit to work.",
    "This screening is no approval by a class society, an authority or a purchaser. A competent engineer, licensed "
    "where the law asks for it, reviews and signs. Local codes, standards and site rules come first.",
)
VOID = (
    "a coupling, its element or its size is replaced by another",
    "an impeller, propeller, fan wheel or flywheel is changed, trimmed, or loses material",
    "a gear is replaced by one with other tooth numbers",
    "the speed range, the driver or its converter settings change",
    "a measured natural frequency lies outside the range given here",
)


def closing_parts(screening: Screening) -> list[Any]:
    """Everything after the findings as blocks of a report."""
    return [
        *_dismissals(screening),
        *_assumptions(screening),
        *_questions(screening),
        *_self_check(screening),
        heading("Appendix A: margins of every judged pair"),
        *margin_matrix(screening),
        heading("Appendix B: the input file as read"),
        note(f"{screening.train.file.name}, SHA-256 {screening.train.file.sha256}"),
        *_named_files(screening),
        verbatim(screening.train.file.text),
        *_cautions(),
        *_sign_off(screening),
    ]


def _named_files(screening: Screening) -> list[Any]:
    """The files that the input names, with their own digests: the digest of the input covers them too."""
    files = screening.train.file.files
    if not files:
        return []
    listed = "; ".join(f"{item.name}, SHA-256 {item.sha256 or 'not found'}" for item in files)
    return [note(f"It names these files, and its digest covers them: {listed}.")]


def _dismissals(screening: Screening) -> list[Any]:
    dismissed = [pair for pair in screening.interferences if pair.dismissed is not None]
    parts: list[Any] = [heading("Dismissals, exclusions and what voids the result")]
    parts.append(heading("Interferences accepted by name", 2))
    accepted = [sentence for _, sentence in attention_sentences(screening, dismissed=True)]
    accepted += [
        f"{pair.source}, mode {pair.mode}: clear, the dismissal is not needed" for pair in dismissed if _is_clear(pair)
    ]
    parts += bullets(accepted) or [paragraph("None.")]
    if screening.stale_dismissals:
        parts.append(heading("Dismissals that were not applied", 2))
        parts += bullets(
            [
                f"{item.dismissal.name} ({item.dismissal.source}, mode {item.dismissal.mode} at "
                f"{hertz(item.dismissal.frequency_hz)} Hz, by {item.dismissal.by}): {item.why}."
                for item in screening.stale_dismissals
            ]
        )
    if screening.sources_off:
        parts.append(heading("Sources switched off", 2))
        parts += bullets([f"{source.name}: {why}" for source, why in screening.sources_off])
    later = [source for source in screening.sources if source.when != "continuous"]
    if later:
        parts.append(heading("Sources of starts and faults, not judged here", 2))
        parts += bullets([f"{source.name}: {source.when}" for source in later])
    parts.append(heading("What voids the result", 2))
    parts += bullets(VOID)
    return parts


def _is_clear(pair: Interference) -> bool:
    return pair.verdict == pair.worst_verdict == "clear"


def _assumptions(screening: Screening) -> list[Any]:
    rows = assumed_rows(screening.assumed, screening.train.units)
    parts: list[Any] = [heading(f"Assumptions ({len(rows)})")]
    if not rows:
        return [*parts, paragraph("Nothing was assumed: the file states every value used.")]
    widths = (34, 26, 34, 60)
    return [*parts, data_table(("Element", "key", "value", "why"), rows, column_widths=widths)]


def _questions(screening: Screening) -> list[Any]:
    parts: list[Any] = [heading(f"Questions about the data ({len(screening.flags)})")]
    lines = [f"{flag.element}: {shown_text(flag.text, screening.train.units)}" for flag in screening.flags]
    return [*parts, *(bullets(lines) or [paragraph("None arose.")])]


def _self_check(screening: Screening) -> list[Any]:
    check = screening.self_check
    rows = [
        ("every natural frequency bracketed, none missed", proof_sentence(screening)),
        ("half-width of each bracket, relative", _bound(check.relative_width, 1.01e-11)),
        ("torque left over at a station, over the largest", _bound(check.largest_residual, 1e-11)),
        ("energy shares of each mode add to 1 within", _bound(check.largest_energy_error, 1e-12)),
    ]
    return [
        heading("Numerical self-check"),
        paragraph(
            "Natural frequencies are singular values of the factored stiffness, each refined once on the "
            "elimination of the graph and then proven: the number of modes below a frequency is the number of "
            "negative pivots there (Sylvester's law of inertia), counted just below and just above it."
        ),
        data_table(("Check", "result"), rows, column_widths=(60, 90)),
    ]


def _bound(value: float, limit: float) -> str:
    """A figure as a bound, so that the report does not change with the last digits of a machine."""
    return f"below {limit:.0e}" if value < limit else f"{value:.1e}, above the expected {limit:.0e}"


def _cautions() -> list[Any]:
    return [heading("Cautions"), caution_box("\n".join(f"{i}. {text}" for i, text in enumerate(CAUTIONS, 1)))]


def _sign_off(screening: Screening) -> list[Any]:
    sign = screening.train.sign_off
    rows = [
        SignatureRow("Prepared", sign.prepared or "", (sign.date or "") if sign.prepared else ""),
        SignatureRow("Checked", sign.checked or ""),
        SignatureRow("Approved", sign.approved or ""),
    ]
    if sign.client:
        rows.append(SignatureRow("Client", sign.client))
    parts: list[Any] = [heading("Sign-off"), signature_block(rows)]
    if sign.history:
        history = [(item.revision, item.date, item.what, item.by or "") for item in sign.history]
        parts += [heading("History", 2), data_table(("Revision", "date", "what", "by"), history)]
    return parts
