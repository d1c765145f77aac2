"""The key `viscous` of links and stations: what is read, what is refused, what a case replaces."""

from __future__ import annotations

import pytest

from trains import refusal, train, train_text

LBF_IN_NM = 0.1129848290276167  # lb = 0.45359237 kg, in = 0.0254 m, standard gravity: exact definitions

STATIONS = {"a": 2.0, "b": 3.0, "c": 4.0}


def text(station: dict | None = None, units: str = "SI", cases: str = "", **coupling) -> str:
    row = {"between": ["a", "b"], "stiffness": 1e5, **coupling}
    own = STATIONS if station is None else {**STATIONS, "a": {"inertia": 2.0, **station}}
    shaft = {"between": ["b", "c"], "stiffness": 1e5}
    return train_text(own, units, couplings={"k": row}, shafts={"s": shaft}) + cases


def test_viscous_is_read_in_its_unit_and_bare_in_the_units_of_the_file():
    assert train(text(viscous="0.31 kN m s/rad")).couplings[0].viscous_nms_rad == pytest.approx(310.0, rel=1e-15)
    assert train(text(viscous=310)).couplings[0].viscous_nms_rad == 310.0
    us = train(text(units="US", viscous=2740)).couplings[0].viscous_nms_rad
    assert us == pytest.approx(2740 * LBF_IN_NM, rel=1e-12)


def test_a_station_may_feed_energy_in_for_a_reason():
    station = train(text({"viscous": "-12 N m s/rad", "viscous-because": "falling curve"})).stations[0]
    assert (station.viscous_nms_rad, station.viscous_because) == (-12.0, "falling curve")


@pytest.mark.parametrize(
    ("made", "said"),
    [
        ({"viscous": 3.0, "psi": 1.0}, "one statement of the damping"),
        ({"viscous": 0.0}, "must be above 0"),
        ({"viscous": 3.0, "loss-factor": 0.1}, "one statement of the damping"),
        ({"viscous": -3.0}, "out of bounds for a viscous coefficient: 0 to 1e+12 N m s/rad"),
        ({"viscous": "310 N m/rad"}, "is a stiffness, a viscous coefficient is wanted"),
        ({"viscous": "310 N m s"}, "the angle is missing"),
        ({"station": {"viscous": -3.0}}, "negative damping feeds energy in: say why"),
        ({"station": {"viscous-because": "falling curve"}}, "which is not there"),
        ({"station": {"viscous": "5 N m"}}, "is a torque, a viscous coefficient is wanted"),
    ],
)
def test_what_is_wrong_is_refused_with_its_place(made, said):
    refused = refusal(text(**made))
    assert said in refused
    assert "viscous" in refused


def test_a_rigid_mesh_has_no_twist_to_damp():
    gear = {"between": ["a", "b"], "teeth": [20, 61], "viscous": 9.0}
    refused = refusal(train_text({"a": 2.0, "b": 3.0}, gears={"g": gear}))
    assert "a rigid mesh has no twist to damp" in refused


def test_a_case_with_viscous_replaces_psi_and_the_other_way_round():
    case = '[cases.oil]\nbecause = "measured"\ncouplings.k = { viscous = 30.0 }\n'
    changed = train(text(psi=1.1, cases=case), ("oil",)).couplings[0]
    assert (changed.loss_factor, changed.viscous_nms_rad) == (None, 30.0)
    back = '[cases.rubber]\nbecause = "measured"\ncouplings.k = { psi = 1.0 }\n'
    changed = train(text(viscous=30.0, cases=back), ("rubber",)).couplings[0]
    assert changed.viscous_nms_rad is None
    assert changed.loss_factor == pytest.approx(1 / 6.283185307179586)
