"""Excitability: how well a source can drive a mode, by hand on small trains."""

from __future__ import annotations

import pytest

from trains import screening_of, train_text

# J = 8, 6, 4; k = 4e6, 2e6: shapes (1, 0, −2) and (1, −2, 1), ω² = 500² · 2 and · 6 (three-disc closed form).
STATIONS = {"a": 8.0, "b": 6.0, "c": 4.0}
SHAFTS = {"s1": ("a", "b", 4e6), "s2": ("b", "c", 2e6)}
AT_ALL = {f"at-{name}": {"at": name, "order": 5} for name in (*STATIONS, *SHAFTS)}
WIDE = {"range": ["1000 rpm", "20000 rpm"]}


def found(text):
    return {(pair.source, pair.mode): pair for pair in screening_of(text).interferences}


def test_at_a_station_it_is_the_angle_over_the_largest():
    pairs = found(train_text(STATIONS, shafts=SHAFTS, excitations=AT_ALL, operation=WIDE))
    expected = {"at-a": (0.5, 0.5), "at-b": (0.0, 1.0), "at-c": (1.0, 0.5)}
    for source, values in expected.items():
        for mode, value in enumerate(values, start=1):
            assert pairs[source, mode].excitability == pytest.approx(value, abs=1e-12)


def test_inside_a_link_it_is_the_torque_over_the_largest():
    # Mode 1: 4e6 · 1 and 2e6 · 2, equal; mode 2: 4e6 · 3 and 2e6 · 3.
    pairs = found(train_text(STATIONS, shafts=SHAFTS, excitations=AT_ALL, operation=WIDE))
    for source, values in {"at-s1": (1.0, 1.0), "at-s2": (1.0, 0.5)}.items():
        for mode, value in enumerate(values, start=1):
            assert pairs[source, mode].excitability == pytest.approx(value, rel=1e-12)


def test_a_shaft_line_acts_at_its_most_moved_station():
    # One line of all three stations: 1 in both modes. A coupling cuts it: a alone, b with c.
    whole = found(train_text(STATIONS, shafts=SHAFTS, operation=WIDE))
    assert [whole["a 1x", mode].excitability for mode in (1, 2)] == pytest.approx([1.0, 1.0], rel=1e-12)
    cut = train_text(STATIONS, shafts={"s2": SHAFTS["s2"]}, couplings={"s1": SHAFTS["s1"]}, operation=WIDE)
    pairs = found(cut)
    assert [pairs["a 2x", mode].excitability for mode in (1, 2)] == pytest.approx([0.5, 0.5], rel=1e-12)
    assert [pairs["b 2x", mode].excitability for mode in (1, 2)] == pytest.approx([1.0, 1.0], rel=1e-12)


def test_behind_a_gear_the_referred_angle_counts_whatever_the_reference_shaft():
    # The referred chain of STATIONS with c behind 1 : 2 (J/n², k/n² as built): actual angle half, work the same.
    stations = {"a": 8.0, "b": 6.0, "pinion": 0, "wheel": 0, "c": 16.0}
    shafts = {"s1": ("a", "b", 4e6), "s3": ("b", "pinion", 4e6), "s2": ("wheel", "c", 16e6)}
    excitations = {f"at-{name}": {"at": name, "order": 5} for name in ("a", "b", "c")}
    for reference, scale in (("a", 1), ("c", 2)):
        operation = {"speed-at": reference, "rated": f"{1500 / scale} rpm", "range": [f"{1000 / scale} rpm", 20000]}
        text = train_text(
            stations,
            shafts=shafts,
            gears={"mesh": ("pinion", "wheel", 20, 40)},
            excitations=excitations,
            operation=operation,
        )
        pairs = found(text)
        for source, values in {"at-a": (0.5, 0.5), "at-b": (0.0, 1.0), "at-c": (1.0, 0.5)}.items():
            for mode, value in enumerate(values, start=1):
                assert pairs[source, mode].excitability == pytest.approx(value, abs=1e-12)
        # The mesh carries what shaft s2 does: equal torques in mode 1, half in mode 2.
        assert pairs["mesh mesh", 1].excitability == pytest.approx(1.0, rel=1e-12)
        assert pairs["mesh mesh", 2].excitability == pytest.approx(0.5, rel=1e-12)


