"""Quantities: published conversion figures, the spellings of data sheets, and what is refused and why."""

from __future__ import annotations

import datetime
import math
import subprocess
import sys

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from quillshaft.train.measures import MEASURES
from quillshaft.train.quantity import (
    QuantityError,
    measure_help,
    read_quantity,
    read_tolerance,
    which_measure,
)


def si(value: object, measure: str, system: str = "SI") -> float:
    return read_quantity(value, measure, system).value


def refusal(value: object, measure: str, system: str = "SI") -> str:
    with pytest.raises(QuantityError) as caught:
        read_quantity(value, measure, system)
    assert caught.value.allowed == measure_help(measure, system)
    return caught.value.message


# The international pound (0.45359237 kg) and inch (25.4 mm), 1959 agreement, and standard gravity
# (9.80665 m/s^2), 3rd CGPM 1901, are exact; every figure is their product, printed to the last digit.
FIGURES = [
    ("1 lbf in", "torque", 0.1129848290276167),
    ("1 lbf ft", "torque", 1.3558179483314004),
    ("1 lbm ft^2", "wr2", 0.0421401100938048),
    ("1 lbm in^2", "wr2", 0.0002926396534292),
    ("1 lbf in s^2", "inertia", 0.1129848290276167),
    ("1 slug ft^2", "inertia", 1.3558179483314004),
    ("1 lbf ft s^2", "inertia", 1.3558179483314004),
    ("1 kgf m^2", "gd2", 0.25),
    ("1 kgf m", "torque", 9.80665),
    ("1 hp", "power", 745.69987158227022),
    ("1 PS", "power", 735.49875),
    ("1 psi", "stress", 6894.7572931683613),
    ("1 rpm", "speed", math.pi / 30),
    ("1 rpm", "speed", 0.10471975511965977),
    ("0.283 lb/in^3", "density", 7833.4130329874833),
    ("11.5e6 psi", "modulus", 7.9289708871436155e10),
    ("1 lbf/in", "linear_stiffness", 4.4482216152605 / 0.0254),
]


@pytest.mark.parametrize(("text", "measure", "value"), FIGURES)
def test_exact_conversion_figures(text, measure, value):
    assert si(text, measure) == pytest.approx(value, rel=1e-15, abs=5e-17)


def test_derived_conversion_figures():
    # Same exact definitions: power over speed, and WR^2 from lb ft^2 to lbf in s^2.
    hp, rpm = si("1 hp", "power"), si("1 rpm", "speed")
    assert hp / rpm / si("1 lbf ft", "torque") == pytest.approx(5252.1131220325461, rel=1e-15)
    assert hp / rpm / si("1 lbf in", "torque") == pytest.approx(63025.357464390553, rel=1e-15)
    assert si("1 kW", "power") / rpm == pytest.approx(9549.2965855137201, rel=1e-15)
    ratio = si("1 lbm ft^2", "wr2") / si("1 lbf in s^2", "inertia")
    assert ratio == pytest.approx(0.372971402058807, rel=1e-14)
    assert si("1000 kW", "power") / si("1500 rpm", "speed") == pytest.approx(6366.19772368, rel=1e-12)


def test_gd2_gives_a_quarter_of_mass_times_diameter_squared():
    # GD^2 = 4 J with the weight in kgf numerically the mass in kg, or 4 g J in N m^2: common practice.
    assert si("1.8 kg m^2", "gd2") == 0.45
    assert si("1.8 kgf m^2", "gd2") == 0.45
    assert si("39.2266 N m^2", "gd2") == 1.0
    assert si(1.8, "gd2") == 0.45
    assert si("4 lb ft^2", "gd2") == pytest.approx(0.0421401100938048, rel=1e-15)
    assert si("1.8 kg m^2", "wr2") == 1.8


