"""The forced response in plain sentences: the answer first, then what became of each open interference."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence

from quillshaft.assess.response_results import Closing, Finding, Response
from quillshaft.assess.response_standing import Standing, standing
from quillshaft.assess.results import Interference
from quillshaft.present.response_values import finding_text
from quillshaft.present.words import counted, group_sentence, hertz, pair_verdict, percent, same_line

STATUS_WORDS = {
    "cleared by response": "cleared by response",
    "not cleared": "NOT CLEARED",
    "not judged: no amplitude": "NOT JUDGED, no amplitude",
    "not judged: no limit": "NOT JUDGED, no limit",
}
"""A closing's status, those that leave it open in capitals."""
GRAVITY = ("not cleared", "not judged: no limit", "not judged: no amplitude", "cleared by response")
MOST_SOURCES = 6


def answer_sentences(response: Response) -> list[str]:
    """Whether it passes; the governing item; how many limits are kept and how many interferences closed."""
    lines = [verdict_sentence(response, standing(response))]
    governing = response.governing
    if governing is not None:
        lines.append(f"Governing: {finding_text(response, governing)}.")
    return [*lines, *tally_sentences(response)]


def tally_sentences(response: Response) -> list[str]:
    """How many limits are kept, and what became of what the screening left open."""
    lines = [_tally(response, standing(response))]
    return [*lines, closings_tally(response)] if response.closings else lines


def verdict_sentence(response: Response, found: Standing) -> str:
    """The verdict in one sentence."""
    if found.verdict == "fail":
        parts = [f"{counted(len(found.failed), 'limit')} exceeded"] if found.failed else []
        if found.not_cleared:
            parts.append(f"{counted(len(found.not_cleared), 'interference')} not cleared")
        if found.rated_barred:
            parts.append("rated speed in a range that would have to be barred")
        return f"Does not pass: {_listed(parts)}."
    if found.verdict == "not judged":
        left = len(found.not_judged) + len(found.unclosed)
        if not left:
            return "Not judged: no limit is given that an alternating torque, stress or heat could be held against."
        kept = "exceeded only with a cylinder dead" if found.failed else "kept"
        return f"Not judged throughout: {counted(left, 'interference')} left open; every limit given is {kept}."
    if found.verdict == "restricted":
        return f"Passes with restriction: {restriction_words(response, found)}."
    silent = any(item.limit is None for item in response.findings)
    text = "Passes as far as limits are given: all of them are kept" if silent else "Passes: every limit is kept"
    return text + (", every open interference is cleared." if response.closings else ".")


def restriction_words(response: Response, found: Standing) -> str:
    """Which speed ranges must be barred, where idle must lie, how much load may be kept with a cylinder dead."""
    spans = [f"{span.from_rpm:.0f} to {span.to_rpm:.0f} rpm" for span in response.restrictions.barred]
    parts = [f"{_listed(spans)} must be barred"] if spans else []
    if found.barred and not spans:
        parts.append("the barred speed ranges of the file must be kept")
    if found.low_idle:
        parts.append(f"idle at {math.ceil(response.restrictions.lowest_idle_rpm or 0.0)} rpm or above")
    if found.dead:
        loads = [item for item in response.restrictions.dead_loads if (item.load_share or 0.0) < 1.0]
        said = [f"at most {(item.load_share or 0.0) * 100:.0f} % of full load with {item.cylinder}" for item in loads]
        helped = tuple(f"{item.machine} cylinder" for item in response.restrictions.dead_loads)
        other = dict.fromkeys(item.case.split(",")[0] for item in found.dead if not item.case.startswith(helped))
        said += [f"no running with {case}" for case in other]
        parts.append(_listed(said) if said else "less load with a cylinder dead")
    return "; ".join(parts)


def _tally(response: Response, found: Standing) -> str:
    kept = sum(item.verdict == "pass" for item in response.findings)
    silent = sum(item.verdict == "no limit given" for item in response.findings)
    text = f"Of {counted(len(response.findings), 'check')} {kept} {'keeps its' if kept == 1 else 'keep their'} limit"
    text += f", {len(found.failed)} {'exceeds' if len(found.failed) == 1 else 'exceed'} it"
    if found.failed and len(found.dead) == len(found.failed):
        text += ", only with a cylinder dead"
    text += f", {silent} {'has' if silent == 1 else 'have'} none to be held against." if silent else "."
    if response.unjudged:
        verb = "is" if len(response.unjudged) == 1 else "are"
        text += f" {counted(len(response.unjudged), 'source')} without an amplitude {verb} not in it."
    return text


def fault_sentences(response: Response) -> list[str]:
    """What a damper at fault would exceed: shown beside the verdict, which takes dampers to be in order."""
    if not response.faults:
        return []
    lines = [f"{finding_text(response, item)}." for item in response.faults]
    return ["Not part of the verdict, which takes dampers to be in order:", *lines]


def closings_tally(response: Response) -> str:
    """How many of the interferences that the screening left open were cleared, were not, or were not judged."""
    counts = {status: sum(item.status == status for item in response.closings) for status in reversed(GRAVITY)}
    parts = [f"{count} {STATUS_WORDS[status]}" for status, count in counts.items() if count]
    return f"Left open by the screening: {counted(len(response.closings), 'interference')}, {', '.join(parts)}."


