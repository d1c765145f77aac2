"""What a screening finds: frozen records with units in their names, everything at each shaft's own speed."""

from __future__ import annotations

from typing import Literal

from quillshaft.graph.states import Temperature
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.records import dataclass
from quillshaft.solve.modes import Modes
from quillshaft.sources.line import Source
from quillshaft.train.basic_model import Assumed
from quillshaft.train.model import Dismissal, Train

Verdict = Literal["clear", "barred", "close", "crossing"]
SEVERITY: dict[Verdict, int] = {"clear": 0, "barred": 1, "close": 2, "crossing": 3}
"""How bad a verdict is: the train's verdict is that of its worst pair."""


EQUAL = 1e-9
"""Margins that differ by less are equal."""

NEAR_NODE = 0.05
"""Excitability below which a source acts near a node, or its shares cancel."""


def graver(first: Verdict, second: Verdict) -> Verdict:
    """The worse of two verdicts."""
    return max(first, second, key=SEVERITY.__getitem__)


@dataclass(frozen=True)
class Proof:
    """Elastic modes counted just below and just above a frequency; members of a cluster share the counts."""

    below: int
    above: int
    relative_width: float
    proven: bool


@dataclass(frozen=True)
class ModeNode:
    """A point of a link that stands still in a mode: `share` of the way from its first station [0 to 1]."""

    link: str
    share: float


@dataclass(frozen=True)
class ModeResult:
    """One natural mode.

    shape             actual angle at each station, the largest is 1
    referred_shape    referred angle at each station, the largest is 1
    strain_energy     share by link; kinetic_energy share by station; each sums to 1
    link_torque       referred torque by link over the largest of the mode; None where a closed loop of rigid
                      meshes leaves the split open
    bounds_hz         lowest and highest frequency over all tolerances
    damping_ratio     half the loss factors weighted by strain energy, low damping, and the viscous part
    frequency_along   (rpm, nominal, low, high) rows [rpm, Hz] where it follows speed; else None, and the other
                      numbers hold at every speed (with it they are those at rated speed)
    cluster           numbers of the modes that share this frequency, itself included
    """

    mode: int
    frequency_hz: float
    omega_rad_s: float
    cycles_per_min: float
    damping_ratio: float
    shape: dict[str, float]
    referred_shape: dict[str, float]
    strain_energy: dict[str, float]
    kinetic_energy: dict[str, float]
    link_torque: dict[str, float | None]
    nodes: tuple[ModeNode, ...]
    bounds_hz: tuple[float, float]
    proof: Proof
    residual: float
    cluster: tuple[int, ...]
    frequency_along: tuple[tuple[float, float, float, float], ...] | None = None


@dataclass(frozen=True)
class Interference:
    """A source and a mode: how near they come in the judged range, and what that means.

    margin                nominal, signed; worst_margin over the tolerances
    critical_speed_rpm    where they meet, in range nearest rated, else nearest the range; None if never
    judged_at_rpm         speed of `speed-at` at which the margin is smallest
    excitability          nominal; worst_excitability the largest of nominal and both corners; None where a
                          rigid loop leaves the torque at the source open
    free_margin           where they meet only inside a barred range: the margin over the speeds that stay free,
                          nominal, and over the tolerances (free_worst_margin); else None
    bar_needed_rpm        where that is too small: the barred range that would give the required separation
    """

    source: str
    mode: int
    critical_speed_rpm: float | None
    critical_speeds_rpm: tuple[float, ...]
    margin: float
    worst_margin: float
    judged_at_rpm: float
    required: float
    worst_required: float
    excitability: float | None
    worst_excitability: float | None
    verdict: Verdict
    worst_verdict: Verdict
    dismissed: Dismissal | None
    free_margin: float | None = None
    free_worst_margin: float | None = None
    bar_needed_rpm: tuple[float, float] | None = None

    @property
    def bar_too_narrow(self) -> bool:
        """True where a barred range keeps them apart, but not by the required separation at its edges."""
        if self.free_margin is None or self.free_worst_margin is None:
            return False
        short = abs(self.free_margin) < self.required - EQUAL
        return short or abs(self.free_worst_margin) < self.worst_required - EQUAL


def _badness(pair: Interference) -> tuple[bool, int, int, bool, float, float]:
    """Sorting key, the worst first: counted, gravest verdict, nominal verdict, excited, least margin to spare."""
    excited = pair.worst_excitability is None or pair.worst_excitability >= NEAR_NODE
    return (
        pair.dismissed is not None,
        -SEVERITY[graver(pair.verdict, pair.worst_verdict)] - 2 * pair.bar_too_narrow,
        -SEVERITY[pair.verdict],
        not excited,
        min(abs(pair.margin) - pair.required, abs(pair.worst_margin) - pair.worst_required),
        abs(pair.margin),
    )