SAME = [
    ("torque", 1000.0, [
        "1000 Nm", "1 kNm", "1 kN m", "1000 N·m", "1000 N⋅m", "1000 N*m", "1000 N.m", "1000 N-m",
        "1000Nm", "1e3 N m", "+1000 N m", "1.E3 N m", "100 daN m", "1000 (N m)", "1e6 N mm", "1 mN Mm",
        "1000 N m", "1000 kg m^2/s^2", "1000 N × m"]),
    ("stiffness", 2e6, [
        "2 MNm/rad", "2 MN m/rad", "2e6 N·m/rad", "2000 kNm/rad", "2000 kN.m / rad", "2 MN·m·rad^-1",
        "2 MN m rad⁻¹", "2000 N m/mrad"]),
    ("stiffness", 180 / math.pi, ["1 N m/deg", "1 Nm/°", "1 N·m/degree"]),
    ("inertia", 3.0, [
        "3 kgm2", "3 kgm²", "3 kg·m²", "3 kg m^2", "3 kg-m^2", "3 kg m**2", "3 kg*m^2", "3 kg.m2",
        "3e4 kg cm^2", "3e4 kgcm²", "3e6 kg mm2", "3 kg m ^ 2", "3 N m s^2", "3 kgm^2"]),
    ("wr2", 0.0421401100938048, [
        "1 lb-ft^2", "1 lb ft2", "1 lb·ft²", "1 lbft2", "1 lbm ft^2", "1 LB-FT^2", "144 lb in^2",
        "144 lb-in²", "1 lb.ft²", "1 lb. ft.^2"]),
    ("inertia", 0.1129848290276167, [
        "1 lb in s^2", "1 lbf in s^2", "1 lb-in-s²", "1 lbf·in·s²", "1 lb-in-sec^2", "1 in-lb-s^2",
        "1 lb.in.s2"]),
    ("inertia", 1.3558179483314004, ["1 slug ft^2", "1 slug-ft²", "1 lb ft s^2"]),
    ("torque", 1.3558179483314004, [
        "1 ft-lb", "1 ft lb", "1 ftlb", "1 lb-ft", "1 lbf ft", "1 lbf-ft", "12 in-lb", "12 in.-lb",
        "12 in·lbf", "1 ft.lb", "0.001 kip ft"]),
    ("stiffness", 0.1129848290276167, [
        "1 in-lb/rad", "1 lb-in/rad", "1 lbf·in/rad", "1 lbf in/rad", "1 inlb/rad"]),
    ("torque", 9.80665, ["1 kgf m", "1 kgfm", "1 kgf·m", "1 kp m", "1 kpm"]),
    ("speed", 50 * math.pi, [
        "1500 rpm", "1500 r/min", "1500 rev/min", "25 rev/s", "1500 RPM", "9000 deg/s", "1500rpm"]),
    ("frequency", 25.0, [
        "25 Hz", "1500 cpm", "1500 CPM", "0.025 kHz", "25 1/s", "25 s^-1", "25 /s", "25 s⁻¹"]),
    ("power", 2e6, ["2 MW", "2000 kW", "2e6 W", "2e9 mW", "2e6 N m/s"]),
    ("length", 0.0254, [
        "25.4 mm", "1 in", "1 inch", '1 "', '1"', "1 in.", "1″", "2.54 cm", "25400 um", "25400 µm",
        "25400 μm", "0.0254 m"]),
    ("mesh_stiffness_per_face", 2e10, ["20 N/(mm um)", "20 N/(mm·µm)", "20 N/mm/um", "20 GN/m^2"]),
    ("modulus", 79.3e9, ["79.3 GPa", "79300 MPa", "79300 N/mm^2", "79300 N/mm²", "793 kbar"]),
    ("stress", 6894757.2931683613, ["1 ksi", "1000 psi", "0.001 Mpsi", "1000 lb/in^2", "1000 lbf/in²"]),
    ("angle", math.pi / 2, ["90 deg", "90°", "90 °", "0.25 rev", "1.57079632679489661923 rad"]),
    ("temperature", 303.15, [
        "30 degC", "30 °C", "30°C", "30 C", "30 deg C", "86 degF", "86 °F", "303.15 K", "30 ℃"]),
    ("temperature_rise", 70.0, ["70 K", "70 degC", "126 degF", "70 °C"]),
    ("viscous", 310.0, ["310 N m s/rad", "310 Nms/rad", "0.31 kN m s/rad", "310 N·m·s/rad"]),
    ("flexibility", 2e-7, [
        "2e-7 rad/(N m)", "0.2e-6 rad/(N·m)", "2e-7 rad/Nm", "2e-7 rad/N/m", "0.2 µrad/Nm"]),
    ("density", 7850.0, ["7850 kg/m^3", "7850 kg/m³", "7.85 g/cm^3", "7.85 t/m3", "7850 kg m^-3"]),
    ("mass", 9.4, ["9.4 kg", "9400 g", "0.0094 t"]),
    ("linear_stiffness", 1.9e6, ["1.9 MN/m", "1900 N/mm", "1.9 kN/mm", "1.9 N/um"]),
    ("share", 0.15, ["15 %", "15%", 0.15, "0.15"]),
    ("synchronizing", 45e3 * 180 / math.pi, ["45 kW/deg"]),
    ("number", 1.13, [1.13, "1.13", " 1.13 "]),
]  # fmt: skip


