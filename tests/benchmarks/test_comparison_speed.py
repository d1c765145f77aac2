"""Cost of matching and levers beside one screening of the same train; prints paired medians."""

from __future__ import annotations

import statistics
import time

import pytest

from quillshaft.study.compare import compare
from quillshaft.study.levers import levers
from trains import screening_of, train_text

pytestmark = pytest.mark.benchmark
ROUNDS = 9


def _chain(count: int, stiffness: float):
    stations = {f"s{i}": 1.0 + 0.1 * (i % 7) for i in range(count)}
    shafts = {f"k{i}": (f"s{i}", f"s{i + 1}", 1e6 * (1 + i % 5)) for i in range(count - 1)}
    shafts["k3"] = ("s3", "s4", stiffness)
    tables = {"assumptions": {"tolerances": "default"}, "criteria": {"worst-case-separation": "0 %"}}
    plain = screening_of(train_text(stations, shafts=shafts))
    near = [mode.frequency_hz * 1.03 for mode in plain.modes[:4]]
    pulses = {f"p{i}": {"at": "s0", "frequency": f"{value!r} Hz"} for i, value in enumerate(near)}
    return train_text(stations, shafts=shafts, excitations=pulses, **tables)


def _median(work) -> float:
    times = []
    for _ in range(ROUNDS):
        begun = time.perf_counter()
        work()
        times.append(time.perf_counter() - begun)
    return statistics.median(times)


def test_comparison_and_levers_of_thirty_stations():
    text = _chain(30, 2e6)
    base, near, far = screening_of(text), screening_of(_chain(30, 2.1e6)), screening_of(_chain(30, 2e9))
    alone = _median(lambda: screening_of(text))
    direct = _median(lambda: compare(base, {"near": near}))
    followed = _median(lambda: compare(base, {"far": far}))
    ways = levers(base)
    assert ways
    out = _median(lambda: levers(base)) / max(1, len(ways))
    print(f"\none screening {alone * 1e3:.1f} ms; as shares of it: comparison {direct / alone:.2f}, ", end="")
    print(f"followed along the change {followed / alone:.2f}, levers of one interference {out / alone:.2f}")
    assert direct < alone
    assert followed < 40 * alone
