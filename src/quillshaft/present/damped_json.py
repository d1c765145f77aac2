"""Damped modes as JSON: the keys that other programs rely on."""

from __future__ import annotations

import math
from typing import Any

from quillshaft.assess.damped_results import AperiodicMotion, DampedMode, DampedResult
from quillshaft.present.results_json import to_json
from quillshaft.version import __version__


def damped_data(result: DampedResult) -> dict[str, Any]:
    """Damped modes as plain data, ready for JSON."""
    train = result.screening.train
    return {
        "schema": 1,
        "version": __version__,
        "input_sha256": train.file.sha256,
        "train": {"title": train.title, "tag": train.tag, "cases": list(train.cases)},
        "modes": [_mode(mode) for mode in result.modes],
        "aperiodic": [_aperiodic(motion) for motion in result.aperiodic],
        "zeta": result.zeta,
        "default_links": list(result.default_links),
        "rings": list(result.rings),
        "rings_unknown": list(result.rings_unknown),
        "stable": not result.unstable,
        "all_verified": result.all_verified,
    }


def _mode(mode: DampedMode) -> dict[str, Any]:
    return {
        "mode": mode.mode,
        "undamped_mode": mode.undamped_mode,
        "undamped_hz": mode.undamped_hz,
        "frequency_hz": mode.frequency_hz,
        "natural_hz": mode.natural_hz,
        "decay_1_s": mode.decay_1_s,
        "damping_ratio": mode.damping_ratio,
        "log_decrement": mode.log_decrement,
        "unstable": mode.unstable,
        "shape": mode.shape,
        "phase_deg": mode.phase_deg,
        "energy_lost": mode.energy_lost,
        "residual": mode.residual,
        "verified": mode.verified,
    }


def _aperiodic(motion: AperiodicMotion) -> dict[str, Any]:
    return {
        "decay_1_s": motion.decay_1_s,
        "time_constant_s": motion.time_constant_s if math.isfinite(motion.time_constant_s) else None,
        "unstable": motion.unstable,
        "shape": motion.shape,
        "energy_lost": motion.energy_lost,
        "residual": motion.residual,
        "verified": motion.verified,
    }


def damped_json(result: DampedResult) -> str:
    """Damped modes as JSON text."""
    return to_json(damped_data(result))
