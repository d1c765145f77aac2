"""Natural frequencies of textbook trains, from the train file on."""

from __future__ import annotations

import math

import numpy as np
import pytest

from trains import graph_of, omegas, screening_of, train_text

TWO_PI = 2 * math.pi
LOCK = 1e17  # N·m/rad, a tie as stiff as a wall beside every shaft here


def discs(inertias, stiffnesses, **tables):
    names = [f"d{i + 1}" for i in range(len(inertias))]
    shafts = {f"s{i + 1}": (names[i], names[i + 1], k) for i, k in enumerate(stiffnesses)}
    return train_text(dict(zip(names, inertias, strict=True)), shafts=shafts, **tables)


def shape(mode):
    """Angles relative to the first station."""
    angles = np.array(list(mode.shape.values()))
    return angles / angles[0]


def test_two_discs_swing_against_each_other_about_one_node():
    # ω = √(k (J1 + J2)/(J1 J2)). Source: Den Hartog, Mechanical Vibrations; Thomson; Rao (closed form).
    (mode,) = screening_of(discs([2.0, 3.0], [1e5])).modes
    assert mode.omega_rad_s == pytest.approx(288.675134594813, rel=1e-13)
    assert mode.frequency_hz == pytest.approx(45.9440746184827, rel=1e-13)
    assert mode.cycles_per_min == pytest.approx(60 * 45.9440746184827, rel=1e-13)
    assert mode.shape == pytest.approx({"d1": 1.0, "d2": -2 / 3}, rel=1e-12)
    assert [(node.link, node.share) for node in mode.nodes] == [("s1", pytest.approx(0.6, rel=1e-12))]


@pytest.mark.parametrize(
    ("inertias", "stiffnesses", "expected", "shapes"),
    [
        # Compressor, turbine and generator: S.S. Rao, Mechanical Vibrations, Holzer example (data from memory;
        # the closed form of three discs gives these surds).
        ([8, 6, 4], [4e6, 2e6], [500 * math.sqrt(2), 500 * math.sqrt(6)], [[1, 0, -2], [1, -2, 1]]),
        # Symmetric chains, closed form.
        ([3, 3, 3], [2e5, 2e5], [math.sqrt(2e5 / 3), math.sqrt(2e5)], [[1, 0, -1], [1, -2, 1]]),
        ([3, 6, 3], [2e5, 2e5], [math.sqrt(2e5 / 3), math.sqrt(4e5 / 3)], [[1, 0, -1], [1, -1, 1]]),
    ],
    ids=["8-6-4", "J-J-J", "J-2J-J"],
)
def test_three_discs_have_the_closed_form_frequencies_and_shapes(inertias, stiffnesses, expected, shapes):
    modes = screening_of(discs([float(j) for j in inertias], stiffnesses)).modes
    assert [mode.omega_rad_s for mode in modes] == pytest.approx(expected, rel=1e-13)
    for mode, expected_shape in zip(modes, shapes, strict=True):
        assert shape(mode) == pytest.approx(expected_shape, abs=1e-12)


def test_three_rotors_on_one_shaft_have_the_published_nodes():
    # J = 0.15, 0.3, 0.09 kg·m², d = 70 mm, spans 1.5 and 1.0 m, G = 84 GPa. Source: R.S. Khurmi, Theory of
    # Machines, torsional chapter (from memory), 171 and 277 Hz; node distances 0.4356 m from A and 0.726 m
    # from C from a public examination paper. Recomputed to the digits below.
    spans = {"s1": 1.5, "s2": 1.0}
    shafts = {
        name: {
            "between": ends,
            "material": "own",
            "own-inertia": "none",
            "pieces": [{"od": "70 mm", "length": f"{spans[name]} m"}],
        }
        for name, ends in (("s1", ["A", "B"]), ("s2", ["B", "C"]))
    }
    materials = {"own": {"shear-modulus": "84 GPa", "density": "7850 kg/m^3"}}
    stations = {"A": 0.15, "B": 0.3, "C": 0.09}
    one, two = screening_of(train_text(stations, shafts=shafts, materials=materials)).modes
    assert [one.omega_rad_s, two.omega_rad_s] == pytest.approx([1072.46252897, 1740.65600254], rel=1e-11)
    assert [one.frequency_hz, two.frequency_hz] == pytest.approx([170.687712766, 277.034007026], rel=1e-11)
    assert shape(one) == pytest.approx([1, -0.306999532, -0.643334894], rel=1e-8)
    assert shape(two) == pytest.approx([1, -2.44300047, 6.47666823], rel=1e-8)
    assert max(two.shape.values()) == two.shape["C"] == 1.0
    # The one-node mode: only in A–B. The two-node mode: one in each span.
    assert {node.link: node.share * spans[node.link] for node in one.nodes} == {
        "s1": pytest.approx(1.147666822714, rel=1e-11)
    }
    assert {node.link: node.share * spans[node.link] for node in two.nodes} == {
        "s1": pytest.approx(0.43566651061, rel=1e-10),
        "s2": pytest.approx(1 - 0.7261108510167, rel=1e-10),
    }


