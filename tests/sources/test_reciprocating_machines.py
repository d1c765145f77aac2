"""Engines and reciprocating compressors in a train file: torques of their cylinders, phases, dead cylinders, vees."""

from __future__ import annotations

import cmath
import math

import numpy as np
import pytest

from quillshaft.assess.orders import OrdersError, order_study
from quillshaft.assess.screening import screen
from quillshaft.elements.slider_crank import inertia_harmonics, inertia_torque, lever
from quillshaft.sources.gas import end_pressure
from quillshaft.sources.reciprocating import cylinder_torques, machine_orders, reciprocating_inertia
from quillshaft.train.problems import TrainFileError
from quillshaft.train.read import load
from trains import refusal, screening_of, train, train_text

SIZE = {"bore": "170 mm", "stroke": "190 mm", "rod": "350 mm"}
BORE, RADIUS, RATIO = 0.17, 0.095, 0.095 / 0.35
AREA = math.pi / 4 * BORE**2
CYCLE = {"cycle": {"compression-ratio": 15.5, "imep": "17 bar", "peak": "155 bar"}}
FIRING = (0, 480, 240, 600, 120, 360)
"""Even firing 1-5-3-6-2-4 of a four-stroke in-line six (Den Hartog, Mechanical Vibrations, ch. 5)."""
OMEGA = 1500 * math.pi / 30


def engine_text(firing=FIRING, strokes=4, banks=None, case="", at=None, **more):
    count = len(firing)
    throws = {f"throw{i}": 0.5 for i in range(1, count + 1)}
    names = [*throws, "flywheel"]
    shafts = {f"c{i}": (names[i - 1], names[i], 1e7) for i in range(1, count + 1)}
    cylinders = [{"at": at or f"throw{i + 1}", "fires-at": f"{angle} deg"} for i, angle in enumerate(firing)]
    for cylinder, bank in zip(cylinders, banks or (), strict=bool(banks)):
        cylinder["bank"] = f"{bank} deg"
    machine = {"kind": "reciprocating-engine", "strokes": strokes, "cylinders": cylinders, **more}
    return train_text({**throws, "flywheel": 30.0}, shafts=shafts, machines={"engine": machine}) + case


def torques(text, omega=OMEGA, cases=()):
    return cylinder_torques(train(text, cases).machines[0], omega)


def wave(item, angle, machine):
    """The torque of a cylinder over the crank angle, from its harmonics."""
    orders = np.array(machine_orders(machine))
    return np.real(np.exp(1j * np.outer(angle, orders)) @ item.torque_nm)


def test_inertia_torque_of_each_cylinder_follows_its_own_dead_centre():
    text = engine_text(**{"stroke": "190 mm", "rod": "350 mm", "reciprocating-mass": "9.4 kg"})
    angle = np.linspace(0, 4 * math.pi, 200)
    machine = train(text).machines[0]
    for item, firing in zip(torques(text), FIRING, strict=True):
        expected = inertia_torque(angle - math.radians(firing), 9.4, RADIUS, RATIO, OMEGA)
        # Orders above 12 are left out: below λ^11 of the whole (Den Hartog, Mechanical Vibrations, ch. 5).
        assert wave(item, angle, machine) == pytest.approx(expected, abs=1e-4)
        assert item.gas_nm is None


def test_inertia_torque_grows_with_the_square_of_speed_and_gas_torque_does_not():
    text = engine_text(**SIZE, **{"reciprocating-mass": "9.4 kg", "gas": CYCLE})
    slow, fast = torques(text)[0], torques(text, 2 * OMEGA)[0]
    assert fast.inertia_nm == pytest.approx(4 * slow.inertia_nm, rel=1e-14)
    assert fast.gas_nm == pytest.approx(slow.gas_nm, rel=1e-14)
    assert slow.torque_nm == pytest.approx(slow.gas_nm + slow.inertia_nm, rel=1e-14)


def test_inertia_torque_of_whole_orders_by_the_exact_coefficients():
    text = engine_text(**{"stroke": "190 mm", "rod": "350 mm", "reciprocating-mass": "9.4 kg"})
    found = torques(text)[0].inertia_nm
    sines = 9.4 * (RADIUS * OMEGA) ** 2 * inertia_harmonics(RATIO, 12)
    assert found[1::2] == pytest.approx(-1j * sines, abs=1e-9)
    assert np.all(found[0::2] == 0)


