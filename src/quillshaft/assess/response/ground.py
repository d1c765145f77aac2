"""What findings stand on: the cases of a response, its limits, and the largest value of each check among them."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from typing import Literal

import numpy as np

from quillshaft.assess.response.mean import MeanTorques
from quillshaft.assess.response_results import CaseResponse, Finding, FindingVerdict, LimitCurve
from quillshaft.graph.network import Bools, Floats
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.records import dataclass
from quillshaft.train.model import Train

RPM = 30.0 / math.pi
Zone = Literal["continuous", "passing"]
Limit = Callable[[CaseResponse], Floats] | Floats | float | None


@dataclass(frozen=True)
class Ground:
    """What findings rest on: the train, its graph, all cases and speeds, and which of those are run at for good."""

    train: Train
    graph: TorsionalGraph
    cases: tuple[CaseResponse, ...]
    speed_rad_s: Floats
    continuous: Bools
    limits: tuple[LimitCurve, ...]
    mean: MeanTorques

    @property
    def judged(self) -> list[CaseResponse]:
        """Cases that count for the verdict."""
        return [case for case in self.cases if case.judged]

    def zone(self, zone: Zone) -> Bools:
        """(S,) True at the speeds of a zone."""
        return self.continuous if zone == "continuous" else np.asarray(~self.continuous)


def worst(
    ground: Ground,
    element: str,
    check: str,
    unit: str,
    basis: str,
    values: Callable[[CaseResponse], Floats],
    limit: Limit,
    zone: Zone = "continuous",
) -> Iterator[Finding]:
    """The case and speed at which a value is largest, against its limit where there is one; none where unknown.

    The limit may differ from case to case. Cases with a dead cylinder have a finding of their own, where they ask for
    more than the others.
    """
    what = (ground, element, check, unit, basis, values, limit, zone)
    working = _largest([case for case in ground.judged if case.kind != "dead cylinder"], *what)
    dead = _largest([case for case in ground.judged if case.kind == "dead cylinder"], *what)
    if working is not None:
        yield working
    if dead is not None and (working is None or size_of(dead) > size_of(working) * 1.01):
        yield dead


def size_of(finding: Finding) -> float:
    """Value over limit of a finding; its value where there is no limit."""
    return finding.value if finding.use is None else finding.use


def _largest(
    cases: list[CaseResponse],
    ground: Ground,
    element: str,
    check: str,
    unit: str,
    basis: str,
    values: Callable[[CaseResponse], Floats],
    limit: Limit,
    zone: Zone,
) -> Finding | None:
    where, best = ground.zone(zone), (-1.0, 0.0)
    found: Finding | None = None
    for case in cases if where.any() else ():
        own = values(case)
        given = limit(case) if callable(limit) else np.nan if limit is None else limit
        bound = np.broadcast_to(np.asarray(given, float), own.shape)
        with np.errstate(all="ignore"):
            used = own if limit is None else share_of(own, bound)
        used = np.where(where & np.isfinite(own) & ~np.isnan(used), used, -1.0)
        at = int(np.argmax(np.where(used == used.max(), own, -1.0)))
        if (float(used[at]), float(own[at])) <= best:
            continue
        best, allowed = (float(used[at]), float(own[at])), None if limit is None else float(bound[at])
        verdict: FindingVerdict = "no limit given" if limit is None else "pass" if best[0] <= 1.0 + 1e-9 else "fail"
        speed = float(ground.speed_rad_s[at]) * RPM
        found = Finding(
            element, check, float(own[at]), allowed, unit, speed, case.name, zone, verdict, basis, case.kind
        )
    return found


def judged_torque(case: CaseResponse, place: int) -> Floats:
    """(S,) alternating torque of a link as its limit counts it: weighed by frequency in a rubber coupling."""
    weighted = case.weighted_torque_nm[place]
    return np.asarray(np.where(np.isfinite(weighted), weighted, case.alternating_torque_nm[place]))


def share_of(value: Floats, limit: Floats) -> Floats:
    """(S,) value over limit: infinite where the limit is 0 and the value is not, nan where there is no limit."""
    with np.errstate(all="ignore"):
        used = np.where(limit > 0, value / limit, np.where(value > 0, np.inf, 0.0))
    return np.where(np.isnan(limit), np.nan, used)
