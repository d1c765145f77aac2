"""The response of small trains against closed forms."""

from __future__ import annotations

import math

import numpy as np
import pytest
from response_trains import RPM, alternating_at, lines_at, place, plain_text, response_of

from quillshaft.elements.coupling_duty import loss_from_total_torque
from trains import screening_of, train_text


def two_disc_torque(omega: float, loss: float, torque: float) -> float:
    """Two discs on a lossy shaft: T J2/(J1+J2) √(1+η²) / |1 − r² + jη| (Den Hartog, two discs; derived)."""
    natural = math.sqrt(1e5 * 5.0 / 6.0)
    ratio = omega / natural
    return torque * 0.6 * math.sqrt(1 + loss**2) / math.hypot(1 - ratio**2, loss)


@pytest.mark.parametrize("rpm", [400.0, 1000.0, 1378.3, 1500.0])
def test_torque_between_two_discs_is_the_closed_form(rpm):
    screening = screening_of(plain_text())
    expected = two_disc_torque(2 * rpm * RPM, 0.02, 100.0)
    assert alternating_at(screening, np.array([rpm]))[0, 0] == pytest.approx(expected, rel=1e-12)


def test_two_discs_with_a_viscous_shaft_give_the_published_torques():
    """J 2 and 3, k 1e5, c 20, T0 50 (derived, equals a direct solve): torque at 200, 288.675 and 350 rad/s."""
    shaft = {"shaft": {"between": ["driver", "load"], "stiffness": 1e5, "viscous": "20 N m s/rad"}}
    screening = screening_of(plain_text("50 N m", 1, shafts=shaft))
    rpm = np.array([200.0, 288.675, 350.0]) / RPM
    expected = [57.56837367043, 520.480788987, 63.28790346136]
    assert alternating_at(screening, rpm)[0] == pytest.approx(expected, rel=1e-10)


def test_heat_of_a_link_is_that_of_its_loss_factor():
    """P = ½ ω η k |twist|², the total torque being k √(1+η²) |twist| (definition of the loss factor)."""
    response = response_of(plain_text())
    at = int(np.argmin(np.abs(response.speed_rad_s - 1378.3 * RPM)))
    omega, case = 2 * response.speed_rad_s[at], response.normal
    total = case.alternating_torque_nm[0, at]
    expected = loss_from_total_torque(total, omega / (2 * math.pi), 1e5, 2 * math.pi * 0.02)
    assert case.heat_w[0, at] == pytest.approx(expected, rel=1e-12)


def test_twist_is_torque_over_dynamic_stiffness():
    response = response_of(plain_text())
    case = response.normal
    expected = np.degrees(case.alternating_torque_nm[0] / (1e5 * math.hypot(1.0, 0.02)))
    assert case.twist_deg[0] == pytest.approx(expected, rel=1e-12)


def test_an_amplitude_in_per_cent_is_of_the_mean_torque_there_at_each_speed():
    """10 kW at 1500 rpm is 63.66 N·m; by the square law 1/4 of it at half the speed."""
    power = {"driver": 10, "load": "balance", "law": "square"}
    screening = screening_of(plain_text("10 %", power=power))
    mean = 10e3 / (1500 * RPM)
    for rpm, share in ((1500.0, 1.0), (750.0, 0.25)):
        expected = two_disc_torque(2 * rpm * RPM, 0.02, 0.1 * mean * share)
        assert alternating_at(screening, np.array([rpm]))[0, 0] == pytest.approx(expected, rel=1e-12)


def test_sources_of_unknown_phase_add_by_amplitude_and_by_squares():
    """Two excitations of the same order and place: T1 + T2 is judged, √(T1² + T2²) stands beside it."""
    more = {"second": {"at": "driver", "order": 3, "torque": "40 N m"}}
    response = response_of(plain_text(excitations=more))
    at = int(np.argmin(np.abs(response.speed_rad_s - 1000.0 * RPM)))
    omega = response.speed_rad_s[at]
    one, two = two_disc_torque(2 * omega, 0.02, 100.0), two_disc_torque(3 * omega, 0.02, 40.0)
    case = response.normal
    assert case.alternating_torque_nm[0, at] == pytest.approx(one + two, rel=1e-12)
    assert case.root_sum_square_nm[0, at] == pytest.approx(math.hypot(one, two), rel=1e-12)


def test_excitations_locked_in_phase_are_synthesised_as_one_wave():
    """cos(φ + 180°) and cos 3φ, far above resonance: the peak of the wave lies below the sum of the amplitudes."""
    more = {
        "shake": {"at": "driver", "order": 1, "torque": "100 N m", "phase": "180 deg", "locked-with": "third"},
        "third": {"at": "driver", "order": 3, "torque": "30 N m"},
    }
    screening = screening_of(plain_text(excitations=more))
    rpm = 8000.0
    _, _, lines = lines_at(screening, np.array([rpm]))
    one, three = lines.groups[0][0].link_nm[0, :, 0]
    phi = np.linspace(0, 2 * np.pi, 200001)
    wave = (one * np.exp(1j * phi)).real + (three * np.exp(3j * phi)).real
    found = alternating_at(screening, np.array([rpm]))[0, 0]
    assert found == pytest.approx(0.5 * (wave.max() - wave.min()), rel=5e-4)
    assert found < abs(one) + abs(three) - 1e-3