def card_train(tmp_path, cycle=720, strokes=4, firing=FIRING, head="angle [deg], pressure [bar]"):
    """An engine whose card is p = p_max exp(12 (cos(θ/2 − 5°) − 1)) (of a cycle's angle), p_max = 100 bar gauge."""
    angles = np.arange(0, cycle + 1, 1)
    pressures = 100 * np.exp(12 * (np.cos(np.radians(angles * 360 / cycle) - math.radians(5)) - 1))
    rows = [f"{angle}, {pressure!r}" for angle, pressure in zip(angles.tolist(), pressures.tolist(), strict=True)]
    (tmp_path / "card.csv").write_text("\n".join([head, *rows]))
    gas = {"indicator": "card.csv", "pressure": "gauge"}
    text = engine_text(firing, strokes, **{**SIZE, "rod": "380 mm"}, gas=gas)
    (tmp_path / "t.toml").write_text(text)
    return load(tmp_path / "t.toml")


def test_a_card_gives_the_harmonics_of_its_pressure_at_the_crank(tmp_path):
    # λ = 0.25; coefficients per A R p_max by quadrature, order: (cosine, sine).
    known = {0.5: (0.034844181304, 0.039950064229), 1.5: (0.009435366480, 0.087415443530)}
    known |= {3.0: (-0.016828079658, 0.060756250396), 6.0: (-0.002053975325, 0.001940054376)}
    machine = card_train(tmp_path).machines[0]
    scale = AREA * RADIUS * 1e7
    for item, firing in zip(cylinder_torques(machine, OMEGA), FIRING, strict=True):
        assert item.mean_nm == pytest.approx(scale * 0.019524030784, rel=1e-10)
        for order, (cosine, sine) in known.items():
            turned = complex(cosine, -sine) * cmath.exp(-1j * order * math.radians(firing))
            found = item.gas_nm[machine_orders(machine).index(order)]
            assert found == pytest.approx(scale * turned, rel=1e-9)


def test_two_strokes_work_once_a_turn(tmp_path):
    machine = card_train(tmp_path, 360, 2, (0, 120, 240)).machines[0]
    angle = np.arange(360) * 2 * math.pi / 360
    torque = AREA * RADIUS * 1e7 * np.exp(12 * (np.cos(angle - math.radians(5)) - 1)) * lever(angle, 0.25)
    found = cylinder_torques(machine, OMEGA)[0].gas_nm
    assert machine_orders(machine) == tuple(range(1, 13))
    assert found == pytest.approx(2 * np.fft.rfft(torque)[1:13] / 360, abs=1e-8)


def test_harmonics_of_tangential_pressure_act_on_the_piston_area(tmp_path):
    (tmp_path / "orders.csv").write_text("order, cosine [bar], sine [bar]\n0, 2.7, 0\n0.5, 1.5, 2.5\n3, -1, 4\n")
    (tmp_path / "t.toml").write_text(engine_text(**SIZE, gas={"harmonics": "orders.csv"}))
    result = screen(load(tmp_path / "t.toml"))
    first = cylinder_torques(result.train.machines[0], OMEGA)[0]
    assert first.mean_nm == pytest.approx(AREA * RADIUS * 2.7e5, rel=1e-14)
    assert first.gas_nm[0] == pytest.approx(AREA * RADIUS * complex(1.5e5, -2.5e5), rel=1e-14)
    assert first.gas_nm[5] == pytest.approx(AREA * RADIUS * complex(-1e5, -4e5), rel=1e-14)
    assert any("gives no gas torque of order 1, 1.5, 2" in flag.text for flag in result.flags)


def test_indicated_power_is_imep_times_swept_volume_times_cycles():
    study = order_study(screening_of(engine_text(**SIZE, gas=CYCLE)))
    power = 17e5 * AREA * 2 * RADIUS * 6 * 1500 / 60 / 2
    assert study.mean_nm * OMEGA == pytest.approx(power, rel=3e-6)
    assert study.indicative


def test_sources_carry_their_torque_and_say_that_a_cycle_is_indicative():
    text = engine_text(**SIZE, **{"reciprocating-mass": "9.4 kg", "gas": CYCLE})
    result = screening_of(text)
    size = abs(torques(text)[0].torque_nm[5])
    assert result.source("engine order-3").torque == f"{size:.4g} N·m a cylinder at rated speed, indicative"
    assert any("indicative only" in item.why for item in result.assumed)
    assert screening_of(engine_text()).source("engine order-3").torque is None


