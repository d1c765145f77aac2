"""Keyways, splines, shoulders, rectangles, flanges and hot shafts: from the formulas and from the train file."""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np
import pytest
from scipy.sparse import coo_matrix
from scipy.sparse.linalg import spsolve

from quillshaft.elements import shaft_sections as sections
from quillshaft.elements.shaft import piece_inertia, piece_stiffness
from quillshaft.train.shaft_model import Piece
from trains import graph_of, refusal, train, train_text

G = 80e9


def file_of(pieces, materials=None, **row):
    shafts = {"bar": {"between": ["a", "b"], "material": "steel", "pieces": pieces, "own-inertia": "none", **row}}
    return train_text({"a": 1.0, "b": 1.0}, shafts=shafts, **({"materials": materials} if materials else {}))


def stiffness_of(pieces, materials=None, **row):
    return graph_of(file_of(pieces, materials, **row)).link("bar").stiffness_nm_rad


def assumed_of(text):
    return {item.key: item.value for item in train(text).assumed}


# Source: β of K = β a b³, series of Timoshenko and Goodier, recomputed by mpmath to 10 digits.
@pytest.mark.parametrize(
    ("ratio", "beta"),
    [
        (1, 0.140577015),
        (1.2, 0.1661189101),
        (1.5, 0.1957607089),
        (2, 0.2286816771),
        (2.5, 0.2493650747),
        (3, 0.263316931),
        (4, 0.2808129583),
        (6, 0.2983195073),
    ],
)
def test_a_rectangle_has_its_tabled_torsion_constant(ratio, beta):
    assert sections.rectangle_constant(ratio * 0.05, 0.05) / (ratio * 0.05**4) == pytest.approx(beta, rel=1e-9)
    # Source: Roark's approximation with half sides, K = A B³ [16/3 − 3.36 B/A (1 − B⁴/12A⁴)], good to 0.5 %.
    a, b = ratio / 2, 0.5
    roark = a * b**3 * (16 / 3 - 3.36 * b / a * (1 - b**4 / (12 * a**4)))
    assert roark == pytest.approx(beta * ratio, rel=5e-3)


def test_rectangles_and_squares_in_a_train_file_in_either_order_of_sides():
    rectangle = [{"section": {"rectangle": ["50 mm", "100 mm"]}, "length": "400 mm"}]
    assert stiffness_of(rectangle) == pytest.approx(0.2286816771 * 0.1 * 0.05**3 * G / 0.4, rel=1e-9)
    square = [{"section": {"square": "60 mm"}, "length": "400 mm"}]
    assert stiffness_of(square) == pytest.approx(0.140577015 * 0.06**4 * G / 0.4, rel=1e-9)


def test_a_rectangular_bar_adds_its_own_inertia():
    # ρ L a b (a² + b²) / 12 for 7850 kg/m³, 0.4 m, 0.1 × 0.05 m, half to each end; by hand: 15.7 kg · 0.0125 / 12.
    pieces = [{"section": {"rectangle": ["100 mm", "50 mm"]}, "length": "400 mm"}]
    graph = graph_of(file_of(pieces, **{"own-inertia": "ends"}))
    assert graph.inertia_kgm2 - 1.0 == pytest.approx([15.7 * 0.0125 / 24] * 2, rel=1e-10)


# Source: solution of the Prandtl problem by a least-squares rational approximation, six digits (independent of
# the fit); the fit itself at the same places, worked from Roark's polynomial.
@pytest.mark.parametrize(
    ("half_width", "depth", "solved", "fit"),
    [
        (0.25, 0.25, 0.8684714, 0.86569),
        (0.125, 0.25, 0.89888, 0.89555),
        (0.2, 0.2, 0.9107895, 0.90797),
        (0.3, 0.3, 0.8214528, 0.81848),
        (0.45, 0.3, 0.7996825, 0.79784),
        (0.4, 0.4, 0.7187064, 0.71488),
        (0.5, 0.5, 0.6118625, 0.60832),
        (0.25, 0.125, 0.9484838, 0.94133),
    ],
)
def test_a_keyway_takes_what_the_prandtl_solution_says_within_its_fit(half_width, depth, solved, fit):
    radius = 0.05
    share = sections.keyway_constant(radius, 2 * half_width * radius, depth * radius) / (2 * 0.7854 * radius**4)
    assert share == pytest.approx(fit, abs=6e-6)
    assert 0.0 < (solved - share) / solved < 0.008


