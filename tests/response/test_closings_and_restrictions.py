"""Interferences closed by the response, and what operation has to keep to."""

from __future__ import annotations

import math

import numpy as np
import pytest
from response_trains import RPM, alternating_at, engine_text, plain_text, response_of

from quillshaft.present.response_limits_words import restriction_sentences

CRITICAL = 1378.3  # rpm at which 2x meets the two discs' mode
SHAFT_LINE = '"shaft" = { "between" = ["driver", "load"], "stiffness" = 100000.0, "loss-factor" = 0.02 }\n'
WIDE = {"range": ["900 rpm", "1600 rpm"], "idle": "700 rpm"}


def limited(limit: float, **more):
    shaft = {"between": ["driver", "load"], "stiffness": 1e5, "loss-factor": 0.02, "permitted-torque": limit}
    return response_of(plain_text(shafts={"shaft": shaft}, operation=WIDE, **more))


def closing(response, source="shake"):
    return next(item for item in response.closings if item.source == source)


def test_a_crossing_within_the_limit_is_cleared_with_the_finding_that_governs():
    peak = 100 * 0.6 / 0.02
    response = limited(1.1 * peak)
    item = closing(response)
    assert item.status == "cleared by response"
    assert item.finding.element == "shaft"
    assert item.finding.use == pytest.approx(1 / 1.1, rel=2e-3)


def test_a_crossing_beyond_the_limit_is_not_cleared():
    item = closing(limited(0.9 * 100 * 0.6 / 0.02))
    assert item.status == "not cleared"
    assert item.finding.verdict == "fail"


def test_a_source_without_amplitude_is_never_passed():
    text_off = {"driver 1x": "not looked at"}
    response = limited(1e6, excitations_off=text_off)
    assert "driver 2x" not in response.unjudged or closing(response, "driver 2x").status == "not judged: no amplitude"


def test_a_resonance_that_tolerances_move_into_the_range_is_judged_at_its_peak():
    """Range 1450 to 1600 rpm, critical 1378 rpm ± 5 % of stiffness: the peak counts, not the flank."""
    shaft = {
        "between": ["driver", "load"],
        "stiffness": 1e5,
        "loss-factor": 0.02,
        "tolerance": "12 %",
        "permitted-torque": 0.7 * 100 * 0.6 / 0.02,
    }
    text = plain_text(shafts={"shaft": shaft}, operation={"range": ["1450 rpm", "1600 rpm"]})
    item = closing(response_of(text))
    assert item.status == "not cleared"
    assert item.finding.use > 1.3


def test_barred_range_holds_every_speed_beyond_the_limit_and_the_tachometer_error():
    response = limited(600.0, assumptions={})
    (span,) = response.restrictions.barred
    fine = np.linspace(900, 1600, 14001)
    over = fine[alternating_at(response.screening, fine)[0] > 600.0]
    assert span.from_rpm <= over.min() * 0.98 + 1e-9
    assert span.to_rpm >= over.max() * 1.02 - 1e-9
    assert span.from_rpm > over.min() * 0.95
    assert span.to_rpm < over.max() * 1.05


def test_lowest_idle_is_above_the_last_speed_beyond_a_continuous_limit():
    shaft = {"between": ["driver", "load"], "stiffness": 1e5, "loss-factor": 0.02, "permitted-torque": 300.0}
    operation = {"range": ["1580 rpm", "1900 rpm"], "idle": "700 rpm"}
    response = response_of(plain_text(order=4, shafts={"shaft": shaft}, operation=operation))
    fine = np.linspace(400, 1580, 11801)
    over = fine[alternating_at(response.screening, fine)[0] > 300.0]
    assert response.restrictions.lowest_idle_rpm == pytest.approx(over.max() * 1.02, rel=0.02)


def test_lowest_idle_holds_at_the_ends_of_the_tolerances_too():
    """A shaft 12 % stiffer has its resonance at √1.12 of the nominal speed: idle keeps clear of that."""
    shaft = {"between": ["driver", "load"], "stiffness": 1e5, "loss-factor": 0.02, "permitted-torque": 300.0}
    operation = {"range": ["1650 rpm", "1900 rpm"], "idle": "700 rpm"}
    exact, loose = (
        response_of(plain_text(order=4, shafts={"shaft": {**shaft, **more}}, operation=operation))
        for more in ({}, {"tolerance": "12 %"})
    )
    wanted = exact.restrictions.lowest_idle_rpm * math.sqrt(1.12)
    assert loose.restrictions.lowest_idle_rpm == pytest.approx(wanted, rel=0.02)


