"""Referral to one speed: ratios, inertia and stiffness times the square of the ratio, data already referred."""

from __future__ import annotations

from fractions import Fraction

import pytest

from quillshaft.graph.torsional import TorsionalGraph
from trains import graph_of, omegas, refusal, screening_of, train_text

STATIONS = {"motor": 1.0, "pinion": 0.1, "wheel": 0.3, "rotor": 0.2}
SHAFTS = {"low": ("motor", "pinion", 3e5), "high": ("wheel", "rotor", 1e5)}
STEP_UP = {"mesh": ("pinion", "wheel", 70, 20)}


def test_referred_values_are_actual_ones_times_the_square_of_the_ratio():
    # J = 0.2 and k = 1e5 at n = 3.5 become 2.45 and 1225000. Source: Thomson, geared systems; arithmetic.
    graph = graph_of(train_text(STATIONS, shafts=SHAFTS, gears=STEP_UP))
    assert graph.speed_ratio == (1, 1, Fraction(-7, 2), Fraction(-7, 2))
    assert graph.network.inertia_kgm2[graph.node[3]] == pytest.approx(2.45, rel=1e-15)
    assert graph.link("high").referred_nm_rad == pytest.approx(1225000.0, rel=1e-15)
    assert graph.link("high").stiffness_nm_rad == 1e5
    # Pinion and wheel are one node: 0.1 + 3.5² · 0.3.
    assert graph.node[1] == graph.node[2]
    assert graph.network.inertia_kgm2[graph.node[1]] == pytest.approx(0.1 + 12.25 * 0.3, rel=1e-15)


def test_data_stated_referred_to_the_other_shaft_are_the_same_train():
    stations = {**STATIONS, "rotor": {"inertia": 0.2 * 12.25, "referred-to": "motor"}}
    shafts = {**SHAFTS, "high": {"between": ["wheel", "rotor"], "stiffness": 1e5 * 12.25, "referred-to": "pinion"}}
    referred = graph_of(train_text(stations, shafts=shafts, gears=STEP_UP))
    assert referred.inertia_kgm2[3] == pytest.approx(0.2, rel=1e-15)
    assert referred.link("high").stiffness_nm_rad == pytest.approx(1e5, rel=1e-15)
    plain = omegas(train_text(STATIONS, shafts=SHAFTS, gears=STEP_UP))
    assert omegas(train_text(stations, shafts=shafts, gears=STEP_UP)) == pytest.approx(plain, rel=1e-14)


def test_ratios_through_many_meshes_are_exact_fractions_of_teeth():
    stations = {f"g{i}": 0.1 for i in range(8)}
    teeth = {(0, 1): (29, 77), (2, 3): (23, 61), (4, 5): (19, 83), (6, 7): (17, 53)}
    gears = {f"m{a}": (f"g{a}", f"g{b}", *z) for (a, b), z in teeth.items()}
    shafts = {f"s{a}": (f"g{a}", f"g{a + 1}", 1e6) for a in (1, 3, 5)}
    graph = graph_of(train_text(stations, shafts=shafts, gears=gears))
    assert graph.speed_ratio[7] == Fraction(29 * 23 * 19 * 17, 77 * 61 * 83 * 53)


def test_an_idler_reverses_and_leaves_the_ratio():
    gears = {"m1": ("a", "idler", 20, 33), "m2": ("idler", "b", 33, 41)}
    graph: TorsionalGraph = graph_of(train_text({"a": 1.0, "idler": 0.1, "b": 1.0}, gears=gears))
    assert graph.speed_ratio == (1, Fraction(-20, 33), Fraction(20, 41))


def test_coupling_halves_are_added_to_the_stations_they_sit_at():
    row = {"between": ["a", "b"], "stiffness": 1e5, "half-inertias": ["0.9 kg m^2", "1.3 kg m^2"]}
    result = screening_of(train_text({"a": 1.0, "b": 2.0}, couplings={"disc": row}))
    assert result.graph.inertia_kgm2 == pytest.approx([1.9, 3.3], rel=1e-15)
    assert result.modes[0].omega_rad_s == pytest.approx((1e5 * (1 / 1.9 + 1 / 3.3)) ** 0.5, rel=1e-13)


def test_entrained_water_and_gd2_make_the_inertia_that_counts():
    # GD² uses the diameter of gyration: J = GD²/4. Entrained water: J_dry · (1 + share).
    stations = {"a": {"gd2": "1.8 kg m^2"}, "b": {"inertia": 6.2, "entrained": "15 %"}}
    graph = graph_of(train_text(stations, shafts={"s": ("a", "b", 1e5)}))
    assert graph.inertia_kgm2 == pytest.approx([0.45, 6.2 * 1.15], rel=1e-15)


def test_a_part_that_nothing_joins_is_refused_by_name():
    text = train_text({"a": 1.0, "b": 1.0, "c": 1.0, "d": 1.0}, shafts={"s1": ("a", "b", 1e5), "s2": ("c", "d", 1e5)})
    message = refusal(text)
    assert "no link joins c to a" in message
    assert "no link joins d to a" in message


def test_a_train_without_any_inertia_is_refused():
    assert "nothing holds" in refusal(train_text({"a": 0, "b": 0}, shafts={"s": ("a", "b", 1e5)}))


def test_massless_stations_are_condensed_exactly_and_their_angles_recovered():
    # A massless station between 2e5 and 6e5 in series is one spring of 1.5e5; its angle follows the flexibility.
    shafts = {"s1": ("a", "m", 2e5), "s2": ("m", "b", 6e5)}
    (mode,) = screening_of(train_text({"a": 1.0, "m": 0, "b": 2.0}, shafts=shafts)).modes
    assert mode.omega_rad_s == pytest.approx((1.5e5 * 1.5) ** 0.5, rel=1e-14)
    assert mode.shape == pytest.approx({"a": 1.0, "m": 1 - 1.5 * 0.75, "b": -0.5}, rel=1e-13)
    assert mode.kinetic_energy["m"] == 0.0
    assert mode.strain_energy == pytest.approx({"s1": 0.75, "s2": 0.25}, rel=1e-13)


def test_a_massless_station_at_the_end_moves_with_its_neighbour():
    shafts = {"s1": ("a", "b", 2e5), "s2": ("b", "end", 6e5)}
    (mode,) = screening_of(train_text({"a": 1.0, "b": 2.0, "end": 0}, shafts=shafts)).modes
    assert mode.shape["end"] == pytest.approx(mode.shape["b"], rel=1e-13)
    assert mode.strain_energy["s2"] == 0.0