def test_a_keyway_stands_over_its_own_length_only():
    # d = 100 mm, keyway 25 × 12.5 mm (a/b = 1, b/r = 0.25): K/K0 = 0.86569 (fit above) over 180 of 500 mm.
    plain = 1570796.3267949
    groove = {"width": "25 mm", "depth": "12.5 mm"}
    whole = stiffness_of([{"od": "100 mm", "length": "500 mm", "keyway": groove}])
    assert whole == pytest.approx(0.86569 * plain, rel=1e-5)
    part = stiffness_of([{"od": "100 mm", "length": "500 mm", "keyway": {**groove, "length": "180 mm"}}])
    assert part == pytest.approx(plain / (0.64 + 0.36 / 0.86569), rel=1e-5)


def test_a_keyway_beside_the_range_of_its_formula_is_said():
    sound = {"od": "100 mm", "length": "500 mm", "keyway": {"width": "25 mm", "depth": "12.5 mm"}}
    assert "keyway" not in assumed_of(file_of([sound]))
    shallow = {**sound, "keyway": {"width": "25 mm", "depth": "7 mm"}}
    assert assumed_of(file_of([shallow]))["keyway"] == "outside the formula's range"
    bored = {**sound, "id": "40 mm"}
    assert assumed_of(file_of([bored]))["keyway"] == "of a solid shaft"


@pytest.mark.parametrize(
    ("piece", "words"),
    [
        ({"od": "100 mm", "keyway": {"width": "25 mm", "depth": "30 mm"}}, "depth over radius up to 0.5"),
        ({"od": "100 mm", "keyway": {"width": "60 mm", "depth": "14 mm"}}, "half width over depth 0.3 to 1.5"),
        ({"od": ["90 mm", "100 mm"], "keyway": {"width": "25 mm", "depth": "12 mm"}}, "one diameter"),
        ({"od": "100 mm", "id": "80 mm", "keyway": {"width": "25 mm", "depth": "12 mm"}}, "a depth below 10 mm"),
        ({"od": "100 mm", "keyway": {"width": "25 mm", "depth": "12 mm", "length": "1 m"}}, "longer than its piece"),
        ({"od": "100 mm", "flange": "200 mm"}, "exactly one of od | section | spline | flange"),
        ({"section": {"rectangle": ["500 mm", "10 mm"]}}, "two sides within a factor of 20"),
        ({"section": {"square": "50 mm"}, "id": "10 mm"}, "taken as solid"),
        ({"spline": {"major": "60 mm", "minor": "70 mm"}}, "must stay below major"),
        ({"spline": {"major": "60 mm", "minor": "50 mm"}, "id": "55 mm"}, "must stay below minor"),
        ({"flange": "200 mm"}, "holds flanges alone"),
    ],
)
def test_pieces_that_cannot_be_are_refused_with_what_is_allowed(piece, words):
    assert words in refusal(file_of([{"length": "300 mm", **piece}]))


def test_splines_twist_as_their_root_circle_unless_told():
    pieces = [{"spline": {"major": "80 mm", "minor": "70 mm"}, "length": "200 mm"}]
    root = math.pi * G * 0.07**4 / (32 * 0.2)
    assert stiffness_of(pieces) == pytest.approx(root, rel=1e-12)
    assert assumed_of(file_of(pieces))["spline share"] == "0 % (root circle)"
    pieces[0]["spline"]["share"] = "50 %"
    assert stiffness_of(pieces) == pytest.approx(root * (75 / 70) ** 4, rel=1e-12)
    assert "spline share" not in assumed_of(file_of(pieces))


