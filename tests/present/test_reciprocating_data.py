"""Every number that the file gives of an engine or reciprocating compressor stands in the report's data table."""

from __future__ import annotations

import pytest

from quillshaft.present.report.reciprocating_data import reciprocating_words
from quillshaft.present.units import SHOWN
from quillshaft.train.read import load
from trains import train, train_text

CYCLE = {"compression-ratio": 15.5, "imep": "17 bar", "peak": "155 bar", "intake": "2.2 bar"}
ENGINE = {
    "kind": "reciprocating-engine",
    "strokes": 4,
    "bore": "170 mm",
    "stroke": "190 mm",
    "rod": "350 mm",
    "reciprocating-mass": "9.4 kg",
    "cylinders": [{"at": "a", "fires-at": "0 deg", "bank": "5 deg"}, {"at": "a", "fires-at": "405 deg", "dead": True}],
}
SIDE = {"clearance": "12 %", "suction": "1.1 bar", "discharge": "4.2 bar", "exponent": 1.31}
COMPRESSOR = {
    "kind": "reciprocating-compressor",
    "stroke": "190 mm",
    "rod": "475 mm",
    "cylinders": [
        {
            "at": "a",
            "dead-centre": "90 deg",
            "bore": "310 mm",
            "piston-rod": "55 mm",
            "reciprocating-mass": "93 kg",
            "head-end": SIDE,
            "crank-end": {**SIDE, "clearance": "14 %"},
        }
    ],
}


def text_of(machine):
    return train_text({"a": 1.0, "b": 2.0}, shafts={"s": ("a", "b", 1e5)}, machines={"m": machine})


def words_of(machine, units="SI"):
    return "; ".join(reciprocating_words(train(text_of(machine)).machines[0], SHOWN[units]))


@pytest.mark.parametrize(
    "word",
    [
        "4-stroke, 2 cylinders firing at a 0° (bank 5°), a 405°",
        "cylinder 2 dead",
        "bore 170 mm",
        "stroke 190 mm",
        "rod 350 mm",
        "reciprocating mass 9.4 kg a cylinder",
        "simple cycle (indicative): compression ratio 15.5, imep 17 bar, peak 155 bar, intake 2.2 bar",
    ],
)
def test_an_engine_is_stated_in_full(word):
    assert word in words_of({**ENGINE, "gas": {"cycle": CYCLE}})


@pytest.mark.parametrize(
    "word",
    [
        "1 cylinder, outer dead centre at a 90°",
        "stroke 190 mm",
        "rod 475 mm",
        "cylinder 1: bore 310 mm, piston rod 55 mm",
        "cylinder 1: reciprocating mass 93 kg",
        "head end: ideal card (indicative), 1.1 bar to 4.2 bar absolute, clearance 12 %, exponent 1.31",
        "crank end: ideal card (indicative), 1.1 bar to 4.2 bar absolute, clearance 14 %, exponent 1.31",
    ],
)
def test_a_compressor_is_stated_in_full(word):
    assert word in words_of(COMPRESSOR)


def test_a_file_in_us_units_is_stated_in_them():
    # 9.4 kg / 0.45359237 = 20.72 lb; 17 bar / 6894.757 Pa = 246.6 psi (exact definitions).
    words = words_of({**ENGINE, "gas": {"cycle": CYCLE}}, "US")
    assert "20.72 lb a cylinder" in words
    assert "imep 246.6 psi" in words
    assert "stroke 7.4803 in" in words


def test_cards_are_named_with_their_points(tmp_path):
    rows = "\n".join(f"{angle}, {2 + angle % 2}" for angle in range(0, 721, 2))
    for name in ("card.csv", "motored.csv"):
        (tmp_path / name).write_text(f"angle [deg], pressure [bar]\n{rows}\n")
    gas = {"indicator": "card.csv", "dead-indicator": "motored.csv", "pressure": "gauge"}
    (tmp_path / "t.toml").write_text(text_of({**ENGINE, "gas": gas}))
    words = "; ".join(reciprocating_words(load(tmp_path / "t.toml").machines[0], SHOWN["SI"]))
    assert "gas by indicator card card.csv, 360 points, gauge; dead cylinders by motored.csv" in words


def test_other_machines_have_nothing_to_state_here():
    machine = {"kind": "fan", "at": "a", "blades": 9}
    assert reciprocating_words(train(text_of(machine)).machines[0], SHOWN["SI"]) == []
