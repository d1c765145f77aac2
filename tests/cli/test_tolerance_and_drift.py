"""`quillshaft tolerance` and `quillshaft drift` as a user runs them."""

from __future__ import annotations

import json
import math
from pathlib import Path

import pytest
from commands import command, process

from pdf_texts import page_texts
from train_files import TEXT
from trains import train_text

TWO_PI = 2 * math.pi


@pytest.fixture
def booster(tmp_path: Path) -> Path:
    """A train file with nearly every kind of row."""
    path = tmp_path / "booster.toml"
    path.write_text(TEXT, encoding="utf-8")
    return path


@pytest.fixture
def two_discs(tmp_path: Path) -> Path:
    """20 and 6 kg·m² at 12 Hz ± 5 % of stiffness, two names of one batch, and a source at 13 Hz."""
    stiffness = (TWO_PI * 12.0) ** 2 * 120 / 26
    path = tmp_path / "discs.toml"
    text = train_text(
        {"core": 20.0, "wheel": 6.0},
        shafts={"s": {"between": ["core", "wheel"], "stiffness": stiffness, "tolerance": "5 %"}},
        excitations={"hum": {"at": "core", "frequency": "12.2 Hz"}},
        criteria={"separation": "1 %"},
    )
    path.write_text(text, encoding="utf-8")
    return path


def test_tolerance_json_has_the_keys_others_rely_on(two_discs: Path) -> None:
    ended = command("tolerance", two_discs, "--samples", "400", "--seed", "3", "--json", "-")
    assert ended.code == 0
    data = json.loads(ended.out)
    assert (data["samples"], data["seed"], data["distribution"], data["bounds"]) == (400, 3, "uniform", "exact")
    mode = data["modes"][0]
    assert set(mode) == {"mode", "nominal_hz", "low_hz", "high_hz", "p05_hz", "p95_hz"}
    assert mode["low_hz"] == pytest.approx(12 * math.sqrt(0.95), rel=1e-12)
    assert mode["low_hz"] <= mode["p05_hz"] <= mode["nominal_hz"] <= mode["p95_hz"] <= mode["high_hz"]
    pair = next(item for item in data["interferences"] if item["source"] == "hum")
    assert pair["mode"] == 1
    assert 0 < pair["probability"] < 1
    driver = next(item for item in data["drivers"] if item["source"] == "hum")
    assert (driver["mode"], driver["element"], driver["quantity"]) == (1, "shafts.s", "stiffness")
    assert driver["share"] == pytest.approx(1.0)


def test_tolerance_prints_the_answer_and_what_decides_it(two_discs: Path) -> None:
    ended = command("tolerance", two_discs, "--samples", "400")
    assert ended.code == 0
    assert "Chance that some pair is not clear: " in ended.out
    assert "Bounds are exact" in ended.out
    assert "What decides mode 1 (hum)" in ended.out
    assert "+0.500 %" in ended.out


def test_the_same_seed_prints_the_same_numbers(two_discs: Path) -> None:
    first, again = (command("tolerance", two_discs, "--samples", "300", "--json", "-").out for _ in range(2))
    assert first == again


@pytest.mark.parametrize(
    ("options", "said"),
    [
        (("--samples", "0"), "--samples = 0: from 1 to"),
        (("--seed", "-1"), "--seed = -1"),
        (("--distribution", "gauss"), "Allowed: uniform | triangular | normal"),
        (("--case", "nothing"), 'there is no case "nothing"'),
    ],
)
def test_tolerance_refuses_what_it_cannot_draw(two_discs: Path, options: tuple[str, ...], said: str) -> None:
    ended = command("tolerance", two_discs, *options)
    assert ended.code == 2
    assert said in ended.err
    assert ended.out == ""


def test_a_group_is_read_and_called_safe(tmp_path: Path) -> None:
    row = {"stiffness": 1e4, "tolerance": "10 %", "group": "batch-7"}
    couplings = {"x": {"between": ["a", "b"], **row}, "y": {"between": ["b", "c"], **row}}
    path = tmp_path / "batch.toml"
    path.write_text(train_text({"a": 1.0, "b": 1.0, "c": 1.0}, couplings=couplings), encoding="utf-8")
    ended = command("tolerance", path, "--samples", "50")
    assert "Bounds are safe: one deviation moves several elements in batch-7" in ended.out


