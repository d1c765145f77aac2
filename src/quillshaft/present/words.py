"""Sentences and numbers as a person reads them; the same ones in tables, charts and report."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence

from quillshaft.assess.results import NEAR_NODE, SEVERITY, Interference, ModeResult, Screening, Verdict, graver
from quillshaft.sources.line import Source

VERDICT_WORDS: dict[Verdict, str] = {
    "clear": "clear",
    "barred": "barred",
    "close": "too close",
    "crossing": "crossing",
}
OUTCOME: dict[Verdict, str] = {
    "clear": "All interferences are clear",
    "barred": "Clear, with the barred speed ranges kept",
    "close": "Not clear: a margin is too small",
    "crossing": "Not clear: a natural frequency is met in the running range",
}


def number(value: float, digits: int = 4) -> str:
    """A number to so many significant digits, without an exponent in the ordinary range or idle zeros."""
    if value == 0 or not math.isfinite(value):
        return "0" if value == 0 else "–"
    size = math.floor(math.log10(abs(value)))
    if not -5 <= size < 8:
        return f"{value:.{digits - 1}e}"
    text = f"{value:.{max(0, digits - 1 - size)}f}"
    return text.rstrip("0").rstrip(".") if "." in text else text


def hertz(value: float) -> str:
    """A frequency [Hz] with two decimals."""
    return f"{value:.2f}"


def percent(share: float, signed: bool = False) -> str:
    """A share in per cent, two decimals below 20 %; a signed margin of 0 is "meets"."""
    value = share * 100.0
    if value == 0 and signed:
        return "meets"
    if not math.isfinite(value):
        return "–"
    digits = 0 if abs(value) >= 100 else 1 if abs(value) >= 20 else 2
    text = f"{value:+.{digits}f} %" if signed else f"{value:.{digits}f} %"
    return text.replace("-", "−")


def plain(share: float) -> str:
    """A required share in per cent without needless decimals."""
    return f"{share * 100:.4g} %"


def strongest(shares: dict[str, float]) -> tuple[str, float]:
    """Name and share of the largest entry, the first in file order among equals."""
    name = max(shares, key=lambda key: shares[key])
    return name, shares[name]


def source_line(source: Source) -> str:
    """A source's line in words: "6 × impeller speed", "100 Hz", or both."""
    parts = []
    if source.order:
        station = source.at if source.action.kind == "point" and len(source.action.stations) == 1 else None
        parts.append(f"{source.order:g} × {station or 'shaft'} speed")
    if source.frequency_hz:
        band = f" ± {plain(source.band)}" if source.band else ""
        parts.append(f"{abs(source.frequency_hz):g} Hz{band}")
    joint = " − " if source.frequency_hz < 0 and source.order else " + "
    return joint.join(parts)


def source_names(source: Source) -> str:
    """A source's name with what was merged into it."""
    others = source.origins[1:]
    return source.name if not others else f"{source.name} (= {', '.join(others)})"


def shaft_of(screening: Screening, source: Source) -> str:
    """The shaft line whose speed the source follows, by its first and last station."""
    line = next(line for line in screening.graph.lines if source.station in line)
    first, last = screening.graph.stations[line[0]], screening.graph.stations[line[-1]]
    return first if first == last else f"{first} – {last}"


def mode_words(mode: ModeResult) -> str:
    """What a mode does: where it strains and what moves."""
    moves, _ = strongest(mode.kinetic_energy)
    held = [share for share in mode.strain_energy.values() if share > 0]
    if not held:
        return f"{moves} moves"
    link, share = strongest(mode.strain_energy)
    return f"{share * 100:.0f} % of strain in {link}; {moves} moves most"


def meeting_words(screening: Screening, pair: Interference) -> str:
    """Where source and mode stand to each other, nominally and over the tolerances."""
    base = "the source" if screening.train.criteria.margin_on == "excitation" else "the natural frequency"
    if pair.verdict == "crossing":
        nominal = "meets it in the running range" + (
            f" at {pair.judged_at_rpm:.0f} rpm" if pair.critical_speed_rpm is not None else ""
        )
    elif pair.verdict == "barred":
        nominal = f"meets it at {pair.judged_at_rpm:.0f} rpm, inside a barred range"
    else:
        side = "below" if pair.margin < 0 else "above"
        nominal = f"lies {percent(abs(pair.margin))} {side} it (of {base}; {plain(pair.required)} required)"
    if pair.worst_verdict == pair.verdict == "crossing":
        return nominal
    worst = {
        "crossing": "over the tolerances they meet in the running range",
        "barred": "over the tolerances they meet only inside a barred range",
        "close": f"over the tolerances the margin falls to {percent(abs(pair.worst_margin))}",
        "clear": f"over the tolerances {percent(abs(pair.worst_margin))} remain",
    }[pair.worst_verdict]
    return f"{nominal}; {worst}{bar_words(pair)}"


