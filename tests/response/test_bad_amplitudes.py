"""What a response refuses, in words for the user."""

from __future__ import annotations

import pytest
from response_trains import engine_text, plain_text, response_of

from quillshaft.train.problems import TrainFileError


def refused(text: str) -> str:
    with pytest.raises(TrainFileError) as caught:
        response_of(text)
    return str(caught.value)


def test_an_amplitude_in_per_cent_needs_a_mean_torque():
    message = refused(plain_text("2 %"))
    assert "[excitations.shake] torque" in message
    assert "mean torque" in message
    assert "[power]" in message


def test_an_amplitude_of_no_source_names_the_nearest():
    message = refused(plain_text(amplitudes={"drivr 1x": "10 N m"}, excitations_off={"driver 1x": "x y z"}))
    assert "no source of this name" in message


def test_a_train_without_any_amplitude_is_refused_with_the_ways_out():
    text = plain_text().replace(', "torque" = "100 N m"', "")
    message = refused(text)
    assert "no source of this train has an amplitude" in message
    assert "ordinary" in message


def test_a_mode_without_damping_is_refused_and_never_infinite():
    shaft = {"between": ["driver", "load"], "stiffness": 1e5, "viscous": "1e-6 N m s/rad"}
    message = refused(plain_text(shafts={"shaft": shaft}))
    assert "mode 1" in message
    assert "no damping" in message


def test_an_excitation_locked_to_an_engine_must_fit_its_cycle():
    more = {"pump-wave": {"at": "flywheel", "order": 1.3, "torque": "20 N m", "locked-with": "engine"}}
    message = refused(engine_text(excitations=more))
    assert "[excitations.pump-wave] order" in message
    assert "multiple" in message


def test_ordinary_amplitudes_are_taken_only_when_asked_for_and_are_listed():
    power = {"driver": 100, "load": "balance", "law": "constant-torque"}
    text = (
        plain_text(power=power)
        .replace("[excitations-off]", "[excitations-off]\n")
        .replace('"driver 1x" = "not looked at"\n', "")
    )
    response = response_of(text)
    assert "driver 1x" in response.unjudged
    asked = text.replace('"tolerances" = "none"', '"tolerances" = "none"\n"amplitudes" = "ordinary"')
    response = response_of(asked)
    assert "driver 1x" not in response.unjudged
    assert any(item.element == "driver 1x" and "ordinary" in item.why for item in response.assumed)


def test_two_amplitudes_of_one_source_are_refused():
    text = plain_text(amplitudes={"driver 1x": "5 N m", "load 1x": "0 N m"}).replace(
        '"driver 1x" = "not looked at"\n', ""
    )
    message = refused(text)
    assert '[amplitudes."load 1x"]' in message
    assert "another name of the source that driver 1x" in message


def test_an_amplitude_that_stands_for_another_source_on_the_same_line_is_listed_as_assumed():
    text = plain_text(
        machines={"pump": {"kind": "centrifugal-pump", "at": "load", "vanes": 5}},
        excitations={"wave": {"at": "load", "order": 5, "torque": "70 N m"}},
    )
    response = response_of(text)
    (found,) = [item for item in response.assumed if item.element == "pump vane-pass"]
    assert found.value == "that of wave"
    assert "along the same line" in found.why
