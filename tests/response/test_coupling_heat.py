"""Stiffness, heat and temperature of a coupling iterated until they settle, or run away."""

from __future__ import annotations

import math

import numpy as np
import pytest
from response_trains import RPM, plain_text, response_of

from quillshaft import respond
from quillshaft.assess.screening import screen_alone
from trains import train

RUBBER = {
    "between": ["driver", "load"],
    "stiffness": 2e4,
    "psi": 0.8,
    "temperature": {"30 degC": 1.0, "80 degC": 0.6, "130 degC": 0.5},
    "operating-temperature": ["30 degC", "80 degC"],
    "ambient": "30 degC",
    "rated-torque": 1000,
}


DAMPING = {"30 degC": 1.0, "80 degC": 0.8}


def heated(torque: str, heat: str, rise: str, order: float = 1.0):
    rubber = {**RUBBER, "permitted-heat": heat, "heat-rise": rise}
    text = plain_text(torque, order, couplings={"rubber": rubber})
    shaft = '"shaft" = { "between" = ["driver", "load"], "stiffness" = 100000.0, "loss-factor" = 0.02 }\n'
    return response_of(text.replace(shaft, ""))


def case_of(response):
    return next(case for case in response.cases if case.temperature_k)


def balance(response, torque: float, heat_w: float, rise_k: float, order: float, at: int) -> float:
    """Temperature [°C] by plain fixed-point iteration on the closed form of two discs."""
    omega = order * response.speed_rad_s[at]
    loss, celsius = 0.8 / (2 * math.pi), 30.0
    for _ in range(500):
        k = 2e4 * np.interp(celsius, [30, 80, 130], [1.0, 0.6, 0.5])
        elastic = torque * 0.6 / math.hypot(1 - omega**2 / (k * 5 / 6), loss)
        power = 0.5 * omega * loss * k * (elastic / k) ** 2
        celsius = 30 + rise_k * power / heat_w
    return celsius


def test_settled_temperature_is_that_of_the_closed_form_iterated():
    """Two discs on a lossy spring, T = ambient + rise · P / P_permitted (steady heat balance)."""
    response = heated("60 N m", "200 W", "40 K")
    case = case_of(response)
    at = int(np.argmin(np.abs(response.speed_rad_s - 1000 * RPM)))
    assert case.temperature_k["rubber"][at] - 273.15 == pytest.approx(
        balance(response, 60.0, 200.0, 40.0, 1.0, at), abs=0.05
    )
    assert not case.runaway["rubber"].any()


def test_a_coupling_whose_resonance_comes_to_meet_the_order_runs_away_and_fails():
    """The shaft order lies below the mode: as rubber softens the mode comes down on it, and heat grows."""
    response = heated("500 N m", "100 W", "60 K")
    case = case_of(response)
    inside = response.continuous
    assert case.runaway["rubber"][inside].any()
    item = next(item for item in response.findings if item.check == "temperature")
    assert item.verdict == "fail"
    assert "runs away" in item.basis


def test_no_heat_is_worked_out_without_the_rise_at_the_permitted_heat():
    text = plain_text("60 N m", 1, couplings={"rubber": {**RUBBER, "permitted-heat": "200 W"}})
    shaft = '"shaft" = { "between" = ["driver", "load"], "stiffness" = 100000.0, "loss-factor" = 0.02 }\n'
    response = response_of(text.replace(shaft, ""))
    assert all(not case.temperature_k for case in response.cases)


def test_the_settled_temperature_does_not_depend_on_where_the_screening_stands():
    """A coupling finds its own temperature from the air about it, whether the train is shown cold, at 30 °C or hot."""
    rubber = {**RUBBER, "permitted-heat": "200 W", "heat-rise": "40 K", "damping-temperature": DAMPING}
    text = plain_text("60 N m", 1.0, couplings={"rubber": rubber})
    shaft = '"shaft" = { "between" = ["driver", "load"], "stiffness" = 100000.0, "loss-factor" = 0.02 }\n'
    read, settled = train(text.replace(shaft, "")), []
    for temperature in ("reference", "cold", "hot"):
        response = respond(screen_alone(read, temperature))
        found, speeds = case_of(response).temperature_k["rubber"], response.speed_rad_s
        inside = response.continuous
        settled.append(np.interp(np.array([1000.0, 1300.0]) * RPM, speeds[inside], found[inside]))
    assert settled[0].max() > 303.15 + 1.0
    assert settled[1] == pytest.approx(settled[0], abs=0.05)
    assert settled[2] == pytest.approx(settled[0], abs=0.05)