def bar_words(pair: Interference, closed: bool = False) -> str:
    """What the edges of a barred range leave, and the range that would do; `closed` where a response judges them."""
    if pair.free_margin is None or pair.free_worst_margin is None:
        return ""
    left = f"{percent(abs(pair.free_margin))}, {percent(abs(pair.free_worst_margin))} over the tolerances"
    if not pair.bar_too_narrow:
        return f"; at the speeds that stay free {left} remain"
    needed = f"{plain(pair.required)} and {plain(pair.worst_required)} are required"
    narrow = "by separation alone the barred range is too narrow" if closed else "THE BARRED RANGE IS TOO NARROW"
    text = f"; {narrow}: at its edges only {left} remain ({needed})"
    if pair.bar_needed_rpm is not None:
        text += f"; {pair.bar_needed_rpm[0]:.0f} to {pair.bar_needed_rpm[1]:.0f} rpm would have to be barred"
    return text


def excitability_words(screening: Screening, pair: Interference) -> str:
    """Excitability as a remark: near a node it moves with the data, between cylinders a weak one undoes it."""
    if pair.excitability is None or pair.worst_excitability is None:
        return "excitability open (closed loop of rigid gears)"
    text = f"excitability {pair.excitability:.2f}"
    if pair.excitability >= NEAR_NODE:
        return text
    largest = f"up to {pair.worst_excitability:.2f} over the tolerances"
    source, mode = screening.source(pair.source), screening.mode(pair.mode)
    stations = [screening.graph.stations[station] for station in source.action.stations]
    alone = max((abs(mode.referred_shape[name]) for name in stations), default=0.0)
    if source.action.kind == "point" and len(stations) > 1 and alone >= NEAR_NODE:
        return f"{text} ({largest}): the cylinders cancel here, so one weak or dead cylinder excites it"
    return f"{text}, near a node: moves with the data ({largest})"


def same_line(screening: Screening, pairs: Iterable[Interference]) -> list[list[Interference]]:
    """Pairs grouped where one mode stands to several sources of one line in the same way, in order of appearance."""
    groups: dict[object, list[Interference]] = {}
    for pair in pairs:
        source = screening.source(pair.source)
        line = (round(source.order * source.speed_ratio, 9), source.frequency_hz, source.band)
        kind = (source.action.kind, source.action.kind == "point" and len(source.action.stations) > 1)
        verdicts = (kind, pair.verdict, pair.worst_verdict, pair.required, pair.worst_required)
        groups.setdefault((pair.mode, line, verdicts, pair.dismissed), []).append(pair)
    return list(groups.values())


def group_sentence(screening: Screening, pairs: Sequence[Interference]) -> str:
    """One sentence for a mode and the sources of one line: mode, source, shaft, margin, excitability."""
    strongest_first = sorted(pairs, key=lambda pair: -(pair.worst_excitability or 0.0))
    pair = strongest_first[0]
    source, mode = screening.source(pair.source), screening.mode(pair.mode)
    where = shaft_of(screening, source)
    shaft = f"on shaft {where}" if source.action.kind != "link" else f"in {source.at}"
    rated = "" if mode.frequency_along is None else " at rated speed"
    others = [source_names(screening.source(item.source)) for item in strongest_first[1:]]
    also = f"; the same for {', '.join(others)}" if others else ""
    text = (
        f"Mode {mode.mode} ({hertz(mode.frequency_hz)} Hz{rated}) and {source_names(source)} "
        f"({source_line(source)}, {shaft}{also}): the mode {meeting_words(screening, pair)}. "
        f"{excitability_words(screening, pair).capitalize()}."
    )
    if pair.dismissed is not None:
        text += f" Dismissed by {pair.dismissed.by}: {pair.dismissed.because}"
    return text


def pair_verdict(pair: Interference) -> str:
    """The graver verdict of a pair in a word or two."""
    return "bar too narrow" if pair.bar_too_narrow else VERDICT_WORDS[graver(pair.verdict, pair.worst_verdict)]


def attention_sentences(screening: Screening, dismissed: bool) -> list[tuple[str, str]]:
    """(verdict in words, sentence) of what is not clear, worst first: the dismissed ones, or all others."""
    pairs = [pair for pair in screening.not_clear() if (pair.dismissed is not None) == dismissed]
    return [(pair_verdict(group[0]), group_sentence(screening, group)) for group in same_line(screening, pairs)]


