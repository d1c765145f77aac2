"""Shafts of distributed inertia: roots of the wave equation, order of convergence, and one entry in every table."""

from __future__ import annotations

import math

import numpy as np
import pytest

from quillshaft.assess.cutting import convergence
from quillshaft.assess.damped_results import damped_results
from quillshaft.graph.build import build_graph
from quillshaft.present.rows import link_rows, station_rows
from quillshaft.solve.modes import natural_modes
from quillshaft.study.inputs import inputs_of, sensitivities, vary
from quillshaft.study.tolerance import tolerance_study
from quillshaft.study.window_tally import AskError, find_spring
from trains import duty, graph_of, refusal, screening_of, train, train_text

MODULUS, DENSITY, LENGTH = 8e10, 7850.0, 2.0
WAVE = math.sqrt(MODULUS / DENSITY)
METAL = {"metal": {"shear-modulus": "80 GPa", "density": "7850 kg/m^3"}}


def diameter(own_inertia, length=LENGTH):
    """Diameter [m] of a solid bar with a whole polar inertia [kg·m²]: π ρ L D⁴ / 32."""
    return (32 * own_inertia / (math.pi * DENSITY * length)) ** 0.25


def file_of(cuts, ends, pieces, **tables):
    shaft = {"between": ["a", "b"], "material": "metal", "pieces": pieces, "own-inertia": "distributed"}
    shaft |= {} if cuts is None else {"cuts": cuts}
    shaft |= tables.pop("row", {})
    return train_text({"a": ends[0], "b": ends[1]}, shafts={"bar": shaft}, materials=METAL, **tables)


def bar(own_inertia, length=LENGTH):
    return [{"od": f"{diameter(own_inertia, length)!r} m", "length": f"{length} m"}]


def omega_of(text):
    return natural_modes(graph_of(text).network).omega_rad_s


def extrapolated(text_at, cuts=(32, 64, 128), count=3):
    """Richardson's extrapolation of second and fourth order (Phil. Trans. A 226, 1927; from memory)."""
    coarse, middle, fine = (omega_of(text_at(cut))[:count] for cut in cuts)
    once = (4 * middle - coarse) / 3, (4 * fine - middle) / 3
    return (16 * once[1] - once[0]) / 15


def test_a_bar_between_two_discs_has_its_transcendental_roots():
    # (b² Ja Jb / Js − Js) tan b = b (Ja + Jb), ω = b c / L; Ja = 2, Jb = 3, Js = 1. Source: wave equation (derived).
    found = extrapolated(lambda cuts: file_of(cuts, (2.0, 3.0), bar(1.0))) * LENGTH / WAVE
    assert found == pytest.approx([0.87934722362032, 3.3863065140926, 6.4129270219471], rel=1e-7)


@pytest.mark.parametrize(
    ("ratio", "roots"),
    [
        (0.1, (0.3110528482003, 3.1730971766929)),
        (1.0, (0.86033358901938, 3.4256184594817)),
        (10.0, (1.4288700112141, 4.3058014131192)),
    ],
)
def test_a_fixed_bar_with_an_end_disc_has_its_transcendental_roots(ratio, roots):
    # a tan a = Js / Jd. The fixed end is the still middle of a bar of twice the length with two equal discs.
    disc = 1.0 / ratio
    found = extrapolated(lambda cuts: file_of(cuts, (disc, disc), bar(2.0, 2 * LENGTH)))
    assert found[[0, 2]] * LENGTH / WAVE == pytest.approx(roots, rel=1e-6)


def test_a_free_bar_has_its_harmonics():
    # f = i c / 2L: 798.08688446762 and 1596.1737689352 Hz for G = 80 GPa, ρ = 7850, L = 2 m (derived).
    found = extrapolated(lambda cuts: file_of(cuts, (0.0, 0.0), bar(1.0))) / (2 * math.pi)
    assert found[:2] == pytest.approx([798.08688446762, 1596.1737689352], rel=1e-7)


def exact_stepped(parts, discs, guess):
    """ω of discs on a stepped bar by transfer matrices, polished by bisection about a guess (independent)."""

    def end_torque(omega):
        angle, torque = 1.0, -(omega**2) * discs[0]
        for size, length in parts:
            rigidity = MODULUS * math.pi * size**4 / 32
            phase, impedance = omega * length / WAVE, rigidity * omega / WAVE
            angle, torque = (
                angle * math.cos(phase) + torque / impedance * math.sin(phase),
                -angle * impedance * math.sin(phase) + torque * math.cos(phase),
            )
        return torque - omega**2 * discs[1] * angle

    low, high = guess * 0.97, guess * 1.03
    assert end_torque(low) * end_torque(high) < 0
    for _ in range(80):
        middle = (low + high) / 2
        low, high = (middle, high) if end_torque(low) * end_torque(middle) > 0 else (low, middle)
    return low


def test_a_stepped_bar_converges_to_its_transfer_matrices():
    pieces = [{"od": "90 mm", "length": "700 mm"}, {"od": "140 mm", "length": "1.3 m"}]
    found = extrapolated(lambda cuts: file_of(cuts, (0.3, 0.2), pieces))
    exact = [exact_stepped([(0.09, 0.7), (0.14, 1.3)], (0.3, 0.2), value) for value in found]
    assert found == pytest.approx(exact, rel=1e-6)


