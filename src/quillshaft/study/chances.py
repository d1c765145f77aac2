"""Sampled natural frequencies judged: the chance that each pair is not clear, and that they meet."""

from __future__ import annotations

import math

import numpy as np

from quillshaft.assess.results import Interference, Screening
from quillshaft.graph.network import Bools, Floats
from quillshaft.study.bands import SourceBand, pair_bands
from quillshaft.study.tolerance_results import Certain, Chance, PairChance

NORMAL_95 = 1.959963984540054


def chance(count: int, samples: int, certain: Certain | None = None) -> Chance:
    """The probability of what happened in `count` of `samples`, with its sampling error."""
    share = count / samples
    if certain is not None:
        return Chance(share, count, 0.0, (share, share), certain)
    square = NORMAL_95**2 / samples
    middle = (share + square / 2.0) / (1.0 + square)
    half = math.sqrt(square * (share * (1.0 - share) + square / 4.0)) / (1.0 + square)
    error = math.sqrt(share * (1.0 - share) / samples)
    return Chance(share, count, error, (max(0.0, middle - half), min(1.0, middle + half)))


def judged(screening: Screening, frequency: Floats) -> tuple[tuple[PairChance, ...], Chance]:
    """Every judged pair, and whether any not dismissed is not clear."""
    samples = len(frequency)
    any_bad, pairs, sure = np.zeros(samples, dtype=bool), [], False
    for pair in screening.interferences:
        mode, own = screening.mode(pair.mode), frequency[:, pair.mode - 1]
        bounds = mode.bounds_hz if mode.frequency_along is None else None
        item, bad = _pair_chance(pair, pair_bands(screening, pair), own, bounds)
        pairs.append(item)
        if pair.dismissed is None and bad is not None:
            any_bad |= bad
            sure |= item.not_clear.certain == "always"
    possible = any(item.not_clear.certain != "never" for item in pairs if item.pair.dismissed is None)
    certain: Certain | None = "always" if sure else None if possible else "never"
    return tuple(pairs), chance(int(any_bad.sum()), samples, certain)


def _pair_chance(
    pair: Interference, bands: tuple[SourceBand, ...], own: Floats, bounds: tuple[float, float] | None
) -> tuple[PairChance, Bools | None]:
    """The chances of one pair, and in which samples it is not clear; None where that is ruled out.

    `bounds` of the frequency decide it alone where they can; without them (a mode that follows speed) only the
    verdict over the tolerances does.
    """
    wide = [band.not_clear for band in bands]
    meet = [band.meets for band in bands]
    never = pair.worst_verdict == "clear" if bounds is None else _certain(bounds, wide) == "never"
    if never:
        ruled_out = chance(0, len(own), "never")
        return PairChance(pair, ruled_out, ruled_out), None
    bad, met = _inside(own, wide), _inside(own, meet)
    return (
        PairChance(
            pair,
            chance(int(bad.sum()), len(own), _certain(bounds, wide)),
            chance(int(met.sum()), len(own), _certain(bounds, meet)),
        ),
        bad,
    )


def _inside(own: Floats, bands: list[tuple[float, float]]) -> Bools:
    inside = np.zeros(len(own), dtype=bool)
    for low, high in bands:
        inside |= (low < own) & (own < high)
    return inside


def _certain(bounds: tuple[float, float] | None, bands: list[tuple[float, float]]) -> Certain | None:
    """What bounds alone say of bands; None where they leave it open, or where there are none."""
    if bounds is None:
        return None
    if any(low < bounds[0] and bounds[1] < high for low, high in bands):
        return "always"
    return None if any(low < bounds[1] and bounds[0] < high for low, high in bands) else "never"
