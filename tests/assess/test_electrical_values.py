"""Springs, dampers and questions from electrical data, as a screening and the report's data table give them."""

from __future__ import annotations

import math

import pytest

from quillshaft.assess.screening import screen
from quillshaft.present.derived_rows import derived_rows
from quillshaft.present.report.data import data_parts
from trains import refusal, train, train_text

SHAFTS = {"shaft": ("rotor", "load", 1e6)}


def text(machine, stations=None, rated="1500 rpm", **tables):
    machines = {"drive": {"at": "rotor", **machine}, **tables.pop("machines", {})}
    return train_text(
        stations or {"rotor": 40.0, "load": 25.0},
        shafts=SHAFTS,
        machines=machines,
        operation={"rated": rated},
        **tables,
    )


def derived(content, **keys):
    """Value by (element, quantity)."""
    return {(item.element, item.quantity): item.value for item in screen(train(content, **keys)).derived}


SYNCHRONOUS = {"kind": "synchronous-motor", "poles": 4, "supply": "50 Hz"}
TIE = {"grid": {"at": "rotor", "synchronizing": "45 kW/deg"}}


def test_synchronizing_power_ties_the_train_to_the_grid_and_gives_its_low_mode():
    # k = p² P_s/(2π f) = 4 · 45e3 · 180/π / (2π 50) by hand; two inertias, one spring to ground, one between: the
    # roots of J1 J2 ω⁴ − (k J2 + c (J1 + J2)) ω² + k c = 0 (two degrees of freedom).
    tie, shaft, one, two = 4.0 * 45e3 * 180.0 / math.pi / (100.0 * math.pi), 1e6, 40.0, 25.0
    a, b, c = one * two, tie * two + shaft * (one + two), tie * shaft
    low = math.sqrt(2.0 * c / (b + math.sqrt(b * b - 4.0 * a * c))) / (2.0 * math.pi)
    found = screen(train(text(SYNCHRONOUS, ties=TIE)))
    assert found.modes[0].frequency_hz == pytest.approx(low, rel=1e-12)
    values = {item.quantity: item.value for item in found.derived}
    assert values["stiffness to the grid"] == pytest.approx(tie, rel=1e-12)
    assert values["swing against the grid"] == pytest.approx(math.sqrt(tie / 65.0) / (2.0 * math.pi), rel=1e-12)
    assert values["swing against the grid"] == pytest.approx(low, rel=0.02)


def test_a_tie_takes_poles_and_supply_of_its_machine_as_an_assumption_and_its_own_without_one():
    assert [item.value for item in train(text(SYNCHRONOUS, ties=TIE)).assumed if item.element == "ties.grid"] == [
        "4 poles and 50 Hz"
    ]
    own = {"grid": {**TIE["grid"], "poles": 4, "supply": "50 Hz"}}
    stated = train(text({"kind": "other"}, ties=own))
    assert not [item for item in stated.assumed if item.element == "ties.grid"]
    assert derived(text({"kind": "other"}, ties=own)) == derived(text(SYNCHRONOUS, ties=TIE))


def test_a_tie_says_what_its_synchronizing_power_lacks():
    assert "poles and supply" in refusal(text({"kind": "other"}, ties=TIE))
    assert "supply" in refusal(text({"kind": "generator", "poles": 4}, ties=TIE))
    both = {"grid": {**TIE["grid"], "stiffness": "1 MN m/rad"}}
    assert "exactly one of stiffness | synchronizing" in refusal(text(SYNCHRONOUS, ties=both))


def test_a_case_replaces_synchronizing_power_by_a_stiffness():
    cases = {"soft": {"ties": {"grid": {"stiffness": "1 kN m/rad"}}}}
    laid = train(text(SYNCHRONOUS, ties=TIE, cases=cases), ("soft",))
    assert laid.ties[0].stiffness_nm_rad == 1000.0
    assert laid.ties[0].synchronizing is None


def test_an_induction_motor_lists_damping_and_spring_from_power_breakdown_torque_and_speed():
    # 4 poles at 50 Hz: 157.08 rad/s; rated 1480 rpm: s = 1/75; T = 300 kW / 154.99 rad/s; T_k = 2.5 T;
    # s_k = s (2.5 + √5.25); slow damping 2 T_k/(s_k Ω) (1 − x²)/(1 + x²)², x = s/s_k (Kloss 1916, from memory).
    motor = {"kind": "induction-motor", "poles": 4, "supply": "50 Hz", "breakdown-torque": "250 %"}
    power = {"rotor": "300 kW", "load": "balance"}
    values = derived(text(motor, rated="1480 rpm", power=power))
    omega, slip = 50.0 * math.pi, 1.0 / 75.0
    torque = 2.5 * 300e3 / (1480.0 * math.pi / 30.0)
    slip_k = slip * (2.5 + math.sqrt(5.25))
    x = slip / slip_k
    slow = 2.0 * torque / (slip_k * omega) * (1 - x * x) / (1 + x * x) ** 2
    assert values["machines.drive", "breakdown slip"] == pytest.approx(slip_k, rel=1e-9)
    assert values["machines.drive", "damping of slow swings"] == pytest.approx(slow, rel=1e-9)
    mode = screen(train(text(motor, rated="1480 rpm", power=power))).modes[0].frequency_hz
    lagging = 2.0 * math.pi * mode / (slip_k * 100.0 * math.pi)
    spring = 4.0 * torque * lagging**2 / (1.0 + lagging**2)
    where = f"electrical spring at mode 1 ({mode:.2f} Hz)"
    assert values["machines.drive", where] == pytest.approx(spring, rel=1e-9)