@pytest.mark.parametrize(("measure", "value", "spellings"), SAME)
def test_the_spellings_of_data_sheets_read_as_one_value(measure, value, spellings):
    read = {spelling: si(spelling, measure) for spelling in spellings}
    assert read == pytest.approx(dict.fromkeys(spellings, value), rel=1e-15, abs=5e-17)


BARE = [
    ("length", 1e-3, 0.0254),
    ("inertia", 1.0, 0.1129848290276167),
    ("wr2", 1.0, 0.0421401100938048),
    ("torque", 1.0, 0.1129848290276167),
    ("stiffness", 1.0, 0.1129848290276167),
    ("power", 1e3, 745.69987158227022),
    ("speed", math.pi / 30, math.pi / 30),
    ("angle", math.pi / 180, math.pi / 180),
    ("frequency", 1.0, 1.0),
    ("modulus", 1e9, 6894.7572931683613),
    ("stress", 1e6, 6894.7572931683613),
    ("density", 1.0, 0.45359237 / 0.0254**3),
    ("temperature", 274.15, (1 + 459.67) / 1.8),
    ("mass", 1.0, 0.45359237),
]


@pytest.mark.parametrize(("measure", "in_si", "in_us"), BARE)
def test_bare_numbers_are_in_the_unit_of_the_files_system(measure, in_si, in_us):
    for value in (1, 1.0, "1"):
        assert si(value, measure) == pytest.approx(in_si, rel=1e-15, abs=5e-17)
        assert si(value, measure, "US") == pytest.approx(in_us, rel=1e-15, abs=5e-17)
    assert read_quantity(1, measure, "US").note is None


def test_lb_read_as_force_is_noted_and_lb_as_mass_is_not():
    note = "lb read as lbf (pound-force)"
    forces = {
        "torque": "1 ft-lb",
        "stiffness": "1 in-lb/rad",
        "inertia": "1 lb in s^2",
        "viscous": "1 lb in s/rad",
    }
    assert {m: read_quantity(text, m, "US").note for m, text in forces.items()} == dict.fromkeys(forces, note)
    plain = {
        "torque": "1 ft-lbf",
        "wr2": "1 lb ft^2",
        "density": "1 lb/in^3",
        "mass": "1 lb",
        "power": "1 hp",
    }
    assert {m: read_quantity(text, m, "US").note for m, text in plain.items()} == dict.fromkeys(plain)


