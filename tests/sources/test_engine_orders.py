"""Engine orders: which exist, and how the firing pulses of the cylinders add up."""

from __future__ import annotations

import math

import pytest

from quillshaft.sources.engine import is_major, orders_of, phase_vector_sum
from trains import screening_of, sources_of, train_text

# Firing orders of in-line four-stroke engines, even firing. Source: Den Hartog, Mechanical Vibrations, ch. 5,
# star diagrams; β falls from 1 at cylinder 1 by 1/N per cylinder. Sums by arithmetic.
FIRING = {4: (1, 3, 4, 2), 6: (1, 5, 3, 6, 2, 4), 8: (1, 6, 2, 5, 8, 3, 7, 4)}
SUMS = {
    4: {(0.5, 1.5, 2.5, 3.5): 0.790569415, (1, 3): 0.0, (2, 4): 2.5},
    6: {(0.5, 2.5, 3.5, 5.5): 0.5773502692, (1, 2, 4, 5): 0.0, (1.5, 4.5): 1.5, (3, 6): 3.5},
    8: {
        (0.5, 3.5, 4.5, 7.5): 0.7491321946,
        (1.5, 2.5, 5.5, 6.5): 1.4365935246,
        (1, 2, 3, 5, 6, 7): 0.0,
        (4, 8): 4.5,
    },
}


def firing_degrees(count, cycle=720.0):
    """Firing angle [deg] of cylinders 1, 2, … from the firing order."""
    angle = {cylinder: position * cycle / count for position, cylinder in enumerate(FIRING[count])}
    return [angle[cylinder] for cylinder in range(1, count + 1)]


def engine_text(count, stiffness=1e7, strokes=4, degrees=None, **tables):
    degrees = degrees or firing_degrees(count, 360.0 * strokes / 2)
    throws = {f"throw{i}": 0.5 for i in range(1, count + 1)}
    names = [*throws, "flywheel"]
    shafts = {f"c{i}": (names[i - 1], names[i], stiffness) for i in range(1, count + 1)}
    cylinders = [{"at": f"throw{i + 1}", "fires-at": f"{angle} deg"} for i, angle in enumerate(degrees)]
    engine = {"kind": "reciprocating-engine", "strokes": strokes, "cylinders": cylinders}
    return train_text({**throws, "flywheel": 30.0}, shafts=shafts, machines={"engine": engine}, **tables)


@pytest.mark.parametrize("count", [4, 6, 8])
def test_phase_vector_sums_are_those_of_the_star_diagrams(count):
    firing = [math.radians(angle) for angle in firing_degrees(count)]
    falling = [1 - i / count for i in range(count)]
    for orders, expected in SUMS[count].items():
        for order in orders:
            assert phase_vector_sum(order, falling, firing) == pytest.approx(expected, abs=1e-9)


@pytest.mark.parametrize("count", [4, 6, 8])
def test_major_orders_of_a_rigid_crank_are_multiples_of_half_the_cylinders(count):
    firing = [math.radians(angle) for angle in firing_degrees(count)]
    for order in orders_of(4):
        total = phase_vector_sum(order, [1.0] * count, firing)
        major = order % (count / 2) == 0
        assert total == pytest.approx(count if major else 0.0, abs=1e-9)
        assert is_major(order, firing) is major


@pytest.mark.parametrize(("degrees", "major"), [(0, True), (119, True), (120, True), (121, False), (180, False)])
def test_an_order_is_major_where_the_pulses_add_to_at_least_half_their_number(degrees, major):
    # Two pulses φ apart add to 2 |cos(φ/2)|: half their number at 120° (arithmetic).
    assert is_major(1.0, [0.0, math.radians(degrees)]) is major


def test_orders_are_halves_up_to_12_in_four_strokes_and_whole_in_two():
    # Common practice.
    assert orders_of(4) == tuple(i / 2 for i in range(1, 25))
    assert orders_of(2) == tuple(float(i) for i in range(1, 13))


@pytest.mark.parametrize("count", [4, 6, 8])
def test_an_engine_in_a_train_file_lists_its_orders_as_lines_of_its_speed(count):
    orders = [source for source in sources_of(engine_text(count)).active if source.name.startswith("engine ")]
    assert [source.name for source in orders] == [f"engine order-{i / 2:g}" for i in range(1, 25)]
    assert [source.order for source in orders] == [i / 2 for i in range(1, 25)]
    assert all(source.frequency_hz == 0 and source.speed_ratio == 1 for source in orders)
    assert {source.order for source in orders if source.major} == {
        i / 2 for i in range(1, 25) if (i / 2) % (count / 2) == 0
    }
    assert orders[0].at == f"throw1 to throw{count}"


def test_a_two_stroke_engine_fires_once_each_turn():
    orders = [source for source in sources_of(engine_text(6, strokes=2)).active if source.name.startswith("engine ")]
    assert [source.order for source in orders] == [float(i) for i in range(1, 13)]
    assert [source.order for source in orders if source.major] == [6.0, 12.0]


@pytest.mark.parametrize("order", [0.5, 1.0, 1.5, 3.0, 4.5])
def test_excitability_of_an_engine_order_is_the_phase_vector_sum_of_the_shape(order):
    # |Σ θ_i exp(j n φ_i)| / (cylinders · largest angle): Den Hartog's vector sum, normalised.
    result = screening_of(engine_text(6, operation={"range": ["600 rpm", "30000 rpm"]}))
    firing = [math.radians(angle) for angle in firing_degrees(6)]
    for mode in result.modes[:2]:
        angles = [mode.shape[f"throw{i}"] for i in range(1, 7)]
        expected = phase_vector_sum(order, angles, firing) / 6.0
        pair = next(
            item for item in result.interferences if item.mode == mode.mode and item.source == f"engine order-{order:g}"
        )
        assert pair.excitability == pytest.approx(expected, abs=1e-12)


def test_all_cylinders_on_one_station_add_to_nothing_in_minor_orders():
    cylinders = [{"at": "engine-body", "fires-at": f"{angle} deg"} for angle in firing_degrees(6)]
    machine = {"engine": {"kind": "reciprocating-engine", "strokes": 4, "cylinders": cylinders}}
    stations = {"engine-body": 5.0, "generator": 20.0}
    shafts = {"s": ("engine-body", "generator", 1e6)}
    result = screening_of(train_text(stations, shafts=shafts, machines=machine))
    found = {pair.source: pair.excitability for pair in result.interferences}
    for order in orders_of(4):
        expected = 1.0 if order % 3 == 0 else 0.0
        assert found[f"engine order-{order:g}"] == pytest.approx(expected, abs=1e-12)


def test_critical_speeds_of_orders_are_60_f_over_n():
    # f = 60 Hz: orders 1.5, 3 and 4.5 at 2400, 1200 and 800 rpm (arithmetic).
    cylinders = [{"at": "e", "fires-at": f"{angle} deg"} for angle in firing_degrees(6)]
    machine = {"engine": {"kind": "reciprocating-engine", "strokes": 4, "cylinders": cylinders}}
    stiffness = (2 * math.pi * 60) ** 2 / (1 / 5.0 + 1 / 20.0)
    text = train_text({"e": 5.0, "g": 20.0}, shafts={"s": ("e", "g", stiffness)}, machines=machine)
    found = {pair.source: pair.critical_speed_rpm for pair in screening_of(text).interferences}
    for order, rpm in ((1.5, 2400.0), (3.0, 1200.0), (4.5, 800.0)):
        assert found[f"engine order-{order:g}"] == pytest.approx(rpm, rel=1e-13)
