"""Damped modes of whole trains: referral, gears, dampers, defaults, energy by element, what grows."""

from __future__ import annotations

import math

import numpy as np
import pytest

from quillshaft.assess.damped_results import DampedResult, damped_results
from quillshaft.assess.results import Screening
from quillshaft.assess.screening import screen_alone
from trains import train, train_text

TWO_PI = 2.0 * math.pi
NO_DEFAULT = {"zeta": [1e-12, 2e-12]}


def screened(stations: dict, temperature="reference", **tables) -> Screening:
    return screen_alone(train(train_text(stations, **tables)), temperature)


def discs(shaft: dict, a: object = 2.0, b: object = 3.0, **tables) -> Screening:
    """Two discs on a shaft of 1e5 N·m/rad; other links would have next to no damping."""
    row = {"between": ["a", "b"], "stiffness": 1e5, **shaft}
    return screened({"a": a, "b": b}, shafts={"s": row}, assumptions=NO_DEFAULT, **tables)


def only(result: DampedResult):
    (mode,) = result.modes
    return mode


def test_two_discs_on_a_viscous_shaft_have_the_closed_form_numbers():
    """ζ = c/(2 J_e ω_n) = 0.02886751345948 (J 2 and 3 kg·m², k 1e5, c 20; own derivation), δ = 2πζ/√(1 − ζ²)."""
    mode = only(damped_results(discs({"viscous": 20.0})))
    zeta = 0.02886751345948
    assert mode.damping_ratio == pytest.approx(zeta, rel=1e-12)
    assert mode.log_decrement == pytest.approx(TWO_PI * zeta / math.sqrt(1 - zeta**2), rel=1e-12)
    assert mode.natural_hz == pytest.approx(math.sqrt(1e5 / 1.2) / TWO_PI, rel=1e-13)
    assert mode.frequency_hz == pytest.approx(mode.natural_hz * math.sqrt(1 - zeta**2), rel=1e-13)
    assert mode.decay_1_s == pytest.approx(20.0 / 2.4, rel=1e-12)
    assert mode.undamped_mode == 1
    assert mode.undamped_hz == pytest.approx(mode.natural_hz, rel=1e-13)
    assert mode.energy_lost == {"s": 1.0}
    assert mode.verified
    assert not mode.unstable


def test_the_screening_ratio_of_a_viscous_link_is_c_omega_over_two_k_times_its_share():
    """η = c ω / k, ζ = η/2 for one spring (own derivation); to ground ζ = c θ²/(2 ω Σ J θ²)."""
    omega = math.sqrt(1e5 / 1.2)
    assert discs({"viscous": 20.0}).modes[0].damping_ratio == pytest.approx(20 * omega / 2e5, rel=1e-12)
    ground = discs({}, a={"inertia": 2.0, "viscous": 7.0}).modes[0].damping_ratio
    assert ground == pytest.approx(7.0 * 9 / (2 * omega * (2 * 9 + 3 * 4)) + 1e-12, rel=1e-10)  # θ = 3 and −2


def test_the_screening_ratio_is_the_limit_of_the_damped_one():
    sizes = []
    for size in (1.0, 0.1):
        found = screened(
            {"a": {"inertia": 2.0, "viscous": 30.0 * size}, "b": 3.0, "c": {"inertia": 1.0, "viscous": 4.0 * size}},
            shafts={"s": {"between": ["a", "b"], "stiffness": 1e5, "viscous": 9.0 * size}},
            couplings={"k": {"between": ["b", "c"], "stiffness": 3e4, "loss-factor": 0.05 * size}},
        )
        damped = damped_results(found)
        sizes.append(max(abs(mode.damping_ratio / screen.damping_ratio - 1) for mode, screen in
                         zip(damped.modes, found.modes, strict=True)))  # fmt: skip
    assert sizes[1] < 1e-4
    assert sizes[0] / sizes[1] == pytest.approx(100, rel=0.3)  # the error falls as the square of the damping