def us_geared(pinion, wheel):
    stations = {
        "A": {"wr2": "1500 lb in^2"},
        "B": {"wr2": pinion},
        "C": {"wr2": wheel},
        "D": {"wr2": "50000 lb in^2"},
    }
    pieces = {"first": (["A", "B"], 2.75, 39.5), "second": (["C", "D"], 3.5, 25.5)}
    shafts = {
        name: {"between": ends, "material": "own", "own-inertia": "none", "pieces": [{"od": d, "length": length}]}
        for name, (ends, d, length) in pieces.items()
    }
    materials = {"own": {"shear-modulus": "12e6 psi", "density": "0.283 lb/in^3"}}
    return train_text(stations, "US", shafts=shafts, materials=materials, gears={"mesh": ("B", "C", 30, 50)})


# Two geared shafts in US units, the second at 0.6 of the speed. Source: worked example of a theory-of-machines
# textbook, read in a public companion to it; its data recomputed with exact unit factors (the companion's own
# 84.760 Hz and 83.567, 347.07 Hz rest on g = 32.3 ft/s², hence 0.4 %).
def test_geared_pair_in_us_units_with_massless_gears():
    (mode,) = screening_of(us_geared(0, 0)).modes
    assert mode.frequency_hz == pytest.approx(84.59756633, rel=1e-9)
    assert mode.cycles_per_min == pytest.approx(5075.85398, rel=1e-8)
    assert mode.frequency_hz == pytest.approx(84.760, rel=4e-3)


def test_geared_pair_in_us_units_with_the_inertia_of_its_gears():
    text = us_geared("54 lb in^2", "850 lb in^2")
    graph = graph_of(text)
    expected = [0.438959480144, 0.0158025412852, 0.248743705415, 14.6319826715]
    assert graph.inertia_kgm2 == pytest.approx(expected, rel=1e-11)
    assert graph.link("first").stiffness_nm_rad == pytest.approx(192723.62368, rel=1e-11)
    assert graph.link("second").stiffness_nm_rad == pytest.approx(783309.277137, rel=1e-11)
    modes = screening_of(text).modes
    assert [mode.omega_rad_s for mode in modes] == pytest.approx([523.896694519, 2173.51689017], rel=1e-11)
    assert [mode.frequency_hz for mode in modes] == pytest.approx([83.3807486, 345.925957], rel=1e-8)
    assert [mode.frequency_hz for mode in modes] == pytest.approx([83.567, 347.07], rel=4e-3)


def test_wr2_in_bare_numbers_of_a_us_file_is_lb_ft2():
    text = us_geared(54 / 144, 850 / 144)
    assert omegas(text) == pytest.approx([523.896694519, 2173.51689017], rel=1e-11)


def test_geared_two_discs_equal_the_closed_form():
    # k_eq = 1/(1/k1 + 1/(n² k2)), ω = √(k_eq (1/J1 + 1/(n² J2))). Source: W.T. Thomson, Theory of Vibration
    # with Applications, sec. 12.10–12.11: stiffness and inertia of the geared shaft times n².
    stations = {"one": 0.5, "pinion": 0, "wheel": 0, "two": 20.0}
    shafts = {"s1": ("one", "pinion", 2e4), "s2": ("wheel", "two", 3e5)}
    text = train_text(stations, shafts=shafts, gears={"mesh": ("pinion", "wheel", 20, 80)})
    (mode,) = screening_of(text).modes
    assert mode.omega_rad_s == pytest.approx(164.61097835062, rel=1e-13)
    assert mode.frequency_hz == pytest.approx(26.198650891694, rel=1e-13)
    # Strain is shared as flexibility: 1/k1 against 1/(n² k2).
    assert mode.strain_energy["s1"] == pytest.approx(9677.4193548387 / 2e4, rel=1e-12)
    assert mode.strain_energy["mesh"] == 0.0


