"""Sources by name: merged rows, aliases, sources switched off, names that do not exist."""

from __future__ import annotations

import pytest

from trains import refusal, screening_of, sources_of, train_text

STATIONS = {"motor": 10.0, "hub": 1.0, "rotor": 6.0}
SHAFTS = {"stub": ("motor", "hub", 5e6)}
COUPLINGS = {"flex": ("hub", "rotor", 2e5)}


def text(**tables):
    return train_text(STATIONS, shafts=SHAFTS, couplings=COUPLINGS, **tables)


def names(result):
    return [source.name for source in result.active]


def test_two_sources_on_one_station_and_one_line_are_one_row_with_both_origins():
    machines = {
        "pump": {"kind": "centrifugal-pump", "at": "rotor", "vanes": 4},
        "drive": {"kind": "generator", "at": "rotor", "poles": 8},
    }
    # Four vanes and four pole pairs: 4 N both; 8 N both.
    found = sources_of(text(machines=machines))
    merged = {source.name: source.origins for source in found.active if len(source.origins) > 1}
    assert merged == {
        "pump vane-pass": ("pump vane-pass", "drive line-1x"),
        "pump vane-pass 2x": ("pump vane-pass 2x", "drive line-2x"),
    }


def test_a_merged_row_answers_to_each_of_its_names():
    excitations = {"tone": {"at": "rotor", "order": 6}}
    machines = {"pump": {"kind": "centrifugal-pump", "at": "rotor", "vanes": 6}}
    result = screening_of(text(machines=machines, excitations=excitations))
    assert result.source("tone") is result.source("pump vane-pass")
    with pytest.raises(KeyError):
        result.source("vane")


def test_a_merged_row_keeps_the_torque_that_one_of_them_states():
    excitations = {"tone": {"at": "rotor", "order": 6, "torque": "1.5 %"}}
    machines = {"pump": {"kind": "centrifugal-pump", "at": "rotor", "vanes": 6}}
    found = next(s for s in sources_of(text(machines=machines, excitations=excitations)).active if s.order == 6)
    assert found.torque == "1.5 % of mean torque"


def test_sources_that_differ_in_station_line_band_or_time_stay_apart():
    machines = {
        "pump": {"kind": "centrifugal-pump", "at": "rotor", "vanes": 6},
        "motor-1": {"kind": "induction-motor", "at": "motor", "poles": 4, "supply": "50 Hz"},
    }
    excitations = {
        "same-order-elsewhere": {"at": "hub", "order": 6},
        "only-at-start": {"at": "rotor", "order": 6, "when": "start"},
        "offset": {"at": "rotor", "order": 6, "frequency": "1 Hz"},
        "steady-tone": {"at": "motor", "frequency": "50 Hz"},
    }
    found = sources_of(text(machines=machines, excitations=excitations))
    assert all(len(source.origins) == 1 for source in found.active)


def test_a_sign_turned_round_is_the_same_line():
    # |4 N − 50| = |−4 N + 50|.
    excitations = {
        "one": {"at": "rotor", "order": 4, "frequency": "-50 Hz"},
        "two": {"at": "rotor", "order": -4, "frequency": "50 Hz"},
        "other": {"at": "rotor", "order": 4, "frequency": "50 Hz"},
    }
    found = sources_of(text(excitations=excitations))
    assert [source.origins for source in found.active if "one" in source.origins] == [("one", "two")]
    assert "other" in names(found)


def test_the_sign_of_a_frequency_alone_does_not_make_another_line():
    excitations = {"one": {"at": "rotor", "frequency": "-50 Hz"}, "two": {"at": "rotor", "frequency": "50 Hz"}}
    found = sources_of(text(excitations=excitations))
    assert [source.origins for source in found.active if "one" in source.origins] == [("one", "two")]


def test_a_source_switched_off_is_listed_with_its_reason_and_not_judged():
    result = screening_of(text(excitations_off={"motor 2x": "rigid flanges"}))
    assert "motor 2x" not in {pair.source for pair in result.interferences}
    assert [(source.name, reason) for source, reason in result.sources_off] == [("motor 2x", "rigid flanges")]


def test_a_shaft_lines_sources_answer_to_each_of_its_stations():
    result = screening_of(text(excitations_off={"hub 1x": "balanced with its coupling"}))
    assert [source.name for source, _ in result.sources_off] == ["motor 1x"]


def test_one_of_two_merged_sources_can_be_switched_off():
    machines = {
        "pump": {"kind": "centrifugal-pump", "at": "rotor", "vanes": 4},
        "drive": {"kind": "generator", "at": "rotor", "poles": 8},
    }
    found = sources_of(text(machines=machines, excitations_off={"drive line-1x": "sine-wave loads only"}))
    assert next(s for s in found.active if s.order == 4).origins == ("pump vane-pass",)


def test_an_unknown_source_switched_off_is_refused_with_the_nearest_name():
    message = refusal(text(excitations_off={"motr 2x": "rigid flanges"}))
    assert "there is no source of this name" in message
    assert "motor 2x" in message


def test_an_own_source_may_not_take_a_name_that_is_implied():
    assert "already has this name" in refusal(text(excitations={"rotor 1x": {"at": "rotor", "order": 7}}))


def test_criteria_for_an_unknown_kind_are_refused():
    criteria = {"separation": {"default": "10 %", "engin": "5 %"}}
    assert "no source is of this kind" in refusal(text(criteria=criteria))


def test_an_order_at_a_resting_station_is_refused():
    stage = {"kind": "epicyclic", "sun": "sun", "ring": "ring", "carrier": "carrier", "planets": 3}
    resting = train_text(
        {"sun": 1.0, "ring": 2.0, "carrier": 5.0},
        gears={"stage": {**stage, "teeth": {"sun": 24, "ring": 96}}},
        operation={"speeds": {"ring": "0 rpm"}},
        ties={"arm": ("ring", 1e6)},
        excitations={"shake": {"at": "ring", "order": 2}},
    )
    assert "an order needs a station that turns" in refusal(resting)
    accepted = resting.replace('"order" = 2', '"frequency" = "30 Hz"')
    assert "shake" in names(sources_of(accepted))
