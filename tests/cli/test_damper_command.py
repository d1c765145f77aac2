"""`quillshaft damper`, the cases that dampers bring, and what check and report say of dampers and couplings."""

from __future__ import annotations

import json

import pytest
from commands import command

from pdf_texts import page_texts

TEXT = """\
schema = 1
[train]
title = "Dredge pump"
units = "SI"
[operation]
speed-at = "crank"
rated = "1000 rpm"
range = ["600 rpm", "1000 rpm"]
[power]
crank = "500 kW"
pump = "balance"
law = "square"
[stations]
pulley = { inertia = "1.0 kg m^2" }
crank = { inertia = "4 kg m^2" }
impeller-half = { inertia = "2 kg m^2" }
runner-half = { inertia = "3 kg m^2" }
pump = { inertia = "20 kg m^2" }
[shafts]
nose-shaft = { between = ["pulley", "crank"], stiffness = "1.2 MN m/rad" }
[couplings.flex]
kind = "elastomer-blocks"
between = ["crank", "impeller-half"]
stiffness = "0.3 MN m/rad"
rated-torque = "8 kN m"
peak-torque = "24 kN m"
vibratory-torque = "2.4 kN m"
permitted-heat = "620 W"
heat-rise = "70 K"
max-speed = "1800 rpm"
[couplings.oil]
kind = "fluid"
between = ["impeller-half", "runner-half"]
slip = "3 %"
max-speed = "2100 rpm"
[couplings.steel]
kind = "disc"
between = ["runner-half", "pump"]
stiffness = "4 MN m/rad"
[dampers.nose]
kind = "viscous"
at = "pulley"
ring-inertia = "1.9 kg m^2"
viscous = "310 N m s/rad"
source = "damper maker"
[dampers.ring]
kind = "tuned"
at = "crank"
ring-inertia = "0.4 kg m^2"
tuned-frequency = "83 Hz"
psi = 0.8
[dampers.swing]
kind = "pendulum"
at = "crank"
mass = "1.2 kg"
number = 4
suspension-radius = "150 mm"
length = "25 mm"
[excitations]
firing = { at = "crank", order = 2.5 }
"""


@pytest.fixture(scope="module")
def path(tmp_path_factory):
    file = tmp_path_factory.mktemp("dampers") / "dredge.toml"
    file.write_text(TEXT, encoding="utf-8")
    return file


def test_every_damper_is_shown_with_its_best_and_its_states(path):
    ended = command("damper", path)
    assert ended.code == 0, ended.err
    for words in ("by rule", "by direct minimisation", "as stated, at half damping", "nose seized", "swing lost"):
        assert words in ended.out
    assert "recalled" in ended.out
    assert "n₀² = R/r" in ended.out
    assert "swing half-damping" not in ended.out


def test_one_damper_alone_gives_its_numbers_as_json(path):
    ended = command("damper", path, "--damper", "ring", "--json", "-")
    data = json.loads(ended.out)
    (found,) = data["dampers"]
    assert (found["damper"], found["kind"]) == ("ring", "tuned")
    suggestion = found["suggestion"]
    # Brock's tuning 1/(1+μ) of the mode without the ring
    tuned = suggestion["frequency_hz"] / (1 + suggestion["mu"])
    assert suggestion["rule"]["tuned_frequency_hz"] == pytest.approx(tuned, rel=1e-12)
    assert suggestion["direct"]["magnification"] <= suggestion["rule"]["magnification"]
    assert [case["case"] for case in found["cases"]] == ["as stated", "ring seized", "ring lost", "ring half-damping"]


def test_a_case_that_a_damper_brings_is_taken_by_name(path):
    ended = command("screen", path, "--case", "nose seized", "--json", "-")
    assert ended.code == 0, ended.err
    data = json.loads(ended.out)
    whole = json.loads(command("screen", path, "--json", "-").out)
    first, other = (item["modes"][0]["frequency_hz"] for item in (data, whole))
    assert first < other
    compared = command("compare", path, "--case", "nose lost")
    assert compared.code == 0, compared.err
    assert "dampers.nose.state" in compared.out


@pytest.mark.parametrize(
    ("arguments", "said"),
    [
        (("--damper", "none"), "there is no damper none: nose, ring, swing"),
        (("--case", "nose broken"), 'there is no case "nose broken"'),
    ],
)
def test_what_is_not_there_is_refused(path, arguments, said):
    ended = command("damper", path, *arguments)
    assert ended.code == 2
    assert said in ended.err


def test_a_mode_that_is_not_there_is_said_in_its_place(path):
    ended = command("damper", path, "--damper", "nose", "--mode", "40")
    assert ended.code == 0
    assert "Nothing is suggested" in ended.out


def test_check_shows_stations_and_links_of_dampers_and_what_a_fluid_coupling_does(path):
    ended = command("check", path)
    assert ended.code == 0, ended.err
    for words in ("ring ring", "swing masses", "order 2.449", "separates the train torsionally", "corner cases"):
        assert words in ended.out


def test_the_data_table_of_the_report_holds_every_damper_and_rating(path, tmp_path):
    out = tmp_path / "report.pdf"
    assert command("report", path, "--out", out).code == 0
    text = " ".join(page_texts(out))
    start = text.index("Equivalent system")
    data = text[:start] if "untuned viscous damper" in text[:start] else text
    for words in (
        "untuned viscous damper at pulley, ring 1.9 kg·m², half of it counts undamped, 310 N·m·s/rad",
        "tuned damper at crank, ring 0.4 kg·m²",
        "alone 83.00 Hz",
        "4 pendulums of 1.2 kg at crank",
        "peak 24000 N·m",
        "vibratory ±2400 N·m at 10 Hz",
        "heat 620 W for 70 K rise",
        "up to 1800 rpm",
        "fluid coupling impeller-half – runner-half, slip 3 %",
        "damper maker",
    ):
        assert "".join(words.split()) in "".join(data.split()), words


def test_studies_that_hold_every_source_against_every_mode_say_so_where_a_fluid_coupling_is(path):
    words = "every source is held against the modes of both sides"
    windows = command("windows", path, "--link", "flex")
    assert windows.code == 0, windows.err
    assert words in " ".join(windows.out.split())
    drift = (
        "drift",
        path,
        "--datum",
        "stations.pump.inertia",
        "--from",
        "20 kg m^2",
        "--to",
        "22 kg m^2",
        "--steps",
        "3",
    )
    assert words in " ".join(command(*drift).out.split())
