"""Couplings whose stiffness follows mean torque and temperature, against closed forms of two discs."""

from __future__ import annotations

import math

import numpy as np
import pytest

from quillshaft.assess.along import torque_share
from quillshaft.assess.screening import screen_alone, screen_temperatures
from quillshaft.elements.coupling import coupling_loss_factor, coupling_stiffness
from quillshaft.graph.build import build_graph
from quillshaft.graph.states import with_stiffness
from quillshaft.train.basic_model import table_value
from quillshaft.train.coupling_model import Coupling
from quillshaft.train.model import Power
from quillshaft.train.problems import TrainFileError
from trains import train

RPM = 30.0 / math.pi
J1, J2 = 12.0, 5.0

TWO_DISCS = """
schema = 1
[train]
title = "two discs"
units = "SI"
[operation]
speed-at = "motor"
rated = "1500 rpm"
range = ["600 rpm", "1500 rpm"]
[power]
motor = "300 kW"
load = "balance"
law = "square"
[stations]
motor = { inertia = "12 kg m^2" }
load = { inertia = "5 kg m^2" }
[couplings.flex]
kind = "elastomer"
between = ["motor", "load"]
stiffness = { "0 N m" = "30 kN m/rad", "1 kN m" = "50 kN m/rad", "2 kN m" = "90 kN m/rad" }
temperature = { "-20 degC" = 1.3, "30 degC" = 1.0, "80 degC" = 0.7 }
damping-temperature = { "30 degC" = 1.0, "80 degC" = 0.5 }
psi = 1.0
[criteria]
separation = "10 %"
[assumptions]
tolerances = "none"
"""


def stiffness_by_hand(torque_nm: float) -> float:
    """The table above, straight between its points [N·m/rad]."""
    return float(np.interp(torque_nm, [0.0, 1000.0, 2000.0], [30e3, 50e3, 90e3]))


def frequency_by_hand(stiffness: float) -> float:
    """Two discs, free-free [Hz]. Den Hartog, Mechanical Vibrations: ω² = k (1/J1 + 1/J2)."""
    return math.sqrt(stiffness * (1 / J1 + 1 / J2)) / (2 * math.pi)


def torque_by_hand(speed_rpm: float) -> float:
    """Square law: the torque as the square of the speed, 300 kW at 1500 rpm."""
    return 300e3 / (1500.0 / RPM) * (speed_rpm / 1500.0) ** 2


def test_a_table_is_straight_between_its_points_and_held_beyond_them() -> None:
    points = ((0.0, 1.0), (10.0, 3.0), (20.0, 4.0))
    found = [table_value(points, at) for at in (-5.0, 0.0, 2.5, 10.0, 15.0, 20.0, 99.0)]
    assert found == pytest.approx([1.0, 1.0, 1.5, 3.0, 3.5, 4.0, 4.0], rel=1e-15)


def test_stiffness_takes_the_magnitude_of_torque_and_the_factor_of_temperature() -> None:
    coupling = Coupling(
        "c", ("a", "b"), 1.0, (0.0, 0.0), loss_factor=0.2,
        stiffness_points=((0.0, 1e4), (100.0, 3e4)),
        temperature_points=((303.15, 1.0), (353.15, 0.6)),
        damping_points=((303.15, 1.0), (353.15, 0.5)),
    )  # fmt: skip
    assert coupling_stiffness(coupling, -50.0, 303.15) == pytest.approx(2e4, rel=1e-15)
    assert coupling_stiffness(coupling, 50.0, 328.15) == pytest.approx(2e4 * 0.8, rel=1e-14)
    assert coupling_loss_factor(coupling, 353.15) == pytest.approx(0.1, rel=1e-14)


def test_frequency_at_rated_speed_is_that_of_the_rated_torque() -> None:
    result = screen_alone(train(TWO_DISCS))
    expected = frequency_by_hand(stiffness_by_hand(torque_by_hand(1500.0)))
    assert result.modes[0].frequency_hz == pytest.approx(expected, rel=1e-13)


def test_frequency_along_the_speed_follows_the_load_law() -> None:
    along = screen_alone(train(TWO_DISCS)).modes[0].frequency_along
    assert along is not None
    assert len(along) > 60
    for speed_rpm, nominal, low, high in along:
        expected = frequency_by_hand(stiffness_by_hand(torque_by_hand(speed_rpm)))
        assert nominal == pytest.approx(expected, rel=1e-12)
        assert low == high == pytest.approx(nominal, rel=1e-12)


def test_critical_speed_of_a_bent_line_is_the_root_of_both_sides_at_one_speed() -> None:
    result = screen_alone(train(TWO_DISCS))
    pair = next(item for item in result.interferences if item.source == "motor 1x")
    low, high = 300.0, 1500.0  # bisection on f(N) − N/60 by hand
    for _ in range(200):
        middle = (low + high) / 2
        gap = frequency_by_hand(stiffness_by_hand(torque_by_hand(middle))) - middle / 60
        low, high = (middle, high) if gap > 0 else (low, middle)
    assert pair.critical_speed_rpm == pytest.approx(low, rel=1e-9)
    assert pair.verdict == "crossing"


def test_margin_takes_both_sides_at_the_same_speed() -> None:
    text = TWO_DISCS.replace('range = ["600 rpm", "1500 rpm"]', 'range = ["1200 rpm", "1500 rpm"]')
    result = screen_alone(train(text))
    pair = next(item for item in result.interferences if item.source == "motor 2x")
    margins = [
        frequency_by_hand(stiffness_by_hand(torque_by_hand(speed))) / (speed / 30) - 1
        for speed in np.linspace(1200, 1500, 3001)
    ]
    expected = min(margins, key=abs)
    assert pair.margin == pytest.approx(expected, abs=2e-6)  # between speeds of the track both are straight


