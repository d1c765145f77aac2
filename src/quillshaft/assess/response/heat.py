"""Stiffness, damping, heat and temperature of couplings iterated until they settle, or run away."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

from quillshaft.assess.response.combine import added_heat
from quillshaft.assess.response.evaluate import Kept, StateLines, evaluate
from quillshaft.assess.response.loads import LoadCase, LoadSet
from quillshaft.assess.response.states import State
from quillshaft.graph.network import Bools, Floats, Ints
from quillshaft.graph.states import REFERENCE_K, coupling_temperature
from quillshaft.records import dataclass
from quillshaft.sources.gas import Complexes
from quillshaft.train.basic_model import table_value
from quillshaft.train.coupling_model import Coupling
from quillshaft.train.model import Train

MOST_ROUNDS = 60
SETTLED_K = 0.02
BEYOND_K = 60.0
"""How far above the last temperature of its table a coupling may get before it is said to run away."""


@dataclass(frozen=True)
class Heated:
    """Where the temperature of couplings has settled, by coupling name (S,) [K], and where it runs away."""

    temperature_k: dict[str, Floats]
    runaway: dict[str, Bools]


def heated_couplings(train: Train) -> tuple[Coupling, ...]:
    """Couplings that state what it takes: permitted heat, temperature rise at it, a damping and a temperature table."""
    return tuple(
        coupling
        for coupling in train.couplings
        if coupling.ratings is not None
        and coupling.ratings.permitted_heat_w
        and coupling.ratings.heat_rise_k
        and coupling.temperature_points
        and coupling.loss_factor
    )


def ambient_k(coupling: Coupling) -> float:
    """Temperature [K] of the air about a coupling: as stated, else 30 °C."""
    return coupling.ambient_k if coupling.ambient_k is not None else REFERENCE_K


def settle_heat(
    state: State, loads: LoadSet, case: LoadCase, speed_rad_s: Floats, share: Floats, highest_k: float = math.inf
) -> Heated:
    """Iterate T = ambient + rise · heat / permitted heat at every speed (S,), from the ambient up.

    What has not settled in 60 rounds, or leaves its table by more than 60 K, runs away; the iteration stops early where
    a coupling gets hotter than highest_k. Source: steady heat balance with a constant thermal resistance (common
    practice; the rise at the permitted heat is the maker's).
    """
    couplings = heated_couplings(state.train)
    loads = replace(loads, plain=tuple(item for item in loads.plain if item.constant_nm or item.following_nm))
    places = [[link.name for link in state.graph.links].index(coupling.name) for coupling in couplings]
    base = complex_springs(state, speed_rad_s)
    kept = Kept((), tuple(places))
    kelvin = {item.name: np.full(len(speed_rad_s), ambient_k(item)) for item in couplings}
    away = {item.name: np.zeros(len(speed_rad_s), dtype=bool) for item in couplings}
    for _ in range(MOST_ROUNDS):
        springs = heated_springs(state, couplings, kelvin, base)
        lines = evaluate(state, loads, (case,), (kept,), speed_rad_s, share, springs)
        moved = np.zeros(len(speed_rad_s))
        for row, (coupling, place) in enumerate(zip(couplings, places, strict=True)):
            top = coupling.temperature_points[-1][0] + BEYOND_K
            new = _reached(coupling, _heat(loads, case, lines, share, (row, place)))
            away[coupling.name] |= new > top
            new = np.minimum(new, top)
            moved = np.maximum(moved, np.abs(new - kelvin[coupling.name]))
            kelvin[coupling.name] = new
        hottest = max((float(value.max(initial=0.0)) for value in kelvin.values()), default=0.0)
        if float(np.max(moved, initial=0.0)) <= SETTLED_K or hottest > highest_k:
            break
    else:
        for name in away:
            away[name] |= moved > SETTLED_K
    return Heated(kelvin, away)


def thinned(inside: Bools, most: int) -> Ints:
    """Places of the True among `inside`, evenly thinned to `most` with the first and last kept."""
    places = np.flatnonzero(inside)
    if len(places) <= most:
        return places
    return np.asarray(places[np.round(np.linspace(0, len(places) - 1, most)).astype(int)], dtype=np.intp)


def _reached(coupling: Coupling, heat_w: Floats) -> Floats:
    ratings = coupling.ratings
    assert ratings is not None
    return np.asarray(ambient_k(coupling) + (ratings.heat_rise_k or 0.0) * heat_w / (ratings.permitted_heat_w or 1.0))


def _heat(loads: LoadSet, case: LoadCase, lines: StateLines, share: Floats, place: tuple[int, int]) -> Floats:
    """(S,) heat of a coupling: its row among what is kept of groups, and its place among all links."""
    row, link = place
    groups = [(group, own.heat_w[[row]]) for group, own in zip(loads.groups, lines.groups[0], strict=True)]
    single = [
        item.amplitude_nm(share * case.load_share) ** 2 * own.heat_w[[link]].max(axis=1)
        for item, own in zip(loads.plain, lines.plain, strict=True)
    ]
    return np.asarray(added_heat(loads, groups, single)[0])


def complex_springs(state: State, speed_rad_s: Floats) -> Complexes:
    """(springs, S) k (1 + jη) [N·m/rad] at the state's own temperature."""
    if state.springs_along is None:
        own = np.repeat(state.network.spring_nm_rad[:, None], len(speed_rad_s), axis=1)
    else:
        own = state.springs_along(speed_rad_s)
    return np.asarray(own * (1 + 1j * state.damping.spring_loss[:, None]))


def heated_springs(
    state: State, couplings: tuple[Coupling, ...], kelvin: dict[str, Floats], base: Complexes
) -> Complexes:
    """(springs, S) the same with couplings at temperatures (S,) [K] by name."""
    springs = base.copy()
    for coupling in couplings:
        index = state.graph.link(coupling.name).index
        stands = coupling_temperature(coupling, state.temperature)
        softer = _factors(coupling.temperature_points, kelvin[coupling.name], stands)
        looser = _factors(coupling.damping_points, kelvin[coupling.name], stands) if coupling.damping_points else 1.0
        springs[index] = base[index].real * softer * (1 + 1j * base[index].imag / base[index].real * looser)
    return springs


def _factors(points: tuple[tuple[float, float], ...], kelvin: Floats, stands_k: float) -> Floats:
    """(S,) factors at temperatures [K] over that at the temperature of the state."""
    table = np.array(points)
    return np.asarray(np.interp(kelvin, table[:, 0], table[:, 1]) / table_value(points, stands_k))
