"""Sentences and numbers as a person reads them; the same ones in tables, charts and report."""

from __future__ import annotations

import math

from quillshaft.assess.results import Interference, ModeResult, Screening, Verdict
from quillshaft.sources.line import Source

NEAR_NODE = 0.05
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
    """A number to so many significant digits, without an exponent in the ordinary range."""
    if value == 0 or not math.isfinite(value):
        return "0" if value == 0 else "–"
    size = math.floor(math.log10(abs(value)))
    if -4 <= size < 9:
        return f"{value:.{max(0, digits - 1 - size)}f}"
    return f"{value:.{digits - 1}e}"


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
    return f"{value:+.{digits}f} %" if signed else f"{value:.{digits}f} %"


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
        nominal = f"stands {percent(abs(pair.margin))} {side} it (of {base}; {plain(pair.required)} required)"
    if pair.worst_verdict == pair.verdict == "crossing":
        return nominal
    worst = {
        "crossing": "over the tolerances they meet in the running range",
        "barred": "over the tolerances they meet only inside a barred range",
        "close": f"over the tolerances the margin falls to {percent(abs(pair.worst_margin))}",
        "clear": f"over the tolerances {percent(abs(pair.worst_margin))} remain",
    }[pair.worst_verdict]
    return f"{nominal}; {worst}"


def excitability_words(pair: Interference) -> str:
    """Excitability as a remark; a source near a node is said to move with the data."""
    if pair.excitability is None or pair.worst_excitability is None:
        return "excitability open (closed loop of rigid gears)"
    text = f"excitability {pair.excitability:.2f}"
    if pair.excitability < NEAR_NODE:
        text += f", near a node: moves with the data (up to {pair.worst_excitability:.2f} over the tolerances)"
    return text


def pair_sentence(screening: Screening, pair: Interference) -> str:
    """One sentence for an interference: mode, source, shaft, margin, excitability."""
    source, mode = screening.source(pair.source), screening.mode(pair.mode)
    where = shaft_of(screening, source)
    shaft = f"on shaft {where}" if source.action.kind != "link" else f"in {source.at}"
    text = (
        f"Mode {mode.mode} ({hertz(mode.frequency_hz)} Hz) and {source_names(source)} "
        f"({source_line(source)}, {shaft}): the mode {meeting_words(screening, pair)}. "
        f"{excitability_words(pair).capitalize()}."
    )
    if pair.dismissed is not None:
        text += f" Dismissed by {pair.dismissed.by}: {pair.dismissed.because}"
    return text


def range_words(screening: Screening) -> str:
    """The judged range in words."""
    operation, rpm = screening.train.operation, 30.0 / math.pi
    ranges = " and ".join(f"{low * rpm:.0f} to {high * rpm:.0f}" for low, high in operation.ranges_rad_s)
    why = "" if operation.range_given else f" (rated speed ± {plain(operation.speed_band)})"
    return f"{ranges} rpm at {operation.speed_at}{why}"


def dismissed_words(screening: Screening) -> str:
    """ ", apart from 2 dismissed by name", or nothing where none was needed."""
    count = sum(pair.dismissed is not None for pair in screening.not_clear())
    if not count:
        return ""
    return f", apart from {count} interference{'s' if count > 1 else ''} dismissed by name"


def verdict_sentence(screening: Screening, worst: bool) -> str:
    """The verdict of the whole train, nominal or over the tolerances, with its governing pair."""
    verdict = screening.worst_verdict if worst else screening.verdict
    text = OUTCOME[verdict]
    counted = [pair for pair in screening.not_clear() if pair.dismissed is None]
    governing = next((pair for pair in counted if (pair.worst_verdict if worst else pair.verdict) == verdict), None)
    if verdict == "clear" or governing is None:
        return text + dismissed_words(screening) + "."
    margin = governing.worst_margin if worst else governing.margin
    words = "they meet" if margin == 0 else f"margin {percent(margin, True)}"
    return f"{text} (mode {governing.mode} and {governing.source}: {words})."
