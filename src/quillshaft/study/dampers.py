"""One damper looked at whole: the best it could be, and the train with it healthy, seized, lost, at half damping."""

from __future__ import annotations

from dataclasses import dataclass

from quillshaft.assess.results import Screening
from quillshaft.assess.screening import screen_alone
from quillshaft.elements.damper import pendulum_effective_inertia
from quillshaft.study.damper_optimum import DamperError, Suggestion, suggest
from quillshaft.train.damper_cases import damper_case_names
from quillshaft.train.damper_model import Damper
from quillshaft.train.model import Train
from quillshaft.train.problems import TrainFileError
from quillshaft.train.read import train_of

SAME_ORDER = 1e-4


@dataclass(frozen=True)
class Tuning:
    """Pendulums against the source whose order, per turn of their station, is nearest to theirs.

    exact_length_m   length that tunes them to that order: R / n², which undamped cancels it at every speed
    felt_kgm2        inertia that the shaft feels at that order; None where they are tuned to it
    """

    source: str
    order: float
    exact_length_m: float
    felt_kgm2: float | None


@dataclass(frozen=True)
class DamperCase:
    """The train with the damper in one state: its screening, or why it cannot be screened."""

    name: str
    screening: Screening | None
    problem: str | None = None


@dataclass(frozen=True)
class DamperStudy:
    """Everything about one damper; `why_not` says why nothing is suggested for it."""

    train: Train
    damper: Damper
    suggestion: Suggestion | None
    tuning: Tuning | None
    why_not: str | None
    cases: tuple[DamperCase, ...]


def study_dampers(train: Train, name: str | None = None, mode: int | None = None) -> tuple[DamperStudy, ...]:
    """Study one damper, or all of a train. Raises DamperError where there is none, TrainFileError as `screen` does."""
    known = [damper.name for damper in train.dampers]
    if not known:
        raise DamperError("this train has no [dampers]")
    if name is not None and name not in known:
        raise DamperError(f"there is no damper {name}: {', '.join(known)}")
    base = screen_alone(train)
    return tuple(_study(base, damper, mode) for damper in train.dampers if name in (None, damper.name))


def _study(base: Screening, damper: Damper, mode: int | None) -> DamperStudy:
    cases = _cases(base, damper)
    if damper.kind == "pendulum":
        return DamperStudy(base.train, damper, None, _tuning(base, damper), None, cases)
    try:
        return DamperStudy(base.train, damper, suggest(base.train, damper.name, mode), None, None, cases)
    except DamperError as error:
        return DamperStudy(base.train, damper, None, None, str(error), cases)


def _tuning(base: Screening, damper: Damper) -> Tuning | None:
    """Tuning by order: n₀ = n (Den Hartog, Mechanical Vibrations, sec. 5.7, from memory)."""
    speed = float(base.graph.scale[base.graph.number(damper.at)])
    orders = [
        (abs(source.order) * source.speed_ratio / speed, source.name)
        for source in base.sources
        if source.order and not source.frequency_hz
    ]
    if not orders or damper.pendulums is None or damper.order is None:
        return None
    own = damper.order
    order, source = min(orders, key=lambda item: abs(item[0] - own))
    tuned = abs(order - own) <= SAME_ORDER * own
    felt = None if tuned else pendulum_effective_inertia(damper.inertia_kgm2, own, order)
    return Tuning(source, order, damper.pendulums.suspension_m / order**2, felt)


def _cases(base: Screening, damper: Damper) -> tuple[DamperCase, ...]:
    train = base.train
    found = [DamperCase("as stated" if damper.state == "healthy" else damper.state, base)]
    for name in damper_case_names(train.file.data, damper.name):
        try:
            found.append(DamperCase(name, screen_alone(train_of(train.file, (*train.cases, name)))))
        except TrainFileError as error:
            found.append(DamperCase(name, None, str(error)))
    return tuple(found)
