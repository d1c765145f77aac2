"""Random train files of every kind that the graph knows, and an independent count of their modes."""

from __future__ import annotations

import random
from typing import Any

import numpy as np
import scipy.linalg

from trains import train_text


class Draft:
    """A train in the making: its tables as plain values."""

    def __init__(self, rng: random.Random, decades: float = 4.0, spread: bool = False) -> None:
        self.rng, self.decades, self.spread = rng, decades, spread
        self.stations: dict[str, Any] = {}
        self.springs: dict[str, Any] = {}
        self.flexible: dict[str, Any] = {}
        self.gears: dict[str, Any] = {}
        self.ties: dict[str, Any] = {}
        self.speeds: dict[str, str] = {}
        self.lines: list[list[str]] = []

    def stiffness(self) -> float:
        """A stiffness [N·m/rad] over the decades of this draft."""
        return float(10 ** self.rng.uniform(6 - self.decades / 2, 6 + self.decades / 2))

    def line(self, count: int) -> list[str]:
        """A new shaft line, a chain or a tree; its first station always has inertia."""
        names: list[str] = []
        for position in range(count):
            name = f"st{len(self.stations)}"
            massless = position > 0 and self.rng.random() < 0.15
            self.stations[name] = 0.0 if massless else float(10 ** self.rng.uniform(-1.5, 1.5))
            if position:
                other = names[-1] if self.rng.random() < 0.6 else self.rng.choice(names)
                table = self.springs if self.rng.random() < 0.7 else self.flexible
                table[f"l{len(self.springs) + len(self.flexible)}"] = (other, name, self.stiffness())
            names.append(name)
        self.lines.append(names)
        return names

    def any_station(self) -> str:
        """Some station."""
        return self.rng.choice(list(self.stations))

    def gear(self, first: str, second: str, teeth: tuple[int, int] | None = None, rigid: bool = False) -> None:
        """A mesh, elastic now and then, internal now and then."""
        z1, z2 = teeth or (self.rng.randint(17, 40), self.rng.randint(41, 120))
        row: dict[str, Any] = {"between": [first, second], "teeth": [z1, z2]}
        if not rigid and self.rng.random() < 0.3:
            row["mesh-stiffness"] = f"{self.stiffness()!r} N m/rad"
        if teeth is None and self.rng.random() < 0.2:
            row["internal"] = True
        self.gears[f"g{len(self.gears)}"] = row

    def stage(self, **members: str) -> None:
        """An epicyclic stage, elastic now and then."""
        teeth = {"sun": self.rng.randint(18, 40), "ring": self.rng.randint(70, 120)}
        row: dict[str, Any] = {"kind": "epicyclic", **members, "teeth": teeth, "planets": 3}
        if self.rng.random() < 0.4:
            row["mesh-stiffness"] = self.stiffness()
        self.gears[f"g{len(self.gears)}"] = row

    def add_geared_line(self) -> None:
        """Another line behind a gear."""
        at = self.any_station()
        self.gear(at, self.line(self.rng.randint(1, 4))[0])

    def add_twins(self) -> None:
        """Two or three equal branches."""
        at, teeth = self.any_station(), (self.rng.randint(17, 40), self.rng.randint(41, 120))
        inertia, stiffness = [float(10 ** self.rng.uniform(-1, 1)) for _ in range(2)], self.stiffness()
        for _ in range(self.rng.choice((2, 3, 3))):
            names = self.line(2)
            self.stations.update(zip(names, inertia, strict=True))
            for table in (self.springs, self.flexible):
                table.update({k: (*row[:2], stiffness) for k, row in table.items() if row[1] == names[1]})
            self.gear(at, names[0], teeth, rigid=True)

    def add_fixed_stage(self) -> None:
        """An epicyclic stage with one member held."""
        members = dict(zip(self.rng.sample(["sun", "ring", "carrier"], 3), ("fixed", "near", "far"), strict=True))
        near, far = self.any_station(), self.line(self.rng.randint(1, 3))[0]
        self.stage(**{role: {"near": near, "far": far}.get(name, name) for role, name in members.items()})

    def add_free_stage(self) -> None:
        """An epicyclic stage with no member held and one more speed given."""
        near = self.any_station()
        others = [self.line(self.rng.randint(1, 3))[0] for _ in range(2)]
        roles = dict(zip(self.rng.sample(["sun", "ring", "carrier"], 3), [near, *others], strict=True))
        self.stage(**roles)
        self.speeds[others[0]] = f"{self.rng.randint(-900, 900)} rpm"

    def add_sprung_ring(self) -> None:
        """A stage whose ring stands still on a spring."""
        near = self.any_station()
        ring, carrier = self.line(self.rng.randint(1, 2)), self.line(self.rng.randint(1, 3))
        self.stage(sun=near, ring=ring[0], carrier=carrier[0])
        self.speeds[ring[0]] = "0 rpm"
        self.ties[f"t{len(self.ties)}"] = (ring[-1], self.stiffness())

    def add_elastic_loop(self) -> None:
        """A second spring between two stations of one line, where there are two."""
        line = max(self.lines, key=len)
        if len(line) > 1:
            a, b = self.rng.sample(line, 2)
            self.springs[f"l{len(self.springs) + len(self.flexible)}"] = (a, b, self.stiffness())

    def add_gear_loop(self) -> None:
        """Two paths of one ratio: (20/40)(20/60) and (20/60)(20/40); rigid all round now and then."""
        at, end = self.any_station(), self.line(self.rng.randint(1, 2))[0]
        rigid = self.rng.random() < 0.3
        for first, second in (((20, 40), (20, 60)), ((20, 60), (20, 40))):
            names = self.line(1 if rigid else 2)
            self.gear(at, names[0], first, rigid)
            self.gear(names[-1], end, second, rigid)

    def add_tie(self) -> None:
        """A spring to ground."""
        self.ties[f"t{len(self.ties)}"] = (self.any_station(), self.stiffness())

    def text(self, **tables: Any) -> str:
        """The train file."""
        operation = {"rated": "1500 rpm"} | ({"speeds": self.speeds} if self.speeds else {})
        return train_text(
            self.stations,
            operation=operation,
            shafts=self.springs,
            couplings=self.flexible,
            gears=self.gears,
            ties=self.ties,
            **tables,
        )


