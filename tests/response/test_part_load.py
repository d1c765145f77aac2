"""Couplings that follow mean torque at part load and with a cylinder out, and the load that a dead cylinder leaves."""

from __future__ import annotations

import numpy as np
import pytest
from response_trains import engine_text, place, response_of

POINTS = {"0 N m": 1.0e4, "200 N m": 2.0e4, "400 N m": 4.0e4}


def rubber(stiffness, **more):
    row = {"between": ["flywheel", "generator"], "stiffness": stiffness, "viscous": "120 N m s/rad", **more}
    return {"couplings": {"rubber": row}, "operation": {"range": ["1480 rpm", "1520 rpm"]}}


def at_rated(response, name):
    """Alternating torques (links,) of a case at rated speed, and its mean torque in the coupling."""
    at = int(np.argmin(np.abs(response.speed_rad_s - response.screening.train.operation.rated_rad_s)))
    case = next(case for case in response.cases if case.name == name)
    return case.alternating_torque_nm[:, at], abs(case.mean_torque_nm[place(response, "rubber"), at])


@pytest.mark.parametrize("name", ["normal", "light load", "engine cylinder 2 dead"])
def test_a_coupling_that_follows_torque_has_in_every_case_the_stiffness_of_its_mean_torque(name):
    """The same train with one number for the coupling, that of its curve at the mean torque of the case."""
    found, mean = at_rated(response_of(engine_text(**rubber(POINTS))), name)
    stiffness = float(np.interp(mean, [0.0, 200.0, 400.0], list(POINTS.values())))
    expected, same = at_rated(response_of(engine_text(**rubber(stiffness))), name)
    assert mean == pytest.approx(same, rel=1e-9)
    assert found == pytest.approx(expected, rel=1e-9)


def test_mean_torques_of_the_three_cases_differ():
    response = response_of(engine_text(**rubber(POINTS)))
    means = [at_rated(response, name)[1] for name in ("normal", "light load", "engine cylinder 2 dead")]
    assert means == pytest.approx([343.77, 0.25 * 343.77, 343.77 * 2 / 3], rel=1e-3)


def test_the_load_limit_holds_at_the_ends_of_the_tolerances():
    """Full load is kept by the nominal coupling; at its stiff end the same torque is above the rating."""
    plain = response_of(engine_text(**rubber(2e4, tolerance="15 %", **{"vibratory-torque": 1e6})))
    row = place(plain, "rubber")

    def worst(word):
        names = [c for c in plain.cases if c.kind == "dead cylinder" and c.name.endswith(word)]
        names = names if word else [c for c in plain.cases if c.kind == "dead cylinder" and "," not in c.name]
        return max(float(np.nanmax(c.weighted_torque_nm[row][plain.continuous])) for c in names)

    nominal, stiff = worst(""), worst("stiff and light")
    assert stiff > 1.02 * nominal
    rating = 0.5 * (nominal + stiff)
    limited = response_of(engine_text(**rubber(2e4, tolerance="15 %", **{"vibratory-torque": rating})))
    (dead,) = limited.restrictions.dead_loads
    assert dead.because == "limited by rubber"
    assert 0.5 < dead.load_share < 1.0


def test_heat_without_a_table_of_temperature_limits_the_load_with_a_dead_cylinder():
    text = engine_text(**rubber(2e4, **{"permitted-heat": 1e5}))
    hottest = max(
        float(case.heat_w[place(response, "rubber")][response.continuous].max())
        for response in [response_of(text)]
        for case in response.cases
        if case.kind == "dead cylinder"
    )
    limited = response_of(engine_text(**rubber(2e4, **{"permitted-heat": 0.8 * hottest})))
    (dead,) = limited.restrictions.dead_loads
    assert dead.because == "limited by rubber"
    assert dead.load_share < 1.0


def test_power_stated_at_one_throw_falls_by_the_share_of_one_cylinder_whichever_is_dead():
    text = engine_text(**rubber(2e4)).replace('"throw-1" = 18\n"throw-2" = 18\n"throw-3" = 18\n', '"throw-1" = 54\n')
    assert '"throw-1" = 54' in text
    response = response_of(text)
    means = [at_rated(response, name)[1] for name in ("normal", *(f"engine cylinder {n} dead" for n in (1, 2, 3)))]
    assert means == pytest.approx([343.77, *[343.77 * 2 / 3] * 3], rel=1e-3)


def test_an_engine_being_started_leaves_the_coupling_at_the_stiffness_of_light_load():
    """Below 0.8 of idle the mean torque is that of light load: so is the stiffness that follows it."""
    tables = rubber(POINTS)
    tables["operation"] = {**tables["operation"], "idle": "1400 rpm"}
    response = response_of(engine_text(**tables))
    number, slow = place(response, "rubber"), response.speed_rad_s < 0.79 * 1400 * np.pi / 30
    mean = abs(response.normal.mean_torque_nm[number, slow][0])
    assert mean == pytest.approx(0.25 * 343.77, rel=1e-3)
    twist = np.radians(response.normal.twist_deg[number, slow])
    stiffness = response.normal.alternating_torque_nm[number, slow] / twist
    assert stiffness == pytest.approx(np.interp(mean, [0.0, 200.0, 400.0], list(POINTS.values())), rel=1e-9)
