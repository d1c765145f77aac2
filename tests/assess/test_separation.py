"""Separation of sources from natural frequencies: margins, verdicts and critical speeds."""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from quillshaft.assess.separation import critical_speeds, judged_ranges, required_separation, separate
from quillshaft.sources.line import Action, Source, frequencies_over, meeting_speeds
from quillshaft.train.model import Operation
from trains import RPM, screening_of, train_text

TWO_PI = 2 * math.pi


def source(order=0.0, frequency_hz=0.0, band=0.0, ratio=1.0, labels=(("s", "default"),)):
    action = Action("point", (0,), (0.0,))
    return Source("s", ("s",), labels, "a", 0, order, frequency_hz, band, ratio, "continuous", action)


def operation(ranges, barred=(), rated=1500.0):
    def radians(pairs):
        return tuple((low * RPM, high * RPM) for low, high in pairs)

    return Operation("a", rated * RPM, radians(ranges), True, 0.02, 0.02, barred_rad_s=radians(barred))


def judge(line, natural, ranges, barred=(), required=0.1, on="excitation"):
    band = natural if isinstance(natural, tuple) else (natural, natural)
    return separate(line, band, judged_ranges(operation(ranges, barred)), required, on)


# One source of order 2 over 900 to 1500 rpm: 30 to 50 Hz.
@pytest.mark.parametrize(
    ("natural", "on", "margin", "verdict", "at_rpm"),
    [
        (60.0, "excitation", 0.2, "clear", 1500),
        (60.0, "natural", 10 / 60, "clear", 1500),
        (54.0, "excitation", 0.08, "close", 1500),
        (54.0, "natural", 4 / 54, "close", 1500),
        (24.0, "excitation", -0.2, "clear", 900),
        (24.0, "natural", -0.25, "clear", 900),
        (28.0, "excitation", -2 / 30, "close", 900),
        (40.0, "excitation", 0.0, "crossing", 1200),
        (30.0, "excitation", 0.0, "crossing", 900),  # touching an edge is meeting
        (50.0, "natural", 0.0, "crossing", 1500),
        (55.0, "excitation", 0.1, "clear", 1500),  # exactly what is required is enough
        (27.0, "excitation", -0.1, "clear", 900),
    ],
)
def test_margins_and_verdicts_by_hand(natural, on, margin, verdict, at_rpm):
    result = judge(source(2), natural, [(900, 1500)], on=on)
    assert result.margin == pytest.approx(margin, abs=1e-14)
    assert result.verdict == verdict
    assert result.at_rad_s == pytest.approx(at_rpm * RPM, rel=1e-12)


def test_a_meeting_inside_a_barred_range_only_is_barred():
    assert judge(source(2), 40.0, [(900, 1500)], [(1150, 1250)]).verdict == "barred"
    assert judge(source(2), 40.0, [(900, 1500)], [(1150, 1250)]).margin == 0.0


@pytest.mark.parametrize(("natural", "verdict"), [
    (1150 / 30, "crossing"),  # at the edge the train still runs
    (1250 / 30, "crossing"),
    (1150.001 / 30, "barred"),
    (1100 / 30, "crossing"),
])  # fmt: skip
def test_the_edge_of_a_barred_range_belongs_to_running(natural, verdict):
    assert judge(source(2), natural, [(900, 1500)], [(1150, 1250)]).verdict == verdict


def test_a_barred_range_at_the_end_of_the_running_range_leaves_its_outer_edge_running():
    assert judge(source(2), 30.0, [(900, 1500)], [(900, 1000)]).verdict == "crossing"
    assert judge(source(2), 32.0, [(900, 1500)], [(900, 1000)]).verdict == "barred"
    assert judge(source(2), 32.0, [(900, 1500)], [(850, 1000)]).verdict == "barred"
    assert judge(source(2), 49.0, [(900, 1500)], [(1400, 1600)]).verdict == "barred"
    assert judge(source(2), 49.0, [(900, 1500)], [(1400, 1500)]).verdict == "barred"
    assert judge(source(2), 50.0, [(900, 1500)], [(1400, 1500)]).verdict == "crossing"
    assert judge(source(2), 50.0, [(900, 1500)], [(1400, 1501)]).verdict == "barred"


