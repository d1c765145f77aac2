"""Comparison: inputs that differ, modes matched by shape through crossings and veerings, verdicts and duties."""

from __future__ import annotations

import math

import numpy as np
import pytest

from quillshaft.assess.results import Screening
from quillshaft.study.compare import CaseComparison, compare, compare_cases
from quillshaft.study.matching import assign, match_modes, similarity_matrix, weighted_shapes
from quillshaft.train.problems import TrainFileError
from random_trains import random_draft
from train_files import TEXT, edited, screened
from trains import screening_of, train_text

PUMP = TEXT


def _one(text: str, case: str) -> CaseComparison:
    return compare_cases(screened(text), (case,)).cases[0]


def _branches(k_a: float, k_b: float, hub: float = 500.0, **more) -> Screening:
    """A hub with two branches of one disc each: weakly coupled through the hub's inertia."""
    stations = {"hub": hub, "a": 1.0, "b": 1.0}
    return screening_of(train_text(stations, shafts={"to-a": ("hub", "a", k_a), "to-b": ("hub", "b", k_b)}, **more))


def test_only_the_inputs_that_differ_are_listed_as_they_are_written():
    case = _one(PUMP, "new-coupling")
    assert [(c.path, c.before, c.after) for c in case.changes] == [
        ("couplings.flex-block.stiffness", '"0.145 MN m/rad"', '"0.19 MN m/rad"'),
        ("couplings.flex-block.psi", "1.1", "0.9"),
    ]
    assert case.because == "replacement element, harder grade"


def test_a_table_of_values_is_written_as_toml_with_its_keys_in_quotes():
    against_torque = '{ "0 kN m" = "0.1 MN m/rad", "9 kN m" = "0.2 MN m/rad" }'
    text = PUMP + f"[cases.other]\ncouplings.flex-block.stiffness = {against_torque}\n"
    assert _one(text, "other").changes[0].after == against_torque


def test_a_part_left_out_and_another_spelling_are_listed():
    text = (
        PUMP + '[cases.other]\nstations.gear-hub = { inertia = "0.7 kg m^2" }\nexcitations.interharmonic.omit = true\n'
    )
    changes = {c.path: (c.before, c.after) for c in _one(text, "other").changes}
    assert changes == {
        "stations.gear-hub.wr2": ('"16.6 lb ft^2"', None),
        "stations.gear-hub.inertia": (None, '"0.7 kg m^2"'),
        "excitations.interharmonic": ('{ at = "motor-core", frequency = "92 Hz" }', None),
    }


def test_an_unchanged_train_has_similarity_one_and_its_own_numbers():
    base = screened(PUMP)
    case = compare(base, {"same": base}).cases[0]
    assert all(item.mode_base == item.mode_case and item.steps == 1 for item in case.matched)
    assert [item.similarity for item in case.matched] == pytest.approx([1.0] * len(base.modes), abs=1e-12)
    assert case.changes == () == case.reapprovals
    assert not case.verdict_changes(False)
    assert not case.verdict_changes(True)


@pytest.mark.parametrize("seed", range(30))
def test_any_train_is_matched_with_itself(seed):
    base = screening_of(random_draft(seed).text())
    for match in match_modes(base, base):
        clusters = [mode.cluster for mode in base.modes]
        assert clusters[match.base] == clusters[match.case]
        assert match.similarity == pytest.approx(1.0, abs=1e-9)


@pytest.mark.parametrize("seed", range(0, 30, 3))
def test_similarities_of_one_mode_add_to_one_where_only_stiffness_changes(seed):
    """The shapes of both trains are complete orthonormal sets of one space: Parseval's identity."""
    draft = random_draft(seed)
    base = screening_of(draft.text())
    draft.springs = {name: (a, b, k * 1.7) for name, (a, b, k) in draft.springs.items()}
    case = screening_of(draft.text())
    shapes = [weighted_shapes(s.graph, s.network_modes, s.graph.inertia_kgm2) for s in (base, case)]
    raw = (shapes[0].rows.T @ shapes[1].rows) ** 2
    assert np.all(raw.sum(axis=1) <= 1.0 + 1e-9)
    assert np.all(similarity_matrix(*shapes) <= 1.0 + 1e-9)


