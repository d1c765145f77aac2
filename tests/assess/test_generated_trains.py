"""A thousand train files of every kind through the whole path, from text to screening."""

from __future__ import annotations

from collections import Counter

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st

from random_trains import dense_inverse_squares, draft_rigid_motions, expected_modes, random_draft
from trains import screening_of


def tables_for(draft):
    """Machines, power and tolerances, so that every room of the path has work."""
    stations = list(draft.stations)
    tables = {
        "assumptions": {"tolerances": "default"},
        "excitations": {"pulse": {"at": stations[-1], "frequency": "37 Hz"}},
    }
    if draft.springs:
        tables["excitations"]["twist"] = {"at": next(iter(draft.springs)), "frequency": "61 Hz"}
    if not draft.speeds and len(stations) > 1:
        tables["power"] = {stations[0]: "100 kW", stations[-1]: "balance"}
    return tables


def check_modes(draft, result):
    """Number, order, bounds and balance of the modes."""
    assert len(result.modes) == expected_modes(draft)
    omega = np.array([mode.omega_rad_s for mode in result.modes])
    assert np.all(np.isfinite(omega))
    assert np.all(omega > 0)
    assert np.all(np.diff(omega) >= 0)
    assert result.self_check.largest_residual < 1e-9
    for mode in result.modes:
        low, high = mode.bounds_hz
        assert low <= mode.frequency_hz * (1 + 1e-12)
        assert high >= mode.frequency_hz * (1 - 1e-12)
    return omega


def check_against_dense(draft, omega):
    """1/(ω² + shift) of every motion, the shift the median ω², against a dense solver."""
    shift = float(np.median(omega)) ** 2
    dense = dense_inverse_squares(draft, shift)
    rigid = draft_rigid_motions(draft)
    found = np.concatenate([np.full(rigid, 1 / shift), 1 / (omega**2 + shift)])
    assert np.max(np.abs(dense[: len(found)] - found)) < 1e-7 / shift
    assert np.all(np.abs(dense[len(found) :]) < 1e-7 / shift)


def kinds_of(draft, result):
    """What this train has of all that a train can have."""
    graph = result.graph
    rigid_loop = graph.split_open or not all(graph.rigid.known)
    found = {
        "tie": draft.ties,
        "gear": draft.gears,
        "second speed": draft.speeds,
        "rigid loop": rigid_loop,
        "cluster": any(len(mode.cluster) > 1 for mode in result.modes),
        "massless": 0.0 in draft.stations.values(),
        "two rigid motions": graph.network.rigid_motions > 1,
        "no rigid motion": graph.network.rigid_motions == 0,
        "at rest": 0 in graph.speed_ratio,
        "no modes": not result.modes,
    }
    return [name for name, there in found.items() if there]


def test_every_mode_of_a_thousand_trains_is_found_and_proven():
    seen: Counter[str] = Counter()

    @given(st.integers(0, 2**32))
    @settings(max_examples=1000, deadline=None, derandomize=True)
    def every_mode_is_found_and_proven(seed):
        wide = seed % 4 == 0
        draft = random_draft(seed, decades=10.0 if wide else 4.0)
        result = screening_of(draft.text(**tables_for(draft)))
        omega = check_modes(draft, result)
        if len(omega) and not wide:
            check_against_dense(draft, omega)
        seen.update(kinds_of(draft, result))

    every_mode_is_found_and_proven()
    assert len(seen) == 10
    assert min(seen.values()) >= 8