def test_overlapping_and_touching_barred_ranges_are_one():
    ranges, barred = [(900, 1500)], [(950, 1100), (1050, 1200), (1200, 1300)]
    for rpm in (951, 1075, 1100, 1200, 1299):
        assert judge(source(2), rpm / 30, ranges, barred).verdict == "barred"
    assert judge(source(2), 1300 / 30, ranges, barred).verdict == "crossing"


def test_two_barred_ranges_and_one_that_lies_outside():
    ranges, barred = [(900, 1500)], [(950, 1000), (1200, 1300), (1700, 1800)]
    assert judge(source(2), 975 / 30, ranges, barred).verdict == "barred"
    assert judge(source(2), 1250 / 30, ranges, barred).verdict == "barred"
    assert judge(source(2), 1100 / 30, ranges, barred).verdict == "crossing"
    assert judge(source(2), 1750 / 30, ranges, barred).verdict == "clear"


def test_between_two_ranges_the_nearer_edge_counts():
    # 900–1000 and 1400–1500 rpm: 30–33.3 and 46.7–50 Hz.
    ranges = [(900, 1000), (1400, 1500)]
    low = judge(source(2), 38.0, ranges)
    assert low.margin == pytest.approx((38 - 100 / 3) / (100 / 3), rel=1e-13)
    high = judge(source(2), 44.0, ranges)
    assert high.margin == pytest.approx((44 - 140 / 3) / (140 / 3), rel=1e-13)
    assert high.at_rad_s == pytest.approx(1400 * RPM, rel=1e-13)


def test_a_line_that_folds_at_zero_reaches_all_frequencies_down_to_zero():
    # |2 N − 40 Hz| over 900 to 1500 rpm: 10 Hz, 0 at 1200 rpm, 10 Hz.
    line = source(2, -40.0)
    assert frequencies_over(line, 900 * RPM, 1500 * RPM) == pytest.approx((0.0, 10.0), abs=1e-12)
    assert judge(line, 3.0, [(900, 1500)]).verdict == "crossing"
    assert judge(line, 12.0, [(900, 1500)]).margin == pytest.approx(0.2, rel=1e-12)


def test_worst_case_bands_meet_where_nominal_values_do_not():
    assert judge(source(2), (52.0, 58.0), [(900, 1500)]).margin == pytest.approx(0.04, rel=1e-12)
    assert judge(source(2), (49.0, 58.0), [(900, 1500)]).verdict == "crossing"
    assert judge(source(2), (20.0, 90.0), [(900, 1500)]).verdict == "crossing"


def test_a_requirement_of_zero_asks_only_that_nothing_meets():
    assert judge(source(2), 50.001, [(900, 1500)], required=0.0).verdict == "clear"
    assert judge(source(2), 50.0, [(900, 1500)], required=0.0).verdict == "crossing"


def test_a_supply_band_widens_a_fixed_frequency():
    line = source(frequency_hz=100.0, band=0.02)
    assert judge(line, 103.0, [(1470, 1530)]).margin == pytest.approx(1 / 102, rel=1e-12)
    assert judge(line, 101.0, [(1470, 1530)]).verdict == "crossing"
    assert judge(line, 88.2, [(1470, 1530)]).margin == pytest.approx(-0.1, rel=1e-12)
    assert judge(line, 88.2, [(1470, 1530)]).verdict == "clear"


rpms = st.integers(100, 4000).map(float)


@st.composite
def speed_ranges(draw, most):
    edges = sorted(draw(st.lists(rpms, min_size=0, max_size=2 * most, unique=True)))
    return [(a, b) for a, b in zip(edges[::2], edges[1::2], strict=False)]


@st.composite
def problems(draw):
    order = draw(st.sampled_from([0.0, 0.5, 1, 2, 3, 6, 12.5, -2]))
    frequency = draw(st.sampled_from([0.0, 0.0, 25.0, -25.0, 60.0, -133.7])) or (0.0 if order else 50.0)
    line = source(order, frequency, draw(st.sampled_from([0.0, 0.02])), draw(st.sampled_from([1.0, 0.377, 3.5])))
    ranges = draw(speed_ranges(3)) or [(900.0, 1500.0)]
    barred = draw(speed_ranges(2))
    low = draw(st.floats(1, 400))
    natural = (low, low * draw(st.sampled_from([1.0, 1.0, 1.03, 1.2])))
    return line, ranges, barred, natural, draw(st.sampled_from(["excitation", "natural"]))


