"""Random trains with sources near their modes, and a dense solution with one link's stiffness put back."""

from __future__ import annotations

import copy
import random
from dataclasses import dataclass

import numpy as np
import scipy.linalg

from quillshaft.assess.results import Screening
from quillshaft.graph.build import build_graph
from quillshaft.solve.modes import natural_frequencies
from random_trains import Draft, free_motions, random_draft
from trains import screening_of, sources_of, train


@dataclass(frozen=True)
class Case:
    """A random train, its tables beside the draft's, the link asked about and its screening."""

    draft: Draft
    tables: dict
    link: str
    screening: Screening

    @property
    def bands_hz(self) -> list[tuple[float, float]]:
        """Required 10 % about every fixed frequency: straight from the tables."""
        return [(0.9 * f, 1.1 * f) for f in frequencies(self.tables)]


def frequencies(tables: dict) -> list[float]:
    """The fixed frequencies [Hz] of the excitations."""
    return [float(row["frequency"].split()[0]) for row in tables["excitations"].values()]


def case_of(seed: int, decades: float = 3.0, **more) -> Case | None:
    """A random train with three fixed frequencies about its first modes; None where it has no spring or mode.

    No order of any shaft is a source: what the tables name is all there is.
    """
    draft = random_draft(seed, decades=decades)
    rng = random.Random(seed)
    names = elastic_links(draft)
    if not names:
        return None
    first = frequencies_of(draft)
    if not len(first):
        return None
    base = float(first[0]) / (2 * np.pi)
    pulses = {
        f"pulse-{i}": {"at": rng.choice(list(draft.stations)), "frequency": f"{base * rng.uniform(0.6, 3.5)!r} Hz"}
        for i in range(3)
    }
    tables = {"excitations": pulses, **more}
    active = sources_of(draft.text(**tables)).active
    off = {source.name: "not asked about" for source in active if source.name not in pulses}
    tables["excitations_off"] = off
    return Case(draft, tables, rng.choice(names), screening_of(draft.text(**tables)))


def elastic_links(draft: Draft) -> list[str]:
    """Names of the links whose stiffness a draft states, those between ends that rigid gears join left out."""
    names = [
        *draft.springs,
        *draft.flexible,
        *(n for n, g in draft.gears.items() if "mesh-stiffness" in g),
        *draft.ties,
    ]
    graph = build_graph(train(draft.text()))
    return [name for name in names if graph.link(name).slot != "slack"]


def nominal(draft: Draft, link: str) -> float:
    """Stiffness [N·m/rad] that a draft states for a link."""
    for table in (draft.springs, draft.flexible, draft.ties):
        if link in table:
            return float(table[link][-1])
    return float(str(draft.gears[link]["mesh-stiffness"]).split()[0])


def refitted(draft: Draft, link: str, stiffness: float) -> Draft:
    """The draft with another stiffness [N·m/rad] of one link."""
    changed = copy.deepcopy(draft)
    for table in (changed.springs, changed.flexible, changed.ties):
        if link in table:
            table[link] = (*table[link][:-1], stiffness)
    if link in changed.gears:
        changed.gears[link]["mesh-stiffness"] = f"{stiffness!r} N m/rad"
    return changed


def frequencies_of(draft: Draft) -> np.ndarray:
    """Natural frequencies [rad/s] of a draft."""
    return natural_frequencies(build_graph(train(draft.text())).network)


def at_first_named(case: Case, stated: float) -> float:
    """Stiffness at the first-named station for a stated one: an epicyclic stage states it at the sun."""
    known = case.screening.graph.link(case.link).stiffness_nm_rad
    return stated * known / nominal(case.draft, case.link)


def dense_frequencies_hz(draft: Draft, near_hz: float) -> np.ndarray:
    """Elastic natural frequencies [Hz] by a dense symmetric solver on M and K, best near a frequency [Hz]."""
    twists, stiffness, basis = free_motions(draft)
    mass = basis.T @ (np.array(list(draft.stations.values()))[:, None] * basis)
    twist = twists @ basis
    shift = (2 * np.pi * near_hz) ** 2
    inverse = scipy.linalg.eigh(mass, twist.T @ (stiffness[:, None] * twist) + shift * mass, eigvals_only=True)
    moving = inverse[inverse > 1e-12 * inverse.max()]
    omega2 = 1 / moving - shift
    return np.sqrt(np.sort(omega2[omega2 > 1e-7 * shift])) / (2 * np.pi)
