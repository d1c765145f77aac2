"""Stiffness windows in sentences and rows: the answer first, then what forbids the rest."""

from __future__ import annotations

import math
from collections.abc import Iterable

from quillshaft.assess.results import Screening
from quillshaft.present.fluid_words import BOTH_SIDES
from quillshaft.present.rows import tolerance_words
from quillshaft.present.units import SHOWN
from quillshaft.present.words import VERDICT_WORDS, number, percent
from quillshaft.study.link_choice import OtherLink
from quillshaft.study.window_map import ClearBox, WindowMap
from quillshaft.study.window_ranges import Range
from quillshaft.study.window_tally import Blocked
from quillshaft.study.windows import Forbidden, Pair, Windows

SAME = 1e-9
MOST_SOURCES = 4


def shown_stiffness(screening: Screening, value_nm_rad: float, unit: bool = True) -> str:
    """A stiffness [N·m/rad] to four digits in the unit that the file declares."""
    units = SHOWN[screening.train.units]
    text = number(value_nm_rad * units.per_nm_rad)
    return f"{text} {units.stiffness}" if unit else text


def range_text(screening: Screening, reach: Range, unit: bool = True) -> str:
    """ "117.5 to 150.3 kN·m/rad"."""
    return f"{shown_stiffness(screening, reach[0], False)} to {shown_stiffness(screening, reach[1], unit)}"


def ranges_text(screening: Screening, ranges: tuple[Range, ...]) -> str:
    """ "1.2 to 1.5 and 2.2 to 3.1 kN·m/rad"."""
    texts = [range_text(screening, reach, unit=reach is ranges[-1]) for reach in ranges]
    return texts[0] if len(texts) == 1 else f"{', '.join(texts[:-1])} and {texts[-1]}"


def window_sentences(screening: Screening, windows: Windows) -> list[str]:
    """Is the nominal stiffness allowed, how far are the edges, what is recommended, what cannot be cleared."""
    lines = [_nominal_sentence(screening, windows), *_recommended_sentences(screening, windows)]
    if not windows.allowed and not windows.cannot_clear:
        lines.append(f"Each source alone could be cleared by {windows.link}, but never all of them together.")
    if windows.cannot_clear:
        what = pairs_text(windows.cannot_clear)
        searched = range_text(screening, windows.search_nm_rad)
        lines.append(f"No stiffness of {windows.link} from {searched} clears {what}.")
    worst = [pair for pair in windows.cannot_clear_worst if pair not in windows.cannot_clear]
    if worst:
        lines.append(f"Over the tolerances, no stiffness of {windows.link} clears {pairs_text(worst)}.")
    narrowed = narrowed_text(windows)
    if narrowed:
        lines.append(f"This is a narrowed question{narrowed}: what is left out may still be met.")
    if windows.over_speeds:
        lines.append("Stiffnesses of this train depend on speed: the windows are the union over its speeds.")
    if screening.train.fluid_couplings:
        lines.append(BOTH_SIDES)
    return lines


def narrowed_text(windows: Windows) -> str:
    """ " (minor engine orders left out)", or nothing where everything was asked about."""
    parts = []
    if windows.orders == "major":
        parts.append("minor engine orders left out")
    if windows.only_sources:
        parts.append(f"only {listed_all(list(windows.sources) or ['no source'])} asked about")
    if windows.modes is not None:
        parts.append(f"only {modes_text(windows.modes)} asked about")
    return f" ({'; '.join(parts)})" if parts else ""


def _nominal_sentence(screening: Screening, windows: Windows) -> str:
    nominal = windows.nominal_nm_rad
    head = f"The nominal stiffness of {windows.link}, {shown_stiffness(screening, nominal)},"
    home = next((reach for reach in windows.allowed if reach[0] <= nominal <= reach[1]), None)
    if windows.nominal_verdict == "clear" and home is not None:
        return f"{head} is allowed: {_edges_text(screening, windows, home)}."
    taken = next((one for one in windows.forbidden if one.from_nm_rad < nominal < one.to_nm_rad), None)
    word = VERDICT_WORDS[windows.nominal_verdict]
    if windows.nominal_verdict == "clear" or taken is None:
        return f"{head} is {word if taken is None else 'on an edge'}, outside the stiffnesses searched."
    because = causes_text(cause for cause in taken.because if cause.from_nm_rad < nominal < cause.to_nm_rad)
    return f"{head} is not allowed ({word}): {because}. {_way_out(screening, windows)}"


