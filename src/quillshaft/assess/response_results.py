"""What a steady forced response finds: frozen records, everything at each shaft's own speed.

Arrays: links and stations are those of the graph, in its order; S are the speeds of `Response.speed_rad_s`. A link's
torque is that at its first-named station. Amplitudes are zero to peak.
"""

from __future__ import annotations

import math
from dataclasses import field
from typing import Literal

import numpy as np

from quillshaft.assess.results import Screening
from quillshaft.graph.network import Bools, Floats
from quillshaft.records import dataclass
from quillshaft.train.basic_model import Assumed

CaseKind = Literal["normal", "dead cylinder", "light load", "temperature", "damper", "tolerance", "high damping"]
FindingVerdict = Literal["pass", "fail", "no limit given"]
ResponseVerdict = Literal["pass", "restricted", "not judged", "fail"]
ClosingStatus = Literal["cleared by response", "not cleared", "not judged: no amplitude", "not judged: no limit"]


@dataclass(frozen=True)
class CaseResponse:
    """Steady response in one case.

    name, kind, note       "normal", "engine cylinder 3 dead", "normal, hot"…; what differs, in words
    judged                 False where the case is shown beside the verdict and not part of it (high damping, a
                           damper at fault)
    mean_torque_nm         (links, S) mean torque by the load law; nan where it is not known
    alternating_torque_nm  (links, S) half the peak-to-peak of the wave over a working cycle of every group of sources
                           locked in phase, groups added by amplitude: this one is judged
    root_sum_square_nm     (links, S) the same with groups added by the root of their squares
    peak_torque_nm         (links, S) largest magnitude of mean and alternating torque together
    weighted_torque_nm     (links, S) as alternating, every order weighted by the frequency factor of couplings
    twist_deg              (links, S) half the peak-to-peak twist
    heat_w                 (links, S) power lost in the link
    angle_deg              (stations, S) half the peak-to-peak angle
    irregularity           (stations, S) peak-to-peak speed over the mean speed
    inertia_torque_nm      (stations, S) amplitude of inertia times angular acceleration
    temperature_k, runaway (S,) by coupling, where stiffness, heat and temperature were iterated until they settle
    damper_w, damper_nm    (S,) by untuned damper: heat of its fluid, amplitude of torque through it
    """

    name: str
    kind: CaseKind
    note: str
    judged: bool
    mean_torque_nm: Floats
    alternating_torque_nm: Floats
    root_sum_square_nm: Floats
    peak_torque_nm: Floats
    weighted_torque_nm: Floats
    twist_deg: Floats
    heat_w: Floats
    angle_deg: Floats
    irregularity: Floats
    inertia_torque_nm: Floats
    temperature_k: dict[str, Floats]
    runaway: dict[str, Bools]
    damper_w: dict[str, Floats] = field(default_factory=dict)
    damper_nm: dict[str, Floats] = field(default_factory=dict)


@dataclass(frozen=True)
class LineShare:
    """What one source contributes in the normal case: amplitude in every link, (links, S) [N·m].

    order is per turn of the source's own shaft; 0 of a source of constant frequency.
    """

    source: str
    group: str
    order: float
    frequency_hz: float
    torque_nm: Floats


@dataclass(frozen=True)
class Wave:
    """The synthesised torque of one group over its working cycle, mean torque included.

    angle_deg (points,) of the group's own shaft; torque_nm (links, points)
    """

    case: str
    group: str
    speed_rpm: float
    angle_deg: Floats
    torque_nm: Floats


@dataclass(frozen=True)
class LimitCurve:
    """What a link may carry as alternating torque, (S,) [N·m]; None where no limit is given, nan at speeds without.

    continuous, passing   in continuous running, and while a speed is passed
    mpa_per_nm            nominal shear stress at the governing section over torque; None without geometry
    basis                 rule, section and figures in words
    """

    link: str
    continuous_nm: Floats | None
    passing_nm: Floats | None
    mpa_per_nm: float | None
    basis: str


@dataclass(frozen=True)
class Finding:
    """The largest value of one check of one element over all judged cases, against its limit.

    zone        continuous: over the judged ranges; passing: over all other speeds from standstill to the highest
    case_kind   kind of the case; with a dead cylinder a limit may ask for less load only
    """

    element: str
    check: str
    value: float
    limit: float | None
    unit: str
    at_speed_rpm: float
    case: str
    zone: Literal["continuous", "passing"]
    verdict: FindingVerdict
    basis: str
    case_kind: CaseKind = "normal"

    @property
    def use(self) -> float | None:
        """Value over limit; None without a limit, infinite where nothing at all is permitted and it fails."""
        if self.limit is None:
            return None
        if self.limit <= 0:
            return math.inf if self.verdict == "fail" else 0.0
        return self.value / self.limit


@dataclass(frozen=True)
class BarredSpan:
    """Speeds [rpm of `speed-at`] that must not be run at continuously.

    declared   True of a range that the file alone declares; no tachometer allowance is in it, as it is in all others
    """

    from_rpm: float
    to_rpm: float
    because: str
    declared: bool = False


@dataclass(frozen=True)
class Passage:
    """A resonance passed at the stated ramp.

    seconds, cycles   spent in its half-power band; peak_share: largest amplitude over the steady one
    """

    source: str
    mode: int
    at_rpm: float
    seconds: float
    cycles: float
    peak_share: float


