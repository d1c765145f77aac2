"""Drift of one number of the file, against closed forms on two discs."""

from __future__ import annotations

import math

import numpy as np
import pytest

from quillshaft.study.datum import DatumError
from quillshaft.study.drift import drift
from train_files import MORE, TEXT, screened
from trains import screening_of, train, train_text

TWO_PI = 2 * math.pi


def two_discs(separation="0 %", inertia=None, **tables):
    """J = 6 kg·m² beside 20 kg·m², f = 12 Hz at the start; a fixed source at 13 Hz."""
    first, second = 20.0, 6.0
    stiffness = (TWO_PI * 12.0) ** 2 * first * second / (first + second)
    return train(
        train_text(
            {"core": first, "wheel": inertia or {"inertia": "6 kg m^2"}},
            shafts={"s": {"between": ["core", "wheel"], "stiffness": f"{stiffness!r} N m/rad"}},
            excitations={"hum": {"at": "core", "frequency": "13 Hz"}},
            criteria={"separation": separation},
            **tables,
        )
    )


def inertia_at(frequency):
    """J₂ at which f = √(k (1/J₁ + 1/J₂)) / 2π."""
    stiffness = (TWO_PI * 12.0) ** 2 * 20 * 6 / 26
    return 1 / ((TWO_PI * frequency) ** 2 / stiffness - 1 / 20)


def hum(found):
    return next(item for item in found.first if item.source == "hum")


def test_a_wheel_that_loses_inertia_meets_the_source_where_the_closed_form_says():
    found = drift(two_discs(), "stations.wheel.inertia", "6 kg m^2", "4 kg m^2")
    assert len(found.values) == 41
    assert (found.values[0], found.values[-1], found.unit) == (6.0, 4.0, "kg m^2")
    item = hum(found)
    assert item.verdict == "crossing"
    assert item.at_value == pytest.approx(inertia_at(13.0), abs=4e-9)
    exact = 12.0 * np.sqrt((1 / 20 + 1 / found.values) / (1 / 20 + 1 / 6))
    np.testing.assert_allclose(found.frequency_hz[:, 0], exact, rtol=1e-12)


def test_with_a_separation_it_is_too_close_first_and_meets_later():
    found = hum(drift(two_discs("5 %"), "stations.wheel.inertia", "6 kg m^2", "4 kg m^2"))
    assert found.verdict == "close"
    assert found.at_value == pytest.approx(inertia_at(13.0 * 0.95), abs=1e-7)
    assert found.meets_at == pytest.approx(inertia_at(13.0), abs=1e-7)
    assert found.frequency_hz == pytest.approx(13.0 * 0.95, rel=1e-8)


def test_a_band_jumped_between_two_steps_is_found_all_the_same():
    found = hum(drift(two_discs(), "stations.wheel.inertia", "6 kg m^2", "2 kg m^2", steps=2))
    assert found.at_value == pytest.approx(inertia_at(13.0), abs=8e-9)


def test_what_is_not_clear_at_the_start_is_told_apart():
    found = drift(two_discs("10 %"), "stations.wheel.inertia", "6 kg m^2", "4 kg m^2")
    assert all(item.source != "hum" for item in found.first)
    there = next(item for item in found.at_start if item.source == "hum")
    assert there.verdict == "close"
    assert there.meets_at == pytest.approx(inertia_at(13.0), abs=1e-7)


def test_the_way_back_finds_nothing_new_before_the_source_is_left():
    found = drift(two_discs(), "stations.wheel.inertia", "6 kg m^2", "9 kg m^2")
    assert all(item.source != "hum" for item in found.first)


def test_another_spelling_of_the_datum_gives_way():
    """GD²/4 = 6 kg·m² in the file; its inertia drifts."""
    base = two_discs(inertia={"gd2": "24 kg m^2"})
    assert hum(drift(base, "stations.wheel.inertia", "6 kg m^2", "4 kg m^2")).at_value == pytest.approx(
        inertia_at(13.0), abs=4e-9
    )
    own = hum(drift(base, "stations.wheel.gd2", "24 kg m^2", "16 kg m^2"))
    assert own.at_value == pytest.approx(4 * inertia_at(13.0), abs=2e-8)


def test_ends_in_two_units_are_brought_to_the_first():
    found = drift(two_discs(), "shafts.s.stiffness", "26 kN m/rad", "0.04 MN m/rad")
    assert found.values[-1] == pytest.approx(40.0, rel=1e-15)
    stiffness = (TWO_PI * 13.0) ** 2 * 20 * 6 / 26
    assert hum(found).at_value == pytest.approx(stiffness / 1e3, abs=2e-8)


def test_bare_numbers_mean_the_units_of_the_file():
    found = drift(two_discs(), "stations.wheel.inertia", "6", 4.0)
    assert found.unit == ""
    assert hum(found).at_value == pytest.approx(inertia_at(13.0), abs=4e-9)


def test_a_source_can_drift_instead_of_the_train():
    found = drift(two_discs(), "excitations.hum.frequency", "20 Hz", "10 Hz")
    assert hum(found).at_value == pytest.approx(12.0, abs=1e-7)
    np.testing.assert_allclose(found.frequency_hz[:, 0], 12.0, rtol=1e-12)


def test_cases_are_laid_first():
    cases = {"heavy": {"stations": {"core": {"inertia": 40.0}}}}
    text = train_text(
        {"core": 20.0, "wheel": 6.0},
        shafts={"s": ("core", "wheel", 1e5)},
        cases=cases,
    )
    found = drift(train(text, ("heavy",)), "stations.wheel.inertia", "6", "5", steps=2)
    assert found.frequency_hz[1, 0] == pytest.approx(math.sqrt(1e5 * (1 / 40 + 1 / 5)) / TWO_PI, rel=1e-12)