def test_tolerable_ripple_put_back_uses_the_limit_exactly():
    response = limited(2000.0)
    row = next(item for item in response.restrictions.tolerable if item.source == "shake")
    again = response_of(
        plain_text(
            f"{row.least_nm} N m",
            shafts={
                "shaft": {
                    "between": ["driver", "load"],
                    "stiffness": 1e5,
                    "loss-factor": 0.02,
                    "permitted-torque": 2000.0,
                }
            },
            operation=WIDE,
        )
    )
    largest = again.normal.alternating_torque_nm[0][again.continuous].max()
    assert largest == pytest.approx(2000.0, rel=1e-3)


def test_load_limit_with_a_dead_cylinder_put_back_is_at_the_limit():
    """The share found, laid in as engine load, gives the coupling its permitted torque with that cylinder dead."""
    rubber = {"rubber": {"between": ["flywheel", "generator"], "stiffness": 2e4, "viscous": "120 N m s/rad"}}
    shafts = {"crank-end": {"between": ["throw-3", "flywheel"], "stiffness": 3e6, "viscous": "90 N m s/rad"}}
    wide = {"duty": {"electrical-angle": "90 deg", "inertia-torque": 100}}
    free = response_of(engine_text(couplings=rubber, shafts=shafts, criteria=wide))
    links = [link.name for link in free.screening.graph.links]
    at = links.index("crank-end")
    worst = max(
        float(case.alternating_torque_nm[at][free.continuous].max())
        for case in free.cases
        if case.kind == "dead cylinder"
    )
    shafts["crank-end"]["permitted-torque"] = 0.97 * worst
    response = response_of(engine_text(couplings=rubber, shafts=shafts, criteria=wide))
    (dead,) = response.restrictions.dead_loads
    assert 0.0 < dead.load_share < 1.0
    assert "crank-end" in dead.because
    from quillshaft.assess.response.loads import LoadCase

    number = int(dead.cylinder.split()[2]) - 1
    speeds = response.speed_rad_s[response.continuous] / RPM
    case = LoadCase("dead", "dead cylinder", "", dead.load_share, "engine", number)
    found = alternating_at(response.screening, speeds, case)[at].max()
    assert found == pytest.approx(0.97 * worst, rel=0.01)
    assert found <= 0.97 * worst * (1 + 1e-6)


def test_a_ramp_says_how_long_a_resonance_is_passed_and_what_that_does():
    """2 ζ f² / r cycles and the share of the steady peak at n = r / (2π ζ² f²) (practice: 0.90 at n = 1)."""
    operation = {"range": ["1580 rpm", "1900 rpm"], "ramp": "60 rpm/s"}
    response = response_of(plain_text(order=4, operation=operation))
    row = next(item for item in response.restrictions.passages if item.source == "shake")
    frequency = response.screening.modes[0].frequency_hz
    rate = 4 * 60 / 60
    assert row.at_rpm == pytest.approx(frequency / 4 * 60, rel=1e-6)
    assert row.seconds == pytest.approx(2 * 0.01 * frequency / rate, rel=1e-3)
    assert row.cycles == pytest.approx(2 * 0.01 * frequency**2 / rate, rel=1e-3)
    assert 0.3 < row.peak_share < 1.0


def test_the_resonance_in_a_barred_range_is_among_those_that_are_passed():
    operation = {
        "range": ["900 rpm", "1600 rpm"],
        "barred": [["1250 rpm", "1500 rpm"]],
        "barred-because": "first mode on 2x",
        "ramp": "60 rpm/s",
    }
    response = response_of(plain_text(operation=operation))
    row = next(item for item in response.restrictions.passages if item.source == "shake")
    assert row.at_rpm == pytest.approx(CRITICAL, rel=1e-4)
    frequency = response.screening.modes[0].frequency_hz
    assert row.seconds == pytest.approx(2 * 0.01 * frequency / (2 * 60 / 60), rel=1e-3)
    (span,) = response.restrictions.barred
    assert (span.from_rpm, span.to_rpm, span.declared) == (pytest.approx(1250.0), pytest.approx(1500.0), True)
    lines = restriction_sentences(response)
    assert any("as declared, no allowance added" in line for line in lines)


