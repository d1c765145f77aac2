"""Trains for the tests of the forced response, and their response at speeds of the test's own choosing."""

from __future__ import annotations

import math

import numpy as np

from quillshaft.assess.response.combine import torque_range
from quillshaft.assess.response.evaluate import StateLines, all_kept, evaluate
from quillshaft.assess.response.loads import LoadCase, LoadSet, collect_loads
from quillshaft.assess.response.mean import mean_torques_of, shares_along
from quillshaft.assess.response.respond import respond
from quillshaft.assess.response.states import State, all_states
from quillshaft.assess.response_results import Response
from quillshaft.assess.results import Screening
from trains import screening_of, train_text

RPM = math.pi / 30.0
FIRING = (0.0, 240.0, 480.0)
CYCLE = {"compression-ratio": 15, "imep": "15 bar", "peak": "120 bar"}


def engine_text(**more) -> str:
    """Three cylinders, flywheel, rubber coupling, generator; every link viscous and the generator braked viscously."""
    stations = {f"throw-{n}": 0.2 for n in (1, 2, 3)} | {"flywheel": 4.0}
    stations["generator"] = {"inertia": 5.0, "viscous": "40 N m s/rad"}
    tables = {
        "shafts": {
            "crank-12": {"between": ["throw-1", "throw-2"], "stiffness": 2e6, "viscous": "60 N m s/rad"},
            "crank-23": {"between": ["throw-2", "throw-3"], "stiffness": 2e6, "viscous": "60 N m s/rad"},
            "crank-end": {"between": ["throw-3", "flywheel"], "stiffness": 3e6, "viscous": "90 N m s/rad"},
        },
        "couplings": {
            "rubber": {"between": ["flywheel", "generator"], "stiffness": 2e4, "viscous": "120 N m s/rad"},
        },
        "machines": {
            "engine": {
                "kind": "reciprocating-engine",
                "strokes": 4,
                "bore": "120 mm",
                "stroke": "140 mm",
                "rod": "240 mm",
                "reciprocating-mass": "4 kg",
                "gas": {"cycle": CYCLE},
                "cylinders": [
                    {"at": f"throw-{n}", "fires-at": f"{angle} deg"} for n, angle in enumerate(FIRING, start=1)
                ],
            },
            "set": {"kind": "generator", "at": "generator", "poles": 4},
        },
        "power": {"throw-1": 18, "throw-2": 18, "throw-3": 18, "generator": "balance", "law": "constant-torque"},
        "operation": {"range": ["700 rpm", "1600 rpm"]},
    }
    for name, rows in more.items():
        tables[name] = {**tables.get(name, {}), **rows}
    return train_text(stations, **tables)


def plain_text(torque: str = "100 N m", order: float = 2, **more) -> str:
    """Two discs on a shaft with an excitation at the first, as in any textbook: 2 and 3 kg·m², 1e5 N·m/rad."""
    tables = {
        "shafts": {"shaft": {"between": ["driver", "load"], "stiffness": 1e5, "loss-factor": 0.02}},
        "excitations": {"shake": {"at": "driver", "order": order, "torque": torque}},
        "operation": {"range": ["900 rpm", "1600 rpm"]},
        "excitations_off": {f"driver {n}x": "not looked at" for n in (1, 2)},
    }
    for name, rows in more.items():
        tables[name] = {**tables.get(name, {}), **rows}
    return train_text({"driver": 2.0, "load": 3.0}, **tables)


def loads_of(screening: Screening) -> LoadSet:
    mean = mean_torques_of(screening.train, screening.graph, screening.duties, screening.station_power_w)
    return collect_loads(screening.train, screening.graph, screening.sources, mean)


def lines_at(screening: Screening, rpm: np.ndarray, case: LoadCase | None = None) -> tuple[State, LoadSet, StateLines]:
    """The lines of the normal state at speeds [rpm]."""
    case = case or LoadCase("normal", "normal", "")
    state, loads = all_states(screening.train, "reference")[0], loads_of(screening)
    speeds = np.asarray(rpm, dtype=float) * RPM
    share = shares_along(screening.train, speeds)
    return state, loads, evaluate(state, loads, (case,), (all_kept(state.graph),), speeds, share)


def alternating_at(screening: Screening, rpm: np.ndarray, case: LoadCase | None = None) -> np.ndarray:
    """(links, speeds) alternating torque [N·m] of the normal state at speeds [rpm]."""
    case = case or LoadCase("normal", "normal", "")
    _, loads, lines = lines_at(screening, rpm, case)
    share = shares_along(screening.train, np.asarray(rpm, dtype=float) * RPM)
    return torque_range(loads, case, 0, lines, share).half


def response_of(text: str, cases: tuple[str, ...] = ()) -> Response:
    return respond(screening_of(text, cases))


def place(response: Response, link: str) -> int:
    return [item.name for item in response.screening.graph.links].index(link)
