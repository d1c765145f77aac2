"""Orders of a reciprocating machine as JSON: the keys that other programs rely on."""

from __future__ import annotations

import math
from typing import Any

from quillshaft.assess.orders import OrderStudy
from quillshaft.present.results_json import to_json
from quillshaft.version import __version__


def order_data(study: OrderStudy) -> dict[str, Any]:
    """A study of orders as plain data; torques are amplitudes [N·m], null where not known."""
    train = study.screening.train
    return {
        "schema": 1,
        "version": __version__,
        "input_sha256": train.file.sha256,
        "train": {"title": train.title, "tag": train.tag, "cases": list(train.cases)},
        "machine": study.machine.name,
        "speed_rpm": study.speed_rad_s * 30.0 / math.pi,
        "indicative": study.indicative,
        "mean_gas_torque_nm": study.mean_nm,
        "cylinders": [
            {
                "cylinder": index,
                "at": item.at,
                "dead_centre_deg": math.degrees(item.fires_at_rad),
                "bank_deg": None if item.bank_rad is None else math.degrees(item.bank_rad),
                "throw_deg": angle,
                "dead": item.dead,
                "reciprocating_inertia_kgm2": inertia,
            }
            for index, (item, angle, inertia) in enumerate(
                zip(study.machine.cylinders, study.crank_angles_deg(), study.inertia_kgm2, strict=True), start=1
            )
        ],
        "orders": [
            {
                "order": row.order,
                "major": row.major,
                "rigid_sum": row.rigid_sum,
                "mode_sums": [{"mode": mode, "sum": value} for mode, value in row.mode_sums.items()],
                "gas_torque_nm": row.gas_nm,
                "inertia_torque_nm": row.inertia_nm,
                "torque_nm": row.torque_nm,
                "dead_torque_nm": row.dead_nm,
                "together_nm": row.together_nm,
            }
            for row in study.rows
        ],
    }


def order_json(study: OrderStudy) -> str:
    """`order_data` as text."""
    return to_json(order_data(study))
