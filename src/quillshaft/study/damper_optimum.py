"""The best damping, and the best tuning, of a damper on a mode of its train: by rule and by direct minimisation."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any

import numpy as np

from quillshaft.assess.results import Screening
from quillshaft.assess.screening import screen_alone
from quillshaft.elements.damper import Optimum, ring_dynamic_stiffness, tuned_optimum, viscous_optimum
from quillshaft.graph.network import Floats
from quillshaft.study.modal_response import Receptance, modal_receptance, with_ring
from quillshaft.train.damper_model import Damper
from quillshaft.train.model import Train

if TYPE_CHECKING:
    from collections.abc import Callable

TWO_PI = 2.0 * math.pi
LOWEST, HIGHEST = 0.3, 1.7
POINTS = 900
ZOOMS, ZOOM_POINTS = 4, 41
WIDE = 30.0
"""The best damping is looked for within this factor of that of the rule."""


class DamperError(ValueError):
    """A damper or mode that nothing can be suggested for; the text says why."""


@dataclass(frozen=True)
class Choice:
    """A damper's spring and damping, actual, and what they make of the mode.

    stiffness_nm_rad, tuned_hz   of the ring's spring and of the ring alone on it; None of an untuned damper
    viscous_nms_rad              None where damping is a loss factor
    zeta                         c / (2 J_d ω_n); half the loss factor where that is what is stated
    peak                         largest modal angle over that under the same torque at rest; None where unknown
    """

    stiffness_nm_rad: float | None
    tuned_hz: float | None
    viscous_nms_rad: float | None
    zeta: float | None
    peak: float | None


@dataclass(frozen=True)
class Suggestion:
    """What rule and minimisation make of one damper on one mode of the train without it.

    inertia_kgm2   that the mode has at the damper's station: Σ J θ² / θ_station², actual
    mu             ring inertia over it
    bare_peak      largest modal angle over that at rest, without the damper
    rule           by the published rule, its peak that of this train; rule_peak the one the rule promises
    stated, half   as the file has it, and with half its damping; None where it states none
    """

    damper: Damper
    mode: int
    frequency_hz: float
    inertia_kgm2: float
    mu: float
    bare_peak: float
    rule: Choice
    rule_peak: float
    direct: Choice
    stated: Choice | None
    half: Choice | None


@dataclass(frozen=True)
class _Setting:
    """One damper on one mode: `scale` is the speed of its station over that of `speed-at`."""

    screening: Screening
    damper: Damper
    mode: int
    answers: Receptance
    omega_n: float
    scale: float

    def peak(self, stiffness: complex, viscous: float, close: bool = False) -> float:
        """Largest modal angle over that at rest; the frequency of the largest is closed in upon where `close`."""
        answers = self.answers
        own = self._ratio(answers, stiffness, viscous)
        best = int(np.argmax(own))
        for _ in range(ZOOMS if close else 0):
            low, high = answers.omega[max(best - 1, 0)], answers.omega[min(best + 1, len(own) - 1)]
            answers = _answers(self.screening, self.damper, self.mode, np.linspace(low, high, ZOOM_POINTS))
            own = self._ratio(answers, stiffness, viscous)
            best = int(np.argmax(own))
        return _top(own, best)

    def _ratio(self, answers: Receptance, stiffness: complex, viscous: float) -> Floats:
        ring = self.scale**2 * ring_dynamic_stiffness(answers.omega, self.damper.inertia_kgm2, stiffness, viscous)
        return np.asarray(self.omega_n**2 * with_ring(answers, ring))


def _top(values: Floats, best: int) -> float:
    """Height of the parabola through the largest value and its neighbours; the value itself at an end."""
    if not 0 < best < len(values) - 1:
        return float(values[best])
    before, middle, after = values[best - 1 : best + 2].tolist()
    bend = before - 2.0 * middle + after
    return float(middle - (after - before) ** 2 / (8.0 * bend)) if bend < 0 else float(middle)


def without_damper(train: Train, name: str) -> Train:
    """The train with one damper's ring not there."""
    gone = tuple(replace(item, state="lost", moving_share=0.0) if item.name == name else item for item in train.dampers)
    return replace(train, dampers=gone)


def suggest(train: Train, name: str, mode: int | None = None) -> Suggestion:
    """The best of a viscous or tuned damper on a mode of the train without it; None: the mode it acts on most.

    Raises DamperError where there is no such damper or mode, for a pendulum, and where the damper's station does
    not move in the mode; TrainFileError as `screen` does.
    """
    damper = next((item for item in train.dampers if item.name == name), None)
    if damper is None:
        raise DamperError(f"there is no damper {name}")
    if damper.kind == "pendulum":
        raise DamperError(f"{name}: pendulums are tuned to an order, not to a mode")
    screening = screen_alone(without_damper(train, name))
    setting = _setting(screening, damper, mode)
    station = screening.graph.number(damper.at)
    shape = screening.network_modes.angle[setting.mode - 1]
    moved = float(shape[screening.graph.node[station]])
    inertia = 1.0 / (moved * setting.scale) ** 2
    mu = damper.inertia_kgm2 / inertia
    ideal = viscous_optimum(mu) if damper.kind == "viscous" else tuned_optimum(mu)
    rule, direct = _rule(setting, ideal), _direct(setting, ideal)
    stated, half = _stated(setting, 1.0), _stated(setting, 0.5)
    bare = setting.peak(0.0, 0.0, close=True)
    omega = setting.omega_n / TWO_PI
    return Suggestion(damper, setting.mode, omega, inertia, mu, bare, rule, ideal.peak, direct, stated, half)