def test_stated_breakdown_slip_and_torques_win_over_what_is_worked_out():
    keys = {"breakdown-torque": "5 kN m", "breakdown-slip": "8 %"}
    motor = {"kind": "induction-motor", "poles": 4, "supply": "50 Hz", **keys}
    values = derived(text(motor, rated="1480 rpm"))
    assert ("machines.drive", "breakdown slip") not in values
    x = (1.0 / 75.0) / 0.08
    slow = 2.0 * 5000.0 / (0.08 * 50.0 * math.pi) * (1 - x * x) / (1 + x * x) ** 2
    assert values["machines.drive", "damping of slow swings"] == pytest.approx(slow, rel=1e-9)


@pytest.mark.parametrize(("law", "per"), [("square", 2.0), ("constant-torque", 0.0), ("constant-power", -1.0)])
def test_the_load_law_gives_the_damping_of_the_station_that_absorbs(law, per):
    power = {"rotor": "300 kW", "load": "balance", "law": law}
    values = derived(text({"kind": "other"}, power=power))
    omega = 1500.0 * math.pi / 30.0
    assert values == {
        ("stations.load", "damping of the load"): pytest.approx(per * 300e3 / omega**2, rel=1e-9, abs=1e-9)
    }


@pytest.mark.parametrize("kind", ["centrifugal-pump", "compressor", "fan", "propeller", "other"])
def test_a_stated_load_slope_stands_in_place_of_the_law(kind):
    machines = {"driven": {"kind": kind, "at": "load", "load-slope": "80 N m s/rad"}}
    power = {"rotor": "300 kW", "load": "balance", "law": "square"}
    values = derived(text({"kind": "other"}, machines=machines, power=power))
    assert values == {("machines.driven", "damping of the load"): 80.0}


def flags(content):
    return [flag.text for flag in screen(train(content)).flags if flag.element == "machines.drive"]


def test_a_lightly_damped_mode_inside_the_control_bandwidth_is_asked_about():
    # Mode 1 of 40 and 25 kg·m² on 1 MN·m/rad: √(1e6 · 65/1000)/2π = 40.6 Hz.
    drive = {"kind": "converter-fed-motor", "poles": 4, "control-bandwidth": "45 Hz"}
    assert any("inside the drive's control bandwidth of 45 Hz" in flag for flag in flags(text(drive)))
    assert not flags(text({**drive, "control-bandwidth": "35 Hz"}))
    damped = {"shaft": {"between": ["rotor", "load"], "stiffness": 1e6, "loss-factor": 0.2}}
    heavy = train_text({"rotor": 40.0, "load": 25.0}, shafts=damped, machines={"drive": {**drive, "at": "rotor"}})
    assert not flags(heavy)


def test_a_synchronous_motor_asks_for_its_tie_and_for_the_torque_where_its_start_passes_a_mode():
    # Mode 1 at √65000/2π = 40.58 Hz: 2 s · 50 Hz passes it at s = 0.4058, 891 rpm of 1500.
    said = flags(text(SYNCHRONOUS))
    assert any("no tie holds it to the grid" in flag for flag in said)
    assert any("mode 1 (40.58 Hz) at 891 rpm" in flag for flag in said)
    assert not any("no tie" in flag for flag in flags(text(SYNCHRONOUS, ties=TIE)))
    assert not any("starts" in flag for flag in flags(text({**SYNCHRONOUS, "start": "converter"}, ties=TIE)))


CONVERTER = {
    "kind": "converter-fed-motor",
    "poles": 4,
    "supply": "50 Hz",
    "pulse": 12,
    "harmonics": 36,
    "switching": "2.5 kHz",
    "interharmonics": [{"line": 6, "out": 12}],
    "control-bandwidth": "19 Hz",
}
MOTOR = {"kind": "induction-motor", "poles": 4, "supply": "50 Hz", "breakdown-torque": "240 %"}
SHOWN = [
    (CONVERTER, ["12-pulse", "up to 36", "2500 Hz", "6 f line ± 12 f out", "19 Hz"]),
    ({**MOTOR, "breakdown-slip": "9 %", "rated-torque": "2.1 kN m"}, ["240 % of rated", "9 %", "2100 N·m"]),
    ({**SYNCHRONOUS, "grid-resonance": "31 Hz", "start": "converter"}, ["31 Hz", "start: converter"]),
    ({"kind": "fan", "load-slope": "77 N m s/rad"}, ["load slope 77 N·m·s/rad"]),
]


@pytest.mark.parametrize(("machine", "words"), SHOWN)
def test_every_electrical_key_stands_in_the_data_table(machine, words):
    content = text(machine, rated="1490 rpm" if machine["kind"] == "induction-motor" else "1500 rpm")
    shown = repr(data_parts(screen(train(content))))
    for word in words:
        assert word in shown


def test_synchronizing_power_stands_in_the_data_table_and_what_follows_from_it_too():
    screening = screen(train(text(SYNCHRONOUS, ties=TIE)))
    shown = repr(data_parts(screening))
    assert "synchronizing power 45 kW per electrical degree, 4 poles, 50 Hz" in shown
    assert "swing against the grid" in shown
    assert [row[3] for row in derived_rows(screening)] == ["MN·m/rad", "Hz"]
