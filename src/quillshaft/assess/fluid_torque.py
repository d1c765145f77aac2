"""Mean torque through fluid couplings: the same on both sides, its power lower on the far side by the slip."""

from __future__ import annotations

import numpy as np

from quillshaft.graph.network import Floats
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.train.model import Train


def fluid_columns(train: Train, graph: TorsionalGraph) -> Floats:
    """(fluid couplings, stations) referred torque on each station per referred torque taken from the first side.

    A referred torque is a power over the speed of `speed-at`: of the power that the first side gives, the second
    gets the part that the ratio of speeds leaves; the rest is heat (equilibrium of the coupling).
    """
    columns = np.zeros((len(train.fluid_couplings), len(graph.stations)))
    for row, coupling in zip(columns, train.fluid_couplings, strict=True):
        first, second = (graph.number(name) for name in coupling.between)
        row[first] = -1.0
        row[second] = float(graph.scale[second] / graph.scale[first])
    return columns
