"""What shafts, gears and machines imply: each source's order and frequency by hand."""

from __future__ import annotations

import pytest

from quillshaft.sources.line import frequencies_over
from trains import RPM, refusal, sources_of, train_text

CHAIN = {"motor-core": 10.0, "motor-hub": 1.0, "pinion": 0.3, "wheel": 3.0, "impeller": 6.0}
SHAFTS = {"motor-end": ("motor-core", "motor-hub", 5e6), "wheel-shaft": ("wheel", "impeller", 3e6)}
COUPLINGS = {"flex": ("motor-hub", "pinion", 2e5)}
GEARS = {"reduction": ("pinion", "wheel", 25, 75)}


def chain(machines=None, rated="1500 rpm", **tables):
    operation = {"rated": rated, **tables.pop("operation", {})}
    return train_text(
        CHAIN,
        shafts=SHAFTS,
        couplings=COUPLINGS,
        gears=GEARS,
        machines=machines or {},
        operation=operation,
        **tables,
    )


def lines(text):
    """(order, frequency [Hz], speed ratio) by source name."""
    return {s.name: (s.order, round(s.frequency_hz, 12), round(s.speed_ratio, 12)) for s in sources_of(text).active}


def hz(text, name, rpm):
    """Lowest and highest frequency [Hz] of a source with `speed-at` at `rpm`."""
    source = next(s for s in sources_of(text).active if s.answers_to(name))
    return frequencies_over(source, rpm * RPM, rpm * RPM)


THIRD = round(1 / 3, 12)


def test_every_shaft_line_implies_1x_and_2x_named_after_its_first_station():
    # A coupling ends a line: motor-core with motor-hub, the pinion alone, the wheel with the impeller.
    assert lines(chain()) == {
        "motor-core 1x": (1, 0, 1.0),
        "motor-core 2x": (2, 0, 1.0),
        "pinion 1x": (1, 0, 1.0),
        "pinion 2x": (2, 0, 1.0),
        "wheel 1x": (1, 0, THIRD),
        "wheel 2x": (2, 0, THIRD),
        "reduction mesh": (25, 0, 1.0),
    }


def test_frequencies_of_shaft_and_mesh_at_1500_rpm():
    # 25 rev/s; wheel shaft 25/3 rev/s; mesh 25 · 25 = 75 · 25/3 = 625 Hz.
    assert hz(chain(), "motor-core 2x", 1500) == pytest.approx((50, 50), rel=1e-14)
    assert hz(chain(), "wheel 1x", 1500) == pytest.approx((25 / 3, 25 / 3), rel=1e-14)
    assert hz(chain(), "reduction mesh", 1500) == pytest.approx((625, 625), rel=1e-14)


@pytest.mark.parametrize(
    ("machine", "expected"),
    [
        (
            {"kind": "induction-motor", "at": "motor-core", "poles": 4, "supply": "50 Hz"},
            {"line-1x": (0, 50.0, 1.0), "line-2x": (0, 100.0, 1.0)},
        ),
        (
            {"kind": "synchronous-motor", "at": "motor-core", "poles": 4, "supply": "50 Hz", "start": "converter"},
            {"line-1x": (0, 50.0, 1.0), "line-2x": (0, 100.0, 1.0)},
        ),
        # Running up on its damper winding: s f = f - p N, and twice that.
        (
            {"kind": "synchronous-motor", "at": "motor-core", "poles": 4, "supply": "50 Hz"},
            {
                "line-1x": (0, 50.0, 1.0),
                "line-2x": (0, 100.0, 1.0),
                "slip-1x": (-2, 50.0, 1.0),
                "slip-2x": (-4, 100.0, 1.0),
            },
        ),
        # f_out = pole pairs · N + slip, and its multiples.
        (
            {"kind": "converter-fed-motor", "at": "motor-core", "poles": 6, "slip": "0.4 Hz"},
            {
                "out-1x": (3, 0.4, 1.0),
                "out-2x": (6, 0.8, 1.0),
                "out-6x": (18, 2.4, 1.0),
                "out-12x": (36, 4.8, 1.0),
            },
        ),
        (
            {"kind": "converter-fed-motor", "at": "motor-core", "poles": 4, "line-side": True, "supply": "60 Hz"},
            {
                "out-1x": (2, 0.0, 1.0),
                "out-2x": (4, 0.0, 1.0),
                "out-6x": (12, 0.0, 1.0),
                "out-12x": (24, 0.0, 1.0),
                "line-1x": (0, 60.0, 1.0),
                "line-2x": (0, 120.0, 1.0),
            },
        ),
        (
            {"kind": "generator", "at": "motor-core", "poles": 4, "supply": "50 Hz"},
            {"line-1x": (0, 50.0, 1.0), "line-2x": (0, 100.0, 1.0)},
        ),
        # An island generator makes its frequency from its speed.
        (
            {"kind": "generator", "at": "motor-core", "poles": 4},
            {"line-1x": (2, 0.0, 1.0), "line-2x": (4, 0.0, 1.0)},
        ),
        (
            {"kind": "centrifugal-pump", "at": "impeller", "vanes": 7, "diffuser-vanes": 9},
            {"vane-pass": (7, 0, THIRD), "vane-pass 2x": (14, 0, THIRD), "diffuser-pass": (9, 0, THIRD)},
        ),
        (
            {"kind": "fan", "at": "impeller", "blades": 10},
            {"blade-pass": (10, 0, THIRD), "blade-pass 2x": (20, 0, THIRD)},
        ),
        (
            {"kind": "propeller", "at": "impeller", "blades": 4},
            {"blade-pass": (4, 0, THIRD), "blade-pass 2x": (8, 0, THIRD)},
        ),
        (
            {"kind": "compressor", "at": "impeller", "vanes": 15},
            {"vane-pass": (15, 0, THIRD), "vane-pass 2x": (30, 0, THIRD)},
        ),
        (
            {"kind": "other", "at": "impeller", "passes": [3, 8]},
            {"pass-3": (3, 0, THIRD), "pass-8": (8, 0, THIRD)},
        ),
    ],
    ids=lambda value: value.get("kind", "") if isinstance(value, dict) else "",
)
def test_what_a_machine_implies(machine, expected):
    found = lines(chain({"unit": machine}))
    own = {name.removeprefix("unit "): line for name, line in found.items() if name.startswith("unit ")}
    assert own == expected