@pytest.mark.parametrize(
    "pieces",
    [
        [{"od": "100 mm", "length": "2 m"}],
        [{"od": ["80 mm", "140 mm"], "id": "30 mm", "length": "2 m"}],
        [{"od": "90 mm", "length": "0.5 m", "hub": "120 mm"}, {"flange": "300 mm", "length": "30 mm"}, *bar(0.3)],
    ],
    ids=["plain", "taper", "hub, flange and bar"],
)
def test_the_error_is_of_second_order_in_the_length_of_the_cuts(pieces):
    values = [omega_of(file_of(cuts, (0.2, 0.3), pieces))[:3] for cuts in (16, 32, 64, 128)]
    changes = np.diff(np.array(values), axis=0)
    assert np.log2(changes[1] / changes[2]) == pytest.approx([2.0] * 3, abs=0.02)


def test_twice_the_cuts_stated_in_check_is_what_is_left():
    # The estimate against the exact root of the first case above.
    read = train(file_of(16, (2.0, 3.0), bar(1.0)))
    found = convergence(read, "reference")
    exact = 0.87934722362032 * WAVE / LENGTH / (2 * math.pi)
    assert found.mode == 1
    assert found.order == pytest.approx(2.0, abs=0.02)
    assert found.error == pytest.approx(abs(found.frequency_hz / exact - 1), rel=0.02)


def test_cuts_are_doubled_until_the_highest_judged_mode_has_converged():
    fast = {"hum": {"at": "a", "frequency": "1700 Hz"}}
    text = file_of(None, (2.0, 3.0), bar(1.0), excitations=fast)
    result = screening_of(text)
    cuts = next(item for item in result.assumed if item.key == "cuts")
    assert int(cuts.value) == 64
    flag = next(flag for flag in result.flags if "distributed" in flag.text)
    assert flag.text.startswith(
        "distributed inertia, 64 lengths: of the 3 lowest modes, up to the highest source, mode 3"
    )
    exact = 6.4129270219471 * WAVE / LENGTH / (2 * math.pi)
    assert result.modes[2].frequency_hz == pytest.approx(exact, rel=1e-3)
    kept = screening_of(file_of(8, (2.0, 3.0), bar(1.0), excitations=fast))
    flag = next(flag for flag in kept.flags if "distributed" in flag.text)
    assert "8 lengths" in flag.text
    assert flag.text.endswith("more cuts are wanted")
    assert all(item.key != "cuts" for item in kept.assumed)


GEARED = {
    "operation": {"speed-at": "m"},
    "gears": {"step": ("a", "p", 30, 20)},
    "materials": METAL,
    "power": {"m": "100 kW", "end": "balance"},
}
STATIONS = {"m": 2.0, "a": 0.5, "p": 0.1, "end": 0.4}


def geared(cuts=8, **row):
    """A motor, a step up, and a bar of 80 mm by 1.6 m on the fast side."""
    pieces = [{"od": "80 mm", "length": "1.6 m"}]
    shaft = {"between": ["p", "end"], "material": "metal", "pieces": pieces, "own-inertia": "distributed"}
    shafts = {"front": ("m", "a", 2e5), "bar": {**shaft, "cuts": cuts, **row}}
    return train_text(STATIONS, shafts=shafts, **GEARED)


def written_out(cuts=8):
    """The same with every length as a spring and every joint as a station."""
    stiffness = math.pi * MODULUS * 0.08**4 / 32 / (1.6 / cuts)
    own = math.pi * DENSITY * 1.6 * 0.08**4 / 32 / cuts
    inner = {f"i{n}": own for n in range(1, cuts)}
    stations = {**STATIONS, "p": 0.1 + own / 2, "end": 0.4 + own / 2, **inner}
    chain = ["p", *inner, "end"]
    lengths = {f"s{n}": (chain[n], chain[n + 1], stiffness) for n in range(cuts)}
    return train_text(stations, shafts={"front": ("m", "a", 2e5), **lengths}, **GEARED)


def test_a_cut_shaft_equals_its_lengths_written_out_as_stations():
    short, long = screening_of(geared()), screening_of(written_out())
    assert len(short.modes) == len(long.modes)
    for own, other in zip(short.modes, long.modes, strict=True):
        assert own.frequency_hz == pytest.approx(other.frequency_hz, rel=1e-12)
        strain = sum(share for name, share in other.strain_energy.items() if name.startswith("s") and name != "step")
        assert own.strain_energy["bar"] == pytest.approx(strain, abs=1e-11)
        kinetic = sum(share for name, share in other.kinetic_energy.items() if name.startswith("i"))
        assert own.kinetic_energy["bar (distributed)"] == pytest.approx(kinetic, abs=1e-11)
        for name in STATIONS:
            assert own.kinetic_energy[name] == pytest.approx(other.kinetic_energy[name], abs=1e-11)
        assert own.damping_ratio == pytest.approx(other.damping_ratio, rel=1e-10)
        assert own.link_torque["step"] / own.link_torque["front"] == pytest.approx(
            other.link_torque["step"] / other.link_torque["front"], rel=1e-8
        )
    assert short.self_check.all_proven


