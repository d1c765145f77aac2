"""Deviations between the tolerances: inside them, rising, and of the stated standard deviation."""

from __future__ import annotations

import math

import numpy as np
import pytest

from quillshaft.study.spread import DISTRIBUTIONS, deviations, standard_deviations


@pytest.mark.parametrize("kind", DISTRIBUTIONS)
@pytest.mark.parametrize(("low", "high"), [(-0.1, 0.1), (-0.05, 0.2), (0.0, 0.1), (-0.1, 0.0)])
def test_deviations_stay_inside_and_have_the_stated_spread(kind, low, high):
    ends = np.array([low]), np.array([high])
    share = (np.arange(100_000) + 0.5) / 100_000
    drawn = deviations(kind, share[:, None], *ends)[:, 0]
    assert (drawn >= low).all()
    assert (drawn <= high).all()
    assert (np.diff(drawn) >= 0).all()
    assert drawn.std() == pytest.approx(standard_deviations(kind, *ends)[0], rel=1e-4)
    if kind != "uniform":
        assert (drawn < 0).mean() == pytest.approx(-low / (high - low), abs=1e-4)


def test_normal_takes_the_tolerance_as_two_standard_deviations_cut_off():
    """Standard normal between ±2: variance 1 − 2·2 φ(2)/(2 Φ(2) − 1) = 0.7737 (Johnson and Kotz, from memory)."""
    deviation = standard_deviations("normal", np.array([-0.1]), np.array([0.1]))[0]
    assert deviation == pytest.approx(0.05 * math.sqrt(0.77374), rel=1e-4)
