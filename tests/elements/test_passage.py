"""Passing a resonance at a steady rate: closed form against quadrature, marching in time, and Lewis's asymptote."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import quad, solve_ivp
from scipy.special import fresnel

from quillshaft.elements.passage import (
    half_power_cycles,
    half_power_seconds,
    passage_envelope,
    passage_number,
    passage_peak,
    undamped_peak,
)

numbers = st.floats(1e-6, 1e6)


def marched_peak(zeta, rate, first, last):
    """Largest |x| over 1 of x'' + 2 ζ x' + x = sin φ, φ' from `first` to `last` at `rate` (time in 1/ω)."""
    sign = math.copysign(1.0, last - first)

    def motion(t, y):
        return [y[1], math.sin(first * t + sign * rate * t * t / 2.0) - 2.0 * zeta * y[1] - y[0]]

    end = abs(last - first) / rate
    times = np.arange(0.0, end, 0.04)
    done = solve_ivp(motion, (0.0, end), [0.0, 0.0], method="DOP853", t_eval=times, rtol=1e-8, atol=1e-8)
    return float(np.max(np.abs(done.y[0])))


@pytest.mark.parametrize(
    ("number", "share"), [(0.25, 0.98), (1.0, 0.90), (5.0, 0.68), (10.0, 0.56), (20.0, 0.45), (50.0, 0.32)]
)
def test_peak_is_near_that_of_one_mode_marched_in_time(number, share):
    # invented mode marched in time, two digits, upward, which gives a little less than the envelope
    assert float(passage_peak(number)) == pytest.approx(share, abs=0.011)


@pytest.mark.parametrize(("number", "zeta"), [(0.25, 0.04), (1.0, 0.025), (5.0, 0.015), (20.0, 0.005)])
def test_peak_is_that_of_direct_integration_up_and_down(number, zeta):
    rate = number * zeta**2
    up, down = marched_peak(zeta, rate, 0.6, 1.15), marched_peak(zeta, rate, 1.4, 0.85)
    steady = 1.0 / (2.0 * zeta)
    found = float(passage_peak(number)) * steady
    assert (up + down) / 2.0 == pytest.approx(found, rel=4e-3)
    assert up == pytest.approx(found, rel=0.02)
    assert down == pytest.approx(found, rel=0.02)


@pytest.mark.parametrize(
    ("cycles", "zeta", "up", "down"),
    [
        (10, 0.02, 8.728503, 9.080415),
        (50, 0.02, 15.030740, 15.421003),
        (100, 0.01, 24.495558, 24.910498),
        (100, 0.02, 17.896329, 18.244625),
        (100, 0.05, 9.303807, 9.479994),
        (500, 0.05, 9.919691, 9.976291),
    ],
)
def test_peak_is_between_the_sweeps_up_and_down_of_a_damped_mode(cycles, zeta, up, down):
    # F.M. Lewis, Trans. ASME 54, 1932, the problem; values by direct integration from rest, start phase 0
    number = passage_number(1.0, math.sqrt(cycles), zeta)
    assert float(passage_peak(number)) / (2.0 * zeta) == pytest.approx((up + down) / 2.0, rel=0.01)


def test_without_damping_the_peak_is_lewis_asymptote():
    # F.M. Lewis, Trans. ASME 54, 1932: 3.67 √q (from memory), 3.6777342850923 √q by Fresnel integrals
    zeta, cycles = 1e-9, 400.0
    peak = float(passage_peak(passage_number(1.0, math.sqrt(cycles), zeta))) / (2.0 * zeta)
    assert peak == pytest.approx(3.6777342850923 * math.sqrt(cycles), rel=1e-6)
    assert undamped_peak(cycles)[0] == pytest.approx(peak, rel=1e-6)


def test_lewis_asymptote_is_the_farthest_point_of_the_spiral_of_cornu():
    # |∫ exp(jπu²/2) du| from −∞ to u = √(2q) (ω/ω_n − 1), times π √(q/2) (derived)
    u = np.linspace(1.0, 1.5, 200_001)
    sine, cosine = fresnel(u)
    reach = np.hypot(sine + 0.5, cosine + 0.5)
    best = int(np.argmax(reach))
    assert undamped_peak(1.0)[0] == pytest.approx(math.pi * reach[best] / math.sqrt(2.0), rel=1e-9)
    assert undamped_peak(1.0)[1] - 1.0 == pytest.approx(u[best] / math.sqrt(2.0), abs=3e-6)


@pytest.mark.parametrize(
    ("cycles", "up", "down", "at"),
    [(50, 25.728095, 25.814529, 1.11768), (100, 36.501720, 36.582983, 1.08383), (500, 81.985213, 82.032037, 1.03876)],
)
def test_undamped_sweeps_come_to_lewis_asymptote(cycles, up, down, at):
    # F.M. Lewis, Trans. ASME 54, 1932; values by direct integration from rest, start phase 0, off by up to 2 %
    peak, ratio = undamped_peak(cycles)
    assert (up, down) == (pytest.approx(peak, rel=0.02), pytest.approx(peak, rel=0.02))
    assert at == pytest.approx(ratio, abs=0.75 / cycles)


@pytest.mark.parametrize("number", [0.1, 1.0, 10.0, 300.0])
@pytest.mark.parametrize("turned", [-3.0, 0.0, 1.0, 2.5])
def test_envelope_is_its_integral(number, turned):
    time = turned / math.sqrt(number)
    # on the path turned by 45°, where the integrand is a Gaussian: v = y e^{jπ/4}
    turn = np.exp(0.25j * math.pi)

    def integrand(y):
        return turn * np.exp(-(1.0 + 1j * number * time) * turn * y - number * y * y / 2.0)

    end = 60.0 / math.sqrt(number) + 10.0 * abs(time)
    real, imag = (
        quad(lambda y, p=p: p(integrand(y)), 0.0, end, limit=2000, epsabs=1e-11)[0] for p in (np.real, np.imag)
    )
    found = complex(passage_envelope(np.float64(number), np.float64(time)))
    assert found == pytest.approx(complex(real, imag), abs=1e-8)


@pytest.mark.parametrize("number", [0.05, 2.0, 40.0])
def test_envelope_obeys_its_equation(number):
    times, step = np.linspace(-2.0, 3.0, 41), 1e-5
    slope = (passage_envelope(number, times + step) - passage_envelope(number, times - step)) / (2.0 * step)
    assert np.allclose(
        slope, 1.0 - (1.0 + 1j * number * times) * passage_envelope(number, times), atol=1e-6 * (1 + number)
    )


@pytest.mark.parametrize("number", [1e-3, 0.1, 1.0, 10.0, 1e3, 1e6])
def test_peak_is_the_largest_of_the_envelope(number):
    times = np.linspace(-1.0, 12.0, 400_001) / math.sqrt(1.0 + number)
    assert float(passage_peak(number)) == pytest.approx(np.max(np.abs(passage_envelope(number, times))), rel=1e-7)


def test_peak_of_a_slow_passage_is_the_steady_one_less_half_n_squared():
    # expansion of the integral for small n: 1 − n²/2 (derived)
    number = np.array([0.0, 1e-9, 1e-4, 1e-3, 3e-3])
    assert passage_peak(number) == pytest.approx(1.0 - number**2 / 2.0, abs=2e-8)


def test_peak_of_an_undamped_or_endlessly_fast_passage_is_nought():
    assert passage_peak(np.array([math.inf, 1e300])) == pytest.approx([0.0, 0.0], abs=1e-100)
    assert passage_number(1.0, 20.0, 0.0) == math.inf


@given(first=numbers, second=numbers)
def test_peak_falls_with_n_and_lies_below_steady_and_undamped_ones(first, second):
    slow, fast = passage_peak(np.array(sorted((first, second))))
    assert 1.0 + 1e-12 >= slow >= fast * (1 - 1e-12)
    assert fast <= 2.9344 / math.sqrt(max(first, second)) * (1 + 1e-4)


@given(rate=st.floats(1e-3, 1e3), natural=st.floats(1.0, 500.0), zeta=st.floats(1e-3, 0.1), scale=st.floats(0.1, 10.0))
def test_n_grows_with_rate_and_falls_with_the_square_of_the_band(rate, natural, zeta, scale):
    once = float(passage_number(rate, natural, zeta))
    assert float(passage_number(-scale * rate, natural, zeta)) == pytest.approx(scale * once, rel=1e-12)
    assert float(passage_number(rate, scale * natural, zeta)) == pytest.approx(once / scale**2, rel=1e-12)
    assert float(passage_number(rate, natural, scale * zeta)) == pytest.approx(once / scale**2, rel=1e-12)


def test_shapes_are_kept():
    assert passage_peak(np.ones((2, 3))).shape == (2, 3)
    assert passage_peak(1.0).shape == ()
    assert passage_number(np.ones((2, 1)), np.ones(3), 0.01).shape == (2, 3)


@pytest.mark.parametrize("number", [-1.0, math.nan])
def test_a_number_below_nought_is_refused(number):
    with pytest.raises(ValueError, match=r"passage number .*: must be 0 or more"):
        passage_peak(np.array([1.0, number]))


def test_time_and_cycles_in_the_half_power_band():
    # practice: 2 ζ f²/r cycles; a mode of 40 Hz, ζ 1 %, passed at 0.5 Hz/s
    assert half_power_seconds(0.5, 40.0, 0.01) == pytest.approx(1.6, rel=1e-14)
    assert half_power_cycles(-0.5, 40.0, 0.01) == pytest.approx(64.0, rel=1e-14)
    # cycles · n = 1/(π ζ), from the definitions
    product = half_power_cycles(0.5, 40.0, 0.01) * float(passage_number(0.5, 40.0, 0.01))
    assert product == pytest.approx(1 / (0.01 * math.pi), rel=1e-13)
