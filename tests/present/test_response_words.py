"""The forced response in words, rows and JSON: the answer first, units as declared, nothing that is not finite."""

from __future__ import annotations

import json
import math
from dataclasses import replace

import numpy as np
import pytest
from response_set import FAILED, KEPT, SILENT, generator, in_us_units, settled

from quillshaft.assess.response_results import Closing
from quillshaft.assess.response_standing import standing
from quillshaft.present import response_limits_words as limits
from quillshaft.present import response_rows as rows
from quillshaft.present import response_sources_rows as basis
from quillshaft.present import response_torque_rows as torques
from quillshaft.present import response_words as words
from quillshaft.present.response_csv import RESPONSE_FILES, response_csv
from quillshaft.present.response_duty_words import coupling_lines, damper_lines, generator_lines
from quillshaft.present.response_json import response_data, response_json
from quillshaft.present.response_values import celsius_text, finding_text, use_text, value_cells
from quillshaft.present.six_digits import numbers


@pytest.mark.parametrize(
    ("response", "outcome", "said"),
    [
        (settled(), "pass", "Passes: every limit is kept, every open interference is cleared."),
        (settled((KEPT, SILENT)), "pass", "Passes as far as limits are given: all of them are kept"),
        (settled(barred=True), "restricted", "Passes with restriction: 1117 to 1286 rpm must be barred."),
        (settled((KEPT, FAILED)), "fail", "Does not pass: 1 limit exceeded."),
        (settled(status="not cleared"), "fail", "Does not pass: 3 interferences not cleared."),
        (settled(status="not judged: no amplitude"), "not judged", "Not judged throughout: 3 interferences left open"),
        (settled((SILENT,)), "not judged", "Not judged: no limit is given"),
        (settled((replace(KEPT, check="mean torque"),)), "not judged", "Not judged: no limit is given"),
    ],
)
def test_the_answer_comes_first_and_a_pass_needs_everything_closed(response, outcome, said) -> None:
    found = standing(response)
    assert found.verdict == outcome
    assert found.settled == (outcome in ("pass", "restricted"))
    assert words.answer_sentences(response)[0].startswith(said)


def test_a_limit_exceeded_only_with_a_cylinder_dead_asks_for_less_load() -> None:
    response = settled((KEPT, replace(FAILED, case="engine cylinder 3 dead", case_kind="dead cylinder")))
    found = standing(response)
    assert (found.verdict, found.settled, found.clean) == ("restricted", True, False)
    said = words.answer_sentences(response)
    assert said[0] == "Passes with restriction: at most 60 % of full load with engine cylinder 3 dead."
    assert "1 exceeds it, only with a cylinder dead" in said[2]


@pytest.mark.parametrize(("lowest", "outcome"), [(690.0, "pass"), (700.4, "pass"), (712.3, "restricted")])
def test_a_stated_idle_below_the_lowest_is_a_restriction_on_page_one(lowest, outcome) -> None:
    response = settled()
    assert response.screening.train.operation.idle_rad_s == pytest.approx(700 * math.pi / 30)
    found = replace(response, restrictions=replace(response.restrictions, lowest_idle_rpm=lowest))
    assert standing(found).verdict == outcome
    said = words.answer_sentences(found)[0]
    assert (said == "Passes with restriction: idle at 713 rpm or above.") == (outcome == "restricted")
    assert any("700 rpm lies BELOW it" in line for line in limits.restriction_sentences(found)) == (
        outcome == "restricted"
    )


def test_a_damper_at_fault_is_told_beside_the_verdict() -> None:
    faulty = replace(settled(), faults=(replace(FAILED, case="normal, nose seized", case_kind="damper"),))
    assert standing(faulty).verdict == "pass"
    lines = words.fault_sentences(faulty)
    assert "Not part of the verdict" in lines[0]
    assert "case normal, nose seized" in lines[1]
    assert words.fault_sentences(settled()) == []