def test_a_pump_train_keeps_its_modes_through_a_stiffness_change_and_they_rise():
    case = _one(PUMP, "new-coupling")
    assert all(item.mode_base == item.mode_case and item.similarity > 0.9 for item in case.matched)
    assert all(item.to_hz >= item.from_hz * (1 - 1e-12) for item in case.matched)


def test_branches_whose_tuning_crosses_keep_their_modes_and_change_numbers():
    base, case = _branches(0.9e6, 1.0e6), _branches(1.1e6, 1.0e6)
    found = compare(base, {"stiffer": case}).cases[0]
    pairs = {item.mode_base: item.mode_case for item in found.matched}
    assert pairs == {1: 2, 2: 1}
    assert all(item.similarity > 0.97 and item.renumbered for item in found.matched)
    of_a = found.now(1)
    assert of_a is not None
    assert of_a.to_hz / of_a.from_hz == pytest.approx(math.sqrt(1.1 / 0.9), rel=2e-3)


@pytest.mark.parametrize("hub", [1e3, 1e4, 1e6])
def test_a_mode_that_changes_its_shape_is_followed_through_a_veering(hub):
    """Branch a holds two discs, the outer spring becomes 100 times stiffer; branch b is left alone.

    Alone, branch a keeps the order of its modes (its frequencies rise and a chain has no equal ones); its lower
    one rises past the mode of branch b. Its ends are alike by about one half, so that ends alone cannot tell.
    """
    stations = {"hub": hub, "a1": 1.0, "a2": 1.0, "b": 1.0}

    def at(outer: float) -> Screening:
        shafts = {"inner": ("hub", "a1", 1e6), "outer": ("a1", "a2", outer), "to-b": ("hub", "b", 0.3e6)}
        return screening_of(train_text(stations, shafts=shafts))

    base, case = at(0.05e6), at(5e6)
    found = {item.mode_base: item for item in compare(base, {"stiff": case}).cases[0].matched}
    assert {mode: item.mode_case for mode, item in found.items()} == {1: 2, 2: 1, 3: 3}
    assert found[2].similarity > 0.97
    assert found[2].steps == 1
    assert found[1].steps > 1
    assert found[1].similarity == pytest.approx(0.5, abs=0.1)


def test_equal_branches_are_compared_as_a_subspace():
    stations = {"hub": 20.0, "a": 1.0, "b": 1.0, "c": 1.0}
    shafts = {f"to-{name}": ("hub", name, 1e6) for name in "abc"}
    base = screening_of(train_text(stations, shafts=shafts))
    case = screening_of(train_text({**stations, "hub": 30.0}, shafts=shafts))
    apart = screening_of(train_text(stations, shafts={**shafts, "to-b": ("hub", "b", 1.0001e6)}))
    assert [len(mode.cluster) for mode in base.modes] == [2, 2, 1]
    assert [m.similarity for m in match_modes(base, case)] == pytest.approx([1.0, 1.0, 1.0], abs=0.01)
    assert [m.similarity for m in match_modes(base, case)][:2] == pytest.approx([1.0, 1.0], abs=1e-9)
    assert [m.similarity for m in match_modes(base, apart)][:2] == pytest.approx([1.0, 1.0], abs=1e-3)


def test_with_a_station_more_the_other_modes_stay_matched_and_the_new_one_is_named():
    base = screened(PUMP)
    text = PUMP + (
        "[cases.ring]\nstations.ring = { inertia = 0.02 }\n"
        'shafts.ring-web = { between = ["impeller", "ring"], stiffness = "9 MN m/rad" }\n'
    )
    case = _one(text, "ring")
    assert len(case.screening.modes) == len(base.modes) + 1
    assert len(case.only_case) == 1
    new = case.screening.mode(case.only_case[0])
    assert new.kinetic_energy["ring"] > 0.5
    assert all(item.similarity > 0.95 for item in case.matched)


