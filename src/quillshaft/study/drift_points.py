"""The train at each value of a drifting number: natural frequencies, bands of the sources, and where each stands."""

from __future__ import annotations

import math
from dataclasses import dataclass, field

import numpy as np

from quillshaft.assess.along import follows_speed, graph_at, settle
from quillshaft.assess.separation import JudgedRange, judged_ranges, required_separation
from quillshaft.graph.build import build_graph
from quillshaft.graph.network import Floats
from quillshaft.solve.modes import natural_frequencies
from quillshaft.sources.collect import collect_sources
from quillshaft.sources.line import Source
from quillshaft.study.bands import Along, SourceBand, source_bands
from quillshaft.study.datum import Datum, DatumError, spelled, train_at
from quillshaft.train.model import Train
from quillshaft.train.problems import TrainFileError

TWO_PI = 2.0 * math.pi
EDGE = 1e-13  # relative: how sharp the edges of a band are while a first appearance is looked for
INSIDE = -1  # the slot of a frequency inside a band; others count the bands below it
SPEEDS_A_STRETCH = 9  # at which frequencies that follow speed are solved, straight between them

Bands = tuple[tuple[SourceBand, ...], ...]
"""The bands of each source, one for each judged stretch."""


@dataclass(frozen=True)
class Point:
    """The train at one value.

    frequency       (modes,) [Hz], at the mean torque of rated speed where it follows speed
    bands           of each source
    by_mode         the same as each mode meets them: at its frequency at rated speed
    wide, tight     (sources, modes) slot among the bands with separation, and among those of the sources alone
    """

    frequency: Floats
    bands: Bands
    by_mode: tuple[Bands, ...]
    wide: Floats
    tight: Floats


@dataclass
class Sweep:
    """What is known so far along the sweep; `names` are those of the continuous sources."""

    datum: Datum
    unit: str
    names: tuple[str, ...]
    points: dict[float, Point] = field(default_factory=dict)

    def at(self, value: float) -> Point:
        """The train at a value, solved once. Raises DatumError where it cannot be."""
        if value not in self.points:
            self.points[value] = _point(self, value)
        return self.points[value]


def _point(sweep: Sweep, value: float) -> Point:
    try:
        train = train_at(sweep.datum, spelled(value, sweep.unit))
        sources = _sources(train, sweep, value)
        ranges = judged_ranges(train.operation)
        frequency, along = _frequencies(train, ranges)
    except TrainFileError as error:
        raise DatumError(f"datum = {sweep.datum.name}: at {spelled(value, sweep.unit)}:\n{error}") from None
    bands = _bands(train, sources, ranges, None)
    by_mode = (bands,) * len(frequency)
    if along:
        by_mode = tuple(_bands(train, sources, ranges, own) for own in along)
    shape = (len(sources), len(frequency))
    wide, tight = np.zeros(shape), np.zeros(shape)
    for row in range(len(sources)):
        for mode, own in enumerate(frequency.tolist()):
            wide[row, mode] = _slot(own, [band.not_clear for band in by_mode[mode][row]], EDGE)
            tight[row, mode] = _slot(own, [band.meets for band in by_mode[mode][row]], 0.0)
    return Point(frequency, bands, by_mode, wide, tight)


def _sources(train: Train, sweep: Sweep, value: float) -> list[Source]:
    active = collect_sources(train, build_graph(train)).active
    by_name = {name: source for source in reversed(active) for name in source.origins}
    gone = [name for name in sweep.names if name not in by_name]
    if gone:
        raise DatumError(f"datum = {sweep.datum.name}: at {value:g} there is no source {gone[0]} any more")
    return [by_name[name] for name in sweep.names]


def _bands(train: Train, sources: list[Source], ranges: tuple[JudgedRange, ...], along: Along | None) -> Bands:
    criteria = train.criteria
    return tuple(
        source_bands(source, ranges, required_separation(source, criteria.separation), criteria.margin_on, EDGE, along)
        for source in sources
    )


def _frequencies(train: Train, ranges: tuple[JudgedRange, ...]) -> tuple[Floats, list[Along]]:
    """Natural frequencies (modes,) [Hz], and how each follows speed; none where they do not."""
    graph = build_graph(train)
    if not follows_speed(train):
        return natural_frequencies(graph.network) / TWO_PI, []
    settled = settle(train, graph, "reference")
    rated = natural_frequencies(settled.graph.network)
    stretches = [np.linspace(one.low_rad_s, one.high_rad_s, SPEEDS_A_STRETCH) for one in ranges]
    speeds = sorted({speed for stretch in stretches for speed in stretch.tolist()})
    along = [natural_frequencies(graph_at(train, settled, speed, "reference").network) for speed in speeds]
    ratio = np.array(along) / rated
    return rated / TWO_PI, [Along(tuple(speeds), tuple(own)) for own in ratio.T.tolist()]


def _slot(frequency: float, bands: list[tuple[float, float]], open_by: float) -> int:
    """INSIDE, or how many bands lie below a frequency; closed bands where `open_by` is 0."""
    inside = (low < frequency < high if open_by else low <= frequency <= high for low, high in bands)
    return INSIDE if any(inside) else sum(high <= frequency for _, high in bands)