def test_a_cut_shaft_carries_its_mean_torque_and_winds_up_as_a_whole():
    short, long = screening_of(geared()), screening_of(written_out())
    assert duty(short, "bar").mean_torque_nm == pytest.approx(duty(long, "s3").mean_torque_nm, rel=1e-12)
    whole = sum(duty(long, f"s{n}").wind_up_rad for n in range(8))
    assert duty(short, "bar").wind_up_rad == pytest.approx(whole, rel=1e-12)


def test_a_cut_shaft_is_damped_as_its_lengths_written_out():
    short, long = (damped_results(screening_of(text)) for text in (geared(), written_out()))
    for own, other in zip(short.modes, long.modes, strict=True):
        assert own.frequency_hz == pytest.approx(other.frequency_hz, rel=1e-10)
        assert own.damping_ratio == pytest.approx(other.damping_ratio, rel=1e-8)


def test_a_cut_shaft_is_one_row_in_every_table():
    result = screening_of(geared())
    assert [row[0] for row in station_rows(result)] == list(STATIONS)
    rows = link_rows(result)
    assert [row[0] for row in rows] == ["front", "bar", "step"]
    assert rows[1][-1] == "in 8 lengths"
    assert set(result.modes[0].shape) == set(STATIONS)
    assert set(result.modes[0].kinetic_energy) == {*STATIONS, "bar (distributed)"}
    assert sum(result.modes[1].kinetic_energy.values()) == pytest.approx(1.0, abs=1e-12)


def test_standing_points_are_found_inside_a_distributed_shaft():
    # Mode 2 of the first case: node where the angle cos(b x) − (Ja b / Js) sin(b x) is zero, twice; b = 3.38630651.
    result = screening_of(file_of(64, (2.0, 3.0), bar(1.0)))
    root = 3.3863065140926
    first = math.atan(1 / (2.0 * root)) / root
    shares = sorted(node.share for node in result.modes[1].nodes if node.link == "bar")
    assert shares == pytest.approx([first, first + math.pi / root], abs=2e-3)


def test_tolerances_move_a_cut_shaft_as_a_whole():
    text = file_of(16, (0.0, 0.0), bar(1.0), row={"tolerance": "10 %", "inertia-tolerance": "4 %"})
    mode = screening_of(text).modes[0]
    low, high = (mode.frequency_hz * math.sqrt(ratio) for ratio in (0.9 / 1.04, 1.1 / 0.96))
    assert mode.bounds_hz == pytest.approx((low, high), rel=1e-12)


def test_tolerance_samples_move_every_length_together():
    graph = build_graph(train(geared(tolerance="10 %")))
    varied = vary(graph, graph.network)
    link = graph.link("bar")
    numbers = {int(varied.spring_input[index]) for index in link.cut.springs}
    inputs = inputs_of(train(geared(tolerance="10 %")), graph)
    assert [inputs[number].element for number in numbers] == ["shafts.bar"]
    assert varied.part_inertia.sum(axis=0) == pytest.approx(graph.network.inertia_kgm2, rel=1e-13)
    result = screening_of(geared(tolerance="10 %"))
    slopes = sensitivities(varied, result.network_modes, len(inputs))
    half = [mode.strain_energy["bar"] / 2 for mode in result.modes]
    assert slopes[:, numbers.pop()] == pytest.approx(half, rel=1e-9)
    study = tolerance_study(screening_of(geared(tolerance="10 %")), 200, 3)
    for mode in study.modes[:3]:
        assert mode.low_hz <= mode.p05_hz < mode.nominal_hz < mode.p95_hz <= mode.high_hz


def test_windows_of_a_distributed_shaft_are_refused_with_the_way_out():
    with pytest.raises(AskError, match=r'link bar: its inertia is distributed.*own-inertia = "ends"'):
        find_spring(screening_of(geared()), "bar")
    assert find_spring(screening_of(geared()), "front").name == "front"


def test_the_whole_train_can_be_distributed_by_its_assumptions():
    text = geared().replace(', "own-inertia" = "distributed"', "").replace(', "cuts" = 8', "")
    text = text.replace("[assumptions]\n", '[assumptions]\n"own-inertia" = "distributed"\n', 1)
    assert build_graph(train(text)).link("bar").slot == "cut"
    referred = text.replace('"between" = ["p", "end"]', '"referred-to" = "m", "between" = ["p", "end"]')
    assert build_graph(train(referred)).link("bar").slot == "spring"


@pytest.mark.parametrize(
    ("row", "words"),
    [
        ({"cuts": 1}, "2"),
        ({"cuts": 8, "own-inertia": "ends"}, "cuts a shaft of distributed inertia"),
        ({"referred-to": "m"}, "stands at its own speed"),
    ],
)
def test_cuts_that_make_no_sense_are_refused(row, words):
    assert words in refusal(geared(**row))