def branches(count):
    stations = {"motor": 10.0, "gear": 2.0}
    shafts, gears = {"quill": ("motor", "gear", 1e6)}, {}
    for i in range(1, count + 1):
        stations |= {f"pinion{i}": 0.05, f"pump{i}": 0.8}
        shafts[f"shaft{i}"] = (f"pinion{i}", f"pump{i}", 2e5)
        gears[f"mesh{i}"] = ("gear", f"pinion{i}", 60, 20)
    return train_text(stations, shafts=shafts, gears=gears)


def test_twin_branches_have_an_antisymmetric_mode_at_exactly_500():
    # ω² = k_b/J_b: gear and motor still (closed form; own data).
    low, still, high = screening_of(branches(2)).modes
    assert low.omega_rad_s == pytest.approx(360.9999765752, rel=1e-12)
    assert still.omega_rad_s == pytest.approx(500.0, rel=1e-14)
    assert high.omega_rad_s == pytest.approx(1343.832546661, rel=1e-12)
    # The gear and the pinions with it stand still: the pumps swing against each other.
    assert still.shape["pump1"] == pytest.approx(1.0, rel=1e-12)
    assert still.shape["pump2"] == pytest.approx(-1.0, rel=1e-12)
    for name in ("motor", "gear", "pinion1", "pinion2"):
        assert abs(still.shape[name]) < 1e-12
    assert still.cluster == (2,)


def test_the_symmetric_modes_of_twin_branches_are_those_of_a_chain():
    # J1, Jg + 2 n² Jp, 2 n² Jb on k1, 2 n² kb with n = 3.
    chain = omegas(discs([10.0, 2 + 18 * 0.05, 18 * 0.8], [1e6, 18 * 2e5]))
    assert omegas(branches(2))[[0, 2]] == pytest.approx(chain, rel=1e-13)


def test_three_equal_branches_make_one_cluster_of_two():
    modes = screening_of(branches(3)).modes
    assert [mode.cluster for mode in modes] == [(1,), (2, 3), (2, 3), (4,)]
    for mode in modes[1:3]:
        assert mode.omega_rad_s == pytest.approx(500.0, rel=1e-13)
        # What is printed of a cluster must not depend on the basis: each branch has a third of each mode.
        for i in (1, 2, 3):
            assert mode.strain_energy[f"shaft{i}"] == pytest.approx(1 / 3, rel=1e-9)
            assert mode.kinetic_energy[f"pump{i}"] == pytest.approx(1 / 3, rel=1e-9)
        assert (mode.proof.below, mode.proof.above) == (1, 3)


@pytest.mark.parametrize(("count", "low", "high"), [
    (4, 484.060507634, 1168.62544254),
    (6, 327.383073742, 1221.81026474),
    (10, 197.875685631, 1249.33790987),
])  # fmt: skip
def test_a_uniform_free_chain_has_the_closed_form_spectrum(count, low, high):
    # ω_i = 2 √(k/J) sin(iπ/(2N)), J = 0.5, k = 2e5. Source: normal modes of a lattice, Thomson; Den Hartog.
    found = omegas(discs([0.5] * count, [2e5] * (count - 1)))
    exact = [2 * math.sqrt(4e5) * math.sin(i * math.pi / (2 * count)) for i in range(1, count)]
    assert found == pytest.approx(exact, rel=1e-13)
    assert (found[0], found[-1]) == pytest.approx((low, high), rel=1e-11)


@pytest.mark.parametrize(("count", "known"), [(2, [0.61803399, 1.61803399]), (5, [0.28462968])])
def test_a_uniform_chain_held_at_one_end_has_the_closed_form_spectrum(count, known):
    # ω_i = 2 √(k/J) sin((2i−1)π/(2(2N+1))), k/J = 1 (closed form; N = 2 is the golden ratio).
    found = omegas(discs([1e3] * count, [1e3] * (count - 1), ties={"wall": ("d1", 1e3)}))
    exact = [2 * math.sin((2 * i - 1) * math.pi / (2 * (2 * count + 1))) for i in range(1, count + 1)]
    assert found == pytest.approx(exact, rel=1e-13)
    assert found[: len(known)] == pytest.approx(known, rel=1e-7)


def test_four_rotors_have_the_free_frequencies_of_the_worked_example():
    # J = 100, 50, 10, 50; k = 1e4, 1e4, 2e4. Data: G.K. Grover, Mechanical Vibrations, example 7.7.2; the
    # frequencies recomputed in 50 digits.
    found = omegas(discs([100.0, 50.0, 10.0, 50.0], [1e4, 1e4, 2e4]))
    assert found == pytest.approx([10.6037898319, 21.1496911527, 57.7948977449], rel=1e-11)


