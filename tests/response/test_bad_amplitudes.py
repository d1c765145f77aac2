"""What a response refuses, in words for the user."""

from __future__ import annotations

import numpy as np
import pytest
from response_trains import RPM, engine_text, plain_text, response_of

from quillshaft.train.problems import TrainFileError
from trains import screening_of


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


def test_what_is_switched_off_is_said_with_an_amplitude_that_goes_unused():
    response = response_of(plain_text(amplitudes={"driver 1x": "5 N m"}))
    assert "switched off by the file, so not here: driver 1x, driver 2x" in response.notes
    assert any("driver 1x" in note and "not used" in note for note in response.notes)


def test_a_locked_excitation_without_a_phase_lists_the_one_taken_and_takes_no_order_below_0():
    shake = {"at": "driver", "order": 1, "torque": "100 N m", "locked-with": "third"}
    third = {"at": "driver", "order": 3, "torque": "30 N m"}
    screening = screening_of(plain_text(excitations={"shake": shake, "third": third}))
    (found,) = [item for item in screening.train.assumed if item.key == "phase"]
    assert (found.element, found.value) == ("excitations.shake", "0°")
    assert "an order above 0" in refused(plain_text(excitations={"shake": {**shake, "order": -1}, "third": third}))


def test_a_compressor_has_no_light_load_case_as_its_gas_does_not_follow_the_load():
    assert [case.kind for case in response_of(plain_text(power=POWER)).cases].count("light load") == 0
    assert [case.kind for case in response_of(engine_text()).cases].count("light load") == 1


POWER = {"driver": 100, "load": "balance", "law": "constant-torque"}


@pytest.mark.parametrize(
    ("law", "said"),
    [
        ({"900 rpm": "20 %", "1400 rpm": "50 %"}, "gives 50 % of rated power at rated speed, 1500 rpm"),
        ({"300 rpm": "10 %"}, "gives 10 % of rated power"),
        ({"0 rpm": "100 %"}, "gives no share at a speed above 0"),
        ({"900 rpm": "20 %", "1500 rpm": "100 %"}, None),
    ],
)
def test_a_load_law_that_is_not_whole_at_rated_speed_is_refused(law, said):
    text = plain_text(power={"driver": 100, "load": "balance", "law": law})
    if said is not None:
        assert said in refused(text)
        return
    response = response_of(text)
    case, speeds = response.normal, response.speed_rad_s
    low = float(abs(case.mean_torque_nm[0, 0]))
    full = 100e3 / (1500 * RPM)
    assert speeds[0] < 500 * RPM
    assert low == pytest.approx(full * 0.2 * 1500 / 900, rel=1e-9)  # held below the first point
    assert any(item.key == "law" and "from 900 to 1500 rpm" in item.value for item in response.assumed)


def test_an_idle_above_the_range_is_refused():
    assert "lies above the rated speed" in refused(plain_text(operation={"idle": "1800 rpm"}))


def test_a_load_law_may_begin_at_standstill():
    """Power in proportion to speed is one torque at every speed."""
    law = {"0 rpm": "0 %", "1500 rpm": "100 %"}
    case = response_of(plain_text(power={"driver": 100, "load": "balance", "law": law})).normal
    assert np.abs(case.mean_torque_nm[0, :3]) == pytest.approx([100e3 / (1500 * RPM)] * 3, rel=1e-9)