def test_verdict_changes_are_those_of_both_screenings():
    text = edited('"0.19 MN m/rad"', '"1.1 MN m/rad"')
    base, after = screened(text), screened(text, "new-coupling")
    case = _one(text, "new-coupling")
    numbers = {item.mode_base: item.mode_case for item in case.matched}
    for worst in (False, True):
        pick = (lambda pair: pair.worst_verdict) if worst else (lambda pair: pair.verdict)
        old = {(pair.source, pair.mode): pick(pair) for pair in base.interferences}
        new = {(pair.source, pair.mode): pick(pair) for pair in after.interferences}
        expected = {
            (source.name, mode)
            for source in base.sources
            for mode in numbers
            if old.get((source.name, mode), "clear") != new.get((source.name, numbers[mode]), "clear")
        }
        assert expected
        assert {(pair.source, pair.mode_base) for pair in case.verdict_changes(worst)} == expected


def test_wind_up_follows_the_stiffness_and_the_torque_stays():
    case = _one(PUMP, "new-coupling")
    duty = next(item for item in case.duties if item.link == "flex-block")
    assert duty.before is not None
    assert duty.after is not None
    assert duty.after.mean_torque_nm == pytest.approx(duty.before.mean_torque_nm, rel=1e-12)
    assert duty.after.wind_up_rad / duty.before.wind_up_rad == pytest.approx(0.145 / 0.19, rel=1e-12)
    assert [item.link for item in case.duties if item.changed] == ["flex-block"]


def test_what_must_be_approved_anew_names_parts_running_verdicts_dismissals_and_overload():
    text = edited("psi = 1.1 }", 'psi = 1.1, rated-torque = "8 kN m" }')
    text += (
        '[dismissals]\nv = { source = "interharmonic", mode = 2, frequency = 90, because = "quiet", by = "A. N." }\n'
    )
    text += '[cases.more]\noperation.rated = "1400 rpm"\npower.motor-core = "1300 kW"\nstations.pinion.inertia = 0.3\n'
    case = _one(text, "more")
    kinds = [(item.kind, item.subject) for item in case.reapprovals]
    assert ("data", "stations.pinion") in kinds
    assert ("running", "operation") in kinds
    assert ("running", "power") in kinds
    assert ("dismissal", "v") in kinds
    assert ("duty", "flex-block") in kinds


def test_cases_are_set_against_the_base_each_by_itself():
    text = PUMP + '[cases.light]\nstations.impeller.inertia = "5 kg m^2"\n'
    found = compare_cases(screened(text), ("light", "new-coupling"))
    assert [case.name for case in found.cases] == ["light", "new-coupling"]
    assert {change.subject for change in found.cases[1].changes} == {"couplings.flex-block"}


def test_a_case_that_changes_nothing_and_an_unknown_one_are_refused_together():
    text = PUMP + '[cases.same]\nstations.pinion.inertia = "0.21 kg m^2"\n'
    with pytest.raises(TrainFileError) as caught:
        compare_cases(screened(text), ("same", "new-copling"))
    assert "changes nothing" in str(caught.value)
    assert 'did you mean "new-coupling"' in str(caught.value)


def test_without_a_case_there_is_nothing_to_compare():
    with pytest.raises(ValueError, match="needs a case"):
        compare(screened(PUMP), {})


def test_the_assignment_has_the_largest_total_and_keeps_the_order_among_equals():
    scores = np.array([[0.9, 0.8], [0.8, 0.1]])
    assert assign(scores) == [(0, 1), (1, 0)]
    assert assign(np.full((3, 3), 0.5)) == [(0, 0), (1, 1), (2, 2)]
