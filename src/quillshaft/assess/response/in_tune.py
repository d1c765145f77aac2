"""A mode that only the tolerances bring onto a source in the running range: the response with the train so tuned."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from quillshaft.assess.response.combine import torque_range
from quillshaft.assess.response.evaluate import Kept, evaluate
from quillshaft.assess.response.ground import Ground
from quillshaft.assess.response.loads import LoadSet
from quillshaft.assess.response.mean import shares_along
from quillshaft.assess.response.run import Swept
from quillshaft.assess.response.states import State
from quillshaft.assess.results import Interference, Screening
from quillshaft.assess.separation import judged_ranges
from quillshaft.graph.network import Floats, Network
from quillshaft.records import dataclass
from quillshaft.solve.damped_state import undamped
from quillshaft.solve.modes import natural_modes
from quillshaft.sources.line import TWO_PI, Source, frequencies_over

HALVINGS = 40
POINTS = 61
WIDE = 4.0


@dataclass(frozen=True)
class Tuned:
    """Alternating torque (links, K) [N·m] of the normal load at speeds (K,) [rad/s], the mode tuned onto the source."""

    speed_rad_s: Floats
    torque_nm: Floats


def tuned_responses(
    screening: Screening, ground: Ground, swept: Swept, loads: LoadSet, pair: Interference
) -> tuple[Tuned, ...]:
    """The response with all tolerances moved together just so far that mode and source meet at a judged speed.

    Lowered and raised onto it where that can be; none where they meet at a judged speed nominally, or the tolerances do
    not reach. Stiffness and inertia go straight from nominal towards the end of the tolerances that lowers or raises
    the mode; its frequency follows steadily.
    """
    mode, source = screening.mode(pair.mode), screening.source(pair.source)
    places = _meetings(source, ground, mode.frequency_hz)
    out = []
    for name, below in (("soft and heavy", True), ("stiff and light", False)):
        corner = next((state for state in swept.states if state.name == name), None)
        found = [place for place in places or () if (place[0] < mode.frequency_hz) == below]
        if corner is not None and found:
            place = min(found, key=lambda item: abs(item[0] - mode.frequency_hz))
            tuned = _tuned(ground, swept, loads, source, (corner, pair.mode, max(mode.damping_ratio, 1e-3)), place)
            out += [tuned] if tuned is not None else []
    return tuple(out)


def _tuned(
    ground: Ground,
    swept: Swept,
    loads: LoadSet,
    source: Source,
    what: tuple[State, int, float],
    place: tuple[float, float],
) -> Tuned | None:
    base, (corner, mode, zeta), (wanted, at) = swept.states[0], what, place
    share = _share(base, corner, mode, wanted, at)
    if share is None:
        return None
    speeds = _speeds(source, ground, at, zeta)
    state = replace(base, network=_between(base.network, corner.network, share))
    springs = None
    if base.springs_along is not None and corner.springs_along is not None:
        springs = (1.0 - share) * base.springs_along(speeds) + share * corner.springs_along(speeds)
    band: dict[str, tuple[float, ...]] | None = {source.name: (TWO_PI * wanted,)} if source.band else None
    law, case = shares_along(base.train, speeds), swept.loads[0]
    lines = evaluate(state, loads, (case,), (Kept((), ()),), speeds, law, springs, band)
    return Tuned(speeds, torque_range(loads, case, 0, lines, law).half)


def _meetings(source: Source, ground: Ground, mode_hz: float) -> list[tuple[float, float]] | None:
    """(frequency [Hz], speed [rad/s]) of a source at the ends of every judged stretch; None where it meets the mode."""
    out = []
    for stretch in judged_ranges(ground.train.operation):
        if stretch.barred:
            continue
        low, high = frequencies_over(source, stretch.low_rad_s, stretch.high_rad_s)
        if low <= mode_hz <= high:
            return None
        for speed in (stretch.low_rad_s, stretch.high_rad_s):
            out += [(frequency, speed) for frequency in frequencies_over(source, speed, speed)]
    return out


def _share(base: State, corner: State, mode: int, wanted_hz: float, speed_rad_s: float) -> float | None:
    """How far towards the end of the tolerances the mode has the wanted frequency; None where it does not reach."""
    start, end = (_at_speed(state, speed_rad_s) for state in (base, corner))

    def frequency(share: float) -> float:
        network = undamped(_between(start, end, share))
        return float(natural_modes(network).omega_rad_s[mode - 1]) / TWO_PI

    first, last = frequency(0.0), frequency(1.0)
    if not min(first, last) <= wanted_hz <= max(first, last):
        return None
    low, high = 0.0, 1.0
    for _ in range(HALVINGS):
        middle = 0.5 * (low + high)
        if (frequency(middle) - wanted_hz) * (first - wanted_hz) > 0:
            low = middle
        else:
            high = middle
        if high - low < 1e-6:
            break
    return 0.5 * (low + high)


def _at_speed(state: State, speed_rad_s: float) -> Network:
    """The undamped network of a state as the screening has it, its springs at a speed."""
    pick = state.pick(state.graph)
    if state.springs_along is None:
        return pick
    return replace(pick, spring_nm_rad=state.springs_along(np.array([speed_rad_s]))[: len(pick.spring_nm_rad), 0])


def _between(first: Network, last: Network, share: float) -> Network:
    """A network whose values lie straight between those of two of one structure."""

    def mixed(a: Floats, b: Floats) -> Floats:
        return np.asarray((1.0 - share) * a + share * b)

    links = tuple(
        replace(a, compliance_rad_per_nm=(1.0 - share) * a.compliance_rad_per_nm + share * b.compliance_rad_per_nm)
        for a, b in zip(first.torque_links, last.torque_links, strict=True)
    )
    return replace(
        first,
        inertia_kgm2=mixed(first.inertia_kgm2, last.inertia_kgm2),
        spring_nm_rad=mixed(first.spring_nm_rad, last.spring_nm_rad),
        tie_nm_rad=mixed(first.tie_nm_rad, last.tie_nm_rad),
        torque_links=links,
    )


def _speeds(source: Source, ground: Ground, at_rad_s: float, zeta: float) -> Floats:
    """Judged speeds [rad/s] at which the tuned train is looked at: close about the meeting, or all over the range."""
    free = [item for item in judged_ranges(ground.train.operation) if not item.barred]
    if source.order == 0.0:
        return np.unique([speed for item in free for speed in np.linspace(item.low_rad_s, item.high_rad_s, POINTS)])
    fine = at_rad_s * (1.0 + WIDE * zeta * np.linspace(-1.0, 1.0, POINTS))
    inside = [speed for speed in fine.tolist() if any(item.low_rad_s <= speed <= item.high_rad_s for item in free)]
    return np.unique(np.append(inside, at_rad_s))
