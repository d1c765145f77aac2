"""Page one once the response is known: the verdict it comes to, and what became of each open interference."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from quillshaft.assess.response_results import Response
from quillshaft.assess.response_standing import Standing, standing
from quillshaft.assess.results import Screening
from quillshaft.present.pdf.document import Tone, bullets, heading, key_values, note, stamp
from quillshaft.present.response_values import finding_text, finding_use
from quillshaft.present.response_words import closing_sentences, restriction_words, tally_sentences
from quillshaft.present.shown_text import shown_text
from quillshaft.present.words import (
    apart_words,
    attention_sentences,
    case_lines,
    counted,
    unclear_cases,
    unjudged_lines,
    verdict_sentence,
)

MOST_ON_PAGE_ONE = 4
BY_SEPARATION = {
    "Governing item": "Governing by separation",
    "Its margin": "Its margin by separation",
    "Its uncertainty": "Uncertainty of the mode",
}
Headline = tuple[str, Tone]


def closed_verdict(response: Response, by_separation: Headline, rows: Sequence[tuple[str, str]]) -> list[Any]:
    """Stamp, key figures and closings; `by_separation` and `rows` are those of the screening."""
    screening = response.screening
    text, tone = response_headline(response, by_separation)
    lines = (
        *tally_sentences(response),
        f"By separation alone, over the tolerances: {verdict_sentence(screening, worst=True)}",
        f"By separation alone, nominal: {verdict_sentence(screening, worst=False)}",
        *case_lines(screening),
        *unjudged_lines(screening),
    )
    governing = response.governing
    by_response = [] if governing is None else [("Governing by response", finding_text(response, governing))]
    by_response += [("Its basis", shown_text(governing.basis, screening.train.units))] if governing is not None else []
    named = [(BY_SEPARATION.get(label, label), value) for label, value in rows]
    parts: list[Any] = [stamp(text, tone, "\n".join(lines)), key_values([*by_response, *named])]
    accepted = [sentence for _, sentence in attention_sentences(screening, dismissed=True)]
    if accepted:
        parts += [heading("Accepted by name", 2), *bullets(accepted[:MOST_ON_PAGE_ONE])]
    return [*parts, *_closings(response)]


def response_headline(response: Response, by_separation: Headline) -> Headline:
    """The words of the stamp and its tone: a pass only where nothing fails and nothing is left open."""
    screening, found = response.screening, standing(response)
    remarks = _remarks(screening)
    if found.verdict == "fail":
        return f"NOT CLEAR: {_failure(found)}{remarks}", "fail"
    left = len(found.not_judged) + len(found.unclosed)
    if left:
        why = " for want of amplitudes or limits" if found.not_judged else ""
        return f"NOT CLEAR: forced response leaves {counted(left, 'interference')} unjudged{why}{remarks}", "fail"
    if found.verdict == "not judged":
        words, tone = by_separation
        return f"{words}; forced response not judged, no limit is given", "fail" if tone == "fail" else "restriction"
    if found.verdict == "restricted":
        return f"PASS WITH RESTRICTION: {restriction_words(response, found)}{remarks}", "restriction"
    words = (
        "forced response clears what separation left open" if response.closings else "clear by separation, limits kept"
    )
    silent = any(item.limit is None for item in response.findings)
    if remarks or silent or unjudged_lines(screening):
        base = " FOR THE BASE TRAIN" if unclear_cases(screening) else ""
        limits = " (as far as limits are given)" if silent else ""
        return f"PASS{base}: {words}{limits}{remarks}", "restriction"
    return f"PASS: {words}", "pass"


def _failure(found: Standing) -> str:
    """What is exceeded worst, or how many interferences are not cleared."""
    if not found.failed and not found.not_cleared:
        return "by forced response rated speed lies in a range that would have to be barred"
    if not found.failed:
        return f"forced response does not clear {counted(len(found.not_cleared), 'interference')}"
    worst = next((item for item in found.failed if item not in found.dead), found.failed[0])
    more = f" and {counted(len(found.failed) - 1, 'more limit')}" if len(found.failed) > 1 else ""
    return f"forced response exceeds the limit of {worst.element} ({worst.check}, {finding_use(worst)}){more}"


def _remarks(screening: Screening) -> str:
    """What stands beside any verdict: dismissals, sources switched off, cases that are not clear."""
    unclear = unclear_cases(screening)
    of_cases = (
        f"; {unclear} of {counted(len(screening.cases or ()), 'case')} not clear by separation" if unclear else ""
    )
    return f"{apart_words(screening)}{of_cases}"


def _closings(response: Response) -> list[Any]:
    """What became of each open interference, what is left open first."""
    found = closing_sentences(response)
    if not found:
        return []
    lines = [f"{status[0].upper()}{status[1:]}: {text}" for status, text in found]
    parts: list[Any] = [heading("What the screening left open, and what became of it", 2)]
    parts += bullets(lines[:MOST_ON_PAGE_ONE])
    if len(lines) > MOST_ON_PAGE_ONE:
        parts.append(note(f"{len(lines) - MOST_ON_PAGE_ONE} more follow in the section on forced response."))
    return parts
