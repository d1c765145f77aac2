"""Round shafts in torsion: stiffness and polar inertia of pieces, from the formulas and from the train file."""

from __future__ import annotations

import math

import mpmath
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from quillshaft.elements import shaft
from quillshaft.train.shaft_model import Material, Piece
from trains import graph_of, train_text

G = 80e9
STEEL = Material("steel", G, 7850.0)


def link_of(pieces, material="steel", **row):
    shafts = {"bar": {"between": ["a", "b"], "material": material, "pieces": pieces, "own-inertia": "none", **row}}
    return graph_of(train_text({"a": 1.0, "b": 1.0}, shafts=shafts)).link("bar")


# Source of the numbers: π G (D⁴ − d⁴) / (32 L) and the integral of it along the shaft, worked to 14 digits.
@pytest.mark.parametrize(
    ("piece", "expected"),
    [
        ({"od": "100 mm", "length": "500 mm"}, 1570796.3267949),
        ({"od": "100 mm", "id": "60 mm", "length": "500 mm"}, 1367221.1228423),
        ({"od": ["80 mm", "120 mm"], "length": "500 mm"}, 1371454.0055755),
        ({"od": ["80 mm", "120 mm"], "id": "40 mm", "length": "500 mm"}, 1322003.972337),
        ({"od": ["80 mm", "120 mm"], "id": ["40 mm", "60 mm"], "length": "500 mm"}, 1285738.1302271),
    ],
    ids=["solid", "hollow", "cone", "cone with a straight bore", "cone with a bore in ratio"],
)
def test_stiffness_of_one_piece_in_a_train_file(piece, expected):
    assert link_of([piece]).stiffness_nm_rad == pytest.approx(expected, rel=1e-13)


def test_a_cone_with_a_straight_bore_agrees_with_its_closed_form():
    # 1/k = 32 L / (π G (D2 − D1)) [F(D2) − F(D1)], F(D) = (½ ln((D−b)/(D+b)) − atan(D/b)) / (2 b³): derived.
    d1, d2, bore, length = 0.08, 0.12, 0.04, 0.5

    def primitive(d):
        return (0.5 * math.log((d - bore) / (d + bore)) - math.atan(d / bore)) / (2 * bore**3)

    flexibility = 32 / (math.pi * G) * length / (d2 - d1) * (primitive(d2) - primitive(d1))
    assert shaft.tapered_stiffness(G, length, (d1, d2), (bore, bore)) == pytest.approx(1 / flexibility, rel=1e-12)


def test_hubs_add_a_third_of_their_engagement():
    # d = 80 mm, gap 50 mm, hubs 90 and 120 mm: free length 50 + 30 + 40 = 120 mm. Source: one-third rule,
    # common practice; arithmetic by hand.
    piece = {"od": "80 mm", "length": "50 mm", "hub": ["90 mm", "120 mm"]}
    assert link_of([piece]).stiffness_nm_rad == pytest.approx(2680825.73106, rel=1e-11)
    plain = {"od": "80 mm", "length": "120 mm"}
    assert link_of([piece]).stiffness_nm_rad == pytest.approx(link_of([plain]).stiffness_nm_rad, rel=1e-13)


@pytest.mark.parametrize(("rule", "free_mm"), [("0 %", 50.0), ("66 %", 50.0 + 0.66 * 210.0), ("100 %", 260.0)])
def test_the_share_of_the_hub_rule_is_a_datum_of_the_piece(rule, free_mm):
    piece = {"od": "80 mm", "length": "50 mm", "hub": ["90 mm", "120 mm"], "hub-rule": rule}
    plain = {"od": "80 mm", "length": free_mm}
    assert link_of([piece]).stiffness_nm_rad == pytest.approx(link_of([plain]).stiffness_nm_rad, rel=1e-13)


def test_the_train_wide_hub_rule_is_used_where_a_piece_has_none_of_its_own():
    def stiffness(rule):
        shafts = {"bar": {"between": ["a", "b"], "pieces": [{"od": 80, "length": 50, "hub": 210}]}}
        text = train_text({"a": 1.0, "b": 1.0}, shafts=shafts, assumptions={"hub-rule": rule})
        return graph_of(text).link("bar").stiffness_nm_rad

    assert stiffness("50 %") == pytest.approx(shaft.cylinder_stiffness(G, 0.155, 0.08), rel=1e-13)


def test_equivalent_length_has_the_stiffness_of_the_real_shaft():
    # Le = L (De / D)⁴. Source: theory-of-machines textbooks, torsionally equivalent shaft.
    length = shaft.equivalent_length(0.5, 0.1, 0.08)
    assert length == pytest.approx(0.5 * 0.8**4, rel=1e-15)
    row = {"bar": {"between": ["a", "b"], "equivalent": {"length": f"{length} m", "diameter": "80 mm"}}}
    link = graph_of(train_text({"a": 1.0, "b": 1.0}, shafts=row)).link("bar")
    assert link.stiffness_nm_rad == pytest.approx(1570796.3267949, rel=1e-13)