def _edges_text(screening: Screening, windows: Windows, home: Range) -> str:
    """How far the nominal stiffness stands from both ends of its allowed range."""
    nominal, search = windows.nominal_nm_rad, windows.search_nm_rad
    parts = []
    for edge, limit, side in ((home[0], search[0], "down"), (home[1], search[1], "up")):
        if abs(edge - limit) <= SAME * limit:
            parts.append(f"{side} to the end of the search, {shown_stiffness(screening, limit)}")
        else:
            share = percent(edge / nominal - 1.0, signed=True)
            parts.append(f"{side} to {shown_stiffness(screening, edge)} ({share})")
    return " and ".join(parts)


def _way_out(screening: Screening, windows: Windows) -> str:
    """The nearest allowed stiffnesses on either side."""
    nominal = windows.nominal_nm_rad
    below = max((high for _, high in windows.allowed if high <= nominal), default=None)
    above = min((low for low, _ in windows.allowed if low >= nominal), default=None)
    parts = [
        f"{shown_stiffness(screening, edge)} ({percent(edge / nominal - 1.0, signed=True)})"
        for edge in (below, above)
        if edge is not None
    ]
    return f"Nearest allowed: {' or '.join(parts)}." if parts else "No stiffness in the search is allowed."


def _recommended_sentences(screening: Screening, windows: Windows) -> list[str]:
    own = f"its {tolerance_words(windows.tolerance)}" if any(windows.tolerance) else "no tolerance of its own"
    if windows.factors != (1.0, 1.0):
        own += f", factors {windows.factors[0]:g} to {windows.factors[1]:g} over temperature"
    within = f"with {own} and all other tolerances at their worst"
    if not windows.recommended:
        return [f"No stiffness can be recommended, {within}."]
    inside = any(low <= windows.nominal_nm_rad <= high for low, high in windows.recommended)
    verb = "is" if inside else "is not"
    return [
        f"Recommended nominal stiffness, {within}: {ranges_text(screening, windows.recommended)}; "
        f"the nominal one {verb} among them."
    ]


def pairs_text(pairs: Iterable[Pair]) -> str:
    """ "pump 1x (mode 2) and vane-pass (modes 2 and 3)"."""
    by_source: dict[str, list[int]] = {}
    for pair in pairs:
        by_source.setdefault(pair.source, []).append(pair.mode)
    texts = [f"{source} ({modes_text(modes)})" for source, modes in by_source.items()]
    return listed_all(texts)


def modes_text(modes: Iterable[int]) -> str:
    """ "mode 2", "modes 2 and 3"."""
    numbers = sorted(set(modes))
    return ("mode " if len(numbers) == 1 else "modes ") + listed_all([str(one) for one in numbers])


def listed_all(words: list[str]) -> str:
    """ "a", "a and b", "a, b and c"."""
    return words[0] if len(words) == 1 else f"{', '.join(words[:-1])} and {words[-1]}"


def causes_text(causes: Iterable[Blocked], most: int | None = None) -> str:
    """ "mode 1: pump 1x; mode 2: vane-pass, line-2x", at most so many sources for each mode."""
    by_mode: dict[int, dict[str, None]] = {}
    for cause in causes:
        by_mode.setdefault(cause.mode, {})[cause.source] = None
    return "; ".join(f"mode {mode}: {_cut(list(names), most)}" for mode, names in sorted(by_mode.items()))


def _cut(names: list[str], most: int | None) -> str:
    if most is None or len(names) <= most:
        return ", ".join(names)
    return f"{', '.join(names[: most - 1])} and {len(names) - most + 1} more"


def forbidden_rows(screening: Screening, ranges: Iterable[Forbidden], nominal_nm_rad: float) -> list[tuple[str, ...]]:
    """(from, to, from and to against nominal, mode, sources, where they forbid): the range in its first row only."""
    rows = []
    for one in ranges:
        ends = (one.from_nm_rad, one.to_nm_rad)
        head = [_end(screening, end) for end in ends] + [_share(end, nominal_nm_rad) for end in ends]
        parts: dict[tuple[float, float, int], list[str]] = {}
        for cause in one.because:
            parts.setdefault((cause.from_nm_rad, cause.to_nm_rad, cause.mode), []).append(cause.source)
        for (low, high, mode), sources in parts.items():
            where = "all of it" if (low, high) == ends else _reach(screening, (low, high))
            rows.append((*head, str(mode), ", ".join(sources), where))
            head = [""] * 4
    return rows


