"""Universal joints: their kinematics against the closed form, and the source at twice the speed."""

from __future__ import annotations

import math

import numpy as np
import pytest

from quillshaft.elements.joint import joint_amplitude, joint_speed_limits
from trains import refusal, screening_of, sources_of, train_text

STATIONS = {"motor": 2.0, "gear-end": 0.5, "pinion": 0.3, "wheel": 4.0}
SHAFTS = {"cardan": ("motor", "gear-end", 2e5), "stub": ("gear-end", "pinion", 9e5)}
GEARS = {"mesh": ("pinion", "wheel", 20, 60)}


def jointed(joints=None, **tables):
    joints = {"rear": {"at": "cardan", "angle": "15 deg"}} if joints is None else joints
    return train_text(STATIONS, shafts=SHAFTS, gears=GEARS, joints=joints, **tables)


# θ2 − θ1 = Σ (ε^k / k) sin 2kθ, ε = tan²(β/2) (derived from tan θ2 = tan θ1 / cos β): digits for β = 15°.
def test_amplitudes_at_15_degrees():
    beta = math.radians(15)
    assert joint_amplitude(beta) == pytest.approx(0.017332380121, abs=5e-13)
    assert joint_amplitude(beta, 2) == pytest.approx(0.0001502057003, abs=5e-14)


def test_the_ratio_of_speeds_lies_between_the_cosine_and_its_inverse():
    low, high = joint_speed_limits(math.radians(15))
    assert high == pytest.approx(1.03527618041, abs=5e-12)
    assert low == pytest.approx(0.9659258262891, abs=5e-14)


@pytest.mark.parametrize("degrees", [3.0, 15.0, 40.0])
def test_the_series_is_that_of_the_closed_form(degrees):
    beta = math.radians(degrees)
    theta = np.arange(4096) * 2 * np.pi / 4096
    driven = np.arctan2(np.sin(theta), np.cos(theta) * np.cos(beta))
    lead = np.angle(np.exp(1j * (driven - theta)))
    lines = np.fft.rfft(lead) / 2048
    for k in (1, 2, 3):
        assert -lines[2 * k].imag == pytest.approx(joint_amplitude(beta, k), rel=1e-9, abs=1e-13)
    rate = 1 + np.fft.irfft(1j * np.arange(2049) * np.fft.rfft(lead))
    assert (rate.min(), rate.max()) == pytest.approx(joint_speed_limits(beta), rel=1e-6)


def test_a_joint_is_a_source_at_twice_the_speed_of_its_shaft_inside_its_link():
    source = next(item for item in sources_of(jointed()).active if item.name == "rear 2x")
    assert (source.order, source.frequency_hz, source.at, source.when) == (2.0, 0.0, "cardan", "continuous")
    assert source.action.kind == "link"
    assert "15°" in source.torque
    assert "±0.993°" in source.torque
    assert "0.9659 to 1.035" in source.torque


def test_a_joint_behind_gears_counts_turns_of_its_own_shaft():
    stations = {**STATIONS, "drum": 9.0}
    shafts = {**SHAFTS, "out": ("wheel", "drum", 5e5)}
    text = train_text(stations, shafts=shafts, gears=GEARS, joints={"front": {"at": "out", "angle": "8 deg"}})
    source = next(item for item in sources_of(text).active if item.name == "front 2x")
    assert source.speed_ratio == pytest.approx(1 / 3, rel=1e-12)


def test_a_joint_is_judged_by_the_torque_of_its_link():
    pairs = [item for item in screening_of(jointed()).interferences if item.source == "rear 2x"]
    assert pairs
    assert all(0 <= pair.excitability <= 1 for pair in pairs)


def test_a_joint_is_switched_off_with_a_reason_and_has_a_separation_of_its_own():
    off = sources_of(jointed(excitations_off={"rear 2x": "second joint set to cancel"})).off
    assert [source.name for source, _ in off] == ["rear 2x"]
    screening = screening_of(jointed(criteria={"separation": {"default": "10 %", "joint": "20 %"}}))
    assert {pair.required for pair in screening.interferences if pair.source == "rear 2x"} == {0.2}


@pytest.mark.parametrize(
    ("joints", "words"),
    [
        ({"rear": {"at": "cardn", "angle": "15 deg"}}, "cardan"),
        ({"rear": {"at": "mesh", "angle": "15 deg"}}, "no shaft or coupling"),
        ({"rear": {"at": "cardan", "angle": "60 deg"}}, "45 degrees"),
        ({"rear": {"at": "cardan", "angle": "0 deg"}}, "45 degrees"),
        ({"rear": {"at": "cardan"}}, "is missing"),
        ({"motor": {"at": "cardan", "angle": "15 deg"}}, "motor 2x"),
    ],
)
def test_a_joint_that_cannot_be_is_refused(joints, words):
    assert words in refusal(jointed(joints))


def test_a_steep_joint_is_asked_about():
    flags = {flag.element for flag in screening_of(jointed({"rear": {"at": "cardan", "angle": "20 deg"}})).flags}
    assert "joints.rear" in flags
    assert "joints.rear" not in {flag.element for flag in screening_of(jointed()).flags}