ADDITIONS = (
    Draft.add_geared_line,
    Draft.add_geared_line,
    Draft.add_twins,
    Draft.add_fixed_stage,
    Draft.add_free_stage,
    Draft.add_sprung_ring,
    Draft.add_elastic_loop,
    Draft.add_gear_loop,
    Draft.add_tie,
)


def random_draft(seed: int, parts: int = 4, decades: float = 4.0) -> Draft:
    """A line and up to `parts` additions of any kind; the same for the same seed."""
    rng = random.Random(seed)
    draft = Draft(rng, decades)
    draft.line(rng.randint(1, 5))
    for _ in range(rng.randint(0, parts)):
        rng.choice(ADDITIONS)(draft)
    return draft


def equations(draft: Draft) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """(twist rows, their stiffnesses, rigid constraint rows) in actual signed angles, straight from the tables."""
    place = {name: index for index, name in enumerate(draft.stations)}
    twists, stiffness, rigid = [], [], []

    def row(terms):
        out = np.zeros(len(place))
        for name, value in terms:
            if name != "fixed":
                out[place[name]] += value
        return out

    for a, b, k in (*draft.springs.values(), *draft.flexible.values()):
        twists.append(row([(a, 1.0), (b, -1.0)]))
        stiffness.append(k)
    for gear in draft.gears.values():
        if "kind" in gear:
            sun, ring = gear["teeth"]["sun"], gear["teeth"]["ring"]
            terms = [(gear["sun"], 1.0), (gear["ring"], ring / sun), (gear["carrier"], -(sun + ring) / sun)]
        else:
            z1, z2 = gear["teeth"]
            terms = [(gear["between"][0], 1.0), (gear["between"][1], (-z2 if gear.get("internal") else z2) / z1)]
        if "mesh-stiffness" in gear:
            twists.append(row(terms))
            stiffness.append(float(str(gear["mesh-stiffness"]).split()[0]))
        else:
            rigid.append(row(terms))
    for at, k in draft.ties.values():
        twists.append(row([(at, 1.0)]))
        stiffness.append(k)
    empty = np.zeros((0, len(place)))
    return (
        np.array(twists).reshape(-1, len(place)) if twists else empty,
        np.array(stiffness),
        np.array(rigid).reshape(-1, len(place)) if rigid else empty,
    )


def rank(matrix: np.ndarray) -> int:
    """Rank, 0 for an empty matrix."""
    return int(np.linalg.matrix_rank(matrix, tol=1e-9)) if matrix.size else 0


def free_motions(draft: Draft) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """(twist rows, stiffnesses, basis of the motions that rigid gears allow)."""
    twists, stiffness, rigid = equations(draft)
    basis = scipy.linalg.null_space(rigid) if len(rigid) else np.eye(len(draft.stations))
    return twists, stiffness, basis


def draft_rigid_motions(draft: Draft) -> int:
    """Number of independent motions that twist nothing."""
    twists, _, basis = free_motions(draft)
    return basis.shape[1] - rank(twists @ basis)


def expected_modes(draft: Draft) -> int:
    """Rank of the inertia over the allowed motions, less the motions that twist nothing."""
    _, _, basis = free_motions(draft)
    massive = np.array([value > 0 for value in draft.stations.values()], dtype=float)
    return rank(massive[:, None] * basis) - draft_rigid_motions(draft)


def dense_inverse_squares(draft: Draft, shift: float) -> np.ndarray:
    """1/(ω² + shift) of all motions, the rigid ones included, largest first, by a dense symmetric solver."""
    twists, stiffness, basis = free_motions(draft)
    mass = basis.T @ (np.array(list(draft.stations.values()))[:, None] * basis)
    twist = twists @ basis
    spring = twist.T @ (stiffness[:, None] * twist)
    return scipy.linalg.eigh(mass, spring + shift * mass, eigvals_only=True)[::-1]
