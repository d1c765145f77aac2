"""The cheapest ways out of each interference: which value to change, by how much, and what else that does."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import Literal

from quillshaft.assess.dismissals import MATCH
from quillshaft.assess.results import Interference, Screening, Verdict, graver
from quillshaft.assess.separation import judged_ranges, separate
from quillshaft.graph.network import Floats
from quillshaft.solve.modes import natural_frequencies
from quillshaft.study.lever_search import Search, candidates_for, prepare, sensitivity
from quillshaft.study.reach import Datum, Side, changed
from quillshaft.train.basic_model import Range

HELPLESS = 0.01
"""A sensitivity below this (d ln f / d ln value) says that the element does not move the mode."""
SHOWN = 3
MOST_TRIED = 40
TWO_PI = 2.0 * math.pi

Progress = Callable[[int, int], None]


@dataclass(frozen=True)
class VerdictShift:
    """A pair whose verdict a change moves: the graver of nominal and over the tolerances, before and after."""

    source: str
    mode: int
    before: Verdict
    after: Verdict


@dataclass(frozen=True)
class Lever:
    """One change that clears an interference, nominally and over all tolerances.

    element, quantity   what is changed: "couplings.flex-block", "stiffness"
    sensitivity         d ln f / d ln value: half the energy share, negative for an inertia
    factor              on the value; from_value and to_value are actual: N·m/rad at the first-named station, or
                        the station's own kg·m²
    frequency_hz        of the mode after the change, and bounds_hz over the tolerances
    worsened, cleared   other pairs whose verdict the change makes worse, or clear
    stale               dismissals that would no longer apply
    """

    element: str
    quantity: Literal["stiffness", "inertia"]
    sensitivity: float
    factor: float
    from_value: float
    to_value: float
    frequency_hz: float
    bounds_hz: Range
    worsened: tuple[VerdictShift, ...]
    cleared: tuple[VerdictShift, ...]
    stale: tuple[str, ...]

    @property
    def size(self) -> float:
        """How large the change is: the factor or its inverse, whichever is above 1."""
        return max(self.factor, 1.0 / self.factor)

    @property
    def harmless(self) -> bool:
        """True where no other pair gets worse and no dismissal lapses."""
        return not self.worsened and not self.stale


@dataclass(frozen=True)
class WaysOut:
    """The levers of one interference, the smallest change first.

    levers        the best three, and the first that makes nothing else worse where none of those is one
    cannot_help   elements whose sensitivity is below 1 % and that clear nothing within the largest factor
    not_alone     elements that move the mode, but clear nothing within the largest factor
    at_rated      True where frequencies follow speed: the changes are then worked out at rated speed only
    tried         number of changes that were worked out in full
    """

    source: str
    mode: int
    levers: tuple[Lever, ...]
    cannot_help: tuple[str, ...]
    not_alone: tuple[str, ...]
    at_rated: bool
    tried: int


def levers(screening: Screening, progress: Progress | None = None) -> tuple[WaysOut, ...]:
    """The ways out of every interference that is not clear and not dismissed, the worst interference first.

    `progress` is told how many interferences are done, and of how many.
    """
    wanted = [pair for pair in screening.not_clear() if pair.dismissed is None]
    if not wanted:
        return ()
    study = prepare(screening)
    out = []
    for number, pair in enumerate(wanted, start=1):
        out.append(_ways_out(study, pair))
        if progress is not None:
            progress(number, len(wanted))
    return tuple(out)


def _ways_out(study: Search, pair: Interference) -> WaysOut:
    candidates = candidates_for(study, pair)
    found, tried = _found(study, pair, candidates)
    best = found[:SHOWN]
    if not any(item.harmless for item in best):
        best += [item for item in found[SHOWN:] if item.harmless][:1]
    possible = {datum.element for datum, _ in candidates}
    idle = [datum for datum in study.data if datum.element not in possible]
    weak = [abs(sensitivity(study.screening, datum, pair.mode)) < HELPLESS for datum in idle]
    return WaysOut(
        pair.source,
        pair.mode,
        tuple(best),
        tuple(datum.element for datum, is_weak in zip(idle, weak, strict=True) if is_weak),
        tuple(datum.element for datum, is_weak in zip(idle, weak, strict=True) if not is_weak),
        any(mode.frequency_along is not None for mode in study.screening.modes),
        tried,
    )


def _found(study: Search, pair: Interference, candidates: list[tuple[Datum, float]]) -> tuple[list[Lever], int]:
    """Levers in order of size until there are three and a harmless one, and how many changes were tried."""
    found: list[Lever] = []
    reached: set[tuple[str, bool]] = set()
    tried = 0
    for datum, factor in candidates:
        way = datum.element, factor > 1.0
        if way in reached:
            continue
        tried += 1
        lever = _lever(study, pair, datum, factor)
        if lever is not None:
            reached.add(way)
            found.append(lever)
        if tried >= MOST_TRIED or (len(found) >= SHOWN and any(item.harmless for item in found)):
            break
    return found, tried


def _lever(study: Search, pair: Interference, datum: Datum, factor: float) -> Lever | None:
    """The lever at a factor; None where the pair is not clear there."""
    hz = {
        side: natural_frequencies(changed(study.screening.graph, network, side, datum, factor), study.plan) / TWO_PI
        for side, network in study.networks.items()
    }
    after = dict(_verdicts(study, hz))
    if after.get((pair.source, pair.mode), "clear") != "clear":
        return None
    dismissed = {(item.source, item.mode) for item in study.screening.interferences if item.dismissed is not None}
    keys = [key for key in sorted({*after, *study.known}, key=lambda key: (key[1], key[0])) if key not in dismissed]
    shifts = [
        VerdictShift(*key, study.known.get(key, "clear"), after.get(key, "clear"))
        for key in keys
        if key != (pair.source, pair.mode)
    ]
    number = pair.mode - 1
    return Lever(
        datum.element,
        datum.quantity,
        sensitivity(study.screening, datum, pair.mode),
        factor,
        datum.value,
        datum.value * factor,
        float(hz[0][number]),
        (float(hz[-1][number]), float(hz[1][number])),
        tuple(s for s in shifts if s.after != s.before and graver(s.before, s.after) == s.after),
        tuple(s for s in shifts if s.before != "clear" and s.after == "clear"),
        _lapsed(study.screening, hz[0]),
    )


def _verdicts(study: Search, hz: dict[Side, Floats]) -> Iterator[tuple[tuple[str, int], Verdict]]:
    """((source, mode), graver verdict) of every pair that is not clear at these natural frequencies [Hz]."""
    train = study.screening.train
    ranges, on = judged_ranges(train.operation), train.criteria.margin_on
    for number, (low, own, high) in enumerate(zip(hz[-1], hz[0], hz[1], strict=True), start=1):
        if low > study.top_hz:
            continue
        for need in study.needs:
            if low >= need.hull_hz[1] or high <= need.hull_hz[0]:
                continue
            nominal = separate(need.source, (float(own), float(own)), ranges, need.nominal, on)
            worst = separate(need.source, (float(low), float(high)), ranges, need.worst, on)
            yield (need.source.name, number), graver(nominal.verdict, worst.verdict)


def _lapsed(screening: Screening, hz: Floats) -> tuple[str, ...]:
    """Dismissals in force whose mode moves too far from the frequency they were given for."""
    items = [pair.dismissed for pair in screening.interferences if pair.dismissed is not None]
    return tuple(
        dict.fromkeys(
            item.name for item in items if abs(hz[item.mode - 1] - item.frequency_hz) > MATCH * item.frequency_hz
        )
    )