def test_a_disc_on_three_shafts_in_series_held_at_the_end():
    # Source: G.K. Grover, Mechanical Vibrations, example 2.5.2, recomputed: 35.1525508279 rad/s.
    pieces = [{"od": od, "length": length} for od, length in ((50, 600), (80, 1800), (30, 250))]
    shafts = {"bar": {"between": ["disc", "wall"], "material": "own", "own-inertia": "none", "pieces": pieces}}
    materials = {"own": {"shear-modulus": "83 GPa", "density": "7850 kg/m^3"}}
    text = train_text({"disc": 14.7, "wall": 0}, shafts=shafts, materials=materials, ties={"lock": ("wall", LOCK)})
    (mode,) = screening_of(text).modes
    assert mode.omega_rad_s == pytest.approx(35.1525508279, rel=1e-11)
    assert mode.frequency_hz == pytest.approx(5.59470222655, rel=1e-11)


def test_a_flywheel_between_two_fixed_ends():
    # 450 kg at a radius of gyration of 0.5 m, d = 50 mm, 0.9 and 0.6 m, G = 84 GPa. Source: theory-of-machines
    # textbook, illustration 11.3 in a public companion (its π = 3.147 puts it 0.1 % higher); recomputed.
    materials = {"own": {"shear-modulus": "84 GPa", "density": "7850 kg/m^3"}}
    shafts = {
        name: {
            "between": ends,
            "material": "own",
            "own-inertia": "none",
            "pieces": [{"od": "50 mm", "length": length}],
        }
        for name, ends, length in (("s1", ["left", "wheel"], "0.9 m"), ("s2", ["wheel", "right"], "0.6 m"))
    }
    ties = {"lock1": ("left", LOCK), "lock2": ("right", LOCK)}
    text = train_text({"left": 0, "wheel": 450 * 0.25, "right": 0}, shafts=shafts, materials=materials, ties=ties)
    graph = graph_of(text)
    both = graph.link("s1").stiffness_nm_rad + graph.link("s2").stiffness_nm_rad
    assert both == pytest.approx(143171.540203, rel=1e-11)
    (mode,) = screening_of(text).modes
    assert mode.frequency_hz == pytest.approx(5.6776970913, rel=1e-10)


def test_shapes_are_actual_angles_and_positive_is_each_shafts_own_rotation():
    # Two rigidly geared discs on stubs: in the mode the wheel turns 1/4 of the pinion, both in their own sense.
    stations = {"one": 0.5, "pinion": 0.01, "wheel": 0.3, "two": 20.0}
    shafts = {"s1": ("one", "pinion", 2e4), "s2": ("wheel", "two", 3e5)}
    mode = screening_of(train_text(stations, shafts=shafts, gears={"m": ("pinion", "wheel", 20, 80)})).modes[0]
    assert mode.shape["wheel"] == pytest.approx(mode.shape["pinion"] / 4, rel=1e-12)
    assert mode.referred_shape["wheel"] == pytest.approx(mode.referred_shape["pinion"], rel=1e-12)
    assert max(map(abs, mode.shape.values())) == max(map(abs, mode.referred_shape.values())) == 1.0


def test_a_single_station_and_a_rigid_pair_have_no_modes_and_are_clear():
    alone = screening_of(train_text({"rotor": 1.0}))
    geared = screening_of(train_text({"a": 1.0, "b": 2.0}, gears={"m": ("a", "b", 20, 31)}))
    for result in (alone, geared):
        assert result.modes == () == result.interferences
        assert result.verdict == result.worst_verdict == "clear"


def test_ten_decades_of_stiffness_keep_their_accuracy():
    # Against a 60-digit solution of the same chain (mpmath, symmetric eigenvalues).
    import mpmath

    inertia, stiffness = [3.0, 0.02, 5.0, 0.4, 7.0, 0.1, 2.0], [1.5e4, 5e12, 3e7, 2e9, 8e11, 4e5]
    with mpmath.workdps(60):
        size = len(inertia)
        matrix = mpmath.zeros(size)
        for i, k in enumerate(stiffness):
            for a, b, sign in ((i, i, 1), (i + 1, i + 1, 1), (i, i + 1, -1), (i + 1, i, -1)):
                matrix[a, b] += sign * mpmath.mpf(k) / mpmath.sqrt(mpmath.mpf(inertia[a]) * mpmath.mpf(inertia[b]))
        values = sorted(mpmath.eigsy(matrix, eigvals_only=True))[1:]
        exact = [float(mpmath.sqrt(value)) for value in values]
    assert omegas(discs(inertia, stiffness)) == pytest.approx(exact, rel=1e-13)