def test_an_inertia_that_goes_to_zero_takes_its_mode_away():
    found = drift(two_discs(), "stations.wheel.inertia", "6 kg m^2", "0 kg m^2", steps=5)
    assert math.isinf(found.frequency_hz[-1, 0])
    assert hum(found).at_value == pytest.approx(inertia_at(13.0), abs=1e-8)


def test_a_datum_that_moves_nothing_is_said_to():
    base = two_discs(power={"core": "10 kW", "wheel": "balance"})
    assert not drift(base, "power.core", "10 kW", "20 kW", steps=3).moves
    assert drift(base, "stations.core.inertia", "20", "21", steps=3).moves


def test_barred_ranges_are_named_so():
    """1x of one shaft from 600 to 900 rpm, barred from 700 to 800: 12 Hz is 720 rpm."""
    operation = {
        "rated": "900 rpm",
        "range": ["600 rpm", "900 rpm"],
        "barred": ["700 rpm", "800 rpm"],
        "barred-because": "interlock",
    }
    text = train_text(
        {"core": 20.0, "wheel": 6.0},
        operation=operation,
        shafts={"s": ("core", "wheel", 1e4)},
        criteria={"separation": "0 %"},
    )
    found = drift(train(text), "shafts.s.stiffness", "10 kN m/rad", "40 kN m/rad")
    one = next(item for item in found.first if item.source.endswith("1x"))
    assert one.verdict == "crossing"
    assert one.at_value == pytest.approx((TWO_PI * 10) ** 2 * 120 / 26 / 1e3, abs=1e-6)


def softening(stiffness: str) -> str:
    """A pump whose coupling stiffens with mean torque, over 900 to 1500 rpm with a square load."""
    points = {"0 kN m": "60 kN m/rad", "3 kN m": stiffness, "8 kN m": "200 kN m/rad"}
    return train_text(
        {"motor": 20.0, "pump": 6.0},
        operation={"rated": "1500 rpm", "range": ["900 rpm", "1500 rpm"]},
        power={"motor": "900 kW", "pump": "balance", "law": "square"},
        couplings={"rubber": {"between": ["motor", "pump"], "stiffness": points, "kind": "elastomer"}},
    )


def test_where_frequencies_follow_speed_the_screening_turns_at_the_value_found():
    datum = 'couplings.rubber.stiffness."3 kN m"'
    found = drift(train(softening("90 kN m/rad")), datum, "90 kN m/rad", "180 kN m/rad", steps=7)
    first = next(item for item in found.first if item.source == "motor 2x")

    def verdict(value):
        screening = screening_of(softening(f"{value!r} kN m/rad"))
        return next(item.verdict for item in screening.interferences if item.source == "motor 2x" and item.mode == 1)

    assert (verdict(first.at_value * 0.99), verdict(first.at_value * 1.01)) == ("clear", "close")


def test_members_of_lists_are_counted_from_one():
    base = train(TEXT)
    found = drift(base, "shafts.pinion-shaft.pieces[2].od", "110 mm", "100 mm", steps=3)
    changed = '{ od = "110 mm", id = "30 mm", length = "240 mm"'
    edited = screened(TEXT.replace(changed, changed.replace("110", "100"), 1))
    np.testing.assert_allclose(found.frequency_hz[-1], [mode.frequency_hz for mode in edited.modes], rtol=1e-12)
    assert base.file.data["shafts"]["pinion-shaft"]["pieces"][1]["od"] == "110 mm"


@pytest.mark.parametrize(
    ("datum", "start", "end", "said"),
    [
        ("stations.impeler.inertia", "6 kg m^2", "5 kg m^2", 'did you mean "stations.impeller.inertia"'),
        ("stations.impeller.innertia", "6 kg m^2", "5 kg m^2", 'did you mean "inertia"'),
        ("stations.impeller", "6 kg m^2", "5 kg m^2", "this is a table"),
        ("gears.reduction.teeth", "29", "31", "this is a list"),
        ("gears.reduction.teeth[1]", "29", "31", "counts whole things"),
        ("machines.pump.vanes", "5", "7", "counts whole things"),
        ("shafts.pinion-shaft.pieces[9].od", "90 mm", "80 mm", "no such number"),
        ("stations.motor-core.source", "6 kg m^2", "5 kg m^2", "is no number"),
        ("sign-off.date", "6", "5", "no such number"),
        ("nonsense", "6", "5", "no such number"),
        ("stations.impeller.inertia", "6 kg m^2", "6 kg m^2", "the same value"),
        ("stations.impeller.inertia", "6 kg m^2", "6000 kg", '"kg" is a mass'),
        ("stations.impeller.inertia", "6 N m", "5 N m", "an inertia is wanted"),
        ("stations.impeller.inertia", "six", "5 kg m^2", "does not begin with a number"),
        ("stations.impeller.inertia", "6,2 kg m^2", "5 kg m^2", "a comma in a number"),
        ("stations.impeller.inertia", "6 kg m^2", "-5 kg m^2", "out of bounds"),
        ("stations.impeller.inertia", "6 kg m^2", "5", "give both in the same unit"),
    ],
)
def test_what_cannot_drift_is_refused(datum, start, end, said):
    with pytest.raises(DatumError) as caught:
        drift(train(TEXT + MORE), datum, start, end)
    assert said in str(caught.value)


@pytest.mark.parametrize("steps", [0, 1, -3, 10**6])
def test_a_number_of_steps_that_makes_no_sweep_is_refused(steps):
    with pytest.raises(DatumError, match="steps"):
        drift(two_discs(), "stations.wheel.inertia", "6 kg m^2", "4 kg m^2", steps=steps)
