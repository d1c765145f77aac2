"""From pairs to the train's verdicts: dismissals, their binding to mode and frequency, and the worst pair."""

from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from quillshaft.assess.results import SEVERITY
from trains import refusal, screening_of, train_text

# Two discs at f = √(k (1/J1 + 1/J2))/2π; 2x of 1500 rpm is 50 Hz, the judged range 49 to 51 Hz.
BECAUSE = {"because": "measured torque below 2 % of mean", "by": "site test"}


def stiffness_for(hz):
    return (2 * math.pi * hz) ** 2 / (1 / 1.0 + 1 / 2.0)


def text(hz=52.0, **tables):
    return train_text({"a": 1.0, "b": 2.0}, shafts={"s": ("a", "b", stiffness_for(hz))}, **tables)


def dismissal(**row):
    return {"known": {"source": "a 2x", "mode": 1, "frequency": "52 Hz", **BECAUSE, **row}}


def pair(result, source="a 2x"):
    return next(item for item in result.interferences if item.source == source)


@pytest.mark.parametrize(("hz", "verdict"), [(52.0, "close"), (50.0, "crossing"), (43.0, "clear"), (45.0, "close")])
def test_the_trains_verdict_is_that_of_its_worst_pair(hz, verdict):
    result = screening_of(text(hz))
    assert pair(result).verdict == result.verdict == result.worst_verdict == verdict


def test_tolerances_count_in_the_worst_verdict_only():
    assumptions = {"tolerances": "default"}
    result = screening_of(text(57.0, assumptions=assumptions))
    # ±5 % on stiffness and inertia: f · √(0.95/1.05) = 54.2 Hz, 6.3 % over 51 Hz.
    assert (result.verdict, result.worst_verdict) == ("clear", "close")
    assert pair(result).worst_margin == pytest.approx((57 * math.sqrt(0.95 / 1.05) - 51) / 51, rel=1e-9)


def test_worst_case_separation_of_its_own_is_used():
    criteria = {"separation": "10 %", "worst-case-separation": "0 %"}
    result = screening_of(text(57.0, assumptions={"tolerances": "default"}, criteria=criteria))
    assert (result.verdict, result.worst_verdict) == ("clear", "clear")
    assert pair(result).worst_required == 0.0


def test_a_dismissed_pair_stays_in_the_table_and_out_of_the_verdict():
    result = screening_of(text(dismissals=dismissal()))
    assert pair(result).dismissed is not None
    assert pair(result).dismissed.because == BECAUSE["because"]
    assert pair(result).verdict == "close"
    assert (result.verdict, result.worst_verdict) == ("clear", "clear")
    assert result.not_clear()[-1] == pair(result)
    assert result.stale_dismissals == ()


def test_a_dismissal_covers_its_own_pair_only():
    excitations = {"other": {"at": "b", "order": 2}}
    result = screening_of(text(dismissals=dismissal(), excitations=excitations))
    assert result.verdict == "close"
    assert pair(result, "other").dismissed is None


def test_a_dismissal_works_by_an_alias_of_the_source():
    assert screening_of(text(dismissals=dismissal(source="b 2x"))).verdict == "clear"


@pytest.mark.parametrize(("frequency", "applies"), [
    (52.0 / 1.0299, True),
    (52.0 / 1.0301, False),
    (52.0 / 0.9701, True),
    (52.0 / 0.9699, False),
])  # fmt: skip
def test_a_dismissal_is_stale_beyond_three_percent_of_frequency(frequency, applies):
    result = screening_of(text(dismissals=dismissal(frequency=f"{frequency} Hz")))
    assert (pair(result).dismissed is not None) is applies
    assert len(result.stale_dismissals) == (0 if applies else 1)
    assert result.verdict == ("clear" if applies else "close")
    if not applies:
        assert "mode 1 is now at 52.00 Hz" in result.stale_dismissals[0].why


def test_a_dismissal_of_another_mode_number_is_stale():
    result = screening_of(text(dismissals=dismissal(mode=2)))
    assert result.verdict == "close"
    assert result.stale_dismissals[0].why == "there is no mode 2"


def test_a_dismissal_of_an_unknown_source_is_refused():
    assert "there is no source of this name" in refusal(text(dismissals=dismissal(source="a 3x")))


def test_a_dismissal_of_a_source_switched_off_is_stale():
    result = screening_of(text(dismissals=dismissal(), excitations_off={"a 2x": "rigid flanges"}))
    assert "there is no source a 2x" in result.stale_dismissals[0].why


CASES = {"hot": {"because": "warm", "shafts": {"s": {"stiffness": stiffness_for(51.9)}}}}


def test_in_a_case_a_dismissal_applies_only_where_it_lists_the_case():
    base_only = text(dismissals=dismissal(), cases=CASES)
    assert screening_of(base_only).verdict == "clear"
    hot = screening_of(base_only, ("hot",))
    assert hot.verdict == "close"
    assert hot.stale_dismissals[0].why == "it is not stated for the case hot"
    listed = text(dismissals=dismissal(cases=["hot"]), cases=CASES)
    assert screening_of(listed, ("hot",)).verdict == "clear"
    assert screening_of(listed).verdict == "clear"


def test_with_two_cases_a_dismissal_must_list_both():
    cases = {**CASES, "light": {"because": "dry", "stations": {"b": {"inertia": 1.99}}}}
    one = text(dismissals=dismissal(cases=["hot"]), cases=cases)
    both = text(dismissals=dismissal(cases=["hot", "light"]), cases=cases)
    assert "light" in screening_of(one, ("hot", "light")).stale_dismissals[0].why
    assert screening_of(both, ("hot", "light")).verdict == "clear"


def test_a_barred_crossing_is_worse_than_clear_and_better_than_close():
    operation = {"rated": "1500 rpm", "range": ["900 rpm", "1500 rpm"]}
    barred = {"barred": [["1150 rpm", "1250 rpm"]], "barred-because": "interlock"}
    result = screening_of(text(40.0, operation={**operation, **barred}))
    assert pair(result).verdict == result.verdict == "barred"
    assert SEVERITY["clear"] < SEVERITY["barred"] < SEVERITY["close"] < SEVERITY["crossing"]


def test_not_clear_pairs_come_worst_first():
    excitations = {"hum": {"at": "a", "frequency": "52 Hz"}}
    result = screening_of(text(52.0, excitations=excitations))
    assert [item.source for item in result.not_clear()] == ["hum", "a 2x"]


@given(st.floats(10, 120), st.floats(0, 0.2), st.floats(0, 0.2), st.sampled_from(["excitation", "natural"]))
@settings(max_examples=60, deadline=None, derandomize=True)
def test_with_equal_requirements_the_worst_case_is_never_better(hz, stiffer, heavier, on):
    stations = {"a": {"inertia": 1.0, "tolerance": heavier}, "b": 2.0}
    shafts = {"s": {"between": ["a", "b"], "stiffness": stiffness_for(hz), "tolerance": [-stiffer, stiffer / 2]}}
    operation = {"range": ["900 rpm", "1500 rpm"]}
    result = screening_of(train_text(stations, shafts=shafts, criteria={"margin-on": on}, operation=operation))
    assert SEVERITY[result.worst_verdict] >= SEVERITY[result.verdict]
    for item in result.interferences:
        assert SEVERITY[item.worst_verdict] >= SEVERITY[item.verdict]
        assert abs(item.worst_margin) <= abs(item.margin) * (1 + 1e-12)