def test_an_engine_alike_in_all_cylinders_has_the_same_excitability_with_and_without_torques():
    plain = screening_of(engine_text())
    full = screening_of(engine_text(**SIZE, **{"reciprocating-mass": "9.4 kg", "gas": CYCLE}))
    found = {(pair.source, pair.mode): pair.excitability for pair in full.interferences}
    assert {(pair.source, pair.mode): pair.excitability for pair in plain.interferences} == found


DEAD = "[cases.dead]\nmachines.engine.dead-cylinders = [3]\n"


def test_a_dead_cylinder_leaves_the_minor_orders_its_missing_part():
    # Six even vectors cancel in order 1/2; without one of them the sum is 1 (Den Hartog, ch. 5, arithmetic).
    study = order_study(screening_of(engine_text(case=DEAD), ("dead",)))
    sums = {row.order: row.rigid_sum for row in study.rows}
    assert study.acting == 5
    assert [sums[order] for order in (0.5, 1.0, 1.5, 2.0, 3.0)] == pytest.approx([1, 1, 1, 1, 5], abs=1e-12)


def test_a_dead_cylinder_without_torques_counts_nothing_in_excitability():
    result = screening_of(engine_text(case=DEAD), ("dead",))
    pair = next(item for item in result.interferences if item.source == "engine order-0.5" and item.mode == 1)
    angles = [result.modes[0].referred_shape[f"throw{i}"] for i in range(1, 7)]
    parts = [
        angle * cmath.exp(0.5j * math.radians(firing))
        for number, (angle, firing) in enumerate(zip(angles, FIRING, strict=True), start=1)
        if number != 3
    ]
    assert pair.excitability == pytest.approx(abs(sum(parts)) / 5, abs=1e-12)


def test_a_dead_cylinder_still_compresses_and_moves_its_mass():
    text = engine_text(**SIZE, **{"reciprocating-mass": "9.4 kg", "gas": CYCLE}, case=DEAD)
    items = torques(text, cases=("dead",))
    assert [item.cylinder.dead for item in items] == [False, False, True, False, False, False]
    assert items[2].mean_nm == pytest.approx(0.0, abs=1e-3)
    assert items[0].mean_nm > 500
    assert np.abs(items[2].inertia_nm) == pytest.approx(np.abs(items[0].inertia_nm), rel=1e-12)
    assert 0 < abs(items[2].gas_nm[5]) < abs(items[0].gas_nm[5])
    words = screening_of(text, ("dead",)).source("engine order-3").torque
    assert "a cylinder" in words
    assert "a dead one" in words


def test_excitability_with_a_dead_cylinder_weighs_by_torque():
    text = engine_text(**SIZE, gas=CYCLE, case=DEAD)
    result = screening_of(text, ("dead",))
    values = np.array([item.torque_nm[0] for item in torques(text, cases=("dead",))])
    angles = np.array([result.modes[0].referred_shape[f"throw{i}"] for i in range(1, 7)])
    pair = next(item for item in result.interferences if item.source == "engine order-0.5" and item.mode == 1)
    assert pair.excitability == pytest.approx(abs(np.sum(angles * values)) / np.sum(np.abs(values)), abs=1e-12)


def test_light_load_is_a_case_with_another_gas():
    case = (
        "[cases.light]\nmachines.engine.gas = "
        '{ cycle = { compression-ratio = 15.5, imep = "3 bar", peak = "50 bar" } }\n'
    )
    text = engine_text(**SIZE, gas=CYCLE, case=case)
    full, light = torques(text)[0], torques(text, cases=("light",))[0]
    assert light.mean_nm == pytest.approx(full.mean_nm * 3 / 17, rel=1e-5)


def test_an_impossible_cycle_is_refused_where_it_is_written():
    gas = {"cycle": {"compression-ratio": 15.5, "imep": "17 bar", "peak": "60 bar"}}
    message = refusal(engine_text(**SIZE, gas=gas))
    assert "[machines.engine] gas.cycle.peak" in message
    assert "below the compression pressure" in message
    assert "Allowed: at least 85.9" in message


