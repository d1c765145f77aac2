"""Bounds of the natural frequencies over all tolerances: exact, attained, and never exceeded."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from quillshaft.solve.modes import natural_frequencies
from quillshaft.solve.plan import plan_elimination
from trains import omegas, screening_of, train_text

# A geared train with twin branches, a tie, an elastic mesh and lopsided tolerances: value, low, high.
STATIONS = {
    "motor": (10.0, -0.05, 0.05),
    "hub": (0.7, -0.02, 0.3),
    "gear": (2.0, -0.1, 0.0),
    "pinion1": (0.05, -0.05, 0.05),
    "pump1": (0.8, -0.15, 0.15),
    "pinion2": (0.05, -0.05, 0.05),
    "pump2": (0.8, -0.05, 0.25),
    "oil-pinion": (0.01, -0.05, 0.05),
    "oil-pump": (0.02, 0.0, 0.1),
}
SPRINGS = {
    "stub": ("motor", "hub", 5e6, -0.05, 0.05),
    "quill": ("hub", "gear", 1e6, -0.15, 0.15),
    "shaft1": ("pinion1", "pump1", 2e5, -0.05, 0.2),
    "shaft2": ("pinion2", "pump2", 2e5, -0.2, 0.05),
    "oil-shaft": ("oil-pinion", "oil-pump", 3e3, -0.1, 0.1),
}
MESH = (8e6, -0.2, 0.2)
TIE = (6e4, -0.25, 0.4)


def text(corner=None):
    """The train with its tolerances, or without any and all values at a corner (−1 soft and heavy, +1 stiff)."""

    def value(nominal, low, high, sign):
        if corner is None:
            return nominal, {"tolerance": [low, high]}
        return nominal * (1 + (high if sign * corner > 0 else low)), {}

    stations, shafts = {}, {}
    for name, (nominal, low, high) in STATIONS.items():
        number, extra = value(nominal, low, high, -1)
        stations[name] = {"inertia": number, **extra}
    for name, (a, b, nominal, low, high) in SPRINGS.items():
        number, extra = value(nominal, low, high, 1)
        shafts[name] = {"between": [a, b], "stiffness": number, **extra}
    mesh, mesh_extra = value(*MESH, 1)
    tie, tie_extra = value(*TIE, 1)
    gears = {
        "m1": ("gear", "pinion1", 60, 20),
        "m2": ("gear", "pinion2", 60, 20),
        "m3": {
            "between": ["gear", "oil-pinion"],
            "teeth": [60, 25],
            "mesh-stiffness": f"{mesh!r} N m/rad",
            **mesh_extra,
        },
    }
    ties = {"grid": {"at": "motor", "stiffness": tie, **tie_extra}}
    return train_text(stations, shafts=shafts, gears=gears, ties=ties)


def bounds():
    return np.array([mode.bounds_hz for mode in screening_of(text()).modes]) * 2 * np.pi


def test_the_bounds_are_attained_by_the_two_corner_trains():
    assert omegas(text(-1)) == pytest.approx(bounds()[:, 0], rel=1e-13)
    assert omegas(text(+1)) == pytest.approx(bounds()[:, 1], rel=1e-13)


def test_two_thousand_trains_within_tolerance_stay_inside_the_bounds():
    # Every quantity anywhere in its tolerance, half of the trains at corners of the box: inclusion by
    # monotony (Courant–Fischer: frequencies rise with every stiffness and fall with every inertia).
    low, high = bounds().T
    graph = screening_of(text()).graph
    network, plan = graph.network, plan_elimination(graph.network)
    rng = np.random.default_rng(20261130)
    names = list(STATIONS)
    inertia_box = np.array([STATIONS[name][1:] for name in names])
    spring_box = np.array([link[3:] for link in SPRINGS.values()] + [MESH[1:]])
    own = np.array([STATIONS[name][0] for name in names]) * graph.scale**2
    assert [link.name for link in graph.links if link.slot == "spring"] == [*SPRINGS, "m3"]

    def draw(box, corner):
        share = rng.integers(0, 2, len(box)) if corner else rng.random(len(box))
        return 1 + box[:, 0] + share * (box[:, 1] - box[:, 0])

    reached = np.full((2, len(low)), np.nan)
    for sample in range(2000):
        corner = sample % 2 == 0
        inertia = np.zeros(network.nodes)
        np.add.at(inertia, graph.node, own * draw(inertia_box, corner))
        changed = replace(
            network,
            inertia_kgm2=inertia,
            spring_nm_rad=network.spring_nm_rad * draw(spring_box, corner),
            tie_nm_rad=network.tie_nm_rad * draw(np.array([TIE[1:]]), corner),
        )
        omega = natural_frequencies(changed, plan)
        assert np.all(omega >= low * (1 - 1e-12))
        assert np.all(omega <= high * (1 + 1e-12))
        reached = np.array([np.fmin(reached[0], omega), np.fmax(reached[1], omega)])
    # The samples come near the bounds, so the bounds are not merely wide.
    assert np.all((reached[0] - low) / (high - low) < 0.3)
    assert np.all((high - reached[1]) / (high - low) < 0.3)


def test_without_tolerances_the_bounds_are_the_frequency():
    for mode in screening_of(train_text({"a": 1.0, "b": 2.0}, shafts={"s": ("a", "b", 1e5)})).modes:
        assert mode.bounds_hz == (mode.frequency_hz, mode.frequency_hz)


def test_default_tolerances_are_those_of_the_kind_of_element():
    # Common practice: station 5 %, impeller 10 % and half the entrained part, shaft 5 %, coupling 10, 25 or
    # 15 % by kind, elastic mesh 20 %, tie 20 %.
    stations = {"a": 1.0, "b": 1.0, "c": 1.0, "d": 1.0, "e": 1.0, "f": {"inertia": 1.0, "entrained": "20 %"}}
    between = [["a", "b"], ["b", "c"], ["c", "d"]]
    couplings = {
        kind: {"between": ends, "stiffness": 1e5, "kind": kind}
        for kind, ends in zip(("disc", "gear", "elastomer"), between, strict=True)
    }
    gears = {"m": {"between": ["d", "e"], "teeth": [20, 30], "mesh-stiffness": "1e6 N m/rad"}}
    every = train_text(
        stations,
        shafts={"s": ("e", "f", 1e5)},
        couplings=couplings,
        gears=gears,
        ties={"t": ("a", 1e4)},
        machines={"pump": {"kind": "centrifugal-pump", "at": "f", "vanes": 6}},
        assumptions={"tolerances": "default"},
    )
    graph = screening_of(every).graph
    found = {link.name: link.tolerance for link in graph.links}
    expected = {"s": 0.05, "disc": 0.10, "gear": 0.25, "elastomer": 0.15, "m": 0.20, "t": 0.20}
    assert found == {name: (-share, share) for name, share in expected.items()}
    inertia = {graph.stations[part.station]: part.tolerance for part in graph.parts}
    assert inertia == {**dict.fromkeys("abcde", (-0.05, 0.05)), "f": (-0.20, 0.20)}


def test_frequency_follows_the_square_root_of_stiffness_and_inertia_by_their_energy_shares():
    # d ln f / d ln k = ½ strain share, d ln f / d ln J = −½ kinetic share (Rayleigh quotient).
    base = {name: row[0] for name, row in STATIONS.items()}
    springs = {name: row[:3] for name, row in SPRINGS.items()}
    gears = {"m1": ("gear", "pinion1", 60, 20), "m2": ("gear", "pinion2", 60, 20), "m3": ("gear", "oil-pinion", 60, 25)}
    base["pump2"] = 0.9

    def frequencies(stations, shafts):
        return omegas(train_text(stations, shafts=shafts, gears=gears))

    modes = screening_of(train_text(base, shafts=springs, gears=gears)).modes
    step = 1e-4
    for name, (a, b, k) in springs.items():
        up, down = (frequencies(base, {**springs, name: (a, b, k * factor)}) for factor in (1 + step, 1 - step))
        slope = (np.log(up) - np.log(down)) / (np.log(1 + step) - np.log(1 - step))
        assert slope == pytest.approx([mode.strain_energy[name] / 2 for mode in modes], abs=1e-7)
    for name, inertia in base.items():
        up, down = (frequencies({**base, name: inertia * factor}, springs) for factor in (1 + step, 1 - step))
        slope = (np.log(up) - np.log(down)) / (np.log(1 + step) - np.log(1 - step))
        assert slope == pytest.approx([-mode.kinetic_energy[name] / 2 for mode in modes], abs=1e-7)