def test_pieces_stand_in_series_whatever_the_material():
    # k1 = 84880.27, k2 = 185423.78, k3 = 26401.16 in series. Source: G.K. Grover, Mechanical Vibrations,
    # example 2.5.2 (G = 0.83e11), recomputed.
    pieces = [{"od": od, "length": length} for od, length in ((50, 600), (80, 1800), (30, 250))]
    materials = {"own": {"shear-modulus": "83 GPa", "density": "7850 kg/m^3"}}
    shafts = {"bar": {"between": ["a", "b"], "material": "own", "pieces": pieces}}
    graph = graph_of(train_text({"a": 1.0, "b": 1.0}, shafts=shafts, materials=materials))
    assert graph.link("bar").stiffness_nm_rad == pytest.approx(18164.8168967, rel=1e-11)


def test_flexibility_is_the_inverse_of_stiffness():
    shafts = {"bar": {"between": ["a", "b"], "flexibility": "0.23e-6 rad/(N m)"}}
    link = graph_of(train_text({"a": 1.0, "b": 1.0}, shafts=shafts)).link("bar")
    assert link.stiffness_nm_rad == pytest.approx(1 / 0.23e-6, rel=1e-14)


def test_a_disc_has_the_inertia_of_the_handbook_formula():
    # J = π ρ L D⁴ / 32: D = 0.5 m, L = 0.1 m, 7850 kg/m³ give 4.81669967396 kg·m² (formula, by hand).
    assert shaft.piece_inertia(Piece(0.1, (0.5, 0.5)), 7850.0) == pytest.approx(4.81669967396, rel=1e-11)


def test_own_inertia_counts_all_of_the_hub_engagement_and_goes_to_the_ends():
    shafts = {"bar": {"between": ["a", "b"], "pieces": [{"od": 500, "length": 40, "hub": 60}]}}
    graph = graph_of(train_text({"a": 1.0, "b": 2.0}, shafts=shafts))
    assert graph.inertia_kgm2 - [1.0, 2.0] == pytest.approx([4.81669967396 / 2] * 2, rel=1e-11)


def test_own_inertia_of_unequal_pieces_follows_the_lever_rule_on_flexibility():
    # The stiff thick piece moves almost as one with its own end: its inertia belongs there.
    thick, thin = Piece(0.1, (0.3, 0.3)), Piece(0.1, (0.1, 0.1))
    first, second = shaft.end_inertias((thick, thin), STEEL)
    flexible = [1 / shaft.piece_stiffness(piece, G) for piece in (thick, thin)]
    own = [shaft.piece_inertia(piece, 7850.0) for piece in (thick, thin)]
    shares = [flexible[0] / 2 / sum(flexible), (flexible[0] + flexible[1] / 2) / sum(flexible)]
    assert second == pytest.approx(own[0] * shares[0] + own[1] * shares[1], rel=1e-12)
    assert first + second == pytest.approx(sum(own), rel=1e-12)


sizes = st.floats(0.02, 0.5)


@given(sizes, sizes, st.floats(0.0, 0.9), st.floats(0.0, 0.9), st.floats(0.01, 3.0))
@settings(max_examples=40, deadline=None, derandomize=True)
def test_any_taper_agrees_with_adaptive_quadrature(d1, d2, c1, c2, length):
    b1, b2 = c1 * d1, c2 * d2

    def integrand(x):
        return 1 / ((d1 + (d2 - d1) * x) ** 4 - (b1 + (b2 - b1) * x) ** 4)

    with mpmath.workdps(20):
        mean = mpmath.quad(integrand, mpmath.linspace(0, 1, 9))
    expected = math.pi * G / (32 * length * float(mean))
    found = shaft.piece_stiffness(Piece(length, (d1, d2), (b1, b2)), G)
    assert found == pytest.approx(expected, rel=1e-9)


@given(sizes, sizes, st.floats(0.0, 0.9), st.floats(0.05, 0.95), st.floats(0.01, 3.0))
@settings(max_examples=60, deadline=None, derandomize=True)
def test_cutting_a_taper_in_two_changes_neither_stiffness_nor_inertia(d1, d2, bore, cut, length):
    inner = bore * min(d1, d2)
    middle = d1 + cut * (d2 - d1)
    whole = (Piece(length, (d1, d2), (inner, inner)),)
    halves = (
        Piece(cut * length, (d1, middle), (inner, inner)),
        Piece((1 - cut) * length, (middle, d2), (inner, inner)),
    )
    assert shaft.pieces_stiffness(halves, STEEL) == pytest.approx(shaft.pieces_stiffness(whole, STEEL), rel=1e-9)
    assert sum(shaft.end_inertias(halves, STEEL)) == pytest.approx(sum(shaft.end_inertias(whole, STEEL)), rel=1e-12)


@given(st.lists(st.tuples(sizes, sizes, st.floats(0.01, 1.0)), min_size=1, max_size=5))
@settings(max_examples=60, deadline=None, derandomize=True)
def test_turning_a_shaft_end_for_end_swaps_its_end_inertias(rows):
    pieces = tuple(Piece(length, (d1, d2)) for d1, d2, length in rows)
    turned = tuple(Piece(length, (d2, d1)) for d1, d2, length in reversed(rows))
    assert shaft.pieces_stiffness(turned, STEEL) == pytest.approx(shaft.pieces_stiffness(pieces, STEEL), rel=1e-12)
    ends = shaft.end_inertias(pieces, STEEL)
    assert shaft.end_inertias(turned, STEEL)[::-1] == pytest.approx(ends, rel=1e-10)