def test_uneven_firing_of_a_vee_twin_makes_half_orders_major():
    # Two cylinders at 0° and 315°: 2 |cos(n · 157.5°)| (arithmetic): half of them or more at n = 1 and 2.
    study = order_study(screening_of(engine_text((0, 315))))
    for row in study.rows:
        expected = 2 * abs(math.cos(row.order * math.radians(157.5)))
        assert row.rigid_sum == pytest.approx(expected, abs=1e-12)
        assert row.major == (expected >= 1 - 1e-9)


def test_cylinders_of_a_vee_on_one_throw_fit_their_banks():
    # A 90° vee with two pins: cylinders of one pin fire a bank angle (or that and a turn) apart (geometry).
    fits = engine_text((0, 450, 180, 630), banks=(0, 90, 0, 90))
    study = order_study(screening_of(fits))
    assert study.crank_angles_deg() == pytest.approx([0, 0, 180, 180], abs=1e-9)


@pytest.mark.parametrize(("second", "asked"), [(450, False), (90, False), (420, True)])
def test_two_cylinders_at_one_station_that_do_not_share_a_throw_are_asked_about(second, asked):
    text = engine_text((0, second), banks=(0, 90), at="throw1")
    found = any("stand on throws" in flag.text for flag in screening_of(text).flags)
    assert found is asked


def test_power_that_does_not_fit_the_gas_is_asked_about():
    share = 17e5 * AREA * 2 * RADIUS * 1500 / 120 / 1e3
    for factor, asked in ((0.85, False), (1.3, True), (0.3, True)):
        power = {f"throw{i}": f"{factor * share} kW" for i in range(1, 7)}
        rows = "".join(f'{key} = "{value}"\n' for key, value in power.items())
        text = engine_text(**SIZE, gas=CYCLE, case=f'[power]\n{rows}flywheel = "balance"\n')
        assert any("ask about pressures" in flag.text for flag in screening_of(text).flags) is asked


def test_equivalent_inertia_of_a_cylinder():
    # m R² (1/2 + λ²/8 + λ⁴/16 + …), λ = 0.25: 0.50806661517 (quadrature of the mean of x'²).
    text = engine_text(**{"stroke": "190 mm", "rod": "380 mm", "reciprocating-mass": "9.4 kg"})
    machine = train(text).machines[0]
    found = reciprocating_inertia(machine, machine.cylinders[0])
    assert found == pytest.approx(9.4 * RADIUS**2 * 0.50806661517, rel=1e-10)


SIDE = {"clearance": "12 %", "suction": "1 bar", "discharge": "4 bar", "exponent": 1.3}


def compressor_text(*cylinders, case="", **more):
    shared = {"kind": "reciprocating-compressor", "stroke": "190 mm", "rod": "475 mm", "cylinders": cylinders, **more}
    stations = {"motor": 20.0, "throw1": 2.0, "throw2": 2.0}
    shafts = {"a": ("motor", "throw1", 4e6), "b": ("throw1", "throw2", 6e6)}
    return train_text(stations, shafts=shafts, machines={"c": shared}) + case


def double_acting(at, angle, **more):
    side = {"at": at, "dead-centre": f"{angle} deg", "bore": "300 mm", "piston-rod": "50 mm"}
    return {**side, "head-end": SIDE, "crank-end": SIDE, **more}


def test_a_double_acting_compressor_absorbs_the_work_of_both_sides():
    text = compressor_text(double_acting("throw1", 0), double_acting("throw2", 90))
    items = torques(text)
    drawn = 1 + 0.12 - 0.12 * 4 ** (1 / 1.3)
    work = 1.3 / 0.3 * 1e5 * drawn * (4 ** (0.3 / 1.3) - 1)
    area, rod = math.pi / 4 * 0.3**2, math.pi / 4 * 0.05**2
    expected = -(2 * area - rod) * 2 * RADIUS * work / (2 * math.pi)
    assert [item.mean_nm for item in items] == pytest.approx([expected] * 2, rel=1e-6)


def test_a_double_acting_compressor_without_rod_area_pushes_twice_a_turn():
    # λ → small: both sides act alike half a turn apart, so odd orders nearly cancel, even ones nearly double.
    single = {"at": "throw1", "dead-centre": "0 deg", "bore": "300 mm", "head-end": SIDE}
    both = {**single, "crank-end": SIDE}
    one, two = (torques(compressor_text(item, rod="950 mm"))[0].gas_nm for item in (single, both))
    assert abs(two[1]) > 1.8 * abs(one[1])
    assert abs(two[2]) < 0.3 * abs(one[2])


