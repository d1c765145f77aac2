"""Lines of converters, synchronous starts and networks: each frequency by hand."""

from __future__ import annotations

import math

import pytest

from quillshaft.sources.electrical import harmonic_multiples, start_speed_rad_s
from quillshaft.sources.line import frequencies_over, meeting_speeds
from trains import RPM, refusal, sources_of, train_text

CONVERTER = {"kind": "converter-fed-motor", "at": "rotor", "poles": 4}
SYNCHRONOUS = {"kind": "synchronous-motor", "at": "rotor", "poles": 4, "supply": "60 Hz"}


def text(machine, rated="1800 rpm", **tables):
    return train_text(
        {"rotor": 10.0, "load": 20.0},
        shafts={"shaft": ("rotor", "load", 1e6)},
        machines={"drive": machine},
        operation={"rated": rated},
        **tables,
    )


def source(machine, tail, **keys):
    found = {item.name: item for item in sources_of(text({**machine, **keys})).active}
    return found[f"drive {tail}"]


def tails(machine, **keys):
    names = [item.name for item in sources_of(text({**machine, **keys})).active]
    return [name.removeprefix("drive ") for name in names if name.startswith("drive ")]


def at_rpm(found, rpm):
    return frequencies_over(found, rpm * RPM, rpm * RPM)[0]


def test_without_keys_the_harmonics_are_those_of_a_six_pulse_bridge():
    assert tails(CONVERTER) == ["out-1x", "out-2x", "out-6x", "out-12x"]


def test_harmonics_up_to_the_stated_order_are_multiples_of_the_pulse_number():
    # Common practice: 6k for a six-pulse, 12k for a twelve-pulse bridge; 1 a DC offset, 2 an unbalance.
    assert tails(CONVERTER, harmonics=30) == [f"out-{k}x" for k in (1, 2, 6, 12, 18, 24, 30)]
    assert tails(CONVERTER, pulse=12, harmonics=40) == [f"out-{k}x" for k in (1, 2, 12, 24, 36)]
    assert harmonic_multiples(24, 48) == (1, 2, 24, 48)


@pytest.mark.parametrize(("tail", "rpm"), [("out-6x", 450.0), ("out-12x", 225.0)])
def test_a_mode_at_90_hz_meets_6_and_12_times_the_output_frequency(tail, rpm):
    # Four poles: f_out = 2 N; 6 · 2 · 7.5 rev/s = 12 · 2 · 3.75 rev/s = 90 Hz (by hand).
    assert meeting_speeds(source(CONVERTER, tail), 90.0) == pytest.approx((rpm * RPM,), rel=1e-12)


def test_sidebands_of_the_carrier():
    # f_out = 2 · 25 + 0.5 = 50.5 Hz at 1500 rpm, carrier 2.5 kHz: m = 1 with n = 3, 9; m = 2 with n = 0, 6.
    keys = {"switching": "2.5 kHz", "slip": "0.5 Hz"}
    expected = {
        "switch-1x+out-3x": 2500 + 151.5,
        "switch-1x-out-3x": 2500 - 151.5,
        "switch-1x+out-9x": 2500 + 454.5,
        "switch-1x-out-9x": 2500 - 454.5,
        "switch-2x": 5000.0,
        "switch-2x+out-6x": 5000 + 303.0,
        "switch-2x-out-6x": 5000 - 303.0,
    }
    assert [tail for tail in tails(CONVERTER, **keys) if tail.startswith("switch")] == list(expected)
    for tail, hz in expected.items():
        assert at_rpm(source(CONVERTER, tail, **keys), 1500) == pytest.approx(hz, rel=1e-12)


def test_a_low_carrier_folds_its_lower_sideband_at_zero():
    # 9 · 50 Hz = 450 Hz above a carrier of 400 Hz: the line comes back at 50 Hz.
    assert at_rpm(source(CONVERTER, "switch-1x-out-9x", switching="400 Hz"), 1500) == pytest.approx(50.0, rel=1e-12)


def test_interharmonics_of_the_line_side_with_the_band_of_the_supply_alone():
    # 6 · 60 Hz ± 6 · 50 Hz at 1500 rpm: 660 and 60 Hz; ±2 % of the supply moves either by 7.2 Hz.
    keys = {"interharmonics": [{"line": 6, "out": 6}], "supply": "60 Hz"}
    assert "line-1x" not in tails(CONVERTER, **keys)
    for tail, hz in (("beat-line-6x+out-6x", 660.0), ("beat-line-6x-out-6x", 60.0)):
        low, high = frequencies_over(source(CONVERTER, tail, **keys), 1500 * RPM, 1500 * RPM)
        assert (low, high) == pytest.approx((hz - 7.2, hz + 7.2), rel=1e-12)


