"""[dampers] and coupling ratings: what is read, refused, assumed, and the cases that dampers bring."""

from __future__ import annotations

import math

import pytest

from quillshaft.train.coupling_rows import FluidCouplingRow
from quillshaft.train.damper_cases import damper_case_names
from quillshaft.train.damper_rows import DAMPER_ROWS
from quillshaft.train.messages import keys_of
from quillshaft.train.schema import build_schema
from trains import refusal, train, train_text

VISCOUS = {"kind": "viscous", "at": "crank", "ring-inertia": "1.9 kg m^2", "viscous": "310 N m s/rad"}
TUNED = {"kind": "tuned", "at": "crank", "ring-inertia": "0.4 kg m^2", "tuned-frequency": "83 Hz"}
PENDULUM = {"kind": "pendulum", "at": "crank", "mass": "1.2 kg", "number": 4}
PENDULUM |= {"suspension-radius": "150 mm", "length": "25 mm"}
FLEX = {"between": ["crank", "wheel"], "stiffness": "0.2 MN m/rad", "kind": "elastomer-blocks"}


def file(damper=None, coupling=FLEX, units="SI", **tables):
    stations = {"crank": {"inertia": "4 kg m^2"}, "wheel": {"inertia": "20 kg m^2"}}
    dampers = {"dampers": {"nose": damper}} if damper else {}
    return train_text(stations, units, couplings={"flex": coupling}, **dampers, **tables)


@pytest.mark.parametrize(
    ("damper", "said"),
    [
        ({**VISCOUS, "kind": "rubber"}, 'kind = "rubber": is not a kind that is known'),
        ({key: value for key, value in VISCOUS.items() if key != "kind"}, "kind: is missing"),
        ({**VISCOUS, "at": "crnak"}, 'there is no station of this name; did you mean "crank"?'),
        ({**VISCOUS, "ring-inertia": "0 kg m^2"}, "ring-inertia"),
        ({**VISCOUS, "ring-inertia": "1.9 kg m"}, "is not a unit of inertia"),
        ({**VISCOUS, "viscous": "310 N m/rad"}, "310 N m s/rad"),
        ({**VISCOUS, "stiffness": "1 kN m/rad"}, "stiffness: is not a key of this table"),
        ({**VISCOUS, "tolerance": "5 %"}, 'inertia-tolerance = "5 %"'),
        ({**VISCOUS, "undamped": "third"}, "half | all | none"),
        ({**VISCOUS, "state": "broken"}, "healthy | seized | lost | half-damping"),
        ({**TUNED, "state": "half-damping"}, "states no damping to halve"),
        ({**TUNED, "stiffness": "1 kN m/rad"}, "exactly one of stiffness | tuned-frequency; this has both"),
        ({key: value for key, value in TUNED.items() if key[:3] != "tun"}, "this has none of them"),
        ({**TUNED, "psi": 0.8, "viscous": "3 N m s/rad"}, "one statement of the damping"),
        ({**PENDULUM, "length": "150 m"}, "length = suspension-radius / order²"),
        ({**PENDULUM, "number": 0}, "must be at least 1"),
        ({**PENDULUM, "mass": "1.2 kN"}, "mass"),
    ],
)
def test_a_wrong_damper_is_refused_with_what_would_be_right(damper, said):
    message = refusal(file(damper))
    assert said in message
    assert "[dampers.nose]" in message


def test_names_of_dampers_and_what_they_add_are_unique():
    assert "the name flex is taken by [couplings]" in refusal(file(dampers={"flex": VISCOUS}))
    clash = train_text(
        {"crank": 4.0, "nose ring": 1.0}, shafts={"s": ("crank", "nose ring", 1e5)}, dampers={"nose": TUNED}
    )
    assert "would be called nose ring, and that name is taken" in refusal(clash)
    inside = file(VISCOUS, excitations={"x": {"at": "nose", "order": 2}})
    assert "an excitation does not act inside a damper" in refusal(inside)


def test_us_units_are_read():
    read = train(file({**VISCOUS, "ring-inertia": 16.8, "viscous": 2743.7}, units="US"))
    inch_pound = 0.1129848290276167
    assert read.dampers[0].inertia_kgm2 == pytest.approx(16.8 * inch_pound, rel=1e-12)
    assert read.dampers[0].viscous_nms_rad == pytest.approx(2743.7 * inch_pound, rel=1e-12)


def test_a_pendulum_is_read_with_its_order_and_the_inertia_of_its_masses():
    (damper,) = train(file(PENDULUM)).dampers
    assert damper.order == pytest.approx(math.sqrt(6.0), rel=1e-14)
    assert damper.inertia_kgm2 == pytest.approx(4 * 1.2 * 0.175**2, rel=1e-14)


