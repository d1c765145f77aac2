"""Crank throws: stiffness by two formulas, inertia from the parts, running gear, cranks written once."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from quillshaft.elements import crank
from quillshaft.present.report.shaft_data import shaft_words
from quillshaft.present.units import SHOWN
from quillshaft.train.shaft_model import Material, Throw
from trains import graph_of, omegas, refusal, screening_of, toml, train, train_text

THROW = Throw(0.2, 0.1, 0.18, 0.11, 0.06, 0.26, 0.15)
BORED = replace(THROW, journal_bore_m=0.06, pin_bore_m=0.05)
G = 8.2e10
ROW = {
    "journal": "200 mm",
    "journal-length": "100 mm",
    "pin": "180 mm",
    "pin-length": "110 mm",
    "web-thickness": "60 mm",
    "web-width": "260 mm",
    "radius": "150 mm",
}
FORGED = {"forged": {"shear-modulus": "82 GPa", "density": "7850 kg/m^3"}}


def file_of(throw=None, stations=None, **row):
    shafts = {"crank": {"between": ["a", "b"], "material": "forged", "throw": {**ROW, **(throw or {})}, **row}}
    return train_text(stations or {"a": 1.0, "b": 1.0}, shafts=shafts, materials=FORGED)


# Source: the formulas as recalled from Ker Wilson's book, worked to 12 digits by hand calculation (from memory).
@pytest.mark.parametrize(
    ("throw", "formula", "length", "stiffness"),
    [
        (THROW, "carter", 384.448517942, 20939945.92024),
        (THROW, "ker-wilson", 356.0444073499, 22610469.39269),
        (BORED, "carter", 385.6745898212, 20873377.16119),
        (BORED, "ker-wilson", 358.0014989659, 22486864.43515),
    ],
)
def test_a_throw_has_the_stiffness_of_its_formula(throw, formula, length, stiffness):
    by = {"carter": crank.carter_length, "ker-wilson": crank.ker_wilson_length}[formula]
    assert by(throw) == pytest.approx(length, rel=1e-11)
    assert crank.throw_stiffness(throw, G, formula) == pytest.approx(stiffness, rel=1e-12)
    assert crank.throw_stiffness(replace(throw, formula=formula), G) == pytest.approx(stiffness, rel=1e-12)


@pytest.mark.parametrize("length", [crank.carter_length, crank.ker_wilson_length])
def test_a_throw_is_softer_than_its_bare_journal_and_pin_and_stiffens_with_its_web(length):
    plain = replace(THROW, pin_m=0.2)
    assert length(plain) > (plain.journal_length_m + 0.75 * plain.pin_length_m) / plain.journal_m**4
    assert length(replace(THROW, web_width_m=0.3)) < length(THROW)
    assert length(replace(THROW, journal_bore_m=0.05)) > length(THROW)


def test_the_two_formulas_agree_within_a_fifth_for_ordinary_proportions():
    assert abs(crank.ker_wilson_length(THROW) / crank.carter_length(THROW) - 1) < 0.2


def test_carter_stands_in_a_train_file_unless_told_and_is_listed():
    assert graph_of(file_of()).link("crank").stiffness_nm_rad == pytest.approx(20939945.92024, rel=1e-12)
    listed = {item.key: item.value for item in train(file_of()).assumed}
    assert listed["throw formula"] == "carter"
    assert listed["own-inertia"] == "none"
    told = file_of({"formula": "ker-wilson"})
    assert graph_of(told).link("crank").stiffness_nm_rad == pytest.approx(22610469.39269, rel=1e-12)
    assert "throw formula" not in {item.key for item in train(told).assumed}
    bored = file_of({"journal-bore": "60 mm", "pin-bore": "50 mm"})
    assert graph_of(bored).link("crank").stiffness_nm_rad == pytest.approx(20873377.16119, rel=1e-12)


def test_a_throw_has_ten_per_cent_tolerance_by_default():
    text = file_of().replace('"none"', '"default"', 1)
    assert train(text).shafts[0].tolerance == (-0.10, 0.10)


def test_both_formulas_are_shown_in_check_and_in_the_data_table():
    screening = screening_of(file_of())
    flag = next(flag for flag in screening.flags if flag.element == "shafts.crank")
    assert "Carter 20.94, by Ker Wilson 22.61 MN·m/rad (+8%), Carter used" in flag.text
    assert "recalled, confirm against your edition" in flag.text
    words = shaft_words(screening.train.shafts[0], SHOWN["SI"])
    for word in ("journal ⌀200 × 100", "webs 60 × 260", "Carter 20.94, Ker Wilson 22.61 MN·m/rad"):
        assert word in words


def test_a_throws_inertia_is_the_sum_of_its_parts():
    # By hand, 7850 kg/m³: journal π/32 ρ L D⁴; pin the same, moved by m R²; web a block T × W × H with
    # H = R + (Dj + Dp)/2 = 0.34 m, its middle at R/2 + (Dp − Dj)/4 = 0.07 m.
    rho = 7850.0
    journal = math.pi / 32 * rho * 0.1 * 0.2**4
    pin = math.pi / 32 * rho * 0.11 * 0.18**4 + math.pi / 4 * rho * 0.11 * 0.18**2 * 0.15**2
    mass = rho * 0.06 * 0.26 * 0.34
    web = mass * ((0.26**2 + 0.34**2) / 12 + 0.07**2)
    material = Material("forged", G, rho)
    assert crank.throw_inertia(THROW, material) == pytest.approx(journal + pin + 2 * web, rel=1e-13)
    given = replace(THROW, web_inertia_kgm2=1.5)
    assert crank.throw_inertia(given, material) == pytest.approx(journal + pin + 3.0, rel=1e-13)
    graph = graph_of(file_of({"web-inertia": "1.5 kg m^2"}, **{"own-inertia": "ends"}))
    assert graph.inertia_kgm2 - 1.0 == pytest.approx([(journal + pin + 3.0) / 2] * 2, rel=1e-12)
    listed = {item.key for item in train(file_of(**{"own-inertia": "ends"})).assumed}
    assert {"web-inertia", "inertia-tolerance"} <= listed


def test_a_web_equals_the_integral_over_its_block():
    # ∫∫ (x² + y²) ρ T dx dy over the block by the midpoint rule.
    y = (np.arange(400) + 0.5) / 400 * 0.34 - 0.1
    x = (np.arange(400) + 0.5) / 400 * 0.26 - 0.13
    whole = 7850 * 0.06 * (np.mean(x**2) + np.mean(y**2)) * 0.34 * 0.26
    assert crank.web_inertia(THROW, 7850.0) == pytest.approx(whole, rel=1e-5)


# Source: mean of (dx/dθ)² of the exact slider-crank by quadrature, 11 digits.
@pytest.mark.parametrize(("rod", "mean"), [("600 mm", 0.50806661517), ("500 mm", 0.511786650923)])
def test_running_gear_adds_its_mean_inertia_to_its_station(rod, mean):
    gear = {"reciprocating-mass": "20 kg", "rotating-mass": "12 kg", "radius": "150 mm", "rod": rod}
    expected = 0.15**2 * (20 * mean + 12)
    for cylinders in (1, 2):
        station = {"inertia": 1.0, "running-gear": {**gear, "cylinders": cylinders}}
        graph = graph_of(file_of(stations={"a": station, "b": 1.0}))
        assert graph.inertia_kgm2[0] == pytest.approx(1.0 + cylinders * expected, rel=1e-10)


def test_running_gear_without_a_rotating_mass_says_so():
    gear = {"reciprocating-mass": "20 kg", "radius": "150 mm", "rod": "600 mm"}
    read = train(file_of(stations={"a": {"inertia": 0, "running-gear": gear}, "b": 1.0}))
    assert ("stations.a", "rotating-mass") in {(item.element, item.key) for item in read.assumed}


CRANK = {
    "stations": {"throw": {"inertia": 0.5, "repeat": 4}, "flywheel": 40.0},
    "shafts": {
        "crank": {"between": ["throw-1", "throw-2"], "material": "forged", "throw": ROW, "repeat": 3},
        "tail": ("throw-4", "flywheel", 3e7),
    },
    "operation": {"speed-at": "flywheel"},
    "materials": FORGED,
}


def whole(**changes):
    tables = {**CRANK, **changes}
    stations = tables.pop("stations")
    return train_text(stations, **tables)


def test_a_crank_of_one_throw_repeated_is_the_crank_written_out():
    written = train_text(
        {"throw-1": 0.5, "throw-2": 0.5, "throw-3": 0.5, "throw-4": 0.5, "flywheel": 40.0},
        operation={"speed-at": "flywheel"},
        shafts={
            **{f"crank-{i}": (f"throw-{i}", f"throw-{i + 1}", 20939945.92024) for i in (1, 2, 3)},
            "tail": ("throw-4", "flywheel", 3e7),
        },
    )
    read = train(whole())
    assert [station.name for station in read.stations] == ["throw-1", "throw-2", "throw-3", "throw-4", "flywheel"]
    assert [shaft.name for shaft in read.shafts] == ["crank-1", "crank-2", "crank-3", "tail"]
    assert omegas(whole()) == pytest.approx(omegas(written), rel=1e-11)


def test_both_formulas_are_shown_once_for_a_repeated_throw():
    flags = [flag for flag in screening_of(whole()).flags if "Ker Wilson" in flag.text]
    assert [flag.element for flag in flags] == ["shafts.crank-1"]


def test_a_case_changes_the_repeated_throw_as_a_whole():
    stiff = toml({**ROW, "formula": "ker-wilson"})
    text = whole() + f"[cases.stiff]\nshafts.crank = {{ throw = {stiff} }}\n"
    assert {shaft.throw.formula for shaft in train(text, ("stiff",)).shafts[:3]} == {"ker-wilson"}


@pytest.mark.parametrize(
    ("changes", "words"),
    [
        (
            {"shafts": {**CRANK["shafts"], "crank": {**CRANK["shafts"]["crank"], "between": ["throw-1", "flywheel"]}}},
            "counts on from numbered stations",
        ),
        (
            {"shafts": {**CRANK["shafts"], "crank": {**CRANK["shafts"]["crank"], "repeat": 4}}},
            "there is no station of this name",
        ),
        ({"stations": {**CRANK["stations"], "throw-2": 1.0}}, "is taken by the repeated throw"),
    ],
)
def test_repeats_that_do_not_fit_are_refused(changes, words):
    assert words in refusal(whole(**changes))


@pytest.mark.parametrize(
    ("throw", "words"),
    [
        ({"journal-bore": "210 mm"}, "0 to below 200 mm"),
        ({"radius": "70 mm", "formula": "ker-wilson"}, "more than 0.2 · (journal + pin) = 76 mm"),
        ({"formula": "carters"}, "carter"),
    ],
)
def test_throws_that_cannot_be_are_refused_with_what_is_allowed(throw, words):
    assert words in refusal(file_of(throw))


def test_a_rod_shorter_than_its_crank_allows_is_refused():
    gear = {"reciprocating-mass": "20 kg", "radius": "150 mm", "rod": "200 mm"}
    said = refusal(file_of(stations={"a": {"inertia": 0, "running-gear": gear}, "b": 1.0}))
    assert "more than 1.5 · radius = 225 mm" in said
