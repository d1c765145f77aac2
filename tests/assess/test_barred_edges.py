"""A barred range must keep the required separation at its edges, and something must be left to run in."""

from __future__ import annotations

import math

import pytest

from quillshaft.present.words import bar_words, verdict_sentence
from trains import refusal, screening_of, train_text

FREQUENCY = math.sqrt(1e5 * (1 / 2.0 + 1 / 3.0)) / (2 * math.pi)  # two discs (Den Hartog): 45.944 Hz
CRITICAL = 60 * FREQUENCY / 2  # 2x of the shaft meets it at 1378.3 rpm


def text(low: float, high: float, **criteria: object) -> str:
    """Two discs run from 1000 to 1900 rpm with a barred range."""
    operation = {
        "rated": "1800 rpm",
        "range": ["1000 rpm", "1900 rpm"],
        "barred": [[f"{low!r} rpm", f"{high!r} rpm"]],
        "barred-because": "critical speed",
    }
    return train_text(
        {"a": 2.0, "b": 3.0}, operation=operation, shafts={"s": ("a", "b", "0.1 MN m/rad")}, criteria=criteria
    )


def pair_of(toml: str):
    """The pair of mode 1 and 2x."""
    return next(pair for pair in screening_of(toml).interferences if pair.source == "a 2x")


def test_margin_at_the_nearer_edge_by_hand() -> None:
    pair = pair_of(text(1300.0, 1500.0, separation="10 %"))
    assert pair.verdict == "barred"
    assert pair.free_margin == pytest.approx(FREQUENCY / (2 * 1300 / 60) - 1, rel=1e-12)
    assert pair.bar_too_narrow


def test_the_bar_that_is_asked_for_is_just_enough() -> None:
    low, high = pair_of(text(1300.0, 1500.0, separation="10 %")).bar_needed_rpm or (0.0, 0.0)
    assert low == pytest.approx(CRITICAL / 1.1, rel=1e-12)  # f / (1 + m)
    assert high == pytest.approx(CRITICAL / 0.9, rel=1e-12)  # f / (1 − m)
    assert not pair_of(text(low - 0.01, high + 0.01, separation="10 %")).bar_too_narrow
    assert pair_of(text(low + 0.5, high + 0.01, separation="10 %")).bar_too_narrow
    assert pair_of(text(low - 0.01, high - 0.5, separation="10 %")).bar_too_narrow


def test_the_bar_for_a_margin_on_the_natural_frequency() -> None:
    needed = pair_of(text(1300.0, 1500.0, separation="10 %", **{"margin-on": "natural"})).bar_needed_rpm
    assert needed == pytest.approx((CRITICAL * 0.9, CRITICAL * 1.1), rel=1e-12)


def test_a_narrow_bar_fails_the_train_and_says_so() -> None:
    narrow = screening_of(text(1300.0, 1500.0, separation="10 %"))
    assert narrow.fails
    assert "a barred speed range is too narrow" in verdict_sentence(narrow, worst=True)
    assert "TOO NARROW" in bar_words(narrow.narrow_bars[0])
    wide = screening_of(text(1200.0, 1600.0, separation="10 %"))
    assert not wide.fails
    assert wide.verdict == "barred"
    assert "at the speeds that stay free" in bar_words(pair_of(text(1200.0, 1600.0, separation="10 %")))


def test_nothing_left_to_run_in_and_a_rated_speed_in_the_bar_are_refused() -> None:
    assert "leave nothing of a running range" in refusal(text(900.0, 2000.0))
    assert "rated speed lies inside a barred range" in refusal(text(1700.0, 1850.0))