def solved_spline(teeth, minor, rings=80, rays=30):
    """Torsion constant over that of the outer circle, teeth as wide as gaps: Prandtl's function by finite volumes."""
    dr, dt = 1.0 / rings, math.pi / teeth / rays
    r = (np.arange(rings) + 0.5) * dr
    inside = (r[:, None] < minor) | (np.arange(rays)[None, :] < rays / 2)
    number = np.where(inside, np.cumsum(inside).reshape(inside.shape) - 1, -1)
    rows, columns, values, diagonal = [], [], [], np.zeros(int(inside.sum()))
    for i, j in zip(*np.nonzero(inside), strict=True):
        round_about = 1 / ((i + 0.5) * dt)
        sides = ((i + 1, j, (i + 1) * dt), (i - 1, j, i * dt), (i, j + 1, round_about), (i, j - 1, round_about))
        for a, b, flow in sides:
            if a < 0 or not 0 <= b < rays:
                continue
            outside = a >= rings or number[a, b] < 0
            diagonal[number[i, j]] += 2 * flow if outside else flow
            if not outside:
                rows.append(number[i, j])
                columns.append(number[a, b])
                values.append(-flow)
    own = np.arange(len(diagonal))
    matrix = coo_matrix(
        (np.concatenate([values, diagonal]), (np.concatenate([rows, own]), np.concatenate([columns, own])))
    )
    area = np.repeat(r[:, None] * dr * dt, rays, axis=1)[inside]
    return 2 * float(spsolve(matrix.tocsc(), 2 * area) @ area) * 2 * teeth / (math.pi / 2)


def test_a_solved_spline_lies_a_fifth_of_the_tooth_above_its_root_circle():
    # Ten straight teeth, root 7/8 of the outer diameter: between root and outer circle as the inclusion says.
    share = (solved_spline(10, 0.875) ** 0.25 - 0.875) / 0.125
    assert share == pytest.approx(0.21, abs=0.02)
    assert sections.spline_diameter(0.08, 0.07, 0.21) == pytest.approx(0.0721, rel=1e-12)


def test_a_flange_is_a_rigid_disc_with_the_inertia_of_its_size():
    # Disc ⌀0.5 × 0.1 m of 7850 kg/m³: π ρ L D⁴ / 32 = 4.81669967396 kg·m².
    flange = Piece(0.1, (0.5, 0.5), flange=True)
    assert piece_inertia(flange, 7850.0) == pytest.approx(4.81669967396, rel=1e-11)
    assert piece_stiffness(flange, G) == math.inf
    bar = {"od": "100 mm", "length": "500 mm"}
    disc = {"flange": "500 mm", "length": "100 mm"}
    assert stiffness_of([bar, disc]) == pytest.approx(1570796.3267949, rel=1e-12)
    graph = graph_of(file_of([disc, bar], **{"own-inertia": "ends"}))
    half = math.pi * 7850 * 0.5 * 0.1**4 / 64
    assert graph.inertia_kgm2 - 1.0 == pytest.approx([4.81669967396 + half, half], rel=1e-10)


# Source: own axisymmetric finite-element solution of div(r³ grad ψ) = 0 for stepped solid shafts.
@pytest.mark.parametrize(
    ("step", "fillet", "factor"),
    [
        (1.25, 0.0, 0.07675),
        (1.25, 0.05, 0.0575),
        (1.25, 0.1, 0.0292),
        (1.5, 0.0, 0.10676),
        (1.5, 0.05, 0.0904),
        (1.5, 0.2, 0.0069),
        (2.0, 0.0, 0.13408),
        (2.0, 0.1, 0.0971),
        (3.0, 0.05, 0.1369),
        (3.0, 0.2, 0.0636),
        (6.0, 0.0, 0.15881),
        (20.0, 0.0, 0.16004),
    ],
)
def test_the_junction_factor_is_that_of_the_finite_element_solution(step, fillet, factor):
    assert sections.junction_factor(step, fillet) == pytest.approx(factor, abs=1e-5)


