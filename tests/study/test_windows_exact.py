"""Windows against a dense scan, and reported edges put back into the train, on random trains of every kind."""

from __future__ import annotations

import itertools
from collections import Counter

import numpy as np
import pytest
from window_trains import at_first_named, case_of, dense_frequencies_hz, nominal, refitted

from quillshaft.graph.build import build_graph
from quillshaft.solve.modes import natural_frequencies
from quillshaft.study.windows import stiffness_windows
from trains import screening_of, train

TRAINS = 200
SCAN = np.geomspace(1 / 19.0, 19.0, 21)
EDGE = 1e-6
"""Relative: how near a band edge the dense solution is not trusted to tell the side."""


@pytest.fixture(scope="module")
def cases():
    found = (case_of(seed) for seed in range(1000))
    return [case for _, case in zip(range(TRAINS), (case for case in found if case is not None), strict=False)]


def forbidden_at(windows, stiffness: float) -> bool:
    return any(one.from_nm_rad < stiffness < one.to_nm_rad for one in windows.forbidden)


def test_no_stiffness_of_a_dense_scan_is_judged_wrongly_on_200_random_trains(cases):
    judged = Counter()
    for case in cases:
        windows = stiffness_windows(case.screening, case.link)
        middle = float(np.exp(np.mean(np.log(case.bands_hz))))
        for factor in SCAN:
            stated = nominal(case.draft, case.link) * float(factor)
            hz = dense_frequencies_hz(refitted(case.draft, case.link, stated), middle)
            edges = np.array(case.bands_hz).ravel()
            if len(hz) and np.min(np.abs(hz[:, None] / edges - 1)) < EDGE:
                judged["on an edge"] += 1
                continue
            wanted = any(((low < hz) & (hz < high)).any() for low, high in case.bands_hz)
            assert forbidden_at(windows, at_first_named(case, stated)) == wanted, (case.link, stated)
            judged[wanted] += 1
    assert len(cases) == TRAINS
    assert judged[True] > 1000
    assert judged[False] > 1000
    assert judged["on an edge"] < 10


def test_the_modes_named_as_causes_are_those_the_dense_solution_finds_in_the_band(cases):
    for case in cases[:60]:
        windows = stiffness_windows(case.screening, case.link)
        causes = [cause for one in windows.forbidden for cause in one.because]
        middle = float(np.exp(np.mean(np.log(case.bands_hz))))
        for factor in SCAN[::6]:
            stated = nominal(case.draft, case.link) * float(factor)
            hz = dense_frequencies_hz(refitted(case.draft, case.link, stated), middle)
            actual = at_first_named(case, stated)
            named = {(c.source, c.mode) for c in causes if c.from_nm_rad < actual < c.to_nm_rad}
            inside = {
                (name, i + 1)
                for name, (low, high) in zip(case.tables["excitations"], case.bands_hz, strict=True)
                for i, f in enumerate(hz)
                if low < f < high
            }
            assert named == inside, (case.link, stated)


def test_a_stiffness_at_a_reported_edge_has_a_mode_within_1e_11_of_the_band_edge(cases):
    worst, edges = 0.0, 0
    for case in cases:
        windows = stiffness_windows(case.screening, case.link)
        low, high = windows.search_nm_rad
        ends = {end for one in windows.forbidden for end in (one.from_nm_rad, one.to_nm_rad) if low <= end <= high}
        bands = 2 * np.pi * np.array(case.bands_hz).ravel()
        for end in sorted(ends)[:4]:
            stated = end * nominal(case.draft, case.link) / windows.nominal_nm_rad
            text = refitted(case.draft, case.link, stated).text()
            omega = natural_frequencies(build_graph(train(text)).network)
            worst = max(worst, float(np.min(np.abs(omega[:, None] / bands - 1))))
            edges += 1
    assert edges > 200
    assert worst < 1e-11


TOLERANT = {
    "assumptions": {"tolerances": "default"},
    "criteria": {"separation": "10 %", "worst-case-separation": "4 %", "margin-on": "natural"},
}


def test_screening_at_any_stiffness_gives_the_verdicts_that_the_windows_foretell():
    checked = Counter()
    found = (case_of(seed, **TOLERANT) for seed in range(2000, 2200))
    for case in itertools.islice((case for case in found if case is not None), 20):
        windows = stiffness_windows(case.screening, case.link)
        for factor in SCAN[::3]:
            stated = nominal(case.draft, case.link) * float(factor)
            result = screening_of(refitted(case.draft, case.link, stated).text(**case.tables))
            actual = at_first_named(case, stated)
            allowed = any(low <= actual <= high for low, high in windows.allowed)
            recommended = any(low <= actual <= high for low, high in windows.recommended)
            assert allowed == (result.verdict == "clear")
            assert recommended == (result.verdict == result.worst_verdict == "clear")
            checked[allowed, recommended] += 1
    assert min(checked[True, True], checked[True, False], checked[False, False]) > 5