def scan(line, low, high, natural, steps=12):
    """Differences and margins over a grid of speed, supply and natural frequency, folds and edges included."""
    speed = np.linspace(low, high, steps)
    rise = line.order * line.speed_ratio / TWO_PI
    factors = np.linspace(1 - line.band, 1 + line.band, 5) if line.frequency_hz else np.ones(1)
    folds = [-line.frequency_hz * factor / rise for factor in factors] if rise else []
    speed = np.concatenate([speed, [fold for fold in folds if low <= fold <= high]])
    values = np.abs(rise * speed[:, None] + line.frequency_hz * factors)[:, :, None]
    own = np.linspace(*natural, 5)
    return own - values, values, own


def joined(pairs):
    """Overlapping and touching ranges as one; `pairs` are sorted."""
    out = []
    for low, high in pairs:
        if out and low <= out[-1][1]:
            out[-1] = (out[-1][0], max(high, out[-1][1]))
        else:
            out.append((low, high))
    return out


def stretches(ranges, barred):
    """(low, high, barred) of every piece of the running ranges; the edges of barred stretches run."""
    for low, high in ranges:
        cuts = sorted({low, high, *(edge for pair in barred for edge in pair if low <= edge <= high)})
        for a, b in pairwise(cuts):
            yield a, b, any(start < (a + b) / 2 < end for start, end in barred)
        for cut in cuts:
            yield cut, cut, any(start < cut < end for start, end in joined(barred))


@given(problems())
@settings(max_examples=300, deadline=None, derandomize=True)
def test_separate_agrees_with_a_brute_force_scan(problem):
    line, ranges, barred, natural, on = problem
    found = separate(line, natural, judged_ranges(operation(ranges, barred)), 0.1, on)
    free = inside_barred = False
    smallest = math.inf
    for low, high, inside in stretches(ranges, barred):
        gap, values, own = scan(line, low * RPM, high * RPM, natural)
        # The grid holds the extremes of a connected set: it meets exactly where the difference takes both signs.
        if gap.min() <= 1e-10 and gap.max() >= -1e-10:
            smallest = 0.0
            free |= not inside
            inside_barred |= inside
        else:
            base = values if on == "excitation" else own
            smallest = min(smallest, float(np.min(np.abs(gap) / np.maximum(base, 1e-300))))
    expected = "crossing" if free else "barred" if inside_barred else "close" if smallest < 0.1 - 1e-9 else "clear"
    assert abs(found.margin) == pytest.approx(smallest, rel=1e-9, abs=1e-11)
    assert found.verdict == expected
    if found.margin and math.isfinite(found.margin) and natural[0] == natural[1]:
        at = frequencies_over(line, found.at_rad_s, found.at_rad_s)
        assert math.copysign(1, found.margin) == math.copysign(1, natural[0] - sum(at) / 2)


@given(problems())
@settings(max_examples=150, deadline=None, derandomize=True)
def test_meeting_speeds_are_on_the_line_and_none_is_missed(problem):
    line, _, _, (frequency, _), _ = problem
    speeds = meeting_speeds(line, frequency)
    for speed in speeds:
        value = abs(line.order * line.speed_ratio * speed / TWO_PI + line.frequency_hz)
        assert value == pytest.approx(frequency, rel=1e-9)
    grid = np.linspace(1e-6, 12000 * RPM, 5001)
    gap = np.abs(line.order * line.speed_ratio * grid / TWO_PI + line.frequency_hz) - frequency
    changes = int(np.count_nonzero(np.diff(np.sign(gap))))
    inside = [speed for speed in speeds if grid[0] < speed < grid[-1]]
    if len(inside) < 2 or min(np.diff(inside)) > grid[1] * 2:
        assert changes == len(inside)