@dataclass(frozen=True)
class DeadLoad:
    """Largest share of full load [-] at which all limits hold with the worst cylinder dead; None: at no load."""

    machine: str
    cylinder: str
    load_share: float | None
    because: str


@dataclass(frozen=True)
class Tolerable:
    """How large a source may be at each speed, all others as they stand; nan where nothing limits it.

    torque_nm (S,) amplitude [N·m] at the source's own station; share (S,) of the mean torque there, None if unknown
    least_nm, at_rpm, link   its smallest value in the judged ranges, where, and what limits it there
    skip_rpm                 speeds at which the amplitude stated by the file is too large
    """

    source: str
    at: str
    torque_nm: Floats
    share: Floats | None
    least_nm: float | None
    at_rpm: float | None
    link: str | None
    skip_rpm: tuple[tuple[float, float], ...]


@dataclass(frozen=True)
class Restrictions:
    """What operation has to keep to.

    lowest_idle_rpm   lowest speed from which up to the judged range every continuous limit holds; None: not known
    """

    barred: tuple[BarredSpan, ...]
    tachometer_share: float
    lowest_idle_rpm: float | None
    idle_text: str
    dead_loads: tuple[DeadLoad, ...]
    tolerable: tuple[Tolerable, ...]
    passages: tuple[Passage, ...]
    ramp_rad_s2: float | None


@dataclass(frozen=True)
class Closing:
    """What the response makes of an interference that the screening left open; `finding` governs."""

    source: str
    mode: int
    status: ClosingStatus
    text: str
    finding: Finding | None


@dataclass(frozen=True)
class Gauge:
    """Where to measure a mode.

    link            where its torque strains most per unit of twist among the shafts that can be gauged; None: none
    strain_per_nm   shear-gauge strain (at 45°) [microstrain per N·m] at the gauged section
    torque_nm, microstrain, at_rpm   expected amplitude there at the largest resonance in reach; None: no amplitude
    torque_per_nm   torque in the link per unit of torque at the most effective source, at resonance
    encoder_at, encoder_deg_per_nm   station that turns most, and its angle per unit of torque in the gauged link
    """

    mode: int
    frequency_hz: float
    link: str | None
    section: str
    strain_per_nm: float | None
    torque_nm: float | None
    microstrain: float | None
    at_rpm: float | None
    source: str | None
    torque_per_nm: float | None
    encoder_at: str
    encoder_deg_per_nm: float
    note: str


@dataclass(frozen=True)
class SeparationMap:
    """Alternating over mean torque of a gear, (loads, S); above 1 its teeth separate."""

    gear: str
    load_share: Floats
    ratio: Floats


@dataclass(frozen=True)
class Response:
    """Steady forced response of a screened train.

    speed_rad_s   (S,) speeds of `speed-at`, rising
    continuous    (S,) True in the judged ranges
    cases         the first is the normal one
    shares        what each source contributes in the normal case
    limits        one for every link
    groups        (group, sources in it) as combined
    combination   in words, which combination of groups is judged
    unjudged      continuous sources that state no amplitude
    faults        limits that a damper at fault would exceed; not part of the verdict
    """

    screening: Screening
    speed_rad_s: Floats
    continuous: Bools
    cases: tuple[CaseResponse, ...]
    shares: tuple[LineShare, ...]
    waves: tuple[Wave, ...]
    limits: tuple[LimitCurve, ...]
    findings: tuple[Finding, ...]
    restrictions: Restrictions
    closings: tuple[Closing, ...]
    gauges: tuple[Gauge, ...]
    maps: tuple[SeparationMap, ...]
    groups: tuple[tuple[str, tuple[str, ...]], ...]
    combination: str
    unjudged: tuple[str, ...]
    assumed: tuple[Assumed, ...]
    notes: tuple[str, ...]
    faults: tuple[Finding, ...] = ()

    @property
    def normal(self) -> CaseResponse:
        """The normal case at low damping."""
        return self.cases[0]

    @property
    def failures(self) -> tuple[Finding, ...]:
        """Findings above their limit, the worst first."""
        failed = [item for item in self.findings if item.verdict == "fail"]
        return tuple(sorted(failed, key=lambda item: -(item.use or 0.0)))

    @property
    def governing(self) -> Finding | None:
        """The finding with a limit that is used most, those of the closings included."""
        closed = [item.finding for item in self.closings if item.finding is not None]
        limited = [item for item in (*self.findings, *closed) if item.use is not None]
        return max(limited, key=lambda item: item.use or 0.0, default=None)

    @property
    def unlimited(self) -> tuple[str, ...]:
        """Links whose rule gives no limit at some of the judged speeds."""
        rows = [(curve.link, curve.continuous_nm) for curve in self.limits if curve.continuous_nm is not None]
        return tuple(link for link, row in rows if bool(np.isnan(row[self.continuous]).any()))

    @property
    def verdict(self) -> ResponseVerdict:
        """fail: a limit is exceeded with all cylinders working, or an interference is not cleared; restricted: only
        with a cylinder dead, and less load helps; not judged: something could not be judged; else pass."""
        failed = {item.case_kind == "dead cylinder" for item in self.failures}
        statuses = {closing.status for closing in self.closings}
        helped = all(dead.load_share is not None and dead.load_share > 0 for dead in self.restrictions.dead_loads)
        if False in failed or "not cleared" in statuses or (failed and not helped):
            return "fail"
        limited = any(item.limit is not None for item in self.findings)
        if statuses - {"cleared by response"} or not limited or self.unlimited:
            return "not judged"
        return "restricted" if failed else "pass"