def test_converter_output_with_slip_at_speed():
    # Six poles at 1000 rpm with 0.4 Hz of slip: 3 · 16.667 + 0.4 = 50.4 Hz; sixth harmonic 302.4 Hz.
    machine = {"kind": "converter-fed-motor", "at": "motor-core", "poles": 6, "slip": "0.4 Hz"}
    text = chain({"drive": machine}, rated="1000 rpm")
    assert hz(text, "drive out-1x", 1000) == pytest.approx((50.4, 50.4), rel=1e-13)
    assert hz(text, "drive out-6x", 1000) == pytest.approx((302.4, 302.4), rel=1e-13)


def test_a_converter_fed_motor_crosses_90_hz_where_the_trade_says():
    # Four poles, mode at 90 Hz: 6 f_e at 450 rpm, 12 f_e at 225 rpm (pole pairs · k · N/60; from memory of VFD
    # practice, arithmetic by hand).
    machine = {"kind": "converter-fed-motor", "at": "motor-core", "poles": 4}
    text = chain({"drive": machine})
    assert hz(text, "drive out-6x", 450) == pytest.approx((90, 90), rel=1e-13)
    assert hz(text, "drive out-12x", 225) == pytest.approx((90, 90), rel=1e-13)


def test_a_supply_has_its_band():
    machine = {"kind": "induction-motor", "at": "motor-core", "poles": 4, "supply": "50 Hz"}
    default = chain({"motor": machine})
    narrow = chain({"motor": machine}, operation={"supply-band": "1 %"})
    assert hz(default, "motor line-2x", 1500) == pytest.approx((98, 102), rel=1e-13)
    assert hz(narrow, "motor line-2x", 1500) == pytest.approx((99, 101), rel=1e-13)


# Epicyclic: mesh z_ring |n_ring − n_carrier|, planet passing planets · the same. Source: Willis; 24 and 96
# teeth with the ring fixed and the carrier at 2 rev/s: 192 Hz.
PLANETARY = {"kind": "epicyclic", "sun": "sun", "ring": "fixed", "carrier": "carrier", "planets": 3}
TEETH = {"teeth": {"sun": 24, "ring": 96}}


def test_epicyclic_mesh_with_the_ring_fixed_is_192_hz():
    # Sun at 600 rpm, carrier at 120 rpm = 2 rev/s.
    text = train_text({"sun": 1.0, "carrier": 5.0}, gears={"stage": {**PLANETARY, **TEETH}})
    assert hz(text, "stage mesh", 600) == pytest.approx((192, 192), rel=1e-13)
    assert hz(text, "stage planet-pass", 600) == pytest.approx((6, 6), rel=1e-13)


def test_epicyclic_mesh_with_the_carrier_fixed_is_that_of_a_star_gear():
    # Ring at −600/4 = −150 rpm = 2.5 rev/s: 96 · 2.5 = 24 · 10 = 240 Hz; planets do not go round.
    row = {**PLANETARY, **TEETH, "ring": "ring", "carrier": "fixed"}
    text = train_text({"sun": 1.0, "ring": 5.0}, gears={"stage": row})
    assert hz(text, "stage mesh", 600) == pytest.approx((240, 240), rel=1e-13)