def test_viscous_and_station_damping_are_referred_through_a_gear():
    """n = 21/57: the geared train has the roots of the two discs with J n², k n² and c n² (Thomson, Theory of
    Vibration with Applications, sec. 12.10, rule for geared shafts)."""
    n = 21 / 57
    geared = screened(
        {"a": {"inertia": 2.0, "viscous": 3.0}, "pinion": 0.0, "wheel": 0.0, "b": {"inertia": 30.0, "viscous": 11.0}},
        shafts={"s": {"between": ["wheel", "b"], "stiffness": 1e5, "viscous": 200.0}},
        couplings={"k": {"between": ["a", "pinion"], "stiffness": 5e4, "viscous": 20.0}},
        gears={"g": ("pinion", "wheel", 21, 57)},
    )
    plain = screened(
        {"a": {"inertia": 2.0, "viscous": 3.0}, "m": 0.0, "b": {"inertia": 30.0 * n**2, "viscous": 11.0 * n**2}},
        shafts={"s": {"between": ["m", "b"], "stiffness": 1e5 * n**2, "viscous": 200.0 * n**2}},
        couplings={"k": {"between": ["a", "m"], "stiffness": 5e4, "viscous": 20.0}},
    )
    first, second = damped_results(geared), damped_results(plain)
    assert only(first).decay_1_s == pytest.approx(only(second).decay_1_s, rel=1e-12)
    assert only(first).frequency_hz == pytest.approx(only(second).frequency_hz, rel=1e-12)
    assert len(first.aperiodic) == len(second.aperiodic) == 2  # the massless node creeps, the whole runs down
    for ours, plainly in zip(first.aperiodic, second.aperiodic, strict=True):
        assert ours.decay_1_s == pytest.approx(plainly.decay_1_s, rel=1e-10)
    assert only(first).energy_lost == pytest.approx(only(second).energy_lost, rel=1e-10)
    assert only(first).shape["pinion"] * 21 == pytest.approx(only(first).shape["wheel"] * 57, rel=1e-12)


def test_viscous_damping_referred_to_another_shaft_is_undone_like_its_stiffness():
    def made(shaft: dict) -> DampedResult:
        return damped_results(
            screened(
                {"a": 2.0, "pinion": 0.3, "wheel": 1.0, "b": 30.0},
                shafts={"s": {"between": ["wheel", "b"], **shaft}},
                couplings={"k": {"between": ["a", "pinion"], "stiffness": 5e4}},
                gears={"g": ("pinion", "wheel", 21, 57)},
            )
        )

    ratio = (21 / 57) ** 2
    own = made({"stiffness": 1e5, "viscous": 200.0})
    referred = made({"stiffness": 1e5 * ratio, "viscous": 200.0 * ratio, "referred-to": "pinion"})
    for first, second in zip(own.modes, referred.modes, strict=True):
        assert first.decay_1_s == pytest.approx(second.decay_1_s, rel=1e-11)


def test_an_elastic_mesh_may_be_viscous_at_its_first_station():
    """Two free wheels in mesh: 1/J_e = 1/J1 + (z2/z1)²/J2 at the first (own derivation)."""
    row = {"between": ["a", "b"], "teeth": [20, 60], "mesh-stiffness": "1e6 N m/rad", "viscous": 40.0}
    mode = only(damped_results(screened({"a": 2.0, "b": 30.0}, gears={"g": row}, assumptions=NO_DEFAULT)))
    inverse = 1 / 2.0 + 3**2 / 30.0
    assert mode.decay_1_s == pytest.approx(40.0 * inverse / 2, rel=1e-12)
    assert mode.energy_lost == {"g": 1.0}


def test_a_tie_may_be_viscous():
    mode = only(damped_results(screened({"a": 2.0}, ties={"t": {"at": "a", "stiffness": 5e4, "viscous": 10.0}})))
    assert mode.decay_1_s == pytest.approx(10.0 / 4.0, rel=1e-13)


