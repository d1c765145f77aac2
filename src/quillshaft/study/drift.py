"""Drift: one number of the file taken from one value to another, and where interferences first appear on the way."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from quillshaft.assess.results import Verdict
from quillshaft.assess.separation import required_separation
from quillshaft.graph.build import build_graph
from quillshaft.graph.network import Floats
from quillshaft.sources.collect import collect_sources
from quillshaft.study.datum import DatumError, find_datum, read_values, spelled, train_at
from quillshaft.study.drift_points import INSIDE, Bands, Point, Sweep
from quillshaft.train.model import Train

RESOLUTION = 1e-9  # of the span: how closely a first appearance is found
MOST_STEPS = 10_001

Progress = Callable[[int, int], None]


@dataclass(frozen=True)
class FirstInterference:
    """A pair that is clear at the start and becomes not clear on the way.

    at_value      where it first is not clear by the nominal requirement
    frequency_hz  of the mode there
    required      separation that the criteria ask for at nominal values
    verdict       close, crossing or barred, just there
    meets_at      where mode and source first meet; None where they do not within the sweep
    """

    source: str
    mode: int
    at_value: float
    frequency_hz: float
    required: float
    verdict: Verdict
    meets_at: float | None


@dataclass(frozen=True)
class StartInterference:
    """A pair that is not clear at the start already, and where it then first meets, if it does."""

    source: str
    mode: int
    verdict: Verdict
    meets_at: float | None


@dataclass(frozen=True)
class Drift:
    """The whole result of a sweep.

    train           as it stands in the file, cases laid
    unit            of all values, as it was given; "" where bare numbers were given
    values          (steps,) from start to end
    frequency_hz    (steps, modes) rising along each row; inf where a mode is gone (its inertia became zero)
    sources         names of the continuous sources, and bands[step][source] where each excites
    first           in the order in which they appear on the way
    at_start        what is not clear at the start already
    moves           False where neither a frequency nor a source depends on the datum
    """

    train: Train
    datum: str
    unit: str
    values: Floats
    frequency_hz: Floats
    sources: tuple[str, ...]
    bands: tuple[Bands, ...]
    first: tuple[FirstInterference, ...]
    at_start: tuple[StartInterference, ...]
    moves: bool


def drift(
    train: Train,
    datum: str,
    values_from: str | float,
    values_to: str | float,
    steps: int = 41,
    progress: Progress | None = None,
) -> Drift:
    """Take one datum of the train's file from one value to another, the train's cases laid, all else nominal.

    Values are texts with a unit, or bare numbers, as the file would spell them. Modes are numbered by rising
    frequency at every value. A first appearance is bracketed by the steps and found by bisection to 1e-9 of
    the span; an interference that comes and goes by the same side between two steps is not seen.

    Raises DatumError where the datum or a value cannot be used, TrainFileError where the train cannot turn.
    """
    if not 2 <= steps <= MOST_STEPS:
        raise DatumError(f"steps = {steps}: a sweep has 2 to {MOST_STEPS} values")
    found = find_datum(train, datum)
    ends = read_values(found, values_from, values_to)
    values = np.linspace(ends.start, ends.end, steps)
    first = train_at(found, spelled(ends.start, ends.unit))
    active = collect_sources(first, build_graph(first)).active
    names = tuple(source.name for source in active if source.when == "continuous")
    sweep = Sweep(found, ends.unit, names)
    points = []
    for number, value in enumerate(values.tolist(), start=1):
        points.append(sweep.at(value))
        if progress is not None:
            progress(number, steps)
    appear, there = _appearances(sweep, values.tolist(), first)
    along = _stacked([point.frequency for point in points])
    return Drift(
        train=train,
        datum=datum,
        unit=ends.unit,
        values=values,
        frequency_hz=along,
        sources=names,
        bands=tuple(point.bands for point in points),
        first=appear,
        at_start=there,
        moves=bool((along != along[0]).any()) or any(point.bands != points[0].bands for point in points),
    )


def _stacked(rows: list[Floats]) -> Floats:
    """(steps, modes) frequencies, inf where a mode is gone."""
    along = np.full((len(rows), max(map(len, rows))), math.inf)
    for place, row in zip(along, rows, strict=True):
        place[: len(row)] = row
    return along


def _appearances(
    sweep: Sweep, values: list[float], first: Train
) -> tuple[tuple[FirstInterference, ...], tuple[StartInterference, ...]]:
    start, found, there = sweep.at(values[0]), [], []
    by_name = {source.name: source for source in collect_sources(first, build_graph(first)).active}
    for row, name in enumerate(sweep.names):
        required = required_separation(by_name[name], first.criteria.separation)
        for mode in range(len(start.frequency)):
            meets = _first_change(sweep, values, row, mode, "tight")
            if start.wide[row, mode] == INSIDE:
                verdict = _verdict(start, row, mode)
                already = start.tight[row, mode] == INSIDE
                there.append(StartInterference(name, mode + 1, verdict, values[0] if already else meets))
                continue
            at = _first_change(sweep, values, row, mode, "wide")
            if at is not None:
                point = sweep.at(at)
                verdict = _verdict(point, row, mode)
                hertz = float(point.frequency[mode]) if mode < len(point.frequency) else math.inf
                found.append(FirstInterference(name, mode + 1, at, hertz, required, verdict, meets))
    found.sort(key=lambda item: abs(item.at_value - values[0]))
    return tuple(found), tuple(there)


def _first_change(sweep: Sweep, values: list[float], row: int, mode: int, kind: str) -> float | None:
    """The first value at which a mode leaves its slot; None where it never does."""

    def slot(value: float) -> int:
        point = sweep.at(value)
        slots: Floats = getattr(point, kind)
        return int(slots[row, mode]) if mode < slots.shape[1] else len(point.bands[row])

    began = slot(values[0])
    if began == INSIDE:
        return None
    place = next((index for index, value in enumerate(values) if slot(value) != began), None)
    if place is None:
        return None
    clear, changed = values[place - 1], values[place]
    while abs(changed - clear) > RESOLUTION * abs(values[-1] - values[0]):
        middle = 0.5 * (clear + changed)
        if middle in (clear, changed):
            break
        clear, changed = (clear, middle) if slot(middle) != began else (middle, changed)
    return changed


def _verdict(point: Point, row: int, mode: int) -> Verdict:
    """What a pair inside a band is there: meeting in a free stretch, only in a barred one, or too close."""
    if mode >= len(point.frequency):
        return "close"
    frequency = point.frequency[mode]
    met = [
        band
        for band in point.by_mode[mode][row]
        if band.meets[0] * (1 - RESOLUTION) <= frequency <= band.meets[1] * (1 + RESOLUTION)
    ]
    if not met:
        return "close"
    return "barred" if all(band.barred for band in met) else "crossing"
