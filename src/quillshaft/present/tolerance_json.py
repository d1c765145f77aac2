"""A tolerance study as JSON: the keys that other programs rely on."""

from __future__ import annotations

from typing import Any

from quillshaft.present.results_json import to_json
from quillshaft.study.tolerance_results import Chance, ModeSpread, PairChance, ToleranceStudy
from quillshaft.version import __version__


def _chance(chance: Chance) -> dict[str, Any]:
    return {
        "probability": chance.probability,
        "standard_error": chance.standard_error,
        "interval_95": list(chance.interval),
        "certain": chance.certain,
    }


def _pair(item: PairChance) -> dict[str, Any]:
    pair = item.pair
    return {
        "source": pair.source,
        "mode": pair.mode,
        **_chance(item.not_clear),
        "meets": _chance(item.meets),
        "required": pair.worst_required,
        "verdict": pair.verdict,
        "worst_verdict": pair.worst_verdict,
        "dismissed": pair.dismissed is not None,
    }


def _mode(mode: ModeSpread) -> dict[str, Any]:
    return {
        "mode": mode.mode,
        "nominal_hz": mode.nominal_hz,
        "low_hz": mode.low_hz,
        "high_hz": mode.high_hz,
        "p05_hz": mode.p05_hz,
        "p95_hz": mode.p95_hz,
    }


def tolerance_data(study: ToleranceStudy) -> dict[str, Any]:
    """A tolerance study as plain data; `low_hz` and `high_hz` are the bounds, the probability is of "not clear"."""
    train = study.screening.train
    return {
        "schema": 1,
        "version": __version__,
        "input_sha256": train.file.sha256,
        "train": {"title": train.title, "tag": train.tag, "cases": list(train.cases)},
        "samples": study.samples,
        "seed": study.seed,
        "distribution": study.distribution,
        "bounds": study.bounds,
        "bounds_because": study.bounds_because,
        "any_not_clear": _chance(study.any_not_clear),
        "modes": [_mode(mode) for mode in study.modes],
        "interferences": [_pair(item) for item in study.pairs],
        "drivers": [
            {
                "source": driver.source,
                "mode": driver.mode,
                "element": driver.element,
                "quantity": driver.quantity,
                "station": driver.station,
                "group": driver.group,
                "share": driver.share,
                "sensitivity": driver.sensitivity,
                "rank_by_sensitivity": driver.rank_by_sensitivity,
                "standard_deviation": driver.deviation,
            }
            for driver in study.drivers
        ],
    }


def tolerance_json(study: ToleranceStudy) -> str:
    """A tolerance study as JSON text."""
    return to_json(tolerance_data(study))
