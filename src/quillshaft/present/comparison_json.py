"""A comparison as JSON: the keys that other programs rely on."""

from __future__ import annotations

import math
from typing import Any

from quillshaft.present.comparison_words import reapproval_sentences
from quillshaft.present.results_json import screening_data, to_json
from quillshaft.study.compare import CaseComparison, Comparison, DutyChange, PairChange


def comparison_data(comparison: Comparison) -> dict[str, Any]:
    """A comparison as plain data, ready for JSON."""
    cases = comparison.cases
    return {
        "schema": 1,
        "base": screening_data(comparison.base),
        "cases": {case.name: screening_data(case.screening) for case in cases},
        "matched": [
            {
                "case": case.name,
                "mode_base": item.mode_base,
                "mode_case": item.mode_case,
                "similarity": item.similarity,
                "steps": item.steps,
                "from_hz": item.from_hz,
                "to_hz": item.to_hz,
                "from_bounds_hz": list(item.from_bounds_hz),
                "to_bounds_hz": list(item.to_bounds_hz),
            }
            for case in cases
            for item in case.matched
        ],
        "unmatched": [
            {"case": case.name, "base": list(case.only_base), "in_case": list(case.only_case)} for case in cases
        ],
        "verdict_changes": [_shift(case, pair, worst=False) for case in cases for pair in case.verdict_changes(False)],
        "worst_verdict_changes": [
            _shift(case, pair, worst=True) for case in cases for pair in case.verdict_changes(True)
        ],
        "inputs_changed": [
            {"case": case.name, "path": change.path, "before": change.before, "after": change.after}
            for case in cases
            for change in case.changes
        ],
        "duties": [_duty(case, duty) for case in cases for duty in case.duties],
        "reapprove": {case.name: reapproval_sentences(case) for case in cases},
    }


def _shift(case: CaseComparison, pair: PairChange, worst: bool) -> dict[str, Any]:
    before, after = pair.verdicts(worst)
    margins = [None if side is None else (side.worst_margin if worst else side.margin) for side in _sides(pair)]
    return {
        "case": case.name,
        "source": pair.source,
        "mode": pair.mode_base if pair.mode_base is not None else pair.mode_case,
        "mode_base": pair.mode_base,
        "mode_case": pair.mode_case,
        "from": before,
        "to": after,
        "from_margin": _finite(margins[0]),
        "to_margin": _finite(margins[1]),
    }


def _sides(pair: PairChange) -> tuple[Any, Any]:
    return pair.before, pair.after


def _finite(value: float | None) -> float | None:
    return value if value is not None and math.isfinite(value) else None


def _duty(case: CaseComparison, duty: DutyChange) -> dict[str, Any]:
    before, after = duty.before, duty.after
    return {
        "case": case.name,
        "link": duty.link,
        "from_mean_torque_nm": None if before is None else before.mean_torque_nm,
        "to_mean_torque_nm": None if after is None else after.mean_torque_nm,
        "from_wind_up_rad": None if before is None else before.wind_up_rad,
        "to_wind_up_rad": None if after is None else after.wind_up_rad,
        "from_rated_torque_nm": duty.rated_before_nm,
        "to_rated_torque_nm": duty.rated_after_nm,
    }


def comparison_json(comparison: Comparison) -> str:
    """A comparison as JSON text."""
    return to_json(comparison_data(comparison))