def solved_junction(step, squares):
    """JF of a sharp step from bilinear elements for div(r³ grad ψ) = 0, D1 = 1, both lengths 1.5 (independent)."""
    size = 0.5 / squares
    thin, thick, along = squares, round(squares * step), 3 * squares
    number = -np.ones((2 * along + 1, thick + 1), dtype=int)
    number[: along + 1, : thin + 1] = 0
    number[along:, :] = 0
    number[number == 0] = np.arange(np.count_nonzero(number == 0))
    cells = [(i, j) for i in range(2 * along) for j in range(thin if i < along else thick)]
    row, column = np.array(cells).T
    nodes = np.stack([number[row + a, column + b] for a in (0, 1) for b in (0, 1)], axis=1)
    points, element = (0.5 - math.sqrt(1 / 12), 0.5 + math.sqrt(1 / 12)), np.zeros((len(cells), 4, 4))
    for x in points:
        for y in points:
            slope = np.array([[-(1 - y), -y, 1 - y, y], [-(1 - x), 1 - x, -x, x]])
            element += ((column + y) * size)[:, None, None] ** 3 * (slope.T @ slope) / 4
    rows, columns = np.repeat(nodes, 4, axis=1).ravel(), np.tile(nodes, (1, 4)).ravel()
    matrix = coo_matrix((element.ravel(), (rows, columns))).tocsr()
    held, turned = number[0][number[0] >= 0], number[-1]
    angle = np.zeros(matrix.shape[0])
    angle[turned] = 1.0
    free = np.setdiff1d(np.arange(len(angle)), np.concatenate([held, turned]))
    angle[free] = spsolve(matrix[free][:, free].tocsc(), -matrix[free] @ angle)
    torque = 2 * math.pi * angle @ (matrix @ angle)
    first, second = math.pi / 32, math.pi / 32 * step**4
    return (1 / torque - 1.5 / first - 1.5 / second) / (1 / first - 1 / second)


@pytest.mark.parametrize("step", [1.25, 1.5, 2.0])
def test_a_finite_element_solution_of_our_own_gives_the_sharp_junction_factor(step):
    # The energy converges as h^(4/3) at the re-entrant corner of 270°: extrapolated from h and h/2.
    coarse, fine = solved_junction(step, 16), solved_junction(step, 32)
    found = fine + (fine - coarse) / (2 ** (4 / 3) - 1)
    assert sections.junction_factor(step) == pytest.approx(found, rel=0.002)


def test_the_junction_factor_rises_with_the_step_and_falls_with_the_fillet():
    assert sections.junction_factor(1.0) == 0.0
    # Reissner and Sagoci: an infinite sharp step has at least 3π/64.
    assert sections.junction_factor(1e6) > 3 * math.pi / 64
    for fillet in (0.0, 0.03, 0.08, 0.15):
        values = [sections.junction_factor(step, fillet) for step in np.linspace(1.0, 8.0, 60)]
        assert all(after >= before - 1e-12 for before, after in pairwise(values))
    assert sections.junction_factor(1.7, 0.06) < sections.junction_factor(1.7, 0.02)


def test_a_shoulder_in_a_train_file_moves_length_from_the_thick_to_the_thin_side():
    # D1 = 60, L1 = 200, D2 = 90, L2 = 300 mm, G = 80 GPa: none 392609.321909, JF 0.10676 gives 384976.448854
    # N·m/rad. Source: L1 + JF D1, L2 − JF D1, worked by hand.
    pieces = [{"od": "60 mm", "length": "200 mm"}, {"od": "90 mm", "length": "300 mm"}]
    assert stiffness_of(pieces) == pytest.approx(392609.321909, rel=1e-11)
    assert assumed_of(file_of(pieces))["shoulder"] == "none"
    assert stiffness_of(pieces, shoulder="sharp") == pytest.approx(384976.448854, rel=1e-11)
    assert "shoulder" not in assumed_of(file_of(pieces, shoulder="sharp"))
    # With a fillet r/D1 = 0.1: JF = 0.0660, from either side.
    pieces[0]["fillet"] = "6 mm"
    filleted = stiffness_of(pieces, shoulder="fillet")
    moved = 0.0660 * 0.06
    expected = math.pi * G / 32 / ((0.2 + moved) / 0.06**4 + (0.3 - moved) / 0.09**4)
    assert filleted == pytest.approx(expected, rel=1e-6)
    assert stiffness_of(pieces[::-1], shoulder="fillet") == pytest.approx(filleted, rel=1e-13)