def test_lowest_idle_counts_the_peak_torque_of_a_coupling():
    """Mean 318 N·m: the peak rating of 800 is exceeded where the alternating torque is still within its 600."""
    rubber = {
        "kind": "disc",
        "between": ["driver", "load"],
        "stiffness": 1e5,
        "loss-factor": 0.02,
        "rated-torque": "600 N m",
        "vibratory-torque": "600 N m",
        "peak-torque": "800 N m",
    }
    power = {"driver": "60 kW", "load": "balance", "law": "constant-torque"}
    operation = {"range": ["1600 rpm", "1900 rpm"], "rated": "1800 rpm", "idle": "1000 rpm"}
    text = plain_text("50 N m", order=2, couplings={"rubber": rubber}, operation=operation, power=power)
    response = response_of(text.replace(SHAFT_LINE, ""))
    peak = response.normal.peak_torque_nm[0]
    below = response.speed_rad_s < 1600 * RPM
    last = response.speed_rad_s[below & (peak > 800.0)].max() / RPM
    assert response.restrictions.lowest_idle_rpm == pytest.approx(last * 1.02, rel=0.01)


def side_line(limit: float, **line):
    """A narrow range at 1500 rpm, a mode that ±12 % of stiffness move from 43.1 to 48.6 Hz, and a line of one's own."""
    shaft = {
        "between": ["driver", "load"],
        "stiffness": 1e5,
        "loss-factor": 0.02,
        "tolerance": "12 %",
        "permitted-torque": limit,
        "passing-torque": 50 * limit,
    }
    excitations = {"shake": {"at": "driver", "torque": "100 N m", **line}}
    operation = {"range": ["1495 rpm", "1505 rpm"]}
    return response_of(plain_text(shafts={"shaft": shaft}, excitations=excitations, operation=operation))


@pytest.mark.parametrize(
    "line",
    [{"order": 1.9}, {"order": 0.5, "frequency": "35 Hz"}, {"frequency": "47.5 Hz"}, {"order": 1.76}],
)
def test_a_mode_that_tolerances_tune_onto_a_source_is_judged_at_its_full_resonance(line):
    """T J2/(J1+J2) / η at resonance whatever the stiffness is (two discs, loss factor η): 3000 N·m (derived)."""
    peak = 100 * 0.6 * math.hypot(1.0, 0.02) / 0.02
    for share, status in ((1.01, "cleared by response"), (0.98, "not cleared")):
        item = closing(side_line(share * peak, **line))
        assert item.status == status
        assert item.finding.use == pytest.approx(1 / share, rel=2e-3)
        assert item.finding.case == "tuned by its tolerances"


def test_a_belt_that_carries_a_mode_keeps_it_from_being_cleared():
    text = plain_text(shafts={}).replace(
        '"shaft" = { "between" = ["driver", "load"], "stiffness" = 100000.0, "loss-factor" = 0.02 }\n', ""
    )
    text += (
        '[belts]\n"vee" = { "between" = ["driver", "load"], "diameters" = ["300 mm", "300 mm"], "stiffness" = 1e5 }\n'
    )
    item = closing(response_of(text))
    assert item.status == "not judged: no limit"
    assert "vee" in item.text


def test_declared_barred_ranges_stand_among_the_restrictions():
    operation = {**WIDE, "barred": [["1300 rpm", "1500 rpm"]], "barred-because": "first mode"}
    shaft = {"between": ["driver", "load"], "stiffness": 1e5, "loss-factor": 0.02, "permitted-torque": 2000.0}
    response = response_of(plain_text(shafts={"shaft": shaft}, operation=operation))
    (span,) = response.restrictions.barred
    assert (span.from_rpm, span.to_rpm) == pytest.approx((1300.0, 1500.0))