def test_a_rigid_mesh_carries_the_shaft_torque_less_the_inertia_torque_of_its_own_wheel():
    stations = {"motor": 10.0, "pinion": 0.4, "wheel": 3.0, "rotor": 50.0}
    shafts = {"fast": ("motor", "pinion", 1e6), "slow": ("wheel", "rotor", 3e6)}
    text = train_text(stations, shafts=shafts, gears={"mesh": ("pinion", "wheel", 20, 60)}, operation=WIDE)
    result = screening_of(text)
    for mode in result.modes:
        angle, square = mode.referred_shape, mode.omega_rad_s**2
        fast = 1e6 * (angle["motor"] - angle["pinion"])
        slow = 3e6 / 9 * (angle["wheel"] - angle["rotor"])
        mesh = fast + square * 0.4 * angle["pinion"]
        assert mesh == pytest.approx(slow - square * 3.0 / 9 * angle["wheel"], rel=1e-9)
        largest = max(abs(fast), abs(slow), abs(mesh))
        pair = next(p for p in result.interferences if (p.source, p.mode) == ("mesh mesh", mode.mode))
        assert pair.excitability == pytest.approx(abs(mesh) / largest, rel=1e-9)
        assert mode.link_torque == pytest.approx(
            {"fast": fast / largest, "slow": slow / largest, "mesh": mesh / largest}, rel=1e-9
        ) or mode.link_torque == pytest.approx(
            {"fast": -fast / largest, "slow": -slow / largest, "mesh": -mesh / largest}, rel=1e-9
        )


def test_the_worst_is_the_largest_of_nominal_and_both_corners():
    def text(scale_k, scale_j, **tables):
        stations = {name: {"inertia": value * scale_j[name]} for name, value in STATIONS.items()}
        shafts = {name: {"between": row[:2], "stiffness": row[2] * scale_k[name]} for name, row in SHAFTS.items()}
        for row in (*stations.values(), *shafts.values()):
            row.update(tables)
        return train_text(stations, shafts=shafts, excitations=AT_ALL, operation=WIDE)

    shares = {"a": 0.10, "b": 0.05, "c": 0.20, "s1": 0.15, "s2": 0.05}

    def corner(sign):
        factors = {name: 1 + sign * share * (-1 if name in SHAFTS else 1) for name, share in shares.items()}
        return found(text(factors, factors))

    ones = dict.fromkeys(shares, 1.0)
    toleranced = text(ones, ones)
    for name, share in shares.items():
        main = "stiffness" if name in SHAFTS else "inertia"
        row = next(line for line in toleranced.splitlines() if line.startswith(f'"{name}" = {{') and main in line)
        toleranced = toleranced.replace(row, row.replace(" }", f', "tolerance" = {share} }}'))
    nominal, pairs = found(text(ones, ones)), found(toleranced)
    heavy, light = corner(1), corner(-1)
    for key, pair in pairs.items():
        values = [item[key].excitability for item in (nominal, heavy, light)]
        assert pair.excitability == pytest.approx(values[0], abs=1e-12)
        assert pair.worst_excitability == pytest.approx(max(values), abs=1e-12)
    # At the node of mode 1 the nominal is nothing and the tolerances still reach it.
    assert pairs["at-b", 1].excitability < 1e-12
    assert pairs["at-b", 1].worst_excitability > 0.005


def test_a_cluster_is_driven_by_all_of_its_basis():
    # Three equal branches: the pair of equal modes leaves the gear still; each pump can drive them fully.
    stations = {"motor": 10.0, "gear": 2.0}
    shafts, gears = {"quill": ("motor", "gear", 1e6)}, {}
    for i in (1, 2, 3):
        stations |= {f"pinion{i}": 0.05, f"pump{i}": 0.8}
        shafts[f"shaft{i}"] = (f"pinion{i}", f"pump{i}", 2e5)
        gears[f"mesh{i}"] = ("gear", f"pinion{i}", 60, 20)
    excitations = {f"shake{i}": {"at": f"pump{i}", "order": 1} for i in (1, 2, 3)}
    pairs = found(train_text(stations, shafts=shafts, gears=gears, excitations=excitations, operation=WIDE))
    for mode in (2, 3):
        for i in (1, 2, 3):
            assert pairs[f"shake{i}", mode].excitability == pytest.approx(1.0, rel=1e-9)
        assert pairs["motor 1x", mode].excitability == pytest.approx(0.0, abs=1e-9)