def test_a_link_with_viscous_damping_takes_no_default_loss_factor():
    found = screened({"a": 2.0, "b": 3.0}, shafts={"s": {"between": ["a", "b"], "stiffness": 1e5, "viscous": 1e-6}})
    assert found.modes[0].damping_ratio < 1e-8
    assert damped_results(found).default_links == ()


def test_links_that_state_no_damping_take_two_zeta_as_loss_factor():
    """s = j ω_n √(1 + jη) with η = 2ζ (own derivation)."""
    found = screened({"a": 2.0, "b": 3.0}, shafts={"s": ("a", "b", 1e5)}, assumptions={"zeta": ["3 %", "5 %"]})
    for zeta, result in ((0.03, damped_results(found)), (0.05, damped_results(found, 0.05))):
        root = 1j * math.sqrt(1e5 / 1.2) * np.sqrt(1 + 2j * zeta)
        assert result.default_links == ("s",)
        assert only(result).decay_1_s == pytest.approx(-root.real, rel=1e-12)
        assert only(result).frequency_hz == pytest.approx(root.imag / TWO_PI, rel=1e-12)


def test_the_damping_of_a_coupling_follows_its_temperature():
    row = {"between": ["a", "b"], "stiffness": 1e5, "viscous": 20.0,
           "damping-temperature": {"30 degC": 1.0, "80 degC": 0.5}}  # fmt: skip
    at = {
        kelvin: only(damped_results(screened({"a": 2.0, "b": 3.0}, temperature=kelvin, couplings={"k": row})))
        for kelvin in (303.15, 353.15)
    }
    assert at[303.15].decay_1_s == pytest.approx(20.0 / 2.4, rel=1e-12)
    assert at[353.15].decay_1_s == pytest.approx(10.0 / 2.4, rel=1e-12)


def test_negative_damping_to_ground_is_flagged_and_named():
    because = "falling torque–speed curve"
    found = discs({"viscous": 1.0}, a={"inertia": 2.0, "viscous": -60.0, "viscous-because": because})
    result = damped_results(found)
    mode = only(result)
    assert mode.unstable
    assert mode.decay_1_s < 0
    assert mode.damping_ratio < 0
    assert mode.energy_lost["s"] == pytest.approx(1.0)
    assert mode.energy_lost["a to ground"] < -1  # more comes in than is lost
    assert mode in result.unstable
    assert any(motion.unstable for motion in result.aperiodic)  # the whole train runs away as well
    flags = [flag for flag in found.flags if flag.element == "stations.a"]
    assert len(flags) == 1
    assert "negative damping: mode 1" in flags[0].text


def test_a_mode_with_less_energy_in_than_out_is_stable():
    found = discs({"viscous": 100.0}, a={"inertia": 2.0, "viscous": -1.0, "viscous-because": "slope"})
    mode = only(damped_results(found))
    assert not mode.unstable
    assert -1 < mode.energy_lost["a to ground"] < 0
    assert not [flag for flag in found.flags if flag.element == "stations.a"]


def test_damping_to_ground_of_stations_in_one_mesh_is_shared_by_station():
    found = screened(
        {"a": 2.0, "p": {"inertia": 0.5, "viscous": 4.0}, "w": {"inertia": 9.0, "viscous": 27.0}},
        shafts={"s": {"between": ["a", "p"], "stiffness": 1e5, "viscous": 1.0}},
        gears={"g": ("p", "w", 20, 60)},
    )
    mode = only(damped_results(found))
    assert sum(mode.energy_lost.values()) == pytest.approx(1.0, rel=1e-13)
    # the wheel turns at a third: 27 / 9 = 3 against 4
    assert mode.energy_lost["w to ground"] / mode.energy_lost["p to ground"] == pytest.approx(3 / 4, rel=1e-12)


