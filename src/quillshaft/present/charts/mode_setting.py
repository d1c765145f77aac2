"""How a figure of mode shapes is laid out: which strips it shows, side by side or in rows, and their sizes."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from quillshaft.assess.results import ModeResult, Screening
from quillshaft.present.charts import look
from quillshaft.present.charts.strips import Strip, strips

BAR_MM = 3.6
LEFT_MM = 12.0
START_MM = 6.0
END_MM = 5.0
NARROWEST_MM = 12.5
LABEL_MM = look.line_mm() + 1.5
CAPTION_MM = 64.0
HEAD_MM = look.line_mm() + 1.2
"""Height over the strips of a row that holds their captions."""
SMALLEST = 0.0005
"""Shares below this are not mentioned."""

Shares = tuple[list[tuple[str, float]], float]
"""Names with their shares, the largest first, and what all others sum to."""


@dataclass(frozen=True)
class Size:
    """Room [mm] that one of several modes in a figure gets: height of a curve, lines of shares, upright names."""

    curve_mm: float
    bars: int
    upright_mm: float


SIZES = {1: Size(30.0, 7, 28.0), 2: Size(24.0, 5, 18.0), 3: Size(19.0, 3, 14.0)}
"""By the number of modes in the figure."""
LOWEST_CURVE_MM = 19.0
"""A curve is never drawn lower: the values at its points need that much."""
TALLEST_MODE_MM = 196.0
"""Height that one mode may take, its title and the notes apart; branches that do not fit are left out."""


@dataclass(frozen=True)
class Setting:
    """How a figure of modes is laid out: strips side by side in rows, and sizes [mm]."""

    screening: Screening
    rows: tuple[tuple[Strip, ...], ...]
    pitch_mm: float
    curve_mm: float
    bars: int
    upright_mm: float
    left_out: tuple[Strip, ...]

    @property
    def upright(self) -> bool:
        """True where names stand upright because columns are too narrow for them."""
        names = self.screening.graph.stations
        return self.pitch_mm < NARROWEST_MM or not all(look.breaks_well(name, self.pitch_mm - 1.5) for name in names)

    @property
    def actual(self) -> bool:
        """True where actual angles differ from referred ones and there is room for a row of them."""
        scale = self.screening.graph.scale
        return not self.upright and float(max(scale)) != float(min(scale))


def setting_for(screening: Screening, modes: Sequence[ModeResult]) -> Setting:
    """Strips side by side in rows; where one mode gets too tall, the strips with the least energy are left out.

    A figure of several modes is as tall as they need: they go on pages of their own where that is too tall.
    """
    runs = list(strips(screening.graph))
    most = max(len(run.stations) for run in runs)
    room = look.WIDTH_MM - LEFT_MM - START_MM
    pitch = min(26.0, room / (most - 0.5), (room - END_MM) / max(1, most - 1))
    left_out: list[Strip] = []
    setting = _set(screening, runs, pitch, len(modes), left_out)
    while len(runs) > 1 and max(panel_height(setting, mode) for mode in modes) > TALLEST_MODE_MM:
        least = min(runs[1:], key=lambda run: _share(screening, run, modes))
        runs.remove(least)
        left_out.append(least)
        setting = _set(screening, runs, pitch, len(modes), left_out)
    return setting


def _set(screening: Screening, runs: list[Strip], pitch: float, modes: int, left_out: list[Strip]) -> Setting:
    """The strips in rows, curves lower where there are several rows."""
    size, rows = SIZES[modes], _rows(runs, pitch)
    curve = max(LOWEST_CURVE_MM, size.curve_mm * {1: 1.0, 2: 0.85}.get(len(rows), 0.7))
    upright = size.upright_mm if len(rows) == 1 else min(16.0, size.upright_mm)
    return Setting(screening, rows, pitch, curve, size.bars, upright, tuple(left_out))


def _rows(runs: Sequence[Strip], pitch_mm: float) -> tuple[tuple[Strip, ...], ...]:
    rows: list[list[Strip]] = []
    for run in runs:
        used = sum(strip_width(other, pitch_mm) for other in rows[-1]) if rows else look.WIDTH_MM
        if used + strip_width(run, pitch_mm) <= look.WIDTH_MM + 0.01:
            rows[-1].append(run)
        else:
            rows.append([run])
    return tuple(map(tuple, rows))


def _share(screening: Screening, run: Strip, modes: Sequence[ModeResult]) -> float:
    """Largest share of the energies, over the modes, that sits on a strip."""
    graph = screening.graph
    own = run.stations[1:] if run.lead else run.stations
    return max(
        sum(mode.kinetic_energy[graph.stations[station]] for station in own)
        + sum(mode.strain_energy[graph.links[link].name] for link in run.links)
        for mode in modes
    )


def strip_width(run: Strip, pitch_mm: float) -> float:
    """Width [mm] of a strip with its axis, from name to name, or with its caption if that is wider."""
    plain = START_MM + pitch_mm * (len(run.stations) - 0.5)
    return LEFT_MM + max(plain, min(look.width_mm(run.caption) + 3.0, CAPTION_MM))


def names_height(setting: Setting, run: Strip) -> float:
    """Height [mm] of the station names under a strip."""
    names = [setting.screening.graph.stations[station] for station in run.stations]
    if setting.upright:
        return min(setting.upright_mm, max(look.width_mm(name) for name in names)) + 1.5
    lines = max(len(look.wrap_name(name, setting.pitch_mm - 1.5)) for name in names)
    return lines * look.line_mm() + 1.0


def row_height(setting: Setting, row: tuple[Strip, ...]) -> float:
    """Height [mm] of a row of strips with their captions and names."""
    caption = HEAD_MM if any(run.caption for run in row) else 0.0
    actual = look.line_mm() if setting.actual else 0.0
    names = max(names_height(setting, run) for run in row)
    return caption + setting.curve_mm + names + actual + 1.5


def bars_of(shares: dict[str, float], most: int) -> Shares:
    """The largest shares above 1 %, and what the others sum to."""
    ranked = sorted(shares.items(), key=lambda item: -item[1])
    shown = [item for item in ranked[:most] if item[1] >= 0.01]
    return shown, sum(share for _, share in ranked[len(shown) :])


def panel_height(setting: Setting, mode: ModeResult) -> float:
    """Height [mm] of one mode: its rows of strips and its lists of shares."""
    curves = sum(row_height(setting, row) for row in setting.rows)
    lists = (bars_of(shares, setting.bars) for shares in (mode.strain_energy, mode.kinetic_energy))
    rows = max(len(shown) for shown, _ in lists) + 1
    return curves + rows * BAR_MM + 3.0