def test_unlike_cylinders_of_a_compressor_weigh_by_their_torque():
    text = compressor_text(double_acting("throw1", 0), double_acting("throw2", 90, bore="180 mm"))
    result = screening_of(text)
    values = np.array([item.torque_nm[1] for item in torques(text)])
    angles = np.array([result.modes[0].referred_shape[at] for at in ("throw1", "throw2")])
    pair = next(item for item in result.interferences if item.source == "c order-2" and item.mode == 1)
    assert pair.excitability == pytest.approx(abs(np.sum(angles * values)) / np.sum(np.abs(values)), abs=1e-12)
    assert result.source("c order-2").major == (abs(np.sum(values)) >= 0.5 * np.sum(np.abs(values)))


def test_a_compressor_card_holds_what_its_valves_do(tmp_path):
    # The ideal card written out as a card gives the torques of the ideal card.
    angles = np.arange(0, 360.5, 0.5)
    ideal = train(compressor_text({"at": "throw1", "dead-centre": "0 deg", "bore": "300 mm", "head-end": SIDE}))
    pressure = end_pressure(ideal.machines[0].cylinders[0].head_end, 0.2, False)[::20].tolist()
    rows = [f"{angle}, {value!r}" for angle, value in zip(angles.tolist(), [*pressure, pressure[0]], strict=True)]
    (tmp_path / "head.csv").write_text("\n".join(["angle [deg], pressure [Pa]", *rows]))
    item = {"at": "throw1", "dead-centre": "0 deg", "bore": "300 mm", "head-end": {"indicator": "head.csv"}}
    (tmp_path / "t.toml").write_text(compressor_text(item))
    found = cylinder_torques(load(tmp_path / "t.toml").machines[0], OMEGA)[0].gas_nm
    expected = cylinder_torques(ideal.machines[0], OMEGA)[0].gas_nm
    assert found == pytest.approx(expected, abs=1e-3 * np.max(np.abs(expected)))


def test_an_unloaded_cylinder_of_a_compressor_makes_no_gas_torque():
    text = compressor_text(
        double_acting("throw1", 0, **{"reciprocating-mass": "90 kg"}),
        double_acting("throw2", 90),
        **{"dead-cylinders": [1]},
    )
    first, second = torques(text)
    assert np.all(first.gas_nm == 0)
    assert np.max(np.abs(first.inertia_nm)) > 100
    assert second.inertia_nm is None
    assert np.max(np.abs(second.gas_nm)) > 100


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"head-end": {**SIDE, "discharge": "0.9 bar"}}, "not above the suction pressure"),
        ({"head-end": {"clearance": "12 %"}}, "suction is missing"),
        ({"head-end": {**SIDE, "clearance": "0.01 %"}}, "0.5 % to 300 % of the swept volume"),
        ({"dead-centre": "400 deg"}, "lie beyond a turn"),
        ({"at": "throw9"}, "there is no station of this name"),
        ({"piston-rod": "290 mm"}, "nearly as thick as the bore"),
    ],
)
def test_bad_compressor_data_are_refused(change, words):
    assert words in refusal(compressor_text({**double_acting("throw1", 0), **change}))


def test_orders_of_a_train_without_engine_or_of_an_unknown_one_are_refused():
    plain = screening_of(train_text({"a": 1.0, "b": 2.0}, shafts={"s": ("a", "b", 1e5)}))
    with pytest.raises(OrdersError, match="no reciprocating-engine"):
        order_study(plain)
    with pytest.raises(OrdersError, match='did you mean "engine"'):
        order_study(screening_of(engine_text()), "engin")


def test_mode_sums_are_the_phase_vector_sums_of_the_shape():
    # |Σ θ_i exp(j n φ_i)|: Den Hartog, Mechanical Vibrations, ch. 5.
    study = order_study(screening_of(engine_text()))
    mode = study.modes[0]
    shape = study.screening.mode(mode).referred_shape
    for row in study.rows:
        parts = [
            shape[f"throw{i}"] * cmath.exp(1j * row.order * math.radians(angle))
            for i, angle in enumerate(FIRING, start=1)
        ]
        assert row.mode_sums[mode] == pytest.approx(abs(sum(parts)), abs=1e-12)


def test_the_file_names_a_missing_card_as_a_problem_of_the_train():
    with pytest.raises(TrainFileError, match=r"gas\.indicator"):
        train(engine_text(**SIZE, gas={"indicator": "card.csv"}))
