"""Uniform shafts cut into many pieces approach the continuous shaft, with second-order error."""

from __future__ import annotations

import math

import numpy as np
import pytest

from trains import omegas, train_text

G, RHO, L = 80e9, 7850.0, 2.0
C = math.sqrt(G / RHO)  # 3192.3475378705 m/s
CUTS = (8, 16, 32)


def cut_shaft(cuts, first=0.0, last=0.0, own=1.0, wall=False):
    """Frequencies [rad/s] of a steel shaft of total inertia `own` [kg·m²] in equal pieces between two discs.

    With `wall` the first piece is a tie to ground and the disc `first` does not exist.
    """
    diameter = (32 * own / (math.pi * RHO * L)) ** 0.25
    piece = {"od": f"{diameter!r} m", "length": f"{L / cuts!r} m"}
    count = cuts if wall else cuts + 1
    stations = {f"p{i}": 0.0 for i in range(count)}
    stations[f"p{count - 1}"] = last
    ties = {}
    if wall:
        stations["p0"] = own / cuts / 2 + (last if count == 1 else 0.0)
        ties["wall"] = ("p0", math.pi * G * diameter**4 / (32 * L / cuts))
    else:
        stations["p0"] = first
    shafts = {
        f"s{i}": {"between": [f"p{i}", f"p{i + 1}"], "pieces": [piece], "own-inertia": "ends"} for i in range(count - 1)
    }
    return omegas(train_text(stations, shafts=shafts, ties=ties))


def check_second_order(by_cuts, exact):
    """Errors fall by four with every halving, and the extrapolated value is the exact one."""
    errors = np.abs(np.array(by_cuts) - exact)
    orders = np.log2(errors[:-1] / errors[1:])
    assert orders == pytest.approx([2.0, 2.0], abs=0.08)
    richardson = (4 * by_cuts[2] - by_cuts[1]) / 3
    assert richardson == pytest.approx(exact, rel=2e-5)


def test_speed_of_the_wave():
    assert pytest.approx(3192.3475378705, rel=1e-13) == C


# f_i = i c/(2L) free-free and (2i − 1) c/(4L) fixed-free. Source: Thomson; Rao, torsion of uniform shafts.
@pytest.mark.parametrize(("mode", "hz"), [(0, 798.08688446762), (1, 1596.1737689352)])
def test_a_free_shaft_approaches_i_c_over_2l(mode, hz):
    check_second_order([cut_shaft(cuts)[mode] for cuts in CUTS], 2 * math.pi * hz)


@pytest.mark.parametrize(("mode", "hz"), [(0, 399.04344223381), (1, 1197.1303267014)])
def test_a_shaft_held_at_one_end_approaches_odd_quarters(mode, hz):
    check_second_order([cut_shaft(cuts, wall=True)[mode] for cuts in CUTS], 2 * math.pi * hz)


# a tan a = Js/Jd. Source: Den Hartog; Rao, shaft fixed at one end with a disc; roots worked to 14 digits.
@pytest.mark.parametrize(
    ("ratio", "roots"),
    [
        (0.1, (0.3110528482003, 3.1730971766929, 6.2990593598956)),
        (0.5, (0.6532711870944, 3.2923100212821, 6.3616203920657)),
        (1.0, (0.86033358901938, 3.4256184594817, 6.4372981791719)),
        (2.0, (1.0768739863118, 3.6435971674254, 6.5783337327223)),
        (10.0, (1.4288700112141, 4.3058014131192, 7.2281097716272)),
    ],
)
def test_a_held_shaft_with_a_disc_approaches_the_transcendental_roots(ratio, roots):
    found = [cut_shaft(cuts, last=1.0 / ratio, wall=True) for cuts in CUTS]
    for mode, root in enumerate(roots[:2]):
        check_second_order([values[mode] for values in found], root * C / L)
    errors = [abs(values[2] * L / C - roots[2]) for values in found]
    assert errors[2] < errors[1] / 3.5 < errors[0] / 10


# (b² Ja Jb/Js − Js) tan b = b (Ja + Jb), ω = b c/L, Ja = 2, Jb = 3, Js = 1 (derived, 14 digits).
@pytest.mark.parametrize(("mode", "root"), [(0, 0.87934722362032), (1, 3.3863065140926), (2, 6.4129270219471)])
def test_a_free_shaft_between_two_discs_approaches_the_transcendental_roots(mode, root):
    cuts = CUTS if mode < 2 else (16, 32, 64)
    check_second_order([cut_shaft(count, first=2.0, last=3.0)[mode] for count in cuts], root * C / L)


def test_a_massless_shaft_between_two_discs_is_the_textbook_estimate():
    # b = √(Js (Ja + Jb)/(Ja Jb)) with the shaft's own inertia left out.
    shafts = {"s": {"between": ["a", "b"], "stiffness": G * 1.0 / RHO / L**2}}
    (omega,) = omegas(train_text({"a": 2.0, "b": 3.0}, shafts=shafts))
    assert omega * L / C == pytest.approx(0.912870929175, rel=1e-11)


def test_one_piece_with_its_inertia_at_the_ends_is_the_two_disc_closed_form():
    # Discs 2.5 and 3.5 on the massless shaft: √(6/8.75), 5.8 % under the exact 0.87934722 for a shaft this heavy.
    lumped = cut_shaft(1, first=2.0, last=3.0)[0] * L / C
    assert lumped == pytest.approx(math.sqrt(6 / 8.75), rel=1e-12)
    assert lumped / 0.87934722362032 == pytest.approx(0.9417, abs=1e-4)
