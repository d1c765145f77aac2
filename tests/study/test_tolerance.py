"""Tolerance study: bounds, sampling, groups and what decides a verdict."""

from __future__ import annotations

import math
from concurrent.futures import ProcessPoolExecutor, ThreadPoolExecutor
from dataclasses import replace

import numpy as np
import pytest

from quillshaft.solve.modes import natural_frequencies, natural_modes
from quillshaft.study.inputs import inputs_of, sensitivities, vary
from quillshaft.study.spread import DISTRIBUTIONS
from quillshaft.study.tolerance import tolerance_study
from quillshaft.study.variants import variant_frequencies
from random_trains import random_draft
from trains import screening_of, train_text

TWO_PI = 2 * math.pi
PUMP = {
    "motor": {"inertia": 20.0, "tolerance": "5 %"},
    "hub": {"inertia": 1.5, "tolerance": ["-3 %", "+9 %"]},
    "pinion": {"inertia": 0.4, "tolerance": "5 %"},
    "wheel": {"inertia": 6.0, "tolerance": "5 %"},
    "impeller": {"inertia": 9.0, "tolerance": ["-12 %", "+2 %"]},
}
LINKS = {
    "couplings": {
        "soft": {
            "between": ["motor", "hub"],
            "stiffness": 2e5,
            "tolerance": ["-10 %", "+25 %"],
            "half-inertias": [0.3, 0.2],
            "inertia-tolerance": "5 %",
        }
    },
    "shafts": {
        "short": {"between": ["hub", "pinion"], "stiffness": 6e6, "tolerance": "5 %"},
        "long": {"between": ["wheel", "impeller"], "stiffness": 3e6, "tolerance": ["-2 %", "+8 %"]},
    },
    "gears": {"mesh": {"between": ["pinion", "wheel"], "teeth": [25, 60]}},
}


def pump(**tables):
    return screening_of(train_text(PUMP, **{**LINKS, **tables}))


def two_discs(tolerance="10 %", frequency=10.0, separation="5 %", **tables):
    """J = 2 and 3 kg·m² on k such that f = 10 Hz; a 50 Hz-like fixed source beside it."""
    reduced = 2 * 3 / 5
    stiffness = reduced * (TWO_PI * 10.0) ** 2
    return screening_of(
        train_text(
            {"a": 2.0, "b": 3.0},
            shafts={"s": {"between": ["a", "b"], "stiffness": stiffness, "tolerance": tolerance}},
            excitations={"hum": {"at": "a", "frequency": f"{frequency!r} Hz"}},
            criteria={"separation": separation},
            **tables,
        )
    )


def test_bounds_hold_every_one_of_ten_thousand_samples():
    for kind in DISTRIBUTIONS:
        study = tolerance_study(pump(), 10_000, 3, kind)
        low, high = np.array([mode.low_hz for mode in study.modes]), np.array([mode.high_hz for mode in study.modes])
        assert study.bounds == "exact"
        assert (study.frequency_hz >= low).all()
        assert (study.frequency_hz <= high).all()


def test_bounds_are_attained_at_the_two_corners():
    screening = pump()
    inputs = inputs_of(screening.train, screening.graph)
    varied = vary(screening.graph, screening.graph.network)
    soft, stiff = (
        [1 + item.tolerance[side if item.quantity == "stiffness" else 1 - side] for item in inputs] for side in (0, 1)
    )
    found = variant_frequencies(varied, np.array([soft, stiff])) / TWO_PI
    bounds = np.array([mode.bounds_hz for mode in screening.modes]).T
    np.testing.assert_allclose(found, bounds, rtol=1e-12)


def test_sensitivities_are_the_central_differences():
    """d ln f / d ln k = half the strain share, d ln f / d ln J = minus half the kinetic share (Rayleigh)."""
    screening = pump()
    inputs = inputs_of(screening.train, screening.graph)
    varied = vary(screening.graph, screening.graph.network)
    stated = sensitivities(varied, natural_modes(screening.graph.network), len(inputs))
    step = 1e-4
    for number in range(len(inputs)):
        factors = np.ones((2, len(inputs)))
        factors[:, number] = 1 + step, 1 - step
        up, down = np.log(variant_frequencies(varied, factors))
        difference = (up - down) / (math.log(1 + step) - math.log(1 - step))
        np.testing.assert_allclose(stated[:, number], difference, atol=1e-6)
    stiffness = np.array([item.quantity == "stiffness" for item in inputs])
    np.testing.assert_allclose(stated[:, stiffness].sum(axis=1), 0.5, rtol=1e-12)
    np.testing.assert_allclose(stated[:, ~stiffness].sum(axis=1), -0.5, rtol=1e-12)