def test_what_is_locked_with_a_silent_excitation_is_of_unknown_phase_and_the_notes_say_so():
    """An excitation without torque has no wave to keep a phase to: amplitudes add, as of any two single sources."""
    more = {
        "third": {"at": "driver", "order": 3},
        "shake": {"at": "driver", "order": 1, "torque": "100 N m", "phase": "180 deg", "locked-with": "third"},
    }
    response = response_of(plain_text(excitations=more))
    assert any("shake is locked with third" in note and "unknown phase" in note for note in response.notes)
    assert not response.groups
    assert "third" in response.unjudged
    at = int(np.argmin(np.abs(response.speed_rad_s - 1000.0 * RPM)))
    expected = two_disc_torque(response.speed_rad_s[at], 0.02, 100.0)
    assert response.normal.alternating_torque_nm[0, at] == pytest.approx(expected, rel=1e-12)


def test_two_locked_with_a_silent_excitation_keep_their_phase_to_each_other():
    """cos φ and −cos φ at one place cancel, whatever the third does."""
    one = {"at": "driver", "order": 1, "torque": "100 N m", "locked-with": "third"}
    more = {"third": {"at": "driver", "order": 3}, "shake": one, "against": {**one, "phase": "180 deg"}}
    response = response_of(plain_text(excitations=more))
    assert any("to each other only" in note for note in response.notes)
    assert response.normal.alternating_torque_nm[0].max() < 1e-9


def test_a_gear_carries_what_the_pinion_side_leaves():
    """Dense solve of three referred discs; the rigid mesh carries pinion shaft torque less the pinion's inertia."""
    stations = {"motor": 2.0, "pinion": 0.3, "wheel": 4.0, "load": 9.0}
    text = train_text(
        stations,
        shafts={
            "fast": {"between": ["motor", "pinion"], "stiffness": 2e5, "loss-factor": 0.03},
            "slow": {"between": ["wheel", "load"], "stiffness": 9e5, "loss-factor": 0.01},
        },
        gears={"mesh": ("pinion", "wheel", 20, 60)},
        excitations={"shake": {"at": "load", "order": 5, "torque": "400 N m"}},
        power={"motor": 50, "load": "balance"},
        operation={"range": ["900 rpm", "1600 rpm"]},
    )
    screening = screening_of(text)
    n = 1 / 3
    omega = 5 * 1300 * RPM * n
    k1, k2 = 2e5 * (1 + 0.03j), 9e5 * (1 + 0.01j) * n**2
    inertia = np.diag([2.0, 0.3 + 4.0 * n**2, 9.0 * n**2])
    stiffness = np.array([[k1, -k1, 0], [-k1, k1 + k2, -k2], [0, -k2, k2]])
    angle = np.linalg.solve(stiffness - omega**2 * inertia, np.array([0, 0, 400 * n]))
    fast = k1 * (angle[0] - angle[1])
    mesh = fast + omega**2 * 0.3 * angle[1]
    slow = k2 * (angle[1] - angle[2]) / n
    found = alternating_at(screening, np.array([1300.0]))[:, 0]
    names = [link.name for link in screening.graph.links]
    for name, torque in (("fast", fast), ("mesh", mesh), ("slow", slow)):
        assert found[names.index(name)] == pytest.approx(abs(torque), rel=1e-10)


def test_a_universal_joint_imposes_its_lead_on_the_shaft_it_sits_in():
    """Lead tan²(β/2) at 2x inside the shaft: torque k (θ1 − θ2 − e), dense two-by-two solve."""
    screening = screening_of(
        train_text(
            {"driver": 2.0, "load": 3.0},
            shafts={"shaft": {"between": ["driver", "load"], "stiffness": 1e5, "loss-factor": 0.02}},
            joints={"cardan": {"at": "shaft", "angle": "12 deg"}},
            operation={"range": ["900 rpm", "1600 rpm"]},
        )
    )
    lead, omega, k = math.tan(math.radians(6.0)) ** 2, 2 * 1100 * RPM, 1e5 * (1 + 0.02j)
    matrix = np.array([[k - 2 * omega**2, -k], [-k, k - 3 * omega**2]])
    angle = np.linalg.solve(matrix, np.array([1e5 * lead, -1e5 * lead]))
    torque = k * (angle[0] - angle[1]) - 1e5 * lead
    assert alternating_at(screening, np.array([1100.0]))[0, 0] == pytest.approx(abs(torque), rel=1e-10)


def test_a_magnifier_gives_a_mode_of_cylinders_that_magnification():
    """Both discs being throws, Q of the mode is the magnifier M (Ker Wilson, from memory; the form is derived)."""
    machine = {
        "kind": "reciprocating-engine",
        "strokes": 2,
        "magnifier": 25,
        "bore": "100 mm",
        "stroke": "100 mm",
        "rod": "200 mm",
        "gas": {"cycle": {"compression-ratio": 14, "imep": "10 bar", "peak": "90 bar"}},
        "cylinders": [{"at": "driver", "fires-at": "0 deg"}, {"at": "load", "fires-at": "180 deg"}],
    }
    shafts = {"shaft": {"between": ["driver", "load"], "stiffness": 1e5, "viscous": "1e-6 N m s/rad"}}
    text = plain_text(machines={"engine": machine}, shafts=shafts)
    screening = screening_of(text)
    natural = math.sqrt(1e5 * 5 / 6)
    _, loads, lines = lines_at(screening, np.array([natural / 2]) / RPM)
    shake = next(n for n, item in enumerate(loads.plain) if item.source.name == "shake")
    assert abs(lines.plain[shake].link_nm[0, 0, 0]) == pytest.approx(0.6 * 25, rel=1e-3)


def test_settled_torques_do_not_depend_on_the_order_of_stations_or_the_reference_shaft():
    text = plain_text()
    other = text.replace('between" = ["driver", "load"]', 'between" = ["load", "driver"]')
    first, second = (alternating_at(screening_of(item), np.array([1200.0])) for item in (text, other))
    assert first == pytest.approx(second, rel=1e-13)
    response = response_of(text)
    assert place(response, "shaft") == 0
