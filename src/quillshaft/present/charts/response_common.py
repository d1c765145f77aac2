"""What the charts of the forced response share: cases that are drawn, use of limits, units and words."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np

from quillshaft.assess.response.ground import share_of
from quillshaft.assess.response_results import CaseResponse, LimitCurve, Response
from quillshaft.graph.network import Bools, Floats, Ints
from quillshaft.present.charts.phrases import RPM, brief
from quillshaft.present.units import SHOWN
from quillshaft.present.words import number
from quillshaft.records import dataclass

LONG_TORQUE = 1e4
"""Torques from here on are shown in thousands of their unit."""
PSI_PER_MPA = 1e6 / 6894.757293168361


@dataclass(frozen=True)
class Unit:
    """A unit as written, and what a value in N·m (of stress: in MPa) is multiplied by; `small` for short values."""

    name: str
    factor: float
    small: Unit | None = None

    def text(self, value: float) -> str:
        """A value with three digits and its unit, the small one where that stays short."""
        if not math.isfinite(value):
            return "not known"
        if self.small is not None and abs(value * self.small.factor) < LONG_TORQUE:
            return self.small.text(value)
        joint = "×" if self.name.startswith("10") else " "
        return f"{brief(value * self.factor).replace('-', '−')}{joint}{self.name}"


@dataclass(frozen=True)
class Use:
    """How much of its limit a link uses at most in one zone of speeds: share [-] at rpm in a case."""

    share: float
    rpm: float
    case: CaseResponse
    torque_nm: float
    continuous: bool


def torque_unit(response: Response, largest_nm: float) -> Unit:
    """The declared unit of torque, in thousands where the largest value is long."""
    shown = SHOWN[response.screening.train.units]
    plain = Unit(shown.torque, shown.per_nm)
    if largest_nm * shown.per_nm < LONG_TORQUE:
        return plain
    return Unit("kN·m" if shown.torque == "N·m" else f"10³ {shown.torque}", shown.per_nm / 1e3, plain)


def torque_text(response: Response, torque_nm: float) -> str:
    """A torque with three digits in the declared unit, in thousands where it is long."""
    return torque_unit(response, abs(torque_nm)).text(torque_nm)


def stress_unit(response: Response) -> Unit:
    """MPa, or psi where the train is in US units."""
    return Unit("psi", PSI_PER_MPA) if response.screening.train.units == "US" else Unit("MPa", 1.0)


def link_number(response: Response, link: str) -> int:
    """Number of a link by its name. Raises KeyError where there is none."""
    names = [item.name for item in response.screening.graph.links]
    if link not in names:
        raise KeyError(link)
    return names.index(link)


def limit_of(response: Response, link: str) -> LimitCurve:
    """The limits of a link; a curve without limits where the response holds none."""
    found = (limit for limit in response.limits if limit.link == link)
    return next(found, LimitCurve(link, None, None, None, "no limit given"))


def speeds_rpm(response: Response) -> Floats:
    """(S,) speeds [rpm] of `speed-at`."""
    return np.asarray(response.speed_rad_s, dtype=float) * RPM


def nearest(response: Response, rpm: float) -> int:
    """Number of the calculated speed nearest to a speed [rpm]."""
    return int(np.argmin(np.abs(speeds_rpm(response) - rpm)))


def judged_cases(response: Response) -> list[CaseResponse]:
    """The cases that the verdict counts, the normal one first."""
    return [case for case in response.cases if case.judged or case is response.normal]


def weighted(response: Response, link: str) -> bool:
    """True of a coupling whose vibratory torque is permitted at a reference frequency: weighted torque is judged."""
    for coupling in response.screening.train.couplings:
        if coupling.name == link and coupling.ratings is not None and coupling.ratings.vibratory_nm is not None:
            return bool(np.isfinite(response.normal.weighted_torque_nm[link_number(response, link)]).any())
    return False


def swing(response: Response, case: CaseResponse, link: str) -> Floats:
    """(S,) alternating torque [N·m] that is held against the link's limit: weighted in the judged ranges alone."""
    number = link_number(response, link)
    row: Floats = np.asarray(case.alternating_torque_nm[number], dtype=float)
    if not weighted(response, link):
        return row
    return np.where(response.continuous, case.weighted_torque_nm[number], row)


def worst_of(rows: Sequence[Floats]) -> Floats:
    """(S,) largest finite value at each speed; nan where no row has one."""
    stack = np.array([np.where(np.isfinite(row), row, -np.inf) for row in rows])
    top = stack.max(axis=0)
    return np.where(np.isfinite(top), top, np.nan)


