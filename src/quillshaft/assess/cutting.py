"""How finely shafts of distributed inertia are cut: until every judged mode has converged."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

from quillshaft.assess.results import Flag
from quillshaft.assess.separation import highest_frequency
from quillshaft.elements.shaft import cut_shaft
from quillshaft.graph.build import build_graph
from quillshaft.graph.network import Floats
from quillshaft.graph.states import Temperature
from quillshaft.records import dataclass
from quillshaft.solve.modes import natural_modes
from quillshaft.solve.plan import plan_elimination
from quillshaft.sources.collect import collect_sources
from quillshaft.train.basic_model import Assumed
from quillshaft.train.model import Train

WANTED = 1e-3
"""Relative error of every judged frequency at which cutting stops."""

MOST_CUTS = 256


@dataclass(frozen=True)
class Convergence:
    """What cutting leaves: of the judged modes the least converged, its frequency, relative error, observed order.

    judged is the number of the highest judged mode, 0 where there is none.
    order is None where a quarter of the cuts says nothing (fewer modes, or no change left to measure).
    """

    judged: int
    mode: int
    frequency_hz: float
    error: float
    order: float | None


@dataclass(frozen=True)
class CutTrain:
    """A train with its distributed shafts cut finely enough, and what `check` says of it."""

    train: Train
    flags: tuple[Flag, ...]


def cut_finely(train: Train, temperature: Temperature) -> CutTrain:
    """Double the cuts of distributed shafts until every judged mode is within a thousandth, or 256 cuts.

    Shafts that state `cuts` keep them. The error left is estimated from the frequencies at half the cuts by
    Richardson's extrapolation of second order (L.F. Richardson, Phil. Trans. A 226, 1927; from memory).
    Raises TrainFileError as `build_graph` and `collect_sources` do.
    """
    if all(shaft.own_inertia != "distributed" for shaft in train.shafts):
        return CutTrain(train, ())
    while True:
        found = convergence(train, temperature)
        finer = _with_cuts(train, 2.0)
        if found.error <= WANTED or finer == train or _most_cuts(finer) > MOST_CUTS:
            break
        train = finer
    chosen = [shaft for shaft in train.shafts if shaft.cuts and not shaft.cuts_given]
    why = "not given: doubled from 16 until every judged mode is within 0.1 %, or 256 lengths"
    assumed = tuple(Assumed(f"shafts.{shaft.name}", "cuts", f"{shaft.cuts}", why) for shaft in chosen)
    flags = tuple(
        Flag(f"shafts.{shaft.name}", f"distributed inertia, {_lengths(train, shaft.name)} lengths: {_words(found)}")
        for shaft in train.shafts
        if shaft.cuts
    )
    return CutTrain(replace(train, assumed=(*train.assumed, *assumed)), flags)


def convergence(train: Train, temperature: Temperature) -> Convergence:
    """The judged mode that cutting has moved most: frequencies as cut against half and a quarter of the cuts.

    Raises TrainFileError as `build_graph` and `collect_sources` do.
    """
    graph = build_graph(train, temperature)
    top = highest_frequency(collect_sources(train, graph).active, train.operation, train.criteria)
    fine, half, quarter = (_frequencies(_with_cuts(train, factor, True), temperature) for factor in (1.0, 0.5, 0.25))
    judged = min(max(1, int((fine <= top).sum())), len(fine), len(half))
    if not judged:
        return Convergence(0, 0, 0.0, 0.0, None)
    change = fine[:judged] - half[:judged]
    worst = int(np.argmax(np.abs(change) / fine[:judged]))
    order = None
    if len(quarter) > worst and abs(change[worst]) > 1e-12 * fine[worst]:
        before = float((half[worst] - quarter[worst]) / change[worst])
        order = math.log2(before) if before > 0 else None
    own = float(fine[worst])
    return Convergence(judged, worst + 1, own, float(abs(change[worst])) / own / 3.0, order)


def _frequencies(train: Train, temperature: Temperature) -> Floats:
    """Nominal natural frequencies [Hz], rising."""
    network = build_graph(train, temperature).network
    return natural_modes(network, plan_elimination(network)).omega_rad_s / (2.0 * math.pi)


def _with_cuts(train: Train, factor: float, given_too: bool = False) -> Train:
    """The train with the cuts of its distributed shafts multiplied, at least 1."""
    shafts = tuple(
        replace(shaft, cuts=max(1, round(shaft.cuts * factor)))
        if shaft.cuts and (given_too or not shaft.cuts_given)
        else shaft
        for shaft in train.shafts
    )
    return replace(train, shafts=shafts)


def _most_cuts(train: Train) -> int:
    return max(shaft.cuts for shaft in train.shafts)


def _lengths(train: Train, name: str) -> int:
    return len(cut_shaft(next(shaft for shaft in train.shafts if shaft.name == name)).stiffness_nm_rad)


def _words(found: Convergence) -> str:
    if not found.judged:
        return "there is no mode to converge"
    order = "" if found.order is None else f" (observed order {found.order:.2f})"
    finer = "" if found.error <= WANTED else "; more cuts are wanted"
    apart = f"{max(found.error * 100.0, 1e-4):.1g} %"
    return (
        f"of the {found.judged} lowest modes, up to the highest source, mode {found.mode} at "
        f"{found.frequency_hz:.4g} Hz is farthest from the uncut shaft, by about {apart}{order}; "
        f"higher modes are coarser{finer}"
    )
