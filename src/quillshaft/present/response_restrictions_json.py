"""Restrictions, gauges and maps of tooth separation as plain data for JSON."""

from __future__ import annotations

from typing import Any

from quillshaft.assess.response_results import Response
from quillshaft.present.six_digits import numbers, one


def restrictions_data(response: Response) -> dict[str, Any]:
    """Barred ranges, idle, load with a dead cylinder, tolerable sources and passages, each under its own key."""
    found = response.restrictions
    return {
        "barred_ranges": [
            {"from_rpm": one(span.from_rpm), "to_rpm": one(span.to_rpm), "because": span.because}
            for span in found.barred
        ],
        "tachometer_share": found.tachometer_share,
        "lowest_idle_rpm": one(found.lowest_idle_rpm),
        "idle": found.idle_text,
        "dead_loads": [
            {
                "machine": item.machine,
                "cylinder": item.cylinder,
                "load_share": one(item.load_share),
                "because": item.because,
            }
            for item in found.dead_loads
        ],
        "tolerable": [
            {
                "source": item.source,
                "at": item.at,
                "least_nm": one(item.least_nm),
                "at_rpm": one(item.at_rpm),
                "link": item.link,
                "skip_rpm": [[one(low), one(high)] for low, high in item.skip_rpm],
            }
            for item in found.tolerable
        ],
        "passages": [
            {
                "source": item.source,
                "mode": item.mode,
                "at_rpm": one(item.at_rpm),
                "seconds": one(item.seconds),
                "cycles": one(item.cycles),
                "peak_share": one(item.peak_share),
            }
            for item in found.passages
        ],
        "ramp_rad_s2": one(found.ramp_rad_s2),
    }


def gauges_data(response: Response) -> list[dict[str, Any]]:
    """Where to measure each mode."""
    return [
        {
            "mode": item.mode,
            "frequency_hz": one(item.frequency_hz),
            "link": item.link,
            "section": item.section,
            "microstrain_per_nm": one(item.strain_per_nm),
            "torque_nm": one(item.torque_nm),
            "microstrain": one(item.microstrain),
            "at_rpm": one(item.at_rpm),
            "source": item.source,
            "torque_per_nm": one(item.torque_per_nm),
            "encoder_at": item.encoder_at,
            "encoder_deg_per_nm": one(item.encoder_deg_per_nm),
            "note": item.note,
        }
        for item in response.gauges
    ]


def maps_data(response: Response) -> list[dict[str, Any]]:
    """Alternating over mean torque of each gear over load and speed."""
    return [
        {"gear": item.gear, "load_share": numbers(item.load_share), "ratio": numbers(item.ratio)}
        for item in response.maps
    ]