@pytest.mark.parametrize("seed", range(40))
def test_stacked_variants_are_the_frequencies_of_each_network_alone(seed):
    """Chains, branches, gears, loops, epicyclics, ties and massless stations."""
    screening = screening_of(random_draft(seed).text())
    graph, count = screening.graph, len(inputs_of(screening.train, screening.graph))
    varied = vary(graph, graph.network)
    factors = np.random.default_rng(seed).uniform(0.8, 1.3, (4, count))
    found = variant_frequencies(varied, np.vstack([np.ones(count), factors]))
    assert found.shape == (5, len(screening.modes))
    np.testing.assert_allclose(found[0], [mode.omega_rad_s for mode in screening.modes], rtol=1e-9)
    alone = replace(
        graph.network,
        spring_nm_rad=graph.network.spring_nm_rad * factors[0, varied.spring_input],
        tie_nm_rad=graph.network.tie_nm_rad * factors[0, varied.tie_input],
        inertia_kgm2=factors[0, varied.part_input] @ varied.part_inertia,
        torque_links=tuple(
            replace(link, compliance_rad_per_nm=link.compliance_rad_per_nm / factors[0, at] if at >= 0 else 0.0)
            for link, at in zip(graph.network.torque_links, varied.link_input, strict=True)
        ),
    )
    np.testing.assert_allclose(found[1], natural_frequencies(alone), rtol=1e-9)


@pytest.mark.parametrize(("low", "high"), [(0.10, 0.10), (0.05, 0.20), (0.0, 0.15), (0.08, 0.0)])
def test_probability_of_two_discs_is_the_closed_form(low, high):
    """f = √(k (1/J₁ + 1/J₂)) / 2π, k uniform: not clear where k/k₀ lies inside the squares of the band's edges."""
    screening = two_discs([f"-{low:.0%}", f"+{high:.0%}"], frequency=10.25, separation="2 %")
    study = tolerance_study(screening, 20_000, 11)
    below, above = (10.25 * 0.98 / 10) ** 2, (10.25 * 1.02 / 10) ** 2
    covered = max(0.0, min(above, 1 + high) - max(below, 1 - low))
    exact = covered / (low + high)
    found = next(item.not_clear for item in study.pairs if item.pair.source == "hum")
    assert abs(found.probability - exact) <= 4 * math.sqrt(exact * (1 - exact) / 20_000)
    assert found.standard_error == pytest.approx(math.sqrt(found.probability * (1 - found.probability) / 20_000))
    assert found.interval[0] <= found.probability <= found.interval[1]
    assert (found.certain == "never") == (exact == 0.0)


def test_triangular_probability_is_the_closed_form():
    """Triangular on ±10 %: P(deviation < x) = 1 − (0.1 − x)²/0.02 for x > 0."""
    study = tolerance_study(two_discs("10 %", frequency=10.25, separation="2 %"), 20_000, 5, "triangular")
    edge = (10.25 * 0.98 / 10) ** 2 - 1
    exact = (0.1 - edge) ** 2 / 0.02
    assert (10.25 * 1.02 / 10) ** 2 - 1 < 0.1
    over = (0.1 - ((10.25 * 1.02 / 10) ** 2 - 1)) ** 2 / 0.02
    found = next(item.not_clear for item in study.pairs if item.pair.source == "hum")
    assert abs(found.probability - (exact - over)) <= 4 * math.sqrt(exact * (1 - exact) / 20_000)


def test_what_the_bounds_decide_is_certain():
    never = tolerance_study(two_discs("5 %", frequency=20.0), 50)
    always = tolerance_study(two_discs("5 %", frequency=10.0, separation="10 %"), 50)
    hum = [next(item.not_clear for item in study.pairs if item.pair.source == "hum") for study in (never, always)]
    assert (hum[0].certain, hum[0].probability, hum[0].standard_error) == ("never", 0.0, 0.0)
    assert (hum[1].certain, hum[1].probability, hum[1].standard_error) == ("always", 1.0, 0.0)
    assert always.any_not_clear.certain == "always"