def test_drift_json_has_the_keys_others_rely_on(two_discs: Path) -> None:
    options = ("--datum", "stations.wheel.inertia", "--from", "6 kg m^2", "--to", "4.9 kg m^2", "--steps", "12")
    ended = command("drift", two_discs, *options, "--json", "-")
    assert ended.code == 0
    data = json.loads(ended.out)
    assert data["datum"] == "stations.wheel.inertia"
    assert (data["values"][0], data["values"][-1], len(data["values"])) == (6.0, 4.9, 12)
    assert [len(mode["frequency_hz"]) for mode in data["modes"]] == [12]
    first = next(item for item in data["first_interferences"] if item["source"] == "hum")
    edge = (12.2 * 0.99 / 12) ** 2 * (1 / 20 + 1 / 6) - 1 / 20
    assert first["mode"] == 1
    assert first["at_value"] == pytest.approx(1 / edge, abs=5e-9)


def test_drift_says_where_it_meets_and_how_much_is_lost(two_discs: Path) -> None:
    options = ("--datum", "stations.wheel.inertia", "--from", "6 kg m^2", "--to", "4.9 kg m^2")
    ended = command("drift", two_discs, *options)
    at = 1 / ((12.2 * 0.99 / 12) ** 2 * (1 / 20 + 1 / 6) - 1 / 20)
    assert at == pytest.approx(5.9, abs=5e-4)
    assert (
        "Mode 1 comes closer than 1 % to hum when stations.wheel.inertia falls to 5.9 kg·m² (1.67 % lost)" in ended.out
    )


@pytest.mark.parametrize(
    ("options", "said"),
    [
        (("stations.impeler.inertia", "6 kg m^2", "5 kg m^2"), 'did you mean "stations.impeller.inertia"'),
        (("stations.impeller.inertia", "6 kg m^2", "6 kg m^2"), "both are the same value"),
        (("stations.impeller.inertia", "6 N m", "5 N m"), "--from = 6 N m: "),
        (("couplings.flex-block.between", "6", "5"), "--datum = couplings.flex-block.between: this is a list"),
    ],
)
def test_drift_refuses_what_cannot_drift(booster: Path, options: tuple[str, str, str], said: str) -> None:
    datum, start, end = options
    ended = command("drift", booster, "--datum", datum, "--from", start, "--to", end)
    assert ended.code == 2
    assert said in ended.err
    assert ended.out == ""


def test_both_write_their_chart_with_the_answer_as_title(two_discs: Path, tmp_path: Path) -> None:
    charts = tmp_path / "charts"
    drifting = ("--datum", "stations.wheel.inertia", "--from", "6 kg m^2", "--to", "4.9 kg m^2")
    for words in (("tolerance", two_discs, "--samples", "300"), ("drift", two_discs, *drifting)):
        assert command(*words, "--charts", charts).code == 0
    texts = {name: page_texts(charts / f"{name}.pdf")[0] for name in ("tolerance", "drift")}
    assert "Mode 1 is not clear of hum in" in texts["tolerance"]
    assert "exact bounds" in texts["tolerance"]
    assert "Mode 1 comes closer than 1 % to hum" in texts["drift"]


def test_a_train_without_modes_is_a_result_with_charts(tmp_path: Path) -> None:
    path = tmp_path / "one.toml"
    path.write_text(train_text({"a": 1.0}), encoding="utf-8")
    drifting = ("--datum", "stations.a.inertia", "--from", "1", "--to", "2")
    ended = [command(*words, "--charts", tmp_path) for words in (("tolerance", path), ("drift", path, *drifting))]
    assert [item.code for item in ended] == [0, 0]
    assert "no natural frequency and no source depends on it" in ended[1].out
    assert (tmp_path / "drift.pdf").exists()


def test_nothing_but_json_is_on_standard_output(two_discs: Path, tmp_path: Path) -> None:
    done = process("tolerance", two_discs, "--samples", "50", "--json", "-", "--charts", "out", folder=tmp_path)
    assert done.returncode == 0
    json.loads(done.stdout)
    assert b"Wrote" in done.stderr
