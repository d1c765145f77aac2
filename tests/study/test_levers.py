"""Levers against the train itself: a change put back into the file clears the pair, a little less does not."""

from __future__ import annotations

import copy
import math

import numpy as np
import pytest

from quillshaft.assess.results import Screening, graver
from quillshaft.graph.build import build_graph
from quillshaft.solve.modes import natural_frequencies
from quillshaft.solve.plan import plan_elimination
from quillshaft.study.changed import corners_of
from quillshaft.study.lever_search import LARGEST_FACTOR
from quillshaft.study.levers import HELPLESS, Lever, levers
from quillshaft.study.reach import changed, data_of, factors_to
from random_trains import Draft, random_draft
from train_files import TEXT, edited, screened
from trains import screening_of, train, train_text

SEEDS = range(30)
TWO_PI = 2.0 * math.pi
TWO_DISC = {"motor": 4.0, "fan": 9.0}


def _pulsed(seed: int) -> tuple[Draft, dict, Screening]:
    """A random train with two fixed frequencies near its first modes and 6 % tolerance on what has one."""
    draft = random_draft(seed, decades=2.5)
    omega = natural_frequencies(build_graph(train(draft.text())).network)
    if not len(omega):
        pytest.skip("a train without an elastic mode")
    rng = np.random.default_rng(seed)
    stations = list(draft.stations)
    pulses = {}
    for number in range(2):
        near = float(omega[min(number, len(omega) - 1)]) / TWO_PI * float(rng.uniform(0.9, 1.1))
        at = stations[int(rng.integers(len(stations)))]
        pulses[f"pulse-{number}"] = {"at": at, "frequency": f"{near!r} Hz"}
    tables = {
        "excitations": pulses,
        "assumptions": {"tolerances": "default"},
        "criteria": {"separation": "10 %", "worst-case-separation": ["0 %", "5 %"][seed % 2]},
    }
    return draft, tables, screening_of(draft.text(**tables))


def _put_back(draft: Draft, lever: Lever, factor: float) -> Draft:
    """The draft with the lever's datum multiplied, as it stands in the tables."""
    out = copy.deepcopy(draft)
    name = lever.element.split(".", 1)[1]
    if lever.quantity == "inertia":
        out.stations[name] *= factor
        return out
    for table in (out.springs, out.flexible, out.ties):
        if name in table:
            table[name] = (*table[name][:-1], table[name][-1] * factor)
    if name in out.gears:
        stated = float(str(out.gears[name]["mesh-stiffness"]).split()[0])
        out.gears[name]["mesh-stiffness"] = f"{stated * factor!r} N m/rad"
    return out


def _gravest(screening: Screening, source: str, mode: int) -> str:
    """The graver verdict of a pair; a pair that is not judged lies above every source."""
    found = [pair for pair in screening.interferences if (pair.source, pair.mode) == (source, mode)]
    return graver(found[0].verdict, found[0].worst_verdict) if found else "clear"


@pytest.mark.parametrize("seed", SEEDS[::3])
def test_a_lever_put_back_into_the_file_clears_the_pair_and_one_per_cent_less_does_not(seed):
    draft, tables, screening = _pulsed(seed)
    for ways in levers(screening)[:3]:
        for lever in ways.levers:
            after = screening_of(_put_back(draft, lever, lever.factor).text(**tables))
            assert _gravest(after, ways.source, ways.mode) == "clear"
            short = 1.0 + 0.99 * (lever.factor - 1.0)
            before = screening_of(_put_back(draft, lever, short).text(**tables))
            assert _gravest(before, ways.source, ways.mode) != "clear"


@pytest.mark.parametrize("seed", SEEDS[::6])
def test_what_a_lever_does_to_other_pairs_is_what_screening_again_finds(seed):
    draft, tables, screening = _pulsed(seed)
    known = {(p.source, p.mode): graver(p.verdict, p.worst_verdict) for p in screening.interferences}
    for ways in levers(screening)[:2]:
        for lever in ways.levers:
            after = screening_of(_put_back(draft, lever, lever.factor).text(**tables))
            now = {(p.source, p.mode): graver(p.verdict, p.worst_verdict) for p in after.interferences}
            turned = {
                key
                for key in {*known, *now} - {(ways.source, ways.mode)}
                if now.get(key, "clear") != known.get(key, "clear")
            }
            told = {(s.source, s.mode) for s in (*lever.worsened, *lever.cleared)}
            assert told <= turned
            missing = [
                key for key in turned - told if graver(known.get(key, "clear"), now.get(key, "clear")) == now.get(key)
            ]
            assert not missing
            assert lever.frequency_hz == pytest.approx(after.mode(ways.mode).frequency_hz, rel=1e-9)
            assert lever.bounds_hz == pytest.approx(after.mode(ways.mode).bounds_hz, rel=1e-9)


