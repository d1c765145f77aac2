"""The forced response as JSON: the keys that other programs rely on, SI units, each at its own shaft's speed.

Numbers carry six significant digits; null stands for what is not known. Lists along the speeds stand on one line.
"""

from __future__ import annotations

import json
from typing import Any

import numpy as np

from quillshaft.assess.response_results import CaseResponse, Closing, Finding, LimitCurve, Response
from quillshaft.assess.response_standing import standing
from quillshaft.graph.network import Floats
from quillshaft.present.response_restrictions_json import gauges_data, maps_data, restrictions_data
from quillshaft.present.response_values import RPM, largest, rpm_at
from quillshaft.present.six_digits import numbers, one
from quillshaft.version import __version__

SMALLEST_SHARE = 5e-3
"""Lines below this share of a link's largest alternating torque are left out of `by_order`."""


def response_data(response: Response) -> dict[str, Any]:
    """The response as plain data, ready for JSON."""
    screening = response.screening
    train = screening.train
    return {
        "schema": 1,
        "version": __version__,
        "input_sha256": train.file.sha256,
        "temperature": screening.temperature,
        "train": {"title": train.title, "tag": train.tag, "cases": list(train.cases)},
        "verdict": standing(response).verdict,
        "governing": None if response.governing is None else _finding(response.governing),
        "findings": [_finding(item) for item in response.findings],
        "faults": [_finding(item) for item in response.faults],
        "closings": [_closing(item) for item in response.closings],
        **restrictions_data(response),
        "speeds_rpm": numbers(response.speed_rad_s * RPM),
        "continuous": response.continuous.tolist(),
        "links": _links(response),
        "stations": _stations(response),
        "by_order": {name: _orders(response, place) for place, name in enumerate(_names(response))},
        "cases": [_case(response, case) for case in response.cases],
        "waves": _waves(response),
        "gauges": gauges_data(response),
        "separation_maps": maps_data(response),
        "groups": [{"group": name, "sources": list(sources)} for name, sources in response.groups],
        "combination": response.combination,
        "unjudged": list(response.unjudged),
        "assumed": [
            {"element": item.element, "key": item.key, "value": item.value, "why": item.why}
            for item in response.assumed
        ],
        "notes": list(response.notes),
    }


def _names(response: Response) -> list[str]:
    return [link.name for link in response.screening.graph.links]


def _finding(item: Finding) -> dict[str, Any]:
    return {
        "link": item.element,
        "check": item.check,
        "value": one(item.value),
        "limit": one(item.limit),
        "unit": item.unit,
        "use": one(item.use),
        "at_speed_rpm": one(item.at_speed_rpm),
        "case": item.case,
        "case_kind": item.case_kind,
        "zone": item.zone,
        "verdict": item.verdict,
        "basis": item.basis,
    }


def _closing(item: Closing) -> dict[str, Any]:
    return {
        "source": item.source,
        "mode": item.mode,
        "status": item.status,
        "text": item.text,
        "finding": None if item.finding is None else _finding(item.finding),
    }


def _links(response: Response) -> dict[str, Any]:
    """The normal case by link, with its limits."""
    limits, normal = {item.link: item for item in response.limits}, response.normal
    found = {}
    for place, name in enumerate(_names(response)):
        limit = limits.get(name, LimitCurve(name, None, None, None, "no limit given"))
        alternating, scale = normal.alternating_torque_nm[place], limit.mpa_per_nm
        found[name] = {
            "mean_torque_nm": numbers(normal.mean_torque_nm[place]),
            "alternating_torque_nm": numbers(alternating),
            "root_sum_square_nm": numbers(normal.root_sum_square_nm[place]),
            "peak_torque_nm": numbers(normal.peak_torque_nm[place]),
            "stress_mpa": None if scale is None else numbers(alternating * scale),
            "weighted_torque_nm": _if_known(normal.weighted_torque_nm[place]),
            "twist_deg": numbers(normal.twist_deg[place]),
            "heat_w": numbers(normal.heat_w[place]),
            "continuous_limit_nm": None if limit.continuous_nm is None else numbers(limit.continuous_nm),
            "passing_limit_nm": None if limit.passing_nm is None else numbers(limit.passing_nm),
            "limit_basis": limit.basis,
        }
    return found