REFUSED = [
    ("3,5 m", "length", "a comma in a number"),
    ("1,000 rpm", "speed", "a comma in a number"),
    ("5 kg m^2, dry", "inertia", "a comma in a quantity"),
    ("1 1/8 in", "length", "two numbers"),
    ("1½ in", "length", "two numbers"),
    ("5² m", "length", "two numbers"),
    ("5 ft 3 in", "length", "two numbers"),
    ("5-10 mm", "length", "two numbers"),
    ("5 to 10 mm", "length", "two numbers"),
    ("1.2.3 mm", "length", "two numbers"),
    ("1 000 rpm", "speed", "two numbers"),
    ("1/8 in", "length", "a fraction"),
    ("1_000 rpm", "speed", "a mark inside a number"),
    ("1'000 rpm", "speed", "a mark inside a number"),
    ("2.3 x 10^6 N m/rad", "stiffness", "a power of ten"),
    ("2.3·10⁶ N m/rad", "stiffness", "a power of ten"),
    ("10**10**7 m", "length", "a power of ten"),
    ("5 ± 1 kg", "mass", "a tolerance inside"),
    ("nan m", "length", "not a finite number"),
    ("inf", "length", "not a finite number"),
    (float("nan"), "length", "not a finite number"),
    (float("-inf"), "length", "not a finite number"),
    ("1e400 m", "length", "too large"),
    ("1e-400 m", "length", "too small"),
    ("1e999999999 m", "length", "too large"),
    ("m", "length", "does not begin with a number"),
    ("~5 m", "length", "does not begin with a number"),
    ("", "length", "an empty text"),
    ("  ", "length", "an empty text"),
    (True, "length", "true is not a number"),
    (None, "length", "is not a number"),
    ([1], "length", "[1] is not a number"),
    ({}, "length", "a table is not a number"),
    (datetime.date(2026, 11, 30), "length", "2026-11-30 is not a number"),
    ("1" * 200, "length", "too long"),
    ("1487 1/min", "speed", "write rpm for a speed, cpm for a frequency"),
    ("1487 min⁻¹", "speed", "write rpm for a speed, cpm for a frequency"),
    ("1487 /min", "frequency", "write rpm for a speed, cpm for a frequency"),
    ("25 1/s", "speed", "the angle is missing (rad or deg, or rpm)"),
    ("25 Hz", "speed", '"Hz" is a frequency, a speed is wanted'),
    ("1500 rpm", "frequency", '"rpm" is a speed, a frequency is wanted'),
    ("5 N·m", "stiffness", '"N·m" is a torque, a stiffness is wanted: the angle is missing'),
    ("5 N m/rad", "torque", '"N m/rad" is a stiffness, a torque is wanted'),
    ("5 1/(N m)", "flexibility", "the angle is missing"),
    ("5 N m s", "viscous", "the angle is missing"),
    ("5 kgf m^2", "inertia", "looks like a GD² value: use gd2"),
    ("5 N m^2", "inertia", "looks like a GD² value: use gd2"),
    ("5 lbf ft^2", "inertia", "write lb ft^2 or lb in^2, under wr2"),
    ("5 kg m", "torque", "write kgf where a weight is meant"),
    ("5 kg", "length", '"kg" is a mass, a length is wanted'),
    ("5 kg", "inertia", '"kg" is a mass, an inertia is wanted'),
    ("5 lbf", "mass", '"lbf" is not a unit of mass'),
    ("5 %", "stiffness", '"%" is a share, a stiffness is wanted'),
    ("5 Mpa", "modulus", 'unknown unit "Mpa"; did you mean "MPa"?'),
    ("5 nm", "torque", 'unknown unit "nm"; did you mean "Nm"?'),
    ("5 furlong", "length", 'unknown unit "furlong"'),
    ("5 m $", "length", 'cannot read "m $"'),
    ("5 m^2.5", "length", "cannot read"),
    ("5 m^99999", "length", "cannot read"),
    ("5 N/((mm))", "linear_stiffness", "cannot read"),
    ("5 N m //rad", "stiffness", "cannot read"),
    ("5 rad/N m", "flexibility", "can be read in two ways"),
    ("20 N/mm µm", "mesh_stiffness_per_face", "can be read in two ways"),
    ("5 mm", "number", 'a unit, "mm", on a pure number'),
    ("5 %", "number", "on a pure number"),
    (15, "share", "a bare share above 1: write it with %"),
    ("15", "share", "a bare share above 1"),
    (-0.1, "share", "out of bounds"),
    ("2000 %", "share", "out of bounds for a share: 0 to 10"),
    (20, "mesh_stiffness_per_face", "the unit is missing"),
    ("5", "linear_stiffness", "the unit is missing"),
    ("-1 mm", "length", "out of bounds for a length: 0 to 1e+07 mm"),
    ("−1 mm", "length", "out of bounds"),
    ("0 N m/rad", "stiffness", "out of bounds for a stiffness"),
    ("1e10 kg m^2", "inertia", "out of bounds for an inertia: 0 to 1e+09 kg m^2"),
    ("1000001 rpm", "speed", "out of bounds for a speed: 0 to 1e+06 rpm"),
    ("-300 degC", "temperature", "out of bounds for a temperature: -273.15 to"),
    ("1e300 N m", "torque", "out of bounds"),
]