def test_a_synchronous_start_runs_from_twice_line_frequency_to_zero():
    # Journal of Engineering for Power 82 (1960) 215: 2 s f; 60 Hz: 120, 60, 12 Hz at s = 1, 0.5, 0.1 (1800 rpm).
    found = source(SYNCHRONOUS, "slip-2x")
    assert found.when == "start"
    for slip, hz in ((1.0, 120.0), (0.5, 60.0), (0.1, 12.0), (0.0, 0.0)):
        assert at_rpm(found, 1800 * (1 - slip)) == pytest.approx(hz, abs=1e-9)
    assert at_rpm(source(SYNCHRONOUS, "slip-1x"), 900) == pytest.approx(30.0, abs=1e-9)


def test_a_start_passes_18_hz_at_1530_rpm():
    # s = 18 / 120 = 0.15; 1800 · 0.85 = 1530 rpm.
    assert start_speed_rad_s(18.0, 4, 60.0) == pytest.approx(1530.0 * RPM, rel=1e-12)
    assert start_speed_rad_s(18.0, 4, 60.0, 1) == pytest.approx(1800.0 * 0.7 * RPM, rel=1e-12)
    assert start_speed_rad_s(121.0, 4, 60.0) is None


def test_a_motor_started_by_a_converter_has_no_slip_lines():
    assert tails(SYNCHRONOUS, start="converter") == ["line-1x", "line-2x"]


@pytest.mark.parametrize("kind", ["synchronous-motor", "generator"])
def test_a_network_resonance_acts_at_its_complement_and_at_the_sum(kind):
    # 60 Hz with a network at 25 Hz: 35 and 85 Hz, each moved by the 1.2 Hz that ±2 % of the supply are.
    machine = {**SYNCHRONOUS, "kind": kind, "grid-resonance": "25 Hz"}
    for tail, hz in (("grid-complement", 35.0), ("grid-sum", 85.0)):
        low, high = frequencies_over(source(machine, tail), 180.0, 190.0)
        assert (low, high) == pytest.approx((hz - 1.2, hz + 1.2), rel=1e-12)


@pytest.mark.parametrize(
    ("machine", "keys", "said"),
    [
        (CONVERTER, {"harmonics": 4}, "below the first harmonic"),
        (CONVERTER, {"pulse": 12, "harmonics": 6}, "12 and more"),
        (CONVERTER, {"pulse": 9}, "6 | 12 | 24"),
        (CONVERTER, {"switching": "2.5 Hz"}, "100 Hz to 100 kHz"),
        (CONVERTER, {"switching": "2500 rpm"}, "switching"),
        (CONVERTER, {"control-bandwidth": "20 kHz"}, "up to 1 kHz"),
        (CONVERTER, {"interharmonics": [{"line": 6, "out": 6}]}, "needs the supply frequency"),
        (CONVERTER, {"interharmonics": [{"line": 0, "out": 0}], "supply": "50 Hz"}, "both multiples are 0"),
        (SYNCHRONOUS, {"grid-resonance": "70 Hz"}, "up to 60 Hz"),
        (SYNCHRONOUS, {"start": "soft"}, "asynchronous | converter"),
        ({"kind": "generator", "at": "rotor", "poles": 4}, {"grid-resonance": "20 Hz"}, "needs the supply frequency"),
    ],
)
def test_what_no_machine_can_have_is_refused_with_what_is_allowed(machine, keys, said):
    assert said in refusal(text({**machine, **keys}))


def test_criteria_can_name_the_new_families():
    machine = {**CONVERTER, "switching": "2 kHz", "supply": "50 Hz", "interharmonics": [{"line": 6, "out": 6}]}
    separation = {"switch": "3 %", "beat": "4 %", "slip": "5 %", "grid": "6 %"}
    found = sources_of(text(machine, criteria={"separation": separation})).active
    labels = {item.name: item.labels[0] for item in found}
    assert "switch" in labels["drive switch-1x+out-3x"]
    assert "beat" in labels["drive beat-line-6x-out-6x"]


def test_start_lines_stand_on_the_speed_of_the_motor():
    # The synchronous speed by hand: f/p = 60/2 = 30 rev/s, where the line meets zero.
    found = source(SYNCHRONOUS, "slip-2x")
    assert -found.frequency_hz / found.order == pytest.approx(30.0, rel=1e-14)
    assert math.isclose(found.speed_ratio, 1.0)
