"""Stiffness windows where a coupling follows its mean torque or its temperature, against screening anew."""

from __future__ import annotations

from functools import cache

import numpy as np
import pytest

from quillshaft.assess.screening import screen_alone
from quillshaft.study.speed_cases import speed_cases, temperature_factors
from quillshaft.study.windows import stiffness_windows
from trains import train

TORQUES = (0.0, 1000.0, 2000.0)
STIFFNESSES = (30e3, 50e3, 90e3)

TEXT = """
schema = 1
[train]
title = "two discs and a shaft"
units = "SI"
[operation]
speed-at = "motor"
rated = "1500 rpm"
range = ["1300 rpm", "1500 rpm"]
[power]
motor = "300 kW"
load = "balance"
law = "square"
[stations]
motor = { inertia = "12 kg m^2" }
hub = { inertia = "0.4 kg m^2" }
load = { inertia = "5 kg m^2" }
[shafts]
shaft = { between = ["hub", "load"], stiffness = "SHAFT N m/rad" }
[couplings.flex]
kind = "elastomer"
between = ["motor", "hub"]
stiffness = { "0 N m" = "K0 N m/rad", "1 kN m" = "K1 N m/rad", "2 kN m" = "K2 N m/rad" }
temperature = { "-20 degC" = 1.3, "30 degC" = 1.0, "80 degC" = 0.7 }
[criteria]
separation = "4 %"
[assumptions]
tolerances = "none"
"""


@cache
def screened(scale: float = 1.0, shaft: float = 2e6, temperature: float = 303.15):
    """The train with its coupling's curve scaled, or another shaft."""
    text = TEXT.replace("SHAFT", repr(shaft))
    for name, value in zip(("K0", "K1", "K2"), STIFFNESSES, strict=True):
        text = text.replace(name, repr(value * scale))
    return screen_alone(train(text), temperature)


def clear(result) -> bool:
    """Nothing is nearer than required, nominally."""
    return result.verdict == "clear"


def test_the_range_is_cut_into_cells_that_cover_it() -> None:
    cases = speed_cases(screened())
    edges = sorted({edge for case in cases for span in case.ranges_rad_s for edge in span})
    assert len(cases) == 2 * (len(edges) - 1)
    assert edges[0] * 30 / np.pi == pytest.approx(1300, rel=1e-12)
    assert edges[-1] * 30 / np.pi == pytest.approx(1500, rel=1e-12)


@pytest.mark.parametrize("scale", np.geomspace(0.3, 6.0, 9).tolist())
def test_a_scaled_curve_is_allowed_only_where_screening_it_is_clear(scale: float) -> None:
    """Cells enclose what lies between their ends, so a window may be narrower than the truth, by under 1 %."""
    base = screened()
    windows = stiffness_windows(base, "flex", (base.graph.link("flex").stiffness_nm_rad / 5, 1e6))
    stiffness = windows.nominal_nm_rad * scale
    allowed = any(low <= stiffness <= high for low, high in windows.allowed)
    assert windows.over_speeds
    if allowed:
        assert clear(screened(scale))
    elif all(not low <= stiffness * near <= high for near in (0.99, 1.01) for low, high in windows.allowed):
        assert not clear(screened(scale))


@pytest.mark.parametrize("factor", np.geomspace(0.02, 8.0, 5).tolist())
def test_another_link_is_judged_over_all_speeds(factor: float) -> None:
    base = screened()
    windows = stiffness_windows(base, "shaft")
    stiffness = 2e6 * factor
    if any(low <= stiffness <= high for low, high in windows.allowed):
        assert clear(screened(shaft=stiffness))


def test_temperature_factors_are_those_of_the_coupling_over_its_service() -> None:
    assert temperature_factors(screened(), "flex") == pytest.approx((0.7, 1.3), rel=1e-12)
    assert temperature_factors(screened(temperature=353.15), "flex") == pytest.approx((1.0, 1.3 / 0.7), rel=1e-12)
    assert temperature_factors(screened(), "shaft") == (1.0, 1.0)


def test_recommended_ranges_hold_cold_and_hot() -> None:
    windows = stiffness_windows(screened(), "flex")
    for low, high in windows.recommended:
        for stiffness in (low * 1.001, high * 0.999):
            for celsius in (-20.0, 30.0, 80.0):
                assert clear(screened(stiffness / windows.nominal_nm_rad, temperature=celsius + 273.15))
