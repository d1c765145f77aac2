"""What page one and the terminal say: nothing unjudged, dismissed or switched off may hide behind a pass."""

from __future__ import annotations

import pytest

from quillshaft.present.report.front import headline
from quillshaft.present.words import (
    attention_sentences,
    case_lines,
    group_sentence,
    number,
    percent,
    unjudged_lines,
    verdict_sentence,
)
from trains import screening_of, train_text

STATIONS = {"a": 2.0, "b": 3.0}
SHAFT = {"s": ("a", "b", "0.1 MN m/rad")}  # 45.944 Hz


def discs(**tables: object) -> str:
    """Two discs at 1800 rpm: 1x 30 Hz, 2x 60 Hz, both clear of 45.9 Hz."""
    operation = {"rated": "1800 rpm", **tables.pop("operation", {})}  # type: ignore[dict-item]
    return train_text(STATIONS, operation=operation, shafts=SHAFT, **tables)


@pytest.mark.parametrize(
    ("value", "digits", "shown"),
    [
        (0.29, 5, "0.29"),
        (29.0, 5, "29"),
        (1.13071, 4, "1.131"),
        (98.5, 5, "98.5"),
        (1.9231e7, 5, "19231000"),
        (3e9, 4, "3.000e+09"),
        (0.0, 4, "0"),
    ],
)
def test_numbers_are_printed_without_idle_zeros(value: float, digits: int, shown: str) -> None:
    assert number(value, digits) == shown


def test_a_signed_margin_of_zero_is_a_meeting() -> None:
    assert percent(0.0, True) == "meets"
    assert percent(-0.0188, True) == "−1.88 %"
    assert percent(0.245) == "24.5 %"


def test_a_clear_train_passes_plainly() -> None:
    assert headline(screening_of(discs())) == ("PASS: no interference within the required separation", "pass")


def test_sources_switched_off_are_on_the_stamp() -> None:
    hum = {"hum": {"at": "a", "frequency": "70 Hz"}}
    off = discs(operation={"rated": "1378 rpm"}, excitations=hum, excitations_off={"a 2x": "rigid flanges"})
    result = screening_of(off)
    assert verdict_sentence(result, worst=False) == "All interferences are clear, apart from 1 source switched off."
    assert headline(result) == ("PASS, apart from 1 source switched off", "restriction")


def test_a_train_with_every_source_off_is_not_passed() -> None:
    result = screening_of(discs(excitations_off={"a 1x": "none", "a 2x": "none"}))
    text, tone = headline(result)
    assert text.startswith("NOTHING JUDGED")
    assert tone == "restriction"
    assert "Nothing is judged" in verdict_sentence(result, worst=True)


def test_tolerances_left_out_are_said() -> None:
    assert verdict_sentence(screening_of(discs()), worst=True).startswith("No tolerances are considered.")
    with_tolerances = discs(assumptions={"tolerances": "default"})
    assert "No tolerances" not in verdict_sentence(screening_of(with_tolerances), worst=True)


def test_start_and_fault_sources_are_said_to_be_unjudged() -> None:
    text = discs(excitations={"start-pulse": {"at": "a", "frequency": "45.9 Hz", "when": "start"}})
    result = screening_of(text)
    assert unjudged_lines(result) == ["Not judged, sources of starts and faults: start-pulse."]
    assert headline(result)[1] == "restriction"


def test_a_rated_speed_out_of_range_is_said() -> None:
    result = screening_of(discs(operation={"rated": "1378 rpm", "range": ["1700 rpm", "1900 rpm"]}))
    assert "rated speed of 1378 rpm lies outside the range" in unjudged_lines(result)[0]
    assert any(flag.element == "operation.rated" for flag in result.flags)


def test_cases_that_are_not_clear_are_on_the_stamp() -> None:
    text = discs() + '\n[cases.slow]\nbecause = "another gear"\noperation = { rated = "1378 rpm" }\n'
    result = screening_of(text)
    assert case_lines(result) == [
        "Case slow: No tolerances are considered. Not clear: a natural frequency is met in the running range "
        "(mode 1 meets a 2x)."
    ]
    assert headline(result) == ("PASS FOR THE BASE TRAIN; 1 of 1 case not clear", "restriction")


def test_sources_of_one_line_share_a_sentence() -> None:
    text = train_text(
        {"a": 2.0, "b": 0.5, "c": 3.0},
        operation={"rated": "1378 rpm"},
        shafts={"s": ("a", "b", "10 MN m/rad")},
        couplings={"k": ("b", "c", "0.12 MN m/rad")},
        criteria={"separation": "20 %"},
    )
    result = screening_of(text)
    same = [pair for pair in result.not_clear() if pair.mode == 1 and pair.source in ("a 2x", "c 2x")]
    assert len(same) == 2
    sentences = [sentence for _, sentence in attention_sentences(result, dismissed=False)]
    assert sum("2x" in sentence for sentence in sentences) == 1
    assert "the same for" in group_sentence(result, same)


def test_cancelling_cylinders_are_not_called_a_node() -> None:
    """Four cylinders on one stiff crank: order 1 cancels by the star of phases (Den Hartog, ch. 5), not by a node."""
    stations = {"c1": 0.1, "c2": 0.1, "c3": 0.1, "c4": 0.1, "fly": 3.0, "gen": 2.0}
    shafts = {f"s{i}": (f"c{i}", f"c{i + 1}", "50 MN m/rad") for i in (1, 2, 3)}
    shafts["s4"] = ("c4", "fly", "50 MN m/rad")
    engine = {
        "kind": "reciprocating-engine",
        "strokes": 4,
        "cylinders": [{"at": f"c{i + 1}", "fires-at": f"{angle} deg"} for i, angle in enumerate((0, 540, 180, 360))],
    }
    text = train_text(
        stations,
        operation={"rated": "1500 rpm"},
        shafts=shafts,
        couplings={"ring": ("fly", "gen", "33 kN m/rad")},
        machines={"engine": engine},
    )
    result = screening_of(text)
    sentence = next(text for _, text in attention_sentences(result, dismissed=False) if "order-1 " in text)
    assert "the cylinders cancel here" in sentence
    assert "near a node" not in sentence