@pytest.mark.parametrize(
    ("table", "required"),
    [
        ({"default": 0.1}, 0.1),
        ({"default": 0.1, "engine": 0.05}, 0.05),
        ({"default": 0.1, "engine": 0.05, "order-3": 0.2}, 0.2),
        ({"default": 0.1, "engine": 0.05, "order-3": 0.2, "main order-3": 0.01}, 0.01),
        ({"default": 0.1, "main": 0.15}, 0.15),
        ({"default": 0.1, "main": 0.15, "reciprocating-engine": 0.07}, 0.07),
    ],
)
def test_the_most_specific_requirement_wins(table, required):
    labels = (("main order-3", "order-3", "engine", "reciprocating-engine", "main", "default"),)
    assert required_separation(source(3, labels=labels), table) == required


def test_a_merged_row_keeps_the_strictest_requirement_of_its_origins():
    labels = (("a", "engine", "default"), ("b", "line", "default"))
    assert required_separation(source(3, labels=labels), {"default": 0.1, "engine": 0.05}) == 0.1
    assert required_separation(source(3, labels=labels), {"default": 0.1, "engine": 0.05, "line": 0.02}) == 0.05


def test_requirements_in_the_file_reach_their_sources():
    machines = {"motor": {"kind": "induction-motor", "at": "a", "poles": 4, "supply": "50 Hz"}}
    criteria = {"separation": {"default": "10 %", "line-2x": "5 %", "1x": "20 %"}, "worst-case-separation": "0 %"}
    text = train_text({"a": 1.0, "b": 2.0}, shafts={"s": ("a", "b", 1e5)}, machines=machines, criteria=criteria)
    found = {pair.source: (pair.required, pair.worst_required) for pair in screening_of(text).interferences}
    assert found == {"a 1x": (0.2, 0.0), "a 2x": (0.1, 0.0), "motor line-1x": (0.1, 0.0), "motor line-2x": (0.05, 0.0)}


def test_the_critical_speed_in_range_nearest_rated_is_the_one_reported():
    # |4 N − 100 Hz| = 20 Hz at 1200 and 1800 rpm.
    line = source(4, -100.0)
    speeds, chosen = critical_speeds(line, 20.0, operation([(1000, 2000)], rated=1700))
    assert speeds == pytest.approx((1200, 1800), rel=1e-12)
    assert chosen == pytest.approx(1800, rel=1e-12)
    assert critical_speeds(line, 20.0, operation([(1000, 2000)], rated=1400))[1] == pytest.approx(1200, rel=1e-12)


def test_out_of_range_the_critical_speed_nearest_the_range_is_reported():
    line = source(4, -100.0)
    assert critical_speeds(line, 20.0, operation([(1300, 1600)], rated=1590))[1] == pytest.approx(1200, rel=1e-12)
    assert critical_speeds(line, 20.0, operation([(1850, 1950)], rated=1900))[1] == pytest.approx(1800, rel=1e-12)


def test_a_fixed_frequency_has_no_critical_speed():
    assert critical_speeds(source(frequency_hz=50.0), 50.0, operation([(900, 1500)])) == ((), None)


def test_modes_above_the_highest_source_are_listed_and_not_judged():
    # 2x of 1500 rpm + 2 %: 51 Hz, with 10 % margin 56.1 Hz. Two modes: one near 50 Hz, one far above.
    stations = {"a": 1.0, "b": 1.0, "c": 0.001}
    text = train_text(stations, shafts={"s": ("a", "b", 5e4), "t": ("b", "c", 5e6)})
    result = screening_of(text)
    assert len(result.modes) == 2
    assert result.judged_modes == (1,)
    assert {pair.mode for pair in result.interferences} == {1}


def test_start_and_fault_sources_are_listed_and_not_judged():
    excitations = {"surge": {"at": "a", "frequency": "50 Hz", "when": "fault"}}
    text = train_text({"a": 1.0, "b": 1.0}, shafts={"s": ("a", "b", 5e4)}, excitations=excitations)
    result = screening_of(text)
    assert any(item.name == "surge" for item in result.sources)
    assert all(pair.source != "surge" for pair in result.interferences)
