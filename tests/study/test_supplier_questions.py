"""Questions to suppliers: what decides, looks odd, is missing or was assumed, numbered for each supplier."""

from __future__ import annotations

import pytest

from quillshaft.assess.questions import OPERATOR, supplier_questions, uncertainty_shares
from quillshaft.assess.results import Screening
from quillshaft.present.question_rows import question_lines, question_rows
from train_files import MORE, TEXT, edited, screened
from trains import screening_of, train_text


def _asked(screening: Screening, element: str) -> list[str]:
    return [item.text for item in supplier_questions(screening) if element in item.element.split(", ")]


def test_questions_are_numbered_from_one_for_each_supplier_and_grouped():
    found = supplier_questions(screened(TEXT + MORE))
    suppliers = [item.supplier for item in found]
    for supplier in set(suppliers):
        numbers = [item.number for item in found if item.supplier == supplier]
        assert numbers == list(range(1, len(numbers) + 1))
        first = suppliers.index(supplier)
        assert suppliers[first : first + len(numbers)] == [supplier] * len(numbers)


def test_the_supplier_is_the_source_of_the_element_else_said_to_be_not_named():
    text = edited(
        'wheel      = { inertia = "3.9 kg m^2" }', 'wheel = { inertia = "3.9 kg m^2", source = "gear sheet" }'
    )
    found = {item.element: item.supplier for item in supplier_questions(screened(text))}
    assert found["stations.wheel"] == "gear sheet"
    assert found["stations.pinion"] == "not named: stations.pinion"


def test_every_question_is_a_full_sentence_and_no_pattern_is_left_unfilled():
    for item in supplier_questions(screened(TEXT + MORE)):
        assert item.text[0].isupper()
        assert item.text[-1] in ".?"
        assert "{" not in item.text


def test_every_assumed_value_of_a_part_is_asked_about():
    screening = screened(TEXT + MORE)
    own = ("operation", "criteria", "assumptions")
    asked = {name for item in supplier_questions(screening) for name in item.element.split(", ")}
    assert {item.element for item in screening.assumed if item.element.split(".")[0] not in own} <= asked


def test_every_flag_is_a_question():
    screening = screened(edited("psi = 1.1", "psi = 3.1"))
    assert screening.flags
    for flag in screening.flags:
        assert any(flag.text in text for text in _asked(screening, flag.element))


def test_equal_limits_of_one_supplier_are_asked_for_in_one_question():
    sheet = {"source": "maker's sheet"}
    stations = {name: {"inertia": 2.0, **sheet} for name in ("a", "b", "c")}
    shafts = {"s": ("a", "b", 1e6), "t": ("b", "c", 1e6)}
    screening = screening_of(train_text(stations, shafts=shafts, assumptions={"tolerances": "default"}))
    limits = [item for item in supplier_questions(screening) if item.supplier == "maker's sheet" and "±5" in item.text]
    assert [item.element for item in limits] == ["stations.a, stations.b, stations.c"]


def test_a_value_that_holds_most_of_a_critical_modes_uncertainty_is_decisive_and_asked_once():
    """Two discs: the energy shares are J2/(J1 + J2) and J1/(J1 + J2) (closed form), the spring's is 1."""
    text = train_text(
        {"a": {"inertia": 1.0, "tolerance": "1 %"}, "b": {"inertia": 3.0, "tolerance": "2 %"}},
        couplings={"c": {"between": ["a", "b"], "stiffness": 1e5}},
        excitations={"pulse": {"at": "a", "frequency": "58 Hz"}},
        assumptions={"tolerances": "default"},
    )
    screening = screening_of(text)
    shares = uncertainty_shares(screening, screening.mode(1))
    total = 0.15 + 0.75 * 0.01 + 0.25 * 0.02
    assert shares["couplings.c", "stiffness"] == pytest.approx(0.15 / total, rel=1e-9)
    assert shares["stations.b", "inertia"] == pytest.approx(0.25 * 0.02 / total, rel=1e-9)
    asked = _asked(screening, "couplings.c")
    assert asked[0].startswith("How sure is the stiffness of couplings.c")
    assert "not clear of pulse" in asked[0]
    assert sum("limits" in text for text in asked) == 1
    assert not [
        item for item in supplier_questions(screening) if item.kind == "decisive" and "stations" in item.element
    ]


def test_what_the_operator_has_to_say_goes_to_the_operator():
    text = train_text(
        {"crank": 1.0, "flywheel": 9.0},
        shafts={"s": ("crank", "flywheel", 1e6)},
        machines={
            "engine": {
                "kind": "reciprocating-engine",
                "strokes": 4,
                "cylinders": [{"at": "crank", "fires-at": "0 deg"}],
            }
        },
    )
    found = supplier_questions(screening_of(text))
    assert any(item.supplier == OPERATOR and "idle" in item.text for item in found)


def test_rows_and_lines_hold_the_same_questions():
    screening = screened(TEXT)
    rows, lines = question_rows(screening), question_lines(screening)
    assert [row[3] for row in rows] == [line.split(". ", 1)[1] for line in lines if line.startswith("  ")]


def test_a_train_that_states_everything_leaves_nothing_to_ask():
    stations = {name: {"inertia": value, "tolerance": "1 %"} for name, value in (("a", 3.0), ("b", 4.0))}
    text = train_text(stations, shafts={"s": {"between": ["a", "b"], "stiffness": 1e9, "tolerance": "0 %"}})
    assert question_lines(screening_of(text))[0].startswith("There is nothing to ask")