def test_the_ring_of_an_untuned_damper_turns_by_itself():
    """Station on a tie with ring: cubic J J_r s³ + c (J + J_r) s² + k J_r s + k c = 0 (J. P. Den Hartog,
    Mechanical Vibrations, sec. 3.3, equations of motion)."""
    inertia, ring, k, c = 2.0, 0.8, 5e4, 70.0
    found = screened(
        {"a": inertia},
        ties={"t": {"at": "a", "stiffness": k, "viscous": 1e-9}},
        dampers={"d": {"kind": "viscous", "at": "a", "ring-inertia": ring, "viscous": c}},
    )
    result = damped_results(found)
    roots = np.roots([inertia * ring, c * (inertia + ring), k * ring, k * c])
    upper = roots[roots.imag > 0][0]
    mode = only(result)
    assert mode.decay_1_s == pytest.approx(-upper.real, rel=1e-8)
    assert mode.frequency_hz == pytest.approx(upper.imag / TWO_PI, rel=1e-10)
    assert mode.energy_lost["d"] == pytest.approx(1.0, abs=1e-8)
    assert result.rings == ("d",)
    assert set(mode.shape) == {"a", "d ring"}
    assert result.aperiodic[0].decay_1_s == pytest.approx(-roots[roots.imag == 0][0].real, rel=1e-8)
    assert found.modes[0].frequency_hz == pytest.approx(math.sqrt(k / (inertia + ring / 2)) / TWO_PI, rel=1e-12)


def test_a_critical_link_leaves_rates_only():
    result = damped_results(discs({"viscous": 5000.0}))
    assert result.modes == ()
    assert len(result.aperiodic) == 2
    assert result.all_verified
    for motion in result.aperiodic:
        assert motion.time_constant_s == pytest.approx(1 / motion.decay_1_s)
        assert motion.energy_lost == {"s": 1.0}


@pytest.mark.parametrize("seed", range(4))
def test_energy_lost_sums_to_one_in_random_trains(seed):
    rng = np.random.default_rng(seed)
    names = [f"s{i}" for i in range(6)]
    stations = {name: {"inertia": float(rng.uniform(0.5, 9)), "viscous": float(rng.uniform(0, 9))} for name in names}
    shafts = {f"k{i}": {"between": [names[i], names[i + 1]], "stiffness": float(10 ** rng.uniform(4, 7))} for i in
              range(5)}  # fmt: skip
    for row in list(shafts.values())[::2]:
        row["viscous"] = float(rng.uniform(1, 300))
    result = damped_results(screened(stations, shafts=shafts))
    assert result.all_verified
    for motion in (*result.modes, *result.aperiodic):
        assert sum(motion.energy_lost.values()) == pytest.approx(1.0, rel=1e-12)
        assert max(abs(value) for value in motion.shape.values()) == pytest.approx(1.0, rel=1e-6)


def test_a_shaft_of_distributed_inertia_has_one_ratio_of_viscous_to_stiffness_along_its_length():
    """c = β k everywhere: ζ_i = β ω_i/2 in every mode (Rayleigh, Theory of Sound, art. 97)."""
    piece = {"od": "100 mm", "length": "1500 mm"}
    plain = {"s": {"between": ["a", "b"], "pieces": [piece], "material": "steel", "own-inertia": "distributed"}}
    stiffness = screened({"a": 2.0, "b": 3.0}, shafts=plain).graph.link("s").stiffness_nm_rad
    beta = 2e-6
    found = screened({"a": 2.0, "b": 3.0}, shafts={"s": {**plain["s"], "viscous": beta * stiffness}})
    result = damped_results(found)
    for mode in result.modes[:3]:
        assert mode.damping_ratio == pytest.approx(beta * math.pi * mode.natural_hz, rel=1e-9)
        assert mode.energy_lost == {"s": pytest.approx(1.0, rel=1e-12)}
    assert found.modes[0].damping_ratio == pytest.approx(result.modes[0].damping_ratio, rel=1e-9)