def test_percentiles_of_two_discs_are_the_closed_form():
    """k uniform on ±10 %: the 5 % point of f is 10 √0.91 Hz, the 95 % point 10 √1.09 Hz."""
    mode = tolerance_study(two_discs(), 40_000, 2).modes[0]
    assert mode.p05_hz == pytest.approx(10 * math.sqrt(0.91), abs=0.01)
    assert mode.p95_hz == pytest.approx(10 * math.sqrt(1.09), abs=0.01)
    assert (mode.low_hz, mode.high_hz) == pytest.approx((10 * math.sqrt(0.9), 10 * math.sqrt(1.1)), rel=1e-12)


def grouped(group: str | None, quantity: str = "stiffness"):
    """Three equal discs on two equal couplings, which are of one batch or not."""
    extra = {} if group is None else {"group": group}
    stations = {name: {"inertia": 1.0, "tolerance": "0 %"} for name in ("a", "b", "c")}
    if quantity == "mixed":
        stations["b"] = {"inertia": 1.0, "tolerance": "10 %", **extra}
    row = {"stiffness": 1e4, "tolerance": "10 %", **extra}
    couplings = {"x": {"between": ["a", "b"], **row}, "y": {"between": ["b", "c"], **row}}
    excitation = {"hum": {"at": "a", "frequency": f"{100 * 1.03 / TWO_PI!r} Hz"}}
    criteria = {"separation": "2 %"}
    return screening_of(train_text(stations, couplings=couplings, excitations=excitation, criteria=criteria))


def test_couplings_of_one_batch_move_together():
    """Equal discs 1, 1, 1 on k, k: ω² = k/J and 3 k/J, so both frequencies rise by the root of one factor."""
    study = tolerance_study(grouped("batch-7"), 2_000, 4)
    ratio = study.frequency_hz / [mode.nominal_hz for mode in study.modes]
    np.testing.assert_allclose(ratio[:, 0], ratio[:, 1], rtol=1e-12)
    apart = tolerance_study(grouped(None), 2_000, 4)
    single = apart.frequency_hz / [mode.nominal_hz for mode in apart.modes]
    assert np.abs(single[:, 0] - single[:, 1]).max() > 1e-3
    assert single[:, 0].std() == pytest.approx(ratio[:, 0].std() / math.sqrt(2), rel=0.05)


def test_a_group_makes_the_bounds_safe_and_counts_as_one_driver():
    study = tolerance_study(grouped("batch-7"), 500)
    assert study.bounds == "safe"
    assert "batch-7" in study.bounds_because
    first = study.drivers[0]
    assert (first.element, first.group, first.quantity) == ("couplings.x + couplings.y", "batch-7", "stiffness")
    assert first.share == pytest.approx(1.0)
    assert first.sensitivity == pytest.approx(0.5, rel=1e-9)
    assert tolerance_study(grouped(None), 500).bounds == "exact"


def test_a_group_of_stiffness_and_inertia_does_not_reach_the_bounds():
    study = tolerance_study(grouped("batch-7", "mixed"), 4_000)
    assert study.bounds == "safe"
    assert "need not be reached" in study.bounds_because
    assert study.frequency_hz[:, 1].max() < study.modes[1].high_hz * 0.99


def test_a_group_of_one_is_reported():
    stations = {"a": {"inertia": 1.0, "tolerance": "5 %", "group": "lonely"}, "b": 1.0}
    study = tolerance_study(screening_of(train_text(stations, shafts={"s": ("a", "b", 1e4)})), 10)
    assert study.lone_groups == ("lonely",)
    assert study.bounds == "exact"