def test_load_laws() -> None:
    rated = 100.0
    shares = ((50.0, 0.1), (100.0, 1.0))
    laws = {"square": 0.25, "constant-torque": 1.0, "constant-power": 2.0, None: 1.0}
    for law, expected in laws.items():
        assert torque_share(Power({}, law), 50.0, rated) == pytest.approx(expected, rel=1e-15)
    assert torque_share(Power({}, shares), 50.0, rated) == pytest.approx(0.2, rel=1e-15)
    assert torque_share(Power({}, shares), 75.0, rated) == pytest.approx(0.55 / 0.75, rel=1e-15)


def test_cold_reference_and_hot_stand_in_the_ratio_of_the_roots_of_their_factors() -> None:
    states = screen_temperatures(train(TWO_DISCS))
    reference = states["30 °C"].modes[0].frequency_hz
    assert states["cold"].modes[0].frequency_hz == pytest.approx(reference * math.sqrt(1.3), rel=1e-12)
    assert states["hot"].modes[0].frequency_hz == pytest.approx(reference * math.sqrt(0.7), rel=1e-12)
    assert states["hot"].modes[0].damping_ratio == pytest.approx(0.5 * states["30 °C"].modes[0].damping_ratio)


GEARED_PUMP = """
schema = 1
[train]
title = "geared pump, rubber coupling"
units = "SI"
[operation]
speed-at = "motor"
rated = "1480 rpm"
speed-band = "0 %"
[stations]
motor = { inertia = "0.5 kg m^2" }
pinion = { inertia = 0 }
wheel = { inertia = 0 }
pump = { inertia = "20 kg m^2" }
[shafts]
pump-shaft = { between = ["wheel", "pump"], stiffness = "300 kN m/rad" }
[couplings]
rubber = { kind = "elastomer", between = ["motor", "pinion"], stiffness = "STIFF", temperature = TABLE }
[gears]
reduction = { between = ["pinion", "wheel"], teeth = [20, 80] }
[assumptions]
tolerances = "none"
"""


def test_softening_rubber_walks_a_mode_onto_1x_pump_at_the_temperature_of_the_hand_calculation() -> None:
    """Geared two discs (Thomson, Theory of Vibration, sec. 12.10): k = 1/(1/k1 + 1/(n² k2)), J2 referred by n²."""
    n, k2 = 0.25, 300e3
    wanted = (1480.0 / 60 * n) * 2 * math.pi  # 1x pump [rad/s]
    combined = wanted**2 / (1 / 0.5 + 1 / (n**2 * 20.0))
    k1_wanted = 1 / (1 / combined - 1 / (n**2 * k2))
    k1 = k1_wanted / 0.8  # meets at a factor of 0.8
    table = '{ "30 degC" = 1.0, "90 degC" = 0.55 }'
    temperature = 30.0 + (1.0 - 0.8) / (1.0 - 0.55) * 60.0  # by hand, °C
    text = GEARED_PUMP.replace("STIFF", f"{k1!r} N m/rad").replace("TABLE", table)

    def margin(celsius: float) -> float:
        result = screen_alone(train(text), celsius + 273.15)
        return next(pair for pair in result.interferences if pair.source == "wheel 1x").margin

    assert abs(margin(temperature)) < 1e-9
    assert margin(temperature - 0.01) > 1e-6
    assert margin(temperature + 0.01) < -1e-6


def test_with_stiffness_scales_every_corner_and_refuses_a_link_that_is_no_spring() -> None:
    graph = build_graph(train(GEARED_PUMP.replace("STIFF", "10 kN m/rad").replace("TABLE", '{ "0 degC" = 1.0, "50 degC" = 0.9 }')))  # fmt: skip # noqa: E501
    other = with_stiffness(graph, {"pump-shaft": 600e3})
    place = graph.link("pump-shaft").index
    for network, changed in ((graph.network, other.network), (graph.soft_heavy, other.soft_heavy)):
        assert changed.spring_nm_rad[place] == pytest.approx(2 * network.spring_nm_rad[place], rel=1e-15)
    with pytest.raises(KeyError, match="reduction"):
        with_stiffness(graph, {"reduction": 1.0})


def test_a_stiffness_against_torque_needs_power_and_over_a_wide_range_a_law() -> None:
    without_power = TWO_DISCS.split("[power]", maxsplit=1)[0] + "[stations]" + TWO_DISCS.split("[stations]")[1]
    with pytest.raises(TrainFileError, match="no power is given"):
        screen_alone(train(without_power))
    with pytest.raises(TrainFileError, match="how does the load follow speed"):
        screen_alone(train(TWO_DISCS.replace('law = "square"\n', "")))


def test_a_table_of_one_point_or_with_a_wrong_unit_is_refused() -> None:
    one = TWO_DISCS.replace('{ "0 N m" = "30 kN m/rad", "1 kN m" = "50 kN m/rad", "2 kN m" = "90 kN m/rad" }', '{ "1 kN m" = "5 kN m/rad" }')  # fmt: skip # noqa: E501
    with pytest.raises(TrainFileError, match="one point"):
        train(one)
    with pytest.raises(TrainFileError, match="stiffness"):
        train(TWO_DISCS.replace('"50 kN m/rad"', '"50 kN m"'))