def test_an_interference_without_a_closing_is_still_open() -> None:
    found = standing(replace(settled(), closings=()))
    assert found.verdict == "not judged"
    assert len(found.unclosed) == 3
    lines = words.closed_sentences(replace(settled(), closings=()))
    assert all(text.endswith("Forced response: NOT JUDGED.") for _, text in lines)


def test_the_governing_item_is_told_with_value_limit_speed_and_case() -> None:
    said = words.answer_sentences(settled())[1]
    assert said == (
        "Governing: ring, vibratory torque: 800 of 1000 N·m (80 % of the limit) at 1480 rpm in continuous running, "
        "case normal."
    )


def test_interferences_alike_share_a_sentence_and_open_ones_come_first() -> None:
    response = settled()
    first = replace(response.closings[0], status="not cleared", text="mode 2 with it: 120 %", finding=FAILED)
    mixed = replace(response, closings=(*response.closings[1:], first))
    statuses = [status for status, _ in words.closing_sentences(mixed)]
    assert statuses == ["NOT CLEARED", "cleared by response"]
    ((status, text),) = words.closing_sentences(response)
    assert status == "cleared by response"
    assert text.startswith(
        "Mode 2 (136.90 Hz) with engine order-5.5, engine order-6 and engine order-5: ring, vibratory torque"
    )


def test_a_reason_in_brackets_is_not_repeated() -> None:
    text = "mode 2 with engine order-6: no limit is known for a (none is stated), b (none is stated), c (no rating)"
    item = Closing("engine order-6", 2, "not judged: no limit", text, None)
    ((_, said),) = words.closing_sentences(replace(settled(), closings=(item,)))
    assert said.endswith("no limit is known for a, b (none is stated), c (no rating).")


def test_findings_stand_with_the_worst_first_and_those_without_a_limit_last() -> None:
    found = rows.finding_rows(settled((SILENT, KEPT, FAILED)))
    assert [row[-1] for row in found] == ["FAIL", "pass", "no limit"]
    assert found[0][2:6] == ("1500", "1000", "N·m", "150")
    assert found[2][3] == "–"
    assert rows.finding_rows(settled(), links=("stub",)) == []


@pytest.mark.parametrize(
    ("value", "unit", "shown"),
    [
        (100.0, "N·m", ("885.1", "lbf·in")),
        (10.0, "MPa", ("1450", "psi")),
        (100.0, "degC", ("212", "°F")),
        (620.0, "W", ("620", "W")),
        (0.5, "", ("0.5", "")),
    ],
)
def test_values_follow_the_declared_units(value: float, unit: str, shown: tuple[str, str]) -> None:
    response = in_us_units(settled())
    cells = value_cells(response, replace(KEPT, value=value, limit=None, unit=unit))
    assert (cells[0], cells[2]) == shown
    assert celsius_text(response, 373.15) == "212 °F"
    assert celsius_text(settled(), 373.15) == "100 °C"


def test_use_beside_100_per_cent_is_never_rounded_to_it() -> None:
    assert [use_text(use) for use in (0.9996, 1.0004, 1.0, 0.034, math.inf, None)] == [
        "99.96 %",
        "100.04 %",
        "100 %",
        "3.4 %",
        "without bound",
        "–",
    ]


def test_a_limit_of_nothing_is_told_as_kept_or_exceeded() -> None:
    item = replace(FAILED, limit=0.0)
    assert "(exceeded)" in finding_text(settled(), item)


def test_torques_name_the_worst_dead_cylinder_of_each_link() -> None:
    response = generator()
    found = torques.rated_torque_rows(response)
    assert [row[0] for row in found[:2]] == ["crank-12", ""]
    assert found[1][1] == "engine cylinder 3 dead"
    at = int(np.argmin(np.abs(response.speed_rad_s - response.screening.train.operation.rated_rad_s)))
    assert float(found[0][4]) == pytest.approx(response.normal.alternating_torque_nm[0][at], rel=1e-3)
    most = torques.largest_torque_rows(response, links=("ring",))
    assert float(most[0][4]) == pytest.approx(np.max(response.normal.alternating_torque_nm[-1]), rel=1e-3)


