"""A fluid coupling: it joins speeds over its slip, carries torque, and separates the train torsionally."""

from __future__ import annotations

import math

import pytest

from quillshaft.assess.mean_torque import fluid_torques
from quillshaft.graph.build import build_graph
from quillshaft.graph.fluid import islands
from trains import duty, graph_of, omegas, refusal, screening_of, train, train_text

STATIONS = {"motor": 10.0, "impeller": 2.0, "runner": 3.0, "fan": 80.0}
SHAFTS = {"a": ("motor", "impeller", 1.2e6), "b": ("runner", "fan", 2.0e6)}
OIL = {"kind": "fluid", "between": ["impeller", "runner"], "slip": "4 %"}
RATED = 1500 * math.pi / 30


def fluid_train(power=None, oil=OIL, **tables):
    given = {} if power is None else {"power": power}
    return train_text(STATIONS, shafts=SHAFTS, couplings={"oil": oil}, **given, **tables)


def two_discs(first, second, stiffness):
    return math.sqrt(stiffness * (first + second) / (first * second))


def test_each_side_has_the_modes_that_it_has_alone():
    expected = sorted((two_discs(10.0, 2.0, 1.2e6), two_discs(3.0, 80.0, 2.0e6)))
    assert omegas(fluid_train()) == pytest.approx(expected, rel=1e-12)
    assert graph_of(fluid_train()).network.rigid_motions == 2


def test_half_inertias_count_with_the_two_stations():
    oil = {**OIL, "half-inertias": ["1 kg m^2", "1.5 kg m^2"]}
    expected = sorted((two_discs(10.0, 3.0, 1.2e6), two_discs(4.5, 80.0, 2.0e6)))
    assert omegas(fluid_train(oil=oil)) == pytest.approx(expected, rel=1e-12)


def test_the_far_side_turns_slower_by_the_slip():
    graph = graph_of(fluid_train())
    assert [float(ratio) for ratio in graph.speed_ratio] == [1.0, 1.0, 0.96, 0.96]
    silent = {key: value for key, value in OIL.items() if key != "slip"}
    assert float(graph_of(fluid_train(oil=silent)).speed_ratio[3]) == 0.97
    assert ("couplings.oil", "slip") in [(item.element, item.key) for item in train(fluid_train(oil=silent)).assumed]


@pytest.mark.parametrize("power", [{"motor": "500 kW", "fan": "balance"}, {"motor": "balance", "fan": "-480 kW"}])
def test_both_sides_carry_one_torque_and_the_slip_is_heat(power):
    result = screening_of(fluid_train(power))
    torque = 500e3 / RATED
    assert duty(result, "a").mean_torque_nm == pytest.approx(torque, rel=1e-12)
    assert duty(result, "b").mean_torque_nm == pytest.approx(torque, rel=1e-12)
    assert dict(result.station_power_w) == pytest.approx({"motor": 500e3, "fan": -480e3}, rel=1e-12)
    read = train(fluid_train(power))
    assert fluid_torques(read, build_graph(read)) == pytest.approx({"oil": torque}, rel=1e-12)


@pytest.mark.parametrize(("share", "flagged"), [(1.01, False), (0.99, True)])
def test_a_fluid_coupling_beyond_its_rated_torque_is_flagged(share, flagged):
    rated = share * 500e3 / RATED
    result = screening_of(fluid_train({"motor": "500 kW", "fan": "balance"}, oil={**OIL, "rated-torque": rated}))
    assert any("exceeds its rated" in flag.text for flag in result.flags) == flagged


def test_powers_that_close_without_the_heat_of_the_slip_are_refused():
    assert screening_of(fluid_train({"motor": "500 kW", "fan": "-480 kW"})).station_power_w
    assert "do not close" in refusal(fluid_train({"motor": "500 kW", "fan": "-500 kW"}))


def test_what_shakes_one_side_is_not_judged_against_the_modes_of_the_other():
    graph = graph_of(fluid_train())
    assert islands(graph) == (0, 0, 2, 2)
    shakers = {"x": {"at": "motor", "order": 4.5}, "y": {"at": "fan", "order": 5}, "z": {"at": "b", "order": 6}}
    result = screening_of(fluid_train(excitations=shakers))
    of_fan = next(mode.mode for mode in result.modes if mode.kinetic_energy["fan"] > 1e-3)
    judged = {(pair.mode, pair.source) for pair in result.interferences}
    assert {(of_fan, "y"), (of_fan, "z"), (3 - of_fan, "x")} <= judged
    assert not {(of_fan, "x"), (3 - of_fan, "y"), (3 - of_fan, "z"), (of_fan, "motor 1x")} & judged
    assert any("separates the train torsionally" in flag.text for flag in result.flags)


def test_sides_with_equal_frequencies_are_each_judged_against_their_own_sources():
    stations = {"a": 2.0, "b": 2.0, "c": 2.0, "d": 2.0}
    shafts = {"one": ("a", "b", 1e6), "two": ("c", "d", 1e6)}
    oil = {"kind": "fluid", "between": ["b", "c"], "slip": 0}
    shakers = {"x": {"at": "a", "order": 6}, "y": {"at": "d", "order": 6}}
    result = screening_of(train_text(stations, shafts=shafts, couplings={"oil": oil}, excitations=shakers))
    assert {pair.source for pair in result.interferences} >= {"x", "y"}


def test_a_train_without_one_is_judged_whole():
    text = train_text({"a": 1.0, "b": 2.0, "c": 3.0}, shafts={"s": ("a", "b", 1e5)}, couplings={"k": ("b", "c", 1e4)})
    assert islands(graph_of(text)) == (0, 0, 0)


def test_a_fluid_coupling_takes_no_stiffness_and_no_excitation_inside():
    assert "stiffness: is not a key" in refusal(fluid_train(oil={**OIL, "stiffness": 1e6}))
    assert 'slip = "70 %"' in refusal(fluid_train(oil={**OIL, "slip": "70 %"}))
    assert "nothing acts inside it" in refusal(fluid_train(excitations={"x": {"at": "oil", "order": 2}}))


def test_the_train_diagram_names_the_coupling_that_it_cannot_draw():
    from quillshaft.present.charts.train import train_diagram

    figure = train_diagram(screening_of(fluid_train()))
    text = " ".join(item.get_text() for axes in figure.axes for item in axes.texts)
    assert "oil: a fluid coupling from impeller to runner, which no spring joins" in " ".join(text.split())
