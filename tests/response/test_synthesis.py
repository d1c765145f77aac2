"""Waves over a working cycle and their extremes."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from quillshaft.assess.response.synthesis import cycle_points, extremes, wave


def brute(amplitude, harmonics):
    phi = np.linspace(0.0, 2 * np.pi, 60001)
    values = (amplitude[:, None] * np.exp(1j * np.multiply.outer(harmonics, phi))).real.sum(axis=0)
    return values.max(), values.min()


@settings(max_examples=60, deadline=None)
@given(st.integers(0, 2**32 - 1), st.integers(2, 24))
def test_extremes_are_those_of_a_fine_scan_to_a_thousandth(seed, count):
    """Brute force over 60 001 angles; amplitudes fall with order as gas torque does, or not at all."""
    rng = np.random.default_rng(seed)
    harmonics = np.sort(rng.choice(np.arange(1, 25), count, replace=False))
    fall = harmonics ** -rng.choice([0.0, 1.0, 2.0])
    amplitude = fall * (rng.normal(size=count) + 1j * rng.normal(size=count))
    high, low = extremes(amplitude[None, :], harmonics)
    top, bottom = brute(amplitude, harmonics)
    assert 0.5 * (high[0] - low[0]) == pytest.approx(0.5 * (top - bottom), rel=1e-3)


def test_one_strong_high_order_beside_weak_ones_is_within_a_thousandth():
    """A resonance of the highest order: the worst case for samples of a wave."""
    harmonics, worst = np.arange(1, 25), 0.0
    for phase in np.linspace(0, 2 * np.pi, 40):
        amplitude = np.full(24, 1e-3, dtype=complex)
        amplitude[-1] = np.exp(1j * phase)
        high, low = extremes(amplitude[None, :], harmonics)
        top, bottom = brute(amplitude, harmonics)
        worst = max(worst, abs((high[0] - low[0]) / (top - bottom) - 1.0))
    assert worst < 1e-3


def test_wave_is_the_sum_of_its_harmonics():
    rng = np.random.default_rng(3)
    harmonics = np.array([1, 3, 8, 24])
    amplitude = rng.normal(size=(5, 4)) + 1j * rng.normal(size=(5, 4))
    points = cycle_points(harmonics)
    phi = np.arange(points) * 2 * np.pi / points
    expected = (amplitude[:, :, None] * np.exp(1j * np.multiply.outer(harmonics, phi))).real.sum(axis=1)
    assert wave(amplitude, harmonics, points) == pytest.approx(expected, abs=1e-12)


def test_one_harmonic_alone_is_exact():
    high, low = extremes(np.array([[3.0 + 4.0j]]), np.array([7]))
    assert (high[0], low[0]) == (5.0, -5.0)
