"""What decides each interference: the inputs by sensitivity and by their share of the variance."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from quillshaft.assess.results import Interference, Screening
from quillshaft.graph.network import Floats
from quillshaft.study.inputs import Input, VariedNetwork, sensitivities
from quillshaft.study.spread import Distribution, standard_deviations

LEAST_SHARE = 1e-3
LEAST_SENSITIVITY = 1e-2


@dataclass(frozen=True)
class Driver:
    """One input, or one group of inputs, behind a pair of source and mode.

    element, quantity    as the inputs say; of a group all its elements, and "stiffness and inertia" where mixed
    station              where an inertia sits; None otherwise
    sensitivity          relative change of the frequency for a relative change of the input, with sign; of a group
                         for the same relative change of all its members
    deviation            standard deviation of the input, relative; of a group the one of its first member
    share                of the variance of the frequency, first order; the shares of all inputs sum to 1
    rank_by_sensitivity  1 for the most sensitive input of the mode
    """

    source: str
    mode: int
    element: str
    quantity: str
    station: str | None
    group: str | None
    sensitivity: float
    deviation: float
    share: float
    rank_by_sensitivity: int


@dataclass(frozen=True)
class _Bundle:
    """Inputs that deviate together: most often one."""

    members: tuple[int, ...]
    group: str | None


def drivers_of(
    screening: Screening,
    varied: VariedNetwork,
    inputs: tuple[Input, ...],
    distribution: Distribution,
    pairs: tuple[Interference, ...],
) -> tuple[Driver, ...]:
    """The drivers of every pair given, those of each pair by share of the variance, then by sensitivity.

    First order: the variance of ln f is the sum of (sensitivity · standard deviation)², the members of a group
    added before squaring. Inputs below 0.1 % of it and of a sensitivity below 0.01 are left out.
    """
    slope = sensitivities(varied, screening.network_modes, len(inputs))
    spread = standard_deviations(
        distribution,
        np.array([item.tolerance[0] for item in inputs], dtype=float),
        np.array([item.tolerance[1] for item in inputs], dtype=float),
    )
    bundles = _bundles(inputs)
    by_mode = {
        mode: _of_mode(slope[mode - 1], spread, inputs, bundles) for mode in sorted({pair.mode for pair in pairs})
    }
    return tuple(
        Driver(pair.source, pair.mode, *words, *numbers) for pair in pairs for words, numbers in by_mode[pair.mode]
    )


_Words = tuple[str, str, str | None, str | None]
_Numbers = tuple[float, float, float, int]


def _bundles(inputs: tuple[Input, ...]) -> list[_Bundle]:
    groups: dict[str, list[int]] = {}
    for number, item in enumerate(inputs):
        key = f"group {item.group}" if item.group and item.varies else f"input {number}"
        groups.setdefault(key, []).append(number)
    return [_Bundle(tuple(members), inputs[members[0]].group) for members in groups.values()]


def _of_mode(
    slope: Floats, spread: Floats, inputs: tuple[Input, ...], bundles: list[_Bundle]
) -> list[tuple[_Words, _Numbers]]:
    summed = np.array([slope[list(bundle.members)].sum() for bundle in bundles])
    effect = np.array([(slope * spread)[list(bundle.members)].sum() for bundle in bundles])
    variance = effect**2
    share = variance / (variance.sum() or 1.0)
    rank = np.empty(len(bundles), dtype=int)
    rank[np.argsort(-np.abs(summed), kind="stable")] = np.arange(1, len(bundles) + 1)
    found: list[tuple[_Words, _Numbers]] = []
    for number in sorted(range(len(bundles)), key=lambda item: (-share[item], -abs(summed[item]))):
        if share[number] < LEAST_SHARE and abs(summed[number]) < LEAST_SENSITIVITY:
            continue
        members = [inputs[member] for member in bundles[number].members]
        first = bundles[number].members[0]
        words = _words(members, bundles[number].group)
        found.append((words, (float(summed[number]), float(spread[first]), float(share[number]), int(rank[number]))))
    return found


def _words(members: list[Input], group: str | None) -> _Words:
    quantities = list(dict.fromkeys(item.quantity for item in members))
    names = " + ".join(dict.fromkeys(item.element for item in members))
    return names, " and ".join(quantities), members[0].station if len(members) == 1 else None, group
