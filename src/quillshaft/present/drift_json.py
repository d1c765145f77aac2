"""A drift as JSON: the keys that other programs rely on. Values are in `unit`, null for the file's bare unit."""

from __future__ import annotations

import math
from typing import Any

from quillshaft.present.results_json import to_json
from quillshaft.study.drift import Drift
from quillshaft.version import __version__


def drift_data(drift: Drift) -> dict[str, Any]:
    """A drift as plain data; a frequency is null where its mode is gone."""
    train = drift.train
    return {
        "schema": 1,
        "version": __version__,
        "input_sha256": train.file.sha256,
        "train": {"title": train.title, "tag": train.tag, "cases": list(train.cases)},
        "datum": drift.datum,
        "unit": drift.unit or None,
        "values": drift.values.tolist(),
        "modes": [
            {"mode": mode, "frequency_hz": [value if math.isfinite(value) else None for value in along]}
            for mode, along in enumerate(drift.frequency_hz.T.tolist(), start=1)
        ],
        "first_interferences": [
            {
                "source": item.source,
                "mode": item.mode,
                "at_value": item.at_value,
                "frequency_hz": item.frequency_hz if math.isfinite(item.frequency_hz) else None,
                "required": item.required,
                "verdict": item.verdict,
                "meets_at_value": item.meets_at,
            }
            for item in drift.first
        ],
        "at_start": [
            {"source": item.source, "mode": item.mode, "verdict": item.verdict, "meets_at_value": item.meets_at}
            for item in drift.at_start
        ],
    }


def drift_json(drift: Drift) -> str:
    """A drift as JSON text."""
    return to_json(drift_data(drift))
