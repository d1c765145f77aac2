"""One source of excitation as a line in the speed–frequency plane: f(N) = |order · N_station + frequency|."""

from __future__ import annotations

import math
from typing import Literal

from quillshaft.records import dataclass

TWO_PI = 2.0 * math.pi
When = Literal["continuous", "start", "fault"]


@dataclass(frozen=True)
class Action:
    """Where a source acts.

    kind     point: the stations in `stations`, each with the phase of its share [rad];
             line: the most moved of `stations`; link: inside the link `link`
    weights  of the stations, where they are not all of one amplitude
    """

    kind: Literal["point", "line", "link"]
    stations: tuple[int, ...] = ()
    phases_rad: tuple[float, ...] = ()
    link: str | None = None
    weights: tuple[float, ...] = ()


@dataclass(frozen=True)
class Source:
    """A source line and where it acts.

    name          as every table calls it; `origins` are all names merged into it; `aliases` are understood
                  too (a shaft line's 1x by any of its stations)
    labels        for each origin the criteria keys that fit it, the most specific first
    at            station, link or stations in words
    station       number of the station whose speed N [rev/s] counts; the line is |order · N + frequency_hz|
    band          relative variation of frequency_hz (a supply's); 0 otherwise
    speed_ratio   that station's speed over the speed of `speed-at`
    major         for engine orders: the firing pulses of the cylinders add up (None elsewhere)
    torque        amplitude in words where the file gives one
    """

    name: str
    origins: tuple[str, ...]
    labels: tuple[tuple[str, ...], ...]
    at: str
    station: int
    order: float
    frequency_hz: float
    band: float
    speed_ratio: float
    when: When
    action: Action
    major: bool | None = None
    torque: str | None = None
    aliases: tuple[str, ...] = ()

    def answers_to(self, name: str) -> bool:
        """True where `name` is one of its names."""
        return name in self.origins or name in self.aliases


def slope(source: Source) -> float:
    """Hz of the source per rad/s of the speed of `speed-at`, before folding."""
    return source.order * source.speed_ratio / TWO_PI


def frequencies_over(source: Source, low_rad_s: float, high_rad_s: float) -> tuple[float, float]:
    """Lowest and highest frequency [Hz] of a source while the speed runs from low to high [rad/s]."""
    ends = (slope(source) * low_rad_s, slope(source) * high_rad_s)
    bands = (source.frequency_hz * (1.0 - source.band), source.frequency_hz * (1.0 + source.band))
    low, high = min(ends) + min(bands), max(ends) + max(bands)
    if low <= 0.0 <= high:
        return 0.0, max(-low, high)
    return min(abs(low), abs(high)), max(abs(low), abs(high))


def meeting_speeds(source: Source, frequency_hz: float) -> tuple[float, ...]:
    """Speeds of `speed-at` [rad/s], rising, at which the nominal line passes a frequency [Hz]."""
    rise = slope(source)
    if rise == 0.0:
        return ()
    speeds = {(sign * frequency_hz - source.frequency_hz) / rise for sign in (1.0, -1.0)}
    return tuple(sorted(speed for speed in speeds if speed > 0.0))