def _reach(screening: Screening, reach: Range) -> str:
    """ "up to 5", "from 3 on", "3 to 5", "everywhere"."""
    low, high = (_end(screening, end) for end in reach)
    if reach[0] == 0.0 and math.isinf(reach[1]):
        return "everywhere"
    if reach[0] == 0.0:
        return f"up to {high}"
    return f"from {low} on" if math.isinf(reach[1]) else f"{low} to {high}"


def _end(screening: Screening, end_nm_rad: float) -> str:
    return "no end" if end_nm_rad in (0.0, math.inf) else shown_stiffness(screening, end_nm_rad, False)


def _share(end_nm_rad: float, nominal_nm_rad: float) -> str:
    if end_nm_rad in (0.0, math.inf):
        return "–"
    return f"{end_nm_rad / nominal_nm_rad:.4g}"


def recommended_rows(screening: Screening, windows: Windows) -> list[tuple[str, ...]]:
    """(from, to, from and to against nominal, what limits the lower end, the upper end) for each range."""
    causes = [cause for one in windows.not_recommended for cause in one.because]
    rows = []
    for low, high in windows.recommended:
        below = causes_text((c for c in causes if abs(c.to_nm_rad - low) <= SAME * low), MOST_SOURCES)
        above = causes_text((c for c in causes if abs(c.from_nm_rad - high) <= SAME * high), MOST_SOURCES)
        ends = [shown_stiffness(screening, end, False) for end in (low, high)]
        shares = [_share(end, windows.nominal_nm_rad) for end in (low, high)]
        rows.append((*ends, *shares, below or "end of the search", above or "end of the search"))
    return rows


def other_link_sentences(screening: Screening, others: tuple[OtherLink, ...], most: int = 4) -> list[str]:
    """Which other link could clear what this one cannot, the least change first."""
    if not others:
        return ["No other single link clears it either, from a twentieth to twenty times its nominal stiffness."]
    lines = []
    for other in others[:most]:
        where = ranges_text(screening, other.ranges_nm_rad)
        text = f"{other.link} could clear {_cut(list(other.clears), MOST_SOURCES)}: {where} ({_by(other)})."
        if other.recommended_nm_rad:
            text += f" All sources, over the tolerances: {ranges_text(screening, other.recommended_nm_rad)}."
        lines.append(text)
    if len(others) > most:
        lines.append(f"So could {', '.join(other.link for other in others[most:])}, by larger changes.")
    return lines


def _by(other: OtherLink) -> str:
    if other.change == 1.0:
        return "its nominal stiffness already does"
    return f"the nearest is {other.change:.3g} times nominal"


def dismissed_sentence(windows: Windows) -> str | None:
    """What is left out because it is dismissed by name; None where nothing is."""
    if not windows.dismissed:
        return None
    text = causes_text(windows.dismissed)
    return f"Left out, dismissed by name while the mode keeps its number and its frequency within 3 %: {text}."


def map_sentences(screening: Screening, found: WindowMap) -> list[str]:
    """The clear boxes of two links, and whether the nominal values are in one."""
    first, second = found.links
    if not found.boxes:
        return [f"No stiffnesses of {first} and {second} in the search are clear together over a box of both."]
    recommended = found.boxes[0].recommended
    home = found.boxes[0].holds(*found.nominal_nm_rad)
    kind = "over all tolerances" if recommended else "as fitted only (over the tolerances nowhere)"
    lines = [
        f"The nominal stiffnesses {'are' if home else 'are not'} in a box that is clear {kind}. "
        "Every pair of nominal values inside a box is clear, proven by counting modes at its corners:"
    ]
    lines += [f"{index}. {box_text(screening, found, box)}" for index, box in enumerate(found.boxes, start=1)]
    return lines


def box_text(screening: Screening, found: WindowMap, box: ClearBox) -> str:
    """ "ring 100 to 200 with shaft 3000 to 4000 kN·m/rad"."""
    first, second = found.links
    inside = ", the nominal values among them" if box.holds(*found.nominal_nm_rad) else ""
    return (
        f"{first} {range_text(screening, box.first_nm_rad)} with "
        f"{second} {range_text(screening, box.second_nm_rad)}{inside}"
    )