def test_epicyclic_mesh_with_the_sun_fixed():
    # Ring at 600 rpm, carrier at 480 rpm: 96 · 2 = 192 Hz.
    row = {**PLANETARY, **TEETH, "ring": "ring", "sun": "fixed"}
    text = train_text({"ring": 1.0, "carrier": 5.0}, gears={"stage": row})
    assert hz(text, "stage mesh", 600) == pytest.approx((192, 192), rel=1e-13)


def test_epicyclic_mesh_of_a_free_stage():
    # Sun 3000 rpm, carrier 500 rpm, ring −125 rpm: 96 · 625/60 = 1000 Hz; three planets pass at 31.25 Hz.
    row = {**PLANETARY, **TEETH, "ring": "ring"}
    operation = {"rated": "3000 rpm", "speeds": {"carrier": "500 rpm"}}
    text = train_text({"sun": 1.0, "ring": 2.0, "carrier": 5.0}, gears={"stage": row}, operation=operation)
    assert hz(text, "stage mesh", 3000) == pytest.approx((1000, 1000), rel=1e-13)
    assert hz(text, "stage planet-pass", 3000) == pytest.approx((31.25, 31.25), rel=1e-13)


def test_a_resting_ring_implies_no_1x():
    row = {**PLANETARY, **TEETH, "ring": "ring"}
    text = train_text(
        {"sun": 1.0, "ring": 2.0, "carrier": 5.0},
        gears={"stage": row},
        operation={"speeds": {"ring": "0 rpm"}},
        ties={"arm": ("ring", 1e6)},
    )
    assert not any(name.startswith("ring ") for name in lines(text))
    assert hz(text, "stage mesh", 600) == pytest.approx((192, 192), rel=1e-13)


def test_an_own_source_has_order_frequency_or_both_at_its_stations_speed():
    excitations = {
        "pulse": {"at": "impeller", "order": 2, "torque": "1.5 %"},
        "tone": {"at": "motor-core", "frequency": "92 Hz"},
        "sideband": {"at": "wheel", "order": 3, "frequency": "-50 Hz"},
        "rattle": {"at": "flex", "order": 4, "torque": "30 N m", "when": "start"},
    }
    text = chain(excitations=excitations)
    found = lines(text)
    assert found["pulse"] == (2, 0, THIRD)
    assert found["tone"] == (0, 92.0, 1.0)
    assert found["sideband"] == (3, -50.0, THIRD)
    assert found["rattle"] == (4, 0, 1.0)
    # |3 · 25/3 − 50| = 25 Hz at 1500 rpm.
    assert hz(text, "sideband", 1500) == pytest.approx((25, 25), rel=1e-13)
    by_name = {source.name: source for source in sources_of(text).active}
    assert by_name["rattle"].when == "start"
    assert by_name["rattle"].action.kind == "link"


# Faults of data that contradict the machine.
@pytest.mark.parametrize(
    ("kind", "rated", "accepted"),
    [
        ("induction-motor", "1487 rpm", True),
        ("induction-motor", "1300 rpm", True),  # 13 % slip
        ("induction-motor", "1200 rpm", False),
        ("induction-motor", "1520 rpm", False),
        ("synchronous-motor", "1500 rpm", True),
        ("synchronous-motor", "1487 rpm", False),
    ],
)
def test_a_machine_on_a_fixed_supply_runs_near_its_synchronous_speed(kind, rated, accepted):
    text = chain({"motor": {"kind": kind, "at": "motor-core", "poles": 4, "supply": "50 Hz"}}, rated=rated)
    if accepted:
        assert "motor line-1x" in lines(text)
    else:
        assert "4 poles at 50 Hz turn at 1500 rpm" in refusal(text)


def test_a_speed_range_on_a_fixed_supply_asks_for_a_converter():
    machine = {"kind": "induction-motor", "at": "motor-core", "poles": 4, "supply": "50 Hz"}
    text = chain({"motor": machine}, rated="1487 rpm", operation={"range": ["900 rpm", "1487 rpm"]})
    assert "was a converter-fed-motor meant?" in refusal(text)
    machine = {"kind": "converter-fed-motor", "at": "motor-core", "poles": 4}
    text = chain({"motor": machine}, rated="1487 rpm", operation={"range": ["900 rpm", "1487 rpm"]})
    assert "motor out-1x" in lines(text)


def test_the_supply_is_checked_at_the_machines_own_speed_behind_a_gear():
    # Wheel at 500 rpm: twelve poles at 50 Hz turn at 500 rpm.
    machine = {"kind": "generator", "at": "wheel", "poles": 12, "supply": "50 Hz"}
    assert "alternator line-1x" in lines(chain({"alternator": machine}))
    assert "12 poles at 60 Hz" in refusal(chain({"alternator": {**machine, "supply": "60 Hz"}}))