@pytest.mark.parametrize("seed", [0, 10])
def test_no_change_smaller_than_the_first_lever_clears_the_pair(seed):
    """Every datum at 8 factors nearer to 1 than the first lever, on the networks; a pulse is one frequency."""
    _, tables, screening = _pulsed(seed)
    graph, corners = screening.graph, corners_of(screening)
    plan = plan_elimination(corners.nominal)
    needs = 0.10, [0.0, 0.05][seed % 2]
    for ways in [item for item in levers(screening) if item.source in tables["excitations"]]:
        pulse = float(tables["excitations"][ways.source]["frequency"].split()[0])
        first = ways.levers[0].size if ways.levers else math.inf
        for datum in data_of(graph, corners.nominal):
            for size in np.geomspace(1.001, min(first, LARGEST_FACTOR[datum.quantity]) * 0.999, 4):
                for factor in (float(size), float(1.0 / size)):
                    own, low, high = (
                        natural_frequencies(changed(graph, network, side, datum, factor), plan)[ways.mode - 1] / TWO_PI
                        for network, side in ((corners.nominal, 0), (corners.soft_heavy, -1), (corners.stiff_light, 1))
                    )
                    nominal = own >= pulse * (1 + needs[0]) or own <= pulse * (1 - needs[0])
                    assert not (nominal and (low > pulse * (1 + needs[1]) or high < pulse * (1 - needs[1])))


@pytest.mark.parametrize(("stiffness", "upward"), [(2.0e5, True), (1.5e5, False)])
def test_two_discs_the_factor_is_that_of_the_closed_form(stiffness, upward):
    """ω² = k (1/J1 + 1/J2) (two discs on a shaft: Den Hartog, Mechanical Vibrations, sec. 5.2, from memory)."""
    pulse_hz, required, tolerance = 40.0, 0.10, 0.08
    text = train_text(
        TWO_DISC,
        couplings={"link": {"between": ["motor", "fan"], "stiffness": stiffness, "tolerance": "8 %"}},
        excitations={"pulse": {"at": "fan", "frequency": f"{pulse_hz} Hz"}},
        criteria={"separation": "10 %"},
    )
    ways = next(item for item in levers(screening_of(text)) if item.source == "pulse")
    unit = stiffness * (1 / TWO_DISC["motor"] + 1 / TWO_DISC["fan"])
    side = 1 if upward else -1
    factor = (TWO_PI * pulse_hz * (1 + side * required)) ** 2 / (unit * (1 - side * tolerance))
    lever = next(lever for lever in ways.levers if lever.quantity == "stiffness")
    assert lever.factor == pytest.approx(factor, rel=1e-9)
    assert lever.to_value == pytest.approx(factor * stiffness, rel=1e-9)
    assert lever.sensitivity == pytest.approx(0.5, abs=1e-12)


@pytest.mark.parametrize("seed", SEEDS)
def test_factors_put_a_mode_on_the_frequency_asked_for(seed):
    draft = random_draft(seed, decades=2.5)
    graph = build_graph(train(draft.text()))
    network, plan = graph.network, plan_elimination(graph.network)
    own = natural_frequencies(network, plan)
    if not len(own):
        return
    wanted = np.array([0.83 * own[0], 1.07 * own[-1], 0.4 * own[0] + 0.6 * own[len(own) // 2]])
    data = data_of(graph, network)
    factors = factors_to(graph, network, plan, 0, data, wanted)
    for datum, row in zip(data, factors, strict=True):
        for omega, factor in zip(wanted, row, strict=True):
            if 1e-2 < factor < 1e2 and abs(factor - 1.0) > 1e-9:
                there = natural_frequencies(changed(graph, network, 0, datum, float(factor)), plan)
                assert np.min(np.abs(there / omega - 1.0)) < 1e-9


def test_elements_that_cannot_help_have_a_sensitivity_below_one_per_cent():
    screening = screened(edited('stiffness = "0.145 MN m/rad"', 'stiffness = "0.9 MN m/rad"'))
    found = levers(screening)
    assert found
    for ways in found:
        mode = screening.mode(ways.mode)
        for element in ways.cannot_help:
            table, name = element.split(".", 1)
            share = mode.kinetic_energy[name] if table == "stations" else mode.strain_energy[name]
            assert share / 2 < HELPLESS
        named = {*ways.cannot_help, *ways.not_alone}
        assert not named & {lever.element for lever in ways.levers}


def test_a_clear_train_needs_no_levers():
    text = train_text(TWO_DISC, shafts={"link": ("motor", "fan", 5.0e7)})
    assert levers(screening_of(text)) == ()


def test_a_dismissed_pair_gets_no_levers_and_its_lapse_is_told():
    pulse = {"excitations": {"pulse": {"at": "fan", "frequency": "40 Hz"}, "near": {"at": "fan", "frequency": "41 Hz"}}}
    k = (TWO_PI * 40.5) ** 2 / (1 / 4.0 + 1 / 9.0)
    dismissal = {"source": "near", "mode": 1, "frequency": "40.5 Hz", "because": "no torque there", "by": "A. N."}
    text = train_text(TWO_DISC, shafts={"link": ("motor", "fan", k)}, dismissals={"quiet": dismissal}, **pulse)
    found = levers(screening_of(text))
    assert [ways.source for ways in found] == ["pulse"]
    assert all(lever.stale == ("quiet",) and not lever.harmless for lever in found[0].levers)


def test_progress_is_told_of_every_interference():
    heard: list[tuple[int, int]] = []
    screening = screened(TEXT)
    found = levers(screening, lambda done, of: heard.append((done, of)))
    assert heard == [(number, len(found)) for number in range(1, len(found) + 1)]
