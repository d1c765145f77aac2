"""The report's data table shows every key of shafts, throws, running gear and materials as it was given."""

from __future__ import annotations

from quillshaft.present.listed_modes import listed_modes, unlisted_sentence
from quillshaft.present.report.shaft_data import material_rows, running_gear_words, shaft_words
from quillshaft.present.units import SHOWN
from trains import screening_of, train, train_text

HOT = {"hot": {"shear-modulus": {"20 degC": "80 GPa", "200 degC": "74 GPa"}, "density": "7850 kg/m^3"}}
KEYWAY = {"width": "25 mm", "depth": "12 mm"}
PIECES = [
    {"od": "95 mm", "length": "120 mm", "hub": "110 mm", "keyway": {**KEYWAY, "length": "90 mm"}},
    {"od": ["120 mm", "140 mm"], "id": "40 mm", "length": "2.1 m", "temperature": "200 degC"},
    {"spline": {"major": "110 mm", "minor": "100 mm", "share": "20 %"}, "length": "150 mm"},
    {"section": {"rectangle": ["60 mm", "90 mm"]}, "length": "90 mm"},
    {"flange": "320 mm", "length": "40 mm"},
]
GEAR = {"reciprocating-mass": "9.4 kg", "rotating-mass": "6 kg", "radius": "95 mm", "rod": "350 mm", "cylinders": 2}


def file_of(**row):
    shaft = {"between": ["a", "b"], "material": "hot", "temperature": "110 degC", "pieces": PIECES, **row}
    stations = {"a": {"inertia": 1.0, "running-gear": GEAR}, "b": 2.0}
    return train_text(stations, shafts={"bar": shaft}, materials=HOT)


def test_every_key_of_a_piece_stands_in_its_words():
    words = shaft_words(train(file_of(shoulder="sharp")).shafts[0], SHOWN["SI"])
    assert words == (
        "hot at 110 °C, mm: ⌀95 × 120 + 0.333 · 110 in hub, keyway 25 × 12 over 90; "
        "⌀120/140 bore 40 × 2100, modulus × 0.961; splines ⌀110/100, teeth carry 0.2 × 150; 90 by 60 × 90; "
        "flange ⌀320 × 40; shoulders as sharp corners; own inertia lumped at both ends"
    )
    assert "own inertia distributed" in shaft_words(
        train(file_of(**{"own-inertia": "distributed"})).shafts[0], SHOWN["SI"]
    )


def test_a_hot_material_is_shown_at_its_temperature():
    assert material_rows(train(file_of()), SHOWN["SI"]) == [("hot at 110 °C", "77 GPa", "7850 kg/m³")]


def test_running_gear_is_shown_with_its_sizes():
    gear = train(file_of()).stations[0].running_gear
    assert running_gear_words(gear, SHOWN["SI"]) == (
        "running gear of 2 × reciprocating 9.4 kg, rotating 6 kg, radius 95, rod 350 mm"
    )


def test_modes_that_only_the_cuts_make_are_left_out_of_the_tables():
    result = screening_of(file_of(**{"own-inertia": "distributed"}))
    shown = listed_modes(result)
    assert len(shown) == max(result.judged_modes, default=1) < len(result.modes)
    assert f" {len(result.modes) - len(shown)} higher modes are left out" in unlisted_sentence(result)
    lumped = screening_of(file_of())
    assert listed_modes(lumped) == lumped.modes
    assert unlisted_sentence(lumped) == ""
