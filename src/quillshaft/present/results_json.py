"""Results as JSON: the keys that other programs rely on."""

from __future__ import annotations

import json
import math
from typing import Any

from quillshaft.assess.results import Interference, ModeResult, Screening
from quillshaft.sources.line import Source
from quillshaft.version import __version__


def _finite(value: float | None) -> float | None:
    return value if value is not None and math.isfinite(value) else None


def _mode(mode: ModeResult) -> dict[str, Any]:
    return {
        "mode": mode.mode,
        "frequency_hz": mode.frequency_hz,
        "omega_rad_s": mode.omega_rad_s,
        "cycles_per_min": mode.cycles_per_min,
        "damping_ratio": mode.damping_ratio,
        "shape": mode.shape,
        "strain_energy": mode.strain_energy,
        "kinetic_energy": mode.kinetic_energy,
        "bounds_hz": list(mode.bounds_hz),
        "frequency_along": None if mode.frequency_along is None else [list(row) for row in mode.frequency_along],
        "nodes": [{"link": node.link, "share": node.share} for node in mode.nodes],
        "cluster": list(mode.cluster),
        "proof": {
            "below": mode.proof.below,
            "above": mode.proof.above,
            "relative_width": mode.proof.relative_width,
            "proven": mode.proof.proven,
        },
    }


def _source(source: Source) -> dict[str, Any]:
    return {
        "source": source.name,
        "origins": list(source.origins),
        "at": source.at,
        "order": source.order,
        "frequency_hz": source.frequency_hz,
        "speed_ratio": source.speed_ratio,
        "when": source.when,
        "major": source.major,
    }


def _interference(pair: Interference) -> dict[str, Any]:
    dismissed = pair.dismissed
    return {
        "source": pair.source,
        "mode": pair.mode,
        "critical_speed_rpm": pair.critical_speed_rpm,
        "critical_speeds_rpm": list(pair.critical_speeds_rpm),
        "margin": _finite(pair.margin),
        "worst_margin": _finite(pair.worst_margin),
        "judged_at_rpm": pair.judged_at_rpm,
        "required": pair.required,
        "worst_required": pair.worst_required,
        "excitability": pair.excitability,
        "worst_excitability": pair.worst_excitability,
        "free_margin": _finite(pair.free_margin),
        "free_worst_margin": _finite(pair.free_worst_margin),
        "bar_needed_rpm": None if pair.bar_needed_rpm is None else list(pair.bar_needed_rpm),
        "verdict": pair.verdict,
        "worst_verdict": pair.worst_verdict,
        "dismissed": None if dismissed is None else {"because": dismissed.because, "by": dismissed.by},
    }


def screening_data(screening: Screening) -> dict[str, Any]:
    """A screening as plain data, ready for JSON."""
    train, check = screening.train, screening.self_check
    return {
        "schema": 1,
        "version": __version__,
        "input_sha256": train.file.sha256,
        "temperature": screening.temperature,
        "train": {"title": train.title, "tag": train.tag, "cases": list(train.cases)},
        "modes": [_mode(mode) for mode in screening.modes],
        "judged_modes": list(screening.judged_modes),
        "sources": [_source(source) for source in screening.sources],
        "sources_off": [{"source": source.name, "because": why} for source, why in screening.sources_off],
        "interferences": [_interference(pair) for pair in screening.interferences],
        "stale_dismissals": [
            {"dismissal": item.dismissal.name, "why": item.why} for item in screening.stale_dismissals
        ],
        "links": [
            {
                "link": duty.link,
                "kind": link.kind,
                "stiffness_nm_rad": link.stiffness_nm_rad,
                "referred_nm_rad": link.referred_nm_rad,
                "mean_torque_nm": duty.mean_torque_nm,
                "wind_up_rad": duty.wind_up_rad,
            }
            for link, duty in zip(screening.graph.links, screening.duties, strict=True)
        ],
        "cases": None
        if screening.cases is None
        else [
            {
                "case": case.name,
                "verdict": case.screening.verdict if case.screening else None,
                "worst_verdict": case.screening.worst_verdict if case.screening else None,
                "problem": case.problem,
            }
            for case in screening.cases
        ],
        "assumed": [
            {"element": item.element, "key": item.key, "value": item.value, "why": item.why}
            for item in screening.assumed
        ],
        "derived": [
            {"element": item.element, "quantity": item.quantity, "value": item.value, "unit": item.unit}
            for item in screening.derived
        ],
        "flags": [{"element": flag.element, "text": flag.text} for flag in screening.flags],
        "self_check": {
            "modes": check.modes,
            "all_proven": check.all_proven,
            "relative_width": check.relative_width,
            "largest_residual": check.largest_residual,
            "largest_energy_error": check.largest_energy_error,
        },
        "verdict": screening.verdict,
        "worst_verdict": screening.worst_verdict,
    }


def to_json(data: Any) -> str:
    """JSON text with a final newline; not-a-number never appears in it. Raises ValueError if it would."""
    return json.dumps(data, indent=1, ensure_ascii=False, allow_nan=False) + "\n"


def screening_json(screening: Screening) -> str:
    """A screening as JSON text."""
    return to_json(screening_data(screening))
