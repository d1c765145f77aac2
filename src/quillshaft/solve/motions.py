"""The motions that twist no link."""

from __future__ import annotations

import numpy as np

from quillshaft.graph.network import Floats, Network
from quillshaft.solve import statics
from quillshaft.solve.plan import plan_elimination


def rigid_motions(network: Network) -> Floats:
    """(motions, nodes) referred angles of a basis of the rigid-body motions."""
    bare = plan_elimination(network)
    parts = statics._parts(network, bare)
    basis, _ = statics._rigid_basis(network, parts)
    whole = np.vstack([basis, np.zeros((1, basis.shape[1]))])
    column = {number: place for place, number in enumerate(parts.free)}
    rows = [column.get(number, len(parts.free)) for number in parts.part.tolist()]
    return np.asarray(whole[rows].T)