def _listed(words: Sequence[str], most: int | None = None) -> str:
    shown = list(words)
    if most is not None and len(shown) > most:
        shown = [*shown[: most - 1], f"{len(shown) - most + 1} more"]
    return shown[0] if len(shown) == 1 else f"{', '.join(shown[:-1])} and {shown[-1]}"


def closing_sentences(response: Response) -> list[tuple[str, str]]:
    """(status in words, sentence) of every closing, what is left open first; those alike share a sentence."""
    by_mode: dict[tuple[str, str, int], list[Closing]] = {}
    for item in sorted(response.closings, key=lambda item: GRAVITY.index(item.status)):
        by_mode.setdefault((item.status, _reason(item), item.mode), []).append(item)
    alike: dict[object, list[list[Closing]]] = {}
    for (status, reason, _), items in by_mode.items():
        alike.setdefault((status, reason, tuple(item.source for item in items)), []).append(items)
    return [_closing_sentence(response, groups) for groups in alike.values()]


def _closing_sentence(response: Response, groups: list[list[Closing]]) -> tuple[str, str]:
    """Modes with the same sources, status and reason."""
    first = groups[0][0]
    numbers = sorted(items[0].mode for items in groups)
    modes = [f"{number} ({hertz(response.screening.mode(number).frequency_hz)} Hz)" for number in numbers]
    sources = _listed([item.source for item in groups[0]], MOST_SOURCES)
    word = "Mode" if len(modes) == 1 else "Modes"
    return STATUS_WORDS[first.status], f"{word} {_listed(modes)} with {sources}: {_why(first, response)}."


def _why(closing: Closing, response: Response) -> str:
    """Why a closing stands as it does: the governing finding where there is one."""
    if closing.finding is not None:
        return finding_text(response, closing.finding)
    return _reason(closing)


def _reason(closing: Closing) -> str:
    """A closing's words without the name of the pair before them, and without repeating a reason in brackets."""
    text = closing.text.removeprefix(f"mode {closing.mode} with {closing.source}: ").rstrip(".")
    return re.sub(r" (\([^()]*\))(?=, [^,()]+ \1)", "", text)


def closing_words(response: Response, pair: Interference) -> str:
    """What became of one interference: nothing to say where it was clear by separation or is dismissed."""
    found = next((item for item in response.closings if (item.source, item.mode) == (pair.source, pair.mode)), None)
    if found is not None:
        return STATUS_WORDS[found.status]
    open_still = pair.dismissed is None and not pair.verdict == pair.worst_verdict == "clear"
    return "NOT JUDGED" if open_still else ""


def closed_sentences(response: Response) -> list[tuple[str, str]]:
    """(verdict in words, sentence) of what is not clear by separation, with what the response makes of it."""
    screening = response.screening
    pairs = [pair for pair in screening.not_clear() if pair.dismissed is None]
    lines = []
    for group in same_line(screening, pairs):
        found: dict[str, list[str]] = {}
        for pair in group:
            found.setdefault(closing_words(response, pair), []).append(pair.source)
        parts = [words if len(found) == 1 else f"{_listed(names)} {words}" for words, names in found.items()]
        lines.append(
            (pair_verdict(group[0]), f"{group_sentence(screening, group)} Forced response: {', '.join(parts)}.")
        )
    return lines


def spread_sentence(response: Response, shares: Sequence[tuple[str, float]]) -> str | None:
    """How far the damping decides: (link, high over low) of the largest alternating torques; None without any."""
    if not shares:
        return None
    lowest = min(shares, key=lambda item: item[1])
    highest = max(shares, key=lambda item: item[1])
    low, high = response.screening.train.zeta
    text = f"With high damping (ζ {percent(high)} in place of {percent(low)} where none is stated) the largest "
    if lowest[1] == highest[1]:
        return f"{text}alternating torque of {lowest[0]} is {percent(lowest[1])} of that with low damping."
    return (
        f"{text}alternating torques are {percent(lowest[1])} ({lowest[0]}) to {percent(highest[1])} ({highest[0]}) "
        "of those with low damping. Low damping is judged."
    )


def unjudged_sentence(response: Response) -> str | None:
    """Which continuous sources are in no result, because nothing says how large they are."""
    if not response.unjudged:
        return None
    names = _listed(response.unjudged, 12)
    return f"Not in the response, as the file gives no amplitude: {names}."


def response_cautions(response: Response) -> list[str]:
    """What a reader must keep in mind before relying on the figures."""
    lines = [
        "Damping is estimated: amplitudes at a resonance may be off by a factor of two. Where the verdict rests on "
        "one, confirm it by measurement."
    ]
    close = [
        item
        for item in response.findings
        if item.use is not None and 0.5 <= item.use <= 1.0 and _swings(response, item)
    ]
    if close:
        names = _listed(list(dict.fromkeys(item.element for item in close)), 6)
        lines.append(f"Within a factor of two of a limit: {names}.")
    bases = [item.basis for item in response.findings] + [item.basis for item in response.limits]
    if any("recalled" in basis for basis in bases):
        lines.append(
            "Rules marked as recalled were not read from the published text: confirm their figures against your "
            "edition. Nothing here is an approval."
        )
    return lines


def _swings(response: Response, finding: Finding) -> bool:
    """True of a check of a link that a resonance can raise."""
    return finding.check != "mean torque" and any(
        link.name == finding.element for link in response.screening.graph.links
    )
