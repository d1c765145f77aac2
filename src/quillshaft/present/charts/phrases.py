"""Titles and labels of the charts: each title says the answer its chart gives."""

from __future__ import annotations

from collections.abc import Sequence

from quillshaft.assess.results import Interference, ModeResult, Screening
from quillshaft.graph.torsional import GraphLink, TorsionalGraph
from quillshaft.present.charts.lanes import pair_neighbours, paths_over
from quillshaft.present.words import number, percent, plain

RPM = 30.0 / 3.141592653589793
_COUNTS = ["no", "one", "two", "three", "four", "five", "six", "seven", "eight", "nine", "ten", "eleven", "twelve"]


def count(amount: int, noun: str, plural: str | None = None) -> str:
    """ "seven stations", "one shaft", "25 stations"."""
    word = _COUNTS[amount] if amount < len(_COUNTS) else str(amount)
    return f"{word} {noun if amount == 1 else plural or noun + 's'}"


def capital(text: str) -> str:
    """The text with its first letter in upper case, the rest as it is."""
    return text[:1].upper() + text[1:]


def listed(words: Sequence[str], most: int = 3) -> str:
    """ "a", "a and b", "a, b and c"; beyond `most`, how many more."""
    shown = list(words[:most])
    if len(words) > most:
        shown = [*words[: most - 1], f"{len(words) - most + 1} more"]
    return shown[0] if len(shown) == 1 else f"{', '.join(shown[:-1])} and {shown[-1]}"


def stiffness(value_nm_rad: float) -> str:
    """A torsional stiffness [N·m/rad] with three digits and a fitting unit."""
    for size, unit in ((1e9, "GN·m/rad"), (1e6, "MN·m/rad"), (1e3, "kN·m/rad")):
        if value_nm_rad >= 0.1 * size:
            return f"{brief(value_nm_rad / size)} {unit}"
    return f"{brief(value_nm_rad)} N·m/rad"


def inertia(value_kgm2: float) -> str:
    """A polar inertia [kg·m²] with three digits."""
    return f"{brief(value_kgm2)} kg·m²"


def brief(value: float) -> str:
    """A number with three significant digits, closing zeros left out."""
    text = number(value, 3)
    return text.rstrip("0").rstrip(".") if "." in text and "e" not in text else text


def softest(graph: TorsionalGraph) -> GraphLink | None:
    """The link between turning stations with the lowest referred stiffness; None where all are rigid."""
    elastic = [
        link
        for link in graph.links
        if link.referred_nm_rad is not None
        and link.kind != "tie"
        and all(graph.speed_ratio[station] for station in link.stations)
    ]
    return min(elastic, key=lambda link: link.referred_nm_rad or 0.0, default=None)


def link_words(screening: Screening, link: GraphLink) -> str:
    """ "elastomer coupling flex-block", "shaft pump-shaft", "gear reduction"."""
    if link.kind == "coupling":
        kind = next(item.kind for item in screening.train.couplings if item.name == link.name)
        return f"{kind + ' ' if kind else ''}coupling {link.name}"
    word = {"shaft": "shaft", "mesh": "gear", "epicyclic": "epicyclic stage", "tie": "tie"}[link.kind]
    return f"{word} {link.name}"


def train_title(screening: Screening) -> str:
    """What the train is, in one sentence."""
    graph = screening.graph
    shafts = [(i, link) for i, link in enumerate(graph.links) if link.kind in ("shaft", "coupling")]
    around = pair_neighbours(shafts)
    ends = {a for a, _ in shafts}
    lines = _connected(len(graph.stations), around)
    text = capital(count(len(graph.stations), "station")) + f" on {count(lines, 'shaft line')}"
    soft = softest(graph)
    if soft is None or not ends:
        return text
    only = sum(1 for link in graph.links if link.stiffness_nm_rad is not None and link.kind != "tie") == 1
    return f"{text}; {link_words(screening, soft)} is the {'only elastic' if only else 'softest'} link"


def _connected(stations: int, around: dict[int, list[tuple[int, int]]]) -> int:
    left, lines = set(range(stations)), 0
    while left:
        queue, lines = [left.pop()], lines + 1
        while queue:
            for other, _ in around.get(queue.pop(), []):
                if other in left:
                    left.discard(other)
                    queue.append(other)
    return lines


