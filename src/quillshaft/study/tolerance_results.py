"""What a tolerance study finds: frozen records with units in their names."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from quillshaft.assess.results import Interference, Screening
from quillshaft.graph.network import Floats
from quillshaft.study.drivers import Driver
from quillshaft.study.inputs import Input
from quillshaft.study.spread import Distribution

Certain = Literal["never", "always"]


@dataclass(frozen=True)
class Chance:
    """A probability found by sampling.

    count            samples in which it happened
    standard_error   of the probability: √(p (1 − p) / n)
    interval         within it with 95 % confidence (E. B. Wilson, J. Amer. Statist. Assoc. 22, 1927, from memory)
    certain          the bounds alone decide it: it never happens, or always; None where they do not
    """

    probability: float
    count: int
    standard_error: float
    interval: tuple[float, float]
    certain: Certain | None = None


@dataclass(frozen=True)
class ModeSpread:
    """A natural frequency [Hz]: nominal, bounds over all tolerances, and the sampled 5 % and 95 % points."""

    mode: int
    nominal_hz: float
    low_hz: float
    high_hz: float
    p05_hz: float
    p95_hz: float


@dataclass(frozen=True)
class PairChance:
    """A judged pair: the chance that it is not clear by the requirement of the worst case, and that they meet."""

    pair: Interference
    not_clear: Chance
    meets: Chance


@dataclass(frozen=True)
class ToleranceStudy:
    """The whole result of a tolerance study.

    inputs          every number that may deviate, in file order: stiffnesses, then inertias
    bounds          "exact": both ends of each range are reached; "safe": they hold all variants but, where one
                    group moves several inputs together, need not be reached
    bounds_because  why, in a sentence
    pairs           every judged pair, in the order of the screening
    any_not_clear   the chance that any pair not dismissed is not clear
    drivers         for every pair that may be not clear, what decides it, the largest share first
    lone_groups     groups that only one element names
    frequency_hz    (samples, modes) every sampled natural frequency
    """

    screening: Screening
    samples: int
    seed: int
    distribution: Distribution
    inputs: tuple[Input, ...]
    bounds: Literal["exact", "safe"]
    bounds_because: str
    modes: tuple[ModeSpread, ...]
    pairs: tuple[PairChance, ...]
    any_not_clear: Chance
    drivers: tuple[Driver, ...]
    lone_groups: tuple[str, ...]
    frequency_hz: Floats

    def at_risk(self) -> tuple[PairChance, ...]:
        """Pairs that may be not clear: some sample is not, or the bounds allow it; the likeliest first."""
        found = [item for item in self.pairs if item.not_clear.certain != "never"]
        return tuple(sorted(found, key=lambda item: (item.pair.dismissed is not None, -item.not_clear.probability)))