@dataclass(frozen=True)
class StaleDismissal:
    """A dismissal that was not applied, and why."""

    dismissal: Dismissal
    why: str


@dataclass(frozen=True)
class LinkDuty:
    """Mean torque [N·m] and wind-up [rad] of a link under the rated power flow, at its first-named station.

    None where the split is indeterminate (a closed loop of rigid meshes) or no power is given.
    """

    link: str
    mean_torque_nm: float | None
    wind_up_rad: float | None


@dataclass(frozen=True)
class SelfCheck:
    """What every run proves of its own numbers."""

    modes: int
    all_proven: bool
    relative_width: float
    largest_residual: float
    largest_energy_error: float


@dataclass(frozen=True)
class Flag:
    """Something in the data that is odd or should be asked about; never changes a verdict."""

    element: str
    text: str


@dataclass(frozen=True)
class DerivedValue:
    """A spring, damper or frequency worked out from electrical data or a load curve: SI, at its element's own shaft."""

    element: str
    quantity: str
    value: float
    unit: str
    basis: str


@dataclass(frozen=True)
class CaseResult:
    """One case of the file screened beside the base: its result, or why it cannot be."""

    name: str
    screening: Screening | None
    problem: str | None = None


@dataclass(frozen=True)
class Screening:
    """The whole result of screening a train.

    temperature       of the couplings: cold, reference (30 °C), hot, or one temperature [K] for all
    station_power_w   mean power at rated speed [W] per station of [power], the balancing ones worked out
    case_names        cases of the file that are not laid over it here
    cases             what screening each of them gave; None where they were not screened
    judged_modes      numbers of the modes up to the highest source, margin included
    interferences     every judged pair of continuous source and mode, in order of mode and source
    derived           damping and springs worked out from load laws and electrical data
    verdict           of the worst pair not dismissed, nominal; worst_verdict over the tolerances
    """

    train: Train
    graph: TorsionalGraph
    network_modes: Modes
    modes: tuple[ModeResult, ...]
    judged_modes: tuple[int, ...]
    sources: tuple[Source, ...]
    sources_off: tuple[tuple[Source, str], ...]
    interferences: tuple[Interference, ...]
    stale_dismissals: tuple[StaleDismissal, ...]
    duties: tuple[LinkDuty, ...]
    flags: tuple[Flag, ...]
    assumed: tuple[Assumed, ...]
    self_check: SelfCheck
    verdict: Verdict
    worst_verdict: Verdict
    temperature: Temperature = "reference"
    station_power_w: tuple[tuple[str, float], ...] = ()
    case_names: tuple[str, ...] = ()
    cases: tuple[CaseResult, ...] | None = None
    derived: tuple[DerivedValue, ...] = ()

    @property
    def fails(self) -> bool:
        """True where the train cannot be passed, not even with a restriction."""
        return self.gravest_verdict in ("close", "crossing") or bool(self.narrow_bars)

    @property
    def narrow_bars(self) -> tuple[Interference, ...]:
        """Pairs that a barred range keeps apart by less than the required separation at its edges."""
        return tuple(pair for pair in self.interferences if pair.bar_too_narrow and pair.dismissed is None)

    @property
    def gravest_verdict(self) -> Verdict:
        """The worse of the nominal verdict and that over the tolerances: they may have different requirements."""
        return graver(self.verdict, self.worst_verdict)

    def not_clear(self) -> tuple[Interference, ...]:
        """Pairs not clear, nominal or over the tolerances, the worst first; dismissed ones after the others."""
        bad = [pair for pair in self.interferences if pair.worst_verdict != "clear" or pair.verdict != "clear"]
        return tuple(sorted(bad, key=_badness))

    def governing(self) -> Interference | None:
        """The pair not dismissed that decides the verdict, the first of `not_clear` where there is one."""
        counted = [pair for pair in self.interferences if pair.dismissed is None]
        return min(counted, key=_badness, default=None)

    def mode(self, number: int) -> ModeResult:
        """A mode by its number. Raises IndexError where there is none."""
        return self.modes[number - 1]

    def source(self, name: str) -> Source:
        """A source by any of its names. Raises KeyError where there is none."""
        for source in self.sources:
            if source.answers_to(name):
                return source
        raise KeyError(name)