@pytest.mark.parametrize(("value", "measure", "reason"), REFUSED)
def test_what_would_be_read_wrongly_is_refused_with_the_reason(value, measure, reason):
    assert reason in refusal(value, measure)


def test_an_integer_of_more_digits_than_python_writes_is_out_of_bounds():
    assert "out of bounds" in refusal(10**5000, "length")
    assert "out of bounds" in refusal(-(10**5000), "torque")


def test_a_gd2_without_unit_is_refused_in_a_us_file():
    assert refusal(43, "gd2", "US") == "the unit is missing"
    assert "lb ft^2" in measure_help("gd2", "US")


def test_the_help_of_a_measure_holds_an_example_that_can_be_read_and_its_bare_unit():
    assert measure_help("inertia", "SI") == (
        'a number with a unit of inertia, for example "19.6 kg m^2", or a bare number in kg m^2'
    )
    for name, spec in MEASURES.items():
        for system, example in (("SI", spec.example_si), ("US", spec.example_us)):
            assert example in measure_help(name, system)
            assert spec.low <= si(example, name, system) <= spec.high


def test_the_zero_and_the_ends_of_the_bounds_are_allowed():
    assert si("0 kg m^2", "inertia") == 0.0
    assert si("0e99999 mm", "length") == 0.0
    assert si("1e6 rpm", "speed") == pytest.approx(104719.75511965978, rel=1e-15)
    assert si("-4 Hz", "signed_frequency") == -4.0
    assert si("-30 rpm", "signed_speed") == pytest.approx(-math.pi, rel=1e-15)


def test_the_measure_of_a_unit_is_found_among_candidates():
    stiff = ("mesh_stiffness_per_face", "linear_stiffness", "stiffness")
    texts = {
        "20 N/(mm um)": stiff[0],
        "4.0e9 N/m": stiff[1],
        "5 lb in/rad": stiff[2],
        "5 mm": None,
        "5": None,
    }
    assert {text: which_measure(text, stiff) for text in texts} == texts
    assert which_measure("1.5 %", ("torque", "share")) == "share"
    assert which_measure(None, stiff) is None
    assert which_measure("5 mm", ("number",)) is None


@pytest.mark.parametrize(
    ("value", "pair"),
    [
        ("5 %", (-0.05, 0.05)),
        ("±5 %", (-0.05, 0.05)),
        (0.05, (-0.05, 0.05)),
        (0, (0.0, 0.0)),
        (["-5 %", "+20 %"], (-0.05, 0.2)),
        ([-0.05, "0 %"], (-0.05, 0.0)),
    ],
)
def test_tolerances_read_as_low_and_high_shares(value, pair):
    assert read_tolerance(value) == pair


