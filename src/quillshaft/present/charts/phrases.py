"""Titles and labels of the charts: each title says the answer its chart gives."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Literal

from quillshaft.assess.results import ModeResult, Screening
from quillshaft.graph.torsional import GraphLink, TorsionalGraph
from quillshaft.present.charts.lanes import pair_neighbours, paths_over
from quillshaft.present.units import SHOWN
from quillshaft.present.words import number

RPM = 30.0 / 3.141592653589793
UnitSystem = Literal["SI", "US"]
_THOUSANDS: dict[UnitSystem, tuple[str, ...]] = {"SI": ("", "k", "M", "G"), "US": ("", "10³ ", "10⁶ ", "10⁹ ")}
"""What stands before N·m/rad and lbf·in/rad, in steps of a thousand."""
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


def stiffness(value_nm_rad: float, units: UnitSystem) -> str:
    """A torsional stiffness [N·m/rad] with three digits in the declared units, other thousands where it is long."""
    shown, steps = SHOWN[units], _THOUSANDS[units]
    own = next(at for at in reversed(range(len(steps))) if shown.stiffness.startswith(steps[at]))
    value, at = value_nm_rad * shown.per_nm_rad, own
    while value < 0.01 and at > 0:
        value, at = value * 1e3, at - 1
    while value >= 1e4 and at < len(steps) - 1:
        value, at = value * 1e-3, at + 1
    joint = "×" if steps[at].startswith("10") else " "
    return f"{brief(value)}{joint}{steps[at]}{shown.stiffness.removeprefix(steps[own])}"


def inertia(value_kgm2: float, units: UnitSystem) -> str:
    """A polar inertia [kg·m²] with three digits in the declared units."""
    shown = SHOWN[units]
    return f"{brief(value_kgm2 * shown.per_kgm2)} {shown.inertia}"


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
        and link.kind not in ("tie", "damper")
        and all(graph.speed_ratio[station] for station in link.stations)
    ]
    return min(elastic, key=lambda link: link.referred_nm_rad or 0.0, default=None)


def link_words(screening: Screening, link: GraphLink) -> str:
    """ "elastomer coupling flex-block", "shaft pump-shaft", "gear reduction"."""
    if link.kind == "coupling":
        kind = next(item.kind for item in screening.train.couplings if item.name == link.name)
        return f"{kind + ' ' if kind else ''}coupling {link.name}"
    word = {"mesh": "gear", "epicyclic": "epicyclic stage"}.get(link.kind, link.kind)
    return f"{word} {link.name}"


def train_title(screening: Screening) -> str:
    """What the train is, in one sentence."""
    graph = screening.graph
    shafts = [(i, link) for i, link in enumerate(graph.links) if link.kind in ("shaft", "coupling", "damper")]
    around = pair_neighbours(shafts)
    ends = {a for a, _ in shafts}
    lines = _connected(len(graph.stations), around)
    text = capital(count(len(graph.stations), "station")) + f" on {count(lines, 'shaft line')}"
    soft = softest(graph)
    if soft is None or not ends:
        return text
    aside = ("tie", "damper")
    only = sum(1 for link in graph.links if link.stiffness_nm_rad is not None and link.kind not in aside) == 1
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
    lead = max(mode.referred_shape, key=lambda name: mode.kinetic_energy[name])
    sign = 1.0 if mode.referred_shape[lead] >= 0 else -1.0
    against = {
        name: energy
        for name, energy in mode.kinetic_energy.items()
        if mode.referred_shape.get(name, 0.0) * sign < 0 and energy > 1e-6
    }
    if against:
        return f"{lead} swings against {max(against, key=lambda name: against[name])}"
    return f"all swing together, {lead} the most"


def train_paths(graph: TorsionalGraph) -> list[list[int]]:
    """Stations as disjoint paths over all links of two stations, the longest of each remainder first."""
    return paths_over(len(graph.stations), pair_neighbours(enumerate(graph.links)))