def _setting(screening: Screening, damper: Damper, mode: int | None) -> _Setting:
    chosen = mode or _most_moved(screening, damper)
    if not 1 <= chosen <= len(screening.modes):
        raise DamperError(f"without {damper.name} the train has modes 1 to {len(screening.modes)}, not {chosen}")
    station = screening.graph.number(damper.at)
    shape = screening.network_modes.angle[chosen - 1]
    if abs(shape[screening.graph.node[station]]) < 1e-6 * np.abs(shape).max():
        raise DamperError(f"{damper.at} is a node of mode {chosen}: {damper.name} does nothing to it")
    omega_n = float(screening.network_modes.omega_rad_s[chosen - 1])
    omega = omega_n * np.geomspace(LOWEST, HIGHEST, POINTS)
    answers = _answers(screening, damper, chosen, omega)
    return _Setting(screening, damper, chosen, answers, omega_n, float(screening.graph.scale[station]))


def _most_moved(screening: Screening, damper: Damper) -> int:
    """The mode next to a tuned damper's own frequency; of a viscous one the judged mode it sits best in."""
    if not screening.modes:
        raise DamperError("the train has no elastic mode without this damper")
    node = screening.graph.node[screening.graph.number(damper.at)]
    moved = np.abs(screening.network_modes.angle[:, node])
    omega = screening.network_modes.omega_rad_s
    if damper.kind == "tuned":
        own = math.sqrt((damper.stiffness_nm_rad or 0.0) / damper.inertia_kgm2)
        near = np.where(moved > 1e-6 * moved.max(), np.abs(np.log(omega / own)), math.inf)
        return int(np.argmin(near)) + 1
    judged = [number - 1 for number in screening.judged_modes] or [0]
    return judged[int(np.argmax(moved[judged]))] + 1


def _answers(screening: Screening, damper: Damper, mode: int, omega: Floats) -> Receptance:
    graph = screening.graph
    shape = screening.network_modes.angle[mode - 1]
    return modal_receptance(graph, shape, graph.number(damper.at), omega, screening.train.zeta[0])


def _choice(setting: _Setting, stiffness: float | None, viscous: float) -> Choice:
    inertia = setting.damper.inertia_kgm2
    tuned = None if stiffness is None else math.sqrt(stiffness / inertia) / TWO_PI
    zeta = viscous / (2.0 * inertia * setting.omega_n)
    return Choice(stiffness, tuned, viscous, zeta, setting.peak(stiffness or 0.0, viscous, close=True))


def _rule(setting: _Setting, ideal: Optimum) -> Choice:
    inertia = setting.damper.inertia_kgm2
    stiffness = inertia * (ideal.tuning * setting.omega_n) ** 2 if ideal.tuning else None
    return _choice(setting, stiffness, 2.0 * ideal.zeta * inertia * setting.omega_n)


def _direct(setting: _Setting, ideal: Optimum) -> Choice:
    """The smallest peak over damping, and over tuning too where there is a spring."""
    from scipy.optimize import minimize, minimize_scalar  # type: ignore[import-untyped]

    inertia = setting.damper.inertia_kgm2
    viscous = 2.0 * ideal.zeta * inertia * setting.omega_n
    if not ideal.tuning:
        ends = (-math.log(WIDE), math.log(WIDE))
        cost: Callable[[float], float] = lambda x: setting.peak(0.0, viscous * math.exp(x))  # noqa: E731
        found: Any = minimize_scalar(cost, bounds=ends, method="bounded", options={"xatol": 1e-6})
        return _choice(setting, None, viscous * math.exp(float(found.x)))
    stiffness = inertia * (ideal.tuning * setting.omega_n) ** 2

    def both(x: Floats) -> float:
        return setting.peak(stiffness * math.exp(float(x[0])), viscous * math.exp(float(x[1])))

    start = np.array([[0.0, 0.0], [0.1, 0.0], [0.0, 0.2]])
    options = {"initial_simplex": start, "xatol": 1e-6, "fatol": 1e-9, "maxiter": 600}
    found = minimize(both, start[0], method="Nelder-Mead", options=options)
    return _choice(setting, stiffness * math.exp(float(found.x[0])), viscous * math.exp(float(found.x[1])))


def _stated(setting: _Setting, share: float) -> Choice | None:
    """The damper as the file has it, with a share of its damping; None where it states no damping."""
    damper = setting.damper
    if damper.viscous_nms_rad is not None:
        return _choice(setting, damper.stiffness_nm_rad, damper.viscous_nms_rad * share)
    if damper.loss_factor is None or damper.stiffness_nm_rad is None:
        return None
    loss = damper.loss_factor * share
    peak = setting.peak(damper.stiffness_nm_rad * (1.0 + 1j * loss), 0.0, close=True)
    tuned = math.sqrt(damper.stiffness_nm_rad / damper.inertia_kgm2) / TWO_PI
    return Choice(damper.stiffness_nm_rad, tuned, None, loss / 2.0, peak)
