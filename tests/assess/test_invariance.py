"""What must not change a result: the order of rows, the reference shaft, the unit system."""

from __future__ import annotations

import random

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from random_trains import random_draft
from trains import RPM, screening_of, train_text

seeds = st.integers(0, 2**32)


def table_of(result):
    """Margins, verdicts and excitability by source (by its set of origins) and mode."""
    origins = {source.name: frozenset(source.origins) for source in result.sources}
    return {(origins[pair.source], pair.mode): pair for pair in result.interferences}


def same_pairs(one, two, rel):
    assert one.keys() == two.keys()
    for key, pair in one.items():
        other = two[key]
        assert (pair.verdict, pair.worst_verdict) == (other.verdict, other.worst_verdict)
        assert pair.margin == pytest.approx(other.margin, rel=rel, abs=rel)
        assert pair.worst_margin == pytest.approx(other.worst_margin, rel=rel, abs=rel)


def frequencies(result):
    return np.array([(mode.omega_rad_s, *mode.bounds_hz) for mode in result.modes]).reshape(-1, 3)


def apart(result):
    """True where no two frequencies are near enough to trade places."""
    omega = frequencies(result)[:, 0]
    return bool(np.all(np.diff(omega) > 1e-6 * omega[1:]))


TABLES = {"assumptions": {"tolerances": "default"}, "operation": {}}


@given(seeds)
@settings(max_examples=30, deadline=None, derandomize=True)
def test_the_order_of_rows_in_the_file_changes_nothing(seed):
    draft = random_draft(seed)
    extra = {"assumptions": {"tolerances": "default"}}
    result = screening_of(draft.text(**extra))
    rng, first = random.Random(seed), next(iter(draft.stations))

    def shuffled(table):
        return dict(rng.sample(list(table.items()), len(table)))

    operation = {"speed-at": first, "rated": "1500 rpm"} | ({"speeds": draft.speeds} if draft.speeds else {})
    other = screening_of(
        train_text(
            shuffled(draft.stations),
            operation=operation,
            shafts=shuffled(draft.springs),
            couplings=shuffled(draft.flexible),
            gears=shuffled(draft.gears),
            ties=shuffled(draft.ties),
            **extra,
        )
    )
    assert frequencies(other) == pytest.approx(frequencies(result), rel=1e-11)
    assert (other.verdict, other.worst_verdict) == (result.verdict, result.worst_verdict)
    if apart(result):
        for mode, same in zip(result.modes, other.modes, strict=True):
            assert same.strain_energy == pytest.approx(mode.strain_energy, abs=1e-7)
            assert same.kinetic_energy == pytest.approx(mode.kinetic_energy, abs=1e-7)
        # Shaft lines are named after their first station in file order: compare the gear sources by name.
        meshes = [{k: v for k, v in table_of(item).items() if "mesh" in min(k[0])} for item in (result, other)]
        same_pairs(*meshes, rel=1e-9)


@given(seeds)
@settings(max_examples=30, deadline=None, derandomize=True)
def test_the_choice_of_the_reference_shaft_changes_nothing(seed):
    draft = random_draft(seed)
    draft.speeds.clear()
    draft.gears = {k: v for k, v in draft.gears.items() if "kind" not in v or "fixed" in v.values()}
    connected = reachable(draft)
    for table, ends in ((draft.springs, slice(2)), (draft.flexible, slice(2)), (draft.ties, slice(1))):
        for name in [name for name, row in table.items() if row[ends][0] not in connected]:
            del table[name]
    draft.stations = {name: value for name, value in draft.stations.items() if name in connected}
    draft.gears = {k: v for k, v in draft.gears.items() if set(members(v)) <= connected}
    extra = {"assumptions": {"tolerances": "default"}}
    result = screening_of(draft.text(**extra))
    graph = result.graph
    reference = random.Random(seed).choice(graph.stations)
    ratio = abs(float(graph.speed_ratio[graph.number(reference)]))
    plain = draft.text(**extra)
    moved = plain.replace('"speed-at" = "st0"', f'"speed-at" = "{reference}"')
    moved = moved.replace('"rated" = "1500 rpm"', f'"rated" = "{1500 * ratio!r} rpm"')
    other = screening_of(moved)
    assert frequencies(other) == pytest.approx(frequencies(result), rel=1e-11)
    if apart(result):
        one, two = table_of(result), table_of(other)
        same_pairs(one, two, rel=1e-9)
        for key, pair in one.items():
            if pair.excitability is not None:
                assert two[key].excitability == pytest.approx(pair.excitability, abs=1e-6)
            speeds = np.array(two[key].critical_speeds_rpm) / ratio
            assert speeds == pytest.approx(np.array(pair.critical_speeds_rpm), rel=1e-11)


def members(gear):
    """Stations of a gear row."""
    if "kind" in gear:
        return [gear[role] for role in ("sun", "ring", "carrier") if gear[role] != "fixed"]
    return list(gear["between"])


def reachable(draft):
    """Stations that links join to the first one."""
    groups = [row[:2] for row in (*draft.springs.values(), *draft.flexible.values())]
    groups += [members(gear) for gear in draft.gears.values()]
    found = {next(iter(draft.stations))}
    for _ in draft.stations:
        for group in groups:
            if found & set(group):
                found |= set(group)
    return found