def _if_known(row: Floats) -> list[Any] | None:
    return numbers(row) if bool(np.isfinite(row).any()) else None


def _stations(response: Response) -> dict[str, Any]:
    normal = response.normal
    return {
        name: {
            "angle_deg": numbers(normal.angle_deg[place]),
            "irregularity": numbers(normal.irregularity[place]),
            "inertia_torque_nm": _if_known(normal.inertia_torque_nm[place]),
        }
        for place, name in enumerate(response.screening.graph.stations)
    }


def _orders(response: Response, place: int) -> dict[str, Any]:
    """What each source contributes in one link, the largest first: parallel lists, amplitudes (lines, speeds)."""
    least = SMALLEST_SHARE * float(np.nanmax(np.nan_to_num(response.normal.alternating_torque_nm[place]), initial=0.0))
    tops = [(float(np.nan_to_num(share.torque_nm[place]).max(initial=0.0)), share) for share in response.shares]
    shown = [share for top, share in sorted(tops, key=lambda item: -item[0]) if top > 0 and top >= least]
    return {
        "order": [one(share.order) for share in shown],
        "source": [share.source for share in shown],
        "group": [share.group for share in shown],
        "frequency_hz": [one(share.frequency_hz) for share in shown],
        "amplitude_nm": [numbers(share.torque_nm[place]) for share in shown],
    }


def _case(response: Response, case: CaseResponse) -> dict[str, Any]:
    """One case: by link its alternating torque over speed, and all torques where that is largest."""
    return {
        "case": case.name,
        "kind": case.kind,
        "note": case.note,
        "judged": case.judged,
        "links": {
            name: {
                "alternating_torque_nm": numbers(case.alternating_torque_nm[place]),
                "largest": _largest(response, case, place),
            }
            for place, name in enumerate(_names(response))
        },
        "temperature_degc": {name: numbers(row - 273.15) for name, row in case.temperature_k.items()},
        "runaway": {name: row.tolist() for name, row in case.runaway.items()},
        "damper_w": {name: numbers(row) for name, row in case.damper_w.items()},
        "damper_nm": {name: numbers(row) for name, row in case.damper_nm.items()},
    }


def _largest(response: Response, case: CaseResponse, place: int) -> dict[str, Any]:
    """All torques of one link at the speed of its largest alternating torque."""
    at, _ = largest(case.alternating_torque_nm[place])
    return {
        "at_speed_rpm": one(rpm_at(response, at)),
        "mean_torque_nm": one(float(case.mean_torque_nm[place][at])),
        "alternating_torque_nm": one(float(case.alternating_torque_nm[place][at])),
        "root_sum_square_nm": one(float(case.root_sum_square_nm[place][at])),
        "peak_torque_nm": one(float(case.peak_torque_nm[place][at])),
    }


def _waves(response: Response) -> list[dict[str, Any]]:
    return [
        {
            "case": wave.case,
            "group": wave.group,
            "speed_rpm": one(wave.speed_rpm),
            "angle_deg": numbers(wave.angle_deg),
            "links": {name: numbers(wave.torque_nm[place]) for place, name in enumerate(_names(response))},
        }
        for wave in response.waves
    ]


def response_json(response: Response) -> str:
    """The response as JSON text with a final newline."""
    return _text(response_data(response), "") + "\n"


def _text(value: Any, indent: str) -> str:
    """JSON with records over several lines and lists of plain values on one."""
    inner = f"{indent} "
    if isinstance(value, dict) and value:
        rows = [f"{inner}{json.dumps(key, ensure_ascii=False)}: {_text(item, inner)}" for key, item in value.items()]
        return "{\n" + ",\n".join(rows) + f"\n{indent}}}"
    if isinstance(value, list) and any(isinstance(item, (dict, list)) for item in value):
        return "[\n" + ",\n".join(inner + _text(item, inner) for item in value) + f"\n{indent}]"
    return json.dumps(value, ensure_ascii=False, allow_nan=False, separators=(",", ":"))
