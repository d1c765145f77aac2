"""Questions about couplings and dampers, at ordinary figures of common practice."""

from __future__ import annotations

import pytest

from trains import screening_of, train_text


def flags(element, coupling=None, **tables):
    row = {"between": ["a", "b"], "rated-torque": "10 kN m", "stiffness": 3e5, **(coupling or {})}
    stations = {"a": 4.0, "b": 20.0}
    result = screening_of(train_text(stations, couplings={"c": row}, **tables))
    return [flag.text for flag in result.flags if flag.element == element]


# common practice: stiffness over rated torque 4 to 15 per rad in shear, 15 to 60 in blocks, 300 and more of gear teeth
@pytest.mark.parametrize(
    ("kind", "stiffness", "odd"),
    [
        ("elastomer-shear", 9e4, False),
        ("elastomer-shear", 2e5, True),
        ("elastomer-shear", 3e4, True),
        ("elastomer-blocks", 3e5, False),
        ("elastomer-blocks", 9e4, True),
        ("elastomer", 9e4, False),
        ("steel-spring", 3e5, False),
        ("disc", 5e6, False),
        ("disc", 3e5, True),
        ("gear", 2e7, False),
    ],
)
def test_a_twist_that_the_kind_does_not_have_is_asked_about(kind, stiffness, odd):
    found = flags("couplings.c", {"kind": kind, "stiffness": stiffness})
    assert any("at rated torque, ordinary" in text for text in found) is odd


def test_twist_of_a_progressive_coupling_is_taken_over_its_curve():
    curve = {"kind": "elastomer-blocks", "stiffness": {"0 kN m": 5e4, "10 kN m": 8e5}}
    power = {"a": "10 kW", "b": "balance"}
    # ∫ dT/k = ln(16) / (7.5e5) · 1e4 = 0.037 rad: 27 per rad, although it starts at 5 per rad
    assert not any("at rated torque" in text for text in flags("couplings.c", curve, power=power))


def test_every_rubber_kind_is_asked_for_its_dynamic_stiffness():
    for kind in ("elastomer", "elastomer-shear", "elastomer-blocks"):
        assert any("dynamic stiffness" in text for text in flags("couplings.c", {"kind": kind}))


@pytest.mark.parametrize(
    ("rating", "said"),
    [
        ({"vibratory-torque": "8 kN m"}, "half the peak-to-peak"),
        ({"peak-torque": "90 kN m"}, "its peak torque is 9 × rated"),
        ({"max-speed": "1200 rpm"}, "is made for 1200 rpm"),
    ],
)
def test_a_rating_out_of_proportion_is_asked_about(rating, said):
    assert any(said in text for text in flags("couplings.c", rating))


def test_ordinary_ratings_raise_no_question():
    rating = {"vibratory-torque": "3 kN m", "peak-torque": "30 kN m", "max-speed": "2000 rpm"}
    assert not [text for text in flags("couplings.c", rating) if "torque is" in text or "is made for" in text]


def test_a_coupling_behind_a_gear_is_held_against_its_own_speed():
    stations = {"a": 4.0, "p": 0.5, "w": 3.0, "b": 20.0}
    row = {"between": ["w", "b"], "stiffness": 3e5, "max-speed": "1000 rpm"}
    gears = {"g": ("p", "w", 20, 40)}
    result = screening_of(train_text(stations, shafts={"s": ("a", "p", 1e6)}, gears=gears, couplings={"c": row}))
    assert not [flag for flag in result.flags if "is made for" in flag.text]


def test_dampers_without_damping_are_asked_for_it():
    ring = {"at": "a", "ring-inertia": 1.0}
    assert any("viscous" in text for text in flags("dampers.d", dampers={"d": {"kind": "viscous", **ring}}))
    tuned = {"kind": "tuned", "stiffness": 1e5, **ring}
    assert any("two resonances of one" in text for text in flags("dampers.d", dampers={"d": tuned}))
    assert not flags("dampers.d", dampers={"d": {**tuned, "psi": 0.8}})


def test_a_viscous_coefficient_that_suits_no_mode_is_asked_about():
    ring = {"kind": "viscous", "at": "a", "ring-inertia": 1.0}
    assert any("would suit a mode near" in text for text in flags("dampers.d", dampers={"d": {**ring, "viscous": 3e5}}))
    assert not flags("dampers.d", dampers={"d": {**ring, "viscous": 200}})