def test_a_shoulder_at_a_flange_lengthens_the_bar_alone():
    pieces = [{"od": "60 mm", "length": "200 mm"}, {"flange": "120 mm", "length": "30 mm"}]
    longer = math.pi * G * 0.06**4 / (32 * (0.2 + 0.13408 * 0.06))
    assert stiffness_of(pieces, shoulder="sharp") == pytest.approx(longer, rel=1e-9)


def test_a_thin_collar_takes_no_more_than_its_own_twist():
    collar = [
        {"od": "60 mm", "length": "200 mm"},
        {"od": "120 mm", "length": "1 mm"},
        {"od": "60 mm", "length": "200 mm"},
    ]
    assert stiffness_of(collar, shoulder="sharp") < stiffness_of([collar[0], collar[2]])


def test_small_steps_need_no_word_about_shoulders():
    pieces = [{"od": "100 mm", "length": "200 mm"}, {"od": "120 mm", "length": "300 mm"}]
    assert "shoulder" not in assumed_of(file_of(pieces))


def test_fillets_are_needed_where_shoulders_use_them():
    pieces = [{"od": "60 mm", "length": "200 mm"}, {"od": "90 mm", "length": "300 mm"}]
    assert "needs the fillet radius" in refusal(file_of(pieces, shoulder="fillet"))


HOT = {"hot-steel": {"shear-modulus": {"20 degC": "80 GPa", "200 degC": "74 GPa"}, "density": "7850 kg/m^3"}}
BAR = {"od": "100 mm", "length": "500 mm"}


def test_the_shear_modulus_is_read_at_the_shafts_temperature():
    # Straight between the points: 80 − 6 · 90/180 = 77 GPa at 110 °C.
    def at(**row):
        return stiffness_of([BAR], HOT, material="hot-steel", **row)

    assert at() == pytest.approx(1570796.3267949, rel=1e-12)
    assert at(temperature="110 degC") == pytest.approx(1570796.3267949 * 77 / 80, rel=1e-12)
    assert at(temperature="200 degC") == pytest.approx(1570796.3267949 * 74 / 80, rel=1e-12)
    assert assumed_of(file_of([BAR], HOT, material="hot-steel"))["temperature"] == "20 °C"
    assert "temperature" not in assumed_of(file_of([BAR], HOT, material="hot-steel", temperature="110 degC"))


def test_one_piece_can_be_hotter_than_its_shaft():
    half = {"od": "100 mm", "length": "250 mm"}
    pieces = [half, {**half, "temperature": "200 degC"}]
    both = stiffness_of(pieces, HOT, material="hot-steel")
    assert both == pytest.approx(1570796.3267949 * 2 / (1 + 80 / 74), rel=1e-12)


@pytest.mark.parametrize(
    ("row", "words"),
    [
        ({"material": "hot-steel", "temperature": "250 degC"}, "20 to 200 °C"),
        ({"temperature": "100 degC"}, "the shear modulus of steel is not stated against temperature"),
    ],
)
def test_a_temperature_without_a_modulus_is_refused(row, words):
    assert words in refusal(file_of([BAR], HOT, **row))


def test_a_composite_tube_stands_by_its_given_modulus():
    # ⌀120/100 × 900 mm tube of G = 28 GPa: π G (D⁴ − d⁴) / (32 L) by hand.
    tube = {"tube": {"shear-modulus": "28 GPa", "density": "1600 kg/m^3"}}
    pieces = [{"od": "120 mm", "id": "100 mm", "length": "900 mm"}]
    expected = math.pi * 28e9 * (0.12**4 - 0.1**4) / (32 * 0.9)
    assert stiffness_of(pieces, tube, material="tube") == pytest.approx(expected, rel=1e-13)


@pytest.mark.parametrize(
    ("ratio", "alpha"), [(1.0, 0.208), (1.5, 0.231), (2.0, 0.246), (3.0, 0.267), (4.0, 0.282), (10.0, 0.312)]
)
def test_a_rectangle_has_its_tabled_shear_stress(ratio, alpha):
    # Timoshenko and Goodier, Theory of Elasticity, table of k2 for rectangular bars (from memory, three digits)
    assert sections.rectangle_modulus(ratio * 0.05, 0.05) / (ratio * 0.05**3) == pytest.approx(alpha, abs=6e-4)