@pytest.mark.parametrize(
    ("value", "reason"),
    [
        ("-5 %", "the wrong sign"),
        (["5 %", "20 %"], "the wrong sign"),
        (["-5 %", "-2 %"], "the wrong sign"),
        (["+5 %", "-5 %"], "the wrong sign"),
        (["-5 %"], "two members"),
        ("100 %", "would leave nothing"),
        (["-150 %", "0 %"], "out of bounds"),
        (5, "write it with %"),
        ("5 mm", "a signed share is wanted"),
        ("3,5 %", "a comma in a number"),
        (True, "true is not a number"),
        ([["1 %"], "5 %"], "is not a number"),
    ],
)
def test_tolerances_of_the_wrong_shape_sign_or_size_are_refused(value, reason):
    with pytest.raises(QuantityError) as caught:
        read_tolerance(value)
    assert reason in caught.value.message
    assert "-5 %" in caught.value.allowed


# One quantity in several units: (measure, unit, another unit, how many of the other make one).
PAIRS = [
    ("inertia", "kg m^2", "kg cm^2", 10**4),
    ("inertia", "slug ft^2", "lb in s^2", 12),
    ("wr2", "lb ft^2", "lb in^2", 144),
    ("stiffness", "MN m/rad", "kN m/mrad", 1),
    ("torque", "lbf ft", "in-lb", 12),
    ("torque", "kip ft", "lbf in", 12000),
    ("speed", "rev/s", "rpm", 60),
    ("speed", "rev/s", "deg/s", 360),
    ("frequency", "Hz", "cpm", 60),
    ("length", "ft", "in", 12),
    ("length", "in", "um", 25400),
    ("stress", "ksi", "psi", 1000),
    ("density", "t/m^3", "g/cm^3", 1),
    ("gd2", "kgf m^2", "kg m^2", 1),
]


@given(st.sampled_from(PAIRS), st.integers(1, 9999), st.integers(-4, -2))
@settings(max_examples=300, deadline=None)
def test_the_same_quantity_in_two_units_gives_the_same_si_value(pair, digits, exponent):
    measure, one, other, count = pair
    value = si(f"{digits}e{exponent} {one}", measure)
    assert si(f"{digits * count}e{exponent} {other}", measure) == pytest.approx(value, rel=1e-14, abs=0.0)


ANYTHING = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text() | st.dates() | st.times(),
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(st.text(), inner, max_size=3),
)
SHEET_TEXT = st.text(alphabet="0123456789.,eE+-−·*/^()%°\"' \u00a0²³⁻¹½_kMmuµNPaglbfinstdrehC", max_size=25)


@given(ANYTHING | SHEET_TEXT | SHEET_TEXT.map("5 {}".format), st.sampled_from(sorted(MEASURES)))
@settings(max_examples=400, deadline=None)
def test_reading_anything_gives_a_finite_value_in_bounds_or_a_quantity_error(value, measure):
    for system in ("SI", "US"):
        try:
            read = read_quantity(value, measure, system)
        except QuantityError:
            continue
        assert MEASURES[measure].low <= read.value <= MEASURES[measure].high
    try:
        low, high = read_tolerance(value)
    except QuantityError:
        return
    assert -1 < low <= 0 <= high


def test_the_units_load_only_when_a_unit_is_read():
    code = (
        "import sys\n"
        "from quillshaft.train import quantity\n"
        "assert 'pint' not in sys.modules\n"
        "quantity.read_quantity(1.1, 'number', 'SI')\n"
        "assert 'pint' not in sys.modules\n"
        "quantity.read_quantity('1 mm', 'length', 'SI')\n"
        "assert 'pint' in sys.modules and 'scipy.linalg' not in sys.modules\n"
    )
    subprocess.run([sys.executable, "-c", code], check=True)