def temperature_words(screening: Screening) -> str:
    """The state of the couplings, or nothing where they stand at 30 °C."""
    state = screening.temperature
    if isinstance(state, float):
        return f"couplings at {state - 273.15:.4g} °C"
    return "" if state == "reference" else f"couplings {state}"


def range_words(screening: Screening) -> str:
    """The judged range in words."""
    operation, rpm = screening.train.operation, 30.0 / math.pi
    ranges = " and ".join(f"{low * rpm:.0f} to {high * rpm:.0f}" for low, high in operation.ranges_rad_s)
    why = "" if operation.range_given else f" (rated speed ± {plain(operation.speed_band)})"
    bars = " and ".join(f"{low * rpm:.0f} to {high * rpm:.0f}" for low, high in operation.barred_rad_s)
    barred = f", barred {bars} rpm" if bars else ""
    return f"{ranges} rpm at {operation.speed_at}{why}{barred}"


def counted(amount: int, noun: str) -> str:
    """An amount with its noun: "1 question", "2 questions"."""
    return f"{amount} {noun}" if amount == 1 else f"{amount} {noun}s"


def apart_words(screening: Screening) -> str:
    """ ", apart from …": what was dismissed by name and which sources were switched off; or nothing."""
    dismissed = sum(pair.dismissed is not None for pair in screening.not_clear())
    parts = [counted(dismissed, "interference") + " dismissed by name"] if dismissed else []
    if screening.sources_off:
        parts.append(counted(len(screening.sources_off), "source") + " switched off")
    return f", apart from {' and '.join(parts)}" if parts else ""


def has_tolerances(screening: Screening) -> bool:
    """True where any stiffness or inertia has a tolerance."""
    graph = screening.graph
    tolerances = [*(link.tolerance for link in graph.links), *(part.tolerance for part in graph.parts)]
    return any(tolerance != (0.0, 0.0) for tolerance in tolerances)


def verdict_sentence(screening: Screening, worst: bool) -> str:
    """The verdict of the whole train, nominal or over the tolerances, with its governing pair."""
    verdict = screening.worst_verdict if worst else screening.verdict
    prefix = "No tolerances are considered. " if worst and not has_tolerances(screening) else ""
    if not screening.interferences:
        return f"{prefix}Nothing is judged: no mode lies in the reach of a source{apart_words(screening)}."
    text = prefix + OUTCOME[verdict]
    governing = next(
        (
            pair
            for pair in screening.not_clear()
            if pair.dismissed is None and (pair.worst_verdict if worst else pair.verdict) == verdict
        ),
        None,
    )
    if verdict == "clear" or governing is None:
        return text + apart_words(screening) + "."
    margin = governing.worst_margin if worst else governing.margin
    if verdict == "barred" and screening.narrow_bars:
        text = prefix + "Not clear: a barred speed range is too narrow"
    if margin == 0:
        return f"{text} (mode {governing.mode} meets {governing.source})."
    return f"{text} (mode {governing.mode} and {governing.source}: margin {percent(margin, True)})."


def case_lines(screening: Screening) -> list[str]:
    """The cases of the file and what screening each of them gave, one line each; none where a case is shown."""
    if screening.cases is None:
        names = ", ".join(screening.case_names)
        return [f"Cases of this file, not judged here: {names}."] if names else []
    lines = []
    for case in screening.cases:
        if case.screening is None:
            lines.append(f"Case {case.name}: cannot be screened; `quillshaft check --case {case.name}` says why.")
        else:
            lines.append(f"Case {case.name}: {case_verdict(case.screening)}")
    return lines


def case_verdict(screening: Screening) -> str:
    """The verdict of a case in one sentence: over the tolerances, or nominal where that is worse."""
    return verdict_sentence(screening, SEVERITY[screening.worst_verdict] >= SEVERITY[screening.verdict])


def unclear_cases(screening: Screening) -> int:
    """Number of cases that are not clear, or cannot be screened."""
    return sum(case.screening is None or case.screening.fails for case in screening.cases or ())


def unjudged_lines(screening: Screening) -> list[str]:
    """What the screening leaves unjudged: sources of starts and faults, and a rated speed out of range."""
    lines = []
    later = [source.name for source in screening.sources if source.when != "continuous"]
    if later:
        lines.append(f"Not judged, sources of starts and faults: {', '.join(later)}.")
    operation, rpm = screening.train.operation, 30.0 / math.pi
    if not any(low * 0.9999 <= operation.rated_rad_s <= high * 1.0001 for low, high in operation.ranges_rad_s):
        lines.append(f"Not judged: the rated speed of {operation.rated_rad_s * rpm:.0f} rpm lies outside the range.")
    return lines