# Exact factors: 1 lbf = 0.45359237 · 9.80665 N, 1 in = 0.0254 m, 550 ft·lbf/s = 1 hp.
LBF_IN = 0.45359237 * 9.80665 * 0.0254
HP_KW = 0.45359237 * 9.80665 * 0.3048 * 550 / 1000


@given(seeds)
@settings(max_examples=30, deadline=None, derandomize=True)
def test_the_unit_system_changes_nothing(seed):
    draft = random_draft(seed)
    names = list(draft.stations)
    first, last = names[0], names[-1]
    power = {"power": {first: "LOAD", last: "balance"}} if first != last and not draft.speeds else {}
    extra = {"assumptions": {"tolerances": "default"}, **power}
    si = screening_of(draft.text(**extra).replace('"LOAD"', "100.0"))
    mesh = {
        name: {**gear, "mesh-stiffness": us_mesh(gear["mesh-stiffness"])} if "mesh-stiffness" in gear else gear
        for name, gear in draft.gears.items()
    }
    operation = {"rated": "1500 rpm"} | ({"speeds": draft.speeds} if draft.speeds else {})

    def springs(table):
        return {name: (*row[:-1], row[-1] / LBF_IN) for name, row in table.items()}

    us_text = train_text(
        {name: value / LBF_IN for name, value in draft.stations.items()},
        "US",
        operation=operation,
        shafts=springs(draft.springs),
        couplings=springs(draft.flexible),
        gears=mesh,
        ties=springs(draft.ties),
        **extra,
    )
    us = screening_of(us_text.replace('"LOAD"', repr(100.0 / HP_KW)))
    assert frequencies(us) == pytest.approx(frequencies(si), rel=1e-12)
    assert (us.verdict, us.worst_verdict) == (si.verdict, si.worst_verdict)
    same_pairs(table_of(si), table_of(us), rel=1e-10)
    for one, two in zip(si.duties, us.duties, strict=True):
        if one.mean_torque_nm is not None:
            scale = max(abs(item.mean_torque_nm or 0.0) for item in si.duties)
            assert two.mean_torque_nm == pytest.approx(one.mean_torque_nm, rel=1e-9, abs=1e-9 * scale)


def us_mesh(value):
    """A mesh stiffness with its SI unit (any file may say so), or a bare one of an epicyclic stage in lbf·in/rad."""
    return value if isinstance(value, str) else value / LBF_IN


def test_a_us_file_by_geometry_is_the_si_file_by_geometry():
    piece_si = {"od": 25.4 * 2.75, "length": 25.4 * 39.5, "hub": 25.4 * 3}
    piece_us = {"od": 2.75, "length": 39.5, "hub": 3}
    material = {"shear-modulus": 79.0, "density": 7850.0}
    us_material = {
        "shear-modulus": 79e9 / (0.45359237 * 9.80665 / 0.0254**2),
        "density": 7850.0 / (0.45359237 / 0.0254**3),
    }
    results = []
    for units, piece, own, inertia in (
        ("SI", piece_si, material, 0.4),
        ("US", piece_us, us_material, 0.4 / LBF_IN),
    ):
        shafts = {"s": {"between": ["a", "b"], "material": "own", "pieces": [piece]}}
        text = train_text({"a": inertia, "b": 2 * inertia}, units, shafts=shafts, materials={"own": own})
        results.append(screening_of(text).modes[0].omega_rad_s)
    assert results[0] == pytest.approx(results[1], rel=1e-12)


@given(seeds, st.floats(0.1, 10.0))
@settings(max_examples=30, deadline=None, derandomize=True)
def test_scaling_every_stiffness_scales_every_frequency_by_its_root(seed, factor):
    draft = random_draft(seed)
    base = frequencies(screening_of(draft.text()))
    for table in (draft.springs, draft.flexible, draft.ties):
        table.update({name: (*row[:-1], row[-1] * factor) for name, row in table.items()})
    for gear in draft.gears.values():
        if "mesh-stiffness" in gear:
            value = gear["mesh-stiffness"]
            bare = float(str(value).split()[0]) * factor
            gear["mesh-stiffness"] = f"{bare!r} N m/rad" if isinstance(value, str) else bare
    scaled = frequencies(screening_of(draft.text()))
    assert scaled == pytest.approx(base * factor**0.5, rel=1e-11)


@given(seeds)
@settings(max_examples=30, deadline=None, derandomize=True)
def test_energy_shares_sum_to_one_and_are_never_negative(seed):
    for mode in screening_of(random_draft(seed, decades=10.0).text()).modes:
        for shares in (mode.strain_energy, mode.kinetic_energy):
            assert sum(shares.values()) == pytest.approx(1.0, abs=1e-12)
            assert min(shares.values()) >= 0.0


def test_rated_speed_in_any_unit_is_one_speed():
    for rated in ("1500 rpm", "1500 r/min", f"{1500 * RPM!r} rad/s", "25 rev/s"):
        text = train_text({"a": 1.0, "b": 1.0}, shafts={"s": ("a", "b", 1e5)}, operation={"rated": rated})
        assert screening_of(text).train.operation.rated_rad_s == pytest.approx(1500 * RPM, rel=1e-14)