def limit_at_speeds(response: Response, link: str) -> Floats:
    """(S,) the limit [N·m] that counts: continuous in the judged ranges, passing elsewhere; nan where none is given."""
    limit = limit_of(response, link)
    rows = [
        np.full(len(response.speed_rad_s), np.nan) if row is None else np.asarray(row, dtype=float)
        for row in (limit.continuous_nm, limit.passing_nm)
    ]
    return np.where(response.continuous, rows[0], rows[1])


def uses(response: Response, link: str) -> list[Use]:
    """The largest use of the limit in the judged ranges and at all other speeds, the larger first."""
    limit, rpm, found = limit_at_speeds(response, link), speeds_rpm(response), []
    for zone in (True, False):
        inside = (response.continuous == zone) & np.isfinite(limit)
        best: Use | None = None
        for case in judged_cases(response):
            row = swing(response, case, link)
            share = np.where(inside & np.isfinite(row), share_of(row, limit), -1.0)
            at = int(np.argmax(np.where(share == share.max(), row, -1.0)))
            held = (best.share, best.torque_nm) if best else (-0.5, 0.0)
            if (share[at], row[at]) > held:
                best = Use(float(share[at]), float(rpm[at]), case, float(row[at]), zone)
        found += [best] if best else []
    return sorted(found, key=lambda use: -use.share)


def above_limit(response: Response, link: str) -> list[tuple[float, float]]:
    """Stretches of speed [rpm] at which a judged case exceeds the limit that counts there."""
    worst = worst_of([swing(response, case, link) for case in judged_cases(response)])
    return stretches(response, np.nan_to_num(worst) > np.nan_to_num(limit_at_speeds(response, link), nan=np.inf))


def stretches(response: Response, inside: Bools) -> list[tuple[float, float]]:
    """Runs of calculated speeds [rpm] at which something holds."""
    rpm, runs, start = speeds_rpm(response), [], None
    for at, holds in enumerate([*inside.tolist(), False]):
        if holds and start is None:
            start = at
        elif not holds and start is not None:
            runs.append((float(rpm[start]), float(rpm[at - 1])))
            start = None
    return runs


def largest(response: Response, link: str) -> tuple[float, float, CaseResponse]:
    """Largest alternating torque [N·m] of a link over the judged cases, its speed [rpm] and case."""
    found = (0.0, float(speeds_rpm(response)[0]), response.normal)
    for case in judged_cases(response):
        row = np.nan_to_num(swing(response, case, link))
        at = int(np.argmax(row))
        if row[at] > found[0]:
            found = (float(row[at]), float(speeds_rpm(response)[at]), case)
    return found


def ranked_links(response: Response) -> list[str]:
    """Links to show: by use of their limit, those without one after them by torque, none that carries nothing."""
    keys = []
    for place, link in enumerate(response.screening.graph.links):
        found, torque = uses(response, link.name), largest(response, link.name)[0]
        if torque > 0.0 or found:
            keys.append((not found, -(found[0].share if found else torque), place, link.name))
    return [name for *_, name in sorted(keys)]


def heated_links(response: Response) -> list[str]:
    """Couplings whose heat is limited or whose temperature was worked out, in the order of the train."""
    found = []
    for coupling in response.screening.train.couplings:
        permitted = coupling.ratings is not None and coupling.ratings.permitted_heat_w is not None
        if permitted or any(coupling.name in case.temperature_k for case in response.cases):
            found.append(coupling.name)
    return found


def where(response: Response, rpm: float, case: CaseResponse) -> str:
    """ "at 640 rpm" or "at 640 rpm (engine cylinder 3 dead)"."""
    return f"at {rpm:.0f} rpm" + ("" if case is response.normal else f" ({case.name})")


def span_text(span: tuple[float, float]) -> str:
    """ "610–680" or, of one speed, "640"."""
    low, high = (f"{end:.0f}" for end in span)
    return low if low == high else f"{low}–{high}"


def share_text(share: float) -> str:
    """A share as a whole per cent, with decimals below 10 % and next to 100 %."""
    value = share * 100.0
    if 99.0 < value < 101.0:
        return f"{number(value, 5 if value > 100.0 else 4)} %"
    return f"{value:.0f} %" if value >= 10 else f"{number(value, 2)} %"


def outline_places(*curves: Floats, most: int = 200) -> Ints:
    """Places of the points that the outline of a filled area needs: its ends, every turn, and evenly between them."""
    count = len(curves[0])
    if count <= most:
        return np.arange(count)
    turns = [np.flatnonzero(np.diff(np.sign(np.diff(curve)))) + 1 for curve in curves]
    even = np.linspace(0, count - 1, most).astype(int)
    return np.asarray(np.unique(np.concatenate([even, *turns])), dtype=np.intp)