def mode_title(screening: Screening, mode: ModeResult) -> str:
    """What a mode does: who swings against whom, where it strains, where it stands still."""
    text = f"Mode {mode.mode}, {number(mode.frequency_hz)} Hz: {swing_words(mode)}"
    links, share = leading_links(mode)
    if links:
        verb = "holds" if len(links) == 1 else "hold"
        text += f"; {listed(links)} {verb} {share * 100:.0f} % of the strain"
    nodes = [node for node in mode.nodes if links and node.link == links[0]]
    if nodes and len(links) == 1:
        start = screening.graph.stations[screening.graph.link(links[0]).stations[0]]
        text += f", with a node {nodes[0].share * 100:.0f} % along it from {start}"
    if len(mode.cluster) > 1:
        text += f" (one basis of {len(mode.cluster)} equal modes)"
    return text


def leading_links(mode: ModeResult) -> tuple[list[str], float]:
    """The links, at most three, that hold half the strain energy or more, and their share."""
    ranked = sorted(mode.strain_energy.items(), key=lambda item: -item[1])
    links: list[str] = []
    total = 0.0
    for name, share in ranked[:3]:
        if total >= 0.5 or share <= 0.0:
            break
        links.append(name)
        total += share
    return links, total


def swing_words(mode: ModeResult) -> str:
    """ "impeller swings against wheel": the largest kinetic energy on either side."""
    lead = max(mode.kinetic_energy, key=lambda name: mode.kinetic_energy[name])
    sign = 1.0 if mode.referred_shape[lead] >= 0 else -1.0
    against = {
        name: energy
        for name, energy in mode.kinetic_energy.items()
        if mode.referred_shape[name] * sign < 0 and energy > 1e-6
    }
    if against:
        return f"{lead} swings against {max(against, key=lambda name: against[name])}"
    return f"all swing together, {lead} the most"


def interference_title(screening: Screening) -> str:
    """The verdict of the diagram in one sentence."""
    pairs = [pair for pair in screening.not_clear() if pair.dismissed is None]
    dismissed = len(screening.not_clear()) - len(pairs)
    tail = f" ({count(dismissed, 'pair')} dismissed)" if dismissed else ""
    leading = governing_pair(screening)
    if leading is None:
        if screening.interferences:
            return "Every interference of this train is dismissed"
        return "Nothing is judged: no continuous source reaches a natural frequency of this train"
    if not pairs:
        return _clear_title(screening, leading) + tail
    rest = len(pairs) - 1
    be = "is" if rest == 1 else "are"
    end = f"{count(rest, 'more pair')} of mode and source {be} not clear" if rest else "all else is clear"
    return f"{pair_words(leading)}; {end}{tail}"


def governing_pair(screening: Screening) -> Interference | None:
    """The pair that the title names: the worst not dismissed, else the nearest; None where nothing is judged."""
    worst = next((pair for pair in screening.not_clear() if pair.dismissed is None), None)
    judged = [pair for pair in screening.interferences if pair.dismissed is None]
    return worst or min(judged, key=lambda pair: abs(pair.worst_margin), default=None)


def _clear_title(screening: Screening, near: Interference) -> str:
    amount = len(screening.judged_modes)
    modes = "The one judged mode is" if amount == 1 else f"All {count(amount, 'judged mode')} are"
    side = "below" if near.margin < 0 else "above"
    return (
        f"{modes} clear of every source; the nearest, mode {near.mode}, stays "
        f"{percent(abs(near.worst_margin))} {side} {near.source} over the tolerances "
        f"({plain(near.worst_required)} required)"
    )


def pair_words(pair: Interference) -> str:
    """ "Mode 2 is 3.2 % below interharmonic and meets it over the tolerances"."""
    if pair.verdict == "crossing":
        where = "" if pair.critical_speed_rpm is None else f" at {pair.critical_speed_rpm:.0f} rpm"
        return f"Mode {pair.mode} meets {pair.source}{where} in the running range"
    if pair.verdict == "barred":
        base = f"Mode {pair.mode} meets {pair.source} at {pair.judged_at_rpm:.0f} rpm, inside a barred range"
    else:
        side = "below" if pair.margin < 0 else "above"
        base = f"Mode {pair.mode} is {percent(abs(pair.margin))} {side} {pair.source}"
    worst = {
        "crossing": " and meets it over the tolerances",
        "barred": " and meets it in a barred range over the tolerances",
        "close": f", {percent(abs(pair.worst_margin))} over the tolerances: {plain(pair.required)} is required",
        "clear": f": {plain(pair.required)} is required",
    }[pair.worst_verdict]
    if pair.worst_verdict == pair.verdict == "barred":
        worst = ", over the tolerances as well"
    return base + worst


def train_paths(graph: TorsionalGraph) -> list[list[int]]:
    """Stations as disjoint paths over all links of two stations, the longest of each remainder first."""
    return paths_over(len(graph.stations), pair_neighbours(enumerate(graph.links)))