def test_leading_orders_add_up_to_what_each_link_carries() -> None:
    response = generator()
    at = int(np.argmin(np.abs(response.speed_rad_s - response.screening.train.operation.rated_rad_s)))
    ((_, *leading, rest),) = torques.order_rows(response, links=("ring",))
    total = sum(float(cell.rsplit(" ", 1)[1]) for cell in leading) + float(rest)
    assert total == pytest.approx(sum(share.torque_nm[-1][at] for share in response.shares), rel=0.01)


def test_generators_couplings_and_restrictions_are_told() -> None:
    response = generator()
    assert "electrical degrees (4 poles)" in generator_lines(response)[0]
    heat = " ".join(coupling_lines(response))
    assert "620 W are permitted" in heat
    assert "RUNS AWAY" in heat
    assert damper_lines(response) == []
    said = " ".join(limits.restriction_sentences(response))
    assert "Do not run continuously between 1117 and 1286 rpm" in said
    assert "The stated idle of 700 rpm lies BELOW it" in said
    assert "reduce to 60 % of full load" in said
    assert rows.passage_rows(response)[0][-1] == "80.0 %"
    assert rows.gauge_rows(response)[0][0] == "1"
    assert "±12.8 µstrain" in limits.gauge_sentences(response)[0]


def test_damping_and_what_is_not_known_are_told() -> None:
    response = generator()
    said = words.spread_sentence(response, torques.spread_shares(response))
    assert said is not None
    assert "Low damping is judged" in said
    assert words.spread_sentence(response, []) is None
    assert words.unjudged_sentence(response) == "Not in the response, as the file gives no amplitude: pulley 1x."
    assert "off by a factor of two" in words.response_cautions(response)[0]
    recalled = replace(response, findings=(replace(KEPT, basis="class rules, recalled"),))
    assert "confirm their figures" in words.response_cautions(recalled)[-1]


def test_all_orders_of_an_engine_are_one_amplitude() -> None:
    found = basis.amplitude_rows(generator())
    assert found == [
        (
            "engine, 24 orders",
            "its cylinders",
            "orders of its cycle",
            "by order, cylinder by cylinder",
            "gas torque of engine, as the file states them",
        )
    ]


# JSON and CSV


def test_json_holds_no_number_that_is_not_finite_and_six_digits() -> None:
    response = generator()
    unknown = replace(response.normal, mean_torque_nm=np.nan * response.normal.mean_torque_nm)
    data = json.loads(response_json(replace(response, cases=(unknown, *response.cases[1:]))))
    assert set(data["links"]["ring"]["mean_torque_nm"]) == {None}
    assert data["speeds_rpm"][-1] == 1725.0
    whole = response_data(response)
    ring = whole["links"]["ring"]["alternating_torque_nm"]
    assert ring == pytest.approx(response.normal.alternating_torque_nm[-1], rel=1e-5)
    assert all(len(repr(value).replace(".", "").lstrip("0").split("e")[0]) <= 7 for value in ring)
    shaft = whole["links"]["crank-12"]
    assert shaft["stress_mpa"][5] == pytest.approx(
        shaft["alternating_torque_nm"][5] * response.limits[0].mpa_per_nm, 1e-5
    )
    assert whole["links"]["ring"]["stress_mpa"] is None
    assert whole["by_order"]["ring"]["order"][0] in (0.5, 1, 3, 6)


def test_numbers_keep_zero_sign_and_size() -> None:
    assert numbers(np.array([0.0, -1234567.8, 1.23456789e-9, np.nan, np.inf])) == [
        0.0,
        -1234570.0,
        1.23457e-9,
        None,
        None,
    ]


def test_csv_has_a_row_for_each_case_and_speed() -> None:
    response = generator()
    made = response_csv(response)
    assert tuple(made) == RESPONSE_FILES
    lines = made["response-alternating.csv"].splitlines()
    assert len(lines) == 1 + len(response.cases) * len(response.speed_rad_s)
    assert lines[0].startswith("case,judged,speed [rpm],crank-12 [N m]")
    assert len(made["response-findings.csv"].splitlines()) == 1 + len(response.findings)
