"""Titles of the interference diagram: its verdict in one sentence, with what was dismissed or switched off."""

from __future__ import annotations

from quillshaft.assess.diagram_data import meeting_rpm
from quillshaft.assess.results import Interference, Screening
from quillshaft.present.charts.phrases import capital, count, listed
from quillshaft.present.words import percent, plain

NAMED = 2
"""So many dismissed pairs and sources switched off are named; more are counted."""


def interference_title(screening: Screening) -> str:
    """The verdict of the diagram in one sentence."""
    leading = screening.governing()
    counted = [pair for pair in screening.not_clear() if pair.dismissed is None]
    dismissed = [pair for pair in screening.not_clear() if pair.dismissed is not None]
    if leading is None:
        return _nothing_title(screening)
    if not counted:
        return _clear_title(screening, leading, dismissed) + _off_words(screening)
    rest = len(counted) - 1
    be = "is" if rest == 1 else "are"
    end = "all else is clear"
    if rest:
        end = f"{count(rest, 'more pair')} of mode and source {be} not clear"
    if dismissed:
        end += f" apart from {_dismissed_words(dismissed)}" if not rest else f"; {_dismissed_words(dismissed)}"
    return f"{pair_words(screening, leading)}; {end}{_off_words(screening)}"


def _nothing_title(screening: Screening) -> str:
    """Why no pair is judged, or none of those judged counts."""
    if screening.interferences:
        return f"No pair of mode and source counts: {_dismissed_words(screening.interferences)}{_off_words(screening)}"
    off = screening.sources_off
    if screening.sources:
        reach = "no continuous source that is on reaches" if off else "no continuous source reaches"
        return f"Nothing is judged: {reach} a natural frequency of this train{_off_words(screening)}"
    if off:
        names = listed([source.name for source, _ in off], NAMED)
        be = "the only source" if len(off) == 1 else f"all {count(len(off), 'source')}"
        return f"Nothing is judged: {be} of this train ({names}) {'is' if len(off) == 1 else 'are'} switched off"
    return "Nothing is judged: this train has no source"


def _dismissed_words(pairs: list[Interference] | tuple[Interference, ...]) -> str:
    """ "one dismissed pair (mode 6 and reduction mesh)"."""
    words = f"{count(len(pairs), 'dismissed pair')}"
    if len(pairs) > NAMED:
        return words
    return f"{words} ({', '.join(f'mode {pair.mode} and {pair.source}' for pair in pairs)})"


def _off_words(screening: Screening) -> str:
    off = [source.name for source, _ in screening.sources_off]
    if not off:
        return ""
    names = f" ({listed(off, NAMED)})" if len(off) <= NAMED else ""
    return f"; {count(len(off), 'source')} switched off{names}"


def _clear_title(screening: Screening, near: Interference, dismissed: list[Interference]) -> str:
    """All that counts is clear: how near the pair with the least to spare comes."""
    over = abs(near.worst_margin) - near.worst_required <= abs(near.margin) - near.required
    margin, required = (near.worst_margin, near.worst_required) if over else (near.margin, near.required)
    side = "below" if margin < 0 else "above"
    stays = (
        f"stays {percent(abs(margin))} {side} {near.source}{' over the tolerances' if over else ''} "
        f"({plain(required)} required)"
    )
    if dismissed:
        return f"Clear apart from {_dismissed_words(dismissed)}; the nearest counted, mode {near.mode}, {stays}"
    amount = len(screening.judged_modes)
    modes = "The one judged mode is" if amount == 1 else f"All {count(amount, 'judged mode')} are"
    every = "every source that is on" if screening.sources_off else "every source"
    return f"{modes} clear of {every}; the nearest, mode {near.mode}, {stays}"


def pair_words(screening: Screening, pair: Interference) -> str:
    """ "Mode 2 is 3.2 % below interharmonic and meets it over the tolerances"."""
    rpm = meeting_rpm(screening, pair)
    where = "" if rpm is None else f" at {rpm:.0f} rpm"
    if pair.verdict == "crossing":
        return f"Mode {pair.mode} meets {pair.source}{where} in the running range"
    if pair.bar_too_narrow:
        return f"Mode {pair.mode} meets {pair.source}{where}, inside a barred range that is too narrow: {_left(pair)}"
    if pair.verdict == "barred":
        base = f"Mode {pair.mode} meets {pair.source}{where}, inside a barred range"
    else:
        side = "below" if pair.margin < 0 else "above"
        base = f"Mode {pair.mode} is {percent(abs(pair.margin))} {side} {pair.source}"
    worst = {
        "crossing": " and meets it in the free range over the tolerances"
        if pair.verdict == "barred"
        else " and meets it over the tolerances",
        "barred": " and meets it inside a barred range over the tolerances",
        "close": f", {percent(abs(pair.worst_margin))} over the tolerances: {_required_words(pair)}",
        "clear": f": {_required_words(pair)}",
    }[pair.worst_verdict]
    if pair.worst_verdict == pair.verdict == "barred":
        worst = ", over the tolerances as well"
    return capital(base + worst)


def _left(pair: Interference) -> str:
    """ "4.9 % is left at its edges, nothing over the tolerances (10 % required)"."""
    nominal, worst = abs(pair.free_margin or 0.0), abs(pair.free_worst_margin or 0.0)
    text = f"{percent(nominal)} is left at its edges"
    if worst != nominal:
        text += f", {percent(worst) if worst else 'nothing'} over the tolerances"
    return f"{text} ({plain(pair.required)} required)"


def _required_words(pair: Interference) -> str:
    """ "10 % is required", "10 % is required, 5 % over the tolerances"."""
    text = f"{plain(pair.required)} is required"
    if pair.worst_required == pair.required or pair.worst_verdict == "clear":
        return text
    return f"{text}, {plain(pair.worst_required)} over the tolerances"