def test_default_tolerances_of_dampers_are_listed():
    read = train(file(TUNED, assumptions={"tolerances": "default"}))
    listed = {(item.key, item.value) for item in read.assumed if item.element == "dampers.nose"}
    assert {("tolerance", "±15 %"), ("inertia-tolerance", "±5 %")} <= listed
    assert read.dampers[0].tolerance == (-0.15, 0.15)


def test_every_damper_brings_the_cases_that_make_sense_of_it():
    data = {"dampers": {"a": VISCOUS, "b": TUNED}}
    assert damper_case_names(data, "a") == ("a seized", "a lost", "a half-damping")
    assert damper_case_names(data, "b") == ("b seized", "b lost")


def test_a_brought_case_says_in_the_train_what_it_is():
    read = train(file(VISCOUS), ("nose seized",))
    assert read.cases == ("nose seized",)
    assert read.cases_because == ("the ring or the masses of nose turn with their station as one",)
    assert read.dampers[0].state == "seized"
    assert "half-damping" in refusal(file(TUNED), ("nose half-damping",))


def test_a_case_of_the_file_wins_over_a_brought_one_of_its_name_and_can_be_laid_with_one():
    own = {"nose lost": {"because": "taken off", "dampers": {"nose": {"omit": True}}}}
    read = train(file(VISCOUS, cases=own), ("nose lost",))
    assert (read.dampers, read.cases_because) == ((), ("taken off",))
    stiff = {"stiff": {"because": "harder", "couplings": {"flex": {"stiffness": "0.3 MN m/rad"}}}}
    both = train(file(VISCOUS, cases=stiff), ("stiff", "nose lost"))
    assert both.dampers[0].state == "lost"
    assert both.couplings[0].stiffness_nm_rad == 0.3e6


@pytest.mark.parametrize("row", [*DAMPER_ROWS.values(), FluidCouplingRow], ids=lambda row: row.__name__)
def test_every_key_stands_in_the_schema_for_the_file_and_for_its_cases(row):
    definitions = build_schema()["$defs"]
    assert set(definitions[row.__name__]["properties"]) == set(keys_of(row))
    assert set(definitions[f"case-{row.__name__}"]["properties"]) == {*keys_of(row), "omit"}


RATINGS = {
    "rated-torque": "10 kN m",
    "peak-torque": "30 kN m",
    "vibratory-torque": "3.2 kN m",
    "permitted-heat": "620 W",
    "heat-rise": "70 K",
    "max-speed": "2200 rpm",
}


def test_the_makers_ratings_are_kept_for_later():
    ratings = train(file(coupling={**FLEX, **RATINGS, "reference-frequency": "12 Hz"})).couplings[0].ratings
    assert (ratings.peak_nm, ratings.vibratory_nm, ratings.reference_hz) == (30e3, 3.2e3, 12.0)
    assert (ratings.permitted_heat_w, ratings.heat_rise_k) == (620.0, 70.0)
    assert ratings.max_speed_rad_s == pytest.approx(2200 * math.pi / 30, rel=1e-14)
    assert train(file()).couplings[0].ratings is None


def test_a_vibratory_torque_without_its_frequency_is_taken_at_10_hz_and_that_is_listed():
    read = train(file(coupling={**FLEX, **RATINGS}))
    assert read.couplings[0].ratings.reference_hz == 10.0
    assert ("couplings.flex", "reference-frequency") in [(item.element, item.key) for item in read.assumed]


@pytest.mark.parametrize(
    ("change", "said"),
    [
        ({"peak-torque": "3 kN m"}, "lies below rated-torque"),
        ({"vibratory-torque": "32 kN m"}, "lies above rated-torque"),
        ({"permitted-heat": "70 K"}, "a heat is wanted"),
        ({"heat-rise": "620 W"}, 'for example "70 K"'),
        ({"ambient": "400 degC"}, "-60 degC to 120 degC"),
        ({"max-speed": "22 Hz"}, 'max-speed = "22 Hz"'),
    ],
)
def test_a_wrong_rating_is_refused(change, said):
    assert said in refusal(file(coupling={**FLEX, **RATINGS, **change}))


@pytest.mark.parametrize(
    ("key", "needs"), [("heat-rise", "permitted-heat"), ("reference-frequency", "vibratory-torque")]
)
def test_a_rating_that_hangs_on_another_needs_it(key, needs):
    value = {"heat-rise": "70 K", "reference-frequency": "10 Hz"}[key]
    assert needs in refusal(file(coupling={**FLEX, key: value}))
