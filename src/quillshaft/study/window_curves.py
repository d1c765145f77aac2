"""Natural frequencies against the stiffness of one link, and the bands they must keep out of, for charts."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np

from quillshaft.assess.results import Screening
from quillshaft.graph.network import Floats, Network
from quillshaft.graph.torsional import GraphLink
from quillshaft.solve.modes import natural_frequencies
from quillshaft.solve.plan import plan_elimination
from quillshaft.study.speed_cases import speed_cases
from quillshaft.study.window_bands import Band, source_bands, sources_asked
from quillshaft.study.window_tally import find_spring
from quillshaft.study.windows import Windows

CURVE_POINTS = 121


@dataclass(frozen=True)
class WindowCurves:
    """Every natural frequency at a number of stiffnesses of one link, all else nominal.

    stiffness_nm_rad   (points,) at the link's first-named station, rising over the search; nominal among them
    frequency_hz       (points, modes) exact at each of them, as `solve.modes` gives them
    bands              what the sources asked about close to natural frequencies
    """

    stiffness_nm_rad: Floats
    frequency_hz: Floats
    bands: tuple[Band, ...]


def window_curves(screening: Screening, windows: Windows, points: int = CURVE_POINTS) -> WindowCurves:
    """Solve for the modes at stiffnesses spread evenly on a logarithmic axis over the search of the windows.

    Raises what `natural_modes` raises.
    """
    link = find_spring(screening, windows.link)
    low, high = windows.search_nm_rad
    grid = np.geomspace(low, high, points)
    if low < windows.nominal_nm_rad < high:
        grid = np.unique(np.append(grid, windows.nominal_nm_rad))
    network = speed_cases(screening)[0].networks.nominal
    plan = plan_elimination(network)
    scale = (link.referred_nm_rad or 0.0) / (link.stiffness_nm_rad or 1.0)
    rows = [natural_frequencies(with_stiffness(network, link, k * scale), plan) for k in grid.tolist()]
    asked = sources_asked(screening, windows.sources)
    bands = source_bands(screening, asked, screening.train.operation.ranges_rad_s) if windows.sources else ()
    return WindowCurves(grid, np.array(rows) / (2.0 * math.pi), bands)


def with_stiffness(network: Network, link: GraphLink, referred_nm_rad: float) -> Network:
    """The network with another referred stiffness [N·m/rad] of one spring link."""
    if link.slot == "spring":
        springs = network.spring_nm_rad.copy()
        springs[link.index] = referred_nm_rad
        return replace(network, spring_nm_rad=springs)
    if link.slot == "tie":
        ties = network.tie_nm_rad.copy()
        ties[link.index] = referred_nm_rad
        return replace(network, tie_nm_rad=ties)
    changed = list(network.torque_links)
    changed[link.index] = replace(changed[link.index], compliance_rad_per_nm=1.0 / referred_nm_rad)
    return replace(network, torque_links=tuple(changed))