def test_drivers_are_ranked_by_their_share_of_the_sampled_variance():
    """The first-order shares agree with the variance that remains when one input alone varies."""
    screening = pump(excitations={"hum": {"at": "motor", "frequency": "18 Hz"}}, criteria={"separation": "20 %"})
    study = tolerance_study(screening, 500)
    assert study.drivers
    for pair in {(driver.source, driver.mode) for driver in study.drivers}:
        own = [driver for driver in study.drivers if (driver.source, driver.mode) == pair]
        assert [driver.share for driver in own] == sorted((driver.share for driver in own), reverse=True)
        assert sum(driver.share for driver in own) == pytest.approx(1.0, abs=0.01)
    inputs = inputs_of(screening.train, screening.graph)
    varied = vary(screening.graph, screening.graph.network)
    rng = np.random.default_rng(0)
    spread = []
    for number, item in enumerate(inputs):
        factors = np.ones((4_000, len(inputs)))
        factors[:, number] = 1 + rng.uniform(*item.tolerance, 4_000)
        spread.append(np.log(variant_frequencies(varied, factors)[:, 0]).var())
    shares = np.array(spread) / sum(spread)
    first = [driver for driver in study.drivers if driver.mode == 1]
    for driver in (driver for driver in first if driver.source == first[0].source):
        number = next(
            at
            for at, item in enumerate(inputs)
            if (item.element, item.quantity, item.station) == (driver.element, driver.quantity, driver.station)
        )
        assert driver.share == pytest.approx(shares[number], abs=0.02)


def test_the_same_seed_gives_the_same_result_whoever_solves_it():
    screening = pump()
    base = tolerance_study(screening, 1_700, 9)
    with ThreadPoolExecutor(3) as threads, ProcessPoolExecutor(2) as processes:
        for executor in (threads, processes):
            other = tolerance_study(screening, 1_700, 9, executor=executor)
            np.testing.assert_array_equal(other.frequency_hz, base.frequency_hz)
            assert other.pairs == base.pairs
    assert not np.array_equal(tolerance_study(screening, 1_700, 10).frequency_hz, base.frequency_hz)


def test_progress_is_told_up_to_the_last_sample():
    told = []
    tolerance_study(pump(), 1_200, progress=lambda done, total: told.append((done, total)))
    assert told == [(500, 1200), (1000, 1200), (1200, 1200)]


def test_without_tolerances_every_sample_is_the_nominal_train():
    study = tolerance_study(screening_of(train_text({"a": 1.0, "b": 2.0}, shafts={"s": ("a", "b", 1e4)})), 20)
    np.testing.assert_allclose(study.frequency_hz, study.modes[0].nominal_hz, rtol=1e-13)


def test_a_train_without_elastic_modes_is_a_result():
    study = tolerance_study(screening_of(train_text({"a": 1.0})), 20)
    assert (study.modes, study.pairs, study.drivers) == ((), (), ())
    assert study.any_not_clear.certain == "never"


def test_where_a_mode_follows_speed_it_is_judged_along_the_speed():
    """J = 20 and 6 kg·m² on a stiffness that rises with torque: clear of 1x by the verdict along the speed."""
    points = {"0 kN m": "60 kN m/rad", "3 kN m": "90 kN m/rad", "8 kN m": "200 kN m/rad"}
    text = train_text(
        {"motor": 20.0, "pump": 6.0},
        operation={"rated": "1500 rpm", "range": ["900 rpm", "1500 rpm"]},
        power={"motor": "900 kW", "pump": "balance", "law": "square"},
        couplings={
            "rubber": {"between": ["motor", "pump"], "stiffness": points, "kind": "elastomer", "tolerance": "15 %"}
        },
    )
    screening = screening_of(text)
    study = tolerance_study(screening, 4_000)
    for item in study.pairs:
        assert (item.not_clear.certain == "never") == (item.pair.worst_verdict == "clear")
    risky = next(item for item in study.pairs if item.pair.source == "motor 1x")
    assert risky.pair.verdict == "clear"
    assert 0.0 < risky.not_clear.probability < 0.5


def test_a_dismissed_pair_is_left_out_of_the_chance_of_any():
    dismissal = {"d": {"source": "hum", "mode": 1, "frequency": "10 Hz", "because": "agreed", "by": "A. N."}}
    study = tolerance_study(two_discs("5 %", frequency=10.0, dismissals=dismissal), 200)
    assert next(item for item in study.pairs if item.pair.source == "hum").not_clear.certain == "always"
    assert study.any_not_clear.certain == "never"


@pytest.mark.parametrize(
    ("change", "said"),
    [
        ({"samples": 0}, "samples = 0"),
        ({"samples": -5}, "samples = -5"),
        ({"samples": 10**9}, "samples = 1000000000"),
        ({"seed": -1}, "seed = -1"),
        ({"distribution": "uniforn"}, 'did you mean "uniform"'),
    ],
)
def test_what_cannot_be_drawn_is_refused(change, said):
    with pytest.raises(ValueError, match=said.replace("?", ".")):
        tolerance_study(two_discs(), **{"samples": 10, **change})
