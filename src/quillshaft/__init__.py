"""Quillshaft: torsional analysis of drivetrains, from the train file to a report ready for sign-off.

import quillshaft
screening = quillshaft.screen(quillshaft.load("train.toml"))
print(screening.worst_verdict, [mode.frequency_hz for mode in screening.modes])
"""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING

from quillshaft.version import __version__

if TYPE_CHECKING:
    from quillshaft.assess.response.respond import respond
    from quillshaft.assess.response_results import Response
    from quillshaft.assess.results import Interference, ModeResult, Screening
    from quillshaft.assess.screening import screen, screen_temperatures
    from quillshaft.graph.build import build_graph
    from quillshaft.graph.torsional import TorsionalGraph
    from quillshaft.present.report import report_pdf
    from quillshaft.present.results_json import screening_json
    from quillshaft.train.model import Train
    from quillshaft.train.problems import Problem, TrainFileError
    from quillshaft.train.read import load

__all__ = [
    "Interference",
    "ModeResult",
    "Problem",
    "Response",
    "Screening",
    "TorsionalGraph",
    "Train",
    "TrainFileError",
    "__version__",
    "build_graph",
    "load",
    "report_pdf",
    "respond",
    "screen",
    "screen_temperatures",
    "screening_json",
]

_HOME = {
    "Interference": "assess.results",
    "ModeResult": "assess.results",
    "Problem": "train.problems",
    "Response": "assess.response_results",
    "Screening": "assess.results",
    "TorsionalGraph": "graph.torsional",
    "Train": "train.model",
    "TrainFileError": "train.problems",
    "build_graph": "graph.build",
    "load": "train.read",
    "report_pdf": "present.report",
    "respond": "assess.response.respond",
    "screen": "assess.screening",
    "screen_temperatures": "assess.screening",
    "screening_json": "present.results_json",
}


def __getattr__(name: str) -> object:
    """Import a public name when it is first used, so that the command starts quickly."""
    if name not in _HOME:
        raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
    return getattr(importlib.import_module(f"{__name__}.{_HOME[name]}"), name)
